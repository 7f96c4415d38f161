// SPDX-License-Identifier: Apache-2.0
// Published currents of generators and motors. The textbooks drive every fault by the nominal voltage:
// the program's currents of the maximum are divided by its voltage factor.
#include <algorithm>
#include <array>
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

// Without resistance, as the textbooks take machines.
std::string generator(const std::string& name, const std::string& board, const std::string& voltage,
                      const std::string& rating, double reactance, const std::string& rest = "") {
  return "[generator." + name + "]\nfeeds = \"" + board + "\"\nvoltage = \"" + voltage + "\"\nrating = \"" + rating +
         "\"\nxd_subtransient = " + digits(reactance) + "\nr = 0.0\n" + rest;
}

// Two sources are connected together where a state says so.
std::string both(const std::string& one, const std::string& other) {
  return "[state.normal]\nsources = [\"" + one + "\", \"" + other + "\"]\n";
}

std::string step(const std::string& from, const std::string& to, const std::string& primary,
                 const std::string& secondary, const std::string& rating, const std::string& uk) {
  return "[transformer.T]\nfrom = \"" + from + "\"\nfeeds = \"" + to + "\"\nprimary = \"" + primary +
         "\"\nvoltage = \"" + secondary + "\"\nrating = \"" + rating + "\"\nuk = \"" + uk + "\"\nlosses = \"1 W\"\n";
}

// Tag S: textbook companion to Stevenson, Elements of Power System Analysis, ex. 10.5 p. 268. 25 MVA
// 13.8 kV, X" 15 %; 25 MVA 13.8/6.9 kV, 10 %; four motors of 5 MVA 6.9 kV, X" 20 %, for interrupting
// currents X' = 1.5 X". The fault is on the feeder of one motor, whose breaker A carries what the
// generator and the other three give.
TEST_CASE("Subtransient and interrupting currents of a generator and four motors are those of a textbook") {
  const auto solve = [](double reactance) {
    const double rated = 5e6 / std::numbers::sqrt3 / 6900;
    std::string text = head() + "frequency = \"60 Hz\"\n" + generator("G", "gen", "13.8 kV", "25 MVA", 0.15) +
                       step("gen", "bus", "13.8 kV", "6.9 kV", "25 MVA", "10 %") + boards({"gen", "bus", "feeder"}) +
                       run({"A", "bus", "feeder", Complex{0, 1e-8}, {}, "", 0.001});
    for (const std::string n : {"1", "2", "3", "4"})
      text += "[motor.M" + n + "]\non = \"" + (n == "4" ? "feeder" : "bus") + "\"\ncurrent = \"" + digits(rated) +
              " A\"\nstart = " + digits(1 / reactance) + "\nr_over_x = 0.0\n";
    return at(study(text, {"--at", "feeder", "--fault", "three-phase", "--currents"}), "maximum", "feeder",
              "three-phase");
  };
  const StudyAnswer first = solve(0.20);
  CHECK_THAT(without_c(first.amps), Printed("16735"));
  CHECK_THAT(without_c(std::abs(in(first, "A").amps[0])), Printed("14643"));
  const StudyAnswer later = solve(0.30);
  CHECK_THAT(without_c(later.amps), Printed("13946"));
  CHECK_THAT(without_c(std::abs(in(later, "A").amps[0])), Printed("12551"));
}

// Tag S: textbook companion to Chakrabarti and Soni, Power System Engineering, ex. 3.1.12 p. 473. 625
// kVA 2.4 kV, X" 8 %; three motors of 250 hp (746 W), efficiency 0.9, unity power factor, X" 20 %.
TEST_CASE("The shares of a 2.4 kV generator and three motors in a fault are those of a textbook") {
  std::string text = head() + generator("G", "bus", "2.4 kV", "625 kVA", 0.08) + boards({"bus"});
  for (const char* n : {"1", "2", "3"})
    text += std::string("[motor.M") + n +
            "]\non = \"bus\"\nrating = \"186.5 kW\"\nefficiency = 0.9\npf = 1\nstart = 5\nr_over_x = 0.0\n";
  const StudyAnswer three =
      at(study(text, {"--at", "bus", "--fault", "three-phase", "--currents"}), "maximum", "bus", "three-phase");
  const double base = 625e3 / std::numbers::sqrt3 / 2400;
  CHECK_THAT(base, Printed("150.35"));
  CHECK_THAT(without_c(three.amps) / base, Printed("17.47"));
  CHECK_THAT(without_c(std::abs(in(three, "G").amps[0])) / base, Printed("12.5"));
  for (const char* motor : {"M1", "M2", "M3"}) {
    const double share = without_c(std::abs(in(three, motor).amps[0])) / base;
    CHECK_THAT(share, Printed("1.66"));
    CHECK_THAT(share, Printed("1.658"));  // recomputed
  }
}

// Tag S: textbook companion to Soni, ex. 3.1.2 p. 467. 10 MVA 10 % and 5 MVA 7.5 % in parallel, 5 MVA 6
// % to 33 kV, a line of 5+j20 ohm. The generators' voltage is not given and does not matter: 11 kV.
TEST_CASE("Fault levels behind two alternators, a transformer and a 33 kV line are those of a textbook") {
  const auto all = faults(head() + generator("G1", "bus", "11 kV", "10 MVA", 0.10) +
                          generator("G2", "bus", "11 kV", "5 MVA", 0.075) +
                          step("bus", "hv", "11 kV", "33 kV", "5 MVA", "6 %") + both("G1", "G2") +
                          boards({"bus", "hv", "end"}) + run({"line", "hv", "end", Complex{5, 20}, {}, "", 10000}));
  const auto level = [&all](const char* node) {
    return std::numbers::sqrt3 * 33 * without_c(at(all, "maximum", node, "three-phase").amps);  // [kVA]
  };
  CHECK_THAT(level("hv"), Printed("55556"));
  CHECK_THAT(level("end"), Printed("27282"));
}

