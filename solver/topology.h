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

  // Where the state is no forest of cables hung on declared sources, the grid solves it (state_grid.h).
  bool grid = false;
  /// Transformers inside the network, each as the source that the boards behind it see: its voltage,
  /// earthing and name.
  std::vector<models::Source> stand_ins;
  std::vector<int> stand_in;  ///< of each board, into stand_ins; -1: a source of the network
  /// Next board on every way to the sources; -1: a source feeds this one, or several ways do.
  std::vector<int> above;
  std::vector<int> transformer;  ///< through which alone a board is fed; -1: none
  std::vector<int> link;         ///< through which alone a board is fed; -1: none
  std::vector<bool> sole;        ///< whether one source alone feeds the board, directly
  std::vector<bool> looped;      ///< of each submain: part of a loop or of a path between sources

  [[nodiscard]] bool live(int board) const { return source_of[static_cast<std::size_t>(board)] >= 0; }
};

/// Precondition: check_topology(network) is empty.
/// @param as_grid  also where a walk would do: with ways and loops found
[[nodiscard]] StateTree state_tree(const models::Network& network, int state, bool as_grid = false);

/// Boards that are live in a state, in the order in which they are reached from its sources: a submain or
/// transformer feeds from its `from` end (from either, where nothing else feeds that board), a link from both.
[[nodiscard]] std::vector<int> live_boards(const models::Network& network, int state);

/// What feeds a board as its checks see it: a source of the network or a transformer in it.
/// Precondition: the board is live.
[[nodiscard]] const models::Source& system_of(const models::Network& network, const StateTree& tree, int board);

/// Whether a board's nominal voltage is above 1 kV.
[[nodiscard]] bool high_voltage(const models::Network& network, const StateTree& tree, int board);

/// Submains on the one way from a board up to its source or transformer, nearest first; where several ways
/// lead on, those below.
[[nodiscard]] std::vector<int> feeders_above(const models::Network& network, const StateTree& tree, int board);

/// Submains leaving each board, in table order.
[[nodiscard]] std::vector<std::vector<int>> submains_from(const models::Network& network);

/// Circuits of each board, in table order.
[[nodiscard]] std::vector<std::vector<int>> circuits_on(const models::Network& network);

}  // namespace sunder::solver
