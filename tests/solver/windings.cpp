// SPDX-License-Identifier: Apache-2.0
// Every vector group and clock number, by what IEC 60076-1 says of them: no-load ratio and phase shift,
// and by the impedances that the sequences of the secondary meet.
#include "solver/windings.h"

#include <Eigen/Eigenvalues>
#include <Eigen/QR>
#include <algorithm>
#include <array>
#include <catch2/catch.hpp>
#include <numbers>

using namespace sunder;
using models::Winding;
using solver::Complex;

namespace {

constexpr std::array<Winding, 5> kWindings{Winding::star, Winding::star_earthed, Winding::delta, Winding::zigzag,
                                           Winding::zigzag_earthed};
constexpr std::array<const char*, 5> kLetters{"Y", "YN", "D", "Z", "ZN"};
const Complex kZ1{0.011, 0.037};
const Complex kZ0{0.017, 0.029};

struct Group {
  models::Transformer transformer;
  std::string name;
};

std::vector<Group> groups() {
  std::vector<Group> all;
  for (std::size_t p = 0; p < kWindings.size(); ++p)
    for (std::size_t s = 0; s < kWindings.size(); ++s)
      for (int clock = 0; clock < 12; ++clock) {
        if (!solver::clock_possible(kWindings[p], kWindings[s], clock)) continue;
        Group group;
        group.transformer.primary_winding = kWindings[p];
        group.transformer.secondary_winding = kWindings[s];
        group.transformer.clock = clock;
        group.transformer.primary = 11000;
        group.transformer.secondary = 433;
        group.transformer.tap = 0.05;
        group.name = std::string(kLetters[p]) + kLetters[s] + std::to_string(clock);
        all.push_back(group);
      }
  return all;
}

// Volts of the primary per volt of the secondary.
double turns(const models::Transformer& t) { return t.primary * (1 + t.tap) / t.secondary; }

// Three phasors of a sequence: 1 positive, 2 negative, 0 zero.
Eigen::Vector3cd sequence(int which) {
  Eigen::Vector3cd v;
  for (int k = 0; k < 3; ++k) v(k) = std::polar(1.0, -2.0 * std::numbers::pi / 3.0 * k * which);
  return v;
}

// Parts of the admittances between the lines of the two sides, star points at potential zero.
struct Lines {
  Eigen::Matrix3cd pp, ps, sp, ss;
};

Lines lines(const solver::WindingModel& m) {
  const int s = m.secondary_first();
  return {m.y.block<3, 3>(0, 0), m.y.block<3, 3>(0, s), m.y.block<3, 3>(s, 0), m.y.block<3, 3>(s, s)};
}

// Potentials of least norm where a delta or an open star leaves their mean open.
Eigen::Vector3cd solve(const Eigen::Matrix3cd& y, const Eigen::Vector3cd& i) {
  Eigen::CompleteOrthogonalDecomposition<Eigen::Matrix3cd> cod;
  cod.setThreshold(1e-10);
  cod.compute(y);
  return cod.solve(i);
}

double apart(const Eigen::Vector3cd& a, const Eigen::Vector3cd& b) {
  return (a - b).cwiseAbs().maxCoeff() / b.cwiseAbs().maxCoeff();
}

}  // namespace

TEST_CASE("A clock number is even between equal kinds of windings and odd between a star and the others",
          "[windings]") {
  CHECK(solver::clock_possible(Winding::delta, Winding::star_earthed, 11));
  CHECK_FALSE(solver::clock_possible(Winding::delta, Winding::star_earthed, 0));
  CHECK(solver::clock_possible(Winding::star, Winding::star_earthed, 6));
  CHECK_FALSE(solver::clock_possible(Winding::star, Winding::star_earthed, 5));
  CHECK(solver::clock_possible(Winding::star, Winding::zigzag_earthed, 5));
  CHECK(solver::clock_possible(Winding::delta, Winding::zigzag_earthed, 0));
  CHECK(solver::clock_possible(Winding::delta, Winding::delta, 10));
  CHECK_FALSE(solver::clock_possible(Winding::delta, Winding::delta, 12));
  CHECK_FALSE(solver::clock_possible(Winding::delta, Winding::delta, -2));
  CHECK(groups().size() == 25 * 6);
}

