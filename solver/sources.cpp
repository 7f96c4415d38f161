// SPDX-License-Identifier: Apache-2.0
#include "solver/sources.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "solver/iec60909.h"

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

bool through_star(Fault fault) { return fault != Fault::three_phase && fault != Fault::line_line; }

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
  const bool combined = source.earthing == models::Earthing::TN_C_S || source.earthing == models::Earthing::TN_C;
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
  const bool combined = source.earthing == models::Earthing::TN_C_S || source.earthing == models::Earthing::TN_C;
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
  // What an isolated system earths lies beyond the supply: its own part of every loop is that of line and neutral.
  if (source.earthing == models::Earthing::IT && through_star(fault)) fault = Fault::line_neutral;
  const double volts = driving_voltage(network, source, condition, fault);
  const double one_line =
      fault == Fault::line_line ? driving_voltage(network, source, condition, Fault::three_phase) : volts;
  const double to_neutral = driving_voltage(network, source, condition, Fault::line_neutral);
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

SourceTerm transformer_term(const Network& network, const Source& source, Condition condition) {
  SourceTerm term;
  term.at = source.at;
  const Complex winding = transformer_impedance(source);
  const Complex zt = winding * transformer_correction(network, winding, source.rating, source.secondary, condition);
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
  const bool apart = !std::isnan(source.r0_over_r1) && !std::isnan(source.x0_over_x1);
  const Complex z0 =
      apart ? Complex{zt.real() * source.r0_over_r1, zt.imag() * source.x0_over_x1} : zt * source.z0_over_z1;
  term.fixed = sequence_matrix(z1, z0);
  if (!source.z0_known) {
    term.fixed = sequence_matrix(z1, z1);
    term.star_open = true;
  }
  return term;
}

// A generator whose board has nothing but one transformer: with it a power-station unit of IEC 60909.
// @return the transformer, -1: none
int unit_transformer(const Network& network, const Source& source) {
  int found = -1;
  for (std::size_t t = 0; t < network.transformers.size(); ++t) {
    const models::Transformer& transformer = network.transformers[t];
    if (transformer.to == source.board) return -1;
    if (transformer.from != source.board) continue;
    if (found >= 0) return -1;
    found = static_cast<int>(t);
  }
  auto here = [&](int board) { return board == source.board; };
  for (const models::Submain& s : network.submains)
    if (here(s.from) || here(s.to)) return -1;
  for (const models::Link& l : network.links)
    if (here(l.from) || here(l.to)) return -1;
  for (const Source& other : network.sources)
    if (&other != &source && here(other.board)) return -1;
  return found;
}

SourceTerm generator_term(const Network& network, const Source& source, Condition condition, Fault fault) {
  SourceTerm term;
  term.at = source.at;
  Complex z1 = generator_impedance(source, condition);
  if (std::isnan(z1.real())) {
    term.known = false;
    term.needs = source.name + ".sustained";
    return term;
  }
  const double base = source.U * source.U / source.generator.rating;
  const bool x0_known = !std::isnan(source.generator.x0);
  Complex z0{z1.real(), x0_known ? source.generator.x0 * base : z1.imag()};
  if (network.method == models::Method::iec60909 && condition == Condition::maximum) {
    if (std::isnan(source.generator.r)) {
      const double r = iec60909::fictitious_resistance(source.U, source.generator.rating) * z1.imag();
      z1.real(r);
      z0.real(r);
    }
    const double k = generator_correction(network, source);
    z1 *= k;
    z0 *= k;
  }
  // Faults that are not symmetrical meet the mean of positive and negative sequence: exact where the machine
  // alone feeds them.
  if (fault != Fault::three_phase && !std::isnan(source.generator.x2) && condition == Condition::maximum)
    z1 = (z1 + Complex{z1.real(), z1.imag() * source.generator.x2 / source.generator.xd_subtransient}) / 2.0;
  term.fixed = sequence_matrix(z1, z0);
  term.star_open = source.star.kind == models::StarPoint::Kind::absent;
  if (!x0_known && !term.star_open && through_star(fault)) {
    term.known = false;
    term.needs = source.name + ".x0";
  }
  return term;
}

SourceTerm sequence_term(const Source& source, const Bound& bound, Condition condition, Fault fault) {
  SourceTerm term;
  term.at = bound.sequence.at;
  const models::Sequence& z = bound.sequence;
  term.fixed = sequence_matrix(z.z1, z.z0_given ? z.z0 : z.z1);
  if (!z.z0_given && source.high_voltage) {
    term.star_open = true;  // as with a declared current: what lies behind a transformer may not ask for it
  } else if (!z.z0_given && through_star(fault)) {
    term.known = false;
    term.needs = source.name + "." + word(condition) + ".z0";
  }
  return term;
}

