// SPDX-License-Identifier: Apache-2.0
/// @file
/// JSON forms that belong to no result struct: errors, help, version, what a command wrote.
#pragma once

#include <string>
#include <vector>

#include "plots/text/fields.h"
#include "plots/text/help.h"

namespace sunder::plots {

/// A complaint of any stage, for `sunder.errors/1`.
struct Complaint {
  std::string severity;      ///< "error", "warning", "note"
  std::string file;          ///< "" if it is about no file
  int line = 0, column = 0;  ///< 0: none
  std::string message;
  std::string source_line;
  std::string hint;
};

/// {"format":"sunder.errors/1","errors":[...]}
[[nodiscard]] std::string errors_json(const std::vector<Complaint>& complaints);

/// {"format":"sunder.help/1","topic":..., ...}
[[nodiscard]] std::string help_json(const HelpTopic& topic);

/// A record with its "format" in front, as JSON text with a line end: {"format":"sunder.new/1", ...}.
[[nodiscard]] std::string record_json(const std::string& format, const Record& record);

}  // namespace sunder::plots
