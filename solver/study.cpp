// SPDX-License-Identifier: Apache-2.0
#include "solver/study.h"

#include <algorithm>
#include <cmath>
#include <tuple>
#include <unordered_map>

#include "solver/checks/check.h"
#include "solver/judge.h"
#include "solver/remedies.h"

namespace sunder::solver {
namespace {

using models::Network;

double margin_or_last(const Finding& finding) {
  return std::isnan(finding.margin) ? std::numeric_limits<double>::infinity() : finding.margin;
}

}  // namespace

bool governs(const Finding& a, const Finding& b) {
  if (severity(a.verdict) != severity(b.verdict)) return severity(a.verdict) < severity(b.verdict);
  return margin_or_last(a) < margin_or_last(b);
}

std::string finding_key(const Finding& finding) {
  return finding.check + '\n' + finding.subject + '\n' + finding.upstream;
}

std::vector<Finding> judge_network(const Network& network, bool every_state,
                                   const std::function<void(std::size_t, std::size_t)>& progress) {
  std::vector<Finding> all;
  std::unordered_map<std::string, std::size_t> seen;
  for (std::size_t state = 0; state < network.states.size(); ++state) {
    const StateSolution solution = solve_state(network, static_cast<int>(state));
    const std::vector<Subject> list = subjects(network, solution);
    // Findings are large: growing the list again and again would cost more than judging.
    if (every_state || all.empty()) all.reserve(all.size() + list.size() * checks().size());
    for (std::size_t i = 0; i < list.size(); ++i) {
      if (progress) progress(state * list.size() + i, network.states.size() * list.size());
      const Situation s = situation(network, solution, list[i]);
      for (const Check& check : checks()) {
        if (!check.applies(s)) continue;
        for (Finding& finding : check.judge(s)) {
          if (every_state) {
            all.push_back(std::move(finding));
            continue;
          }
          const auto [place, added] = seen.try_emplace(finding_key(finding), all.size());
          if (added) {
            all.push_back(std::move(finding));
          } else if (governs(finding, all[place->second])) {
            all[place->second] = std::move(finding);
          }
        }
      }
    }
  }
  return all;
}

std::vector<Finding> run_checks(const Network& network, const CheckOptions& options) {
  std::vector<Finding> findings = judge_network(network, options.every_state, options.progress);
  auto order = [](const Finding& a, const Finding& b) {
    static constexpr int kOrder[] = {0, 1, 3, 2};  // fails, undecided, noted before meets
    const int ra = kOrder[severity(a.verdict)];
    const int rb = kOrder[severity(b.verdict)];
    if (ra != rb) return ra < rb;
    return margin_or_last(a) < margin_or_last(b);
  };
  std::vector<std::size_t> places(findings.size());
  for (std::size_t i = 0; i < places.size(); ++i) places[i] = i;
  std::stable_sort(places.begin(), places.end(),
                   [&](std::size_t a, std::size_t b) { return order(findings[a], findings[b]); });
  std::vector<Finding> sorted;
  sorted.reserve(findings.size());
  for (const std::size_t place : places) sorted.push_back(std::move(findings[place]));
  findings = std::move(sorted);
  if (options.remedies) add_remedies(network, findings);
  return findings;
}

std::vector<std::string> addresses(const Network& network) {
  std::vector<std::string> all;
  for (const models::Source& source : network.sources) all.push_back(source.name);
  for (const models::Board& board : network.boards) all.push_back(board.name);
  for (const models::Submain& submain : network.submains) all.push_back(submain.name);
  for (const models::Circuit& circuit : network.circuits) all.push_back(models::address(network, circuit));
  for (const models::Electrode& electrode : network.electrodes) all.push_back(electrode.name);
  return all;
}

}  // namespace sunder::solver
