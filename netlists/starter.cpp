// SPDX-License-Identifier: Apache-2.0
/// @file
/// The netlist that `sunder new` writes: small, whole, and with a word on every key it uses.
#include <fmt/format.h>

#include "netlists/reader.h"

namespace sunder::netlists {

namespace {

// Basic TOML string: quotes, backslashes and control characters escaped.
std::string quoted(const std::string& text) {
  std::string made = "\"";
  for (const char c : text) {
    const auto byte = static_cast<unsigned char>(c);
    if (c == '"' || c == '\\') {
      made += '\\';
      made += c;
    } else if (byte < 0x20U || byte == 0x7FU) {
      made += fmt::format("\\u{:04X}", static_cast<unsigned>(byte));
    } else {
      made += c;
    }
  }
  return made + "\"";
}

constexpr const char* kBody =
    R"(rules    = "BS 7671:2018+A2"   # decides disconnection times, k, voltage drop; or "IEC 60364"
ambient  = "30 degC"           # surroundings of the cables
premises = "other"             # or "dwelling"

# What the distributor declares at the supply terminals: the most and the least.
[supply.grid]
feeds    = "intake"
voltage  = "230/400 V"
earthing = "TN-C-S"            # or "TN-S", "TT"
network  = "public"            # or "own transformer"
maximum  = { three_phase = "16 kA" }
minimum  = { Ze = "0.35 ohm" }
device   = "BS 88-3 100 A"     # the distributor's fuse

[board.intake]
incomer  = "switch 100 A"

# A cable from one board to another, with the device at its start.
[submain.S1]
from      = "intake"
to        = "workshop"
device    = "gG 63 A 80 kA"                  # <family> <In> [<Icn>] [<IdN> [S] [type]] [class 1|2|3]
cable     = "multicore-xlpe-cu-5c 16 mm2"    # <construction> <size>
cpc       = "core"                           # or "armour", "armour + 16 mm2", "16 mm2"
length    = "35 m"
installed = "E"
Iz        = "100 A"                          # as installed, after all correction factors
demand    = "36 A"
pf        = 0.95

[board.workshop]
incomer  = "switch 100 A"

# Circuits of that board, one a line; a spreadsheet may hold them instead:
#   [board.workshop]
#   circuits_from = "workshop.csv"
[circuit.workshop]
W1 = { serves = "sockets, bench", use = "sockets", phases = "L1", device = "B 20 A 6 kA 30 mA A class 3", cable = "singles-pvc-cu 4 mm2", length = "24 m", load = "14 A", pf = 0.95, Iz = "32 A" }
W2 = { serves = "sockets, store", use = "sockets", phases = "L2", device = "B 16 A 6 kA 30 mA A class 3", cable = "singles-pvc-cu 2.5 mm2", length = "18 m", load = "10 A", pf = 0.95, Iz = "24 A" }
W3 = { serves = "lighting", use = "lighting", phases = "L3", device = "B 6 A 6 kA class 3", cable = "singles-pvc-cu 2.5 mm2", length = "30 m", load = "4 A", pf = 0.95, Iz = "24 A" }
W4 = { serves = "saw", use = "fixed", phases = "L1 L2 L3", device = "C 20 A 6 kA class 3", cable = "singles-pvc-cu 4 mm2", length = "15 m", load = "15 A", pf = 0.85, Iz = "28 A" }
W5 = { serves = "water heater", use = "fixed", phases = "L2", device = "B 16 A 6 kA class 3", cable = "singles-pvc-cu 2.5 mm2", length = "12 m", load = "13 A", pf = 1, Iz = "24 A" }
)";

}  // namespace

std::string starter_netlist(const std::string& title) {
  return fmt::format(
      "# A netlist for sunder: what the installation is made of, as text.\n"
      "# Values carry their units; what is not said is listed as an assumption or left undecided.\n"
      "title    = {}\n{}",
      quoted(title), kBody);
}

}  // namespace sunder::netlists
