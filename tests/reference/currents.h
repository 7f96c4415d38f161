// SPDX-License-Identifier: Apache-2.0
/// @file
/// The prospective currents of a network as ngspice's impedances and the declared supply give them.
#pragma once

#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "tests/reference/deck.h"
#include "tests/reference/network.h"

namespace sunder::reference {

/// One result as the program should print it.
struct Current {
  Condition condition = Condition::maximum;
  std::string node;
  Fault fault = Fault::line_earth;
  double amps = 0;      ///< NaN: the declaration leaves it unknown
  double peak = 0;      ///< [A], maximum only; NaN in the minimum
  double x_over_r = 0;  ///< of the loop; NaN where the angle of the source is a range
};

[[nodiscard]] const char* word(Condition condition);
[[nodiscard]] const char* word(Fault fault);

/// Every node, condition and possible fault of a network.
[[nodiscard]] std::vector<Current> reference_currents(const Network& network);

/// Power factor of the short-circuit test of IEC 60947-2 (table 11) for a current [A].
[[nodiscard]] double test_power_factor(double amps);

/// kappa = 1.02 + 0.98 exp(-3 R/X) of IEC 60909-0; 1.02 for X = 0.
[[nodiscard]] double kappa(double r, double x);

}  // namespace sunder::reference
