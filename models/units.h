// SPDX-License-Identifier: Apache-2.0
/// @file
/// Quantities with units: text to SI and back. Used only at the edges (reader, printers); inside,
/// every value is a double in SI, temperatures in degC.
#pragma once

#include <complex>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

namespace sunder::models {

/// What a number measures. The SI unit that a value of that kind is held in stands beside it.
enum class Quantity {
  length,                ///< [m]
  area,                  ///< [m2]; conductor sizes are typed in mm2
  current,               ///< [A]
  voltage,               ///< [V]
  impedance,             ///< [ohm]
  impedance_per_length,  ///< [ohm/m]; typed in mohm/m or ohm/km
  apparent_power,        ///< [VA]
  power,                 ///< [W]
  time,                  ///< [s]
  temperature,           ///< [degC]
  ratio,                 ///< [1]; "4 %" is 0.04, a bare number is itself
  percentage,            ///< [1]; "%" obligatory: "4 %" is 0.04
  let_through,           ///< [A2s]
  adiabatic_k,           ///< [A*sqrt(s)/m2]; typed as a bare number in A*sqrt(s)/mm2
  voltage_drop_per,      ///< [V/(A*m)]; typed in mV/A/m
  count,                 ///< [1]; a bare number
  frequency,             ///< [Hz]
  capacitance,           ///< [F]
};

/// Why a text is not a quantity. `message` is one sentence: what was found and which units fit.
struct UnitError {
  std::string message;
};

/// Reads "25 mm2", "16 kA", "0.35 ohm", "48 m", "30 mA", "70 degC", "4.75 %", "500 kVA", "20 kA2s".
///
/// A decimal point only; "²" and "2", "Ω" and "ohm", "°C" and "degC" are the same; space between
/// number and unit optional.
/// @return value in the SI unit of `quantity`
/// Errors: no number, unknown unit, unit of another quantity, a bare number where a unit decides.
[[nodiscard]] std::variant<double, UnitError> parse_quantity(std::string_view text, Quantity quantity);

/// Reads an impedance with its reactance: "0.0531+j0.5311 mohm", "5+j20 ohm", "0.1 ohm", "j0.2 ohm",
/// "0.077+j0.079 ohm/km". The unit stands once, behind both parts or behind each; "0.5+0.2j ohm" is the same as
/// "0.5+j0.2 ohm". A part that is not written is 0.
/// @param quantity  of both parts: an impedance, an impedance per length
/// @return resistance and reactance in the SI unit of `quantity`
/// Errors: as of parse_quantity, for each part.
[[nodiscard]] std::variant<std::complex<double>, UnitError> parse_complex(std::string_view text, Quantity quantity);

/// The value in the unit an engineer would write, with `digits` significant digits: "25 mm²" is
/// printed as "25 mm2", 0.0113 s as "11.3 ms", 16000 A as "16 kA".
/// Not finite: "none" for NaN, "unbounded" for infinity.
[[nodiscard]] std::string format_quantity(double si_value, Quantity quantity, int digits = 4);

/// The unit symbol that JSON and CSV columns carry for values in SI: "A", "ohm", "s", "degC", ...
[[nodiscard]] std::string_view si_symbol(Quantity quantity) noexcept;

/// The units that fit a quantity, for messages and help: "mm2, cm2, m2".
[[nodiscard]] std::string_view accepted_units(Quantity quantity) noexcept;

/// A plain number in as few characters as keep `digits` significant ones: "1.37", "0.0873", "16000".
[[nodiscard]] std::string format_number(double value, int digits = 4);

}  // namespace sunder::models
