// SPDX-License-Identifier: Apache-2.0
#include "solver/grid.h"

#include <algorithm>
#include <limits>

#include "solver/grid_parts.h"

namespace sunder::solver {
namespace {

using grid_parts::kAll;
using grid_parts::kPeSlot;
using grid_parts::of;
using models::Conductor;
using models::ConductorSet;

}  // namespace

Grid::Half::Half() = default;

Grid::Half::Half(const Half& other) : grid_(other.grid_ ? std::make_unique<Grid>(*other.grid_) : nullptr) {}

Grid::Half::Half(Half&& other) noexcept = default;

Grid::Half& Grid::Half::operator=(Half other) noexcept {
  grid_ = std::move(other.grid_);
  return *this;
}

Grid::Half::~Half() = default;

void Grid::Half::begin() { grid_ = std::make_unique<Grid>(); }

int Grid::add_node(ConductorSet conductors) {
  conductors_.push_back(conductors);
  if (!extra_.empty()) extra_.push_back(0);
  return static_cast<int>(conductors_.size()) - 1;
}

int Grid::add_terminal(int node) {
  constexpr int kRoom = kSlots - static_cast<int>(models::kConductors);
  // A node with no room left has its further terminals on a node of their own.
  if (!extra_.empty() && extra_[at(node)] == kRoom) node = add_node({});
  if (extra_.empty()) extra_.assign(conductors_.size(), 0);
  return node * kSlots + static_cast<int>(models::kConductors) + extra_[at(node)]++;
}

int Grid::add_run(int from, int to, ConductorSet carried, const RunImpedance& z) {
  runs_.push_back({from, to, carried, z});
  return static_cast<int>(runs_.size()) - 1;
}

int Grid::add_element(std::vector<int> terminals, std::vector<int> groups, const Eigen::MatrixXcd& y) {
  Element element;
  element.first = terminals_.size();
  element.n = static_cast<int>(terminals.size());
  element.value = admittances_.size();
  terminals_.insert(terminals_.end(), terminals.begin(), terminals.end());
  groups_.insert(groups_.end(), groups.begin(), groups.end());
  admittances_.resize(admittances_.size() + terminals.size() * terminals.size());
  elements_.push_back(element);
  const int index = static_cast<int>(elements_.size()) - 1;
  set_element(index, y);
  return index;
}

void Grid::set_element(int element, const Eigen::MatrixXcd& y) {
  const Element& e = elements_[at(element)];
  for (int i = 0; i < e.n; ++i)
    for (int j = 0; j < e.n; ++j) admittances_[e.value + at(i * e.n + j)] = y(i, j);
  if (balanced()) pass_on_element(at(element));
}

void Grid::set_run(int run, const RunImpedance& z) {
  runs_[at(run)].z = z;
  if (series_of_.empty()) return;
  if (series_of_[at(run)] >= 0) {
    series_[at(series_of_[at(run)])] = z;
  } else if (balanced()) {
    pass_on_run(at(core_run_of_[at(run)]));
  }
}

void Grid::join(int a, int b) { joins_.emplace_back(a, b); }

std::size_t Grid::slot(int terminal) const {
  return at(place_[at(terminal / kSlots)]) * kSlots + at(terminal % kSlots);
}

std::vector<int> Grid::terminals(int element) const {
  const Element& e = elements_[at(element)];
  const auto first = terminals_.begin() + static_cast<std::ptrdiff_t>(e.first);
  return {first, first + e.n};
}

std::vector<std::pair<int, int>> Grid::all_joins() const {
  std::vector<std::pair<int, int>> all = joins_;
  for (const Run& run : runs_) {
    if (run.z.pen)
      for (const int end : {run.from, run.to})
        all.emplace_back(terminal(end, Conductor::N), terminal(end, Conductor::PE));
    for (const Conductor c : kAll) {
      if (!run.carried.has(c) || (run.z.pen && c == Conductor::PE) || of(run.z, c) != Complex{}) continue;
      all.emplace_back(terminal(run.from, c), terminal(run.to, c));
    }
  }
  for (std::pair<int, int>& join : all)
    if (join.first == kEarth) std::swap(join.first, join.second);
  std::sort(all.begin(), all.end());
  all.erase(std::unique(all.begin(), all.end()), all.end());
  return all;
}

void Grid::fill() {
  system_.clear();
  for (const Fill& fill : fills_) {
    const Complex y = 1.0 / of(runs_[at(fill.run)].z, fill.conductor);
    if (fill.from != kNowhere) system_.value(fill.from) += y;
    if (fill.to != kNowhere) system_.value(fill.to) += y;
    if (fill.between != kNowhere) system_.value(fill.between) -= y;
    if (fill.back != kNowhere) system_.value(fill.back) -= y;
  }
  for (const Element& e : elements_)
    for (int i = 0; i < e.n; ++i) {
      const int a = terminals_[e.first + at(i)];
      if (a == kEarth) continue;
      for (int j = 0; j < e.n; ++j) {
        const int b = terminals_[e.first + at(j)];
        if (b == kEarth) continue;
        const Unknown& ua = unknown_[slot(a)];
        const Unknown& ub = unknown_[slot(b)];
        // Between two blocks one entry stands for its mirror image too.
        if (ua.block < 0 || ub.block < 0 || (ua.block != ub.block && i > j)) continue;
        system_.add(ua.block, ua.row, ub.block, ub.row, admittances_[e.value + at(i * e.n + j)]);
      }
    }
}

bool Grid::solve(bool factors_only) {
  if (balanced() && !factors_only) {
    for (Grid* half : {lines_.get(), common_.get()})
      if (!half->solve()) {
        trouble_ = core_[at(half->trouble_node())];
        return false;
      }
    walk();
    return true;
  }
  if (unknown_.empty()) number();
  fill();
  if (!system_.factor()) {
    trouble_ = block_node_[at(system_.singular())];
    return false;
  }
  if (!factors_only) {
    system_.invert();
    walk();
  }
  return true;
}

double Grid::residual() {
  if (unknown_.empty()) number();
  fill();
  const BlockSystem equations = system_;
  if (!system_.factor()) return std::numeric_limits<double>::infinity();
  std::vector<Complex> x(system_.rows());
  for (std::size_t i = 0; i < x.size(); ++i) x[i] = i % 2 == 0 ? 1.0 : -1.0;
  const std::vector<Complex> wanted = x;
  system_.solve(x);
  const std::vector<Complex> found = equations.times(x);
  double most = 0;
  for (std::size_t i = 0; i < x.size(); ++i) most = std::max(most, std::abs(found[i] - wanted[i]));
  return most;
}

void Grid::walk() {
  const std::size_t n_core = core_.size();
  path_.resize(n_core + outward_.size());
  for (std::size_t i = 0; i < outward_.size(); ++i) {
    const RunImpedance& z = series_[i];
    const Path& from = path_[at(parent_[i])];
    Path& to = path_[n_core + i];
    to.line = from.line + z.line;
    to.neutral = from.neutral + z.neutral;
    to.protective = from.protective + (z.pen ? z.neutral : z.protective);
  }
}

Complex Grid::inverse(const Unknown& a, const Unknown& b) const {
  if (a.block < 0 || b.block < 0) return {};
  return system_.inverse(a.block, a.row, b.block, b.row);
}

Complex Grid::shared(int node) const {
  Complex sum = 0;
  while (feeder_[at(node)] >= 0) {
    const Run& run = runs_[at(feeder_[at(node)])];
    if (run.z.pen) sum += run.z.neutral;
    node = run.from == node ? run.to : run.from;
  }
  return sum;
}

ConductorMatrix Grid::transfer(int a, int b) const {
  const int core_a = attach_[at(a)];
  const int core_b = attach_[at(b)];
  ConductorMatrix z = core_transfer(core_a, core_b);
  // What both have in common of a stripped part is the path of the one nearer to the core.
  const bool b_hangs_on_a =
      feeder_[at(b)] >= 0 && (runs_[at(feeder_[at(b)])].from == a || runs_[at(feeder_[at(b)])].to == a);
  const int nearer = a == b || feeder_[at(a)] < 0 || b_hangs_on_a ? a : b;
  const Path& common = path_[at(place_[at(nearer)])];
  const Complex both = core_a == core_b ? shared(nearer) : Complex{};
  const ConductorSet have_a = reached_[at(place_[at(a)])];
  const ConductorSet have_b = reached_[at(place_[at(b)])];
  for (const Conductor ca : kAll)
    for (const Conductor cb : kAll) {
      const auto i = static_cast<int>(index(ca));
      const auto j = static_cast<int>(index(cb));
      if (!have_a.has(ca) || !have_b.has(cb)) {
        z(i, j) = 0;
        continue;
      }
      if (core_a != core_b) continue;
      if (i == j) z(i, j) += i < 3 ? common.line : i == 3 ? common.neutral : common.protective;
      if (i + j == 7 && i != j) z(i, j) += both;
    }
  return z;
}

ConductorMatrix Grid::thevenin(int node) const { return transfer(node, node); }

int Grid::part_of(int terminal) const {
  if (terminal == kEarth) return 0;
  const int node = terminal / kSlots;
  const int k = terminal % kSlots;
  // A stripped node has only what its path carries.
  if (k <= kPeSlot && !reached_[at(place_[at(node)])].has(kAll[k])) return -1;
  return part_[slot(attach_[at(node)] * kSlots + k)];
}

bool Grid::earthed(int terminal) const {
  const int part = part_of(terminal);
  return part >= 0 && !part_tied_[at(part)];
}

bool Grid::connected(int a, int b) const {
  const int part = part_of(a);
  return part >= 0 && part == part_of(b);
}

std::vector<Complex> Grid::potentials(const std::vector<Injection>& injections) const {
  std::vector<Complex> x(system_.rows());
  std::vector<Complex> through(conductors_.size() * models::kConductors);  // into each stripped node's subtree
  for (const Injection& injection : injections) {
    if (injection.terminal == kEarth) continue;
    const int node = injection.terminal / kSlots;
    const int k = injection.terminal % kSlots;
    if (k <= kPeSlot) through[at(node) * models::kConductors + at(k)] += injection.amps;
    const Unknown& unknown = unknown_[slot(attach_[at(node)] * kSlots + k)];
    if (unknown.block >= 0) x[system_.offset(unknown.block) + at(unknown.row)] += injection.amps;
  }
  system_.solve(x);
  std::vector<Complex> v(conductors_.size() * kSlots);
  for (const int node : core_)
    for (int k = 0; k < kSlots; ++k) {
      const Unknown& unknown = unknown_[slot(node * kSlots + k)];
      if (unknown.block >= 0) v[at(node * kSlots + k)] = x[system_.offset(unknown.block) + at(unknown.row)];
    }
  for (auto node = outward_.rbegin(); node != outward_.rend(); ++node) {
    const Run& run = runs_[at(feeder_[at(*node)])];
    const int parent = run.from == *node ? run.to : run.from;
    for (std::size_t k = 0; k < models::kConductors; ++k)
      through[at(parent) * models::kConductors + k] += through[at(*node) * models::kConductors + k];
  }
  for (const int node : outward_) {
    const Run& run = runs_[at(feeder_[at(node)])];
    const int parent = run.from == node ? run.to : run.from;
    const Complex* in = through.data() + at(node) * models::kConductors;
    const Complex combined = in[3] + in[4];
    for (int k = 0; k <= kPeSlot; ++k) {
      Complex drop = of(run.z, kAll[k]) * in[k];
      if (run.z.pen && k >= 3) drop = run.z.neutral * combined;
      v[at(node * kSlots + k)] = v[at(parent * kSlots + k)] + drop;
    }
  }
  return v;
}

Eigen::Matrix<Complex, 5, 1> Grid::run_current(int run_index, const std::vector<Complex>& potentials) const {
  const Run& run = runs_[at(run_index)];
  Eigen::Matrix<Complex, 5, 1> current = Eigen::Matrix<Complex, 5, 1>::Zero();
  for (const Conductor c : kAll) {
    if (!run.carried.has(c) || (run.z.pen && c == Conductor::PE) || of(run.z, c) == Complex{}) continue;
    current(static_cast<int>(index(c))) =
        (potentials[at(terminal(run.from, c))] - potentials[at(terminal(run.to, c))]) / of(run.z, c);
  }
  return current;
}

Eigen::VectorXcd Grid::element_current(int element, const std::vector<Complex>& potentials) const {
  const Element& e = elements_[at(element)];
  Eigen::VectorXcd current = Eigen::VectorXcd::Zero(e.n);
  for (int i = 0; i < e.n; ++i)
    for (int j = 0; j < e.n; ++j) {
      const int terminal = terminals_[e.first + at(j)];
      if (terminal != kEarth) current(i) += admittances_[e.value + at(i * e.n + j)] * potentials[at(terminal)];
    }
  return current;
}

std::size_t Grid::bytes() const noexcept {
  std::size_t sum = path_.capacity() * sizeof(Path) + reached_.capacity() * sizeof(ConductorSet) +
                    (feeder_.capacity() + attach_.capacity() + core_.capacity() + outward_.capacity() +
                     hung_.capacity() + place_.capacity() + parent_.capacity() + root_.capacity() + part_.capacity() +
                     core_runs_.capacity() + core_run_of_.capacity()) *
                        sizeof(int) +
                    unknown_.capacity() * sizeof(Unknown) + fills_.capacity() * sizeof(Fill) + system_.bytes() +
                    loop_places_.capacity() * sizeof(LoopPlaces);
  for (const Grid* half : {lines_.get(), common_.get()})
    if (half != nullptr) sum += half->bytes();
  return sum;
}

}  // namespace sunder::solver
