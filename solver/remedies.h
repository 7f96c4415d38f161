// SPDX-License-Identifier: Apache-2.0
/// @file
/// What would mend a failure, tried against every check before it is offered.
#pragma once

#include <vector>

#include "solver/results.h"

namespace sunder::solver {

/// For each failing finding of a circuit or submain: the greatest length at which its check is met
/// and the next size of cable (or of its protective conductor) that meets it. Each is then put into
/// a copy of the network and all checks are run: `holds` says that every check of the subject is met
/// and none elsewhere is worse; otherwise `note` names what is not.
void add_remedies(const models::Network& network, std::vector<Finding>& findings);

}  // namespace sunder::solver
