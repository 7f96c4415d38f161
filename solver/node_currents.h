// SPDX-License-Identifier: Apache-2.0
/// @file
/// The four fault currents of every node of a grid in one pass.
#pragma once

#include <array>
#include <vector>

#include "solver/grid.h"

namespace sunder::solver {

/// Voltages that drive the loops [V].
struct DrivingVolts {
  double to_neutral = 0;   ///< line-neutral and line-earth: c U0
  double between = 0;      ///< line-line: c U
  double of_one_line = 0;  ///< three-phase: c U / sqrt(3)
};

/// Currents of one node by Fault [A]; NaN where the conductors are not there.
using NodeCurrents = std::array<double, 4>;

/// I = U / |F' Z F| at every node, of the equivalent choices of lines the greatest or the least. What a
/// node's stripped path adds to each loop is two numbers, so that a node costs no matrix.
/// Precondition: grid.solve().
/// @param out  by node; its room is used again
void node_currents(const Grid& grid, const DrivingVolts& volts, bool most, std::vector<NodeCurrents>& out);

}  // namespace sunder::solver
