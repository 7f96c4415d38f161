// SPDX-License-Identifier: Apache-2.0
/// @file
/// What `sunder faults` says of a network in detail: every fault at every board, or one place alone.
#pragma once

#include <array>
#include <complex>
#include <string>
#include <vector>

namespace sunder::published {

/// Currents of the conductors L1 L2 L3 N PE [A].
using Amps = std::array<std::complex<double>, 5>;

struct ElementAnswer {
  std::string element;  ///< "S1", "T primary", "G"
  Amps amps{};          ///< away from its first end; of a source or motor: out of it
  double residual = 0;  ///< of lines and neutral [A]
};

struct TouchAnswer {
  std::string board;
  double to_earth = 0;  ///< of its protective conductor [V]
};

/// One fault, as sunder.fault-study/1 tells it.
struct StudyAnswer {
  std::string state, condition, node, fault;
  double amps = 0;            ///< [A]
  double peak = 0;            ///< [A]; NaN in the minimum
  std::complex<double> loop;  ///< impedance that `volts` drive the current through [ohm]
  double volts = 0;           ///< [V]
  Amps into_fault{};
  std::vector<ElementAnswer> elements;  ///< if asked for
  std::vector<TouchAnswer> touch;       ///< if asked for
};

/// `sunder faults net.toml options --json`. With --currents or --touch alone: every board.
[[nodiscard]] std::vector<StudyAnswer> study(const std::string& netlist, const std::vector<std::string>& options);

/// The fault with these names; fails the test if there is none, or no current is known.
[[nodiscard]] StudyAnswer at(const std::vector<StudyAnswer>& faults, const std::string& condition,
                             const std::string& node, const std::string& fault, const std::string& state = "normal");

/// Current of an element; fails the test if there is none.
[[nodiscard]] ElementAnswer in(const StudyAnswer& fault, const std::string& element);

/// Voltage of a board's protective conductor to reference earth [V]; fails the test if there is none.
[[nodiscard]] double touch(const StudyAnswer& fault, const std::string& board);

/// What the two faulted lines of a fault of two lines and earth deliver to it [A], in the order of lines.
[[nodiscard]] std::array<std::complex<double>, 2> faulted_lines(const StudyAnswer& fault);

/// Currents and powers of textbooks are of the nominal voltage, the program's of c times it. Every
/// comparison with a textbook goes through here: the maximum has c = 1.10 at every voltage; the minimum
/// 1.00 above 1 kV (IEC 60909-0, table 1).
[[nodiscard]] double without_c(double of_the_maximum);

}  // namespace sunder::published
