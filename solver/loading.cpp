// SPDX-License-Identifier: Apache-2.0
#include "solver/loading.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>

#include "solver/faults.h"
#include "solver/sources.h"

namespace sunder::solver {
namespace {

using models::Cable;
using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Source;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

struct Load {
  double amps;
  double pf;
  double Iz;           // <= 0: not known
  double neutral = 0;  // current in the neutral of three lines [A]
};

double temperature(const Network& network, const Cable& cable, const Load& load) {
  if (load.Iz <= 0) return cable.max_degc;
  const double share = std::min(1.0, load.amps / load.Iz);
  return network.ambient_degc + share * share * (cable.max_degc - network.ambient_degc);
}

// Voltage along one conductor per metre and ampere, projected on the load's voltage.
double per_metre(const Network& network, const models::Strand& strand, double degc, double pf) {
  const double r = strand.r20 * (1.0 + models::alpha20(network.rules, strand.material) * (degc - 20.0));
  return r * pf + strand.x * std::sqrt(std::max(0.0, 1.0 - pf * pf));
}

// Share of the nominal voltage dropped over `metres` of a run (already divided by those in parallel).
double run_drop(const Network& network, const Cable& cable, ConductorSet conductors, double metres, const Load& load,
                const Source& source) {
  const double degc = temperature(network, cable, load);
  const double line = per_metre(network, cable.line, degc, load.pf) * metres * load.amps;
  const int lines = conductors.lines();
  const models::Strand& neutral = cable.neutral ? *cable.neutral : cable.line;
  if (lines == 3) {
    const double back =
        conductors.has(Conductor::N) ? per_metre(network, neutral, degc, load.pf) * metres * load.neutral : 0;
    return (line + back) / source.U0;
  }
  if (lines == 2) return 2.0 * line / source.U;
  return (line + per_metre(network, neutral, degc, load.pf) * metres * load.amps) / source.U0;
}

double pf_or_one(const models::Sourced<double>& pf) { return pf.given ? pf.value : 1.0; }

struct PerLine {
  std::array<double, 3> amps{};
  double all = 0, active = 0;  // sums over everything fed, for the mean power factor
  bool known = true;
  std::string needs;

  void add(ConductorSet lines, const Demand& demand) {
    if (!demand.known && known) {
      known = false;
      needs = demand.needs;
    }
    all += demand.amps * lines.lines();
    active += demand.amps * demand.pf * lines.lines();
    const bool each = demand.unbalance() > 0;
    for (std::size_t i = 0; i < 3; ++i)
      if (lines.has(static_cast<Conductor>(i))) amps[i] += each ? demand.lines[i] : demand.amps;
  }
  [[nodiscard]] double pf() const { return all > 0 ? active / all : 1.0; }

