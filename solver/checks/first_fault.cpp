// SPDX-License-Identifier: Apache-2.0
// The first line-earth fault of an IT installation: it may stay, if nothing dangerous can be touched.
#include <fmt/format.h>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kName = "first fault";

bool applies(const Situation& s) {
  return s.kind == SubjectKind::board && s.source->earthing == models::Earthing::IT && !s.source->high_voltage;
}

std::vector<Finding> judge(const Situation& s) {
  Finding finding = begin_finding(s, kName);
  finding.unit = Quantity::voltage;
  finding.condition = word(Condition::maximum);
  finding.fault = word(Fault::line_earth);
  finding.clause = "411.6.2";
  finding.limit = s.network->rules.touch_limit;
  finding.confidence = s.network->rules.confidence;
  const int handle = s.tree->electrode[static_cast<std::size_t>(s.board_index)];
  if (handle < 0) {
    lack(finding, "electrode of " + s.board->name, "the protective conductor of the board has no electrode");
    return {finding};
  }
  if (!s.first_fault.usable()) {
    lack(finding, s.first_fault.needs, "the current of a first fault is not known");
    return {finding};
  }
  const models::Electrode& electrode = s.network->electrodes[static_cast<std::size_t>(handle)];
  const double amps = s.first_fault.amps;
  compare_upper(finding, electrode.resistance * amps, finding.limit, Quantity::voltage);
  finding.steps.push_back({"greatest current of a first line-earth fault", "Id = c U0 / |Z|",
                           fmt::format("{} / {}", say(s.first_fault.volts, Quantity::voltage),
                                       say(s.first_fault.ohms, Quantity::impedance)),
                           amps, Quantity::current, s.at});
  finding.steps.push_back(
      {"voltage at the electrode", "RA Id",
       fmt::format("{} x {}", say(electrode.resistance, Quantity::impedance), say(amps, Quantity::current)),
       finding.value, Quantity::voltage, electrode.at});
  finding.assumptions.push_back("IT: an insulation monitoring device tells of a first fault, which is then removed");
  finding.summary = fmt::format("a first fault lets {} flow through {}: {}; {} allowed", say(amps, Quantity::current),
                                say(electrode.resistance, Quantity::impedance), say(finding.value, Quantity::voltage),
                                say(finding.limit, Quantity::voltage));
  return {finding};
}

}  // namespace

Check first_fault_check() {
  return {{kName, "RA Id <= 50 V at the first line-earth fault of an IT installation", "boards of an IT installation",
           "electrode; star_point or capacitance of the source"},
          applies,
          judge};
}

}  // namespace sunder::solver
