// SPDX-License-Identifier: Apache-2.0
#include "solver/faults.h"

#include <fmt/format.h>

#include <Eigen/LU>
#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>

#include "solver/fault_loops.h"
#include "solver/state_grid.h"
#include "solver/study.h"

namespace sunder::solver {
namespace {

using models::Circuit;
using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Source;

ConductorMatrix with_source(ConductorMatrix z, Complex source) {
  z(0, 0) += source;
  z(1, 1) += source;
  z(2, 2) += source;
  return z;
}

// Angle of the source at which |Z_source + rest| is greatest: that of the rest, inside the range.
double blinding_angle(const SourceTerm& term, Complex rest) {
  const double angle = std::abs(rest) > 0 ? std::arg(rest) : term.angle_low;
  return std::clamp(angle, term.angle_low, term.angle_high);
}

}  // namespace

double x_over_r(Complex z) noexcept {
  return z.real() > 0 ? z.imag() / z.real() + 0.0 : std::numeric_limits<double>::infinity();
}

double peak_factor(double x_over_r) noexcept {
  return std::isinf(x_over_r) ? 2.0 : x_over_r <= 0 ? 1.02 : 1.02 + 0.98 * std::exp(-3.0 / x_over_r);
}

FaultCurrent fault_current(const Network& network, const Source& source, const ConductorMatrix& net, ConductorSet have,
                           Condition condition, Fault fault) {
  FaultCurrent result;
  const bool most = condition == Condition::maximum;
  const std::vector<FaultLoops>& all = fault_choices(fault);
  auto solve = [&](const FaultLoops& loops, const ConductorMatrix& z, double volts, bool greatest) {
    return solve_loops(loops, z, volts, 0.0, false, greatest);
  };
  result.possible = std::any_of(all.begin(), all.end(), [&](const FaultLoops& l) { return have.contains(l.needs); });
  if (!result.possible) return result;
  const SourceTerm term = source_term(network, source, condition, fault);
  result.known = term.known;
  result.needs = term.needs;
  if (!term.known) return result;
  result.volts = driving_voltage(network.rules, source, condition, fault);
  const ConductorMatrix rest = net + term.fixed;
  bool first = true;
  for (const FaultLoops& loops : all) {
    if (!have.contains(loops.needs)) continue;
    std::array<double, 2> angles{term.angle_low, term.angle_high};
    if (!most) angles[0] = angles[1] = blinding_angle(term, solve(loops, rest, result.volts, most).loop);
    for (const double angle : angles) {
      const LoopCurrents solved = solve(loops, with_source(rest, std::polar(term.ohms, angle)), result.volts, most);
      // Equal choices: the first in the order of lines, and of its two angles the inductive one, whose
      // X/R belongs to the peak.
      constexpr double kEqual = 1e-9;
      const bool better = most ? solved.amps > result.amps * (1 + kEqual) : solved.amps < result.amps * (1 - kEqual);
      const bool same_but_inductive =
          most && loops.phases == result.phases && solved.amps >= result.amps * (1 - kEqual);
      if (!first && !better && !same_but_inductive) continue;
      first = false;
      result.amps = solved.amps;
      result.loop = solved.loop;
      result.ohms = std::abs(solved.loop);
      result.x_over_r = x_over_r(solved.loop);
      result.phases = loops.phases;
      const Complex inductive =
          solve(loops, with_source(rest, std::polar(term.ohms, term.angle_high)), result.volts, most).loop;
      if (most) result.peak = peak_factor(x_over_r(inductive)) * std::numbers::sqrt2 * solved.amps;
      result.source_ohms =
          std::abs(solve(loops, with_source(term.fixed, std::polar(term.ohms, angle)), result.volts, most).loop);
    }
  }
  return result;
}

Walk walk(const Network& network, const StateTree& tree, Condition condition) {
  Walk result;
  result.boards.assign(network.boards.size(), ConductorMatrix::Zero());
  for (const int b : tree.order) {
    const auto board = static_cast<std::size_t>(b);
    ConductorMatrix& z = result.boards[board];
    const Source& source = network.sources[static_cast<std::size_t>(tree.source_of[board])];
    if (const int f = tree.feeder[board]; f >= 0) {
      const models::Submain& submain = network.submains[static_cast<std::size_t>(f)];
      z = result.boards[static_cast<std::size_t>(submain.from)] +
          run_matrix(network, submain.cable, submain.length.value, submain.in_parallel, false, condition);
    } else if (source.tails.present) {
      const bool pen = source.transformer && source.link_at_board;
      z = run_matrix(network, source.tails.cable, source.tails.length, source.tails.in_parallel, pen, condition);
    }
    // A TT installation's protective conductor starts at its electrode, not at the source.
    if (const int e = network.boards[board].electrode;
        e >= 0 && source.earthing == models::Earthing::TT && tree.electrode[board] == e) {
      z.row(4).setZero();
      z.col(4).setZero();
      z(4, 4) = network.electrodes[static_cast<std::size_t>(e)].resistance;
    }
  }
  return result;
}

ConductorMatrix circuit_matrix(const Network& network, const Circuit& circuit, CircuitEnd end,
                               Condition condition) noexcept {
  const ConductorMatrix whole = run_matrix(network, circuit.cable, circuit.length.value,
                                           circuit.ring ? 1 : circuit.in_parallel, circuit.pen, condition);
  if (!circuit.ring) return whole * end.fraction;
  ConductorMatrix z = whole * (end.fraction * (1.0 - end.fraction));
  if (end.spur >= 0) {
    const double length = circuit.spurs[static_cast<std::size_t>(end.spur)].length;
    z += run_matrix(network, circuit.cable, length, 1, false, condition);
  }
  return z;
}

CircuitEnd spur_end(const Circuit& circuit, int spur) noexcept {
  return {circuit.spurs[static_cast<std::size_t>(spur)].at / circuit.length.value, spur};
}

CircuitEnd worst_end(const Network& network, const Circuit& circuit) noexcept {
  if (!circuit.ring) return {};
  auto loop = [&](CircuitEnd end) {
    const ConductorMatrix z = circuit_matrix(network, circuit, end, Condition::minimum);
    return std::abs(z(0, 0) + (circuit.conductors.has(Conductor::PE) ? z(4, 4) : z(3, 3)));
  };
  CircuitEnd worst{0.5, -1};
  for (int s = 0; s < static_cast<int>(circuit.spurs.size()); ++s) {
    const CircuitEnd end = spur_end(circuit, s);
    if (loop(end) > loop(worst)) worst = end;
  }
  return worst;
}

namespace {

void put(const FaultCurrent& current, FaultRow& row) {
  row.phases = current.phases;
  row.known = current.known;
  row.needs = current.needs;
  row.current = current.known ? current.amps : kNone;
  row.peak = current.known ? current.peak : kNone;
  row.x_over_r = current.known && current.x_over_r >= 0 ? current.x_over_r : kNone;  // none of a capacitive loop
  row.loop_ohms = current.known ? current.ohms : kNone;
  row.driving_volts = current.volts;
}

void add_rows(const Network& network, const Source& source, const ConductorMatrix& net, ConductorSet have,
              Condition condition, FaultRow row, std::vector<FaultRow>& rows) {
  for (const Fault fault : kAllFaults) {
    const FaultCurrent current = fault_current(network, source, net, have, condition, fault);
    if (!current.possible) continue;
    row.fault = fault;
    put(current, row);
    rows.push_back(row);
  }
}

// Every board and circuit end of a state that is solved as a grid.
void add_grid_rows(const Network& network, const StateGrid& grid, const StateTree& tree, Condition condition,
                   std::vector<FaultRow>& rows) {
  FaultRow row;
  row.state = network.states[static_cast<std::size_t>(tree.state)].name;
  row.condition = condition;
  auto add = [&](const std::string& node, const GridPlace& place) {
    row.node = node;
    for (const Fault fault : kAllFaults) {
      const FaultCurrent current = grid.current(place, fault);
      if (!current.possible) continue;
      row.fault = fault;
      put(current, row);
      rows.push_back(row);
    }
  };
  for (std::size_t b = 0; b < network.boards.size(); ++b)
    if (tree.live(static_cast<int>(b))) add(network.boards[b].name, grid.at_board(static_cast<int>(b)));
  for (std::size_t c = 0; c < network.circuits.size(); ++c) {
    const Circuit& circuit = network.circuits[c];
    if (!tree.live(circuit.board)) continue;
    const std::string node = models::address(network, circuit);
    add(node, grid.at_circuit(static_cast<int>(c), worst_end(network, circuit)));
    for (int spur = 0; spur < static_cast<int>(circuit.spurs.size()); ++spur)
      add(fmt::format("{}/spur{}", node, spur + 1), grid.at_circuit(static_cast<int>(c), spur_end(circuit, spur)));
  }
}

}  // namespace

std::vector<FaultRow> solve_faults(const Network& network) {
  std::vector<FaultRow> rows;
  for (std::size_t s = 0; s < network.states.size(); ++s) {
    const StateTree tree = state_tree(network, static_cast<int>(s));
    if (tree.grid) {
      for (const Condition condition : {Condition::maximum, Condition::minimum})
        add_grid_rows(network, StateGrid(network, tree, condition), tree, condition, rows);
      continue;
    }
    for (const Condition condition : {Condition::maximum, Condition::minimum}) {
      const Walk reached = walk(network, tree, condition);
      FaultRow row;
      row.state = network.states[s].name;
      row.condition = condition;
      for (std::size_t b = 0; b < network.boards.size(); ++b) {
        if (!tree.live(static_cast<int>(b))) continue;
        row.node = network.boards[b].name;
        add_rows(network, network.sources[static_cast<std::size_t>(tree.source_of[b])], reached.boards[b],
                 tree.conductors[b], condition, row, rows);
      }
      for (const Circuit& circuit : network.circuits) {
        if (!tree.live(circuit.board)) continue;
        const auto board = static_cast<std::size_t>(circuit.board);
        const Source& source = network.sources[static_cast<std::size_t>(tree.source_of[board])];
        ConductorSet have = circuit.conductors;
        if (!tree.conductors[board].has(Conductor::PE)) have.remove(Conductor::PE);
        auto add = [&](const std::string& node, CircuitEnd end) {
          row.node = node;
          add_rows(network, source, reached.boards[board] + circuit_matrix(network, circuit, end, condition), have,
                   condition, row, rows);
        };
        const std::string node = models::address(network, circuit);
        add(node, worst_end(network, circuit));
        for (int spur = 0; spur < static_cast<int>(circuit.spurs.size()); ++spur)
          add(fmt::format("{}/spur{}", node, spur + 1), spur_end(circuit, spur));
      }
    }
  }
  return rows;
}

}  // namespace sunder::solver
