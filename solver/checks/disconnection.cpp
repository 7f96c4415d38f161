// SPDX-License-Identifier: Apache-2.0
// The latest time at which a line-earth fault at the far end is disconnected, against the rule set.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kName = "disconnection time";

// A submain laid without protective conductor has nothing along it that could become live (an
// assumption that the reader lists).
// What a public supply does before its terminals is the distributor's; a transformer's cable is not.
bool applies(const Situation& s) {
  if (s.kind == SubjectKind::tails)
    return s.source->transformer && s.cable != nullptr && s.device->present() &&
           s.conductors.has(models::Conductor::PE);
  return s.kind == SubjectKind::circuit ||
         (s.kind == SubjectKind::submain && (s.submain->pen || s.submain->conductors.has(models::Conductor::PE)));
}

// Steel armour has a reactance that the library does not know: 0.3 to 0.4 mohm/m on large cables (from
// memory, low confidence). What it could add to the loop, where a cable of 50 mm2 or more has its armour
// alone as protective conductor [ohm].
double unknown_reactance(const Situation& s) {
  constexpr double kMost = 0.4e-3;  // [ohm/m]
  constexpr double kLarge = 50e-6;  // [m2]
  double ohms = 0;
  auto add = [&](const models::Cable& cable, double length, int in_parallel) {
    if (cable.protective.size() != 1 || cable.line.area < kLarge) return;
    const models::Strand& strand = cable.protective.front();
    if (strand.place == models::Place::armour && strand.material == models::Material::steel && strand.x <= 0)
      ohms += kMost * length / in_parallel;
  };
  if (s.cable != nullptr && (s.kind == SubjectKind::circuit || s.kind == SubjectKind::submain))
    add(*s.cable, s.length, s.in_parallel);
  for (const int feeder : feeders_above(*s.network, *s.tree, s.board_index)) {
    const models::Submain& submain = s.network->submains[static_cast<std::size_t>(feeder)];
    add(submain.cable, submain.length.value, submain.in_parallel);
  }
  return ohms;
}

void say_working(Finding& finding, const Situation& s, const FaultCurrent& current, const Disconnection& cleared,
                 const TimeLimit& limit) {
  finding.steps.push_back({s.in_parallel > 1 ? "earth-fault loop at the worst place of the parallel cables"
                                             : "earth-fault loop at the far end",
                           "Zs = |Z source + Z1 + Z2|",
                           current.source_ohms > 0 ? fmt::format("{} of it before the installation",
                                                                 say(current.source_ohms, Quantity::impedance))
                                                   : std::string("solved in the network"),
                           current.ohms, Quantity::impedance, s.at});
  finding.steps.push_back(
      {"least line-earth current", "I = c_min U0 / Zs",
       fmt::format("{} / {}", say(current.volts, Quantity::voltage), say(current.ohms, Quantity::impedance)),
       current.amps, Quantity::current, s.at});
  if (cleared.by != nullptr && std::isfinite(cleared.needed)) {
    finding.steps.push_back({fmt::format("current at which {} of {} operates within {}",
                                         cleared.residual ? "the residual element" : "the device", cleared.by->address,
                                         say(limit.seconds, Quantity::time)),
                             "Ia", cleared.by->device->text, cleared.needed, Quantity::current, cleared.by->at});
    finding.steps.push_back(
        {"greatest loop that would do",
         "Zs,max = c_min U0 / Ia",
         fmt::format("{} / {}", say(current.volts, Quantity::voltage), say(cleared.needed, Quantity::current)),
         current.volts / cleared.needed,
         Quantity::impedance,
         {}});
  }
}

