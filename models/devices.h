// SPDX-License-Identifier: Apache-2.0
/// @file
/// Protective devices as plain values: what operates them when, what they can break, what they let
/// through. Families come from models/library/; a maker's device from the netlist takes precedence.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "models/curves.h"
#include "models/sourced.h"

namespace sunder::models {

enum class DeviceKind { none, isolator, breaker, fuse, residual };
enum class ResidualType { AC, A, F, B };

/// What a device lets through, from the best source there is.
struct LetThrough {
  /// How the bound was obtained; printed as the basis of a heating verdict.
  enum class Basis {
    none,          ///< only the safe bound I2 (m + n) 0.1 s
    energy_class,  ///< limiting class of EN 60898-1: `total` up to Icn
    fuse_limits,   ///< total bounded by the least pre-arcing value of the rating 1.6 times higher
    falling,       ///< cartridge fuse: operating I2t does not rise above its last figure point
    points,        ///< maker's points
  };
  Basis basis = Basis::none;
  double total = kNever;           ///< greatest let-through [A2s] at short-circuit currents
  double valid_from = 0;           ///< prospective current [A] from which `total` holds
  double pre_arcing_min = 0;       ///< least I2t [A2s] that may melt a fuse; 0: not known
  std::vector<CurvePoint> points;  ///< maker's: current [A] against I2t [A2s]
  Confidence confidence = Confidence::declared;
  std::string source;
};

/// A device resolved from text or table, family data put in, everything in amperes and seconds.
struct Device {
  std::string text;    ///< as the user wrote it or a like form: "B 32 A 6 kA 30 mA A"
  std::string family;  ///< "B", "C", "D", "gG", "BS 88-2", ..., "RCD", "switch", or the [device.x] name
  DeviceKind kind = DeviceKind::none;
  double In = 0;   ///< rated current [A]
  double Icn = 0;  ///< breaking capacity [A]; 0: not given
  Confidence Icn_confidence = Confidence::declared;
  double I2_ratio = 0;              ///< conventional operating current / In; 0: not known
  double overload_factor = 1;       ///< In <= factor * Iz (0.725 for semi-enclosed fuses)
  bool I2_deemed = false;           ///< standard deems I2 <= 1.45 Iz met when In <= Iz
  Band overcurrent;                 ///< driven by each line (and a protected neutral)
  Curve interpolated;               ///< gates joined by straight lines, to tell "undecided" from "fails"
  bool by_gates = false;            ///< latest edge is a staircase of a standard's test points
  double instantaneous_low = 0;     ///< no instantaneous trip up to this current [A]; 0: none
  double instantaneous_high = 0;    ///< instantaneous trip from this current [A]; 0: none
  double IdN = 0;                   ///< rated residual operating current [A]; 0: none
  bool selective_residual = false;  ///< type S
  ResidualType residual_type = ResidualType::AC;
  Band residual;  ///< driven by the residual current
  LetThrough let_through;
  Confidence confidence = Confidence::declared;  ///< of the curves
  std::string source;                            ///< published source of the curves
  Origin at{};

