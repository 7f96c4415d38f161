// SPDX-License-Identifier: Apache-2.0
#include "solver/grid.h"

#include <catch2/catch.hpp>

#include "tests/solver/dense_grid.h"

using namespace sunder;
using models::Conductor;
using models::ConductorSet;
using solver::Complex;
using solver::Grid;
using solver::RunImpedance;
using tests::DenseGrid;
using tests::GridPlan;

namespace {

constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};
const ConductorSet kFive{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};
constexpr auto kN = Conductor::N;
constexpr auto kPE = Conductor::PE;
constexpr auto kL1 = Conductor::L1;

int t(int node, Conductor c) { return Grid::terminal(node, c); }

bool near(Complex a, Complex b, double scale = 1) { return std::abs(a - b) <= 1e-9 * std::max(scale, std::abs(b)); }

// Resistances from each line to the neutral of a node.
void add_source(GridPlan& plan, int node, double ohms) {
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3}) {
    Eigen::MatrixXcd y(2, 2);
    y << 1, -1, -1, 1;
    plan.elements.push_back({{t(node, c), t(node, kN)}, {0, 0}, y / ohms});
  }
}

// Impedance that a loop from one conductor to another of a node meets.
Complex loop(const Grid& grid, int node, Conductor a, Conductor b) {
  const solver::ConductorMatrix z = grid.thevenin(node);
  const auto i = static_cast<int>(index(a));
  const auto j = static_cast<int>(index(b));
  return z(i, i) + z(j, j) - z(i, j) - z(j, i);
}

Complex dense_loop(const DenseGrid& dense, int a, int b) {
  const Eigen::VectorXcd v = dense.potentials({{a, 1.0}, {b, -1.0}});
  return v(a) - v(b);
}

// A supply of 1 ohm a line on node 0, its star earthed there and joined to PE.
GridPlan one_supply(int nodes) {
  GridPlan plan;
  plan.nodes.assign(static_cast<std::size_t>(nodes), kFive);
  add_source(plan, 0, 1);
  plan.joins = {{t(0, kN), t(0, kPE)}, {t(0, kN), Grid::kEarth}};
  return plan;
}

Grid solved(const GridPlan& plan, bool factors_only = false) {
  Grid grid = tests::grid_of(plan);
  grid.prepare();
  REQUIRE(grid.solve(factors_only));
  return grid;
}

}  // namespace

TEST_CASE("A loop down a branching network is the source and the runs in series", "[grid]") {
  GridPlan plan = one_supply(4);
  plan.runs = {
      {0, 1, kFive, {1, 2, 4, false}}, {2, 1, kFive, {8, 16, 32, false}}, {1, 3, kFive, {0.5, 0.25, 0.125, false}}};
  const Grid grid = solved(plan);
  CHECK(near(loop(grid, 0, kL1, kN), 1.0));
  CHECK(near(loop(grid, 1, kL1, kN), 1.0 + 1 + 2));
  CHECK(near(loop(grid, 2, kL1, kN), 1.0 + 3 + 24));
  CHECK(near(loop(grid, 2, kL1, kPE), 1.0 + 5 + 40));
  CHECK(near(loop(grid, 2, kL1, Conductor::L2), 2.0 + 2 + 16));
  CHECK(near(loop(grid, 3, kN, kPE), 6.375));
  CHECK(grid.feeder(2) == 1);
  CHECK(grid.hangs_on(2) == 0);
  CHECK(near(grid.transfer(1, 2)(0, 0), 2.0));
  CHECK(near(grid.transfer(2, 1)(3, 3), 2.0));
  CHECK(near(grid.transfer(2, 2)(4, 4), 36.0));
}

