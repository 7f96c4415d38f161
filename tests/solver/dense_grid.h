// SPDX-License-Identifier: Apache-2.0
/// @file
/// A conductor network written down twice: as a Grid, and as one dense set of nodal equations with every
/// zero impedance as an unknown current, neither stripped nor merged nor eliminated.
#pragma once

#include <Eigen/Core>
#include <Eigen/QR>
#include <random>
#include <vector>

#include "solver/grid.h"

namespace sunder::tests {

/// What is put into both. Terminals are numbered as a Grid does.
struct GridPlan {
  struct Run {
    int from = 0, to = 0;
    models::ConductorSet carried;
    solver::RunImpedance z;
  };
  struct Element {
    std::vector<int> terminals, groups;
    Eigen::MatrixXcd y;
  };
  std::vector<models::ConductorSet> nodes;
  std::vector<int> extra;  ///< nodes with a further terminal, in the order of adding
  std::vector<Run> runs;
  std::vector<Element> elements;
  std::vector<std::pair<int, int>> joins;

  [[nodiscard]] int terminals() const { return static_cast<int>(nodes.size()) * solver::Grid::kSlots; }
};

/// Not yet prepared.
[[nodiscard]] solver::Grid grid_of(const GridPlan& plan);

/// The same equations, dense: sum of currents at every terminal, and V_a = V_b for every join. Least
/// squares of least norm, so that parts without earth and loops of joins are no trouble.
class DenseGrid {
 public:
  explicit DenseGrid(const GridPlan& plan);
  /// Potentials of all terminals [V]. Precondition: what is put into a part without earth sums to zero.
  [[nodiscard]] Eigen::VectorXcd potentials(const std::vector<solver::Grid::Injection>& injections) const;

 private:
  Eigen::Index terminals_ = 0, unknowns_ = 0;
  Eigen::CompleteOrthogonalDecomposition<Eigen::MatrixXcd> equations_;
};

/// Choices of a random plan.
struct PlanLimits {
  int nodes = 12;
  bool loops = true;
  bool pens = true;
  bool joins = true;
  bool earthed = true;  ///< else no part has a way to earth
};

/// Boards of five conductors (some without N or PE) on random cables, sources with a star point, electrodes,
/// transformers, motors, couplers.
[[nodiscard]] GridPlan random_plan(std::mt19937& engine, const PlanLimits& limits = {});

}  // namespace sunder::tests
