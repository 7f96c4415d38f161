// SPDX-License-Identifier: Apache-2.0
/// @file
/// A network as equations, conductor by conductor, and the faults that are closed in it.
#pragma once

#include <array>
#include <optional>
#include <string>
#include <vector>

#include "tests/reference/equations.h"
#include "tests/reference/meshed.h"

namespace sunder::reference::meshed {

/// Where a fault can be, with the unknowns that are the potentials of its conductors.
struct Place {
  static constexpr int kAbsent = -2;
  std::string name;  ///< "hall", "hall/W1", "hall/W1/spur1", "hall/W1/middle" of a ring
  int board = 0;
  double ring_metres = 0;  ///< on a ring: length of the equal single cable to here
  /// L1 L2 L3 N PE; above 1 kV PE is reference earth.
  std::array<int, kConductors> node{kAbsent, kAbsent, kAbsent, kAbsent, kAbsent};
  [[nodiscard]] bool has(std::size_t conductor) const { return node[conductor] != kAbsent; }
};

/// What an element carries: a run, bond and link from `from` to `to`, an in-feed out into its board, a primary
/// winding out of its board. N of an in-feed is its star point, whatever joins that: N, PE, reference earth.
using CarriedAmps = std::array<std::optional<Equations::Current>, kConductors>;
struct Carried {
  std::string element;  ///< "S1", "T1 primary", "T1 secondary", "T1 tails", "grid", "M1"
  CarriedAmps amps;
};

struct Model {
  Equations equations;
  std::vector<Place> places;
  std::vector<Carried> carried;
  double rcond = 0;  ///< reciprocal condition number
  [[nodiscard]] const Place& place(const std::string& name) const;
};

[[nodiscard]] Model build_model(const Network& network, Condition condition);

/// A fault with the lines it is between.
struct Asked {
  Fault fault = Fault::line_earth;
  std::vector<std::size_t> lines;
};

/// Every fault that the conductors of a place allow, each with every choice of lines.
[[nodiscard]] std::vector<Asked> possible_faults(const Place& place);

/// "L1-L2-PE", above 1 kV "L1-L2-earth"
[[nodiscard]] std::string phases_text(const Place& place, const Asked& asked);

/// The electromotive forces of a fault: of each line towards the common point, and what that point is.
/// Line to line: one force of c U between the two. Everything else: c U0 (three-phase c U / sqrt(3)) in each
/// line, at 0, -120 and 120 degrees.
[[nodiscard]] std::vector<Equations::Closing> closings(const Network& network, Condition condition, const Place& place,
                                                       const Asked& asked);

/// Current that each conductor gives to the fault [A], from a solution for these closings.
[[nodiscard]] std::array<Complex, kConductors> into_fault(const Asked& asked, const Equations::Solution& solution);

/// Impedances and where they come from, as both ways of solving need them.
[[nodiscard]] Complex conductor_ohms(const Network& network, const Length& length, Condition condition);

}  // namespace sunder::reference::meshed
