// SPDX-License-Identifier: Apache-2.0
#include <catch2/catch.hpp>
#include <sstream>

#include "made.h"
#include "plots/text/report.h"
#include "plots/text/tables.h"

using namespace sunder;
using Catch::Matchers::Contains;

namespace {

std::size_t place(const std::string& text, const std::string& part) {
  const std::size_t at = text.find(part);
  INFO("looking for: " << part << "\nin:\n" << text);
  REQUIRE(at != std::string::npos);
  return at;
}

}  // namespace

TEST_CASE("A check report names title, rules with edition, date and program first") {
  plots::TextStyle style;
  style.date = "2026-12-01";
  style.program = "sunder 0.1.0";
  const std::string text = plots::check_report(test::small_network(), test::findings(), style);
  CHECK(text.rfind("Tidewater boatyard\nRules BS 7671:2018+A2; calculated 2026-12-01 by sunder 0.1.0\n", 0) == 0);
  CHECK_THAT(text, Contains("2 boards, 1 submain, 1 circuit; state: normal"));
  CHECK_THAT(text, Contains("1 of 4 checks FAIL, 1 undecided, 1 met, 1 noted."));
}

TEST_CASE("Failures come first, then what is undecided, then boards, pairs, assumptions and cautions") {
  const std::string text = plots::check_report(test::small_network(), test::findings(), {});
  const std::size_t order[] = {place(text, "What fails"),   place(text, "What is undecided"),
                               place(text, "By board"),     place(text, "Selectivity, pair by pair"),
                               place(text, "Assumptions:"), place(text, "Data that needs confirming"),
                               place(text, "Cautions")};
  for (std::size_t i = 1; i < std::size(order); ++i) CHECK(order[i - 1] < order[i]);
}

TEST_CASE("A failure shows place, working, limit, governing case, clause and its remedies, holding ones first") {
  const std::string text = plots::check_report(test::small_network(), test::findings(), {});
  CHECK_THAT(text, Contains("FAILS     workshop/W2  disconnection time  (boatyard.toml:22:1)\n"));
  CHECK_THAT(text, Contains("1.62 ohm lets 135 A flow; C 16 A needs 160 A"));
  CHECK_THAT(text, Contains("found never, limit "));
  CHECK_THAT(text, Contains("because the device is not sure to operate"));
  CHECK_THAT(text, Contains("line-earth fault; minimum condition; state normal; Table 41.1"));
  CHECK_THAT(text, Contains("earth-fault loop: Zs = Ze + R1 + R2 = 0.35 + 1.27 = 1.62 ohm [boatyard.toml:22:8]"));
  const std::size_t holds = place(text, "mend:  shorten W2 to 31.4 m: then every check is met");
  const std::size_t tried = place(text, "tried: use a 4 mm2 cable: not enough alone, voltage drop of W2 fails");
  CHECK(holds < tried);
}

TEST_CASE("Two key steps are shown, and all of them with the whole working") {
  const auto findings = test::findings();
  const std::string brief = plots::check_report(test::small_network(), findings, {});
  CHECK_THAT(brief, !Contains("own conductors"));
  CHECK_THAT(brief, !Contains("What is met or noted"));
  plots::TextStyle style;
  style.every_step = true;
  const std::string whole = plots::check_report(test::small_network(), findings, style);
  CHECK_THAT(whole, Contains("own conductors: R1 + R2 = 0.6 + 0.67 = 1.27 ohm"));
  CHECK_THAT(whole, Contains("What is met or noted"));
}

TEST_CASE("What is undecided says what it needs") {
  const std::string text = plots::check_report(test::small_network(), test::findings(), {});
  CHECK_THAT(text, Contains("UNDECIDED S1  breaking capacity  (boatyard.toml:12:1)"));
  CHECK_THAT(text, Contains("needs Icn of the device of S1"));
}