std::vector<Finding> judge(const Situation& s) {
  Finding finding = begin_finding(s, kName);
  finding.unit = Quantity::time;
  finding.condition = word(Condition::minimum);
  finding.fault = word(Fault::line_earth);
  const TimeLimit limit = time_limit(s);
  finding.limit = limit.seconds;
  finding.clause = limit.distribution ? s.network->rules.distribution_clause : s.network->rules.times_clause;
  if (limit.assumed_use) finding.assumptions.push_back("use not given: the time of sockets is demanded");
  const FaultCurrent& current = of(s.far_min, Fault::line_earth);
  if (lack_sequence(finding, s)) return {finding};
  if (s.source->earthing == models::Earthing::IT)
    finding.assumptions.push_back(
        "IT: the second fault is judged, elsewhere on another line (on the neutral where it is distributed), half of "
        "the voltage for each loop; the exposed parts are joined by protective conductors");
  if (!current.possible) {
    const bool board_has_earth =
        s.board_index < 0 || s.tree->conductors[static_cast<std::size_t>(s.board_index)].has(models::Conductor::PE);
    lack(finding, board_has_earth ? "cpc of " + s.address : "electrode of " + s.board->name,
         board_has_earth ? "no protective conductor reaches the far end" : "the board has no earth");
    return {finding};
  }
  if (!current.known) {
    lack(finding, current.needs, "the least line-earth current of the supply is not declared");
    return {finding};
  }
  Disconnection cleared = disconnection(s.path, current.amps, limit.seconds);
  // An inverter gives more at first: a stage that lasts until the device has operated clears it.
  for (const models::Stage& stage : s.stages) {
    const double unlimited = current.volts / std::abs(current.loop);
    const Disconnection early =
        disconnection(s.path, std::max(current.amps, std::min(stage.amps, unlimited)), limit.seconds);
    if (early.time <= stage.seconds && early.time < cleared.time) cleared = early;
  }
  if (cleared.by == nullptr) {
    lack(finding, "device of " + s.address, "no device on the way breaks a line-earth fault");
    return {finding};
  }
  const models::Device& device = *cleared.by->device;
  say_working(finding, s, current, cleared, limit);
  finding.confidence = models::worse(path_confidence(s, true), device.confidence);
  finding.value = std::isfinite(cleared.time) ? cleared.time : kNone;
  if (std::isnan(finding.value)) finding.reason = "no device is sure to operate at this current";
  finding.verdict = cleared.time <= limit.seconds ? Verdict::meets : Verdict::fails;
  finding.margin = std::isfinite(cleared.needed) ? current.amps / cleared.needed - 1.0 : -1.0;
  // A residual element needs so little current that the time is what is left to spare.
  if (cleared.residual && finding.verdict == Verdict::meets)
    finding.margin = std::min(finding.margin, 1.0 - cleared.time / limit.seconds);
  if (const double x = unknown_reactance(s); x > 0 && finding.verdict == Verdict::meets) {
    const double least_amps = current.volts / std::abs(current.loop + Complex{0.0, x});
    if (disconnection(s.path, least_amps, limit.seconds).time > limit.seconds)
      lack(finding, "armour_x of the armoured cables on the way to " + s.address,
           "the reactance of the armour, which is not known, could make it fail");
  }
  if (finding.verdict == Verdict::meets) lack_source(finding, s, cleared.time);
  if (finding.verdict == Verdict::fails && !cleared.residual && !device.interpolated.empty() &&
      device.interpolated.time_at(current.amps) <= limit.seconds)
    lack(finding,
         fmt::format("time-current points of the device of {}{}", cleared.by->address,
                     device.family == "gG" ? " (fuses to BS 88-2 have printed ones)" : ""),
         "only a line drawn between the standard's gates would meet the time");
  const std::string by =
      fmt::format("{}{}", device.text, cleared.by->address == s.address ? "" : " of " + cleared.by->address);
  finding.summary = fmt::format(
      "Zs {} lets {} flow: {} operates {}; {} demanded{}", say(current.ohms, Quantity::impedance),
      say(current.amps, Quantity::current), by,
      std::isfinite(cleared.time) ? "within " + say(cleared.time, Quantity::time) : std::string("at no sure time"),
      say(limit.seconds, Quantity::time),
      std::isfinite(cleared.needed) ? fmt::format(", which takes {} (Zs {})", say(cleared.needed, Quantity::current),
                                                  say(current.volts / cleared.needed, Quantity::impedance))
                                    : std::string(", which it never guarantees"));
  std::vector<double> steps;
  for (const Protector& protector : s.path) {
    if (!protector.device->residual.empty()) steps.push_back(residual_capacity(*protector.device));
    for (const models::Curve* curve : {&protector.device->overcurrent.latest, &protector.device->residual.latest})
      for (const double step : step_currents(*curve)) steps.push_back(step);
  }
  watch_steps(finding, current.amps, steps);
  weigh_confidence(finding);
  return {finding};
}

}  // namespace

Check disconnection_check() {
  return {{kName,
           "the latest time at which the least line-earth current at the far end is disconnected against the rule "
           "set's time for system, voltage, use and rating; the margin is that of the current",
           "circuits, submains", "the supply's minimum; length, cable, cpc, device; use"},
          applies,
          judge};
}

}  // namespace sunder::solver
