// SPDX-License-Identifier: Apache-2.0
/// @file
/// A network as plain tables: what the netlist says, resolved and with the place of every value.
/// Handles are indices into the tables; -1 means none.
#pragma once

#include <complex>
#include <limits>
#include <string>
#include <vector>

#include "models/cables.h"
#include "models/conductors.h"
#include "models/devices.h"
#include "models/rules.h"
#include "models/sourced.h"

namespace sunder::models {

inline constexpr double kNotGiven = std::numeric_limits<double>::quiet_NaN();

/// How fault currents are computed: conductor by conductor, or with the corrections of IEC 60909.
enum class Method { conductor, iec60909 };

/// What carries the difference (Z0 - Z1)/3 of a run or supply declared by sequence impedances.
enum class Return { neutral, protective, both, earth };

/// Impedances by sequence: of a run per metre [ohm/m], of a supply [ohm].
struct Sequence {
  std::complex<double> z1;
  std::complex<double> z0;
  bool given = false;     ///< z1 is
  bool z0_given = false;  ///< without it no line-neutral or line-earth current is known
  Return through = Return::both;
  Origin at{};
};

/// How a star point is earthed.
struct StarPoint {
  enum class Kind { solid, open, impedance, absent };  ///< absent: of a machine, not brought out
  Kind kind = Kind::solid;
  double ohms = 0;       ///< Kind::impedance: resistance [ohm]
  double reactance = 0;  ///< and reactance [ohm]
};

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
  Sequence sequence;         ///< in place of loops: z1 and z0 of the supply [ohm]
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

/// A synchronous generator.
struct Generator {
  bool present = false;
  double rating = 0;           ///< [VA]
  double xd_subtransient = 0;  ///< saturated [1]
  double xd_transient = kNotGiven;
  double xd = kNotGiven;
  double x2 = kNotGiven;              ///< not given: as xd_subtransient
  double x0 = kNotGiven;              ///< not given: no zero-sequence current is known
  double r = kNotGiven;               ///< armature resistance [1]; not given: by IEC 60909-0 from rating and voltage
  double T_subtransient = kNotGiven;  ///< [s]
  double T_transient = kNotGiven;     ///< [s]
  double sustained = kNotGiven;       ///< maker's sustained short-circuit current over rated current
  double pf = 0.8;                    ///< rated
};

/// One stage of a current-limited source: so much for so long.
struct Stage {
  double amps = 0;     ///< [A]
  double seconds = 0;  ///< from inception; the last: infinite
};

/// An inverter or UPS: a voltage source until its limit binds.
struct Inverter {
  bool present = false;
  std::vector<Stage> stages;  ///< descending in current; at least one
  bool follows = false;       ///< only feeds into a live network (photovoltaic), never alone
};

/// A supply, transformer, generator or inverter as a source.
struct Source {
  std::string name;
  Origin at{};
  bool transformer = false;
  Generator generator;
  Inverter inverter;
  int board = -1;
  ConductorSet lines{Conductor::L1, Conductor::L2, Conductor::L3};  ///< lines it delivers
  bool split_phase = false;   ///< two lines in opposition with the neutral between them (120/240 V)
  bool high_voltage = false;  ///< above 1 kV: three lines, neither N nor PE
  double U0 = 230;            ///< line to neutral [V]
  double U = 400;             ///< line to line [V]
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
  double r0_over_r1 = kNotGiven;    ///< the same in two parts; not given: z0_over_z1 holds for both
  double x0_over_x1 = kNotGiven;
  bool link_at_board = false;  ///< N-PE link at its board (PEN until there) instead of at the star point
  StarPoint star;              ///< IT: towards earth; otherwise towards N and PE
  double capacitance = 0;      ///< of the whole IT network to earth, all lines together [F]; 0: not declared
  bool z0_known = true;        ///< false: a winding whose zero sequence is not declared (Yyn)
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
  bool n_pe_link = false;  ///< its neutral and protective bars are joined
};

enum class Winding { star, star_earthed, delta, zigzag, zigzag_earthed };

/// A transformer between two boards.
struct Transformer {
  std::string name;
  Origin at{};
  int from = -1, to = -1;  ///< boards of the primary and the secondary side
  Winding primary_winding = Winding::delta;
  Winding secondary_winding = Winding::star_earthed;
  int clock = 11;
  double rating = 0;          ///< [VA]
  double uk = 0;              ///< [1]
  double losses = 0;          ///< load losses [W]; 0: from x_over_r
  double x_over_r = 0;        ///< 0: from losses
  double primary = 0;         ///< rated voltage between lines [V]
  double secondary = 0;       ///< rated no-load voltage between lines [V]
  bool on_load_taps = false;  ///< of a generator's unit transformer (IEC 60909)
  double tap = 0;             ///< of the primary, relative to `primary`: 0.05 is +5 %
  double r0_over_r1 = kNotGiven;
  double x0_over_x1 = kNotGiven;  ///< both or neither; not given: 1 with a delta or zigzag, else unknown
  double U0 = 230;                ///< nominal of the secondary side, line to neutral [V]
  double U = 400;                 ///< line to line [V]
  StarPoint primary_star, star;
  bool link_at_board = false;          ///< N-PE link at its board (PEN until there) instead of at the star point
  double capacitance = 0;              ///< of an IT network to earth, all lines together [F]; 0: not declared
  Earthing earthing = Earthing::TN_S;  ///< of the secondary side
  bool own_transformer = true;
  Device primary_device, device;
  Tails tails;  ///< from the secondary terminals to its board
  Sourced<double> demand, pf;
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
  bool pen = false;   ///< its neutral is the protective conductor too (cpc = "PEN")
  Sequence sequence;  ///< in place of a cable [ohm/m]
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
  bool pen = false;    ///< its neutral is the protective conductor too (cpc = "PEN")
  std::string installed;
  std::string selective;
};

struct Electrode {
  std::string name;
  Origin at{};
  int board = -1;
  double resistance = 0;  ///< RA [ohm]
};

/// An asynchronous motor, or a group of equal ones.
struct Motor {
  std::string name;
  Origin at{};
  int board = -1;    ///< where it stands,
  int circuit = -1;  ///< or the circuit at whose end it stands
  ConductorSet lines{Conductor::L1, Conductor::L2, Conductor::L3};
  double amps = 0;          ///< rated current of one [A]
  double volts = 0;         ///< rated, between its lines [V]; 0: nominal of the place
  double watts = 0;         ///< rated mechanical power of one [W]; 0: from the current
  double pf = 0.85;         ///< rated
  double efficiency = 0.9;  ///< rated
  double start = 5;         ///< locked-rotor current over rated current
  double r_over_x = 0.42;
  int pole_pairs = 1;
  int count = 1;           ///< equal motors
  bool converter = false;  ///< behind a static converter that cannot feed back
};

/// A conducting path that is no circuit: bonding conductor, pipe, cable sheath.
struct Bond {
  std::string name;
  Origin at{};
  int from = -1;
  int to = -1;           ///< -1: reference earth
  double ohms = 0;       ///< [ohm]
  double reactance = 0;  ///< [ohm]
};

/// Coupler, changeover or bypass: joins two boards without impedance.
struct Link {
  std::string name;
  Origin at{};
  int from = -1, to = -1;
  ConductorSet conductors;  ///< that it joins; PE where both boards have one
  bool closed = true;       ///< where a state does not say
  Device device;
};

struct SupplyState {
  std::string name;
  Origin at{};
  std::vector<int> sources;
  std::vector<bool> link_closed;       ///< of each link; filled by the reader
  std::vector<bool> submain_open;      ///< of each submain
  std::vector<bool> transformer_open;  ///< of each transformer
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
  Method method = Method::conductor;
  double tolerance = 0.06;  ///< IEC 60909: of the low voltage, 0.06 or 0.10
  bool dwelling = false;
  std::vector<Source> sources;
  std::vector<Board> boards;
  std::vector<Submain> submains;
  std::vector<Circuit> circuits;
  std::vector<Electrode> electrodes;
  std::vector<Transformer> transformers;
  std::vector<Motor> motors;
  std::vector<Bond> bonds;
  std::vector<Link> links;
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
