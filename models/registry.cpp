// SPDX-License-Identifier: Apache-2.0
/// @file
/// Looking things up in the vocabulary, and the nearest name to a misspelt one.
#include "models/registry.h"

#include <algorithm>
#include <numeric>
#include <string>

namespace sunder::models {

namespace {

// Edit distance with insertion, deletion, substitution and the exchange of neighbours, given up once
// it must exceed `limit`.
std::size_t distance(std::string_view a, std::string_view b, std::size_t limit) {
  const std::size_t difference = a.size() > b.size() ? a.size() - b.size() : b.size() - a.size();
  if (difference > limit) return limit + 1;
  std::vector<std::size_t> before(b.size() + 1), row(b.size() + 1), next(b.size() + 1);
  std::iota(row.begin(), row.end(), std::size_t{0});
  for (std::size_t i = 1; i <= a.size(); ++i) {
    next[0] = i;
    std::size_t least = next[0];
    for (std::size_t j = 1; j <= b.size(); ++j) {
      const std::size_t substituted = row[j - 1] + (a[i - 1] == b[j - 1] ? 0U : 1U);
      next[j] = std::min({row[j] + 1, next[j - 1] + 1, substituted});
      if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1]) {
        next[j] = std::min(next[j], before[j - 2] + 1);
      }
      least = std::min(least, next[j]);
    }
    if (least > limit + 1) return limit + 1;
    before.swap(row);
    row.swap(next);
  }
  return row[b.size()];
}

}  // namespace

const Kind* find_kind(std::string_view name) noexcept {
  for (const Kind& kind : registry()) {
    if (kind.name == name) return &kind;
  }
  return nullptr;
}

const Key* find_key(const Kind& kind, std::string_view name) noexcept {
  for (const Key& key : kind.keys) {
    if (key.name == name) return &key;
  }
  return nullptr;
}

std::string_view nearest_name(std::string_view wrong, const std::vector<std::string_view>& names) {
  constexpr std::size_t kLongest = 200;  // a longer text is no misspelt name
  if (wrong.size() < 2 || wrong.size() > kLongest) return {};
  const std::size_t limit = std::max<std::size_t>(1, wrong.size() / 3);
  std::string_view best;
  std::size_t best_distance = limit + 1;
  for (const std::string_view name : names) {
    if (name.size() < 2) continue;  // of one letter any other is as near
    const std::size_t d = distance(wrong, name, limit);
    if (d < best_distance || (d == best_distance && d <= limit && name < best)) {
      best = name;
      best_distance = d;
    }
  }
  return best_distance <= limit ? best : std::string_view{};
}

}  // namespace sunder::models
