// SPDX-License-Identifier: Apache-2.0
#include "solver/fault_loops.h"

#include <Eigen/LU>
#include <algorithm>
#include <numbers>

namespace sunder::solver {
namespace {

using models::Conductor;
using enum models::Conductor;

FaultLoops loop(Conductor from, Conductor to, const char* phases) {
  FaultLoops result;
  result.f(static_cast<int>(index(from)), 0) = 1;
  result.f(static_cast<int>(index(to)), 0) = -1;
  result.n = 1;
  result.needs = {from, to};
  result.phases = phases;
  return result;
}

FaultLoops to_earth(Conductor from, const char* phases) {
  FaultLoops result;
  result.f(static_cast<int>(index(from)), 0) = 1;
  result.n = 1;
  result.needs = {from};
  result.phases = phases;
  return result;
}

FaultLoops two(const FaultLoops& a, const FaultLoops& b, const char* phases) {
  FaultLoops both = a;
  both.f.col(1) = b.f.col(0);
  both.n = 2;
  for (const Conductor c : {L1, L2, L3, N, PE})
    if (b.needs.has(c)) both.needs.add(c);
  both.phases = phases;
  return both;
}

}  // namespace

const std::vector<FaultLoops>& fault_choices(Fault fault, bool to_reference) {
  static const std::vector<FaultLoops> earth{loop(L1, PE, "L1-PE"), loop(L2, PE, "L2-PE"), loop(L3, PE, "L3-PE")};
  static const std::vector<FaultLoops> reference{to_earth(L1, "L1-earth"), to_earth(L2, "L2-earth"),
                                                 to_earth(L3, "L3-earth")};
  static const std::vector<FaultLoops> neutral{loop(L1, N, "L1-N"), loop(L2, N, "L2-N"), loop(L3, N, "L3-N")};
  static const std::vector<FaultLoops> lines{loop(L1, L2, "L1-L2"), loop(L2, L3, "L2-L3"), loop(L3, L1, "L3-L1")};
  static const std::vector<FaultLoops> three{two(lines[0], lines[1], "L1-L2-L3")};
  static const std::vector<FaultLoops> two_earth{
      two(earth[0], earth[1], "L1-L2-PE"), two(earth[1], earth[2], "L2-L3-PE"), two(earth[2], earth[0], "L3-L1-PE")};
  static const std::vector<FaultLoops> two_reference{two(reference[0], reference[1], "L1-L2-earth"),
                                                     two(reference[1], reference[2], "L2-L3-earth"),
                                                     two(reference[2], reference[0], "L3-L1-earth")};
  switch (fault) {
    case Fault::line_earth:
      return to_reference ? reference : earth;
    case Fault::two_lines_earth:
      return to_reference ? two_reference : two_earth;
    case Fault::line_neutral:
      return neutral;
    case Fault::line_line:
      return lines;
    case Fault::three_phase:
      break;
  }
  return three;
}

LoopCurrents solve_loops(const FaultLoops& loops, const ConductorMatrix& z, double volts, Complex through, bool opposed,
                         bool most) {
  LoopCurrents result;
  if (loops.n == 1) {
    const Eigen::Matrix<double, 5, 1> f = loops.f.col(0);
    result.loop = (f.transpose() * z * f)(0, 0) + through;
    result.amps = volts / std::abs(result.loop);
    result.conductors = f * (volts / result.loop);
    return result;
  }
  Eigen::Matrix2cd loop = loops.f.transpose() * z * loops.f;
  result.loop = loop(0, 0) / 2.0 + through;
  // The same impedance in each line's way to the common point.
  const Eigen::Matrix<double, 3, 2> lines = loops.f.topRows<3>();
  loop += through * (lines.transpose() * lines).cast<Complex>();
  Eigen::Matrix<Complex, 5, 1> e = Eigen::Matrix<Complex, 5, 1>::Zero();
  const double turn = opposed ? std::numbers::pi : 2.0 * std::numbers::pi / 3.0;
  for (int line = 0; line < 3; ++line) e(line) = std::polar(volts, -turn * line);
  const Eigen::Vector2cd j = loop.inverse() * (loops.f.transpose() * e);
  result.conductors = loops.f * j;
  const bool to_earth = loops.n == 2 && loops.f.topRows<3>().colwise().sum().cwiseAbs().minCoeff() > 0;
  for (int line = 0; line < 3; ++line) {
    if ((loops.f.row(line).array() == 0).all()) continue;
    const double amps = std::abs(result.conductors(line));
    const bool better = result.amps == 0 || (most ? amps > result.amps : amps < result.amps);
    if (!better) continue;
    result.amps = amps;
    // Two lines to earth share no one loop: what the line's voltage meets is told.
    if (to_earth) result.loop = e(line) / result.conductors(line);
  }
  return result;
}

}  // namespace sunder::solver
