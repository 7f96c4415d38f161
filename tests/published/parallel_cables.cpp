// SPDX-License-Identifier: Apache-2.0
// Faults inside one of several equal cables in parallel, which is fed from both ends. From physics: a
// share x of the way along one of n cables the fault sees x Z in parallel with (1-x) Z + Z/(n-1), so
//
//     Z(x) = Z x (m - x)/m,   m = n/(n-1),
//
// with Z of one cable and a source without impedance. The worst place is x = m/2 for n >= 3 (m/4 of Z, more
// than the Z/n at the far end) and the far end for n = 2.
#include <catch2/catch.hpp>
#include <cmath>
#include <string>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"
#include "tests/published/studies.h"

namespace {

using namespace sunder::published;
using Catch::Matchers::WithinRel;

// Steel-wired cable of 100 m: lines 0.2+j0.08 mohm/m, armour 0.9+j0.3 mohm/m, cold in the maximum.
std::string cables(int n) {
  return head() + stiff_supply() +
         "[cable.c]\nmaterial = \"copper\"\ninsulation = \"xlpe90\"\ncores = 4\narmour = \"steel\"\n"
         "sizes = [{ size = \"95 mm2\", r20 = \"0.2 mohm/m\", x = \"0.08 mohm/m\", armour_area = \"150 mm2\", "
         "armour_r20 = \"0.9 mohm/m\", armour_x = \"0.3 mohm/m\" }]\nsource = \"an example\"\n" +
         boards({"main", "far"}) +
         "[submain.S1]\nfrom = \"main\"\nto = \"far\"\ndevice = \"switch 800 A\"\ncable = \"c 95 mm2\"\n"
         "cpc = \"armour\"\nlength = \"100 m\"\nin_parallel = " +
         std::to_string(n) + "\n";
}

// |Z| of the place, over that of one whole cable.
struct Ratios {
  double three_phase, line_neutral, line_earth;
};

Ratios ratios(int n, double x) {
  const std::string place = "S1@" + digits(100 * x) + "%";
  const auto all = study(cables(n), {"--at", place, "--touch"});
  const auto ohms = [&](const char* fault) { return std::abs(at(all, "maximum", place, fault).loop); };
  return {ohms("three-phase") / (100e-3 * std::hypot(0.2, 0.08)),
          ohms("line-neutral") / (200e-3 * std::hypot(0.2, 0.08)),
          ohms("line-earth") / (100e-3 * std::hypot(1.1, 0.38))};
}

TEST_CASE("Inside two to five equal parallel cables the loop is x (m - x)/m of one cable's") {
  for (const int n : {2, 3, 4, 5}) {
    const double m = n / (n - 1.0);
    for (const double x : {0.1, 0.4, m / 2, 1.0}) {
      CAPTURE(n, x);
      const Ratios found = ratios(n, x);
      const double expected = x * (m - x) / m;
      // The source's own 0.1 microhm is 5e-6 of a line of 20 mohm, more of a tenth of it.
      CHECK_THAT(found.three_phase, WithinRel(expected, 1e-4));
      CHECK_THAT(found.line_neutral, WithinRel(expected, 1e-4));
      CHECK_THAT(found.line_earth, WithinRel(expected, 1e-4));
    }
  }
}

TEST_CASE("The worst place inside parallel cables is m/2 of the way for three and more, the far end for two") {
  for (const int n : {3, 4, 5}) {
    CAPTURE(n);
    const double m = n / (n - 1.0);
    const double worst = ratios(n, m / 2).line_earth;
    CHECK_THAT(worst, WithinRel(m / 4, 1e-4));
    CHECK(worst > ratios(n, m / 2 - 0.05).line_earth);
    CHECK(worst > ratios(n, m / 2 + 0.05).line_earth);
    CHECK(worst > 1.0 / n * 1.001);
  }
  CHECK_THAT(ratios(2, 1).line_earth, WithinRel(0.5, 1e-4));
  CHECK(ratios(2, 1).line_earth > ratios(2, 0.95).line_earth);
}

// By the same division: of a fault x along one cable its near part carries 1 - x/m of the current, the
// other n - 1 the rest; near the source one armour carries all of it.
TEST_CASE("Near the source one cable of several carries almost all of a fault in it") {
  const auto all = study(cables(3), {"--at", "S1@3%", "--fault", "line-earth", "--currents", "--touch"});
  const StudyAnswer fault = at(all, "maximum", "S1@3%", "line-earth");
  // What enters all three cables at the near end is the whole fault.
  CHECK_THAT(std::abs(in(fault, "S1").amps[4]), WithinRel(fault.amps, 1e-6));
  // The far board's protective conductor is where the two others' share leaves it: of the armour's drop in the
  // healthy cables, 0.03/1.5 of the current in two of them in parallel.
  const double drop = fault.amps * 0.03 / 1.5 * 100e-3 * std::hypot(0.9, 0.3) / 2;
  CHECK_THAT(touch(fault, "far"), WithinRel(drop, 1e-3));
}

}  // namespace
