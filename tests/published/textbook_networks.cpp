// SPDX-License-Identifier: Apache-2.0
// Networks of textbooks by their sequence impedances: a mesh of three buses, feeders of medium voltage,
// a split-phase chain. Their factor c is 1: the program's currents of the maximum are divided by its.
#include <catch2/catch.hpp>
#include <cmath>
#include <complex>
#include <numbers>
#include <string>
#include <utility>
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

constexpr double kFoot = 0.3048;  // [m]

// Tag R, but for Z1 j0.22 and Z0 j0.35 at bus 3 (seen in SunBoqiang/Examples-of-PowerSystemAnalysis,
// chp10ex5.m) and Zf j0.1: Saadat, Power System Analysis, ex. 10.5 and 10.7. The book is in per unit;
// here 100 MVA and 100 kV at the buses (1 pu is 100 ohm and 577.35 A), 10 kV at the machines (1 ohm). G1
// and G2: X1 0.15, X0 0.05, neutral reactor 0.25/3; T 0.10, of G1 star-star, both earthed, of G2 delta on
// the machine's side; lines X1/X0 0.125/0.30, 0.15/0.35, 0.25/0.7125. The fault's reactance is written as
// a run to the place of the fault: in each line (three-phase and line-earth), half of it in each (line-line),
// or in the way to earth alone.
TEST_CASE("Faults through a reactance at bus 3 of a three-bus network are those of a textbook") {
  std::string text = head() + "frequency = \"60 Hz\"\n";
  for (const std::string n : {"1", "2"}) {
    text += "[generator.G" + n + "]\nfeeds = \"gen" + n +
            "\"\nvoltage = \"10 kV\"\nrating = \"100 MVA\"\nxd_subtransient = 0.15\nx0 = 0.05\nr = 0.0\n"
            "star_point = \"j0.083333333333 ohm\"\n";
    text += "[transformer.T" + n + "]\nfrom = \"gen" + n + "\"\nfeeds = \"bus" + n +
            "\"\nprimary = \"10 kV\"\nvoltage = \"100 kV\"\nrating = \"100 MVA\"\nuk = \"10 %\"\nlosses = \"1 W\"\n"
            "r0_over_r1 = 1\nx0_over_x1 = 1\nvector = \"" +
            (n == "1" ? "YNyn0" : "Dyn11") + "\"\n";
  }
  const auto line = [](const char* name, const char* from, const char* to, double x1, double x0) {
    return run({name, from, to, Complex{0, 100 * x1}, Complex{0, 100 * x0}, "", 10000});
  };
  text += boards({"gen1", "gen2", "bus1", "bus2", "bus3", "in-lines", "halves", "in-earth"}) +
          line("L12", "bus1", "bus2", 0.125, 0.30) + line("L13", "bus1", "bus3", 0.15, 0.35) +
          line("L23", "bus2", "bus3", 0.25, 0.7125) + line("F1", "bus3", "in-lines", 0.1, 0.1) +
          line("F2", "bus3", "halves", 0.05, 0.05) +
          // z1 is to be nothing: 3 milliohm, and resistive, is what a run of this z0 may have at least
          run({"F3", "bus3", "in-earth", Complex{0.003, 0}, Complex{0, 30}, "", 1500});
  text += "[state.normal]\nsources = [\"G1\", \"G2\"]\n";
  const auto all = study(text, {"--currents"});
  const double base = 100e6 / std::numbers::sqrt3 / 100e3;
  const auto per_unit = [&](const char* node, const char* fault) {
    return without_c(at(all, "maximum", node, fault).amps) / base;
  };
  // At the bus itself, by the impedances seen: 1/Z1 and 3/(2 Z1 + Z0).
  CHECK_THAT(per_unit("bus3", "three-phase"), WithinRel(1 / 0.22, 1e-4));
  CHECK_THAT(per_unit("bus3", "line-earth"), WithinRel(3 / (2 * 0.22 + 0.35), 1e-4));
  // Published.
  CHECK_THAT(per_unit("in-lines", "three-phase"), Printed("3.125"));
  CHECK_THAT(per_unit("in-lines", "line-earth"), Printed("2.752"));
  CHECK_THAT(per_unit("halves", "line-line"), WithinAbs(3.2075, 0.0001));
  const StudyAnswer both = at(study(text, {"--at", "in-earth", "--fault", "two-lines-earth", "--currents"}), "maximum",
                              "in-earth", "two lines and earth");
  const auto [ib, ic] = faulted_lines(both);
  CHECK_THAT(without_c(std::abs(ib)) / base, Printed("4.058"));
  CHECK_THAT(without_c(std::abs(ic)) / base, Printed("4.058"));
  // Printed at 165.93 and 14.07 degrees.
  CHECK_THAT(std::abs(std::arg(ib / ic)) * 180 / std::numbers::pi, WithinAbs(165.93 - 14.07, 0.01));
}

