// SPDX-License-Identifier: Apache-2.0
// A grid whose lines are alike as two grids: what differs between lines, and what they have in common.
#include <algorithm>
#include <cmath>

#include "solver/grid.h"
#include "solver/grid_parts.h"

namespace sunder::solver {
namespace {

using grid_parts::kAll;
using grid_parts::of;
using models::Conductor;
using models::ConductorSet;

}  // namespace

// Between nodes of the core.
ConductorMatrix Grid::core_transfer(int a, int b) const {
  ConductorMatrix z = ConductorMatrix::Zero();
  if (balanced()) {
    const ConductorMatrix between = lines_->transfer(place_[at(a)], place_[at(b)]);
    z = common_->transfer(place_[at(a)], place_[at(b)]);
    const double root = std::sqrt(3.0);
    for (int k = 1; k < 3; ++k)
      for (const int other : {3, 4}) {
        z(k, other) = z(0, other);
        z(other, k) = z(other, 0);
      }
    const Complex zero = z(0, 0);
    const Complex one = between(0, 0);
    for (int i = 0; i < 3; ++i) {
      for (int j = 0; j < 3; ++j) z(i, j) = (zero - one) / 3.0 + (i == j ? one : 0.0);
      for (const int other : {3, 4}) {
        z(i, other) /= root;
        z(other, i) /= root;
      }
    }
    return z;
  }
  for (const Conductor ca : kAll)
    for (const Conductor cb : kAll)
      z(static_cast<int>(index(ca)), static_cast<int>(index(cb))) =
          inverse(unknown_[slot(terminal(a, ca))], unknown_[slot(terminal(b, cb))]);
  return z;
}

Grid::BalancedLoops Grid::balanced_loops(int core_node) const {
  const auto c = at(place_[at(core_node)]);
  const LoopPlaces& of = loop_places_[c];
  auto value = [](const Grid& half, std::size_t place) {
    return place == kNowhere ? Complex{} : half.system_.value(place);
  };
  const Path& line_path = lines_->path_[at(lines_->place_[c])];
  const Path& path = common_->path_[at(common_->place_[c])];
  const Complex one = value(*lines_, of.line) + line_path.line;
  const Complex of_one = (2.0 * one + value(*common_, of.zero) + path.line) / 3.0;
  const double twice = 2.0 / std::sqrt(3.0);
  return {one, of_one + value(*common_, of.neutral) + path.neutral - twice * value(*common_, of.zero_neutral),
          of_one + value(*common_, of.protective) + path.protective - twice * value(*common_, of.zero_protective)};
}

// Whether the entries of an element do not tell the lines of a node apart: between the lines of two
// nodes one value on the diagonal and one off it, towards any other terminal one value.
bool Grid::alike(const Element& e) const {
  constexpr double kSame = 1e-12;
  double scale = 0;
  for (int k = 0; k < e.n * e.n; ++k) scale = std::max(scale, std::abs(admittances_[e.value + at(k)]));
  auto y = [&](int i, int j) { return admittances_[e.value + at(i * e.n + j)]; };
  auto line_of = [&](int i) {
    const int t = terminals_[e.first + at(i)];
    return t == kEarth || t % kSlots > 2 ? -1 : t % kSlots;
  };
  auto node_of = [&](int i) { return terminals_[e.first + at(i)] / kSlots; };
  // Three lines of a node stand together, in order.
  for (int i = 0; i < e.n;) {
    if (line_of(i) < 0) {
      ++i;
      continue;
    }
    for (int k = 0; k < 3; ++k)
      if (i + k >= e.n || line_of(i + k) != k || node_of(i + k) != node_of(i)) return false;
    i += 3;
  }
  for (int i = 0; i < e.n; ++i)
    for (int j = 0; j < e.n; ++j) {
      const int li = line_of(i);
      const int lj = line_of(j);
      Complex first = y(i, j);
      if (li >= 0 && lj >= 0) first = li == lj ? y(i - li, j - lj) : y(i - li, j - lj + 1);
      if (li >= 0 && lj < 0) first = y(i - li, j);
      if (li < 0 && lj >= 0) first = y(i, j - lj);
      if (std::abs(y(i, j) - first) > kSame * scale) return false;
    }
  return true;
}

bool Grid::alike() const {
  auto three_or_none = [](ConductorSet set) { return set.lines() == 3 || set.lines() == 0; };
  for (const int node : core_)
    if (!three_or_none(conductors_[at(node)])) return false;
  for (const int r : core_runs_)
    if (!three_or_none(runs_[at(r)].carried)) return false;
  std::vector<std::pair<int, int>> of_lines;
  auto is_line = [](int terminal) { return terminal != kEarth && terminal % kSlots <= 2; };
  for (const auto& [a, b] : joins_) {
    if (!is_line(a) && !is_line(b)) continue;
    if (!is_line(a) || !is_line(b) || a % kSlots != b % kSlots) return false;
    of_lines.emplace_back(a, b);
  }
  for (const auto& [a, b] : of_lines)
    for (int k = 0; k < 3; ++k) {
      const std::pair<int, int> sister{a - a % kSlots + k, b - b % kSlots + k};
      if (std::find(of_lines.begin(), of_lines.end(), sister) == of_lines.end()) return false;
    }
  return std::all_of(elements_.begin(), elements_.end(), [&](const Element& e) { return alike(e); });
}

// The admittances of one of the two grids: between lines y_diagonal - y_other; in common, scaled so that
// the transformation is orthogonal, y_diagonal + 2 y_other, sqrt(3) y to other terminals.
Eigen::MatrixXcd Grid::split_admittance(const Element& e, bool common) const {
  std::vector<int> kept;
  std::vector<bool> line;
  for (int i = 0; i < e.n; ++i) {
    const int t = terminals_[e.first + at(i)];
    const bool of_lines = t != kEarth && t % kSlots <= 2;
    if (of_lines ? t % kSlots != 0 : !common) continue;
    kept.push_back(i);
    line.push_back(of_lines);
  }
  const auto n = static_cast<Eigen::Index>(kept.size());
  Eigen::MatrixXcd y = Eigen::MatrixXcd::Zero(n, n);
  for (std::size_t i = 0; i < kept.size(); ++i)
    for (std::size_t j = 0; j < kept.size(); ++j) {
      auto entry = [&](int k) { return admittances_[e.value + at(kept[i] * e.n + kept[j] + k)]; };
      Complex& value = y(static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(j));
      if (line[i] && line[j]) {
        value = common ? entry(0) + 2.0 * entry(1) : entry(0) - entry(1);
      } else {
        value = line[i] || line[j] ? std::sqrt(3.0) * entry(0) : entry(0);
      }
    }
  return y;
}

// The same with reference earth behind the terminals, which is where what differs between lines has its
// common potential.
Eigen::MatrixXcd Grid::between_lines(const Element& e) const {
  const Eigen::MatrixXcd y = split_admittance(e, false);
  Eigen::MatrixXcd with_earth = Eigen::MatrixXcd::Zero(y.rows() + 1, y.cols() + 1);
  with_earth.topLeftCorner(y.rows(), y.cols()) = y;
  return with_earth;
}

void Grid::split() {
  lines_.begin();
  common_.begin();
  for (const int node : core_) {
    const ConductorSet have = conductors_[at(node)];
    ConductorSet line, rest;
    if (have.lines() == 3) line.add(Conductor::L1), rest.add(Conductor::L1);
    for (const Conductor c : {Conductor::N, Conductor::PE})
      if (have.has(c)) rest.add(c);
    lines_->add_node(line);
    common_->add_node(rest);
  }
  auto moved = [&](int terminal) {
    return terminal == kEarth ? kEarth : place_[at(terminal / kSlots)] * kSlots + terminal % kSlots;
  };
  if (!extra_.empty())
    for (std::size_t c = 0; c < core_.size(); ++c)
      for (int k = 0; k < extra_[at(core_[c])]; ++k) common_->add_terminal(static_cast<int>(c));
  line_run_.assign(core_runs_.size(), -1);
  common_run_.assign(core_runs_.size(), -1);
  for (std::size_t i = 0; i < core_runs_.size(); ++i) {
    const Run& run = runs_[at(core_runs_[i])];
    const int from = place_[at(run.from)];
    const int to = place_[at(run.to)];
    ConductorSet rest = run.carried;
    rest.remove(Conductor::L2);
    rest.remove(Conductor::L3);
    if (run.carried.has(Conductor::L1))
      line_run_[i] = lines_->add_run(from, to, {Conductor::L1}, {run.z.line, {}, {}, false});
    if (!rest.empty()) common_run_[i] = common_->add_run(from, to, rest, run.z);
  }
  for (const auto& [a, b] : joins_) {
    const bool line = a != kEarth && a % kSlots <= 2;
    if (line && a % kSlots != 0) continue;
    if (line) lines_->join(moved(a), moved(b));
    common_->join(moved(a), moved(b));
  }
  // A stripped PEN joins N and PE where it hangs.
  for (const Run& run : runs_)
    if (run.z.pen && !in_core(run))
      for (const int end : {run.from, run.to})
        if (feeder_[at(end)] < 0)
          common_->join(moved(terminal(end, Conductor::N)), moved(terminal(end, Conductor::PE)));
  line_element_.assign(elements_.size(), -1);
  common_element_.assign(elements_.size(), -1);
  constexpr double kNothing = 1e-12;
  for (std::size_t k = 0; k < elements_.size(); ++k) {
    const Element& e = elements_[k];
    double scale = 0;
    for (int i = 0; i < e.n * e.n; ++i) scale = std::max(scale, std::abs(admittances_[e.value + at(i)]));
    std::vector<int> line, rest, groups;
    for (int i = 0; i < e.n; ++i) {
      const int t = terminals_[e.first + at(i)];
      if (t != kEarth && t % kSlots <= 2 && t % kSlots != 0) continue;
      if (t != kEarth && t % kSlots == 0) line.push_back(moved(t));
      rest.push_back(moved(t));
      groups.push_back(groups_[e.first + at(i)]);
    }
    if (!line.empty()) {
      line.push_back(kEarth);
      line_element_[k] = lines_->add_element(line, std::vector<int>(line.size(), 0), between_lines(e));
    }
    const Eigen::MatrixXcd y = split_admittance(e, true);
    if (y.cwiseAbs().maxCoeff() > kNothing * scale) common_element_[k] = common_->add_element(rest, groups, y);
  }
  for (Grid* half : {lines_.get(), common_.get()}) {
    half->strip();
    half->merge();
    half->tie_floating();
    half->number();
  }
  find_loops();
}

void Grid::pass_on_run(std::size_t core_run) {
  const RunImpedance& z = runs_[at(core_runs_[core_run])].z;
  if (line_run_[core_run] >= 0) lines_->set_run(line_run_[core_run], {z.line, {}, {}, false});
  if (common_run_[core_run] >= 0) common_->set_run(common_run_[core_run], z);
}

void Grid::pass_on_element(std::size_t element) {
  const Element& e = elements_[element];
  if (line_element_[element] >= 0) lines_->set_element(line_element_[element], between_lines(e));
  if (common_element_[element] >= 0) common_->set_element(common_element_[element], split_admittance(e, true));
}

// Where the halves keep what balanced_loops() puts together; what they stripped adds its path.
void Grid::find_loops() {
  loop_places_.assign(core_.size(), {});
  for (std::size_t c = 0; c < core_.size(); ++c) {
    LoopPlaces& of = loop_places_[c];
    auto find = [&](const Grid& half, int i, int j) {
      const std::size_t slot = at(half.place_[at(half.attach_[c])]) * kSlots;
      const Unknown& a = half.unknown_[slot + at(i)];
      const Unknown& b = half.unknown_[slot + at(j)];
      return a.block < 0 || b.block < 0 ? kNowhere : half.system_.place(a.block, a.row, b.block, b.row);
    };
    of.line = find(*lines_, 0, 0);
    of.zero = find(*common_, 0, 0);
    of.neutral = find(*common_, 3, 3);
    of.protective = find(*common_, 4, 4);
    of.zero_neutral = find(*common_, 0, 3);
    of.zero_protective = find(*common_, 0, 4);
  }
}

}  // namespace sunder::solver
