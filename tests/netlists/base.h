// SPDX-License-Identifier: Apache-2.0
/// @file
/// A small sound netlist that the tests spoil one line at a time, and diagnostics in a short form.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "netlists/reader.h"

namespace sunder::netlists {

inline constexpr std::string_view kBase = R"(title = "Base"
rules = "BS 7671:2018+A2"
ambient = "30 degC"
premises = "other"
[supply.grid]
feeds = "intake"
voltage = "230/400 V"
earthing = "TN-C-S"
network = "public"
maximum = { three_phase = "16 kA", power_factor = 0.3 }
minimum = { Ze = "0.35 ohm", power_factor = 0.9 }
device = "BS 88-3 100 A"
[board.intake]
incomer = "switch 100 A"
[board.shop]
groups = { rcd = { device = "RCD 63 A 30 mA A", ways = ["W1"] } }
[submain.S1]
from = "intake"
to = "shop"
device = "gG 63 A 80 kA"
cable = "multicore-xlpe-cu-5c 16 mm2"
length = "35 m"
demand = "20 A"
pf = 0.95
[circuit.shop]
W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, load = "20 A", pf = 1 }
W2 = { use = "fixed", phases = "L1 L2 L3", device = "C 16 A 6 kA", cable = "singles-pvc-cu 2.5 mm2", length = "21 m", load = "11 A", pf = 0.8 }
)";

/// A netlist with its line `number` (from 1) replaced; 0: `text` appended.
inline std::string spoiled(std::string_view netlist, int number, std::string_view text) {
  std::string made(netlist);
  if (number == 0) return made + std::string(text);
  std::size_t start = 0;
  for (int n = 1; n < number; ++n) start = made.find('\n', start) + 1;
  return made.replace(start, made.find('\n', start) - start, text);
}

/// The base so changed.
inline std::string spoiled(int number, std::string_view text) { return spoiled(kBase, number, text); }

/// "line:column+width severity: message | hint", one a line.
inline std::string said(const Reading& reading) {
  std::string text;
  for (const Diagnostic& d : reading.diagnostics) {
    const char* const severities[] = {"error", "warning", "note"};
    text += std::to_string(d.line) + ':' + std::to_string(d.column) + '+' + std::to_string(d.width) + ' ' +
            severities[static_cast<std::size_t>(d.severity)] + ": " + d.message;
    if (!d.hint.empty()) text += " | " + d.hint;
    text += '\n';
  }
  return text;
}

struct Complaint {
  int line;               ///< of the base that is replaced; 0: appended
  std::string_view text;  ///< what stands there instead
  std::string_view said;  ///< everything that is to be said, word for word
};

}  // namespace sunder::netlists
