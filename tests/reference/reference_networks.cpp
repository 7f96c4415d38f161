// SPDX-License-Identifier: Apache-2.0
// The program's fault currents against ngspice's, for every node, fault and condition.
#include <catch2/catch.hpp>
#include <cmath>
#include <map>
#include <set>
#include <sstream>
#include <string>
#include <tuple>

#include "tests/reference/currents.h"
#include "tests/reference/network.h"
#include "tests/reference/printed_currents.h"
#include "tests/support/program.h"

namespace sunder::reference {

namespace {

constexpr double kTolerance = 1e-3;  // relative, of current, peak and X/R

// "" if equal within the tolerance, else both values in words.
std::string differs(const char* what, double printed, double expected) {
  const bool same =
      std::isnan(expected) ? std::isnan(printed) : std::fabs(printed - expected) <= kTolerance * std::fabs(expected);
  if (same) return "";
  std::ostringstream text;
  text << ' ' << what << ' ' << printed << ", ngspice " << expected;
  if (!std::isnan(expected)) text << " (" << (printed / expected - 1.0) * 100.0 << " %)";
  return text.str();
}

// Runs both ways and lists every disagreement, so that one run shows a pattern.
// @return the number of nodes compared
std::size_t compare(const Network& network) {
  CAPTURE(network.title);
  const support::Folder folder;
  folder.write("net.toml", netlist_text(network));
  const support::Outcome outcome = support::run_sunder({"faults", "net.toml", "--json"}, folder);
  INFO(outcome.err);
  REQUIRE(outcome.status == 0);

  std::map<std::tuple<std::string, std::string, std::string>, PrintedCurrent> printed;
  for (const PrintedCurrent& row : read_currents(outcome.out)) {
    const bool first = printed.emplace(std::tuple(row.condition, row.node, row.fault), row).second;
    if (!first) FAIL_CHECK("printed twice: " << row.condition << ' ' << row.node << ' ' << row.fault);
  }
  const std::vector<Current> expected = reference_currents(network);
  std::size_t n_wrong = 0;
  for (const Current& current : expected) {
    const auto key = std::tuple(std::string(word(current.condition)), current.node, std::string(word(current.fault)));
    const auto found = printed.find(key);
    std::string wrong;
    if (found == printed.end()) {
      wrong = " is missing";
    } else {
      wrong = differs("current", found->second.amps, current.amps) + differs("peak", found->second.peak, current.peak);
      if (!std::isnan(current.x_over_r)) wrong += differs("X/R", found->second.x_over_r, current.x_over_r);
      printed.erase(found);
    }
    if (wrong.empty()) continue;
    ++n_wrong;
    UNSCOPED_INFO(std::get<0>(key) << ' ' << std::get<1>(key) << ' ' << std::get<2>(key) << ':' << wrong);
  }
  for (const auto& row : printed) {
    ++n_wrong;
    UNSCOPED_INFO(std::get<0>(row.first) << ' ' << std::get<1>(row.first) << ' ' << std::get<2>(row.first)
                                         << ": printed, but no such fault is possible");
  }
  CHECK(n_wrong == 0);
  std::set<std::string> nodes;
  for (const Current& current : expected) nodes.insert(current.node);
  return nodes.size();
}

}  // namespace

TEST_CASE("a TN-S workshop behind a Dyn transformer has the currents of its circuit in ngspice", "[dyn]") {
  CHECK(compare(workshop_tn_s()) >= 25);
}

TEST_CASE("a TN-C-S yard on a declared supply has the currents of its circuit in ngspice", "[tncs]") {
  CHECK(compare(yard_tn_c_s()) >= 25);
}

TEST_CASE("a TT farm with an electrode has the currents of its circuit in ngspice", "[tt]") {
  CHECK(compare(farm_tt()) >= 25);
}

TEST_CASE("ten random radial networks have the currents of their circuits in ngspice", "[random]") {
  const unsigned seed = GENERATE(3U, 14U, 18U, 19U, 21U, 31U, 37U, 41U, 57U, 64U);
  CHECK(compare(random_network(seed)) >= 10);
}

}  // namespace sunder::reference
