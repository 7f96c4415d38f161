// SPDX-License-Identifier: Apache-2.0
/// @file
/// The data files of models/library/, as text, embedded at build time.
#pragma once

#include <string_view>
#include <vector>

namespace sunder::models {

struct LibraryFile {
  std::string_view name;  ///< file name, "cables-pvc.toml"
  std::string_view text;  ///< its whole content, UTF-8
};

/// Every data file, by name in alphabetical order. Parsed by netlists/library.h on first use.
const std::vector<LibraryFile>& library_files();

}  // namespace sunder::models
