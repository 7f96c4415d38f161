// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about runs by impedance, combined conductors, bonds, links and states, word for word.
#include <catch2/catch.hpp>
#include <vector>

#include "tests/netlists/base.h"

namespace sunder::netlists {

namespace {

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

TEST_CASE("A run by impedance or with a combined conductor is refused where it cannot be", "[netlists]") {
  check_all(
      kTwoBoards,
      {
          {12, R"~(z1 = "0.1+j0.1 mohm/m")~",
           R"~(12:7+15 error: submain 'S1' has both a cable and z1; one is enough
13:10+1 note: cable is given here
)~"},
          {13, R"~(z0 = "0.3 mohm/m")~",
           R"~(9:10+1 error: submain 'S1' has no 'cable', which is obligatory | cable: Construction and size.
13:7+10 error: z0 of submain 'S1' needs z1 beside it
)~"},
          {13, R"~(cable = "multicore-xlpe-cu-5c 16 mm2"
return = "N")~",
           R"~(14:11+1 error: return of submain 'S1' is for a run by z1; a cable has its own return
)~"},
          {13, R"~(z1 = "0.1 ohm")~",
           R"~(13:7+7 error: z1 of submain 'S1': 'ohm' is a unit of impedance; an impedance per length is written in mohm/m, ohm/km, ohm/m, uohm/m
)~"},
          {13, R"~(z1 = "5 ohm/m")~",
           R"~(13:7+7 warning: z1 of submain 'S1' is '5 ohm/m'; usual are 0.002 mohm/m to 20 mohm/m
)~"},
          {13, R"~(z1 = "0.1+j0.1 mohm/m"
return = "PEN")~",
           R"~(14:11+3 error: unknown return 'PEN' of submain 'S1' | did you mean 'PE'?
)~"},
          {13, R"~(z1 = "0.1+j0.1 mohm/m"
cpc = "16 mm2")~",
           R"~(14:8+6 error: cpc of submain 'S1' belongs to a cable; of a run by z1, return says what carries the rest
)~"},
          {13, R"~(z1 = "0.1+j0.1 mohm/m"
phases = "L1 L2 L3"
return = "N")~",
           R"~(15:11+1 error: return of submain 'S1' is 'N', but it has no N
18:18+10 error: circuit 'b/W1' needs N, but board 'b' has L1 L2 L3
19:18+2 error: circuit 'b/W2' needs N, but board 'b' has L1 L2 L3
)~"},
          {13, R"~(z1 = "0.1+j0.1 mohm/m"
phases = "L1 L2 L3 N"
return = "earth")~",
           R"~(15:11+5 error: return of submain 'S1' is 'earth', but its phases have an N
18:18+10 error: circuit 'b/W1' needs N, but board 'b' has L1 L2 L3
19:18+2 error: circuit 'b/W2' needs N, but board 'b' has L1 L2 L3
)~"},
          {13, R"~()~",
           R"~(9:10+1 error: submain 'S1' has no 'cable', which is obligatory | cable: Construction and size.
)~"},
          {12, R"~()~",
           R"~(9:10+1 error: submain 'S1' has no 'device', which is obligatory | device: The device at its start.
)~"},
          {14, R"~(length = "20 m"
cpc = "PEN")~",
           R"~(15:8+3 error: cpc of submain 'S1' is PEN, but at board 'a' N and PE are separate: neutral and protective conductor must not be joined again | n_pe_link = true is for a board where they are joined for the first time
)~"},
          {12, R"~(device = "gG 63 A"
cpc = "PEN"
phases = "L1 L2 L3")~",
           R"~(13:8+3 error: cpc of submain 'S1' is PEN, but its phases have no N
18:18+10 error: circuit 'b/W1' needs N, but board 'b' has L1 L2 L3
19:18+2 error: circuit 'b/W2' needs N, but board 'b' has L1 L2 L3
)~"},
          {13, R"~(cable = "swa-xlpe-cu-3c 16 mm2"
cpc = "PEN")~",
           R"~(14:8+3 error: cpc of submain 'S1' is PEN, but at board 'a' N and PE are separate: neutral and protective conductor must not be joined again | n_pe_link = true is for a board where they are joined for the first time
