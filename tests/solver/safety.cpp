// SPDX-License-Identifier: Apache-2.0
// What must never pass: each case once gave, or could give, a verdict that a competent person disputes.
#include "tests/solver/reading.h"

using namespace sunder;
using solver::Finding;
using solver::Verdict;
using tests::find;
using tests::read;
using tests::supply;

namespace {

Finding judged(const std::string& netlist, const std::string& check, const std::string& subject) {
  return find(solver::run_checks(read(netlist), {}), check, subject);
}

std::string circuit(const std::string& keys, const std::string& before = "") {
  return before + supply() + "[circuit.main]\nC1 = { phases = \"L1\", " + keys + " }\n";
}

const std::string kSlow = R"([device.slow]
kind = "breaker"
In = "16 A"
Icn = "16 kA"
I2 = "23.2 A"
latest = [["23.2 A", "3600 s"], ["60 A", "4 s"], ["300 A", "4 s"], ["300 A", "0.01 s"]]
let_through = [["1 kA", "4 kA2s"], ["16 kA", "20 kA2s"]]
source = "invented for this test"
)";

std::string transformer(const std::string& device, const std::string& tails) {
  return R"(rules = "BS 7671:2018+A2"
[transformer.T]
feeds = "main"
voltage = "230/400 V"
rating = "1000 kVA"
uk = "5 %"
x_over_r = 5
fault_level = "250 MVA"
earthing = "TN-S"
demand = "90 A"
device = ")" +
         device + "\"\n" + tails + R"([board.main]
[circuit.main]
C1 = { use = "fixed", phases = "L1", device = "B 10 A 30 kA", cable = "singles-pvc-cu 2.5 mm2", length = "20 m", load = "8 A", Iz = "24 A" }
)";
}

}  // namespace

TEST_CASE("A maker's let-through says nothing of a delayed trip", "[safety]") {
  // 300 A for 4 s is 360 kA2s; 1.5 mm2 stands (115 x 1.5)^2 = 29.8 kA2s (BS 7671 434.5.2).
  const std::string text = "rules = \"BS 7671:2018+A2\"\n" + kSlow + supply().substr(supply().find("[supply")) +
                           "[circuit.main]\nC1 = { use = \"fixed\", phases = \"L1\", device = \"slow\", cable = "
                           "\"flat-pvc-cu 1.5/1 mm2\", length = \"18 m\" }\n";
  CHECK(judged(text, "conductor heating", "main/C1").verdict == Verdict::fails);
  CHECK(judged(text, "fault clearance", "main/C1").verdict == Verdict::fails);
}

TEST_CASE("The device of a transformer must break what its terminals deliver", "[safety]") {
  CHECK(judged(transformer("C 125 A 10 kA", ""), "breaking capacity", "T").verdict == Verdict::fails);
  CHECK(judged(transformer("C 125 A", ""), "breaking capacity", "T").verdict == Verdict::undecided);
}

TEST_CASE("Tails are judged for overload and, behind a transformer, for disconnection", "[safety]") {
  const std::string tails = "tails = { cable = \"singles-pvc-cu 35 mm2\", length = \"60 m\", Iz = \"110 A\" }\n";
  const Finding overload = judged(transformer("C 125 A 36 kA", tails), "overload", "T");
  CHECK(overload.verdict == Verdict::fails);  // In 125 A above Iz 110 A
  CHECK(judged(transformer("C 125 A 36 kA", tails), "disconnection time", "T").value > 0);
}

TEST_CASE("A switch or residual device is judged by the load it carries", "[safety]") {
  const std::string heavy = R"([board.sub]
incomer = "RCD 40 A 30 mA A"
[submain.S1]
from = "main"
to = "sub"
device = "gG 100 A 80 kA"
cable = "singles-pvc-cu 35 mm2"
length = "5 m"
Iz = "110 A"
demand = "90 A"
[circuit.sub]
C1 = { phases = "L1", device = "B 63 A 16 kA", cable = "singles-pvc-cu 16 mm2", length = "5 m", load = "60 A", Iz = "76 A" }
C2 = { phases = "L1", device = "B 63 A 16 kA", cable = "singles-pvc-cu 16 mm2", length = "5 m", load = "60 A", Iz = "76 A" }
)";
  CHECK(judged(supply() + heavy, "overload", "sub").verdict == Verdict::fails);
}

