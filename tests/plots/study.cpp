// SPDX-License-Identifier: Apache-2.0
// Faults in detail, as text and as JSON.
#include <catch2/catch.hpp>
#include <cmath>
#include <sstream>

#include "made.h"
#include "plots/text/fields.h"
#include "plots/text/report.h"
#include "plots/text/tables.h"
#include "tests/support/json.h"

using namespace sunder;
using Catch::Matchers::Contains;
using support::Json;

namespace {

std::string report(const solver::FaultQuery& query, const std::vector<solver::FaultDetail>& faults, int width = 100) {
  plots::TextStyle style;
  style.width = width;
  return plots::fault_study_report(test::small_network(), query, faults, style);
}

// The line of `text` that begins with `start` behind its blanks, its words one blank apart.
std::string line_from(const std::string& text, const std::string& start) {
  std::istringstream lines(text);
  for (std::string line; std::getline(lines, line);) {
    std::istringstream stream(line);
    std::string words;
    for (std::string word; stream >> word;) words += (words.empty() ? "" : " ") + word;
    if (words.rfind(start, 0) == 0) return words;
  }
  return "";
}

}  // namespace

TEST_CASE("A fault in detail says place, conductors, condition, state, voltage, current, peak and loop") {
  solver::FaultQuery query;
  query.currents = true;
  const std::string text = report(query, test::fault_details());
  CHECK(text.rfind("Tidewater boatyard\nFaults in detail (r.m.s., symmetrical); rules BS 7671:2018+A2\n", 0) == 0);
  CHECK_THAT(text, Contains("workshop\n  line-earth fault, L1-PE; maximum condition; state normal\n"
                            "  1.2 kA, driven by 253 V through a loop of 0.2108 ohm, X/R 0.55; peak 1.85 kA\n"));
  CHECK_THAT(text, Contains("minimum condition; state normal\n  not known: needs Ze of grid\n"));
}

TEST_CASE("Currents stand by element and conductor, with the device below and what is only rounding as 0") {
  solver::FaultQuery query;
  query.currents = true;
  const std::string text = report(query, test::fault_details());
  CHECK(line_from(text, "grid") == "grid grid -> intake 1200 0 0 0 1200 1200");
  CHECK(line_from(text, "BS 88-2") == "BS 88-2 160 A 80 kA");
  CHECK(line_from(text, "S1") == "S1 intake -> workshop 1200 0 0 0 1200 1200");
  auto faults = test::fault_details();
  faults[0].elements.push_back(faults[0].elements[1]);
  faults[0].elements.back().element = "S2";
  faults[0].elements.back().amps = {1e-9, {}, {}, {}, 1e-9};
  CHECK_THAT(report(query, faults), Contains("  nothing in S2\n") && !Contains("S2  "));
  CHECK_THAT(text, Contains("residual: sum of lines and neutral") && !Contains("Caution"));
}

TEST_CASE("Touch voltages stand by board with the greatest between two, and never without their caution") {
  solver::FaultQuery query;
  query.touch = true;
  auto faults = test::fault_details();
  faults[0].touch.push_back({"jetty", solver::kNone, 12});
  const std::string text = report(query, faults);
  CHECK(line_from(text, "intake 0.0") == "intake 0.0 3.2");
  CHECK(line_from(text, "workshop 1") == "workshop 118.3 121.5");
  CHECK(line_from(text, "jetty") == "jetty 12.0 -");
  CHECK_THAT(text, Contains("greatest between two boards: 118.3 V, intake and workshop\n"));
  std::string flat = text;  // the caution is broken over lines
  for (char& c : flat) c = c == '\n' ? ' ' : c;
  CHECK_THAT(flat, Contains(std::string("Caution: ") + plots::touch_caution()));
  CHECK_THAT(plots::touch_caution(), Contains("does not replace measurement by a competent person"));
}

TEST_CASE("Without currents and touch voltages each fault is one line under its state") {
  auto faults = test::fault_details();
  faults[0].elements.clear();
  faults[0].touch.clear();
  faults.push_back(faults[0]);
  faults.back().row.state = "generator";
  const std::string text = report({}, faults);
  CHECK(line_from(text, "workshop") == "workshop");
  CHECK(line_from(text, "line-earth L1-PE max") == "line-earth L1-PE maximum 253 V 1.2 kA 1.85 kA 0.55 0.2108");
  CHECK(line_from(text, "line-earth L1-PE min") == "line-earth L1-PE minimum 253 V not known");
  CHECK(line_from(text, "?") == "? workshop, minimum line-earth: needs Ze of grid");
  CHECK_THAT(text, Contains("State normal\n") && Contains("State generator\n"));
  solver::FaultQuery query;
  query.fault = solver::Fault::line_earth;
  const std::string one = report(query, faults);
  CHECK_THAT(one, Contains("State normal: line-earth fault\n") && Contains("State generator: line-earth fault\n"));
  CHECK(line_from(one, "workshop L1-PE") == "workshop L1-PE maximum 253 V 1.2 kA 1.85 kA 0.55 0.2108");
}

TEST_CASE("The resistance of the fault is told, and what each line delivers where that differs") {
  solver::FaultQuery query;
  query.currents = true;
  query.through_ohms = 0.1;
  auto faults = test::fault_details();
  faults[0].row.fault = solver::Fault::two_lines_earth;
  faults[0].row.phases = "L1-L2-PE";
  faults[0].into_fault = {1200, -1100, {}, {}, -100};
  const std::string text = report(query, faults);
  CHECK_THAT(text, Contains("each through 0.1 ohm of its own") && Contains("fault of two lines and earth, L1-L2-PE") &&
                       Contains("into the fault: L1 1.2 kA, L2 1.1 kA, PE 100 A"));
  CHECK_THAT(report({}, test::fault_details()), !Contains("of its own") && !Contains("into the fault"));
}

