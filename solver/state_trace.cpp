// SPDX-License-Identifier: Apache-2.0
/// @file
/// What flows everywhere in a grid during a fault.
#include <fmt/format.h>

#include <Eigen/QR>
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

constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

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
  const Complex z = one_cable(grid, place)(4, 4);
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
  // Where each fault has a loop of its own the two share the network; else one loop goes through both.
  auto closed = [&](const GridPlace& place, Conductor line) {
    const int node = place.run < 0 ? place.node : grid().ends(place.run).from;
    return grid().connected(terminal_of(node, line), terminal_of(node, PE));
  };
  const bool most = condition_ == Condition::maximum;
  const bool opposed = system_of(network_, tree_, a.board).split_phase;
  const double turn = opposed ? std::numbers::pi : 2.0 * std::numbers::pi / 3.0;
  for (const Fault fault : {Fault::line_line, Fault::line_earth}) {
    const Candidates& candidates = of_fault_[static_cast<std::size_t>(fault)];
    result.known = candidates.known && !views_.empty();
    result.needs = candidates.needs;
    if (!result.usable()) return flow;
  }
  const Candidates& candidates = of_fault_[static_cast<std::size_t>(Fault::line_earth)];
  const double to_earth = driving_voltage_at(network_, tree_, a.board, condition_, Fault::line_earth);
  const double between = driving_voltage_at(network_, tree_, a.board, condition_, Fault::line_line);
  int best = -1;
  std::vector<Grid::Injection> chosen;
  for (const int v : candidates.views) {
    Grid grid = views_[at(v)].grid;
    if (!grid.solve(true)) continue;
    for (const Choice& choice : kChoices) {
      if (!there(choice)) continue;
      // One ampere through each loop: out of the line into the PE of the same place.
      Complex own[2];
      auto unit = [&](const GridPlace& place, Conductor line, Complex& local) {
        std::vector<Grid::Injection> injections;
        for (const auto& [c, sign] : {std::pair{line, 1.0}, std::pair{PE, -1.0}}) {
          const auto i = static_cast<int>(index(c));
          if (place.run < 0) {
            injections.push_back({terminal_of(place.node, c), -sign});
            local += place.beyond(i, i);
            continue;
          }
          const Grid::Ends ends = grid.ends(place.run);
          injections.push_back({terminal_of(ends.from, c), -sign * (1 - place.fraction)});
          injections.push_back({terminal_of(ends.to, c), -sign * place.fraction});
          local += place.fraction * (1 - place.fraction) * one_cable(grid, place)(i, i);
        }
        return injections;
      };
      const std::vector<Grid::Injection> first = unit(a, choice.first, own[0]);
      const std::vector<Grid::Injection> second = unit(b, choice.second, own[1]);
      auto drop = [](const std::vector<Grid::Injection>& through_unit, const std::vector<Complex>& potentials) {
        Complex volts = 0;
        for (const Grid::Injection& i : through_unit) volts += i.amps * potentials[at(i.terminal)];
        return volts;
      };
      const std::vector<Complex> by_first = grid.potentials(first);
      const std::vector<Complex> by_second = grid.potentials(second);
      const Complex aa = drop(first, by_first) + own[0] + through;
      const Complex bb = drop(second, by_second) + own[1] + through;
      const Complex ab = drop(first, by_second);
      Complex ia, ib, loop;
      double volts = between;
      if (closed(a, choice.first) && closed(b, choice.second)) {
        volts = to_earth;
        const Complex ea = std::polar(volts, -turn * static_cast<double>(index(choice.first)));
        const Complex eb = std::polar(volts, -turn * static_cast<double>(index(choice.second)));
        const Complex determinant = aa * bb - ab * ab;
        ia = (ea * bb - eb * ab) / determinant;
        ib = (eb * aa - ea * ab) / determinant;
        const bool first_governs = most ? std::abs(ia) >= std::abs(ib) : std::abs(ia) <= std::abs(ib);
        loop = first_governs ? ea / ia : eb / ib;
      } else {
        loop = aa + bb - 2.0 * ab;
        ia = volts / loop;
        ib = -ia;
      }
      const double amps = volts / std::abs(loop);
      constexpr double kEqual = 1e-9;  // equal choices: the first in the order of lines
      if (best >= 0 && (most ? amps <= result.amps * (1 + kEqual) : amps >= result.amps * (1 - kEqual))) continue;
      best = v;
      result.phases = choice.phases;
      result.volts = volts;
      result.amps = amps;
      result.loop = loop;
      result.ohms = std::abs(loop);
      result.x_over_r = x_over_r(loop);
      flow.pair_lines = {static_cast<int>(index(choice.first)), static_cast<int>(index(choice.second))};
      flow.pair_amps = {ia, ib};
      chosen.clear();
      for (const Grid::Injection& i : first) chosen.push_back({i.terminal, i.amps * ia});
      for (const Grid::Injection& i : second) chosen.push_back({i.terminal, i.amps * ib});
    }
  }
  if (best < 0) {
    result.known = false;
    result.needs = trouble_;
    return flow;
  }
  Eigen::Matrix<Complex, 5, 1> into = Eigen::Matrix<Complex, 5, 1>::Zero();
  into(flow.pair_lines[0]) = flow.pair_amps[0];
  into(flow.pair_lines[1]) = flow.pair_amps[1];
  into(4) = -flow.pair_amps[0] - flow.pair_amps[1];
  Flow traced = trace(best, chosen, nullptr, into);
  traced.current = result;
  traced.pair_lines = flow.pair_lines;
  traced.pair_amps = flow.pair_amps;
  if (most) traced.current.peak = peak_factor(result.x_over_r) * std::numbers::sqrt2 * result.amps;
  return traced;
}

