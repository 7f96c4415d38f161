// SPDX-License-Identifier: Apache-2.0
/// @file
/// The library's data files as values: parsed on first use, then kept.
#pragma once

#include <string>
#include <vector>

#include "models/cables.h"
#include "models/devices.h"
#include "models/rules.h"

namespace sunder::netlists {

struct Library {
  std::vector<models::CableConstruction> constructions;  ///< by name
  std::vector<models::DeviceFamily> families;            ///< by name
  std::vector<models::RuleSet> rule_sets;                ///< by name
  std::vector<std::string> errors;                       ///< defects in our own data files; a test keeps it empty
};

/// The embedded library. Thread-safe, parsed once.
[[nodiscard]] const Library& library();

/// Parses data files given as (name, text); used by library() and its tests.
[[nodiscard]] Library parse_library(const std::vector<std::pair<std::string, std::string>>& files);

}  // namespace sunder::netlists
