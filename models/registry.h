// SPDX-License-Identifier: Apache-2.0
/// @file
/// The netlist's vocabulary, once: every kind of element and every key with its meaning, unit,
/// range, default and help. Reader, `sunder help netlist`, the README's reference, the schema and the
/// nearest-name suggestions all come from here.
#pragma once

#include <string_view>
#include <vector>

#include "models/units.h"

namespace sunder::models {

enum class ValueForm {
  quantity,   ///< text with a unit, read by parse_quantity
  text,       ///< free text
  choice,     ///< one of `choices`
  flag,       ///< true or false
  number,     ///< bare number or text that is one
  device,     ///< device text, table, or name of a [device.x]
  cable,      ///< "<construction> <size>"
  cpc,        ///< "core", "armour", "armour + core", "armour + 16 mm2", "16 mm2"
  phases,     ///< "L1", "L1 L2 L3", "L1 L2 L3 N"
  reference,  ///< name of another element
  list,       ///< list of texts
  table,      ///< a table with keys of its own, listed as kind "<kind>.<key>"
  points,     ///< list of pairs [current, time or I2t]
};

struct Key {
  std::string_view name;
  ValueForm form = ValueForm::text;
  Quantity quantity = Quantity::count;
  bool required = false;
  double least = 0, most = 0;                      ///< possible values, SI; both 0: any
  double plausible_least = 0, plausible_most = 0;  ///< warned about outside; both 0: no band
  std::string_view choices;                        ///< "sockets|fixed|lighting|distribution", separated by |
  std::string_view by_default;                     ///< as text, "" where there is none
  std::string_view help;                           ///< one sentence
  bool above = false;                              ///< `least` itself is not possible: "must be above 0 m"
  std::string_view unless = {};                    ///< of an obligatory key: not where this other one stands
};

struct Kind {
  std::string_view name;     ///< "submain"; "" for the top of the file
  std::string_view help;     ///< one sentence
  std::string_view example;  ///< a line or table of TOML that is valid in its place
  std::vector<Key> keys;
};

/// Every kind, in the order a reader would write them.
[[nodiscard]] const std::vector<Kind>& registry();

/// nullptr where there is none.
[[nodiscard]] const Kind* find_kind(std::string_view name) noexcept;
[[nodiscard]] const Key* find_key(const Kind& kind, std::string_view name) noexcept;

/// The nearest of `names` by edit distance, "" when none is within max(1, length / 3); ties by spelling. Names of
/// one letter are near to nothing.
[[nodiscard]] std::string_view nearest_name(std::string_view wrong, const std::vector<std::string_view>& names);

}  // namespace sunder::models
