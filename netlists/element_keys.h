// SPDX-License-Identifier: Apache-2.0
/// @file
/// The keys of one element, read as the vocabulary says: unknown keys, missing ones, wrong units,
/// impossible and unusual values are complained of here and nowhere else.
#pragma once

#include <complex>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "netlists/context.h"

namespace sunder::netlists {

class ElementKeys {
 public:
  /// Complains at once of unknown keys and missing obligatory ones.
  /// @param what  the element in words, "submain 'S1'"
  /// @param at    where it begins
  ElementKeys(Context& context, const Value& table, const models::Kind& kind, std::string what, models::Origin at);

  [[nodiscard]] const Value* find(std::string_view key) const noexcept { return table_.find(key); }
  [[nodiscard]] const std::string& what() const noexcept { return what_; }
  [[nodiscard]] models::Origin at() const noexcept { return at_; }

  /// Each returns nothing where the key is absent or, after a complaint, wrong.
  [[nodiscard]] std::optional<double> quantity(std::string_view key);
  [[nodiscard]] std::optional<double> number(std::string_view key);
  [[nodiscard]] std::optional<std::string> text(std::string_view key);
  [[nodiscard]] std::optional<std::string> choice(std::string_view key);
  [[nodiscard]] std::optional<bool> flag(std::string_view key);
  [[nodiscard]] std::optional<int> whole(std::string_view key);
  [[nodiscard]] models::Sourced<double> sourced(std::string_view key);

  /// An impedance with its reactance, or that per length: resistance not negative, not nothing at all.
  /// @param least, most  magnitudes that are usual [ohm or ohm/m]; others are warned about
  [[nodiscard]] std::optional<std::complex<double>> impedance(std::string_view key, models::Quantity quantity,
                                                              double least, double most);

  /// A table, or after a complaint nullptr.
  [[nodiscard]] const Value* table(std::string_view key);
  [[nodiscard]] const Value* list(std::string_view key);

  /// Complains where `key` is absent, as of an obligatory key that the vocabulary does not call so.
  /// @return whether it is there
  bool require(std::string_view key);

  /// Complains of the keys among `keys` that stand there, with `reason` behind "KEY of WHAT ".
  void refuse(const std::vector<std::string_view>& keys, std::string_view reason, std::string_view hint = {});

  /// From here on no value of `key` is unusual.
  void ignore_band(std::string_view key) { unbanded_ = key; }

  void wrong_form(const Value& value, std::string_view key, std::string_view expected);

 private:
  [[nodiscard]] std::string table_hint(std::string_view key, const Value& value) const;
  [[nodiscard]] std::optional<double> in_range(const models::Key& key, const Value& value, double si);

  Context& context_;
  const Value& table_;
  const models::Kind& kind_;
  std::string what_;
  models::Origin at_;
  std::string_view unbanded_;
  std::vector<std::string_view> meant_;  // by unknown keys, and so not missed as well
};

/// Place of the character `offset` bytes into a text value.
[[nodiscard]] models::Origin inside(const Value& value, std::size_t offset) noexcept;

/// Phases text as a set, with N where the text means one; nothing after a complaint.
[[nodiscard]] std::optional<models::ConductorSet> read_phases(Context& context, const Value& value,
                                                              const std::string& what);

}  // namespace sunder::netlists
