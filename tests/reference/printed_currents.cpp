// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/printed_currents.h"

#include <catch2/catch.hpp>

#include <limits>
#include <nlohmann/json.hpp>

namespace sunder::reference {

std::vector<PrintedCurrent> read_currents(const std::string& json) {
  const nlohmann::json all = nlohmann::json::parse(json, nullptr, false);
  if (all.is_discarded()) FAIL("not JSON:\n" << json);
  std::vector<PrintedCurrent> rows;
  const auto number = [](const nlohmann::json& value) {
    return value.is_null() ? std::numeric_limits<double>::quiet_NaN() : value.get<double>();
  };
  try {
    REQUIRE(all.at("format") == "sunder.faults/1");
    for (const nlohmann::json& row : all.at("results")) {
      rows.push_back({row.at("state"), row.at("condition"), row.at("node"), row.at("fault"),
                      row.at("phases"), number(row.at("current_A")), number(row.at("peak_A")),
                      number(row.at("x_over_r"))});
    }
  } catch (const nlohmann::json::exception& wrong) {
    FAIL("not of the form sunder.faults/1: " << wrong.what());
  }
  return rows;
}

}  // namespace sunder::reference
