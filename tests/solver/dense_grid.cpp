// SPDX-License-Identifier: Apache-2.0
#include "tests/solver/dense_grid.h"

namespace sunder::tests {
namespace {

using models::Conductor;
using models::ConductorSet;
using solver::Complex;
using solver::Grid;
using solver::RunImpedance;

constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};

Complex impedance(const RunImpedance& z, Conductor c) {
  if (c == Conductor::N) return z.neutral;
  return c == Conductor::PE ? z.protective : z.line;
}

class Dice {
 public:
  explicit Dice(std::mt19937& engine) : engine_(engine) {}
  int below(int n) { return std::uniform_int_distribution<int>(0, n - 1)(engine_); }
  double real(double low, double high) { return std::uniform_real_distribution<double>(low, high)(engine_); }
  Complex ohms(double size) { return {size * real(0.2, 1), size * real(0, 1)}; }

 private:
  std::mt19937& engine_;
};

// Lines behind equal impedances with a mutual part, to a star point: what a source is.
Eigen::MatrixXcd star(Complex z1, Complex z0) {
  const Complex self = 1.0 / z1;
  const Complex mutual = (1.0 / z0 - 1.0 / z1) / 3.0;
  Eigen::MatrixXcd y(4, 4);
  y.topLeftCorner(3, 3).setConstant(mutual);
  for (int i = 0; i < 3; ++i) y(i, i) += self;
  y.topRightCorner(3, 1).setConstant(-1.0 / z0);
  y.bottomLeftCorner(1, 3).setConstant(-1.0 / z0);
  y(3, 3) = 3.0 / z0;
  return y;
}

Eigen::MatrixXcd one_port(Complex y) {
  Eigen::MatrixXcd m(2, 2);
  m << y, -y, -y, y;
  return m;
}

// Delta at high voltage above a star at low voltage, coils of impedance z: currents by the equations of the coils.
Eigen::MatrixXcd delta_star(double ratio, Complex z) {
  Eigen::MatrixXcd coils = Eigen::MatrixXcd::Zero(3, 7);  // star voltage minus induced one
  for (int k = 0; k < 3; ++k) {
    coils(k, k) = -ratio;
    coils(k, (k + 1) % 3) = ratio;
    coils(k, 3 + k) = 1;
    coils(k, 6) = -1;
  }
  return coils.transpose() * coils / z;
}

}  // namespace

solver::Grid grid_of(const GridPlan& plan) {
  Grid grid;
  for (const ConductorSet& set : plan.nodes) grid.add_node(set);
  for (const int node : plan.extra) grid.add_terminal(node);
  for (const GridPlan::Run& run : plan.runs) grid.add_run(run.from, run.to, run.carried, run.z);
  for (const GridPlan::Element& e : plan.elements) grid.add_element(e.terminals, e.groups, e.y);
  for (const auto& [a, b] : plan.joins) grid.join(a, b);
  return grid;
}

DenseGrid::DenseGrid(const GridPlan& plan) : terminals_(plan.terminals()) {
  std::vector<std::pair<int, int>> joins = plan.joins;
  for (const GridPlan::Run& run : plan.runs) {
    if (run.z.pen)
      for (const int end : {run.from, run.to})
        joins.emplace_back(Grid::terminal(end, Conductor::N), Grid::terminal(end, Conductor::PE));
    for (const Conductor c : kAll)
      if (run.carried.has(c) && !(run.z.pen && c == Conductor::PE) && impedance(run.z, c) == Complex{})
        joins.emplace_back(Grid::terminal(run.from, c), Grid::terminal(run.to, c));
  }
  unknowns_ = terminals_ + static_cast<Eigen::Index>(joins.size());
  Eigen::MatrixXcd a = Eigen::MatrixXcd::Zero(unknowns_, unknowns_);
  for (const GridPlan::Run& run : plan.runs)
    for (const Conductor c : kAll) {
      if (!run.carried.has(c) || (run.z.pen && c == Conductor::PE) || impedance(run.z, c) == Complex{}) continue;
      const Complex y = 1.0 / impedance(run.z, c);
      const int i = Grid::terminal(run.from, c);
      const int j = Grid::terminal(run.to, c);
      a(i, i) += y;
      a(j, j) += y;
      a(i, j) -= y;
      a(j, i) -= y;
    }
  for (const GridPlan::Element& e : plan.elements)
    for (std::size_t i = 0; i < e.terminals.size(); ++i)
      for (std::size_t j = 0; j < e.terminals.size(); ++j)
        if (e.terminals[i] != Grid::kEarth && e.terminals[j] != Grid::kEarth)
          a(e.terminals[i], e.terminals[j]) += e.y(static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(j));
  for (std::size_t k = 0; k < joins.size(); ++k) {
    const auto row = terminals_ + static_cast<Eigen::Index>(k);
    auto enter = [&](int terminal, double sign) {
      if (terminal == Grid::kEarth) return;
      a(row, terminal) += sign;
      a(terminal, row) += sign;
    };
    enter(joins[k].first, 1);
    enter(joins[k].second, -1);
  }
  equations_.setThreshold(1e-11);
  equations_.compute(a);
}

Eigen::VectorXcd DenseGrid::potentials(const std::vector<Grid::Injection>& injections) const {
  Eigen::VectorXcd right = Eigen::VectorXcd::Zero(unknowns_);
  for (const Grid::Injection& injection : injections)
    if (injection.terminal != Grid::kEarth) right(injection.terminal) += injection.amps;
  return equations_.solve(right).head(terminals_);
}