14:8+3 error: cpc of submain 'S1' is PEN, but the 3 cores of 'swa-xlpe-cu-3c' leave none for the neutral
)~"},
          {16,
           R"~(W1 = { phases = "L1 L2 L3", device = "C 16 A", cable = "singles-pvc-cu 2.5 mm2", cpc = "PEN", length = "20 m" })~",
           R"~(16:89+3 error: cpc of circuit 'b/W1' is PEN, but its phases have no N
)~"},
          {16,
           R"~(W1 = { phases = "L1 L2 L3 N", device = "C 16 A", cable = "singles-pvc-cu 2.5 mm2", cpc = "PEN", length = "20 m" })~",
           R"~(16:91+3 error: cpc of circuit 'b/W1' is PEN, but at board 'b' N and PE are separate: neutral and protective conductor must not be joined again | n_pe_link = true is for a board where they are joined for the first time
)~"},
          {16,
           R"~(W1 = { phases = "L1 L2 L3 N", device = "C 16 A", cable = "multicore-xlpe-cu-3c 4 mm2", cpc = "PEN", length = "20 m" })~",
           R"~(16:95+3 error: cpc of circuit 'b/W1' is PEN, but the 3 cores of 'multicore-xlpe-cu-3c' leave none for the neutral
16:95+3 error: cpc of circuit 'b/W1' is PEN, but at board 'b' N and PE are separate: neutral and protective conductor must not be joined again | n_pe_link = true is for a board where they are joined for the first time
)~"},
      });
}

TEST_CASE("A bond or link that cannot be is refused with the reason", "[netlists]") {
  check_all(
      kTwoBoards,
      {
          {0, R"~([bond.B]
from = "a"
to = "a"
impedance = "0.1 ohm"
)~",
           R"~(20:7+1 error: bond 'B' leads from board 'a' to itself
)~"},
          {0, R"~([bond.B]
from = "a"
to = "erth"
impedance = "0.1 ohm"
)~",
           R"~(20:7+4 error: unknown board 'erth' | or "earth"; boards are: a, b
)~"},
          {0, R"~([bond.B]
from = "earth"
to = "a"
impedance = "0.1 ohm"
)~",
           R"~(19:9+5 error: unknown board 'earth' | boards are: a, b
)~"},
          {0, R"~([bond.B]
from = "a"
to = "earth"
impedance = "0 ohm"
)~",
           R"~(21:14+5 error: impedance of bond 'B' is '0 ohm'; it must be above 0
)~"},
          {0, R"~([bond.B]
from = "a"
to = "earth"
impedance = "-1+j2 ohm"
)~",
           R"~(21:14+9 error: impedance of bond 'B' is '-1+j2 ohm'; its resistance must not be negative
)~"},
          {0, R"~([bond.B]
from = "a"
to = "earth"
impedance = "0.1"
)~",
           R"~(21:14+3 error: impedance of bond 'B': '0.1' has no unit; an impedance is written in ohm, mohm, uohm, kohm
)~"},
          {0, R"~([bond.B]
from = "a"
to = "earth"
impedance = "5 kohm"
)~",
           R"~(21:14+6 warning: impedance of bond 'B' is '5 kohm'; usual are 0.1 mohm to 1000 ohm
)~"},
          {0, R"~([bond.B]
from = "a"
to = "earth"
)~",
           R"~(18:7+1 error: bond 'B' has no 'impedance', which is obligatory | impedance: Of it: "0.05 ohm" or "0.05+j0.02 ohm".
)~"},
          {0, R"~([bond.S1]
from = "a"
to = "earth"
impedance = "1 ohm"
)~",
           R"~(18:7+2 error: 'S1' is the name of both a submain and a bond
