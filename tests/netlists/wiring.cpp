// SPDX-License-Identifier: Apache-2.0
/// @file
/// Which conductors and which voltage arrive where, over loops, from either end, through links and transformers.
#include <catch2/catch.hpp>
#include <string>

#include "tests/netlists/base.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;

constexpr ConductorSet kAll{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};
constexpr ConductorSet kOne{Conductor::L1, Conductor::N, Conductor::PE};

const std::string kHead = R"(rules = "IEC 60364"
[supply.grid]
feeds = "a"
voltage = "230/400 V"
earthing = "TN-S"
maximum = { three_phase = "10 kA", power_factor = 0.5 }
[board.a]
[board.b]
[board.c]
)";

std::string run(const std::string& name, const std::string& from, const std::string& to, const std::string& more = {}) {
  return "[submain." + name + "]\nfrom = \"" + from + "\"\nto = \"" + to +
         "\"\ndevice = \"gG 63 A\"\ncable = \"multicore-xlpe-cu-5c 16 mm2\"\nlength = \"20 m\"\n" + more;
}

std::string link(const std::string& name, const std::string& from, const std::string& to,
                 const std::string& more = {}) {
  return "[link." + name + "]\nfrom = \"" + from + "\"\nto = \"" + to + "\"\n" + more;
}

Network read_sound(const std::string& text) {
  const Reading reading = read_network_text(text, "wiring.toml");
  INFO(said(reading));
  REQUIRE(reading.network.has_value());
  return *reading.network;
}

}  // namespace

TEST_CASE("A ring of submains carries in each run what its board has", "[netlists]") {
  const Network network = read_sound(kHead + run("S1", "a", "b") + run("S2", "b", "c") + run("S3", "c", "a"));
  for (const models::Submain& submain : network.submains) CHECK(submain.conductors == kAll);
}

TEST_CASE("A board fed twice has all that arrives", "[netlists]") {
  const Network network = read_sound(kHead + run("S1", "a", "b", "phases = \"L1\"\n") +
                                     run("S2", "a", "b", "phases = \"L2\"\n") + run("S3", "b", "c"));
  CHECK(network.submains[0].conductors == kOne);
  CHECK(network.submains[2].conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::N, Conductor::PE});
}

TEST_CASE("A submain feeds from its far end where nothing else feeds its board", "[netlists]") {
  const Network network = read_sound(kHead + run("S1", "b", "a") + run("S2", "b", "c", "phases = \"L1\"\n"));
  CHECK(network.submains[0].conductors == kAll);
  CHECK(network.submains[1].conductors == kOne);
}

TEST_CASE("The order in which runs are declared does not matter", "[netlists]") {
  const std::string one = run("S1", "a", "b", "phases = \"L1\"\n");
  const std::string two = run("S2", "b", "c");
  CHECK(read_sound(kHead + one + two).submains[1].conductors == kOne);
  CHECK(read_sound(kHead + two + one).submains[0].conductors == kOne);
}

TEST_CASE("A link joins what both boards have, and feeds the one that has nothing else", "[netlists]") {
  const std::string single = R"([supply.spare]
feeds = "b"
voltage = "230 V"
earthing = "TN-S"
maximum = { line_neutral = "1 kA", power_factor = 0.9 }
[state.all]
sources = ["grid", "spare"]
)";
  const Network both = read_sound(kHead + single + link("L", "a", "b") + link("K", "b", "c"));
  CHECK(both.links[0].conductors == kOne);
  CHECK(both.links[1].conductors == kOne);
  const Network fed = read_sound(kHead + link("L", "b", "a", "phases = \"L1 L2 L3\"\n") + link("K", "c", "b"));
  CHECK(fed.links[0].conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::PE});
  CHECK(fed.links[1].conductors == fed.links[0].conductors);
}

