// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about transformers between boards and about voltages, word for word.
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

void check_all(std::string_view netlist, const std::vector<Complaint>& complaints) {
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(netlist, complaint.line, complaint.text), "net.toml", "/")) == complaint.said);
  }
}

}  // namespace

TEST_CASE("A transformer between two boards that cannot be is refused with the reason", "[netlists]") {
  check_all(
      kHigh,
      {
          {16, R"~(vector = "Dyn4")~",
           R"~(16:11+4 error: vector of transformer 'T' is 'Dyn4', which cannot be wound: with these windings the clock number is odd | possible are 1, 3, 5, 7, 9, 11
)~"},
          {16, R"~(vector = "Yy1")~",
           R"~(16:11+3 error: vector of transformer 'T' is 'Yy1', which cannot be wound: with these windings the clock number is even | possible are 0, 2, 4, 6, 8, 10
)~"},
          {16, R"~(vector = "Dzn11")~",
           R"~(16:11+5 error: vector of transformer 'T' is 'Dzn11', which cannot be wound: with these windings the clock number is even | possible are 0, 2, 4, 6, 8, 10
)~"},
          {16, R"~(vector = "Xyn11")~",
           R"~(16:11+5 error: vector of transformer 'T' is 'Xyn11', which is no vector group | primary D, Y, YN, Z or ZN, secondary d, y, yn, z or zn, clock number: such as "Dyn11"
)~"},
          {16, R"~(vector = "dyn11")~",
           R"~(16:11+5 error: vector of transformer 'T' is 'dyn11', which is no vector group | did you mean 'Dyn11'?
)~"},
          {16, R"~(vector = "Dyn")~",
           R"~(16:11+3 error: vector of transformer 'T' is 'Dyn', without its clock number | such as "Dyn11"
)~"},
          {16, R"~(vector = "Dyn12")~",
           R"~(16:11+5 error: vector of transformer 'T' is 'Dyn12', but clock numbers end at 11
)~"},
          {16, R"~(vector = "Dyn-1")~",
           R"~(16:11+5 error: vector of transformer 'T' is 'Dyn-1', which is no vector group | primary D, Y, YN, Z or ZN, secondary d, y, yn, z or zn, clock number: such as "Dyn11"
)~"},
          {16, R"~(vector = 11)~",
           R"~(16:10+2 error: vector of transformer 'T' is a number; a text is expected
)~"},
          {16, R"~(vector = "Dd0")~",
           R"~(17:13+4 error: earthing of transformer 'T' is TN-S, but the secondary of Dd0 has no neutral to be earthed | a secondary yn or zn has one
16:11+1 note: vector is given here
)~"},
          {16, R"~(vector = "Dy5")~",
           R"~(17:13+4 error: earthing of transformer 'T' is TN-S, but the secondary of Dy5 has no neutral to be earthed | a secondary yn or zn has one
16:11+1 note: vector is given here
)~"},
          {16, R"~(vector = "Dd0"
link = "board")~",
           R"~(17:9+5 error: link of transformer 'T' has no meaning: the secondary of Dd0 has no neutral
18:13+4 error: earthing of transformer 'T' is TN-S, but the secondary of Dd0 has no neutral to be earthed | a secondary yn or zn has one
16:11+1 note: vector is given here
)~"},
          {17, R"~(primary_star = "solid"
earthing = "TN-S")~",
           R"~(17:17+5 error: primary_star of transformer 'T' has no meaning: the primary of Dyn11 has no neutral
)~"},
          {12, R"~()~",
           R"~(8:14+1 error: transformer 'T' has no 'primary', which is obligatory | primary: Rated voltage between lines of the primary side; obligatory with from.
)~"},
          {12, R"~(primary = "11 kV")~",
           R"~(8:14+1 error: transformer 'T' has a primary of 11 kV, but board 'a' has 20 kV
)~"},
          {12, R"~(primary = "20 kV"
secondary = "690 V")~",
           R"~(13:14+5 warning: secondary of transformer 'T' is 690 V, far from its nominal voltage of 400 V
)~"},
          {17, R"~(earthing = "TN-S"
r0_over_r1 = 1)~",
           R"~(18:14+1 error: transformer 'T' has r0_over_r1 but no x0_over_x1; they go together
)~"},
          {17, R"~(earthing = "TN-S"
r0_over_r1 = 1
x0_over_x1 = 1
z0_over_z1 = 1)~",
           R"~(18:14+1 error: transformer 'T' has both r0_over_r1 and z0_over_z1; one is enough
20:14+1 note: z0_over_z1 is given here
)~"},
          {17, R"~(earthing = "TN-S"
fault_level = "250 MVA")~",
           R"~(18:16+7 error: fault_level of transformer 'T' is of a network before it, but it has 'from' | the supply of that board declares its most and least
)~"},
          {17, R"~()~",
           R"~(8:14+1 error: transformer 'T' has no 'earthing', which is obligatory | earthing: System earthing of the secondary side; obligatory up to 1 kV where the vector group has a neutral.
)~"},
          {17, R"~(earthing = "IT"
star_point = "solid")~",
           R"~(8:14+1 warning: transformer 'T' is IT, but no board has an electrode
