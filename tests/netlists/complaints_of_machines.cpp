// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about generators, inverters and motors, word for word.
#include <catch2/catch.hpp>
#include <vector>

#include "tests/netlists/base.h"

namespace sunder::netlists {

namespace {

constexpr std::string_view kGenerator = R"(rules = "IEC 60364"
[board.a]
[generator.G]
feeds = "a"
voltage = "230/400 V"
earthing = "TN-S"
rating = "250 kVA"
xd_subtransient = "12 %"
)";

constexpr std::string_view kInverter = R"(rules = "IEC 60364"
[board.a]
[inverter.U]
feeds = "a"
voltage = "230/400 V"
earthing = "TN-S"
stages = [["600 A", "20 ms"], ["150 A"]]
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

void check_all(std::string_view netlist, const std::vector<Complaint>& complaints) {
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(netlist, complaint.line, complaint.text), "net.toml", "/")) == complaint.said);
  }
}

}  // namespace

TEST_CASE("A generator that cannot be is refused with the reason", "[netlists]") {
  check_all(
      kGenerator,
      {
          {8, R"~()~",
           R"~(3:12+1 error: generator 'G' has no 'xd_subtransient', which is obligatory | xd_subtransient: Saturated subtransient reactance, per unit or in %.
)~"},
          {8, R"~(xd_subtransient = 12)~",
           R"~(8:19+2 error: xd_subtransient of generator 'G' is 12; it must be at most 2 | did you mean "12 %"?
)~"},
          {8, R"~(xd_subtransient = "12 kA")~",
           R"~(8:20+5 error: xd_subtransient of generator 'G': 'kA' is a unit of current; a ratio is written in %, or a bare number
)~"},
          {8, R"~(xd_subtransient = "60 %")~",
           R"~(8:20+4 warning: xd_subtransient of generator 'G' is 0.6; usual are 0.03 to 0.5
)~"},
          {8, R"~(xd_subtransient = 0.12
xd_transient = 0.1)~",
           R"~(9:16+3 error: xd_transient of generator 'G' is below xd_subtransient
8:19+1 note: xd_subtransient is given here
)~"},
          {8, R"~(xd_subtransient = 0.12
xd_transient = 0.2
xd = 0.15)~",
           R"~(10:6+4 warning: xd of generator 'G' is 0.15; usual are 0.3 to 6
10:6+4 error: xd of generator 'G' is below xd_transient
9:16+1 note: xd_transient is given here
)~"},
          {8, R"~(xd_subtransient = 0.12
xd = 0.1)~",
           R"~(9:6+3 warning: xd of generator 'G' is 0.1; usual are 0.3 to 6
9:6+3 error: xd of generator 'G' is below xd_subtransient
8:19+1 note: xd_subtransient is given here
)~"},
          {8, R"~(xd_subtransient = 0.12
T_subtransient = "0.2 s"
T_transient = "0.1 s")~",
           R"~(10:16+5 error: T_transient of generator 'G' is below T_subtransient
9:19+1 note: T_subtransient is given here
)~"},
          {5, R"~(voltage = "400 V")~",
           R"~(5:12+5 error: voltage of generator 'G' needs both values | such as "230/400 V"
)~"},
          {5, R"~(voltage = "230 V")~",
           R"~(5:12+5 error: voltage of generator 'G' needs both values | such as "230/400 V"
)~"},
          {5, R"~(voltage = "11 kV"
link = "none")~",
           R"~(6:9+4 error: link of generator 'G' has no meaning above 1 kV, where there is no neutral
7:13+4 error: earthing of generator 'G' is TN-S, but above 1 kV there is no neutral and no protective conductor | star_point says how its star point is earthed
)~"},
          {5, R"~(voltage = "120/240 V")~",
           R"~(5:12+9 error: voltage of generator 'G' is '120/240 V'; the second must be 1.73 times the first | such as "230/400 V"
)~"},
          {7, R"~()~",
           R"~(3:12+1 error: generator 'G' has no 'rating', which is obligatory | rating: Rated power.
)~"},
          {6, R"~()~",
           R"~(3:12+1 error: generator 'G' has no 'earthing', which is obligatory | earthing: System earthing; obligatory up to 1 kV.
)~"},
          {6, R"~(earthing = "IT"
star_point = "solid")~",
           R"~(3:12+1 warning: source 'G' is IT, but no board has an electrode
7:15+5 error: star_point of generator 'G' is solid, but in IT it is open or earthed through an impedance
6:13+1 note: earthing is given here
)~"},
          {8, R"~(xd_subtransient = 0.12
pf = 0.9
phases = "L1")~",
           R"~(10:1+6 error: unknown key 'phases' in generator 'G' | 'phases' is a key of: supply, inverter, submain, circuit, motor, link; here may stand: feeds, voltage, earthing, rating, xd_subtransient, xd_transient, xd, x2, x0, r, T_subtransient, T_transient, sustained, pf, star_point, capacitance, link, device, tails, demand
)~"},
      });
}

