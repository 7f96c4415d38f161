// SPDX-License-Identifier: Apache-2.0
/// @file
/// Ways to spoil a text, drawn from a seeded generator so that every case can be had again.
#pragma once

#include <cstdint>
#include <string>

namespace sunder::fuzz {

/// A small generator of our own (splitmix64): the same numbers on every machine.
class Dice {
 public:
  explicit Dice(std::uint64_t seed) : state_(seed) {}
  std::uint64_t next() noexcept;
  /// 0 .. n - 1; 0 for n = 0.
  std::size_t below(std::size_t n) noexcept;

 private:
  std::uint64_t state_;
};

/// `text` with one to six mutations: bytes, lines, numbers, units, pieces of another seed, odd characters.
[[nodiscard]] std::string mutated(const std::string& text, const std::string& other, Dice& dice);

}  // namespace sunder::fuzz
