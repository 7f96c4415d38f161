// SPDX-License-Identifier: Apache-2.0
/// @file
/// A symmetric system of small dense blocks on a sparse graph, complex and not Hermitian: factors
/// without conjugation, those blocks of its inverse that lie on the graph, and solutions.
#pragma once

#include <complex>
#include <cstddef>
#include <vector>

namespace sunder::solver {

/// A = L D L' with block pivots, ' being the plain transpose. Leaves of the graph are eliminated
/// first, so that on a tree nothing fills in and the work is linear; what remains follows in an
/// approximate minimum degree order (Eigen). Then, backwards, the blocks of Z = inverse(A) that lie
/// on the pattern of L (Takahashi):
///
///     Z_pc = - sum_q Z_pq L_qc,     Z_cc = inverse(D_c) - sum_q L_qc' Z_qc,     q in the column of c
///
/// The order depends on the graph alone: values may be set again for another condition.
class BlockSystem {
 public:
  using Complex = std::complex<double>;

  /// @param sizes  rows of each block, >= 0
  /// @param pairs  blocks that are coupled, each pair once or more, in any order
  void prepare(std::vector<int> sizes, std::vector<std::pair<int, int>> pairs);

  [[nodiscard]] std::size_t blocks() const noexcept { return size_.size(); }
  [[nodiscard]] int size(int block) const noexcept { return size_[static_cast<std::size_t>(block)]; }

  /// All values to zero.
  void clear();
  /// Adds to entry (row, column) of blocks (i, j) and, off the diagonal block, to its mirror image.
  /// Within one block both (r, c) and (c, r) are to be added. i, j equal or prepared as a pair.
  void add(int i, int row, int j, int column, Complex value) { values_[place(i, row, j, column)] += value; }

  /// Where that entry is kept, for those who come again; the values at such places.
  [[nodiscard]] std::size_t place(int i, int row, int j, int column) const;
  [[nodiscard]] Complex& value(std::size_t place) { return values_[place]; }
  [[nodiscard]] const Complex& value(std::size_t place) const { return values_[place]; }

  /// Factors. @return false where a pivot block is singular (`singular()` tells which)
  [[nodiscard]] bool factor();
  [[nodiscard]] int singular() const noexcept { return singular_; }

  /// Blocks of the inverse on the pattern, in place of the factors: after it `solve` is not possible.
  void invert();

  /// Entry of the inverse. Precondition: invert(); i, j equal or on the pattern.
  [[nodiscard]] Complex inverse(int i, int row, int j, int column) const { return values_[place(i, row, j, column)]; }

  /// x := inverse(A) x, x by block in the order of blocks. Precondition: factor(), not yet invert().
  void solve(std::vector<Complex>& x) const;

  /// A x. Precondition: values set, not yet factor().
  [[nodiscard]] std::vector<Complex> times(const std::vector<Complex>& x) const;

  /// First entry of a block in a vector.
  [[nodiscard]] std::size_t offset(int block) const noexcept { return row_[static_cast<std::size_t>(block)]; }
  /// Bytes held.
  [[nodiscard]] std::size_t bytes() const noexcept;
  [[nodiscard]] std::size_t rows() const noexcept { return row_.empty() ? 0 : row_.back(); }

 private:
  void order(const std::vector<std::vector<int>>& neighbours);
  void order_by_subtrees();
  void eliminate_symbolically(const std::vector<std::vector<int>>& neighbours);
  [[nodiscard]] std::size_t entry(int column_position, int row_position) const;
  [[nodiscard]] Complex* block(int position_a, int position_b, bool& transposed);
  [[nodiscard]] const Complex* block(int position_a, int position_b, bool& transposed) const;

  // Everything below is by position in the order of elimination.
  std::vector<int> size_;              // by block
  std::vector<std::size_t> row_;       // by block, and the end
  std::vector<int> position_;          // of each block
  std::vector<int> block_at_;          // at each position
  std::vector<std::size_t> first_;     // into below_, of each position, and the end
  std::vector<int> below_;             // positions coupled to a column, ascending, all later
  std::vector<std::size_t> value_at_;  // of each entry of below_, into values_
  std::vector<std::size_t> pivot_at_;  // of each position, into values_
  std::vector<Complex> values_;        // blocks by rows: pivots m_c x m_c, others m_c x m_q (row of c, column of q)
  std::vector<double> scale_;          // largest entry of each pivot block before elimination
  int singular_ = -1;
};

}  // namespace sunder::solver
