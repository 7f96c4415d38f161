// SPDX-License-Identifier: Apache-2.0
// Greatest earth-fault loop behind fuses at 0.4 s and 5 s, found by varying the supply's Ze until
// the disconnection time flips; the circuit itself has no impedance.
#include <catch2/catch.hpp>
#include <cstdlib>
#include <string>
#include <vector>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"

namespace {

using namespace sunder::published;

struct Row {
  const char* In;       // [A]
  const char* without;  // Zs printed without Cmin [ohm]
  const char* with;     // Zs of the 18th edition, with Cmin [ohm]; "" where none is compared
};

std::string circuits(const std::string& family, const std::vector<Row>& rows, const char* use) {
  std::string text = head() +
                     supply("230/400 V", "three_phase = \"50 kA\", power_factor = 1",
                            "Ze = \"0.1 ohm\", Zn = \"0.1 ohm\", power_factor = 1") +
                     bar() + "[board.main]\n[circuit.main]\n";
  for (const Row& row : rows) {
    text += std::string("F") + row.In + " = { use = \"" + use + "\", phases = \"L1\", device = \"" + family + " " +
            row.In + " A\", cable = \"bar 1000 mm2\", length = \"1 m\" }\n";
  }
  return text;
}

// truncated: the page cuts instead of rounding, so the value lies up to one unit above it.
void compare(const std::string& family, const std::vector<Row>& rows, const char* use, bool truncated = false) {
  const SweepAnswer sweep = vary(circuits(family, rows, use), "grid.minimum.Ze", "0.05 ohm", "30 ohm");
  for (const Row& row : rows) {
    CAPTURE(family, row.In, use);
    const double Zs = flip(sweep, "disconnection time", std::string("main/F") + row.In);
    if (truncated) {
      const double printed = std::strtod(row.without, nullptr);
      CHECK(Zs / kMinBritish >= printed);
      CHECK(Zs / kMinBritish < printed + 2 * sunder::support::half_last_digit(row.without));
    } else {
      CHECK_THAT(Zs / kMinBritish, FlipPrints(row.without));
    }
    if (*row.with != '\0') CHECK_THAT(Zs, FlipPrints(row.with));
  }
}

// Without Cmin, tag S: 0.8 times the figure is printed at
// https://www.easymanua.ls/metrel/easiplus-mi-3000/manual?p=57 (BS 7671:2011); the 0.4 s row also
// at https://issuu.com/redactive/docs/nicjan12/60. With Cmin, tag M: 18th edition.
TEST_CASE("BS 88-2 fuses disconnect in 0.4 s up to the loop impedances of Table 41.2") {
  compare("BS 88-2",
          {{"6", "8.21", "7.80"},
           {"10", "4.89", "4.65"},
           {"16", "2.56", "2.43"},
           {"20", "1.77", "1.68"},
           {"25", "1.35", "1.29"},
           {"32", "1.04", "0.99"}},
          "fixed");
}

// The same sources. Left out: 80 A with Cmin (0.55 remembered, but 0.95 x 0.57 is 0.54) and 100 A
// (0.46 and, as remembered, 0.42 disagree; the library takes the lower, the safe one).
TEST_CASE("BS 88-2 fuses disconnect in 5 s up to the loop impedances of Table 41.4") {
  compare("BS 88-2",
          {{"6", "12.8", "12"},
           {"10", "7.19", "6.8"},
           {"16", "4.18", "4.0"},
           {"20", "2.95", "2.8"},
           {"25", "2.3", "2.2"},
           {"32", "1.84", "1.7"},
           {"40", "1.35", "1.3"},
           {"50", "1.04", "0.99"},
           {"63", "0.82", "0.78"},
           {"80", "0.57", ""},
           {"125", "0.34", "0.32"},
           {"160", "0.28", "0.27"},
           {"200", "0.19", "0.18"}},
          "distribution");
}

// Without Cmin, tag S, as above; 100 A also
// https://the-regs.co.uk/blog/index.php?rest_route=%2Fwp%2Fv2%2Fposts%2F499. Left out: 80 A with
// Cmin (0.51 remembered, 0.95 x 0.53 is 0.50).
TEST_CASE("BS 88-3 fuses disconnect in 0.4 s and 5 s up to the loop impedances of Tables 41.2 and 41.4") {
  compare("BS 88-3", {{"5", "10.45", "9.93"}, {"16", "2.42", "2.30"}, {"20", "2.04", "1.93"}, {"32", "0.96", "0.91"}},
          "fixed");
  compare("BS 88-3",
          {{"5", "15.33", "14.6"},
           {"16", "4.11", "3.9"},
           {"20", "3.38", "3.2"},
           {"32", "1.64", "1.6"},
           {"45", "1.04", "1.0"},
           {"63", "0.72", "0.68"},
           {"80", "0.53", ""},
           {"100", "0.4", "0.38"}},
          "distribution");
}

// Without Cmin, tag S, twice: the tester manual above and
// https://it.scribd.com/document/36816780/Maximum-Ze-and-Zs-Values.
TEST_CASE("BS 3036 fuses disconnect in 0.4 s and 5 s up to the loop impedances of Tables 41.2 and 41.4") {
  compare("BS 3036", {{"5", "9.58", "9.10"}, {"20", "1.77", "1.68"}}, "fixed");
  // 90 A and 210 A give 2.556 and 1.095 ohm: the page cuts them to 2.55 and 1.09.
  compare("BS 3036", {{"15", "2.55", "2.43"}, {"30", "1.09", "1.04"}}, "fixed", true);
  // Left out: 100 A with Cmin (0.51 remembered, 0.95 x 0.53 is 0.50).
  compare("BS 3036",
          {{"5", "17.7", "16.8"},
           {"15", "5.35", "5.08"},
           {"20", "3.83", "3.64"},
           {"30", "2.64", "2.51"},
           {"45", "1.59", "1.51"},
           {"60", "1.12", "1.07"},
           {"100", "0.53", ""}},
          "distribution");
}

// BS 7671:2008, tag S: https://it.scribd.com/document/36816780/Maximum-Ze-and-Zs-Values; 0.4 s also
// at https://pdfcoffee.com/bs-7671-tables-412-413-amp-414-pdf-free.html. Printed without Cmin.
TEST_CASE("BS 1361 fuses disconnect in 0.4 s and 5 s up to the loop impedances of the 2008 tables") {
  compare("BS 1361", {{"15", "3.28", ""}, {"20", "1.7", ""}, {"30", "1.15", ""}}, "fixed");
  compare("BS 1361",
          {{"15", "5.0", ""},
           {"20", "2.8", ""},
           {"30", "1.84", ""},
           {"45", "0.96", ""},
           {"60", "0.7", ""},
           {"80", "0.5", ""},
           {"100", "0.36", ""}},
          "distribution");
}

TEST_CASE(
    "BS 1361 fuses of 5 A are granted no more than the 2008 tables print, and within one per cent "
    "of it") {
  // 10.45 and 16.4 ohm are 22.01 and 14.02 A; the library's currents are those rounded up.
  for (const auto& [use, printed] : {std::pair{"fixed", 10.45}, std::pair{"distribution", 16.4}}) {
    CAPTURE(use);
    const SweepAnswer sweep = vary(circuits("BS 1361", {{"5", "", ""}}, use), "grid.minimum.Ze", "1 ohm", "30 ohm");
    const double Zs = flip(sweep, "disconnection time", "main/F5") / kMinBritish;
    CHECK(Zs <= printed * 1.003);
    CHECK(Zs >= printed * 0.99);
  }
}

// Without Cmin, tag S, twice: as BS 3036. Left out: 3 A at 5 s with Cmin (22.0 remembered, 0.95
// x 23.2 = 22.04).
TEST_CASE("BS 1362 fuses disconnect in 0.4 s and 5 s up to the loop impedances of Tables 41.2 and 41.4") {
  compare("BS 1362", {{"3", "16.4", "15.6"}, {"13", "2.42", "2.30"}}, "fixed");
  compare("BS 1362", {{"3", "23.2", ""}, {"13", "3.83", "3.64"}}, "distribution");
}

struct Gate {
  const char* In;    // [A]
  const char* amps;  // current that operates the link within 5 s [A]
};

// Tag S: a loop tester's manual, https://manualshive.com/ru/manual/kewtech/kt64/1959979?page=28 (Ia
// 5 s). Its loop impedances are 230 V over these, some cut and some rounded, so the currents are
// compared; 10 A is 46.5 A in IEC 60269 and cut to 46 there (the tie is within half a unit).
const std::vector<Gate> kGates = {{"6", "28"},   {"10", "46"},  {"16", "65"},  {"20", "85"},
                                  {"25", "110"}, {"32", "150"}, {"40", "190"}, {"50", "250"},
                                  {"63", "320"}, {"80", "425"}, {"100", "580"}};

TEST_CASE("gG fuses disconnect in 5 s from the currents that the standard's gates guarantee") {
  std::string text = head() +
                     supply("230/400 V", "three_phase = \"50 kA\", power_factor = 1",
                            "line_earth = \"100 A\", line_neutral = \"100 A\", power_factor = 1") +
                     bar() + "[board.main]\n[circuit.main]\n";
  for (const Gate& gate : kGates) {
    text += std::string("F") + gate.In + " = { use = \"distribution\", phases = \"L1\", device = \"gG " + gate.In +
            " A\", cable = \"bar 1000 mm2\", length = \"1 m\" }\n";
  }
  const SweepAnswer sweep = vary(text, "grid.minimum.line_earth", "10 A", "1 kA");
  for (const Gate& gate : kGates) {
    CAPTURE(gate.In);
    CHECK_THAT(flip(sweep, "disconnection time", std::string("main/F") + gate.In), FlipPrints(gate.amps));
  }
}

}  // namespace
