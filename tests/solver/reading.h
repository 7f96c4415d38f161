// SPDX-License-Identifier: Apache-2.0
/// @file
/// Networks for solver tests, read from netlist text as a user would write it.
#pragma once

#include <catch2/catch.hpp>
#include <string>

#include "netlists/reader.h"
#include "solver/study.h"

namespace sunder::tests {

/// Reads a netlist; fails the test with the diagnostics where it is not sound.
inline models::Network read(const std::string& text) {
  const netlists::Reading reading = netlists::read_network_text(text, "test.toml");
  for (const netlists::Diagnostic& diagnostic : reading.diagnostics)
    if (diagnostic.severity == netlists::Severity::error) UNSCOPED_INFO(netlists::format_diagnostic(diagnostic));
  REQUIRE(reading.network.has_value());
  return *reading.network;
}

/// The finding of a check on a subject; fails the test if there is none.
inline solver::Finding find(const std::vector<solver::Finding>& findings, const std::string& check,
                            const std::string& subject) {
  for (const solver::Finding& finding : findings)
    if (finding.check == check && finding.subject == subject) return finding;
  FAIL("no finding of '" << check << "' on '" << subject << "'");
  return {};
}

/// A declared supply on one board, without circuits.
inline std::string supply(const std::string& earthing = "TN-C-S") {
  return R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = ")" +
         earthing + R"("
maximum = { three_phase = "16 kA", power_factor = 0.3 }
minimum = { Ze = "0.35 ohm", Zn = "0.35 ohm", power_factor = 0.9 }
device = "BS 88-3 100 A"
[board.main]
)";
}

}  // namespace sunder::tests
