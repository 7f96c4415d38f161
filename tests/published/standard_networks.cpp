// SPDX-License-Identifier: Apache-2.0
// The example networks of IEC TR 60909-4, written down by sequence impedances and solved by
// currents = "IEC 60909". Data and results of both are quoted from memory of the report (tag R, C18
// tag S-), so that each figure stands on a recomputation made without this program as well.
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
using Catch::Matchers::WithinRel;
using sunder::support::Printed;
using Complex = std::complex<double>;

constexpr const char* kStandard = "currents = \"IEC 60909\"\ntolerance = \"+6 %\"\n";

Complex loop_of(const FaultAnswer& fault) { return std::polar(fault.ohms, std::atan(fault.x_over_r)); }

std::string low_voltage_network() {
  const auto transformer = [](const std::string& name, const std::string& feeds, const char* rating,
                              const char* losses) {
    return "[transformer." + name + "]\nfrom = \"hv\"\nfeeds = \"" + feeds +
           "\"\nvector = \"Dyn5\"\nprimary = \"20 kV\"\nsecondary = \"410 V\"\nvoltage = \"230/400 V\"\nrating = \"" +
           rating + " kVA\"\nuk = \"4 %\"\nlosses = \"" + losses +
           " kW\"\nr0_over_r1 = 1\nx0_over_x1 = 0.95\nearthing = \"TN-S\"\n";
  };
  const auto line = [](const std::string& name, const std::string& from, const std::string& to, double metres,
                       Complex per_km, double r0, double x0, const std::string& rest = "") {
    const Complex z1 = per_km * metres / 1e3;
    return run({name, from, to, z1, Complex{r0 * z1.real(), x0 * z1.imag()}, rest, metres});
  };
  const std::string two = "in_parallel = 2\n";
  return head(kInternational) + kStandard +
         "[supply.Q]\nfeeds = \"hv\"\nvoltage = \"20 kV\"\nmaximum = { three_phase = \"10 kA\" }\n" +
         boards({"hv", "A", "A2", "B", "D", "E"}) + transformer("T1", "A", "630", "6.5") +
         transformer("T2", "A2", "400", "4.6") + line("L1", "A", "B", 10, {0.077, 0.079}, 3.7, 1.81, two) +
         line("L2", "A2", "B", 4, {0.208, 0.068}, 4.23, 1.21, two) + line("L3", "B", "D", 20, {0.271, 0.087}, 3, 4.46) +
         line("L4", "D", "E", 50, {0.3704, 0.297}, 2, 3);
}

// Tag R: IEC TR 60909-4:2000 clause 3 (2021 clause 5). Three places: the terminals of T1 (F1), board B
// (F2), the end of the overhead line (F3).
TEST_CASE("Short-circuit currents of the low-voltage network of IEC TR 60909-4 are the report's") {
  const auto all = faults(low_voltage_network());
  const auto kiloamps = [&all](const char* node, const char* fault) {
    return at(all, "maximum", node, fault).amps / 1e3;
  };
  CHECK_THAT(kiloamps("A", "three-phase"), WithinRel(34.62, 0.0005));
  CHECK_THAT(kiloamps("B", "three-phase"), WithinRel(34.12, 0.0005));
  // Printed 6.95; the recomputation gives 6.942 and does not meet it to the last digit either.
  CHECK_THAT(kiloamps("E", "three-phase"), WithinRel(6.95, 0.0015));
  CHECK_THAT(kiloamps("E", "three-phase"), WithinRel(6.942, 0.0005));
  // F1: printed 35.64, recomputed 35.71: 0.2 % above the report, which no reading of its data met.
  CHECK_THAT(kiloamps("A", "line-earth"), WithinRel(35.64, 0.003));
  CHECK_THAT(kiloamps("A", "line-earth"), WithinRel(35.71, 0.0005));
  CHECK_THAT(kiloamps("B", "line-earth"), WithinRel(34.98, 0.0005));
  CHECK_THAT(kiloamps("E", "line-earth"), WithinRel(4.83, 0.003));
  CHECK_THAT(kiloamps("E", "line-earth"), Printed("4.83"));
}

