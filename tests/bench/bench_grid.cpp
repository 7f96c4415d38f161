// SPDX-License-Identifier: Apache-2.0
// All-node currents of one condition on large sites, against a bare walk over parents and branch
// impedances, and against the general way: one sparse factorisation and one solve a node. Compare within
// one run only; `nodes` and `bytes` of a line are for the ratios.
#include <benchmark/benchmark.h>

#include <Eigen/SparseLU>
#include <random>

#include "solver/fault_loops.h"
#include "solver/node_currents.h"

namespace {

using namespace sunder;
using models::Conductor;
using models::ConductorSet;
using solver::Complex;
using solver::Grid;
using solver::RunImpedance;

constexpr int kPerBoard = 20;
const ConductorSet kFive{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};

Eigen::MatrixXcd source(Complex z) {  // L1 L2 L3 star
  Eigen::MatrixXcd y = Eigen::MatrixXcd::Zero(4, 4);
  for (int k = 0; k < 3; ++k) {
    y(k, k) += 1.0 / z;
    y(3, 3) += 1.0 / z;
    y(k, 3) -= 1.0 / z;
    y(3, k) -= 1.0 / z;
  }
  return y;
}

Eigen::MatrixXcd motor(Complex z) {  // L1 L2 L3, no star point
  return (Eigen::Matrix3cd::Identity() - Eigen::Matrix3cd::Constant(1.0 / 3.0)) / z;
}

// What a site is made of, for every way of solving it.
struct Site {
  struct Run {
    int from, to;
    ConductorSet carried;
    RunImpedance z;
  };
  std::vector<ConductorSet> nodes;
  std::vector<Run> runs;  // of the tree: run i feeds node i + 1
  std::vector<int> linked, motors;
  std::vector<std::pair<int, Complex>> sources;
};

// Circuits, 20 on a board, boards below boards; each board has its N-PE link, every tenth circuit is a ring
// at its middle, every twentieth has a motor at its end.
Site site(int circuits) {
  std::mt19937 engine(7);
  std::uniform_real_distribution<double> metres(5, 60);
  Site s;
  s.nodes.push_back(kFive);
  s.sources.emplace_back(0, Complex{0.004, 0.012});
  s.linked.push_back(0);
  const int boards = std::max(1, circuits / kPerBoard);
  std::vector<int> at{0};
  for (int b = 1; b < boards; ++b) {
    const double l = metres(engine);
    const Complex z = l * Complex{0.5e-3, 0.08e-3};
    at.push_back(static_cast<int>(s.nodes.size()));
    s.nodes.push_back(kFive);
    s.runs.push_back({at[static_cast<std::size_t>((b - 1) / 8)], at.back(), kFive, {z, z, 1.6 * z, false}});
    s.linked.push_back(at.back());
  }
  for (int c = 0; c < circuits; ++c) {
    const bool drives = c % 20 == 7;
    ConductorSet carried = drives ? ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::PE}
                                  : ConductorSet{c % 3 == 0   ? Conductor::L1
                                                 : c % 3 == 1 ? Conductor::L2
                                                              : Conductor::L3,
                                                 Conductor::N, Conductor::PE};
    const double l = metres(engine) * (c % 10 == 3 ? 0.25 : 1.0);  // a ring: a quarter of its loop
    const Complex z = l * Complex{7.4e-3, 0.1e-3};
    const int node = static_cast<int>(s.nodes.size());
    s.nodes.push_back(carried);
    s.runs.push_back({at[static_cast<std::size_t>(c / kPerBoard) % at.size()], node, carried, {z, z, 1.7 * z, false}});
    if (drives) s.motors.push_back(node);
  }
  return s;
}

Grid grid_of(const Site& s) {
  Grid grid;
  for (const ConductorSet node : s.nodes) grid.add_node(node);
  for (const Site::Run& run : s.runs) grid.add_run(run.from, run.to, run.carried, run.z);
  for (const int node : s.linked) grid.join(Grid::terminal(node, Conductor::N), Grid::terminal(node, Conductor::PE));
  for (const auto& [node, z] : s.sources) {
    std::vector<int> terminals;
    for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N})
      terminals.push_back(Grid::terminal(node, c));
    grid.add_element(terminals, {0, 0, 0, 0}, source(z));
  }
  grid.join(Grid::terminal(s.sources.front().first, Conductor::N), Grid::kEarth);
  for (const int node : s.motors)
    grid.add_element(
        {Grid::terminal(node, Conductor::L1), Grid::terminal(node, Conductor::L2), Grid::terminal(node, Conductor::L3)},
        {0, 0, 0}, motor({0.9, 2.2}));
  grid.prepare();
  return grid;
}