TEST_CASE("A fault at two places names both") {
  solver::FaultQuery query;
  query.at = "workshop";
  query.pair = "intake";
  query.currents = true;
  CHECK_THAT(report(query, test::fault_details()),
             Contains("workshop and intake\n  a line to earth at each of two places, L1-PE; maximum"));
  query.currents = false;
  CHECK_THAT(report(query, test::fault_details()), Contains("State normal: a line to earth at each of two places\n") &&
                                                       Contains("\nworkshop and intake  L1-PE"));
}

TEST_CASE("No line of a fault report is wider than the terminal") {
  auto faults = test::fault_details();
  faults[0].row.node = "workshop north annexe/W17 compressor@37.5%";
  faults[0].row.fault = solver::Fault::two_lines_earth;
  faults[0].row.phases = "L1-L2-PE";
  faults[0].elements[1].element = "W17 compressor of workshop north annexe";
  faults[0].elements[1].from = "workshop north annexe";
  faults[0].elements[1].to = "workshop north annexe/W17 compressor";
  faults[0].elements[1].device = "B 32 A 6 kA 30 mA A class 3";
  solver::FaultQuery query;
  for (const int width : {90, 100, 140}) {
    for (const bool tables : {false, true}) {
      query.currents = query.touch = tables;
      std::istringstream stream(report(query, faults, width));
      for (std::string line; std::getline(stream, line);) {
        CAPTURE(width, line);
        CHECK(plots::display_width(line) <= width);
      }
    }
  }
}

TEST_CASE("sunder.fault-study/1 has the keys that others build on, phasors as amps and degrees") {
  solver::FaultQuery query;
  query.at = "workshop";
  query.fault = solver::Fault::line_earth;
  query.through_ohms = 0.1;
  query.currents = query.touch = true;
  const Json json = Json::parse(plots::fault_study_json(test::small_network(), query, test::fault_details()));
  CHECK(json["format"] == "sunder.fault-study/1");
  CHECK(json["asked"]["at"] == "workshop");
  CHECK(json["asked"]["fault"] == "line-earth");
  CHECK(json["asked"]["through_ohm"] == 0.1);
  CHECK(json["asked"]["touch"].flag());
  REQUIRE(json["faults"].size() == 2);
  const Json& fault = json["faults"][0];
  CHECK(fault["node"] == "workshop");
  CHECK(fault["phases"] == "L1-PE");
  CHECK(fault["current_A"] == 1200);
  CHECK(fault["driving_V"] == 253);
  CHECK(fault["peak_A"] == 1850);
  CHECK(std::fabs(fault["into_fault"]["degrees"]["L1"].number() + 28.6479) < 1e-3);  // -0.5 rad
  CHECK(fault["into_fault"]["degrees"]["N"].is_null());
  const Json& run = fault["elements"][1];
  CHECK(run["element"] == "S1");
  CHECK(run["from"] == "intake");
  CHECK(run["to"] == "workshop");
  CHECK(std::fabs(run["amps"]["PE"].number() - 1200) < 1e-9);
  CHECK(std::fabs(run["degrees"]["PE"].number() - 151.3521) < 1e-3);  // half a turn further
  CHECK(run["residual_A"] == 1200);
  CHECK(fault["touch"][1]["to_terminal_V"] == 118.26);
  CHECK(fault["touch"][1]["to_earth_V"] == 121.46);
  CHECK(fault["between_V"] == 118.26);
  CHECK(fault["between_boards"] == "intake and workshop");
  CHECK(json["cautions"][0] == plots::touch_caution());
}

TEST_CASE("What is not known or not asked is null or empty in the JSON of a fault in detail") {
  const Json json = Json::parse(plots::fault_study_json(test::small_network(), {}, test::fault_details()));
  CHECK(json["asked"]["fault"].is_null());
  CHECK(json["asked"]["state"] == "");
  const Json& fault = json["faults"][1];
  CHECK(fault["current_A"].is_null());
  CHECK(fault["into_fault"].is_null());
  CHECK(fault["reason"] == "needs Ze of grid");
  CHECK(fault["elements"].size() == 0);
  CHECK(fault["between_V"].is_null());
  CHECK(json["cautions"].size() == 0);
}

TEST_CASE("Every key of a fault in detail is explained in the description of JSON, and the other way round") {
  solver::FaultQuery query;
  const Json json = Json::parse(plots::fault_study_json(test::small_network(), query, test::fault_details()));
  const Json& fault = json["faults"][0];
  std::size_t asked = 0, detail = 0, element = 0, touch = 0;
  const auto count = [](const plots::StructHelp& part, const Json& record, std::size_t& n) {
    for (const plots::FieldHelp& field : part.fields) {
      CAPTURE(field.key);
      CHECK(record.contains(field.key.c_str()));
      CHECK_FALSE(field.meaning.empty());
      ++n;
    }
  };
  for (const plots::StructHelp& part : plots::describe_json()) {
    if (part.format != "sunder.fault-study/1") continue;
    if (part.place == "asked") count(part, json["asked"], asked);
    if (part.place == "faults[]" || part.place == "faults[], besides") count(part, fault, detail);
    if (part.place == "faults[].elements[]") count(part, fault["elements"][0], element);
    if (part.place == "faults[].touch[]") count(part, fault["touch"][0], touch);
  }
  CHECK(asked == json["asked"].size());
  CHECK(detail == fault.size());
  CHECK(element == fault["elements"][0].size());
  CHECK(touch == fault["touch"][0].size());
}
