// SPDX-License-Identifier: Apache-2.0
// Radial networks drawn from a written seed. The generator is spelt out here because the standard
// library's distributions differ between implementations.
#include <cstdint>
#include <initializer_list>

#include "tests/reference/network.h"

namespace sunder::reference {

namespace {

// SplitMix64 (Steele, Lea, Flood 2014): every seed gives a full-period sequence.
class Dice {
 public:
  explicit Dice(std::uint64_t seed) : state_(seed) {}

  // A whole number from 0 to n - 1.
  int below(int n) { return static_cast<int>(next() % static_cast<std::uint64_t>(n)); }
  bool chance(int percent) { return below(100) < percent; }
  // A number of two decimals between two bounds, as somebody would type it.
  double between(double least, double most) {
    const int steps = static_cast<int>((most - least) * 100.0);
    return static_cast<double>(static_cast<int>(least * 100.0) + below(steps + 1)) / 100.0;
  }
  template <typename T>
  T one_of(std::initializer_list<T> choices) {
    return *(choices.begin() + below(static_cast<int>(choices.size())));
  }

 private:
  std::uint64_t next() {
    state_ += 0x9E3779B97F4A7C15ULL;
    std::uint64_t z = state_;
    z = (z ^ (z >> 30U)) * 0xBF58476D1CE4E5B9ULL;
    z = (z ^ (z >> 27U)) * 0x94D049BB133111EBULL;
    return z ^ (z >> 31U);
  }
  std::uint64_t state_;
};

double any_size(Dice& dice, const std::string& construction) {
  Run run;
  run.construction = construction;
  const auto& sizes = construction_of(run).sizes;
  return sizes[static_cast<std::size_t>(dice.below(static_cast<int>(sizes.size())))].mm2;
}

// A run that has a core for each of `n_live` conductors and a protective conductor of some kind.
Run any_run(Dice& dice, int n_live, double longest) {
  Run run;
  run.length = dice.between(3.0, longest);
  run.in_parallel = dice.chance(12) ? 2 : 1;
  if (dice.chance(20)) {
    run.construction = "lab-singles";
    run.mm2 = dice.one_of({2.5, 4.0, 6.0, 10.0, 16.0, 25.0});
    run.cpc = Cpc::single;
    run.cpc_mm2 = dice.chance(50) ? run.mm2 : dice.one_of({1.5, 2.5});
    return run;
  }
  if (n_live == 2) {
    run.construction = dice.one_of({"lab-flat", "lab-flat", "lab-three-core", "lab-swa-two", "lab-swa-three"});
  } else if (n_live == 3) {
    run.construction = dice.one_of({"lab-swa-three", "lab-swa-four", "lab-five-core"});
  } else {
    run.construction = dice.one_of({"lab-swa-four", "lab-swa-four-al", "lab-five-core"});
  }
  run.mm2 = any_size(dice, run.construction);
  const Construction& construction = construction_of(run);
  const bool spare = construction.cores > n_live;
  if (construction.built_in_cpc) {
    run.cpc = Cpc::built_in;
  } else if (construction.armoured && spare) {
    run.cpc = dice.one_of({Cpc::armour, Cpc::core, Cpc::armour_and_core});
  } else if (construction.armoured) {
    run.cpc = dice.one_of({Cpc::armour, Cpc::armour, Cpc::separate, Cpc::armour_and_separate});
  } else {
    run.cpc = Cpc::core;
  }
  // Whether the conductor beside two cables is one or two is left to those who lay them.
  if (run.cpc == Cpc::separate || run.cpc == Cpc::armour_and_separate) run.in_parallel = 1;
  return run;
}

Loop current(double amps) {
  Loop loop;
  loop.amps = static_cast<double>(static_cast<int>(amps / 10.0)) * 10.0;  // as somebody would type it
  return loop;
}

// Declarations that can all be true: no loop has less impedance than its line, no minimum exceeds its
// maximum, and the one return conductor of TN-C-S has one impedance.
void draw_supply(Dice& dice, Source& source) {
  source.earthing = dice.one_of({Earthing::TN_S, Earthing::TN_C_S, Earthing::TT});
  const bool combined = source.earthing == Earthing::TN_C_S;
  const double most = dice.between(3000, 25000);
  Bound& maximum = source.maximum;
  maximum.three_phase = current(most);
  if (dice.chance(40)) maximum.line_neutral = current(most * dice.between(0.6, 0.95));
  if (dice.chance(40)) maximum.line_earth = combined ? maximum.line_neutral : current(most * dice.between(0.6, 0.9));
  if (dice.chance(40)) maximum.power_factor = dice.between(0.25, 0.95);
  Bound& minimum = source.minimum;
  minimum.line_earth.ohms = source.earthing == Earthing::TT ? dice.between(2.0, 21.0) : dice.between(0.2, 0.8);
  if (source.earthing == Earthing::TN_S || (source.earthing == Earthing::TT && dice.chance(50))) {
    minimum.line_neutral.ohms = dice.between(0.2, 0.6);
  }
  if (dice.chance(50)) minimum.three_phase = current(dice.between(1150, 1700));
  if (dice.chance(40)) minimum.power_factor = dice.between(0.4, 0.98);
}

void draw_transformer(Dice& dice, Source& source) {
  source.transformer = true;
  source.earthing = dice.one_of({Earthing::TN_S, Earthing::TN_C_S});
  source.rating = dice.one_of({100e3, 250e3, 400e3, 630e3, 1000e3});
  source.uk = dice.between(0.04, 0.06);
  source.losses = source.rating * dice.between(0.01, 0.02);
  source.secondary = dice.one_of({400.0, 415.0, 420.0, 433.0});
  source.z0_over_z1 = dice.one_of({1.0, 0.85, 0.95, 1.1});
  if (dice.chance(60)) {
    source.fault_level_min = dice.one_of({60e6, 90e6, 120e6});
    source.fault_level_max = dice.one_of({150e6, 250e6, 500e6});
  }
  source.link_at_board = source.earthing == Earthing::TN_C_S && dice.chance(60);
}

}  // namespace

Network random_network(unsigned seed) {
  Dice dice(seed);
  Network n;
  n.title = "reference network drawn from seed " + std::to_string(seed);
  n.ambient_degc = dice.one_of({15.0, 25.0, 30.0, 40.0});
  if (dice.chance(50)) {
    draw_transformer(dice, n.source);
  } else {
    draw_supply(dice, n.source);
  }
  if (n.source.link_at_board || dice.chance(50)) {
    n.source.tails_present = true;
    n.source.tails = {"lab-singles",           dice.one_of({25.0, 50.0, 120.0}), Cpc::single,
                      dice.between(1.0, 12.0), dice.chance(30) ? 2 : 1,          dice.one_of({16.0, 25.0})};
  }
  if (n.source.earthing == Earthing::TT) n.electrode = dice.between(8.0, 120.0);

  const int n_boards = 3 + dice.below(4);
  for (int i = 0; i < n_boards; ++i) {
    n.boards.push_back({"board" + std::to_string(i)});
    if (i == 0) continue;
    Submain submain;
    submain.name = "S" + std::to_string(i);
    submain.from = n.boards[static_cast<std::size_t>(dice.below(i))].name;
    submain.to = n.boards.back().name;
    const std::string above = phases_of_board(n, submain.from);
    const std::vector<int> lines = lines_of(above);
    if (lines.size() == 3 && dice.chance(25)) {
      submain.phases = "L" + std::to_string(1 + dice.below(3));
      if (!neutral_of(above)) submain.phases = "L1 L2 L3";
    }
    const std::string own = submain.phases.empty() ? above : submain.phases;
    const int n_live = static_cast<int>(lines_of(own).size()) + (neutral_of(own) ? 1 : 0);
    submain.run = any_run(dice, n_live, 120.0);
    n.submains.push_back(submain);
  }
  for (const Board& board : n.boards) {
    const std::string above = phases_of_board(n, board.name);
    const std::vector<int> lines = lines_of(above);
    const int n_circuits = 2 + dice.below(5);
    for (int i = 0; i < n_circuits; ++i) {
      Circuit circuit;
      circuit.board = board.name;
      circuit.name = "W" + std::to_string(i + 1);
      circuit.phases =
          "L" + std::to_string(1 + lines[static_cast<std::size_t>(dice.below(static_cast<int>(lines.size())))]);
      int n_live = 2;
      if (lines.size() == 3 && dice.chance(40)) {
        circuit.phases = dice.one_of({"L1 L2 L3", "L1 L2 L3 N", "L2 L3"});
        if (!neutral_of(above) && neutral_of(circuit.phases)) circuit.phases = "L1 L2 L3";
        n_live = static_cast<int>(lines_of(circuit.phases).size()) + (neutral_of(circuit.phases) ? 1 : 0);
      } else if (!neutral_of(above)) {
        circuit.phases = "L1 L3";
      }
      circuit.run = any_run(dice, n_live, 90.0);
      if (circuit.run.in_parallel == 1 && dice.chance(25)) {
        circuit.ring = true;
        const int n_spurs = dice.below(3);
        for (int s = 0; s < n_spurs; ++s) {
          circuit.spurs.push_back({dice.between(0.2, circuit.run.length - 0.2), dice.between(1.0, 14.0)});
        }
      }
      n.circuits.push_back(circuit);
    }
  }
  return n;
}

}  // namespace sunder::reference
