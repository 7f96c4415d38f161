// SPDX-License-Identifier: Apache-2.0
#include <algorithm>
#include <cmath>

#include "solver/checks/check.h"

namespace sunder::solver {

std::vector<Check>& checks() {
  static std::vector<Check> all{
      breaking_capacity_check(), disconnection_check(), clearance_check(),   heating_check(),
      overload_check(),          voltage_drop_check(),  selectivity_check(), additional_protection_check(),
      earth_electrode_check(),   first_fault_check(),
  };
  return all;
}

std::vector<CheckInfo> list_checks() {
  std::vector<CheckInfo> infos;
  for (const Check& check : checks()) infos.push_back(check.info);
  return infos;
}

Finding begin_finding(const Situation& s, const std::string& check) {
  Finding finding;
  finding.check = check;
  finding.subject = s.address;
  finding.state = s.state;
  finding.at = s.at;
  return finding;
}

void lack(Finding& finding, const std::string& need, const std::string& reason) {
  finding.verdict = Verdict::undecided;
  if (std::find(finding.needs.begin(), finding.needs.end(), need) == finding.needs.end()) finding.needs.push_back(need);
  if (finding.reason.empty()) finding.reason = reason;
}

bool lack_sequence(Finding& finding, const Situation& s) {
  if (!s.looped) return false;
  lack(finding, "the order in which the feeds of " + s.address + " clear",
       "it lies in a loop or between sources: its device carries a share that changes as others clear");
  return true;
}

bool lack_source(Finding& finding, const Situation& s, double time) {
  if (s.stages.empty() || time <= s.stages.back().seconds) return false;
  lack(finding, "what " + s.source->name + " delivers after its last stage",
       "the source gives up before the device is sure to operate");
  return true;
}

void compare_upper(Finding& finding, double value, double limit, models::Quantity unit) {
  finding.value = value;
  finding.limit = limit;
  finding.unit = unit;
  finding.margin = 1.0 - value / limit;
  // A hair for rounding, so that a limit met exactly is met.
  finding.verdict = value <= limit * (1 + 1e-12) ? Verdict::meets : Verdict::fails;
}

void weigh_confidence(Finding& finding) {
  if (finding.confidence != models::Confidence::low) return;
  if (finding.verdict != Verdict::meets && finding.verdict != Verdict::fails) return;
  if (std::isfinite(finding.margin) && std::abs(finding.margin) > kLowConfidenceBand) return;
  finding.verdict = Verdict::undecided;
  finding.reason = "rests on low-confidence reference data: a change of 10 % would flip the verdict";
  finding.needs.push_back("reference data of " + finding.subject + " checked against the standard");
}

models::Confidence path_confidence(const Situation& s, bool protective) {
  models::Confidence worst = models::Confidence::declared;
  auto add = [&](const models::Cable& cable) {
    worst = models::worse(worst, cable.line.confidence);
    if (!protective) return;
    for (const models::Strand& strand : cable.protective) worst = models::worse(worst, strand.confidence);
  };
  if (s.cable != nullptr && s.kind != SubjectKind::board) add(*s.cable);
  for (const int feeder : feeders_above(*s.network, *s.tree, s.board_index))
    add(s.network->submains[static_cast<std::size_t>(feeder)].cable);
  if (s.source->tails.present) add(s.source->tails.cable);
  return worst;
}

std::string say(double value, models::Quantity unit) { return models::format_quantity(value, unit, 3); }

void watch_steps(Finding& finding, double current, const std::vector<double>& steps) {
  for (const double step : steps) finding.breakpoints.push_back(std::log(current / step));
}

}  // namespace sunder::solver