TEST_CASE("Open, the secondary has its rated voltage turned by the clock number", "[windings]") {
  for (const Group& group : groups()) {
    const models::Transformer& t = group.transformer;
    const Lines y = lines(solver::winding_model(t, kZ1, kZ0));
    for (const int turn : {1, 2}) {
      const Eigen::Vector3cd primary = sequence(turn);
      const Eigen::Vector3cd secondary = solve(y.ss, -y.sp * primary);
      // A negative sequence is turned the other way.
      const double angle = -t.clock * std::numbers::pi / 6.0 * (turn == 1 ? 1 : -1);
      const Eigen::Vector3cd expected = primary * std::polar(1.0 / turns(t), angle);
      INFO(group.name << " sequence " << turn);
      CHECK(apart(secondary, expected) < 1e-9);
      // No load, no current on either side.
      const Eigen::Vector3cd drawn = y.pp * primary + y.ps * secondary;
      CHECK(drawn.cwiseAbs().maxCoeff() < 1e-9 * (y.pp * primary).cwiseAbs().maxCoeff());
    }
  }
}

TEST_CASE("Seen from the secondary a shorted primary is z1 in the positive and in the negative sequence",
          "[windings]") {
  for (const Group& group : groups()) {
    const Lines y = lines(solver::winding_model(group.transformer, kZ1, kZ0));
    for (const int turn : {1, 2}) {
      INFO(group.name << " sequence " << turn);
      CHECK(apart(solve(y.ss, sequence(turn)), kZ1 * sequence(turn)) < 1e-9);
    }
  }
}

TEST_CASE("Seen from the primary a shorted secondary is z1 times the square of the turns ratio", "[windings]") {
  for (const Group& group : groups()) {
    const double k = turns(group.transformer);
    const Lines y = lines(solver::winding_model(group.transformer, kZ1, kZ0));
    INFO(group.name);
    CHECK(apart(solve(y.pp, sequence(1)), kZ1 * k * k * sequence(1)) < 1e-9);
  }
}

TEST_CASE("Zero sequence finds z0 at a star point brought out and nothing elsewhere", "[windings]") {
  for (const Group& group : groups()) {
    const models::Transformer& t = group.transformer;
    const solver::WindingModel m = solver::winding_model(t, kZ1, kZ0);
    const Lines y = lines(m);
    const Eigen::Vector3cd ones = Eigen::Vector3cd::Ones();
    const double scale = y.ss.cwiseAbs().maxCoeff();
    const bool out = t.secondary_winding == Winding::star_earthed || t.secondary_winding == Winding::zigzag_earthed;
    INFO(group.name);
    CHECK(m.secondary_star == out);
    CHECK(m.primary_star ==
          (t.primary_winding == Winding::star_earthed || t.primary_winding == Winding::zigzag_earthed));
    if (out) {
      // All the groups have a way for it: a delta, a zigzag, an earthed star that is shorted here, or the core.
      CHECK(apart(solve(y.ss, ones), kZ0 * ones) < 1e-9);
    } else {
      CHECK((y.ss * ones).cwiseAbs().maxCoeff() < 1e-9 * scale);
    }
    // To the primary lines it passes only between two earthed stars.
    const bool passes = t.primary_winding == Winding::star_earthed && t.secondary_winding == Winding::star_earthed;
    const double through = (y.ps * ones).cwiseAbs().maxCoeff();
    if (passes) {
      CHECK(through > 1e-3 * y.ps.cwiseAbs().maxCoeff());
    } else {
      CHECK(through < 1e-9 * y.ps.cwiseAbs().maxCoeff());
    }
  }
}

