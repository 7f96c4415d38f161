// SPDX-License-Identifier: Apache-2.0
// Laws of the equations themselves, on random conductor networks: reciprocity, balance, and what stripping,
// merging and elimination leave unchanged.
#include <algorithm>
#include <random>

#include "tests/laws/check_law.h"
#include "tests/solver/dense_grid.h"

namespace {

using namespace sunder;
using models::Conductor;
using solver::Complex;
using solver::Grid;

constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};

tests::GridPlan plan(int nodes) {
  std::mt19937 engine(static_cast<unsigned>(*rc::gen::inRange(0, 1 << 30)));
  tests::PlanLimits limits;
  limits.nodes = nodes;
  return tests::random_plan(engine, limits);
}

Grid solved(const tests::GridPlan& plan) {
  Grid grid = tests::grid_of(plan);
  grid.prepare();
  RC_ASSERT(grid.solve(true));
  return grid;
}

// A terminal that exists and whose currents to earth are defined.
int some_terminal(const tests::GridPlan& plan, const Grid& grid) {
  std::vector<int> all;
  for (std::size_t n = 0; n < plan.nodes.size(); ++n)
    for (const Conductor c : kAll)
      if (plan.nodes[n].has(c) && grid.earthed(Grid::terminal(static_cast<int>(n), c)))
        all.push_back(Grid::terminal(static_cast<int>(n), c));
  return *rc::gen::elementOf(all);
}

TEST_CASE("What a current here raises there, the same current there raises here") {
  laws::check_law([] {
    const tests::GridPlan network = plan(30);
    const Grid grid = solved(network);
    const int a = some_terminal(network, grid);
    const int b = some_terminal(network, grid);
    const Complex ab = grid.potentials({{a, 1.0}})[static_cast<std::size_t>(b)];
    const Complex ba = grid.potentials({{b, 1.0}})[static_cast<std::size_t>(a)];
    const Complex aa = grid.potentials({{a, 1.0}})[static_cast<std::size_t>(a)];
    RC_ASSERT(std::abs(ab - ba) < 1e-9 * std::max(std::abs(aa), 1e-3));
  });
}

TEST_CASE("Potentials are those of the dense equations, nothing stripped, merged or eliminated") {
  laws::check_law([] {
    const tests::GridPlan network = plan(7);
    const Grid grid = solved(network);
    const int a = some_terminal(network, grid);
    const tests::DenseGrid dense(network);
    const std::vector<Complex> found = grid.potentials({{a, 100.0}});
    const Eigen::VectorXcd expected = dense.potentials({{a, 100.0}});
    const double scale = std::max(1.0, expected.cwiseAbs().maxCoeff());  // volts of a place at earth are rounding
    for (std::size_t n = 0; n < network.nodes.size(); ++n)
      for (const Conductor c : kAll) {
        const int terminal = Grid::terminal(static_cast<int>(n), c);
        if (!network.nodes[n].has(c) || !grid.earthed(terminal)) continue;
        RC_ASSERT(std::abs(found[static_cast<std::size_t>(terminal)] - expected(terminal)) < 1e-9 * scale);
      }
  });
}

TEST_CASE("Thevenin and transfer impedances are the potentials that one ampere raises") {
  laws::check_law([] {
    const tests::GridPlan network = plan(30);
    const Grid factors = solved(network);
    Grid grid = tests::grid_of(network);
    grid.prepare();
    RC_ASSERT(grid.solve());
    const tests::GridPlan::Run run = *rc::gen::elementOf(network.runs);
    for (const Conductor c : kAll) {
      const int from = Grid::terminal(run.from, c);
      const bool there = network.nodes[static_cast<std::size_t>(run.from)].has(c);
      if (!there || !grid.earthed(from)) continue;
      const std::vector<Complex> volts = factors.potentials({{from, 1.0}});
      const auto i = static_cast<int>(index(c));
      for (const int node : {run.from, run.to})
        for (const Conductor d : kAll) {
          const int terminal = Grid::terminal(node, d);
          if (!network.nodes[static_cast<std::size_t>(node)].has(d) || !grid.earthed(terminal)) continue;
          const Complex z = grid.transfer(run.from, node)(i, static_cast<int>(index(d)));
          RC_ASSERT(std::abs(z - volts[static_cast<std::size_t>(terminal)]) < 1e-9 * std::max(1.0, std::abs(z)));
        }
    }
  });
}

}  // namespace
