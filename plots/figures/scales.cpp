// SPDX-License-Identifier: Apache-2.0
#include "plots/figures/scales.h"

#include <algorithm>
#include <cmath>

namespace sunder::plots {
namespace {

// Distance kept between a label and what it must not touch.
constexpr double kClear = 3;
// A line of another within this distance makes it doubtful whose name it is.
constexpr double kClose = 4;
// Beyond this distance a label gets a line to its anchor.
constexpr double kNear = 9;
// What a leader across a line costs, as a share of what a label on it would.
constexpr double kLeaderShare = 0.4;
// Step of the grid searched when no place beside an anchor is free.
constexpr double kGrid = 6;

bool inside(const Rect& rect, const Rect& frame) noexcept {
  return rect.x >= frame.x && rect.y >= frame.y && rect.x + rect.w <= frame.x + frame.w &&
         rect.y + rect.h <= frame.y + frame.h;
}

Rect grown(const Rect& rect, double by) noexcept {
  return {rect.x - by, rect.y - by, rect.w + 2 * by, rect.h + 2 * by};
}

double distance(const Rect& rect, Spot spot) noexcept {
  const double dx = std::max({rect.x - spot.x, 0.0, spot.x - rect.x - rect.w});
  const double dy = std::max({rect.y - spot.y, 0.0, spot.y - rect.y - rect.h});
  return std::hypot(dx, dy);
}

Spot nearest_point(const Rect& rect, Spot spot) noexcept {
  return {std::clamp(spot.x, rect.x, rect.x + rect.w), std::clamp(spot.y, rect.y, rect.y + rect.h)};
}

double covering(const Rect& rect, const std::vector<Obstacle>& obstacles) {
  double cost = 0;
  for (const Obstacle& obstacle : obstacles) {
    for (std::size_t i = 1; i < obstacle.line.size(); ++i) {
      if (crosses(obstacle.line[i - 1], obstacle.line[i], rect)) cost += obstacle.cost;
    }
  }
  return cost;
}

// Segments meet where the ends of each lie on both sides of the other.
bool meet(Spot a, Spot b, Spot c, Spot d) noexcept {
  const auto side = [](Spot p, Spot q, Spot r) { return (q.x - p.x) * (r.y - p.y) - (q.y - p.y) * (r.x - p.x); };
  return side(a, b, c) * side(a, b, d) < 0 && side(c, d, a) * side(c, d, b) < 0;
}

double crossed(Spot a, Spot b, const std::vector<Obstacle>& obstacles) {
  double cost = 0;
  for (const Obstacle& obstacle : obstacles) {
    for (std::size_t i = 1; i < obstacle.line.size(); ++i) {
      if (meet(a, b, obstacle.line[i - 1], obstacle.line[i])) cost += obstacle.cost;
    }
  }
  return cost;
}

class Placer {
 public:
  Placer(const Rect& frame, const std::vector<Rect>& taken, const std::vector<Obstacle>& obstacles)
      : frame_(frame), taken_(taken), obstacles_(obstacles) {}

