// SPDX-License-Identifier: Apache-2.0
/// @file
/// Help topics, made from the registry, the library and the descriptions of results.
#pragma once

#include <string>
#include <vector>

#include "models/cables.h"
#include "models/devices.h"
#include "models/rules.h"
#include "plots/text/report.h"
#include "solver/study.h"

namespace sunder::plots {

/// One thing a topic explains: a key, a device family, a field.
struct HelpEntry {
  std::string name;
  std::string text;  ///< one or more sentences
};

struct HelpSection {
  std::string heading;
  std::string text;     ///< a paragraph, "" if none
  std::string example;  ///< printed as it stands, "" if none
  std::vector<HelpEntry> entries;
};

struct HelpTopic {
  std::string name;  ///< "netlist"
  std::string title;
  std::string intro;
  std::vector<HelpSection> sections;
};

[[nodiscard]] HelpTopic help_netlist();
[[nodiscard]] HelpTopic help_checks(const std::vector<solver::CheckInfo>& checks);
[[nodiscard]] HelpTopic help_devices(const std::vector<models::DeviceFamily>& families);
[[nodiscard]] HelpTopic help_cables(const std::vector<models::CableConstruction>& constructions);
[[nodiscard]] HelpTopic help_rules(const std::vector<models::RuleSet>& rule_sets);
[[nodiscard]] HelpTopic help_json_forms();

[[nodiscard]] std::string help_text(const HelpTopic& topic, const TextStyle& style);

}  // namespace sunder::plots
