// SPDX-License-Identifier: Apache-2.0
/// @file
/// Everything a check may ask about one subject in one supply state, solved before it is asked.
#pragma once

#include <array>
#include <memory>
#include <string>
#include <vector>

#include "models/network.h"
#include "solver/clearing.h"
#include "solver/faults.h"
#include "solver/loading.h"
#include "solver/results.h"
#include "solver/state_grid.h"

namespace sunder::solver {

enum class SubjectKind { circuit, submain, tails, board };

/// One thing that checks judge.
struct Subject {
  SubjectKind kind = SubjectKind::circuit;
  int index = 0;  ///< into circuits, submains, sources (tails) or boards
};

/// Currents of the four faults at one place, by Fault.
using Currents = std::array<FaultCurrent, 4>;

[[nodiscard]] inline const FaultCurrent& of(const Currents& currents, Fault fault) {
  return currents[static_cast<std::size_t>(fault)];
}

/// A fault inside one of n parallel cables, x of the way along it, 0..m/2 with m = n/(n-1).
struct InnerFault {
  double fraction = 0;
  double share = 1;  ///< of the current that the near part of that cable carries: 1 - x/m
  Currents least;    ///< minimum condition
};

/// The solved surroundings of a subject. Pointers are null where the subject has no such part.
struct Situation {
  const models::Network* network = nullptr;
  const StateTree* tree = nullptr;
  const Loading* loading = nullptr;
  SubjectKind kind = SubjectKind::circuit;
  std::string address;
  std::string state;
  models::Origin at{};
  const models::Source* source = nullptr;
  const models::Circuit* circuit = nullptr;
  const models::Submain* submain = nullptr;
  const models::Board* board = nullptr;  ///< at the line side; kind board: itself
  int board_index = -1;
  // a run (circuit, submain, tails)
  const models::Device* device = nullptr;  ///< its own; may be of kind none
  const models::Cable* cable = nullptr;
  double length = 0;
  int in_parallel = 1;
  bool ring = false;
  bool looped = false;              ///< in a loop or between sources: its device carries a part of the current
  models::ConductorSet conductors;  ///< that reach its far end
  models::Use use = models::Use::unknown;
  std::vector<Protector> path;        ///< source first
  Currents origin_max;                ///< at the line side of its device, maximum
  Currents far_min;                   ///< at its far end (ring: worst place), minimum
  std::vector<models::Stage> stages;  ///< of inverters that alone feed the place, at its voltage; else empty
  std::vector<InnerFault> inner;      ///< of parallel cables, from the device on; far_min is then the worst place
  FaultCurrent first_fault;           ///< boards in IT: greatest line-earth current of the network as it is
  Drop drop;                          ///< at its far end, from the supply terminals
  double motors = 0;                  ///< rated current of all motors in this part of the network [A]
  std::string motors_unknown;         ///< a motor there whose current is not given, "" if none
};

/// What is solved once per state and shared by every subject in it.
struct StateSolution {
  StateTree tree;
  Walk maximum, minimum;                                  ///< where the state is a forest of cables on declared sources
  std::unique_ptr<StateGrid> grid_maximum, grid_minimum;  ///< otherwise
  /// IT: the same network with the star points joined to the protective conductors, whose loops the rule for the
  /// second fault asks for.
  std::unique_ptr<models::Network> joined;
  std::unique_ptr<StateGrid> joined_maximum, joined_minimum;
  Loading loading;

  /// Precondition: tree.grid.
  [[nodiscard]] const StateGrid& grid(Condition condition) const {
    return condition == Condition::maximum ? *grid_maximum : *grid_minimum;
  }
};

[[nodiscard]] StateSolution solve_state(const models::Network& network, int state);

/// Whether a source has a device or conductors of its own before its board (subject kind `tails`).
[[nodiscard]] bool has_origin(const models::Source& source);

/// Subjects that are live in a state, circuits first.
[[nodiscard]] std::vector<Subject> subjects(const models::Network& network, const StateSolution& solution);

/// Whether a subject is one of them.
[[nodiscard]] bool is_live(const models::Network& network, const StateSolution& solution, Subject subject);

[[nodiscard]] Situation situation(const models::Network& network, const StateSolution& solution, Subject subject);

using FaultList = std::initializer_list<Fault>;

/// Greatest of the usable currents; nullptr if none is possible, an unknown one if any possible is not known.
[[nodiscard]] const FaultCurrent* greatest(const Currents& currents, FaultList faults, Fault* which);
/// Least, in the same way.
[[nodiscard]] const FaultCurrent* least(const Currents& currents, FaultList faults, Fault* which);

/// The disconnection time the rule set allows this run [s], with its clause.
struct TimeLimit {
  double seconds = 0;
  bool distribution = false;
  bool assumed_use = false;
};
[[nodiscard]] TimeLimit time_limit(const Situation& s);

}  // namespace sunder::solver
