// SPDX-License-Identifier: Apache-2.0
// Every configuration that has no solution, or none for some fault: each is told with what would decide it,
// in the user's words, and none gives a number. Here supplies, conductors and earths.
#include "tests/solver/singular.h"

using namespace sunder;
using namespace sunder::tests::singular;
using Catch::Matchers::Contains;
using Catch::Matchers::WithinRel;
using tests::read;

TEST_CASE("A dead board is told before anything is solved", "[singular]") {
  models::Network network = read(supply("TN-S"));
  models::Board island;
  island.name = "island";
  network.boards.push_back(island);
  const std::vector<solver::Trouble> troubles = solver::check_topology(network);
  REQUIRE(troubles.size() == 1);
  CHECK(troubles[0].message == "nobody feeds board 'island'");
}

TEST_CASE("Boards that feed one another and are fed by nobody are an island", "[singular]") {
  const netlists::Reading reading =
      netlists::read_network_text(supply("TN-S") + "[board.a]\n[board.b]\n[submain.S1]\nfrom = \"a\"\nto = \"b\"\n" +
                                      kCable + "[submain.S2]\nfrom = \"b\"\nto = \"a\"\n" + kCable,
                                  "test.toml");
  CHECK_FALSE(reading.network.has_value());
  REQUIRE(reading.diagnostics.size() == 2);
  CHECK(reading.diagnostics[0].message == "nothing feeds board 'a'");
  CHECK(reading.diagnostics[1].message == "nothing feeds board 'b'");
}

TEST_CASE("An IT network without capacitance or star-point impedance has no first-fault current", "[singular]") {
  const std::string rod = "[electrode.rod]\nboard = \"main\"\nresistance = \"10 ohm\"\n";
  CHECK(needs(supply("IT", rod), "main", Fault::line_earth) == "capacitance or star_point of grid");
  CHECK(current(supply("IT", rod), "main", Fault::line_neutral) > 1000);
  // Declared: 253 V over the capacitive reactance 1/(2 pi 50 Hz 2 uF) = 1591.5 ohm, all else is small beside it.
  const double amps = current(supply("IT", "capacitance = \"2 uF\"\n" + rod), "main", Fault::line_earth);
  CHECK_THAT(amps, WithinRel(1.1 * 230 / 1591.5494, 2e-3));
  CHECK_THAT(current(supply("IT", "star_point = \"1000 ohm\"\n" + rod), "main", Fault::line_earth),
             WithinRel(1.1 * 230 / 1010, 1e-6));
}

TEST_CASE("An IT network without any electrode has no first-fault current either", "[singular]") {
  CHECK_FALSE(needs(supply("IT", "capacitance = \"2 uF\"\n"), "main", Fault::line_earth).empty());
}

TEST_CASE("The least first-fault current of an IT network asks for nothing its declaration cannot hold", "[singular]") {
  const models::Network network = read(kRules + R"([board.main]
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = "IT"
capacitance = "2 uF"
maximum = { three_phase = "16 kA", power_factor = 0.3 }
minimum = { Zn = "0.35 ohm", power_factor = 0.9 }
[electrode.rod]
board = "main"
resistance = "10 ohm"
)");
  for (const FaultDetail& detail : details(network, "main", Fault::line_earth)) {
    INFO(word(detail.row.condition) << ": " << detail.row.needs);
    CHECK(detail.row.known);
    CHECK(detail.row.current < 0.2);
  }
}

TEST_CASE("A protective conductor without way to the star point closes no loop", "[singular]") {
  for (const char* how : {"link = \"none\"\n", "star_point = \"open\"\n"}) {
    const std::string text = kUtility + unit(std::string("earthing = \"TN-S\"\n") + how);
    INFO(how);
    CHECK_THAT(needs(text, "lv", Fault::line_earth), Contains("protective conductor of lv"));
    CHECK(current(text, "lv", Fault::line_neutral) > 1000);
  }
}

TEST_CASE("Protective conductors that are joined to one another alone close no loop", "[singular]") {
  // `out` is fed without protective conductor; what it has leads to `far` and no farther.
  const std::string text = supply("TN-S") +
                           "[board.out]\n[board.far]\n[submain.S1]\nfrom = \"main\"\nto = \"out\"\ncpc = \"none\"\n" +
                           kCable + "[submain.S2]\nfrom = \"out\"\nto = \"far\"\n" + kCable +
                           "[bond.pipe]\nfrom = \"out\"\nto = \"far\"\nimpedance = \"3 ohm\"\n";
  CHECK_THAT(needs(text, "out", Fault::line_earth), Contains("protective conductor of out"));
  CHECK_THAT(needs(text, "far", Fault::line_earth), Contains("protective conductor of far"));
  CHECK_THAT(needs(text, "far", Fault::two_lines_earth), Contains("protective conductor of far"));
}

TEST_CASE("A run without z0 carries lines only, and what needs the return asks for it", "[singular]") {
  const std::string text = supply("TN-S") + R"([board.b]
[board.c]
[submain.S1]
from = "main"
to = "b"
length = "10 m"
z1 = "0.3+j0.1 mohm/m"
[submain.S2]
from = "b"
to = "c"
)" + kCable;
  for (const char* board : {"b", "c"})
    for (const Fault fault : {Fault::line_neutral, Fault::line_earth, Fault::two_lines_earth})
      CHECK(needs(text, board, fault) == "z0 of S1");
  CHECK(current(text, "c", Fault::line_line) > 1000);
}

