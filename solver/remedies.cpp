// SPDX-License-Identifier: Apache-2.0
#include "solver/remedies.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <functional>
#include <unordered_map>

#include "solver/retrial.h"

namespace sunder::solver {
namespace {

using models::Cable;
using models::CableConstruction;
using models::Network;
using models::Quantity;

// A run that remedies may change: the same members of a circuit or a submain.
struct Run {
  models::Sourced<double>* length = nullptr;
  Cable* cable = nullptr;
  bool submain = false;
  double shortest = 0;  ///< a ring reaches as far as its last spur [m]
};

std::optional<Run> find_run(Network& network, const std::string& address) {
  for (models::Submain& submain : network.submains)
    if (submain.name == address) return Run{&submain.length, &submain.cable, true, 0};
  for (models::Circuit& circuit : network.circuits)
    if (models::address(network, circuit) == address) {
      Run run{&circuit.length, &circuit.cable, false, 0};
      for (const models::Spur& spur : circuit.spurs) run.shortest = std::max(run.shortest, spur.at);
      return run;
    }
  return std::nullopt;
}

class Mender {
 public:
  explicit Mender(const Network& network, const std::vector<Finding>& findings) : retrial_(network) {
    for (const Finding& finding : findings) {
      const auto [place, added] = before_.try_emplace(finding_key(finding), std::min(2, severity(finding.verdict)));
      if (!added) place->second = std::min(place->second, std::min(2, severity(finding.verdict)));
    }
  }

  void mend(Finding& finding) {
    const std::optional<Run> run = find_run(retrial_.network(), finding.subject);
    if (!run) return;
    subject_ = finding.subject;
    key_ = finding_key(finding);
    run_ = *run;
    greatest_length(finding);
    larger(finding, /*protective=*/false);
    larger(finding, /*protective=*/true);
  }

 private:
  // Is the finding's own check met now?
  bool met() {
    if (run_.submain) retrial_.refresh();
    const std::optional<Finding> now = retrial_.one(subject_, key_);
    return now && now->verdict == Verdict::meets;
  }

  // All checks with the change in place. A circuit's cable and length touch nothing but itself.
  void recheck(Remedy& remedy) {
    if (run_.submain) retrial_.refresh();
    const std::vector<Finding> now = run_.submain ? judge_network(retrial_.network()) : retrial_.subject(subject_);
    remedy.holds = true;
    for (const Finding& finding : now) {
      const auto earlier = before_.find(finding_key(finding));
      const bool own = finding.subject == subject_;
      const bool worse = earlier != before_.end() && std::min(2, severity(finding.verdict)) < earlier->second;
      const bool unmet = own && finding.verdict != Verdict::meets && finding.verdict != Verdict::noted;
      if (!worse && !unmet) continue;
      remedy.holds = false;
      remedy.note += fmt::format("{}{} of {} {}", remedy.note.empty() ? "" : "; ", finding.check, finding.subject,
                                 finding.verdict == Verdict::fails ? "fails" : "is undecided");
    }
  }

  void greatest_length(Finding& finding) {
    const double given = run_.length->value;
    auto at = [&](double length) {
      run_.length->value = length;
      return met();
    };
    // Downwards from the given length to a metre, below which no run is laid; the check need not be
    // monotone.
    const double shortest = std::max(1.0, run_.shortest);
    constexpr int kSamples = 48;
    double bad = given;
    double good = 0;
    for (int i = 1; i <= kSamples && given > shortest; ++i) {
      const double length = given * std::pow(shortest / given, static_cast<double>(i) / kSamples);
      if (at(length)) {
        good = length;
        break;
      }
      bad = length;
    }
    if (good > 0) {
      while (bad - good > 1e-7 * bad) {
        const double middle = 0.5 * (good + bad);
        (at(middle) ? good : bad) = middle;
      }
      // Down to the decimetre, as one would write it.
      const double rounded = std::floor(good * 10 + 1e-6) / 10;
      if (rounded >= shortest && at(rounded)) {
        Remedy remedy;
        remedy.key = subject_ + ".length";
        remedy.value = rounded;
        remedy.unit = Quantity::length;
        remedy.what = fmt::format("shorten {} to {}", subject_, models::format_quantity(rounded, Quantity::length, 5));
        recheck(remedy);
        finding.remedies.push_back(std::move(remedy));
      }
    }
    run_.length->value = given;
    if (run_.submain) retrial_.refresh();
  }

  [[nodiscard]] const CableConstruction* construction(const std::string& name) {
    for (const CableConstruction& c : retrial_.network().constructions)
      if (c.name == name) return &c;
    return nullptr;
  }

  // The next size of the line conductors, or of a protective conductor chosen by itself.
  void larger(Finding& finding, bool protective) {
    const Cable given = *run_.cable;
    if (protective && given.cpc.core_area <= 0 && given.cpc.separate <= 0) return;
    const CableConstruction* of = construction(given.construction);
    const CableConstruction* singles = construction("singles-pvc-cu");
    if (of == nullptr || singles == nullptr) return;
    const CableConstruction& sizes = protective && given.cpc.separate > 0 ? *singles : *of;
    const double from = !protective ? given.area : given.cpc.separate > 0 ? given.cpc.separate : given.cpc.core_area;
    for (const models::CableSize& size : sizes.sizes) {
      if (size.area <= from * (1 + 1e-9)) continue;
      models::CpcChoice cpc = given.cpc;
      if (protective) (cpc.separate > 0 ? cpc.separate : cpc.core_area) = size.area;
      Cable tried;
      if (models::resolve_cable(*of, protective ? given.area : size.area, cpc, given.n_loaded, given.with_neutral,
                                *singles, tried))
        continue;
      tried.at = given.at;
      *run_.cable = tried;
      if (!met()) continue;
      Remedy remedy;
      remedy.key = subject_ + (protective ? ".cpc" : ".cable");
      remedy.value = size.area;
      remedy.unit = Quantity::area;
      remedy.what = protective ? fmt::format("cpc {}", models::format_quantity(size.area, Quantity::area))
                               : fmt::format("use {}", tried.text);
      recheck(remedy);
      finding.remedies.push_back(std::move(remedy));
      break;
    }
    *run_.cable = given;
    if (run_.submain) retrial_.refresh();
  }

  Retrial retrial_;
  std::unordered_map<std::string, int> before_;
  std::string subject_, key_;
  Run run_;
};

}  // namespace

void add_remedies(const Network& network, std::vector<Finding>& findings) {
  const bool any = std::any_of(findings.begin(), findings.end(),
                               [](const Finding& finding) { return finding.verdict == Verdict::fails; });
  if (!any) return;
  Mender mender(network, findings);
  for (Finding& finding : findings)
    if (finding.verdict == Verdict::fails && finding.upstream.empty()) mender.mend(finding);
}

}  // namespace sunder::solver