18:15+5 error: star_point of transformer 'T' is solid, but in IT it is open or earthed through an impedance
17:13+1 note: earthing is given here
)~"},
          {17, R"~(earthing = "TT"
star_point = "2 ohm")~",
           R"~(8:14+1 warning: transformer 'T' is TT, but no board has an electrode
18:15+5 error: star_point of transformer 'T' is '2 ohm', but in TT it is earthed directly
17:13+1 note: earthing is given here
)~"},
          {17, R"~(earthing = "TN-S"
star_point = "closed")~",
           R"~(18:15+6 error: unknown star_point 'closed' of transformer 'T' | it is "solid", "open" or an impedance such as "1000 ohm"
)~"},
          {17, R"~(earthing = "TN-S"
star_point = "open"
link = "none")~",
           R"~(19:9+4 error: transformer 'T' has both link = "none" and star_point; one is enough
18:15+1 note: star_point is given here
)~"},
          {17, R"~(earthing = "TN-S"
link = "board")~",
           R"~(18:9+5 error: link of transformer 'T' is at the board, which makes it TN-C-S
17:13+1 note: earthing is given here
)~"},
          {17, R"~(earthing = "TN-S"
link = "bord")~",
           R"~(18:9+4 error: unknown link 'bord' of transformer 'T' | did you mean 'board'?
)~"},
          {17, R"~(earthing = "TN-S"
tap = "25 %")~",
           R"~(18:8+4 error: tap of transformer 'T' is 25 %; it must be at most 20 %
)~"},
          {17, R"~(earthing = "TN-S"
tap = 0.05)~",
           R"~(18:7+4 error: tap of transformer 'T' is 0.05 without a unit | units that fit: %
)~"},
          {9, R"~(from = "b")~",
           R"~(3:8+1 error: nothing feeds board 'b' | a supply, a transformer or a submain leads to a board
10:10+1 error: transformer 'T' leads from board 'b' to itself
)~"},
          {9, R"~(from = "c")~",
           R"~(9:9+1 error: unknown board 'c' | boards are: a, b
)~"},
          {11, R"~(voltage = "230/690 V")~",
           R"~(11:12+9 error: voltage of transformer 'T' is '230/690 V'; the second must be 1.73 times the first | such as "230/400 V"
)~"},
          {11, R"~(voltage = "6/10 kV")~",
           R"~(11:12+7 error: voltage of transformer 'T' is '6/10 kV'; above 1 kV the voltage between lines stands alone | such as "10 kV"
)~"},
          {10, R"~(feeds = "a")~",
           R"~(3:8+1 error: nothing feeds board 'b' | a supply, a transformer or a submain leads to a board
8:14+1 error: transformer 'T' delivers 400 V between lines to board 'a', which has 20 kV
10:10+1 error: transformer 'T' leads from board 'a' to itself
)~"},
          {15, R"~(x_over_r = 3
losses = "4.6 kW")~",
           R"~(15:12+1 error: transformer 'T' has both losses and x_over_r; one is enough
16:11+1 note: losses is given here
)~"},
          {15, R"~()~",
           R"~(8:14+1 error: transformer 'T' has neither 'losses' nor 'x_over_r'
)~"},
          {15, R"~(losses = "46 kW")~",
           R"~(15:11+5 error: losses of transformer 'T' are 11.5 % of its rating, not below uk
)~"},
          {0, R"~([circuit.a]
W = { phases = "L1", device = "C 16 A", cable = "singles-pvc-cu 2.5 mm2", length = "20 m" }
)~",
           R"~(19:1+1 error: circuit 'a/W' stands on a board of 20 kV; final circuits end at 1 kV
)~"},
          {0, R"~([electrode.E]
board = "a"
resistance = "5 ohm"
)~",
           R"~(18:12+1 error: electrode 'E' earths the protective conductors of board 'a', which has none above 1 kV
)~"},
          {0, R"~([bond.E]
from = "a"
to = "b"
impedance = "5 ohm"
)~",
           R"~(18:7+1 error: bond 'E' joins protective conductors, and board 'a' has none above 1 kV
)~"},
          {0, R"~([link.E]
from = "a"
to = "b"
)~",
           R"~(18:7+1 error: link 'E' joins board 'a' of 20 kV and board 'b' of 400 V
)~"},
          {0, R"~([board.c]
[submain.E]
from = "a"
to = "c"
length = "1 km"
z1 = "0.1 ohm/km"
return = "N"
)~",
           R"~(24:11+1 error: return of submain 'E' is 'N', but above 1 kV only the earth returns
)~"},
          {0, R"~([board.c]
[submain.E]
from = "a"
to = "c"
length = "1 km"
device = "gG 63 A"
cable = "swa-xlpe-cu-3c 95 mm2"
cpc = "armour"
)~",
           R"~(25:8+6 error: cpc of submain 'E' has no meaning: above 1 kV the lines alone are carried
)~"},
          {2, R"~([board.a]
n_pe_link = true)~",
           R"~(2:8+1 error: board 'a' has no N to be linked with PE
)~"},
          {5, R"~(feeds = "b")~",
           R"~(8:14+1 error: transformer 'T' delivers 400 V between lines to board 'b', which has 20 kV
)~"},
      });
}

}  // namespace sunder::netlists
