// SPDX-License-Identifier: Apache-2.0
// Laws of findings: what a verdict says agrees with its numbers and with the other checks.
#include <cmath>
#include <map>
#include <string>
#include <vector>

#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using solver::Verdict;

std::vector<solver::Finding> findings_of(const laws::Site& site) {
  solver::CheckOptions options;
  options.remedies = false;
  return solver::run_checks(laws::network_of(site), options);
}

TEST_CASE(
    "What meets has no negative margin, what fails none above zero, what is undecided says what it "
    "needs") {
  laws::check_law([] {
    for (const solver::Finding& finding : findings_of(*laws::sites())) {
      RC_LOG() << finding.check << " of " << finding.subject << ": " << word(finding.verdict) << ", " << finding.margin
               << '\n';
      if (finding.verdict == Verdict::meets) RC_ASSERT(!(finding.margin < -1e-12));
      if (finding.verdict == Verdict::fails) RC_ASSERT(!(finding.margin > 1e-12));
      if (finding.verdict == Verdict::undecided) RC_ASSERT(!finding.needs.empty() || !finding.reason.empty());
      if (std::isnan(finding.value) || std::isnan(finding.limit))
        RC_ASSERT(!finding.reason.empty() || finding.verdict == Verdict::noted || finding.verdict == Verdict::meets);
    }
  });
}

TEST_CASE(
    "Where every conductor stands what is let through, no short-circuit within 5 s is cleared too "
    "late") {
  laws::check_law([] {
    laws::Limits limits;
    limits.single_cables = true;
    std::map<std::string, Verdict> heating;
    const auto findings = findings_of(*laws::sites(limits));
    for (const solver::Finding& finding : findings)
      if (finding.check == "conductor heating") heating.emplace(finding.subject, finding.verdict);
    for (const solver::Finding& finding : findings) {
      if (finding.check != "fault clearance" || heating.at(finding.subject) != Verdict::meets) continue;
      RC_LOG() << finding.subject << ": " << finding.summary << '\n';
      const bool in_time = !std::isnan(finding.value) && finding.value <= 5;
      if (in_time) RC_ASSERT(finding.verdict == Verdict::meets);
    }
  });
}

}  // namespace
