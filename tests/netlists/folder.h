// SPDX-License-Identifier: Apache-2.0
/// @file
/// A folder of files for one test, gone when the test is over.
#pragma once

#include <unistd.h>

#include <filesystem>
#include <fstream>
#include <string>
#include <string_view>

namespace sunder::netlists {

class Folder {
 public:
  explicit Folder(std::string_view name)
      : path_(std::filesystem::temp_directory_path() / (std::string(name) + std::to_string(getpid()))) {
    std::filesystem::create_directories(path_);
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  ~Folder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
  }

  [[nodiscard]] std::string write(const std::string& name, std::string_view content) const {
    std::ofstream(path_ / name, std::ios::binary) << content;
    return (path_ / name).string();
  }
  [[nodiscard]] std::string path(const std::string& name = "") const {
    return name.empty() ? path_.string() : (path_ / name).string();
  }

 private:
  std::filesystem::path path_;
};

}  // namespace sunder::netlists
