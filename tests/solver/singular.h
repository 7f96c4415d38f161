// SPDX-License-Identifier: Apache-2.0
/// @file
/// Networks that have no solution for some fault, and what is said of them.
#pragma once

#include <cmath>
#include <optional>

#include "solver/fault_study.h"
#include "tests/solver/reading.h"

namespace sunder::tests::singular {

using solver::Condition;
using solver::Fault;
using solver::FaultDetail;

inline const std::string kRules = "rules = \"BS 7671:2018+A2\"\n";

// A three-phase supply of z1 = j0.03 ohm, z0 = j0.06 ohm on board `main`.
inline std::string supply(const std::string& earthing, const std::string& more = "") {
  return kRules + "[board.main]\n[supply.grid]\nfeeds = \"main\"\nvoltage = \"230/400 V\"\nearthing = \"" + earthing +
         "\"\nmaximum = { z1 = \"j0.03 ohm\", z0 = \"j0.06 ohm\" }\nminimum = { z1 = \"j0.03 ohm\", z0 = \"j0.06 ohm\" "
         "}\n" +
         more;
}

inline const std::string kUtility = kRules + R"([board.hv]
[board.lv]
[supply.utility]
feeds = "hv"
voltage = "20 kV"
maximum = { power = "250 MVA" }
minimum = { power = "100 MVA" }
)";

inline std::string unit(const std::string& more) {
  return R"([transformer.T1]
from = "hv"
feeds = "lv"
primary = "20 kV"
secondary = "410 V"
voltage = "230/400 V"
rating = "400 kVA"
uk = "4 %"
x_over_r = 4
)" + more;
}

inline const std::string kCable = R"(cable = "multicore-pvc-cu-5c 10 mm2"
length = "10 m"
device = "gG 32 A"
)";

inline std::vector<FaultDetail> details(const models::Network& network, const std::string& at, Fault fault,
                                        bool currents = false) {
  solver::FaultQuery query;
  query.at = at;
  query.fault = fault;
  query.currents = currents;
  auto answer = solver::study_faults(network, query);
  if (const auto* sentence = std::get_if<std::string>(&answer)) FAIL(*sentence);
  return std::get<std::vector<FaultDetail>>(std::move(answer));
}

// What is needed for a fault in both conditions; fails the test where a number is given instead.
inline std::string needs(const std::string& text, const std::string& at, Fault fault) {
  const models::Network network = read(text);
  std::optional<std::string> said;
  for (const FaultDetail& detail : details(network, at, fault)) {
    INFO(word(detail.row.condition) << " " << word(fault) << " at " << at << ": " << detail.row.current << " A");
    CHECK_FALSE(detail.row.known);
    CHECK(std::isnan(detail.row.current));
    if (!said) said = detail.row.needs;
    CHECK(detail.row.needs == *said);
  }
  // The table of all nodes says the same.
  for (const solver::FaultRow& row : solver::solve_faults(network))
    if (row.node == at && row.fault == fault) {
      CHECK_FALSE(row.known);
      CHECK(row.needs == said.value_or(""));
    }
  return said.value_or("");
}

inline double current(const std::string& text, const std::string& at, Fault fault,
                      Condition condition = Condition::maximum) {
  const models::Network network = read(text);
  for (const FaultDetail& detail : details(network, at, fault))
    if (detail.row.condition == condition) {
      INFO(detail.row.needs);
      CHECK(detail.row.known);
      return detail.row.current;
    }
  FAIL("no " << word(fault) << " at " << at);
  return 0;
}

}  // namespace sunder::tests::singular
