// SPDX-License-Identifier: Apache-2.0
// The chart of a sweep: margins against the parameter.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <utility>
#include <vector>

#include "plots/figures/charts.h"
#include "plots/figures/drawing.h"
#include "plots/figures/scales.h"

namespace sunder::plots {
namespace {

using solver::Finding;
using solver::Sweep;

constexpr std::size_t kMostLines = 7;   // as many looks as can be told apart
constexpr double kLeastPercent = -150;  // margins beyond run into the edge of the plot
constexpr double kMostPercent = 110;
constexpr double kRow = 15;

// "voltage drop, workshop/W2", "..., workshop/W2 and workshop/W3", "..., workshop/W2 and 3 more"
std::string named(const std::string& check, const std::vector<std::string>& subjects) {
  if (subjects.size() == 1) return check + ", " + subjects[0];
  if (subjects.size() == 2) return check + ", " + subjects[0] + " and " + subjects[1];
  return fmt::format("{}, {} and {} more", check, subjects[0], subjects.size() - 1);
}

bool near(double a, double b) { return std::fabs(a - b) <= 2e-6 * std::max(std::fabs(a), std::fabs(b)); }

struct Track {
  std::string check;
  std::vector<std::string> subjects;              // that share the curve
  std::vector<std::pair<double, double>> points;  // parameter, margin in percent (NaN: none)
};

Track track_of(const Sweep& sweep, const std::string& check, const std::string& subject) {
  Track track{check, {subject}, {}};
  for (std::size_t i = 0; i < sweep.points.size(); ++i) {
    const double at = sweep.catalogue ? static_cast<double>(i) : sweep.points[i].value;
    double margin = solver::kNone;
    for (const Finding& f : sweep.points[i].findings) {
      if (f.check != check || f.subject != subject || f.verdict == solver::Verdict::undecided) continue;
      if (std::isfinite(f.margin))
        margin = std::isnan(margin) ? f.margin : std::min(margin, f.margin);
      else if (std::isinf(f.margin))
        margin = f.margin > 0 ? kMostPercent / 100 : kLeastPercent / 100;
    }
    track.points.emplace_back(at, std::isnan(margin) ? margin : std::clamp(100 * margin, kLeastPercent, kMostPercent));
  }
  return track;
}

bool same_curve(const Track& a, const Track& b) {
  if (a.check != b.check) return false;
  for (std::size_t i = 0; i < a.points.size(); ++i) {
    const double u = a.points[i].second;
    const double v = b.points[i].second;
    if (std::isnan(u) != std::isnan(v) || std::fabs(u - v) > 0.2) return false;
  }
  return true;
}

// The curves worth drawing: of what flips (one of each flip before a second of any), of what is undecided,
// else the tightest; subjects whose curves run together share one.
std::vector<Track> tracks_of(const Sweep& sweep, std::size_t& left_out) {
  std::vector<std::pair<std::string, std::string>> wanted;
  std::vector<double> seen;
  std::vector<std::pair<std::string, std::string>> later;
  for (const solver::Flip& flip : sweep.flips) {
    const bool again = std::any_of(seen.begin(), seen.end(), [&](double at) { return near(at, flip.at); });
    (again ? later : wanted).emplace_back(flip.check, flip.subject);
    seen.push_back(flip.at);
  }
  wanted.insert(wanted.end(), later.begin(), later.end());
  for (const solver::Stretch& s : sweep.undecided) wanted.emplace_back(s.check, s.subject);
  if (wanted.empty() && !sweep.points.empty()) {
    std::vector<const Finding*> all;
    for (const Finding& f : sweep.points.back().findings) {
      if (std::isfinite(f.margin) && f.verdict != solver::Verdict::noted) all.push_back(&f);
    }
    std::stable_sort(all.begin(), all.end(), [](const Finding* a, const Finding* b) { return a->margin < b->margin; });
    for (std::size_t i = 0; i < std::min<std::size_t>(4, all.size()); ++i)
      wanted.emplace_back(all[i]->check, all[i]->subject);
  }
  std::vector<Track> tracks;
  left_out = 0;
  for (std::size_t i = 0; i < wanted.size(); ++i) {
    if (std::find(wanted.begin(), wanted.begin() + static_cast<std::ptrdiff_t>(i), wanted[i]) !=
        wanted.begin() + static_cast<std::ptrdiff_t>(i)) {
      continue;
    }
    Track track = track_of(sweep, wanted[i].first, wanted[i].second);
    const auto same = std::find_if(tracks.begin(), tracks.end(), [&](const Track& t) { return same_curve(t, track); });
    if (same != tracks.end())
      same->subjects.push_back(wanted[i].second);
    else if (tracks.size() < kMostLines)
      tracks.push_back(std::move(track));
    else
      ++left_out;
  }
  return tracks;
}

// Flips of one check in one direction at one place.
struct Mark {
  double at = 0;
  std::string check;
  solver::Verdict before = solver::Verdict::meets, after = solver::Verdict::fails;
  std::vector<std::string> subjects;
};

std::vector<Mark> marks_of(const Sweep& sweep) {
  std::vector<Mark> marks;
  for (const solver::Flip& flip : sweep.flips) {
    const auto same = std::find_if(marks.begin(), marks.end(), [&](const Mark& m) {
      return near(m.at, flip.at) && m.check == flip.check && m.before == flip.before && m.after == flip.after;
    });
    if (same != marks.end())
      same->subjects.push_back(flip.subject);
    else
      marks.push_back({flip.at, flip.check, flip.before, flip.after, {flip.subject}});
  }
  std::stable_sort(marks.begin(), marks.end(), [](const Mark& a, const Mark& b) { return a.at < b.at; });
  return marks;
}

struct Shade {
  double from = 0, to = 0;
  std::string check;
  std::vector<std::string> subjects;
};

std::vector<Shade> shades_of(const Sweep& sweep) {
  std::vector<Shade> shades;
  for (const solver::Stretch& s : sweep.undecided) {
    const auto same = std::find_if(shades.begin(), shades.end(), [&](const Shade& other) {
      return near(other.from, s.from) && near(other.to, s.to) && other.check == s.check;
    });
    if (same != shades.end())
      same->subjects.push_back(s.subject);
    else
      shades.push_back({s.from, s.to, s.check, {s.subject}});
  }
  return shades;
}

std::string place_text(const Sweep& sweep, double at) {
  if (!sweep.catalogue) return models::format_quantity(at, sweep.unit, 5);
  const auto index = static_cast<std::size_t>(std::max(0.0, std::ceil(at - 1e-9)));
  return index < sweep.points.size() ? sweep.points[index].text : "";
}

// The catalogue value that flips first stands half a step behind the value before it.
double place_of(const Sweep& sweep, double at) { return sweep.catalogue ? at - 0.5 : at; }

}  // namespace

std::optional<std::string> draw_sweep(const Sweep& sweep, const std::string& path) {
  if (sweep.points.size() < 2) return std::string("a drawing of a sweep needs at least two values");
  std::size_t left_out = 0;
  const std::vector<Track> tracks = tracks_of(sweep, left_out);
  const double first = sweep.catalogue ? 0 : sweep.points.front().value;
  const double last = sweep.catalogue ? static_cast<double>(sweep.points.size() - 1) : sweep.points.back().value;
  Axis x{std::min(first, last), std::max(first, last), 0, 0, false};
  if (sweep.catalogue) {
    x.least -= 0.5;
    x.most += 0.5;
  }
  if (!(x.most > x.least)) return std::string("a drawing of a sweep needs a range of values");

  double low = 0;
  double high = 0;
  double label_width = 60;
  for (const Track& t : tracks) {
    for (const auto& [at, margin] : t.points) {
      if (std::isnan(margin)) continue;
      low = std::min(low, margin);
      high = std::max(high, margin);
    }
    label_width = std::max(label_width, text_width(named(t.check, t.subjects), kSmallFont) + 24);
  }
  low = std::max(kLeastPercent, low - 8);
  high = std::min(kMostPercent, high + 8);

  const std::vector<Mark> marks = marks_of(sweep);
  std::vector<double> widths;
  std::vector<std::string> names;
  Rect area{92, 98, 0, 0};
  area.w = kSheetWidth - area.x - std::min(label_width, 330.0) - 16;
  for (const Mark& mark : marks) {
    names.push_back(fmt::format("{}  {}: {} \u2192 {}", place_text(sweep, mark.at), named(mark.check, mark.subjects),
                                word(mark.before), word(mark.after)));
    widths.push_back(text_width(names.back(), kSmallFont) + 6);
    // The plot is made narrower where a name beside its line would leave the sheet.
    const double share = (place_of(sweep, mark.at) - x.least) / (x.most - x.least);
    if (share > 0) area.w = std::min(area.w, std::max(420.0, (kSheetWidth - 14 - widths.back() - area.x) / share));
  }
  x.from = area.x;
  x.to = area.x + area.w;
  std::vector<double> places;
  places.reserve(marks.size());
  for (const Mark& mark : marks) places.push_back(x.at(place_of(sweep, mark.at)));
  // Names hang to the right here: most flips lie left of the middle, and there is room beside the plot.
  std::vector<double> mirrored;
  std::vector<double> mirrored_widths;
  for (std::size_t i = marks.size(); i-- > 0;) {
    mirrored.push_back(-places[i]);
    mirrored_widths.push_back(widths[i]);
  }
  std::vector<int> levels = stagger(mirrored, mirrored_widths, 6);
  std::reverse(levels.begin(), levels.end());
  const int n_levels = levels.empty() ? 0 : 1 + *std::max_element(levels.begin(), levels.end());
  area.h = std::max(240.0, kSheetHeight - area.y - 70 - kRow * n_levels);
  const double top = area.y + area.h;
  const Axis y{low, high, area.y, top, false};

  std::string script = area_at(area);
  script += fmt::format("set xrange [{}:{}]\nset yrange [{}:{}]\nunset key\n", number(x.least), number(x.most),
                        number(low), number(high));
  std::string ticks;
  if (sweep.catalogue) {
    for (std::size_t i = 0; i < sweep.points.size(); ++i) {
      ticks += fmt::format("{}{} {}", ticks.empty() ? "" : ", ", tick_text(sweep.points[i].text), i);
    }
  } else {
    for (const double value : linear_ticks(x.least, x.most, 10)) {
      ticks += fmt::format("{}{} {}", ticks.empty() ? "" : ", ", tick_text(models::format_quantity(value, sweep.unit)),
                           number(value));
    }
  }
  const bool crowded = sweep.catalogue && sweep.points.size() > 6;
  script += fmt::format("set xtics noenhanced{} ({})\n", crowded ? " rotate by 20 right" : "", ticks);
  std::string percent;
  for (const double value : linear_ticks(low, high, 8)) {
    percent += fmt::format("{}{} {}", percent.empty() ? "" : ", ",
                           tick_text(value == 0 ? "0 %" : fmt::format("{:+.0f} %", value)), number(value));
  }
  script += "set ytics noenhanced (" + percent + ")\n";
  script += "set tics front out nomirror scale 1,0.5\nset border 3 front lw 1.2 lc rgb '#000000'\n";
  script += "set grid xtics ytics back lt 1 lw 0.6 lc rgb '#dddddd'\n";
  script += "set arrow from graph 0, first 0 to graph 1, first 0 nohead front lw 2 lc rgb '#000000'\n";

  std::vector<Obstacle> lines{{{{area.x, y.at(0)}, {area.x + area.w, y.at(0)}}}};
  std::vector<LabelWish> wishes;
  std::vector<std::string> texts;
  const auto wish = [&](const std::string& text, std::vector<Spot> anchors) {
    wishes.push_back({text_width(text, kSmallFont) + 4, kRow, std::move(anchors)});
    texts.push_back(text);
  };
  for (const Shade& s : shades_of(sweep)) {
    const double from = std::clamp(place_of(sweep, s.from), x.least, x.most);
    const double to = std::clamp(sweep.catalogue ? s.to + 0.5 : s.to, x.least, x.most);
    script += fmt::format(
        "set object rectangle from first {}, graph 0 to first {}, graph 1 behind fillstyle solid 1 noborder fillcolor "
        "rgb '#e4e4e4'\n",
        number(from), number(to));
    std::vector<Spot> anchors;
    for (double height = area.y + 14; height < top; height += 20) anchors.push_back({x.at((from + to) / 2), height});
    wish("undecided: " + named(s.check, s.subjects), std::move(anchors));
  }
  for (std::size_t i = 0; i < marks.size(); ++i) {
    const double level = top + 10 + kRow * levels[i];
    script +=
        line_between({places[i], area.y}, {places[i], level + kRow / 2 - 2}, "back lw 1.1 dt (2,3) lc rgb '#000000'");
    script += label_at(names[i], places[i] + 5, level, "left", kSmallFont);
    lines.push_back({{{places[i], area.y}, {places[i], top}}});
  }

  std::string plot = "plot ";
  for (std::size_t i = 0; i < tracks.size(); ++i) {
    const Look& style = look(i);
    script += fmt::format("$t{} << EOD\n", i);
    std::vector<Spot> spots;
    for (const auto& [at, margin] : tracks[i].points) {
      if (std::isnan(margin)) {
        script += '\n';  // an empty line interrupts the curve
        continue;
      }
      script += number(at) + ' ' + number(margin) + '\n';
      spots.push_back({x.at(at), y.at(margin)});
    }
    script += "EOD\n";
    if (spots.empty()) continue;
    std::vector<Spot> anchors(spots.rbegin(), spots.rend());
    lines.push_back({spots});
    wish(named(tracks[i].check, tracks[i].subjects), std::move(anchors));
    plot += fmt::format("{}$t{} using 1:2 with linespoints lw 2 dt {} pt {} ps 0.6 lc rgb '{}'",
                        plot == "plot " ? "" : ", \\\n  ", i, style.dash, style.point, style.colour);
  }
  if (plot == "plot ") plot += "0 notitle with lines lw 2 lc rgb '#000000'";

  const Rect frame{area.x + 2, area.y + 2, kSheetWidth - area.x - 8, area.h - 4};
  const std::vector<PlacedLabel> placed = place_labels(wishes, frame, {}, lines);
  for (std::size_t i = 0; i < placed.size(); ++i) {
    script += leader_of(placed[i]);
    script += label_in(texts[i], placed[i].rect, kSmallFont, false);
  }
  script += label_at(sweep.key, area.x + area.w / 2, area.y - (crowded ? 66 : 44), "center", kFont);
  script +=
      fmt::format("set label 'margin to the limit' at screen {}, screen {} center rotate by 90 noenhanced font ',{}'\n",
                  number(24 / kSheetWidth), number((area.y + area.h / 2) / kSheetHeight), number(kFont));
  script += label_at("Margins against " + sweep.key, 28, kSheetHeight - 24, "left", 15, true);
  if (left_out > 0)
    script += label_at(fmt::format("{} more curves are left out; the report lists them all.", left_out), 28, 14, "left",
                       kSmallFont);
  script += label_at(sweep.flips.empty()
                         ? "No verdict flips in this range. Below the zero line a check is not met."
                         : "Below the zero line a check is not met. Dotted: where a verdict flips. Grey: undecided.",
                     28, kSheetHeight - 45, "left", kSmallFont);
  return draw(script + plot + '\n', path);
}

}  // namespace sunder::plots
