// SPDX-License-Identifier: Apache-2.0
#include "models/curves.h"

#include <algorithm>
#include <cmath>

namespace sunder::models {
namespace {

bool by_current(const CurvePoint& a, const CurvePoint& b) noexcept { return a.current < b.current; }

std::vector<CurvePoint> ascending(std::vector<CurvePoint> points) {
  std::stable_sort(points.begin(), points.end(), by_current);
  return points;
}

/// On the straight line on log-log paper through a and b.
double power_law_time(const CurvePoint& a, const CurvePoint& b, double current) noexcept {
  if (a.time == b.time) return a.time;
  const double slope = std::log(b.time / a.time) / std::log(b.current / a.current);
  return a.time * std::pow(current / a.current, slope);
}

}  // namespace

double Curve::time_at(double current) const noexcept {
  const CurvePoint here{current, 0};
  const auto first = std::lower_bound(points.begin(), points.end(), here, by_current);
  const auto after = std::upper_bound(first, points.end(), here, by_current);
  if (first != after) return at_step == AtStep::upper ? first->time : std::prev(after)->time;
  if (first == points.begin()) return kNever;  // also when there are no points
  if (first == points.end()) return points.back().time;
  return power_law_time(*std::prev(first), *first, current);
}

double current_for(const Curve& curve, double time) noexcept {
  const auto reached =
      std::find_if(curve.points.begin(), curve.points.end(), [time](const CurvePoint& p) { return p.time <= time; });
  if (reached == curve.points.end()) return kNever;
  if (reached == curve.points.begin() || reached->time == time) return reached->current;
  const CurvePoint& before = *std::prev(reached);
  if (before.current == reached->current) return reached->current;
  const double slope = std::log(reached->current / before.current) / std::log(reached->time / before.time);
  return before.current * std::pow(time / before.time, slope);
}

Curve latest_staircase(const std::vector<CurvePoint>& guarantees) {
  Curve curve;
  curve.at_step = AtStep::lower;
  for (const CurvePoint& gate : ascending(guarantees)) {
    if (!curve.points.empty()) {
      const double held = curve.points.back().time;
      if (gate.time >= held) continue;  // a smaller current already guarantees as much
      curve.points.push_back({gate.current, held});
    }
    curve.points.push_back(gate);
  }
  return curve;
}

Curve earliest_staircase(const std::vector<CurvePoint>& assurances, double floor) {
  Curve curve;
  curve.at_step = AtStep::upper;
  std::vector<CurvePoint> gates = ascending(assurances);
  // What a greater current cannot do earlier, a smaller one cannot either.
  for (std::size_t i = gates.size(); i-- > 1;) {
    gates[i - 1].time = std::max(gates[i - 1].time, gates[i].time);
  }
  const double lowest = std::max(floor, kImmediately);
  for (std::size_t i = 0; i < gates.size(); ++i) {
    const double next = i + 1 < gates.size() ? gates[i + 1].time : std::min(lowest, gates[i].time);
    curve.points.push_back(gates[i]);
    curve.points.push_back({gates[i].current, next});
  }
  return curve;
}

}  // namespace sunder::models
