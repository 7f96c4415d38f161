// SPDX-License-Identifier: Apache-2.0
// What a fault lets through against what each conductor stands, over every current that can flow.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kName = "conductor heating";
constexpr double kLongest = 5.0;  // [s]

// The currents one conductor may carry, and which faults they belong to.
struct Interval {
  double low = 0, high = 0;  // prospective, through the device [A]
  double kappa = 1.02;
  bool earth = false;                                             // a line-earth fault: residual elements act too
  Fault least = Fault::line_neutral, most = Fault::line_neutral;  // what flows at either end
  std::vector<std::pair<double, double>> shares;  // inside parallel cables: current, share of the faulted one
};

// Share of the current through the device that the faulted one of several parallel cables carries, at most:
// that of the weakest supply at this current, where the place is nearest.
double share_at(const Interval& interval, double current) {
  if (interval.shares.empty()) return 1.0;
  double share = interval.shares.back().second;
  for (auto p = interval.shares.rbegin(); p != interval.shares.rend(); ++p)
    if (p->first <= current * (1 + 1e-12)) share = p->second;
  // Between two places the nearer one bounds it.
  for (std::size_t i = 1; i < interval.shares.size(); ++i)
    if (current > interval.shares[i].first && current < interval.shares[i - 1].first)
      share = std::max(share, interval.shares[i - 1].second);
  return share;
}

struct Worst {
  double heat = 0, current = 0, time = 0;  // I2t through the device
  bool decisive = false;                   // by data, not by a bound
  const char* basis = "";
  models::Confidence confidence = models::Confidence::declared;
};

Heat heat_at(const Situation& s, const Protector& by, double current, const Interval& interval) {
  Heat heat = greatest_heat(*by.device, current, interval.kappa);
  if (!interval.earth) return heat;
  for (const Protector& p : s.path) {
    if (p.device->residual.empty()) continue;
    if (current > residual_capacity(*p.device)) continue;
    const double time = p.device->residual.latest.time_at(current);
    const double total = current * current * time * (1.0 + dc_heat(interval.kappa, time, s.network->frequency));
    if (!std::isfinite(time) || total >= heat.total) continue;
    heat.total = total;
    heat.time = time;  // a gate bounds it: whether the heat is data stays as the overcurrent part has it
    heat.basis = "latest residual operating time";
    heat.confidence = models::worse(heat.confidence, p.device->confidence);
  }
  return heat;
}

// Currents at which what the residual element does may jump.
std::vector<double> residual_steps(const models::Device& device) {
  if (device.residual.empty()) return {};
  std::vector<double> steps = step_currents(device.residual.latest);
  steps.push_back(residual_capacity(device));
  return steps;
}

// The greatest heat over the interval, ends and corners of the curves included; with `decisive`, of
// that which is data and not a mere bound.
Worst worst_over(const Situation& s, const Protector& by, const Interval& interval, bool decisive) {
  std::vector<double> currents = heat_corners(*by.device, interval.low, interval.high);
  if (interval.earth)
    for (const Protector& p : s.path)
      for (const double step : residual_steps(*p.device))
        for (const double near : {step * (1 - 1e-9), step * (1 + 1e-9)})
          if (near > interval.low && near < interval.high) currents.push_back(near);
  currents.push_back(interval.low);
  currents.push_back(interval.high);
  for (const auto& [current, share] : interval.shares)
    if (current > interval.low && current < interval.high) currents.push_back(current);
  Worst worst;
  for (const double current : currents) {
    const Heat heat = heat_at(s, by, current, interval);
    if (!(heat.time <= kLongest)) continue;  // fault clearance and disconnection judge those
    const double share = share_at(interval, current);
    const double total = heat.total * share * share;
    if (total <= worst.heat || (decisive && !heat.from_data)) continue;
    worst = {total, current, heat.time, heat.from_data, heat.basis, heat.confidence};
  }
  return worst;
}