TEST_CASE("Findings are counted under the board of their subject, a submain under the one that feeds it") {
  const std::string text = plots::check_report(test::small_network(), test::findings(), {});
  std::istringstream stream(text.substr(place(text, "By board")));
  std::string heading, columns, rule, intake, workshop;
  std::getline(stream, heading);
  std::getline(stream, columns);
  std::getline(stream, rule);
  std::getline(stream, intake);
  std::getline(stream, workshop);
  std::istringstream first(intake), second(workshop);
  std::string name;
  int fail = -1, undecided = -1, meet = -1, noted = -1;
  first >> name >> fail >> undecided >> meet >> noted;
  CHECK(name == "intake");
  CHECK((fail == 0 && undecided == 1 && meet == 0 && noted == 0));
  second >> name >> fail >> undecided >> meet >> noted;
  CHECK(name == "workshop");
  CHECK((fail == 1 && undecided == 0 && meet == 1 && noted == 1));
  CHECK_THAT(workshop, Contains("+20.0 %") && Contains("workshop/W2, voltage drop"));
}

TEST_CASE("Assumptions are listed with their place, low-confidence data and cautions always") {
  const std::string text = plots::check_report(test::small_network(), test::findings(), {});
  CHECK_THAT(text, Contains("workshop/W2: pf taken as 1 (boatyard.toml:22:3)"));
  CHECK_THAT(text, Contains("voltage drop rests on values of low confidence for workshop/W2"));
  for (const std::string& caution : plots::cautions()) CHECK_THAT(text, Contains(caution));
}

TEST_CASE("No line of a check report is wider than the terminal") {
  for (const int width : {80, 100, 140}) {
    plots::TextStyle style;
    style.width = width;
    style.every_step = true;
    std::istringstream stream(plots::check_report(test::small_network(), test::findings(), style));
    for (std::string line; std::getline(stream, line);) {
      CAPTURE(width, line);
      CHECK(plots::display_width(line) <= width);
    }
  }
}

TEST_CASE("A clean network is said to be met in one line") {
  auto findings = test::findings();
  findings = {findings[3]};
  const std::string text = plots::check_report(test::small_network(), findings, {});
  CHECK_THAT(text, Contains("All 1 checks are met, 0 noted.") && !Contains("What fails"));
}

TEST_CASE("Fault currents of a node stand side by side for maximum and minimum") {
  const solver::FaultRow most{"normal", solver::Condition::maximum,
                              "intake", solver::Fault::line_earth,
                              "L1-PE",  16000,
                              30000,    2.5,
                              0.0159,   254,
                              true,     ""};
  solver::FaultRow least = most;
  least.condition = solver::Condition::minimum;
  least.current = 624;
  least.peak = solver::kNone;
  const std::string text = plots::faults_report(test::small_network(), {most, least}, {});
  CHECK_THAT(text, Contains("State normal"));
  CHECK_THAT(text, Contains("16 kA") && Contains("30 kA") && Contains("624 A"));
  least.known = false;
  least.needs = "Ze of grid";
  CHECK_THAT(plots::faults_report(test::small_network(), {most, least}, {}),
             Contains("not known") && Contains("intake, minimum line-earth: needs Ze of grid"));
}

TEST_CASE("The schedule fits 100 columns and shows what is missing as a dash") {
  solver::ScheduleRow row;
  row.address = "workshop/W2";
  row.serves = "bench sockets along the far wall of the joinery shop";
  row.phases = "L2 N";
  row.device = "B 32 A 6 kA 30 mA A";
  row.cable = "flat-pvc-cu 2.5/1.5 mm2";
  row.cpc = "built in";
  row.length = 54;
  row.In = 32;
  row.time = 0.04;
  row.limit = 0.4;
  row.verdict = solver::Verdict::meets;
  const std::string text = plots::schedule_report(test::small_network(), {row, row}, {});
  std::istringstream stream(text);
  for (std::string line; std::getline(stream, line);) CHECK(plots::display_width(line) <= 100);
  CHECK_THAT(text, Contains("workshop/W2") && Contains("54 m") && Contains(" - "));
}

TEST_CASE("A sweep report tells each flip with its value and direction, and the undecided stretches") {
  const std::string text = plots::sweep_report(test::small_network(), test::sweep(), {});
  CHECK_THAT(text, Contains("S1.length from 50 m to 150 m, 5 values"));
  CHECK_THAT(text, Contains("83.33333 m") && Contains("meets") && Contains("->") && Contains("fails"));
  CHECK_THAT(text, Contains("100 m") && Contains("110 m") && Contains("let-through of the device of S1"));
  solver::Sweep quiet = test::sweep();
  quiet.flips.clear();
  quiet.undecided.clear();
  CHECK_THAT(plots::sweep_report(test::small_network(), quiet, {}), Contains("nowhere in this range"));
}