// Tag S: textbook companion to Subir Ray, Electrical Power Systems, ex. 13.8 p. 463. 25 MVA 13.2 kV,
// short-circuit level 170 MVA (X1 0.147), X2 0.13, X0 0.05. The program takes Z2 = Z1, as IEC 60909-0 does.
// Line-earth and line-line currents depend on the sum X1 + X2: with the mean of both as subtransient reactance
// they must be the book's. The fault of two lines and earth does not: with X1 for both, the textbook's formula
// must be met to rounding, and the printed 9,244.62 A only within 1 %.
TEST_CASE("Currents of unsymmetrical faults at the terminals of a generator are those of a textbook") {
  const double x1 = 25.0 / 170, x2 = 0.13, x0 = 0.05;
  const auto machine = [](double reactance) {
    return head() + generator("G", "bus", "13.2 kV", "25 MVA", reactance, "x0 = 0.05\nstar_point = \"solid\"\n") +
           boards({"bus"});
  };
  const auto all = study(machine((x1 + x2) / 2), {"--at", "bus", "--currents"});
  // Printed 10,030.0: 10,030.9 by its own data.
  CHECK_THAT(without_c(at(all, "maximum", "bus", "line-earth").amps), WithinRel(10030.0, 0.0002));
  CHECK_THAT(without_c(at(all, "maximum", "bus", "line-line").amps), WithinRel(6835.87, 0.0001));
  const StudyAnswer two = at(study(machine(x1), {"--at", "bus", "--fault", "two-lines-earth", "--currents"}), "maximum",
                             "bus", "two lines and earth");
  const auto book = [&](double negative) {
    const Complex a = std::polar(1.0, 2 * std::numbers::pi / 3);
    const Complex i1 = 1.0 / Complex{0, x1 + negative * x0 / (negative + x0)};
    const Complex i2 = -i1 * x0 / (negative + x0), i0 = -i1 * negative / (negative + x0);
    return std::abs(a * a * i1 + a * i2 + i0) * 25e6 / std::numbers::sqrt3 / 13200;
  };
  CHECK_THAT(book(x2), WithinRel(9244.62, 0.0002));
  for (const Complex amps : faulted_lines(two)) {
    CHECK_THAT(without_c(std::abs(amps)), WithinRel(book(x1), 1e-6));
    CHECK_THAT(without_c(std::abs(amps)), WithinRel(9244.62, 0.01));
  }
}

// Law (symmetrical components): a machine whose star point is not earthed gives a line-earth fault of
// its network positive and negative sequence alone: 2/3 of its share in the faulted line and 1/3 back
// in each of the others, nothing in the neutral; the whole return is in the earthed transformer.
TEST_CASE("An unearthed machine feeds a line-earth fault through its lines alone") {
  const auto all = study(
      head() +
          "[transformer.T]\nfeeds = \"bus\"\nvoltage = \"230/400 V\"\nrating = \"400 kVA\"\nuk = \"4 %\"\nx_over_r = "
          "3\nearthing = \"TN-S\"\nr0_over_r1 = 1\nx0_over_x1 = 0.9\n" +
          generator("G", "bus", "230/400 V", "250 kVA", 0.12, "earthing = \"TN-S\"\nstar_point = \"none\"\n") +
          both("T", "G") + boards({"bus"}),
      {"--at", "bus", "--fault", "line-earth", "--currents"});
  const StudyAnswer fault = at(all, "maximum", "bus", "line-earth");
  const double size = 0.04 * 400 * 400 / 400e3;
  const Complex zt = size * Complex{1, 3} / std::sqrt(10.0);
  const Complex z0 = size * Complex{1, 2.7} / std::sqrt(10.0);
  const Complex zg = Complex{0, 0.12} * (400.0 * 400 / 250e3);
  const Complex share = zt / (zt + zg);  // of the machine in Z1 = zt || zg
  const double amps = 3 * 1.1 * 230 / std::abs(2.0 * zt * zg / (zt + zg) + z0);
  constexpr double kExact = 1e-6;  // nothing is said of a network before the transformer: it is stiff
  CHECK_THAT(fault.amps, WithinRel(amps, kExact));
  const ElementAnswer machine = in(fault, "G");
  CHECK(machine.residual < 1e-6 * amps);
  CHECK(std::abs(machine.amps[3]) < 1e-6 * amps);
  std::array<double, 3> lines = {std::abs(machine.amps[0]), std::abs(machine.amps[1]), std::abs(machine.amps[2])};
  std::sort(lines.begin(), lines.end());
  CHECK_THAT(lines[2], WithinRel(2.0 / 3 * std::abs(share) * amps, kExact));
  CHECK_THAT(lines[1], WithinRel(1.0 / 3 * std::abs(share) * amps, kExact));
  CHECK_THAT(lines[0], WithinRel(lines[1], 1e-6));
  // Of the transformer: the rest of the faulted line, and the machine's third in the others.
  const ElementAnswer source = in(fault, "T");
  std::array<double, 3> rest = {std::abs(source.amps[0]), std::abs(source.amps[1]), std::abs(source.amps[2])};
  std::sort(rest.begin(), rest.end());
  CHECK_THAT(rest[2], WithinRel(std::abs(1.0 - 2.0 / 3 * share) * amps, kExact));
  CHECK_THAT(rest[1], WithinRel(lines[1], 1e-6));
  CHECK_THAT(rest[0], WithinRel(lines[1], 1e-6));
}

}  // namespace
