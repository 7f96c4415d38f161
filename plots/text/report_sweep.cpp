// SPDX-License-Identifier: Apache-2.0
// What a sweep found: flips, undecided stretches, and the values that change.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <set>
#include <utility>

#include "plots/text/report.h"
#include "plots/text/tables.h"

namespace sunder::plots {
namespace {

using solver::Finding;
using solver::Sweep;
using solver::SweepPoint;

using Name = std::pair<std::string, std::string>;  // check, subject (with the upstream device of a pair)

Name name_of(const Finding& f) {
  return {f.check, f.upstream.empty() ? f.subject : f.subject + " below " + f.upstream};
}

std::string point_text(const Sweep& sweep, const SweepPoint& point) {
  return point.text.empty() ? value_text(point.value, sweep.unit) : point.text;
}

// The catalogue value that starts at an index, as text.
std::string place_of(const Sweep& sweep, double at) {
  if (!sweep.catalogue) return value_text(at, sweep.unit, 7);
  const auto index = static_cast<std::size_t>(std::max(0.0, std::ceil(at - 1e-9)));
  return index < sweep.points.size() ? point_text(sweep, sweep.points[index]) : models::format_number(at);
}

bool differs(double a, double b) {
  if (std::isnan(a) || std::isnan(b)) return std::isnan(a) != std::isnan(b);
  if (std::isinf(a) || std::isinf(b)) return a != b;
  return std::fabs(a - b) > 1e-9 * std::max(std::fabs(a), std::fabs(b));
}

// Findings of one check and subject along the sweep; nullptr where a point lacks it.
using Track = std::vector<const Finding*>;

std::vector<std::pair<Name, Track>> tracks_of(const Sweep& sweep) {
  std::map<Name, std::size_t> where;
  std::vector<std::pair<Name, Track>> tracks;
  for (std::size_t i = 0; i < sweep.points.size(); ++i) {
    for (const Finding& f : sweep.points[i].findings) {
      const auto [at, fresh] = where.try_emplace(name_of(f), tracks.size());
      if (fresh) tracks.emplace_back(at->first, Track(sweep.points.size(), nullptr));
      tracks[at->second].second[i] = &f;
    }
  }
  return tracks;
}

bool changes(const Track& track) {
  for (const Finding* f : track) {
    if (f == nullptr || track.front() == nullptr) {
      if (f != track.front()) return true;
      continue;
    }
    if (f->verdict != track.front()->verdict || differs(f->value, track.front()->value) ||
        differs(f->margin, track.front()->margin)) {
      return true;
    }
  }
  return false;
}

std::string flips_table(const Sweep& sweep, const TextStyle& style) {
  Table table({{"at " + sweep.key, Align::right},
               {"check", Align::left, 18},
               {"subject", Align::left, 12},
               {"below"},
               {""},
               {"above"},
               {"state"}});
  for (const solver::Flip& flip : sweep.flips) {
    table.add(
        {place_of(sweep, flip.at), flip.check, flip.subject, word(flip.before), "->", word(flip.after), flip.state});
  }
  return table.text(style.width, 2);
}

std::string undecided_list(const Sweep& sweep, const TextStyle& style) {
  std::string out;
  for (const solver::Stretch& s : sweep.undecided) {
    out += wrap(fmt::format("{} to {}: {} of {}; needs {}", place_of(sweep, s.from), place_of(sweep, s.to), s.check,
                            s.subject, s.needs),
                style.width, "  ? ");
  }
  return out;
}

// Margins of the checks that flip or are undecided, a few columns at a time.
std::string margins_table(const Sweep& sweep, const std::vector<std::pair<Name, Track>>& shown,
                          const TextStyle& style) {
  constexpr std::size_t kColumns = 4;
  std::string out;
  for (std::size_t from = 0; from < shown.size(); from += kColumns) {
    const std::size_t to = std::min(shown.size(), from + kColumns);
    std::vector<Table::Column> columns{{"\n" + sweep.key, Align::right}};
    for (std::size_t k = from; k < to; ++k) {
      columns.push_back({shown[k].first.first + '\n' + shown[k].first.second, Align::right});
    }
    Table table(columns);
    for (std::size_t i = 0; i < sweep.points.size(); ++i) {
      std::vector<std::string> cells{point_text(sweep, sweep.points[i])};
      for (std::size_t k = from; k < to; ++k) {
        const Finding* f = shown[k].second[i];
        if (f == nullptr) {
          cells.emplace_back("-");
          continue;
        }
        const std::string margin = margin_text(f->margin);
        cells.push_back(margin + (margin.empty() ? "" : " ") + word(f->verdict));
      }
      table.add(cells);
    }
    out += table.text(style.width, 2) + '\n';
  }
  return out;
}

std::string changes_table(const Sweep& sweep, const std::vector<std::pair<Name, Track>>& tracks,
                          const TextStyle& style) {
  const std::string first = point_text(sweep, sweep.points.front());
  const std::string last = point_text(sweep, sweep.points.back());
  Table table({{"\ncheck", Align::left, 18},
               {"\nsubject", Align::left, 12},
               {clip(first, 22) + "\nvalue", Align::right},
               {clip(last, 22) + "\nvalue", Align::right},
               {"\nlimit", Align::right},
               {"least\nmargin", Align::right},
               {"\nverdicts"}});
  for (const auto& [name, track] : tracks) {
    if (!changes(track)) continue;
    const Finding* a = track.front();
    const Finding* b = track.back();
    double least = solver::kNone;
    std::string verdicts;
    for (const Finding* f : track) {
      if (f == nullptr) continue;
      if (std::isfinite(f->margin) && !(f->margin >= least)) least = f->margin;
      if (verdicts.find(word(f->verdict)) == std::string::npos) {
        verdicts += (verdicts.empty() ? "" : ", ") + std::string(word(f->verdict));
      }
    }
    table.add({name.first, name.second, a != nullptr ? value_text(a->value, a->unit) : "-",
               b != nullptr ? value_text(b->value, b->unit) : "-", b != nullptr ? value_text(b->limit, b->unit) : "-",
               margin_text(least), verdicts});
  }
  if (table.empty()) return "  nothing\n";
  return table.text(style.width, 2);
}

}  // namespace

std::string sweep_report(const models::Network& network, const Sweep& sweep, const TextStyle& style) {
  std::string out;
  if (!network.title.empty()) out += ink(style, Ink::heading, network.title) + '\n';
  if (sweep.points.empty()) return out + "No value of " + sweep.key + " was tried.\n";
  std::string what =
      fmt::format("{} from {} to {}, {} values; rules {}", sweep.key, point_text(sweep, sweep.points.front()),
                  point_text(sweep, sweep.points.back()), sweep.points.size(), network.rules_name);
  if (!style.date.empty()) what += "; calculated " + style.date;
  if (!style.program.empty()) what += " by " + style.program;
  out += wrap(what, style.width) + '\n';

  const auto tracks = tracks_of(sweep);
  out += ink(style, Ink::heading, "Where a verdict flips") + '\n';
  if (sweep.flips.empty()) {
    std::map<std::string, std::size_t> verdicts;
    for (const Finding& f : sweep.points.front().findings) ++verdicts[word(f.verdict)];
    std::string kept;
    for (const auto& [verdict, n] : verdicts) kept += fmt::format("{}{} {}", kept.empty() ? "" : ", ", n, verdict);
    out += wrap("nowhere in this range; all along: " + kept, style.width, "  ");
  } else {
    out += flips_table(sweep, style);
  }
  out += '\n';
  if (!sweep.undecided.empty()) {
    out += ink(style, Ink::heading, "Undecided stretches") + '\n' + undecided_list(sweep, style) + '\n';
  }

  std::set<Name> named;
  for (const solver::Flip& flip : sweep.flips) named.emplace(flip.check, flip.subject);
  for (const solver::Stretch& s : sweep.undecided) named.emplace(s.check, s.subject);
  std::vector<std::pair<Name, Track>> shown;
  for (const auto& track : tracks) {
    const Finding* any = nullptr;
    for (const Finding* f : track.second) any = any != nullptr ? any : f;
    if (any != nullptr && named.count({any->check, any->subject}) != 0 && changes(track.second)) shown.push_back(track);
  }
  if (!shown.empty()) {
    out += ink(style, Ink::heading, "Margins to the limit of what flips or is undecided") + '\n';
    out += margins_table(sweep, shown, style);
  }
  out += ink(style, Ink::heading, "What changes") + '\n' + changes_table(sweep, tracks, style);
  return out;
}

}  // namespace sunder::plots
