// SPDX-License-Identifier: Apache-2.0
// Along one parameter: sample, find the points at which a check's quantities pass a step of a device,
// and between those the parameter at which a verdict turns.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <unordered_map>
#include <unordered_set>

#include "solver/parameters.h"
#include "solver/retrial.h"
#include "solver/study.h"

namespace sunder::solver {
namespace {

using models::Network;

constexpr double kFlipAccuracy = 1e-6;         // relative, of the parameter
constexpr double kBreakpointAccuracy = 1e-10;  // relative: either side of a step must be the right one

constexpr int kMostTurns = 16;  // of one verdict between two neighbouring values

using ByKey = std::unordered_map<std::string, Finding>;

ByKey by_key(const std::vector<Finding>& findings) {
  ByKey map;
  for (const Finding& finding : findings) map.emplace(finding_key(finding), finding);
  return map;
}

// One question asked again and again along a numeric parameter.
class Track {
 public:
  Track(Retrial& retrial, const Parameter& parameter, std::string subject, std::string key)
      : retrial_(retrial), parameter_(parameter), subject_(std::move(subject)), key_(std::move(key)) {}

  const Finding& at(double value) {
    const auto known = seen_.find(value);
    if (known != seen_.end()) return known->second;
    parameter_.set(retrial_.network(), value);
    if (!parameter_.own_run_only) retrial_.refresh();
    std::optional<Finding> finding = retrial_.one(subject_, key_);
    if (!finding) {
      finding.emplace();
      finding->verdict = Verdict::noted;
    }
    return seen_.emplace(value, std::move(*finding)).first->second;
  }

  void put(double value, const Finding& finding) { seen_.emplace(value, finding); }

  // Values next to each step that one of the watched distances passes between a and b.
  void breakpoints(double a, double b, std::vector<double>& out) {
    const std::vector<double> at_a = at(a).breakpoints;
    const std::vector<double> at_b = at(b).breakpoints;
    if (at_a.size() != at_b.size()) return;
    for (std::size_t i = 0; i < at_a.size(); ++i) {
      if (!(at_a[i] * at_b[i] < 0)) continue;
      double low = a, high = b;
      bool known = false;
      for (const double found : out) known = known || (found > a && found < b && passes(found, i, at_a[i]));
      if (known) continue;
      while (high - low > kBreakpointAccuracy * std::max(std::abs(low), std::abs(high))) {
        const double middle = 0.5 * (low + high);
        const std::vector<double>& gaps = at(middle).breakpoints;
        if (gaps.size() != at_a.size()) return;
        (gaps[i] * at_a[i] > 0 ? low : high) = middle;
      }
      out.push_back(low);
      out.push_back(high);
    }
  }

  // The last value with the verdict of a and the first with another one, between a and b.
  std::pair<double, double> flip(double a, double b) {
    const Verdict before = at(a).verdict;
    while (b - a > kFlipAccuracy * 0.5 * std::max(std::abs(a), std::abs(b))) {
      const double middle = 0.5 * (a + b);
      (at(middle).verdict == before ? a : b) = middle;
    }
    return {a, b};
  }

 private:
  // Is a known pair of values also the place where distance i changes sign?
  bool passes(double value, std::size_t i, double sign_at_start) {
    const std::vector<double>& gaps = at(value).breakpoints;
    if (i >= gaps.size()) return false;
    return std::abs(gaps[i]) < kBreakpointAccuracy * 10 && gaps[i] * sign_at_start <= 0;
  }

