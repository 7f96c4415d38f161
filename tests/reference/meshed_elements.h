// SPDX-License-Identifier: Apache-2.0
/// @file
/// Single elements of a network, drawn from a written seed.
#pragma once

#include <cmath>
#include <initializer_list>
#include <random>
#include <string>
#include <vector>

#include "tests/reference/meshed.h"

namespace sunder::reference::meshed {

inline constexpr Has kHigh{true, true, true, false, false};
inline constexpr Has kAll{true, true, true, true, true};
inline constexpr Has kNoNeutral{true, true, true, false, true};
inline constexpr Has kNoPE{true, true, true, true, false};

/// What belongs together below 1 kV.
struct Part {
  Earthing earthing = Earthing::tn_s;
  double U = 400, U0 = 230;
  std::vector<int> boards;  // all of them
  std::vector<int> full;    // those with all five conductors
  std::vector<int> pen;     // those up to which the neutral may be the protective conductor
  bool apart = false;       // N and PE run apart from the star point on
};

class Elements {
 protected:
  explicit Elements(unsigned seed) : engine_(seed) {}

  // The standard fixes what the engine gives, not what distributions make of it.
  int below(int n) { return static_cast<int>(engine_() % static_cast<unsigned>(n)); }
  bool chance(int percent) { return below(100) < percent; }
  template <typename T>
  T one_of(std::initializer_list<T> choices) {
    return *(choices.begin() + below(static_cast<int>(choices.size())));
  }
  // Four digits, as somebody would type it.
  double between(double least, double most) {
    const double drawn = least + (most - least) * below(10001) / 10000.0;
    const double unit = std::pow(10.0, std::floor(std::log10(drawn)) - 3.0);
    return std::round(drawn / unit) * unit;
  }
  Complex impedance(double least, double most, double least_x_over_r, double most_x_over_r) {
    const double r = between(least, most);
    return {r, between(r * least_x_over_r, r * most_x_over_r)};
  }

  [[nodiscard]] bool room(int nodes = 1) const { return count_nodes(n_) + nodes <= most_nodes_; }
  Board& board(int i) { return n_.boards[static_cast<std::size_t>(i)]; }
  int add_board(double U, double U0, bool high, const Has& has) {
    n_.boards.push_back({"B" + std::to_string(n_.boards.size()), U, U0, high, has, false});
    return static_cast<int>(n_.boards.size()) - 1;
  }
  // Supplies come first in a file, then transformers, then generators; names sort the same way.
  std::string name(const char* prefix) {
    const int number = 10 + ++count_;
    return prefix + std::to_string(number);
  }

  void add_high_run(int from, int to) {
    Run run;
    run.name = name("H");
    run.from = from;
    run.to = to;
    run.has = kHigh;
    run.length.metres = between(200, 6000);
    run.sequence = true;
    run.z1 = impedance(0.1, 0.4, 0.3, 1.5);
    run.z0 = {run.z1.real() + 0.15, between(run.z1.imag() * 2.0, run.z1.imag() * 4.0)};
    run.through = Return::earth;
    n_.runs.push_back(run);
  }

  void add_high_supply(int at) {
    Source s;
    s.name = name("A");
    s.board = at;
    s.earthing = Earthing::none;
    const double ohms = board(at).U / 20e3;
    s.z1[0] = impedance(50 * ohms, 200 * ohms, 4, 12);
    s.z0[0] = impedance(100 * ohms, 400 * ohms, 3, 12);
    s.z1[1] = s.z1[0] * 3.0;
    s.z0[1] = s.z0[0] * 2.5;
    if (chance(40)) s.star = {StarPoint::Kind::impedance, impedance(1, 40, 0.1, 1)};
    n_.sources.push_back(s);
  }

  Transformer transformer(int from, int to, const std::string& primary, const std::string& secondary, int clock) {
    Transformer t;
    t.name = name("T");
    t.from = from;
    t.to = to;
    t.primary_group = primary;
    t.secondary_group = secondary;
    t.clock = clock;
    const bool high = board(to).high;
    t.rating = high ? one_of({6.3e6, 10e6, 16e6}) : one_of({160e3, 250e3, 400e3, 630e3, 1e6});
    t.uk = between(0.04, 0.08);
    t.losses = std::round(t.rating * between(0.006, 0.015));
    t.primary = board(from).U * one_of({1.0, 1.0, 1.05});
    t.secondary = std::round(board(to).U * one_of({1.0, 1.025, 1.05, 1.0825}));
    t.tap = one_of({0.0, 0.025, -0.025, -0.05, 0.05});
    if ((primary == "Y" || primary == "YN") && secondary == "yn") {
      t.z0_given = true;
      t.r0_over_r1 = between(1, 8);
      t.x0_over_x1 = between(0.8, 9);
    } else if (secondary != "d" && chance(50)) {
      t.z0_given = true;
      t.r0_over_r1 = between(0.3, 1.2);
      t.x0_over_x1 = between(0.1, 1.1);
    }
    return t;
  }

