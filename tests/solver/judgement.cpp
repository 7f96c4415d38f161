// SPDX-License-Identifier: Apache-2.0
#include <algorithm>
#include <cmath>

#include "plots/text/help.h"
#include "plots/text/report.h"
#include "solver/checks/check.h"
#include "solver/judge.h"
#include "tests/solver/reading.h"

using namespace sunder;
using Catch::Matchers::WithinRel;
using solver::Finding;
using solver::Verdict;
using tests::find;
using tests::read;
using tests::supply;

namespace {

std::string circuit(const std::string& keys) {
  return supply() + "[circuit.main]\nC1 = { phases = \"L1\", " + keys + " }\n";
}

Finding judged(const std::string& check, const std::string& keys) {
  return find(solver::run_checks(read(circuit(keys)), {}), check, "main/C1");
}

const std::string kRadial =
    R"(use = "fixed", device = "B 32 A 6 kA class 3", cable = "singles-pvc-cu 6 mm2", Iz = "40 A", load = "25 A", pf = 0.95, )";

// Stands for a check that somebody adds: one function, one line in the list.
std::vector<Finding> judge_dummy(const solver::Situation& s) {
  Finding finding = solver::begin_finding(s, "dummy");
  finding.verdict = Verdict::noted;
  return {finding};
}

}  // namespace

TEST_CASE("Missing data is undecided and names what is missing", "[checks]") {
  struct Row {
    const char* check;
    const char* keys;
    const char* need;
  };
  const auto row = GENERATE(values<Row>({
      {"breaking capacity", R"(device = "B 32 A", cable = "singles-pvc-cu 6 mm2", length = "10 m")",
       "Icn of the device of main/C1"},
      {"overload", R"(device = "B 32 A 6 kA", cable = "singles-pvc-cu 6 mm2", length = "10 m", load = "20 A")",
       "Iz of main/C1"},
      {"overload", R"(device = "B 32 A 6 kA", cable = "singles-pvc-cu 6 mm2", length = "10 m", Iz = "40 A")",
       "load of main/C1"},
      {"voltage drop", R"(device = "B 32 A 6 kA", cable = "singles-pvc-cu 6 mm2", length = "10 m")", "load of main/C1"},
      {"conductor heating", R"(device = "B 32 A 6 kA", cable = "singles-pvc-cu 2.5 mm2", length = "10 m")",
       "let-through (energy class or points) of the device of main/C1"},
  }));
  CAPTURE(row.check, row.keys);
  const Finding finding = judged(row.check, row.keys);
  CHECK(finding.verdict == Verdict::undecided);
  REQUIRE_FALSE(finding.needs.empty());
  CHECK(std::find(finding.needs.begin(), finding.needs.end(), row.need) != finding.needs.end());
}

TEST_CASE("A missing line-neutral minimum of a TN-S supply leaves clearance undecided", "[checks]") {
  const models::Network network = read(R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
maximum = { three_phase = "9 kA" }
minimum = { Ze = "0.8 ohm" }
[board.main]
[circuit.main]
C1 = { use = "fixed", phases = "L1", device = "B 10 A 10 kA class 3", cable = "singles-pvc-cu 2.5 mm2", length = "20 m", load = "8 A", Iz = "24 A" }
)");
  const Finding finding = find(solver::run_checks(network, {}), "fault clearance", "main/C1");
  CHECK(finding.verdict == Verdict::undecided);
  CHECK(finding.needs == std::vector<std::string>{"grid.minimum.Zn"});
}

namespace {

// Resistive, so that loops add as numbers.
std::string parallel(int n) {
  return R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-C-S"
maximum = { three_phase = "5 kA", power_factor = 0.9 }
minimum = { Ze = "0.35 ohm", power_factor = 1 }
[cable.wire]
material = "copper"
insulation = "pvc70"
cores = 3
sizes = [{ size = "6 mm2", r20 = "3.08 mohm/m", x = "0 mohm/m" }]
[board.main]
[circuit.main]
C1 = { phases = "L1", use = "fixed", device = "B 32 A 6 kA class 3", cable = "wire 6 mm2", Iz = "40 A", load = "25 A", length = "40 m", in_parallel = )" +
         std::to_string(n) + " }\n";
}

}  // namespace

TEST_CASE("The worst place inside three parallel cables is before their far end", "[checks]") {
  // At x = m/2, m = n/(n - 1), the loop is n m/4 of what all together have: 9/8 for three; for two the
  // worst place is the far end itself (law of two ways in parallel).
  auto ohms = [](int n) {
    const Finding finding = find(solver::run_checks(read(parallel(n)), {}), "fault clearance", "main/C1");
    REQUIRE_FALSE(finding.steps.empty());
    return 0.95 * 230 / finding.steps.front().result - 0.35;
  };
  const double one = ohms(1);
  CHECK(ohms(2) == Approx(one / 2).epsilon(1e-6));
  CHECK(ohms(3) == Approx(one / 3 * 9 / 8).epsilon(1e-6));
  CHECK(ohms(4) == Approx(one / 4 * 4 / 3).epsilon(1e-6));
}

