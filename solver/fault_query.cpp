// SPDX-License-Identifier: Apache-2.0
#include "solver/fault_query.h"

#include <fmt/format.h>

#include <string_view>

#include "models/registry.h"
#include "models/units.h"

namespace sunder::solver {
namespace {

using models::Quantity;

struct NamedFault {
  std::string_view name;
  Fault fault;
};
constexpr NamedFault kFaults[] = {{"three-phase", Fault::three_phase},
                                  {"line-line", Fault::line_line},
                                  {"line-neutral", Fault::line_neutral},
                                  {"line-earth", Fault::line_earth},
                                  {"two-lines-earth", Fault::two_lines_earth}};
constexpr double kMostOhms = 1e6;  // above it nothing flows that a fault study could tell from rounding

const char* kPlaces = "an address such as workshop/W4, or a place along a run: S1@40% or S1@32m";

// Nothing where the text can be a place.
std::optional<Refusal> examine_place(const char* option, const std::string& text) {
  if (text.find_first_not_of(" \t") == std::string::npos) return Refusal{fmt::format("{} is empty", option), kPlaces};
  const std::size_t mark = text.rfind('@');
  if (mark == std::string::npos) return std::nullopt;
  if (text.find_first_not_of(" \t") >= mark)
    return Refusal{fmt::format("{} '{}' names no run in front of the '@'", option, text), kPlaces};
  const std::string where = text.substr(mark + 1);
  auto along = models::parse_quantity(where, Quantity::percentage);
  if (std::holds_alternative<models::UnitError>(along)) along = models::parse_quantity(where, Quantity::length);
  if (std::holds_alternative<models::UnitError>(along)) {
    return Refusal{fmt::format("{} '{}': behind the '@' a share or a length of the run is expected", option, text),
                   "40% of the way, or 32m from its start"};
  }
  if (std::get<double>(along) < 0)
    return Refusal{fmt::format("{} '{}' lies before the start of the run", option, text), ""};
  return std::nullopt;
}

std::variant<Fault, Refusal> read_fault(const std::string& text) {
  std::vector<std::string_view> names;
  for (const NamedFault& known : kFaults) {
    if (known.name == text) return known.fault;
    names.push_back(known.name);
  }
  const std::string_view near = models::nearest_name(text, names);
  return Refusal{fmt::format("--fault: there is no fault '{}'", text),
                 near.empty() ? "one of " + fault_names() : fmt::format("did you mean '{}'?", near)};
}

std::variant<double, Refusal> read_resistance(const std::string& text) {
  const auto ohms = models::parse_quantity(text, Quantity::impedance);
  if (const auto* error = std::get_if<models::UnitError>(&ohms))
    return Refusal{"--through: " + error->message, "a resistance, such as \"0.1 ohm\""};
  const double value = std::get<double>(ohms);
  if (!(value >= 0 && value <= kMostOhms)) {
    return Refusal{fmt::format("--through takes a resistance of 0 to {}, got '{}'",
                               models::format_quantity(kMostOhms, Quantity::impedance), text),
                   ""};
  }
  return value;
}

}  // namespace

std::string fault_names() {
  std::string names;
  for (const NamedFault& known : kFaults) names += (names.empty() ? "" : ", ") + std::string(known.name);
  return names;
}

std::variant<FaultQuery, Refusal> read_fault_query(const FaultOptions& options) {
  FaultQuery query;
  query.currents = options.currents;
  query.touch = options.touch;
  if (options.at) {
    if (const auto refusal = examine_place("--at", *options.at)) return *refusal;
    query.at = *options.at;
  }
  if (!options.pair.empty()) {
    if (options.at) return Refusal{"--pair names both places itself and takes no --at", "--pair workshop/W4 office/O2"};
    if (options.fault)
      return Refusal{"--pair is a fault of its own, a line to earth at each place, and takes no --fault", ""};
    if (options.pair.size() != 2) return Refusal{"--pair takes two places", "--pair workshop/W4 office/O2"};
    for (const std::string& place : options.pair) {
      if (const auto refusal = examine_place("--pair", place)) return *refusal;
    }
    if (options.pair[0] == options.pair[1]) {
      return Refusal{fmt::format("--pair takes two different places, got '{}' twice", options.pair[0]),
                     fmt::format("at one place: --at {} --fault two-lines-earth", options.pair[0])};
    }
    query.at = options.pair[0];
    query.pair = options.pair[1];
  }
  if (options.fault) {
    const auto fault = read_fault(*options.fault);
    if (const auto* refusal = std::get_if<Refusal>(&fault)) return *refusal;
    query.fault = std::get<Fault>(fault);
  }
  if (options.through) {
    const auto ohms = read_resistance(*options.through);
    if (const auto* refusal = std::get_if<Refusal>(&ohms)) return *refusal;
    query.through_ohms = std::get<double>(ohms);
  }
  if (options.state) {
    if (options.state->find_first_not_of(" \t") == std::string::npos)
      return Refusal{"--state is empty", "the name of a supply state"};
    query.state = *options.state;
  }
  return query;
}

}  // namespace sunder::solver