void bare_walk(benchmark::State& state) {
  const Site s = site(static_cast<int>(state.range(0)));
  std::vector<int> parent(s.nodes.size(), -1);
  std::vector<std::array<Complex, 3>> z(s.nodes.size());
  for (const Site::Run& run : s.runs) {
    parent[static_cast<std::size_t>(run.to)] = run.from;
    z[static_cast<std::size_t>(run.to)] = {run.z.line, run.z.neutral, run.z.protective};
  }
  std::vector<std::array<Complex, 3>> sum(s.nodes.size());
  for (auto _ : state) {
    for (std::size_t n = 1; n < parent.size(); ++n)
      for (std::size_t k = 0; k < 3; ++k) sum[n][k] = sum[static_cast<std::size_t>(parent[n])][k] + z[n][k];
    benchmark::DoNotOptimize(sum.data());
    benchmark::ClobberMemory();
  }
  state.counters["nodes"] = static_cast<double>(s.nodes.size());
}

void all_currents(benchmark::State& state) {
  const Site s = site(static_cast<int>(state.range(0)));
  Grid grid = grid_of(s);
  std::vector<solver::NodeCurrents> amps;
  if (grid.solve()) solver::node_currents(grid, {253, 440, 254}, true, amps);  // memory is there, as for the walk
  for (auto _ : state) {
    if (!grid.solve()) state.SkipWithError("singular");
    solver::node_currents(grid, {253, 440, 254}, true, amps);
    benchmark::DoNotOptimize(amps.data());
    benchmark::ClobberMemory();
  }
  state.counters["nodes"] = static_cast<double>(s.nodes.size());
  state.counters["bytes"] = static_cast<double>(grid.bytes() + amps.capacity() * sizeof(solver::NodeCurrents)) /
                            static_cast<double>(s.nodes.size());
}

// The ordering of the network, which all conditions and states of the same switches share.
void order(benchmark::State& state) {
  const Site s = site(static_cast<int>(state.range(0)));
  for (auto _ : state) {
    Grid grid = grid_of(s);
    benchmark::DoNotOptimize(grid.nodes());
  }
  state.counters["nodes"] = static_cast<double>(s.nodes.size());
}

