// SPDX-License-Identifier: Apache-2.0
/// @file
/// Does the device nearest the fault clear it before the one above is moved?
#pragma once

#include <string>

#include "models/devices.h"
#include "solver/results.h"

namespace sunder::solver {

enum class Selectivity { total, partial, none, undecided };

[[nodiscard]] const char* word(Selectivity selectivity) noexcept;

/// What is known of a pair.
struct PairVerdict {
  Selectivity selectivity = Selectivity::undecided;
  double limit = kNone;  ///< proven up to this current [A]; infinite is never used: capped at `available`
  std::string basis;     ///< on what it rests
  std::string needs;     ///< what would decide more
};

/// Overcurrents: selective at a current where the downstream latest time is not above the upstream
/// earliest time (curves), or the downstream greatest let-through is not above the upstream least
/// pre-arcing I2t (energy). The limit is the greatest current up to which one of them holds for all
/// currents from the downstream device's first sure operation on.
/// Two fuses of one family whose gates at 0.1 s and I2t limits do not overlap are selective as the
/// standard states (IEC 60269, gG at 1.6 : 1).
/// @param available  greatest current at the downstream device [A]
/// @param kappa      peak factor there, for the let-through bound
/// Accuracy of the limit: 1e-9 relative.
[[nodiscard]] PairVerdict overcurrent_selectivity(const models::Device& downstream, const models::Device& upstream,
                                                  double available, double kappa);

/// Residual currents: IdN at least 3 : 1, the upstream one delayed (type S) above one that is not, its
/// type (AC < A < F < B) no lower.
/// An upstream one above a device that has none is not selective above half its IdN.
[[nodiscard]] PairVerdict residual_selectivity(const models::Device& downstream, const models::Device& upstream,
                                               double available);

}  // namespace sunder::solver
