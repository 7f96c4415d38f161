// SPDX-License-Identifier: Apache-2.0

#include "tests/reference/equations.h"

#include <Eigen/LU>
#include <map>

namespace sunder::reference {

Equations::Current Equations::Current::times(double factor) const {
  Current scaled = *this;
  for (auto& term : scaled.unknowns) term.second *= factor;
  for (auto& term : scaled.joins) term.second *= factor;
  return scaled;
}

Equations::Current operator+(Equations::Current a, const Equations::Current& b) {
  a.unknowns.insert(a.unknowns.end(), b.unknowns.begin(), b.unknowns.end());
  a.joins.insert(a.joins.end(), b.joins.begin(), b.joins.end());
  return a;
}

void Equations::add(int row, int column, Complex value) {
  if (row != kEarth && column != kEarth) entries_.push_back({row, column, value});
}

Equations::Current Equations::branch(int a, int b, Complex ohms) {
  Eigen::MatrixXcd one(1, 1);
  one(0, 0) = ohms;
  return coupled({a}, {b}, one).front();
}

std::vector<Equations::Current> Equations::coupled(const std::vector<int>& a, const std::vector<int>& b,
                                                   const Eigen::MatrixXcd& ohms) {
  const Eigen::MatrixXcd y = ohms.inverse();
  std::vector<Current> currents(a.size());
  for (std::size_t i = 0; i < a.size(); ++i) {
    for (std::size_t k = 0; k < a.size(); ++k) {
      const Complex siemens = y(static_cast<int>(i), static_cast<int>(k));
      add(a[i], a[k], siemens);
      add(a[i], b[k], -siemens);
      add(b[i], a[k], -siemens);
      add(b[i], b[k], siemens);
      if (a[k] != kEarth) currents[i].unknowns.emplace_back(a[k], siemens);
      if (b[k] != kEarth) currents[i].unknowns.emplace_back(b[k], -siemens);
    }
  }
  return currents;
}

Equations::Current Equations::carrier(int a, int b, Complex ohms) {
  const int i = unknown();
  add(a, i, 1.0);
  add(b, i, -1.0);
  add(i, a, 1.0);
  add(i, b, -1.0);
  add(i, i, -ohms);
  Current current;
  current.unknowns.emplace_back(i, 1.0);
  return current;
}

Equations::Current Equations::join(int a, int b) {
  const bool kept = a != b && path(a, b).empty();
  Current current;
  if (kept) current = carrier(a, b, 0.0);
  current.joins.emplace_back(static_cast<int>(joins_.size()), 1.0);
  joins_.push_back({a, b, kept});
  return current;
}

int Equations::leg() { return unknown(); }

Equations::Current Equations::winding(int leg, double turns, int a, int b, Complex ohms) {
  const Current current = carrier(a, b, ohms);
  const int i = current.unknowns.front().first;
  add(i, leg, -turns);
  add(leg, i, -turns);
  return current;
}

void Equations::closed_core(const std::array<int, 3>& legs) {
  const int flux = unknown();
  for (const int leg : legs) {
    add(flux, leg, 1.0);
    add(leg, flux, 1.0);
  }
}

// The kept connections from a to b, each with the sign in which it is passed; empty if there are none.
std::vector<std::pair<int, double>> Equations::path(int a, int b) const {
  std::map<int, std::pair<int, double>> reached_by;  // node: connection, sign
  std::vector<int> open = {a};
  const auto done = [&](int node) { return node == a || reached_by.count(node) > 0; };
  while (!open.empty() && !done(b)) {
    const int here = open.back();
    open.pop_back();
    for (std::size_t k = 0; k < joins_.size(); ++k) {
      const Join& join = joins_[k];
      if (!join.kept || (join.a != here && join.b != here)) continue;
      const int there = join.a == here ? join.b : join.a;
      if (done(there)) continue;
      reached_by[there] = {static_cast<int>(k), join.a == here ? 1.0 : -1.0};
      open.push_back(there);
    }
  }
  std::vector<std::pair<int, double>> passed;
  if (!done(b)) return passed;
  for (int here = b; here != a;) {
    const auto [k, sign] = reached_by.at(here);
    passed.emplace_back(k, sign);
    const Join& join = joins_[static_cast<std::size_t>(k)];
    here = sign > 0 ? join.a : join.b;
  }
  return passed;
}

bool Equations::determinate(const Current& current) const {
  // A current that circulates through a connection left out and back along the kept ones solves the equations
  // without a cause: whatever it would change is not determined.
  for (std::size_t k = 0; k < joins_.size(); ++k) {
    if (joins_[k].kept) continue;
    double change = 0;
    const auto back = path(joins_[k].b, joins_[k].a);
    for (const auto& [join, factor] : current.joins) {
      if (join == static_cast<int>(k)) change += factor;
      for (const auto& [passed, sign] : back) {
        if (passed == join) change += factor * sign;
      }
    }
    if (change != 0.0) return false;
  }
  return true;
}

double Equations::finish() {
  matrix_ = Eigen::MatrixXcd::Zero(n_unknowns_, n_unknowns_);
  for (const Entry& entry : entries_) matrix_(entry.row, entry.column) += entry.value;
  const Eigen::PartialPivLU<Eigen::MatrixXcd> lu(matrix_);
  inverse_ = lu.inverse();
  return inverse_.allFinite() ? lu.rcond() : 0.0;
}

Equations::Solution Equations::close(const std::vector<Closing>& branches) const {
  const auto n = static_cast<Eigen::Index>(branches.size());
  // The bordered system [A B; B' 0] [x; i] = [0; -e], B with +1 where a branch leaves and -1 where it ends.
  Eigen::MatrixXcd wb = Eigen::MatrixXcd::Zero(n_unknowns_, n);
  Eigen::VectorXcd volts(n);
  for (Eigen::Index k = 0; k < n; ++k) {
    const Closing& branch = branches[static_cast<std::size_t>(k)];
    if (branch.from != kEarth) wb.col(k) += inverse_.col(branch.from);
    if (branch.to != kEarth) wb.col(k) -= inverse_.col(branch.to);
    volts(k) = branch.volts;
  }
  Eigen::MatrixXcd inner(n, n);
  for (Eigen::Index k = 0; k < n; ++k) {
    const Closing& branch = branches[static_cast<std::size_t>(k)];
    inner.row(k).setZero();
    if (branch.from != kEarth) inner.row(k) += wb.row(branch.from);
    if (branch.to != kEarth) inner.row(k) -= wb.row(branch.to);
  }
  const Eigen::VectorXcd currents = inner.partialPivLu().solve(volts);
  return {-wb * currents, {currents.data(), currents.data() + n}};
}

Equations::Solution Equations::close_afresh(const std::vector<Closing>& branches) const {
  const auto n = static_cast<Eigen::Index>(branches.size());
  Eigen::MatrixXcd bordered = Eigen::MatrixXcd::Zero(n_unknowns_ + n, n_unknowns_ + n);
  bordered.topLeftCorner(n_unknowns_, n_unknowns_) = matrix_;
  Eigen::VectorXcd right = Eigen::VectorXcd::Zero(n_unknowns_ + n);
  for (Eigen::Index k = 0; k < n; ++k) {
    const Closing& branch = branches[static_cast<std::size_t>(k)];
    const Eigen::Index own = n_unknowns_ + k;
    if (branch.from != kEarth) bordered(branch.from, own) = bordered(own, branch.from) = 1.0;
    if (branch.to != kEarth) bordered(branch.to, own) = bordered(own, branch.to) = -1.0;
    right(own) = -branch.volts;
  }
  const Eigen::VectorXcd all = bordered.partialPivLu().solve(right);
  Solution solution{all.head(n_unknowns_), {}};
  for (Eigen::Index k = 0; k < n; ++k) solution.closing.push_back(all(n_unknowns_ + k));
  return solution;
}

Equations::Complex Equations::value(const Current& current, const Solution& solution) {
  Complex sum = 0;
  for (const auto& [unknown, factor] : current.unknowns) sum += factor * solution.unknowns(unknown);
  return sum;
}

}  // namespace sunder::reference
