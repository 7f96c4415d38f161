// SPDX-License-Identifier: Apache-2.0
#include "plots/text/files.h"

#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstdio>
#include <cstdlib>
#include <filesystem>
#include <system_error>
#include <utility>

namespace sunder::plots {
namespace {

std::string reason(int code) { return std::generic_category().message(code); }

}  // namespace

PendingFile::PendingFile(std::string target, std::string_view ending) : target_(std::move(target)) {
  struct stat info {};
  if (target_.empty()) {
    error_ = "no file name given";
    return;
  }
  // What a link names is replaced, not the link. Devices and pipes are not files to be renamed over.
  std::error_code trouble;
  const std::filesystem::path real = std::filesystem::canonical(target_, trouble);
  if (!trouble) target_ = real.string();
  if (::stat(target_.c_str(), &info) == 0 && !S_ISREG(info.st_mode)) {
    error_ = S_ISDIR(info.st_mode) ? "'" + target_ + "' is a directory" : "'" + target_ + "' is not a regular file";
    return;
  }
  const std::filesystem::path folder = std::filesystem::path(target_).parent_path();
  path_ = ((folder.empty() ? std::filesystem::path(".") : folder) / ".sunder-XXXXXX").string() + std::string(ending);
  const int file = ::mkstemps(path_.data(), static_cast<int>(ending.size()));
  if (file < 0) {
    error_ = "cannot write '" + target_ + "': " + reason(errno);
    path_.clear();
    return;
  }
  // mkstemps makes it private; a finished file has the rights that any new file would have.
  const mode_t mask = ::umask(0);
  ::umask(mask);
  if (::fchmod(file, 0666 & ~mask) != 0) error_ = "cannot write '" + target_ + "': " + reason(errno);
  ::close(file);
}

PendingFile::~PendingFile() {
  if (!path_.empty()) ::unlink(path_.c_str());
}

std::optional<std::string> PendingFile::commit(IfExists if_exists) {
  if (if_exists == IfExists::refuse) {
    // A hard link fails where the name exists, so nothing can slip in between asking and doing.
    if (::link(path_.c_str(), target_.c_str()) == 0) {
      ::unlink(path_.c_str());
      path_.clear();
      return std::nullopt;
    }
    if (errno == EEXIST) return "'" + target_ + "' already exists and is left as it is";
    // Some file systems have no hard links.
    if (::access(target_.c_str(), F_OK) == 0) return "'" + target_ + "' already exists and is left as it is";
  }
  if (std::rename(path_.c_str(), target_.c_str()) != 0) return "cannot write '" + target_ + "': " + reason(errno);
  path_.clear();
  return std::nullopt;
}

std::optional<std::string> write_file(const std::string& path, std::string_view text, IfExists if_exists) {
  struct stat info {};
  if (if_exists == IfExists::refuse && ::lstat(path.c_str(), &info) == 0) {
    return "'" + path + "' already exists and is left as it is";
  }
  PendingFile pending(path, "");
  if (!pending.error().empty()) return pending.error();
  std::FILE* file = std::fopen(pending.path().c_str(), "wb");
  if (file == nullptr) return "cannot write '" + path + "': " + reason(errno);
  errno = 0;
  const bool whole = std::fwrite(text.data(), 1, text.size(), file) == text.size();
  const bool closed = std::fclose(file) == 0;
  if (!whole || !closed) return "cannot write '" + path + "': " + reason(errno);
  return pending.commit(if_exists);
}

std::string same_file(const std::string& path, const std::vector<std::string>& files) {
  if (path.empty()) return {};
  for (const std::string& file : files) {
    std::error_code trouble;  // a file that does not exist is no other
    if (!file.empty() && std::filesystem::equivalent(path, file, trouble) && !trouble) return file;
  }
  return {};
}

}  // namespace sunder::plots
