// SPDX-License-Identifier: Apache-2.0
/// @file
/// A network with several sources, loops and transformers as plain tables: nothing but what an engineer would
/// write down. The netlist, the equations and the simulator's decks are each written from it, none from another.
#pragma once

#include <array>
#include <complex>
#include <string>
#include <vector>

namespace sunder::reference::meshed {

using Complex = std::complex<double>;

/// L1 L2 L3 N PE, in this order everywhere.
inline constexpr std::size_t kN = 3;
inline constexpr std::size_t kPE = 4;
inline constexpr std::size_t kConductors = 5;
/// Which of L1 L2 L3 N PE there are.
using Has = std::array<bool, kConductors>;

enum class Condition { maximum, minimum };
enum class Fault { three_phase, line_line, line_neutral, line_earth, two_lines_earth };
inline constexpr std::array<Fault, 5> kFaults{Fault::three_phase, Fault::line_line, Fault::line_neutral,
                                              Fault::line_earth, Fault::two_lines_earth};
enum class Earthing { none, tn_s, tn_c_s, tn_c, tt, it };

[[nodiscard]] const char* word(Condition condition);  ///< "maximum"
[[nodiscard]] const char* word(Fault fault);          ///< "two lines and earth"
[[nodiscard]] bool is_tn(Earthing earthing);

/// One conductor a core, all equal, the neutral and the protective one too.
struct Cable {
  const char* name = "";
  bool aluminium = false;
  double limit_degc = 70;  ///< 70: insulation pvc70, 90: xlpe90
  int cores = 5;           ///< 0: singles
  double mm2 = 0;
  double r20 = 0;  ///< [mohm/m]
  double x = 0;    ///< [mohm/m]
};
[[nodiscard]] const std::vector<Cable>& cables();

struct StarPoint {
  enum class Kind { by_default, solid, open, impedance };
  Kind kind = Kind::by_default;  ///< open in IT, solid elsewhere
  Complex ohms;
};

/// A length of cable, or of a line of which the sequence impedances are declared.
struct Length {
  int cable = -1;  ///< index into cables()
  double metres = 0;
  int in_parallel = 1;
  bool pen = false;         ///< the neutral is the protective conductor too
  bool separate_pe = true;  ///< false: no protective conductor runs with it
};

enum class Return { neutral, protective, both, earth };

struct Run {
  std::string name;
  int from = 0, to = 0;  ///< boards
  Has has{};
  Length length;
  bool sequence = false;
  Complex z1, z0;  ///< [mohm/m]
  Return through = Return::both;
};

struct Board {
  std::string name;
  double U = 400;  ///< between lines [V]
  double U0 = 230;
  bool high = false;
  Has has{};
  bool n_pe_link = false;
};

struct Circuit {
  std::string name;  ///< "W1"
  int board = 0;
  Has has{};
  Length length;
  bool ring = false;
  std::vector<std::array<double, 2>> spurs;  ///< at, length [m]
};

/// What feeds a network from outside: a declared supply, a transformer behind a network of which only the
/// short-circuit power is known, a generator.
struct Source {
  enum class Kind { supply, transformer, generator };
  Kind kind = Kind::supply;
  std::string name;
  int board = 0;
  Earthing earthing = Earthing::tn_s;
  StarPoint star;
  bool link_at_board = false;  ///< N and PE part at the board, not at the star point
  Length tails;                ///< metres 0: none
  // supply
  std::array<Complex, 2> z1, z0;  ///< by condition [mohm]
  double farads = 0;              ///< of an IT network to earth
  // transformer, generator
  double rating = 0;           ///< [VA]
  double uk = 0, losses = 0;   ///< [1], [W]
  double secondary = 0;        ///< no load [V]
  double level_max = 0;        ///< [VA]
  double level_min = 0;        ///< [VA]
  double r0_over_r1 = 1;       ///< of the transformer alone
  double x0_over_x1 = 1;       ///< of the transformer alone
  double xd_subtransient = 0;  ///< [1]
  double x0 = 0;               ///< [1]
  double r = 0;                ///< [1]
  double sustained = 0;        ///< multiple of the rated current; 0: not declared, xd is
  double xd = 0;               ///< [1]
};

/// Two windings a leg, a zigzag three, between two boards.
struct Transformer {
  std::string name;
  int from = 0, to = 0;
  std::string primary_group = "D";     ///< D Y YN
  std::string secondary_group = "yn";  ///< d y yn zn
  int clock = 11;
  double rating = 0, uk = 0, losses = 0;
  double primary = 0, secondary = 0;  ///< rated, between lines [V]
  double tap = 0;                     ///< of the primary: 0.05 is +5 %
  bool z0_given = false;              ///< not given: as Z1
  double r0_over_r1 = 1, x0_over_x1 = 1;
  StarPoint primary_star, star;
  Earthing earthing = Earthing::tn_s;
  bool no_link = false;        ///< link = "none"
  bool link_at_board = false;  ///< with tails
  Length tails;
};

struct Motor {
  std::string name;
  int board = 0;
  int circuit = -1;  ///< index into circuits; -1: at the board itself
  double volts = 0;  ///< 0: the nominal of its place
  double amps = 0;
  double start = 5;
  double r_over_x = 0.42;
  int count = 1;
};

struct Electrode {
  std::string name;
  int board = 0;
  double ohms = 0;
};

struct Bond {
  std::string name;
  int from = 0;
  int to = -1;  ///< -1: reference earth
  Complex ohms;
};

struct Link {
  std::string name;
  int from = 0, to = 0;
  Has has{};
  bool closed = true;
};

struct Network {
  std::string title;
  bool bs = true;  ///< BS 7671:2018+A2, else IEC 60364
  std::vector<Board> boards;
  std::vector<Source> sources;
  std::vector<Transformer> transformers;
  std::vector<Run> runs;
  std::vector<Circuit> circuits;
  std::vector<Motor> motors;
  std::vector<Electrode> electrodes;
  std::vector<Bond> bonds;
  std::vector<Link> links;
};

/// Boards, circuit ends and spur ends.
[[nodiscard]] int count_nodes(const Network& network);

/// A network of up to 60 nodes; the same one for the same seed on every machine.
[[nodiscard]] Network random_network(unsigned seed);

/// The netlist of a network, as the program reads it.
[[nodiscard]] std::string netlist_text(const Network& network);

// What the rule sets say of voltages and temperatures (models/library/rules-*.toml); above 1 kV the voltage
// factors of IEC 60909-0, 1.10 and 1.00.
[[nodiscard]] double voltage_factor(const Network& network, const Board& board, Condition condition);
/// Temperature coefficient of a cable's conductors [1/K].
[[nodiscard]] double temperature_coefficient(const Network& network, const Cable& cable);

/// Driving voltage of the network at a board: c times this [V].
[[nodiscard]] double driving_volts(const Board& board, Fault fault);

}  // namespace sunder::reference::meshed
