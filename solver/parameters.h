// SPDX-License-Identifier: Apache-2.0
/// @file
/// Values of a network that can be changed by address: "S1.length", "grid.minimum.Ze".
#pragma once

#include <functional>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "solver/study.h"

namespace sunder::solver {

/// One value: how a text becomes it, and what it may be.
struct Parameter {
  std::string address;              ///< "S1.length"
  bool numeric = true;              ///< a quantity; false: a text such as a cable size
  models::Quantity unit = models::Quantity::count;
  double least = 0;                 ///< smallest possible value [SI], exclusive unless `zero_allowed`
  bool zero_allowed = false;
  bool own_run_only = false;        ///< touches nothing but its own circuit
  std::function<void(models::Network&, double)> set;
  /// @return why the text does not fit, or nothing
  std::function<std::optional<std::string>(models::Network&, const std::string&)> set_text;
};

/// Finds the parameter with this address.
/// @return or one sentence: unknown element or key, with the nearest name or the keys there are.
[[nodiscard]] std::variant<Parameter, std::string> find_parameter(const models::Network& network,
                                                                  const VaryRequest& request);

/// Reads a value of the parameter.
/// @return SI value, or one sentence
[[nodiscard]] std::variant<double, std::string> read_value(const Parameter& parameter, const std::string& text);

}  // namespace sunder::solver