TEST_CASE("The rating that decides the time is that of the overcurrent device", "[safety]") {
  // A 16 A circuit behind a 40 A switch is a final circuit of no more than 32 A: 0.4 s (411.3.2.2).
  const Finding finding = judged(supply() + R"([board.sub]
groups = { g = { device = "gG 16 A 80 kA", ways = ["C1"] } }
[submain.S1]
from = "main"
to = "sub"
device = "gG 63 A 80 kA"
cable = "singles-pvc-cu 16 mm2"
length = "5 m"
[circuit.sub]
C1 = { use = "fixed", phases = "L1", device = "switch 40 A", cable = "singles-pvc-cu 2.5 mm2", length = "90 m", load = "10 A", Iz = "24 A" }
)",
                                 "disconnection time", "sub/C1");
  CHECK(finding.limit == 0.4);
}

TEST_CASE("Single-phase loads on one line drop voltage along the neutral too", "[safety]") {
  // Same copper and currents: a submain of three lines of which one is loaded drops what one of one line does.
  const auto drop = [](const std::string& phases) {
    return judged(supply() + R"([board.sub]
[submain.S1]
from = "main"
to = "sub"
device = "gG 63 A 80 kA"
phases = ")" + phases +
                      R"("
cable = "singles-pvc-cu 16 mm2"
length = "40 m"
Iz = "76 A"
[circuit.sub]
C1 = { use = "fixed", phases = "L1", device = "B 63 A 16 kA", cable = "singles-pvc-cu 16 mm2", length = "1 m", load = "53 A", Iz = "76 A" }
)",
                  "voltage drop", "sub/C1")
        .value;
  };
  CHECK_THAT(drop("L1 L2 L3 N"), Catch::Matchers::WithinRel(drop("L1 N"), 1e-9));
}

TEST_CASE("A pair that is not selective never meets a demand", "[safety]") {
  const Finding finding = judged(supply() + R"([board.sub]
[submain.S1]
from = "main"
to = "sub"
device = "B 16 A 16 kA"
cable = "singles-pvc-cu 4 mm2"
length = "5 m"
[circuit.sub]
C1 = { phases = "L1", device = "B 16 A 16 kA", cable = "singles-pvc-cu 2.5 mm2", length = "5 m", load = "8 A", Iz = "24 A", selective = "20 A" }
)",
                                 "selectivity", "sub/C1");
  CHECK(finding.selectivity == "none");
  CHECK(finding.verdict == Verdict::fails);
}

TEST_CASE("A residual device above the next fuse still counts for line-earth faults", "[safety]") {
  const std::vector<Finding> findings = solver::run_checks(read(supply() + R"([board.sub]
incomer = "RCD 80 A 30 mA A"
[submain.S1]
from = "main"
to = "sub"
device = "gG 63 A 80 kA"
cable = "singles-pvc-cu 16 mm2"
length = "5 m"
[board.far]
[submain.S2]
from = "sub"
to = "far"
device = "gG 40 A 80 kA"
cable = "singles-pvc-cu 10 mm2"
length = "5 m"
[circuit.far]
C1 = { phases = "L1", device = "gG 16 A 80 kA", cable = "singles-pvc-cu 2.5 mm2", length = "5 m", load = "8 A", Iz = "24 A", selective = "total" }
)"),
                                                           {});
  bool seen = false;
  for (const Finding& finding : findings)
    if (finding.check == "selectivity" && finding.subject == "far/C1" && finding.upstream == "sub") {
      seen = true;
      CHECK(finding.verdict == Verdict::fails);
      CHECK(finding.selectivity == "none");
    }
  CHECK(seen);
}

TEST_CASE("A residual device without overcurrent release is not trusted above its breaking capacity", "[safety]") {
  // IEC 61008-1: 10 In, no less than 500 A. 4 kA for 40 ms is 640 kA2s, which would suit 6 mm2 of k 143.
  const Finding finding = judged(
      circuit(
          R"(use = "fixed", device = "RCD 40 A 30 mA A", cable = "singles-pvc-cu 2.5 mm2", length = "1 m", load = "8 A", Iz = "24 A")"),
      "disconnection time", "main/C1");
  CHECK(finding.value > 0.04);  // the fuse before it decides
}

