// SPDX-License-Identifier: Apache-2.0
/// @file
/// Writing a file so that it stands there whole or not at all.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace sunder::plots {

enum class IfExists { replace, refuse };

/// A file that does not yet exist beside `target`, to be written and then put in its place. It is
/// removed when the object goes and it was not put in place.
class PendingFile {
 public:
  /// `ending` is kept at the end of the temporary name (".svg").
  PendingFile(std::string target, std::string_view ending);
  ~PendingFile();
  PendingFile(const PendingFile&) = delete;
  PendingFile& operator=(const PendingFile&) = delete;

  /// Why it could not be made, "" if it was.
  [[nodiscard]] const std::string& error() const noexcept { return error_; }
  [[nodiscard]] const std::string& path() const noexcept { return path_; }

  /// Puts it in the target's place. @return nothing on success, else one sentence.
  [[nodiscard]] std::optional<std::string> commit(IfExists if_exists);

 private:
  std::string target_, path_, error_;
};

/// Writes `text` to `path` by way of a temporary file beside it.
/// Errors: one sentence: a directory, a folder that does not exist, not writable, a full disk, or (refuse) a
/// file that already exists.
[[nodiscard]] std::optional<std::string> write_file(const std::string& path, std::string_view text,
                                                    IfExists if_exists = IfExists::replace);

/// The first of `files` that `path` names, by whatever way or link; "" where it is none of them.
[[nodiscard]] std::string same_file(const std::string& path, const std::vector<std::string>& files);

}  // namespace sunder::plots
