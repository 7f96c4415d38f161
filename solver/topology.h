// SPDX-License-Identifier: Apache-2.0
/// @file
/// Who feeds whom in one supply state: the network as a forest hung on its sources. Boost.Graph is
/// used inside topology.cpp alone.
#pragma once

#include <vector>

#include "models/network.h"

namespace sunder::solver {

/// The tree of one state. Indices are those of the network's tables; -1 means none.
struct StateTree {
  int state = 0;
  std::vector<int> source_of;                    ///< of each board; -1: dead in this state
  std::vector<int> feeder;                       ///< submain that feeds each board; -1: a source or nothing does
  std::vector<int> order;                        ///< live boards, each after the one that feeds it
  std::vector<models::ConductorSet> conductors;  ///< that reach each board
  std::vector<int> electrode;                    ///< that the board's protective conductor is earthed by (TT); -1: none

  [[nodiscard]] bool live(int board) const { return source_of[static_cast<std::size_t>(board)] >= 0; }
};

/// Precondition: check_topology(network) is empty.
[[nodiscard]] StateTree state_tree(const models::Network& network, int state);

/// Submains leaving each board, in table order.
[[nodiscard]] std::vector<std::vector<int>> submains_from(const models::Network& network);

/// Circuits of each board, in table order.
[[nodiscard]] std::vector<std::vector<int>> circuits_on(const models::Network& network);

}  // namespace sunder::solver
