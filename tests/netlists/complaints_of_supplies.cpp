// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about supplies of every voltage and earthing, word for word.
#include <catch2/catch.hpp>
#include <vector>

#include "tests/netlists/base.h"

namespace sunder::netlists {

namespace {

constexpr std::string_view kHigh = R"(rules = "IEC 60364"
[board.a]
[board.b]
[supply.grid]
feeds = "a"
voltage = "20 kV"
maximum = { power = "250 MVA", power_factor = 0.1 }
[transformer.T]
from = "a"
feeds = "b"
voltage = "230/400 V"
primary = "20 kV"
rating = "400 kVA"
uk = "4 %"
losses = "4.6 kW"
vector = "Dyn11"
earthing = "TN-S"
)";

constexpr std::string_view kTwoBoards = R"(rules = "IEC 60364"
[board.a]
[board.b]
[supply.grid]
feeds = "a"
voltage = "230/400 V"
earthing = "TN-S"
maximum = { three_phase = "10 kA", power_factor = 0.5 }
[submain.S1]
from = "a"
to = "b"
device = "gG 63 A"
cable = "multicore-xlpe-cu-5c 16 mm2"
length = "20 m"
[circuit.b]
W1 = { phases = "L1 L2 L3 N", device = "C 16 A", cable = "singles-pvc-cu 2.5 mm2", length = "20 m" }
W2 = { phases = "L1", device = "C 16 A", cable = "singles-pvc-cu 2.5 mm2", length = "20 m" }
)";

constexpr std::string_view kSource = R"(rules = "IEC 60364"
[board.a]
[board.b]
[supply.grid]
feeds = "a"
voltage = "20 kV"
maximum = { power = "250 MVA", power_factor = 0.1 }
[transformer.T]

voltage = "230/400 V"
rating = "400 kVA"
uk = "4 %"
losses = "4.6 kW"
vector = "Dyn11"
earthing = "TN-S"
)";

void check_all(std::string_view netlist, const std::vector<Complaint>& complaints) {
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(netlist, complaint.line, complaint.text), "net.toml", "/")) == complaint.said);
  }
}

}  // namespace

TEST_CASE("A supply above 1 kV that cannot be is refused with the reason", "[netlists]") {
  check_all(
      kHigh,
      {
          {6, R"~(voltage = "200 kV")~",
           R"~(6:12+6 error: voltage of supply 'grid' is '200 kV'; it must be 50 V to 150 kV | such as "230/400 V", or "230 V" for a single phase
)~"},
          {6, R"~(voltage = "20 kV"
earthing = "TN-S")~",
           R"~(7:13+4 error: earthing of supply 'grid' is TN-S, but above 1 kV there is no neutral and no protective conductor | star_point says how its star point is earthed
)~"},
          {7, R"~(maximum = { power = "250 MVA", three_phase = "7 kA" })~",
           R"~(7:22+7 error: the maximum of supply 'grid' has both power and three_phase, which mean the same
7:47+1 note: three_phase is given here
)~"},
          {7, R"~(maximum = { line_neutral = "7 kA" })~",
           R"~(7:29+4 error: line_neutral of the maximum of supply 'grid' cannot be: above 1 kV there is no neutral
)~"},
          {7, R"~(maximum = { z1 = "1 ohm", three_phase = "7 kA" })~",
           R"~(7:19+5 error: the maximum of supply 'grid' has both z1 and three_phase; give impedances by sequence or loops
7:42+1 note: three_phase is given here
)~"},
          {7, R"~(maximum = { z1 = "1 ohm", power_factor = 0.1 })~",
           R"~(7:42+3 error: power_factor of the maximum of supply 'grid' says nothing beside z1, which has its angle
)~"},
          {7, R"~(maximum = { z0 = "1 ohm" })~",
           R"~(7:19+5 error: the maximum of supply 'grid' has z0 but no z1
)~"},
          {7, R"~(maximum = { z1 = "1+j1" })~",
           R"~(7:19+4 error: z1 of the maximum of supply 'grid': '+1' has no unit; an impedance is written in ohm, mohm, uohm, kohm
)~"},
          {7, R"~(maximum = { z1 = "1+j1 ohm" }
minimum = { z1 = "0.5 ohm" })~",
           R"~(8:19+1 error: minimum z1 of supply 'grid' is below that of the maximum
7:19+1 note: the maximum is given here
)~"},
          {7, R"~(maximum = { power = "7 kA" })~",
           R"~(7:22+4 error: power of the maximum of supply 'grid': 'kA' is a unit of current; an apparent power is written in VA, kVA, MVA, GVA
)~"},
          {7, R"~(maximum = { power = "250 MVA" }
minimum = { Zn = "1 ohm" })~",
           R"~(8:19+5 error: Zn of the minimum of supply 'grid' cannot be: above 1 kV there is no neutral
)~"},
          {7, R"~(maximum = { power = "250 MVA" }
minimum = { power = "300 MVA" })~",
           R"~(8:22+1 error: minimum three_phase of supply 'grid' is 8.66 kA, which is 8.66 kA, above the maximum of 7.217 kA