TEST_CASE("A PEN is one conductor for both, joined at both its ends", "[grid]") {
  // 0 -PEN 3 ohm- 1 -N 2 ohm, PE 4 ohm- 2.
  GridPlan plan = one_supply(3);
  plan.runs = {{0, 1, kFive, {1, 3, 99, true}}, {1, 2, kFive, {1, 2, 4, false}}};
  const Grid grid = solved(plan);
  CHECK(near(loop(grid, 1, kL1, kN), 1.0 + 1 + 3));
  CHECK(near(loop(grid, 1, kL1, kPE), 1.0 + 1 + 3));
  CHECK(near(loop(grid, 1, kN, kPE), 0.0));
  CHECK(near(loop(grid, 2, kL1, kN), 5.0 + 1 + 2));
  CHECK(near(loop(grid, 2, kL1, kPE), 5.0 + 1 + 4));
  CHECK(near(loop(grid, 2, kN, kPE), 6.0));
}

TEST_CASE("A PEN below a run with separate conductors puts those in parallel", "[grid]") {
  // 0 -N 2, PE 4- 1 -PEN- 2: N and PE of node 1 are one potential, the way back is 2 || 4.
  GridPlan plan = one_supply(3);
  plan.runs = {{0, 1, kFive, {1, 2, 4, false}}, {1, 2, kFive, {1, 3, 99, true}}};
  const Grid grid = solved(plan);
  CHECK(near(loop(grid, 1, kL1, kN), 2.0 + 8.0 / 6.0));
  CHECK(near(loop(grid, 2, kL1, kPE), 3.0 + 8.0 / 6.0 + 3.0));
}

TEST_CASE("A ring divides its current as its two ways do", "[grid]") {
  GridPlan plan = one_supply(3);
  plan.runs = {{0, 1, kFive, {1, 1, 1, false}}, {1, 2, kFive, {2, 2, 2, false}}, {2, 0, kFive, {3, 3, 3, false}}};
  const Grid grid = solved(plan);
  CHECK(near(loop(grid, 1, kL1, kN), 1.0 + 2 * (1.0 * 5 / 6)));
  CHECK(near(loop(grid, 2, kL1, kN), 1.0 + 2 * (3.0 * 3 / 6)));
  const Grid factors = solved(plan, true);
  const std::vector<Complex> v = factors.potentials({{t(1, kL1), 6.0}, {t(1, kN), -6.0}});
  CHECK(near(factors.run_current(0, v)(0), -5.0));
  CHECK(near(factors.run_current(1, v)(0), 1.0));
  CHECK(near(factors.run_current(2, v)(0), 1.0));
  CHECK(near(factors.run_current(0, v)(3), 5.0));
}

TEST_CASE("A join is one node, also in a loop of joins", "[grid]") {
  GridPlan plan = one_supply(4);
  plan.runs = {{0, 1, kFive, {1, 1, 1, false}}, {0, 2, kFive, {1, 1, 1, false}}};
  for (const Conductor c : kAll)
    for (const auto& [a, b] : {std::pair{1, 2}, std::pair{2, 3}, std::pair{3, 1}})
      plan.joins.emplace_back(t(a, c), t(b, c));
  const Grid grid = solved(plan);
  for (const int node : {1, 2, 3}) CHECK(near(loop(grid, node, kL1, kPE), 1.0 + 0.5 + 0.5));
}

TEST_CASE("What nothing ties to earth says so, and its currents between conductors stand", "[grid]") {
  GridPlan plan = one_supply(3);
  plan.joins = {{t(0, kN), t(0, kPE)}};  // no earth
  plan.runs = {{0, 1, kFive, {1, 2, 4, false}}, {1, 2, kFive, {1, 2, 4, false}}};
  Eigen::MatrixXcd y(2, 2);
  y << 1, -1, -1, 1;
  plan.elements.push_back({{t(1, kL1), t(1, Conductor::L2)}, {0, 1}, y});  // couples, does not connect
  const Grid floating = solved(plan);
  CHECK_FALSE(floating.earthed(t(2, kL1)));
  CHECK_FALSE(floating.connected(t(0, kL1), Grid::kEarth));
  CHECK(floating.connected(t(2, kL1), t(0, kPE)));
  plan.joins.emplace_back(t(2, Conductor::L3), Grid::kEarth);
  const Grid earthed = solved(plan);
  CHECK(earthed.earthed(t(0, kPE)));
  CHECK(earthed.connected(t(0, kL1), Grid::kEarth));
  for (const int node : {0, 1, 2})
    for (const Conductor a : kAll)
      for (const Conductor b : kAll) CHECK(near(loop(floating, node, a, b), loop(earthed, node, a, b)));
}

