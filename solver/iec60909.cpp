// SPDX-License-Identifier: Apache-2.0
#include "solver/iec60909.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>

#include "solver/faults.h"

namespace sunder::solver::iec60909 {
namespace {

using std::numbers::pi;
using std::numbers::sqrt2;
using std::numbers::sqrt3;

constexpr double kLowVoltage = 1000;  // [V] up to and including it
constexpr std::array<double, 4> kDelays{0.02, 0.05, 0.10, 0.25};

double sine(double power_factor) noexcept { return std::sqrt(std::max(0.0, 1 - power_factor * power_factor)); }

// Between the delays that the standard gives values for, linear; after the last, the value there.
double over_delays(const std::array<double, 4>& values, double seconds) noexcept {
  if (seconds <= kDelays.front()) return values.front();
  for (std::size_t i = 1; i < kDelays.size(); ++i) {
    if (seconds > kDelays[i]) continue;
    const double share = (seconds - kDelays[i - 1]) / (kDelays[i] - kDelays[i - 1]);
    return values[i - 1] + share * (values[i] - values[i - 1]);
  }
  return values.back();
}

}  // namespace

double voltage_factor(double nominal_volts, double tolerance, Condition condition) noexcept {
  const bool most = condition == Condition::maximum;
  if (nominal_volts > kLowVoltage) return most ? 1.10 : 1.00;
  if (tolerance > 0.08) return most ? 1.10 : 0.90;
  return most ? 1.05 : 0.95;
}

std::complex<double> feeder(double nominal_volts, double amps, double c, double ratio, double r_over_x) noexcept {
  const double z = c * nominal_volts / (sqrt3 * amps) / (ratio * ratio);
  if (r_over_x < 0) return {0.1 * 0.995 * z, 0.995 * z};
  if (std::isinf(r_over_x)) return {z, 0};
  const double x = z / std::hypot(1, r_over_x);
  return {r_over_x * x, x};
}

double transformer_factor(double c_max, double xt) noexcept { return 0.95 * c_max / (1 + 0.6 * xt); }

double transformer_reactance(double uk, double losses, double rating) noexcept {
  const double r = losses / rating;
  return std::sqrt(std::max(0.0, uk * uk - r * r));
}

double fictitious_resistance(double rated_volts, double rating) noexcept {
  if (rated_volts <= kLowVoltage) return 0.15;
  return rating >= 100e6 ? 0.05 : 0.07;
}

double generator_factor(double nominal_volts, double rated_volts, double c_max, double xd, double power_factor,
                        double regulation) noexcept {
  return nominal_volts / (rated_volts * (1 + regulation)) * c_max / (1 + xd * sine(power_factor));
}

double unit_factor_on_load(const PowerStationUnit& unit) noexcept {
  const double volts = unit.network_volts / unit.generator_volts * unit.transformer_low / unit.transformer_high;
  return volts * volts * unit.c_max / (1 + std::fabs(unit.xd - unit.xt) * sine(unit.power_factor));
}

double unit_factor_fixed(const PowerStationUnit& unit) noexcept {
  return unit.network_volts / (unit.generator_volts * (1 + unit.regulation)) * unit.transformer_low /
         unit.transformer_high * (1 + unit.off_load_tap) * unit.c_max / (1 + unit.xd * sine(unit.power_factor));
}

double resistance_factor(double degc) noexcept { return 1 + 0.004 * (degc - 20); }

std::complex<double> motor(const MotorData& motor) noexcept {
  const double z = motor.rated_volts / (sqrt3 * motor.start * motor.rated_amps);
  const double x = z / std::hypot(1, motor.r_over_x);
  return {motor.r_over_x * x, x};
}

double motor_current(double watts, double volts, double power_factor, double efficiency) noexcept {
  return watts / (sqrt3 * volts * power_factor * efficiency);
}

double motor_r_over_x(double rated_volts, double watts_per_pole_pair) noexcept {
  if (rated_volts <= kLowVoltage) return 0.42;
  return watts_per_pole_pair >= 1e6 ? 0.10 : 0.15;
}

bool motors_negligible(double sum_rated_amps, double fault_amps) noexcept {
  return sum_rated_amps <= 0.01 * fault_amps;
}

bool motors_negligible_behind(double watts, double rating, double c, double nominal_volts, double amps) noexcept {
  const double stiffness = std::fabs(c * 100 * rating / (sqrt3 * nominal_volts * amps) - 0.3);
  return watts / rating * stiffness <= 0.8;
}

double kappa(std::complex<double> impedance) noexcept {
  return impedance.real() <= 0 ? 2.0 : peak_factor(impedance.imag() / impedance.real());
}

double kappa_b(std::complex<double> impedance, double nominal_volts, bool every_branch_below) noexcept {
  const double most = nominal_volts <= kLowVoltage ? 1.8 : 2.0;
  return every_branch_below ? kappa(impedance) : std::min(most, 1.15 * kappa(impedance));
}

double equivalent_frequency(double frequency) noexcept { return 0.4 * frequency; }

double kappa_c(std::complex<double> at_fc) noexcept { return kappa({0.4 * at_fc.real(), at_fc.imag()}); }

double peak(double kappa, double amps) noexcept { return kappa * sqrt2 * amps; }

double dc_component(double amps, double frequency, double seconds, double r_over_x) noexcept {
  return sqrt2 * amps * std::exp(-2 * pi * frequency * seconds * r_over_x);
}

double dc_frequency_ratio(double frequency, double seconds) noexcept {
  const double cycles = frequency * seconds;
  if (cycles < 1) return 0.27;
  if (cycles < 2.5) return 0.15;
  return cycles < 5 ? 0.092 : 0.055;
}

double mu(double ratio, double seconds) noexcept {
  if (ratio <= 2 || seconds < kDelays.front()) return 1;
  const std::array<double, 4> values{0.84 + 0.26 * std::exp(-0.26 * ratio), 0.71 + 0.51 * std::exp(-0.30 * ratio),
                                     0.62 + 0.72 * std::exp(-0.32 * ratio), 0.56 + 0.94 * std::exp(-0.38 * ratio)};
  return std::min(1.0, over_delays(values, seconds));
}

double q(double watts_per_pole_pair, double seconds) noexcept {
  if (seconds < kDelays.front()) return 1;
  const double power = std::log(watts_per_pole_pair * 1e-6);
  std::array<double, 4> values{1.03 + 0.12 * power, 0.79 + 0.12 * power, 0.57 + 0.12 * power, 0.26 + 0.10 * power};
  for (double& value : values) value = std::clamp(value, 0.0, 1.0);
  return over_delays(values, seconds);
}

double breaking_current(std::complex<double> total, double driving_volts,
                        const std::vector<MachinePart>& parts) noexcept {
  std::complex<double> sum = total;
  for (const MachinePart& part : parts) sum -= part.voltage_drop / driving_volts * (1 - part.decay) * part.current;
  return std::abs(sum);
}

double steady_state(double rated_amps, double sustained) noexcept {
  return std::isnan(sustained) ? kNone : sustained * rated_amps;
}

double heat_m(double kappa, double frequency, double seconds) noexcept {
  if (kappa <= 1) return 0;
  const double cycles = 2 * frequency * seconds;
  if (kappa >= 2) return 2;  // the limit: a d.c. component that does not decay
  const double decay = std::log(kappa - 1);
  return std::expm1(2 * cycles * decay) / (cycles * decay);
}

double heat_n(double ratio, double seconds) noexcept {
  if (ratio < 1.25) return 1;
  const double transient = ratio / (0.88 + 0.17 * ratio);  // I'k/Ik
  const double constant = 3.1 / transient;                 // T'd [s]
  const double fast = ratio - transient;                   // decays ten times as fast
  const double slow = transient - 1;
  // Mean of e^(-a t) over 0..Tk.
  const auto mean = [seconds](double rate) { return -std::expm1(-rate * seconds) / (rate * seconds); };
  const double square = fast * fast * mean(20 / constant) + slow * slow * mean(2 / constant) + 1 +
                        2 * fast * slow * mean(11 / constant) + 2 * fast * mean(10 / constant) +
                        2 * slow * mean(1 / constant);
  return square / (ratio * ratio);
}

double thermal_current(double amps, double m, double n) noexcept { return amps * std::sqrt(m + n); }

}  // namespace sunder::solver::iec60909
