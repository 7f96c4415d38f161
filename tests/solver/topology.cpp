// SPDX-License-Identifier: Apache-2.0
#include "solver/topology.h"

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

TEST_CASE("A board fed by two submains is refused by the names of both", "[topology]") {
  const models::Network network = read(supply() + R"([board.a]
[submain.S1]
from = "main"
to = "a"
)" + kCable + R"([submain.S2]
from = "main"
to = "a"
)" + kCable);
  REQUIRE(messages(network) ==
          std::vector<std::string>{
              "board 'a' is fed by submains 'S1' and 'S2': a loop between boards is solved in a later edition"});
}

TEST_CASE("Two sources on one part of the network are refused", "[topology]") {
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
[state.both]
sources = ["grid", "other"]
)");
  REQUIRE(messages(network) ==
          std::vector<std::string>{
              "state 'both' has source 'other' feed a board that source 'grid' feeds already: sources in parallel are "
              "solved in a later edition"});
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

TEST_CASE("Two electrodes on one protective conductor are refused with both places", "[topology]") {
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
  const std::vector<solver::Trouble> troubles = solver::check_topology(network);
  REQUIRE(troubles.size() == 1);
  CHECK(troubles[0].message ==
        "electrodes 'E1' and 'E2' hold one protective conductor (submain 'S1' joins them): several earths in parallel "
        "are solved in a later edition");
  CHECK(troubles[0].second.line > 0);
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
