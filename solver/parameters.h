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
  std::string address;  ///< "S1.length"
  bool numeric = true;  ///< a quantity; false: a text such as a cable size
  models::Quantity unit = models::Quantity::count;
  double least = 0;              ///< smallest possible value [SI], exclusive unless `zero_allowed`
  double most = models::kNever;  ///< greatest possible value [SI], inclusive
  bool zero_allowed = false;
  bool whole = false;                  ///< a count
  std::vector<std::string> catalogue;  ///< what `all` stands for: sizes of the construction, ratings of the family
  bool own_run_only = false;           ///< touches nothing but its own circuit
  std::function<void(models::Network&, double)> set;
  /// @return why the text does not fit, or nothing
  std::function<std::optional<std::string>(models::Network&, const std::string&)> set_text;
};

/// Finds the parameter with this address.
/// @return or one sentence: unknown element or key, with the nearest name or the keys there are.
[[nodiscard]] std::variant<Parameter, std::string> find_parameter(const models::Network& network,
                                                                  const VaryRequest& request);

/// Reads a value of the parameter: possible by the netlist's own ranges, a whole number where it is a count.
/// @return SI value, or one sentence
[[nodiscard]] std::variant<double, std::string> read_value(const Parameter& parameter, const std::string& text);

/// A supply whose least current at its terminals is above its greatest, after a change.
/// @return one sentence, or nothing where none contradicts itself
[[nodiscard]] std::optional<std::string> contradiction(const models::Network& network);

}  // namespace sunder::solver
