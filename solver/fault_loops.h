// SPDX-License-Identifier: Apache-2.0
/// @file
/// A fault as the loops it closes between the conductors of a place.
#pragma once

#include <array>
#include <vector>

#include "solver/impedance.h"

namespace sunder::solver {

/// One choice of conductors for a fault: the loops it closes, as columns of F. A column with a single
/// entry closes towards reference earth.
struct FaultLoops {
  Eigen::Matrix<double, 5, 2> f = Eigen::Matrix<double, 5, 2>::Zero();
  int n = 0;
  models::ConductorSet needs;
  const char* phases = "";
};

/// The equivalent choices of a fault: which line or lines take part.
/// @param to_reference  earth faults close towards reference earth instead of PE (above 1 kV)
[[nodiscard]] const std::vector<FaultLoops>& fault_choices(Fault fault, bool to_reference = false);

/// What flows in them.
struct LoopCurrents {
  Eigen::Matrix<Complex, 5, 1> conductors;  ///< that flow into the fault [A]
  double amps = 0;                          ///< the greatest (or least) line current [A]
  Complex loop;                             ///< impedance that the driving voltage meets [ohm]
};

/// j = (F' Z F + Z_f)^-1 F' e, conductors F j.
/// @param z        Thevenin matrix of the place [ohm]
/// @param volts    of the loop [V]; of three lines and of two lines and earth: of one line
/// @param through  impedance of the fault in each loop [ohm]
/// @param opposed  lines L1 and L2 in opposition (split phase) instead of 120 degrees apart
/// @param most     the greatest of the line currents, else the least
[[nodiscard]] LoopCurrents solve_loops(const FaultLoops& loops, const ConductorMatrix& z, double volts, Complex through,
                                       bool opposed, bool most);

}  // namespace sunder::solver
