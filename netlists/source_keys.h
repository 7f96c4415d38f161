// SPDX-License-Identifier: Apache-2.0
/// @file
/// Keys that supplies, transformers, generators and inverters have in common.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "netlists/element_keys.h"

namespace sunder::netlists {

inline constexpr double kSqrt3 = 1.7320508075688772;
inline constexpr double kLowVoltage = 1000;  ///< [V] the end of low voltage, between lines

/// What a voltage text says.
struct Nominal {
  double U0 = 230;  ///< line to neutral [V]
  double U = 400;   ///< line to line [V]
  models::ConductorSet lines{models::Conductor::L1, models::Conductor::L2, models::Conductor::L3};
  bool split_phase = false;
  bool high = false;  ///< above 1 kV: three lines, neither N nor PE
};

/// Which voltages an element may have besides "230/400 V" and those above 1 kV.
enum class VoltageForms { three_phase, single_phase, split_phase };  ///< each allows those before it too

/// Reads the key `voltage`; nothing after a complaint.
[[nodiscard]] std::optional<Nominal> read_voltage(Context& context, ElementKeys& fields, VoltageForms forms);

/// Reads the key `phases` of a source of one line into `lines`.
/// @param what   the kind of element: "supply"
/// @param known  whether its voltage was understood
void read_source_phases(Context& context, ElementKeys& fields, std::string_view kind, bool known, bool split_phase,
                        models::ConductorSet& lines);

/// Whether a voltage is above 1 kV, or was meant to be where it was not understood.
[[nodiscard]] bool maybe_high(const ElementKeys& fields, const std::optional<Nominal>& nominal) noexcept;

/// Reads the key `earthing`, obligatory up to 1 kV; nothing where it is absent or not understood.
[[nodiscard]] std::optional<models::Earthing> read_earthing(ElementKeys& fields, bool obligatory);

/// Capacitance of an IT network to earth [F], 0 where it is not given.
[[nodiscard]] double read_capacitance(ElementKeys& fields, models::Earthing earthing);

[[nodiscard]] bool is_tn(models::Earthing earthing) noexcept;

/// "solid", "open" or an impedance; nothing where the key is absent or, after a complaint, wrong.
[[nodiscard]] std::optional<models::StarPoint> read_star(Context& context, ElementKeys& fields, std::string_view key);

/// Whose star point it is: in TN that of a supply is earthed and joined as the network has it; that of a transformer
/// as the source is taken so without a word, others with an assumption.
enum class StarOwner { supply, transformer, other };

/// Reads `star_point` and `link`, and whether they fit the earthing.
/// @param high      above 1 kV, where there is no neutral to link
/// @return where neutral and protective conductor are joined at the board
bool read_star_and_link(Context& context, ElementKeys& fields, const std::string& name, models::Earthing earthing,
                        StarOwner owner, bool high, models::StarPoint& star);

/// Reads `tails` with the keys of `kind`.
/// @param conductors  live ones that they carry
/// @param high        above 1 kV: without a protective conductor
void read_tails(Context& context, ElementKeys& element, std::string_view kind, const std::string& name,
                models::ConductorSet conductors, bool high, models::Tails& tails);

/// A device under `key`, none where it is absent or not understood.
[[nodiscard]] models::Device read_device_key(Context& context, ElementKeys& fields, std::string_view key);

}  // namespace sunder::netlists
