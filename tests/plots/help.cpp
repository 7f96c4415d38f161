// SPDX-License-Identifier: Apache-2.0
#include "plots/text/help.h"

#include <catch2/catch.hpp>
#include <sstream>

#include "models/registry.h"
#include "plots/text/tables.h"

using namespace sunder;
using Catch::Matchers::Contains;

TEST_CASE("Help on the netlist explains every kind and every key of the registry") {
  const plots::HelpTopic topic = plots::help_netlist();
  REQUIRE(topic.sections.size() >= models::registry().size());
  for (std::size_t i = 0; i < models::registry().size(); ++i) {
    const models::Kind& kind = models::registry()[i];
    CAPTURE(kind.name);
    REQUIRE(topic.sections[i].entries.size() == kind.keys.size());
    for (std::size_t k = 0; k < kind.keys.size(); ++k) {
      CHECK(topic.sections[i].entries[k].name == kind.keys[k].name);
      CHECK_THAT(topic.sections[i].entries[k].text, Contains(std::string(kind.keys[k].help)));
      if (kind.keys[k].required) CHECK_THAT(topic.sections[i].entries[k].text, Contains("obligatory"));
    }
  }
}

TEST_CASE("Help on checks lists what each compares, applies to and needs") {
  const std::string text = plots::help_text(
      plots::help_checks({{"voltage drop", "the drop against its limit", "circuits", "length, load"}}), {});
  CHECK_THAT(text, Contains("voltage drop  the drop against its limit. Applies to: circuits. Needs: length, load."));
}

TEST_CASE("Help on data shows source and status of every table") {
  models::DeviceFamily family;
  family.name = "gG";
  family.title = "Fuse-link gG";
  family.ratings = {16, 20};
  family.source = "a standard, table 2";
  family.confidence = models::Confidence::found;
  CHECK_THAT(plots::help_text(plots::help_devices({family}), {}),
             Contains("Ratings [A]: 16, 20.") && Contains("Status: found.") && Contains("a standard, table 2"));
  models::CableConstruction cable;
  cable.name = "flat";
  cable.title = "flat twin";
  models::CableSize size;
  size.area = 2.5e-6;
  size.cpc_area = 1.5e-6;
  size.confidence = models::Confidence::found;
  size.x_confidence = models::Confidence::memory;
  cable.sizes = {size};
  cable.source = "a maker";
  CHECK_THAT(plots::help_text(plots::help_cables({cable}), {}), Contains("2.5/1.5") && Contains("Status: memory."));
  models::RuleSet rules;
  rules.name = "BS 7671:2018+A2";
  rules.source = "the rules";
  CHECK_THAT(plots::help_text(plots::help_rules({rules}), {}), Contains("BS 7671:2018+A2") && Contains("the rules"));
}

TEST_CASE("Help texts keep within the width of the terminal but for examples") {
  std::istringstream stream(plots::help_text(plots::help_json_forms(), {}));
  for (std::string line; std::getline(stream, line);) {
    CAPTURE(line);
    CHECK(plots::display_width(line) <= 100);
  }
}