bool applies(const Situation& s) { return s.cable != nullptr; }

struct Part {
  const models::Strand* strand;
  double share;  // of the fault current
  Interval interval;
  std::string name;
};

// Currents at the far end (minimum) and at the device (maximum) for a set of faults.
bool interval_of(const Situation& s, FaultList faults, bool earth, Interval& out, std::string& needs, bool& possible) {
  const FaultCurrent* low = least(s.far_min, faults, &out.least);
  const FaultCurrent* high = greatest(s.origin_max, faults, &out.most);
  possible = low != nullptr && high != nullptr;
  if (!possible) return false;
  if (!low->known || !high->known) {
    needs = low->known ? high->needs : low->needs;
    return false;
  }
  out.low = low->amps;
  out.high = std::max(high->amps, low->amps);
  out.kappa = std::isfinite(high->peak) && high->amps > 0 ? high->peak / (std::sqrt(2.0) * high->amps) : 1.02;
  out.earth = earth;
  for (const InnerFault& inner : s.inner) {
    const FaultCurrent* amps = least(inner.least, faults, nullptr);
    if (amps != nullptr && amps->known) out.shares.emplace_back(amps->amps, inner.share);
  }
  return true;
}

std::vector<Part> parts_of(const Situation& s, Finding& finding) {
  std::vector<Part> parts;
  auto add = [&](const models::Strand& strand, double share, FaultList faults, bool earth, const std::string& name) {
    Interval interval;
    std::string needs;
    bool possible = false;
    if (interval_of(s, faults, earth, interval, needs, possible)) {
      parts.push_back({&strand, share, interval, name});
    } else if (possible) {
      lack(finding, needs, "a current of the supply is not declared");
    }
  };
  add(s.cable->line, 1.0, {Fault::line_neutral, Fault::line_line, Fault::three_phase}, false,
      "line " + s.cable->line.label);
  add(s.cable->line, 1.0, {Fault::line_earth}, true, "line " + s.cable->line.label);
  if (s.cable->neutral) add(*s.cable->neutral, 1.0, {Fault::line_neutral}, false, "neutral " + s.cable->neutral->label);
  const std::vector<double> shares = protective_shares(*s.network, *s.cable);
  for (std::size_t i = 0; i < shares.size(); ++i)
    add(s.cable->protective[i], shares[i], {Fault::line_earth}, true, "cpc " + s.cable->protective[i].label);
  return parts;
}

