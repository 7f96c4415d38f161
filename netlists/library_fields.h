// SPDX-License-Identifier: Apache-2.0
/// @file
/// Fields of one table of the library's data files, with every defect noted. For library.cpp alone:
/// it brings in the TOML parser.
#pragma once

#include <fmt/format.h>

#include <array>
#include <set>
#include <string>
#include <string_view>
#include <utility>
#include <variant>
#include <vector>

#include "models/curves.h"
#include "models/sourced.h"
#include "models/units.h"
#include "netlists/toml_parser.h"

namespace sunder::netlists {

/// One table of a data file. Every key must be asked for; those that were not are errors.
class Fields {
 public:
  Fields(const toml::table& table, std::string where, std::vector<std::string>& errors)
      : table_(table), where_(std::move(where)), errors_(errors) {}

  void complain(const std::string& sentence) { errors_.push_back(fmt::format("{}: {}", where_, sentence)); }

  [[nodiscard]] bool has(std::string_view key) const { return table_.contains(key); }

  /// nullptr where there is no such key; that is an error if it is `required`.
  const toml::node* find(std::string_view key, bool required) {
    used_.emplace(key);
    const toml::node* node = table_.get(key);
    if (node == nullptr && required) complain(fmt::format("'{}' is missing", key));
    return node;
  }

  void number(std::string_view key, double& out, bool required = false) {
    const toml::node* node = find(key, required);
    if (node == nullptr) return;
    if (const auto value = node->value<double>()) {
      out = *value;
    } else {
      complain(fmt::format("'{}' is not a number", key));
    }
  }

  void whole(std::string_view key, int& out) {
    double value = out;
    number(key, value);
    out = static_cast<int>(value);
  }

  void text(std::string_view key, std::string& out, bool required = false) {
    const toml::node* node = find(key, required);
    if (node == nullptr) return;
    if (const auto value = node->value<std::string>(); value && !value->empty()) {
      out = *value;
    } else {
      complain(fmt::format("'{}' is not a text", key));
    }
  }

  void flag(std::string_view key, bool& out) {
    const toml::node* node = find(key, false);
    if (node == nullptr) return;
    if (const auto value = node->value<bool>()) {
      out = *value;
    } else {
      complain(fmt::format("'{}' is neither true nor false", key));
    }
  }

  void quantity(std::string_view key, models::Quantity kind, double& out, bool required = false) {
    std::string typed;
    text(key, typed, required);
    if (typed.empty()) return;
    const auto value = models::parse_quantity(typed, kind);
    if (const auto* number = std::get_if<double>(&value)) {
      out = *number;
    } else {
      complain(fmt::format("'{}': {}", key, std::get<models::UnitError>(value).message));
    }
  }

  /// One of the words of a closed list, given as (word, value).
  template <class T, std::size_t N>
  void choice(std::string_view key, const std::array<std::pair<std::string_view, T>, N>& words, T& out,
              bool required = false) {
    std::string typed;
    text(key, typed, required);
    if (typed.empty()) return;
    for (const auto& [word, value] : words) {
      if (word == typed) {
        out = value;
        return;
      }
    }
    complain(fmt::format("'{}' has the unknown word '{}'", key, typed));
  }

  void status(std::string_view key, models::Confidence& out, bool required) {
    static constexpr std::array<std::pair<std::string_view, models::Confidence>, 5> kWords = {{
        {"found", models::Confidence::found},
        {"derived", models::Confidence::derived},
        {"checked", models::Confidence::checked},
        {"memory", models::Confidence::memory},
        {"low", models::Confidence::low},
    }};
    choice(key, kWords, out, required);
  }

  void numbers(std::string_view key, std::vector<double>& out) {
    const toml::node* node = find(key, false);
    if (node == nullptr) return;
    const toml::array* array = node->as_array();
    if (array == nullptr) return complain(fmt::format("'{}' is not a list", key));
    for (const toml::node& item : *array) {
      if (const auto value = item.value<double>()) {
        out.push_back(*value);
      } else {
        complain(fmt::format("'{}' holds something that is not a number", key));
      }
    }
  }

  /// [[current, time], ...], both above 0, currents not falling.
  void points(std::string_view key, std::vector<models::CurvePoint>& out) {
    const toml::node* node = find(key, false);
    if (node == nullptr) return;
    const toml::array* array = node->as_array();
    if (array == nullptr) return complain(fmt::format("'{}' is not a list", key));
    for (const toml::node& item : *array) {
      const toml::array* pair = item.as_array();
      const bool two = pair != nullptr && pair->size() == 2;
      const double current = two ? pair->get(0)->value_or(0.0) : 0.0;
      const double time = two ? pair->get(1)->value_or(0.0) : 0.0;
      if (current <= 0 || time <= 0) {
        return complain(fmt::format("'{}' holds something that is not a pair of positive numbers", key));
      }
      if (!out.empty() && current < out.back().current) complain(fmt::format("'{}' has a falling current", key));
      if (!out.empty() && time > out.back().time) complain(fmt::format("'{}' has a rising time", key));
      out.push_back({current, time});
    }
  }

  /// Calls `read` with the fields of each table in a list of tables.
  template <class Read>
  void tables(std::string_view key, bool required, const Read& read) {
    const toml::node* node = find(key, required);
    if (node == nullptr) return;
    const toml::array* array = node->as_array();
    if (array == nullptr) return complain(fmt::format("'{}' is not a list of tables", key));
    std::size_t n = 0;
    for (const toml::node& item : *array) {
      ++n;
      const toml::table* table = item.as_table();
      if (table == nullptr) return complain(fmt::format("'{}' holds something that is not a table", key));
      Fields fields(*table, fmt::format("{}, {} {}", where_, key, n), errors_);
      read(fields);
      fields.finish();
    }
  }

  /// To be called last.
  void finish() {
    for (const auto& [key, node] : table_) {
      if (used_.find(std::string(key.str())) == used_.end()) complain(fmt::format("unknown key '{}'", key.str()));
    }
  }

 private:
  const toml::table& table_;
  std::string where_;
  std::vector<std::string>& errors_;
  std::set<std::string, std::less<>> used_;
};

}  // namespace sunder::netlists
