// SPDX-License-Identifier: Apache-2.0
/// @file
/// Overcurrent devices resolved from families of the library.
#include "models/devices.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "tests/models/resolved.h"
#include "tests/support/printed.h"

namespace {

using namespace sunder::models;
using sunder::support::Printed;
using sunder::tests::family;
using sunder::tests::refusal;
using sunder::tests::resolved;

DeviceSpec spec(const std::string& name, double In) {
  DeviceSpec made;
  made.family = name;
  made.In = In;
  return made;
}

// Source: IEC/EN 60898-1, time-current operating characteristics, tests a to e.
TEST_CASE("A type B breaker has the gates of IEC 60898-1") {
  const Device device = resolved("B", 32);
  const Curve& latest = device.overcurrent.latest;
  CHECK(latest.time_at(1.44 * 32) == kNever);
  CHECK(latest.time_at(1.45 * 32) == 3600);
  CHECK(latest.time_at(2.54 * 32) == 3600);
  CHECK(latest.time_at(2.55 * 32) == 60);
  CHECK(latest.time_at(2.99 * 32) == 60);
  CHECK(latest.time_at(3 * 32) == 45);
  CHECK(latest.time_at(std::nextafter(160, 0)) == 45);
  CHECK(latest.time_at(160) == 0.1);
  const Curve& earliest = device.overcurrent.earliest;
  CHECK(earliest.time_at(1.13 * 32) == 3600);
  CHECK(earliest.time_at(1.14 * 32) == 1);
  CHECK(earliest.time_at(2.55 * 32) == 1);
  CHECK(earliest.time_at(2.56 * 32) == 0.1);
  CHECK(earliest.time_at(96) == 0.1);
  CHECK(earliest.time_at(97) == kImmediately);
  CHECK(device.instantaneous_low == 96);
  CHECK(device.instantaneous_high == 160);
  CHECK(device.by_gates);
  CHECK(device.I2_ratio == 1.45);
  CHECK(device.text == "B 32 A");
}

TEST_CASE("Above 32 A and above 63 A the breaker gates have their longer times") {
  CHECK(resolved("C", 40).overcurrent.latest.time_at(2.55 * 40) == 120);
  CHECK(resolved("C", 40).overcurrent.latest.time_at(5 * 40) == 30);
  CHECK(resolved("C", 32).overcurrent.latest.time_at(5 * 32) == 15);
  CHECK(resolved("C", 63).overcurrent.latest.time_at(1.45 * 63) == 3600);
  CHECK(resolved("C", 80).overcurrent.latest.time_at(1.45 * 80) == 7200);
}

// Source: BS 7671:2018 Table 41.3, Zs = 0.95 * 230 V / Ia, the same for 0.4 s and 5 s.
TEST_CASE("Breakers of types B, C and D give the loop impedances of Table 41.3") {
  struct Row {
    const char* type;
    double In;
    const char* printed;
  };
  const auto row = GENERATE(values<Row>({
      {"B", 6, "7.28"},
      {"B", 32, "1.37"},
      {"B", 63, "0.69"},
      {"B", 125, "0.35"},
      {"C", 6, "3.64"},
      {"C", 10, "2.19"},
      {"C", 50, "0.44"},
      {"D", 10, "1.09"},
      {"D", 16, "0.68"},
      {"D", 63, "0.17"},
  }));
  const double time = GENERATE(0.4, 5.0);
  CAPTURE(row.type, row.In, time);
  CHECK_THAT(0.95 * 230 / current_for(resolved(row.type, row.In).overcurrent.latest, time), Printed(row.printed));
}

TEST_CASE("A maker's own multiples replace the band and leave the delayed trip unknown") {
  DeviceSpec own = spec("D", 32);
  own.multiple_low = 7;
  own.multiple_high = 10;
  const Device device = resolved(own);
  CHECK(device.overcurrent.latest.time_at(319.9) == 60);
  CHECK(device.overcurrent.latest.time_at(320) == 0.1);
  CHECK(device.overcurrent.earliest.time_at(224) == 0.1);
  CHECK(device.overcurrent.earliest.time_at(225) == kImmediately);

  DeviceSpec sensitive = spec("B", 16);
  sensitive.multiple_low = 2;
  sensitive.multiple_high = 3;
  CHECK(resolved(sensitive).overcurrent.earliest.time_at(33) == kImmediately);
  CHECK(resolved(sensitive).overcurrent.latest.time_at(48) == 0.1);
}

// Source: EN 60898-1 Annex ZA, class 3, up to 16 A, 10 kA: 70 kA2s (B), 84 kA2s (C).
TEST_CASE("An energy class bounds the let-through from the instantaneous band on") {
  DeviceSpec limited = spec("B", 16);
  limited.Icn = 10000;
  limited.energy_class = 3;
  const Device device = resolved(limited);
  CHECK(device.text == "B 16 A 10 kA class 3");
  CHECK(device.let_through.basis == LetThrough::Basis::energy_class);
  CHECK(device.let_through.total == 70000);
  CHECK(device.let_through.valid_from == 80);
  limited.family = "C";
  CHECK(resolved(limited).let_through.total == 84000);
  limited.energy_class = 1;
  CHECK(resolved(limited).let_through.basis == LetThrough::Basis::none);
}

TEST_CASE("Device texts that mean nothing are refused in one sentence") {
  CHECK(refusal(spec("B", 36)) == "'B' has no rating of 36 A; the nearest are 32 and 40 A");
  CHECK(refusal(spec("B", 200)) == "'B' has no rating of 200 A; the largest is 125 A");
  CHECK(refusal(spec("gG", 1)) == "'gG' has no rating of 1 A; the smallest is 2 A");
  CHECK(refusal(spec("B", 0)) == "'B' needs its rated current, such as 'B 32 A'");
  CHECK(refusal(spec("switch", 0)) == "'switch' needs its rated current, such as 'switch 63 A'");

  DeviceSpec bad = spec("B", 16);
  bad.energy_class = 3;
  CHECK(refusal(bad) == "energy class 3 needs the breaking capacity, such as 'B 16 A 6 kA class 3'");
  bad.Icn = 15000;
  CHECK(refusal(bad) == "EN 60898-1 has no energy class 3 for type B of 16 A and 15 kA");
  bad.energy_class = 0;
  bad.multiple_low = 10;
  bad.multiple_high = 7;
  CHECK(refusal(bad) == "instantaneous multiples 10 and 7 are out of order: above 1, the lower one first");

  DeviceSpec fuse = spec("gG", 80);
  fuse.energy_class = 3;
  CHECK(refusal(fuse) == "'gG' is a fuse: it has neither energy class nor instantaneous release");
  fuse.energy_class = 0;
  fuse.IdN = 0.03;
  CHECK(refusal(fuse) == "'gG' is a fuse: it does not act on residual current");
}

// Source: IEC 60269-1 gates as printed in a loop tester's manual, 5 s currents of gG up to 100 A.
TEST_CASE("gG fuses operate within 5 s at the printed currents") {
  struct Row {
    double In;
    const char* printed;
  };
  const auto row = GENERATE(values<Row>({{16, "65"},
                                         {20, "85"},
                                         {25, "110"},
                                         {32, "150"},
                                         {40, "190"},
                                         {50, "250"},
                                         {63, "320"},
                                         {80, "425"},
                                         {100, "580"}}));
  CHECK_THAT(current_for(resolved("gG", row.In).overcurrent.latest, 5), Printed(row.printed));
}

TEST_CASE("Gates of gG fuses rise from rating to rating and each is before its successor in time") {
  const DeviceFamily& gg = family("gG");
  for (std::size_t i = 0; i < gg.rows.size(); ++i) {
    const FamilyRow& row = gg.rows[i];
    CAPTURE(row.In);
    REQUIRE(row.latest.size() == 3);
    REQUIRE(row.earliest.size() == 3);
    for (std::size_t k = 0; k < 3; ++k) {
      CHECK(row.earliest[k].current < row.latest[k].current);
      if (i > 0) CHECK(row.latest[k].current > gg.rows[i - 1].latest[k].current);
      if (i > 0) CHECK(row.earliest[k].current > gg.rows[i - 1].earliest[k].current);
    }
  }
}

// Source: IEC 60269-1: Imax(0.1 s) of a rating equals Imin(0.1 s) of the rating 1.6 times higher,
// which is the selectivity 1:1.6 of gG fuses.
TEST_CASE("A gG fuse and the one 1.6 times its rating do not overlap at 0.1 s") {
  const auto pair = GENERATE(values<std::pair<double, double>>({{16, 25},
                                                                {20, 32},
                                                                {25, 40},
                                                                {32, 50},
                                                                {40, 63},
                                                                {50, 80},
                                                                {63, 100},
                                                                {80, 125},
                                                                {100, 160},
                                                                {125, 200},
                                                                {160, 250},
                                                                {200, 315},
                                                                {250, 400},
                                                                {315, 500},
                                                                {400, 630},
                                                                {500, 800}}));
  CAPTURE(pair.first, pair.second);
  const Device below = resolved("gG", pair.first);
  const Device above = resolved("gG", pair.second);
  CHECK(below.overcurrent.latest.points.back().current ==
        Approx(above.overcurrent.earliest.points.back().current).epsilon(0.01));
  CHECK(below.let_through.basis == LetThrough::Basis::fuse_limits);
  CHECK(below.let_through.total == above.let_through.pre_arcing_min);
}

TEST_CASE("Between gates a gG fuse stays at the last guaranteed time, its drawn line does not") {
  const Device device = resolved("gG", 80);
  CHECK(device.by_gates);
  CHECK(device.overcurrent.latest.time_at(128) == 7200);
  CHECK(device.overcurrent.latest.time_at(425) == 5);
  CHECK(device.overcurrent.latest.time_at(1099) == 5);
  CHECK(device.overcurrent.latest.time_at(1100) == 0.1);
  CHECK(device.interpolated.time_at(840) == 0.4);
  CHECK(device.overcurrent.earliest.time_at(100) == 7200);
  CHECK(device.overcurrent.earliest.time_at(215) == 10);
  CHECK(device.overcurrent.earliest.time_at(610) == 0.1);
  CHECK(device.overcurrent.earliest.time_at(611) == kImmediately);
  CHECK(device.let_through.pre_arcing_min == 16000);
  CHECK(device.let_through.valid_from == Approx(std::sqrt(46000 / 0.01)));
}

TEST_CASE(
    "Small gG fuses have their own conventional current and are not deemed to meet the overload "
    "rule") {
  CHECK(resolved("gG", 4).I2_ratio == 2.1);
  CHECK(resolved("gG", 10).I2_ratio == 1.9);
  CHECK_FALSE(resolved("gG", 10).I2_deemed);
  CHECK(resolved("gG", 16).I2_ratio == 1.6);
  CHECK(resolved("gG", 16).I2_deemed);
}

// Source: BS 7671 Tables 41.2 (0.4 s) and 41.4 (5 s) without Cmin, as printed in a tester's manual:
// Zs = 230 V / Ia. 1.5 % for the rounding of Ia and Zs.
TEST_CASE("British fuses give the tabulated loop impedances") {
  struct Row {
    const char* name;
    double In;
    double time;
    double printed;
  };
  const auto row = GENERATE(values<Row>({
      {"BS 88-2", 6, 0.4, 8.21},  {"BS 88-2", 10, 0.4, 4.89}, {"BS 88-2", 16, 0.4, 2.56}, {"BS 88-2", 20, 0.4, 1.77},
      {"BS 88-2", 25, 0.4, 1.35}, {"BS 88-2", 32, 0.4, 1.04}, {"BS 88-2", 6, 5, 12.8},    {"BS 88-2", 10, 5, 7.19},
      {"BS 88-2", 32, 5, 1.84},   {"BS 88-2", 40, 5, 1.35},   {"BS 88-2", 63, 5, 0.82},   {"BS 88-2", 80, 5, 0.57},
      {"BS 88-2", 125, 5, 0.34},  {"BS 88-2", 160, 5, 0.28},  {"BS 88-2", 200, 5, 0.19},  {"BS 88-3", 5, 0.4, 10.45},
      {"BS 88-3", 16, 0.4, 2.42}, {"BS 88-3", 32, 0.4, 0.96}, {"BS 88-3", 45, 5, 1.04},   {"BS 88-3", 80, 5, 0.53},
      {"BS 88-3", 100, 5, 0.40},  {"BS 3036", 5, 0.4, 9.58},  {"BS 3036", 15, 0.4, 2.55}, {"BS 3036", 20, 0.4, 1.77},
      {"BS 3036", 30, 0.4, 1.09}, {"BS 3036", 5, 5, 17.7},    {"BS 3036", 15, 5, 5.35},   {"BS 3036", 30, 5, 2.64},
      {"BS 3036", 45, 5, 1.59},   {"BS 3036", 60, 5, 1.12},   {"BS 3036", 100, 5, 0.53},  {"BS 1361", 5, 0.4, 10.45},
      {"BS 1361", 15, 0.4, 3.28}, {"BS 1361", 30, 0.4, 1.15}, {"BS 1361", 45, 5, 0.96},   {"BS 1361", 100, 5, 0.36},
      {"BS 1362", 3, 0.4, 16.4},  {"BS 1362", 13, 0.4, 2.42}, {"BS 1362", 3, 5, 23.2},    {"BS 1362", 13, 5, 3.83},
  }));
  CAPTURE(row.name, row.In, row.time);
  const double current = current_for(resolved(row.name, row.In).overcurrent.latest, row.time);
  CHECK(230 / current == Approx(row.printed).epsilon(0.015));
}

TEST_CASE(
    "No fuse of the library melts later than it begins to melt, nor needs more I2t at more "
    "current") {
  for (const DeviceFamily& each : sunder::netlists::library().families) {
    if (each.kind != DeviceKind::fuse) continue;
    for (const double In : each.ratings) {
      const Device device = resolved(each.name, In);
      CAPTURE(device.text);
      const Curve& latest = device.overcurrent.latest;
      for (double current = In; current < 1e3 * In; current *= 1.01) {
        if (device.overcurrent.earliest.empty()) break;
        REQUIRE(device.overcurrent.earliest.time_at(current) <= latest.time_at(current));
      }
      if (each.form != DeviceFamily::Form::points || device.by_gates || each.name == "BS 1362") continue;
      // Ten percent between neighbours for the arc and five for reading a figure.
      for (std::size_t i = 1; i < latest.points.size(); ++i) {
        const CurvePoint& a = latest.points[i - 1];
        const CurvePoint& b = latest.points[i];
        CHECK(b.current * b.current * b.time <= 1.15 * a.current * a.current * a.time);
      }
    }
  }
}

TEST_CASE("Doubtful points of fuses tell undecided from fails but guarantee nothing") {
  const Device fuse = resolved("BS 88-2", 63);
  CHECK(fuse.by_gates);
  CHECK(fuse.overcurrent.latest.time_at(550) == 1);
  CHECK(fuse.interpolated.time_at(550) < 0.4);
  CHECK(resolved("BS 88-2", 32).interpolated.empty());
  CHECK_FALSE(resolved("BS 88-2", 32).by_gates);
}

TEST_CASE("A semi-enclosed fuse needs a larger cable and bounds no let-through") {
  const Device fuse = resolved("BS 3036", 30);
  CHECK(fuse.overload_factor == 0.725);
  CHECK(fuse.let_through.basis == LetThrough::Basis::none);
}

TEST_CASE("A cartridge fuse without limits of its own lets through no more than at its 0.4 s point") {
  const Device fuse = resolved("BS 88-3", 32);
  CHECK(fuse.let_through.basis == LetThrough::Basis::falling);
  CHECK(fuse.let_through.total == Approx(240.0 * 240.0 * 0.4));
  CHECK(fuse.let_through.valid_from == 240);
}

TEST_CASE("No breaking capacity is taken that nobody stated") {
  for (const DeviceFamily& each : sunder::netlists::library().families) {
    CAPTURE(each.name);
    CHECK(each.least_Icn == 0);
  }
  DeviceSpec stated = spec("gG", 80);
  stated.Icn = 80000;
  CHECK(resolved(stated).Icn == 80000);
  CHECK(resolved(stated).text == "gG 80 A 80 kA");
}

}  // namespace
