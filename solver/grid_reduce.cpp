// SPDX-License-Identifier: Apache-2.0
// How a grid comes down to what must be solved: stripping, merging, tying, numbering.
#include <algorithm>
#include <numeric>

#include "solver/grid.h"
#include "solver/grid_parts.h"

namespace sunder::solver {
namespace {

using grid_parts::kAll;
using grid_parts::kPeSlot;
using grid_parts::of;
using models::Conductor;
using models::ConductorSet;

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

}  // namespace

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

}  // namespace sunder::solver
