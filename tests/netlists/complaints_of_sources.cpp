// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about supplies and transformers, word for word.
#include <catch2/catch.hpp>

#include "tests/netlists/base.h"

namespace sunder::netlists {

TEST_CASE("A supply that cannot be is refused with the reason", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {6, R"~()~",
       R"~(5:9+1 error: supply 'grid' has no 'feeds', which is obligatory | feeds: The board that it supplies.
)~"},
      {6, R"~(feeds = "intak")~",
       R"~(6:10+5 error: unknown board 'intak' | did you mean 'intake'?
)~"},
      {6, R"~(feeds = "S1")~",
       R"~(6:10+2 error: unknown board 'S1' | boards are: intake, shop
)~"},
      {6, R"~(feeds = 3)~",
       R"~(6:9+1 error: the name of a board is expected, got a number
)~"},
      {7, R"~(voltage = "230/400 A")~",
       R"~(7:12+9 error: voltage of supply 'grid': 'A' is a unit of current; a voltage is written in V, kV, mV | such as "230/400 V", or "230 V" for a single phase
)~"},
      {7, R"~(voltage = "400 V/230 V")~",
       R"~(7:12+11 error: voltage of supply 'grid' is '400 V/230 V'; the unit stands once, behind both values | such as "230/400 V", or "230 V" for a single phase
)~"},
      {7, R"~(voltage = "12 V")~",
       R"~(7:12+4 error: voltage of supply 'grid' is '12 V'; it must be 50 V to 150 kV | such as "230/400 V", or "230 V" for a single phase
)~"},
      {7, R"~(voltage = "10/17.3 V")~",
       R"~(7:12+9 error: voltage of supply 'grid' is '10/17.3 V'; it must be 50 V to 1000 V | such as "230/400 V", or "230 V" for a single phase
)~"},
      {7, R"~(voltage = "230/415 V")~",
       R"~(7:12+9 error: voltage of supply 'grid' is '230/415 V'; the second must be 1.73 times the first | such as "230/400 V", or "230 V" for a single phase
)~"},
      {7, R"~(voltage = 230)~",
       R"~(7:11+3 error: voltage of supply 'grid' is a number; a text is expected | such as "230/400 V", or "230 V" for a single phase
)~"},
      {8, R"~(earthing = "TNCS")~",
       R"~(8:13+4 error: unknown earthing 'TNCS' of supply 'grid' | did you mean 'TN-C-S'?
)~"},
      {9, R"~(phases = "L1")~",
       R"~(9:11+2 error: supply 'grid' is three-phase and delivers L1 L2 L3 | phases is for a single-phase supply: "L1", "L2" or "L3"
)~"},
      {9, R"~(network = "privat")~",
       R"~(9:12+6 error: unknown network 'privat' of supply 'grid' | valid are: public, own transformer
)~"},
      {10, R"~(maximum = { three_phase = "16 kV" })~",
       R"~(10:28+5 error: three_phase of the maximum of supply 'grid' is '16 kV'; a current or an impedance is expected | such as "16 kA" or "0.35 ohm"
)~"},
      {10, R"~(maximum = { three_phase = "-1 kA" })~",
       R"~(10:28+5 error: three_phase of the maximum of supply 'grid' is '-1 kA'; it must be above 0 and at most 1000 kA | such as "16 kA" or "0.35 ohm"
)~"},
      {10, R"~(maximum = { three_phase = "16 MA" })~",
       R"~(10:28+5 error: three_phase of the maximum of supply 'grid' is '16 MA'; a current or an impedance is expected | such as "16 kA" or "0.35 ohm"
)~"},
      {10, R"~(maximum = { three_phase = "900 kA", power_factor = 0.3 })~",
       R"~(10:28+6 warning: three_phase of the maximum of supply 'grid' is '900 kA'; usual are 5 A to 200 kA
)~"},
      {10, R"~(maximum = { three_phase = 16 })~",
       R"~(10:27+2 error: three_phase of the maximum of supply 'grid' is a number; a current or an impedance is expected | such as "16 kA" or "0.35 ohm"
)~"},
      {10, R"~(maximum = "16 kA")~",
       R"~(10:12+5 error: maximum of supply 'grid' is a text; a table is expected | maximum = { three_phase = "16 kA" }
)~"},
      {10, R"~(maximum = {})~",
       R"~(10:11+1 error: the maximum of supply 'grid' is empty
)~"},
      {10, R"~(maximum = { three_phase = "16 kA", power_factor = 0.3, x_over_r = 3 })~",
       R"~(10:67+1 error: the maximum of supply 'grid' has both power_factor and x_over_r; one is enough
10:51+1 note: power_factor is given here
)~"},
      {10, R"~(maximum = { three_phase = "16 kA", power_factor = 1.3 })~",
       R"~(10:51+3 error: power_factor of the maximum of supply 'grid' is 1.3; it must be at most 1
)~"},
      {10, R"~(maximum = { three_phase = "16 kA", line_earth = "17 kA", power_factor = 0.3 })~",
       R"~(10:50+1 error: maximum line_earth of supply 'grid' has less impedance than one line alone (16 kA)
10:28+1 note: three_phase is given here
)~"},
      {10, R"~(maximum = { three_phase = "16 kA", line_earth = "12 kA", line_neutral = "13 kA", power_factor = 0.3 })~",
       R"~(10:50+1 error: maximum line_earth of supply 'grid' differs from line_neutral, but in TN-C-S both return through the one conductor
10:74+1 note: line_neutral is given here
)~"},
      {10, R"~(maximum = { three_phase = "500 A", power_factor = 0.3 })~",
       R"~(11:19+1 error: minimum line_earth of supply 'grid' is 0.35 ohm, which is 624.3 A, above the maximum of 500 A
10:28+1 note: the maximum is given here
)~"},
      {10, R"~(maximum = { three_phase = "16 kA", Ze = "0.1 ohm" })~",
       R"~(10:36+2 error: unknown key 'Ze' in the maximum of supply 'grid' | 'Ze' is a key of: supply.minimum; here may stand: three_phase, line_neutral, line_earth, power_factor, x_over_r, power, z1, z0
)~"},
      {11, R"~(minimum = { Ze = "0.35 ohm", line_earth = "700 A" })~",
       R"~(11:19+8 error: the minimum of supply 'grid' has both Ze and line_earth, which mean the same
11:44+1 note: line_earth is given here
)~"},
      {11, R"~(minimum = { Ze = "0.35 kA" })~",
       R"~(11:19+7 error: Ze of the minimum of supply 'grid': 'kA' is a unit of current; an impedance is written in ohm, mohm, uohm, kohm
)~"},
      {11, R"~(minimum = { three_phase = "0.35 ohm", Ze = "0.3 ohm", power_factor = 1 })~",
       R"~(11:45+1 error: minimum line_earth of supply 'grid' has less impedance than one line alone (0.35 ohm)
11:28+1 note: three_phase is given here
)~"},
      {12, R"~(tails = { cable = "singles-pvc-cu 25 mm2" })~",
       R"~(12:9+1 error: the tails of supply 'grid' has no 'length', which is obligatory | length: Length from the device to the board.
)~"},
      {7, R"~(voltage = "230 V")~",
       R"~(10:28+1 error: supply 'grid' is single-phase and has no three_phase current | use line_neutral and line_earth
27:33+8 error: circuit 'shop/W2' needs L2 L3, but board 'shop' has L1 N
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("A transformer that cannot be is refused with the reason", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
)~",
       R"~(28:14+1 error: 2 sources need states that say which are connected together | such as [state.normal] with sources = ["grid"]
5:9+1 note: the first source is declared here
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
earthing = "TN-S"
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(28:14+1 error: transformer 'T' has neither 'losses' nor 'x_over_r'
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
x_over_r = 3
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(35:12+1 error: transformer 'T' has both losses and x_over_r; one is enough
33:11+1 note: losses is given here
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "51 kW"
earthing = "TN-S"
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(33:11+5 error: losses of transformer 'T' are 10.2 % of its rating, not below uk
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
link = "board"
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(35:9+5 error: link of transformer 'T' is at the board, which makes it TN-C-S
34:13+1 note: earthing is given here
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
fault_level = "250 kA"
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(35:16+6 error: maximum of the fault level of transformer 'T': 'kA' is a unit of current; an apparent power is written in VA, kVA, MVA, GVA
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
fault_level = { maximum = "100 MVA", minimum = "200 MVA" }
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(35:49+7 error: minimum fault level of transformer 'T' is above the maximum
35:28+1 note: the maximum is given here
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75"
losses = "5.1 kW"
earthing = "TN-S"
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(32:7+4 error: uk of transformer 'T': '4.75' has no unit; a percentage is written in %
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
[state.a]
sources = ["grid"]
[state.b]
sources = ["T"]
)~",
       R"~(30:12+5 error: voltage of transformer 'T' needs both values | such as "230/400 V"
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

}  // namespace sunder::netlists
