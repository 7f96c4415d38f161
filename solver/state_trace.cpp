// SPDX-License-Identifier: Apache-2.0
/// @file
/// What flows everywhere in a grid during a fault.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <numeric>

#include "solver/state_grid.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;
using models::Source;

constexpr Conductor kLines[] = {Conductor::L1, Conductor::L2, Conductor::L3};
constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

double ratio(Complex z) { return z.real() > 0 ? z.imag() / z.real() + 0.0 : std::numeric_limits<double>::infinity(); }

// Series matrix of one of n equal cables that a run stands for.
ConductorMatrix single(const RunImpedance& z, ConductorSet carried, int n) {
  ConductorMatrix m = ConductorMatrix::Zero();
  for (const Conductor c : kLines)
    if (carried.has(c)) m(static_cast<int>(index(c)), static_cast<int>(index(c))) = z.line;
  if (carried.has(Conductor::N)) m(3, 3) = z.neutral;
  if (z.pen) {
    m(4, 4) = m(3, 4) = m(4, 3) = z.neutral;
  } else if (carried.has(Conductor::PE)) {
    m(4, 4) = z.protective;
  }
  return m * static_cast<double>(n);
}

}  // namespace

double StateGrid::volts_of_returns(const Flow& flow) const {
  double volts = 0;
  for (const SourcePlace& place : sources_) {
    if (place.element < 0) continue;
    const Source& source = network_.sources[at(place.source)];
    if (source.high_voltage || source.earthing == models::Earthing::TT || source.earthing == models::Earthing::IT)
      continue;
    const double ohms = source_term(network_, source, condition_, Fault::line_earth).ohms;
    for (std::size_t p = 0; p < pieces_.size(); ++p)
      if (pieces_[p].element == place.element) volts += ohms * std::abs(flow.pieces[p](3));
  }
  return volts;
}

Complex StateGrid::protective_potential(const GridPlace& place, const Flow& flow, Complex into_protective) const {
  if (place.run < 0)
    return flow.potentials[at(terminal_of(place.node, Conductor::PE))] - place.beyond(4, 4) * into_protective;
  const Grid& grid = views_.front().grid;
  const Grid::Ends ends = grid.ends(place.run);
  const double x = place.fraction;
  const Complex z = single(grid.impedance(place.run), grid.carried(place.run), place.in_parallel)(4, 4);
  return (1 - x) * flow.potentials[at(terminal_of(ends.from, Conductor::PE))] +
         x * flow.potentials[at(terminal_of(ends.to, Conductor::PE))] - x * (1 - x) * z * into_protective;
}

StateGrid::Flow StateGrid::flow(const GridPlace& place, Fault fault, double through) const {
  const Governing best = govern(place, fault, through);
  Flow flow;
  flow.current = best.current;
  if (!best.current.usable()) return flow;
  const Source& system = system_of(network_, tree_, place.board);
  const ConductorMatrix z = place_matrix(views_[at(best.view)], place);
  const bool most = condition_ == Condition::maximum;
  LoopCurrents solved = solve_loops(*best.loops, z, best.current.volts, through, system.split_phase, most);
  if (const double limit = limit_of_inverter(place.board); !(solved.amps <= limit)) {
    // As much as the limit lets through; at the inverter's own terminals nothing else limits.
    if (!std::isfinite(solved.amps))
      solved = solve_loops(*best.loops, z, best.current.volts, best.current.volts / limit, system.split_phase, most);
    solved.conductors *= limit / solved.amps;
  }
  std::vector<Grid::Injection> injections;
  const Grid& grid = views_[at(best.view)].grid;
  for (const Conductor c : kAll) {
    const Complex amps = -solved.conductors(static_cast<int>(index(c)));
    if (amps == Complex{}) continue;
    if (place.run < 0) {
      injections.push_back({terminal_of(place.node, c), amps});
    } else {
      injections.push_back({terminal_of(grid.ends(place.run).from, c), amps * (1 - place.fraction)});
      injections.push_back({terminal_of(grid.ends(place.run).to, c), amps * place.fraction});
    }
  }
  Flow traced = trace(best.view, injections, &place, solved.conductors);
  traced.current = best.current;
  return traced;
}

