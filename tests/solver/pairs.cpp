// SPDX-License-Identifier: Apache-2.0
#include "solver/selectivity.h"
#include "tests/solver/reading.h"

using namespace sunder;
using Catch::Matchers::WithinRel;
using solver::Selectivity;
using tests::read;
using tests::supply;

namespace {

// Two devices, resolved through a netlist: `up` on a submain, `down` on a circuit.
models::Network pair(const std::string& up, const std::string& down, const std::string& demanded = "") {
  return read(supply() + R"([board.sub]
[submain.S1]
from = "main"
to = "sub"
device = ")" + up +
              R"("
cable = "singles-pvc-cu 25 mm2"
length = "10 m"
[circuit.sub]
C1 = { use = "fixed", phases = "L1", device = ")" +
              down + R"(", cable = "singles-pvc-cu 6 mm2", length = "15 m", load = "20 A", Iz = "40 A")" + demanded +
              " }\n");
}

solver::PairVerdict verdict(const models::Network& network, double available) {
  return solver::overcurrent_selectivity(network.circuits[0].device, network.submains[0].device, available, 1.4);
}

}  // namespace

TEST_CASE("Curves of a C 63 A above a B 32 A prove nothing above 315 A", "[selectivity]") {
  // IEC 60898-1: type C does not operate at once up to 5 In = 315 A. In the overload zone its gates are
  // wide: up to 1.13 x 63 A = 71.19 A it does not operate, above that "not before 1 s" is all it assures.
  const solver::PairVerdict result = verdict(pair("C 63 A 10 kA", "B 32 A 10 kA"), 6000);
  CHECK(result.selectivity == Selectivity::partial);
  CHECK_THAT(result.limit, WithinRel(1.13 * 63, 1e-9));
}

TEST_CASE("Makers' points of a C 63 A decide up to its least instantaneous current", "[selectivity]") {
  const models::Network network = read(supply() + R"([device.slow]
kind = "breaker"
In = "63 A"
Icn = "10 kA"
I2 = "91 A"
latest = [["95 A", "9000 s"], ["300 A", "100 s"], ["630 A", "10 s"], ["630 A", "0.1 s"]]
earliest = [["85 A", "7200 s"], ["190 A", "70 s"], ["315 A", "5 s"], ["315 A", "1 ms"]]
source = "invented for this test"
[board.sub]
[submain.S1]
from = "main"
to = "sub"
device = "slow"
cable = "singles-pvc-cu 25 mm2"
length = "10 m"
[circuit.sub]
C1 = { use = "fixed", phases = "L1", device = "B 32 A 10 kA", cable = "singles-pvc-cu 6 mm2", length = "15 m", load = "20 A", Iz = "40 A" }
)");
  const solver::PairVerdict result =
      solver::overcurrent_selectivity(network.circuits[0].device, network.submains[0].device, 6000, 1.4);
  CHECK(result.selectivity == Selectivity::partial);
  CHECK_THAT(result.limit, WithinRel(315.0, 1e-9));
}

TEST_CASE("gG links 1.6 : 1 apart are selective up to any current", "[selectivity]") {
  // IEC 60269-1: the gates and I2t limits are built for it; stated by makers' guidance.
  CHECK(verdict(pair("gG 80 A 50 kA", "gG 50 A 50 kA"), 20000).selectivity == Selectivity::total);
}

TEST_CASE("gG links one step apart are not proven selective", "[selectivity]") {
  CHECK(verdict(pair("gG 63 A 50 kA", "gG 50 A 50 kA"), 20000).selectivity != Selectivity::total);
}

TEST_CASE("Selectivity is noted unless demanded, and demanded it fails or is undecided", "[selectivity]") {
  const auto judged = [](const models::Network& network) {
    return tests::find(solver::run_checks(network, {}), "selectivity", "sub/C1");
  };
  CHECK(judged(pair("C 63 A 10 kA", "B 32 A 10 kA")).verdict == solver::Verdict::noted);
  CHECK(judged(pair("C 63 A 10 kA", "B 32 A 10 kA", R"(, selective = "total")")).verdict == solver::Verdict::undecided);
  CHECK(judged(pair("C 63 A 10 kA", "B 32 A 10 kA", R"(, selective = "70 A")")).verdict == solver::Verdict::meets);
}

TEST_CASE("A residual device above a circuit that has none is not selective for line-earth faults", "[selectivity]") {
  const solver::Finding finding =
      tests::find(solver::run_checks(pair("C 63 A 10 kA 100 mA S A", "B 32 A 10 kA"), {}), "selectivity", "sub/C1");
  CHECK(finding.selectivity == "none");
  CHECK_THAT(finding.limit_A, WithinRel(0.05, 1e-12));
}

TEST_CASE("A delayed 100 mA device above a 30 mA one is selective for residual currents", "[selectivity]") {
  const models::Network network = pair("C 63 A 10 kA 100 mA S A", "B 32 A 10 kA 30 mA A");
  const solver::PairVerdict residual =
      solver::residual_selectivity(network.circuits[0].device, network.submains[0].device, 500);
  CHECK(residual.selectivity == Selectivity::total);
  const solver::PairVerdict reversed =
      solver::residual_selectivity(network.submains[0].device, network.circuits[0].device, 500);
  CHECK(reversed.selectivity == Selectivity::none);
}
