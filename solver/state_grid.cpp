// SPDX-License-Identifier: Apache-2.0
/// @file
/// How a network becomes a grid of conductors. What flows in it is in state_flow.cpp.
#include "solver/state_grid.h"

#include <fmt/format.h>

#include <Eigen/LU>
#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <numeric>

#include "solver/windings.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;
using models::Earthing;
using models::Network;
using models::Source;
using models::StarPoint;
using models::Winding;

constexpr Conductor kLines[] = {Conductor::L1, Conductor::L2, Conductor::L3};

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

Complex scaled(Complex z, double reactance) { return {z.real(), z.imag() * reactance}; }

RunImpedance scaled(const RunImpedance& z, double reactance) {
  return {scaled(z.line, reactance), scaled(z.neutral, reactance), scaled(z.protective, reactance), z.pen};
}

int root_of(std::vector<int>& parent, int i) {
  while (parent[at(i)] != i) i = parent[at(i)] = parent[at(parent[at(i)])];
  return i;
}

}  // namespace

double driving_voltage_at(const Network& network, const StateTree& tree, int board, Condition condition,
                          Fault fault) noexcept {
  return driving_voltage(network, system_of(network, tree, board), condition,
                         fault == Fault::two_lines_earth ? Fault::line_earth : fault);
}

StateGrid::StateGrid(const Network& network, StateTree tree, Condition condition, bool with_motors)
    : network_(network), tree_(std::move(tree)), condition_(condition), with_motors_(with_motors) {
  for (std::size_t b = 0; b < network.boards.size(); ++b) grid_.add_node(tree_.conductors[b]);
  find_parts();
  add_runs();
  add_transformers();
  add_sources();
  add_motors();
  add_links();
  add_earths();
  connect_stars();
  grid_.prepare();
  solve_views();
}

void StateGrid::add_passive(std::vector<int> terminals, std::vector<int> groups,
                            std::function<Eigen::MatrixXcd(double)> y) {
  const int element = grid_.add_element(std::move(terminals), std::move(groups), y(1));
  passive_.push_back({element, std::move(y)});
}

void StateGrid::find_parts() {
  const std::size_t n = network_.boards.size();
  std::vector<int> part(n), whole(n);
  std::iota(part.begin(), part.end(), 0);
  whole = part;
  auto unite = [&](std::vector<int>& sets, int a, int b) { sets[at(root_of(sets, a))] = root_of(sets, b); };
  const models::SupplyState& state = network_.states[at(tree_.state)];
  auto live = [&](int a, int b) { return tree_.live(a) && tree_.live(b); };
  for (std::size_t i = 0; i < network_.submains.size(); ++i) {
    const models::Submain& s = network_.submains[i];
    if (!live(s.from, s.to) || state.submain_open[i]) continue;
    unite(part, s.from, s.to);
    unite(whole, s.from, s.to);
  }
  for (std::size_t i = 0; i < network_.links.size(); ++i) {
    const models::Link& l = network_.links[i];
    if (!live(l.from, l.to) || !state.link_closed[i]) continue;
    unite(part, l.from, l.to);
    unite(whole, l.from, l.to);
  }
  for (std::size_t i = 0; i < network_.transformers.size(); ++i) {
    const models::Transformer& t = network_.transformers[i];
    if (live(t.from, t.to) && !state.transformer_open[i]) unite(whole, t.from, t.to);
  }
  for (const models::Bond& bond : network_.bonds)
    if (bond.to >= 0 && live(bond.from, bond.to)) unite(part, bond.from, bond.to);
  part_.resize(n);
  whole_.resize(n);
  for (std::size_t b = 0; b < n; ++b) {
    part_[b] = root_of(part, static_cast<int>(b));
    whole_[b] = root_of(whole, static_cast<int>(b));
  }
  earthed_.assign(n, false);
}

Eigen::MatrixXcd StateGrid::source_admittance(const SourcePlace& place, const SourceValue& value,
                                              double reactance) const {
  const Source& source = network_.sources[at(place.source)];
  std::vector<int> lines;
  for (const Conductor c : kLines)
    if (source.lines.has(c)) lines.push_back(static_cast<int>(index(c)));
  const auto n = static_cast<Eigen::Index>(lines.size());
  Eigen::MatrixXcd series(n, n);
  for (Eigen::Index i = 0; i < n; ++i)
    for (Eigen::Index j = 0; j < n; ++j)
      series(i, j) =
          scaled(value.series(lines[static_cast<std::size_t>(i)], lines[static_cast<std::size_t>(j)]), reactance);
  Eigen::MatrixXcd y = series.inverse();
  Eigen::VectorXcd sums = y.rowwise().sum();
  if (value.star_open) {
    y -= (sums * sums.transpose() / sums.sum()).eval();
    sums.setZero();
  }
  Eigen::MatrixXcd whole(n + 1, n + 1);
  whole.topLeftCorner(n, n) = y;
  whole.topRightCorner(n, 1) = -sums;
  whole.bottomLeftCorner(1, n) = -sums.transpose();
  whole(n, n) = sums.sum();
  return whole;
}

