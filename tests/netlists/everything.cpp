// SPDX-License-Identifier: Apache-2.0
/// @file
/// One netlist with every element of a network beyond sources, boards and their runs: each key ends in its field, in
/// SI.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "tests/netlists/base.h"

namespace sunder::netlists {

namespace {

using Catch::Matchers::WithinRel;
using models::Conductor;
using models::ConductorSet;
using models::Network;

constexpr double kTight = 1e-12;

constexpr std::string_view kEverything = R"(title = "Everything"
rules = "IEC 60364"
currents = "IEC 60909"
tolerance = "+10 %"
frequency = "60 Hz"

[supply.grid]
feeds = "substation"
voltage = "20 kV"
star_point = "0.5+j2 ohm"
maximum = { power = "250 MVA", x_over_r = 10 }
minimum = { z1 = "0.2+j2 ohm", z0 = "0.3+j5 ohm" }

[supply.theatre]
feeds = "island"
voltage = "230/400 V"
earthing = "IT"
star_point = "1000 ohm"
capacitance = "2 uF"
network = "own transformer"
maximum = { three_phase = "10 kA", power_factor = 0.3 }
minimum = { Zn = "0.05 ohm", power_factor = 0.9 }

[board.substation]
[board.primary]
[board.main]
n_pe_link = true
[board.sub]
[board.far]
[board.island]
[board.bars]

[transformer.T1]
from = "primary"
feeds = "main"
primary = "20 kV"
voltage = "230/400 V"
secondary = "410 V"
vector = "YNyn0"
tap = "-5 %"
rating = "630 kVA"
uk = "6 %"
losses = "6.5 kW"
r0_over_r1 = 2
x0_over_x1 = 0.9
earthing = "TN-C"
primary_star = "open"
star_point = "solid"
primary_device = "gG 63 A"
device = "switch 1000 A"
link = "star point"
tails = { cable = "singles-xlpe-cu 240 mm2", length = "10 m", in_parallel = 3 }
demand = "800 A"
pf = 0.9

[generator.G1]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
rating = "250 kVA"
xd_subtransient = "12 %"
xd_transient = 0.2
xd = "250 %"
x2 = 0.14
x0 = "4 %"
r = "1 %"
T_subtransient = "20 ms"
T_transient = "0.2 s"
sustained = 3
pf = 0.85
star_point = "j0.5 ohm"
tails = { cable = "singles-pvc-cu 95 mm2", length = "12 m" }
demand = "300 A"

[inverter.UPS]
feeds = "sub"
voltage = "230 V"
phases = "L2"
earthing = "TN-S"
stages = [["600 A", "20 ms"], ["300 A", "5 s"], ["150 A"]]
follows = true
link = "none"
tails = { cable = "singles-pvc-cu 16 mm2", length = "6 m" }
demand = "50 A"

[submain.cableway]
from = "substation"
to = "primary"
z1 = "0.12+j0.1 ohm/km"
z0 = "0.3+j0.4 ohm/km"
length = "2 km"

[submain.S1]
from = "main"
to = "sub"
device = "gG 125 A"
cable = "multicore-xlpe-cu-4c 50 mm2"
cpc = "PEN"
length = "40 m"

[submain.S2]
from = "far"
to = "sub"
z1 = "0.077+j0.079 mohm/m"
z0 = "0.3+j0.31 mohm/m"
return = "PE"
length = "100 m"

[circuit.sub]
W1 = { phases = "L1 L2 L3 N", device = "C 32 A", cable = "multicore-xlpe-cu-4c 10 mm2", cpc = "PEN", length = "20 m" }

[electrode.rod]
board = "island"
resistance = "20 ohm"

[motor.pump]
on = "sub/W1"
rating = "5.5 kW"
voltage = "400 V"
pf = 0.83
efficiency = 0.88
start = 6
r_over_x = 0.3
pole_pairs = 2
count = 3

[motor.fan]
on = "main"
phases = "L1 L2"
current = "12 A"
converter = true

[bond.pipe]
from = "main"
to = "island"
impedance = "0.05+j0.02 ohm"

[bond.ground]
from = "far"
to = "earth"
impedance = "5 ohm"

[link.coupler]
from = "main"
to = "bars"
phases = "L1 L2 L3"
closed = false
device = "switch 100 A"

[state.mains]
sources = ["grid", "theatre"]
closed = ["coupler"]
open = ["S2"]

[state.emergency]
sources = ["G1", "theatre"]
open = ["T1"]
)";

Network read_sound(std::string_view text) {
  const Reading reading = read_network_text(std::string(text), "everything.toml");
  INFO(said(reading));
  REQUIRE(reading.network.has_value());
  return *reading.network;
}

int board_named(const Network& network, std::string_view name) {
  for (std::size_t k = 0; k < network.boards.size(); ++k) {
    if (network.boards[k].name == name) return static_cast<int>(k);
  }
  return -1;
}

constexpr ConductorSet kThree{Conductor::L1, Conductor::L2, Conductor::L3};

}  // namespace

