// SPDX-License-Identifier: Apache-2.0
#include "plots/text/files.h"

#include <catch2/catch.hpp>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>

using namespace sunder::plots;
using Catch::Matchers::Contains;
namespace fs = std::filesystem;

namespace {

class Folder {
 public:
  Folder() {
    std::string name = (fs::temp_directory_path() / "sunder-test-XXXXXX").string();
    REQUIRE(::mkdtemp(name.data()) != nullptr);
    path_ = name;
  }
  ~Folder() {
    std::error_code ignored;
    fs::remove_all(path_, ignored);
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  [[nodiscard]] std::string file(const char* name) const { return (path_ / name).string(); }
  [[nodiscard]] std::ptrdiff_t count() const {
    return std::distance(fs::directory_iterator(path_), fs::directory_iterator());
  }

 private:
  fs::path path_;
};

std::string content(const std::string& path) {
  std::ifstream stream(path, std::ios::binary);
  std::ostringstream text;
  text << stream.rdbuf();
  return text.str();
}

}  // namespace

TEST_CASE("A file is written whole, replaced whole, and nothing else is left beside it") {
  const Folder folder;
  REQUIRE_FALSE(write_file(folder.file("a.txt"), "one\n"));
  REQUIRE_FALSE(write_file(folder.file("a.txt"), "two\n"));
  CHECK(content(folder.file("a.txt")) == "two\n");
  CHECK(folder.count() == 1);
}

TEST_CASE("A file that must not be overwritten is left as it is") {
  const Folder folder;
  REQUIRE_FALSE(write_file(folder.file("a.txt"), "mine\n", IfExists::refuse));
  const auto trouble = write_file(folder.file("a.txt"), "other\n", IfExists::refuse);
  REQUIRE(trouble);
  CHECK_THAT(*trouble, Contains("already exists"));
  CHECK(content(folder.file("a.txt")) == "mine\n");
  CHECK(folder.count() == 1);
}

TEST_CASE("A directory, a missing folder and an empty name are refused with a sentence") {
  const Folder folder;
  CHECK_THAT(write_file(folder.file("."), "x").value_or(""), Contains("is a directory"));
  CHECK_THAT(write_file(folder.file("none/a.txt"), "x").value_or(""), Contains("cannot write"));
  CHECK_THAT(write_file("", "x").value_or(""), Contains("no file name"));
  CHECK(folder.count() == 0);
}

TEST_CASE("A pending file that is not put in place vanishes") {
  const Folder folder;
  {
    const PendingFile pending(folder.file("a.svg"), ".svg");
    REQUIRE(pending.error().empty());
    CHECK(fs::exists(pending.path()));
    CHECK(fs::path(pending.path()).extension() == ".svg");
  }
  CHECK(folder.count() == 0);
}

TEST_CASE("Writing through a link replaces what it names and keeps the link") {
  const Folder folder;
  REQUIRE_FALSE(write_file(folder.file("real.txt"), "old\n"));
  fs::create_symlink("real.txt", folder.file("link.txt"));
  REQUIRE_FALSE(write_file(folder.file("link.txt"), "new\n"));
  CHECK(content(folder.file("real.txt")) == "new\n");
  CHECK(fs::is_symlink(folder.file("link.txt")));
}
