// SPDX-License-Identifier: Apache-2.0
/// @file
/// Layout of plain text: aligned columns, wrapped paragraphs, colour where it is wanted.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "plots/text/report.h"

namespace sunder::plots {

enum class Align { left, right };

/// Columns a text takes on a terminal: code points, wide East Asian ones twice, combining ones not.
[[nodiscard]] int display_width(std::string_view text) noexcept;

/// The text cut to `width` columns, its end replaced by "..", never inside a code point.
[[nodiscard]] std::string clip(std::string_view text, int width);

/// Paragraph broken at blanks so that no line is wider than `width`; a longer word stays whole.
/// The first line starts with `first`, the others with blanks of the same width.
[[nodiscard]] std::string wrap(std::string_view text, int width, std::string_view first = "");

/// Rows of cells in aligned columns. A cell may hold several lines ('\n'). Numbers stand right.
class Table {
 public:
  struct Column {
    std::string heading;  ///< may hold several lines
    Align align = Align::left;
    int least = 8;  ///< a left column that must give way is not made narrower
  };

  explicit Table(std::vector<Column> columns) : columns_(std::move(columns)) {}
  void add(std::vector<std::string> cells) { rows_.push_back(std::move(cells)); }
  /// An empty line between groups of rows.
  void gap() { rows_.emplace_back(); }
  [[nodiscard]] bool empty() const noexcept { return rows_.empty(); }

  /// The whole table, every line ended; left columns are clipped until it fits `width`.
  [[nodiscard]] std::string text(int width, int indent = 0) const;

 private:
  std::vector<Column> columns_;
  std::vector<std::vector<std::string>> rows_;
};

/// What is emphasised and how, where colour is on.
enum class Ink { heading, good, bad, open, faint };
[[nodiscard]] std::string ink(const TextStyle& style, Ink kind, std::string_view text);

/// "FAILS" and the like in its colour, padded to `width` before colouring.
[[nodiscard]] std::string verdict_text(const TextStyle& style, solver::Verdict verdict, int width = 0);

/// A value as an engineer writes it; infinite: "never" for times, else "unbounded"; NaN: "-".
[[nodiscard]] std::string value_text(double value, models::Quantity unit, int digits = 4);

/// A margin in percent of the limit: "+12.5 %", "-310 %", "< -999 %", "" where there is none.
[[nodiscard]] std::string margin_text(double margin);

/// A bare number for a column that carries the unit: "-" for NaN, "never"/"unb." for infinity.
[[nodiscard]] std::string cell_text(double value, int digits = 4, bool time = false);

}  // namespace sunder::plots