// Tag S: textbook companion to Gonen, Electric Power Distribution System Engineering, ex. 10.2 p. 555.
// 7.2 kV line to neutral; system Z1 0.7199+j3.4619 and ZG 0.6191+j3.3397 ohm, ZG = (2 Z1 + Z0)/3; 2 miles
// of line, per 1000 ft Z1 0.0580+j0.1208, Z0 (0.1122+j0.4789)+(-0.0385-j0.0996), the earth its return.
TEST_CASE("Currents at the end of a 12.47 kV overhead feeder are those of a textbook") {
  constexpr double kLength = 10.56;  // [1000 ft]
  const Complex z1{0.7199, 3.4619}, zg{0.6191, 3.3397};
  const auto all = faults(head() + "frequency = \"60 Hz\"\n" +
                          sequence_supply("main", "12.470766 kV", z1, 3.0 * zg - 2.0 * z1) + boards({"main", "end"}) +
                          run({"line", "main", "end", kLength * Complex{0.0580, 0.1208},
                               kLength * Complex{0.0737, 0.3793}, "return = \"earth\"\n", kLength * 1e3 * kFoot}));
  // The least currents have c = 1 above 1 kV, and conductors by z1 have one temperature.
  for (const auto& [condition, c] : {std::pair{"maximum", kMax}, std::pair{"minimum", 1.0}}) {
    CAPTURE(condition);
    CHECK_THAT(at(all, condition, "end", "three-phase").amps / c, WithinRel(1463.02, 1e-5));
    // The book takes 0.866 of the three-phase current; half the root of three gives 1267.01.
    CHECK_THAT(at(all, condition, "end", "line-line").amps / c, WithinRel(1266.97, 4e-5));
    CHECK_THAT(at(all, condition, "end", "line-earth").amps / c, WithinRel(1269.14, 1e-5));
  }
  const FaultAnswer three = at(all, "maximum", "end", "three-phase");
  CHECK_THAT(three.ohms, WithinRel(std::hypot(1.33238, 4.737548), 1e-6));
  CHECK_THAT(at(all, "maximum", "end", "line-earth").ohms, WithinRel(std::hypot(1.286844, 5.525268), 1e-6));
}

// Tag S: textbook companion to Stevenson, Elements of Power System Analysis, ex. 13.2 p. 355. 13.8 kV
// behind two transformers of 5 ohm, both for the greatest and one for the least currents; all reactance.
// 5 ohm are 10 % of 3.8088 MVA at 13.8 kV; the network before them is stiff.
TEST_CASE("Greatest and least currents of a radial 13.8 kV feeder in two states are those of a textbook") {
  std::string text =
      head() + "frequency = \"60 Hz\"\n" + sequence_supply("hv", "69 kV", {0, 1e-5}) + boards({"hv", "bus1"});
  for (const char* n : {"1", "2"})
    text += std::string("[transformer.T") + n +
            "]\nfrom = \"hv\"\nfeeds = \"bus1\"\nprimary = \"69 kV\"\nvoltage = \"13.8 kV\"\nrating = \"3.8088 MVA\"\n"
            "uk = \"10 %\"\nlosses = \"1 W\"\n";
  const std::vector<double> sections = {9.6, 6.4, 8.0, 12.8};
  for (std::size_t i = 0; i < sections.size(); ++i) {
    const std::string to = "bus" + std::to_string(i + 2);
    text +=
        boards({to}) +
        run({"S" + std::to_string(i + 1), "bus" + std::to_string(i + 1), to, Complex{0, sections[i]}, {}, "", 10000});
  }
  text += "[state.both]\nsources = [\"grid\"]\n[state.one]\nsources = [\"grid\"]\nopen = [\"T2\"]\n";
  const auto all = study(text, {"--currents"});
  const std::vector<std::pair<const char*, const char*>> printed = {
      {"3187", "1380"}, {"658.5", "472.6"}, {"430.7", "328.6"}, {"300.7", "237.9"}, {"202.7", "165.1"}};
  for (std::size_t i = 0; i < printed.size(); ++i) {
    const std::string bus = "bus" + std::to_string(i + 1);
    CAPTURE(bus);
    CHECK_THAT(without_c(at(all, "maximum", bus, "three-phase", "both").amps), Printed(printed[i].first));
    // c = 1 in the minimum above 1 kV
    CHECK_THAT(at(all, "minimum", bus, "line-line", "one").amps, Printed(printed[i].second));
  }
}

