// SPDX-License-Identifier: Apache-2.0
#include "made.h"

namespace sunder::test {

using models::Quantity;
using solver::Verdict;

models::Network small_network() {
  models::Network n;
  n.files = {"", "boatyard.toml"};
  n.title = "Tidewater boatyard";
  n.rules_name = "BS 7671:2018+A2";
  models::Board board;
  board.name = "intake";
  n.boards.push_back(board);
  board.name = "workshop";
  n.boards.push_back(board);
  models::Source source;
  source.name = "grid";
  source.board = 0;
  n.sources.push_back(source);
  models::Submain submain;
  submain.name = "S1";
  submain.from = 0;
  submain.to = 1;
  n.submains.push_back(submain);
  models::Circuit circuit;
  circuit.name = "W2";
  circuit.board = 1;
  n.circuits.push_back(circuit);
  models::SupplyState state;
  state.name = "normal";
  n.states.push_back(state);
  n.assumptions.push_back({"workshop/W2", "pf taken as 1", {1, 22, 3}});
  return n;
}

std::vector<solver::Finding> findings() {
  solver::Finding fails;
  fails.check = "disconnection time";
  fails.subject = "workshop/W2";
  fails.verdict = Verdict::fails;
  fails.value = models::kNever;
  fails.limit = 0.4;
  fails.unit = Quantity::time;
  fails.state = "normal";
  fails.condition = "minimum";
  fails.fault = "line-earth";
  fails.clause = "Table 41.1";
  fails.summary = "1.62 ohm lets 135 A flow; C 16 A needs 160 A";
  fails.reason = "the device is not sure to operate";
  fails.steps = {{"own conductors", "R1 + R2", "0.6 + 0.67", 1.27, Quantity::impedance, {1, 22, 8}},
                 {"earth-fault loop", "Zs = Ze + R1 + R2", "0.35 + 1.27", 1.62, Quantity::impedance, {1, 22, 8}},
                 {"current", "c_min U0 / Zs", "0.95 x 230 / 1.62", 134.9, Quantity::current, {}}};
  fails.remedies = {{"use a 4 mm2 cable", "workshop/W2.cable", 4e-6, Quantity::area, false, "voltage drop of W2 fails"},
                    {"shorten W2 to 31.4 m", "workshop/W2.length", 31.4, Quantity::length, true, ""}};
  fails.at = {1, 22, 1};

  solver::Finding undecided;
  undecided.check = "breaking capacity";
  undecided.subject = "S1";
  undecided.verdict = Verdict::undecided;
  undecided.value = 9800;
  undecided.unit = Quantity::current;
  undecided.reason = "no breaking capacity is declared";
  undecided.needs = {"Icn of the device of S1"};
  undecided.at = {1, 12, 1};

  solver::Finding pair;
  pair.check = "selectivity";
  pair.subject = "workshop/W2";
  pair.verdict = Verdict::noted;
  pair.upstream = "S1";
  pair.selectivity = "partial";
  pair.limit_A = 1200;
  pair.available_A = 3400;
  pair.basis = "let-through against pre-arcing";

  solver::Finding meets;
  meets.check = "voltage drop";
  meets.subject = "workshop/W2";
  meets.verdict = Verdict::meets;
  meets.value = 0.04;
  meets.limit = 0.05;
  meets.unit = Quantity::percentage;
  meets.margin = 0.2;
  meets.confidence = models::Confidence::low;
  meets.assumptions = {"power factor 1"};
  return {fails, undecided, pair, meets};
}

solver::PathChart path_chart() {
  models::Device fuse;
  fuse.text = "gG 80 A";
  fuse.kind = models::DeviceKind::fuse;
  fuse.In = 80;
  fuse.overcurrent.latest.points = {{130, 5000}, {400, 5}, {2400, 0.01}};
  fuse.overcurrent.earliest.points = {{105, 5000}, {310, 4}, {1500, 0.01}};
  models::Device breaker;
  breaker.text = "B 32 A 30 mA";
  breaker.kind = models::DeviceKind::breaker;
  breaker.In = 32;
  breaker.overcurrent.latest = models::latest_staircase({{46.4, 3600}, {81.6, 60}, {160, 0.1}});
  breaker.overcurrent.earliest = models::earliest_staircase({{36.2, 3600}, {81.6, 1}, {96, 0.1}}, 0);
  breaker.IdN = 0.03;
  breaker.residual.latest = models::latest_staircase({{0.03, 0.3}, {0.06, 0.15}, {0.15, 0.04}});
  breaker.residual.earliest = models::earliest_staircase({{0.015, 1e4}}, 0);
  solver::PathChart chart;
  chart.title = "Tidewater boatyard";
  chart.address = "workshop/W2";
  chart.state = "normal";
  chart.voltage = "230/400 V";
  chart.devices = {{"S1", "S1  gG 80 A", fuse, 900, 9800},
                   {"workshop/W2", "workshop/W2  B 32 A 30 mA", breaker, 231, 3400}};
  chart.damage = {{"S1 armour of 78 mm2", 12.9e6}, {"workshop/W2 cpc 1.5 mm2", 29756}};
  chart.currents = {{"least line-earth at workshop/W2", 231},
                    {"least line-neutral at workshop/W2", 240},
                    {"greatest at workshop", 3400},
                    {"greatest at intake", 9800}};
  return chart;
}

std::vector<solver::FaultDetail> fault_details() {
  const solver::Complex out = std::polar(1200.0, -0.5);
  solver::FaultDetail most;
  most.row.state = "normal";
  most.row.condition = solver::Condition::maximum;
  most.row.node = "workshop";
  most.row.fault = solver::Fault::line_earth;
  most.row.phases = "L1-PE";
  most.row.current = 1200;
  most.row.peak = 1850;
  most.row.x_over_r = 0.55;
  most.row.loop_ohms = 0.2108;
  most.row.driving_volts = 253;
  most.into_fault = {out, {}, {}, {}, -out};
  solver::ElementCurrent grid;
  grid.element = "grid";
  grid.from = "grid";
  grid.to = "intake";
  grid.amps = {out, 1e-9, 1e-9, {}, -out};
  grid.device = "BS 88-2 160 A 80 kA";
  grid.residual = 1200;
  solver::ElementCurrent run = grid;
  run.element = "S1";
  run.from = "intake";
  run.to = "workshop";
  run.device = "";
  most.elements = {grid, run};
  most.touch = {{"intake", 3.2, 0}, {"workshop", 121.46, 118.26}};
  most.between = 118.26;
  most.between_boards = "intake and workshop";
  most.imbalance = 1e-13;
  solver::FaultDetail least;
  least.row = most.row;
  least.row.condition = solver::Condition::minimum;
  least.row.known = false;
  least.row.needs = "Ze of grid";
  return {most, least};
}

solver::Sweep sweep() {
  solver::Sweep s;
  s.key = "S1.length";
  s.unit = Quantity::length;
  for (int i = 0; i <= 4; ++i) {
    solver::SweepPoint point;
    point.value = 50 + 25.0 * i;
    solver::Finding f;
    f.check = "voltage drop";
    f.subject = "workshop/W2";
    f.value = 0.0006 * point.value;
    f.limit = 0.05;
    f.unit = Quantity::percentage;
    f.margin = 1 - f.value / f.limit;
    f.verdict = f.margin >= 0 ? Verdict::meets : Verdict::fails;
    point.findings = {f};
    s.points.push_back(point);
  }
  s.flips = {{"voltage drop", "workshop/W2", Verdict::meets, Verdict::fails, 83.333333, "normal"}};
  s.undecided = {{"conductor heating", "S1", 100, 110, "let-through of the device of S1"}};
  return s;
}

}  // namespace sunder::test