TEST_CASE("Windings do not connect what they couple", "[grid]") {
  GridPlan plan = one_supply(2);
  Eigen::MatrixXcd y(4, 4);
  y << 1, -1, -2, 2, -1, 1, 2, -2, -2, 2, 4, -4, 2, -2, -4, 4;  // one phase, ratio 1:2
  plan.elements.push_back({{t(0, kL1), t(0, kN), t(1, kL1), t(1, kN)}, {0, 0, 1, 1}, y});
  const Grid grid = solved(plan);
  CHECK(grid.earthed(t(0, kL1)));
  CHECK_FALSE(grid.earthed(t(1, kL1)));
  CHECK_FALSE(grid.connected(t(0, kL1), t(1, kL1)));
  CHECK(grid.connected(t(1, kN), t(1, kL1)));
  CHECK_FALSE(grid.connected(t(1, kN), t(1, kPE)));
  // Behind 1 ohm, own impedance 1 ohm of the first side: (1 + 1)/4 at the second.
  CHECK(near(loop(grid, 1, kL1, kN), 0.5));
}

TEST_CASE("Random grids have the loops, potentials and currents of their dense equations", "[grid]") {
  std::mt19937 engine(GENERATE(range(1U, 41U)));
  tests::PlanLimits limits;
  limits.earthed = engine() % 4 != 0;
  const GridPlan plan = tests::random_plan(engine, limits);
  const DenseGrid dense(plan);
  const Grid grid = solved(plan);
  for (int node = 0; node < static_cast<int>(plan.nodes.size()); ++node)
    for (const Conductor a : kAll)
      for (const Conductor b : kAll) {
        const ConductorSet has = plan.nodes[static_cast<std::size_t>(node)];
        if (!(a < b) || !has.has(a) || !has.has(b) || !grid.connected(t(node, a), t(node, b))) continue;
        INFO("node " << node << " " << name(a) << "-" << name(b));
        const Complex expected = dense_loop(dense, t(node, a), t(node, b));
        INFO(loop(grid, node, a, b) << " is " << expected);
        CHECK(near(loop(grid, node, a, b), expected, 0.01));
      }
  const Grid factors = solved(plan, true);
  const int at = static_cast<int>(engine() % plan.nodes.size());
  if (!grid.connected(t(at, kL1), t(at, kPE))) return;
  const std::vector<Grid::Injection> fault{{t(at, kL1), -1000.0}, {t(at, kPE), 1000.0}};
  const std::vector<Complex> v = factors.potentials(fault);
  const Eigen::VectorXcd w = dense.potentials(fault);
  for (const GridPlan::Run& run : plan.runs)
    for (const Conductor c : kAll)
      if (run.carried.has(c))
        CHECK(near(v[static_cast<std::size_t>(t(run.from, c))] - v[static_cast<std::size_t>(t(run.to, c))],
                   w(t(run.from, c)) - w(t(run.to, c))));
  for (std::size_t k = 0; k < v.size(); ++k)
    if (plan.nodes[k / Grid::kSlots].has(kAll[std::min<std::size_t>(k % Grid::kSlots, 4)]) && k % Grid::kSlots < 5 &&
        grid.earthed(static_cast<int>(k)))
      CHECK(near(v[k], w(static_cast<Eigen::Index>(k))));
}

