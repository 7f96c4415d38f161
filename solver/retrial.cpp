// SPDX-License-Identifier: Apache-2.0
#include "solver/retrial.h"

#include <algorithm>

#include "solver/checks/check.h"

namespace sunder::solver {

Retrial::Retrial(const models::Network& network) : network_(network) {
  auto put = [&](const std::string& address, SubjectKind kind, std::size_t index) {
    places_.emplace(address, Subject{kind, static_cast<int>(index)});
  };
  for (std::size_t i = 0; i < network_.circuits.size(); ++i)
    put(models::address(network_, network_.circuits[i]), SubjectKind::circuit, i);
  for (std::size_t i = 0; i < network_.submains.size(); ++i) put(network_.submains[i].name, SubjectKind::submain, i);
  for (std::size_t i = 0; i < network_.sources.size(); ++i)
    if (has_origin(network_.sources[i])) put(network_.sources[i].name, SubjectKind::tails, i);
  for (std::size_t i = 0; i < network_.boards.size(); ++i) {
    put(network_.boards[i].name, SubjectKind::board, i);
    for (const models::Group& group : network_.boards[i].groups)
      put(network_.boards[i].name + "." + group.name, SubjectKind::board, i);
  }
  refresh();
}

void Retrial::refresh() {
  solutions_.clear();
  for (std::size_t state = 0; state < network_.states.size(); ++state)
    solutions_.push_back(solve_state(network_, static_cast<int>(state)));
}

std::vector<Finding> Retrial::findings(const std::string& address, const std::string* check) const {
  std::vector<Finding> governing;
  const auto [first, last] = places_.equal_range(address);
  for (auto place = first; place != last; ++place) {
    for (const StateSolution& solution : solutions_) {
      if (!is_live(network_, solution, place->second)) continue;
      const Situation s = situation(network_, solution, place->second);
      for (const Check& candidate : checks()) {
        if (check != nullptr && candidate.info.name != *check) continue;
        if (!candidate.applies(s)) continue;
        for (Finding& finding : candidate.judge(s)) {
          if (finding.subject != address) continue;
          const std::string key = finding_key(finding);
          auto same = std::find_if(governing.begin(), governing.end(),
                                   [&](const Finding& other) { return finding_key(other) == key; });
          if (same == governing.end()) {
            governing.push_back(std::move(finding));
          } else if (governs(finding, *same)) {
            *same = std::move(finding);
          }
        }
      }
    }
  }
  return governing;
}

std::vector<Finding> Retrial::subject(const std::string& address) const { return findings(address, nullptr); }

std::optional<Finding> Retrial::one(const std::string& subject, const std::string& key) const {
  const std::string check = key.substr(0, key.find('\n'));
  for (Finding& finding : findings(subject, &check))
    if (finding_key(finding) == key) return finding;
  return std::nullopt;
}

}  // namespace sunder::solver
