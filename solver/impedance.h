// SPDX-License-Identifier: Apache-2.0
/// @file
/// Series impedances of runs, conductor by conductor, at the temperatures of a condition.
#pragma once

#include <Eigen/Core>
#include <complex>
#include <vector>

#include "models/network.h"
#include "solver/results.h"

namespace sunder::solver {

using Complex = std::complex<double>;

/// Impedances among L1 L2 L3 N PE [ohm]; an absent conductor has a zero row and column and is told
/// by the ConductorSet beside it.
using ConductorMatrix = Eigen::Matrix<Complex, 5, 5>;

/// Temperature a strand is taken at [degC]: 20 in the maximum; in the minimum by its place: the
/// insulation limit inside a cable, the rule set's armour or conduit temperature, ambient for a
/// conductor run separately; by IEC 60909 the final temperature of its k.
/// Source: design rule of the conditions; armour temperatures with the rule set's data.
[[nodiscard]] double strand_degc(const models::Network& network, const models::Cable& cable,
                                 const models::Strand& strand, Condition condition) noexcept;

/// Impedance of one strand per metre [ohm/m]:
///
///     z = r20 (1 + alpha (theta - 20)) f + j x
///
/// f is the rule set's armour factor in the minimum, 1 otherwise.
[[nodiscard]] Complex strand_impedance(const models::Network& network, const models::Cable& cable,
                                       const models::Strand& strand, Condition condition) noexcept;

/// Protective path of a cable per metre [ohm/m]: its strands in parallel. Zero where there is none.
[[nodiscard]] Complex protective_impedance(const models::Network& network, const models::Cable& cable,
                                           Condition condition) noexcept;

/// Greatest share of the protective current that each strand carries over both conditions, 0..1.
[[nodiscard]] std::vector<double> protective_shares(const models::Network& network, const models::Cable& cable);

/// Series impedance matrix of a run [ohm].
/// @param length       [m], >= 0
/// @param in_parallel  equal cables side by side, >= 1
/// @param pen          the neutral conductor serves as PEN: N and PE share it
[[nodiscard]] ConductorMatrix run_matrix(const models::Network& network, const models::Cable& cable, double length,
                                         int in_parallel, bool pen, Condition condition) noexcept;

}  // namespace sunder::solver
