// SPDX-License-Identifier: Apache-2.0
#include "tests/fuzz/mutations.h"

#include <algorithm>
#include <array>
#include <string_view>
#include <utility>
#include <vector>

namespace sunder::fuzz {

namespace {

using namespace std::string_view_literals;

constexpr std::array kNumbers = {"0"sv,   "-1"sv,       "1e9"sv,    "1e-9"sv,   "1e308"sv, "-1e308"sv,
                                 "nan"sv, "inf"sv,      "0.0001"sv, "999999"sv, "00"sv,    "1.2.3"sv,
                                 "2,5"sv, "\xC2\xBD"sv, "4e"sv,     "0x10"sv};
constexpr std::array kUnits = {"mm2"sv, "A"sv, "kA"sv,   "mA"sv, "ohm"sv, "mohm/m"sv, "m"sv,   "km"sv,
                               "kV"sv,  "V"sv, "degC"sv, "%"sv,  "s"sv,   "kVA"sv,    "MVA"sv, "furlong"sv};
constexpr std::array kWords = {"L1"sv,   "L1 L2 L3"sv, "N"sv,     "PE"sv,     "armour"sv, "core + core"sv, "TT"sv,
                               "TN-S"sv, "true"sv,     "false"sv, "switch"sv, "RCD"sv,    "gG"sv,          "B"sv};
constexpr std::array kOdd = {"\0"sv,
                             "\xFF"sv,
                             "\xC0\x80"sv,
                             "\xEF\xBB\xBF"sv,
                             "\xF0\x9F\x94\x8C"sv,
                             "\xE2\x80\xAE"sv,
                             "\xED\xA0\x80"sv,
                             "\r"sv,
                             "\t"sv,
                             "\""sv,
                             "\"\"\""sv,
                             "["sv,
                             "]"sv,
                             "{"sv,
                             "}"sv,
                             "="sv,
                             ";"sv,
                             "#"sv,
                             "\\u0000"sv,
                             "[["sv};

std::vector<std::pair<std::size_t, std::size_t>> lines_of(const std::string& text) {
  std::vector<std::pair<std::size_t, std::size_t>> lines;  // start, length with its end
  std::size_t start = 0;
  while (start < text.size()) {
    const std::size_t end = std::min(text.find('\n', start), text.size() - 1) + 1;
    lines.emplace_back(start, end - start);
    start = end;
  }
  return lines;
}

// Start and length of a random run of digits (and points).
std::pair<std::size_t, std::size_t> some_number(const std::string& text, Dice& dice) {
  const std::size_t from = dice.below(text.size());
  constexpr std::string_view kDigits = "0123456789.";
  std::size_t start = text.find_first_of("0123456789", from);
  if (start == std::string::npos) start = text.find_first_of("0123456789");
  if (start == std::string::npos) return {0, 0};
  const std::size_t end = std::min(text.find_first_not_of(kDigits, start), text.size());
  return {start, end - start};
}

void flip_bytes(std::string& text, Dice& dice) {
  for (std::size_t n = 1 + dice.below(4); n > 0; --n) {
    text[dice.below(text.size())] = static_cast<char>(dice.below(256));
  }
}

void delete_range(std::string& text, Dice& dice) {
  const std::size_t start = dice.below(text.size());
  text.erase(start, 1 + dice.below(20));
}

void change_lines(std::string& text, Dice& dice) {
  const auto lines = lines_of(text);
  if (lines.empty()) return;
  const auto [start, length] = lines[dice.below(lines.size())];
  const std::string line = text.substr(start, length);
  switch (dice.below(4)) {
    case 0:
      text.erase(start, length);
      break;
    case 1:
      text.insert(start, line);
      break;
    case 2: {
      text.erase(start, length);
      const auto rest = lines_of(text);
      text.insert(rest.empty() ? 0 : rest[dice.below(rest.size())].first, line);
      break;
    }
    default: {
      // the next line begins where this one is cut
      text.erase(start + dice.below(length), length);
      break;
    }
  }
}

void change_number(std::string& text, Dice& dice) {
  const auto [start, length] = some_number(text, dice);
  if (length == 0) return;
  switch (dice.below(4)) {
    case 0:
      text.replace(start, length, kNumbers[dice.below(kNumbers.size())]);
      break;
    case 1:
      text.insert(start, 1, static_cast<char>('0' + dice.below(10)));
      break;
    case 2:
      text.insert(start + length, 1, static_cast<char>('0' + dice.below(10)));
      break;
    default:
      text.replace(start, length, std::to_string(dice.below(1000)));
      break;
  }
}

// One digit for another: most of these still read, so that the solver meets odd values.
void nudge_number(std::string& text, Dice& dice) {
  const auto [start, length] = some_number(text, dice);
  if (length == 0) return;
  char& digit = text[start + dice.below(length)];
  if (digit != '.') digit = static_cast<char>('0' + dice.below(10));
}

void change_unit(std::string& text, Dice& dice) {
  const auto [start, length] = some_number(text, dice);
  if (length == 0) return;
  const std::size_t from = start + length;
  const std::size_t end = std::min(text.find_first_of("\",;\n", from), text.size());
  text.replace(from, end - from, std::string(" ") + std::string(kUnits[dice.below(kUnits.size())]));
}

void change_text(std::string& text, Dice& dice) {
  const std::size_t open = text.find('"', dice.below(text.size()));
  if (open == std::string::npos) return;
  const std::size_t close = text.find('"', open + 1);
  if (close == std::string::npos || close > open + 200) return;
  text.replace(open + 1, close - open - 1, kWords[dice.below(kWords.size())]);
}

// A name from elsewhere in the text, so that references meet other elements.
void swap_texts(std::string& text, Dice& dice) {
  const std::size_t from = text.find('"', dice.below(text.size()));
  if (from == std::string::npos) return;
  const std::size_t end = text.find('"', from + 1);
  if (end == std::string::npos || end > from + 200) return;
  const std::string piece = text.substr(from, end - from + 1);
  const std::size_t open = text.find('"', dice.below(text.size()));
  if (open == std::string::npos) return;
  const std::size_t close = text.find('"', open + 1);
  if (close == std::string::npos || close > open + 200) return;
  text.replace(open, close - open + 1, piece);
}

void splice(std::string& text, const std::string& other, Dice& dice) {
  if (other.empty()) return;
  const std::size_t start = dice.below(other.size());
  text.insert(dice.below(text.size() + 1), other, start, 1 + dice.below(200));
}

}  // namespace

std::uint64_t Dice::next() noexcept {
  state_ += 0x9E3779B97F4A7C15ULL;
  std::uint64_t z = state_;
  z = (z ^ (z >> 30U)) * 0xBF58476D1CE4E5B9ULL;
  z = (z ^ (z >> 27U)) * 0x94D049BB133111EBULL;
  return z ^ (z >> 31U);
}

std::size_t Dice::below(std::size_t n) noexcept { return n == 0 ? 0 : static_cast<std::size_t>(next() % n); }

std::string mutated(const std::string& text, const std::string& other, Dice& dice) {
  std::string made = text;
  if (dice.below(2) == 0) {
    for (std::size_t n = 1 + dice.below(3); n > 0; --n) {
      if (dice.below(6) == 0) {
        swap_texts(made, dice);
      } else {
        nudge_number(made, dice);
      }
    }
    return made;
  }
  for (std::size_t n = 1 + dice.below(6); n > 0 && !made.empty(); --n) {
    // values rather than form more often: what still parses goes deeper
    switch (dice.below(16)) {
      case 0:
        flip_bytes(made, dice);
        break;
      case 1:
        delete_range(made, dice);
        break;
      case 2:
      case 3:
        change_lines(made, dice);
        break;
      case 4:
      case 5:
      case 6:
      case 7:
        change_number(made, dice);
        break;
      case 8:
      case 9:
        change_unit(made, dice);
        break;
      case 10:
      case 11:
        change_text(made, dice);
        break;
      case 12:
      case 13:
        swap_texts(made, dice);
        break;
      case 14:
        if (dice.below(8) == 0) {
          made.resize(dice.below(made.size() + 1));  // cut short
        } else {
          splice(made, other, dice);
        }
        break;
      default:
        made.insert(dice.below(made.size() + 1), kOdd[dice.below(kOdd.size())]);
        break;
    }
  }
  return made;
}

}  // namespace sunder::fuzz
