// SPDX-License-Identifier: Apache-2.0
// Published currents behind transformers that stand between two boards, and the laws of their
// windings. Where the source has no voltage factor, the program's currents are divided by it.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <complex>
#include <numbers>
#include <string>
#include <vector>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"
#include "tests/published/studies.h"
#include "tests/support/printed.h"

namespace {

using namespace sunder::published;
using Catch::Matchers::WithinAbs;
using Catch::Matchers::WithinRel;
using sunder::support::Printed;
using Complex = std::complex<double>;

// A network of 20 kV so stiff that a low-voltage fault sees nothing of it: 10 microhm.
std::string stiff_high_voltage() {
  return sequence_supply("hv", "20 kV", Complex{0, 1e-5}, Complex{0, 1e-5}) + boards({"hv"});
}

std::string transformer(const std::string& name, const std::string& voltage, const std::string& secondary,
                        const std::string& rating, const std::string& uk, const std::string& rest) {
  return "[transformer." + name + "]\nfrom = \"hv\"\nfeeds = \"" + name + "-lv\"\nprimary = \"20 kV\"\nvoltage = \"" +
         voltage + "\"\nsecondary = \"" + secondary + "\"\nrating = \"" + rating + " kVA\"\nuk = \"" + uk +
         " %\"\nearthing = \"TN-S\"\n" + rest + boards({name + "-lv"});
}

// Tag S: J.-M. Beaussy, calculation notes for LV installations, ch. 11,
// https://ro.scribd.com/document/448339676/Ik-en-aval-des-Transfos-Methode-Impedances: stiff network,
// no-load voltage 420 V, losses at 75 degC. The source cuts digits. Ik2 is recomputed, not printed.
TEST_CASE("Eleven transformers on one stiff network give the currents of a published table") {
  struct Row {
    const char *rating, *uk, *losses, *three, *two;  // kVA, %, kW, kA, kA
  };
  const std::vector<Row> rows = {
      {"100", "4", "2.15", "3.43", "2.976"},  {"160", "4", "2.35", "5.49", "4.762"},
      {"250", "4", "3.25", "8.59", "7.440"},  {"315", "4", "3.9", "10.82", "9.375"},
      {"400", "4", "4.6", "13.74", "11.905"}, {"500", "4", "5.5", "17.18", "14.881"},
      {"630", "4", "6.5", "21.65", "18.750"}, {"800", "6", "10.7", "18.32", "15.873"},
      {"1000", "6", "13", "22.91", "19.841"}, {"1250", "6", "16", "28.66", "24.802"},
      {"1600", "6", "20", "36.65", "31.746"},
  };
  // Of the network before them no zero-sequence impedance is said: behind a delta it has no part.
  std::string text = head() + sequence_supply("hv", "20 kV", Complex{0, 1e-5}) + boards({"hv"});
  for (const Row& row : rows)
    text += transformer(std::string("T") + row.rating, "242.4871/420 V", "420 V", row.rating, row.uk,
                        std::string("losses = \"") + row.losses + " kW\"\n");
  const auto all = faults(text);
  for (const Row& row : rows) {
    CAPTURE(row.rating);
    const std::string node = std::string("T") + row.rating + "-lv";
    const double three = without_c(at(all, "maximum", node, "three-phase").amps);
    if (std::string(row.rating) == "1250") {
      // Printed 28.66: 420 V over the impedance cut to 8.46 mohm; 8.467 mohm give 28.64.
      CHECK_THAT(three / 1e3, WithinRel(28.66, 0.001));
    } else {
      check_cut(three / 1e3, row.three);
    }
    CHECK_THAT(without_c(at(all, "maximum", node, "line-line").amps) / 1e3, Printed(row.two));
    // A Dyn unit with Z0 = Z1: the network before it carries no zero sequence.
    CHECK_THAT(without_c(at(all, "maximum", node, "line-neutral").amps), WithinRel(three, 1e-5));
    CHECK_THAT(without_c(at(all, "maximum", node, "line-earth").amps), WithinRel(three, 1e-5));
  }
}

// Tag S: note on the composition method, https://fr.scribd.com/document/306375154/Calcul-Des-Icc, at
// 410 V. It adds impedances as numbers: X/R = 10 on both sides makes the complex sum the same. The
// minimum is used, where the network above 1 kV has c = 1. Printed numbers are cut, mostly.
TEST_CASE("Transformers behind a network of finite power give the currents of the power method") {
  struct Row {
    const char *level, *rating, *uk;  // MVA, kVA, %
    double power;                     // printed [MVA]
    const char* amps;                 // printed [kA]
    bool rounded;
  };
  const std::vector<Row> rows = {
      {"125", "100", "4", 2.45, "3.45", false},   {"125", "160", "4", 3.875, "5.45", false},
      {"125", "250", "4", 5.95, "8.37", false},   {"125", "315", "4", 7.4, "10.42", false},
      {"125", "400", "4", 9.25, "13.02", false},  {"125", "500", "4", 11.36, "16.00", false},
      {"125", "630", "4", 13.98, "19.68", false}, {"125", "800", "6", 12.045, "16.96", false},
      {"250", "100", "4", 2.48, "3.49", true},    {"250", "160", "4", 3.94, "5.54", false},
      {"250", "250", "4", 6.10, "8.59", true},    {"250", "315", "4", 7.63, "10.75", false},
  };
  for (const std::string level : {"125", "250"}) {
    const std::string bound = "{ power = \"" + level + " MVA\", x_over_r = 10 }\n";
    std::string text = head() + "[supply.grid]\nfeeds = \"hv\"\nvoltage = \"20 kV\"\nmaximum = " + bound +
                       "minimum = " + bound + boards({"hv"});
    for (const Row& row : rows)
      if (row.level == level)
        text += transformer(std::string("T") + row.rating, "236.7136/410 V", "410 V", row.rating, row.uk,
                            "x_over_r = 10\n");
    const auto all = faults(text);
    for (const Row& row : rows) {
      if (row.level != level) continue;
      CAPTURE(row.level, row.rating);
      const double amps = at(all, "minimum", std::string("T") + row.rating + "-lv", "three-phase").amps / kMinBritish;
      CHECK_THAT(std::numbers::sqrt3 * 410 * amps / 1e6, WithinRel(row.power, 0.0025));
      if (row.rounded) {
        CHECK_THAT(amps / 1e3, Printed(row.amps));
      } else {
        check_cut(amps / 1e3, row.amps, 2);
      }
    }
  }
}

// Tag S (fault 2: R, with a C value of the collector's): electrical plan-review sheet,
// https://www.scribd.com/document/325386963/. Point-to-point method: numbers are added, so all are
// resistances here. 300 kVA 208Y/120, 2 % times 0.9; 20 ft of two cables of C 22185 in parallel, 20 ft
// of C 5907.
TEST_CASE("A 60 Hz transformer of 208Y/120 V and its feeders give the currents of a plan-review sheet") {
  constexpr double kFeet = 20;
  const std::string text = head() + "frequency = \"60 Hz\"\n" + stiff_high_voltage() +
                           transformer("T", "120.0889/208 V", "208 V", "300", "1.8", "x_over_r = 0\n") +
                           boards({"one", "two"}) +
                           run({"S1", "T-lv", "one", kFeet / 22185, 4 * kFeet / 22185, "in_parallel = 2\n", 6.096}) +
                           run({"S2", "one", "two", kFeet / 5907, 4 * kFeet / 5907, "", 6.096});
  const auto all = faults(text);
  const auto amps = [&all](const char* node) { return without_c(at(all, "maximum", node, "three-phase").amps); };
  // Printed 46,273: 833 A, a rounded full-load current, times 55.55; 208 V over the impedance are 46,263.
  CHECK_THAT(amps("T-lv"), WithinRel(46273.0, 0.0005));
  // Printed 39,425 and 18,687: the multiplier is rounded to 0.852 before it is used.
  CHECK_THAT(amps("one"), WithinRel(39425.0, 0.0005));
  CHECK_THAT(amps("two"), WithinRel(18687.0, 0.001));
}

// Law: the factor c multiplies the nominal voltage of the system (IEC 60909-0, 2.3.1), never the
// no-load voltage of a transformer, which counts in its impedance alone. 500 kVA, 433 V, 4.75 %.
TEST_CASE("The voltage factor multiplies 400 V and not the 433 V that a transformer shows unloaded") {
  const std::string source =
      head() +
      "[transformer.S]\nfeeds = \"main\"\nvoltage = \"230/400 V\"\nsecondary = \"433 V\"\nrating = \"500 kVA\"\n"
      "uk = \"4.75 %\"\nx_over_r = 4\nearthing = \"TN-S\"\n" +
      boards({"main"});
  const std::string between =
      head() + stiff_high_voltage() + transformer("T", "230/400 V", "433 V", "500", "4.75", "x_over_r = 4\n");
  const double ohms = 0.0475 * 433 * 433 / 500e3;
  for (const auto& [text, node] : {std::pair{source, "main"}, std::pair{between, "T-lv"}}) {
    CAPTURE(node);
    const auto all = faults(text);
    constexpr double kNetwork = 1e-6;  // 10 microhm at 20 kV, of 17 mohm at 433 V
    CHECK_THAT(at(all, "maximum", node, "three-phase").amps,
               WithinRel(1.1 * 400 / std::numbers::sqrt3 / ohms, kNetwork));
    CHECK_THAT(at(all, "maximum", node, "line-line").amps, WithinRel(1.1 * 400 / 2 / ohms, kNetwork));
    CHECK_THAT(at(all, "maximum", node, "line-earth").amps, WithinRel(1.1 * 230 / ohms, kNetwork));
  }
}

// Law (ampere-turns of each leg balance; any textbook on protection, as the rule "2:1:1" for the fault
// between two lines and "1:1:0" for that to earth): seen from the delta, or from the star above a
// zigzag, a line-line fault flows as 2:1:1 and a line-earth fault as 1:1:0, in units of the secondary
// current times U2/(sqrt3 U1); a three-phase fault as 1:1:1 times U2/U1.
TEST_CASE("Primary currents of Dyn and Yzn transformers are 1:1:1, 2:1:1 and 1:1:0") {
  const std::vector<std::string> vectors = {"Dyn1", "Dyn5", "Dyn7", "Dyn11", "Yzn1", "Yzn5", "Yzn11"};
  std::string text = head() + stiff_high_voltage();
  for (const std::string& vector : vectors)
    text += transformer(vector, "230/400 V", "420 V", "1000", "6",
                        "x_over_r = 5\nr0_over_r1 = 0.5\nx0_over_x1 = 0.9\nvector = \"" + vector + "\"\n");
  const auto all = study(text, {"--currents"});
  for (const std::string& vector : vectors) {
    const auto primary = [&](const char* fault) {
      const StudyAnswer answer = at(all, "maximum", vector + "-lv", fault);
      const Amps amps = in(answer, vector + " primary").amps;
      std::vector<double> sizes = {std::abs(amps[0]), std::abs(amps[1]), std::abs(amps[2])};
      for (double& size : sizes) size *= std::numbers::sqrt3 * 20000 / 420 / answer.amps;
      std::sort(sizes.begin(), sizes.end());
      CHECK(std::abs(amps[0] + amps[1] + amps[2]) < 1e-6 * answer.amps);
      return sizes;
    };
    CAPTURE(vector);
    const auto check = [](const std::vector<double>& sizes, double least, double middle, double most) {
      CHECK_THAT(sizes[0], WithinAbs(least, 1e-5));
      CHECK_THAT(sizes[1], WithinAbs(middle, 1e-5));
      CHECK_THAT(sizes[2], WithinAbs(most, 1e-5));
    };
    check(primary("three-phase"), std::numbers::sqrt3, std::numbers::sqrt3, std::numbers::sqrt3);
    check(primary("line-line"), 1, 1, 2);
    check(primary("line-earth"), 0, 1, 1);
    check(primary("line-neutral"), 0, 1, 1);
  }
}

}  // namespace
