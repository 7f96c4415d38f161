// SPDX-License-Identifier: Apache-2.0
#include "plots/text/tables.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <cstdint>

namespace sunder::plots {
namespace {

// One code point from the front of `text`; an ill-formed byte counts as one.
std::size_t code_point(std::string_view text, std::uint32_t& point) noexcept {
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[i]); };
  const unsigned lead = byte(0);
  std::size_t length = 1;
  if (lead >= 0xF0 && lead < 0xF8)
    length = 4;
  else if (lead >= 0xE0)
    length = 3;
  else if (lead >= 0xC0)
    length = 2;
  if (length == 1 || length > text.size()) {
    point = lead;
    return 1;
  }
  point = lead & (0xFFU >> (length + 1));
  for (std::size_t i = 1; i < length; ++i) {
    if ((byte(i) & 0xC0U) != 0x80U) return 1;
    point = (point << 6U) | (byte(i) & 0x3FU);
  }
  return length;
}

int width_of(std::uint32_t p) noexcept {
  if ((p >= 0x300 && p <= 0x36F) || (p >= 0x200B && p <= 0x200F) || p == 0xFEFF) return 0;
  if ((p >= 0x1100 && p <= 0x115F) || (p >= 0x2E80 && p <= 0xA4CF) || (p >= 0xAC00 && p <= 0xD7A3) ||
      (p >= 0xF900 && p <= 0xFAFF) || (p >= 0xFE30 && p <= 0xFE6F) || (p >= 0xFF00 && p <= 0xFF60) ||
      (p >= 0x1F300 && p <= 0x1FAFF) || (p >= 0x20000 && p <= 0x3FFFD)) {
    return 2;
  }
  return 1;
}

std::vector<std::string_view> lines_of(std::string_view text) {
  std::vector<std::string_view> lines;
  for (;;) {
    const std::size_t end = text.find('\n');
    lines.push_back(text.substr(0, end));
    if (end == std::string_view::npos) return lines;
    text.remove_prefix(end + 1);
  }
}

std::string padded(std::string_view text, int width, Align align) {
  const int blanks = std::max(0, width - display_width(text));
  const std::string pad(static_cast<std::size_t>(blanks), ' ');
  return align == Align::left ? std::string(text) + pad : pad + std::string(text);
}

void strip_end(std::string& line) {
  while (!line.empty() && line.back() == ' ') line.pop_back();
}

}  // namespace

int display_width(std::string_view text) noexcept {
  int width = 0;
  while (!text.empty()) {
    std::uint32_t point = 0;
    text.remove_prefix(code_point(text, point));
    width += width_of(point);
  }
  return width;
}

std::string clip(std::string_view text, int width) {
  if (display_width(text) <= width) return std::string(text);
  const int room = std::max(0, width - 2);
  std::size_t kept = 0;
  int used = 0;
  while (kept < text.size()) {
    std::uint32_t point = 0;
    const std::size_t length = code_point(text.substr(kept), point);
    if (used + width_of(point) > room) break;
    used += width_of(point);
    kept += length;
  }
  return std::string(text.substr(0, kept)) + std::string("..").substr(0, static_cast<std::size_t>(std::max(0, width)));
}

std::string wrap(std::string_view text, int width, std::string_view first) {
  std::string out;
  const std::string indent(static_cast<std::size_t>(display_width(first)), ' ');
  std::string line(first);
  bool fresh = true;
  while (!text.empty()) {
    const std::size_t start = text.find_first_not_of(" \t\r\n");
    if (start == std::string_view::npos) break;
    text.remove_prefix(start);
    const std::size_t end = std::min(text.find_first_of(" \t\r\n"), text.size());
    const std::string_view word = text.substr(0, end);
    text.remove_prefix(end);
    if (!fresh && display_width(line) + 1 + display_width(word) > width) {
      out += line + '\n';
      line = indent;
      fresh = true;
    }
    if (!fresh) line += ' ';
    line += word;
    fresh = false;
  }
  strip_end(line);
  return out + line + '\n';
}

