// SPDX-License-Identifier: Apache-2.0
/// @file
/// Every check on every subject, without remedies: the step that sweeps and remedies repeat.
#pragma once

#include <functional>
#include <string>
#include <vector>

#include "solver/results.h"

namespace sunder::solver {

/// Findings in the order subjects and checks come. One per check, subject and pair: the governing
/// one over the states, unless every state is asked for.
[[nodiscard]] std::vector<Finding> judge_network(const models::Network& network, bool every_state = false,
                                                 const std::function<void(std::size_t, std::size_t)>& progress = {});

/// `fails` over `undecided` over `meets`, then the least margin.
[[nodiscard]] bool governs(const Finding& a, const Finding& b);

/// What makes two findings the same question: check, subject, upstream device.
[[nodiscard]] std::string finding_key(const Finding& finding);

}  // namespace sunder::solver
