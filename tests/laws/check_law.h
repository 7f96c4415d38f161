// SPDX-License-Identifier: Apache-2.0
/// @file
/// One property as one check of a test case; RapidCheck prints the network that breaks it.
#pragma once

#include <rapidcheck.h>

#include <catch2/catch.hpp>
#include <utility>

namespace sunder::laws {

template <class Property>
void check_law(Property&& property) {
  const bool held = rc::check(std::forward<Property>(property));
  CHECK(held);
}

}  // namespace sunder::laws
