// SPDX-License-Identifier: Apache-2.0
/// @file
/// The five conductors of an installation and sets of them.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>

namespace sunder::models {

enum class Conductor : std::uint8_t { L1, L2, L3, N, PE };
inline constexpr std::size_t kConductors = 5;

[[nodiscard]] constexpr std::size_t index(Conductor c) noexcept { return static_cast<std::size_t>(c); }

/// Which conductors reach a place.
class ConductorSet {
 public:
  constexpr ConductorSet() = default;
  constexpr ConductorSet(std::initializer_list<Conductor> list) {
    for (const Conductor c : list) add(c);
  }
  constexpr void add(Conductor c) noexcept { bits_ = static_cast<std::uint8_t>(bits_ | (1U << index(c))); }
  constexpr void remove(Conductor c) noexcept { bits_ = static_cast<std::uint8_t>(bits_ & ~(1U << index(c))); }
  [[nodiscard]] constexpr bool has(Conductor c) const noexcept { return ((bits_ >> index(c)) & 1U) != 0; }
  [[nodiscard]] constexpr bool contains(ConductorSet other) const noexcept { return (other.bits_ & ~bits_) == 0; }
  [[nodiscard]] constexpr int lines() const noexcept {
    return int{has(Conductor::L1)} + int{has(Conductor::L2)} + int{has(Conductor::L3)};
  }
  [[nodiscard]] constexpr bool empty() const noexcept { return bits_ == 0; }
  [[nodiscard]] constexpr bool operator==(const ConductorSet&) const noexcept = default;

 private:
  std::uint8_t bits_ = 0;
};

[[nodiscard]] constexpr const char* name(Conductor c) noexcept {
  constexpr const char* names[] = {"L1", "L2", "L3", "N", "PE"};
  return names[index(c)];
}

/// "L1 L2 L3 N", PE left out (it is implied on every circuit).
[[nodiscard]] inline std::string phases_text(ConductorSet set) {
  std::string text;
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N}) {
    if (!set.has(c)) continue;
    if (!text.empty()) text += ' ';
    text += name(c);
  }
  return text;
}

}  // namespace sunder::models
