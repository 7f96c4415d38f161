// SPDX-License-Identifier: Apache-2.0
/// @file
/// What the program prints of the faults of a network: at every node, and in detail at some.
#pragma once

#include <array>
#include <complex>
#include <map>
#include <string>
#include <vector>

namespace sunder::reference::meshed {

/// One fault as printed; currents in the order L1 L2 L3 N PE [A].
struct PrintedFault {
  using Amps = std::array<std::complex<double>, 5>;
  std::string condition, node, fault, phases;
  double current = 0;  ///< NaN: not known
  Amps into_fault{};
  struct Element {
    std::string from, to;
    Amps amps{};
  };
  std::map<std::string, Element> elements;
};

/// `sunder faults NET --json`: without what the elements carry.
[[nodiscard]] std::vector<PrintedFault> read_all_nodes(const std::string& json);
/// `sunder faults NET --currents --json`, with --at or without.
[[nodiscard]] std::vector<PrintedFault> read_studies(const std::string& json);

}  // namespace sunder::reference::meshed
