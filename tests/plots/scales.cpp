// SPDX-License-Identifier: Apache-2.0
#include "plots/figures/scales.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

using namespace sunder;
using namespace sunder::plots;
using Catch::WithinRel;

TEST_CASE("Every decade of a logarithmic axis has a tick with its unit, ends included") {
  std::vector<std::string> labels;
  for (const Tick& tick : decade_ticks(1e-3, 1e4, models::Quantity::time, false)) {
    if (!tick.label.empty()) labels.push_back(tick.label);
  }
  REQUIRE(labels.size() == 8);
  CHECK(labels.front() == models::format_quantity(1e-3, models::Quantity::time));
  CHECK(labels.back() == models::format_quantity(1e4, models::Quantity::time));
}

TEST_CASE("Between decades stand the whole multiples, of which 2 and 5 may be labelled") {
  const auto ticks = decade_ticks(10, 100, models::Quantity::current, true);
  REQUIRE(ticks.size() == 10);
  CHECK(ticks[0].label == "10 A");
  CHECK(ticks[1].label == "20 A");
  CHECK(ticks[2].label.empty());
  CHECK(ticks[4].label == "50 A");
  CHECK(ticks[9].label == "100 A");
}

TEST_CASE("Ticks of a linear axis are round, inside it, and include zero") {
  const auto ticks = linear_ticks(-60, 75, 8);
  REQUIRE(!ticks.empty());
  CHECK(ticks.front() >= -60);
  CHECK(ticks.back() <= 75);
  CHECK(std::find(ticks.begin(), ticks.end(), 0.0) != ticks.end());
  CHECK(linear_ticks(5, 5, 8).empty());
}

TEST_CASE("Rounding up to 1, 2 or 5 never goes below the value") {
  CHECK_THAT(round_up_125(16000), WithinRel(20000.0, 1e-12));
  CHECK_THAT(round_up_125(20000), WithinRel(20000.0, 1e-12));
  CHECK_THAT(round_up_125(20001), WithinRel(50000.0, 1e-12));
  CHECK_THAT(round_up_125(0.07), WithinRel(0.1, 1e-12));
}

TEST_CASE("An axis maps its ends to its ends, and back") {
  const Axis axis{1, 1000, 100, 400, true};
  CHECK_THAT(axis.at(1), WithinRel(100.0, 1e-12));
  CHECK_THAT(axis.at(1000), WithinRel(400.0, 1e-12));
  CHECK_THAT(axis.at(10), WithinRel(200.0, 1e-12));
  CHECK_THAT(axis.inverse(axis.at(37)), WithinRel(37.0, 1e-12));
}

TEST_CASE("Segments are known to touch a rectangle or to pass it") {
  const Rect rect{10, 10, 20, 10};
  CHECK(crosses({0, 15}, {40, 15}, rect));
  CHECK(crosses({15, 12}, {16, 13}, rect));  // wholly inside
  CHECK_FALSE(crosses({0, 0}, {40, 5}, rect));
  CHECK_FALSE(crosses({0, 25}, {9, 5}, rect));
  CHECK_FALSE(overlaps(rect, {30, 10, 5, 5}));  // side by side
  CHECK(overlaps(rect, {29, 19, 5, 5}));
}

TEST_CASE("Labels never lie on one another, whatever the number and places of their anchors") {
  std::mt19937 random(20260711);  // seed written here so that a failure can be repeated
  std::uniform_real_distribution<double> x(0, 900);
  std::uniform_real_distribution<double> y(0, 500);
  for (int round = 0; round < 20; ++round) {
    std::vector<LabelWish> wishes;
    for (int i = 0; i < 14; ++i) {
      LabelWish wish{120, 15, {}};
      for (int k = 0; k < 5; ++k) wish.anchors.push_back({x(random), y(random)});
      wishes.push_back(wish);
    }
    const Rect frame{0, 0, 900, 500};
    const std::vector<Rect> taken{{300, 200, 100, 100}};
    const auto placed = place_labels(wishes, frame, taken, {{{{0, 0}, {900, 500}}}});
    REQUIRE(placed.size() == wishes.size());
    for (std::size_t i = 0; i < placed.size(); ++i) {
      CHECK_FALSE(overlaps(placed[i].rect, taken[0]));
      for (std::size_t k = 0; k < i; ++k) {
        CAPTURE(round, i, k);
        CHECK_FALSE(overlaps(placed[i].rect, placed[k].rect));
      }
    }
  }
}

