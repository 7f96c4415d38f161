// SPDX-License-Identifier: Apache-2.0
/// @file
/// Pieces of netlists that the published cases share.
#pragma once

#include <string>

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

/// [cable.bar]: singles of no impedance (1 nanohm a metre), size 1000 mm2.
[[nodiscard]] std::string bar();

}  // namespace sunder::published