// Not printed in the report, or not remembered well enough to be quoted: an independent recomputation
// of the same network (sequence networks by hand), which the program must meet in its last digit.
TEST_CASE("Impedances, peaks and line-line currents of the low-voltage network are those of a recomputation") {
  struct Row {
    const char *node, *r1, *x1, *r0, *x0, *peak, *kappa, *two;  // mohm, kA
  };
  const std::vector<Row> rows = {
      {"A", "1.881", "6.746", "2.140", "6.009", "70.86", "1.4472", "29.99"},
      {"B", "1.977", "6.827", "2.516", "6.109", "69.07", "1.4315", "29.55"},
      {"E", "25.917", "23.417", "55.816", "58.419", "10.36", "1.0554", "6.01"},
  };
  const auto all = faults(low_voltage_network());
  for (const Row& row : rows) {
    CAPTURE(row.node);
    const FaultAnswer three = at(all, "maximum", row.node, "three-phase");
    const Complex z1 = loop_of(three);
    // A line-earth loop is (2 Z1 + Z0)/3.
    const Complex z0 = 3.0 * loop_of(at(all, "maximum", row.node, "line-earth")) - 2.0 * z1;
    CHECK_THAT(z1.real() * 1e3, Printed(row.r1));
    CHECK_THAT(z1.imag() * 1e3, Printed(row.x1));
    CHECK_THAT(z0.real() * 1e3, Printed(row.r0));
    CHECK_THAT(z0.imag() * 1e3, Printed(row.x0));
    CHECK_THAT(three.peak / 1e3, Printed(row.peak));
    CHECK_THAT(three.peak / three.amps / std::numbers::sqrt2, Printed(row.kappa));
    CHECK_THAT(at(all, "maximum", row.node, "line-line").amps / 1e3, Printed(row.two));
    // The neutral is the return of the report's zero-sequence impedance: both faults are one.
    CHECK_THAT(at(all, "maximum", row.node, "line-neutral").amps,
               WithinRel(at(all, "maximum", row.node, "line-earth").amps, 1e-9));
  }
}

// Tag R, from the same example: the transformers' corrected impedances 2.684+j10.053 (K_T 0.97489) and
// 4.712+j15.699 mohm (K_T 0.97509), whether they stand between two boards or are the source themselves.
TEST_CASE("The correction factor of a transformer is that of IEC TR 60909-4, as a source and between two boards") {
  const auto transformer = [](const char* rating, const char* losses, const std::string& rest) {
    return std::string("[transformer.T]\nfeeds = \"lv\"\nsecondary = \"410 V\"\nvoltage = \"230/400 V\"\nrating = \"") +
           rating + " kVA\"\nuk = \"4 %\"\nlosses = \"" + losses + " kW\"\nearthing = \"TN-S\"\n" + rest +
           boards({"lv"});
  };
  const std::string behind = sequence_supply("hv", "20 kV", Complex{0, 1e-5}, Complex{0, 1e-5}) + boards({"hv"});
  struct Row {
    const char *rating, *losses, *r, *x;
  };
  for (const Row& row : {Row{"630", "6.5", "2.684", "10.053"}, Row{"400", "4.6", "4.712", "15.699"}}) {
    const std::string start = head(kInternational) + kStandard;
    for (const std::string& text :
         {start + transformer(row.rating, row.losses, ""),
          start + behind + transformer(row.rating, row.losses, "from = \"hv\"\nprimary = \"20 kV\"\n")}) {
      CAPTURE(text);
      const Complex z1 = loop_of(at(faults(text), "maximum", "lv", "three-phase"));
      CHECK_THAT(z1.real() * 1e3, Printed(row.r));
      CHECK_THAT(z1.imag() * 1e3, Printed(row.x));
    }
  }
}

