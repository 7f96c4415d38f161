// SPDX-License-Identifier: Apache-2.0
// A flip is where a sweep says it is, and turns what it says it turns.
#include <cmath>
#include <map>
#include <string>
#include <variant>

#include "models/units.h"
#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::Site;

solver::Verdict verdict_of(const Site& site, const solver::Flip& flip) {
  solver::CheckOptions options;
  options.remedies = false;
  for (const solver::Finding& finding : solver::run_checks(laws::network_of(site), options))
    if (finding.check == flip.check && finding.subject == flip.subject && finding.upstream.empty())
      return finding.verdict;
  RC_FAIL("no finding on " + flip.check + " of " + flip.subject);
  return solver::Verdict::noted;
}

std::string metres(double value) { return models::format_number(value, 12) + " m"; }

TEST_CASE("On either side of a flip the netlist checks as the sweep says") {
  int flips = 0;
  laws::check_law([&] {
    Site site = *laws::sites();
    const auto runs = static_cast<int>(site.submains.size() + site.circuits.size());
    const auto chosen = static_cast<std::size_t>(*rc::gen::inRange(0, runs));
    const bool submain = chosen < site.submains.size();
    const std::size_t circuit = submain ? 0 : chosen - site.submains.size();
    if (!submain) site.circuits[circuit].spurs.clear();
    laws::RunText& run = submain ? site.submains[chosen].run : site.circuits[circuit].run;
    const std::string address =
        submain ? site.submains[chosen].name : site.circuits[circuit].board + "/" + site.circuits[circuit].name;
    solver::VaryRequest request;
    request.key = address + ".length";
    request.from = metres(0.5);
    request.to = metres(50 + *rc::gen::inRange(0, 400));
    request.steps = *rc::gen::inRange(2, 13);
    const auto result = solver::vary(laws::network_of(site), request, {});
    RC_ASSERT(std::holds_alternative<solver::Sweep>(result));
    for (const solver::Flip& flip : std::get<solver::Sweep>(result).flips) {
      if (flip.check == "selectivity") continue;  // pairs have no name of their own in a flip
      RC_LOG() << flip.check << " of " << flip.subject << " at " << flip.at << " m\n";
      ++flips;
      constexpr double kAside = 2e-6;
      run.metres = flip.at * (1 - kAside);
      const solver::Verdict before = verdict_of(site, flip);
      run.metres = flip.at * (1 + kAside);
      const solver::Verdict after = verdict_of(site, flip);
      RC_ASSERT(before == flip.before);
      RC_ASSERT(after == flip.after);
    }
  });
  CHECK(flips > 50);
}

}  // namespace
