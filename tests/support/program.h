// SPDX-License-Identifier: Apache-2.0
/// @file
/// Runs the built program as a user would, in a folder that vanishes with the test.
#pragma once

#include <string>
#include <vector>

namespace sunder::support {

/// A folder of its own under the system's folder for temporary files; removed with everything in it.
class Folder {
 public:
  Folder();  ///< aborts the test with the system's reason if none can be made
  ~Folder();
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  Folder(Folder&&) = delete;
  Folder& operator=(Folder&&) = delete;

  [[nodiscard]] const std::string& path() const noexcept { return path_; }
  [[nodiscard]] std::string file(const std::string& name) const { return path_ + "/" + name; }
  /// Writes bytes as they are; an existing file is replaced.
  void write(const std::string& name, const std::string& bytes) const;
  /// @return the whole file, "" if there is none
  [[nodiscard]] std::string read(const std::string& name) const;
  [[nodiscard]] bool has(const std::string& name) const;

 private:
  std::string path_;
};

/// What a run left behind.
struct Outcome {
  int status = -1;  ///< exit status; 128 + signal if one ended it
  std::string out;  ///< standard output
  std::string err;  ///< standard error
};

/// The built `sunder` with these arguments, its current directory the folder, its input empty.
/// Errors: one that cannot be started has status 127 and says why in `err`.
[[nodiscard]] Outcome run_sunder(const std::vector<std::string>& arguments, const Folder& folder);

/// The same for another program, found on the PATH: {"ngspice", "-b", "deck.cir"}.
[[nodiscard]] Outcome run_program(const std::vector<std::string>& command, const Folder& folder);

}  // namespace sunder::support
