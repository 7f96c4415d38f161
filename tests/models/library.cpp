// SPDX-License-Identifier: Apache-2.0
/// @file
/// The library's data as a whole: complete, sourced, plausible.
#include "netlists/library.h"

#include <catch2/catch.hpp>
#include <string>

#include "models/units.h"
#include "tests/models/resolved.h"

namespace {

using namespace sunder::models;
using sunder::netlists::library;
using sunder::netlists::parse_library;

TEST_CASE("The data files of the library have no defect") {
  for (const std::string& error : library().errors) FAIL_CHECK(error);
  CHECK(library().constructions.size() >= 20);
  CHECK(library().families.size() >= 11);
  CHECK(library().rule_sets.size() == 2);
}

TEST_CASE("Every table of the library names a source and a status from the list") {
  for (const CableConstruction& cable : library().constructions) {
    CAPTURE(cable.name);
    CHECK_FALSE(cable.source.empty());
    CHECK_FALSE(cable.title.empty());
    for (const CableSize& size : cable.sizes) {
      CHECK(size.confidence >= Confidence::found);
      CHECK(size.x_confidence >= Confidence::found);
      CHECK(size.armour_confidence >= Confidence::found);
    }
  }
  for (const DeviceFamily& family : library().families) {
    CAPTURE(family.name);
    CHECK_FALSE(family.source.empty());
    CHECK(family.confidence >= Confidence::found);
    for (const FamilyRow& row : family.rows) CHECK(row.confidence >= Confidence::found);
  }
  for (const RuleSet& rules : library().rule_sets) {
    CAPTURE(rules.name);
    CHECK_FALSE(rules.source.empty());
    for (const AdiabaticRow& row : rules.k) CHECK_FALSE(row.clause.empty());
  }
}

// Resistivity of IEC 60287-1-1; IEC 60228 maxima stand above area times that because nominal areas
// are rounded up (50 mm2 is about 47.5) and strands are longer than the cable: 0.97 to 1.16 over
// all sizes and classes.
TEST_CASE("Resistance times area of every conductor is the resistivity of its metal") {
  for (const CableConstruction& cable : library().constructions) {
    const double rho = cable.material == Material::copper ? 1.7241e-8 : 2.8264e-8;
    for (const CableSize& size : cable.sizes) {
      CAPTURE(cable.name, size.area * 1e6);
      CHECK(size.r20 * size.area / rho > 0.97);
      CHECK(size.r20 * size.area / rho < 1.17);
      if (size.cpc_area > 0) CHECK(size.cpc_r20 * size.cpc_area / rho == Approx(1.05).margin(0.05));
    }
  }
}

// Lay and tolerance of wire armour: 1.08 to 1.23 over all cells of BS 5467.
TEST_CASE("Resistance times area of every armour is the resistivity of steel, lay and tolerance added") {
  for (const CableConstruction& cable : library().constructions) {
    for (const CableSize& size : cable.sizes) {
      if (size.armour_area <= 0) continue;
      CAPTURE(cable.name, size.area * 1e6);
      CHECK(size.armour_r20 * size.armour_area / 13.8e-8 > 1.07);
      CHECK(size.armour_r20 * size.armour_area / 13.8e-8 < 1.24);
    }
  }
}

TEST_CASE("Larger conductors have less resistance and no more reactance to speak of") {
  for (const CableConstruction& cable : library().constructions) {
    for (std::size_t i = 1; i < cable.sizes.size(); ++i) {
      CAPTURE(cable.name, cable.sizes[i].area * 1e6);
      CHECK(cable.sizes[i].r20 < cable.sizes[i - 1].r20);
      CHECK(cable.sizes[i].x <= cable.sizes[i - 1].x * 1.02);
      CHECK(cable.sizes[i].armour_area >= cable.sizes[i - 1].armour_area);
      CHECK(cable.sizes[i].x > 0.06e-3);
      CHECK(cable.sizes[i].x < 0.16e-3);
    }
  }
}

TEST_CASE("No cable or breaker of the library rests on a value of low confidence") {
  for (const CableConstruction& cable : library().constructions) {
    CAPTURE(cable.name);
    for (const CableSize& size : cable.sizes) {
      CHECK(worse(worse(size.confidence, size.x_confidence), size.armour_confidence) < Confidence::low);
    }
  }
  for (const char* name : {"B", "C", "D", "RCD"}) {
    CHECK(sunder::tests::family(name).confidence == Confidence::found);
  }
}

std::string only_error(const std::string& text) {
  const auto parsed = parse_library({{"own.toml", text}});
  return parsed.errors.size() == 1 ? parsed.errors[0] : std::to_string(parsed.errors.size()) + " errors";
}

const std::string kCable =
    "[cable.x]\ntitle = 't'\nmaterial = 'copper'\ninsulation = 'pvc70'\nmax = '70 degC'\ncores = "
    "2\n"
    "source = 's'\nstatus = 'found'\n";
const std::string kSize =
    "sizes = [{ size = '1.5 mm2', r20 = '12.1 mohm/m', x = '0.1 mohm/m', status = 'found', "
    "x_status = 'found' }]\n";

TEST_CASE("A cable construction is added by one table") {
  const auto parsed = parse_library({{"own.toml", kCable + kSize}});
  for (const std::string& error : parsed.errors) FAIL_CHECK(error);
  REQUIRE(parsed.constructions.size() == 1);
  CHECK(parsed.constructions[0].sizes.at(0).r20 == 12.1e-3);
  CHECK(parsed.constructions[0].cores == 2);
}

TEST_CASE("Defects of a data file are named with their place") {
  CHECK(only_error("[cable.x\n").substr(0, 11) == "own.toml:1:");
  CHECK(only_error(kCable + kSize + "colour = 'red'\n") == "own.toml: x: unknown key 'colour'");
  CHECK(only_error(kCable) == "own.toml: x: 'sizes' is missing");
  CHECK(only_error(kCable + "sizes = [{ size = '1.5', r20 = '12.1 mohm/m', x = '0.1 mohm/m', status = 'found', "
                            "x_status = 'found' }]\n") ==
        "own.toml: x, sizes 1: 'size': '1.5' has no unit; an area is written in mm2, cm2, m2");
  CHECK(only_error(kCable + "sizes = [{ size = '1.5 mm2', r20 = '12.1 mohm/m', x = '0.1 mohm/m', status = "
                            "'guess', x_status = 'found' }]\n") ==
        "own.toml: x, sizes 1: 'status' has the unknown word 'guess'");
  CHECK(only_error("[widget.x]\n") == "own.toml: unknown kind 'widget'");
  const auto twice = parse_library({{"a.toml", kCable + kSize}, {"b.toml", kCable + kSize}});
  REQUIRE(twice.errors.size() == 1);
  CHECK(twice.errors[0] == "'x' is there twice");
}

}  // namespace
