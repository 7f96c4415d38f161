// SPDX-License-Identifier: Apache-2.0
/// @file
/// What a fault finds in the grid of a state. What flows meanwhile is in state_trace.cpp.
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

}  // namespace

GridPlace StateGrid::at_board(int board) const {
  GridPlace place;
  place.node = place.board = board;
  place.have = tree_.conductors[at(board)];
  return place;
}

GridPlace StateGrid::at_circuit(int index_of, CircuitEnd end) const {
  const models::Circuit& circuit = network_.circuits[at(index_of)];
  GridPlace place = at_board(circuit.board);
  ConductorSet have;
  for (const Conductor c : kAll)
    if (place.have.has(c) && circuit.conductors.has(c)) have.add(c);
  place.have = have;
  const int node = circuit_node_[at(index_of)];
  const CircuitEnd worst = worst_end(network_, circuit);
  if (node >= 0 && end.spur == worst.spur && end.fraction == worst.fraction) {
    place.node = node;  // a motor stands there
    return place;
  }
  place.beyond = circuit_matrix(network_, circuit, end, condition_);
  return place;
}

GridPlace StateGrid::along_submain(int submain, double fraction) const {
  const models::Submain& of = network_.submains[at(submain)];
  GridPlace place;
  place.board = of.from;
  place.run = run_of_submain_[at(submain)];
  place.fraction = fraction;
  place.in_parallel = of.in_parallel;
  for (const Conductor c : kAll)
    if (views_.empty() || tree_.conductors[at(of.from)].has(c))
      if (of.conductors.has(c) || (of.pen && c == Conductor::PE)) place.have.add(c);
  return place;
}

ConductorMatrix StateGrid::one_cable(const Grid& grid, const GridPlace& place) {
  const RunImpedance& z = grid.impedance(place.run);
  const ConductorSet carried = grid.carried(place.run);
  ConductorMatrix m = ConductorMatrix::Zero();
  for (const Conductor c : kLines)
    if (carried.has(c)) m(static_cast<int>(index(c)), static_cast<int>(index(c))) = z.line;
  if (carried.has(Conductor::N)) m(3, 3) = z.neutral;
  if (z.pen) {
    m(4, 4) = m(3, 4) = m(4, 3) = z.neutral;
  } else if (carried.has(Conductor::PE)) {
    m(4, 4) = z.protective;
  }
  return m * static_cast<double>(place.in_parallel);
}

// Between the ends a and b of a run, x of the way along one of its cables z:
// Z = (1-x)^2 Z_aa + x^2 Z_bb + x(1-x)(Z_ab + Z_ba) + x(1-x) z.
ConductorMatrix StateGrid::place_matrix(const View& view, const GridPlace& place) const {
  const Grid& grid = view.grid;
  if (place.run < 0) {
    ConductorMatrix z = grid.thevenin(place.node);
    for (Eigen::Index i = 0; i < 5; ++i)
      for (Eigen::Index j = 0; j < 5; ++j)
        z(i, j) += Complex{place.beyond(i, j).real(), place.beyond(i, j).imag() * view.reactance};
    return z;
  }
  const Grid::Ends ends = grid.ends(place.run);
  const double x = place.fraction;
  const ConductorMatrix mixed = grid.transfer(ends.from, ends.to);
  return (1 - x) * (1 - x) * grid.thevenin(ends.from) + x * x * grid.thevenin(ends.to) +
         x * (1 - x) * (mixed + mixed.transpose()) + x * (1 - x) * one_cable(grid, place);
}

