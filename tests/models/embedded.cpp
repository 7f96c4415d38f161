// SPDX-License-Identifier: Apache-2.0
/// @file
/// The data files inside the program.
#include <catch2/catch.hpp>
#include <string>

#include "models/library_files.h"

namespace {

TEST_CASE("Data files are embedded whole and in alphabetical order") {
  const auto& files = sunder::models::library_files();
  REQUIRE(files.size() >= 11);
  for (std::size_t i = 0; i < files.size(); ++i) {
    CAPTURE(files[i].name);
    REQUIRE_FALSE(files[i].text.empty());
    CHECK(files[i].text.front() == '#');
    CHECK(files[i].text.back() == '\n');
    CHECK(files[i].text.find('\0') == std::string_view::npos);
    if (i > 0) CHECK(files[i - 1].name < files[i].name);
  }
}

}  // namespace
