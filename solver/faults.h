// SPDX-License-Identifier: Apache-2.0
/// @file
/// Fault currents from the Thevenin matrix of a node: one formula for every fault.
#pragma once

#include <vector>

#include "solver/impedance.h"
#include "solver/sources.h"
#include "solver/topology.h"

namespace sunder::solver {

/// The current of one fault at one place.
struct FaultCurrent {
  bool possible = false;   ///< the conductors are there
  bool known = true;       ///< the source's data suffices
  std::string needs;       ///< what is missing if not known
  double amps = 0;         ///< governing conductor current [A]
  double peak = kNone;     ///< [A], maximum only
  double x_over_r = 0;     ///< of the loop
  double ohms = 0;         ///< |Z| of the loop that `volts` drives [ohm]
  Complex loop;            ///< that loop [ohm]
  double volts = 0;        ///< [V]
  double source_ohms = 0;  ///< |Z| of the source's part of the loop [ohm]
  const char* phases = "";

  [[nodiscard]] bool usable() const noexcept { return possible && known; }
};

/// X/R of an impedance; infinite without resistance.
[[nodiscard]] double x_over_r(Complex z) noexcept;

/// Peak factor: kappa = 1.02 + 0.98 e^(-3R/X), 1.02 .. 2.
/// Source: IEC 60909-0; within 0.53 % of the exact first peak for R/X 0.005 to 1.2.
[[nodiscard]] double peak_factor(double x_over_r) noexcept;

/// Loop currents j = (F' Z F)^-1 F' e; conductor currents F j; greatest line current in the maximum,
/// least in the minimum, over the equivalent choices of lines.
///
/// @param net   path impedances from the source's terminals to the place [ohm]
/// @param have  conductors at the place
/// An open angle of the source is taken at the end that gives the greater current (maximum; the peak
/// factor at the inductive end), or where the current is least (minimum).
[[nodiscard]] FaultCurrent fault_current(const models::Network& network, const models::Source& source,
                                         const ConductorMatrix& net, models::ConductorSet have, Condition condition,
                                         Fault fault);

/// Path impedances to every place of one state and condition.
struct Walk {
  std::vector<ConductorMatrix> boards;  ///< of each board, from its source's terminals [ohm]
};

/// From each source outward: Z_child = Z_parent + z of the run between them.
[[nodiscard]] Walk walk(const models::Network& network, const StateTree& tree, Condition condition);

/// Where along a circuit a fault is taken.
struct CircuitEnd {
  double fraction = 1;  ///< of the length; ring: of the loop
  int spur = -1;        ///< spur whose end it is
};

/// Impedances from the board to a place on the circuit [ohm]. A ring fed from both ends presents
/// x(1-x) of the whole loop.
[[nodiscard]] ConductorMatrix circuit_matrix(const models::Network& network, const models::Circuit& circuit,
                                             CircuitEnd end, Condition condition) noexcept;

/// The far end; of a ring its worst place, spur ends included: the greatest line-earth loop (without
/// protective conductor: line-neutral).
[[nodiscard]] CircuitEnd worst_end(const models::Network& network, const models::Circuit& circuit) noexcept;

/// End of a spur.
[[nodiscard]] CircuitEnd spur_end(const models::Circuit& circuit, int spur) noexcept;

}  // namespace sunder::solver
