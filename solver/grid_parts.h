// SPDX-License-Identifier: Apache-2.0
/// @file
/// What the parts of the grid share.
#pragma once

#include "solver/grid.h"

namespace sunder::solver::grid_parts {

inline constexpr models::Conductor kAll[] = {models::Conductor::L1, models::Conductor::L2, models::Conductor::L3,
                                             models::Conductor::N, models::Conductor::PE};
inline constexpr int kPeSlot = 4;

/// Impedance that a conductor of a run has [ohm].
[[nodiscard]] inline Complex of(const RunImpedance& z, models::Conductor c) noexcept {
  if (c == models::Conductor::N) return z.neutral;
  return c == models::Conductor::PE ? z.protective : z.line;
}

}  // namespace sunder::solver::grid_parts
