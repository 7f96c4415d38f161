// SPDX-License-Identifier: Apache-2.0
/// @file
/// Residual current devices and combined ones.
#include <catch2/catch.hpp>

#include "models/devices.h"
#include "tests/models/resolved.h"

namespace {

using namespace sunder::models;
using sunder::tests::refusal;
using sunder::tests::resolved;

DeviceSpec rcd(double IdN, bool selective = false) {
  DeviceSpec spec;
  spec.family = "RCD";
  spec.In = 63;
  spec.IdN = IdN;
  spec.selective = selective;
  return spec;
}

// Source: IEC 61008-1, maximum break times of the general type: 0.3, 0.15 and 0.04 s at 1, 2 and 5
// times.
TEST_CASE("A general residual current device has the break times of IEC 61008-1") {
  const Device device = resolved(rcd(0.1));
  CHECK(device.kind == DeviceKind::residual);
  CHECK(device.overcurrent.empty());
  const Curve& latest = device.residual.latest;
  CHECK(latest.time_at(0.099) == kNever);
  CHECK(latest.time_at(0.1) == 0.3);
  CHECK(latest.time_at(0.2) == 0.15);
  CHECK(latest.time_at(0.499) == 0.15);
  CHECK(latest.time_at(0.5) == 0.04);
  CHECK(latest.time_at(500) == 0.04);
  CHECK(device.residual.earliest.time_at(0.049) == kNever);
  CHECK(device.residual.earliest.time_at(0.051) == kImmediately);
}

TEST_CASE("Up to 30 mA the shortest time counts from 0.25 A, the other test current allowed") {
  const Device device = resolved(rcd(0.03));
  CHECK(device.residual.latest.time_at(0.249) == 0.15);
  CHECK(device.residual.latest.time_at(0.25) == 0.04);
}

// Source: IEC 61008-1, type S: break times 0.5, 0.2, 0.15 s; non-actuating 0.13, 0.06, 0.05 s, 0.04
// s at 500 A.
TEST_CASE("A type S device waits its non-actuating times") {
  const Device device = resolved(rcd(0.3, true));
  CHECK(device.selective_residual);
  CHECK(device.residual.latest.time_at(0.3) == 0.5);
  CHECK(device.residual.latest.time_at(0.6) == 0.2);
  CHECK(device.residual.latest.time_at(1.5) == 0.15);
  CHECK(device.residual.earliest.time_at(0.3) == 0.13);
  CHECK(device.residual.earliest.time_at(0.6) == 0.06);
  CHECK(device.residual.earliest.time_at(1.5) == 0.05);
  CHECK(device.residual.earliest.time_at(500) == 0.04);
  CHECK(device.residual.earliest.time_at(501) == kImmediately);
}

TEST_CASE("A type S device of 300 mA and a general one of 100 mA do not overlap from 0.3 A on") {
  const Device above = resolved(rcd(0.3, true));
  const Device below = resolved(rcd(0.1));
  for (double current = 0.5; current < 500; current *= 1.1) {
    CAPTURE(current);
    CHECK(below.residual.latest.time_at(current) <= above.residual.earliest.time_at(current));
  }
}

TEST_CASE("A combined device has both releases") {
  DeviceSpec spec;
  spec.family = "B";
  spec.In = 32;
  spec.Icn = 6000;
  spec.IdN = 0.03;
  spec.has_type = true;
  spec.type = ResidualType::A;
  const Device device = resolved(spec);
  CHECK(device.text == "B 32 A 6 kA 30 mA A");
  CHECK(device.kind == DeviceKind::breaker);
  CHECK(device.Icn == 6000);
  CHECK(device.IdN == 0.03);
  CHECK(device.residual_type == ResidualType::A);
  CHECK_FALSE(device.overcurrent.empty());
  CHECK_FALSE(device.residual.empty());
}

TEST_CASE("Residual devices that do not exist are refused in one sentence") {
  CHECK(refusal(rcd(0.03, true)) == "type S exists above 30 mA only, not with 30 mA");
  CHECK(refusal(rcd(0)) == "'RCD' needs its residual operating current, such as '30 mA'");
  DeviceSpec typed;
  typed.family = "B";
  typed.In = 16;
  typed.has_type = true;
  typed.type = ResidualType::A;
  CHECK(refusal(typed) == "'B' has no residual operating current, so type A means nothing");
}

TEST_CASE("A switch protects against nothing") {
  const Device device = resolved("switch", 100);
  CHECK(device.kind == DeviceKind::isolator);
  CHECK(device.overcurrent.empty());
  CHECK(device.residual.empty());
}

}  // namespace
