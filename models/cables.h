// SPDX-License-Identifier: Apache-2.0
/// @file
/// Cables as what they are electrically: conductors ("strands") with a role, a material, an area and
/// an impedance per metre. Constructions come from models/library/ or from the netlist.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "models/sourced.h"

namespace sunder::models {

enum class Material { copper, aluminium, steel, lead };
enum class Place {
  core,      ///< a conductor inside the cable or bunched with others
  separate,  ///< a conductor run beside the cable, not bunched with it
  armour,    ///< wire armour
  sheath,    ///< metal sheath
  conduit,   ///< steel conduit or trunking
};

[[nodiscard]] const char* word(Material material) noexcept;
[[nodiscard]] const char* word(Place place) noexcept;

/// One conducting path along a run. Several of role PE in parallel share its current.
struct Strand {
  Material material = Material::copper;
  Place place = Place::core;
  double area = 0;  ///< [m2] nominal (armour: of all wires together)
  double r20 = 0;   ///< resistance at 20 degC [ohm/m], > 0
  double x = 0;     ///< reactance at system frequency [ohm/m], >= 0
  Confidence confidence = Confidence::declared;
  std::string label;       ///< "35 mm2 core", "armour of 78 mm2", "16 mm2 beside it"
  std::string insulation;  ///< its own where it differs from the cable's (a conductor run beside it); "": the cable's
};

/// Where the protective conductor of a run is, as the key `cpc` says.
struct CpcChoice {
  bool core = false;      ///< one of the cable's cores (or a further single of the same size)
  bool built_in = false;  ///< the reduced conductor of a flat cable
  bool armour = false;    ///< the armour
  double separate = 0;    ///< a copper conductor beside it [m2]; 0: none
  double core_area = 0;   ///< singles: size of the protective single [m2]; 0: as the line
};

/// A run's cable, resolved: what each conductor consists of.
struct Cable {
  std::string text;          ///< "swa-xlpe-cu-4c 35 mm2"
  std::string construction;  ///< "swa-xlpe-cu-4c"
  std::string title;         ///< "4-core copper XLPE, steel wire armour"
  std::string insulation;    ///< key into the rule set's tables: "pvc70", "xlpe90", ...
  double max_degc = 70;      ///< insulation limit in operation [degC]
  int cores = 0;             ///< of one cable; 0: singles, as many as needed
  Strand line;
  std::optional<Strand> neutral;   ///< absent: as the line conductor
  std::vector<Strand> protective;  ///< empty: no protective conductor
  // what it was resolved from, so that another size can be tried
  double area = 0;  ///< [m2]
  CpcChoice cpc;
  int n_loaded = 0;
  bool with_neutral = false;
  std::string source;
  Origin at{};
};

/// One size of a construction in its data file.
struct CableSize {
  double area = 0;                             ///< [m2]
  double r20 = 0;                              ///< line conductor at 20 degC [ohm/m]
  double x = 0;                                ///< [ohm/m]
  double cpc_area = 0;                         ///< built-in reduced protective conductor [m2]; 0: none
  double cpc_r20 = 0;                          ///< [ohm/m]
  double armour_area = 0;                      ///< [m2]; 0: no armour
  double armour_r20 = 0;                       ///< [ohm/m]
  double armour_x = 0;                         ///< [ohm/m]
  Confidence confidence = Confidence::memory;  ///< of the conductors
  Confidence x_confidence = Confidence::memory;
  Confidence armour_confidence = Confidence::memory;
};

/// A construction as its data file or a [cable.x] of the netlist gives it.
struct CableConstruction {
  std::string name;  ///< "swa-xlpe-cu-4c"
  std::string title;
  Material material = Material::copper;
  std::string insulation;  ///< "pvc70", "pvc90", "xlpe90"
  double max_degc = 70;
  int cores = 0;  ///< 0: singles
  Material armour_material = Material::steel;
  bool built_in_cpc = false;     ///< flat cables: one protective conductor besides the cores
  std::vector<CableSize> sizes;  ///< ascending by area
  std::string source;
  Origin at{};
};

/// A sentence on what is wrong with the combination.
struct CableError {
  std::string message;
};

/// Builds the conductors of a run.
/// @param separate  construction that supplies r20 and x of a separate conductor (copper singles)
/// @param n_loaded  lines plus neutral that the run needs
/// Errors: size not in the construction (nearest ones named), armour or core that does not exist,
///         fewer cores than conductors.
[[nodiscard]] std::optional<CableError> resolve_cable(const CableConstruction& construction, double area,
                                                      const CpcChoice& cpc, int n_loaded, bool neutral,
                                                      const CableConstruction& separate, Cable& out);

}  // namespace sunder::models
