// SPDX-License-Identifier: Apache-2.0
/// @file
/// Short ways to devices and cables of the embedded library, for the tests of this folder.
#pragma once

#include <algorithm>
#include <catch2/catch.hpp>
#include <string>
#include <vector>

#include "netlists/library.h"

namespace sunder::tests {

/// The item of that name; the test fails where there is none.
template <class T>
const T& named(const std::vector<T>& items, const std::string& name) {
  const auto found = std::find_if(items.begin(), items.end(), [&](const T& item) { return item.name == name; });
  if (found == items.end()) FAIL("no '" << name << "' in the library");
  return *found;
}

inline const models::DeviceFamily& family(const std::string& name) { return named(netlists::library().families, name); }

inline const models::CableConstruction& construction(const std::string& name) {
  return named(netlists::library().constructions, name);
}

inline const models::RuleSet& rules(const std::string& name) { return named(netlists::library().rule_sets, name); }

/// The device of `spec`, resolved with the library; the test fails where it cannot be.
inline models::Device resolved(const models::DeviceSpec& spec) {
  models::Device device;
  const auto error = models::resolve_device(spec, &family(spec.family), &family("RCD"), device);
  if (error) FAIL(error->message);
  return device;
}

inline models::Device resolved(const std::string& family_name, double In) {
  models::DeviceSpec spec;
  spec.family = family_name;
  spec.In = In;
  return resolved(spec);
}

/// Why `spec` is refused, "" where it is not.
inline std::string refusal(const models::DeviceSpec& spec) {
  models::Device device;
  const auto error = models::resolve_device(spec, &family(spec.family), &family("RCD"), device);
  return error ? error->message : "";
}

}  // namespace sunder::tests