std::string Table::text(int width, int indent) const {
  constexpr int kGap = 2;
  const std::size_t n = columns_.size();
  std::vector<int> widths(n, 0);
  const auto measure = [&](std::size_t i, std::string_view cell) {
    for (const std::string_view line : lines_of(cell)) widths[i] = std::max(widths[i], display_width(line));
  };
  for (std::size_t i = 0; i < n; ++i) measure(i, columns_[i].heading);
  for (const auto& row : rows_) {
    for (std::size_t i = 0; i < std::min(n, row.size()); ++i) measure(i, row[i]);
  }
  // The widest left column gives way first, so that addresses and numbers stay whole the longest.
  const auto total = [&] {
    int sum = indent;
    for (const int w : widths) sum += w;
    return sum + kGap * (static_cast<int>(n) - 1);
  };
  while (total() > width) {
    std::size_t widest = n;
    for (std::size_t i = 0; i < n; ++i) {
      if (columns_[i].align != Align::left || widths[i] <= columns_[i].least) continue;
      if (widest == n || widths[i] > widths[widest]) widest = i;
    }
    if (widest == n) break;
    --widths[widest];
  }
  std::string out;
  const auto print = [&](const std::vector<std::string_view>& cells) {
    std::vector<std::vector<std::string_view>> split;
    std::size_t height = 1;
    for (const std::string_view cell : cells) {
      split.push_back(lines_of(cell));
      height = std::max(height, split.back().size());
    }
    for (std::size_t k = 0; k < height; ++k) {
      std::string line(static_cast<std::size_t>(indent), ' ');
      for (std::size_t i = 0; i < n; ++i) {
        const std::string_view cell = i < split.size() && k < split[i].size() ? split[i][k] : std::string_view();
        const std::string shown = columns_[i].align == Align::left ? clip(cell, widths[i]) : std::string(cell);
        line += padded(shown, widths[i], columns_[i].align);
        if (i + 1 < n) line += std::string(kGap, ' ');
      }
      strip_end(line);
      out += line + '\n';
    }
  };
  std::vector<std::string_view> cells;
  for (const Column& column : columns_) cells.emplace_back(column.heading);
  print(cells);
  std::string rule(static_cast<std::size_t>(indent), ' ');
  for (std::size_t i = 0; i < n; ++i) {
    rule += std::string(static_cast<std::size_t>(widths[i]), '-');
    if (i + 1 < n) rule += std::string(kGap, ' ');
  }
  out += rule + '\n';
  for (const auto& row : rows_) {
    cells.assign(row.begin(), row.end());
    if (row.empty())
      out += '\n';
    else
      print(cells);
  }
  return out;
}

std::string ink(const TextStyle& style, Ink kind, std::string_view text) {
  if (!style.colour) return std::string(text);
  const char* code = "1";
  switch (kind) {
    case Ink::heading:
      code = "1";
      break;
    case Ink::good:
      code = "32";
      break;
    case Ink::bad:
      code = "1;31";
      break;
    case Ink::open:
      code = "1;33";
      break;
    case Ink::faint:
      code = "2";
      break;
  }
  return fmt::format("\x1b[{}m{}\x1b[0m", code, text);
}

std::string verdict_text(const TextStyle& style, solver::Verdict verdict, int width) {
  std::string text = word(verdict);
  if (verdict == solver::Verdict::fails || verdict == solver::Verdict::undecided) {
    for (char& c : text) c = static_cast<char>(c - 'a' + 'A');  // stands out without colour too
  }
  text = padded(text, width, Align::left);
  switch (verdict) {
    case solver::Verdict::meets:
      return ink(style, Ink::good, text);
    case solver::Verdict::fails:
      return ink(style, Ink::bad, text);
    case solver::Verdict::undecided:
      return ink(style, Ink::open, text);
    case solver::Verdict::noted:
      break;
  }
  return text;
}

std::string value_text(double value, models::Quantity unit, int digits) {
  if (std::isnan(value)) return "-";
  if (std::isinf(value)) return unit == models::Quantity::time ? "never" : "unbounded";
  return models::format_quantity(value, unit, digits);
}

std::string margin_text(double margin) {
  if (!std::isfinite(margin)) return "";
  const double percent = 100 * margin;
  if (std::fabs(percent) >= 1000) return percent > 0 ? "> +999 %" : "< -999 %";
  // The sign stays where rounding makes a miss look like zero: "-0.0 %".
  return std::fabs(percent) >= 100 ? fmt::format("{:+.0f} %", std::clamp(percent, -999.0, 999.0))
                                   : fmt::format("{:+.1f} %", percent);
}

std::string cell_text(double value, int digits, bool time) {
  if (std::isnan(value)) return "-";
  if (std::isinf(value)) return time ? "never" : "unb.";
  return models::format_number(value, digits);
}

}  // namespace sunder::plots
