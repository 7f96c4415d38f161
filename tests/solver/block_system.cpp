// SPDX-License-Identifier: Apache-2.0
#include "solver/block_system.h"

#include <Eigen/LU>
#include <catch2/catch.hpp>
#include <random>
#include <set>

using namespace sunder::solver;

namespace {

using Complex = BlockSystem::Complex;
using Pairs = std::vector<std::pair<int, int>>;

// A system and the same numbers as one dense matrix.
struct Twin {
  BlockSystem blocks;
  Eigen::MatrixXcd dense;
  std::vector<int> sizes;
  Pairs pairs;
};

class Random {
 public:
  explicit Random(unsigned seed) : engine_(seed) {}
  int below(int n) { return std::uniform_int_distribution<int>(0, n - 1)(engine_); }
  double real(double low, double high) { return std::uniform_real_distribution<double>(low, high)(engine_); }
  Complex complex() { return {real(-1, 1), real(-1, 1)}; }

 private:
  std::mt19937 engine_;
};

enum class Shape { tree, ring, mesh };

Pairs couples(Shape shape, int n, Random& random) {
  Pairs pairs;
  for (int i = 1; i < n; ++i) {
    const int other = shape == Shape::ring ? i - 1 : random.below(i);
    pairs.emplace_back(i, other);
    if (random.below(4) == 0) pairs.emplace_back(other, i);  // a pair may be named again
  }
  if (shape == Shape::ring) pairs.emplace_back(0, n - 1);
  if (shape == Shape::mesh)
    for (int i = 0; i < n; ++i) {
      const int a = random.below(n);
      const int b = random.below(n);
      if (a != b) pairs.emplace_back(a, b);
    }
  return pairs;
}

// Symmetric and complex, not Hermitian, its diagonal heavy enough to be far from singular.
void set_values(Twin& twin, Random& random) {
  const auto rows = static_cast<Eigen::Index>(twin.blocks.rows());
  twin.dense = Eigen::MatrixXcd::Zero(rows, rows);
  twin.blocks.clear();
  auto put = [&](int i, int r, int j, int c, Complex y) {
    twin.blocks.add(i, r, j, c, y);
    const auto a = static_cast<Eigen::Index>(twin.blocks.offset(i)) + r;
    const auto b = static_cast<Eigen::Index>(twin.blocks.offset(j)) + c;
    twin.dense(a, b) += y;
    if (i != j) twin.dense(b, a) += y;
  };
  for (std::size_t i = 0; i < twin.sizes.size(); ++i)
    for (int r = 0; r < twin.sizes[i]; ++r)
      for (int c = 0; c <= r; ++c) {
        const auto k = static_cast<int>(i);
        const Complex y = r == c ? Complex{12, 9} + random.complex() : random.complex();
        put(k, r, k, c, y);
        if (r != c) put(k, c, k, r, y);
      }
  for (const auto& [i, j] : twin.pairs)
    for (int r = 0; r < twin.sizes[static_cast<std::size_t>(i)]; ++r)
      for (int c = 0; c < twin.sizes[static_cast<std::size_t>(j)]; ++c)
        if (random.below(3) != 0) put(i, r, j, c, 0.4 * random.complex());
}

Twin twin_of(Shape shape, int n, Random& random) {
  Twin twin;
  for (int i = 0; i < n; ++i) twin.sizes.push_back(random.below(9) == 0 ? 0 : 1 + random.below(6));
  twin.pairs = couples(shape, n, random);
  twin.blocks.prepare(twin.sizes, twin.pairs);
  set_values(twin, random);
  return twin;
}

double worst_inverse(const Twin& twin, const Eigen::MatrixXcd& inverse) {
  std::set<std::pair<int, int>> places(twin.pairs.begin(), twin.pairs.end());
  for (const auto& [i, j] : twin.pairs) places.emplace(j, i);
  for (int i = 0; i < static_cast<int>(twin.sizes.size()); ++i) places.emplace(i, i);
  double worst = 0;
  for (const auto& [i, j] : places)
    for (int r = 0; r < twin.sizes[static_cast<std::size_t>(i)]; ++r)
      for (int c = 0; c < twin.sizes[static_cast<std::size_t>(j)]; ++c) {
        const auto a = static_cast<Eigen::Index>(twin.blocks.offset(i)) + r;
        const auto b = static_cast<Eigen::Index>(twin.blocks.offset(j)) + c;
        worst = std::max(worst, std::abs(twin.blocks.inverse(i, r, j, c) - inverse(a, b)));
      }
  return worst / inverse.cwiseAbs().maxCoeff();
}

}  // namespace