TEST_CASE("An inverter that cannot be is refused with the reason", "[netlists]") {
  check_all(
      kInverter,
      {
          {7, R"~()~",
           R"~(3:11+1 error: inverter 'U' has no 'stages', which is obligatory | stages: Currents in a fault and until when each is kept: ["600 A", "20 ms"], the last without a time: for ever.
)~"},
          {7, R"~(stages = [])~",
           R"~(7:10+2 error: stages of inverter 'U' has no stage
)~"},
          {7, R"~(stages = "600 A")~",
           R"~(7:11+5 error: stages of inverter 'U' is a text; a list is expected
)~"},
          {7, R"~(stages = [["600 A"], ["150 A"]])~",
           R"~(7:11+9 error: stages of inverter 'U': only the last stage may be without a time | such as [["600 A", "20 ms"], ["150 A"]]
)~"},
          {7, R"~(stages = [["600 A", "20 ms"], ["650 A"]])~",
           R"~(7:33+5 error: stages of inverter 'U': currents must fall from stage to stage
)~"},
          {7, R"~(stages = [["600 A", "20 ms"], ["300 A", "10 ms"]])~",
           R"~(7:42+5 error: stages of inverter 'U': times must rise from stage to stage
)~"},
          {7, R"~(stages = [["600 A", "20 ms"], "150 A"])~",
           R"~(7:32+5 error: stages of inverter 'U': a current and a time are expected | such as [["600 A", "20 ms"], ["150 A"]]
)~"},
          {7, R"~(stages = [["600 A", "20 A"]])~",
           R"~(7:22+4 error: stages of inverter 'U': 'A' is a unit of current; a time is written in s, ms, min, h
)~"},
          {7, R"~(stages = [["-600 A", "20 ms"]])~",
           R"~(7:13+6 error: stages of inverter 'U' is -600 A; it must be above 0
)~"},
          {7, R"~(stages = [["600 A", "20 ms"]]
phases = "L1")~",
           R"~(8:11+2 error: inverter 'U' is three-phase and delivers L1 L2 L3 | phases is for a single-phase inverter: "L1", "L2" or "L3"
)~"},
          {7, R"~(stages = [[600, "20 ms"]])~",
           R"~(7:12+3 error: stages of inverter 'U' is a number; a text with a unit is expected
)~"},
      });
}

TEST_CASE("A motor that cannot be is refused with the reason", "[netlists]") {
  check_all(
      kTwoBoards,
      {
          {0, R"~([motor.M]
on = "b"
)~",
           R"~(18:8+1 error: motor 'M' has neither 'rating' nor 'current' | rating = "5.5 kW", or the rated current
)~"},
          {0, R"~([motor.M]
on = "c"
rating = "5 kW"
)~",
           R"~(19:7+1 error: unknown board 'c' | a circuit is named "board/way"; boards are: a, b
)~"},
          {0, R"~([motor.M]
on = "b/W9"
rating = "5 kW"
)~",
           R"~(19:7+4 error: unknown circuit 'b/W9' of motor 'M' | did you mean 'b/W1'?
)~"},
          {0, R"~([motor.M]
on = "b/W2"
rating = "5 kW"
)~",
           R"~(18:8+1 error: motor 'M' needs L2 L3, but circuit 'b/W2' has L1 N | phases = "L1 L2" is a motor between two lines
)~"},
          {0, R"~([motor.M]
on = "b"
phases = "L1"
rating = "5 kW"
)~",
           R"~(20:11+2 error: motor 'M' has one line, and motors of a single phase are not solved | "L1 L2 L3", or "L1 L2" between two lines
)~"},
          {0, R"~([motor.M]
on = "b"
rating = "5 kVA"
)~",
           R"~(20:11+5 error: rating of motor 'M': 'kVA' is a unit of apparent power; a power is written in W, kW, MW
)~"},
          {0, R"~([motor.M]
on = "b"
rating = "5 kW"
start = 0.5
)~",
           R"~(21:9+3 error: start of motor 'M' is 0.5; it must be at least 1
)~"},
          {0, R"~([motor.M]
on = "b"
rating = "5 kW"
pole_pairs = 1.5
)~",
           R"~(21:14+3 error: pole_pairs of motor 'M' is 1.5; a whole number is expected
)~"},
          {0, R"~([motor.M]
on = "b"
rating = "5 kW"
voltage = "690 V"
)~",
           R"~(18:8+1 warning: motor 'M' is rated 690 V, but its place has 400 V between lines
)~"},
          {0, R"~([motor.M]
board = "b"
rating = "5 kW"
)~",
           R"~(19:1+5 error: unknown key 'board' in motor 'M' | board is the key 'on': Its board, or the circuit at whose end it stands: "workshop/W1".
)~"},
          {0, R"~([motor.M]
on = 3
rating = "5 kW"
)~",
           R"~(19:6+1 error: the name of a board is expected, got a number
)~"},
      });
}

}  // namespace sunder::netlists
