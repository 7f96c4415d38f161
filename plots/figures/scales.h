// SPDX-License-Identifier: Apache-2.0
/// @file
/// The geometry of a chart: axes in decades, ticks, curves cut to an area, labels that do not overlap.
/// Canvas units are those of the drawing (points), x to the right, y upwards.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "models/curves.h"
#include "models/units.h"

namespace sunder::plots {

struct Rect {
  double x = 0, y = 0;  ///< lower left corner
  double w = 0, h = 0;
};

struct Spot {
  double x = 0, y = 0;
};

[[nodiscard]] bool overlaps(const Rect& a, const Rect& b) noexcept;
/// Whether the segment from a to b touches the rectangle.
[[nodiscard]] bool crosses(Spot a, Spot b, const Rect& rect) noexcept;

/// One axis: maps values to canvas units.
struct Axis {
  double least = 1, most = 10;  ///< values at the ends
  double from = 0, to = 1;      ///< canvas units at the ends
  bool logarithmic = true;
  [[nodiscard]] double at(double value) const noexcept;
  [[nodiscard]] double inverse(double canvas) const noexcept;
};

struct Tick {
  double value = 0;
  std::string label;  ///< "" for a minor tick
};

/// Ticks of a logarithmic axis: every decade labelled with its unit ("1 kA", "100 ms"); 2 and 5 too if
/// `with_2_and_5`; the other whole multiples as minor ticks.
[[nodiscard]] std::vector<Tick> decade_ticks(double least, double most, models::Quantity unit, bool with_2_and_5);

/// About `n` round steps of a linear axis.
[[nodiscard]] std::vector<double> linear_ticks(double least, double most, int n);

/// The least of 1, 2, 5 times a power of ten that is not below `value` > 0.
[[nodiscard]] double round_up_125(double value) noexcept;

/// Width of a text in canvas units at a font size, a little above what usual sans-serif fonts need.
[[nodiscard]] double text_width(std::string_view text, double font) noexcept;

/// The curve as a polyline between two currents [A], its times held within [least_time, most_time] s.
/// It comes down from the top at its first current, and ends at `to`.
[[nodiscard]] std::vector<models::CurvePoint> cut_curve(const models::Curve& curve, double from, double to,
                                                        double least_time, double most_time);

/// A label looking for a place.
struct LabelWish {
  double w = 0, h = 0;        ///< size
  std::vector<Spot> anchors;  ///< places it belongs to, the best first (points on its curve)
};

/// What a label should rather not lie on.
struct Obstacle {
  std::vector<Spot> line;  ///< polyline
  double cost = 40;        ///< of each of its segments that is covered, in canvas units of distance
};

struct PlacedLabel {
  Rect rect;
  Spot anchor;          ///< the point it belongs to
  bool leader = false;  ///< far enough away to want a line to its anchor
};

/// Places labels one after the other inside `frame`: beside an anchor where it overlaps no `taken` rectangle
/// and no label before it, covering as little of the obstacles as can be had, distance counted against it; if
/// no anchor has a clear place, a grid over the frame is searched too. Where the frame is full it takes a place below
/// it.
[[nodiscard]] std::vector<PlacedLabel> place_labels(const std::vector<LabelWish>& wishes, const Rect& frame,
                                                    const std::vector<Rect>& taken,
                                                    const std::vector<Obstacle>& obstacles);

/// Levels for labels that hang to the left of vertical lines at ascending `x`, each as wide as `widths`: no
/// label lies on another or is crossed by the line of another. Level 0 is the lowest.
[[nodiscard]] std::vector<int> stagger(const std::vector<double>& x, const std::vector<double>& widths, double gap);

}  // namespace sunder::plots