// Judges one conductor into `finding`.
void judge_part(const Situation& s, const Protector& by, const Part& part, Finding& finding) {
  const models::AdiabaticRow* k = models::adiabatic(s.network->rules, *part.strand, s.cable->insulation);
  if (k == nullptr) {
    lack(finding, "k for the " + part.name + " of " + s.address, "the rule set has no k for this conductor");
    return;
  }
  const double withstand = k->k * k->k * part.strand->area * part.strand->area;
  const double square = part.share * part.share;
  // Data that condemns the conductor somewhere is not outdone by a bound elsewhere.
  const Worst by_data = worst_over(s, by, part.interval, true);
  const Worst worst = by_data.heat * square > withstand ? by_data : worst_over(s, by, part.interval, false);
  const bool at_device = worst.current >= part.interval.high;
  finding.condition = word(at_device ? Condition::maximum : Condition::minimum);
  finding.fault = word(at_device ? part.interval.most : part.interval.least);
  finding.confidence = models::worse(models::worse(path_confidence(s, true), worst.confidence),
                                     models::worse(k->confidence, part.strand->confidence));
  const Heat at_low = heat_at(s, by, part.interval.low, part.interval);
  if (worst.current > 0) {
    const double heat = worst.heat * square;
    compare_upper(finding, heat, withstand, Quantity::let_through);
    const std::string share =
        part.share < 1 - 1e-12 ? fmt::format(" ({} of the current)", models::format_number(part.share, 3)) : "";
    finding.steps.push_back({"what the " + part.name + " stands", "k2 S2",
                             fmt::format("({} x {})2, {}", models::format_number(k->k / 1e6, 3),
                                         say(part.strand->area, Quantity::area), k->clause),
                             withstand, Quantity::let_through, s.at});
    finding.steps.push_back(
        {fmt::format("greatest heat, at {} between {} and {}", say(worst.current, Quantity::current),
                     say(part.interval.low, Quantity::current), say(part.interval.high, Quantity::current)),
         "I2 t", fmt::format("{}{}", worst.basis, share), heat, Quantity::let_through, by.at});
    finding.summary =
        fmt::format("{}{} may meet {} at {} ({}); it stands {}", part.name, share, say(heat, Quantity::let_through),
                    say(worst.current, Quantity::current), worst.basis, say(withstand, Quantity::let_through));
    if (finding.verdict == Verdict::fails && !worst.decisive &&
        least_heat(*by.device, worst.current) * square * std::pow(share_at(part.interval, worst.current), 2) <=
            withstand)
      lack(finding,
           fmt::format("{} of the device of {}",
                       by.device->let_through.basis == models::LetThrough::Basis::energy_class
                           ? "maker's let-through points"
                           : "let-through (energy class or points)",
                       by.address),
           "only a bound of the let-through is known and it is above what the conductor stands");
  }
  if (!(at_low.time <= kLongest) && finding.verdict != Verdict::fails)
    lack(finding, "a device of " + s.address + " that clears within 5 s",
         "the least current is cleared later than 5 s: adiabatic heating proves nothing");
}

std::vector<Finding> judge(const Situation& s) {
  Finding base = begin_finding(s, kName);
  base.unit = Quantity::let_through;
  base.clause = s.network->rules.heating_clause;
  if (lack_sequence(base, s)) return {base};
  const Protector* by = overcurrent_protector(s.path);
  if (by == nullptr) {
    lack(base, "device of " + s.address, "no device on the way breaks a short-circuit");
    return {base};
  }
  const std::vector<Part> parts = parts_of(s, base);
  Finding worst = base;
  worst.verdict = Verdict::meets;
  bool any = !base.needs.empty();
  if (any) worst.verdict = Verdict::undecided;
  std::vector<double> steps = step_currents(by->device->overcurrent.latest);
  for (const double step : step_currents(by->device->overcurrent.earliest)) steps.push_back(step);
  std::vector<double> watched;
  for (const Part& part : parts) {
    Finding finding = base;
    finding.needs.clear();
    finding.reason.clear();
    judge_part(s, *by, part, finding);
    for (const double step : steps) {
      watched.push_back(std::log(part.interval.low / step));
      watched.push_back(std::log(part.interval.high / step));
    }
    if (part.interval.earth) {
      for (const Protector& p : s.path)
        for (const double step : residual_steps(*p.device)) watched.push_back(std::log(part.interval.low / step));
    }
    weigh_confidence(finding);
    if (finding.verdict == Verdict::undecided) finding.margin = kNone;
    const bool worse = severity(finding.verdict) < severity(worst.verdict) ||
                       (severity(finding.verdict) == severity(worst.verdict) &&
                        (std::isnan(worst.margin) || finding.margin < worst.margin));
    if (!any || worse) worst = finding;
    any = true;
  }
  if (!any) lack(worst, "conductors of " + s.address, "no fault is possible on the conductors given");
  worst.breakpoints = watched;
  return {worst};
}

}  // namespace

Check heating_check() {
  return {{kName,
           "the heat a fault lets through against k2 S2 of every conductor, over all currents between the far end and "
           "the device; below 0.1 s by let-through data, never by t = 0.1 s alone unless the bound passes",
           "circuits, submains, tails",
           "the supply's maximum and minimum; cable, cpc, device; energy class or let-through"},
          applies,
          judge};
}

}  // namespace sunder::solver