GridPlan random_plan(std::mt19937& engine, const PlanLimits& limits) {
  Dice dice(engine);
  GridPlan plan;
  const ConductorSet all{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};
  const int n = 2 + dice.below(limits.nodes - 1);
  // What a node has has reached it from the first one.
  plan.nodes.push_back(all);
  std::vector<int> before{-1};
  for (int i = 1; i < n; ++i) {
    before.push_back(dice.below(i));
    ConductorSet set = plan.nodes[static_cast<std::size_t>(before.back())];
    if (dice.below(8) == 0) set.remove(Conductor::N);
    if (dice.below(10) == 0) set.remove(Conductor::L2);
    plan.nodes.push_back(set);
  }
  auto terminal = [](int node, Conductor c) { return Grid::terminal(node, c); };
  auto run = [&](int from, int to) {
    GridPlan::Run made{from, to, {}, {dice.ohms(0.1), dice.ohms(0.1), dice.ohms(0.2), false}};
    for (const Conductor c : kAll)
      if (plan.nodes[static_cast<std::size_t>(from)].has(c) && plan.nodes[static_cast<std::size_t>(to)].has(c))
        made.carried.add(c);
    const bool pen = limits.pens && dice.below(5) == 0 && made.carried.has(Conductor::N);
    made.z.pen = pen;
    if (dice.below(15) == 0) made.z.line = 0;
    if (dice.below(15) == 0) made.z.neutral = 0;
    if (dice.below(15) == 0) made.z.protective = 0;
    plan.runs.push_back(made);
  };
  for (int i = 1; i < n; ++i) {
    const int other = before[static_cast<std::size_t>(i)];
    dice.below(2) == 0 ? run(i, other) : run(other, i);
  }
  if (limits.loops)
    for (int k = dice.below(1 + n / 3); k > 0; --k) {
      const int a = dice.below(n);
      const int b = dice.below(n);
      if (a != b) run(a, b);
    }
  auto lines_and = [&](int node, int last) {
    return std::vector<int>{terminal(node, Conductor::L1), terminal(node, Conductor::L2), terminal(node, Conductor::L3),
                            last};
  };
  plan.elements.push_back(
      {lines_and(0, terminal(0, Conductor::N)), {0, 0, 0, 0}, star(dice.ohms(0.03), dice.ohms(0.1))});
  plan.joins.emplace_back(terminal(0, Conductor::N), terminal(0, Conductor::PE));
  if (limits.earthed) plan.joins.emplace_back(Grid::kEarth, terminal(0, Conductor::N));
  for (int i = 1; i < n; ++i) {
    const ConductorSet set = plan.nodes[static_cast<std::size_t>(i)];
    if (limits.earthed && set.has(Conductor::PE) && dice.below(6) == 0)
      plan.elements.push_back({{terminal(i, Conductor::PE), Grid::kEarth}, {0, 0}, one_port(1.0 / dice.ohms(20))});
    if (limits.joins && set.has(Conductor::N) && set.has(Conductor::PE) && dice.below(8) == 0)
      plan.joins.emplace_back(terminal(i, Conductor::N), terminal(i, Conductor::PE));
    if (set.has(Conductor::L2) && dice.below(8) == 0) {
      const Eigen::Matrix3cd motor =
          (Eigen::Matrix3cd::Identity() - Eigen::Matrix3cd::Constant(1.0 / 3.0)) / dice.ohms(0.5);
      plan.elements.push_back(
          {{terminal(i, Conductor::L1), terminal(i, Conductor::L2), terminal(i, Conductor::L3)}, {0, 0, 0}, motor});
    }
    if (set == all && dice.below(10) == 0)
      plan.elements.push_back(
          {lines_and(i, terminal(i, Conductor::N)), {0, 0, 0, 0}, star(dice.ohms(0.1), dice.ohms(0.3))});
  }
  if (limits.joins && n > 3 && dice.below(3) == 0) {  // a closed coupler
    const int a = dice.below(n);
    const int b = dice.below(n);
    const auto& set = plan.nodes;
    for (const Conductor c : kAll)
      if (a != b && set[static_cast<std::size_t>(a)].has(c) && set[static_cast<std::size_t>(b)].has(c))
        plan.joins.emplace_back(terminal(a, c), terminal(b, c));
  }
  if (dice.below(2) == 0) {  // a part behind a transformer, with a star point of its own
    const int high = dice.below(n);
    if (plan.nodes[static_cast<std::size_t>(high)].has(Conductor::L2)) {
      const int low = static_cast<int>(plan.nodes.size());
      plan.nodes.push_back(all);
      plan.nodes.push_back(all);
      plan.extra.push_back(low);
      std::vector<int> terminals{terminal(high, Conductor::L1),
                                 terminal(high, Conductor::L2),
                                 terminal(high, Conductor::L3),
                                 terminal(low, Conductor::L1),
                                 terminal(low, Conductor::L2),
                                 terminal(low, Conductor::L3),
                                 low * Grid::kSlots + static_cast<int>(models::kConductors)};
      plan.elements.push_back({terminals, {0, 0, 0, 1, 1, 1, 1}, delta_star(dice.real(0.05, 1), dice.ohms(0.05))});
      // The star point behind an impedance to the neutral, that earthed or not.
      plan.elements.push_back({{terminals[6], terminal(low, Conductor::N)}, {0, 0}, one_port(1.0 / dice.ohms(0.3))});
      plan.joins.emplace_back(terminal(low, Conductor::N), terminal(low, Conductor::PE));
      if (limits.earthed && dice.below(2) == 0) plan.joins.emplace_back(terminal(low, Conductor::PE), Grid::kEarth);
      run(low, low + 1);
    }
  }
  return plan;
}

}  // namespace sunder::tests
