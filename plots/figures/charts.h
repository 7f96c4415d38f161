// SPDX-License-Identifier: Apache-2.0
/// @file
/// Drawings by gnuplot: coordination chart of a path, chart of a sweep.
#pragma once

#include <optional>
#include <string>

#include "solver/results.h"

namespace sunder::plots {

/// Draws to `path` (.svg, .png or .pdf decides the form): written beside it and renamed, so that a
/// half-drawn file never stands there.
/// @return nothing on success, else one sentence: unknown ending, gnuplot missing or failed, not writable.
[[nodiscard]] std::optional<std::string> draw_coordination(const solver::PathChart& chart, const std::string& path);
[[nodiscard]] std::optional<std::string> draw_sweep(const solver::Sweep& sweep, const std::string& path);

/// The numbers behind the coordination chart, for --json of `draw`.
[[nodiscard]] std::string chart_json(const solver::PathChart& chart);

}  // namespace sunder::plots
