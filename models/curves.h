// SPDX-License-Identifier: Apache-2.0
/// @file
/// Time-current curves and bands: connected pieces, straight on log-log paper, with vertical and
/// horizontal steps where a standard gives gates rather than a curve.
#pragma once

#include <limits>
#include <vector>

namespace sunder::models {

inline constexpr double kNever = std::numeric_limits<double>::infinity();

struct CurvePoint {
  double current;  ///< [A], > 0
  double time;     ///< [s], > 0
};

/// Which value a curve has exactly at a vertical step: a guarantee ("trips within") holds from the
/// step current on, so the lower one; an assurance ("does not trip before") holds up to and
/// including it, so the upper one.
enum class AtStep { lower, upper };

/// A polyline on log-log paper from the smallest current to the greatest; time does not rise.
/// Two points of equal current form a vertical step. Below its first point the time is kNever
/// (latest edge) or the first point's time (earliest edge: see Band); above its last it stays.
struct Curve {
  std::vector<CurvePoint> points;
  AtStep at_step = AtStep::lower;

  /// Time at a current [A] > 0: power law t = t1*(I/I1)^m between points. [s], kNever below the first.
  /// Errors: none. Accuracy: rounding. Source: straight line on log-log paper.
  [[nodiscard]] double time_at(double current) const noexcept;

  [[nodiscard]] bool empty() const noexcept { return points.empty(); }
};

/// From guaranteed points (I, t): "from I on, operates within t". A staircase, never interpolated.
[[nodiscard]] Curve latest_staircase(const std::vector<CurvePoint>& guarantees);

/// From assured points (I, t): "up to and including I, does not operate before t". A staircase;
/// above the last one `floor` [s] (0 is written as kImmediately so that it can be drawn).
[[nodiscard]] Curve earliest_staircase(const std::vector<CurvePoint>& assurances, double floor);

/// Shown and compared as "at once": 1 ms, below anything a check or chart resolves.
inline constexpr double kImmediately = 1e-3;

/// Earliest and latest operating time. An empty `latest` never operates; below the first point of
/// `earliest` the device does not operate at all (kNever).
struct Band {
  Curve earliest;
  Curve latest;
  [[nodiscard]] bool empty() const noexcept { return latest.empty(); }
};

/// Smallest current [A] at which the curve's time is <= `time` [s]; kNever if there is none.
/// Exact on each power-law piece.
[[nodiscard]] double current_for(const Curve& curve, double time) noexcept;

}  // namespace sunder::models
