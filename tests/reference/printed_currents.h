// SPDX-License-Identifier: Apache-2.0
/// @file
/// What `sunder faults NET --json` says, as values.
#pragma once

#include <string>
#include <vector>

namespace sunder::reference {

/// One row of the form "sunder.faults/1"; a null number is NaN.
struct PrintedCurrent {
  std::string state, condition, node, fault, phases;
  double amps = 0;
  double peak = 0;
  double x_over_r = 0;
};

/// The rows of a run's output.
/// Errors: a text that is not of that form fails the test that is running, with what is wrong.
[[nodiscard]] std::vector<PrintedCurrent> read_currents(const std::string& json);

}  // namespace sunder::reference