  Retrial& retrial_;
  const Parameter& parameter_;
  std::string subject_, key_;
  std::map<double, Finding> seen_;
};

Finding light(Finding finding) {
  finding.steps.clear();
  finding.remedies.clear();
  return finding;
}

bool judged(Verdict verdict) { return verdict != Verdict::noted; }

void add_stretch(Sweep& sweep, const Finding& finding, double from, double to) {
  sweep.undecided.push_back(
      {finding.check, finding.subject, from, to, finding.needs.empty() ? finding.reason : finding.needs.front()});
}

void follow(Retrial& retrial, const Parameter& parameter, const std::vector<double>& grid,
            const std::vector<ByKey>& sampled, const std::string& key, Sweep& sweep) {
  const auto with = std::find_if(sampled.begin(), sampled.end(), [&](const ByKey& map) { return map.count(key) > 0; });
  Track track(retrial, parameter, with->at(key).subject, key);
  for (std::size_t i = 0; i < grid.size(); ++i)
    if (const auto found = sampled[i].find(key); found != sampled[i].end()) track.put(grid[i], found->second);
  std::vector<double> values = grid;
  for (std::size_t i = 1; i < grid.size(); ++i) track.breakpoints(grid[i - 1], grid[i], values);
  std::sort(values.begin(), values.end());
  double open = track.at(values.front()).verdict == Verdict::undecided ? values.front() : kNone;
  for (std::size_t i = 1; i < values.size(); ++i) {
    // One verdict may give way to another and that to a third before the next value.
    double from = values[i - 1];
    for (int turn = 0; turn < kMostTurns && track.at(from).verdict != track.at(values[i]).verdict; ++turn) {
      const Finding before = track.at(from);
      if (!judged(before.verdict) || !judged(track.at(values[i]).verdict)) break;
      const auto [last, first_after] = track.flip(from, values[i]);
      const Finding after = track.at(first_after);
      const double where = 0.5 * (last + first_after);
      sweep.flips.push_back({before.check, before.subject, before.verdict, after.verdict, where, after.state});
      if (before.verdict == Verdict::undecided && !std::isnan(open)) add_stretch(sweep, before, open, where);
      open = after.verdict == Verdict::undecided ? where : kNone;
      from = first_after;
    }
  }
  if (!std::isnan(open)) add_stretch(sweep, track.at(values.back()), open, values.back());
}

std::variant<Sweep, std::string> vary_range(const Network& network, const Parameter& parameter,
                                            std::vector<double> grid,
                                            const std::function<void(std::size_t, std::size_t)>& progress) {
  Network ends = network;
  for (const double end : {grid.front(), grid.back()}) {
    parameter.set(ends, end);
    if (auto why = contradiction(ends))
      return fmt::format("{} = {}: {}", parameter.address, models::format_quantity(end, parameter.unit), *why);
  }
  Sweep sweep;
  sweep.key = parameter.address;
  sweep.unit = parameter.unit;
  Retrial retrial(network);
  std::vector<ByKey> sampled;
  std::vector<std::string> keys;
  std::unordered_set<std::string> known_keys;
  for (std::size_t i = 0; i < grid.size(); ++i) {
    parameter.set(retrial.network(), grid[i]);
    const std::vector<Finding> findings = judge_network(retrial.network());
    SweepPoint point;
    point.value = grid[i];
    for (const Finding& finding : findings) {
      point.findings.push_back(light(finding));
      if (known_keys.insert(finding_key(finding)).second) keys.push_back(finding_key(finding));
    }
    sampled.push_back(by_key(point.findings));
    sweep.points.push_back(std::move(point));
    if (progress) progress(i, grid.size() + keys.size());
  }
  std::size_t done = grid.size();
  for (const std::string& key : keys) {
    follow(retrial, parameter, grid, sampled, key, sweep);
    if (progress) progress(++done, grid.size() + keys.size());
  }
  std::stable_sort(sweep.flips.begin(), sweep.flips.end(), [](const Flip& a, const Flip& b) { return a.at < b.at; });
  return sweep;
}

std::variant<Sweep, std::string> vary_catalogue(const Network& network, const Parameter& parameter,
                                                const std::vector<std::string>& values, bool leave_out_unfit,
                                                const std::function<void(std::size_t, std::size_t)>& progress) {
  Sweep sweep;
  sweep.key = parameter.address;
  sweep.unit = parameter.unit;
  sweep.catalogue = true;
  Network changed = network;
  for (std::size_t i = 0; i < values.size(); ++i) {
    if (auto error = parameter.set_text(changed, values[i])) {
      if (leave_out_unfit) continue;
      return fmt::format("{}: {}", parameter.address, *error);
    }
    SweepPoint point;
    point.value = static_cast<double>(sweep.points.size());
    point.text = values[i];
    for (const Finding& finding : judge_network(changed)) point.findings.push_back(light(finding));
    if (!sweep.points.empty()) {
      const ByKey before = by_key(sweep.points.back().findings);
      for (const Finding& finding : point.findings) {
        const auto earlier = before.find(finding_key(finding));
        if (earlier == before.end() || earlier->second.verdict == finding.verdict || !judged(finding.verdict) ||
            !judged(earlier->second.verdict))
          continue;
        sweep.flips.push_back(
            {finding.check, finding.subject, earlier->second.verdict, finding.verdict, point.value, finding.state});
      }
    }
    for (const Finding& finding : point.findings) {
      if (finding.verdict != Verdict::undecided) continue;
      // Neighbouring values make one stretch.
      const auto open = std::find_if(sweep.undecided.begin(), sweep.undecided.end(), [&](const Stretch& stretch) {
        return stretch.check == finding.check && stretch.subject == finding.subject && stretch.to == point.value - 1;
      });
      if (open != sweep.undecided.end()) {
        open->to = point.value;
      } else {
        add_stretch(sweep, finding, point.value, point.value);
      }
    }
    sweep.points.push_back(std::move(point));
    if (progress) progress(i + 1, values.size());
  }
  if (sweep.points.empty()) return fmt::format("{}: none of the values fits", parameter.address);
  return sweep;
}

}  // namespace

std::variant<Sweep, std::string> vary(const Network& network, const VaryRequest& request,
                                      const std::function<void(std::size_t, std::size_t)>& progress) {
  auto found = find_parameter(network, request);
  if (auto* error = std::get_if<std::string>(&found)) return *error;
  const Parameter& parameter = std::get<Parameter>(found);
  if (!parameter.numeric) {
    if (request.values.size() == 1 && request.values.front() == "all" && !parameter.catalogue.empty())
      return vary_catalogue(network, parameter, parameter.catalogue, true, progress);
    if (request.values.empty())
      return fmt::format(
          "{} is not a range; give its values with --values, for example --values \"25 mm2,35 mm2\", or "
          "--values all",
          parameter.address);
    return vary_catalogue(network, parameter, request.values, false, progress);
  }
  std::vector<double> grid;
  if (!request.values.empty()) {
    for (const std::string& text : request.values) {
      auto value = read_value(parameter, text);
      if (auto* error = std::get_if<std::string>(&value)) return *error;
      grid.push_back(std::get<double>(value));
    }
    std::sort(grid.begin(), grid.end());
    grid.erase(std::unique(grid.begin(), grid.end()), grid.end());
    return vary_range(network, parameter, grid, progress);
  }
  if (parameter.whole)
    return fmt::format("{} is a count; give its values with --values, for example --values 1,2,3", parameter.address);
  auto from = read_value(parameter, request.from);
  if (auto* error = std::get_if<std::string>(&from)) return *error;
  auto to = read_value(parameter, request.to);
  if (auto* error = std::get_if<std::string>(&to)) return *error;
  const double a = std::min(std::get<double>(from), std::get<double>(to));
  const double b = std::max(std::get<double>(from), std::get<double>(to));
  if (!(b > a))
    return fmt::format("the range of {} is empty: it begins and ends at {}", parameter.address, request.from);
  const int n = std::max(2, request.steps);
  for (int i = 0; i <= n; ++i) grid.push_back(i == n ? b : a + (b - a) * i / n);
  return vary_range(network, parameter, std::move(grid), progress);
}

}  // namespace sunder::solver
