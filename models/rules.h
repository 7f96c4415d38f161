// SPDX-License-Identifier: Apache-2.0
/// @file
/// A rule set: the limits that one edition of one set of wiring rules demands, as plain values.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "models/cables.h"
#include "models/sourced.h"

namespace sunder::models {

enum class Earthing { TN_S, TN_C_S, TT, TN_C, IT };
enum class Use { unknown, sockets, fixed, lighting, distribution };

[[nodiscard]] const char* word(Earthing earthing) noexcept;
[[nodiscard]] const char* word(Use use) noexcept;

struct AdiabaticRow {
  Place place = Place::core;
  Material material = Material::copper;
  std::string insulation;  ///< of the cable: "pvc70", "xlpe90", ...; "bare" for separate bare ones
  double area_to = 1;      ///< [m2], inclusive
  double initial_degc = 70;
  double final_degc = 160;
  double k = 0;  ///< [A*sqrt(s)/m2]
  Confidence confidence = Confidence::memory;
  std::string clause;  ///< "Table 54.4"
};

struct TimeRow {
  Earthing earthing = Earthing::TN_S;
  double U0_to = 0;          ///< [V], inclusive
  double final_circuit = 0;  ///< [s]
};

struct RuleSet {
  std::string name;  ///< "BS 7671:2018+A2"
  std::string title;
  double c_max = 1.1;
  double c_min = 0.95;
  double alpha_copper = 0.004;     ///< [1/K]
  double alpha_aluminium = 0.004;  ///< [1/K]
  double alpha_steel = 0.0045;     ///< [1/K]
  double armour_factor = 1.1;      ///< on the armour's resistance in fault loops
  double armour_degc_70 = 60;      ///< armour of a 70 degC cable in operation [degC]
  double armour_degc_90 = 80;
  double conduit_degc_70 = 50;
  double conduit_degc_90 = 60;
  std::vector<TimeRow> times;
  double sockets_to = 63;      ///< final-circuit times hold up to this rating with sockets [A]
  double fixed_to = 32;        ///< and up to this one without [A]
  double distribution_tn = 5;  ///< [s]
  double distribution_tt = 1;  ///< [s]
  std::string times_clause, distribution_clause;
  double touch_limit = 50;  ///< [V] RA * IdN
  std::string touch_clause;
  double drop_lighting_public = 0.03, drop_other_public = 0.05;
  double drop_lighting_own = 0.06, drop_other_own = 0.08;
  double drop_extra_per_m = 0.00005;  ///< [1/m] beyond `drop_extra_from`
  double drop_extra_from = 100;       ///< [m]
  double drop_extra_max = 0.005;
  std::string drop_clause;
  double additional_IdN = 0.030;      ///< [A]
  double additional_sockets_to = 32;  ///< [A]
  bool additional_dwelling_lighting = true;
  std::string additional_clause;
  std::string clearance_clause, heating_clause, capacity_clause, overload_clause, selectivity_clause;
  double I2_factor = 1.45;
  double ring_device_to = 0;  ///< a ring behind a device up to this [A] needs `ring_Iz`; 0: no such rule
  double ring_Iz = 0;         ///< least current-carrying capacity of one leg there [A]
  std::vector<AdiabaticRow> k;
  Confidence confidence = Confidence::memory;
  std::string source;
};

/// The adiabatic constant of a strand in a cable with `insulation`; nullptr where the rule set has none.
[[nodiscard]] const AdiabaticRow* adiabatic(const RuleSet& rules, const Strand& strand,
                                            const std::string& insulation) noexcept;

/// Temperature coefficient of resistance at 20 degC that the rule set uses [1/K].
[[nodiscard]] double alpha20(const RuleSet& rules, Material material) noexcept;

}  // namespace sunder::models