7:22+1 note: the maximum is given here
)~"},
          {7, R"~(maximum = { power = "250 MVA", power_factor = 0.1 }
capacitance = "1 uF"
earthing = "TT")~",
           R"~(8:16+4 error: capacitance of supply 'grid' is asked for in IT alone
)~"},
          {7, R"~(tails = { cable = "swa-xlpe-cu-3c 95 mm2", length = "2 m", cpc = "armour" })~",
           R"~(7:67+6 error: cpc of the tails of supply 'grid' has no meaning: above 1 kV the lines alone are carried
)~"},
      });
}

TEST_CASE("Voltage and earthing of a low-voltage supply fit together", "[netlists]") {
  check_all(
      kTwoBoards,
      {
          {6, R"~(voltage = "120/240 V"
phases = "L1")~",
           R"~(7:11+2 error: supply 'grid' is split-phase and delivers L1 L2 | phases is for a single-phase supply: "L1", "L2" or "L3"
9:28+1 error: supply 'grid' is split-phase and has no three_phase current | use line_neutral and line_earth
17:18+10 error: circuit 'b/W1' needs L3, but board 'b' has L1 L2 N
)~"},
          {6, R"~(voltage = "120/240 V")~",
           R"~(8:28+1 error: supply 'grid' is split-phase and has no three_phase current | use line_neutral and line_earth
16:18+10 error: circuit 'b/W1' needs L3, but board 'b' has L1 L2 N
)~"},
          {6, R"~(voltage = "230 V"
phases = "L1 L2")~",
           R"~(7:11+5 error: supply 'grid' has one voltage, so one line | phases is for a single-phase supply: "L1", "L2" or "L3"
9:28+1 error: supply 'grid' is single-phase and has no three_phase current | use line_neutral and line_earth
17:18+10 error: circuit 'b/W1' needs L2 L3, but board 'b' has L1 N
)~"},
          {7, R"~(earthing = "TN-S"
star_point = "open")~",
           R"~(8:15+4 error: star_point of supply 'grid' is 'open', but in TN-S it is earthed directly
7:13+1 note: earthing is given here
)~"},
          {7, R"~(earthing = "TN-S"
capacitance = "1 uF")~",
           R"~(8:16+4 error: capacitance of supply 'grid' is asked for in IT alone
)~"},
          {7, R"~(earthing = "IT")~",
           R"~(4:9+1 warning: source 'grid' is IT, but no board has an electrode
)~"},
          {7, R"~(earthing = "IT"
minimum = { Ze = "0.3 ohm", power_factor = 0.9 }
capacitance = "1 F")~",
           R"~(4:9+1 warning: source 'grid' is IT, but no board has an electrode
9:16+3 error: capacitance of supply 'grid' is 1000000 uF; it must be at most 10000 uF
)~"},
          {7, R"~(earthing = "TN-CS")~",
           R"~(7:13+5 error: unknown earthing 'TN-CS' of supply 'grid' | did you mean 'TN-C-S'?
)~"},
          {0, R"~([supply.two]
feeds = "a"
voltage = "400/690 V"
earthing = "TN-S"
[state.x]
sources = ["two"]
)~",
           R"~(18:9+1 error: supply 'two' delivers 690 V between lines to board 'a', which has 400 V
)~"},
          {0, R"~([supply.two]
feeds = "b"
voltage = "400/690 V"
earthing = "TN-S"
[state.x]
sources = ["two"]
)~",
           R"~(9:10+1 error: submain 'S1' joins board 'a' of 400 V and board 'b' of 690 V
)~"},
      });
}

TEST_CASE("What belongs to a transformer between boards is refused of a source", "[netlists]") {
  check_all(
      kSource,
      {
          {9, R"~(feeds = "b"
tap = "5 %"
primary_device = "gG 63 A"
primary_star = "solid"
)~",
           R"~(8:14+1 error: 2 sources need states that say which are connected together | such as [state.normal] with sources = ["grid"]
4:9+1 note: the first source is declared here
10:8+3 error: tap of transformer 'T' is for a transformer between two boards, which has 'from'
11:19+7 error: primary_device of transformer 'T' is for a transformer between two boards, which has 'from'
12:17+5 error: primary_star of transformer 'T' is for a transformer between two boards, which has 'from'
)~"},
      });
}

}  // namespace sunder::netlists
