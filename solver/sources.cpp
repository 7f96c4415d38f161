// SPDX-License-Identifier: Apache-2.0
#include "solver/sources.h"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace sunder::solver {
namespace {

using models::Bound;
using models::Loop;
using models::Network;
using models::Source;

// Feeder at high voltage where nothing else is known (IEC 60909-0: X_Q = 0.995 Z_Q, R_Q = 0.1 X_Q).
constexpr double kFeederX = 0.995;
constexpr double kFeederR = 0.0995;
// Voltage factors of networks above 1 kV (IEC 60909-0 table 1).
constexpr double kHighVoltageMax = 1.1;
constexpr double kHighVoltageMin = 1.0;

// |Z| of a declared loop: as it stands, or from the current at the condition's driving voltage.
double loop_ohms(const Loop& loop, double volts) { return loop.ohms > 0 ? loop.ohms : volts / loop.amps; }

struct Choice {
  double ohms = 0;
  models::Origin at{};
  std::string needs;
};

Choice from_loop(const Loop& loop, double volts) { return {loop_ohms(loop, volts), loop.at, ""}; }

Choice missing(const Source& source, const char* condition, const char* key) {
  return {0, source.at, source.name + "." + condition + "." + key};
}

// Maximum: what is not declared is bounded by what is. Without return impedance every fault current
// equals the three-phase one. Without a three-phase value the line is taken as half of the line-neutral
// loop (Ik3 <= 2 Ik(L-N), which holds while the neutral is no smaller than the line; the reader lists it).
// Nothing is bounded by the line-earth current alone: the other returns may be of less impedance.
Choice greatest(const Source& source, const Bound& bound, Fault fault, double volts, double volts_to_neutral) {
  const bool through_return = fault == Fault::line_neutral || fault == Fault::line_earth;
  if (fault == Fault::line_neutral && bound.line_neutral.given()) return from_loop(bound.line_neutral, volts);
  if (fault == Fault::line_earth && bound.line_earth.given()) return from_loop(bound.line_earth, volts);
  if (bound.three_phase.given()) {
    if (through_return && bound.three_phase.amps > 0) return from_loop(bound.three_phase, volts_to_neutral);
    return from_loop(bound.three_phase, volts);
  }
  const bool combined = source.earthing == models::Earthing::TN_C_S;
  const Loop& neutral = bound.line_neutral.given() || !combined ? bound.line_neutral : bound.line_earth;
  if (!neutral.given()) {
    if (fault == Fault::line_earth) return missing(source, "maximum", "line_earth");
    return missing(source, "maximum", source.lines.lines() > 1 ? "three_phase" : "line_neutral");
  }
  // In TN-S the protective return has an impedance of its own; an electrode's is never less than a neutral's.
  if (fault == Fault::line_earth && source.earthing == models::Earthing::TN_S)
    return missing(source, "maximum", "line_earth");
  Choice choice = from_loop(neutral, volts_to_neutral);
  if (!through_return) choice.ohms /= 2;
  return choice;
}

// Minimum: a loop is never taken from another that could be smaller.
Choice least(const Source& source, const Bound& bound, Fault fault, double volts, double volts_to_neutral) {
  const bool combined = source.earthing == models::Earthing::TN_C_S;
  const Loop& neutral = bound.line_neutral.given() || !combined ? bound.line_neutral : bound.line_earth;
  const Loop& earth = bound.line_earth.given() || !combined ? bound.line_earth : bound.line_neutral;
  if (fault == Fault::line_neutral)
    return neutral.given() ? from_loop(neutral, volts) : missing(source, "minimum", "Zn");
  if (fault == Fault::line_earth) return earth.given() ? from_loop(earth, volts) : missing(source, "minimum", "Ze");
  if (bound.three_phase.given()) return from_loop(bound.three_phase, volts);
  // The line is part of each loop, so no greater than the least of them. The electrode of a TT
  // supply is no part of the line: its loop says nothing here.
  const bool earth_counts = earth.given() && source.earthing != models::Earthing::TT;
  if (neutral.given() && earth_counts)
    return loop_ohms(neutral, volts_to_neutral) <= loop_ohms(earth, volts_to_neutral)
               ? from_loop(neutral, volts_to_neutral)
               : from_loop(earth, volts_to_neutral);
  if (neutral.given()) return from_loop(neutral, volts_to_neutral);
  if (earth_counts) return from_loop(earth, volts_to_neutral);
  return missing(source, "minimum", "three_phase");
}

SourceTerm supply_term(const Network& network, const Source& source, Condition condition, Fault fault) {
  const bool most = condition == Condition::maximum;
  const Bound& bound = most ? source.maximum : source.minimum;
  const double volts = driving_voltage(network.rules, source, condition, fault);
  const double one_line =
      fault == Fault::line_line ? driving_voltage(network.rules, source, condition, Fault::three_phase) : volts;
  const double to_neutral = driving_voltage(network.rules, source, condition, Fault::line_neutral);
  const Choice choice =
      most ? greatest(source, bound, fault, one_line, to_neutral) : least(source, bound, fault, one_line, to_neutral);
  SourceTerm term;
  term.at = choice.at;
  term.needs = choice.needs;
  term.known = choice.needs.empty();
  if (!term.known) return term;
  term.ohms = choice.ohms;
  if (bound.power_factor >= 0) {
    term.angle_low = term.angle_high = std::acos(bound.power_factor);
  } else {
    term.angle_high = std::acos(test_power_factor(one_line / choice.ohms));
  }
  return term;
}

SourceTerm transformer_term(const Source& source, Condition condition) {
  SourceTerm term;
  term.at = source.at;
  const Complex zt = transformer_impedance(source);
  const bool most = condition == Condition::maximum;
  const double level = most ? source.fault_level_max : source.fault_level_min;
  // Not declared, the network before the transformer is stiff for the most and unknown for the least.
  if (!(level > 0)) {
    term.known = false;
    term.needs = source.name + ".fault_level.minimum";
    return term;
  }
  const double zq = std::isfinite(level)
                        ? (most ? kHighVoltageMax : kHighVoltageMin) * source.secondary * source.secondary / level
                        : 0.0;
  const Complex z1 = zt + zq * Complex{kFeederR, kFeederX};
  const Complex z0 = zt * source.z0_over_z1;
  const Complex self = (z0 + 2.0 * z1) / 3.0;
  const Complex mutual = (z0 - z1) / 3.0;
  for (int i = 0; i < 3; ++i)
    for (int j = 0; j < 3; ++j) term.fixed(i, j) = i == j ? self : mutual;
  return term;
}

}  // namespace

