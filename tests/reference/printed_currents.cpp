// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/printed_currents.h"

#include <catch2/catch.hpp>

#include "tests/support/json.h"

namespace sunder::reference {

std::vector<PrintedCurrent> read_currents(const std::string& json) {
  const support::Json all = support::Json::parse(json);
  if (!all.valid()) FAIL("not JSON:\n" << json);
  REQUIRE(all["format"] == "sunder.faults/1");
  std::vector<PrintedCurrent> rows;
  for (const support::Json& row : all["results"]) {
    for (const char* key : {"state", "condition", "node", "fault", "phases", "current_A", "peak_A", "x_over_r"})
      if (!row.contains(key)) FAIL("not of the form sunder.faults/1: a row has no " << key);
    rows.push_back({row["state"].text(), row["condition"].text(), row["node"].text(), row["fault"].text(),
                    row["phases"].text(), row["current_A"].number(), row["peak_A"].number(), row["x_over_r"].number()});
  }
  return rows;
}

}  // namespace sunder::reference
