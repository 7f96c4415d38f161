// SPDX-License-Identifier: Apache-2.0
/// @file
/// Random meshed networks: several sources, transformers, loops, couplers, earths and motors, as netlist text.
#pragma once

#include <rapidcheck.h>

#include <iosfwd>
#include <map>
#include <string>
#include <vector>

#include "models/network.h"
#include "solver/fault_study.h"

namespace sunder::laws {

/// A run between two boards.
struct MeshRun {
  std::string name, from, to;
  std::string keys;  ///< cable, length and what else, a line each
};

struct MeshLink {
  std::string name, from, to;
  bool closed = true;
};

/// Anything that stands at one board, as a table whose board is left out.
struct MeshThing {
  std::string head;   ///< "[motor.M1]"
  std::string key;    ///< that names the board: "on"
  std::string board;  ///< its value
  std::string keys;
};

struct Mesh {
  std::vector<MeshThing> sources;  ///< in the order that decides which star point is the reference
  std::vector<std::string> boards;
  std::vector<MeshRun> runs;
  std::vector<MeshLink> links;
  std::vector<MeshThing> things;
  std::string extra;  ///< tables to append: a state of all sources
};

struct MeshLimits {
  bool resistive = false;  ///< resistances alone, one supply, five conductors everywhere
  bool links = true;
};

[[nodiscard]] rc::Gen<Mesh> meshes(MeshLimits limits = {});

/// A submain of the kinds that `meshes` makes.
[[nodiscard]] MeshRun random_run(const std::string& name, const std::string& from, const std::string& to,
                                 const MeshLimits& limits);

/// Quoted names, for the list of a state.
[[nodiscard]] std::string names_of_sources(const Mesh& mesh);

/// Tables in the order of writing; sources come first.
[[nodiscard]] std::vector<std::string> tables(const Mesh& mesh);
[[nodiscard]] std::string netlist(const Mesh& mesh);
void showValue(const Mesh& mesh, std::ostream& out);

/// What `faults` finds with these options; fails the property where it answers with a sentence.
[[nodiscard]] std::vector<solver::FaultDetail> studied(const models::Network& network, const solver::FaultQuery& query);

/// Currents by "state condition node fault", those that are known.
[[nodiscard]] std::map<std::string, double> currents_of(const models::Network& network);

}  // namespace sunder::laws
