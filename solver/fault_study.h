// SPDX-License-Identifier: Apache-2.0
/// @file
/// One fault looked at closely: at any place, also along a run or between two places, with what each
/// conductor and device carries and what can be touched meanwhile.
#pragma once

#include <array>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "models/network.h"
#include "solver/impedance.h"
#include "solver/results.h"

namespace sunder::solver {

/// What is asked.
struct FaultQuery {
  std::string at;              ///< "workshop", "workshop/W2", "S1@40%", "S1@32 m"; "": every node
  std::optional<Fault> fault;  ///< nothing: every fault that is possible there
  double through_ohms = 0;     ///< resistance of the fault itself [ohm]
  std::string pair;            ///< a second place: one line to PE here, another line there (IT)
  std::string state;           ///< "": every state
  bool currents = false;       ///< what each run, transformer, source and device carries
  bool touch = false;          ///< voltages of protective conductors
};

/// What one element carries during the fault, from its `from` end inward, reference direction from
/// `from` to `to`; amplitudes are rms phasors against the fault's first driving voltage.
struct ElementCurrent {
  std::string element;            ///< "S1", "T1 primary", "T1 secondary", "grid", "M1", "W2 of workshop"
  std::string from, to;           ///< names of the ends
  std::array<Complex, 5> amps{};  ///< L1 L2 L3 N PE [A]
  std::string device;             ///< text of the device at its start, "" for none
  double residual = 0;            ///< |sum of lines and neutral| [A]
};

/// Voltage of a board's protective conductor during the fault, or of that at the place of the fault.
struct TouchVoltage {
  std::string board;           ///< or the place, as asked
  double to_earth = kNone;     ///< to reference earth, all of a declared supply's loop taken in its return [V]
  double to_terminal = kNone;  ///< to the main earthing terminal: PE of the board that the source feeds [V]
};

/// Symmetrical breaking current for contacts that part so long after inception.
struct BreakingCurrent {
  double seconds = 0;
  double amps = 0;
};

/// One fault in one state and condition.
struct FaultDetail {
  FaultRow row;                          ///< current, loop, driving voltage; node is the place asked
  std::array<Complex, 5> into_fault{};   ///< current that each conductor delivers to the fault [A]
  std::vector<ElementCurrent> elements;  ///< with `currents`
  std::vector<TouchVoltage> touch;       ///< with `touch`; greatest between two boards stands in `between`
  double between = kNone;                ///< greatest voltage between protective conductors of two boards [V]
  std::string between_boards;            ///< "intake and store"
  // Of three-phase faults in the maximum with currents = "IEC 60909":
  std::vector<BreakingCurrent> breaking;  ///< Ib at 0.02, 0.05, 0.1 and 0.25 s
  double peak_by_b = kNone;               ///< ip by method B beside that by method C in `row` [A]
  double steady = kNone;                  ///< Ik; not known with generators whose sustained current is not declared
  bool motors_negligible = false;         ///< sum IrM <= 0.01 I"k: they may be left out (they are not)
  std::string undefined;                  ///< with `currents`: a link whose share is not defined, as it is in a loop
                                          ///< of links without impedance; "" for none
  double imbalance = 0;                   ///< greatest current sum left over at a node, relative to the fault current
};

/// @return the sentence that says why not: no such place (nearest one named), a place beyond the run,
/// a fault whose conductors are not there, a state that does not exist.
/// Precondition: check_topology is empty.
[[nodiscard]] std::variant<std::vector<FaultDetail>, std::string> study_faults(const models::Network& network,
                                                                               const FaultQuery& query);

}  // namespace sunder::solver
