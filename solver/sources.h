// SPDX-License-Identifier: Apache-2.0
/// @file
/// What a source contributes to a fault loop: a known matrix (transformer), or a declared bound
/// whose angle and split may be open.
#pragma once

#include <string>

#include "solver/impedance.h"

namespace sunder::solver {

/// A source in one condition and one kind of fault.
struct SourceTerm {
  ConductorMatrix fixed = ConductorMatrix::Zero();  ///< known part [ohm]
  double ohms = 0;                                  ///< declared loop impedance, put into the line [ohm]
  double angle_low = 0;                             ///< of it [rad]
  double angle_high = 0;                            ///< [rad]
  bool star_open = false;                           ///< no zero-sequence current: `fixed` then holds Z1 alone
  bool known = true;
  std::string needs;    ///< the value that would make it known: "grid.minimum.Zn"
  models::Origin at{};  ///< of the declaration used
};

/// c_max or c_min of the rule set.
[[nodiscard]] double voltage_factor(const models::RuleSet& rules, Condition condition) noexcept;

/// Voltage that drives the loop of a fault, c*U0 through N, PE or earth, c*U between lines; for a
/// three-phase fault c*U/sqrt(3), the voltage of one line of the symmetrical loop. [V]
[[nodiscard]] double driving_voltage(const models::RuleSet& rules, const models::Source& source, Condition condition,
                                     Fault fault) noexcept;

/// The same by the network's method: IEC 60909 takes its own c and U/sqrt(3) to neutral.
[[nodiscard]] double driving_voltage(const models::Network& network, const models::Source& source, Condition condition,
                                     Fault fault) noexcept;

/// Test power factor of IEC 60947-2 for a prospective current [A]: the most inductive angle taken
/// where a supply declares none. Between 0.9 (up to 3 kA) and 0.2 (above 50 kA).
/// Source: IEC 60947-2 table of test power factors; rows up to 4.5 kA from memory with an exact check.
[[nodiscard]] double test_power_factor(double current) noexcept;

/// Short-circuit impedance of a transformer on its low side [ohm]:
/// |Z| = uk U2^2 / S, R = P U2^2 / S^2 from the load losses or |Z| / sqrt(1 + (X/R)^2).
[[nodiscard]] Complex transformer_impedance(const models::Source& source) noexcept;

/// Sub-transient impedance of a generator [ohm]: r + j x"d on U2 / S; without r its resistance is nothing,
/// which makes the greatest current. In the minimum its sustained current: U / (sqrt3 k Ir) or xd,
/// without resistance.
/// @return NaN where the data of the condition is not declared
[[nodiscard]] Complex generator_impedance(const models::Source& source, Condition condition) noexcept;

/// Impedance correction of a transformer: 1, or in the maximum by IEC 60909 K_T (iec60909.h).
/// @param z1  short-circuit impedance on the secondary [ohm]
[[nodiscard]] double transformer_correction(const models::Network& network, Complex z1, double rating, double secondary,
                                            Condition condition) noexcept;

/// Of a generator: 1, or by IEC 60909 K_G; K_S or K_SO where its board has nothing but a unit transformer.
[[nodiscard]] double generator_correction(const models::Network& network, const models::Source& source) noexcept;

/// K_S or K_SO of a generator and its unit transformer (an index of the network's transformers).
[[nodiscard]] double unit_correction(const models::Network& network, const models::Source& source,
                                     int transformer) noexcept;

/// The generator that has this transformer for its unit transformer, -1 for none.
[[nodiscard]] int unit_generator(const models::Network& network, int transformer) noexcept;

/// Voltage factor of a nominal voltage between lines: of the rule set, or by IEC 60909; above 1 kV
/// 1.10 and 1.00.
[[nodiscard]] double voltage_factor_at(const models::Network& network, double volts, Condition condition) noexcept;

/// Series impedances among three lines [ohm]: self (Z0 + 2 Z1)/3, mutual (Z0 - Z1)/3.
[[nodiscard]] ConductorMatrix sequence_matrix(Complex z1, Complex z0) noexcept;

/// A declared supply: an impedance is reproduced in ohms, a current in amperes at the condition's
/// voltage factor. What the split between line and return leaves open is taken per fault on its
/// safe side: maximum without return impedance, so that line-neutral and line-earth equal the
/// three-phase current; minimum with the whole of the least declared loop in the line.
///
/// A transformer: Z_T = uk U2^2 / S with R from the load losses or X/R, behind
/// Z_Q = c_Q U2^2 / S_Q (c_Q 1.1 in the maximum, 1.0 in the minimum; R_Q = 0.1 X_Q), the winding on
/// the high side in delta: Z0 of the transformer alone, (Z0 - Z1)/3 between the lines.
[[nodiscard]] SourceTerm source_term(const models::Network& network, const models::Source& source, Condition condition,
                                     Fault fault);

}  // namespace sunder::solver