TEST_CASE("A netlist of every element reads without a word, and its head in SI", "[netlists]") {
  CHECK(said(read_network_text(std::string(kEverything), "everything.toml")).empty());
  const Network network = read_sound(kEverything);
  CHECK(network.method == models::Method::iec60909);
  CHECK(network.tolerance == 0.10);
  CHECK(network.frequency == 60.0);
  const Network plain = read_sound(kBase);
  CHECK(plain.method == models::Method::conductor);
  CHECK(plain.tolerance == 0.06);
  CHECK(plain.frequency == 50.0);
}

TEST_CASE("A supply above 1 kV has three lines, and its bounds by power and by sequence", "[netlists]") {
  const Network network = read_sound(kEverything);
  const models::Source& grid = network.sources.at(0);
  CHECK(grid.high_voltage);
  CHECK(grid.U == 20000.0);
  CHECK_THAT(grid.U0, WithinRel(20000.0 / std::sqrt(3.0), kTight));
  CHECK(grid.lines == kThree);
  CHECK(grid.own_transformer);
  CHECK(grid.star.kind == models::StarPoint::Kind::impedance);
  CHECK(grid.star.ohms == 0.5);
  CHECK(grid.star.reactance == 2.0);
  // I = S / (sqrt(3) U)
  CHECK_THAT(grid.maximum.three_phase.amps, WithinRel(250e6 / (std::sqrt(3.0) * 20e3), kTight));
  CHECK_FALSE(grid.maximum.sequence.given);
  CHECK(grid.minimum.sequence.given);
  CHECK(grid.minimum.sequence.z0_given);
  CHECK(grid.minimum.sequence.z1 == std::complex<double>(0.2, 2));
  CHECK(grid.minimum.sequence.z0 == std::complex<double>(0.3, 5));
  CHECK(grid.minimum.sequence.at.line == 12);
}

TEST_CASE("An IT supply keeps its star point and the capacitance of its network", "[netlists]") {
  const Network network = read_sound(kEverything);
  const models::Source& theatre = network.sources.at(1);
  CHECK(theatre.earthing == models::Earthing::IT);
  CHECK(theatre.star.kind == models::StarPoint::Kind::impedance);
  CHECK(theatre.star.ohms == 1000.0);
  CHECK(theatre.capacitance == 2e-6);
}

TEST_CASE("A transformer between two boards keeps its windings, voltages and ratios", "[netlists]") {
  const Network network = read_sound(kEverything);
  REQUIRE(network.transformers.size() == 1);
  const models::Transformer& t = network.transformers[0];
  CHECK(t.from == board_named(network, "primary"));
  CHECK(t.to == board_named(network, "main"));
  CHECK(t.primary_winding == models::Winding::star_earthed);
  CHECK(t.secondary_winding == models::Winding::star_earthed);
  CHECK(t.clock == 0);
  CHECK(t.primary == 20000.0);
  CHECK(t.secondary == 410.0);
  CHECK(t.U == 400.0);
  CHECK(t.U0 == 230.0);
  CHECK_THAT(t.tap, WithinRel(-0.05, kTight));
  CHECK(t.rating == 630e3);
  CHECK_THAT(t.uk, WithinRel(0.06, kTight));
  CHECK(t.losses == 6500.0);
  CHECK(t.x_over_r == 0.0);
  CHECK(t.r0_over_r1 == 2.0);
  CHECK(t.x0_over_x1 == 0.9);
  CHECK(t.earthing == models::Earthing::TN_C);
  CHECK(t.primary_star.kind == models::StarPoint::Kind::open);
  CHECK(t.star.kind == models::StarPoint::Kind::solid);
  CHECK(t.primary_device.In == 63.0);
  CHECK(t.device.In == 1000.0);
  CHECK(t.tails.present);
  CHECK(t.tails.in_parallel == 3);
  CHECK(t.demand.value == 800.0);
  CHECK(t.pf.value == 0.9);
}