namespace {

// Joins carry what their terminals' other elements leave over. Where they form a tree, taking its
// leaves one by one gives every share. What remains has loops: a join between two of them is still
// defined, one of a loop is not and takes the share that equal resistances would give it.
struct JoinShares {
  std::vector<Complex> amps;  // of each join, from its first to its second terminal
  std::vector<bool> defined;
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
  result.defined.assign(joins.size(), true);
  std::vector<std::size_t> rest;
  std::vector<int> number(left.size(), -1);
  Eigen::Index n = 0;
  for (std::size_t j = 0; j < joins.size(); ++j) {
    if (done[j]) continue;
    rest.push_back(j);
    for (const int end : {joins[j].first, joins[j].second})
      if (end >= 0 && number[at(end)] < 0) number[at(end)] = static_cast<int>(n++);
  }
  if (rest.empty()) return result;
  Eigen::MatrixXd ways = Eigen::MatrixXd::Zero(static_cast<Eigen::Index>(rest.size()), n);
  for (std::size_t r = 0; r < rest.size(); ++r) {
    const auto [a, b] = joins[rest[r]];
    if (a >= 0) ways(static_cast<Eigen::Index>(r), number[at(a)]) = 1;
    if (b >= 0) ways(static_cast<Eigen::Index>(r), number[at(b)]) = -1;
  }
  Eigen::VectorXcd out = Eigen::VectorXcd::Zero(n);
  for (std::size_t k = 0; k < left.size(); ++k)
    if (number[k] >= 0) out(number[k]) = -left[k];
  const Eigen::MatrixXd inverse = (ways.transpose() * ways).completeOrthogonalDecomposition().pseudoInverse();
  const Eigen::VectorXcd amps = ways * (inverse * out);
  for (std::size_t r = 0; r < rest.size(); ++r) {
    const auto row = static_cast<Eigen::Index>(r);
    result.amps[rest[r]] = amps(row);
    // All of an ampere between its ends goes through a join that is the only way between them.
    const double own = (ways.row(row) * inverse * ways.row(row).transpose())(0, 0);
    result.defined[rest[r]] = own > 1 - 1e-9;
    const auto [a, b] = joins[rest[r]];
    if (a >= 0) left[at(a)] += amps(row);
    if (b >= 0) left[at(b)] -= amps(row);
  }
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
      bool open_share = false;
      for (const auto& join : piece.joins) {
        const std::pair<int, int> ends{one(join.first), one(join.second)};
        if (std::find(told.begin(), told.end(), ends) != told.end()) continue;
        told.push_back(ends);
        for (std::size_t j = 0; j < joins.size(); ++j) {
          const bool this_one = joins[j] == ends || joins[j] == std::pair{ends.second, ends.first};
          open_share = open_share || (this_one && !shares.defined[j]);
          if (joins[j] == ends) amps(join.first % Grid::kSlots) += shares.amps[j];
          if (joins[j] == std::pair{ends.second, ends.first}) amps(join.first % Grid::kSlots) -= shares.amps[j];
        }
      }
      if (open_share) flow.undefined += (flow.undefined.empty() ? "" : ", ") + piece.name;
    }
    flow.pieces.push_back(amps);
  }
  for (const Complex amps : left) flow.imbalance = std::max(flow.imbalance, std::abs(amps));
  flow.imbalance /= scale;
  return flow;
}

}  // namespace sunder::solver
