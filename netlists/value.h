// SPDX-License-Identifier: Apache-2.0
/// @file
/// Text files as trees of values with places, the same for TOML tables and rows of a schedule.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "models/sourced.h"

namespace sunder::netlists {

struct Member;

/// One value of a file. `at` points at its first character (of a text: the one after the quote).
struct Value {
  enum class Form : std::uint8_t { text, number, flag, list, table, other };
  Form form = Form::other;
  bool flag = false;
  double number = 0;
  std::string text;  ///< of a text; of a number as it would be written
  models::Origin at{};
  int width = 1;                ///< characters
  std::vector<Value> items;     ///< of a list
  std::vector<Member> members;  ///< of a table, in order of place

  /// nullptr where the table has no such key.
  [[nodiscard]] const Value* find(std::string_view key) const noexcept;
};

struct Member {
  std::string key;
  models::Origin at{};  ///< of the key
  int width = 1;        ///< of the key, characters
  Value value;
};

/// "a text", "a number", "a table": for messages.
[[nodiscard]] std::string_view word(Value::Form form) noexcept;

/// Number of characters (code points) of UTF-8 text.
[[nodiscard]] int characters(std::string_view text) noexcept;

/// Without blanks at both ends.
[[nodiscard]] std::string_view trimmed(std::string_view text) noexcept;

/// Offset of the first byte that is not UTF-8, npos where all is.
[[nodiscard]] std::size_t first_not_utf8(std::string_view text) noexcept;

}  // namespace sunder::netlists
