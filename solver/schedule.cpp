// SPDX-License-Identifier: Apache-2.0
// The circuit schedule: one row a circuit or submain, the hardest value of each column over the states.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <unordered_map>

#include "solver/judge.h"
#include "solver/situation.h"
#include "solver/study.h"

namespace sunder::solver {
namespace {

using models::Network;
using models::Quantity;

// Worst verdict of each subject; what is only noted counts as met.
std::unordered_map<std::string, Verdict> worst_verdicts(const Network& network) {
  std::unordered_map<std::string, Verdict> worst;
  for (const Finding& finding : judge_network(network)) {
    const auto [place, added] = worst.try_emplace(finding.subject, Verdict::meets);
    const Verdict verdict = finding.verdict == Verdict::noted ? Verdict::meets : finding.verdict;
    if (severity(verdict) < severity(place->second)) place->second = verdict;
  }
  return worst;
}

std::string cpc_text(const models::Cable& cable) {
  std::string text;
  for (const models::Strand& strand : cable.protective) text += (text.empty() ? "" : " + ") + strand.label;
  return text.empty() ? "none" : text;
}

ScheduleRow row_of(const Situation& s) {
  ScheduleRow row;
  row.address = s.address;
  row.submain = s.submain != nullptr;
  row.serves = s.circuit != nullptr ? s.circuit->serves
                                    : "board " + s.network->boards[static_cast<std::size_t>(s.submain->to)].name;
  const models::ConductorSet conductors = s.circuit != nullptr ? s.circuit->conductors : s.submain->conductors;
  row.phases = models::phases_text(conductors);
  row.device = s.device->present() ? s.device->text : "";
  // A run given by sequence impedances has no cable to name.
  const std::string times = s.in_parallel > 1 ? fmt::format(" x {}", s.in_parallel) : "";
  row.cable = s.cable != nullptr ? s.cable->text + times : "by z1" + times;
  row.cpc = s.cable != nullptr ? cpc_text(*s.cable) : "";
  row.length = s.length;
  const models::Sourced<double>& Iz = s.circuit != nullptr ? s.circuit->Iz : s.submain->Iz;
  if (Iz.given) row.Iz = Iz.value;
  if (s.circuit != nullptr) {
    if (s.circuit->load.given) row.Ib = s.circuit->load.value;
  } else {
    for (std::size_t m = 0; m < s.network->submains.size(); ++m)
      if (&s.network->submains[m] == s.submain && s.loading->submain[m].known) row.Ib = s.loading->submain[m].amps;
  }
  if (s.device->present()) row.In = s.device->In;
  if (s.drop.known) row.drop = s.drop.share;
  const FaultCurrent& earth = of(s.far_min, Fault::line_earth);
  row.limit = time_limit(s).seconds;
  if (earth.usable()) {
    row.Zs = earth.ohms;
    const Disconnection cleared = disconnection(s.path, earth.amps, row.limit);
    if (cleared.by != nullptr && !s.looped) row.time = cleared.time;
  }
  const FaultCurrent* low = least(s.far_min, {Fault::line_earth, Fault::line_neutral, Fault::line_line}, nullptr);
  if (low != nullptr && low->known) row.least = low->amps;
  const FaultCurrent* high = greatest(s.origin_max, kAllFaults, nullptr);
  if (high != nullptr && high->known) row.greatest = high->amps;
  return row;
}

}  // namespace

std::vector<ScheduleRow> schedule(const Network& network) {
  const std::unordered_map<std::string, Verdict> worst = worst_verdicts(network);
  std::vector<ScheduleRow> rows;
  std::unordered_map<std::string, std::size_t> seen;
  for (std::size_t state = 0; state < network.states.size(); ++state) {
    const StateSolution solution = solve_state(network, static_cast<int>(state));
    for (const Subject& subject : subjects(network, solution)) {
      if (subject.kind != SubjectKind::circuit && subject.kind != SubjectKind::submain) continue;
      ScheduleRow row = row_of(situation(network, solution, subject));
      if (const auto verdict = worst.find(row.address); verdict != worst.end()) row.verdict = verdict->second;
      const auto [place, added] = seen.try_emplace(row.address, rows.size());
      if (added) {
        rows.push_back(std::move(row));
        continue;
      }
      // Several states: the hardest value of each column.
      ScheduleRow& kept = rows[place->second];
      auto harder = [](double& mine, double other, bool greater) {
        if (std::isnan(mine) || (greater ? other > mine : other < mine)) mine = other;
      };
      harder(kept.drop, row.drop, true);
      harder(kept.Zs, row.Zs, true);
      harder(kept.least, row.least, false);
      harder(kept.greatest, row.greatest, true);
      harder(kept.time, row.time, true);
      harder(kept.limit, row.limit, false);
    }
  }
  std::stable_partition(rows.begin(), rows.end(), [](const ScheduleRow& row) { return row.submain; });
  return rows;
}

}  // namespace sunder::solver
