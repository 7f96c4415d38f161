// SPDX-License-Identifier: Apache-2.0
// Checks of residual current devices: additional protection, and the electrode of a TT installation.
#include <fmt/format.h>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kAdditional = "additional protection";
constexpr const char* kElectrode = "earth electrode";
constexpr double kStable = 200;  // [ohm] above it an electrode may not be stable (BS 7671 Table 41.5, note)

// The most sensitive residual current device on the way.
const Protector* most_sensitive(const Situation& s) {
  const Protector* best = nullptr;
  for (const Protector& p : s.path)
    if (p.device->IdN > 0 && (best == nullptr || p.device->IdN <= best->device->IdN)) best = &p;
  return best;
}

bool needs_additional(const Situation& s) {
  if (s.kind != SubjectKind::circuit) return false;
  const models::RuleSet& rules = s.network->rules;
  const Protector* by = overcurrent_protector(s.path);
  const double In = by == nullptr ? 0 : by->device->In;
  const bool sockets =
      (s.use == models::Use::sockets || s.use == models::Use::unknown) && In <= rules.additional_sockets_to;
  const bool dwelling_lights =
      s.use == models::Use::lighting && s.network->dwelling && rules.additional_dwelling_lighting;
  return sockets || dwelling_lights;
}

std::vector<Finding> judge_additional(const Situation& s) {
  Finding finding = begin_finding(s, kAdditional);
  const models::RuleSet& rules = s.network->rules;
  finding.unit = Quantity::current;
  finding.fault = word(Fault::line_earth);
  finding.clause = rules.additional_clause;
  finding.limit = rules.additional_IdN;
  if (s.use == models::Use::unknown)
    finding.assumptions.push_back("use not given: additional protection is demanded as for sockets");
  const Protector* by = most_sensitive(s);
  if (by == nullptr) {
    finding.verdict = Verdict::fails;
    finding.margin = -1;
    finding.reason = "no residual current device on the way";
    finding.summary = fmt::format("no residual current device protects it; one of {} or less is demanded",
                                  say(rules.additional_IdN, Quantity::current));
    return {finding};
  }
  compare_upper(finding, by->device->IdN, rules.additional_IdN, Quantity::current);
  if (finding.verdict == Verdict::meets && by->device->selective_residual) {
    finding.verdict = Verdict::fails;
    finding.reason = "a delayed device gives no additional protection";
  }
  finding.confidence = by->device->confidence;
  finding.steps.push_back({"most sensitive residual current device on the way", "IdN",
                           fmt::format("{} of {}", by->device->text, by->address), by->device->IdN, Quantity::current,
                           by->at});
  finding.summary = fmt::format("{} of {}; {} or less demanded", by->device->text, by->address,
                                say(rules.additional_IdN, Quantity::current));
  return {finding};
}

bool in_tt(const Situation& s) {
  if (s.kind == SubjectKind::tails || s.source->earthing != models::Earthing::TT) return false;
  return s.kind == SubjectKind::board || most_sensitive(s) != nullptr;
}

// A board's own enclosure is protected by what stands before its incomer.
Situation before_incomer(Situation s) {
  if (s.board->incomer.present()) s.path.pop_back();
  return s;
}

std::vector<Finding> judge_electrode(const Situation& given) {
  const Situation s = given.kind == SubjectKind::board ? before_incomer(given) : given;
  Finding finding = begin_finding(s, kElectrode);
  const models::RuleSet& rules = s.network->rules;
  finding.unit = Quantity::voltage;
  finding.fault = word(Fault::line_earth);
  finding.clause = rules.touch_clause;
  const int handle = s.tree->electrode[static_cast<std::size_t>(s.board_index)];
  if (handle < 0) {
    finding.limit = rules.touch_limit;
    lack(finding, "electrode of " + s.board->name, "the board has no earth electrode");
    return {finding};
  }
  const models::Electrode& electrode = s.network->electrodes[static_cast<std::size_t>(handle)];
  const Protector* by = most_sensitive(s);
  if (by == nullptr) {
    // Common practice: the board and what leads to it are of Class II. That is for the inspector to see.
    finding.verdict = Verdict::noted;
    finding.limit = rules.touch_limit;
    finding.reason = "no residual current device stands before the board";
    finding.summary =
        "no residual current device before it: the board and what leads to it must be Class II or equivalent";
    finding.needs.push_back("Class II (or equivalent) up to the first residual current device");
    return {finding};
  }
  compare_upper(finding, electrode.resistance * by->device->IdN, rules.touch_limit, Quantity::voltage);
  finding.steps.push_back(
      {"voltage at the electrode at the rated residual current", "RA IdN",
       fmt::format("{} x {}", say(electrode.resistance, Quantity::impedance), say(by->device->IdN, Quantity::current)),
       finding.value, Quantity::voltage, electrode.at});
  finding.summary = fmt::format("RA {} with {} of {}: {}; {} allowed", say(electrode.resistance, Quantity::impedance),
                                say(by->device->IdN, Quantity::current), by->address,
                                say(finding.value, Quantity::voltage), say(finding.limit, Quantity::voltage));
  if (electrode.resistance > kStable)
    finding.assumptions.push_back("RA is above 200 ohm and taken as stable all the year (Table 41.5 doubts it)");
  return {finding};
}

}  // namespace

Check additional_protection_check() {
  return {{kAdditional, "the residual current device the rule set asks for: no more than 30 mA, not delayed",
           "circuits with sockets; in dwellings lighting where the rule set says so", "use; device, groups, incomer"},
          needs_additional,
          judge_additional};
}

Check earth_electrode_check() {
  return {
      {kElectrode,
       "RA IdN <= 50 V in a TT installation; before a board without any residual device the need for Class II is noted",
       "circuits, submains and boards of a TT installation", "electrode; IdN"},
      in_tt,
      judge_electrode};
}

}  // namespace sunder::solver