// A network above 1 kV declares its three-phase current or power; without an angle R = 0.1 X.
SourceTerm high_voltage_term(const Source& source, Condition condition) {
  SourceTerm term;
  const bool most = condition == Condition::maximum;
  const Bound& bound = most ? source.maximum : source.minimum;
  term.at = bound.at;
  if (!bound.three_phase.given()) {
    term.known = false;
    term.needs = source.name + "." + word(condition) + ".three_phase";
    return term;
  }
  const double volts = (most ? kHighVoltageMax : kHighVoltageMin) * source.U0;
  auto turned = [&](double ohms) {
    return bound.power_factor >= 0 ? std::polar(ohms, std::acos(bound.power_factor))
                                   : std::polar(ohms, std::atan2(kFeederX, kFeederR));
  };
  const Complex z1 = turned(loop_ohms(bound.three_phase, volts));
  term.fixed = sequence_matrix(z1, z1);
  if (bound.line_earth.given()) {
    term.fixed = sequence_matrix(z1, 3.0 * turned(loop_ohms(bound.line_earth, volts)) - 2.0 * z1);
  } else {
    // Faults behind a transformer may not ask for it; at its own level the grid finds no way to earth.
    term.star_open = true;
  }
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

Complex generator_impedance(const Source& source, Condition condition) noexcept {
  const models::Generator& g = source.generator;
  const double base = source.U * source.U / g.rating;
  if (condition == Condition::maximum) return base * Complex{std::isnan(g.r) ? 0.0 : g.r, g.xd_subtransient};
  if (!std::isnan(g.sustained)) return {0.0, base / g.sustained};
  return {std::isnan(g.xd) ? g.xd : 0.0, base * g.xd};
}

double voltage_factor_at(const Network& network, double volts, Condition condition) noexcept {
  constexpr double kLowVoltage = 1000;  // [V]
  if (volts <= kLowVoltage && network.method == models::Method::conductor)
    return voltage_factor(network.rules, condition);
  return iec60909::voltage_factor(volts, network.tolerance, condition);
}

double generator_correction(const Network& network, const Source& source) noexcept {
  if (network.method == models::Method::conductor) return 1;
  const models::Generator& g = source.generator;
  if (const int t = unit_transformer(network, source); t >= 0) return unit_correction(network, source, t);
  return iec60909::generator_factor(source.U, source.U, voltage_factor_at(network, source.U, Condition::maximum),
                                    g.xd_subtransient, g.pf);
}

double unit_correction(const Network& network, const Source& source, int transformer) noexcept {
  const models::Transformer& t = network.transformers[static_cast<std::size_t>(transformer)];
  iec60909::PowerStationUnit unit;
  unit.network_volts = t.U;
  unit.generator_volts = source.U;
  unit.transformer_low = t.primary;
  unit.transformer_high = t.secondary;
  unit.c_max = voltage_factor_at(network, t.U, Condition::maximum);
  unit.xd = source.generator.xd_subtransient;
  unit.power_factor = source.generator.pf;
  unit.xt = iec60909::transformer_reactance(t.uk, t.losses, t.rating);
  unit.off_load_tap = t.tap;
  return t.on_load_taps ? iec60909::unit_factor_on_load(unit) : iec60909::unit_factor_fixed(unit);
}

int unit_generator(const Network& network, int transformer) noexcept {
  for (std::size_t s = 0; s < network.sources.size(); ++s)
    if (network.sources[s].generator.present && unit_transformer(network, network.sources[s]) == transformer)
      return static_cast<int>(s);
  return -1;
}

double transformer_correction(const Network& network, Complex z1, double rating, double secondary,
                              Condition condition) noexcept {
  if (network.method == models::Method::conductor || condition == Condition::minimum) return 1;
  const double x = z1.imag() * rating / (secondary * secondary);
  return iec60909::transformer_factor(voltage_factor_at(network, secondary, Condition::maximum), x);
}

ConductorMatrix sequence_matrix(Complex z1, Complex z0) noexcept {
  ConductorMatrix z = ConductorMatrix::Zero();
  for (int i = 0; i < 3; ++i)
    for (int j = 0; j < 3; ++j) z(i, j) = i == j ? (z0 + 2.0 * z1) / 3.0 : (z0 - z1) / 3.0;
  return z;
}

double voltage_factor(const models::RuleSet& rules, Condition condition) noexcept {
  return condition == Condition::maximum ? rules.c_max : rules.c_min;
}

double driving_voltage(const models::RuleSet& rules, const Source& source, Condition condition, Fault fault) noexcept {
  const double high = condition == Condition::maximum ? kHighVoltageMax : kHighVoltageMin;
  const double c = source.high_voltage ? high : voltage_factor(rules, condition);
  switch (fault) {
    case Fault::three_phase:
      return c * source.U / std::numbers::sqrt3;
    case Fault::line_line:
      return c * source.U;
    default:
      return c * source.U0;
  }
}

double driving_voltage(const Network& network, const Source& source, Condition condition, Fault fault) noexcept {
  if (network.method == models::Method::conductor) return driving_voltage(network.rules, source, condition, fault);
  const double c = voltage_factor_at(network, source.U, condition);
  if (fault == Fault::line_line) return c * source.U;
  const double to_neutral = source.split_phase ? source.U0 : source.U / std::numbers::sqrt3;
  return c * to_neutral;
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
  if (source.generator.present) return generator_term(network, source, condition, fault);
  if (source.transformer) return transformer_term(network, source, condition);
  const Bound& bound = condition == Condition::maximum ? source.maximum : source.minimum;
  if (bound.sequence.given) return sequence_term(source, bound, condition, fault);
  if (source.high_voltage) return high_voltage_term(source, condition);
  return supply_term(network, source, condition, fault);
}

}  // namespace sunder::solver
