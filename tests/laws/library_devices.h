// SPDX-License-Identifier: Apache-2.0
/// @file
/// Every device that the library can make: each family in each rating, breakers with and without an
/// energy class and a residual element, residual devices general and S.
#pragma once

#include <cstdlib>
#include <vector>

#include "models/devices.h"
#include "netlists/library.h"

namespace sunder::laws {

inline const std::vector<models::Device>& library_devices() {
  static const std::vector<models::Device> all = [] {
    const auto& families = netlists::library().families;
    const models::DeviceFamily* residual = nullptr;
    for (const models::DeviceFamily& family : families)
      if (family.form == models::DeviceFamily::Form::residual) residual = &family;
    std::vector<models::Device> made;
    const auto add = [&](const models::DeviceFamily& family, const models::DeviceSpec& spec) {
      models::Device device;
      // Only a library without this rating or class may refuse; a test of the library looks at
      // that.
      if (!models::resolve_device(spec, &family, residual, device)) made.push_back(device);
    };
    for (const models::DeviceFamily& family : families) {
      if (family.form == models::DeviceFamily::Form::isolator) continue;
      models::DeviceSpec spec;
      spec.family = family.name;
      if (family.form == models::DeviceFamily::Form::residual) {
        spec.In = 63;
        for (const double IdN : {0.01, 0.03, 0.1, 0.3, 0.5}) {
          spec.IdN = IdN;
          for (const bool delayed : {false, true}) {
            spec.selective = delayed;
            add(family, spec);
          }
        }
        continue;
      }
      for (const double In : family.ratings) {
        spec.In = In;
        add(family, spec);
        if (family.form != models::DeviceFamily::Form::breaker) continue;
        models::DeviceSpec limited = spec;
        limited.Icn = 10000;
        limited.energy_class = 3;
        add(family, limited);
        models::DeviceSpec combined = spec;
        combined.IdN = 0.03;
        add(family, combined);
      }
    }
    if (made.empty()) std::abort();
    return made;
  }();
  return all;
}

}  // namespace sunder::laws
