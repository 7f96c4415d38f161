// SPDX-License-Identifier: Apache-2.0
/// @file
/// Factors and corrections of IEC 60909-0 as plain functions of declared data, for `currents = "IEC 60909"`.
///
/// Clause numbers are those of the 2001 edition, whose order the 2016 edition has changed, and from memory. Formulas
/// marked "from memory" were written without the standard at hand; where an independent check was made, it is named,
/// and tests/solver/iec60909.cpp repeats it.
#pragma once

#include <complex>
#include <vector>

#include "solver/results.h"

namespace sunder::solver::iec60909 {

// ------------------------------------------------------------------------------------------ voltage factor

/// Voltage factor c by nominal voltage and tolerance.
///
///     up to 1 kV, +6 %   1.05 / 0.95      up to 1 kV, +10 %   1.10 / 0.90      above 1 kV   1.10 / 1.00
///
/// @param nominal_volts  between lines [V], > 0
/// @param tolerance      of the low voltage upward: 0.06 or 0.10; anything above 0.08 counts as 0.10
/// Source: clause 2.3.1, table 1 (both tolerances of low voltage and the rows above 1 kV found in print; that 0.90 is
/// of the 2016 edition and 0.95 of the 2001 edition is from memory). c times the nominal voltage shall not exceed the
/// greatest voltage of the equipment: not examined here.
[[nodiscard]] double voltage_factor(double nominal_volts, double tolerance, Condition condition) noexcept;

// --------------------------------------------------------------------------------- impedances and corrections

/// A network feeder from its three-phase current:  ZQ = c UnQ / (sqrt3 I"kQ) / tr^2.
/// @param nominal_volts  UnQ [V]
/// @param amps           I"kQ, > 0 [A]
/// @param c              voltage factor of UnQ
/// @param ratio          rated ratio tr (high over low) of the transformer behind it, 1 for none
/// @param r_over_x       RQ/XQ; below 0: not known, then RQ = 0.1 XQ, XQ = 0.995 ZQ
/// @return               [ohm] on the low side of that transformer
/// Source: clause 3.2 (ZQ found in print; 0.995 and 0.1 from memory).
[[nodiscard]] std::complex<double> feeder(double nominal_volts, double amps, double c, double ratio = 1,
                                          double r_over_x = -1) noexcept;

/// Two-winding network transformer:  KT = 0.95 cmax / (1 + 0.6 xT).
/// Multiplies Z1, Z2 and Z0 (not the impedance between star point and earth), in the maximum.
/// @param c_max  of the nominal voltage on the low-voltage side
/// @param xt     XT / (UrT^2 / SrT) [1], 0..0.5
/// Source: clause 3.3.3, from memory; 0.97489, 0.97509 and 0.9588 recomputed of two networks of TR 60909-4.
[[nodiscard]] double transformer_factor(double c_max, double xt) noexcept;

/// Relative reactance of a transformer:  xT = sqrt(uk^2 - (Pk / SrT)^2), 0 where the losses exceed uk.
/// @param uk      [1]
/// @param losses  load losses Pk [W]
/// @param rating  SrT [VA], > 0
/// Source: clause 3.3.1 (definition).
[[nodiscard]] double transformer_reactance(double uk, double losses, double rating) noexcept;

/// Armature resistance for the peak and the d.c. component, over X"d:
///
///     0.05 above 1 kV and from 100 MVA, 0.07 above 1 kV and less, 0.15 up to 1 kV
///
/// It holds the decay of the a.c. part in the first half-cycle: not to be used for aperiodic components of other
/// kinds, nor for heating.
/// @param rated_volts  UrG [V];  @param rating  SrG [VA]
/// Source: clause 3.6.1, from memory.
[[nodiscard]] double fictitious_resistance(double rated_volts, double rating) noexcept;

/// A generator connected without a unit transformer:  KG = Un / (UrG (1 + pG)) * cmax / (1 + x"d sin phi).
/// Multiplies RG + j X"d (and the negative- and zero-sequence impedance, without the star-point impedance).
/// @param nominal_volts  Un of the network [V]
/// @param rated_volts    UrG [V], > 0
/// @param xd             x"d, relative to UrG^2 / SrG [1], > 0
/// @param power_factor   rated, 0..1
/// @param regulation     pG: how far the voltage stands above UrG for long times [1], 0 for not
/// Source: clause 3.6.1, from memory.
[[nodiscard]] double generator_factor(double nominal_volts, double rated_volts, double c_max, double xd,
                                      double power_factor, double regulation = 0) noexcept;

/// A generator with its unit transformer.
struct PowerStationUnit {
  double network_volts = 0;     ///< UnQ, nominal on the high side [V]
  double generator_volts = 0;   ///< UrG [V]
  double transformer_low = 0;   ///< UrTLV [V]
  double transformer_high = 0;  ///< UrTHV [V]
  double c_max = 1.1;           ///< of UnQ
  double xd = 0;                ///< x"d of the generator [1]
  double xt = 0;                ///< of the transformer, relative to its own rating [1]; with on-load taps only
  double power_factor = 0.8;    ///< rated, of the generator
  double regulation = 0;        ///< pG [1]; without on-load taps only
  double off_load_tap = 0;      ///< pT, signed [1]: -0.05 for the tap that gives the greater current; without ... only
};

/// With an on-load tap changer:  KS = UnQ^2/UrG^2 * UrTLV^2/UrTHV^2 * cmax / (1 + |x"d - xT| sin phi).
/// Multiplies tr^2 ZG + ZTHV, referred to the high side by the rated ratio.
/// Source: clause 3.7.1, from memory.
[[nodiscard]] double unit_factor_on_load(const PowerStationUnit& unit) noexcept;

/// Without:  KSO = UnQ / (UrG (1 + pG)) * UrTLV/UrTHV * (1 + pT) * cmax / (1 + x"d sin phi).
/// Source: clause 3.7.2, from memory.
[[nodiscard]] double unit_factor_fixed(const PowerStationUnit& unit) noexcept;

/// Resistance of a run at the end of the fault, for least currents:  RL = (1 + 0.004 (theta - 20)) RL20.
/// @param degc  conductor temperature at the end of the fault [degC]
/// @return      factor on RL20
/// Source: clause 2.5, from memory; alpha = 0.004/K holds for copper,
/// aluminium and aluminium alloy.
[[nodiscard]] double resistance_factor(double degc) noexcept;

// ------------------------------------------------------------------------------------------------ motors

/// An asynchronous motor, or a group of equal ones in one.
struct MotorData {
  double rated_volts = 0;  ///< UrM [V]
  double rated_amps = 0;   ///< IrM [A]
  double start = 5;        ///< ILR / IrM, > 0
  double r_over_x = 0.42;  ///< RM / XM
};

/// ZM = UrM / (sqrt3 (ILR/IrM) IrM), XM = ZM / sqrt(1 + (RM/XM)^2).
/// @return [ohm]
/// Source: clause 3.8.1 (found in print).
[[nodiscard]] std::complex<double> motor(const MotorData& motor) noexcept;

/// Rated current of a motor from its mechanical power:  IrM = PrM / (sqrt3 UrM eta cos phi).
[[nodiscard]] double motor_current(double watts, double volts, double power_factor, double efficiency) noexcept;

/// RM/XM where the maker says nothing: 0.10 above 1 kV from 1 MW a pole pair, 0.15 above 1 kV and less, 0.42 for
/// groups at low voltage with their cables.
/// Source: clause 3.8.1 (found in print).
[[nodiscard]] double motor_r_over_x(double rated_volts, double watts_per_pole_pair) noexcept;

/// Motors may be left out:  sum IrM <= 0.01 I"k, with I"k computed without motors.
/// Source: clause 3.8.2, from memory.
[[nodiscard]] bool motors_negligible(double sum_rated_amps, double fault_amps) noexcept;

/// Motors behind two-winding transformers may be left out:
///
///     sum PrM / sum SrT <= 0.8 / |c 100 sum SrT / (sqrt3 UnQ I"kQ) - 0.3|
///
/// @param watts          sum of the motors' rated powers [W]
/// @param rating         sum of the transformers' ratings SrT [VA], > 0
/// @param c              voltage factor of UnQ
/// @param nominal_volts  UnQ of the network that feeds the transformers [V]
/// @param amps           I"kQ there, without motors [A]
/// Not for three-winding transformers. Source: clause 3.8.2, from memory.
[[nodiscard]] bool motors_negligible_behind(double watts, double rating, double c, double nominal_volts,
                                            double amps) noexcept;

// ------------------------------------------------------------------------------------------- peak and d.c.

/// kappa = 1.02 + 0.98 e^(-3 R/X) of one branch, 1.02 .. 2.
/// Source: clause 4.3.1.1; within 0.53 % of the exact first peak for R/X 0.005 to 1.2.
[[nodiscard]] double kappa(std::complex<double> impedance) noexcept;

/// Method B for meshed networks:  1.15 kappa(R/X at the place), at most 1.8 up to 1 kV and 2.0 above; without 1.15
/// while R/X stays below 0.3 in every branch.
/// @param impedance           at the place of the fault [ohm]
/// @param every_branch_below  R/X < 0.3 in all branches that carry
/// Source: clause 4.3.1.2 b, from memory.
[[nodiscard]] double kappa_b(std::complex<double> impedance, double nominal_volts, bool every_branch_below) noexcept;

/// Equivalent frequency of method C:  fc = 0.4 f (20 Hz at 50 Hz, 24 Hz at 60 Hz). [Hz]
/// Source: clause 4.3.1.2 c, from memory.
[[nodiscard]] double equivalent_frequency(double frequency) noexcept;

/// Method C:  kappa with R/X = Rc/Xc * fc/f.
/// @param at_fc  impedance at the place with every reactance taken at fc [ohm]
/// Source: clause 4.3.1.2 c, from memory; 1.4472 and 1.4315 recomputed of the low-voltage network of TR 60909-4.
[[nodiscard]] double kappa_c(std::complex<double> at_fc) noexcept;

/// Peak:  ip = kappa sqrt2 I"k. [A]
[[nodiscard]] double peak(double kappa, double amps) noexcept;

/// D.c. component:  idc = sqrt2 I"k e^(-2 pi f t R/X). [A]
/// @param r_over_x  of a single path; in a meshed network by `dc_frequency_ratio`
/// Source: clause 4.4 (the decay of a series R and L).
[[nodiscard]] double dc_component(double amps, double frequency, double seconds, double r_over_x) noexcept;

/// fc/f for the d.c. component of meshed networks:  0.27 up to f t = 1, 0.15 to 2.5, 0.092 to 5, 0.055 to 12.5 and
/// (beyond the table) after. R/X is then Rc/Xc * fc/f with the impedance at fc.
/// Source: clause 4.4, from memory.
[[nodiscard]] double dc_frequency_ratio(double frequency, double seconds) noexcept;

// ------------------------------------------------------------------------------------- breaking and steady state

/// Decay of the contribution of a machine until the contacts part:
///
///     0.02 s  0.84 + 0.26 e^(-0.26 i)      0.05 s  0.71 + 0.51 e^(-0.30 i)
///     0.10 s  0.62 + 0.72 e^(-0.32 i)      0.25 s and more  0.56 + 0.94 e^(-0.38 i)
///
/// with i = I"kG / IrG (referred to the generator's side) or I"kM / IrM; 1 for i <= 2. Between the times linear,
/// below 0.02 s: 1.
/// @param ratio     i, >= 0
/// @param seconds   minimum time delay tmin
/// Holds for machines with rotating exciters, and with static ones while tmin < 0.25 s and the ceiling voltage is
/// below 1.6 times rated; else take 1.
/// Source: clause 4.5.2, equations from memory; at 0.1 s 0.796 and 0.724 recomputed of the motors of TR 60909-4.
[[nodiscard]] double mu(double ratio, double seconds) noexcept;

/// Further decay of asynchronous motors:
///
///     0.02 s  1.03 + 0.12 ln m    0.05 s  0.79 + 0.12 ln m    0.10 s  0.57 + 0.12 ln m    0.25 s  0.26 + 0.10 ln m
///
/// within 0 .. 1, m the rated power of a pole pair [MW]. Between the times linear, below 0.02 s: 1.
/// @param watts_per_pole_pair  > 0 [W]
/// Source: clause 4.5.2, equations from memory; at 0.1 s 0.680 and 0.570 recomputed of the motors of TR 60909-4.
[[nodiscard]] double q(double watts_per_pole_pair, double seconds) noexcept;

/// One machine's part of a three-phase fault in a meshed network.
struct MachinePart {
  std::complex<double> current;       ///< I"kG or I"kM in the fault as it flows at the machine [A]
  std::complex<double> voltage_drop;  ///< over its own (corrected) X"d or XM, line to neutral: j X I" [V]
  double decay = 1;                   ///< mu of a generator, mu q of a motor
};

/// Symmetrical breaking current in a meshed network:
///
///     Ib = | I"k - sum dU/(c Un/sqrt3) (1 - decay) I"machine |
///
/// I"k itself (no parts) is on the safe side. Not for less than 0.
/// @param total         I"k at the place [A]
/// @param driving_volts c Un / sqrt3 [V], > 0
/// Source: clause 4.5.2.4, equation from memory.
[[nodiscard]] double breaking_current(std::complex<double> total, double driving_volts,
                                      const std::vector<MachinePart>& parts) noexcept;

/// Greatest or least steady-state current of a generator:  Ik = multiple * IrG.
/// The curves of the standard for that multiple (lambda) are figures and are not reproduced: what the maker declares
/// as sustained short-circuit current is the only source.
/// @param rated_amps  IrG [A];  @param sustained  maker's multiple of IrG, NaN where not declared
/// @return            [A], kNone where not known
/// Source: clause 4.6.1.
[[nodiscard]] double steady_state(double rated_amps, double sustained) noexcept;

/// Steady-state current of a network fed by networks and motors only:  Ik = I"k without the motors (far from
/// generators Ik = Ib = I"k; a motor's own is 0 in a three-phase fault).
/// Source: clause 4.6, from memory; 14.74 kA beside 19.52 kA in the motor network of TR 60909-4.
[[nodiscard]] constexpr double steady_state_without_motors(double amps_without_motors) noexcept {
  return amps_without_motors;
}

// ------------------------------------------------------------------------------------------------- heating

/// Heat of the d.c. component:  m = (e^(4 f Tk ln(kappa - 1)) - 1) / (2 f Tk ln(kappa - 1)).
/// @param kappa  1 .. 2;  @param seconds  Tk, > 0
/// Source: clause 4.8; equals the integral of the squared d.c. component (2e-9 on 30 points).
[[nodiscard]] double heat_m(double kappa, double frequency, double seconds) noexcept;

/// Heat of the a.c. component that decays: the integral of
///
///     (I"k - I'k) e^(-10 t/T'd) + (I'k - Ik) e^(-t/T'd) + Ik,   squared, over I"k^2 Tk
///
/// with I'k/Ik = r / (0.88 + 0.17 r), T'd = 3.1 s / (I'k/Ik), r = I"k/Ik. 1 below r = 1.25 (on the safe side) and far
/// from generators.
/// @param ratio    r = I"k/Ik, >= 1
/// @param seconds  Tk, > 0
/// @return         0 .. 1
/// Source: clause 4.8 and annex A; the two relations from memory, the integral by calculus.
[[nodiscard]] double heat_n(double ratio, double seconds) noexcept;

/// Thermal equivalent current:  Ith = I"k sqrt(m + n). [A]
[[nodiscard]] double thermal_current(double amps, double m, double n) noexcept;

}  // namespace sunder::solver::iec60909
