// SPDX-License-Identifier: Apache-2.0
// Each device with those above it up to the next that breaks overcurrents.
#include "solver/selectivity.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "solver/checks/check.h"

namespace sunder::solver {
namespace {

using models::Quantity;

constexpr const char* kName = "selectivity";

bool trips(const models::Device& device) { return !device.overcurrent.empty() || !device.residual.empty(); }

bool applies(const Situation& s) {
  if (s.kind == SubjectKind::tails) return false;
  if (s.path.empty() || !trips(*s.path.back().device)) return false;
  return s.path.back().address == s.address;
}

std::string required_of(const Situation& s) {
  if (s.circuit != nullptr) return s.circuit->selective;
  return s.submain != nullptr ? s.submain->selective : "";
}

void demand(Finding& finding, const std::string& required, double limit, Selectivity found) {
  double wanted = finding.available_A;
  if (required != "total") {
    const auto parsed = models::parse_quantity(required, Quantity::current);
    if (const double* amps = std::get_if<double>(&parsed)) wanted = std::min(*amps, wanted);
  }
  finding.value = limit;
  finding.limit = wanted;
  finding.margin = limit / wanted - 1.0;
  if (found == Selectivity::none) {
    finding.verdict = Verdict::fails;
    finding.reason = "the pair is not selective";
  } else if (found == Selectivity::total || limit >= wanted) {
    finding.verdict = Verdict::meets;
  } else {
    finding.verdict = Verdict::undecided;
    finding.reason = "selectivity is proven only up to the limit current";
  }
}

Finding judge_pair(const Situation& s, const Protector& down, const Protector& up, bool overcurrents) {
  Finding finding = begin_finding(s, kName);
  finding.upstream = up.address;
  finding.unit = Quantity::current;
  finding.condition = word(Condition::maximum);
  finding.clause = s.network->rules.selectivity_clause;
  Fault fault = Fault::three_phase;
  const FaultCurrent* most = greatest(s.origin_max, kAllFaults, &fault);
  const std::string required = required_of(s);
  finding.verdict = required.empty() ? Verdict::noted : Verdict::undecided;
  if (most == nullptr || !most->known) {
    finding.selectivity = word(Selectivity::undecided);
    finding.reason = "the greatest current is not known";
    finding.basis = finding.reason;
    if (most != nullptr) finding.needs.push_back(most->needs);
    return finding;
  }
  finding.fault = word(fault);
  finding.available_A = most->amps;
  finding.confidence = models::worse(down.device->confidence, up.device->confidence);
  PairVerdict pair;
  if (overcurrents)
    pair = overcurrent_selectivity(*down.device, *up.device, most->amps,
                                   std::isfinite(most->peak) ? most->peak / (std::sqrt(2.0) * most->amps) : 1.02);
  if (!up.device->residual.empty()) {
    const PairVerdict residual = residual_selectivity(*down.device, *up.device, most->amps);
    const bool worse = !overcurrents || residual.selectivity == Selectivity::none;
    if (worse) {
      const std::string also = overcurrents ? fmt::format("; overcurrents: {}", word(pair.selectivity)) : "";
      pair = residual;
      pair.basis += also;
    } else if (residual.selectivity == Selectivity::total) {
      pair.basis += "; " + residual.basis;
    }
  }
  finding.selectivity = word(pair.selectivity);
  finding.limit_A = pair.limit;
  finding.basis = pair.basis;
  if (!pair.needs.empty()) finding.needs.push_back(pair.needs);
  finding.value = pair.limit;
  finding.limit = most->amps;
  finding.margin = std::isfinite(pair.limit) ? pair.limit / most->amps - 1.0 : kNone;
  finding.summary = fmt::format(
      "{} below {} ({}): {}{}; {} available", down.device->text, up.device->text, up.address, finding.selectivity,
      pair.selectivity == Selectivity::partial ? " to " + say(pair.limit, Quantity::current) : std::string(),
      say(most->amps, Quantity::current));
  finding.steps.push_back({"limit of selectivity", "greatest current up to which it is proven", pair.basis, pair.limit,
                           Quantity::current, down.at});
  if (!required.empty()) {
    if (pair.selectivity == Selectivity::undecided) {
      finding.reason = pair.basis;
    } else {
      demand(finding, required, pair.limit, pair.selectivity);
    }
  }
  return finding;
}

// A board on the way that several ways feed: their devices share the current, and which of them acts first
// is not known. -1: none.
int shared_board(const Situation& s) {
  if (!s.tree->grid) return -1;
  int board = s.kind == SubjectKind::board ? -1 : s.board_index;
  while (board >= 0) {
    const auto b = static_cast<std::size_t>(board);
    const bool one_way =
        s.tree->feeder[b] >= 0 || s.tree->transformer[b] >= 0 || s.tree->link[b] >= 0 || s.tree->sole[b];
    if (!one_way) return board;
    board = s.tree->transformer[b] >= 0 ? -1 : s.tree->above[b];
  }
  return -1;
}

Finding undecided_above(const Situation& s, int board) {
  Finding finding = begin_finding(s, kName);
  const std::string& name = s.network->boards[static_cast<std::size_t>(board)].name;
  finding.upstream = "feeds of " + name;
  finding.unit = Quantity::current;
  finding.condition = word(Condition::maximum);
  finding.clause = s.network->rules.selectivity_clause;
  finding.verdict = required_of(s).empty() ? Verdict::noted : Verdict::undecided;
  finding.selectivity = word(Selectivity::undecided);
  finding.basis = "several ways feed " + name + ": their shares change as others clear";
  finding.reason = finding.basis;
  const FaultCurrent* most = greatest(s.origin_max, kAllFaults, nullptr);
  if (most != nullptr && most->known) finding.available_A = most->amps;
  return finding;
}

std::vector<Finding> judge(const Situation& s) {
  std::vector<Finding> findings;
  if (const int board = shared_board(s); board >= 0) findings.push_back(undecided_above(s, board));
  const Protector& down = s.path.back();
  // Up to the next device that breaks overcurrents; beyond it only residual elements still see what
  // the downstream device sees.
  bool beyond = !findings.empty();  // the devices past shared ones see another current
  for (auto up = std::next(s.path.rbegin()); up != s.path.rend(); ++up) {
    const bool overcurrents = !beyond && !down.device->overcurrent.empty() && !up->device->overcurrent.empty();
    if (overcurrents || !up->device->residual.empty()) findings.push_back(judge_pair(s, down, *up, overcurrents));
    beyond = beyond || !up->device->overcurrent.empty();
  }
  return findings;
}

}  // namespace

Check selectivity_check() {
  return {{kName,
           "each device with the next ones above it: total, partial, none or undecided, up to which current and on "
           "what it rests; judged only where `selective` demands it, noted otherwise",
           "circuits, submains, incomers",
           "the supply's maximum; both devices' curves; for the short-circuit zone let-through and pre-arcing I2t"},
          applies,
          judge};
}

}  // namespace sunder::solver