TEST_CASE("A grid tells how far its solution is from the equations", "[grid]") {
  std::mt19937 engine(GENERATE(range(1U, 11U)));
  tests::PlanLimits limits;
  Grid grid = tests::grid_of(tests::random_plan(engine, limits));
  grid.prepare();
  CHECK(grid.residual() < 1e-6);
  // An impedance of nothing beside one of everything leaves rounding behind.
  GridPlan plan = one_supply(3);
  plan.runs = {{0, 1, kFive, {1e-14, 1e-14, 1e-14, false}},
               {1, 2, kFive, {1e6, 1e6, 1e6, false}},
               {2, 0, kFive, {1e6, 1e6, 1e6, false}}};
  Grid stiff = tests::grid_of(plan);
  stiff.prepare();
  CHECK(stiff.residual() > 1e-6);
}

TEST_CASE("Stripping changes nothing", "[grid]") {
  std::mt19937 engine(GENERATE(range(201U, 221U)));
  GridPlan plan = tests::random_plan(engine, {20, true, true, true, true});
  const Grid stripped = solved(plan);
  // An element without admittance keeps its node from being stripped.
  for (int node = 0; node < static_cast<int>(plan.nodes.size()); ++node)
    plan.elements.push_back({{t(node, kL1), Grid::kEarth}, {0, 1}, Eigen::MatrixXcd::Zero(2, 2)});
  const Grid whole = solved(plan);
  for (int node = 0; node < static_cast<int>(plan.nodes.size()); ++node) {
    CHECK(whole.feeder(node) == -1);
    const double scale = whole.thevenin(node).cwiseAbs().maxCoeff();
    for (const Conductor a : kAll)
      for (const Conductor b : kAll) {
        if (!stripped.connected(t(node, a), t(node, b)) || !stripped.earthed(t(node, a))) continue;
        const auto i = static_cast<int>(index(a));
        const auto j = static_cast<int>(index(b));
        CHECK(near(stripped.thevenin(node)(i, j), whole.thevenin(node)(i, j), scale));
      }
  }
  for (const GridPlan::Run& run : plan.runs) {
    const solver::ConductorMatrix a = stripped.transfer(run.from, run.to);
    const solver::ConductorMatrix b = whole.transfer(run.from, run.to);
    for (int i = 0; i < 5; ++i)
      if (run.carried.has(kAll[i]) && stripped.earthed(t(run.from, kAll[i]))) CHECK(near(a(i, i), b(i, i), 0.01));
  }
}

TEST_CASE("Other values on the same grid give what a new one gives", "[grid]") {
  std::mt19937 engine(GENERATE(range(301U, 309U)));
  GridPlan plan = tests::random_plan(engine);
  Grid grid = solved(plan);
  for (std::size_t r = 0; r < plan.runs.size(); ++r) {
    RunImpedance& z = plan.runs[r].z;
    z = {z.line * 1.5, z.neutral * 2.0, z.protective * 0.5, z.pen};
    grid.set_run(static_cast<int>(r), z);
  }
  for (std::size_t e = 0; e < plan.elements.size(); ++e) {
    plan.elements[e].y *= 0.7;
    grid.set_element(static_cast<int>(e), plan.elements[e].y);
  }
  REQUIRE(grid.solve());
  const Grid fresh = solved(plan);
  for (int node = 0; node < static_cast<int>(plan.nodes.size()); ++node)
    CHECK((grid.thevenin(node) - fresh.thevenin(node)).cwiseAbs().maxCoeff() < 1e-12);
}

TEST_CASE("Impedances that cancel are told and their node named", "[grid]") {
  // 1 ohm to earth beside -1 ohm to earth: no potential is defined.
  GridPlan plan;
  plan.nodes = {{kL1}, {kL1}};
  Eigen::MatrixXcd y(2, 2);
  y << 1, -1, -1, 1;
  plan.elements = {{{t(1, kL1), Grid::kEarth}, {0, 0}, y},
                   {{t(1, kL1), Grid::kEarth}, {0, 0}, -y},
                   {{t(0, kL1), Grid::kEarth}, {0, 0}, y}};
  Grid grid = tests::grid_of(plan);
  grid.prepare();
  CHECK_FALSE(grid.solve());
  CHECK(grid.trouble_node() == 1);
}

