// SPDX-License-Identifier: Apache-2.0
/// @file
/// A copy of a network in which one value is changed again and again and one question asked.
#pragma once

#include <optional>
#include <string>
#include <unordered_map>
#include <vector>

#include "solver/judge.h"
#include "solver/situation.h"

namespace sunder::solver {

/// Holds its own copy of the network and the solution of every state. Change the copy, call
/// refresh() if the change reaches beyond the subject's own run, ask again.
class Retrial {
 public:
  explicit Retrial(const models::Network& network);

  [[nodiscard]] models::Network& network() noexcept { return network_; }

  /// Solves every state anew: linear in boards and circuits.
  void refresh();

  /// Governing findings of all checks of one subject (`Finding::subject` names it).
  [[nodiscard]] std::vector<Finding> subject(const std::string& address) const;

  /// The governing finding with this key (finding_key), if the check still applies.
  [[nodiscard]] std::optional<Finding> one(const std::string& subject, const std::string& key) const;

 private:
  [[nodiscard]] std::vector<Finding> findings(const std::string& address, const std::string* check) const;

  models::Network network_;
  std::vector<StateSolution> solutions_;
  std::unordered_multimap<std::string, Subject> places_;
};

}  // namespace sunder::solver
