// SPDX-License-Identifier: Apache-2.0
/// @file
/// What `sunder faults` is asked for on the command line, as a question to the solver.
#pragma once

#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "solver/fault_study.h"

namespace sunder::solver {

/// Options as typed; absent ones are empty.
struct FaultOptions {
  std::optional<std::string> at, fault, through, state;
  std::vector<std::string> pair;
  bool currents = false;
  bool touch = false;

  [[nodiscard]] bool any() const noexcept {
    return at || fault || through || state || !pair.empty() || currents || touch;
  }
};

struct Refusal {
  std::string message, hint;
};

/// Errors: one sentence for the first option that is not understood. Whether a place or a state exists is not
/// known here: the solver says.
[[nodiscard]] std::variant<FaultQuery, Refusal> read_fault_query(const FaultOptions& options);

/// "three-phase, line-line, line-neutral, line-earth, two-lines-earth"
[[nodiscard]] std::string fault_names();

}  // namespace sunder::solver
