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

struct Comparison {
  std::string what;
  double value, limit;
  bool known = true;
  bool sum_of_loads = false;  // its value is a sum without diversity: above the limit proves nothing
};

// Judges the tightest of several comparisons. One that fails on what is known fails whatever is
// missing elsewhere.
void judge_comparisons(Finding& finding, const Situation& s, const std::vector<Comparison>& comparisons) {
  const bool complete = finding.needs.empty();
  const Comparison* worst = nullptr;
  for (const Comparison& c : comparisons) {
    if (!c.known) continue;
    finding.steps.push_back(
        {c.what, "", fmt::format("{} against {}", say(c.value, Quantity::current), say(c.limit, Quantity::current)),
         kNone, Quantity::current, s.at});
    if (worst == nullptr || c.value * worst->limit > worst->value * c.limit) worst = &c;
  }
  if (worst == nullptr) return;
  compare_upper(finding, worst->value, worst->limit, Quantity::current);
  finding.summary = fmt::format("{}: {} against {}", worst->what, say(worst->value, Quantity::current),
                                say(worst->limit, Quantity::current));
  if (finding.verdict == Verdict::fails && worst->sum_of_loads)
    lack(finding, "demand of " + finding.subject, "the sum of the loads, taken without diversity, is above the rating");
  if (finding.verdict == Verdict::meets && !complete) finding.verdict = Verdict::undecided;
  if (finding.verdict == Verdict::undecided) finding.margin = kNone;
}

Demand demand_of(const Situation& s) {
  if (s.circuit != nullptr)
    return {s.circuit->load.value, 1.0, s.circuit->load.given, true, "load of " + s.address, {}};
  if (s.submain != nullptr) return s.loading->submain[static_cast<std::size_t>(s.submain - s.network->submains.data())];
  // What a transformer in the network feeds is the demand of its board.
  const bool of_network = !s.network->sources.empty() && s.source >= s.network->sources.data() &&
                          s.source < s.network->sources.data() + s.network->sources.size();
  if (s.kind == SubjectKind::board && (!of_network || s.tree->grid))
    return s.loading->demand[static_cast<std::size_t>(s.board_index)];
  return s.loading->source[static_cast<std::size_t>(s.source - s.network->sources.data())];
}

std::vector<Finding> judge_run(const Situation& s) {
  Finding finding = begin_finding(s, kOverload);
  finding.unit = Quantity::current;
  const models::RuleSet& rules = s.network->rules;
  finding.clause = rules.overload_clause;
  const Protector* by = overcurrent_protector(s.path);
  if (by == nullptr) {
    lack(finding, "device of " + s.address, "no device on the way protects against overload");
    return {finding};
  }
  const models::Device& device = *by->device;
  const Demand demand = demand_of(s);
  const models::Sourced<double>& Iz = s.circuit != nullptr   ? s.circuit->Iz
                                      : s.submain != nullptr ? s.submain->Iz
                                                             : s.source->tails.Iz;
  if (!demand.known) lack(finding, demand.needs, "Ib is not known");
  std::vector<Comparison> comparisons{{"Ib <= In", demand.amps, device.In, demand.known, !demand.declared}};
  if (s.cable == nullptr) {
    judge_comparisons(finding, s, comparisons);
    return {finding};
  }
  if (!Iz.given) lack(finding, "Iz of " + s.address, "Iz is not declared");
  if (s.ring && rules.ring_device_to > 0 && device.In <= rules.ring_device_to) {
    comparisons.push_back({fmt::format("ring: {} <= Iz of one leg", say(rules.ring_Iz, Quantity::current)),
                           rules.ring_Iz, Iz.value, Iz.given});
    finding.assumptions.push_back("ring: its load is spread so that no leg carries more than its Iz for long");
  } else {
    comparisons.push_back({device.overload_factor < 1 ? fmt::format("In <= {} Iz", device.overload_factor) : "In <= Iz",
                           device.In, device.overload_factor * Iz.value, Iz.given});
    const bool by_I2 = !device.I2_deemed && device.overload_factor >= 1;
    if (by_I2 && device.I2_ratio > 0) {
      comparisons.push_back({fmt::format("I2 <= {} Iz", rules.I2_factor), device.I2_ratio * device.In,
                             rules.I2_factor * Iz.value, Iz.given});
    } else if (by_I2) {
      lack(finding, "I2 of the device of " + by->address, "the conventional operating current is not known");
    }
  }
  judge_comparisons(finding, s, comparisons);
  return {finding};
}