std::string StateGrid::why_not(const GridPlace& place, Fault fault) const {
  for (const auto& [whole, name] : followers_)
    if (whole == whole_[at(place.board)]) return "a source that leads: " + name + " only follows a live network";
  if (fault == Fault::three_phase || fault == Fault::line_line) return "";
  const Grid& grid = views_.front().grid;
  const int node = place.run < 0 ? place.node : grid.ends(place.run).from;
  const std::string& board = network_.boards[at(place.board)].name;
  Conductor line = Conductor::L1;
  for (const Conductor c : {Conductor::L3, Conductor::L2, Conductor::L1})
    if (place.have.has(c)) line = c;
  std::string missing;
  for (const auto& [part, need] : no_return_)
    if (missing.empty() && part == part_[at(place.board)]) missing = need;
  const int l = terminal_of(node, line);
  if (fault == Fault::line_neutral) {
    if (grid.connected(l, terminal_of(node, Conductor::N))) return "";
    return missing.empty() ? "a star point for the neutral of " + board : missing;
  }
  const Source& system = system_of(network_, tree_, place.board);
  const bool earthed = grid.earthed(l);
  if (system.high_voltage ? earthed : grid.connected(l, terminal_of(node, Conductor::PE))) return "";
  if (!missing.empty()) return missing;
  const bool isolated = system.earthing == models::Earthing::IT;
  if (earthed)
    return isolated ? "an electrode for the protective conductor of " + board
                    : "a connection of the protective conductor of " + board + " with the star point";
  if (system.high_voltage) {
    if (tree_.stand_in[at(place.board)] >= 0) return "an earthed star point in the network of " + board;
    return system.star.kind == models::StarPoint::Kind::solid ? "line_earth of " + system.name
                                                              : "star_point and line_earth of " + system.name;
  }
  if (isolated) return "capacitance or star_point of " + system.name;
  return "a connection of the protective conductor of " + board + " with the star point";
}

double StateGrid::added_by_inverters(int board) const {
  double amps = 0;
  if (condition_ == Condition::minimum) return amps;
  const double volts = system_of(network_, tree_, board).U;
  for (const SourcePlace& place : sources_) {
    const Source& source = network_.sources[at(place.source)];
    if (!source.inverter.present || place.alone || source.inverter.stages.empty()) continue;
    if (whole_[at(source.board)] != whole_[at(board)]) continue;
    amps += source.inverter.stages.front().amps * source.U / volts;
  }
  return amps;
}

double StateGrid::limit_of_inverter(int board) const {
  double limit = std::numeric_limits<double>::infinity();
  const double volts = system_of(network_, tree_, board).U;
  double sum = 0;
  for (const SourcePlace& place : sources_) {
    if (!place.alone || whole_[at(network_.sources[at(place.source)].board)] != whole_[at(board)]) continue;
    const models::Inverter& inverter = network_.sources[at(place.source)].inverter;
    const models::Stage& stage = condition_ == Condition::maximum ? inverter.stages.front() : inverter.stages.back();
    sum += stage.amps * network_.sources[at(place.source)].U / volts;
    limit = sum;
  }
  return limit;
}

std::vector<models::Stage> StateGrid::stages(int board) const {
  std::vector<models::Stage> all;
  const double volts = system_of(network_, tree_, board).U;
  for (const SourcePlace& place : sources_) {
    const Source& source = network_.sources[at(place.source)];
    if (!place.alone || whole_[at(source.board)] != whole_[at(board)]) continue;
    if (!all.empty()) return {source.inverter.stages.back()};  // two at once: the weaker end of one is safe
    all = source.inverter.stages;
    for (models::Stage& stage : all) stage.amps *= source.U / volts;
  }
  return all;
}

