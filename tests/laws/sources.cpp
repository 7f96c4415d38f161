// SPDX-License-Identifier: Apache-2.0
// Laws of what a source declares.
#include <cmath>

#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::close;
using laws::Rows;
using laws::Site;

TEST_CASE(
    "A current declared is the current found at the supply's board, an impedance declared is "
    "reproduced in ohms") {
  laws::check_law([] {
    laws::Limits limits;
    limits.supplies_only = true;
    limits.tn_only = true;
    Site site = *laws::sites(limits);
    const Rows ohms = laws::rows_of(laws::network_of(site));
    RC_ASSERT(close(ohms.at("maximum B0 three-phase").loop_ohms, site.three_phase_ohms));
    RC_ASSERT(close(ohms.at("minimum B0 line-earth").loop_ohms, site.Ze));
    RC_ASSERT(close(ohms.at("minimum B0 line-neutral").loop_ohms, site.Zn));
    // The same supply, its greatest current declared in amperes.
    const double amps = ohms.at("maximum B0 three-phase").current;
    std::string text = laws::netlist(site);
    const std::string key = "maximum = { three_phase = \"";
    const std::size_t at = text.find(key) + key.size();
    std::ostringstream written;
    written.precision(15);
    written << amps << " A";
    text.replace(at, text.find('"', at) - at, written.str());
    const Rows in_amps = laws::rows_of(laws::network_of(text));
    RC_ASSERT(close(in_amps.at("maximum B0 three-phase").current, amps));
    for (const auto& [name, row] : in_amps)
      if (row.known && row.fault == solver::Fault::three_phase) RC_ASSERT(close(row.current, ohms.at(name).current));
  });
}

TEST_CASE(
    "An open angle of the supply gives no less than any declared one in the maximum and no more in "
    "the minimum") {
  laws::check_law([] {
    laws::Limits limits;
    limits.supplies_only = true;
    Site site = *laws::sites(limits);
    site.power_factor = -1;
    const Rows open = laws::rows_of(laws::network_of(site));
    // The range ends at 0.9 for the least loop of these sites: every angle tried lies inside it.
    site.power_factor = 0.9 + *rc::gen::inRange(0, 101) * 0.001;
    for (const auto& [key, row] : laws::rows_of(laws::network_of(site))) {
      if (!row.known) continue;
      if (row.condition == solver::Condition::maximum) RC_ASSERT(row.current <= open.at(key).current * (1 + 1e-9));
      if (row.condition == solver::Condition::minimum) RC_ASSERT(row.current >= open.at(key).current * (1 - 1e-9));
    }
  });
}

TEST_CASE("States that connect the same source give the results of one state") {
  laws::check_law([] {
    Site site = *laws::sites();
    const models::Network one = laws::network_of(site);
    site.extra = "[state.day]\nsources = [\"grid\"]\n[state.night]\nsources = [\"grid\"]\n";
    const models::Network two = laws::network_of(site);
    const Rows single = laws::rows_of(one);
    for (const char* state : {"day", "night"}) {
      const Rows rows = laws::rows_of(two, state);
      RC_ASSERT(rows.size() == single.size());
      for (const auto& [key, row] : rows) RC_ASSERT(!row.known || row.current == single.at(key).current);
    }
    solver::CheckOptions options;
    options.remedies = false;
    const auto found = solver::run_checks(one, options);
    const auto again = solver::run_checks(two, options);
    RC_ASSERT(found.size() == again.size());
    for (std::size_t i = 0; i < found.size(); ++i) {
      RC_ASSERT(found[i].check == again[i].check);
      RC_ASSERT(found[i].subject == again[i].subject);
      RC_ASSERT(found[i].verdict == again[i].verdict);
      RC_ASSERT(std::isnan(found[i].value) || found[i].value == again[i].value);
    }
  });
}

}  // namespace