  int clock(bool odd) { return odd ? one_of({1, 3, 5, 7, 9, 11}) : one_of({0, 2, 4, 6, 8, 10}); }

  Length singles() { return {one_of({11, 12}), between(2, 15), one_of({1, 1, 2}), false, true}; }

  void draw_supply(Source& s, const Part& part) {
    s.z1[0] = impedance(2, 20, 0.3, 3);
    s.z0[0] = impedance(3, 60, 0.3, 3);
    s.z1[1] = s.z1[0] * 1.5;
    s.z0[1] = s.z0[0] * 2.0;
    if (s.earthing == Earthing::it) {
      if (chance(60)) s.star = {StarPoint::Kind::impedance, impedance(20, 300, 0.01, 0.1)};
      if (s.star.kind != StarPoint::Kind::impedance || chance(50)) s.farads = between(0.5, 8) * 1e-6;
    }
    draw_tails(part, s.tails, nullptr);
  }

  void draw_transformer_source(Source& s, const Part& part) {
    s.rating = one_of({160e3, 250e3, 400e3, 630e3});
    s.uk = between(0.04, 0.06);
    s.losses = std::round(s.rating * between(0.008, 0.015));
    s.secondary = std::round(part.U * one_of({1.0, 1.05, 1.0825}));
    s.level_max = one_of({200e6, 350e6});
    s.level_min = one_of({80e6, 150e6});
    s.r0_over_r1 = between(0.8, 1.2);
    s.x0_over_x1 = between(0.8, 1.1);
    draw_tails(part, s.tails, &s.link_at_board);
  }

  // Tails of five conductors, or up to the board with a PEN (where there can be none: no tails).
  void draw_tails(const Part& part, Length& tails, bool* link_at_board) {
    if (!chance(50) || part.earthing == Earthing::tn_c) return;
    const bool combined = is_tn(part.earthing) && !part.apart;
    if (combined && link_at_board == nullptr) return;
    tails = singles();
    if (combined) *link_at_board = true;
  }

  void draw_generator(Source& s, const Part& part) {
    s.kind = Source::Kind::generator;
    s.name = name("G");
    s.rating = one_of({60e3, 100e3, 200e3, 400e3});
    s.xd_subtransient = between(0.08, 0.2);
    s.x0 = between(0.02, 0.08);
    s.r = between(0.005, 0.03);
    if (chance(50)) {
      s.sustained = between(2, 4);
    } else {
      s.xd = between(1.5, 3);
    }
    draw_tails(part, s.tails, nullptr);
  }

  int any(const std::vector<int>& of) { return of[static_cast<std::size_t>(below(static_cast<int>(of.size())))]; }

  Length cable(std::initializer_list<int> of, double longest) {
    return {one_of(of), between(4, longest), one_of({1, 1, 1, 2}), false, true};
  }

  Run full_run(int from, int to) {
    Run run;
    run.name = name("S");
    run.from = from;
    run.to = to;
    run.has = kAll;
    run.length = cable({0, 1, 2, 3, 4, 5}, 90);
    return run;
  }

  Run sequence_run(int from, int to, Return through) {
    Run run = full_run(from, to);
    run.sequence = true;
    run.length.in_parallel = 1;
    run.z1 = impedance(0.1, 0.8, 0.1, 0.8);
    run.z0 = {run.z1.real() * 4.0, run.z1.imag() * 3.0};
    run.through = through;
    if (through == Return::neutral) run.has = kNoPE;
    if (through == Return::protective) run.has = kNoNeutral;
    if (through == Return::earth) run.has = kHigh;
    return run;
  }

  void add_motor(int b, int circuit) {
    Motor m;
    m.name = name("M");
    m.board = b;
    m.circuit = circuit;
    m.amps = board(b).high ? between(30, 80) : between(5, 90);
    m.volts = chance(20) && !board(b).high ? 380 : 0;
    m.start = between(4, 7);
    m.r_over_x = between(0.1, 0.42);
    m.count = one_of({1, 1, 2, 5});
    n_.motors.push_back(m);
  }

  std::mt19937_64 engine_;
  Network n_;
  int most_nodes_ = 0;
  int count_ = 0;
};

}  // namespace sunder::reference::meshed