  PlacedLabel place(const LabelWish& wish) {
    PlacedLabel best;
    double least = -1;
    const auto consider = [&](const Rect& rect, Spot anchor, double penalty) {
      if (!inside(rect, frame_) || blocked(rect)) return;
      const bool leader = distance(rect, anchor) > kNear;
      double cost = penalty + distance(rect, anchor);
      if (least >= 0 && cost >= least) return;
      cost += covering(grown(rect, kClose), obstacles_);
      if (least >= 0 && cost >= least) return;
      if (leader) {
        const Spot end = nearest_point(rect, anchor);
        if (over_a_label(end, anchor)) return;
        cost += kLeaderShare * crossed(end, anchor, obstacles_);
        if (least >= 0 && cost >= least) return;
      }
      least = cost;
      best = {rect, anchor, leader};
    };
    double later = 0;
    for (const Spot& a : wish.anchors) {
      for (const double gap : {6.0, 14.0}) {
        consider({a.x + gap, a.y - wish.h / 2, wish.w, wish.h}, a, later);
        consider({a.x - gap - wish.w, a.y - wish.h / 2, wish.w, wish.h}, a, later);
        consider({a.x + gap, a.y + gap, wish.w, wish.h}, a, later + 2);
        consider({a.x - gap - wish.w, a.y - gap - wish.h, wish.w, wish.h}, a, later + 2);
      }
      later += 1.5;
    }
    if (least < 0 || least >= 40) {
      for (double y = frame_.y; y + wish.h <= frame_.y + frame_.h; y += kGrid) {
        for (double x = frame_.x; x + wish.w <= frame_.x + frame_.w; x += kGrid) {
          const Rect rect{x, y, wish.w, wish.h};
          Spot nearest = wish.anchors.empty() ? Spot{frame_.x, frame_.y} : wish.anchors.front();
          for (const Spot& a : wish.anchors) {
            if (distance(rect, a) < distance(rect, nearest)) nearest = a;
          }
          consider(rect, nearest, 10);
        }
      }
    }
    if (least < 0) {
      // Nothing is free: below the frame, one under the other, so that it is still read.
      overflow_ += wish.h + kClear;
      best = {{frame_.x, frame_.y - overflow_, wish.w, wish.h}, {frame_.x, frame_.y}, false};
    }
    placed_.push_back(best.rect);
    if (best.leader) leaders_.push_back({nearest_point(best.rect, best.anchor), best.anchor});
    return best;
  }

 private:
  [[nodiscard]] bool blocked(const Rect& rect) const {
    const Rect wide = grown(rect, kClear);
    const auto hit = [&wide](const Rect& other) { return overlaps(wide, other); };
    return std::any_of(taken_.begin(), taken_.end(), hit) || std::any_of(placed_.begin(), placed_.end(), hit) ||
           std::any_of(leaders_.begin(), leaders_.end(),
                       [&wide](const std::vector<Spot>& line) { return crosses(line[0], line[1], wide); });
  }
  [[nodiscard]] bool over_a_label(Spot a, Spot b) const {
    return std::any_of(placed_.begin(), placed_.end(), [&](const Rect& rect) { return crosses(a, b, rect); });
  }