TEST_CASE("At high voltage a line-earth fault asks for line_earth, whatever lies behind", "[singular]") {
  for (const char* group : {"Dyn11", "Yyn0", "Yd1"}) {
    const std::string text =
        kUtility + unit(std::string("vector = \"") + group + "\"\n" + (group[1] == 'd' ? "" : "earthing = \"TN-S\"\n"));
    INFO(group);
    CHECK_THAT(needs(text, "hv", Fault::line_earth), Contains("line_earth of utility"));
    CHECK_THAT(needs(text, "hv", Fault::line_earth), !Contains("T1"));
  }
}

TEST_CASE("At high voltage an open star point leaves a line-earth fault open", "[singular]") {
  const std::string text = kRules + R"([board.hv]
[supply.utility]
feeds = "hv"
voltage = "20 kV"
star_point = "open"
maximum = { z1 = "j1 ohm", z0 = "j3 ohm" }
minimum = { z1 = "j1 ohm", z0 = "j3 ohm" }
)";
  CHECK_THAT(needs(text, "hv", Fault::line_earth), Contains("star_point"));
  std::string solid = text;
  solid.replace(solid.find("open"), 4, "solid");
  CHECK_THAT(current(solid, "hv", Fault::line_earth), WithinRel(3 * 1.1 * 20e3 / std::sqrt(3) / 5, 1e-9));
}

TEST_CASE("In a loop of links the shares are said to be undefined, the fault is solved", "[singular]") {
  const std::string text = supply("TN-S") + R"([board.a]
[board.b]
[link.K1]
from = "main"
to = "a"
[link.K2]
from = "a"
to = "b"
[link.K3]
from = "b"
to = "main"
)";
  for (const FaultDetail& detail : details(read(text), "b", Fault::line_earth, true)) {
    CHECK_THAT(detail.undefined, Catch::StartsWith("K"));
    CHECK_THAT(detail.row.current * (2 * 0.03 + 0.06) / 3, WithinRel(detail.row.driving_volts, 1e-9));
  }
}

TEST_CASE("Sources whose voltages conflict are refused by name", "[singular]") {
  const std::string other = R"([supply.other]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
maximum = { three_phase = "16 kA" }
minimum = { Ze = "0.35 ohm", Zn = "0.35 ohm" }
[state.both]
sources = ["grid", "other"]
)";
  models::Network network = read(supply("TN-S", other));
  network.sources[1].U = 208;
  network.sources[1].U0 = 120;
  const std::vector<solver::Trouble> troubles = solver::check_topology(network);
  REQUIRE_FALSE(troubles.empty());
  CHECK_THAT(troubles[0].message, Contains("source 'other'") && Contains("208 V") && Contains("400 V"));
}

TEST_CASE("A coupler between two voltages is refused by both boards", "[singular]") {
  const netlists::Reading reading = netlists::read_network_text(supply("TN-S", R"([board.b]
[supply.other]
feeds = "b"
voltage = "120/208 V"
earthing = "TN-S"
maximum = { three_phase = "16 kA" }
minimum = { Ze = "0.35 ohm", Zn = "0.35 ohm" }
[link.K]
from = "main"
to = "b"
[state.both]
sources = ["grid", "other"]
)"),
                                                                "test.toml");
  CHECK_FALSE(reading.network.has_value());
  REQUIRE_FALSE(reading.diagnostics.empty());
  CHECK(reading.diagnostics[0].message == "link 'K' joins board 'main' of 400 V and board 'b' of 208 V");
}

TEST_CASE("A primary of another voltage than its board is refused", "[singular]") {
  models::Network network = read(kUtility + unit("earthing = \"TN-S\"\n"));
  network.transformers[0].primary = 10e3;
  const std::vector<solver::Trouble> troubles = solver::check_topology(network);
  REQUIRE_FALSE(troubles.empty());
  CHECK_THAT(troubles[0].message,
             Contains("the primary of transformer 'T1'") && Contains("20 kV") && Contains("10 kV"));
}

TEST_CASE("Runs whose impedances cancel are named, not solved", "[singular]") {
  // j3 mohm/m beside -j3 mohm/m: between the boards flows whatever one likes.
  const std::string text = supply("TN-S") + R"([board.b]
[submain.S1]
from = "main"
to = "b"
length = "10 m"
z1 = "j3 mohm/m"
z0 = "j9 mohm/m"
[submain.S2]
from = "main"
to = "b"
length = "10 m"
z1 = "-j3 mohm/m"
z0 = "-j9 mohm/m"
)";
  for (const Fault fault : {Fault::three_phase, Fault::line_neutral, Fault::line_earth})
    CHECK(needs(text, "b", fault) == "impedances that cancel one another around board 'b'");
}

TEST_CASE("A star point whose impedance cancels the loop gives no unbounded current", "[singular]") {
  // z1 + z2 + z0 + 3 z_N = j1 + j1 + j1 - j3 = 0.
  const std::string text = kRules + R"([board.hv]
[supply.utility]
feeds = "hv"
voltage = "20 kV"
star_point = "-j1 ohm"
maximum = { z1 = "j1 ohm", z0 = "j1 ohm" }
minimum = { z1 = "j1 ohm", z0 = "j1 ohm" }
)";
  CHECK_THAT(needs(text, "hv", Fault::line_earth), Contains("cancel one another"));
  CHECK_THAT(current(text, "hv", Fault::three_phase), WithinRel(1.1 * 20e3 / std::sqrt(3), 1e-9));
}

TEST_CASE("A negative difference of z0 and z1 is no trouble", "[singular]") {
  const std::string text = supply("TN-S") + R"([board.b]
[submain.S1]
from = "main"
to = "b"
length = "10 m"
z1 = "j3 mohm/m"
z0 = "j0.6 mohm/m"
)";
  // (2 z1 + z0)/3 of the supply j0.04 and of the run j0.022 ohm.
  CHECK_THAT(current(text, "b", Fault::line_earth), WithinRel(1.1 * 230 / 0.062, 1e-9));
}
