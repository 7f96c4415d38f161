// SPDX-License-Identifier: Apache-2.0
// Residual current devices: break times and the greatest resistance of earth electrodes.
#include <catch2/catch.hpp>
#include <string>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"
#include "tests/support/printed.h"

namespace {

using namespace sunder::published;
using sunder::support::Printed;

std::string behind(const std::string& device) {
  return head() +
         supply("230/400 V", "three_phase = \"10 kA\", power_factor = 1",
                "line_earth = \"10 A\", line_neutral = \"1 kA\", power_factor = 1") +
         bar() + "[board.main]\n[circuit.main]\nW = { use = \"fixed\", phases = \"L1\", device = \"" + device +
         "\", cable = \"bar 1000 mm2\", length = \"1 m\" }\n";
}

// Currents a thousandth above the multiples, so that rounding does not decide.
void compare(const std::string& device, const std::string& currents, const std::vector<std::string>& times) {
  const SweepAnswer sweep = vary_values(behind(device), "grid.minimum.line_earth", currents);
  REQUIRE(sweep.points.size() == times.size());
  for (std::size_t i = 0; i < times.size(); ++i) {
    CAPTURE(device, sweep.points[i].value);
    const FindingAnswer found = finding(sweep.points[i].findings, "disconnection time", "main/W");
    CHECK(found.confidence != "low");
    CHECK_THAT(found.value, Printed(times[i]));
  }
}

// Greatest break times of IEC 61008-1 and 61009-1, tag S:
// https://www.easymanua.ls/kewtech/kt64/manual?p=35; type S also https://www.barfuse.com/?p=4963.
// Up to 30 mA the last test is made at 0.25 A.
TEST_CASE("General residual current devices break within the standard's times at 1, 2 and 5 times IdN") {
  compare("RCD 63 A 100 mA", "100.1 mA, 200.2 mA, 500.5 mA", {"0.3", "0.15", "0.04"});
  compare("RCD 63 A 30 mA", "30.03 mA, 60.06 mA, 250.3 mA", {"0.3", "0.15", "0.04"});
}

TEST_CASE(
    "Residual current devices of type S break within the standard's times at 1, 2 and 5 times "
    "IdN") {
  compare("RCD 63 A 100 mA S", "100.1 mA, 200.2 mA, 500.5 mA", {"0.5", "0.2", "0.15"});
}

// BS 7671 Table 41.5, RA IdN <= 50 V, tag S: 30 mA at
// https://www.electriciansforums.net/threads/max-zs-on-a-30ma-rcd.5794/, all four at
// https://fr.scribd.com/document/627583456/4-Manuel-exercices-TT-solu.
TEST_CASE("Earth electrodes may have the resistances of BS 7671 Table 41.5") {
  const auto greatest = [](const std::string& IdN) {
    const std::string text = head() +
                             supply("230/400 V", "three_phase = \"10 kA\", power_factor = 1",
                                    "line_earth = \"1 ohm\", line_neutral = \"0.5 ohm\", power_factor = 1", "TT") +
                             bar() +
                             "[board.main]\n[electrode.rod]\nboard = \"main\"\nresistance = \"20 "
                             "ohm\"\n[circuit.main]\n" +
                             "W = { use = \"fixed\", phases = \"L1\", device = \"B 16 A 6 kA " + IdN +
                             "\", cable = \"bar 1000 mm2\", length = \"1 m\" }\n";
    return flip(vary(text, "rod.resistance", "10 ohm", "3000 ohm"), "earth electrode", "main/W");
  };
  CHECK_THAT(greatest("30 mA"), FlipPrints("1667"));
  CHECK_THAT(greatest("100 mA"), FlipPrints("500"));
  CHECK_THAT(greatest("300 mA"), FlipPrints("167"));
  CHECK_THAT(greatest("500 mA"), FlipPrints("100"));
}

}  // namespace