TEST_CASE("A line that only an unloaded transformer touches has no potential, and that is told", "[grid]") {
  // Node 1 gets L1 and L3; a delta there carries no current while its star at node 2 is open.
  GridPlan plan = one_supply(3);
  ConductorSet two = kFive;
  two.remove(Conductor::L2);
  plan.runs = {{0, 1, two, {{0.0737, 0.031}, {0.1, 0.05}, {0.1, 0.03}, false}}};
  Eigen::MatrixXcd coils = Eigen::MatrixXcd::Zero(3, 7);  // star voltage minus the induced one
  for (int k = 0; k < 3; ++k) {
    coils(k, k) = -0.3;
    coils(k, (k + 1) % 3) = 0.3;
    coils(k, 3 + k) = 1;
    coils(k, 6) = -1;
  }
  const Eigen::MatrixXcd y = coils.transpose() * coils / Complex{0.0123, 0.0371};
  std::vector<int> terminals;
  for (const int node : {1, 2})
    for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3}) terminals.push_back(t(node, c));
  terminals.push_back(t(2, kN));
  plan.elements.push_back({terminals, {0, 0, 0, 1, 1, 1, 1}, y});
  Grid grid = tests::grid_of(plan);
  grid.prepare();
  CHECK_FALSE(grid.solve());
}

TEST_CASE("A copy of a prepared grid has values of its own", "[grid]") {
  // Equal lines throughout, as most networks have; then one with a line that differs.
  const bool equal = GENERATE(true, false);
  GridPlan plan = one_supply(3);
  plan.runs = {{0, 1, kFive, {1, 2, 4, false}}, {1, 2, kFive, {1, 2, 4, false}}, {2, 0, kFive, {1, 2, 4, false}}};
  if (!equal) {
    Eigen::MatrixXcd y(2, 2);
    y << 1, -1, -1, 1;
    plan.elements.push_back({{t(1, kL1), t(1, kN)}, {0, 0}, y});
  }
  Grid grid = tests::grid_of(plan);
  grid.prepare();
  Grid copy = grid;
  for (int r = 0; r < 3; ++r) copy.set_run(r, {10, 20, 40, false});
  REQUIRE(grid.solve());
  const Complex before = loop(grid, 1, kL1, kN);
  REQUIRE(copy.solve());
  CHECK(near(loop(grid, 1, kL1, kN), before));
  if (equal) CHECK(near(before, 1.0 + 2.0 / 3 + 4.0 / 3));
  if (equal) CHECK(near(loop(copy, 1, kL1, kN), 1.0 + 20.0 / 3 + 40.0 / 3));
}

TEST_CASE("A star point of its own that nothing earths leaves equal lines floating", "[grid]") {
  GridPlan plan;
  const ConductorSet lines{Conductor::L1, Conductor::L2, Conductor::L3};
  plan.nodes = {lines, lines};
  plan.extra = {0};
  plan.runs = {{0, 1, lines, {2, {}, {}, false}}};
  const int star = static_cast<int>(models::kConductors);  // of node 0
  Eigen::MatrixXcd y = Eigen::MatrixXcd::Zero(4, 4);
  for (int k = 0; k < 3; ++k) {
    y(k, k) = 1;
    y(k, 3) = y(3, k) = -1;
    y(3, 3) += 1;
  }
  plan.elements = {{{t(0, kL1), t(0, Conductor::L2), t(0, Conductor::L3), star}, {0, 0, 0, 0}, y}};
  const Grid floating = solved(plan);
  CHECK_FALSE(floating.earthed(t(0, kL1)));
  CHECK_FALSE(floating.earthed(t(1, Conductor::L3)));
  CHECK(near(loop(floating, 1, kL1, Conductor::L2), 6.0));
  plan.joins = {{star, Grid::kEarth}};
  const Grid earthed = solved(plan);
  CHECK(earthed.earthed(t(1, kL1)));
  CHECK(near(earthed.thevenin(1)(0, 0), 3.0));
  CHECK(near(loop(earthed, 1, kL1, Conductor::L2), 6.0));
}
