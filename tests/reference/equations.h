// SPDX-License-Identifier: Apache-2.0
/// @file
/// Modified nodal analysis, dense and unreduced: every potential is an unknown, and so is the current of every
/// winding and of everything that has no admittance. It knows resistors and windings, not networks.
#pragma once

#include <Eigen/Core>
#include <array>
#include <complex>
#include <utility>
#include <vector>

namespace sunder::reference {

class Equations {
 public:
  using Complex = std::complex<double>;
  static constexpr int kEarth = -1;  ///< reference earth as a node

  /// A current as a sum over unknowns and over ideal connections.
  struct Current {
    std::vector<std::pair<int, Complex>> unknowns;
    std::vector<std::pair<int, double>> joins;  ///< index of the connection, factor
    [[nodiscard]] Current times(double factor) const;
    friend Current operator+(Current a, const Current& b);
  };

  /// A further node; its potential is an unknown.
  int node() { return n_unknowns_++; }
  int unknown() { return n_unknowns_++; }

  /// Impedance between two nodes by its admittance. @return current from a to b
  Current branch(int a, int b, Complex ohms);
  /// Impedance between two nodes with its current as an unknown: v_a - v_b - z i = 0; z may be any.
  Current carrier(int a, int b, Complex ohms);
  /// Several branches a[k] to b[k] with mutual impedances. @return their currents from a to b
  std::vector<Current> coupled(const std::vector<int>& a, const std::vector<int>& b, const Eigen::MatrixXcd& ohms);
  /// Ideal connection: v_a = v_b, its current an unknown. One that closes a loop of such connections says
  /// nothing new; it is left out, and the currents round that loop are known in sum only.
  Current join(int a, int b);

  /// A magnetic leg: its unknown is the voltage of one turn, its equation the sum of ampere-turns.
  int leg();
  /// A winding of `turns` on a leg, with a series impedance:
  /// v_a - v_b - turns e - z i = 0, and turns i counts in the leg. @return current from a to b
  Current winding(int leg, double turns, int a, int b, Complex ohms);
  /// Three legs of one core between whose yokes no flux can return: the sum of their turn voltages is zero.
  void closed_core(const std::array<int, 3>& legs);

  /// Inverts. @return an estimate of the reciprocal condition number
  double finish();
  [[nodiscard]] int size() const noexcept { return n_unknowns_; }

  /// A branch that a fault closes: its electromotive force drives current out of `from` and into `to`.
  struct Closing {
    int from = 0, to = kEarth;
    Complex volts;
  };
  struct Solution {
    Eigen::VectorXcd unknowns;
    std::vector<Complex> closing;  ///< current of each branch, from `from` to `to` [A]
  };
  /// The equations with further rows and columns for the branches, by block elimination on the inverse.
  [[nodiscard]] Solution close(const std::vector<Closing>& branches) const;
  /// The same by a factorisation of the whole bordered system; slow.
  [[nodiscard]] Solution close_afresh(const std::vector<Closing>& branches) const;

  [[nodiscard]] static Complex value(const Current& current, const Solution& solution);
  /// False for a current that depends on how ideal connections in a loop share it.
  [[nodiscard]] bool determinate(const Current& current) const;

 private:
  void add(int row, int column, Complex value);
  struct Join {
    int a = 0, b = 0;
    bool kept = true;
  };
  [[nodiscard]] std::vector<std::pair<int, double>> path(int a, int b) const;

  int n_unknowns_ = 0;
  struct Entry {
    int row, column;
    Complex value;
  };
  std::vector<Entry> entries_;
  std::vector<Join> joins_;
  std::vector<int> join_unknown_;
  Eigen::MatrixXcd matrix_, inverse_;
};

}  // namespace sunder::reference
