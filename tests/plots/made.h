// SPDX-License-Identifier: Apache-2.0
/// @file
/// A small network and results made by hand, so that what is printed can be foreseen.
#pragma once

#include <vector>

#include "models/network.h"
#include "solver/fault_study.h"
#include "solver/results.h"

namespace sunder::test {

/// Board "intake" fed by "grid", submain "S1" to board "workshop", circuit "workshop/W2".
[[nodiscard]] models::Network small_network();

/// One finding of each verdict: fails, undecided, noted (a pair), meets.
[[nodiscard]] std::vector<solver::Finding> findings();

/// A fuse above a breaker with a residual part, two damage lines, four currents.
[[nodiscard]] solver::PathChart path_chart();

/// A line-earth fault at "workshop" through S1 from "grid", in the maximum, with currents and touch voltages, and the
/// same not known in the minimum.
[[nodiscard]] std::vector<solver::FaultDetail> fault_details();

/// One flip at 83.2 m, one undecided stretch.
[[nodiscard]] solver::Sweep sweep();

}  // namespace sunder::test
