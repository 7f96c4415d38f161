// SPDX-License-Identifier: Apache-2.0
/// @file
/// A network as a circuit for ngspice, conductor by conductor, and the impedances that it finds.
#pragma once

#include <array>
#include <complex>
#include <map>
#include <string>
#include <vector>

#include "tests/reference/network.h"

namespace sunder::reference {

enum class Condition { maximum, minimum };
enum class Fault { three_phase, line_line, line_neutral, line_earth };

/// Places of a network where a fault can be, with the circuit's nodes of L1 L2 L3 N PE there ("" where
/// the conductor does not come).
struct Place {
  std::string name;  ///< "hall", "hall/H1", "hall/H1/spur1"; "hall/H1/middle" of a ring
  std::array<std::string, 5> nodes;
};

/// The passive circuit of one network in one condition: every conductor a resistor and an inductor,
/// rings as two legs, parallel cables as so many cables, a Dyn transformer as delta and star windings on
/// ideal cores. All electromotive forces are zero; what drives a fault is put at the fault.
struct Deck {
  std::string circuit;  ///< element lines
  std::vector<Place> places;
  bool declared_source = false;  ///< its lines hold an impedance that each question sets
};

[[nodiscard]] Deck build_deck(const Network& network, Condition condition);

/// What is asked of a deck: the impedance of the loop that a fault closes.
struct Question {
  int place = 0;  ///< index into Deck::places
  Fault fault = Fault::line_earth;
  std::vector<int> lines;             ///< of the fault
  std::complex<double> source{0, 0};  ///< in each line of a declared source [ohm]
};

/// Answers by ngspice's AC analysis at 50 Hz: one ampere round the loop, the voltage across it.
/// Three-phase: the impedance of one line to a star point (one ampere in each, 120 degrees apart).
/// @return one impedance a question [ohm]
/// Errors: aborts with what ngspice said if it did not answer all of them.
[[nodiscard]] std::vector<std::complex<double>> ask(const Deck& deck, const std::vector<Question>& questions);

}  // namespace sunder::reference
