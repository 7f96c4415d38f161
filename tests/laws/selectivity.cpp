// SPDX-License-Identifier: Apache-2.0
// The limit of selectivity lies where its two conditions change.
#include "solver/selectivity.h"

#include <cmath>

#include "solver/clearing.h"
#include "tests/laws/check_law.h"
#include "tests/laws/library_devices.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using solver::Selectivity;

// What selectivity at one current means: the downstream device is sure to be done before the
// upstream one may begin, or lets through less than may melt it.
bool selective_at(const models::Device& down, const models::Device& up, double current, double kappa) {
  const double latest = down.overcurrent.latest.time_at(current);
  const double earliest = up.overcurrent.earliest.time_at(current);
  if (std::isfinite(latest) && !up.overcurrent.earliest.empty() && latest <= earliest) return true;
  return up.let_through.pre_arcing_min > 0 &&
         solver::greatest_heat(down, current, kappa).total <= up.let_through.pre_arcing_min;
}

// Fuses of one family at 1.6 : 1 are selective because the standard makes them so, although its
// gates at long times are too far apart to show it.
bool built_selective(const models::Device& down, const models::Device& up) {
  return down.kind == models::DeviceKind::fuse && up.kind == down.kind && up.family == down.family && down.by_gates &&
         up.by_gates && up.In >= 1.55 * down.In;
}

TEST_CASE("The limit of selectivity is where both of its conditions have ceased to hold") {
  laws::check_law([] {
    const models::Device& down = *rc::gen::elementOf(laws::library_devices());
    const models::Device& up = *rc::gen::elementOf(laws::library_devices());
    if (down.overcurrent.empty() || up.overcurrent.empty()) return;
    RC_LOG() << down.text << " below " << up.text << '\n';
    const double kappa = 1.02 + *rc::gen::inRange(0, 900) * 0.001;
    const double available = down.In * std::pow(10.0, *rc::gen::inRange(500, 2700) * 0.001);
    const solver::PairVerdict pair = solver::overcurrent_selectivity(down, up, available, kappa);
    const double first = down.overcurrent.latest.points.front().current;
    const auto sampled = [&](double from, double to) {
      return from * std::pow(to / from, *rc::gen::inRange(0, 1001) * 0.001);
    };
    switch (pair.selectivity) {
      case Selectivity::total:
        RC_ASSERT(pair.limit == available);
        if (built_selective(down, up)) break;
        RC_ASSERT(selective_at(down, up, sampled(first, available), kappa));
        break;
      case Selectivity::partial:
        RC_ASSERT(pair.limit > first * (1 - 1e-9));
        RC_ASSERT(pair.limit < available);
        RC_ASSERT(selective_at(down, up, std::max(first, pair.limit * (1 - 1e-9)), kappa));
        RC_ASSERT(!selective_at(down, up, pair.limit * (1 + 1e-6), kappa));
        RC_ASSERT(selective_at(down, up, sampled(first, pair.limit * (1 - 1e-9)), kappa));
        break;
      case Selectivity::none:
        RC_ASSERT(!selective_at(down, up, first, kappa));
        break;
      case Selectivity::undecided:
        RC_ASSERT(available <= first || (up.overcurrent.earliest.empty() && up.let_through.pre_arcing_min <= 0));
        break;
    }
  });
}

TEST_CASE("More available current never improves selectivity") {
  laws::check_law([] {
    const models::Device& down = *rc::gen::elementOf(laws::library_devices());
    const models::Device& up = *rc::gen::elementOf(laws::library_devices());
    if (down.overcurrent.empty() || up.overcurrent.empty()) return;
    RC_LOG() << down.text << " below " << up.text << '\n';
    const double available = down.In * std::pow(10.0, *rc::gen::inRange(1000, 2700) * 0.001);
    const auto near = solver::overcurrent_selectivity(down, up, available * 0.5, 1.3);
    const auto far = solver::overcurrent_selectivity(down, up, available, 1.3);
    if (built_selective(down, up)) return;
    if (far.selectivity == Selectivity::total && near.selectivity != Selectivity::undecided)
      RC_ASSERT(near.selectivity == Selectivity::total);
    if (near.selectivity == Selectivity::partial) {
      RC_ASSERT(far.selectivity == Selectivity::partial);
      RC_ASSERT(laws::close(near.limit, far.limit, 1e-9));
    }
  });
}

}  // namespace
