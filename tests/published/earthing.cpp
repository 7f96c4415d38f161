// SPDX-License-Identifier: Apache-2.0
// Published voltages of protective conductors during a fault, in TN-C and TT. The factor c multiplies
// voltages as it does currents.
#include <catch2/catch.hpp>
#include <cmath>
#include <string>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"
#include "tests/published/studies.h"
#include "tests/support/printed.h"

namespace {

using namespace sunder::published;
using Catch::Matchers::WithinRel;
using sunder::support::Printed;

// Tag R: a manufacturer's installation guide, chapter on TN: 50 m of 35 mm2 copper, phase and PEN, rho
// 0.0225 ohm mm2/m, the run alone: 64.3 mohm, 3,576 A (230 V over the rounded 64.3; 3,578 A), 115 V.
TEST_CASE("The voltage of a PEN of the line's size is half of that to neutral, as in an installation guide") {
  const std::string loops = "line_neutral = \"0.0000001 ohm\", line_earth = \"0.0000001 ohm\", power_factor = 1";
  const auto all =
      study(head() + supply("230/400 V", "three_phase = \"0.0000001 ohm\", " + loops, loops, "TN-C") +
                boards({"main", "frame"}) +
                "[cable.c]\nmaterial = \"copper\"\ninsulation = \"pvc70\"\ncores = 4\nsizes = [{ size = \"35 mm2\", "
                "r20 = \"" +
                digits(0.0225 / 35 * 1e3) + " mohm/m\" }]\nsource = \"resistivity of the guide\"\n" +
                "[submain.S]\nfrom = \"main\"\nto = \"frame\"\ndevice = \"gG 160 A\"\ncable = \"c 35 mm2\"\n"
                "cpc = \"PEN\"\nlength = \"50 m\"\n",
            {"--at", "frame", "--fault", "line-earth", "--touch"});
  const StudyAnswer fault = at(all, "maximum", "frame", "line-earth");
  CHECK_THAT(std::abs(fault.loop) * 1e3, Printed("64.3"));
  CHECK_THAT(without_c(fault.amps), WithinRel(3576.0, 0.001));
  CHECK_THAT(without_c(touch(fault, "frame")), Printed("115"));
}

// (a) Tag S: https://fr.scribd.com/document/627583456/4-Manuel-exercices-TT-solu: electrodes of 22 and 22
// ohm: 5.22 A (5.227, cut) and 115 V. (b) Tag R: guide example, 10 and 20 ohm: 7.7 A and 154 V, which is
// 20 ohm times the rounded current; 153.3 V.
TEST_CASE("Fault current and voltage of the protective conductor in TT are those of published exercises") {
  const auto solve = [](const std::string& source, const std::string& electrode) {
    const std::string loops = "line_earth = \"" + source + "\", line_neutral = \"0.05 ohm\", power_factor = 1";
    const auto all =
        study(head() + supply("230/400 V", "three_phase = \"0.05 ohm\", " + loops, loops, "TT") + boards({"main"}) +
                  "[electrode.rod]\nboard = \"main\"\nresistance = \"" + electrode + "\"\n",
              {"--at", "main", "--fault", "line-earth", "--touch"});
    return at(all, "maximum", "main", "line-earth");
  };
  const StudyAnswer exercise = solve("22 ohm", "22 ohm");
  check_cut(without_c(exercise.amps), "5.22");
  CHECK_THAT(without_c(touch(exercise, "main")), Printed("115"));
  const StudyAnswer guide = solve("10 ohm", "20 ohm");
  CHECK_THAT(without_c(guide.amps), Printed("7.7"));
  CHECK_THAT(without_c(touch(guide, "main")), WithinRel(154.0, 0.005));
  CHECK_THAT(without_c(touch(guide, "main")), Printed("153.3"));
}

}  // namespace
