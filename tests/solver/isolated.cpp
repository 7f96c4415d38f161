// SPDX-License-Identifier: Apache-2.0
// IT installations by hand: the first fault and the rule for the second.
#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>
#include <string>

#include "solver/study.h"
#include "tests/solver/reading.h"

namespace {

using namespace sunder;
using solver::Finding;
using solver::Verdict;
using tests::find;
using tests::read;

// Conductors of 1.25 mohm/m at 70 degC (alpha 0.00393 of the rule set's copper is found by the test itself).
std::string isolated(const std::string& star, const std::string& phases, const std::string& more = "") {
  return R"(rules = "IEC 60364"
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = "IT"
maximum = { z1 = "0.1 ohm", z0 = "0.1 ohm" }
minimum = { z1 = "0.1 ohm", z0 = "0.1 ohm" }
)" + star +
         R"(
[cable.wire]
material = "copper"
insulation = "pvc70"
cores = 5
sizes = [{ size = "10 mm2", r20 = "1.83 mohm/m", x = "0 mohm/m" }]
[board.main]
[circuit.main]
C1 = { phases = ")" +
         phases +
         R"(", use = "fixed", device = "B 16 A 10 kA class 3", cable = "wire 10 mm2", length = "50 m", load = "10 A", Iz = "40 A" }
)" + more;
}

const std::string kRod = "[electrode.rod]\nboard = \"main\"\nresistance = \"20 ohm\"\n";

Finding judged(const std::string& text, const std::string& check, const std::string& subject) {
  return find(solver::run_checks(read(text), {}), check, subject);
}

}  // namespace

// IEC 60364-4-41, 411.6.4: 2 Ia Zs <= U between lines, and with the neutral distributed 2 Ia Z's <= U0,
// Z's of neutral and protective conductor; c_min as for every least current.
TEST_CASE("The second fault of an IT installation meets twice its loop", "[isolated]") {
  const models::Network network = read(isolated("star_point = \"1000 ohm\"", "L1 L2 L3", kRod));
  const double c = network.rules.c_min;
  const double one = 1.83e-3 * 50 * (1 + network.rules.alpha_copper * 50);
  const Finding lines = find(solver::run_checks(network, {}), "disconnection time", "main/C1");
  REQUIRE(lines.steps.size() >= 2);
  CHECK(lines.steps[0].result == Approx(2 * (0.1 + 2 * one)).epsilon(1e-9));
  CHECK(lines.steps[1].result == Approx(c * 400 / (2 * (0.1 + 2 * one))).epsilon(1e-9));
  const Finding neutral =
      judged(isolated("star_point = \"1000 ohm\"", "L1 L2 L3 N", kRod), "disconnection time", "main/C1");
  REQUIRE(neutral.steps.size() >= 2);
  CHECK(neutral.steps[1].result ==
        Approx(std::min(c * 400 / (2 * (0.1 + 2 * one)), c * 230 / (2 * (2 * one)))).epsilon(1e-9));
}

// 411.6.2: RA Id <= 50 V. Id through the star impedance, the electrode and the source's line in series.
TEST_CASE("The first fault of an IT installation lifts its electrode by RA Id", "[isolated]") {
  const Finding finding = judged(isolated("star_point = \"1000 ohm\"", "L1 L2 L3", kRod), "first fault", "main");
  CHECK(finding.verdict == Verdict::meets);
  CHECK(finding.value == Approx(20 * 1.1 * 230 / (1000 + 20 + 0.1)).epsilon(1e-6));
  const Finding low = judged(isolated("star_point = \"50 ohm\"", "L1 L2 L3", kRod), "first fault", "main");
  CHECK(low.verdict == Verdict::fails);
}

// Ic = 3 w C U0 with C of one line: w C U0 with that of all lines together.
TEST_CASE("The capacitance of an IT network makes the current of its first fault", "[isolated]") {
  const Finding finding = judged(isolated("capacitance = \"6 uF\"", "L1 L2 L3", kRod), "first fault", "main");
  const double reactance = 1 / (2 * std::numbers::pi * 50 * 6e-6);
  CHECK(finding.value == Approx(20 * 1.1 * 230 / std::hypot(20.1, reactance)).epsilon(1e-6));
}

TEST_CASE("Without star impedance and capacitance the first fault is undecided and says what is missing",
          "[isolated]") {
  const Finding finding = judged(isolated("", "L1 L2 L3", kRod), "first fault", "main");
  CHECK(finding.verdict == Verdict::undecided);
  CHECK(finding.needs == std::vector<std::string>{"capacitance or star_point of grid"});
  const Finding unearthed = judged(isolated("star_point = \"1000 ohm\"", "L1 L2 L3"), "first fault", "main");
  CHECK(unearthed.verdict == Verdict::undecided);
  CHECK(unearthed.needs == std::vector<std::string>{"electrode of main"});
}
