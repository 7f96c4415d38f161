// SPDX-License-Identifier: Apache-2.0
#include "solver/selectivity.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <vector>

#include "solver/clearing.h"

namespace sunder::solver {
namespace {

using models::Device;
using models::Quantity;

bool by_curves(const Device& down, const Device& up, double current) {
  const double latest = down.overcurrent.latest.time_at(current);
  // Below its first assured point the upstream device does not operate at all.
  const double earliest = up.overcurrent.earliest.empty() ? 0.0 : up.overcurrent.earliest.time_at(current);
  return std::isfinite(latest) && latest <= earliest;
}

bool by_energy(const Device& down, const Device& up, double current, double kappa) {
  if (up.let_through.pre_arcing_min <= 0) return false;
  return greatest_heat(down, current, kappa).total <= up.let_through.pre_arcing_min;
}

// Currents at which either proof may begin or end; between them both are monotone.
std::vector<double> samples(const Device& down, const Device& up, double from, double to) {
  std::vector<double> all{from, to};
  constexpr double kHair = 1e-10;
  auto add = [&](double current) {
    for (const double near : {current * (1 - kHair), current, current * (1 + kHair)})
      if (near > from && near < to) all.push_back(near);
  };
  for (const models::CurvePoint& p : down.overcurrent.latest.points) add(p.current);
  for (const models::CurvePoint& p : up.overcurrent.earliest.points) add(p.current);
  for (const models::CurvePoint& p : down.let_through.points) add(p.current);
  add(down.let_through.valid_from);
  if (down.Icn > 0) add(down.Icn);
  std::sort(all.begin(), all.end());
  return all;
}

// The pair the standard builds selective: fuses of one family whose gates at 0.1 s do not overlap and
// whose I2t limits below 0.01 s do not either (IEC 60269-1, -2: gG at 1.6 : 1). Its gates at longer
// times are too far apart to show what the standard states.
bool built_selective(const Device& down, const Device& up) {
  if (down.kind != models::DeviceKind::fuse || down.family != up.family || !down.by_gates || !up.by_gates) return false;
  if (down.overcurrent.latest.empty() || up.overcurrent.earliest.empty()) return false;
  constexpr double kGate = 0.1;  // [s]
  const double down_gate = models::current_for(down.overcurrent.latest, kGate);
  const bool gates = up.overcurrent.earliest.time_at(down_gate) >= kGate * (1 - 1e-9);
  const bool limits = up.let_through.pre_arcing_min > 0 && down.let_through.total <= up.let_through.pre_arcing_min;
  return gates && limits;
}

}  // namespace

const char* word(Selectivity selectivity) noexcept {
  switch (selectivity) {
    case Selectivity::total:
      return "total";
    case Selectivity::partial:
      return "partial";
    case Selectivity::none:
      return "none";
    case Selectivity::undecided:
      break;
  }
  return "undecided";
}

PairVerdict overcurrent_selectivity(const Device& down, const Device& up, double available, double kappa) {
  PairVerdict verdict;
  const double from = down.overcurrent.latest.points.front().current;
  const bool curves = !up.overcurrent.earliest.empty();
  if (!curves && up.let_through.pre_arcing_min <= 0) {
    verdict.basis = "no earliest curve and no pre-arcing I2t of " + up.text;
    verdict.needs = "earliest operating points or pre-arcing I2t of " + up.text;
    return verdict;
  }
  auto holds = [&](double current) { return by_curves(down, up, current) || by_energy(down, up, current, kappa); };
  if (built_selective(down, up)) {
    verdict.selectivity = Selectivity::total;
    verdict.limit = available;
    verdict.basis = "gates at 0.1 s and I2t limits of one fuse family (IEC 60269, 1.6 : 1)";
    return verdict;
  }
  if (available <= from) {
    verdict.selectivity = Selectivity::undecided;
    verdict.basis = "no current that can flow is sure to operate " + down.text;
    verdict.needs = "a greater fault current or a smaller device";
    return verdict;
  }
  double good = 0;
  double bad = models::kNever;
  bool energy_used = false;
  for (const double current : samples(down, up, from, available)) {
    if (holds(current)) {
      energy_used = energy_used || !by_curves(down, up, current);
      good = current;
      continue;
    }
    bad = current;
    break;
  }
  if (std::isinf(bad)) {
    verdict.selectivity = Selectivity::total;
    verdict.limit = available;
    verdict.basis = energy_used ? "curves, above them let-through against pre-arcing I2t" : "curves";
    return verdict;
  }
  if (good == 0) {
    verdict.selectivity = Selectivity::none;
    verdict.basis = "curves meet where " + down.text + " first operates";
    return verdict;
  }
  for (int i = 0; i < 200 && bad - good > 1e-12 * good; ++i) {
    const double middle = std::sqrt(good * bad);
    (holds(middle) ? good : bad) = middle;
  }
  verdict.selectivity = Selectivity::partial;
  verdict.limit = good;
  verdict.basis = up.kind == models::DeviceKind::fuse ? "curves and pre-arcing I2t; above the limit not proven"
                                                      : "curves; above the limit they prove nothing";
  verdict.needs = "the maker's selectivity limit of " + down.text + " below " + up.text;
  return verdict;
}

PairVerdict residual_selectivity(const Device& down, const Device& up, double available) {
  PairVerdict verdict;
  constexpr double kRatio = 3.0;  // IEC 60364-5-53, 535.3: at least 3 : 1
  if (down.IdN <= 0) {
    verdict.selectivity = Selectivity::none;
    verdict.limit = up.IdN / 2;
    verdict.basis = fmt::format("line-earth faults: {} has no residual element below that of {}", down.text, up.text);
    return verdict;
  }
  const bool ratio = up.IdN >= kRatio * down.IdN * (1 - 1e-12);
  const bool delayed = up.selective_residual && !down.selective_residual;
  const bool types = up.residual_type >= down.residual_type;  // AC < A < F < B must not fall going upstream
  if (ratio && delayed && types) {
    verdict.selectivity = Selectivity::total;
    verdict.limit = available;
    verdict.basis = "residual: ratio of at least 3 : 1, upstream delayed, type no lower";
    return verdict;
  }
  verdict.selectivity = Selectivity::none;
  verdict.limit = up.IdN / 2;
  if (!types) {
    verdict.basis =
        "residual: the type upstream (AC < A < F < B) is below the one downstream, whose currents may blind it";
    return verdict;
  }
  verdict.basis = !delayed ? "residual: the upstream device is not delayed above the downstream one"
                           : "residual: rated currents are less than 3 : 1";
  return verdict;
}

}  // namespace sunder::solver