  Rect frame_;
  const std::vector<Rect>& taken_;
  const std::vector<Obstacle>& obstacles_;
  std::vector<Rect> placed_;
  std::vector<std::vector<Spot>> leaders_;  // pairs of ends
  double overflow_ = 0;
};

}  // namespace

bool overlaps(const Rect& a, const Rect& b) noexcept {
  return a.x < b.x + b.w && b.x < a.x + a.w && a.y < b.y + b.h && b.y < a.y + a.h;
}

bool crosses(Spot a, Spot b, const Rect& r) noexcept {
  // Liang-Barsky: the part of the segment inside all four half-planes.
  double t0 = 0;
  double t1 = 1;
  const double d[4] = {-(b.x - a.x), b.x - a.x, -(b.y - a.y), b.y - a.y};
  const double q[4] = {a.x - r.x, r.x + r.w - a.x, a.y - r.y, r.y + r.h - a.y};
  for (int i = 0; i < 4; ++i) {
    if (d[i] == 0) {
      if (q[i] < 0) return false;
      continue;
    }
    const double t = q[i] / d[i];
    if (d[i] < 0)
      t0 = std::max(t0, t);
    else
      t1 = std::min(t1, t);
  }
  return t0 <= t1;
}

double Axis::at(double value) const noexcept {
  const double share =
      logarithmic ? std::log(value / least) / std::log(most / least) : (value - least) / (most - least);
  return from + share * (to - from);
}

double Axis::inverse(double canvas) const noexcept {
  const double share = (canvas - from) / (to - from);
  return logarithmic ? least * std::pow(most / least, share) : least + share * (most - least);
}

std::vector<Tick> decade_ticks(double least, double most, models::Quantity unit, bool with_2_and_5) {
  std::vector<Tick> ticks;
  const int first = static_cast<int>(std::floor(std::log10(least) + 1e-9));
  for (int decade = first; std::pow(10.0, decade) <= most * (1 + 1e-9); ++decade) {
    for (int m = 1; m <= 9; ++m) {
      const double value = m * std::pow(10.0, decade);
      if (value < least * (1 - 1e-9) || value > most * (1 + 1e-9)) continue;
      const bool labelled = m == 1 || (with_2_and_5 && (m == 2 || m == 5));
      ticks.push_back({value, labelled ? models::format_quantity(value, unit) : std::string()});
    }
  }
  return ticks;
}

double round_up_125(double value) noexcept {
  const double power = std::pow(10.0, std::floor(std::log10(value)));
  for (const double m : {1.0, 2.0, 5.0}) {
    if (m * power >= value * (1 - 1e-9)) return m * power;
  }
  return 10 * power;
}

std::vector<double> linear_ticks(double least, double most, int n) {
  std::vector<double> ticks;
  if (!(most > least) || n < 1) return ticks;
  const double step = round_up_125((most - least) / n);
  for (double k = std::ceil(least / step - 1e-9); k * step <= most + 1e-9 * step; ++k) {
    ticks.push_back(k == 0 ? 0.0 : k * step);
  }
  return ticks;
}

double text_width(std::string_view text, double font) noexcept {
  double em = 0;
  for (const char c : text) {
    const auto byte = static_cast<unsigned char>(c);
    if ((byte & 0xC0U) == 0x80U) continue;  // the rest of a code point
    if (byte >= 0xE0U)
      em += 1.0;
    else if (c == 'i' || c == 'l' || c == 'j' || c == '.' || c == ',' || c == ':' || c == '\'' || c == ' ')
      em += 0.34;
    else if (c == 'm' || c == 'w' || c == 'M' || c == 'W' || c == '%')
      em += 0.98;
    else if (c >= 'A' && c <= 'Z')
      em += 0.72;
    else
      em += 0.63;
  }
  return 0.94 * em * font;
}

std::vector<models::CurvePoint> cut_curve(const models::Curve& curve, double from, double to, double least_time,
                                          double most_time) {
  std::vector<models::CurvePoint> line;
  if (curve.points.empty() || !(to > from) || curve.points.front().current >= to) return line;
  const auto held = [&](double time) { return std::clamp(time, least_time, most_time); };
  const models::CurvePoint& first = curve.points.front();
  if (first.current >= from) {
    line.push_back({first.current, most_time});
  } else {
    line.push_back({from, held(curve.time_at(from))});
  }
  const models::CurvePoint* before = nullptr;
  for (const models::CurvePoint& p : curve.points) {
    if (p.current >= from && p.current <= to) {
      // Where a sloping piece leaves the area of times, its crossing is a point of its own.
      if (before != nullptr && p.current > before->current && p.time != before->time) {
        for (const double edge : {most_time, least_time}) {
          if ((before->time - edge) * (p.time - edge) < 0) {
            const double slope = std::log(p.current / before->current) / std::log(p.time / before->time);
            const double current = before->current * std::pow(edge / before->time, slope);
            if (current > from && current < to) line.push_back({current, edge});
          }
        }
      }
      line.push_back({p.current, held(p.time)});
    }
    before = &p;
  }
  if (line.back().current < to) line.push_back({to, held(curve.time_at(to))});
  return line;
}

std::vector<PlacedLabel> place_labels(const std::vector<LabelWish>& wishes, const Rect& frame,
                                      const std::vector<Rect>& taken, const std::vector<Obstacle>& obstacles) {
  Placer placer(frame, taken, obstacles);
  std::vector<PlacedLabel> placed;
  placed.reserve(wishes.size());
  for (const LabelWish& wish : wishes) placed.push_back(placer.place(wish));
  return placed;
}

std::vector<int> stagger(const std::vector<double>& x, const std::vector<double>& widths, double gap) {
  std::vector<int> levels(x.size(), 0);
  for (std::size_t j = 0; j < x.size(); ++j) {
    for (std::size_t i = 0; i < j; ++i) {
      if (x[i] > x[j] - widths[j] - gap) levels[j] = std::max(levels[j], levels[i] + 1);
    }
  }
  return levels;
}

}  // namespace sunder::plots
