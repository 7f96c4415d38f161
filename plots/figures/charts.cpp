// SPDX-License-Identifier: Apache-2.0
// The coordination chart of a path.
#include "plots/figures/charts.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <iterator>
#include <vector>

#include "plots/figures/drawing.h"
#include "plots/figures/scales.h"

namespace sunder::plots {
namespace {

using models::CurvePoint;
using models::Quantity;
using solver::PathChart;
using solver::PathDevice;

constexpr double kLeastTime = 1e-3;  // [s]
constexpr double kMostTime = 1e4;
constexpr double kAdiabaticTo = 5;        // [s] adiabatic heating is no longer true beyond
constexpr double kDamageNameFrom = 0.05;  // [s] damage lines are named above it
constexpr double kRow = 15;               // height of a line of small text, canvas units

constexpr double kHatchCost = 14;  // a label may lie on hatching rather than on an edge
constexpr double kMarkCost = 15;   // or on the thin line of a current

using Line = std::vector<CurvePoint>;

// One thing drawn with a name of its own.
struct Shape {
  std::string label;
  Line earliest, latest;  // a band, or one line in `latest`
  bool filled = false;
  bool damage = false;
  std::size_t look = 0;
  double k2s2 = 0;  // of a damage line [A2s]
};

double cut_of(const PathDevice& device, double most) {
  return std::isfinite(device.greatest) && device.greatest > 0 ? std::min(device.greatest, most) : most;
}

Axis current_axis(const PathChart& chart) {
  double least = 1e9;
  double most = 10;
  for (const PathDevice& d : chart.devices) {
    if (d.device.In > 0) least = std::min(least, d.device.In);
    if (std::isfinite(d.greatest)) most = std::max(most, d.greatest);
    for (const CurvePoint& p : d.device.overcurrent.latest.points) {
      if (!std::isfinite(d.greatest)) most = std::max(most, p.current);
    }
  }
  for (const solver::ChartCurrent& c : chart.currents) {
    if (!std::isfinite(c.current) || c.current <= 0) continue;
    most = std::max(most, c.current);
    least = std::min(least, c.current);
  }
  // A whole decade below, so that curves have room for their names; not below 1 A.
  least = least > 1e8 ? 1.0 : std::max(1.0, std::pow(10.0, std::floor(std::log10(0.95 * least))));
  most = std::max(round_up_125(1.15 * most), 100 * least);
  Axis axis;
  axis.least = least;
  axis.most = most;
  return axis;
}

std::vector<Shape> shapes_of(const PathChart& chart, const Axis& x, std::string& without) {
  std::vector<Shape> shapes;
  std::size_t k = 0;
  for (const PathDevice& d : chart.devices) {
    const double cut = cut_of(d, x.most);
    bool drawn = false;
    if (!d.device.overcurrent.empty()) {
      Shape s{d.label,
              cut_curve(d.device.overcurrent.earliest, x.least, cut, kLeastTime, kMostTime),
              cut_curve(d.device.overcurrent.latest, x.least, cut, kLeastTime, kMostTime),
              true,
              false,
              k,
              0};
      drawn = s.latest.size() > 1;
      if (drawn) shapes.push_back(std::move(s));
    }
    if (d.device.IdN > 0 && !d.device.residual.empty()) {
      const std::string name = drawn
                                   ? d.address + " residual " + models::format_quantity(d.device.IdN, Quantity::current)
                                   : d.label + " (residual)";
      Shape s{name,
              cut_curve(d.device.residual.earliest, x.least, cut, kLeastTime, kMostTime),
              cut_curve(d.device.residual.latest, x.least, cut, kLeastTime, kMostTime),
              false,
              false,
              k,
              0};
      if (s.latest.size() > 1) {
        shapes.push_back(std::move(s));
        drawn = true;
      }
    }
    if (drawn)
      ++k;
    else
      without += (without.empty() ? "" : ", ") + d.label;
  }
  for (const solver::DamageLine& line : chart.damage) {
    if (!(line.k2s2 > 0)) continue;
    const double from = std::max(x.least, std::sqrt(line.k2s2 / kAdiabaticTo));
    const double to = std::min(x.most, std::sqrt(line.k2s2 / kLeastTime));
    if (!(to > from)) continue;
    // Conductors that stand the same heat share one line: its name names them all.
    const auto same = std::find_if(shapes.begin(), shapes.end(), [&](const Shape& s) {
      return s.damage && std::fabs(s.k2s2 - line.k2s2) < 1e-3 * line.k2s2;
    });
    if (same != shapes.end()) {
      const std::size_t blank = line.label.find(' ');
      const bool same_run =
          blank != std::string::npos && same->label.compare(0, blank + 1, line.label, 0, blank + 1) == 0;
      same->label += ", " + (same_run ? line.label.substr(blank + 1) : line.label);
      continue;
    }
    shapes.push_back(
        {line.label, {}, {{from, line.k2s2 / (from * from)}, {to, line.k2s2 / (to * to)}}, false, true, 0, line.k2s2});
  }
  return shapes;
}

std::vector<Spot> canvas(const Line& line, const Axis& x, const Axis& y) {
  std::vector<Spot> spots;
  spots.reserve(line.size());
  for (const CurvePoint& p : line) spots.push_back({x.at(p.current), y.at(p.time)});
  return spots;
}

// Points spaced along a polyline.
std::vector<Spot> along(const std::vector<Spot>& line, double every) {
  std::vector<Spot> spots;
  double left = every / 2;
  for (std::size_t i = 1; i < line.size(); ++i) {
    const double length = std::hypot(line[i].x - line[i - 1].x, line[i].y - line[i - 1].y);
    double done = left;
    for (; done < length; done += every) {
      const double share = done / length;
      spots.push_back(
          {line[i - 1].x + share * (line[i].x - line[i - 1].x), line[i - 1].y + share * (line[i].y - line[i - 1].y)});
    }
    left = done - length;
  }
  return spots;
}

// Horizontal strokes inside a band, so that labels keep off its filling too.
void strokes(const std::vector<Spot>& left, const std::vector<Spot>& right, const Rect& area,
             std::vector<Obstacle>& lines) {
  const auto x_at = [](const std::vector<Spot>& line, double y, double none) {
    for (std::size_t i = 1; i < line.size(); ++i) {
      const double high = std::max(line[i - 1].y, line[i].y);
      const double low = std::min(line[i - 1].y, line[i].y);
      if (y > high || y < low) continue;
      if (high == low) return std::max(line[i - 1].x, line[i].x);
      return line[i - 1].x + (line[i].x - line[i - 1].x) * (y - line[i - 1].y) / (line[i].y - line[i - 1].y);
    }
    return none;
  };
  if (left.size() < 2 || right.size() < 2) return;
  for (double y = area.y + 4; y < area.y + area.h; y += 9) {
    const double from = x_at(left, y, -1);
    if (from < 0) continue;
    const double to = x_at(right, y, right.back().x);
    if (to > from) lines.push_back({{{from, y}, {to, y}}, kHatchCost});
  }
}

// Where edges of two shapes run together a name would be read as either's: such places are left out,
// unless there is no other.
void keep_apart(std::vector<Spot>& anchors, const std::vector<std::vector<std::vector<Spot>>>& edges,
                std::size_t self) {
  constexpr double kApart = 8;
  const auto shared = [&](const Spot& a) {
    const Rect around{a.x - kApart, a.y - kApart, 2 * kApart, 2 * kApart};
    for (std::size_t k = 0; k < edges.size(); ++k) {
      if (k == self) continue;
      for (const std::vector<Spot>& line : edges[k]) {
        for (std::size_t i = 1; i < line.size(); ++i) {
          if (crosses(line[i - 1], line[i], around)) return true;
        }
      }
    }
    return false;
  };
  std::vector<Spot> alone;
  std::copy_if(anchors.begin(), anchors.end(), std::back_inserter(alone), [&](const Spot& a) { return !shared(a); });
  if (!alone.empty()) anchors = std::move(alone);
}

std::string block(const std::string& name, const Line& forward, const Line& backward = {}) {
  std::string text = "$" + name + " << EOD\n";
  for (const CurvePoint& p : forward) text += number(p.current) + ' ' + number(p.time) + '\n';
  for (auto p = backward.rbegin(); p != backward.rend(); ++p) text += number(p->current) + ' ' + number(p->time) + '\n';
  return text + "EOD\n";
}

std::string tics(const char* axis, const std::vector<Tick>& ticks, double least) {
  std::string text = fmt::format("set {}tics noenhanced (", axis);
  for (const Tick& tick : ticks) {
    if (&tick != &ticks.front()) text += ", ";
    text += fmt::format("{} {} {}", tick_text(tick.label),
                        // gnuplot drops a tick that rounding puts before the start of a logarithmic axis
                        number(tick.value <= least ? least * (1 + 1e-7) : tick.value), tick.label.empty() ? 1 : 0);
  }
  return text + ")\n";
}

}  // namespace

std::optional<std::string> draw_coordination(const PathChart& chart, const std::string& path) {
  Axis x = current_axis(chart);
  std::string without;
  std::vector<Shape> shapes = shapes_of(chart, x, without);
  if (shapes.empty()) return "no device on the path to '" + chart.address + "' has a curve to draw";

  // Currents from left to right, each with a name that hangs to the left of its line above the plot.
  std::vector<solver::ChartCurrent> currents;
  for (const solver::ChartCurrent& c : chart.currents) {
    if (std::isfinite(c.current) && c.current >= x.least && c.current <= x.most) currents.push_back(c);
  }
  std::stable_sort(currents.begin(), currents.end(),
                   [](const auto& a, const auto& b) { return a.current < b.current; });
  // Equal currents share one line.
  for (std::size_t i = 1; i < currents.size();) {
    if (currents[i].current - currents[i - 1].current < 1e-3 * currents[i].current) {
      currents[i - 1].label += ", " + currents[i].label;
      currents.erase(currents.begin() + static_cast<std::ptrdiff_t>(i));
    } else {
      ++i;
    }
  }
  Rect area{96, 98, kSheetWidth - 96 - 34, 0};
  x.from = area.x;
  x.to = area.x + area.w;
  std::vector<double> places;
  std::vector<double> widths;
  std::vector<std::string> names;
  for (const solver::ChartCurrent& c : currents) {
    names.push_back(c.label + "  " + models::format_quantity(c.current, Quantity::current));
    places.push_back(x.at(c.current));
    widths.push_back(text_width(names.back(), kSmallFont) + 6);
  }
  const std::vector<int> levels = stagger(places, widths, 6);
  const int n_levels = levels.empty() ? 0 : 1 + *std::max_element(levels.begin(), levels.end());
  const double header = 62 + kRow * n_levels + 8;
  area.h = std::max(260.0, kSheetHeight - area.y - header);
  const double top = area.y + area.h;
  Axis y{kLeastTime, kMostTime, area.y, top, true};

  std::string script = area_at(area);
  script += fmt::format("set logscale xy\nset xrange [{}:{}]\nset yrange [{}:{}]\nunset key\n", number(x.least),
                        number(x.most), number(kLeastTime), number(kMostTime));
  const double per_decade = area.w / std::log10(x.most / x.least);
  script += tics("x", decade_ticks(x.least, x.most, Quantity::current, per_decade > 150), x.least);
  script += tics("y", decade_ticks(kLeastTime, kMostTime, Quantity::time, false), kLeastTime);
  script += "set tics front out nomirror scale 1,0.5\nset border 3 front lw 1.2 lc rgb '#000000'\n";
  script += "set grid xtics ytics mxtics mytics back lt 1 lw 0.9 lc rgb '#c4c4c4', lt 1 lw 0.5 lc rgb '#e6e6e6'\n";

  script +=
      label_at(chart.voltage.empty() ? "prospective current [A]" : "prospective current at " + chart.voltage + " [A]",
               area.x + area.w / 2, area.y - 44, "center", kFont);
  script += fmt::format("set label 'time [s]' at screen {}, screen {} center rotate by 90 noenhanced font ',{}'\n",
                        number(24 / kSheetWidth), number((area.y + area.h / 2) / kSheetHeight), number(kFont));
  script += label_at((chart.title.empty() ? std::string() : chart.title + ": ") + "coordination to " + chart.address,
                     28, kSheetHeight - 24, "left", 15, true);
  script += label_at("State " + chart.state + ". Each curve ends at the greatest current through its device.", 28,
                     kSheetHeight - 45, "left", kSmallFont);
  std::string foot =
      "Filled: between earliest and latest operation. Dotted, not filled: operation by residual current. "
      "Dash-dotted grey: conductor damage, t = k\u00b2S\u00b2/I\u00b2 up to 5 s.";
  script += label_at(foot, 28, 30, "left", kSmallFont);
  if (!without.empty()) script += label_at("Without a curve: " + without + ".", 28, 14, "left", kSmallFont);

  std::vector<Obstacle> lines;
  for (std::size_t i = 0; i < currents.size(); ++i) {
    const double level = top + 12 + kRow * levels[i];
    script +=
        line_between({places[i], area.y}, {places[i], level + kRow / 2 - 2}, "back lw 1.1 dt (2,3) lc rgb '#000000'");
    script += label_at(names[i], places[i] - 5, level, "right", kSmallFont);
    lines.push_back({{{places[i], area.y}, {places[i], top}}, kMarkCost});
  }

  std::string plot = "plot ";
  std::vector<LabelWish> wishes;
  std::vector<std::vector<std::vector<Spot>>> own;  // the edges of each shape
  for (std::size_t i = 0; i < shapes.size(); ++i) {
    const Shape& s = shapes[i];
    const Look& style = look(s.look);
    const std::vector<Spot> latest = canvas(s.latest, x, y);
    const std::vector<Spot> earliest = canvas(s.earliest, x, y);
    lines.push_back({latest});
    if (!earliest.empty()) lines.push_back({earliest});
    const bool bold = s.filled;
    LabelWish wish{text_width(s.label, kSmallFont) * (bold ? 1.12 : 1.0) + 4, kRow, {}};
    // Names stand best where curves are apart: high up on a band, near the 5 s end of a damage line.
    for (const Spot& spot : along(latest, s.damage ? 20 : 24)) {
      if (!s.damage || spot.y >= y.at(kDamageNameFrom)) wish.anchors.push_back(spot);
    }
    // The earliest edge of a residual element lies on the axis: a name there would be read as nothing's.
    if (s.filled) {
      for (const Spot& spot : along(earliest, 24)) wish.anchors.push_back(spot);
    }
    own.push_back({latest, earliest});
    wishes.push_back(std::move(wish));
    const std::string id = std::to_string(i);
    script += block("l" + id, s.latest);
    const auto add = [&plot](const std::string& part) { plot += (plot == "plot " ? "" : ", \\\n  ") + part; };
    if (s.damage) {
      add(fmt::format("$l{} using 1:2 with lines lw 1.6 dt (14,4,2,4) lc rgb '#5a5a5a'", id));
      continue;
    }
    if (s.filled && s.earliest.size() > 1) {
      strokes(earliest, latest, area, lines);
      script += block("b" + id, s.earliest, s.latest);
      add(fmt::format("$b{} using 1:2 with filledcurves closed fillstyle transparent pattern {} noborder lc rgb '{}'",
                      id, style.pattern, style.colour));
    }
    if (s.earliest.size() > 1) {
      script += block("e" + id, s.earliest);
      add(s.filled ? fmt::format("$e{} using 1:2 with lines lw 1.3 dt {} lc rgb '{}'", id, style.dash, style.colour)
                   : fmt::format("$e{} using 1:2 with lines lw 1.8 dt (1,3) lc rgb '{}'", id, style.colour));
    }
    add(s.filled ? fmt::format("$l{} using 1:2 with lines lw 2.4 dt {} lc rgb '{}'", id, style.dash, style.colour)
                 : fmt::format("$l{} using 1:2 with lines lw 3 dt (1,3) lc rgb '{}'", id, style.colour));
  }
  for (std::size_t i = 0; i < wishes.size(); ++i) keep_apart(wishes[i].anchors, own, i);
  const Rect frame{area.x + 2, area.y + 2, area.w - 4, area.h - 4};
  const std::vector<PlacedLabel> placed = place_labels(wishes, frame, {}, lines);
  for (std::size_t i = 0; i < placed.size(); ++i) {
    script += leader_of(placed[i]);
    script += label_in(shapes[i].label, placed[i].rect, kSmallFont, shapes[i].filled);
  }
  return draw(script + plot + '\n', path);
}

}  // namespace sunder::plots
