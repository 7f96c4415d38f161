// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/meshed_windings.h"

#include <catch2/catch.hpp>
#include <cmath>

namespace sunder::reference::meshed {

namespace {

using Current = Equations::Current;

const double kRoot3 = std::sqrt(3.0);
constexpr double kDegree = 3.14159265358979323846 / 180.0;

// How the secondary coils sit on the legs: the coil of terminal k on leg k + shift, wound with `sign`.
struct Seat {
  std::size_t shift = 0;
  double sign = 1;
};

// Voltage of each terminal of an unloaded secondary for a balanced primary, from the leg voltages of a turn.
Complex terminal_phasor(const std::string& primary, const std::string& secondary, Seat seat) {
  std::array<Complex, 3> line;
  for (std::size_t k = 0; k < 3; ++k) line[k] = std::polar(1.0, -120.0 * kDegree * static_cast<double>(k));
  std::array<Complex, 3> leg = line;
  if (primary == "D") {
    for (std::size_t k = 0; k < 3; ++k) leg[k] = line[k] - line[(k + 1) % 3];
  }
  const auto coil = [&](std::size_t k) { return seat.sign * leg[(k + seat.shift) % 3]; };
  if (secondary == "d") return (coil(0) - coil(2)) / 3.0;  // coil k lies between terminals k and k + 1
  if (secondary == "zn") return coil(0) - coil(1);
  return coil(0);
}

// The one way of connecting the coils that gives the clock number.
Seat seat_for(const Transformer& t) {
  for (const double sign : {1.0, -1.0}) {
    for (std::size_t shift = 0; shift < 3; ++shift) {
      const double lag = -std::arg(terminal_phasor(t.primary_group, t.secondary_group, {shift, sign})) / kDegree;
      const double off = std::remainder(lag - 30.0 * t.clock, 360.0);
      if (std::fabs(off) < 1.0) return {shift, sign};
    }
  }
  FAIL("no connection of the coils gives " << t.primary_group << t.secondary_group << t.clock);
  return {};
}

}  // namespace

Complex short_circuit_ohms(double uk, double losses, double rating, double secondary) {
  const double z = uk * secondary * secondary / rating;
  const double r = losses * secondary * secondary / (rating * rating);
  return {r, std::sqrt(z * z - r * r)};
}

WindingCurrents build_windings(Equations& eq, const Transformer& t, const WindingTerminals& terminals) {
  const Seat seat = seat_for(t);
  const Complex z1 = short_circuit_ohms(t.uk, t.losses, t.rating, t.secondary);
  const Complex z0{z1.real() * t.r0_over_r1, z1.imag() * t.x0_over_x1};
  const std::array<int, 3> legs{eq.leg(), eq.leg(), eq.leg()};
  WindingCurrents currents;

  const bool primary_delta = t.primary_group == "D";
  const double primary_turns = t.primary * (1.0 + t.tap) / (primary_delta ? 1.0 : kRoot3);
  for (std::size_t k = 0; k < 3; ++k) {
    const int end = primary_delta ? terminals.primary[(k + 1) % 3] : terminals.primary_star;
    const Current coil = eq.winding(legs[k], primary_turns, terminals.primary[k], end, 0.0);
    currents.primary[k] = currents.primary[k] + coil;
    if (primary_delta) currents.primary[(k + 1) % 3] = currents.primary[(k + 1) % 3] + coil.times(-1.0);
  }

  // Currents of the secondary coils run from their start (at the terminal) to their end: into the transformer.
  const bool secondary_delta = t.secondary_group == "d";
  const auto leg_of = [&](std::size_t k) { return legs[(k + seat.shift) % 3]; };
  if (secondary_delta) {
    for (std::size_t k = 0; k < 3; ++k) {
      const std::size_t next = (k + 1) % 3;
      const Current coil =
          eq.winding(leg_of(k), seat.sign * t.secondary, terminals.secondary[k], terminals.secondary[next], 3.0 * z1);
      currents.secondary[k] = currents.secondary[k] + coil.times(-1.0);
      currents.secondary[next] = currents.secondary[next] + coil;
    }
  } else {
    const int common = eq.node();
    eq.carrier(common, terminals.secondary_star, (z0 - z1) / 3.0);
    for (std::size_t k = 0; k < 3; ++k) {
      int inner = terminals.secondary[k];
      double turns = seat.sign * t.secondary / kRoot3;
      Complex ohms = z1;
      if (t.secondary_group == "zn") {  // the other half sits the other way round on the next leg
        turns = seat.sign * t.secondary / 3.0;
        ohms = z1 / 2.0;
        inner = eq.node();
        eq.winding(leg_of(k + 1), -turns, terminals.secondary[k], inner, ohms);
      }
      currents.secondary[k] = eq.winding(leg_of(k), turns, inner, common, ohms).times(-1.0);
    }
  }
  if (t.primary_group == "Y" && !secondary_delta) eq.closed_core(legs);
  return currents;
}

std::pair<Complex, Complex> source_ohms(const Network& network, const Source& source, Condition condition) {
  const bool greatest = condition == Condition::maximum;
  const Board& board = network.boards[static_cast<std::size_t>(source.board)];
  switch (source.kind) {
    case Source::Kind::supply: {
      const std::size_t i = greatest ? 0 : 1;
      return {source.z1[i] * 1e-3, source.z0[i] * 1e-3};
    }
    case Source::Kind::transformer: {
      const Complex zt = short_circuit_ohms(source.uk, source.losses, source.rating, source.secondary);
      const double level = greatest ? source.level_max : source.level_min;
      const double zq = (greatest ? 1.1 : 1.0) * source.secondary * source.secondary / level;
      const double xq = zq / std::sqrt(1.01);  // R = X / 10
      return {zt + Complex{0.1 * xq, xq}, {zt.real() * source.r0_over_r1, zt.imag() * source.x0_over_x1}};
    }
    case Source::Kind::generator: {
      const double base = board.U * board.U / source.rating;
      if (greatest) return {Complex{source.r, source.xd_subtransient} * base, Complex{source.r, source.x0} * base};
      // Its sustained current, by reactances alone.
      return {Complex{0, source.sustained > 0 ? base / source.sustained : base * source.xd},
              Complex{0, base * source.x0}};
    }
  }
  return {};
}

}  // namespace sunder::reference::meshed
