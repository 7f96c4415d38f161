// SPDX-License-Identifier: Apache-2.0
/// @file
/// A plain description of a test network: nothing but what an engineer would write down, from which
/// both the netlist and the circuit simulator's decks are written. It shares no code with the program.
#pragma once

#include <string>
#include <vector>

namespace sunder::reference {

inline constexpr double kLineToNeutral = 230.0;  // [V]
inline constexpr double kLineToLine = 400.0;     // [V]

/// One size of a construction; resistances and reactances in mohm/m, areas in mm2.
struct Size {
  double mm2 = 0;
  double r20 = 0;
  double x = 0;
  double cpc_mm2 = 0;  ///< built-in reduced protective conductor, 0: none
  double cpc_r20 = 0;
  double armour_mm2 = 0;  ///< 0: no armour
  double armour_r20 = 0;
  double armour_x = 0;
};

struct Construction {
  std::string name;
  bool aluminium = false;
  double limit_degc = 70;  ///< 70: insulation pvc70, 90: xlpe90
  int cores = 0;           ///< 0: singles
  bool armoured = false;
  bool built_in_cpc = false;
  std::vector<Size> sizes;
};

/// The constructions that all networks use. Conductor resistances are those of IEC 60228 for class 1
/// and 2; the armour is of the size and resistance that such cables have.
[[nodiscard]] const std::vector<Construction>& constructions();

enum class Cpc {
  built_in,             ///< the reduced conductor of a flat cable
  core,                 ///< a core like the lines
  single,               ///< a single of size `cpc_mm2`
  armour,               ///< the armour alone
  armour_and_core,      ///< both, side by side
  armour_and_separate,  ///< the armour and a 16 mm2 conductor beside the cable
  separate,             ///< a 16 mm2 conductor beside the cable
};

struct Run {
  std::string construction;
  double mm2 = 0;
  Cpc cpc = Cpc::core;
  double length = 0;  ///< [m]
  int in_parallel = 1;
  double cpc_mm2 = 0;  ///< of a protective single
};

struct Board {
  std::string name;
};

struct Submain {
  std::string name, from, to;
  std::string phases;  ///< "" as its board has, "L2", "L1 L2 L3" (no neutral), "L1 L2 L3 N"
  Run run;
};

struct Spur {
  double at = 0;      ///< [m]
  double length = 0;  ///< [m]
};

struct Circuit {
  std::string board, name;
  std::string phases;  ///< "L2" (with N), "L1 L2" (without), "L1 L2 L3", "L1 L2 L3 N"
  Run run;
  bool ring = false;
  std::vector<Spur> spurs;
};

/// A current or an impedance; neither: not declared.
struct Loop {
  double ohms = 0;
  double amps = 0;
  [[nodiscard]] bool given() const { return ohms > 0 || amps > 0; }
};

struct Bound {
  Loop three_phase, line_neutral, line_earth;
  double power_factor = -1;  ///< -1: not declared
};

enum class Earthing { TN_S, TN_C_S, TT };

struct Source {
  Earthing earthing = Earthing::TN_S;
  bool transformer = false;
  Bound maximum, minimum;  ///< of a declared supply
  // of a transformer Dyn
  double rating = 0;           ///< [VA]
  double uk = 0;               ///< [1]
  double losses = 0;           ///< [W]
  double secondary = 0;        ///< [V] line to line, no load
  double fault_level_max = 0;  ///< [VA], 0: not declared
  double fault_level_min = 0;  ///< [VA], 0: not declared
  double z0_over_z1 = 1;
  bool link_at_board = false;
  bool tails_present = false;
  Run tails;
};

struct Network {
  std::string title;
  double ambient_degc = 30;
  Source source;
  std::vector<Board> boards;  ///< the first is the one that the source feeds
  std::vector<Submain> submains;
  std::vector<Circuit> circuits;
  double electrode = 0;  ///< RA at the first board [ohm], 0: none
};

/// TN-S from a Dyn transformer behind a medium-voltage network, with tails.
[[nodiscard]] Network workshop_tn_s();
/// TN-C-S from a declared supply whose angles are unknown.
[[nodiscard]] Network yard_tn_c_s();
/// TT with an electrode, neutral loop declared apart from the earth loop.
[[nodiscard]] Network farm_tt();
/// A radial network of any of the three systems; the same one for the same seed on every machine.
[[nodiscard]] Network random_network(unsigned seed);

/// The lines (0, 1, 2) of a phases text.
[[nodiscard]] std::vector<int> lines_of(const std::string& phases);
/// True if the text means that a neutral runs with the lines: "L2" and "... N".
[[nodiscard]] bool neutral_of(const std::string& phases);
/// What runs in a submain: its own text, or that of the board it leaves, down from the source.
[[nodiscard]] std::string phases_of_board(const Network& network, const std::string& board);

[[nodiscard]] const Construction& construction_of(const Run& run);
[[nodiscard]] const Size& size_of(const Run& run);

/// The netlist of a network, as the program reads it.
[[nodiscard]] std::string netlist_text(const Network& network);

}  // namespace sunder::reference