TEST_CASE("A generator's reactances are per unit, written as such or in per cent", "[netlists]") {
  const Network network = read_sound(kEverything);
  const models::Source& source = network.sources.at(2);
  const models::Generator& g = source.generator;
  REQUIRE(g.present);
  CHECK_FALSE(source.transformer);
  CHECK(g.rating == 250e3);
  CHECK_THAT(g.xd_subtransient, WithinRel(0.12, kTight));
  CHECK(g.xd_transient == 0.2);
  CHECK(g.xd == 2.5);
  CHECK(g.x2 == 0.14);
  CHECK(g.x0 == 0.04);
  CHECK(g.r == 0.01);
  CHECK(g.T_subtransient == 0.02);
  CHECK(g.T_transient == 0.2);
  CHECK(g.sustained == 3.0);
  CHECK(g.pf == 0.85);
  CHECK(source.star.kind == models::StarPoint::Kind::impedance);
  CHECK(source.star.ohms == 0.0);
  CHECK(source.star.reactance == 0.5);
  CHECK(source.tails.present);
  CHECK(source.demand.value == 300.0);
}

TEST_CASE("An inverter's stages fall in current, the last without an end", "[netlists]") {
  const Network network = read_sound(kEverything);
  const models::Source& source = network.sources.at(3);
  REQUIRE(source.inverter.present);
  CHECK(source.inverter.follows);
  CHECK(source.lines == ConductorSet{Conductor::L2});
  CHECK(source.star.kind == models::StarPoint::Kind::open);
  const auto& stages = source.inverter.stages;
  REQUIRE(stages.size() == 3);
  CHECK(stages[0].amps == 600.0);
  CHECK(stages[0].seconds == 0.02);
  CHECK(stages[1].seconds == 5.0);
  CHECK(stages[2].amps == 150.0);
  CHECK(stages[2].seconds == std::numeric_limits<double>::infinity());
}

TEST_CASE("Runs by impedance and with a combined conductor say what they carry", "[netlists]") {
  const Network network = read_sound(kEverything);
  const models::Submain& cableway = network.submains.at(0);
  CHECK(cableway.conductors == kThree);
  CHECK(cableway.sequence.given);
  CHECK_THAT(cableway.sequence.z1.real(), WithinRel(0.12e-3, kTight));
  CHECK_THAT(cableway.sequence.z0.imag(), WithinRel(0.4e-3, kTight));
  CHECK(cableway.sequence.through == models::Return::earth);
  CHECK_FALSE(cableway.device.present());
  CHECK(cableway.length.value == 2000.0);
  const models::Submain& s1 = network.submains.at(1);
  CHECK(s1.pen);
  CHECK(s1.cpc_given);
  CHECK(s1.cable.protective.empty());
  CHECK(s1.conductors.has(Conductor::N));
  CHECK(s1.conductors.has(Conductor::PE));
  const models::Submain& s2 = network.submains.at(2);
  CHECK(s2.sequence.through == models::Return::protective);
  CHECK(s2.conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::PE});
  CHECK(network.circuits.at(0).pen);
  CHECK(network.circuits.at(0).cable.protective.empty());
  CHECK(network.boards.at(static_cast<std::size_t>(board_named(network, "main"))).n_pe_link);
}

TEST_CASE("A motor keeps what it is rated, and its current follows from its power", "[netlists]") {
  const Network network = read_sound(kEverything);
  REQUIRE(network.motors.size() == 2);
  const models::Motor& pump = network.motors[0];
  CHECK(pump.board == -1);
  CHECK(pump.circuit == 0);
  CHECK(pump.lines == kThree);
  CHECK(pump.watts == 5500.0);
  CHECK(pump.volts == 400.0);
  CHECK(pump.pf == 0.83);
  CHECK(pump.efficiency == 0.88);
  CHECK(pump.start == 6.0);
  CHECK(pump.r_over_x == 0.3);
  CHECK(pump.pole_pairs == 2);
  CHECK(pump.count == 3);
  CHECK_FALSE(pump.converter);
  // I = P / (sqrt(3) U cos(phi) eta)
  CHECK_THAT(pump.amps, WithinRel(5500 / (std::sqrt(3.0) * 400 * 0.83 * 0.88), kTight));
  const models::Motor& fan = network.motors[1];
  CHECK(fan.board == board_named(network, "main"));
  CHECK(fan.circuit == -1);
  CHECK(fan.lines == ConductorSet{Conductor::L1, Conductor::L2});
  CHECK(fan.amps == 12.0);
  CHECK(fan.converter);
}

