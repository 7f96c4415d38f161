// SPDX-License-Identifier: Apache-2.0
/// @file
/// A TOML text as a tree of values; the only place besides the library's reader that sees the parser.
#pragma once

#include <string>
#include <string_view>

#include "netlists/complaints.h"
#include "netlists/value.h"

namespace sunder::netlists {

struct TomlDocument {
  Value root;           ///< a table
  bool parsed = false;  ///< false: nothing could be made of the text
  std::string lost;     ///< lines that were left out after an error, so that what follows is not blamed
};

/// Parses `text`, known to `complaints` as `file`. The parser stops at its first error: it is recorded,
/// its line (or a repeated table, or one with a broken heading) is blanked in a copy, and the copy is
/// parsed again, kMostSyntaxErrors times at most.
[[nodiscard]] TomlDocument parse_toml(std::string_view text, std::uint32_t file, Complaints& complaints);

inline constexpr int kMostSyntaxErrors = 20;

}  // namespace sunder::netlists
