// SPDX-License-Identifier: Apache-2.0
// JSON and CSV.
#include <catch2/catch.hpp>
#include <limits>

#include "made.h"
#include "plots/figures/charts.h"
#include "plots/text/json.h"
#include "plots/text/report.h"
#include "tests/support/json.h"

using namespace sunder;
using support::Json;

TEST_CASE("sunder.check/1 has the keys that others build on") {
  const Json json = Json::parse(plots::check_json(test::small_network(), test::findings()));
  CHECK(json.at("format") == "sunder.check/1");
  REQUIRE(json.at("findings").size() == 4);
  for (const char* key : {"check", "subject", "verdict", "value", "limit", "unit", "margin", "state", "condition",
                          "fault", "clause", "confidence", "needs", "steps", "remedies"}) {
    CAPTURE(key);
    CHECK(json.at("findings")[0].contains(key));
  }
  CHECK(json["findings"][0]["verdict"] == "fails");
  CHECK(json["findings"][0]["limit"] == 0.4);
  CHECK(json["findings"][0]["unit"] == "s");
  CHECK(json["findings"][1]["needs"][0] == "Icn of the device of S1");
  CHECK(json["counts"]["fails"] == 1);
}

TEST_CASE("What never operates or does not exist is null with a reason") {
  auto findings = test::findings();
  const Json json = Json::parse(plots::check_json(test::small_network(), findings));
  CHECK(json["findings"][0]["value"].is_null());
  CHECK(json["findings"][0]["reason"] == "the device is not sure to operate");
  CHECK(json["findings"][1]["limit"].is_null());
  findings[0].reason.clear();
  const Json bare = Json::parse(plots::check_json(test::small_network(), findings));
  CHECK_FALSE(bare["findings"][0]["reason"].text().empty());
}

TEST_CASE("Steps carry formula, numbers, result, unit and place") {
  const Json json = Json::parse(plots::check_json(test::small_network(), test::findings()));
  const Json step = json["findings"][0]["steps"][1];
  CHECK(step["formula"] == "Zs = Ze + R1 + R2");
  CHECK(step["numbers"] == "0.35 + 1.27");
  CHECK(step["result"] == 1.62);
  CHECK(step["unit"] == "ohm");
  CHECK(step["at"] == "boatyard.toml:22:8");
}

TEST_CASE("Pairs of devices carry the keys of selectivity, others do not") {
  const Json json = Json::parse(plots::check_json(test::small_network(), test::findings()));
  const Json& pair = json["findings"][2];
  CHECK(pair["upstream"] == "S1");
  CHECK(pair["selectivity"] == "partial");
  CHECK(pair["limit_A"] == 1200);
  CHECK(pair["available_A"] == 3400);
  CHECK(pair["basis"] == "let-through against pre-arcing");
  CHECK_FALSE(json["findings"][0].contains("upstream"));
}

TEST_CASE("sunder.faults/1 has the keys that others build on, and peak is null in the minimum") {
  solver::FaultRow most{"normal",   solver::Condition::maximum,
                        "intake",   solver::Fault::three_phase,
                        "L1-L2-L3", 16000,
                        30000,      2.5,
                        0.0159,     254,
                        true,       ""};
  solver::FaultRow least{"normal",
                         solver::Condition::minimum,
                         "workshop/W2/spur1",
                         solver::Fault::line_earth,
                         "L1-PE",
                         231,
                         solver::kNone,
                         0.2,
                         0.94,
                         218.5,
                         true,
                         ""};
  solver::FaultRow unknown = least;
  unknown.known = false;
  unknown.needs = "Zn of grid";
  const Json json = Json::parse(plots::faults_json(test::small_network(), {most, least, unknown}));
  CHECK(json["format"] == "sunder.faults/1");
  const Json& rows = json["results"];
  REQUIRE(rows.size() == 3);
  for (const char* key : {"state", "condition", "node", "fault", "phases", "current_A", "peak_A", "x_over_r"}) {
    CHECK(rows[0].contains(key));
  }
  CHECK(rows[0]["condition"] == "maximum");
  CHECK(rows[0]["fault"] == "three-phase");
  CHECK(rows[0]["peak_A"] == 30000);
  CHECK(rows[1]["peak_A"].is_null());
  CHECK(rows[2]["current_A"].is_null());
  CHECK(rows[2]["reason"] == "needs Zn of grid");
}