TEST_CASE("Bonds and links join boards, and states open and close", "[netlists]") {
  const Network network = read_sound(kEverything);
  REQUIRE(network.bonds.size() == 2);
  CHECK(network.bonds[0].from == board_named(network, "main"));
  CHECK(network.bonds[0].to == board_named(network, "island"));
  CHECK(network.bonds[0].ohms == 0.05);
  CHECK(network.bonds[0].reactance == 0.02);
  CHECK(network.bonds[1].to == -1);
  CHECK(network.bonds[1].ohms == 5.0);
  REQUIRE(network.links.size() == 1);
  CHECK_FALSE(network.links[0].closed);
  CHECK(network.links[0].device.present());
  CHECK(network.links[0].conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::PE});
  REQUIRE(network.states.size() == 2);
  CHECK(network.states[0].link_closed == std::vector<bool>{true});
  CHECK(network.states[0].submain_open == std::vector<bool>{false, false, true});
  CHECK(network.states[0].transformer_open == std::vector<bool>{false});
  CHECK(network.states[0].sources == std::vector<int>{0, 1});
  CHECK(network.states[1].link_closed == std::vector<bool>{false});
  CHECK(network.states[1].transformer_open == std::vector<bool>{true});
  CHECK(network.states[1].sources == std::vector<int>{2, 1});
}

TEST_CASE("What has a usual value is taken so, with a sentence where it matters", "[netlists]") {
  const Network network = read_sound(R"(rules = "IEC 60364"
[supply.grid]
feeds = "a"
voltage = "11 kV"
maximum = { power = "100 MVA", power_factor = 0.1 }
[board.a]
[board.b]
[transformer.T]
from = "a"
feeds = "b"
voltage = "230/400 V"
primary = "11 kV"
rating = "500 kVA"
uk = "4 %"
losses = "5 kW"
earthing = "TN-S"
[generator.G]
feeds = "b"
voltage = "230/400 V"
earthing = "TN-S"
rating = "100 kVA"
xd_subtransient = 0.1
[motor.M]
on = "b"
rating = "10 kW"
[state.all]
sources = ["grid", "G"]
)");
  const models::Transformer& t = network.transformers.at(0);
  CHECK(t.primary_winding == models::Winding::delta);
  CHECK(t.secondary_winding == models::Winding::star_earthed);
  CHECK(t.clock == 11);
  CHECK(t.r0_over_r1 == 1.0);
  CHECK(t.x0_over_x1 == 1.0);
  CHECK(t.star.kind == models::StarPoint::Kind::solid);
  CHECK(network.sources.at(0).earthing == models::Earthing::TN_S);
  const models::Generator& g = network.sources.at(1).generator;
  CHECK(std::isnan(g.x0));
  CHECK(std::isnan(g.x2));
  CHECK(g.pf == 0.8);
  const models::Motor& m = network.motors.at(0);
  CHECK_THAT(m.amps, WithinRel(10e3 / (std::sqrt(3.0) * 400 * 0.85 * 0.9), kTight));
  for (const char* sentence :
       {"star point of supply 'grid' taken as solidly earthed", "vector group of transformer 'T' taken as Dyn11",
        "star point of transformer 'T' taken as solidly earthed and joined to PE",
        "no-load voltage of transformer 'T' taken as 400 V",
        "zero-sequence impedance of transformer 'T' taken as its positive-sequence one",
        "star point of generator 'G' taken as solidly earthed and joined to PE",
        "rated power factor of generator 'G' taken as 0.8",
        "negative-sequence reactance of generator 'G' taken as its subtransient one",
        "armature resistance of generator 'G' taken by IEC 60909-0 from its rating and voltage",
        "rated power factor of motor 'M' taken as 0.85", "rated efficiency of motor 'M' taken as 0.9",
        "starting current of motor 'M' taken as 5 times rated", "R/X of motor 'M' taken as 0.42"}) {
    CAPTURE(sentence);
    CHECK(std::any_of(network.assumptions.begin(), network.assumptions.end(),
                      [&](const models::Assumption& one) { return one.sentence == sentence; }));
  }
}

}  // namespace sunder::netlists
