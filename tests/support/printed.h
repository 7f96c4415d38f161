// SPDX-License-Identifier: Apache-2.0
/// @file
/// Compares a computed value with a number as a page prints it.
#pragma once

#include <catch2/catch.hpp>
#include <cmath>
#include <cstdlib>
#include <sstream>
#include <string>
#include <utility>

namespace sunder::support {

/// Half a unit of the last digit of a printed number.
///
///     "1.37" -> 0.005    "16" -> 0.5    "2.5e-3" -> 0.00005
///
/// @param digits  the number as printed, decimal point, optional exponent
/// @return half a unit of its last digit [same unit], > 0
/// Errors: none; a text that is no number is noticed by Printed.
/// Accuracy: exact but for rounding to double.
/// Source: none.
[[nodiscard]] inline double half_last_digit(const std::string& digits) {
  const auto exponent_at = digits.find_first_of("eE");
  const std::string mantissa = digits.substr(0, exponent_at);
  const int exponent = exponent_at == std::string::npos ? 0 : std::atoi(digits.c_str() + exponent_at + 1);
  const auto point = mantissa.find('.');
  const int decimals = point == std::string::npos ? 0 : static_cast<int>(mantissa.size() - point) - 1;
  return 0.5 * std::pow(10.0, exponent - decimals);
}

/// Catch matcher: the value, rounded to as many digits as the page shows, is the printed number.
///
///     CHECK_THAT(zs, Printed("1.37"));
///     CHECK_THAT(r20_ohm_per_m, Printed("0.524", 1e-3));   // the page prints mohm/m
///
/// Both neighbours of a tie match, as pages differ in how they round it.
class Printed : public Catch::MatcherBase<double> {
 public:
  /// @param digits  the number as printed
  /// @param unit    one unit of the page in the unit of the value compared, > 0
  explicit Printed(std::string digits, double unit = 1.0) : digits_(std::move(digits)), unit_(unit) {
    char* end = nullptr;
    const double number = std::strtod(digits_.c_str(), &end);
    if (digits_.empty() || *end != '\0' || !std::isfinite(number)) {
      FAIL("not a printed number: '" << digits_ << "'");
    }
    value_ = number * unit_;
    // A trillionth on top, so that a tie is not lost to the binary form of its two sides.
    half_ = half_last_digit(digits_) * unit_ + 1e-12 * std::fabs(value_);
  }

  [[nodiscard]] bool match(const double& computed) const override {
    return std::isfinite(computed) && std::fabs(computed - value_) <= half_;
  }

  [[nodiscard]] std::string describe() const override {
    std::ostringstream text;
    text << "prints as " << digits_;
    if (unit_ != 1.0) text << " (in units of " << unit_ << ")";
    text << ", within " << half_;
    return text.str();
  }

 private:
  std::string digits_;
  double unit_;
  double value_ = 0;
  double half_ = 0;
};

}  // namespace sunder::support
