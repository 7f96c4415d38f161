// SPDX-License-Identifier: Apache-2.0
/// @file
/// Slips of form that the TOML parser refuses in words of its own: quotes forgotten, decimal commas,
/// a table in { } over several lines.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>

namespace sunder::netlists {

struct Slip {
  std::size_t offset = 0;  ///< of the value in the line [bytes]
  std::size_t length = 1;  ///< [bytes]
  std::string message;
  std::string hint;  ///< the value as it would be written
};

/// The first value of a line that is no value of TOML, nothing where none stands out.
[[nodiscard]] std::optional<Slip> find_slip(std::string_view line);

/// How a table in { } that was begun in `line` would be written, under the heading above it.
[[nodiscard]] std::string one_line_hint(std::string_view heading, std::string_view line);

/// Whether a text is still open at the end of the line.
[[nodiscard]] bool text_left_open(std::string_view line) noexcept;

/// Brackets { } opened less those closed in a line, outside its texts and its comment.
[[nodiscard]] int open_braces(std::string_view line) noexcept;

}  // namespace sunder::netlists
