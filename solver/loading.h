// SPDX-License-Identifier: Apache-2.0
/// @file
/// Demand of boards and voltage drop from the supply terminals.
#pragma once

#include <array>
#include <string>
#include <vector>

#include "models/network.h"
#include "solver/topology.h"

namespace sunder::solver {

/// A current that may not be known.
struct Demand {
  double amps = 0;  ///< [A] in the most loaded line
  double pf = 1;    ///< mean of what it feeds, weighted by current
  bool known = true;
  bool declared = false;          ///< by `demand`; otherwise the sum of the loads, without diversity
  std::string needs;              ///< "load of workshop/W4"
  std::array<double, 3> lines{};  ///< each line [A]; all zero where only the whole is declared

  /// Bound of the neutral current: greatest less least line [A].
  [[nodiscard]] double unbalance() const;
};

/// Voltage drop along a path, relative to the nominal voltage.
struct Drop {
  double share = 0;  ///< [1]
  bool known = true;
  std::string needs;
  double length = 0;                                   ///< of the path from the supply terminals [m]
  const char* why = "a load on the way is not known";  ///< that it is not known
};

/// Per board of one state: demand of what it feeds, drop at its busbar.
struct Loading {
  std::vector<Demand> demand;               ///< of each board: what its busbar delivers
  std::vector<Demand> submain;              ///< of each submain: declared, or what its board delivers
  std::vector<Demand> source;               ///< of each source, in the same way
  std::vector<Drop> drop;                   ///< at each board
  std::vector<double> motors;               ///< rated current of all motors below each source [A], by source
  std::vector<std::string> motors_unknown;  ///< a motor of each source whose current is not given, "" if none
};

/// Demands leaf to root, drops root to leaf.
///
///     one line and neutral:  dU/U0 = I [(R_L + R_N) cos + (X_L + X_N) sin] / U0
///     between two lines:     dU/U  = 2 I (R cos + X sin) / U
///     three lines:           dU/U0 = [I z + I_N z_N] / U0 with z = R cos + X sin, I_N the greatest line
///                            current less the least; a declared demand is taken as balanced (I_N = 0)
///
/// R at the conductor temperature theta_a + (I/Iz)^2 (theta_max - theta_a), at theta_max without Iz.
/// An own transformer counts from its no-load side. A demand not declared is the sum of the loads of
/// the most loaded line.
[[nodiscard]] Loading load_network(const models::Network& network, const StateTree& tree);

/// Demand of what a group device feeds: declared, or the sum of its ways' loads.
[[nodiscard]] Demand group_demand(const models::Network& network, const Loading& loading, int board, int group);

/// Drop along a circuit alone, at its worst place.
[[nodiscard]] Drop circuit_drop(const models::Network& network, const models::Circuit& circuit,
                                const models::Source& source);

}  // namespace sunder::solver
