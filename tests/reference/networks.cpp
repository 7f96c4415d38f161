// SPDX-License-Identifier: Apache-2.0
// The constructions and the three written networks.
#include <algorithm>
#include <cstdlib>

#include "tests/reference/network.h"

namespace sunder::reference {

const std::vector<Construction>& constructions() {
  static const std::vector<Construction> all = {
      {"lab-flat",
       false,
       70,
       2,
       false,
       true,
       {{1.5, 12.1, 0.110, 1.0, 18.1, 0, 0, 0},
        {2.5, 7.41, 0.104, 1.5, 12.1, 0, 0, 0},
        {4, 4.61, 0.098, 1.5, 12.1, 0, 0, 0},
        {6, 3.08, 0.094, 2.5, 7.41, 0, 0, 0},
        {10, 1.83, 0.088, 4, 4.61, 0, 0, 0}}},
      {"lab-singles",
       false,
       70,
       0,
       false,
       false,
       {{1.5, 12.1, 0.125, 0, 0, 0, 0, 0},
        {2.5, 7.41, 0.119, 0, 0, 0, 0, 0},
        {4, 4.61, 0.113, 0, 0, 0, 0, 0},
        {6, 3.08, 0.107, 0, 0, 0, 0, 0},
        {10, 1.83, 0.102, 0, 0, 0, 0, 0},
        {16, 1.15, 0.097, 0, 0, 0, 0, 0},
        {25, 0.727, 0.094, 0, 0, 0, 0, 0},
        {50, 0.387, 0.091, 0, 0, 0, 0, 0},
        {120, 0.153, 0.089, 0, 0, 0, 0, 0},
        {240, 0.0754, 0.087, 0, 0, 0, 0, 0}}},
      {"lab-three-core",
       false,
       70,
       3,
       false,
       false,
       {{1.5, 12.1, 0.115, 0, 0, 0, 0, 0},
        {2.5, 7.41, 0.109, 0, 0, 0, 0, 0},
        {4, 4.61, 0.104, 0, 0, 0, 0, 0},
        {6, 3.08, 0.100, 0, 0, 0, 0, 0},
        {10, 1.83, 0.095, 0, 0, 0, 0, 0}}},
      {"lab-five-core",
       false,
       90,
       5,
       false,
       false,
       {{2.5, 7.41, 0.106, 0, 0, 0, 0, 0},
        {4, 4.61, 0.101, 0, 0, 0, 0, 0},
        {6, 3.08, 0.097, 0, 0, 0, 0, 0},
        {10, 1.83, 0.091, 0, 0, 0, 0, 0},
        {16, 1.15, 0.086, 0, 0, 0, 0, 0},
        {25, 0.727, 0.083, 0, 0, 0, 0, 0},
        {35, 0.524, 0.081, 0, 0, 0, 0, 0}}},
      {"lab-swa-two",
       false,
       70,
       2,
       true,
       false,
       {{4, 4.61, 0.103, 0, 0, 21, 7.5, 0.31},
        {6, 3.08, 0.097, 0, 0, 24, 6.8, 0.30},
        {10, 1.83, 0.092, 0, 0, 41, 3.9, 0.29},
        {16, 1.15, 0.087, 0, 0, 46, 3.5, 0.28}}},
      {"lab-swa-three",
       false,
       90,
       3,
       true,
       false,
       {{2.5, 7.41, 0.105, 0, 0, 20, 8.2, 0.33},
        {6, 3.08, 0.095, 0, 0, 26, 6.2, 0.32},
        {10, 1.83, 0.089, 0, 0, 44, 3.6, 0.30},
        {16, 1.15, 0.085, 0, 0, 50, 3.1, 0.29}}},
      {"lab-swa-four",
       false,
       90,
       4,
       true,
       false,
       {{10, 1.83, 0.090, 0, 0, 49, 3.4, 0.31},
        {16, 1.15, 0.086, 0, 0, 72, 2.3, 0.30},
        {25, 0.727, 0.084, 0, 0, 76, 2.1, 0.29},
        {35, 0.524, 0.082, 0, 0, 84, 1.9, 0.28},
        {70, 0.268, 0.079, 0, 0, 138, 1.2, 0.27},
        {95, 0.193, 0.077, 0, 0, 160, 1.0, 0.26}}},
      {"lab-swa-four-al",
       true,
       90,
       4,
       true,
       false,
       {{25, 1.20, 0.085, 0, 0, 78, 2.1, 0.29},
        {50, 0.641, 0.081, 0, 0, 122, 1.3, 0.28},
        {95, 0.320, 0.078, 0, 0, 158, 1.0, 0.26}}},
  };
  return all;
}

const Construction& construction_of(const Run& run) {
  for (const Construction& construction : constructions()) {
    if (construction.name == run.construction) return construction;
  }
  std::abort();  // a network names a construction that is not in the table above
}

const Size& size_of(const Run& run) {
  for (const Size& size : construction_of(run).sizes) {
    if (size.mm2 == run.mm2) return size;
  }
  std::abort();  // the same for a size
}

std::vector<int> lines_of(const std::string& phases) {
  std::vector<int> lines;
  for (const int line : {0, 1, 2}) {
    if (phases.find("L" + std::to_string(line + 1)) != std::string::npos) lines.push_back(line);
  }
  return lines;
}

bool neutral_of(const std::string& phases) {
  return phases.find('N') != std::string::npos || lines_of(phases).size() == 1;
}

std::string phases_of_board(const Network& network, const std::string& board) {
  for (const Submain& submain : network.submains) {
    if (submain.to != board) continue;
    return submain.phases.empty() ? phases_of_board(network, submain.from) : submain.phases;
  }
  return "L1 L2 L3 N";
}

Network workshop_tn_s() {
  Network n;
  n.title = "reference workshop, TN-S from a transformer";
  n.ambient_degc = 35;
  n.source.earthing = Earthing::TN_S;
  n.source.transformer = true;
  n.source.rating = 500e3;
  n.source.uk = 0.0475;
  n.source.losses = 5100;
  n.source.secondary = 433;
  n.source.fault_level_max = 250e6;
  n.source.fault_level_min = 110e6;
  n.source.z0_over_z1 = 0.9;
  n.source.tails_present = true;
  n.source.tails = {"lab-singles", 240, Cpc::single, 7, 2, 120};
  n.boards = {{"main"}, {"shop"}, {"office"}, {"drives"}, {"gate"}, {"store"}};
  n.submains = {
      {"S1", "main", "shop", "", {"lab-swa-four", 70, Cpc::armour_and_separate, 46, 1, 0}},
      {"S2", "main", "office", "", {"lab-five-core", 25, Cpc::core, 33, 1, 0}},
      {"S3", "shop", "drives", "L1 L2 L3", {"lab-swa-four", 35, Cpc::armour_and_core, 28, 1, 0}},
      {"S4", "main", "gate", "L3", {"lab-swa-two", 16, Cpc::armour, 71, 1, 0}},
      {"S5", "main", "store", "L1 L2 L3 N", {"lab-swa-four-al", 95, Cpc::armour, 88, 2, 0}},
  };
  n.circuits = {
      {"main", "M1", "L1", {"lab-flat", 2.5, Cpc::built_in, 19, 1, 0}, false, {}},
      {"main", "M2", "L1 L2 L3 N", {"lab-five-core", 6, Cpc::core, 24, 1, 0}, false, {}},
      {"main", "M3", "L1 L2 L3", {"lab-swa-three", 16, Cpc::armour, 52, 1, 0}, false, {}},
      {"shop", "W1", "L1", {"lab-flat", 2.5, Cpc::built_in, 71, 1, 0}, true, {{18, 4}, {37, 6.5}}},
      {"shop", "W2", "L2", {"lab-flat", 4, Cpc::built_in, 31, 1, 0}, false, {}},
      {"shop", "W3", "L3", {"lab-three-core", 2.5, Cpc::core, 27, 1, 0}, false, {}},
      {"shop", "W4", "L1 L2 L3", {"lab-singles", 6, Cpc::single, 22, 1, 4}, false, {}},
      {"shop", "W5", "L1 L3", {"lab-three-core", 4, Cpc::core, 16, 1, 0}, false, {}},
      {"shop", "W6", "L1 L2 L3 N", {"lab-swa-four", 10, Cpc::separate, 41, 1, 0}, false, {}},
      {"office", "O1", "L1", {"lab-flat", 2.5, Cpc::built_in, 60, 1, 0}, true, {{44, 7}}},
      {"office", "O2", "L2", {"lab-flat", 1.5, Cpc::built_in, 48, 1, 0}, false, {}},
      {"office", "O3", "L3", {"lab-flat", 1.5, Cpc::built_in, 36, 1, 0}, false, {}},
      {"office", "O4", "L2", {"lab-flat", 6, Cpc::built_in, 14, 1, 0}, false, {}},
      {"office", "O5", "L1 L2 L3 N", {"lab-singles", 4, Cpc::single, 17, 1, 4}, false, {}},
      {"drives", "D1", "L1 L2 L3", {"lab-swa-four", 10, Cpc::armour_and_core, 12, 1, 0}, false, {}},
      {"drives", "D2", "L1 L2 L3", {"lab-swa-three", 6, Cpc::armour, 19, 1, 0}, false, {}},
      {"drives", "D3", "L2 L3", {"lab-three-core", 2.5, Cpc::core, 9, 1, 0}, false, {}},
      {"gate", "G1", "L3", {"lab-swa-two", 4, Cpc::armour, 35, 1, 0}, false, {}},
      {"gate", "G2", "L3", {"lab-three-core", 1.5, Cpc::core, 21, 1, 0}, false, {}},
      {"store", "T1", "L1 L2 L3 N", {"lab-five-core", 10, Cpc::core, 26, 2, 0}, false, {}},
      {"store", "T2", "L1", {"lab-three-core", 6, Cpc::core, 43, 1, 0}, true, {{8, 2}}},
      {"store", "T3", "L2", {"lab-flat", 10, Cpc::built_in, 29, 1, 0}, false, {}},
  };
  return n;
}

Network yard_tn_c_s() {
  Network n;
  n.title = "reference yard, TN-C-S from a declared supply";
  n.source.earthing = Earthing::TN_C_S;
  n.source.maximum.three_phase.amps = 16e3;
  n.source.minimum.line_earth.ohms = 0.35;
  n.source.tails_present = true;
  n.source.tails = {"lab-singles", 25, Cpc::single, 4, 1, 16};
  n.boards = {{"intake"}, {"hall"}, {"pumps"}, {"lodge"}, {"quay"}};
  n.submains = {
      {"S1", "intake", "hall", "", {"lab-swa-four", 35, Cpc::armour, 48, 1, 0}},
      {"S2", "hall", "pumps", "", {"lab-swa-four", 16, Cpc::armour_and_separate, 37, 1, 0}},
      {"S3", "intake", "lodge", "L2", {"lab-swa-three", 16, Cpc::armour_and_core, 26, 1, 0}},
      {"S4", "intake", "quay", "", {"lab-swa-four-al", 50, Cpc::armour, 105, 2, 0}},
  };
  n.circuits = {
      {"intake", "I1", "L1", {"lab-flat", 1.5, Cpc::built_in, 12, 1, 0}, false, {}},
      {"intake", "I2", "L1 L2 L3 N", {"lab-five-core", 16, Cpc::core, 8, 1, 0}, false, {}},
      {"hall", "H1", "L1", {"lab-flat", 2.5, Cpc::built_in, 84, 1, 0}, true, {{20, 4}, {42, 3}, {70, 9}}},
      {"hall", "H2", "L2", {"lab-flat", 2.5, Cpc::built_in, 23, 1, 0}, false, {}},
      {"hall", "H3", "L3", {"lab-flat", 4, Cpc::built_in, 34, 1, 0}, false, {}},
      {"hall", "H4", "L1 L2 L3", {"lab-singles", 2.5, Cpc::single, 21, 1, 1.5}, false, {}},
      {"hall", "H5", "L1 L2", {"lab-three-core", 2.5, Cpc::core, 18, 1, 0}, false, {}},
      {"pumps", "P1", "L1 L2 L3", {"lab-swa-four", 10, Cpc::armour, 44, 1, 0}, false, {}},
      {"pumps", "P2", "L1 L2 L3 N", {"lab-five-core", 4, Cpc::core, 15, 1, 0}, false, {}},
      {"pumps", "P3", "L2", {"lab-swa-two", 10, Cpc::armour, 130, 1, 0}, false, {}},
      {"pumps", "P4", "L3", {"lab-swa-two", 6, Cpc::separate, 57, 1, 0}, false, {}},
      {"lodge", "L1", "L2", {"lab-flat", 2.5, Cpc::built_in, 52, 1, 0}, true, {{13, 8}}},
      {"lodge", "L2", "L2", {"lab-flat", 1.5, Cpc::built_in, 40, 1, 0}, false, {}},
      {"lodge", "L3", "L2", {"lab-flat", 10, Cpc::built_in, 9, 1, 0}, false, {}},
      {"quay", "Q1", "L1", {"lab-swa-two", 4, Cpc::armour, 66, 1, 0}, false, {}},
      {"quay", "Q2", "L2", {"lab-swa-two", 6, Cpc::armour, 92, 1, 0}, false, {}},
      {"quay", "Q3", "L3", {"lab-swa-three", 2.5, Cpc::armour_and_core, 38, 1, 0}, false, {}},
      {"quay", "Q4", "L1 L2 L3 N", {"lab-swa-four", 25, Cpc::armour, 31, 2, 0}, false, {}},
  };
  return n;
}

Network farm_tt() {
  Network n;
  n.title = "reference farm, TT with an electrode";
  n.ambient_degc = 25;
  n.source.earthing = Earthing::TT;
  n.source.maximum.three_phase.amps = 6e3;
  n.source.maximum.power_factor = 0.75;
  n.source.minimum.line_earth.ohms = 7.5;
  n.source.minimum.line_neutral.ohms = 0.6;
  n.source.minimum.three_phase.amps = 900;
  n.electrode = 38;
  n.boards = {{"house"}, {"dairy"}, {"barn"}, {"silo"}};
  n.submains = {
      {"S1", "house", "dairy", "", {"lab-swa-four", 25, Cpc::armour, 62, 1, 0}},
      {"S2", "house", "barn", "L1", {"lab-swa-three", 10, Cpc::armour_and_core, 47, 1, 0}},
      {"S3", "dairy", "silo", "", {"lab-five-core", 10, Cpc::core, 39, 2, 0}},
  };
  n.circuits = {
      {"house", "A1", "L1", {"lab-flat", 2.5, Cpc::built_in, 75, 1, 0}, true, {{30, 5}, {61, 2}}},
      {"house", "A2", "L2", {"lab-flat", 1.5, Cpc::built_in, 44, 1, 0}, false, {}},
      {"house", "A3", "L3", {"lab-flat", 6, Cpc::built_in, 13, 1, 0}, false, {}},
      {"house", "A4", "L1", {"lab-flat", 4, Cpc::built_in, 22, 1, 0}, false, {}},
      {"dairy", "D1", "L1 L2 L3", {"lab-singles", 6, Cpc::single, 25, 1, 6}, false, {}},
      {"dairy", "D2", "L1 L2 L3 N", {"lab-five-core", 6, Cpc::core, 18, 1, 0}, false, {}},
      {"dairy", "D3", "L1", {"lab-three-core", 2.5, Cpc::core, 33, 1, 0}, false, {}},
      {"dairy", "D4", "L2", {"lab-three-core", 4, Cpc::core, 51, 1, 0}, true, {{11, 6}}},
      {"dairy", "D5", "L3", {"lab-flat", 2.5, Cpc::built_in, 17, 1, 0}, false, {}},
      {"dairy", "D6", "L2 L3", {"lab-three-core", 2.5, Cpc::core, 12, 1, 0}, false, {}},
      {"barn", "B1", "L1", {"lab-swa-two", 4, Cpc::armour, 28, 1, 0}, false, {}},
      {"barn", "B2", "L1", {"lab-three-core", 1.5, Cpc::core, 24, 1, 0}, false, {}},
      {"barn", "B3", "L1", {"lab-flat", 2.5, Cpc::built_in, 30, 1, 0}, false, {}},
      {"silo", "C1", "L1 L2 L3", {"lab-swa-three", 6, Cpc::armour, 36, 1, 0}, false, {}},
      {"silo", "C2", "L1 L2 L3 N", {"lab-swa-four", 10, Cpc::armour_and_separate, 20, 1, 0}, false, {}},
      {"silo", "C3", "L2", {"lab-swa-two", 16, Cpc::separate, 83, 1, 0}, false, {}},
      {"silo", "C4", "L3", {"lab-three-core", 6, Cpc::core, 15, 1, 0}, false, {}},
      {"silo", "C5", "L1", {"lab-singles", 10, Cpc::single, 29, 1, 4}, false, {}},
  };
  return n;
}

}  // namespace sunder::reference
