// SPDX-License-Identifier: Apache-2.0
/// @file
/// Cables resolved into conductors.
#include "models/cables.h"

#include <catch2/catch.hpp>

#include "tests/models/resolved.h"
#include "tests/support/printed.h"

namespace {

using namespace sunder::models;
using sunder::support::Printed;
using sunder::tests::construction;

constexpr double kMm2 = 1e-6;

Cable resolved(const std::string& name, double mm2, const CpcChoice& cpc, int n_loaded, bool neutral = true) {
  Cable cable;
  const auto error =
      resolve_cable(construction(name), mm2 * kMm2, cpc, n_loaded, neutral, construction("singles-pvc-cu"), cable);
  if (error) FAIL(error->message);
  return cable;
}

std::string refused(const std::string& name, double mm2, const CpcChoice& cpc, int n_loaded) {
  Cable cable;
  const auto error =
      resolve_cable(construction(name), mm2 * kMm2, cpc, n_loaded, true, construction("singles-pvc-cu"), cable);
  return error ? error->message : "accepted";
}

CpcChoice core() { return {.core = true}; }
CpcChoice armour() { return {.armour = true}; }
CpcChoice built_in() { return {.built_in = true}; }

TEST_CASE("An armoured cable with its armour as protective conductor has two kinds of strand") {
  const Cable cable = resolved("swa-xlpe-cu-4c", 35, armour(), 4);
  CHECK(cable.text == "swa-xlpe-cu-4c 35 mm2");
  CHECK(cable.insulation == "xlpe90");
  CHECK(cable.max_degc == 90);
  CHECK(cable.area == 35 * kMm2);
  CHECK(cable.n_loaded == 4);
  CHECK(cable.with_neutral);
  CHECK(cable.line.label == "35 mm2 core");
  CHECK(cable.line.material == Material::copper);
  CHECK_FALSE(cable.neutral.has_value());
  REQUIRE(cable.protective.size() == 1);
  CHECK(cable.protective[0].label == "armour of 78 mm2");
  CHECK(cable.protective[0].place == Place::armour);
  CHECK(cable.protective[0].material == Material::steel);
}

TEST_CASE("Armour and a core, or armour and a conductor beside it, share the current") {
  CpcChoice with_core = armour();
  with_core.core = true;
  const Cable both = resolved("swa-xlpe-cu-4c", 16, with_core, 3);
  REQUIRE(both.protective.size() == 2);
  CHECK(both.protective[0].label == "16 mm2 core");
  CHECK(both.protective[1].label == "armour of 50 mm2");

  CpcChoice beside = armour();
  beside.separate = 16 * kMm2;
  const Cable with_single = resolved("swa-xlpe-cu-4c", 35, beside, 4);
  REQUIRE(with_single.protective.size() == 2);
  CHECK(with_single.protective[1].label == "16 mm2 beside it");
  CHECK(with_single.protective[1].place == Place::separate);
  CHECK(with_single.protective[1].insulation == "pvc70");
}

TEST_CASE("Every core that is used must be there") {
  CHECK(resolved("swa-xlpe-cu-4c", 16, core(), 3).protective.size() == 1);
  CHECK(refused("swa-xlpe-cu-4c", 16, core(), 4) ==
        "'swa-xlpe-cu-4c' has 4 cores, but 4 loaded conductors and a core as protective conductor "
        "need 5");
  CHECK(refused("multicore-pvc-cu-2c", 16, {}, 4) ==
        "'multicore-pvc-cu-2c' has 2 cores, but 4 loaded conductors are needed");
}

TEST_CASE("Singles bring a protective single of the size asked for") {
  CpcChoice smaller = core();
  smaller.core_area = 2.5 * kMm2;
  const Cable cable = resolved("singles-pvc-cu", 4, smaller, 4);
  CHECK(cable.text == "singles-pvc-cu 4/2.5 mm2");
  REQUIRE(cable.protective.size() == 1);
  CHECK(cable.protective[0].label == "2.5 mm2 single");
  CHECK(resolved("singles-pvc-cu", 4, core(), 4).protective[0].label == "4 mm2 single");
}

TEST_CASE("Sizes, armour and protective conductors that do not exist are refused by name") {
  CHECK(refused("swa-xlpe-cu-4c", 30, armour(), 4) == "'swa-xlpe-cu-4c' has no 30 mm2; the nearest are 25 and 35 mm2");
  CHECK(refused("swa-xlpe-cu-4c", 1, armour(), 4) == "'swa-xlpe-cu-4c' has no 1 mm2; its smallest is 1.5 mm2");
  CHECK(refused("swa-xlpe-cu-4c", 1000, armour(), 4) == "'swa-xlpe-cu-4c' has no 1000 mm2; its largest is 400 mm2");
  CHECK(refused("singles-pvc-cu", 4, armour(), 2) == "'singles-pvc-cu' 4 mm2 has no armour");
  CHECK(refused("singles-pvc-cu", 4, built_in(), 2) == "'singles-pvc-cu' has no protective conductor of its own");
  CpcChoice wrong = built_in();
  wrong.core_area = 2.5 * kMm2;
  CHECK(refused("flat-pvc-cu", 2.5, wrong, 2) ==
        "the protective conductor of 'flat-pvc-cu' 2.5 mm2 has 1.5 mm2, not 2.5 mm2");
}

// Source: sum of the conductors of flat twin and earth at 20 degC in mohm/m, as BS 7671 practice
// tabulates R1 + R2.
TEST_CASE("R1 + R2 of flat cables at 20 degC are those of the tables") {
  struct Row {
    double mm2;
    const char* text;
    const char* printed;
  };
  const auto row = GENERATE(values<Row>({
      {1, "flat-pvc-cu 1 mm2", "36.2"},
      {1.5, "flat-pvc-cu 1.5/1 mm2", "30.2"},
      {2.5, "flat-pvc-cu 2.5/1.5 mm2", "19.51"},
      {4, "flat-pvc-cu 4/1.5 mm2", "16.71"},
      {6, "flat-pvc-cu 6/2.5 mm2", "10.49"},
      {10, "flat-pvc-cu 10/4 mm2", "6.44"},
      {16, "flat-pvc-cu 16/6 mm2", "4.23"},
  }));
  const Cable cable = resolved("flat-pvc-cu", row.mm2, built_in(), 2);
  CHECK(cable.text == row.text);
  CHECK_THAT(cable.line.r20 + cable.protective.at(0).r20, Printed(row.printed, 1e-3));
}

// Source: BS 7671 Tables 4D5 and 4D2B (70 degC, two conductors) and 4E4B (90 degC), mV/A/m;
// factors 1.20 and 1.28 of BS 7671 practice.
TEST_CASE("Twice the hot resistance is the tabulated voltage drop of small cables") {
  struct Row {
    const char* name;
    double mm2;
    double factor;
    const char* printed;
  };
  const auto row = GENERATE(values<Row>({
      {"flat-pvc-cu", 1, 1.20, "44"},
      {"flat-pvc-cu", 1.5, 1.20, "29"},
      {"flat-pvc-cu", 2.5, 1.20, "18"},
      {"flat-pvc-cu", 4, 1.20, "11"},
      {"flat-pvc-cu", 6, 1.20, "7.3"},
      {"flat-pvc-cu", 10, 1.20, "4.4"},
      {"flat-pvc-cu", 16, 1.20, "2.8"},
      {"swa-xlpe-cu-2c", 1.5, 1.28, "31"},
      {"swa-xlpe-cu-2c", 2.5, 1.28, "19"},
      {"swa-xlpe-cu-2c", 4, 1.28, "12"},
      {"swa-xlpe-cu-2c", 6, 1.28, "7.9"},
      {"swa-xlpe-cu-2c", 10, 1.28, "4.7"},
      {"swa-xlpe-cu-2c", 16, 1.28, "2.9"},
  }));
  CAPTURE(row.name, row.mm2);
  const Cable cable = resolved(row.name, row.mm2, CpcChoice{}, 2);
  CHECK(2 * cable.line.r20 * row.factor == Approx(std::stod(row.printed) * 1e-3).epsilon(0.02));
}

// Source: A. Sheldrake, Handbook of Electrical Engineering, Table 9.13, resistance at 70 degC in
// ohm/km.
TEST_CASE("Resistances at 70 degC are those of the handbook") {
  struct Row {
    double mm2;
    const char* printed;
  };
  const auto row = GENERATE(values<Row>({{2.5, "8.868"}, {4, "5.518"}, {6, "3.688"}, {25, ".870"}, {35, ".627"}}));
  const double r20 = resolved("multicore-pvc-cu-4c", row.mm2, CpcChoice{}, 4).line.r20;
  const double alpha = alpha20(sunder::tests::rules("IEC 60364"), Material::copper);
  // The handbook multiplies by 1.197 (rounded up), hence 0.1 %.
  CHECK(r20 * (1 + alpha * 50) == Approx(std::stod(row.printed) * 1e-3).epsilon(1e-3));
}

}  // namespace
