// SPDX-License-Identifier: Apache-2.0
#include "plots/text/terminal.h"

#include <catch2/catch.hpp>
#include <cstdlib>
#include <string>

using namespace sunder;

TEST_CASE("The date of a report can be fixed from outside, in UTC") {
  const char* before = std::getenv("SOURCE_DATE_EPOCH");
  const std::string kept = before != nullptr ? before : "";
  REQUIRE(::setenv("SOURCE_DATE_EPOCH", "951782400", 1) == 0);
  CHECK(plots::today() == "2000-02-29");
  REQUIRE(::setenv("SOURCE_DATE_EPOCH", kept.c_str(), 1) == 0);
  CHECK(plots::today().size() == 10);
  if (before == nullptr) ::unsetenv("SOURCE_DATE_EPOCH");
}

TEST_CASE("Text that does not go to a terminal has no colour and 100 columns") {
  CHECK_FALSE(plots::style_for(1, false).colour);
  CHECK(plots::style_for(1, false).width == 100);
  CHECK_FALSE(plots::style_for(-1, true).colour);  // not a terminal at all
}
