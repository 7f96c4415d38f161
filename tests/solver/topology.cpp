// SPDX-License-Identifier: Apache-2.0
#include "solver/topology.h"

#include <cmath>
#include <complex>

#include "tests/solver/reading.h"

using namespace sunder;
using tests::read;
using tests::supply;

namespace {

const std::string kCable = R"(cable = "singles-pvc-cu 10 mm2"
length = "10 m"
device = "C 32 A 10 kA"
)";

std::vector<std::string> messages(const models::Network& network) {
  std::vector<std::string> all;
  for (const solver::Trouble& trouble : solver::check_topology(network)) all.push_back(trouble.message);
  return all;
}

}  // namespace

TEST_CASE("A board fed by two submains hangs on the board above, through both", "[topology]") {
  const models::Network network = read(supply() + R"([board.a]
[board.b]
[submain.S1]
from = "main"
to = "a"
)" + kCable + R"([submain.S2]
from = "main"
to = "a"
)" + kCable + R"([submain.S3]
from = "a"
to = "b"
)" + kCable);
  REQUIRE(messages(network).empty());
  const solver::StateTree tree = solver::state_tree(network, 0);
  CHECK(tree.grid);
  CHECK(tree.looped == std::vector<bool>{true, true, false});
  CHECK(tree.above[0] == -1);
  CHECK(tree.above[1] == 0);
  CHECK(tree.feeder[1] == -1);
  CHECK(tree.above[2] == 1);
  CHECK(tree.feeder[2] == 2);
  // Two equal cables are one of half the length.
  const models::Network half = read(supply() + R"([board.a]
[board.b]
[submain.S1]
from = "main"
to = "a"
in_parallel = 2
)" + kCable + R"([submain.S3]
from = "a"
to = "b"
)" + kCable);
  CHECK_FALSE(solver::state_tree(half, 0).grid);
  const std::vector<solver::FaultRow> looped = solver::solve_faults(network);
  const std::vector<solver::FaultRow> walked = solver::solve_faults(half);
  REQUIRE(looped.size() == walked.size());
  for (std::size_t i = 0; i < looped.size(); ++i) {
    CHECK(looped[i].node == walked[i].node);
    CHECK_THAT(looped[i].current, Catch::Matchers::WithinRel(walked[i].current, 1e-9));
  }
}

TEST_CASE("Two sources on one part of the network feed together", "[topology]") {
  const models::Network network = read(supply() + R"([board.b]
[submain.S1]
from = "main"
to = "b"
)" + kCable + R"([supply.other]
feeds = "b"
voltage = "230/400 V"
earthing = "TN-C-S"
maximum = { three_phase = "6 kA", power_factor = 0.3 }
minimum = { Ze = "0.8 ohm" }
[state.both]
sources = ["grid", "other"]
)");
  REQUIRE(messages(network).empty());
  const solver::StateTree tree = solver::state_tree(network, 0);
  CHECK(tree.grid);
  CHECK(tree.looped == std::vector<bool>{true});
  CHECK(tree.above == std::vector<int>{-1, -1, -1});
  CHECK_FALSE(tree.sole[0]);
  // At `b` its own 6 kA at power factor 0.3 beside 16 kA through 10 m of 1.83 mohm/m (IEC 60228); the reactance of
  // the cable is small.
  const double volts = 1.1 * 230.94;
  const std::complex<double> own = std::polar(volts / 6000, std::acos(0.3));
  const std::complex<double> far = std::polar(volts / 16000, std::acos(0.3)) + 0.0183;
  for (const solver::FaultRow& row : solver::solve_faults(network))
    if (row.node == "b" && row.fault == solver::Fault::three_phase && row.condition == solver::Condition::maximum)
      CHECK_THAT(row.current, Catch::Matchers::WithinRel(volts * std::abs(1.0 / own + 1.0 / far), 0.02));
}

TEST_CASE("A source below another serves in a state of its own", "[topology]") {
  const models::Network network = read(supply() + R"([board.b]
[submain.S1]
from = "main"
to = "b"
)" + kCable + R"([supply.other]
feeds = "b"
voltage = "230/400 V"
earthing = "TN-C-S"
maximum = { three_phase = "6 kA" }
minimum = { Ze = "0.8 ohm" }
[state.mains]
sources = ["grid"]
[state.island]
sources = ["other"]
)");
  REQUIRE(messages(network).empty());
  const solver::StateTree island = solver::state_tree(network, 1);
  CHECK_FALSE(island.live(0));
  CHECK(island.live(1));
  CHECK(island.feeder[1] == -1);
}

TEST_CASE("Two electrodes on one protective conductor are earths in parallel", "[topology]") {
  const models::Network network = read(supply("TT") + R"([board.out]
[submain.S1]
from = "main"
to = "out"
)" + kCable + R"([electrode.E1]
board = "main"
resistance = "40 ohm"
[electrode.E2]
board = "out"
resistance = "60 ohm"
)");
  REQUIRE(messages(network).empty());
  CHECK(solver::state_tree(network, 0).grid);
  // 40 ohm beside 60 ohm behind a cable of 18 mohm: 24 ohm; the declared 0.35 ohm and the cable in front.
  for (const solver::FaultRow& row : solver::solve_faults(network)) {
    if (row.fault != solver::Fault::line_earth || row.condition != solver::Condition::minimum) continue;
    const double ohms = 24 + 0.35 * 0.9 + (row.node == "out" ? 10 * 1.83e-3 * 1.2 : 0.0);
    CHECK_THAT(row.current, Catch::Matchers::WithinRel(0.95 * 230 / ohms, 1e-3));
  }
}

