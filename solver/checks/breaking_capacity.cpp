// SPDX-License-Identifier: Apache-2.0
// The greatest prospective current through a device, at its line side, against what it can break.
#include <fmt/format.h>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Device;
using models::DeviceKind;
using models::Quantity;

constexpr const char* kName = "breaking capacity";

// Motors feed a fault for some periods. IEC 60909-0: asynchronous motors may be left out while their
// rated currents sum to no more than 1 % of the current without them; else 5 times their rated
// current (starting current ratio of a low-voltage group) is a bound.
constexpr double kMotorShare = 0.01;
constexpr double kMotorFactor = 5.0;

bool breaks(const Device& device) { return device.kind == DeviceKind::breaker || device.kind == DeviceKind::fuse; }

Finding judge_device(const Situation& s, const Device& device, const std::string& whose) {
  Finding finding = begin_finding(s, kName);
  finding.unit = Quantity::current;
  finding.condition = word(Condition::maximum);
  finding.clause = s.network->rules.capacity_clause;
  Fault fault = Fault::three_phase;
  const FaultCurrent* current = greatest(s.origin_max, kAllFaults, &fault);
  if (current == nullptr) {
    lack(finding, "conductors of " + s.address, "no fault is possible on the conductors given");
    return finding;
  }
  if (!current->known) {
    lack(finding, current->needs, "the greatest current of the supply is not declared");
    return finding;
  }
  finding.fault = word(fault);
  double amps = current->amps;
  finding.steps.push_back(
      {"greatest prospective current at the line side", "I = c U / |Z|",
       fmt::format("{} / {}", say(current->volts, Quantity::voltage), say(current->ohms, Quantity::impedance)), amps,
       Quantity::current, s.at});
  if (s.motors > kMotorShare * amps) {
    amps += kMotorFactor * s.motors;
    finding.steps.push_back(
        {"bound with motors", "I + 5 sum(IrM)",
         fmt::format("{} + 5 x {}", say(current->amps, Quantity::current), say(s.motors, Quantity::current)), amps,
         Quantity::current, s.at});
    finding.assumptions.push_back("motors above 1 % of the current: 5 times their rated currents are added as a bound");
  }
  finding.confidence = models::worse(path_confidence(s, false), device.Icn_confidence);
  if (device.Icn <= 0) {
    finding.value = amps;
    lack(finding, "Icn of the device of " + whose, "the breaking capacity of the device is not given");
    finding.summary =
        fmt::format("{} may flow; what the {} can break is not given", say(amps, Quantity::current), device.text);
    return finding;
  }
  compare_upper(finding, amps, device.Icn, Quantity::current);
  // The whole current of the place bounds what the device of one feed of several carries.
  if (finding.verdict == Verdict::fails && s.looped)
    lack(finding, "the share of " + whose + " in the current",
         "only the current of all feeds together is above what the device can break");
  if (finding.verdict == Verdict::meets && !s.motors_unknown.empty())
    lack(finding, "load of " + s.motors_unknown, "a motor's rated current is not given, so its part is not bounded");
  finding.summary = fmt::format("{} may flow ({}); {} breaks {}", say(amps, Quantity::current), word(fault),
                                device.text, say(device.Icn, Quantity::current));
  weigh_confidence(finding);
  return finding;
}

// Devices that stand at a board but belong to a transformer, link or machine: each may see at most the current
// of all feeds of the board together.
std::vector<std::pair<const Device*, std::string>> devices_at(const Situation& s) {
  std::vector<std::pair<const Device*, std::string>> devices;
  auto add = [&](const Device& device, const std::string& whose) {
    if (breaks(device)) devices.emplace_back(&device, whose);
  };
  for (const models::Transformer& t : s.network->transformers) {
    if (t.to == s.board_index) add(t.device, t.name);
    if (t.from == s.board_index) add(t.primary_device, t.name);
  }
  for (const models::Link& link : s.network->links)
    if (link.from == s.board_index) add(link.device, link.name);
  for (const models::Source& source : s.network->sources)
    if (source.board == s.board_index && (source.generator.present || source.inverter.present))
      add(source.device, source.name);
  return devices;
}

bool applies(const Situation& s) {
  // A supply's device is the distributor's; a transformer's is not.
  if (s.kind == SubjectKind::tails) return s.source->transformer && breaks(*s.device);
  if (s.kind != SubjectKind::board) return breaks(*s.device);
  if (breaks(s.board->incomer) || !devices_at(s).empty()) return true;
  for (const models::Group& group : s.board->groups)
    if (breaks(group.device)) return true;
  return false;
}

std::vector<Finding> judge(const Situation& s) {
  if (s.kind != SubjectKind::board) return {judge_device(s, *s.device, s.address)};
  std::vector<Finding> findings;
  if (breaks(s.board->incomer)) findings.push_back(judge_device(s, s.board->incomer, s.address + ".incomer"));
  for (const models::Group& group : s.board->groups) {
    if (!breaks(group.device)) continue;
    findings.push_back(judge_device(s, group.device, s.address + "." + group.name));
    findings.back().subject = s.address + "." + group.name;
  }
  Situation shared = s;
  shared.looped = true;
  for (const auto& [device, whose] : devices_at(s)) {
    findings.push_back(judge_device(shared, *device, whose));
    findings.back().subject = whose;
  }
  return findings;
}

}  // namespace

Check breaking_capacity_check() {
  return {{kName, "the greatest prospective current at the line side of a device against its rated breaking capacity",
           "circuits, submains, incomers and group devices that break short-circuits",
           "the supply's maximum; Icn of the device"},
          applies,
          judge};
}

}  // namespace sunder::solver
