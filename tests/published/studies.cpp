// SPDX-License-Identifier: Apache-2.0
#include "tests/published/studies.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"
#include "tests/support/json.h"

namespace sunder::published {
namespace {

using support::Json;

Amps amps_of(const Json& json) {
  constexpr std::array<const char*, 5> kNames = {"L1", "L2", "L3", "N", "PE"};
  Amps amps{};
  for (std::size_t k = 0; k < kNames.size(); ++k) {
    const Json& degrees = json.at("degrees").at(kNames[k]);
    const double angle = degrees.is_number() ? degrees.number() * std::numbers::pi / 180 : 0.0;
    amps[k] = std::polar(json.at("amps").at(kNames[k]).number(), angle);
  }
  return amps;
}

}  // namespace

std::vector<StudyAnswer> study(const std::string& netlist, const std::vector<std::string>& options) {
  std::vector<std::string> arguments{"faults"};
  arguments.insert(arguments.end(), options.begin(), options.end());
  std::vector<StudyAnswer> faults;
  const Json json = answer(netlist, arguments);
  for (const Json& item : json.at("faults")) {
    StudyAnswer fault;
    fault.state = item.at("state").text();
    fault.condition = item.at("condition").text();
    fault.node = item.at("node").text();
    fault.fault = item.at("fault").text();
    fault.amps = item.at("current_A").number();
    fault.peak = item.at("peak_A").number();
    fault.volts = item.at("driving_V").number();
    const Json& ratio = item.at("x_over_r");
    const double angle = ratio.is_number() ? std::atan(ratio.number()) : std::numbers::pi / 2;  // null: no resistance
    const double ohms = item.at("loop_ohm").number();
    fault.loop = {ohms * std::cos(angle), ohms * std::sin(angle)};
    fault.into_fault = amps_of(item.at("into_fault"));
    for (const Json& element : item.at("elements"))
      fault.elements.push_back({element.at("element").text(), amps_of(element), element.at("residual_A").number()});
    for (const Json& board : item.at("touch"))
      fault.touch.push_back({board.at("board").text(), board.at("to_earth_V").number()});
    faults.push_back(std::move(fault));
  }
  return faults;
}

StudyAnswer at(const std::vector<StudyAnswer>& faults, const std::string& condition, const std::string& node,
               const std::string& fault, const std::string& state) {
  for (const StudyAnswer& one : faults) {
    if (one.condition != condition || one.node != node || one.fault != fault || one.state != state) continue;
    INFO(condition << " " << fault << " at " << node);
    REQUIRE(std::isfinite(one.amps));
    return one;
  }
  FAIL("no " << condition << " " << fault << " current at " << node << " in " << state);
  return {};
}

ElementAnswer in(const StudyAnswer& fault, const std::string& element) {
  for (const ElementAnswer& one : fault.elements)
    if (one.element == element) return one;
  FAIL("no current of " << element << " for the fault at " << fault.node);
  return {};
}

double touch(const StudyAnswer& fault, const std::string& board) {
  for (const TouchAnswer& one : fault.touch)
    if (one.board == board) return one.to_earth;
  FAIL("no touch voltage of " << board << " for the fault at " << fault.node);
  return 0;
}

std::array<std::complex<double>, 2> faulted_lines(const StudyAnswer& fault) {
  std::array<std::complex<double>, 2> lines{};
  std::size_t found = 0;
  for (std::size_t k = 0; k < 3; ++k) {
    if (fault.into_fault[k] == std::complex<double>{}) continue;
    REQUIRE(found < lines.size());
    lines[found++] = fault.into_fault[k];
  }
  REQUIRE(found == lines.size());
  return lines;
}

double without_c(double of_the_maximum) { return of_the_maximum / kMax; }

}  // namespace sunder::published
