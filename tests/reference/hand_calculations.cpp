// SPDX-License-Identifier: Apache-2.0
// The decks themselves against calculations by hand, so that a wrong deck cannot vouch for the program.
#include <catch2/catch.hpp>
#include <cmath>
#include <complex>

#include "tests/reference/currents.h"
#include "tests/reference/deck.h"
#include "tests/reference/network.h"

namespace sunder::reference {

namespace {

using Complex = std::complex<double>;
using Catch::WithinAbs;
using Catch::WithinRel;

int place_of(const Deck& deck, const std::string& name) {
  for (std::size_t i = 0; i < deck.places.size(); ++i) {
    if (deck.places[i].name == name) return static_cast<int>(i);
  }
  FAIL("no place " << name);
  return -1;
}

void check_equal(Complex found, Complex expected) {
  CAPTURE(found, expected);
  CHECK(std::abs(found - expected) <= 1e-6 * std::abs(expected));
}

Network transformer_alone() {
  Network n;
  n.source.transformer = true;
  n.source.rating = 500e3;
  n.source.uk = 0.0475;
  n.source.losses = 5100;
  n.source.secondary = 433;
  n.source.fault_level_max = 250e6;
  n.source.fault_level_min = 110e6;
  n.source.z0_over_z1 = 0.9;
  n.boards = {{"main"}};
  return n;
}

}  // namespace

TEST_CASE("the windings of a Dyn transformer give the loops of symmetrical components", "[hand]") {
  const Network n = transformer_alone();
  // By hand: Z_T = 0.0475 * 433^2 / 500e3 = 17.81146 mohm; R_T = 5100 * 433^2 / 500e3^2 = 3.82478 mohm;
  // X_T = 17.39595 mohm. Z_Q = 1.1 * 433^2 / 250e6 = 0.824952 mohm, R 0.0995 and X 0.995 of it.
  const Complex zt{3.824776e-3, 17.395949e-3};
  const Complex zq{0.0995 * 0.8249516e-3, 0.995 * 0.8249516e-3};
  const Complex z1 = zt + zq;
  const Complex z0 = 0.9 * zt;  // the delta stops zero sequence: nothing of the network before it
  const Deck deck = build_deck(n, Condition::maximum);
  const auto z = ask(deck, {{0, Fault::three_phase, {0, 1, 2}, {}},
                            {0, Fault::line_line, {1, 2}, {}},
                            {0, Fault::line_neutral, {0}, {}},
                            {0, Fault::line_earth, {2}, {}}});
  check_equal(z[0], z1);
  check_equal(z[1], 2.0 * z1);
  check_equal(z[2], (2.0 * z1 + z0) / 3.0);
  check_equal(z[3], (2.0 * z1 + z0) / 3.0);
}

TEST_CASE("a ring is a quarter of its loop at the middle, and x(1-x) of it at a spur", "[hand]") {
  Network n = transformer_alone();
  n.circuits = {{"main", "W1", "L2", {"lab-flat", 2.5, Cpc::built_in, 80, 1, 0}, true, {{20, 5}}}};
  const Deck deck = build_deck(n, Condition::maximum);
  const auto z = ask(deck, {{place_of(deck, "main"), Fault::line_earth, {1}, {}},
                            {place_of(deck, "main/W1/middle"), Fault::line_earth, {1}, {}},
                            {place_of(deck, "main/W1/spur1"), Fault::line_earth, {1}, {}}});
  const Complex per_metre{(7.41 + 12.1) * 1e-3, 2 * 0.104e-3};
  check_equal(z[1] - z[0], per_metre * 80.0 / 4.0);
  check_equal(z[2] - z[0], per_metre * (80.0 * 0.25 * 0.75 + 5.0));
}

TEST_CASE("hot conductors, armour beside a core, and parallel cables add up as by hand", "[hand]") {
  Network n = transformer_alone();
  n.circuits = {{"main", "W1", "L1 L2 L3", {"lab-swa-four", 35, Cpc::armour_and_core, 50, 2, 0}, false, {}},
                {"main", "W2", "L1", {"lab-swa-two", 10, Cpc::armour, 10, 1, 0}, false, {}}};
  const Deck deck = build_deck(n, Condition::minimum);
  const auto z = ask(deck, {{place_of(deck, "main"), Fault::line_earth, {0}, {}},
                            {place_of(deck, "main/W1"), Fault::line_earth, {0}, {}},
                            {place_of(deck, "main/W2"), Fault::line_earth, {0}, {}}});
  // 90 degC: 0.524 * 1.28 = 0.67072; armour at 80 degC: 1.9 * 1.1 * 1.27 = 2.6543 mohm/m.
  const Complex core{0.67072e-3, 0.082e-3};
  const Complex armour{2.6543e-3, 0.28e-3};
  check_equal(z[1] - z[0], (core + core * armour / (core + armour)) * 25.0);
  // 70 degC: 1.83 * 1.2 = 2.196; armour at 60 degC: 3.9 * 1.1 * 1.18 = 5.0622 mohm/m.
  check_equal(z[2] - z[0], Complex{(2.196 + 5.0622) * 1e-3, (0.092 + 0.29) * 1e-3} * 10.0);
}

TEST_CASE("a declared supply is reproduced in amperes and in ohms at its own terminals", "[hand]") {
  Network n;
  n.source.earthing = Earthing::TN_C_S;
  n.source.maximum.three_phase.amps = 16e3;
  n.source.minimum.line_earth.ohms = 0.35;
  n.boards = {{"intake"}};
  for (const Current& current : reference_currents(n)) {
    CAPTURE(word(current.condition), word(current.fault));
    const bool greatest = current.condition == Condition::maximum;
    // Without a declared neutral all of the loop lies in the line: between lines twice of it.
    const bool between_lines = current.fault == Fault::line_line || current.fault == Fault::three_phase;
    double expected = greatest ? 16e3 : 0.95 * (between_lines ? 400 / std::sqrt(3.0) : 230) / 0.35;
    if (current.fault == Fault::line_line) expected *= std::sqrt(3.0) / 2.0;
    CHECK_THAT(current.amps, WithinRel(expected, 1e-6));
    if (!greatest) continue;
    // 16 kA is tested at a power factor of 0.3: R/X = 0.3 / sqrt(1 - 0.09) = 0.314485.
    const double most = 1.02 + 0.98 * std::exp(-3 * 0.3144855);
    CHECK_THAT(current.peak / current.amps, WithinRel(most * std::sqrt(2.0), 1e-6));
  }
}

TEST_CASE("in TT the electrode closes the earth loop and nothing else", "[hand]") {
  Network n;
  n.source.earthing = Earthing::TT;
  n.source.maximum.three_phase.amps = 6e3;
  n.source.maximum.power_factor = 1.0;
  n.source.minimum.line_earth.ohms = 2.0;
  n.source.minimum.power_factor = 1.0;
  n.electrode = 20;
  n.boards = {{"house"}};
  for (const Current& current : reference_currents(n)) {
    CAPTURE(word(current.condition), word(current.fault));
    if (current.fault == Fault::line_neutral && current.condition == Condition::minimum) {
      CHECK(std::isnan(current.amps));
    } else if (current.fault == Fault::line_earth) {
      const bool greatest = current.condition == Condition::maximum;
      const double ohms = greatest ? 1.1 * 230 / 6e3 + 20 : 22.0;
      CHECK_THAT(current.amps, WithinRel((greatest ? 1.1 : 0.95) * 230 / ohms, 1e-6));
    }
  }
}

}  // namespace sunder::reference
