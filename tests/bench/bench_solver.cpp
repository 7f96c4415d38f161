// SPDX-License-Identifier: Apache-2.0
// What a whole check costs beside parsing its file, and all-node currents beside the general way: one
// sparse factorisation of the conductor network and one solve a node. Compare within one run only.
#include <benchmark/benchmark.h>
#include <fmt/format.h>

#include <Eigen/SparseLU>
#include <string>

#include "netlists/reader.h"
#include "solver/faults.h"
#include "solver/situation.h"
#include "solver/study.h"

namespace {

using namespace sunder;

// A site of `circuits` single-phase circuits, 25 on a board, boards on submains from one main board.
std::string site(int circuits) {
  constexpr int kPerBoard = 25;
  std::string text = R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-C-S"
maximum = { three_phase = "25 kA", power_factor = 0.25 }
minimum = { Ze = "0.1 ohm", Zn = "0.1 ohm", power_factor = 0.8 }
[supply.second]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-C-S"
maximum = { three_phase = "10 kA", power_factor = 0.5 }
minimum = { Ze = "0.2 ohm", Zn = "0.2 ohm", power_factor = 0.9 }
[state.normal]
sources = ["grid"]
[state.reserve]
sources = ["second"]
[board.main]
)";
  const int boards = (circuits + kPerBoard - 1) / kPerBoard;
  for (int b = 0; b < boards; ++b)
    text += fmt::format(
        "[board.b{0}]\n[submain.S{0}]\nfrom = \"main\"\nto = \"b{0}\"\ndevice = \"gG 100 A 50 kA\"\n"
        "cable = \"multicore-pvc-cu-5c 35 mm2\"\nlength = \"{1} m\"\nIz = \"126 A\"\ndemand = \"80 A\"\n",
        b, 10 + b % 40);
  for (int b = 0, done = 0; b < boards; ++b) {
    text += fmt::format("[circuit.b{}]\n", b);
    for (int w = 0; w < kPerBoard && done < circuits; ++w, ++done)
      text += fmt::format(
          "W{} = {{ use = \"fixed\", phases = \"L{}\", device = \"B 16 A 10 kA class 3\", cable = \"singles-pvc-cu 2.5 "
          "mm2\", "
          "length = \"{} m\", load = \"9 A\", pf = 0.95, Iz = \"24 A\" }}\n",
          w, 1 + w % 3, 5 + (w * 7 + b) % 30);
  }
  return text;
}

models::Network network(int circuits) {
  const netlists::Reading reading = netlists::read_network_text(site(circuits), "site.toml");
  if (!reading.network) throw std::runtime_error("the benchmark's own netlist is not sound");
  return *reading.network;
}

void parse(benchmark::State& state) {
  const std::string text = site(static_cast<int>(state.range(0)));
  for (auto _ : state) benchmark::DoNotOptimize(netlists::read_network_text(text, "site.toml"));
}

void check(benchmark::State& state) {
  const models::Network site_network = network(static_cast<int>(state.range(0)));
  for (auto _ : state) benchmark::DoNotOptimize(solver::run_checks(site_network, {}));
}

// Path impedances and the line-earth current of every circuit end, one condition.
void all_nodes(benchmark::State& state) {
  const models::Network site_network = network(static_cast<int>(state.range(0)));
  const solver::StateTree tree = solver::state_tree(site_network, 0);
  for (auto _ : state) {
    const solver::Walk walked = solver::walk(site_network, tree, solver::Condition::minimum);
    double sum = 0;
    for (const models::Circuit& circuit : site_network.circuits) {
      const solver::ConductorMatrix z = walked.boards[static_cast<std::size_t>(circuit.board)] +
                                        solver::circuit_matrix(site_network, circuit, {}, solver::Condition::minimum);
      sum += solver::fault_current(site_network, site_network.sources[0], z, circuit.conductors,
                                   solver::Condition::minimum, solver::Fault::line_earth)
                 .amps;
    }
    benchmark::DoNotOptimize(sum);
  }
}

// The same by node admittances of line and protective conductor, factorised once, one solve a node.
void all_nodes_general(benchmark::State& state) {
  using solver::Complex;
  const models::Network site_network = network(static_cast<int>(state.range(0)));
  const solver::SourceTerm term =
      solver::source_term(site_network, site_network.sources[0], solver::Condition::minimum, solver::Fault::line_earth);
  const int n_boards = static_cast<int>(site_network.boards.size());
  const int n = n_boards + static_cast<int>(site_network.circuits.size());
  for (auto _ : state) {
    std::vector<Eigen::Triplet<Complex>> entries;
    auto branch = [&](int from, int to, Complex z) {  // -1: the star point
      const Complex y = 1.0 / z;
      if (from >= 0) entries.emplace_back(from, from, y);
      entries.emplace_back(to, to, y);
      if (from >= 0) {
        entries.emplace_back(from, to, -y);
        entries.emplace_back(to, from, -y);
      }
    };
    branch(-1, 0, std::polar(term.ohms, term.angle_low));
    branch(-1, n, 1e-9);
    auto run = [&](int from, int to, const solver::ConductorMatrix& z) {
      branch(from, to, z(0, 0));
      branch(n + from, n + to, z(4, 4));
    };
    for (const models::Submain& s : site_network.submains)
      run(s.from, s.to,
          solver::run_matrix(site_network, s.cable, s.length.value, 1, false, solver::Condition::minimum));
    for (int c = 0; c < n - n_boards; ++c) {
      const models::Circuit& circuit = site_network.circuits[static_cast<std::size_t>(c)];
      run(circuit.board, n_boards + c, solver::circuit_matrix(site_network, circuit, {}, solver::Condition::minimum));
    }
    Eigen::SparseMatrix<Complex> y(2 * n, 2 * n);
    y.setFromTriplets(entries.begin(), entries.end());
    Eigen::SparseLU<Eigen::SparseMatrix<Complex>> lu(y);
    double sum = 0;
    for (int c = n_boards; c < n; ++c) {
      Eigen::VectorXcd injected = Eigen::VectorXcd::Zero(2 * n);
      injected(c) = 1;
      injected(n + c) = -1;
      const Eigen::VectorXcd u = lu.solve(injected);
      sum += 0.95 * 230.0 / std::abs(u(c) - u(n + c));
    }
    benchmark::DoNotOptimize(sum);
  }
}

BENCHMARK(parse)->Arg(1000)->Arg(10000)->Unit(benchmark::kMillisecond);
BENCHMARK(check)->Arg(1000)->Arg(10000)->Unit(benchmark::kMillisecond);
BENCHMARK(all_nodes)->Arg(1000)->Arg(10000)->Unit(benchmark::kMillisecond);
BENCHMARK(all_nodes_general)->Arg(1000)->Unit(benchmark::kMillisecond);

}  // namespace

BENCHMARK_MAIN();
