// SPDX-License-Identifier: Apache-2.0
/// @file
/// Time-current curves: steps, power laws, staircases.
#include "models/curves.h"

#include <catch2/catch.hpp>
#include <cmath>

namespace {

using namespace sunder::models;

const Curve kStep{{{10, 100}, {50, 100}, {50, 1}, {200, 1}}, AtStep::lower};

TEST_CASE("At a step a guarantee has the lower time and an assurance the upper one") {
  Curve step = kStep;
  CHECK(step.time_at(50) == 1);
  step.at_step = AtStep::upper;
  CHECK(step.time_at(50) == 100);
}

TEST_CASE("On both sides of a step the time is that side's, exactly") {
  CHECK(kStep.time_at(std::nextafter(50, 0)) == 100);
  CHECK(kStep.time_at(std::nextafter(50, 100)) == 1);
}

TEST_CASE("Below its first point a curve never operates, above its last it stays") {
  CHECK(kStep.time_at(std::nextafter(10, 0)) == kNever);
  CHECK(kStep.time_at(10) == 100);
  CHECK(kStep.time_at(1e6) == 1);
  CHECK(Curve{}.time_at(100) == kNever);
}

TEST_CASE("Between points a curve is a power law, so I2t = constant stays constant") {
  const Curve curve{{{100, 10}, {1000, 0.1}}, AtStep::lower};
  for (const double current : {100.0, 150.0, 333.0, 999.0, 1000.0}) {
    CAPTURE(current);
    CHECK(curve.time_at(current) * current * current == Approx(1e5).epsilon(1e-12));
  }
}

TEST_CASE("The current for a time is where the curve first has that time") {
  const Curve curve{{{100, 10}, {1000, 0.1}}, AtStep::lower};
  CHECK(current_for(curve, 20) == 100);
  CHECK(current_for(curve, 10) == 100);
  CHECK(current_for(curve, 0.1) == 1000);
  CHECK(current_for(curve, 0.05) == kNever);
  CHECK(current_for(curve, 2.5) == Approx(200).epsilon(1e-12));
  CHECK(curve.time_at(current_for(curve, 0.4)) == Approx(0.4).epsilon(1e-12));
  CHECK(current_for(kStep, 5) == 50);
  CHECK(current_for(kStep, 1) == 50);
  CHECK(current_for(kStep, 100) == 10);
  CHECK(current_for(Curve{}, 5) == kNever);
}

TEST_CASE("A latest staircase holds each guaranteed time until the next guarantee") {
  const Curve curve = latest_staircase({{145, 3600}, {255, 60}, {500, 0.1}});
  CHECK(curve.time_at(144) == kNever);
  CHECK(curve.time_at(145) == 3600);
  CHECK(curve.time_at(254.9) == 3600);
  CHECK(curve.time_at(255) == 60);
  CHECK(curve.time_at(499.9) == 60);
  CHECK(curve.time_at(500) == 0.1);
  CHECK(curve.time_at(1e5) == 0.1);
}

TEST_CASE("A latest staircase ignores a later guarantee that promises less") {
  const Curve curve = latest_staircase({{100, 10}, {200, 20}, {300, 1}});
  CHECK(curve.time_at(250) == 10);
  CHECK(curve.time_at(300) == 1);
}

TEST_CASE("The order in which guarantees are given does not matter") {
  const Curve curve = latest_staircase({{500, 0.1}, {145, 3600}, {255, 60}});
  CHECK(curve.time_at(300) == 60);
}

TEST_CASE("An earliest staircase assures each time up to and including its current") {
  const Curve curve = earliest_staircase({{113, 3600}, {255, 1}, {300, 0.1}}, 0);
  CHECK(curve.time_at(112) == kNever);
  CHECK(curve.time_at(113) == 3600);
  CHECK(curve.time_at(113.1) == 1);
  CHECK(curve.time_at(255) == 1);
  CHECK(curve.time_at(256) == 0.1);
  CHECK(curve.time_at(300) == 0.1);
  CHECK(curve.time_at(301) == kImmediately);
}

TEST_CASE("What is assured at a greater current is assured at a smaller one too") {
  const Curve curve = earliest_staircase({{100, 1}, {200, 5}}, 0);
  CHECK(curve.time_at(100) == 5);
  CHECK(curve.time_at(150) == 5);
  CHECK(curve.time_at(201) == kImmediately);
}

}  // namespace