// A run of the sheet: L feet of C, the admittance of one foot, for the lines; a neutral of its own.
std::string feet(const std::string& name, const std::string& from, const std::string& to, double length, double line,
                 double neutral) {
  const double z1 = length / line;
  return run({name, from, to, z1, z1 + 3 * length / neutral, "return = \"N\"\n", length * kFoot});
}

// Tag S: spreadsheet print, https://www.scribd.com/document/230809087/FaultV6-2-1. 300 kVA, 3 % times
// 0.9, 240/120 V; 150 ft of C 13923, 40 ft of C 2430 (neutral 1995), 30 ft of C 617. All resistances: the
// sheet adds numbers.
TEST_CASE("Currents between the lines of a 240/120 V split-phase chain are those of a published spreadsheet") {
  const double whole = 240.0 / 46296;  // of the winding between the lines [ohm]
  // Half a winding has a third of the impedance of the whole where it gives 1.5 times the current: then
  // (2 z1 + z0)/3 is whole/3 and z0 is nothing; 10 microhm are the least that can be written.
  const auto all = faults(head() + "frequency = \"60 Hz\"\n" +
                          sequence_supply("main", "120/240 V", whole / 2, 1e-5, "earthing = \"TN-S\"\n") +
                          boards({"main", "one", "two", "three"}) + feet("S1", "main", "one", 150, 13923, 13923) +
                          feet("S2", "one", "two", 40, 2430, 1995) + feet("S3", "two", "three", 30, 617, 617));
  const auto amps = [&all](const char* node, const char* fault) {
    return without_c(at(all, "maximum", node, fault).amps);
  };
  CHECK_THAT(amps("main", "line-line"), Printed("46296"));
  CHECK_THAT(amps("one", "line-line"), Printed("8978"));
  // Printed 4,024: computed there from the rounded 8,978.
  CHECK_THAT(amps("two", "line-line"), WithinAbs(4024.0, 1.0));
  CHECK_THAT(amps("three", "line-line"), Printed("1530"));
  // To the neutral the sheet starts from 1.5 times the current, which is physical: half a winding. But it
  // divides by the impedance that 1.0 times the current stands for, which is not: it prints 7,457 A behind the
  // first run, where the loop carries 5,156 A (recomputed with 1.5 throughout).
  CHECK_THAT(amps("main", "line-neutral"), WithinRel(1.5 * 46296, 0.002));
  CHECK_THAT(amps("one", "line-neutral"), WithinRel(5156.0, 0.0005));
}

// The same sheet from its own 7,457 A on: its steps to 2,135 and 782 A are sums of resistances, with the
// neutral's C for the line too.
TEST_CASE("Currents to the neutral of a split-phase chain follow a published spreadsheet from its first value on") {
  const auto all = faults(head() + "frequency = \"60 Hz\"\n" +
                          sequence_supply("one", "120/240 V", 120.0 / 7457, 120.0 / 7457, "earthing = \"TN-S\"\n") +
                          boards({"one", "two", "three"}) + feet("S2", "one", "two", 40, 1995, 1995) +
                          feet("S3", "two", "three", 30, 617, 617));
  const auto amps = [&all](const char* node) { return without_c(at(all, "maximum", node, "line-neutral").amps); };
  CHECK_THAT(amps("one"), Printed("7457"));
  // 2,135.5 from the rounded 7,457.
  CHECK_THAT(amps("two"), WithinAbs(2135.0, 0.6));
  CHECK_THAT(amps("three"), Printed("782"));
}

}  // namespace