TEST_CASE("A motor of unknown current leaves the breaking duty undecided", "[safety]") {
  const Finding finding = judged(
      circuit(
          R"(use = "fixed", motor = true, device = "D 20 A 20 kA", cable = "singles-pvc-cu 4 mm2", length = "10 m")"),
      "breaking capacity", "main/C1");
  CHECK(finding.verdict == Verdict::undecided);
}

TEST_CASE("The line-earth maximum alone bounds no other fault", "[safety]") {
  const Finding finding = judged(R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230 V"
earthing = "TN-S"
maximum = { line_earth = "1 kA" }
minimum = { Ze = "0.8 ohm", Zn = "0.2 ohm" }
[board.main]
[circuit.main]
C1 = { phases = "L1", device = "B 16 A 3 kA", cable = "singles-pvc-cu 2.5 mm2", length = "5 m", load = "8 A", Iz = "24 A" }
)",
                                 "breaking capacity", "main/C1");
  CHECK(finding.verdict == Verdict::undecided);
  CHECK(finding.needs == std::vector<std::string>{"grid.maximum.line_neutral"});
}

TEST_CASE("The ring rule holds for its devices and conductors only", "[safety]") {
  // BS 7671 433.1.204: 30 or 32 A devices, Iz of 20 A and more.
  const auto overload = [](const std::string& device, const std::string& Iz) {
    return judged(
               circuit("use = \"sockets\", ring = true, device = \"" + device +
                       " 30 mA A\", cable = \"flat-pvc-cu 2.5/1.5 mm2\", length = \"40 m\", load = \"20 A\", Iz = \"" +
                       Iz + "\""),
               "overload", "main/C1")
        .verdict;
  };
  CHECK(overload("B 32 A 16 kA", "20 A") == Verdict::meets);
  CHECK(overload("B 32 A 16 kA", "18 A") == Verdict::fails);
  CHECK(overload("B 63 A 16 kA", "27 A") == Verdict::fails);
}

TEST_CASE("A board in a TT installation without residual device before it is pointed out", "[safety]") {
  const std::string text = supply("TT") + R"([electrode.rod]
board = "main"
resistance = "100 ohm"
[board.sub]
[submain.S1]
from = "main"
to = "sub"
device = "C 32 A 16 kA 300 mA S A"
cable = "singles-pvc-cu 10 mm2"
length = "5 m"
)";
  CHECK(judged(text, "earth electrode", "main").verdict == Verdict::noted);
  CHECK(judged(text, "earth electrode", "sub").verdict == Verdict::meets);  // 100 ohm x 300 mA = 30 V
}

TEST_CASE("An empty board does not make its submain unloaded", "[safety]") {
  const Finding finding = judged(supply() + R"([board.sub]
[submain.S1]
from = "main"
to = "sub"
device = "gG 63 A 80 kA"
cable = "singles-pvc-cu 16 mm2"
length = "5 m"
Iz = "76 A"
)",
                                 "overload", "S1");
  CHECK(finding.verdict == Verdict::undecided);
  CHECK(finding.needs == std::vector<std::string>{"demand of S1"});
}

TEST_CASE("The unknown reactance of armour can leave a near verdict undecided", "[safety]") {
  const Finding finding = judged(R"(rules = "BS 7671:2018+A2"
[transformer.T]
feeds = "main"
voltage = "230/400 V"
rating = "1000 kVA"
uk = "5 %"
x_over_r = 5
fault_level = "250 MVA"
earthing = "TN-S"
[board.main]
[board.sub]
[submain.S1]
from = "main"
to = "sub"
device = "gG 400 A 80 kA"
cable = "swa-xlpe-cu-4c 240 mm2"
cpc = "armour"
length = "84 m"
Iz = "546 A"
demand = "300 A"
)",
                                 "disconnection time", "S1");
  CHECK(finding.verdict == Verdict::undecided);
}
