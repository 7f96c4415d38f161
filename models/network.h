// SPDX-License-Identifier: Apache-2.0
/// @file
/// A network as plain tables: what the netlist says, resolved and with the place of every value.
/// Handles are indices into the tables; -1 means none.
#pragma once

#include <string>
#include <vector>

#include "models/cables.h"
#include "models/conductors.h"
#include "models/devices.h"
#include "models/rules.h"
#include "models/sourced.h"

namespace sunder::models {

/// One declared bound of a supply: the most or the least it may deliver. Each value is either a
/// current (at that condition's voltage factor) or a loop impedance (in ohms as it stands).
struct Loop {
  double ohms = 0;  ///< |Z| [ohm]; 0: not declared this way
  double amps = 0;  ///< current [A]; 0: not declared this way
  Origin at{};
  [[nodiscard]] bool given() const noexcept { return ohms > 0 || amps > 0; }
};

struct Bound {
  Loop three_phase;          ///< line impedance, or three-phase current
  Loop line_neutral;         ///< loop through N
  Loop line_earth;           ///< loop through PE (Ze)
  double power_factor = -1;  ///< of the loop, 0..1; -1: not declared (an angle range is taken)
  Origin at{};
};

struct Tails {
  bool present = false;
  Cable cable;
  double length = 0;  ///< [m]
  int in_parallel = 1;
  Sourced<double> Iz;  ///< as installed, of all in parallel together [A]
  Origin at{};
};

/// A supply or a transformer as a source.
struct Source {
  std::string name;
  Origin at{};
  bool transformer = false;
  int board = -1;
  ConductorSet lines{Conductor::L1, Conductor::L2, Conductor::L3};  ///< lines it delivers
  double U0 = 230;                                                  ///< line to neutral [V]
  double U = 400;                                                   ///< line to line [V]
  Earthing earthing = Earthing::TN_S;
  bool own_transformer = false;  ///< decides voltage-drop limits
  Bound maximum, minimum;        ///< supply
  // transformer
  double rating = 0;                ///< [VA]
  double uk = 0;                    ///< [1]
  double losses = 0;                ///< load losses [W]; 0: from x_over_r
  double x_over_r = 0;              ///< 0: from losses
  double secondary = 0;             ///< rated no-load line voltage on the low side [V]
  double fault_level_max = kNever;  ///< before it, greatest [VA]; infinite: stiff
  double fault_level_min = 0;       ///< before it, least [VA]; 0: not declared, so the least currents are unknown
  double z0_over_z1 = 1;            ///< zero-sequence impedance of the transformer
  bool link_at_board = false;       ///< N-PE link at its board (PEN until there) instead of at the star point
  Device device;
  Tails tails;
  Sourced<double> demand;  ///< of the whole installation, in its most loaded line [A]
  Sourced<double> pf;      ///< of it
};

/// A device that stands between a board's busbar and some of its ways.
struct Group {
  std::string name;
  Device device;
  Sourced<double> demand;         ///< of its ways together, in the most loaded line [A]
  std::vector<std::string> ways;  ///< circuit names on this board, as written
  Origin at{};
};

struct Board {
  std::string name;
  Origin at{};
  Device incomer;  ///< kind none: no incomer
  std::vector<Group> groups;
  int electrode = -1;
};

/// Cable between two boards.
struct Submain {
  std::string name;
  Origin at{};
  int from = -1, to = -1;
  int group = -1;           ///< index into the from-board's groups
  ConductorSet conductors;  ///< L.., N where carried; PE iff a protective conductor is carried
  Device device;
  Cable cable;
  Sourced<double> length;  ///< [m]
  int in_parallel = 1;
  Sourced<double> Iz;      ///< declared current-carrying capacity [A], of all in parallel together
  Sourced<double> demand;  ///< [A]
  Sourced<double> pf;      ///< 0..1
  std::string installed;
  std::string selective;  ///< "", "total", or a current as typed
  bool cpc_given = false;
};

struct Spur {
  double at = 0;      ///< from the ring's start [m]
  double length = 0;  ///< [m]
  Origin origin{};
};

struct Circuit {
  std::string name;  ///< "W2"; address "workshop/W2"
  Origin at{};
  int board = -1;
  int group = -1;  ///< index into the board's groups
  std::string serves;
  Use use = Use::unknown;
  ConductorSet conductors;  ///< lines, N, PE
  Device device;
  Cable cable;
  Sourced<double> length;  ///< [m]; ring: whole loop
  int in_parallel = 1;
  bool ring = false;
  std::vector<Spur> spurs;
  Sourced<double> load;  ///< Ib [A]
  Sourced<double> pf;
  Sourced<double> Iz;  ///< [A]
  bool motor = false;  ///< its load is a motor's rated current
  std::string installed;
  std::string selective;
};

struct Electrode {
  std::string name;
  Origin at{};
  int board = -1;
  double resistance = 0;  ///< RA [ohm]
};

struct SupplyState {
  std::string name;
  Origin at{};
  std::vector<int> sources;
};

/// Something taken that the user did not say; listed with every report.
struct Assumption {
  std::string subject;   ///< address
  std::string sentence;  ///< "pf of W4 taken as 1"
  Origin at{};
};

struct Network {
  std::vector<std::string> files{""};  ///< Origin::file indexes it
  std::string title;
  std::string rules_name;
  RuleSet rules;
  double ambient_degc = 30;
  double frequency = 50;  ///< [Hz]
  bool dwelling = false;
  std::vector<Source> sources;
  std::vector<Board> boards;
  std::vector<Submain> submains;
  std::vector<Circuit> circuits;
  std::vector<Electrode> electrodes;
  std::vector<SupplyState> states;  ///< at least one once read
  std::vector<Assumption> assumptions;
  // what remedies and catalogue sweeps may choose from
  std::vector<CableConstruction> constructions;
  std::vector<DeviceFamily> families;
};

/// "workshop/W4" of a circuit.
[[nodiscard]] std::string address(const Network& network, const Circuit& circuit);

/// "file:line:column" of a place, "" for nowhere.
[[nodiscard]] std::string place_text(const Network& network, Origin at);

}  // namespace sunder::models
