// SPDX-License-Identifier: Apache-2.0
// Checks of normal load: overload protection and voltage drop.
#include <fmt/format.h>

#include <algorithm>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kOverload = "overload";
constexpr const char* kDrop = "voltage drop";

bool is_run(const Situation& s) { return s.kind == SubjectKind::circuit || s.kind == SubjectKind::submain; }

std::vector<Finding> judge_overload(const Situation& s) {
  Finding finding = begin_finding(s, kOverload);
  finding.unit = Quantity::current;
  finding.clause = s.network->rules.overload_clause;
  const models::RuleSet& rules = s.network->rules;
  const Protector* by = overcurrent_protector(s.path);
  if (by == nullptr) {
    lack(finding, "device of " + s.address, "no device on the way protects against overload");
    return {finding};
  }
  const models::Device& device = *by->device;
  Demand demand;
  if (s.circuit != nullptr) {
    demand = {s.circuit->load.value, 1.0, s.circuit->load.given, true, "load of " + s.address};
  } else {
    for (std::size_t m = 0; m < s.network->submains.size(); ++m)
      if (&s.network->submains[m] == s.submain) demand = s.loading->submain[m];
  }
  const models::Sourced<double>& Iz = s.circuit != nullptr ? s.circuit->Iz : s.submain->Iz;
  if (!demand.known) lack(finding, demand.needs, "Ib is not known");
  if (!Iz.given) lack(finding, "Iz of " + s.address, "Iz is not declared");
  // A comparison that fails on what is known fails whatever is missing.
  struct Comparison {
    std::string what;
    double value, limit;
    bool known;
  };
  const double carry = s.in_parallel > 0 ? Iz.value : 0;
  std::vector<Comparison> comparisons{
      {"Ib <= In", demand.amps, device.In, demand.known},
      {device.overload_factor < 1 ? fmt::format("In <= {} Iz", device.overload_factor) : "In <= Iz", device.In,
       device.overload_factor * carry, Iz.given}};
  if (!device.I2_deemed && device.overload_factor >= 1 && device.I2_ratio > 0)
    comparisons.push_back({fmt::format("I2 <= {} Iz", rules.I2_factor), device.I2_ratio * device.In,
                           rules.I2_factor * carry, Iz.given});
  if (device.I2_ratio <= 0 && !device.I2_deemed && device.overload_factor >= 1)
    lack(finding, "I2 of the device of " + by->address, "the conventional operating current is not known");
  // A ring carries its load on two legs, each of which may take two thirds (IEC 60364-4-43, 433.1.204 in
  // the British rules): 20 A cables behind 30 or 32 A.
  if (s.ring) {
    constexpr double kLeg = 20.0 / 30.0;
    comparisons[1] = {"ring: 20/30 In <= Iz of one leg", kLeg * std::min(device.In, 30.0), carry, Iz.given};
    if (comparisons.size() > 2) comparisons.pop_back();
    finding.assumptions.push_back("ring: Iz is that of one leg, which carries no more than two thirds of 30 A");
  }
  const Comparison* worst = nullptr;
  for (const Comparison& c : comparisons) {
    if (!c.known) continue;
    finding.steps.push_back({c.what, c.what,
                             fmt::format("{} <= {}", say(c.value, Quantity::current), say(c.limit, Quantity::current)),
                             c.limit, Quantity::current, s.at});
    if (worst == nullptr || c.value * worst->limit > worst->value * c.limit) worst = &c;
  }
  if (worst != nullptr) {
    const Finding before = finding;
    compare_upper(finding, worst->value, worst->limit, Quantity::current);
    finding.summary = fmt::format("{}: {} against {}", worst->what, say(worst->value, Quantity::current),
                                  say(worst->limit, Quantity::current));
    if (finding.verdict == Verdict::meets && !before.needs.empty()) finding.verdict = Verdict::undecided;
    if (finding.verdict == Verdict::undecided) finding.margin = kNone;
  }
  return {finding};
}

std::vector<Finding> judge_drop(const Situation& s) {
  const models::RuleSet& rules = s.network->rules;
  Finding finding = begin_finding(s, kDrop);
  finding.unit = Quantity::percentage;
  finding.clause = rules.drop_clause;
  const bool own = s.source->own_transformer || s.source->transformer;
  const double lighting = own ? rules.drop_lighting_own : rules.drop_lighting_public;
  const double other = own ? rules.drop_other_own : rules.drop_other_public;
  double limit = other;
  if (s.use == models::Use::lighting) limit = lighting;
  if (s.use == models::Use::unknown) {
    limit = std::min(lighting, other);
    finding.assumptions.push_back("use not given: the strictest voltage-drop limit is demanded");
  }
  if (s.drop.length > rules.drop_extra_from)
    limit += std::min(rules.drop_extra_max, rules.drop_extra_per_m * (s.drop.length - rules.drop_extra_from));
  finding.limit = limit;
  if (!s.drop.known) {
    lack(finding, s.drop.needs, "a load on the way is not known");
    return {finding};
  }
  compare_upper(finding, s.drop.share, limit, Quantity::percentage);
  finding.confidence = path_confidence(s, false);
  const double here = s.drop.share - s.loading->drop[static_cast<std::size_t>(s.board_index)].share;
  finding.steps.push_back({"drop from the supply terminals", "sum of I (R cos + X sin) / U",
                           fmt::format("{} to the board + {} along it", say(s.drop.share - here, Quantity::percentage),
                                       say(here, Quantity::percentage)),
                           s.drop.share, Quantity::percentage, s.at});
  finding.summary = fmt::format("{} from the supply terminals ({} of it in this circuit); {} allowed",
                                say(s.drop.share, Quantity::percentage), say(here, Quantity::percentage),
                                say(limit, Quantity::percentage));
  weigh_confidence(finding);
  return {finding};
}

}  // namespace

Check overload_check() {
  return {{kOverload, "Ib <= In <= Iz and I2 <= 1.45 Iz", "circuits, submains", "load or demand; device; Iz"},
          is_run,
          judge_overload};
}

Check voltage_drop_check() {
  return {{kDrop,
           "the drop from the supply terminals (own transformer: from its no-load side) to the far end at the "
           "conductors' temperature under load against the rule set's limit for the use",
           "circuits",
           "load; demands or loads of everything on the way; use"},
          [](const Situation& s) { return s.kind == SubjectKind::circuit; },
          judge_drop};
}

}  // namespace sunder::solver
