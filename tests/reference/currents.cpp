// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/currents.h"

#include <algorithm>
#include <complex>

namespace sunder::reference {

namespace {

using Complex = std::complex<double>;

constexpr double kUnknown = std::numeric_limits<double>::quiet_NaN();
constexpr double kFactorMaximum = 1.1;  // voltage factors of the condition [1]
constexpr double kFactorMinimum = 0.95;

double factor(Condition condition) { return condition == Condition::maximum ? kFactorMaximum : kFactorMinimum; }

// Voltage that drives one amount of current through the impedance that `ask` gives [V]: the declared
// line-to-neutral voltage for loops through N or PE, the declared line-to-line voltage for loops between
// lines, of which a star of three lines takes 1/sqrt(3) a line.
double driving(Fault fault, Condition condition) {
  if (fault == Fault::line_line) return factor(condition) * kLineToLine;
  return factor(condition) * (fault == Fault::three_phase ? kLineToLine / std::sqrt(3.0) : kLineToNeutral);
}

// The source's part of a loop: its magnitude [ohm], and its angle or the range of it [rad].
struct SourcePart {
  bool known = true;
  double ohms = 0;
  double least_angle = 0;
  double most_angle = 0;
};

SourcePart part(const Loop& loop, const Bound& bound, Condition condition) {
  const double volts = factor(condition) * kLineToNeutral;
  SourcePart result;
  result.ohms = loop.ohms > 0 ? loop.ohms : volts / loop.amps;
  if (bound.power_factor >= 0) {
    result.least_angle = result.most_angle = std::acos(bound.power_factor);
  } else {
    result.most_angle = std::acos(test_power_factor(volts / result.ohms));
  }
  return result;
}

double ohms_of(const Loop& loop, Condition condition) {
  return loop.ohms > 0 ? loop.ohms : factor(condition) * kLineToNeutral / loop.amps;
}

SourcePart source_part(const Source& source, Fault fault, Condition condition) {
  const Bound& bound = condition == Condition::maximum ? source.maximum : source.minimum;
  const bool greatest = condition == Condition::maximum;
  if (fault == Fault::line_earth && bound.line_earth.given()) return part(bound.line_earth, bound, condition);
  if (fault == Fault::line_neutral) {
    if (bound.line_neutral.given()) return part(bound.line_neutral, bound, condition);
    if (!greatest) {
      // The one conductor of TN-C-S is both; elsewhere nothing says what the neutral adds.
      if (source.earthing == Earthing::TN_C_S) return part(bound.line_earth, bound, condition);
      SourcePart unknown;
      unknown.known = false;
      return unknown;
    }
  }
  if (bound.three_phase.given()) {
    SourcePart result = part(bound.three_phase, bound, condition);
    // A three-phase current is reproduced by the voltage that drives it.
    const bool between_lines = fault == Fault::three_phase || fault == Fault::line_line;
    if (bound.three_phase.amps > 0 && between_lines) result.ohms *= kLineToLine / std::sqrt(3.0) / kLineToNeutral;
    return result;
  }
  // The loop of a TT supply holds its electrode and says nothing of the lines.
  if (!greatest && source.earthing == Earthing::TT && !bound.line_neutral.given()) {
    SourcePart unknown;
    unknown.known = false;
    return unknown;
  }
  // Minimum without a three-phase value: the line takes all of the smaller loop.
  if (bound.line_neutral.given() && ohms_of(bound.line_neutral, condition) < ohms_of(bound.line_earth, condition)) {
    return part(bound.line_neutral, bound, condition);
  }
  return part(bound.line_earth, bound, condition);
}

struct Asked {
  Question question;
  SourcePart source;
};

std::vector<Asked> possible_faults(const Network& network, const Deck& deck, Condition condition) {
  std::vector<Asked> asked;
  for (std::size_t i = 0; i < deck.places.size(); ++i) {
    const Place& place = deck.places[i];
    std::vector<int> lines;
    for (int line = 0; line < 3; ++line) {
      if (!place.nodes[static_cast<std::size_t>(line)].empty()) lines.push_back(line);
    }
    const auto add = [&](Fault fault, std::vector<int> between) {
      asked.push_back({{static_cast<int>(i), fault, std::move(between), {}}, {}});
      if (deck.declared_source) asked.back().source = source_part(network.source, fault, condition);
      // Behind a network of which nothing is said the most is known (it is taken as stiff), not the least.
      const bool stiff = network.source.transformer && !(network.source.fault_level_min > 0);
      if (stiff && condition == Condition::minimum) asked.back().source.known = false;
    };
    // All choices of lines are equal in these networks; taking turns tries each of them somewhere.
    const int one = lines[i % lines.size()];
    if (lines.size() == 3) add(Fault::three_phase, lines);
    if (lines.size() >= 2) add(Fault::line_line, {lines[i % lines.size()], lines[(i + 1) % lines.size()]});
    if (!place.nodes[3].empty()) add(Fault::line_neutral, {one});
    if (!place.nodes[4].empty()) add(Fault::line_earth, {one});
  }
  return asked;
}

std::vector<Complex> solve(const Deck& deck, const std::vector<Asked>& asked) {
  std::vector<Question> questions;
  questions.reserve(asked.size());
  for (const Asked& one : asked) questions.push_back(one.question);
  return ask(deck, questions);
}

// The same with the source's angle chosen for each question by `angle(i)`.
template <typename Angle>
std::vector<Complex> solve_at(const Deck& deck, std::vector<Asked> asked, Angle angle) {
  for (std::size_t i = 0; i < asked.size(); ++i) {
    if (asked[i].source.known) asked[i].question.source = std::polar(asked[i].source.ohms, angle(i));
  }
  return solve(deck, asked);
}

std::vector<Current> currents_of(const Network& network, Condition condition) {
  const Deck deck = build_deck(network, condition);
  const std::vector<Asked> asked = possible_faults(network, deck, condition);
  std::vector<Complex> loop;       // that the current flows through
  std::vector<Complex> inductive;  // that kappa is taken from
  if (!deck.declared_source) {
    loop = inductive = solve(deck, asked);
  } else if (condition == Condition::maximum) {
    loop = solve_at(deck, asked, [&](std::size_t i) { return asked[i].source.least_angle; });
    inductive = solve_at(deck, asked, [&](std::size_t i) { return asked[i].source.most_angle; });
    for (std::size_t i = 0; i < loop.size(); ++i) {
      if (std::abs(inductive[i]) < std::abs(loop[i])) loop[i] = inductive[i];
    }
  } else {
    const std::vector<Complex> rest = solve(deck, asked);
    loop = solve_at(deck, asked, [&](std::size_t i) {
      return std::clamp(std::arg(rest[i]), asked[i].source.least_angle, asked[i].source.most_angle);
    });
    inductive = loop;
  }

  std::vector<Current> currents;
  for (std::size_t i = 0; i < asked.size(); ++i) {
    Current current;
    current.condition = condition;
    current.node = deck.places[static_cast<std::size_t>(asked[i].question.place)].name;
    current.fault = asked[i].question.fault;
    const SourcePart& source = asked[i].source;
    current.amps = source.known ? driving(current.fault, condition) / std::abs(loop[i]) : kUnknown;
    current.peak = condition == Condition::maximum
                       ? kappa(inductive[i].real(), inductive[i].imag()) * std::sqrt(2.0) * current.amps
                       : kUnknown;
    current.x_over_r =
        source.known && source.least_angle == source.most_angle ? loop[i].imag() / loop[i].real() : kUnknown;
    currents.push_back(current);
  }
  return currents;
}

// A ring is known by its circuit's name and stands for its worst place: the middle or the spur end whose
// line-earth (else line-neutral) loop is the largest, so whose current is the least.
std::vector<Current> with_rings(std::vector<Current> currents, const Network& network) {
  for (const Circuit& circuit : network.circuits) {
    if (!circuit.ring) continue;
    const std::string name = circuit.board + "/" + circuit.name;
    std::string worst;
    double least = std::numeric_limits<double>::infinity();
    for (const Current& current : currents) {
      if (current.node.rfind(name + "/", 0) != 0 || current.fault != Fault::line_earth) continue;
      if (worst.empty() || current.amps < least) {
        least = current.amps;
        worst = current.node;
      }
    }
    std::vector<Current> own;
    for (const Current& current : currents) {
      if (current.node != worst) continue;
      own.push_back(current);
      own.back().node = name;
    }
    currents.erase(
        std::remove_if(currents.begin(), currents.end(), [&](const Current& c) { return c.node == name + "/middle"; }),
        currents.end());
    currents.insert(currents.end(), own.begin(), own.end());
  }
  return currents;
}

}  // namespace

const char* word(Condition condition) { return condition == Condition::maximum ? "maximum" : "minimum"; }

const char* word(Fault fault) {
  switch (fault) {
    case Fault::three_phase:
      return "three-phase";
    case Fault::line_line:
      return "line-line";
    case Fault::line_neutral:
      return "line-neutral";
    case Fault::line_earth:
      return "line-earth";
  }
  return "";
}

double test_power_factor(double amps) {
  if (amps <= 3e3) return 0.9;
  if (amps <= 4.5e3) return 0.8;
  if (amps <= 6e3) return 0.7;
  if (amps <= 10e3) return 0.5;
  if (amps <= 20e3) return 0.3;
  if (amps <= 50e3) return 0.25;
  return 0.2;
}

double kappa(double r, double x) { return x > 0 ? 1.02 + 0.98 * std::exp(-3.0 * r / x) : 1.02; }

std::vector<Current> reference_currents(const Network& network) {
  std::vector<Current> all;
  for (const Condition condition : {Condition::maximum, Condition::minimum}) {
    const std::vector<Current> some = with_rings(currents_of(network, condition), network);
    all.insert(all.end(), some.begin(), some.end());
  }
  return all;
}

}  // namespace sunder::reference
