// SPDX-License-Identifier: Apache-2.0
// Published earth-fault loops: TN circuits, a ring, TT.
#include <catch2/catch.hpp>
#include <cmath>
#include <string>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"
#include "tests/support/printed.h"

namespace {

using namespace sunder::published;
using Catch::Matchers::WithinRel;
using sunder::support::Printed;

std::string resistive(const std::string& Ze) {
  return supply("230/400 V", "three_phase = \"50 kA\", power_factor = 1",
                "Ze = \"" + Ze + "\", Zn = \"" + Ze + "\", power_factor = 1");
}

// Tag S:
// https://engx.theiet.org/f/wiring-and-regulations/24378/calculation-of-earth-fault-loop-impedance.
// R and X summed separately: transformer 0.005/0.017 ohm; phase 0.008/0.004 and return 0.008/0.001;
// phase 0.008/0.004 and armour 0.032; phase 0.023 and conduit 0.007/0.008. One temperature: the
// maximum here.
TEST_CASE("The loop from a 500 kVA transformer to a final circuit is that of a published calculation") {
  const auto cable = [](const std::string& name, double metres, double r, double x, double cpc_r, double cpc_x) {
    const auto per_metre = [metres](double ohms) { return digits(ohms / metres * 1e3) + " mohm/m\""; };
    return "[cable." + name +
           "]\nmaterial = \"aluminium\"\ninsulation = \"pvc70\"\ncores = 4\narmour = "
           "\"steel\"\nsizes = [{ size = "
           "\"185 mm2\", r20 = \"" +
           per_metre(r) + ", x = \"" + per_metre(x) + ", armour_area = \"100 mm2\", armour_r20 = \"" +
           per_metre(cpc_r) + ", armour_x = \"" + per_metre(cpc_x) + " }]\nsource = \"the published case\"\n";
  };
  const std::string text = head() +
                           supply("230/400 V",
                                  "three_phase = \"0.017 ohm\", line_earth = \"" + digits(std::hypot(0.005, 0.017)) +
                                      " ohm\", x_over_r = 3.4",
                                  "Ze = \"1 ohm\"") +
                           "[board.main]\n[board.A]\n[board.B]\n" + cable("one", 100, 0.008, 0.004, 0.008, 0.001) +
                           cable("two", 50, 0.008, 0.004, 0.032, 0) + cable("three", 5, 0.023, 0, 0.007, 0.008) +
                           "[submain.S1]\nfrom = \"main\"\nto = \"A\"\ndevice = \"switch 630 A\"\ncable = \"one 185 "
                           "mm2\"\ncpc = \"armour\"\n"
                           "length = \"100 m\"\n"
                           "[submain.S2]\nfrom = \"A\"\nto = \"B\"\ndevice = \"switch 250 A\"\ncable = \"two 185 "
                           "mm2\"\ncpc = \"armour\"\n"
                           "length = \"50 m\"\n"
                           "[circuit.B]\nC = { use = \"fixed\", phases = \"L1\", device = \"gG 32 A\", cable = \"three "
                           "185 mm2\", cpc = "
                           "\"armour\", length = \"5 m\" }\n";
  const auto all = faults(text);
  CHECK_THAT(at(all, "maximum", "A", "line-earth").ohms, Printed("0.030"));
  CHECK_THAT(at(all, "maximum", "B", "line-earth").ohms, Printed("0.066"));
  CHECK_THAT(at(all, "maximum", "B/C", "line-earth").ohms, Printed("0.097"));
}

// Tag S: https://cr4.globalspec.com/thread/38548/Calculating-Earth-Loop-Impedance. Ze 0.15 ohm, 30
// m of 6/2.5 mm2 at 70 degC (1.2 times 3.08 + 7.41 mohm/m). The page cuts digits: 0.3776 is 0.38,
// 0.5276 is 0.52.
TEST_CASE("The loop of a shower circuit is that of a published calculation") {
  const auto all = faults(head() + resistive("0.15 ohm") +
                          "[board.main]\n[circuit.main]\nW = { use = \"fixed\", phases = \"L1\", "
                          "device = \"B 32 A\", cable = "
                          "\"flat-pvc-cu 6/2.5 mm2\", length = \"30 m\" }\n");
  const double Zs = at(all, "minimum", "main/W", "line-earth").ohms;
  CHECK_THAT(Zs - 0.15, Printed("0.38"));
  CHECK(Zs >= 0.52);
  CHECK(Zs < 0.53);
}

// Tag S- (last step R): Linsley, Basic Electrical Installation Work, p. 248,
// https://zdroje.elektrika.cz/book/basic-electrical-installation-work/page/259. 30 m of 2.5/1.5
// mm2, ZE 0.5 ohm.
TEST_CASE("The loop of a 20 A radial circuit is that of a textbook, cold and hot") {
  const std::string circuit =
      "[board.main]\n[circuit.main]\nW = { use = \"sockets\", phases = \"L1\", device = \"B 20 "
      "A\", cable = "
      "\"flat-pvc-cu 2.5/1.5 mm2\", length = \"30 m\" }\n";
  const auto cold = faults(head() + stiff_supply() + circuit);
  CHECK_THAT(at(cold, "maximum", "main/W", "line-earth").ohms, Printed("0.585"));
  const auto hot = faults(head() + resistive("0.5 ohm") + circuit);
  const double Zs = at(hot, "minimum", "main/W", "line-earth").ohms;
  CHECK_THAT(Zs - 0.5, Printed("0.702"));
  CHECK_THAT(Zs, Printed("1.20"));
}

// Tag R: a manufacturer's installation guide, chapter on TN. 50 m of 35 mm2, rho 0.0225 ohm mm2/m,
// the circuit alone. The guide divides 230 V by the rounded 64.3 mohm: 3,576 A; 64.29 mohm give
// 3,578 A.
TEST_CASE("The loop of a 35 mm2 circuit by the conventional method is that of an installation guide") {
  const auto all = faults(head() + stiff_supply() +
                          "[cable.c]\nmaterial = \"copper\"\ninsulation = \"pvc70\"\ncores = "
                          "5\nsizes = [{ size = \"35 mm2\", r20 = \"" +
                          digits(0.0225 / 35 * 1e3) +
                          " mohm/m\" }]\nsource = \"resistivity of the "
                          "guide\"\n[board.main]\n[circuit.main]\nW = { use = \"distribution\", "
                          "phases = \"L1 L2 L3 N\", device = \"gG 160 A\", cable = \"c 35 mm2\", "
                          "length = \"50 m\" }\n");
  const FaultAnswer earth = at(all, "maximum", "main/W", "line-earth");
  CHECK_THAT(earth.ohms * 1e3, Printed("64.3"));
  CHECK_THAT(earth.amps / kMax, WithinRel(3576.0, 0.001));
}

// Tag S: https://www.diynot.com/diy/threads/calculating-r1-r2.79317/: r1 0.54, r2 0.90 ohm end to
// end. The other places follow the law x (1 - x) of a healthy ring; spurs of no length show them.
TEST_CASE("R1 + R2 at the mid-point of a ring is a quarter of r1 + r2") {
  const auto all = faults(head() + stiff_supply() +
                          "[cable.ring]\nmaterial = \"copper\"\ninsulation = \"pvc70\"\ncores = "
                          "2\nbuilt_in_cpc = true\nsizes = [{ size = "
                          "\"2.5 mm2\", r20 = \"5.4 mohm/m\", cpc_size = \"1.5 mm2\", cpc_r20 = "
                          "\"9.0 mohm/m\" }]\nsource = \"the published "
                          "case\"\n[board.main]\n[circuit.main]\nW = { use = \"sockets\", phases = "
                          "\"L1\", device = \"B 32 A\", cable = "
                          "\"ring 2.5/1.5 mm2\", length = \"100 m\", ring = true, spurs = [{ at = "
                          "\"10 m\", length = \"0.0001 m\" }, { at = "
                          "\"25 m\", length = \"0.0001 m\" }] }\n");
  CHECK_THAT(at(all, "maximum", "main/W", "line-earth").ohms, Printed("0.36"));
  CHECK_THAT(at(all, "maximum", "main/W/spur1", "line-earth").ohms, Printed("0.1296"));
  CHECK_THAT(at(all, "maximum", "main/W/spur2", "line-earth").ohms, Printed("0.270"));
}

// (a) Tag S: https://fr.scribd.com/document/627583456/4-Manuel-exercices-TT-solu: electrodes of 22
// and 22 ohm, 230 V: 5.22 A (5.227, cut). (b) Tag R: guide example, 10 and 20 ohm: 7.7 A.
TEST_CASE("Earth-fault currents of TT installations are those of published exercises") {
  const auto current = [](const std::string& neutral_electrode, const std::string& electrode) {
    const auto all = faults(
        head() +
        supply("230/400 V", "three_phase = \"10 kA\", power_factor = 1",
               "line_earth = \"" + neutral_electrode + "\", line_neutral = \"0.5 ohm\", power_factor = 1", "TT") +
        bar() + "[board.main]\n[electrode.rod]\nboard = \"main\"\nresistance = \"" + electrode +
        "\"\n[circuit.main]\nW = { use = \"fixed\", phases = \"L1\", device = \"B 16 A 6 kA 30 "
        "mA\", cable = \"bar 1000 "
        "mm2\", length = \"1 m\" }\n");
    return at(all, "minimum", "main/W", "line-earth").amps / kMinBritish;
  };
  const double exercise = current("22 ohm", "22 ohm");
  CHECK(exercise >= 5.22);
  CHECK(exercise < 5.23);
  CHECK_THAT(current("10 ohm", "20 ohm"), Printed("7.7"));
}

}  // namespace
