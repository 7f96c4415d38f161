// SPDX-License-Identifier: Apache-2.0
#include "tests/published/answers.h"

#include <catch2/catch.hpp>
#include <limits>

#include "tests/support/json.h"
#include "tests/support/program.h"

namespace sunder::published {
namespace {

using support::Json;

double number(const Json& json) { return json.number(); }

std::vector<FindingAnswer> findings_of(const Json& list) {
  std::vector<FindingAnswer> findings;
  for (const Json& item : list) {
    findings.push_back({item.at("check").text(), item.at("subject").text(), item.at("verdict").text(),
                        item.at("confidence").text(), item["upstream"].text(), item["selectivity"].text(),
                        number(item.at("value")), number(item.at("limit"))});
  }
  return findings;
}

SweepAnswer sweep_of(const Json& json) {
  SweepAnswer sweep;
  for (const Json& item : json.at("flips")) {
    sweep.flips.push_back({item.at("check").text(), item.at("subject").text(), item.at("before").text(),
                           item.at("after").text(), number(item.at("at"))});
  }
  for (const Json& item : json.at("points"))
    sweep.points.push_back({number(item.at("value")), findings_of(item.at("findings"))});
  return sweep;
}

}  // namespace

// Exit status 1 only says that a check is not met.
Json answer(const std::string& netlist, std::vector<std::string> arguments) {
  const support::Folder folder;
  folder.write("net.toml", netlist);
  arguments.insert(std::next(arguments.begin()), "net.toml");
  arguments.emplace_back("--json");
  const support::Outcome outcome = support::run_sunder(arguments, folder);
  INFO(netlist);
  INFO(outcome.out.substr(0, 2000));
  INFO(outcome.err.substr(0, 2000));
  REQUIRE((outcome.status == 0 || outcome.status == 1));
  Json json = Json::parse(outcome.out);
  REQUIRE(json.valid());
  return json;
}

std::vector<FaultAnswer> faults(const std::string& netlist) {
  std::vector<FaultAnswer> rows;
  const Json json = answer(netlist, {"faults"});
  for (const Json& item : json.at("results")) {
    rows.push_back({item.at("condition").text(), item.at("node").text(), item.at("fault").text(),
                    number(item.at("current_A")), number(item.at("peak_A")), number(item.at("loop_ohm")),
                    number(item.at("x_over_r")), number(item.at("driving_V"))});
  }
  return rows;
}

std::vector<FindingAnswer> check(const std::string& netlist) {
  return findings_of(answer(netlist, {"check"}).at("findings"));
}

double drop(const std::string& netlist, const std::string& address) {
  const Json json = answer(netlist, {"schedule"});
  for (const Json& item : json.at("rows"))
    if (item.at("address") == address) return number(item.at("drop_percent")) / 100;
  FAIL("no row " << address);
  return 0;
}

SweepAnswer vary(const std::string& netlist, const std::string& key, const std::string& from, const std::string& to) {
  return sweep_of(answer(netlist, {"vary", "--set", key, "--from", from, "--to", to}));
}

SweepAnswer vary_values(const std::string& netlist, const std::string& key, const std::string& values) {
  return sweep_of(answer(netlist, {"vary", "--set", key, "--values", values}));
}

FaultAnswer at(const std::vector<FaultAnswer>& rows, const std::string& condition, const std::string& node,
               const std::string& fault) {
  for (const FaultAnswer& row : rows)
    if (row.condition == condition && row.node == node && row.fault == fault) return row;
  FAIL("no " << condition << " " << fault << " current at " << node);
  return {};
}

FindingAnswer finding(const std::vector<FindingAnswer>& findings, const std::string& check,
                      const std::string& subject) {
  for (const FindingAnswer& item : findings)
    if (item.check == check && item.subject == subject) return item;
  FAIL("no finding on " << check << " of " << subject);
  return {};
}

void check_cut(double value, const std::string& printed, double units) {
  const double number = std::stod(printed);
  const double half = support::half_last_digit(printed);
  CAPTURE(value, printed);
  CHECK(value >= number - half);
  CHECK(value < number + 2 * half * units);
}

double flip(const SweepAnswer& sweep, const std::string& check, const std::string& subject) {
  double where = std::numeric_limits<double>::quiet_NaN();
  int found = 0;
  for (const FlipAnswer& item : sweep.flips) {
    if (item.check != check || item.subject != subject) continue;
    if (item.before != "meets" && item.after != "meets") continue;
    where = item.at;
    ++found;
  }
  INFO("flips of " << check << " of " << subject << " to or from meets: " << found);
  REQUIRE(found == 1);
  for (const PointAnswer& point : sweep.points)
    for (const FindingAnswer& item : point.findings)
      if (item.check == check && item.subject == subject) REQUIRE(item.confidence != "low");
  return where;
}

}  // namespace sunder::published
