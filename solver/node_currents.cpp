// SPDX-License-Identifier: Apache-2.0
#include "solver/node_currents.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "solver/fault_loops.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;

constexpr double kNever = std::numeric_limits<double>::quiet_NaN();

// The loops of a core node, to which the paths of what hangs on it are added.
struct Loops {
  std::array<Complex, 3> earth, neutral, lines;  // of L1 L2 L3; L1-L2 L2-L3 L3-L1
};

Loops loops_at(const ConductorMatrix& z) {
  Loops loops;
  auto loop = [&](int a, int b) { return z(a, a) + z(b, b) - z(a, b) - z(b, a); };
  for (int k = 0; k < 3; ++k) {
    loops.earth[static_cast<std::size_t>(k)] = loop(k, 4);
    loops.neutral[static_cast<std::size_t>(k)] = loop(k, 3);
    loops.lines[static_cast<std::size_t>(k)] = loop(k, (k + 1) % 3);
  }
  return loops;
}

// The square of the |Z| that makes the greatest (least) current among the choices that are there.
double governing(const std::array<Complex, 3>& base, Complex more, const std::array<bool, 3>& there, bool most) {
  double best = kNever;
  for (std::size_t k = 0; k < 3; ++k) {
    if (!there[k]) continue;
    const double size = std::norm(base[k] + more);
    if (!(most ? size >= best : size <= best)) best = size;
  }
  return best;
}

// A core whose lines are alike: one choice stands for all, and what hangs on it adds two numbers a loop.
void balanced_currents(const Grid& grid, const DrivingVolts& volts, std::vector<NodeCurrents>& out) {
  auto put = [&](int node, ConductorSet have, const Grid::BalancedLoops& loops, const Grid::Path& path) {
    NodeCurrents& amps = out[static_cast<std::size_t>(node)];
    amps.fill(kNever);
    const int n = have.lines();
    if (n == 0) return;
    if (n >= 2) {
      const double one = std::sqrt(std::norm(loops.line + path.line));
      amps[1] = 0.5 * volts.between / one;
      if (n == 3) amps[0] = volts.of_one_line / one;
    }
    if (have.has(Conductor::N))
      amps[2] = volts.to_neutral / std::sqrt(std::norm(loops.neutral + path.line + path.neutral));
    if (have.has(Conductor::PE))
      amps[3] = volts.to_neutral / std::sqrt(std::norm(loops.protective + path.line + path.protective));
  };
  const std::vector<int>& outward = grid.outward();
  for (std::size_t c = 0; c < grid.core().size(); ++c) {
    const int top = grid.core()[c];
    const Grid::BalancedLoops loops = grid.balanced_loops(top);
    put(top, grid.conductors(top), loops, {});
    for (int i = grid.hung()[c]; i < grid.hung()[c + 1]; ++i) {
      const auto k = static_cast<std::size_t>(i);
      put(outward[k], grid.reached_by(k), loops, grid.path_of(k));
    }
  }
}

}  // namespace

void node_currents(const Grid& grid, const DrivingVolts& volts, bool most, std::vector<NodeCurrents>& out) {
  out.resize(grid.nodes());
  if (grid.balanced()) {
    balanced_currents(grid, volts, out);
    return;
  }
  Loops loops;
  ConductorMatrix at_top;
  auto put = [&](int node, ConductorSet have, const Grid::Path& path) {
    NodeCurrents& amps = out[static_cast<std::size_t>(node)];
    amps.fill(kNever);
    const std::array<bool, 3> single{have.has(Conductor::L1), have.has(Conductor::L2), have.has(Conductor::L3)};
    const std::array<bool, 3> pair{single[0] && single[1], single[1] && single[2], single[2] && single[0]};
    amps[1] = volts.between / std::sqrt(governing(loops.lines, 2.0 * path.line, pair, most));
    if (have.has(Conductor::N))
      amps[2] = volts.to_neutral / std::sqrt(governing(loops.neutral, path.line + path.neutral, single, most));
    if (have.has(Conductor::PE))
      amps[3] = volts.to_neutral / std::sqrt(governing(loops.earth, path.line + path.protective, single, most));
    if (have.lines() != 3) return;
    ConductorMatrix z = at_top;
    for (int k = 0; k < 3; ++k) z(k, k) += path.line;
    amps[0] = solve_loops(fault_choices(Fault::three_phase).front(), z, volts.of_one_line, 0.0, false, most).amps;
  };
  const std::vector<int>& outward = grid.outward();
  for (std::size_t c = 0; c < grid.core().size(); ++c) {
    const int top = grid.core()[c];
    at_top = grid.thevenin(top);
    loops = loops_at(at_top);
    put(top, grid.conductors(top), {});
    for (int i = grid.hung()[c]; i < grid.hung()[c + 1]; ++i) {
      const auto k = static_cast<std::size_t>(i);
      put(outward[k], grid.reached_by(k), grid.path_of(k));
    }
  }
}

}  // namespace sunder::solver
