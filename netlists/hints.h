// SPDX-License-Identifier: Apache-2.0
/// @file
/// What to say to a slip that is no misspelling: words of the trade for keys, keys in the wrong place,
/// devices and cables as a drawing names them.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "models/devices.h"
#include "models/registry.h"

namespace sunder::netlists {

/// How a device text is written.
inline constexpr std::string_view kDeviceForm = "form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]";

/// A key that `kind` does not have: the key that the trade's word means, the place where the key belongs,
/// the nearest name, or at least the keys there are.
/// @param table  whether its value is a table
[[nodiscard]] std::string unknown_key_hint(const models::Kind& kind, std::string_view key, bool table);

/// The key of `kind` that an unknown one stands for, as a word of the trade or by spelling; "" where none is near.
[[nodiscard]] std::string_view meant_key(const models::Kind& kind, std::string_view key);

/// Where a key of that very name belongs, "" where no kind has it.
[[nodiscard]] std::string key_belongs(const models::Kind* here, std::string_view key);

/// The one of `valid` that is meant by a text that differs in blanks, signs or capitals, is the beginning
/// of one alone, or is another name of it ("PME"); "" where there is none.
[[nodiscard]] std::string_view meant_choice(std::string_view key, std::string_view text,
                                            const std::vector<std::string_view>& valid);

/// A device text that begins with no family: how it would be written.
/// @param nearest  "did you mean 'x'?" by spelling alone, "" where nothing is near
[[nodiscard]] std::string device_hint(const std::vector<models::DeviceFamily>& families, std::string_view text,
                                      std::string nearest);

/// A construction that does not exist: those that hold all words of the text.
[[nodiscard]] std::string cable_hint(const std::vector<std::string_view>& names, std::string_view text);

/// "boards are: intake, workshop", cut after some.
[[nodiscard]] std::string listed(std::string_view what, const std::vector<std::string_view>& names);

}  // namespace sunder::netlists