// The general way on the same site: node admittances of every conductor in one sparse matrix, factorised
// once, one solve a node for its line-earth loop.
void general(benchmark::State& state, const Site& s) {
  const int n = static_cast<int>(s.nodes.size());
  std::vector<int> links(s.nodes.size(), 0);
  for (const int node : s.linked) links[static_cast<std::size_t>(node)] = 1;
  auto unknown = [&](int node, int k) { return node * 5 + (k == 4 && links[static_cast<std::size_t>(node)] ? 3 : k); };
  for (auto _ : state) {
    std::vector<Eigen::Triplet<Complex>> entries;
    auto add = [&](int a, int b, Complex y) { entries.emplace_back(a, b, y); };
    for (const Site::Run& run : s.runs)
      for (int k = 0; k < 5; ++k) {
        if (!run.carried.has(static_cast<Conductor>(k))) continue;
        const Complex y = 1.0 / (k < 3 ? run.z.line : k == 3 ? run.z.neutral : run.z.protective);
        const int a = unknown(run.from, k);
        const int b = unknown(run.to, k);
        add(a, a, y);
        add(b, b, y);
        add(a, b, -y);
        add(b, a, -y);
      }
    for (const auto& [node, z] : s.sources) {
      const Eigen::MatrixXcd y = source(z);
      for (int i = 0; i < 4; ++i)
        for (int j = 0; j < 4; ++j) add(unknown(node, i), unknown(node, j), y(i, j));
      add(unknown(node, 3), unknown(node, 3), 1e9);
    }
    for (const int node : s.motors) {
      const Eigen::MatrixXcd y = motor({0.9, 2.2});
      for (int i = 0; i < 3; ++i)
        for (int j = 0; j < 3; ++j) add(unknown(node, i), unknown(node, j), y(i, j));
    }
    for (int node = 0; node < n; ++node)  // conductors that are not there
      for (int k = 0; k < 5; ++k) {
        const bool there = s.nodes[static_cast<std::size_t>(node)].has(static_cast<Conductor>(k));
        if (!there || (k == 4 && links[static_cast<std::size_t>(node)])) add(node * 5 + k, node * 5 + k, 1.0);
      }
    Eigen::SparseMatrix<Complex> y(5 * n, 5 * n);
    y.setFromTriplets(entries.begin(), entries.end());
    const Eigen::SparseLU<Eigen::SparseMatrix<Complex>> lu(y);
    double sum = 0;
    for (int node = 0; node < n; ++node) {
      int line = 0;
      while (!s.nodes[static_cast<std::size_t>(node)].has(static_cast<Conductor>(line))) ++line;
      Eigen::VectorXcd injected = Eigen::VectorXcd::Zero(5 * n);
      injected(unknown(node, line)) = 1;
      injected(unknown(node, 4)) -= 1;
      const Eigen::VectorXcd v = lu.solve(injected);
      sum += 253 / std::abs(v(unknown(node, line)) - v(unknown(node, 4)));
    }
    benchmark::DoNotOptimize(sum);
  }
  state.counters["nodes"] = static_cast<double>(n);
}

// Boards in a lattice of cables, each joined to four others: nothing of it hangs.
Site lattice(int rows, int columns) {
  std::mt19937 engine(3);
  std::uniform_real_distribution<double> metres(20, 120);
  Site s;
  auto number = [columns](int r, int c) { return r * columns + c; };
  for (int r = 0; r < rows; ++r)
    for (int c = 0; c < columns; ++c) {
      s.nodes.push_back(kFive);
      s.linked.push_back(number(r, c));
      auto cable = [&](int to) {
        const Complex z = metres(engine) * Complex{0.2e-3, 0.08e-3};
        s.runs.push_back({number(r, c), to, kFive, {z, z, 1.6 * z, false}});
      };
      if (c > 0) cable(number(r, c - 1));
      if (r > 0) cable(number(r - 1, c));
    }
  for (const auto& [r, c] : {std::pair{0, 0}, std::pair{rows - 1, columns - 1}})
    s.sources.emplace_back(number(r, c), Complex{0.004, 0.012});
  return s;
}

void meshed_core(benchmark::State& state) {
  const Site s = lattice(40, 50);
  Grid grid = grid_of(s);
  std::vector<solver::NodeCurrents> amps;
  if (grid.solve()) solver::node_currents(grid, {253, 440, 254}, true, amps);  // memory is there, as for the walk
  for (auto _ : state) {
    if (!grid.solve()) state.SkipWithError("singular");
    solver::node_currents(grid, {253, 440, 254}, true, amps);
    benchmark::DoNotOptimize(amps.data());
  }
  state.counters["nodes"] = static_cast<double>(s.nodes.size());
}

void general_way(benchmark::State& state) { general(state, site(static_cast<int>(state.range(0)))); }
void general_way_meshed(benchmark::State& state) { general(state, lattice(40, 50)); }

BENCHMARK(bare_walk)->RangeMultiplier(10)->Range(1000, 1000000)->Unit(benchmark::kMicrosecond);
BENCHMARK(all_currents)->RangeMultiplier(10)->Range(1000, 1000000)->Unit(benchmark::kMicrosecond);
BENCHMARK(order)->RangeMultiplier(10)->Range(1000, 1000000)->Unit(benchmark::kMicrosecond);
BENCHMARK(meshed_core)->Unit(benchmark::kMicrosecond);
BENCHMARK(general_way)->Arg(1000)->Arg(10000)->Unit(benchmark::kMicrosecond)->Iterations(1);
BENCHMARK(general_way_meshed)->Unit(benchmark::kMicrosecond)->Iterations(1);

}  // namespace

BENCHMARK_MAIN();