StateGrid::Flow StateGrid::flow_between(const GridPlace& a, const GridPlace& b, double through) const {
  Flow flow;
  FaultCurrent& result = flow.current;
  struct Choice {
    Conductor first, second;
    const char* phases;
  };
  using enum Conductor;
  constexpr Choice kChoices[] = {{L1, L2, "L1-PE and L2-PE"}, {L2, L3, "L2-PE and L3-PE"}, {L3, L1, "L3-PE and L1-PE"},
                                 {L2, L1, "L2-PE and L1-PE"}, {L3, L2, "L3-PE and L2-PE"}, {L1, L3, "L1-PE and L3-PE"}};
  auto there = [&](const Choice& choice) {
    return a.have.contains({choice.first, PE}) && b.have.contains({choice.second, PE});
  };
  result.possible = std::any_of(std::begin(kChoices), std::end(kChoices), there);
  const Candidates& candidates = of_fault_[static_cast<std::size_t>(Fault::line_line)];
  result.known = candidates.known;
  result.needs = candidates.needs;
  if (!result.usable()) return flow;
  result.volts = driving_voltage_at(network_, tree_, a.board, condition_, Fault::line_line);
  const bool most = condition_ == Condition::maximum;
  int best = -1;
  const Choice* lines = nullptr;
  std::vector<Grid::Injection> chosen;
  for (const int v : candidates.views) {
    Grid grid = views_[at(v)].grid;
    if (!grid.solve(true)) continue;
    for (const Choice& choice : kChoices) {
      if (!there(choice)) continue;
      // One ampere through the loop: out of the line at the first place into its PE, out of the PE at the
      // second into its line.
      std::vector<Grid::Injection> unit;
      Complex local = 0;
      auto put = [&](const GridPlace& place, Conductor c, double sign) {
        const auto i = static_cast<int>(index(c));
        if (place.run < 0) {
          unit.push_back({terminal_of(place.node, c), -sign});
          local += place.beyond(i, i);
          return;
        }
        const Grid::Ends ends = grid.ends(place.run);
        unit.push_back({terminal_of(ends.from, c), -sign * (1 - place.fraction)});
        unit.push_back({terminal_of(ends.to, c), -sign * place.fraction});
        local += place.fraction * (1 - place.fraction) *
                 single(grid.impedance(place.run), grid.carried(place.run), place.in_parallel)(i, i);
      };
      put(a, choice.first, 1);
      put(a, PE, -1);
      put(b, PE, 1);
      put(b, choice.second, -1);
      const std::vector<Complex> potentials = grid.potentials(unit);
      Complex loop = local + 2.0 * through;
      for (const Grid::Injection& injection : unit) loop += injection.amps * potentials[at(injection.terminal)];
      const double amps = result.volts / std::abs(loop);
      constexpr double kEqual = 1e-9;  // equal choices: the first in the order of lines
      if (best >= 0 && (most ? amps <= result.amps * (1 + kEqual) : amps >= result.amps * (1 - kEqual))) continue;
      best = v;
      lines = &choice;
      result.phases = choice.phases;
      result.amps = amps;
      result.loop = loop;
      result.ohms = std::abs(loop);
      result.x_over_r = ratio(loop);
      chosen = unit;
      for (Grid::Injection& injection : chosen) injection.amps *= result.volts / loop;
    }
  }
  if (best < 0) {
    result.known = false;
    result.needs = trouble_;
    return flow;
  }
  Eigen::Matrix<Complex, 5, 1> into = Eigen::Matrix<Complex, 5, 1>::Zero();
  into(static_cast<int>(index(lines->first))) = result.volts / result.loop;
  into(static_cast<int>(index(lines->second))) = -result.volts / result.loop;
  Flow traced = trace(best, chosen, nullptr, into);
  traced.current = result;
  if (most) traced.current.peak = peak_factor(result.x_over_r) * std::numbers::sqrt2 * result.amps;
  return traced;
}

namespace {

// Joins carry what their terminals' other elements leave over. Where they form a tree, taking its
// leaves one by one gives every share; in a loop of joins the shares are not defined.
struct JoinShares {
  std::vector<Complex> amps;  // of each join, from its first to its second terminal
  bool defined = true;
};

JoinShares share(const std::vector<std::pair<int, int>>& joins, std::vector<Complex> left) {
  JoinShares result;
  result.amps.assign(joins.size(), Complex{});
  std::vector<bool> done(joins.size(), false);
  std::vector<int> degree(left.size(), 0);
  for (const auto& [a, b] : joins) {
    if (a >= 0) ++degree[at(a)];
    if (b >= 0) ++degree[at(b)];
  }
  for (bool changed = true; changed;) {
    changed = false;
    for (std::size_t j = 0; j < joins.size(); ++j) {
      if (done[j]) continue;
      const auto [a, b] = joins[j];
      const bool leaf_a = a >= 0 && degree[at(a)] == 1;
      const bool leaf_b = b >= 0 && degree[at(b)] == 1;
      if (!leaf_a && !leaf_b) continue;
      // What a leaf's elements take in must come through the join: left is the current out of it.
      const Complex amps = leaf_a ? -left[at(a)] : left[at(b)];
      result.amps[j] = amps;
      if (a >= 0) left[at(a)] += amps, --degree[at(a)];
      if (b >= 0) left[at(b)] -= amps, --degree[at(b)];
      done[j] = changed = true;
    }
  }
  result.defined = std::all_of(done.begin(), done.end(), [](bool d) { return d; });
  return result;
}

}  // namespace

