// SPDX-License-Identifier: Apache-2.0
// The equations against what can be worked out by hand, so that wrong ones cannot vouch for the program.
#include <catch2/catch.hpp>
#include <cmath>

#include "tests/reference/meshed_model.h"
#include "tests/reference/meshed_windings.h"

namespace sunder::reference::meshed {

namespace {

constexpr double kRoot3 = 1.7320508075688772;

void check_equal(Complex found, Complex expected) {
  CAPTURE(found, expected);
  CHECK(std::abs(found - expected) <= 1e-9 * std::abs(expected));
}

void check_shares(const std::array<Complex, 3>& found, const std::array<double, 3>& expected) {
  for (std::size_t line = 0; line < 3; ++line) {
    CAPTURE(line, found[line], expected[line]);
    CHECK(std::abs(found[line] - expected[line]) <= 1e-9);
  }
}

Complex amps(const Model& model, const Equations::Solution& solution, const std::string& element,
             std::size_t conductor) {
  for (const Carried& carried : model.carried) {
    if (carried.element != element) continue;
    REQUIRE(carried.amps[conductor].has_value());
    return Equations::value(*carried.amps[conductor], solution);
  }
  FAIL("no element " << element);
  return {};
}

std::array<Complex, 3> line_amps(const Model& model, const Equations::Solution& solution, const std::string& element,
                                 Complex unit) {
  std::array<Complex, 3> all;
  for (std::size_t line = 0; line < 3; ++line) all[line] = amps(model, solution, element, line) / unit;
  return all;
}

constexpr Has kHigh{true, true, true, false, false};
constexpr Has kAll{true, true, true, true, true};

// 20 kV supply, a transformer, a board.
Network behind(const std::string& primary, const std::string& secondary, int clock) {
  Network n;
  n.boards = {{"hv", 20e3, 20e3 / kRoot3, true, kHigh, false}, {"lv", 400, 230, false, kAll, false}};
  Source grid;
  grid.name = "grid";
  grid.earthing = Earthing::none;
  grid.z1 = {Complex{200, 2000}, Complex{300, 4000}};
  grid.z0 = {Complex{900, 7000}, Complex{900, 8000}};
  n.sources = {grid};
  Transformer t;
  t.name = "T1";
  t.from = 0;
  t.to = 1;
  t.primary_group = primary;
  t.secondary_group = secondary;
  t.clock = clock;
  t.rating = 630e3;
  t.uk = 0.06;
  t.losses = 6500;
  t.primary = 20e3;
  t.secondary = 410;
  t.tap = -0.05;
  t.z0_given = true;
  t.r0_over_r1 = 1.3;
  t.x0_over_x1 = 0.8;
  n.transformers = {t};
  return n;
}

Equations::Solution solve(const Network& n, const Model& model, const std::string& place, const Asked& asked) {
  return model.equations.close(closings(n, Condition::maximum, model.place(place), asked));
}

}  // namespace

TEST_CASE("behind a transformer of each group the currents are those of symmetrical components", "[meshed-hand]") {
  struct Group {
    const char *primary, *secondary;
    int clock;
    bool passes_zero;
  };
  // Only a unit with both stars earthed lets zero sequence through.
  const auto group = GENERATE(Group{"D", "yn", 11, false}, Group{"D", "yn", 5, false}, Group{"Y", "zn", 1, false},
                              Group{"D", "zn", 4, false}, Group{"Y", "yn", 0, false}, Group{"YN", "yn", 6, true},
                              Group{"Y", "zn", 7, false}, Group{"YN", "zn", 9, false});
  CAPTURE(group.primary, group.secondary, group.clock);
  const Network n = behind(group.primary, group.secondary, group.clock);
  const Model model = build_model(n, Condition::maximum);
  // By hand: Z_T = 0.06 * 410^2 / 630e3 = 16.00952 mohm, R_T = 6500 * 410^2 / 630e3^2 = 2.752960 mohm;
  // ratio 20e3 * 0.95 / 410 = 46.34146.
  const double r = 6500.0 * 410 * 410 / 630e3 / 630e3;
  const double x = std::sqrt(std::pow(0.06 * 410 * 410 / 630e3, 2) - r * r);
  const double ratio = 20e3 * 0.95 / 410;
  const Complex z1 = Complex{r, x} + Complex{0.2, 2.0} / ratio / ratio;
  const Complex z0 = Complex{1.3 * r, 0.8 * x} + (group.passes_zero ? Complex{0.9, 7.0} / ratio / ratio : 0.0);

  const auto three = solve(n, model, "lv", {Fault::three_phase, {0, 1, 2}});
  check_equal(into_fault({Fault::three_phase, {0, 1, 2}}, three)[0], 1.1 * 400 / kRoot3 / z1);
  const auto two = solve(n, model, "lv", {Fault::line_line, {1, 2}});
  check_equal(two.closing[0], 1.1 * 400 / (2.0 * z1));
  for (const Fault fault : {Fault::line_neutral, Fault::line_earth}) {
    const auto one = solve(n, model, "lv", {fault, {0}});
    check_equal(one.closing[0], 1.1 * 230.0 * 3.0 / (2.0 * z1 + z0));
  }
  // Two lines and earth: the sum of both is 3 U / (Z1 + 2 Z0), against the line that is left out.
  const auto both = solve(n, model, "lv", {Fault::two_lines_earth, {0, 1}});
  const double third = 2.0 * 3.14159265358979323846 / 3.0;
  check_equal(both.closing[0] + both.closing[1], -std::polar(1.1 * 230.0 * 3.0, third) / (z1 + 2.0 * z0));
}

TEST_CASE("a three-phase current on the primary lags as the clock number says", "[meshed-hand]") {
  for (const auto& [primary, secondary, first] :
       {std::tuple{"D", "yn", 1}, std::tuple{"Y", "yn", 0}, std::tuple{"Y", "zn", 1}, std::tuple{"D", "zn", 0},
        std::tuple{"YN", "yn", 0}}) {
    for (int clock = first; clock < 12; clock += 2) {
      CAPTURE(primary, secondary, clock);
      const Network n = behind(primary, secondary, clock);
      const Model model = build_model(n, Condition::maximum);
      const auto fault = solve(n, model, "lv", {Fault::three_phase, {0, 1, 2}});
      const double ratio = 20e3 * 0.95 / 410;
      const Complex turned = std::polar(1.0, 3.14159265358979323846 / 6.0 * clock);  // the primary is ahead
      check_equal(amps(model, fault, "T1 primary", 0) * ratio, amps(model, fault, "T1 secondary", 0) * turned);
    }
  }
}

TEST_CASE("a Dyn unit takes 1:1:0 for a line-earth fault and 2:1:1 for one between lines", "[meshed-hand]") {
  const Network n = behind("D", "yn", 11);
  const Model model = build_model(n, Condition::maximum);
  const double turns = 20e3 * 0.95 * kRoot3 / 410;  // of a delta coil for one of a star coil
  // Dyn11: coil a of the secondary lies on the leg between primary lines A and B.
  const auto earth = solve(n, model, "lv", {Fault::line_earth, {0}});
  check_shares(line_amps(model, earth, "T1 primary", earth.closing[0] / turns), {1, -1, 0});
  const auto lines = solve(n, model, "lv", {Fault::line_line, {0, 1}});
  check_shares(line_amps(model, lines, "T1 primary", lines.closing[0] / turns), {1, -2, 1});
  check_shares(line_amps(model, lines, "grid", lines.closing[0] / turns), {1, -2, 1});
  // All of it comes back to the star point of the transformer; none through the neutral of the 20 kV side.
  check_equal(amps(model, earth, "T1 secondary", kN), -earth.closing[0]);
}

TEST_CASE("a Yzn unit takes 1:-2:1 between lines, and 1:-1:0 for a line-earth fault", "[meshed-hand]") {
  const Network n = behind("Y", "zn", 11);
  const Model model = build_model(n, Condition::maximum);
  const double turns = 20e3 * 0.95 * kRoot3 / 410;  // of a star coil (U/sqrt 3) for a half coil (U/3)
  const auto earth = solve(n, model, "lv", {Fault::line_earth, {0}});
  check_shares(line_amps(model, earth, "T1 primary", earth.closing[0] / turns), {1, -1, 0});
  const auto lines = solve(n, model, "lv", {Fault::line_line, {0, 1}});
  check_shares(line_amps(model, lines, "T1 primary", lines.closing[0] / turns), {1, -2, 1});
}

TEST_CASE("a Yyn unit with a declared Z0 takes 2:-1:-1 for a line-earth fault", "[meshed-hand]") {
  const Network n = behind("Y", "yn", 0);
  const Model model = build_model(n, Condition::maximum);
  const double ratio = 20e3 * 0.95 / 410;
  const auto earth = solve(n, model, "lv", {Fault::line_earth, {0}});
  check_shares(line_amps(model, earth, "T1 primary", earth.closing[0] / ratio / 3.0), {2, -1, -1});
}

TEST_CASE("a delta behind an earthed star is an earth of its own on the primary side", "[meshed-hand]") {
  Network n = behind("YN", "d", 5);
  n.boards[1] = {"mv", 6e3, 6e3 / kRoot3, true, kHigh, false};
  n.transformers[0].secondary = 6e3;
  n.transformers[0].z0_given = false;
  n.transformers[0].r0_over_r1 = n.transformers[0].x0_over_x1 = 1;
  n.transformers[0].tap = 0;
  n.transformers[0].earthing = Earthing::none;
  n.transformers[0].primary_star = {StarPoint::Kind::impedance, Complex{5, 1}};
  // The 6 kV side has its earth from a transformer of its own that nothing feeds.
  Source far;
  far.name = "far";
  far.board = 1;
  far.earthing = Earthing::none;
  far.z1 = far.z0 = {Complex{0, 1e9}, Complex{0, 1e9}};
  n.sources.push_back(far);
  const Model model = build_model(n, Condition::maximum);
  const Complex zt = short_circuit_ohms(0.06, 6500, 630e3, 20e3);
  const Complex own{0.9, 7.0};
  const Complex delta = zt + 3.0 * Complex{5, 1};
  const Complex z1 = Complex{0.2, 2.0} * (1.0 + 1e-12);  // beside the megohm on the 6 kV side
  const Complex z0 = own * delta / (own + delta);
  const auto earth = solve(n, model, "hv", {Fault::line_earth, {2}});
  const Complex expected = 1.1 * 20e3 / kRoot3 * 3.0 / (2.0 * z1 + z0);
  CHECK(std::abs(std::abs(earth.closing[0]) - std::abs(expected)) < 1e-6 * std::abs(expected));
  // What comes from the transformer is zero sequence alone: a third of its share in each line.
  const Complex share = earth.closing[0] * own / (own + delta) / 3.0;
  for (std::size_t line = 0; line < 3; ++line) {
    CHECK(std::abs(amps(model, earth, "T1 primary", line) + share) < 1e-5 * std::abs(share));
  }
}

TEST_CASE("the middle of a ring, a spur, and two unequal cables are as by hand", "[meshed-hand]") {
  Network n = behind("D", "yn", 11);
  Circuit ring;
  ring.name = "W1";
  ring.board = 1;
  ring.has = kAll;
  ring.length = {0, 80, 1, false, true};
  ring.ring = true;
  ring.spurs = {{20, 5}};
  n.circuits = {ring};
  n.boards.push_back({"sub", 400, 230, false, kAll, false});
  Run a;
  a.name = "S1";
  a.from = 1;
  a.to = 2;
  a.has = kAll;
  a.length = {0, 30, 1, false, true};
  Run b = a;
  b.name = "S2";
  b.length.metres = 50;
  n.runs = {a, b};
  const Model model = build_model(n, Condition::maximum);
  const auto loop = [&](const std::string& place) {
    return 1.1 * 230 / solve(n, model, place, {Fault::line_earth, {1}}).closing[0] /
           std::polar(1.0, 2.0 * 3.14159265358979323846 / 3.0);
  };
  const Complex per_metre = 2.0 * Complex{cables()[0].r20, cables()[0].x} * 1e-3;
  const Complex board = loop("lv");
  check_equal(loop("lv/W1/middle") - board, per_metre * 20.0);
  check_equal(loop("lv/W1/spur1") - board, per_metre * (80 * 0.25 * 0.75 + 5));
  check_equal(loop("sub") - board, per_metre * (30.0 * 50.0 / 80.0));
  const auto earth = solve(n, model, "sub", {Fault::line_earth, {1}});
  check_equal(amps(model, earth, "S1", 1), earth.closing[0] * (5.0 / 8.0));
  check_equal(amps(model, earth, "S2", kPE), -earth.closing[0] * (3.0 / 8.0));
}

TEST_CASE("a fault closed in the whole system of equations is the same, and faults are reciprocal", "[meshed-hand]") {
  const unsigned seed = GENERATE(1U, 7U, 15U, 20U, 44U, 82U);
  CAPTURE(seed);
  const Network n = random_network(seed);
  const Model model = build_model(n, Condition::maximum);
  const Place& here = model.places.front();
  const Place& there = model.places.back();
  REQUIRE(here.has(0));
  REQUIRE(there.has(kPE));
  const std::size_t line = there.has(0) ? 0 : there.has(1) ? 1 : 2;
  std::vector<Equations::Closing> both = {{here.node[0], here.has(1) ? here.node[1] : here.node[kPE], 100.0},
                                          {there.node[line], there.node[kPE], 0.0}};
  const auto one = model.equations.close(both);
  const auto afresh = model.equations.close_afresh(both);
  for (std::size_t k = 0; k < both.size(); ++k) {
    CHECK(std::abs(one.closing[k] - afresh.closing[k]) <= 1e-7 * std::abs(one.closing[0]));
  }
  const auto drift = (one.unknowns - afresh.unknowns).cwiseAbs().maxCoeff();
  CHECK(drift <= 1e-7 * afresh.unknowns.cwiseAbs().maxCoeff());
  // The force in the one place drives in the other what the force there drives here.
  std::swap(both[0].volts, both[1].volts);
  const auto other = model.equations.close(both);
  CHECK(std::abs(other.closing[0] - one.closing[1]) <= 1e-9 * std::abs(one.closing[0]));
}

TEST_CASE("currents that ideal connections share are known in sum only", "[meshed-hand]") {
  Equations eq;
  const int a = eq.node();
  const int b = eq.node();
  eq.branch(a, Equations::kEarth, 1.0);
  const auto first = eq.join(a, b);
  const auto second = eq.join(a, b);
  eq.finish();
  CHECK_FALSE(eq.determinate(first));
  CHECK_FALSE(eq.determinate(second));
  CHECK(eq.determinate(first + second));
  const auto solution = eq.close({{b, Equations::kEarth, 5.0}});
  check_equal(Equations::value(first + second, solution), 5.0);
}

}  // namespace sunder::reference::meshed