  [[nodiscard]] Demand demand() const {
    return {*std::max_element(amps.begin(), amps.end()), pf(), known, false, needs, amps};
  }
};

Demand of_circuit(const Network& network, const models::Circuit& circuit) {
  Demand demand{circuit.load.value, pf_or_one(circuit.pf), circuit.load.given, true, "", {}};
  if (!circuit.load.given) demand.needs = "load of " + models::address(network, circuit);
  return demand;
}

// What is declared goes before what is summed up.
Demand declared_or(const models::Sourced<double>& declared, const models::Sourced<double>& pf, const Demand& sum) {
  if (!declared.given) return sum;
  return {declared.value, pf.given ? pf.value : sum.pf, true, true, "", {}};
}

}  // namespace

double Demand::unbalance() const {
  return *std::max_element(lines.begin(), lines.end()) - *std::min_element(lines.begin(), lines.end());
}

Drop circuit_drop(const Network& network, const models::Circuit& circuit, const Source& source) {
  Drop drop;
  drop.length = circuit.ring ? circuit.length.value / 2 : circuit.length.value;
  if (!circuit.load.given) return {0, false, "load of " + models::address(network, circuit), drop.length};
  double metres = circuit.length.value / circuit.in_parallel;
  if (circuit.ring) {
    const CircuitEnd end = worst_end(network, circuit);
    metres = circuit.length.value * end.fraction * (1 - end.fraction);
    if (end.spur >= 0) metres += circuit.spurs[at(end.spur)].length;
  }
  drop.share =
      run_drop(network, circuit.cable, circuit.conductors, metres,
               {circuit.load.value, pf_or_one(circuit.pf), circuit.Iz.given ? circuit.Iz.value : 0.0, 0.0}, source);
  return drop;
}

Loading load_network(const Network& network, const StateTree& tree) {
  Loading loading;
  const std::size_t n = network.boards.size();
  loading.demand.resize(n);
  loading.submain.resize(network.submains.size());
  loading.drop.resize(n);
  loading.motors.assign(network.sources.size(), 0.0);
  loading.motors_unknown.resize(network.sources.size());
  loading.source.resize(network.sources.size());
  std::vector<int> ways(n, 0);
  std::vector<PerLine> lines(n);
  for (const models::Circuit& circuit : network.circuits) {
    if (!tree.live(circuit.board)) continue;
    lines[at(circuit.board)].add(circuit.conductors, of_circuit(network, circuit));
    ++ways[at(circuit.board)];
    if (!circuit.motor) continue;
    const std::size_t source = at(tree.source_of[at(circuit.board)]);
    // A motor that the network has as an element is in the solved currents.
    const auto index = static_cast<int>(&circuit - network.circuits.data());
    if (std::any_of(network.motors.begin(), network.motors.end(),
                    [index](const models::Motor& motor) { return motor.circuit == index; }))
      continue;
    loading.motors[source] += circuit.load.value;
    if (!circuit.load.given) loading.motors_unknown[source] = models::address(network, circuit);
  }
  // In a loop only what is declared is known of a cable; so it is of boards that several ways feed.
  for (std::size_t m = 0; m < network.submains.size(); ++m) {
    if (!tree.grid || !tree.looped[m]) continue;
    Demand unknown;
    unknown.known = false;
    unknown.needs = "demand of " + network.submains[m].name;
    loading.submain[m] = declared_or(network.submains[m].demand, network.submains[m].pf, unknown);
  }
  for (auto b = tree.order.rbegin(); b != tree.order.rend(); ++b) {
    PerLine& here = lines[at(*b)];
    const int f = tree.feeder[at(*b)];
    if (ways[at(*b)] == 0) {
      // A board that feeds nothing yet: what it will deliver is not known.
      here.known = false;
      here.needs =
          f < 0 ? "demand of board " + network.boards[at(*b)].name : "demand of " + network.submains[at(f)].name;
    }
    loading.demand[at(*b)] = here.demand();
    if (f < 0 && tree.grid && tree.above[at(*b)] >= 0) {
      const int above = tree.above[at(*b)];
      Demand passed = loading.demand[at(*b)];
      if (tree.transformer[at(*b)] >= 0) {
        const models::Transformer& t = network.transformers[at(tree.transformer[at(*b)])];
        passed = declared_or(t.demand, t.pf, passed);
        const double ratio = t.secondary / t.primary;
        passed.amps *= ratio;
        for (double& amps : passed.lines) amps *= ratio;
      }
      lines[at(above)].add({models::Conductor::L1, models::Conductor::L2, models::Conductor::L3}, passed);
      ++ways[at(above)];
    }
    if (f < 0) continue;
    const models::Submain& submain = network.submains[at(f)];
    Demand& demand = loading.submain[at(f)];
    demand = declared_or(submain.demand, submain.pf, loading.demand[at(*b)]);
    const int feeding = submain.to == *b ? submain.from : submain.to;
    lines[at(feeding)].add(submain.conductors, demand);
    ++ways[at(feeding)];
  }
  for (const int b : tree.order) {
    Drop& drop = loading.drop[at(b)];
    const Source& source = system_of(network, tree, b);
    const int f = tree.feeder[at(b)];
    if (f < 0 && tree.grid && tree.transformer[at(b)] < 0 && !tree.sole[at(b)]) {
      if (tree.link[at(b)] >= 0) {
        drop = loading.drop[at(tree.above[at(b)])];
      } else {
        drop = {0, false, "load flow to board " + network.boards[at(b)].name, 0,
                "several ways feed it, which share a load as no sum along a path can tell"};
      }
      continue;
    }
    if (f < 0) {
      Demand of_transformer;
      const bool inside = tree.grid && tree.transformer[at(b)] >= 0;
      Demand& demand = inside ? of_transformer : loading.source[at(tree.source_of[at(b)])];
      demand = declared_or(source.demand, source.pf, loading.demand[at(b)]);
      if (!source.tails.present && !source.transformer) continue;
      if (!demand.known) {
        drop = {0, false, demand.needs, 0, Drop{}.why};
        continue;
      }
      const Load load{demand.amps, demand.pf, source.tails.Iz.given ? source.tails.Iz.value : 0.0, demand.unbalance()};
      if (source.tails.present) {
        ConductorSet all = source.lines;
        all.add(Conductor::N);
        drop.share +=
            run_drop(network, source.tails.cable, all, source.tails.length / source.tails.in_parallel, load, source);
        drop.length += source.tails.length;
      }
      if (source.transformer) {
        const Complex winding = transformer_impedance(source);
        const double sine = std::sqrt(std::max(0.0, 1.0 - demand.pf * demand.pf));
        drop.share += (winding.real() * demand.pf + winding.imag() * sine) * demand.amps / source.U0;
      }
      continue;
    }
    const models::Submain& submain = network.submains[at(f)];
    drop = loading.drop[at(submain.to == b ? submain.from : submain.to)];
    if (submain.sequence.given) {
      drop = {0, false, "cable of " + submain.name, 0,
              "a run on the way is given by sequence impedances, not by its conductors"};
      continue;
    }
    const Demand& demand = loading.submain[at(f)];
    if (!demand.known && drop.known) {
      drop.known = false;
      drop.needs = demand.needs;
    }
    drop.share +=
        run_drop(network, submain.cable, submain.conductors, submain.length.value / submain.in_parallel,
                 {demand.amps, demand.pf, submain.Iz.given ? submain.Iz.value : 0.0, demand.unbalance()}, source);
    drop.length += submain.length.value;
  }
  return loading;
}

Demand group_demand(const Network& network, const Loading& loading, int board, int group) {
  PerLine sum;
  for (const models::Circuit& circuit : network.circuits)
    if (circuit.board == board && circuit.group == group) sum.add(circuit.conductors, of_circuit(network, circuit));
  for (std::size_t m = 0; m < network.submains.size(); ++m)
    if (network.submains[m].from == board && network.submains[m].group == group)
      sum.add(network.submains[m].conductors, loading.submain[m]);
  const models::Group& of = network.boards[at(board)].groups[at(group)];
  return declared_or(of.demand, {}, sum.demand());
}

}  // namespace sunder::solver