TEST_CASE("Labels that share one anchor are kept apart, and those moved away get a leader") {
  const std::vector<LabelWish> wishes(6, LabelWish{100, 15, {{200, 200}}});
  const auto placed = place_labels(wishes, {0, 0, 600, 400}, {}, {});
  int leaders = 0;
  for (std::size_t i = 0; i < placed.size(); ++i) {
    leaders += placed[i].leader ? 1 : 0;
    for (std::size_t k = 0; k < i; ++k) CHECK_FALSE(overlaps(placed[i].rect, placed[k].rect));
  }
  CHECK(leaders >= 1);
}

TEST_CASE("Labels that do not fit the frame are put below it, one under the other") {
  const std::vector<LabelWish> wishes(3, LabelWish{300, 15, {{50, 20}}});
  const auto placed = place_labels(wishes, {0, 0, 100, 40}, {}, {});
  for (std::size_t i = 0; i < placed.size(); ++i) {
    CHECK(placed[i].rect.y < 0);
    for (std::size_t k = 0; k < i; ++k) CHECK_FALSE(overlaps(placed[i].rect, placed[k].rect));
  }
}

TEST_CASE("Names hanging left of vertical lines are staggered clear of each other and of the lines") {
  std::mt19937 random(31);
  std::uniform_real_distribution<double> place(0, 1000);
  for (int round = 0; round < 50; ++round) {
    std::vector<double> x;
    for (int i = 0; i < 9; ++i) x.push_back(place(random));
    std::sort(x.begin(), x.end());
    const std::vector<double> widths(9, 220);
    const auto levels = stagger(x, widths, 6);
    for (std::size_t j = 0; j < x.size(); ++j) {
      for (std::size_t i = 0; i < j; ++i) {
        CAPTURE(round, i, j);
        // The name at j reaches over line i, which must therefore end below it.
        if (x[i] > x[j] - widths[j]) CHECK(levels[i] < levels[j]);
      }
    }
  }
}

TEST_CASE("A cut curve comes down from the top, ends at the cut, and stays within the area") {
  models::Curve curve;
  curve.points = {{100, 1e6}, {1000, 1}, {5000, 1e-5}};
  const auto line = cut_curve(curve, 10, 2000, 1e-3, 1e4);
  REQUIRE(line.size() >= 3);
  CHECK(line.front().time == 1e4);
  CHECK_THAT(line.back().current, WithinRel(2000.0, 1e-12));
  for (std::size_t i = 0; i < line.size(); ++i) {
    CHECK(line[i].time >= 1e-3);
    CHECK(line[i].time <= 1e4);
    if (i > 0) CHECK(line[i].current >= line[i - 1].current);
  }
  // It leaves the top edge where t = 1e6 (I/100)^-6 is 1e4 s.
  bool leaves = false;
  for (const auto& p : line) leaves = leaves || std::fabs(p.current - 100 * std::pow(100.0, 1.0 / 6)) < 1e-6;
  CHECK(leaves);
}

TEST_CASE("A curve that starts above the cut is not drawn") {
  models::Curve curve;
  curve.points = {{100, 10}, {200, 1}};
  CHECK(cut_curve(curve, 1, 90, 1e-3, 1e4).empty());
  CHECK(cut_curve({}, 1, 90, 1e-3, 1e4).empty());
}
