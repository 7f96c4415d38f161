// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/meshed_printed.h"

#include <catch2/catch.hpp>

#include "tests/support/json.h"

namespace sunder::reference::meshed {

namespace {

using support::Json;

constexpr double kDegree = 3.14159265358979323846 / 180.0;

// Amounts and angles by conductor; an angle of null belongs to a current of nothing.
PrintedFault::Amps amps_of(const Json& amps, const Json& degrees) {
  static const std::array<const char*, 5> names{"L1", "L2", "L3", "N", "PE"};
  PrintedFault::Amps all{};
  for (std::size_t c = 0; c < all.size(); ++c) {
    const Json& angle = degrees[names[c]];
    all[c] = std::polar(amps[names[c]].number(), angle.is_number() ? angle.number() * kDegree : 0.0);
  }
  return all;
}

PrintedFault row_of(const Json& row) {
  for (const char* key : {"condition", "node", "fault", "phases", "current_A"})
    if (!row.contains(key)) FAIL("a fault has no " << key);
  PrintedFault fault;
  fault.condition = row["condition"].text();
  fault.node = row["node"].text();
  fault.fault = row["fault"].text();
  fault.phases = row["phases"].text();
  fault.current = row["current_A"].number();
  return fault;
}

}  // namespace

std::vector<PrintedFault> read_all_nodes(const std::string& json) {
  const Json all = Json::parse(json);
  if (!all.valid()) FAIL("not JSON:\n" << json);
  REQUIRE(all["format"] == "sunder.faults/1");
  std::vector<PrintedFault> faults;
  for (const Json& row : all["results"]) faults.push_back(row_of(row));
  return faults;
}

std::vector<PrintedFault> read_studies(const std::string& json) {
  const Json all = Json::parse(json);
  if (!all.valid()) FAIL("not JSON:\n" << json);
  REQUIRE(all["format"] == "sunder.fault-study/1");
  std::vector<PrintedFault> faults;
  for (const Json& row : all["faults"]) {
    faults.push_back(row_of(row));
    PrintedFault& fault = faults.back();
    fault.into_fault = amps_of(row["into_fault"]["amps"], row["into_fault"]["degrees"]);
    for (const Json& element : row["elements"]) {
      const bool first =
          fault.elements
              .emplace(element["element"].text(), PrintedFault::Element{element["from"].text(), element["to"].text(),
                                                                        amps_of(element["amps"], element["degrees"])})
              .second;
      if (!first) FAIL_CHECK("printed twice: " << element["element"].text());
    }
  }
  return faults;
}

}  // namespace sunder::reference::meshed