// What a busbar or group device carries against its rating: the demand, or no more than the
// overcurrent device before it lets through for long.
Finding judge_rating(const Situation& s, const models::Device& device, const Demand& demand,
                     const std::vector<Protector>& before, const std::string& subject) {
  Finding finding = begin_finding(s, kOverload);
  finding.subject = subject;
  finding.unit = Quantity::current;
  finding.clause = s.network->rules.overload_clause;
  const Protector* upstream = overcurrent_protector(before);
  if (upstream != nullptr && upstream->device->In <= device.In) {
    judge_comparisons(
        finding, s,
        {{fmt::format("In of {} <= In of {}", upstream->address, device.text), upstream->device->In, device.In}});
    return finding;
  }
  if (!demand.known) lack(finding, demand.needs, "the load through it is not known");
  judge_comparisons(
      finding, s,
      {{fmt::format("load <= In of {}", device.text), demand.amps, device.In, demand.known, !demand.declared}});
  return finding;
}

// What carries a transformer's load is no subject of its own: it is said to be undecided rather than left out.
void add_transformers(const Situation& s, std::vector<Finding>& findings) {
  for (const models::Transformer& t : s.network->transformers) {
    if (t.to != s.board_index || !(t.device.present() || t.primary_device.present() || t.tails.present)) continue;
    Finding finding = begin_finding(s, kOverload);
    finding.subject = t.name;
    finding.at = t.at;
    finding.unit = Quantity::current;
    finding.clause = s.network->rules.overload_clause;
    lack(finding, "overload, clearance and heating of the devices and tails of " + t.name + " by hand",
         "devices and tails of a transformer between two boards are judged for breaking capacity alone");
    findings.push_back(std::move(finding));
  }
}

std::vector<Finding> judge_board(const Situation& s) {
  std::vector<Finding> findings;
  add_transformers(s, findings);
  const auto board = static_cast<std::size_t>(s.board_index);
  const int feeder = s.tree->feeder[board];
  const std::vector<Protector> path = s.path;
  std::vector<Protector> before = path;
  if (s.board->incomer.present() && s.board->incomer.In > 0) {
    before.pop_back();
    const Demand demand = feeder >= 0 ? s.loading->submain[static_cast<std::size_t>(feeder)] : demand_of(s);
    findings.push_back(judge_rating(s, s.board->incomer, demand, before, s.address));
  }
  for (std::size_t g = 0; g < s.board->groups.size(); ++g) {
    const models::Group& group = s.board->groups[g];
    if (group.device.In <= 0) continue;
    const Demand demand = group_demand(*s.network, *s.loading, s.board_index, static_cast<int>(g));
    findings.push_back(judge_rating(s, group.device, demand, path, s.address + "." + group.name));
  }
  return findings;
}

bool has_overload(const Situation& s) {
  if (s.kind != SubjectKind::board) return s.kind != SubjectKind::tails || s.device->present();
  const bool incomer = s.board->incomer.present() && s.board->incomer.In > 0;
  const bool transformer = std::any_of(s.network->transformers.begin(), s.network->transformers.end(),
                                       [&](const models::Transformer& t) { return t.to == s.board_index; });
  return incomer || transformer || !s.board->groups.empty();
}

std::vector<Finding> judge_overload(const Situation& s) {
  return s.kind == SubjectKind::board ? judge_board(s) : judge_run(s);
}

// Circuits; of submains only those whose board feeds nothing yet, as the drop is judged at the end of
// the way.
bool has_drop(const Situation& s) {
  if (s.kind == SubjectKind::circuit) return true;
  if (s.kind != SubjectKind::submain) return false;
  const auto feeds = [&](const auto& ways, auto from) {
    return std::any_of(ways.begin(), ways.end(), [&](const auto& way) { return way.*from == s.submain->to; });
  };
  return !feeds(s.network->circuits, &models::Circuit::board) && !feeds(s.network->submains, &models::Submain::from);
}

bool demands_on_the_way(const Situation& s) {
  for (const int feeder : feeders_above(*s.network, *s.tree, s.board_index)) {
    const models::Submain& submain = s.network->submains[static_cast<std::size_t>(feeder)];
    if (submain.demand.given && submain.conductors.lines() == 3) return true;
  }
  return false;
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
    lack(finding, s.drop.needs, s.drop.why);
    return {finding};
  }
  compare_upper(finding, s.drop.share, limit, Quantity::percentage);
  finding.confidence = path_confidence(s, false);
  if (demands_on_the_way(s))
    finding.assumptions.push_back("a declared demand is taken as balanced over the lines of its submain");
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
  return {{kOverload,
           "Ib <= In <= Iz and I2 <= 1.45 Iz; of incomers, switches and group devices the load, or the device before "
           "them, against their rating",
           "circuits, submains, tails, incomers, groups", "load or demand; device; Iz"},
          has_overload,
          judge_overload};
}

Check voltage_drop_check() {
  return {
      {kDrop,
       "the drop from the supply terminals (own transformer: from its no-load side) to the far end at the "
       "conductors' temperature under load against the rule set's limit for the use",
       "circuits; submains to boards that feed nothing yet", "load; demands or loads of everything on the way; use"},
      has_drop,
      judge_drop};
}

}  // namespace sunder::solver
