// SPDX-License-Identifier: Apache-2.0
/// @file
/// A maker's device given by the points of its curves.
#pragma once

#include <optional>

#include "netlists/element_keys.h"

namespace sunder::netlists {

/// A value of one point, above 0; nothing after a complaint.
/// @param what  what it is of, for the sentence
[[nodiscard]] std::optional<double> point_value(Context& context, const Value& value, models::Quantity quantity,
                                                const std::string& what);

/// The device of a table with `kind`, `latest`, `earliest`, ...; nothing after a complaint.
/// @param residual  family that gives the residual release where only IdN is told
[[nodiscard]] std::optional<models::Device> device_by_points(Context& context, ElementKeys& fields,
                                                             const models::DeviceFamily* residual);

}  // namespace sunder::netlists
