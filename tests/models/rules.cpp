// SPDX-License-Identifier: Apache-2.0
/// @file
/// Rule sets: k, temperature coefficients, times.
#include "models/rules.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "tests/models/resolved.h"

namespace {

using namespace sunder::models;
using sunder::tests::rules;

struct Constants {
  double beta;  // [degC]
  double heat;  // [J/(K*mm3)]
  double rho;   // [ohm*mm]
};

// Source: IEC 60949, Table 1 (as reproduced at https://www.scribd.com/doc/310133671).
Constants constants(Material material) {
  switch (material) {
    case Material::copper:
      return {234.5, 3.45e-3, 17.241e-6};
    case Material::aluminium:
      return {228, 2.5e-3, 28.264e-6};
    case Material::lead:
      return {230, 1.45e-3, 214e-6};
    case Material::steel:
      break;
  }
  return {202, 3.8e-3, 138e-6};
}

// Source: IEC 60949: k2 = Qc (beta + 20)/rho20 * ln((beta + final)/(beta + initial)). The tables
// round to whole numbers, two of them (aluminium 90/250, steel 80/200) downwards.
TEST_CASE("Every k of the rule sets follows from the constants of IEC 60949") {
  const auto* name = GENERATE("BS 7671:2018+A2", "IEC 60364");
  for (const AdiabaticRow& row : rules(name).k) {
    CAPTURE(word(row.material), word(row.place), row.insulation, row.initial_degc, row.final_degc);
    const Constants c = constants(row.material);
    const double k =
        std::sqrt(c.heat * (c.beta + 20) / c.rho * std::log((c.beta + row.final_degc) / (c.beta + row.initial_degc)));
    CHECK(row.k / 1e6 == Approx(k).margin(1.0));
  }
}

Strand strand(Material material, Place place, double mm2) {
  Strand made;
  made.material = material;
  made.place = place;
  made.area = mm2 / 1e6;
  return made;
}

double k_of(const Strand& of, const std::string& insulation) {
  const AdiabaticRow* row = adiabatic(rules("BS 7671:2018+A2"), of, insulation);
  return row == nullptr ? 0 : row->k / 1e6;
}

// Source: BS 7671 Tables 43.1 and 54.2 to 54.6.
TEST_CASE("A strand finds the k of its place, material, insulation and size") {
  CHECK(k_of(strand(Material::copper, Place::core, 2.5), "pvc70") == 115);
  CHECK(k_of(strand(Material::copper, Place::core, 300), "pvc70") == 115);
  CHECK(k_of(strand(Material::copper, Place::core, 400), "pvc70") == 103);
  CHECK(k_of(strand(Material::copper, Place::core, 35), "xlpe90") == 143);
  CHECK(k_of(strand(Material::aluminium, Place::core, 35), "xlpe90") == 94);
  CHECK(k_of(strand(Material::aluminium, Place::core, 35), "pvc70") == 76);
  CHECK(k_of(strand(Material::copper, Place::separate, 16), "pvc70") == 143);
  CHECK(k_of(strand(Material::steel, Place::armour, 78), "xlpe90") == 46);
  CHECK(k_of(strand(Material::steel, Place::armour, 78), "pvc70") == 51);
  CHECK(k_of(strand(Material::steel, Place::conduit, 100), "pvc70") == 47);
  CHECK(k_of(strand(Material::copper, Place::separate, 16), "bare") == 159);
  CHECK(adiabatic(rules("IEC 60364"), strand(Material::lead, Place::core, 16), "pvc70") == nullptr);
}

TEST_CASE("A conductor beside an XLPE cable has the k of its own insulation") {
  Strand beside = strand(Material::copper, Place::separate, 16);
  beside.insulation = "pvc70";
  CHECK(k_of(beside, "xlpe90") == 143);
}

// Source: BS 7671 practice, 1.20 at 70 degC and 1.28 at 90 degC; IEC 60287-1-1, 0.00393 and
// 0.00403.
TEST_CASE("The rule sets heat conductors by their own coefficient") {
  CHECK(1 + alpha20(rules("BS 7671:2018+A2"), Material::copper) * 50 == Approx(1.20));
  CHECK(1 + alpha20(rules("BS 7671:2018+A2"), Material::copper) * 70 == Approx(1.28));
  CHECK(alpha20(rules("IEC 60364"), Material::copper) == 0.00393);
  CHECK(alpha20(rules("IEC 60364"), Material::aluminium) == 0.00403);
  CHECK(alpha20(rules("IEC 60364"), Material::steel) == 0.0045);
}

// Source: IEC 60364-4-41 and BS 7671, Table 41.1.
TEST_CASE("Disconnection times are those of Table 41.1") {
  const auto* name = GENERATE("BS 7671:2018+A2", "IEC 60364");
  const RuleSet& set = rules(name);
  for (const TimeRow& row : set.times) {
    CAPTURE(name, word(row.earthing), row.U0_to);
    const bool tt = row.earthing == Earthing::TT;
    if (row.U0_to == 120) CHECK(row.final_circuit == (tt ? 0.3 : 0.8));
    if (row.U0_to == 230) CHECK(row.final_circuit == (tt ? 0.2 : 0.4));
    if (row.U0_to == 400) CHECK(row.final_circuit == (tt ? 0.07 : 0.2));
  }
  CHECK(set.times.size() == 12);
  CHECK(set.distribution_tn == 5);
  CHECK(set.distribution_tt == 1);
  CHECK(set.sockets_to == 63);
  CHECK(set.fixed_to == 32);
  CHECK(set.touch_limit == 50);
}

TEST_CASE("Voltage factors are those of each rule set") {
  CHECK(rules("BS 7671:2018+A2").c_min == 0.95);
  CHECK(rules("BS 7671:2018+A2").c_max == 1.10);
  CHECK(rules("IEC 60364").c_min == 0.90);
  CHECK(rules("IEC 60364").c_max == 1.10);
}

}  // namespace