Complex transformer_impedance(const Source& source) noexcept {
  const double base = source.secondary * source.secondary / source.rating;
  const double magnitude = source.uk * base;
  const double resistance =
      source.losses > 0 ? source.losses / source.rating * base : magnitude / std::hypot(1.0, source.x_over_r);
  return {resistance, std::sqrt(std::max(0.0, magnitude * magnitude - resistance * resistance))};
}

double voltage_factor(const models::RuleSet& rules, Condition condition) noexcept {
  return condition == Condition::maximum ? rules.c_max : rules.c_min;
}

double driving_voltage(const models::RuleSet& rules, const Source& source, Condition condition, Fault fault) noexcept {
  const double c = voltage_factor(rules, condition);
  switch (fault) {
    case Fault::three_phase:
      return c * source.U / std::numbers::sqrt3;
    case Fault::line_line:
      return c * source.U;
    default:
      return c * source.U0;
  }
}

double test_power_factor(double current) noexcept {
  struct Row {
    double to, power_factor;
  };
  constexpr Row rows[] = {{3e3, 0.9}, {4.5e3, 0.8}, {6e3, 0.7}, {10e3, 0.5}, {20e3, 0.3}, {50e3, 0.25}};
  for (const Row& row : rows)
    if (current <= row.to) return row.power_factor;
  return 0.2;
}

SourceTerm source_term(const Network& network, const Source& source, Condition condition, Fault fault) {
  return source.transformer ? transformer_term(source, condition) : supply_term(network, source, condition, fault);
}

}  // namespace sunder::solver
