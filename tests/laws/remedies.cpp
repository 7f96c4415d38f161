// SPDX-License-Identifier: Apache-2.0
// A remedy does what it promises: written into the netlist, its check is met; if it is said to
// hold, all checks of the subject are, and none elsewhere has become worse.
#include <cmath>
#include <map>
#include <string>

#include "models/units.h"
#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::Site;

int rank(solver::Verdict verdict) {
  return verdict == solver::Verdict::fails ? 0 : verdict == solver::Verdict::undecided ? 1 : 2;
}

std::string key(const solver::Finding& finding) {
  return finding.check + '\n' + finding.subject + '\n' + finding.upstream;
}

using Ranks = std::map<std::string, int>;

Ranks ranks(const Site& site) {
  solver::CheckOptions options;
  options.remedies = false;
  Ranks all;
  for (const solver::Finding& finding : solver::run_checks(laws::network_of(site), options))
    all[key(finding)] = rank(finding.verdict);
  return all;
}

laws::RunText& run_of(Site& site, const std::string& subject) {
  for (laws::SubmainText& submain : site.submains)
    if (submain.name == subject) return submain.run;
  return site.circuit(subject).run;
}

// As a user would type it.
void write(Site& site, const std::string& subject, const solver::Remedy& remedy) {
  laws::RunText& run = run_of(site, subject);
  const std::string kind = remedy.key.substr(remedy.key.rfind('.') + 1);
  if (kind == "length") {
    RC_ASSERT(remedy.value < run.metres);
    run.metres = remedy.value;
  } else if (kind == "cable") {
    RC_ASSERT(remedy.what.substr(0, 4) == "use ");
    run.cable = remedy.what.substr(4);
  } else {
    RC_ASSERT(kind == "cpc");
    const std::string size = models::format_number(remedy.value * 1e6, 6);
    if (run.cpc.find("mm2") != std::string::npos) {
      const std::size_t plus = run.cpc.find('+');
      run.cpc = (plus == std::string::npos ? "" : run.cpc.substr(0, plus) + "+ ") + size + " mm2";
    } else {
      const std::size_t stroke = run.cable.find('/');
      RC_ASSERT(stroke != std::string::npos);
      run.cable = run.cable.substr(0, stroke) + "/" + size + " mm2";
    }
  }
}

TEST_CASE(
    "Every remedy offered mends its check, and one that holds leaves nothing of its subject "
    "unmet") {
  int offered = 0;
  int holding = 0;
  laws::check_law([&] {
    laws::Limits limits;
    limits.sensible = *rc::gen::inRange(0, 3) > 0;
    limits.supplies_only = limits.single_cables = limits.sensible;
    const Site site = *laws::sites(limits);
    const auto findings = solver::run_checks(laws::network_of(site), {});
    const Ranks before = ranks(site);
    for (const solver::Finding& finding : findings) {
      if (finding.verdict != solver::Verdict::fails) RC_ASSERT(finding.remedies.empty());
      for (const solver::Remedy& remedy : finding.remedies) {
        RC_LOG() << finding.check << " of " << finding.subject << ": " << remedy.what
                 << (remedy.holds ? " (holds)" : "") << '\n';
        ++offered;
        Site mended = site;
        write(mended, finding.subject, remedy);
        const Ranks after = ranks(mended);
        RC_ASSERT(after.at(key(finding)) == 2);
        bool unmet = false;
        bool worse = false;
        for (const auto& [name, now] : after) {
          const std::string of = name.substr(name.find('\n') + 1, name.rfind('\n') - name.find('\n') - 1);
          unmet = unmet || (of == finding.subject && now < 2);
          const auto earlier = before.find(name);
          worse = worse || (earlier != before.end() && now < earlier->second);
        }
        RC_ASSERT(remedy.holds == (!unmet && !worse));
        RC_ASSERT(remedy.holds == remedy.note.empty());
        holding += remedy.holds ? 1 : 0;
      }
    }
  });
  // The random sites are bad enough for the law to have been tried.
  CHECK(offered > 50);
  CHECK(holding > 10);
}

}  // namespace