TEST_CASE("A link joins boards, and either feeds the other", "[topology]") {
  const models::Network network = read(supply() + R"([board.b]
[board.c]
[link.K]
from = "b"
to = "main"
[submain.S1]
from = "b"
to = "c"
)" + kCable);
  REQUIRE(messages(network).empty());
  const solver::StateTree tree = solver::state_tree(network, 0);
  CHECK(tree.live(1));
  CHECK(tree.link[1] == 0);
  CHECK(tree.above[1] == 0);
  CHECK(tree.feeder[2] == 0);
  CHECK(tree.conductors[1] == tree.conductors[0]);
}

TEST_CASE("A board behind a transformer sees it as its source", "[topology]") {
  const models::Network network = read(R"(rules = "BS 7671:2018+A2"
[supply.utility]
feeds = "hv"
voltage = "20 kV"
maximum = { power = "250 MVA" }
minimum = { power = "100 MVA" }
[board.hv]
[board.lv]
[board.sub]
[transformer.T1]
from = "hv"
feeds = "lv"
primary = "20 kV"
voltage = "230/400 V"
rating = "400 kVA"
uk = "4 %"
x_over_r = 4
earthing = "TN-S"
[submain.S1]
from = "lv"
to = "sub"
)" + kCable);
  REQUIRE(messages(network).empty());
  const solver::StateTree tree = solver::state_tree(network, 0);
  CHECK(tree.transformer[1] == 0);
  CHECK(solver::system_of(network, tree, 0).U == 20e3);
  CHECK(solver::system_of(network, tree, 2).name == "T1");
  CHECK(solver::system_of(network, tree, 2).U == 400);
  CHECK(solver::high_voltage(network, tree, 0));
  CHECK_FALSE(solver::high_voltage(network, tree, 2));
  CHECK_FALSE(tree.conductors[0].has(models::Conductor::N));
  CHECK(tree.conductors[2].has(models::Conductor::N));
}

TEST_CASE("An outbuilding fed without protective conductor has its own earth", "[topology]") {
  const models::Network network = read(supply("TT") + R"([board.out]
[submain.S1]
from = "main"
to = "out"
cpc = "none"
)" + kCable + R"([electrode.E1]
board = "main"
resistance = "40 ohm"
[electrode.E2]
board = "out"
resistance = "60 ohm"
)");
  REQUIRE(messages(network).empty());
  const solver::StateTree tree = solver::state_tree(network, 0);
  CHECK(tree.electrode[0] == 0);
  CHECK(tree.electrode[1] == 1);
  // 0.95 x 230 V over the declared 0.35 ohm, 10 m of 10 mm2 (1.83 mohm/m, IEC 60228) at 70 degC and RA.
  const double ohms = 0.35 * 0.9 + 10 * 1.83e-3 * 1.2 + 60;
  for (const solver::FaultRow& row : solver::solve_faults(network))
    if (row.node == "out" && row.fault == solver::Fault::line_earth && row.condition == solver::Condition::minimum)
      CHECK_THAT(row.current, Catch::Matchers::WithinRel(0.95 * 230 / ohms, 1e-4));
}

TEST_CASE("A circuit cannot do without a protective conductor", "[topology]") {
  const netlists::Reading reading = netlists::read_network_text(supply() + R"([circuit.main]
C1 = { phases = "L1", device = "B 6 A 6 kA", cable = "singles-pvc-cu 1.5 mm2", cpc = "none", length = "5 m" }
)",
                                                                "test.toml");
  CHECK_FALSE(reading.network.has_value());
  REQUIRE(reading.diagnostics.size() >= 1);
  CHECK(reading.diagnostics[0].message == "circuit 'main/C1' cannot do without a cpc");
}

TEST_CASE("Transformers of unequal clock numbers in parallel are refused by both names", "[topology]") {
  const auto text = [](const std::string& second) {
    return R"(rules = "IEC 60364"
[supply.q]
feeds = "hv"
voltage = "11 kV"
maximum = { power = "250 MVA" }
minimum = { power = "150 MVA" }
[board.hv]
[board.lv]
[transformer.T1]
from = "hv"
feeds = "lv"
vector = "Dyn11"
voltage = "230/400 V"
primary = "11 kV"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
[transformer.T2]
from = "hv"
feeds = "lv"
vector = ")" +
           second +
           R"("
voltage = "230/400 V"
primary = "11 kV"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
earthing = "TN-S"
)";
  };
  CHECK(solver::check_topology(tests::read(text("Dyn11"))).empty());
  const auto troubles = solver::check_topology(tests::read(text("Dyn5")));
  REQUIRE(troubles.size() == 1);
  CHECK(troubles.front().message ==
        "transformer 'T2' turns the phases of board 'lv' by 5 hours and not by 11 in state 'normal': unequal clock "
        "numbers must not be joined");
  CHECK(troubles.front().note == "what it is joined with");
}
