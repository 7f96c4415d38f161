// SPDX-License-Identifier: Apache-2.0
/// @file
/// Gathers what there is to say about the files of one netlist, and puts it in order of place.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "models/sourced.h"
#include "netlists/reader.h"

namespace sunder::netlists {

class Complaints {
 public:
  /// After so many errors the rest is only counted; a file that is wrong throughout has one cause.
  static constexpr std::size_t kMost = 100;

  /// Makes a file known; `text` must outlive this object. @return its number, from 1.
  std::uint32_t add_file(std::string name, std::string_view text);

  void error(models::Origin at, int width, std::string message, std::string hint = {});
  void warn(models::Origin at, int width, std::string message, std::string hint = {});
  /// A second place that belongs to the complaint made last.
  void note(models::Origin at, std::string message);

  [[nodiscard]] bool any_error() const noexcept { return n_errors_ > 0; }
  /// No use in looking for hints any more.
  [[nodiscard]] bool full() const noexcept { return n_errors_ > kMost; }
  [[nodiscard]] std::vector<std::string> file_names() const;

  /// Everything, by file, line and column, each note behind what it belongs to.
  [[nodiscard]] std::vector<Diagnostic> in_order() const;

 private:
  struct File {
    std::string name;
    std::string_view text;
    std::vector<std::size_t> starts;  // of its lines
  };
  struct Entry {
    models::Origin at;
    Diagnostic main;
    std::vector<Diagnostic> notes;
  };

  [[nodiscard]] Diagnostic make(Severity severity, models::Origin at, int width, std::string message) const;
  [[nodiscard]] std::string line_of(models::Origin at) const;

  std::vector<File> files_;
  std::vector<Entry> entries_;
  std::size_t n_errors_ = 0;
  bool last_kept_ = false;
};

}  // namespace sunder::netlists