TEST_CASE("Heating and clearance of parallel cables are decided", "[checks]") {
  for (const char* check : {"conductor heating", "fault clearance"})
    for (const int n : {2, 3})
      CHECK(find(solver::run_checks(read(parallel(n)), {}), check, "main/C1").verdict == Verdict::meets);
}

TEST_CASE("The disconnection margin is zero at the loop that the rules tabulate", "[checks]") {
  // BS 7671 table 41.3: B 32 A 1.37 ohm (0.95 x 230 / 160 = 1.3656).
  const models::Network network = read(circuit(kRadial + R"(length = "10 m")"));
  solver::VaryRequest request;
  request.key = "main/C1.length";
  request.from = "10 m";
  request.to = "500 m";
  const auto varied = solver::vary(network, request, {});
  REQUIRE(std::holds_alternative<solver::Sweep>(varied));
  double at = 0;
  for (const solver::Flip& flip : std::get<solver::Sweep>(varied).flips)
    if (flip.check == "disconnection time") at = flip.at;
  REQUIRE(at > 0);
  models::Network flipped = network;
  flipped.circuits[0].length.value = at;
  for (const solver::FaultRow& row : solver::solve_faults(flipped))
    if (row.node == "main/C1" && row.fault == solver::Fault::line_earth && row.condition == solver::Condition::minimum)
      CHECK_THAT(row.loop_ohms, WithinRel(0.95 * 230.0 / 160.0, 2e-6));
}

TEST_CASE("A remedy that holds meets every check of its subject", "[remedies]") {
  const models::Network network = read(circuit(kRadial + R"(length = "160 m")"));
  const std::vector<Finding> findings = solver::run_checks(network, {});
  const Finding drop = find(findings, "voltage drop", "main/C1");
  REQUIRE(drop.verdict == Verdict::fails);
  REQUIRE_FALSE(drop.remedies.empty());
  for (const solver::Remedy& remedy : drop.remedies) {
    if (remedy.key != "main/C1.length") continue;
    models::Network mended = network;
    mended.circuits[0].length.value = remedy.value;
    bool all = true;
    for (const Finding& finding : solver::judge_network(mended))
      if (finding.subject == "main/C1")
        all = all && (finding.verdict == Verdict::meets || finding.verdict == Verdict::noted);
    CHECK(all == remedy.holds);
    CHECK(find(solver::judge_network(mended), "voltage drop", "main/C1").verdict == Verdict::meets);
  }
}

TEST_CASE("Motors above one per cent raise the breaking duty by five times their current", "[checks]") {
  // IEC 60909-0: a low-voltage group of asynchronous motors starts with 5 times its rated current.
  const std::string motor = kRadial + R"(length = "10 m", motor = true)";
  const double without = judged("breaking capacity", kRadial + R"(length = "10 m")").value;
  const Finding small = judged("breaking capacity", motor);  // 25 A is less than 1 % of 16 kA
  CHECK(small.value == without);
  const std::string weak = [] {
    std::string text = circuit(kRadial + R"(length = "10 m", motor = true)");
    const std::size_t at = text.find("16 kA");
    return text.replace(at, 5, "2 kA");
  }();
  const Finding large = find(solver::run_checks(read(weak), {}), "breaking capacity", "main/C1");
  CHECK_THAT(large.value, WithinRel(2000.0 + 5 * 25.0, 1e-9));
}

TEST_CASE("A check added in one place is judged, listed and printed", "[checks][gate]") {
  solver::checks().push_back(
      {{"dummy", "nothing", "everything", "nothing"}, [](const solver::Situation&) { return true; }, judge_dummy});
  const models::Network network = read(circuit(kRadial + R"(length = "10 m")"));
  const std::vector<Finding> findings = solver::run_checks(network, {});
  const std::vector<solver::CheckInfo> infos = solver::list_checks();
  solver::checks().pop_back();
  CHECK(find(findings, "dummy", "main/C1").verdict == Verdict::noted);
  CHECK(std::any_of(infos.begin(), infos.end(), [](const solver::CheckInfo& info) { return info.name == "dummy"; }));
  CHECK(plots::help_text(plots::help_checks(infos), {}).find("dummy") != std::string::npos);
  CHECK(plots::check_json(network, findings).find("\"dummy\"") != std::string::npos);
  CHECK(plots::check_report(network, findings, {}).find("dummy") != std::string::npos);
}

TEST_CASE("Every check says what it compares, what it applies to and what it needs", "[checks][gate]") {
  for (const solver::CheckInfo& info : solver::list_checks()) {
    CAPTURE(info.name);
    CHECK_FALSE(info.compares.empty());
    CHECK_FALSE(info.applies.empty());
    CHECK_FALSE(info.needs.empty());
  }
}
