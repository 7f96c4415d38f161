// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about the form of the file, its head, names, boards, states and electrodes, word for word.
#include <catch2/catch.hpp>

#include "tests/netlists/base.h"

namespace sunder::netlists {

TEST_CASE("Errors of form are told with their place and reading goes on", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {7, R"~(voltage = 230/400 V)~",
       R"~(7:11+9 error: voltage is a text without quotes | a text needs quotes: voltage = "230/400 V"
)~"},
      {7, R"~(voltage = "230/400 V)~",
       R"~(7:21+1 error: a text is not closed before the end of the line
)~"},
      {13, R"~([board.intake)~",
       R"~(13:14+1 error: expected ']', got the end of the line
)~"},
      {3, R"~(ambient =)~",
       R"~(3:10+1 error: expected value, got the end of the line
)~"},
      {3, R"~(ambient)~",
       R"~(3:8+1 error: expected '=', got the end of the line
)~"},
      {0, R"~(x = [1,
)~",
       R"~(28:9+1 error: a bracket or a text is still open at the end of the file
)~"},
      {0, R"~([board.shop]
incomer = "switch 63 A"
)~",
       R"~(28:1+12 error: board 'shop' is declared twice
15:1+1 note: first declared here
)~"},
      {27,
       R"~(W1 = { use = "fixed", phases = "L1 L2 L3", device = "C 16 A 6 kA", cable = "singles-pvc-cu 2.5 mm2", length = "21 m", load = "11 A", pf = 0.8 })~",
       R"~(27:1+2 error: circuit 'shop/W1' is declared twice
26:1+1 note: first declared here
)~"},
      {22, R"~(from = "shop")~",
       R"~(17:10+1 error: submain 'S1' has no 'length', which is obligatory | length: Its length.
22:1+4 error: 'from' is given twice in submain 'S1'
18:1+1 note: first given here
)~"},
      {11, R"~(minimum = { Ze = "0.35 ohm", Ze = "0.3 ohm" })~",
       R"~(11:30+2 error: 'Ze' is given twice
11:13+1 note: first given here
)~"},
      {0, R"~([circuit.shop]
W3 = {}
)~",
       R"~(28:1+14 error: the table of circuits of board 'shop' is declared twice
25:1+1 note: first declared here
)~"},
      {0, R"~([board.Café]
)~",
       R"~(28:11+1 error: expected ']', got 'é' | a name with such a character stands in quotes
)~"},
      {1, R"~(über = 1)~",
       R"~(1:1+1 error: expected keys, tables, whitespace or comments, got 'ü' | a name with such a character stands in quotes
)~"},
      {0,
       "["
       R"~(.shop]
)~",
       R"~(28:2+1 error: expected bare key starting character or string delimiter, got '.'
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("The head of the netlist is read strictly", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {1, R"~(titel = "Base")~",
       R"~(1:1+5 error: unknown key 'titel' at the top of the netlist | did you mean 'title'?
)~"},
      {2, R"~()~",
       R"~(1:1+1 error: the netlist has no 'rules', which is obligatory | rules: The wiring rules, with their edition, that decide times, k, voltage drop and temperatures.
)~"},
      {2, R"~(rules = "BS 7671")~",
       R"~(2:10+7 error: unknown rules 'BS 7671' of the netlist | did you mean 'BS 7671:2018+A2'?
)~"},
      {2, R"~(rules = 7671)~",
       R"~(2:9+4 error: rules of the netlist is a number; a text is expected
)~"},
      {1, R"~(currents = "IEC 909")~",
       R"~(1:13+7 error: unknown currents 'IEC 909' of the netlist | did you mean 'IEC 60909'?
)~"},
      {1, R"~(tolerance = "+10 %")~",
       R"~(1:14+5 error: tolerance is asked for by IEC 60909 alone | currents = "IEC 60909"
)~"},
      {1, R"~(tolerance = "+6 %"
currents = "conductor")~",
       R"~(1:14+4 error: tolerance is asked for by IEC 60909 alone
2:13+1 note: currents is given here
)~"},
      {1, R"~(currents = "IEC 60909"
tolerance = "10 %")~",
       R"~(2:14+4 error: unknown tolerance '10 %' of the netlist | did you mean '+10 %'?
)~"},
      {1, R"~(frequency = "50")~",
       R"~(1:14+2 error: frequency of the netlist: '50' has no unit; a frequency is written in Hz, kHz
)~"},
      {1, R"~(frequency = "5 kHz")~",
       R"~(1:14+5 error: frequency of the netlist is 5000 Hz; it must be at most 400 Hz
)~"},
      {3, R"~(ambient = "30 K")~",
       R"~(3:12+4 error: ambient of the netlist: unknown unit 'K'; a temperature is written in degC
)~"},
      {3, R"~(ambient = "95 degC")~",
       R"~(3:12+7 error: ambient of the netlist is 95 degC; it must be at most 90 degC
)~"},
      {3, R"~(ambient = "55 degC")~",
       R"~(3:12+7 warning: ambient of the netlist is 55 degC; usual are -20 degC to 50 degC
)~"},
      {3, R"~(ambient = 30)~",
       R"~(3:11+2 error: ambient of the netlist is 30 without a unit | units that fit: degC
)~"},
      {4, R"~(premises = "flat")~",
       R"~(4:13+4 error: unknown premises 'flat' of the netlist | valid are: dwelling, other
)~"},
      {0, R"~([submian.S2]
)~",
       R"~(28:2+7 error: unknown kind of element 'submian' | did you mean 'submain'?
)~"},
      {0, R"~([[board]]
x = 1
)~",
       R"~(28:1+2 error: elements are tables with a name, not lists of tables | such as [board.NAME]
)~"},
      {0, R"~([board]
x = 1
)~",
       R"~(29:5+1 error: board 'x' is a number; a table is expected
)~"},
      {1, R"~(supply = "grid")~",
       R"~(1:11+4 error: 'supply' is a text; its elements are tables | such as [supply.NAME]
5:1+13 error: [supply.grid] cannot be a table here: a value has its name
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("Names that cannot be addresses or are not unique are refused", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {0, R"~([board."a/b"]
)~",
       R"~(28:8+3 error: board 'a/b' has '/' in its name; addresses use / . and @
)~"},
      {0, R"~([board.""]
)~",
       R"~(28:8+1 error: a board has an empty name
)~"},
      {0, R"~([board.S1]
)~",
       R"~(28:8+2 error: 'S1' is the name of both a submain and a board
