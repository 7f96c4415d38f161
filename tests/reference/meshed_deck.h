// SPDX-License-Identifier: Apache-2.0
/// @file
/// A network as a circuit of ngspice: conductors as resistors and inductors, windings as coupled inductors.
#pragma once

#include <array>
#include <map>
#include <string>
#include <utility>
#include <vector>

#include "tests/reference/meshed.h"

namespace sunder::reference::meshed {

/// One fault of one network for the simulator.
struct DeckFault {
  std::string place;  ///< a board or the end of a circuit without ring
  Fault fault = Fault::line_earth;
  std::vector<std::size_t> lines;
};

/// What the simulator found [A].
struct DeckAnswer {
  std::array<Complex, kConductors> into_fault{};
  /// By element ("S1", "T1 primary") and conductor; those whose current some impedance carries.
  std::map<std::pair<std::string, std::size_t>, Complex> carried;
};

/// All faults of all networks in one run of ngspice, in one condition.
/// @return by network, then by fault
/// Errors: aborts the test with what ngspice said if it did not answer.
[[nodiscard]] std::vector<std::vector<DeckAnswer>> simulate(const std::vector<Network>& networks,
                                                            const std::vector<std::vector<DeckFault>>& faults,
                                                            Condition condition);

}  // namespace sunder::reference::meshed