TEST_CASE("A transformer gives its board three lines, and a neutral where its winding has one", "[netlists]") {
  const std::string head = R"(rules = "IEC 60364"
[supply.grid]
feeds = "a"
voltage = "20 kV"
maximum = { power = "250 MVA", power_factor = 0.1 }
[board.a]
[board.b]
[board.c]
)";
  const auto transformer = [](const std::string& vector, const std::string& more) {
    return "[transformer.T]\nfrom = \"a\"\nfeeds = \"b\"\nvoltage = \"230/400 V\"\nprimary = \"20 kV\"\nrating = \"400 "
           "kVA\"\nuk = \"4 %\"\nlosses = \"4.6 kW\"\nvector = \"" +
           vector + "\"\n" + more;
  };
  const std::string earthed = "earthing = \"TN-S\"\n";
  CHECK(read_sound(head + transformer("Yzn5", earthed) + run("S", "b", "c")).submains[0].conductors == kAll);
  const Network delta = read_sound(head + transformer("Dd0", "") + run("S", "b", "c") +
                                   "[electrode.rod]\nboard = \"b\"\nresistance = \"10 ohm\"\n");
  CHECK(delta.submains[0].conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::PE});
  CHECK(delta.transformers[0].earthing == models::Earthing::IT);
  CHECK(delta.transformers[0].star.kind == models::StarPoint::Kind::open);
  const Network linked =
      read_sound(head + transformer("Dyn5", "earthing = \"TN-C-S\"\nlink = \"board\"\n") + run("S", "b", "c", ""));
  CHECK(linked.transformers[0].link_at_board);
  CHECK(linked.transformers[0].star.kind == models::StarPoint::Kind::solid);
}

TEST_CASE("The zero sequence of a star-star transformer is not known unless it is given", "[netlists]") {
  const auto source = [](const std::string& vector, const std::string& more) {
    return "rules = \"IEC 60364\"\n[board.a]\n[transformer.T]\nfeeds = \"a\"\nvoltage = \"230/400 V\"\nrating = \"400 "
           "kVA\"\nuk = \"4 %\"\nlosses = \"4.6 kW\"\nearthing = \"TN-S\"\nvector = \"" +
           vector + "\"\n" + more;
  };
  CHECK_FALSE(read_sound(source("Yyn0", "")).sources[0].z0_known);
  CHECK(read_sound(source("Dyn11", "")).sources[0].z0_known);
  CHECK(read_sound(source("Yzn11", "")).sources[0].z0_known);
  const Network given = read_sound(source("Yyn0", "z0_over_z1 = 8\n"));
  CHECK(given.sources[0].z0_known);
  CHECK(given.sources[0].z0_over_z1 == 8.0);
  const Network parts = read_sound(source("Yyn0", "r0_over_r1 = 3\nx0_over_x1 = 7\n"));
  CHECK(parts.sources[0].z0_known);
  CHECK(parts.sources[0].r0_over_r1 == 3.0);
  CHECK(parts.sources[0].x0_over_x1 == 7.0);
}

TEST_CASE("A split-phase supply delivers two lines of opposite phase", "[netlists]") {
  const Network network = read_sound(R"(rules = "IEC 60364"
frequency = "60 Hz"
[supply.grid]
feeds = "a"
voltage = "120/240 V"
earthing = "TN-C-S"
maximum = { line_neutral = "10 kA", power_factor = 0.5 }
[board.a]
[circuit.a]
W1 = { phases = "L1 L2", device = "B 16 A", cable = "singles-pvc-cu 2.5 mm2", length = "20 m" }
)");
  const models::Source& grid = network.sources[0];
  CHECK(grid.split_phase);
  CHECK(grid.U0 == 120.0);
  CHECK(grid.U == 240.0);
  CHECK(grid.lines == ConductorSet{Conductor::L1, Conductor::L2});
}

TEST_CASE("A source without states is the state normal, with links as they say", "[netlists]") {
  const Network network =
      read_sound(kHead + run("S1", "a", "b") + link("L", "b", "c", "closed = false\n") + run("S2", "a", "c"));
  REQUIRE(network.states.size() == 1);
  CHECK(network.states[0].name == "normal");
  CHECK(network.states[0].sources == std::vector<int>{0});
  CHECK(network.states[0].link_closed == std::vector<bool>{false});
  CHECK(network.states[0].submain_open == std::vector<bool>{false, false});
  CHECK(network.states[0].transformer_open.empty());
}

TEST_CASE("A combined conductor may follow a supply by PEN, a linked board and another combined one", "[netlists]") {
  const std::string pen = "cpc = \"PEN\"\n";
  std::string combined = kHead;
  combined.replace(combined.find("TN-S"), 4, "TN-C");
  CHECK(read_sound(combined + run("S1", "a", "b", pen) + run("S2", "b", "c", pen)).submains[1].pen);
  combined.replace(combined.find("TN-C"), 4, "TN-C-S");
  CHECK(read_sound(combined + run("S1", "a", "b", pen) + run("S2", "b", "c")).submains[0].pen);
  std::string linked = kHead;
  linked.replace(linked.find("[board.b]"), 9, "[board.b]\nn_pe_link = true");
  CHECK(read_sound(linked + run("S1", "a", "b") + run("S2", "b", "c", pen)).submains[1].pen);
}

}  // namespace sunder::netlists