TEST_CASE("An earthed star above a delta or beside an earthed star shows z0 to the primary", "[windings]") {
  for (const Group& group : groups()) {
    const models::Transformer& t = group.transformer;
    if (t.primary_winding != Winding::star_earthed) continue;
    const Lines y = lines(solver::winding_model(t, kZ1, kZ0));
    const Eigen::Vector3cd ones = Eigen::Vector3cd::Ones();
    const Eigen::Vector3cd drawn = y.pp * ones;
    INFO(group.name);
    const bool short_circuited = t.secondary_winding == Winding::delta || t.secondary_winding == Winding::star_earthed;
    if (short_circuited) {
      CHECK(apart(drawn, ones / (kZ0 * turns(t) * turns(t))) < 1e-9);
    } else {
      CHECK(drawn.cwiseAbs().maxCoeff() < 1e-9 * y.pp.cwiseAbs().maxCoeff());
    }
  }
}

TEST_CASE("Every model is reciprocal, passive in its sums and knows no potential of its own", "[windings]") {
  for (const Group& group : groups()) {
    const solver::WindingModel m = solver::winding_model(group.transformer, kZ1, kZ0);
    const double scale = m.y.cwiseAbs().maxCoeff();
    INFO(group.name);
    REQUIRE(m.y.rows() == 6 + (m.primary_star ? 1 : 0) + (m.secondary_star ? 1 : 0));
    CHECK((m.y - m.y.transpose()).cwiseAbs().maxCoeff() < 1e-12 * scale);
    // The potential of a whole side moves no current: its sums vanish.
    const int s = m.secondary_first();
    CHECK(m.y.leftCols(s).rowwise().sum().cwiseAbs().maxCoeff() < 1e-12 * scale);
    CHECK(m.y.rightCols(m.y.cols() - s).rowwise().sum().cwiseAbs().maxCoeff() < 1e-12 * scale);
    // Resistances only consume.
    const Eigen::MatrixXd g = (m.y.real() + m.y.real().transpose()) / 2;
    const Eigen::VectorXd values = Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd>(g).eigenvalues();
    CHECK(values.minCoeff() > -1e-12 * scale);
  }
}

TEST_CASE("A star-star unit without zero-sequence data keeps its star point out of reach", "[windings]") {
  models::Transformer t;
  t.primary_winding = Winding::star;
  t.secondary_winding = Winding::star_earthed;
  t.clock = 0;
  t.primary = 11000;
  t.secondary = 400;
  const solver::WindingModel m = solver::winding_model(t, kZ1, {models::kNotGiven, 0});
  CHECK_FALSE(m.secondary_star);
  CHECK(m.y.allFinite());
  CHECK((lines(m).ss * Eigen::Vector3cd::Ones()).cwiseAbs().maxCoeff() < 1e-9 * m.y.cwiseAbs().maxCoeff());
  CHECK(apart(solve(lines(m).ss, sequence(1)), kZ1 * sequence(1)) < 1e-9);
}

TEST_CASE("Currents of a Dyn unit are 2:1:1 above a fault between lines and 1:1:0 above one to the star",
          "[windings]") {
  // The classical pattern of a delta above a star, here by the admittances alone, the primary held at zero.
  for (const int clock : {1, 5, 7, 11}) {
    models::Transformer t;
    t.clock = clock;
    t.primary = 11000;
    t.secondary = 400;
    const Lines y = lines(solver::winding_model(t, kZ1, kZ0));
    auto primary = [&](const Eigen::Vector3cd& secondary) {
      Eigen::Vector3d amps = (y.ps * solve(y.ss, secondary)).cwiseAbs();
      std::sort(amps.data(), amps.data() + 3);
      return amps;
    };
    const double k = turns(t);
    const Eigen::Vector3d between = primary({1.0, -1.0, 0.0});
    CHECK(between(2) == Approx(2 / k / std::numbers::sqrt3));
    CHECK(between(1) == Approx(1 / k / std::numbers::sqrt3));
    CHECK(between(0) == Approx(1 / k / std::numbers::sqrt3));
    const Eigen::Vector3d to_star = primary({1.0, 0.0, 0.0});
    CHECK(to_star(2) == Approx(1 / k / std::numbers::sqrt3));
    CHECK(to_star(1) == Approx(1 / k / std::numbers::sqrt3));
    CHECK(to_star(0) < 1e-12);
  }
}
