// SPDX-License-Identifier: Apache-2.0
/// @file
/// Pieces of netlists that the published cases share.
#pragma once

#include <complex>
#include <optional>
#include <string>
#include <vector>

namespace sunder::published {

inline constexpr const char* kBritish = "BS 7671:2018+A2";
inline constexpr const char* kInternational = "IEC 60364";

/// Voltage factors of the rule sets, which the published cases were computed without.
inline constexpr double kMax = 1.10;         ///< both rule sets
inline constexpr double kMinBritish = 0.95;  ///< Cmin of BS 7671

/// A number with all its digits.
[[nodiscard]] std::string digits(double value);

/// rules = "..."
[[nodiscard]] std::string head(const char* rules = kBritish);

/// [supply.grid] feeding board "main"; maximum and minimum are the tables as written.
[[nodiscard]] std::string supply(const std::string& voltage, const std::string& maximum, const std::string& minimum,
                                 const std::string& earthing = "TN-S");

/// A supply without impedance of its own (0.1 microhm).
[[nodiscard]] std::string stiff_supply(const std::string& voltage = "230/400 V");

/// "0.05+j0.5" with all digits, without unit.
[[nodiscard]] std::string complex_digits(std::complex<double> z);

/// [board.NAME] of each.
[[nodiscard]] std::string boards(const std::vector<std::string>& names);

/// [submain.NAME] given by the impedances of its whole length [ohm]; the metres only serve to write them.
struct SequenceRun {
  std::string name, from, to;
  std::complex<double> z1;
  std::optional<std::complex<double>> z0;
  std::string rest;  ///< further lines
  double metres = 1000;
};
[[nodiscard]] std::string run(const SequenceRun& of);

/// [supply.grid] above 1 kV (or with `earthing`) feeding `board` by sequence impedances [ohm], the same in the
/// maximum and the minimum.
[[nodiscard]] std::string sequence_supply(const std::string& board, const std::string& voltage, std::complex<double> z1,
                                          std::optional<std::complex<double>> z0 = {}, const std::string& rest = "");

/// [cable.bar]: singles of no impedance (1 nanohm a metre), size 1000 mm2.
[[nodiscard]] std::string bar();

}  // namespace sunder::published
