// SPDX-License-Identifier: Apache-2.0
/// @file
/// Where a value came from: its place in the user's text and how far it can be trusted.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>

namespace sunder::models {

/// A place in a file that the network was read from. file 0 means "nowhere" (an assumption).
struct Origin {
  std::uint32_t file = 0;    ///< index into Network::files
  std::uint32_t line = 0;    ///< from 1
  std::uint32_t column = 0;  ///< from 1
};

/// How well a reference value is supported; the worst one used is carried to the finding.
enum class Confidence : std::uint8_t {
  declared,  ///< the user's own value
  found,     ///< seen at the source named
  derived,   ///< worked out from values seen
  checked,   ///< from memory, an independent check agrees
  memory,    ///< from memory
  low,       ///< from memory, low confidence: to be checked against the standard before use
};

/// The word for it in data files, JSON and reports: "declared", "found", ...
[[nodiscard]] constexpr std::string_view word(Confidence confidence) noexcept {
  constexpr std::string_view words[] = {"declared", "found", "derived", "checked", "memory", "low"};
  return words[static_cast<std::size_t>(confidence)];
}

[[nodiscard]] constexpr Confidence worse(Confidence a, Confidence b) noexcept { return a < b ? b : a; }

/// A value with its place. `given` is false where the reader put in a default or an assumption.
template <class T>
struct Sourced {
  T value{};
  Origin at{};
  bool given = false;

  explicit operator bool() const noexcept { return given; }
};

}  // namespace sunder::models