// By definition: the current that a supply declares is the one that flows at its terminals, whatever factor
// c drives it.
TEST_CASE("A supply delivers the currents that it declares by IEC 60909 too") {
  for (const std::string tolerance : {"+6 %", "+10 %"}) {
    CAPTURE(tolerance);
    const auto all = faults(head(kInternational) + "currents = \"IEC 60909\"\ntolerance = \"" + tolerance + "\"\n" +
                            supply("230/400 V", "three_phase = \"10 kA\", line_earth = \"6 kA\", power_factor = 0.5",
                                   "three_phase = \"5 kA\", line_earth = \"3 kA\", power_factor = 0.5") +
                            boards({"main"}));
    CHECK_THAT(at(all, "maximum", "main", "three-phase").amps, WithinRel(10e3, 1e-6));
    CHECK_THAT(at(all, "maximum", "main", "line-earth").amps, WithinRel(6e3, 1e-6));
    CHECK_THAT(at(all, "minimum", "main", "three-phase").amps, WithinRel(5e3, 1e-6));
    CHECK_THAT(at(all, "minimum", "main", "line-earth").amps, WithinRel(3e3, 1e-6));
  }
}

// By definition of the split phase: half its voltage lies between a line and the neutral, whatever the method.
TEST_CASE("A fault to the neutral of a split phase is driven by half its voltage by IEC 60909 too") {
  const auto all = faults(head(kInternational) + kStandard +
                          sequence_supply("main", "120/240 V", 0.01, 0.01, "earthing = \"TN-S\"\n") + boards({"main"}));
  CHECK_THAT(at(all, "maximum", "main", "line-line").amps, WithinRel(1.05 * 240 / 0.02, 1e-9));
  CHECK_THAT(at(all, "maximum", "main", "line-neutral").amps, WithinRel(1.05 * 120 / 0.01, 1e-9));
  CHECK_THAT(at(all, "maximum", "main", "line-earth").amps, WithinRel(1.05 * 120 / 0.01, 1e-9));
}

// Answers tag S- (totals seen quoted), data R: IEC TR 60909-4:2000 clause 4 (2021 clause 6). Of the
// data the cables' reactance is not confirmed: 0.1 ohm/km leaves the network's part 0.27 % above the
// printed one, hence 0.5 %.
TEST_CASE("Short-circuit currents of a 33/6 kV network with motors are those of IEC TR 60909-4") {
  std::string text = head(kInternational) + kStandard +
                     "[supply.Q]\nfeeds = \"hv\"\nvoltage = \"33 kV\"\nmaximum = { power = \"750 MVA\" }\n" +
                     boards({"hv", "t1", "t2", "mv"});
  for (const std::string n : {"1", "2"}) {
    text += run({"C" + n, "hv", "t" + n, Complex{0.485, 0.485}, {}, "", 4850});
    text += "[transformer.T" + n + "]\nfrom = \"t" + n +
            "\"\nfeeds = \"mv\"\nvector = \"Dyn5\"\nprimary = \"33 kV\"\nsecondary = \"6.3 kV\"\nvoltage = \"6 kV\"\n"
            "rating = \"15 MVA\"\nuk = \"15 %\"\nlosses = \"90 kW\"\n";
  }
  text +=
      "[motor.M1]\non = \"mv\"\nrating = \"5 MW\"\npf = 0.86\nefficiency = 0.97\nstart = 4\nr_over_x = 0.1\n"
      "pole_pairs = 2\n"
      "[motor.M2]\non = \"mv\"\nrating = \"1 MW\"\npf = 0.83\nefficiency = 0.94\nstart = 5.5\nr_over_x = 0.1\n"
      "pole_pairs = 1\ncount = 3\n";
  const StudyAnswer three =
      at(study(text, {"--at", "mv", "--fault", "three-phase", "--currents"}), "maximum", "mv", "three-phase");
  CHECK_THAT(three.amps / 1e3, WithinRel(19.52, 0.005));
  CHECK_THAT(three.peak / 1e3, WithinRel(48.82, 0.005));
  const auto part = [&three](const char* element) { return in(three, element).amps[0] / 1e3; };
  CHECK_THAT(std::abs(part("T1 secondary") + part("T2 secondary")), WithinRel(14.74, 0.005));
  CHECK_THAT(std::abs(part("M1")), WithinRel(2.54, 0.005));
  // Not printed, recomputed: the parts, and the total to its last digit.
  CHECK_THAT(std::abs(part("M2")), Printed("2.24"));
  CHECK_THAT(std::abs(part("M1")), Printed("2.54"));
  CHECK_THAT(std::abs(part("T1 secondary") + part("T2 secondary")), Printed("14.78"));
  CHECK_THAT(three.amps / 1e3, Printed("19.55"));
}

}  // namespace