  [[nodiscard]] bool present() const noexcept { return kind != DeviceKind::none; }
};

/// What the parts of a device text say before the family is looked up.
struct DeviceSpec {
  std::string family;
  double In = 0;           ///< [A]; 0: not given
  double Icn = 0;          ///< [A]; 0: not given
  double IdN = 0;          ///< [A]; 0: not given
  bool selective = false;  ///< S
  bool has_type = false;
  ResidualType type = ResidualType::AC;
  int energy_class = 0;     ///< 1 or 3 (2 in the edition before 2019); 0: not given
  double multiple_low = 0;  ///< maker's own instantaneous band, multiples of In; 0: the family's
  double multiple_high = 0;
};

/// One row of a family's data: the gates or points of one rating.
struct FamilyRow {
  double In = 0;                     ///< [A]
  std::vector<CurvePoint> latest;    ///< gates or figure points [A, s]
  std::vector<CurvePoint> earliest;  ///< gates [A, s]; empty: not known
  double pre_arcing_min = 0;         ///< [A2s]; 0: not known
  double pre_arcing_max = 0;         ///< [A2s]
  Confidence confidence = Confidence::memory;
  std::string note;
  std::vector<CurvePoint> between;  ///< points [A, s] that only tell "undecided" from "fails"
  double I2_ratio = 0;              ///< conventional operating current / In; 0: the family's
  Confidence pre_arcing_confidence = Confidence::memory;
};

struct EnergyRow {
  double In_above = 0;  ///< [A], exclusive
  double In_to = 0;     ///< [A], inclusive
  double Icn = 0;       ///< [A]
  int energy_class = 0;
  std::string family;      ///< "B" or "C"
  double let_through = 0;  ///< [A2s]
  Confidence confidence = Confidence::memory;
};

/// A device family as its data file gives it.
struct DeviceFamily {
  enum class Form { breaker, gates, points, isolator, residual };
  std::string name;   ///< "B", "gG", "BS 88-2", "RCD", "switch"
  std::string title;  ///< "Circuit-breaker type B to IEC/EN 60898-1"
  Form form = Form::points;
  DeviceKind kind = DeviceKind::fuse;
  // breakers: multiples of In
  double no_trip = 0;                     ///< 1.13
  double conventional_trip = 0;           ///< 1.45
  double thermal_gate = 0;                ///< 2.55: within thermal_latest, not before thermal_earliest
  double thermal_earliest = 0;            ///< [s]
  double thermal_latest_small = 0;        ///< [s], In <= small_to
  double thermal_latest_large = 0;        ///< [s]
  double magnetic_low = 0;                ///< 3, 5, 10
  double magnetic_high = 0;               ///< 5, 10, 20
  double low_latest_small = 0;            ///< latest time at magnetic_low [s], In <= small_to; 0: not known
  double low_latest_large = 0;            ///< [s]
  double small_to = 32;                   ///< [A]
  double conventional_time_small = 3600;  ///< [s], In <= 63 A
  double conventional_time_large = 7200;  ///< [s]
  double I2_ratio = 0;
  double overload_factor = 1;
  bool I2_deemed = false;
  double least_Icn = 0;  ///< breaking capacity the standard demands of every such device [A]; 0: none
  Confidence least_Icn_confidence = Confidence::memory;
  bool falling_let_through = false;  ///< cartridge fuse, see LetThrough::Basis::falling
  std::vector<double> ratings;       ///< [A], preferred ones, ascending (for remedies and help)
  std::vector<FamilyRow> rows;       ///< fuses: one a rating
  std::vector<EnergyRow> energy;     ///< breakers
  // residual current devices: multiples of IdN
  std::vector<CurvePoint> residual_latest, residual_latest_s;  ///< multiple of IdN, time [s]
  std::vector<CurvePoint> residual_earliest_s;                 ///< S: multiple of IdN, time [s]
  double residual_no_trip = 0.5;
  double residual_earliest_s_500 = 0;  ///< S: does not operate before this time at 500 A [s]; 0: not known
  Confidence confidence = Confidence::memory;
  std::string source;
};

/// Why a spec cannot be made a device: one sentence, and the nearest valid ratings where that is it.
struct DeviceError {
  std::string message;
};

/// Puts family data into a spec: bands in amperes, breaking capacity, let-through.
///
/// Breakers: gates of IEC 60898-1 (latest stays at the last guaranteed time until the next
/// guaranteed current). gG: gates of IEC 60269-1. Fuse points: straight on log-log paper.
/// @param family   the overcurrent family of spec.family (nullptr for "RCD" and "switch" forms alone)
/// @param residual the residual current family, used where spec.IdN > 0; may be nullptr otherwise
/// Errors: a rating the family does not have; an energy class without Icn or not in the table;
///         S on 30 mA or less; multiples out of order.
[[nodiscard]] std::optional<DeviceError> resolve_device(const DeviceSpec& spec, const DeviceFamily* family,
                                                        const DeviceFamily* residual, Device& out);

}  // namespace sunder::models
