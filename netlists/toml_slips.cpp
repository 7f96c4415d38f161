// SPDX-License-Identifier: Apache-2.0
/// @file
/// Looking at a line that could not be parsed the way a person would.
#include "netlists/toml_slips.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>

#include "netlists/value.h"

namespace sunder::netlists {

namespace {

constexpr std::array<std::string_view, 8> kTypographic = {"\u201C", "\u201D", "\u201E", "\u2018",
                                                          "\u2019", "\u201A", "\u00AB", "\u00BB"};

bool is_digit(char c) noexcept { return c >= '0' && c <= '9'; }

bool all_digits(std::string_view text) noexcept {
  return !text.empty() && std::all_of(text.begin(), text.end(), is_digit);
}

// Numbers, dates and flags need no quotes.
bool stands_bare(std::string_view value) noexcept {
  for (const std::string_view word : {"true", "false", "inf", "nan", "+inf", "-inf"}) {
    if (value == word) return true;
  }
  if (value.substr(0, 2) == "0x" || value.substr(0, 2) == "0o" || value.substr(0, 2) == "0b") return true;
  return !value.empty() && (is_digit(value.front()) || value.front() == '-' || value.front() == '+') &&
         value.find_first_not_of("0123456789+-._:TZeE") == std::string_view::npos;
}

// Length of a typographic quote at `i`, 0 where there is none.
std::size_t typographic(std::string_view line, std::size_t i) noexcept {
  for (const std::string_view sign : kTypographic) {
    if (line.substr(i, sign.size()) == sign) return sign.size();
  }
  return 0;
}

std::string without_quotes(std::string_view value) {
  std::string text;
  for (std::size_t i = 0; i < value.size();) {
    const std::size_t sign = typographic(value, i);
    if (sign == 0 && value[i] != '"') text += value[i];
    i += std::max<std::size_t>(sign, 1);
  }
  return std::string(trimmed(text));
}

// Behind the text that opens at `i`.
std::size_t behind_text(std::string_view line, std::size_t i) noexcept {
  const char quote = line[i];
  for (++i; i < line.size(); ++i) {
    if (quote == '"' && line[i] == '\\')
      ++i;
    else if (line[i] == quote)
      return i + 1;
  }
  return line.size();
}

std::optional<Slip> slip_of(std::string_view line, std::string_view key, std::size_t start, bool in_braces) {
  std::size_t end = std::min(line.find_first_of(in_braces ? ",}#" : "#", start), line.size());
  const std::size_t sign = typographic(line, start);
  if (sign > 0) {  // a separator in the text does not end it
    for (std::size_t i = start + sign; i < line.size(); ++i) {
      if (const std::size_t close = typographic(line, i); close > 0 || line[i] == '"') {
        end = std::max(end, i + std::max<std::size_t>(close, 1));
        break;
      }
    }
    const std::string text = without_quotes(line.substr(start, end - start));
    return Slip{start, end - start, fmt::format("{} stands in typographic quotes", key),
                fmt::format("straight ones are needed: {} = \"{}\"", key, text)};
  }
  std::string_view value = trimmed(line.substr(start, end - start));
  const bool closed_only = value.size() > 1 && value.find_first_of("\"'") == value.size() - 1;  // 20 m"
  if (closed_only) value.remove_suffix(1);
  if (value.empty() || value.find_first_of("\"'") != std::string_view::npos) return std::nullopt;
  // 0,95: the comma parts the fields of a table, or ends the number
  std::size_t comma = in_braces && end < line.size() && line[end] == ',' ? end : line.find(',', start);
  if (comma != std::string_view::npos && all_digits(trimmed(line.substr(start, comma - start))) &&
      comma + 1 < line.size() && is_digit(line[comma + 1])) {
    const std::size_t stop = std::min(line.find_first_of(",}#", comma + 1), line.size());
    const std::string_view rest = trimmed(line.substr(comma + 1, stop - comma - 1));
    if (rest.find('=') == std::string_view::npos) {
      const std::string number = fmt::format("{}.{}", trimmed(line.substr(start, comma - start)), rest);
      const bool unit = !all_digits(rest);
      return Slip{start, comma + 1 + rest.size() - start, fmt::format("{} has a decimal comma", key),
                  unit ? fmt::format("decimals take a point, and a text needs quotes: {} = \"{}\"", key, number)
                       : fmt::format("decimals take a point: {} = {}", key, number)};
    }
  }
  if (stands_bare(value)) return std::nullopt;
  std::string small(value);
  std::transform(small.begin(), small.end(), small.begin(),
                 [](char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c; });
  if (small == "yes" || small == "no" || small == "true" || small == "false") {
    return Slip{start, value.size(), fmt::format("{} is neither true nor false", key),
                fmt::format("{} = {}", key, small == "yes" || small == "true" ? "true" : "false")};
  }
  return Slip{start, value.size(), fmt::format("{} is a text without quotes", key),
              fmt::format("a text needs quotes: {} = \"{}\"", key, value)};
}

}  // namespace

std::optional<Slip> find_slip(std::string_view line) {
  int braces = 0;
  std::size_t begin = 0;  // of the key
  std::size_t i = 0;
  while (i < line.size() && line[i] != '#') {
    const char c = line[i];
    if (c == '"' || c == '\'') {
      i = behind_text(line, i);
      continue;
    }
    if (c == '{') ++braces;
    if (c == '}') --braces;
    if (c == '{' || c == ',') begin = i + 1;
    if (c == '=') {
      const std::string_view key = trimmed(line.substr(begin, i - begin));
      const std::size_t start = line.find_first_not_of(" \t", i + 1);
      if (start == std::string_view::npos || key.empty()) return std::nullopt;
      i = start;
      if (line.find_first_of("\"'[{#", start) == start) continue;
      if (auto slip = slip_of(line, key, start, braces > 0)) return slip;
      continue;
    }
    ++i;
  }
  return std::nullopt;
}

std::string one_line_hint(std::string_view heading, std::string_view line) {
  const std::string_view key = trimmed(line.substr(0, line.find('=')));
  if (heading.empty() || key.empty()) return "write it on one line";
  return fmt::format("write it on one line, or as a table of its own: [{}.{}]", heading, key);
}

bool text_left_open(std::string_view line) noexcept {
  for (std::size_t i = 0; i < line.size() && line[i] != '#';) {
    if (line[i] != '"' && line[i] != '\'') {
      ++i;
      continue;
    }
    const std::size_t end = behind_text(line, i);
    if (end == line.size() && (end - i < 2 || line[end - 1] != line[i])) return true;
    i = end;
  }
  return false;
}

int open_braces(std::string_view line) noexcept {
  int n = 0;
  for (std::size_t i = 0; i < line.size() && line[i] != '#';) {
    if (line[i] == '"' || line[i] == '\'') {
      i = behind_text(line, i);
      continue;
    }
    if (line[i] == '{') ++n;
    if (line[i] == '}') --n;
    ++i;
  }
  return n;
}

}  // namespace sunder::netlists
