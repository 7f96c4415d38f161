// SPDX-License-Identifier: Apache-2.0
#include "solver/windings.h"

#include <cmath>
#include <numbers>

namespace sunder::solver {
namespace {

using models::Winding;
using Matrix3 = Eigen::Matrix3cd;

bool has_star(Winding w) { return w != Winding::delta; }
bool is_zigzag(Winding w) { return w == Winding::zigzag || w == Winding::zigzag_earthed; }
bool is_earthed(Winding w) { return w == Winding::star_earthed || w == Winding::zigzag_earthed; }

// Row k: line k against its neighbour, in the order of phases or against it.
Matrix3 differences(bool forward) {
  Matrix3 d = Matrix3::Identity();
  for (int k = 0; k < 3; ++k) d(k, (k + (forward ? 1 : 2)) % 3) = -1.0;
  return d;
}

// What a connection makes of a positive-sequence system (1, a2, a): row 0 of the product.
Complex gain(const Matrix3& connection) {
  const Complex a2 = std::polar(1.0, -2.0 * std::numbers::pi / 3.0);
  return connection(0, 0) + connection(0, 1) * a2 + connection(0, 2) * a2 * a2;
}

// Cyclic exchange of the secondary phases by k places.
Matrix3 rotation(int k) {
  Matrix3 p = Matrix3::Zero();
  for (int i = 0; i < 3; ++i) p(i, (i + k) % 3) = 1.0;
  return p;
}

bool matches(Complex turned, int clock) {
  const double wanted = -clock * std::numbers::pi / 6.0;
  return std::abs(turned / std::abs(turned) - std::polar(1.0, wanted)) < 1e-6;
}

// Open-circuit voltages of the secondary coils (of a delta: its coils; otherwise star to line) per
// volt of the primary lines, with the turns ratio that makes the rated voltages.
Matrix3 open_circuit(const models::Transformer& t) {
  const double ratio = t.secondary / (t.primary * (1.0 + t.tap));
  const bool delta = t.secondary_winding == Winding::delta;
  // A delta on the secondary turns by 30 degrees more between its coils and its lines.
  const Complex own = delta ? gain(differences(true)) : Complex{1.0};
  for (const bool primary_forward : {true, false})
    for (const bool secondary_forward : {true, false})
      for (int k = 0; k < 3; ++k)
        for (const double sign : {1.0, -1.0}) {
          Matrix3 c = Matrix3::Identity();
          if (t.primary_winding == Winding::delta || is_zigzag(t.primary_winding)) c = differences(primary_forward);
          if (is_zigzag(t.secondary_winding)) c = differences(secondary_forward) * c;
          c = sign * rotation(k) * c;
          const Complex turned = gain(c) / own;
          if (!matches(turned, t.clock)) continue;
          return c * (ratio / std::abs(turned));
        }
  return Matrix3::Zero();  // an impossible clock number: the reader refuses it
}

// Takes terminal k out of an admittance matrix, its current being zero.
Eigen::MatrixXcd without(const Eigen::MatrixXcd& y, Eigen::Index k) {
  const Eigen::Index n = y.rows() - 1;
  Eigen::MatrixXcd rest(n, n);
  auto old = [k](Eigen::Index i) { return i < k ? i : i + 1; };
  for (Eigen::Index i = 0; i < n; ++i)
    for (Eigen::Index j = 0; j < n; ++j) rest(i, j) = y(old(i), old(j)) - y(old(i), k) * y(k, old(j)) / y(k, k);
  return rest;
}

}  // namespace

bool clock_possible(Winding primary, Winding secondary, int clock) noexcept {
  auto turns = [](Winding w) { return w == Winding::delta || is_zigzag(w) ? 1 : 0; };
  return clock >= 0 && clock < 12 && (turns(primary) + turns(secondary)) % 2 == clock % 2;
}

WindingModel winding_model(const models::Transformer& t, Complex z1, Complex z0) {
  const Matrix3 e = open_circuit(t);
  const bool delta = t.secondary_winding == Winding::delta;
  const bool primary_star = is_earthed(t.primary_winding);
  const bool z0_known = !std::isnan(z0.real());
  const bool passes = has_star(t.primary_winding) && !is_zigzag(t.primary_winding);
  // B: voltages over the impedances, from those of the terminals p1 p2 p3 pn s1 s2 s3 star.
  Eigen::MatrixXcd b = Eigen::MatrixXcd::Zero(3, 8);
  b.leftCols<3>() = -e;
  // Coils of a star are between line and star point: its potential counts with their row sums.
  if (passes) b.col(3) = e.rowwise().sum();
  const bool core_path = passes && !primary_star && has_star(t.secondary_winding) && !is_zigzag(t.secondary_winding);
  if (core_path) {
    const Matrix3 no_zero = Matrix3::Identity() - Matrix3::Constant(1.0 / 3.0);
    b.leftCols<4>() = (no_zero * b.leftCols<4>()).eval();
  }
  if (delta) {
    b.block<3, 3>(0, 4) = differences(true);
  } else {
    b.block<3, 3>(0, 4) = Matrix3::Identity();
    b.col(7).setConstant(-1.0);
  }
  Eigen::MatrixXcd y = b.transpose() * b / (delta ? 3.0 * z1 : z1);
  WindingModel model;
  model.primary_star = primary_star;
  model.secondary_star = !delta && is_earthed(t.secondary_winding) && z0_known;
  const Complex zn = (z0 - z1) / 3.0;
  if (!delta) {
    if (model.secondary_star && std::abs(zn) > 1e-12 * std::abs(z1)) {
      Eigen::MatrixXcd larger = Eigen::MatrixXcd::Zero(9, 9);
      larger.topLeftCorner<8, 8>() = y;
      larger(7, 7) += 1.0 / zn;
      larger(8, 8) += 1.0 / zn;
      larger(7, 8) -= 1.0 / zn;
      larger(8, 7) -= 1.0 / zn;
      y = without(larger, 7);
    } else if (!model.secondary_star) {
      y = without(y, 7);
    }
  } else {
    y = y.topLeftCorner(7, 7).eval();
    // Zero sequence of an earthed primary above a delta: the same difference at its star point.
    if (primary_star && z0_known && std::abs(zn) > 1e-12 * std::abs(z1)) {
      const double turns = t.primary * (1.0 + t.tap) / t.secondary;
      const Complex zp = zn * turns * turns;
      Eigen::MatrixXcd larger = Eigen::MatrixXcd::Zero(8, 8);
      // The new terminal takes the place of the coils' star, which is eliminated.
      larger.topLeftCorner<7, 7>() = y;
      larger(3, 3) += 1.0 / zp;
      larger(7, 7) += 1.0 / zp;
      larger(3, 7) -= 1.0 / zp;
      larger(7, 3) -= 1.0 / zp;
      Eigen::MatrixXcd rest = without(larger, 3);  // p1 p2 p3 s1 s2 s3 star
      Eigen::PermutationMatrix<Eigen::Dynamic> order(7);
      order.indices() << 0, 1, 2, 4, 5, 6, 3;
      y = order * rest * order.transpose();
    }
  }
  if (!primary_star) {
    // Nothing connects the star of the primary coils: a delta has none, an open star carries no current.
    const bool floats = passes && !core_path && std::abs(y(3, 3)) > 0;
    if (floats) {
      y = without(y, 3);
    } else {
      const Eigen::Index n = y.rows() - 1;
      Eigen::MatrixXcd rest(n, n);
      auto old = [](Eigen::Index i) { return i < 3 ? i : i + 1; };
      for (Eigen::Index i = 0; i < n; ++i)
        for (Eigen::Index j = 0; j < n; ++j) rest(i, j) = y(old(i), old(j));
      y = rest;
    }
  }
  model.y = y;
  return model;
}

}  // namespace sunder::solver
