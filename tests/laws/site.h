// SPDX-License-Identifier: Apache-2.0
/// @file
/// Random sound radial networks: a plain description, its netlist, and the network read from that.
#pragma once

#include <rapidcheck.h>

#include <iosfwd>
#include <map>
#include <string>
#include <vector>

#include "models/network.h"
#include "solver/results.h"

namespace sunder::laws {

/// A stretch of cable as a netlist gives it.
struct RunText {
  std::string cable;  ///< "swa-xlpe-cu-4c 35 mm2"
  std::string cpc;    ///< "" leaves the key out
  double metres = 10;
  int in_parallel = 1;
};

struct SubmainText {
  std::string name;  ///< feeds the board of the same number: "S2" feeds "B2"
  std::string from, to;
  std::string device;
  RunText run;
};

struct SpurText {
  double at = 0, metres = 0;
};

struct CircuitText {
  std::string board, name, device, use, phases;
  RunText run;
  bool ring = false;
  std::vector<SpurText> spurs;
  double load = 0;  ///< [A]
  double Iz = 0;    ///< [A]
};

/// What to leave out of the random choice.
struct Limits {
  bool declared_angle = false;  ///< always a power factor
  bool supplies_only = false;   ///< no transformer
  bool tn_only = false;
  bool single_cables = false;  ///< none in parallel
  bool sensible = false;       ///< as designed but for the lengths: rated, loaded and limited in energy
};

struct Site {
  bool transformer = false;
  std::string earthing = "TN-S";
  // supply
  double three_phase_ohms = 0.02;  ///< maximum: one line [ohm]
  double Ze = 0.2, Zn = 0.2;       ///< minimum [ohm]
  double power_factor = -1;        ///< of both; -1: not declared
  // transformer
  double kVA = 500, uk_percent = 4, losses_kW = 5, z0_over_z1 = 1, fault_MVA = 0;
  bool link_at_board = false;
  std::vector<std::string> boards;
  std::vector<SubmainText> submains;
  std::vector<CircuitText> circuits;
  double electrode = 0;  ///< [ohm] at the first board; 0: none
  std::string extra;     ///< tables to append, states for one

  [[nodiscard]] CircuitText& circuit(const std::string& address);
};

[[nodiscard]] rc::Gen<Site> sites(Limits limits = {});

/// The netlist, its tables in the order of writing.
[[nodiscard]] std::vector<std::string> tables(const Site& site);
[[nodiscard]] std::string netlist(const Site& site);

/// The network of a netlist; aborts the property with the diagnostics if it does not read.
[[nodiscard]] models::Network network_of(const std::string& text);
[[nodiscard]] inline models::Network network_of(const Site& site) { return network_of(netlist(site)); }

void showValue(const Site& site, std::ostream& out);

/// "maximum B1/W2 line-earth" and the like.
[[nodiscard]] std::string row_key(const solver::FaultRow& row);

using Rows = std::map<std::string, solver::FaultRow>;
/// Rows of one state by row_key.
[[nodiscard]] Rows rows_of(const models::Network& network, const std::string& state = "normal");

/// |a - b| <= tolerance * max(|a|, |b|)
[[nodiscard]] bool close(double a, double b, double tolerance = 1e-9);

}  // namespace sunder::laws