TEST_CASE("The blocks of the inverse on the pattern are those of a dense inverse", "[blocks]") {
  const Shape shape = GENERATE(Shape::tree, Shape::ring, Shape::mesh);
  Random random(GENERATE(range(1U, 13U)));
  Twin twin = twin_of(shape, 2 + random.below(40), random);
  REQUIRE(twin.blocks.factor());
  twin.blocks.invert();
  CHECK(worst_inverse(twin, twin.dense.inverse()) < 1e-12);
}

TEST_CASE("Values may be set again on the same graph", "[blocks]") {
  Random random(77);
  Twin twin = twin_of(Shape::mesh, 25, random);
  for (int time = 0; time < 3; ++time) {
    set_values(twin, random);
    REQUIRE(twin.blocks.factor());
    twin.blocks.invert();
    CHECK(worst_inverse(twin, twin.dense.inverse()) < 1e-12);
  }
}

TEST_CASE("A solution is that of a dense solver", "[blocks]") {
  const Shape shape = GENERATE(Shape::tree, Shape::ring, Shape::mesh);
  Random random(GENERATE(range(101U, 107U)));
  Twin twin = twin_of(shape, 2 + random.below(40), random);
  REQUIRE(twin.blocks.factor());
  std::vector<Complex> x(twin.blocks.rows());
  for (Complex& each : x) each = random.complex();
  const Eigen::VectorXcd right = Eigen::Map<const Eigen::VectorXcd>(x.data(), static_cast<Eigen::Index>(x.size()));
  twin.blocks.solve(x);
  const Eigen::VectorXcd left = Eigen::Map<const Eigen::VectorXcd>(x.data(), right.size());
  CHECK((twin.dense * left - right).cwiseAbs().maxCoeff() < 1e-12 * twin.dense.cwiseAbs().maxCoeff());
}

TEST_CASE("A pivot block whose diagonal vanishes is no trouble while the block is regular", "[blocks]") {
  // Two conductors that are coupled only to one another: [[0, y], [y, 0]].
  BlockSystem system;
  system.prepare({2, 1}, {{0, 1}});
  system.clear();
  const Complex y{3, 4};
  system.add(0, 0, 0, 1, y);
  system.add(0, 1, 0, 0, y);
  system.add(1, 0, 1, 0, 2.0);
  REQUIRE(system.factor());
  system.invert();
  CHECK(std::abs(system.inverse(0, 0, 0, 1) - 1.0 / y) < 1e-15);
  CHECK(std::abs(system.inverse(0, 0, 0, 0)) < 1e-15);
  CHECK(std::abs(system.inverse(1, 0, 1, 0) - 0.5) < 1e-15);
}

TEST_CASE("A singular block is named", "[blocks]") {
  BlockSystem system;
  system.prepare({1, 2, 1}, {{0, 1}, {1, 2}});
  system.clear();
  system.add(0, 0, 0, 0, 1.0);
  system.add(2, 0, 2, 0, 1.0);
  for (const int r : {0, 1})
    for (const int c : {0, 1}) system.add(1, r, 1, c, 5.0);
  CHECK_FALSE(system.factor());
  CHECK(system.singular() == 1);
}

TEST_CASE("A part without any value is singular and named", "[blocks]") {
  BlockSystem system;
  system.prepare({2, 3}, {});
  system.clear();
  system.add(0, 0, 0, 0, 1.0);
  system.add(0, 1, 0, 1, 1.0);
  CHECK_FALSE(system.factor());
  CHECK(system.singular() == 1);
}

TEST_CASE("A long chain fills in nothing and keeps its accuracy", "[blocks]") {
  // 20 000 equal runs of 1 ohm in series, the first block tied by 1 S: potential i + 1 ohm at block i.
  const int n = 20000;
  std::vector<int> sizes(static_cast<std::size_t>(n), 1);
  Pairs pairs;
  for (int i = 1; i < n; ++i) pairs.emplace_back(i - 1, i);
  BlockSystem system;
  system.prepare(sizes, pairs);
  system.clear();
  system.add(0, 0, 0, 0, 1.0);
  for (int i = 1; i < n; ++i) {
    system.add(i, 0, i, 0, 1.0);
    system.add(i - 1, 0, i - 1, 0, 1.0);
    system.add(i - 1, 0, i, 0, -1.0);
  }
  REQUIRE(system.factor());
  const std::size_t held = system.bytes();
  system.invert();
  CHECK(std::abs(system.inverse(n - 1, 0, n - 1, 0) - static_cast<double>(n)) < 1e-6);
  CHECK(std::abs(system.inverse(0, 0, 1, 0) - 1.0) < 1e-9);
  CHECK(held < static_cast<std::size_t>(n) * 100);
}