TEST_CASE("Output is valid UTF-8 and JSON whatever bytes a name holds") {
  auto findings = test::findings();
  findings[0].subject = "board\xff/\"W\n2\"";
  const Json json = Json::parse(plots::check_json(test::small_network(), findings));
  CHECK(json["findings"][0]["subject"] == "board\xEF\xBF\xBD/\"W\n2\"");
}

TEST_CASE("The other forms are valid JSON and name themselves") {
  const auto format = [](const std::string& text) { return Json::parse(text).at("format").text(); };
  const models::Network network = test::small_network();
  CHECK(format(plots::schedule_json(network, {})) == "sunder.schedule/1");
  CHECK(format(plots::sweep_json(network, test::sweep())) == "sunder.vary/1");
  CHECK(format(plots::chart_json(test::path_chart())) == "sunder.chart/1");
  CHECK(format(plots::errors_json({})) == "sunder.errors/1");
  CHECK(format(plots::help_json(plots::help_json_forms())) == "sunder.help/1");
  CHECK(format(plots::record_json("sunder.new/1", {{"file", "a.toml"}})) == "sunder.new/1");
}

TEST_CASE("Errors carry their place, or null where there is none") {
  const Json json = Json::parse(
      plots::errors_json({{"error", "net.toml", 14, 10, "unknown cable 'x'", "cable = \"x\"", "did you mean 'y'?"},
                          {"error", "", 0, 0, "no such file", "", ""}}));
  CHECK(json["errors"][0]["line"] == 14);
  CHECK(json["errors"][0]["hint"] == "did you mean 'y'?");
  CHECK(json["errors"][1]["line"].is_null());
}

TEST_CASE("Flips and undecided stretches are in the JSON of a sweep with unit and values") {
  const Json json = Json::parse(plots::sweep_json(test::small_network(), test::sweep()));
  CHECK(json["key"] == "S1.length");
  CHECK(json["unit"] == "m");
  CHECK(json["flips"][0]["before"] == "meets");
  CHECK(json["flips"][0]["at"] == 83.333333);
  CHECK(json["undecided"][0]["from"] == 100);
  CHECK(json["points"].size() == 5);
  CHECK(json["points"][0]["findings"][0]["verdict"] == "meets");
}

TEST_CASE("Every key of a finding is explained in the description of JSON, and the other way round") {
  const Json json = Json::parse(plots::check_json(test::small_network(), test::findings()));
  std::size_t explained = 0;
  for (const plots::StructHelp& part : plots::describe_json()) {
    for (const plots::FieldHelp& field : part.fields) CHECK_FALSE(field.meaning.empty());
    if (part.format != "sunder.check/1" || part.place.rfind("findings[]", 0) != 0 ||
        part.place.find('.') != std::string::npos)
      continue;
    for (const plots::FieldHelp& field : part.fields) {
      CAPTURE(field.key);
      CHECK(json["findings"][2].contains(field.key));  // a pair, so all of them
      ++explained;
    }
  }
  CHECK(explained == json["findings"][2].size());
}

TEST_CASE("CSV quotes cells that hold commas, quotes or line ends, as RFC 4180 says") {
  CHECK(plots::csv_cell("plain") == "plain");
  CHECK(plots::csv_cell("a,b") == "\"a,b\"");
  CHECK(plots::csv_cell("3\" pipe") == "\"3\"\" pipe\"");
  CHECK(plots::csv_cell("two\nlines") == "\"two\nlines\"");
}

TEST_CASE("The schedule as CSV has unit headings, empty cells for what is absent, and 'never'") {
  solver::ScheduleRow row;
  row.address = "workshop/W2";
  row.serves = "bench, left";
  row.length = 54;
  row.In = 32;
  row.time = std::numeric_limits<double>::infinity();
  row.limit = 0.4;
  row.drop = 0.0123;
  row.verdict = solver::Verdict::fails;
  const std::string csv = plots::schedule_csv({row});
  CHECK(csv ==
        "address,kind,serves,phases,device,cable,cpc,length [m],Ib [A],In [A],Iz [A],voltage drop [%],Zs [ohm],"
        "least current [A],greatest current [A],time [s],limit [s],verdict\n"
        "workshop/W2,circuit,\"bench, left\",,,,,54,,32,,1.23,,,,never,0.4,fails\n");
}

TEST_CASE("An unbounded number of a row is null and named in its reason") {
  solver::ScheduleRow row;
  row.time = std::numeric_limits<double>::infinity();
  const Json json = Json::parse(plots::schedule_json(test::small_network(), {row}));
  CHECK(json["rows"][0]["time_s"].is_null());
  CHECK(json["rows"][0]["reason"] == "time_s never comes");
}