int StateGrid::view_for(const std::vector<SourceValue>& values, double reactance) {
  auto same = [&](const View& view) {
    if (view.reactance != reactance) return false;
    for (std::size_t i = 0; i < values.size(); ++i)
      if (view.sources[i].series != values[i].series) return false;
    return true;
  };
  for (std::size_t v = 0; v < views_.size(); ++v)
    if (same(views_[v])) return static_cast<int>(v);
  View view{grid_, values, reactance};
  for (std::size_t r = 0; r < impedances_.size(); ++r)
    view.grid.set_run(static_cast<int>(r), scaled(impedances_[r], reactance));
  for (const Passive& passive : passive_)
    if (reactance != 1) view.grid.set_element(passive.element, passive.y(reactance));
  for (std::size_t i = 0; i < sources_.size(); ++i)
    if (sources_[i].element >= 0)
      view.grid.set_element(sources_[i].element, source_admittance(sources_[i], values[i], reactance));
  if (!view.grid.solve()) {
    const int node = view.grid.trouble_node();
    const std::string where = node < static_cast<int>(network_.boards.size())
                                  ? "board '" + network_.boards[at(node)].name + "'"
                                  : "the end of a run";
    trouble_ = "impedances that cancel one another around " + where;
    return -1;
  }
  // The solve checks itself: what is left over of an ampere.
  constexpr double kLeftOver = 1e-6;
  if (Grid again = view.grid; !(again.residual() <= kLeftOver)) {
    trouble_ = "impedances of more equal size: the equations are solved to no more than 1e-6";
    return -1;
  }
  views_.push_back(std::move(view));
  return static_cast<int>(views_.size()) - 1;
}

void StateGrid::solve_views() {
  // Open angles: in the maximum one of the ends makes the greatest current; in the minimum some angle
  // between them does, met within half a step: |Z| is short of its greatest by less than 0.4 %.
  constexpr int kSteps = 5;
  constexpr double kSlow = 0.4;  // 20 Hz of 50 Hz, 24 Hz of 60 Hz (IEC 60909-0, method C)
  const bool most = condition_ == Condition::maximum;
  of_fault_.assign(5, {});
  for (const Fault fault : {Fault::three_phase, Fault::line_line, Fault::line_neutral, Fault::line_earth}) {
    Candidates& of = of_fault_[static_cast<std::size_t>(fault)];
    std::vector<SourceTerm> terms(sources_.size());
    bool open = false;
    for (std::size_t i = 0; i < sources_.size(); ++i) {
      if (sources_[i].element < 0) continue;
      terms[i] = source_term(network_, network_.sources[at(sources_[i].source)], condition_, fault);
      open = open || (terms[i].known && terms[i].angle_high > terms[i].angle_low);
      if (terms[i].known) continue;
      of.known = false;
      of.needs = terms[i].needs;
    }
    if (!of.known) continue;
    const int steps = !open ? 1 : most ? 2 : kSteps;
    for (int step = 0; step < steps; ++step) {
      const double share = steps == 1 ? 0.0 : static_cast<double>(step) / (steps - 1);
      std::vector<SourceValue> values(sources_.size());
      for (std::size_t i = 0; i < sources_.size(); ++i) {
        const SourceTerm& term = terms[i];
        values[i].series = term.fixed;
        values[i].star_open = term.star_open;
        const double angle = term.angle_low + share * (term.angle_high - term.angle_low);
        for (int line = 0; line < 3; ++line) values[i].series(line, line) += std::polar(term.ohms, angle);
      }
      of.views.push_back(view_for(values, 1));
      if (most) of.slow.push_back(view_for(values, kSlow));
      if (!trouble_.empty()) {
        of.known = false;
        of.needs = trouble_;
        of.views.clear();
        break;
      }
    }
  }
  of_fault_[static_cast<std::size_t>(Fault::two_lines_earth)] = of_fault_[static_cast<std::size_t>(Fault::line_earth)];
}

}  // namespace sunder::solver