9:10+1 note: first declared here
)~"},
          {0, R"~([link.L]
from = "b"
to = "b"
)~",
           R"~(20:7+1 error: link 'L' leads from board 'b' to itself
)~"},
          {0, R"~([link.L]
from = "a"
to = "x"
)~",
           R"~(20:7+1 error: unknown board 'x' | boards are: a, b
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
closed = "maybe"
)~",
           R"~(21:11+5 error: closed of link 'L' is 'maybe'; true or false is expected
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
phases = "L1 L4"
)~",
           R"~(21:14+2 error: unknown phase 'L4' of link 'L' | expected: "L1", "L1 L2", "L1 L2 L3" or "L1 L2 L3 N"
)~"},
          {0, R"~([board.c]
[link.L]
from = "c"
to = "d"
[board.d]
)~",
           R"~(18:8+1 error: nothing feeds board 'c' | a supply, a transformer or a submain leads to a board
22:8+1 error: nothing feeds board 'd' | a supply, a transformer or a submain leads to a board
)~"},
          {0, R"~([board.c]
[submain.S2]
from = "a"
to = "c"
phases = "L1"
device = "gG 63 A"
cable = "multicore-xlpe-cu-5c 16 mm2"
length = "20 m"
[link.L]
from = "b"
to = "c"
phases = "L1 L2"
)~",
           R"~(29:11+5 error: link 'L' needs L2, but board 'c' has L1 N
)~"},
          {0, R"~([board.c]
[submain.S2]
from = "a"
to = "c"
phases = "L1"
device = "gG 63 A"
cable = "multicore-xlpe-cu-5c 16 mm2"
length = "20 m"
[board.d]
[submain.S3]
from = "a"
to = "d"
phases = "L2"
device = "gG 63 A"
cable = "multicore-xlpe-cu-5c 16 mm2"
length = "20 m"
[link.L]
from = "d"
to = "c"
)~",
           R"~(34:7+1 error: link 'L' has nothing to join: board 'd' has L2 N, board 'c' has L1 N
)~"},
      });
}

TEST_CASE("What a state opens and closes must be able to", "[netlists]") {
  check_all(
      kTwoBoards,
      {
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = ["S2"]
)~",
           R"~(23:10+2 error: unknown element 'S2' in open of state 's' | did you mean 'S1'?
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = ["b"]
)~",
           R"~(23:10+1 error: state 's' opens 'b', which is a board; links, submains and transformers between boards can be opened
3:8+1 note: 'b' is declared here
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = ["grid"]
)~",
           R"~(23:10+4 error: state 's' opens 'grid', which is a supply; links, submains and transformers between boards can be opened | a source that is off is left out of sources
4:9+1 note: 'grid' is declared here
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
closed = ["S1"]
)~",
           R"~(23:12+2 error: state 's' closes 'S1', which is a submain; only links are closed by a state | it is closed where no state opens it
9:10+1 note: 'S1' is declared here
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
closed = ["K"]
)~",
           R"~(23:12+1 error: unknown element 'K' in closed of state 's'
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = ["L"]
closed = ["L"]
)~",
           R"~(23:10+1 error: 'L' is both open and closed in state 's'
24:12+1 note: closed here
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = ["L", "L"]
)~",
           R"~(23:15+1 error: state 's' names 'L' twice
23:10+1 note: open here
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = [3]
)~",
           R"~(23:9+1 error: the name of an element is expected in state 's', got a number
)~"},
          {0, R"~([link.L]
from = "a"
to = "b"
[state.s]
sources = ["grid"]
open = "L"
)~",
           R"~(23:9+1 error: open of state 's' is a text; a list is expected
)~"},
      });
}

TEST_CASE("A transformer between two boards is opened, but neither a source nor closed", "[netlists]") {
  check_all(
      kHigh,
      {
          {0, R"~([state.s]
sources = ["grid", "T"]
)~",
           R"~(19:21+1 error: transformer 'T' of state 's' stands between two boards and is no source | name the supply that feeds its primary side
)~"},
          {0, R"~([state.s]
sources = ["grid"]
closed = ["T"]
)~",
           R"~(20:12+1 error: state 's' closes 'T', which is a transformer; only links are closed by a state | it is closed where no state opens it
8:14+1 note: 'T' is declared here
)~"},
      });
}

}  // namespace sunder::netlists
