// SPDX-License-Identifier: Apache-2.0
/// @file
/// From text to a network, with every complaint about the text in one run.
#pragma once

#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "models/network.h"

namespace sunder::netlists {

enum class Severity { error, warning, note };

/// One thing to say about a place in a file. A note belongs to the diagnostic before it.
struct Diagnostic {
  Severity severity = Severity::error;
  std::string file;            ///< as the user named it
  int line = 0;                ///< from 1; 0: the file as a whole
  int column = 0;              ///< from 1, in characters (bytes of UTF-8 counted as one character each code point)
  int width = 1;               ///< characters to underline
  std::string message;         ///< one sentence, no full stop
  std::string source_line;     ///< the line's text, "" where there is none
  std::size_t stands_for = 1;  ///< errors; more than one where the rest is only counted
  std::string hint;            ///< "did you mean 'swa-xlpe-cu-4c'?", "" if none
};

/// What came of reading. `network` is absent if there is any error.
struct Reading {
  std::optional<models::Network> network;
  std::vector<Diagnostic> diagnostics;  ///< in order of place; warnings too
};

inline constexpr std::size_t kLargestFile = 64U << 20U;  ///< [bytes]

/// Reads a netlist file and the schedules it names (relative to the netlist's folder).
/// Errors: as diagnostics; nothing is thrown, nothing printed.
[[nodiscard]] Reading read_network(const std::string& path);

/// The same from text in memory; `name` stands for the file in diagnostics, `folder` for schedules.
[[nodiscard]] Reading read_network_text(const std::string& text, const std::string& name,
                                        const std::string& folder = ".");

/// A device text by itself, such as "C 20 A 6 kA", with the families of a network that has been read; a
/// text that a device of the network bears (the name of a [device.x] too) gives that device again.
/// @return the device, or one sentence on what is wrong with the text
[[nodiscard]] std::variant<models::Device, std::string> read_device_text(const models::Network& network,
                                                                         const std::string& text);

/// file:line:column: severity: message / the line / caret / hint, as one block of text, tabs kept.
[[nodiscard]] std::string format_diagnostic(const Diagnostic& diagnostic);

/// A commented starter netlist that reads without error and checks clean.
[[nodiscard]] std::string starter_netlist(const std::string& title);

}  // namespace sunder::netlists
