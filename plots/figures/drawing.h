// SPDX-License-Identifier: Apache-2.0
/// @file
/// Handing a script to gnuplot and a finished drawing to its file.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "plots/figures/scales.h"

namespace sunder::plots {

// A sheet of the proportions of A4 across, in canvas units; fonts are in the same units.
inline constexpr double kSheetWidth = 1120;
inline constexpr double kSheetHeight = 792;
inline constexpr double kFont = 12;
inline constexpr double kSmallFont = 10.5;

/// Colours that stay apart for colour-blind readers (Okabe and Ito 2008), yellow left out: too faint on
/// white. Dash and fill pattern change with the colour, so that grey prints tell them apart too.
struct Look {
  const char* colour;
  const char* dash;  ///< gnuplot dash type
  int pattern;       ///< gnuplot fill pattern
  int point;         ///< gnuplot point type
};
[[nodiscard]] const Look& look(std::size_t index) noexcept;

/// A text as a gnuplot string literal: control characters become blanks, nothing is interpreted.
[[nodiscard]] std::string gnuplot_text(std::string_view text);

/// The same for the label of a tick, which gnuplot reads as a number format: a "%" is doubled.
[[nodiscard]] std::string tick_text(std::string_view text);

/// A number as gnuplot reads it, whatever the locale.
[[nodiscard]] std::string number(double value);

/// "set label" at a canvas place, vertically centred. `justify`: left, right, center.
[[nodiscard]] std::string label_at(std::string_view text, double x, double y, const char* justify, double font,
                                   bool bold = false);
/// The same in a white rectangle that keeps what lies behind from crossing it.
[[nodiscard]] std::string label_in(std::string_view text, const Rect& rect, double font, bool bold);
/// A straight line between canvas places. `style`: gnuplot line properties.
[[nodiscard]] std::string line_between(Spot a, Spot b, std::string_view style);
/// Leader from a label to its anchor, "" where it needs none.
[[nodiscard]] std::string leader_of(const PlacedLabel& label);
/// Borders of the plotted area in canvas units.
[[nodiscard]] std::string area_at(const Rect& area);

/// Runs gnuplot on a script that plots onto the sheet and puts the drawing at `path` (.svg, .png, .pdf).
/// @return nothing on success, else one sentence: unknown ending, gnuplot missing or failed, not writable.
[[nodiscard]] std::optional<std::string> draw(const std::string& script, const std::string& path);

}  // namespace sunder::plots
