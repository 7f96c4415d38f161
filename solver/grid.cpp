// SPDX-License-Identifier: Apache-2.0
#include "solver/grid.h"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;

constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};
constexpr int kPeSlot = 4;

// Disjoint sets with path halving.
class Sets {
 public:
  explicit Sets(std::size_t n) : parent_(n) { std::iota(parent_.begin(), parent_.end(), 0); }
  int find(int i) {
    while (parent_[static_cast<std::size_t>(i)] != i) {
      int& p = parent_[static_cast<std::size_t>(i)];
      p = parent_[static_cast<std::size_t>(p)];
      i = p;
    }
    return i;
  }
  void unite(int a, int b) { parent_[static_cast<std::size_t>(find(a))] = find(b); }

 private:
  std::vector<int> parent_;
};

// Impedance that a conductor of a run has.
Complex of(const RunImpedance& z, Conductor c) {
  if (c == Conductor::N) return z.neutral;
  return c == Conductor::PE ? z.protective : z.line;
}

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

// Takes away, again and again, nodes that hang on a single run and have nothing else. A PEN joins N
// and PE at both of its ends: a node with one may hang only on a PEN.
void Grid::strip() {
  const std::size_t n = conductors_.size();
  std::vector<char> busy(n, 0), pen(n, 0);
  auto touch = [&](int terminal) {
    if (terminal != kEarth) busy[at(terminal / kSlots)] = 1;
  };
  for (const int terminal : terminals_) touch(terminal);
  for (const auto& [a, b] : joins_) {
    touch(a);
    touch(b);
  }
  std::vector<int> degree(n, 0);
  std::vector<std::size_t> first(n + 1, 0);
  for (const Run& run : runs_) {
    ++degree[at(run.from)];
    ++degree[at(run.to)];
    if (run.z.pen) pen[at(run.from)] = pen[at(run.to)] = 1;
  }
  for (std::size_t i = 0; i < n; ++i) first[i + 1] = first[i] + at(degree[i]);
  std::vector<int> incident(first[n]);
  std::vector<std::size_t> next(first.begin(), first.end() - 1);
  for (std::size_t r = 0; r < runs_.size(); ++r) {
    incident[next[at(runs_[r].from)]++] = static_cast<int>(r);
    incident[next[at(runs_[r].to)]++] = static_cast<int>(r);
  }
  feeder_.assign(n, -1);
  attach_.assign(n, -1);
  std::vector<int> queue;
  queue.reserve(n);
  auto may_go = [&](int node) {
    if (degree[at(node)] != 1 || busy[at(node)] != 0 || feeder_[at(node)] >= 0) return -1;
    for (std::size_t i = first[at(node)]; i < first[at(node) + 1]; ++i) {
      const int r = incident[i];
      const Run& run = runs_[at(r)];
      const int other = run.from == node ? run.to : run.from;
      if (feeder_[at(other)] == r) continue;  // a child, gone already
      // Lines that couple, or the loop N-PE that a PEN elsewhere closes here, make it part of the core.
      return pen[at(node)] == 0 || run.z.pen ? r : -1;
    }
    return -1;
  };
  for (std::size_t i = 0; i < n; ++i)
    if (degree[i] == 1) queue.push_back(static_cast<int>(i));
  for (std::size_t i = 0; i < queue.size(); ++i) {
    const int node = queue[i];
    const int r = may_go(node);
    if (r < 0) continue;
    feeder_[at(node)] = r;
    const int parent = runs_[at(r)].from == node ? runs_[at(r)].to : runs_[at(r)].from;
    if (--degree[at(parent)] == 1) queue.push_back(parent);
  }
  // The core, and outward what hangs on each of its nodes.
  core_.clear();
  outward_.clear();
  hung_.clear();
  parent_.clear();
  series_.clear();
  place_.assign(n, -1);
  std::vector<int> stack;
  // Neighbours close to one another, so that large networks are walked along memory.
  std::vector<char> met(n, 0);
  for (std::size_t i = 0; i < n; ++i) {
    if (feeder_[i] >= 0 || met[i] != 0) continue;
    met[i] = 1;
    stack.push_back(static_cast<int>(i));
    while (!stack.empty()) {
      const int node = stack.back();
      stack.pop_back();
      place_[at(node)] = static_cast<int>(core_.size());
      core_.push_back(node);
      for (std::size_t k = first[at(node) + 1]; k-- > first[at(node)];) {
        const Run& run = runs_[at(incident[k])];
        const int other = run.from == node ? run.to : run.from;
        if (feeder_[at(other)] >= 0 || met[at(other)] != 0) continue;
        met[at(other)] = 1;
        stack.push_back(other);
      }
    }
  }
  reached_.assign(core_.size(), {});
  for (std::size_t c = 0; c < core_.size(); ++c) reached_[c] = conductors_[at(core_[c])];
  series_of_.assign(runs_.size(), -1);
  for (const int top : core_) {
    hung_.push_back(static_cast<int>(outward_.size()));
    attach_[at(top)] = top;
    stack.push_back(top);
    while (!stack.empty()) {
      const int node = stack.back();
      stack.pop_back();
      if (node != top) {
        const int r = feeder_[at(node)];
        const Run& run = runs_[at(r)];
        const int parent = place_[at(run.from == node ? run.to : run.from)];
        ConductorSet carried;
        for (const Conductor c : kAll) {
          const bool has = run.carried.has(c == Conductor::PE && run.z.pen ? Conductor::N : c);
          if (has && reached_[at(parent)].has(c) && conductors_[at(node)].has(c)) carried.add(c);
        }
        place_[at(node)] = static_cast<int>(core_.size() + outward_.size());
        series_of_[at(r)] = static_cast<int>(outward_.size());
        outward_.push_back(node);
        parent_.push_back(parent);
        series_.push_back(run.z);
        reached_.push_back(carried);
      }
      for (std::size_t k = first[at(node) + 1]; k-- > first[at(node)];) {
        const Run& run = runs_[at(incident[k])];
        const int other = run.from == node ? run.to : run.from;
        if (feeder_[at(other)] != incident[k] || attach_[at(other)] >= 0) continue;
        attach_[at(other)] = top;
        stack.push_back(other);
      }
    }
  }
  hung_.push_back(static_cast<int>(outward_.size()));
  core_runs_.clear();
  core_run_of_.assign(runs_.size(), -1);
  for (std::size_t r = 0; r < runs_.size(); ++r) {
    if (series_of_[r] >= 0) continue;
    core_run_of_[r] = static_cast<int>(core_runs_.size());
    core_runs_.push_back(static_cast<int>(r));
  }
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

void Grid::merge() {
  Sets same(core_.size() * kSlots + 1);
  const int earth = static_cast<int>(core_.size() * kSlots);
  auto slot_of = [&](int terminal) { return terminal == kEarth ? earth : static_cast<int>(slot(terminal)); };
  for (const auto& [a, b] : joins_) same.unite(slot_of(a), slot_of(b));
  for (const Run& run : runs_) {
    if (!run.z.pen) continue;
    for (const int end : {run.from, run.to})
      if (feeder_[at(end)] < 0) same.unite(slot_of(terminal(end, Conductor::N)), slot_of(terminal(end, Conductor::PE)));
  }
  for (const int r : core_runs_) {
    const Run& run = runs_[at(r)];
    for (const Conductor c : kAll) {
      if (!run.carried.has(c) || (run.z.pen && c == Conductor::PE) || of(run.z, c) != Complex{}) continue;
      same.unite(slot_of(terminal(run.from, c)), slot_of(terminal(run.to, c)));
    }
  }
  root_.resize(core_.size() * kSlots + 1);
  for (std::size_t s = 0; s < root_.size(); ++s) root_[s] = same.find(static_cast<int>(s));
}

// Galvanic parts: what runs and the groups of an element connect. One terminal of each part without a
// way to earth is tied, a star point or neutral for preference.
void Grid::tie_floating() {
  const std::size_t slots = core_.size() * kSlots;
  const int earth = root_[slots];
  Sets parts(slots + 1);
  for (std::size_t s = 0; s <= slots; ++s) parts.unite(static_cast<int>(s), root_[s]);
  for (const int r : core_runs_) {
    const Run& run = runs_[at(r)];
    for (const Conductor c : kAll)
      if (run.carried.has(c))
        parts.unite(static_cast<int>(slot(terminal(run.from, c))), static_cast<int>(slot(terminal(run.to, c))));
  }
  for (const Element& e : elements_)
    for (int i = 0; i < e.n; ++i)
      for (int j = 0; j < i; ++j) {
        if (groups_[e.first + at(i)] != groups_[e.first + at(j)]) continue;
        const int a = terminals_[e.first + at(i)];
        const int b = terminals_[e.first + at(j)];
        parts.unite(a == kEarth ? earth : static_cast<int>(slot(a)), b == kEarth ? earth : static_cast<int>(slot(b)));
      }
  std::vector<int> number(slots + 1, -1);
  number[at(parts.find(earth))] = 0;
  part_tied_.assign(1, false);
  part_.assign(slots, 0);
  std::vector<int> chosen{-1};
  constexpr int kPreference[kSlots] = {3, 4, 5, 1, 2, 0, 0, 0};
  for (std::size_t s = 0; s < slots; ++s) {
    int& p = number[at(parts.find(static_cast<int>(s)))];
    if (p < 0) {
      p = static_cast<int>(part_tied_.size());
      part_tied_.push_back(true);
      chosen.push_back(static_cast<int>(s));
    }
    part_[s] = p;
    if (p > 0 && kPreference[s % kSlots] < kPreference[at(chosen[at(p)]) % kSlots]) chosen[at(p)] = static_cast<int>(s);
  }
  std::vector<char> at_earth(slots + 1, 0);
  at_earth[at(earth)] = 1;
  for (std::size_t p = 1; p < chosen.size(); ++p) at_earth[at(root_[at(chosen[p])])] = 1;
  for (std::size_t s = 0; s <= slots; ++s)
    if (at_earth[at(root_[s])] != 0) root_[s] = static_cast<int>(slots);
}

void Grid::number() {
  const std::size_t slots = core_.size() * kSlots;
  Sets blocks(core_.size());
  for (std::size_t s = 0; s < slots; ++s)
    if (at(root_[s]) != slots) blocks.unite(static_cast<int>(s / kSlots), root_[s] / kSlots);
  std::vector<int> block_of(core_.size(), -1);
  std::vector<int> sizes;
  block_node_.clear();
  unknown_.assign(slots, {});
  std::vector<Unknown> of_root(slots + 1);
  for (std::size_t s = 0; s < slots; ++s) {
    const std::size_t node = s / kSlots;
    const int k = static_cast<int>(s % kSlots);
    const bool there = k <= kPeSlot ? conductors_[at(core_[node])].has(kAll[k])
                                    : !extra_.empty() && k - kPeSlot <= extra_[at(core_[node])];
    if (!there || at(root_[s]) == slots) continue;
    int& block = block_of[at(blocks.find(static_cast<int>(node)))];
    if (block < 0) {
      block = static_cast<int>(sizes.size());
      sizes.push_back(0);
      block_node_.push_back(core_[node]);
    }
    Unknown& unknown = of_root[at(root_[s])];
    if (unknown.block < 0) unknown = {block, sizes[at(block)]++};
    unknown_[s] = unknown;
  }
  std::vector<std::pair<int, int>> pairs;
  auto couple = [&](const Unknown& a, const Unknown& b) {
    if (a.block >= 0 && b.block >= 0 && a.block != b.block) pairs.emplace_back(a.block, b.block);
  };
  for (const int r : core_runs_) {
    const Run& run = runs_[at(r)];
    std::pair<int, int> last{-1, -1};
    for (const Conductor c : kAll) {
      if (!run.carried.has(c)) continue;
      const Unknown& a = unknown_[slot(terminal(run.from, c))];
      const Unknown& b = unknown_[slot(terminal(run.to, c))];
      if (std::pair{a.block, b.block} == last) continue;
      last = {a.block, b.block};
      couple(a, b);
    }
  }
  for (const Element& e : elements_)
    for (int i = 0; i < e.n; ++i)
      for (int j = 0; j < i; ++j) {
        const int a = terminals_[e.first + at(i)];
        const int b = terminals_[e.first + at(j)];
        if (a != kEarth && b != kEarth) couple(unknown_[slot(a)], unknown_[slot(b)]);
      }
  system_.prepare(std::move(sizes), std::move(pairs));
  place_runs();
}

// Where the conductors of the core runs go, found once for all values to come.
void Grid::place_runs() {
  fills_.clear();
  for (const int r : core_runs_) {
    const Run& run = runs_[at(r)];
    for (const Conductor c : kAll) {
      if (!run.carried.has(c) || (run.z.pen && c == Conductor::PE)) continue;
      const Unknown& a = unknown_[slot(terminal(run.from, c))];
      const Unknown& b = unknown_[slot(terminal(run.to, c))];
      const bool same = a.block == b.block && a.row == b.row;
      if (same || of(run.z, c) == Complex{}) continue;
      Fill fill;
      fill.run = r;
      fill.conductor = c;
      if (a.block >= 0) fill.from = system_.place(a.block, a.row, a.block, a.row);
      if (b.block >= 0) fill.to = system_.place(b.block, b.row, b.block, b.row);
      if (a.block >= 0 && b.block >= 0) {
        fill.between = system_.place(a.block, a.row, b.block, b.row);
        if (a.block == b.block) fill.back = system_.place(b.block, b.row, a.block, a.row);
      }
      fills_.push_back(fill);
    }
  }
}

void Grid::prepare() {
  strip();
  merge();
  tie_floating();
  if (alike()) split();
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
