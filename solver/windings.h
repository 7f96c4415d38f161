// SPDX-License-Identifier: Apache-2.0
/// @file
/// Two-winding transformers as windings: the vector group, its clock number and the stop of zero
/// sequence come out of how the coils are connected.
#pragma once

#include <Eigen/Core>

#include "models/network.h"
#include "solver/impedance.h"

namespace sunder::solver {

/// Admittances between the terminals of a transformer [S], symmetric.
struct WindingModel {
  Eigen::MatrixXcd y;
  bool primary_star = false;    ///< terminal 3 is the primary star point
  bool secondary_star = false;  ///< the last terminal is the secondary star point
  /// Terminals: primary L1 L2 L3, [primary star], secondary L1 L2 L3, [secondary star].
  [[nodiscard]] int secondary_first() const noexcept { return primary_star ? 4 : 3; }
};

/// Coils on three legs without magnetising current, the short-circuit impedance on the secondary:
///
///     i_s = (v_s - v_star - e) / z1        star or zigzag, e = r v_p by the connection of the coils
///     i_c = (v_coil - e) / (3 z1)          delta
///     i_p = - r' i_s
///
/// z0 other than z1 adds (z0 - z1)/3 between the star of the coils and the star point; it may be
/// negative. A star-star unit whose primary star is open has its z0 by the core: a delta that does
/// not exist but carries the zero-sequence ampere-turns.
///
/// @param z1  short-circuit impedance, of the secondary [ohm]
/// @param z0  zero-sequence impedance, of the secondary [ohm]; NaN: not known, the star point is
///            then left open
/// Accuracy: exact for the model. Source: coil equations; vector groups as IEC 60076-1.
[[nodiscard]] WindingModel winding_model(const models::Transformer& transformer, Complex z1, Complex z0);

/// Whether a clock number is possible with these windings: even for equal kinds, odd for unequal ones.
[[nodiscard]] bool clock_possible(models::Winding primary, models::Winding secondary, int clock) noexcept;

}  // namespace sunder::solver
