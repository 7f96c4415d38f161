// SPDX-License-Identifier: Apache-2.0
#include "solver/block_system.h"

#include <Eigen/LU>
#include <Eigen/OrderingMethods>
#include <algorithm>
#include <cmath>
#include <cstdint>
#include <utility>

namespace sunder::solver {
namespace {

using Complex = BlockSystem::Complex;
using Matrix = Eigen::Matrix<Complex, Eigen::Dynamic, Eigen::Dynamic, Eigen::RowMajor>;

std::size_t at(int i) { return static_cast<std::size_t>(i); }

// A pivot this much smaller than the block's largest entry is taken for zero.
constexpr double kSingular = 1e-13;

// Inverse of a regular block whose diagonal pivots vanish (two conductors that are coupled only to one
// another): rows are exchanged instead.
bool invert_by_rows(Complex* a, int m, double scale) {
  const Matrix original = Eigen::Map<const Matrix>(a, m, m);
  const Eigen::FullPivLU<Matrix> lu(original);
  const double least = lu.matrixLU().diagonal().cwiseAbs().minCoeff();
  if (!(least > kSingular * scale)) return false;
  const Matrix inverse = lu.inverse();
  for (int i = 0; i < m; ++i)
    for (int j = 0; j < m; ++j) a[i * m + j] = (inverse(i, j) + inverse(j, i)) / 2.0;
  return true;
}

// Inverse of a symmetric m x m block in place, by sweeping its diagonal, the largest pivot first: symmetry
// is kept and no conjugate taken. `original` keeps the block for the case that it does not go so.
// `scale`: largest entry of the block before others were eliminated; a pivot is zero beside it.
bool invert_block(Complex* a, int m, double scale, std::vector<Complex>& original) {
  const double least = scale * scale * kSingular * kSingular;
  if (m == 1) {
    if (!(std::norm(a[0]) > least)) return false;
    a[0] = 1.0 / a[0];
    return true;
  }
  if (m == 2) {
    const Complex determinant = a[0] * a[3] - a[1] * a[1];
    const double largest = std::max({std::norm(a[0]), std::norm(a[1]), std::norm(a[3])});
    if (!(std::norm(determinant) > largest * least)) return false;
    const Complex d = 1.0 / determinant;
    const Complex first = a[0];
    a[0] = a[3] * d;
    a[3] = first * d;
    a[1] = a[2] = -a[1] * d;
    return true;
  }
  original.assign(a, a + m * m);
  std::uint64_t swept = 0;
  constexpr int kMost = 64;
  for (int step = 0; step < m; ++step) {
    int k = -1;
    double best = least;
    for (int i = 0; i < m && m <= kMost; ++i) {
      const double size = std::norm(a[i * m + i]);
      if ((swept >> i & 1U) == 0 && size > best) {
        best = size;
        k = i;
      }
    }
    if (k < 0) {
      std::copy(original.begin(), original.end(), a);
      return invert_by_rows(a, m, scale);
    }
    swept |= std::uint64_t{1} << k;
    const Complex d = 1.0 / a[k * m + k];
    for (int i = 0; i < m; ++i) {
      if (i == k) continue;
      const Complex b = a[i * m + k] * d;
      for (int j = i; j < m; ++j) {
        if (j == k) continue;
        a[i * m + j] -= b * a[k * m + j];
        a[j * m + i] = a[i * m + j];
      }
    }
    for (int i = 0; i < m; ++i) {
      if (i == k) continue;
      a[i * m + k] *= d;
      a[k * m + i] = a[i * m + k];
    }
    a[k * m + k] = -d;
  }
  for (int i = 0; i < m * m; ++i) a[i] = -a[i];
  return true;
}

// product = d (m x m) times a (m x n)
void multiply(const Complex* d, const Complex* a, int m, int n, Complex* product) {
  for (int i = 0; i < m; ++i) {
    for (int j = 0; j < n; ++j) product[i * n + j] = d[i * m] * a[j];
    for (int k = 1; k < m; ++k)
      for (int j = 0; j < n; ++j) product[i * n + j] += d[i * m + k] * a[k * n + j];
  }
}

}  // namespace

void BlockSystem::order(const std::vector<std::vector<int>>& neighbours) {
  const std::size_t n = size_.size();
  position_.assign(n, -1);
  block_at_.clear();
  block_at_.reserve(n);
  std::vector<int> degree(n);
  std::vector<int> leaves;
  for (std::size_t b = 0; b < n; ++b) degree[b] = static_cast<int>(neighbours[b].size());
  auto place = [&](int b) {
    position_[at(b)] = static_cast<int>(block_at_.size());
    block_at_.push_back(b);
  };
  for (std::size_t b = 0; b < n; ++b)
    if (degree[b] <= 1) leaves.push_back(static_cast<int>(b));
  for (std::size_t i = 0; i < leaves.size(); ++i) {
    place(leaves[i]);
    for (const int other : neighbours[at(leaves[i])])
      if (position_[at(other)] < 0 && --degree[at(other)] == 1) leaves.push_back(other);
  }
  std::vector<int> rest;
  std::vector<int> number(n, -1);
  for (std::size_t b = 0; b < n; ++b) {
    if (position_[b] >= 0) continue;
    number[b] = static_cast<int>(rest.size());
    rest.push_back(static_cast<int>(b));
  }
  if (rest.empty()) return;
  std::vector<Eigen::Triplet<double>> pattern;
  for (const int b : rest) {
    pattern.emplace_back(number[at(b)], number[at(b)], 1.0);
    for (const int other : neighbours[at(b)])
      if (number[at(other)] >= 0) pattern.emplace_back(number[at(b)], number[at(other)], 1.0);
  }
  const int m = static_cast<int>(rest.size());
  Eigen::SparseMatrix<double> graph(m, m);
  graph.setFromTriplets(pattern.begin(), pattern.end());
  Eigen::PermutationMatrix<Eigen::Dynamic, Eigen::Dynamic, int> permutation;
  Eigen::AMDOrdering<int>()(graph, permutation);
  for (int i = 0; i < m; ++i) place(rest[at(permutation.indices()[i])]);
}

void BlockSystem::eliminate_symbolically(const std::vector<std::vector<int>>& neighbours) {
  const std::size_t n = size_.size();
  std::vector<std::vector<int>> passed(n);  // columns handed on to a position by those it is first below
  first_.assign(1, 0);
  first_.reserve(n + 1);
  below_.clear();
  value_at_.clear();
  pivot_at_.assign(n, 0);
  std::size_t values = 0;
  std::vector<int> column;
  for (std::size_t c = 0; c < n; ++c) {
    const int b = block_at_[c];
    column = std::move(passed[c]);
    for (const int other : neighbours[at(b)])
      if (position_[at(other)] > static_cast<int>(c)) column.push_back(position_[at(other)]);
    std::sort(column.begin(), column.end());
    column.erase(std::unique(column.begin(), column.end()), column.end());
    pivot_at_[c] = values;
    const std::size_t m = at(size_[at(b)]);
    values += m * m;
    for (const int q : column) {
      below_.push_back(q);
      value_at_.push_back(values);
      values += m * at(size_[at(block_at_[at(q)])]);
    }
    first_.push_back(below_.size());
    if (column.size() > 1) {
      std::vector<int>& next = passed[at(column.front())];
      next.insert(next.end(), column.begin() + 1, column.end());
    }
  }
  values_.assign(values, Complex{});
}

// The same elimination with every column right after those that it takes up: the fill is the same, and
// what is used together lies together.
void BlockSystem::order_by_subtrees() {
  const std::size_t n = block_at_.size();
  std::vector<int> child(n, -1), sister(n, -1);
  std::vector<int> tops;
  for (std::size_t c = n; c-- > 0;) {
    if (first_[c] == first_[c + 1]) {
      tops.push_back(static_cast<int>(c));
      continue;
    }
    const int parent = below_[first_[c]];
    sister[c] = child[at(parent)];
    child[at(parent)] = static_cast<int>(c);
  }
  std::vector<int> reversed;  // parents before children
  reversed.reserve(n);
  std::vector<int> stack = tops;
  while (!stack.empty()) {
    const int c = stack.back();
    stack.pop_back();
    reversed.push_back(block_at_[at(c)]);
    for (int k = child[at(c)]; k >= 0; k = sister[at(k)]) stack.push_back(k);
  }
  std::copy(reversed.rbegin(), reversed.rend(), block_at_.begin());
  for (std::size_t c = 0; c < n; ++c) position_[at(block_at_[c])] = static_cast<int>(c);
}

void BlockSystem::prepare(std::vector<int> sizes, std::vector<std::pair<int, int>> pairs) {
  size_ = std::move(sizes);
  row_.assign(1, 0);
  for (const int m : size_) row_.push_back(row_.back() + at(m));
  for (auto& [i, j] : pairs)
    if (i > j) std::swap(i, j);
  std::sort(pairs.begin(), pairs.end());
  pairs.erase(std::unique(pairs.begin(), pairs.end()), pairs.end());
  std::vector<std::vector<int>> neighbours(size_.size());
  for (const auto& [i, j] : pairs) {
    if (i == j) continue;
    neighbours[at(i)].push_back(j);
    neighbours[at(j)].push_back(i);
  }
  order(neighbours);
  eliminate_symbolically(neighbours);
  order_by_subtrees();
  eliminate_symbolically(neighbours);
}

void BlockSystem::clear() { std::fill(values_.begin(), values_.end(), Complex{}); }

std::size_t BlockSystem::entry(int column_position, int row_position) const {
  const auto begin = below_.begin() + static_cast<std::ptrdiff_t>(first_[at(column_position)]);
  const auto end = below_.begin() + static_cast<std::ptrdiff_t>(first_[at(column_position) + 1]);
  return static_cast<std::size_t>(std::lower_bound(begin, end, row_position) - below_.begin());
}

const Complex* BlockSystem::block(int position_a, int position_b, bool& transposed) const {
  transposed = position_a > position_b;
  if (position_a == position_b) return values_.data() + pivot_at_[at(position_a)];
  if (transposed) std::swap(position_a, position_b);
  return values_.data() + value_at_[entry(position_a, position_b)];
}

Complex* BlockSystem::block(int position_a, int position_b, bool& transposed) {
  return const_cast<Complex*>(std::as_const(*this).block(position_a, position_b, transposed));
}

std::size_t BlockSystem::place(int i, int row, int j, int column) const {
  bool transposed = false;
  const Complex* values = block(position_[at(i)], position_[at(j)], transposed);
  const auto first = static_cast<std::size_t>(values - values_.data());
  return first + (transposed ? at(column) * at(size(i)) + at(row) : at(row) * at(size(j)) + at(column));
}

bool BlockSystem::factor() {
  const int n = static_cast<int>(size_.size());
  std::vector<Complex> scaled, original;
  std::vector<std::size_t> start;
  scale_.resize(at(n));
  for (int c = 0; c < n; ++c) {
    const int m = size_[at(block_at_[at(c)])];
    const Complex* pivot = values_.data() + pivot_at_[at(c)];
    double largest = 0;
    for (int i = 0; i < m * m; ++i) largest = std::max(largest, std::norm(pivot[i]));
    scale_[at(c)] = std::sqrt(largest);
  }
  for (int c = 0; c < n; ++c) {
    const int m = size_[at(block_at_[at(c)])];
    Complex* pivot = values_.data() + pivot_at_[at(c)];
    if (m > 0 && !invert_block(pivot, m, scale_[at(c)], original)) {
      singular_ = block_at_[at(c)];
      return false;
    }
    const std::size_t begin = first_[at(c)];
    const std::size_t end = first_[at(c) + 1];
    if (begin == end) continue;
    // scaled: inverse(D_c) A_cq, which is L_qc', for every q below. What lies below loses A_qc of it.
    start.clear();
    std::size_t length = 0;
    for (std::size_t e = begin; e < end; ++e) {
      start.push_back(length);
      length += at(m) * at(size_[at(block_at_[at(below_[e])])]);
    }
    if (scaled.size() < length) scaled.resize(length);
    for (std::size_t e = begin; e < end; ++e)
      multiply(pivot, values_.data() + value_at_[e], m, size_[at(block_at_[at(below_[e])])],
               scaled.data() + start[e - begin]);
    for (std::size_t e = begin; e < end; ++e) {
      const int q = below_[e];
      const int mq = size_[at(block_at_[at(q)])];
      const Complex* left = scaled.data() + start[e - begin];
      for (std::size_t f = e; f < end; ++f) {
        const int r = below_[f];
        const int mr = size_[at(block_at_[at(r)])];
        bool transposed = false;
        Complex* target = block(q, r, transposed);  // q <= r: mq x mr
        const Complex* other = values_.data() + value_at_[f];
        for (int k = 0; k < m; ++k)
          for (int i = 0; i < mq; ++i) {
            const Complex s = left[k * mq + i];
            for (int j = 0; j < mr; ++j) target[i * mr + j] -= s * other[k * mr + j];
          }
      }
    }
    // Every product with A is done: L' takes its place.
    for (std::size_t e = begin; e < end; ++e) {
      const std::size_t size = at(m) * at(size_[at(block_at_[at(below_[e])])]);
      const Complex* l = scaled.data() + start[e - begin];
      std::copy(l, l + size, values_.data() + value_at_[e]);
    }
  }
  return true;
}

void BlockSystem::invert() {
  std::vector<Complex> column;
  std::vector<std::size_t> start;
  for (int c = static_cast<int>(size_.size()) - 1; c >= 0; --c) {
    const int m = size_[at(block_at_[at(c)])];
    const std::size_t begin = first_[at(c)];
    const std::size_t end = first_[at(c) + 1];
    if (begin == end) continue;
    // column: Z_cp for every p below, m x mp each; the factors L' are still in place.
    start.clear();
    std::size_t length = 0;
    for (std::size_t e = begin; e < end; ++e) {
      start.push_back(length);
      length += at(m) * at(size_[at(block_at_[at(below_[e])])]);
    }
    column.assign(length, Complex{});
    for (std::size_t e = begin; e < end; ++e) {
      const int p = below_[e];
      const int mp = size_[at(block_at_[at(p)])];
      Complex* z = column.data() + start[e - begin];
      for (std::size_t f = begin; f < end; ++f) {
        const int q = below_[f];
        const int mq = size_[at(block_at_[at(q)])];
        const Complex* l = values_.data() + value_at_[f];  // m x mq
        bool transposed = false;
        const Complex* zqp = block(q, p, transposed);  // mq x mp, or its transpose
        const int across = transposed ? 1 : mp;        // to the next row of Z_qp
        const int along = transposed ? mq : 1;
        for (int i = 0; i < m; ++i)
          for (int k = 0; k < mq; ++k) {
            const Complex s = l[i * mq + k];
            for (int j = 0; j < mp; ++j) z[i * mp + j] -= s * zqp[k * across + j * along];
          }
      }
    }
    Complex* pivot = values_.data() + pivot_at_[at(c)];
    for (std::size_t e = begin; e < end; ++e) {
      const int mp = size_[at(block_at_[at(below_[e])])];
      Complex* l = values_.data() + value_at_[e];
      const Complex* z = column.data() + start[e - begin];
      for (int i = 0; i < m; ++i)
        for (int k = 0; k < mp; ++k) {
          const Complex s = l[i * mp + k];
          for (int j = 0; j < m; ++j) pivot[i * m + j] -= s * z[j * mp + k];
        }
      std::copy(z, z + m * mp, l);
    }
  }
}

std::size_t BlockSystem::bytes() const noexcept {
  return values_.capacity() * sizeof(Complex) +
         (size_.capacity() + position_.capacity() + block_at_.capacity()) * sizeof(int) +
         below_.capacity() * sizeof(int) +
         (row_.capacity() + first_.capacity() + value_at_.capacity() + pivot_at_.capacity()) * sizeof(std::size_t);
}

std::vector<Complex> BlockSystem::times(const std::vector<Complex>& x) const {
  std::vector<Complex> y(x.size());
  for (std::size_t c = 0; c < size_.size(); ++c) {
    const int b = block_at_[c];
    const int m = size_[at(b)];
    const Complex* xc = x.data() + row_[at(b)];
    Complex* yc = y.data() + row_[at(b)];
    const Complex* pivot = values_.data() + pivot_at_[c];
    for (int i = 0; i < m; ++i)
      for (int j = 0; j < m; ++j) yc[i] += pivot[i * m + j] * xc[j];
    for (std::size_t e = first_[c]; e < first_[c + 1]; ++e) {
      const int q = block_at_[at(below_[e])];
      const int mq = size_[at(q)];
      const Complex* a = values_.data() + value_at_[e];
      for (int i = 0; i < m; ++i)
        for (int j = 0; j < mq; ++j) {
          yc[i] += a[i * mq + j] * x[row_[at(q)] + at(j)];
          y[row_[at(q)] + at(j)] += a[i * mq + j] * xc[i];
        }
    }
  }
  return y;
}

void BlockSystem::solve(std::vector<Complex>& x) const {
  const int n = static_cast<int>(size_.size());
  for (int c = 0; c < n; ++c) {  // L y = x
    const int m = size_[at(block_at_[at(c)])];
    const Complex* xc = x.data() + row_[at(block_at_[at(c)])];
    for (std::size_t e = first_[at(c)]; e < first_[at(c) + 1]; ++e) {
      const int q = block_at_[at(below_[e])];
      const int mq = size_[at(q)];
      const Complex* l = values_.data() + value_at_[e];
      Complex* xq = x.data() + row_[at(q)];
      for (int i = 0; i < m; ++i)
        for (int j = 0; j < mq; ++j) xq[j] -= l[i * mq + j] * xc[i];
    }
  }
  std::vector<Complex> part;
  for (int c = n - 1; c >= 0; --c) {  // L' z = inverse(D) y
    const int m = size_[at(block_at_[at(c)])];
    Complex* xc = x.data() + row_[at(block_at_[at(c)])];
    const Complex* pivot = values_.data() + pivot_at_[at(c)];
    part.assign(at(m), Complex{});
    for (int i = 0; i < m; ++i)
      for (int k = 0; k < m; ++k) part[at(i)] += pivot[i * m + k] * xc[k];
    for (std::size_t e = first_[at(c)]; e < first_[at(c) + 1]; ++e) {
      const int q = block_at_[at(below_[e])];
      const int mq = size_[at(q)];
      const Complex* l = values_.data() + value_at_[e];
      const Complex* xq = x.data() + row_[at(q)];
      for (int i = 0; i < m; ++i)
        for (int j = 0; j < mq; ++j) part[at(i)] -= l[i * mq + j] * xq[j];
    }
    std::copy(part.begin(), part.end(), xc);
  }
}

}  // namespace sunder::solver