StateGrid::Flow StateGrid::trace(int view, const std::vector<Grid::Injection>& injections, const GridPlace* inside,
                                 const Eigen::Matrix<Complex, 5, 1>& into_fault) const {
  Flow flow;
  flow.into_fault = into_fault;
  Grid grid = views_[at(view)].grid;
  if (!grid.solve(true)) return flow;
  flow.potentials = grid.potentials(injections);
  // Current out of each terminal through everything but joins; with what is put in it must vanish, or
  // be what joins carry.
  std::vector<Complex> out(flow.potentials.size());
  for (const Grid::Injection& injection : injections) out[at(injection.terminal)] -= injection.amps;
  for (std::size_t r = 0; r < grid.runs(); ++r) {
    const Eigen::Matrix<Complex, 5, 1> amps = grid.run_current(static_cast<int>(r), flow.potentials);
    const Grid::Ends ends = grid.ends(static_cast<int>(r));
    for (const Conductor c : kAll) {
      out[at(terminal_of(ends.from, c))] += amps(static_cast<int>(index(c)));
      out[at(terminal_of(ends.to, c))] -= amps(static_cast<int>(index(c)));
    }
  }
  for (std::size_t e = 0; e < grid.elements(); ++e) {
    const Eigen::VectorXcd amps = grid.element_current(static_cast<int>(e), flow.potentials);
    const std::vector<int> terminals = grid.terminals(static_cast<int>(e));
    for (std::size_t k = 0; k < terminals.size(); ++k)
      if (terminals[k] != Grid::kEarth) out[at(terminals[k])] += amps(static_cast<Eigen::Index>(k));
  }
  // Where N and PE of a node are one, they are one terminal: what a link carries in both is told under N.
  const std::vector<std::pair<int, int>> all_joins = grid.all_joins();
  std::vector<int> same(out.size());
  std::iota(same.begin(), same.end(), 0);
  for (const auto& [a, b] : all_joins)
    if (b >= 0 && a / Grid::kSlots == b / Grid::kSlots) same[at(std::max(a, b))] = std::min(a, b);
  auto one = [&](int terminal) { return terminal < 0 ? terminal : same[at(terminal)]; };
  std::vector<Complex> left(out.size());
  for (std::size_t k = 0; k < out.size(); ++k) left[at(same[k])] += out[k];
  std::vector<std::pair<int, int>> joins;
  for (const auto& [a, b] : all_joins)
    if (one(a) != one(b)) joins.emplace_back(one(a), one(b));
  std::sort(joins.begin(), joins.end());
  joins.erase(std::unique(joins.begin(), joins.end()), joins.end());
  const JoinShares shares = share(joins, left);
  for (std::size_t j = 0; j < joins.size(); ++j) {
    if (joins[j].first >= 0) left[at(joins[j].first)] += shares.amps[j];
    if (joins[j].second >= 0) left[at(joins[j].second)] -= shares.amps[j];
  }
  const double scale = into_fault.cwiseAbs().maxCoeff();
  for (const GridPiece& piece : pieces_) {
    Eigen::Matrix<Complex, 5, 1> amps = Eigen::Matrix<Complex, 5, 1>::Zero();
    if (piece.run >= 0) {
      amps = grid.run_current(piece.run, flow.potentials);
      // Near the fault inside one of its cables: what enters at the `from` end.
      if (inside != nullptr && inside->run == piece.run) amps += (1 - inside->fraction) * into_fault;
    } else if (piece.element >= 0) {
      const Eigen::VectorXcd all = grid.element_current(piece.element, flow.potentials);
      for (std::size_t k = 0; k < piece.terminals.size(); ++k)
        if (piece.terminals[k] >= 0) amps(static_cast<Eigen::Index>(k)) = piece.sign * all(piece.terminals[k]);
    } else {
      std::vector<std::pair<int, int>> told;
      for (const auto& join : piece.joins) {
        const std::pair<int, int> ends{one(join.first), one(join.second)};
        if (std::find(told.begin(), told.end(), ends) != told.end()) continue;
        told.push_back(ends);
        for (std::size_t j = 0; j < joins.size(); ++j) {
          if (joins[j] == ends) amps(join.first % Grid::kSlots) += shares.amps[j];
          if (joins[j] == std::pair{ends.second, ends.first}) amps(join.first % Grid::kSlots) -= shares.amps[j];
        }
      }
      if (!shares.defined && !piece.joins.empty()) flow.undefined += (flow.undefined.empty() ? "" : ", ") + piece.name;
    }
    flow.pieces.push_back(amps);
  }
  if (shares.defined) {
    for (const Complex amps : left) flow.imbalance = std::max(flow.imbalance, std::abs(amps));
    flow.imbalance /= scale;
  }
  return flow;
}

}  // namespace sunder::solver