StateGrid::Governing StateGrid::govern(const GridPlace& place, Fault fault, double through) const {
  Governing best;
  FaultCurrent& result = best.current;
  const bool most = condition_ == Condition::maximum;
  const Source& system = system_of(network_, tree_, place.board);
  ConductorSet have = place.have;
  const std::vector<FaultLoops>& all = fault_choices(fault, system.high_voltage);
  result.possible = std::any_of(all.begin(), all.end(), [&](const FaultLoops& l) { return have.contains(l.needs); });
  if (!result.possible) return best;
  const Candidates& candidates = of_fault_[static_cast<std::size_t>(fault)];
  result.known = candidates.known;
  result.needs = candidates.needs;
  if (result.known) {
    result.needs = why_not(place, fault);
    result.known = result.needs.empty();
  }
  if (!result.known) return best;
  result.volts = driving_voltage_at(network_, tree_, place.board, condition_, fault);
  const double limit = limit_of_inverter(place.board);
  for (std::size_t i = 0; i < candidates.views.size(); ++i) {
    const ConductorMatrix z = place_matrix(views_[at(candidates.views[i])], place);
    for (const FaultLoops& loops : all) {
      if (!have.contains(loops.needs)) continue;
      const LoopCurrents solved = solve_loops(loops, z, result.volts, through, system.split_phase, most);
      constexpr double kNothing = 1e-12;
      if (!(std::abs(solved.loop) > kNothing * z.cwiseAbs().maxCoeff()) && std::isinf(limit)) {
        result.known = false;
        result.needs =
            "impedances that do not cancel one another in the loop at " + network_.boards[at(place.board)].name;
        return best;
      }
      // Equal choices: the first in the order of lines.
      constexpr double kEqual = 1e-9;
      const bool better = most ? solved.amps > result.amps * (1 + kEqual) : solved.amps < result.amps * (1 - kEqual);
      // Of two angles of a source with the same current the inductive one, whose X/R belongs to the peak.
      const bool inductive = most && best.loops == &loops && solved.amps >= result.amps * (1 - kEqual) &&
                             x_over_r(solved.loop) > result.x_over_r;
      if (best.view >= 0 && !better && !inductive) continue;
      best.view = candidates.views[i];
      best.loops = &loops;
      result.amps = solved.amps;
      result.loop = solved.loop;
      result.ohms = std::abs(solved.loop);
      result.x_over_r = x_over_r(solved.loop);
      result.phases = loops.phases;
    }
  }
  if (most) {
    // Peak by the ratio X/R at the lower frequency (IEC 60909-0, method C), at its most inductive.
    double kappa = 0;
    for (const int slow : candidates.slow) {
      const ConductorMatrix z = place_matrix(views_[at(slow)], place);
      const Complex loop = solve_loops(*best.loops, z, result.volts, through, system.split_phase, most).loop;
      kappa = std::max(kappa, peak_factor(x_over_r(loop) / views_[at(slow)].reactance));
    }
    result.peak = kappa * std::numbers::sqrt2 * result.amps;
  }
  if (!(result.amps <= limit)) {
    result.amps = limit;
    // The limit stands for an impedance, so that volts over ohms are the amperes.
    result.ohms = result.volts / limit;
    result.loop = result.ohms;
    result.x_over_r = 0;
    if (most) result.peak = std::numbers::sqrt2 * limit;
  }
  const double added = added_by_inverters(place.board);
  result.amps += added;
  if (most) result.peak += std::numbers::sqrt2 * added;
  return best;
}

FaultCurrent StateGrid::current(const GridPlace& place, Fault fault, double through) const {
  return govern(place, fault, through).current;
}

double StateGrid::loop_ohms(const GridPlace& place, Conductor a, Conductor b) const {
  double most = 0;
  const auto i = static_cast<int>(index(a));
  const auto j = static_cast<int>(index(b));
  for (const int v : of_fault_[static_cast<std::size_t>(Fault::line_earth)].views) {
    const ConductorMatrix z = place_matrix(views_[at(v)], place);
    most = std::max(most, std::abs(z(i, i) + z(j, j) - z(i, j) - z(j, i)));
  }
  return most;
}

int StateGrid::main_board(int board) const {
  for (const Star& star : star_nodes_)
    if (part_[at(star.board)] == part_[at(board)] && tree_.conductors[at(star.board)].has(Conductor::PE))
      return star.board;
  return board;
}

}  // namespace sunder::solver