17:10+1 note: first declared here
)~"},
      {0, R"~([board."a\tb"]
)~",
       R"~(28:8+3 error: the name of a board holds a control character
)~"},
      {0, R"~([submain.W2]
from = "shop"
to = "b2"
device = "gG 32 A"
cable = "multicore-xlpe-cu-5c 6 mm2"
length = "9 m"
[board.b2]
)~",
       R"~(28:10+1 error: board 'shop' has two ways of the name 'W2'
27:1+1 note: the circuit is declared here
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("Boards and their groups are read strictly", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {14, R"~(incomer = "switch")~",
       R"~(14:12+6 error: incomer of board 'intake': 'switch' has no rated current | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {14, R"~(incomer = "RCD 63 A")~",
       R"~(14:12+8 error: incomer of board 'intake': 'RCD' needs its residual operating current, such as '30 mA'
)~"},
      {16, R"~(groups = { rcd = { device = "RCD 63 A 30 mA A" } })~",
       R"~(16:12+1 error: group 'rcd' of board 'shop' has no 'ways', which is obligatory | ways: Circuits of the board and submains that leave it.
)~"},
      {16, R"~(groups = { rcd = { device = "RCD 63 A 30 mA A", ways = ["W3"] } })~",
       R"~(16:58+2 error: group 'rcd' names way 'W3', which board 'shop' does not have | did you mean 'W1'?
)~"},
      {16, R"~(groups = { rcd = { device = "RCD 63 A 30 mA A", ways = [1] } })~",
       R"~(16:57+1 error: a way of group 'rcd' is a number; a name is expected
)~"},
      {16,
       R"~(groups = { rcd = { device = "RCD 63 A 30 mA A", ways = ["W1"] }, two = { device = "RCD 63 A 30 mA A", ways = ["W1"] } })~",
       R"~(16:112+2 error: way 'W1' of board 'shop' is in two groups or twice in one
16:12+1 note: the other mention is in this group
)~"},
      {16, R"~(groups = ["W1"])~",
       R"~(16:10+6 error: groups of board 'shop' is a list; a table is expected | such as groups = { sockets = { device = "RCD 63 A 30 mA A", ways = ["W1", "W2"] } }
)~"},
      {16, R"~(groups = { rcd = "RCD" })~",
       R"~(16:19+3 error: group 'rcd' of board 'shop' is a text; a table is expected
)~"},
      {0, R"~([board.attic]
)~",
       R"~(28:8+1 error: nothing feeds board 'attic' | a supply, a transformer or a submain leads to a board
)~"},
      {15, R"~([board.shop]
circuits_from = "none.csv")~",
       R"~(16:18+8 error: schedule file '/none.csv' does not exist
)~"},
      {15, R"~([board.shop]
circuits_from = ".")~",
       R"~(16:18+1 error: schedule file '/' is a folder
)~"},
      {15, R"~([board.shop]
circuits_from = 4)~",
       R"~(16:17+1 error: circuits_from is a number; the name of a file is expected
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("Supply states name known sources", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {0, R"~([state.a]
sources = []
)~",
       R"~(29:11+2 error: state 'a' has no source
)~"},
      {0, R"~([state.a]
sources = ["gird"]
)~",
       R"~(29:13+4 error: unknown source 'gird' of state 'a' | did you mean 'grid'?
)~"},
      {0, R"~([state.a]
sources = ["grid", "grid"]
)~",
       R"~(29:21+4 error: state 'a' names source 'grid' twice
)~"},
      {0, R"~([state.a]
sources = "grid"
)~",
       R"~(29:12+4 error: sources of state 'a' is a text; a list is expected
)~"},
      {0, R"~([transformer.T]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
[state.a]
sources = "grid"
)~",
       R"~(36:12+4 error: sources of state 'a' is a text; a list is expected
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("Electrodes are read strictly", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {0, R"~([electrode.rod]
board = "shop"
resistance = "0 ohm"
)~",
       R"~(30:15+5 error: resistance of electrode 'rod' is 0 ohm; it must be above 0 ohm
)~"},
      {0, R"~([electrode.a]
board = "shop"
resistance = "20 ohm"
[electrode.b]
board = "shop"
resistance = "20 ohm"
)~",
       R"~(32:10+4 error: board 'shop' has two electrodes; give their joint resistance once
28:12+1 note: the other is declared here
)~"},
      {8, R"~(earthing = "TT")~",
       R"~(5:9+1 warning: source 'grid' is TT, but no board has an electrode
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

}  // namespace sunder::netlists
