// SPDX-License-Identifier: Apache-2.0
// A short-circuit at the far end is cleared within 5 s and before a conductor reaches its limit.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kName = "fault clearance";
// A far end is resistive: the least peak factor there is (1.02) goes with the least current.
constexpr double kLeastPeak = 1.02;
constexpr double kLongest = 5.0;  // [s] beyond it adiabatic heating proves nothing (IEC 60364-4-43, 434.5.2)

bool applies(const Situation& s) { return s.cable != nullptr; }

std::vector<Finding> judge(const Situation& s) {
  Finding finding = begin_finding(s, kName);
  finding.unit = Quantity::time;
  finding.condition = word(Condition::minimum);
  finding.clause = s.network->rules.clearance_clause;
  finding.limit = kLongest;
  if (lack_sequence(finding, s)) return {finding};
  Fault fault = Fault::line_neutral;
  const FaultCurrent* current = least(s.far_min, {Fault::line_neutral, Fault::line_line}, &fault);
  if (current == nullptr) {
    lack(finding, "conductors of " + s.address, "no short-circuit is possible on the conductors given");
    return {finding};
  }
  finding.fault = word(fault);
  if (!current->known) {
    lack(finding, current->needs, "the least short-circuit current of the supply is not declared");
    return {finding};
  }
  const Protector* by = overcurrent_protector(s.path);
  if (by == nullptr) {
    lack(finding, "device of " + s.address, "no device on the way breaks a short-circuit");
    return {finding};
  }
  const models::Strand& strand = s.cable->neutral && fault == Fault::line_neutral ? *s.cable->neutral : s.cable->line;
  const models::AdiabaticRow* k = models::adiabatic(s.network->rules, strand, s.cable->insulation);
  if (k == nullptr) {
    lack(finding, "k for the conductors of " + s.address, "the rule set has no k for this conductor");
    return {finding};
  }
  // Inside one of n parallel cables the worst place is where half of the current comes from either side
  // (n = 2: the far end, where each cable carries half).
  const double share = s.in_parallel > 1 ? 0.5 : 1.0;
  const double withstand = k->k * k->k * strand.area * strand.area / (share * share);
  const double amps = current->amps;
  const double thermal = withstand / (amps * amps);
  const double time = by->device->overcurrent.latest.time_at(amps);
  const double needed = models::current_for(by->device->overcurrent.latest, kLongest);
  finding.limit = std::min(kLongest, thermal);
  finding.value = std::isfinite(time) ? time : kNone;
  finding.confidence = models::worse(path_confidence(s, false), by->device->confidence);
  finding.steps.push_back(
      {fmt::format("least {} current at the {}", word(fault),
                   s.in_parallel > 1 ? "worst place of the parallel cables" : "far end"),
       "I = c_min U / |Z|",
       fmt::format("{} / {}", say(current->volts, Quantity::voltage), say(current->ohms, Quantity::impedance)), amps,
       Quantity::current, s.at});
  finding.steps.push_back(
      {"time to the conductor's final temperature", "t = k2 S2 / I2",
       fmt::format("{} / ({})2", say(withstand, Quantity::let_through), say(amps, Quantity::current)), thermal,
       Quantity::time, s.at});
  finding.steps.push_back(
      {fmt::format("latest operation of {} ({})", by->address, by->device->text), "t(I)",
       std::isfinite(time) ? say(amps, Quantity::current) : say(amps, Quantity::current) + ", never for sure",
       finding.value, Quantity::time, by->at});
  const bool in_time = time <= kLongest;
  // What passes before the latest operation; below 0.1 s that is let-through, not a time.
  const Heat heat = greatest_heat(*by->device, amps, kLeastPeak);
  const bool cool = in_time && heat.total <= withstand * (1 + 1e-12);
  if (cool && time > thermal) {
    finding.limit = kLongest;
    finding.steps.push_back(
        {"heat by let-through data instead of a time", "I2 t", heat.basis, heat.total, Quantity::let_through, by->at});
  }
  finding.verdict = cool ? Verdict::meets : Verdict::fails;
  finding.margin = std::isfinite(needed) ? amps / needed - 1.0 : -1.0;
  if (in_time) finding.margin = std::min(finding.margin, std::sqrt(withstand / heat.total) - 1.0);
  if (std::isnan(finding.value)) finding.reason = "no device is sure to operate at this current";
  // A late gate is a bound, not the device's behaviour: too hot by the bound alone proves nothing.
  const bool interpolated_in_time =
      !by->device->interpolated.empty() && by->device->interpolated.time_at(amps) <= std::min(kLongest, thermal);
  const bool only_bound = in_time && (!heat.from_data || by->device->by_gates);
  // All of the declared loop was put into the line; half of it there is what a supply usually has.
  const bool split_open = fault == Fault::line_line && !s.source->transformer && !s.source->minimum.three_phase.given();
  const double likely = current->volts / (current->ohms - current->source_ohms / 2);
  const bool by_split =
      split_open && likely >= needed && greatest_heat(*by->device, likely, kLeastPeak).total <= withstand;
  if (!cool && by_split) {
    lack(finding, s.source->name + ".minimum.three_phase",
         "it is not met only because all of the declared loop is taken to lie in the line");
  } else if (!cool && interpolated_in_time) {
    lack(finding, "time-current points of the device of " + by->address,
         "only a line drawn between the standard's gates would meet the time");
  } else if (!cool && only_bound && least_heat(*by->device, amps) <= withstand) {
    lack(finding, "time-current points or let-through of the device of " + by->address,
         "the standard's gate is too late for the conductor, the device itself may not be");
  }
  if (finding.verdict == Verdict::meets) lack_source(finding, s, time);
  finding.summary = fmt::format(
      "{} flows at the far end ({}): {} operates {}; {} demanded", say(amps, Quantity::current), word(fault),
      by->device->text, std::isfinite(time) ? "within " + say(time, Quantity::time) : std::string("at no sure time"),
      say(finding.limit, Quantity::time));
  for (const models::Curve* edge : {&by->device->overcurrent.latest, &by->device->overcurrent.earliest})
    watch_steps(finding, amps, step_currents(*edge));
  weigh_confidence(finding);
  return {finding};
}

}  // namespace

Check clearance_check() {
  return {{kName,
           "the latest time at which the least line-neutral or line-line current at the far end is cleared against the "
           "lesser of 5 s and the time to the conductor's final temperature",
           "circuits, submains, tails", "the supply's minimum, line-neutral too; length, cable, device"},
          applies,
          judge};
}

}  // namespace sunder::solver
