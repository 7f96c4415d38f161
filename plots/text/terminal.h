// SPDX-License-Identifier: Apache-2.0
/// @file
/// What a report may assume of the place it is shown at: width, colour, today's date.
#pragma once

#include <string>

#include "plots/text/report.h"

namespace sunder::plots {

/// "2026-12-01" in local time; the day of SOURCE_DATE_EPOCH (UTC) where that is set, so that output can
/// be reproduced. "" if there is no such day.
[[nodiscard]] std::string today();

/// Style for a file descriptor: colour on a terminal only, never with NO_COLOR or TERM=dumb; the terminal's
/// width between 70 and 160 columns, else 100; today's date. `shown` false: the text goes elsewhere.
[[nodiscard]] TextStyle style_for(int descriptor, bool shown);

}  // namespace sunder::plots
