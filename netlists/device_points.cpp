// SPDX-License-Identifier: Apache-2.0
/// @file
/// Points of curves: read, put in order, and held against each other.
#include "netlists/device_points.h"

#include <fmt/format.h>

#include <cmath>
#include <utility>
#include <variant>

namespace sunder::netlists {

namespace {

using models::Curve;
using models::CurvePoint;
using models::Device;
using models::DeviceKind;
using models::Quantity;

// A list of pairs; nothing where the key is absent or wrong, which `sound` tells apart.
std::vector<CurvePoint> read_points(Context& context, ElementKeys& fields, std::string_view key, Quantity second,
                                    bool falling, bool& sound) {
  std::vector<CurvePoint> points;
  if (fields.find(key) == nullptr) return points;
  const Value* list = fields.list(key);
  if (list == nullptr) {
    sound = false;
    return points;
  }
  const std::string what = fmt::format("{} of {}", key, fields.what());
  auto refuse = [&](const Value& value, std::string message) {
    context.complaints.error(value.at, value.width, std::move(message));
    sound = false;
  };
  if (list->items.empty()) refuse(*list, fmt::format("{} has no points", what));
  for (const Value& item : list->items) {
    if (item.form != Value::Form::list || item.items.size() != 2) {
      refuse(item, fmt::format("{}: a pair of two texts is expected", what));
      continue;
    }
    const auto current = point_value(context, item.items[0], Quantity::current, what);
    const auto other = point_value(context, item.items[1], second, what);
    if (!current || !other) {
      sound = false;
      continue;
    }
    if (!points.empty() && *current < points.back().current) {
      refuse(item.items[0], fmt::format("{}: currents must not fall from point to point", what));
    } else if (!points.empty() && falling && *other > points.back().time) {
      refuse(item.items[1], fmt::format("{}: times must not rise with the current", what));
    } else {
      points.push_back({*current, *other});
    }
  }
  return points;
}

// The earliest edge must not lie above the latest one; both are straight between their points, so that
// comparing at all points of both is enough.
bool in_order(Context& context, const ElementKeys& fields, const Curve& earliest, const Curve& latest) {
  constexpr double kSlack = 1 + 1e-9;
  for (const Curve* curve : {&earliest, &latest}) {
    for (const CurvePoint& point : curve->points) {
      const double late = latest.time_at(point.current);
      if (point.current < earliest.points.front().current || earliest.time_at(point.current) <= late * kSlack) continue;
      const Value& value = *fields.find("earliest");
      context.complaints.error(value.at, 1,
                               fmt::format("{}: earliest time is above the latest at {}", fields.what(),
                                           models::format_quantity(point.current, Quantity::current)));
      return false;
    }
  }
  return true;
}

bool put_residual(Context& context, ElementKeys& fields, const models::DeviceFamily* residual, Device& device) {
  models::DeviceSpec spec;
  spec.family = "RCD";
  spec.In = device.In;
  spec.IdN = device.IdN;
  spec.selective = device.selective_residual;
  spec.type = device.residual_type;
  spec.has_type = true;
  Device release;
  if (const auto error = models::resolve_device(spec, nullptr, residual, release)) {
    context.complaints.error(fields.at(), 1, fmt::format("{}: {}", fields.what(), error->message));
    return false;
  }
  device.residual = release.residual;
  device.confidence = models::worse(device.confidence, release.confidence);
  return true;
}

models::ResidualType type_named(std::string_view text) noexcept {
  if (text == "A") return models::ResidualType::A;
  if (text == "F") return models::ResidualType::F;
  if (text == "B") return models::ResidualType::B;
  return models::ResidualType::AC;
}

}  // namespace

std::optional<double> point_value(Context& context, const Value& value, Quantity quantity, const std::string& what) {
  if (value.form != Value::Form::text) {
    context.complaints.error(value.at, value.width,
                             fmt::format("{} is {}; a text with a unit is expected", what, word(value.form)));
    return std::nullopt;
  }
  const auto parsed = models::parse_quantity(value.text, quantity);
  if (const auto* error = std::get_if<models::UnitError>(&parsed)) {
    context.complaints.error(value.at, value.width, fmt::format("{}: {}", what, error->message));
    return std::nullopt;
  }
  const double si = std::get<double>(parsed);
  if (std::isfinite(si) && si > 0) return si;
  context.complaints.error(value.at, value.width,
                           fmt::format("{} is {}; it must be above 0", what, models::format_quantity(si, quantity)));
  return std::nullopt;
}

std::optional<Device> device_by_points(Context& context, ElementKeys& fields, const models::DeviceFamily* residual) {
  bool sound = true;
  Device device;
  auto missing = [&](std::string_view key) {
    if (fields.find(key) != nullptr) return;
    sound = false;
    if (context.maybe_lost(key)) return;
    context.complaints.error(fields.at(), 1, fmt::format("{} is given by points and has no '{}'", fields.what(), key));
  };
  missing("kind");
  missing("latest");
  missing("source");
  const std::string kind = fields.choice("kind").value_or("");
  if (kind == "breaker") device.kind = DeviceKind::breaker;
  if (kind == "fuse") device.kind = DeviceKind::fuse;
  if (kind == "residual") device.kind = DeviceKind::residual;
  sound = sound && !kind.empty();
  for (const std::string_view key : {"instantaneous", "energy_class"}) {
    if (const Value* extra = fields.find(key)) {
      context.complaints.error(
          extra->at, extra->width,
          fmt::format("{} is given by points; '{}' goes with a family ('like')", fields.what(), key));
      sound = false;
    }
  }
  device.In = fields.quantity("In").value_or(0);
  device.Icn = fields.quantity("Icn").value_or(0);
  device.IdN = fields.quantity("IdN").value_or(0);
  device.selective_residual = fields.flag("S").value_or(false);
  device.residual_type = type_named(fields.choice("type").value_or(""));
  device.source = fields.text("source").value_or("");
  if (const auto i2 = fields.quantity("I2"); i2 && device.In > 0) device.I2_ratio = *i2 / device.In;
  models::Band band;
  band.latest.points = read_points(context, fields, "latest", Quantity::time, true, sound);
  band.latest.at_step = models::AtStep::lower;
  band.earliest.points = read_points(context, fields, "earliest", Quantity::time, true, sound);
  band.earliest.at_step = models::AtStep::upper;
  device.let_through.points = read_points(context, fields, "let_through", Quantity::let_through, false, sound);
  device.let_through.pre_arcing_min = fields.quantity("pre_arcing").value_or(0);
  if (!device.let_through.points.empty()) {
    device.let_through.basis = models::LetThrough::Basis::points;
    device.let_through.valid_from = device.let_through.points.front().current;
    device.let_through.source = device.source;
    double total = 0;
    for (const CurvePoint& point : device.let_through.points) total = std::max(total, point.time);
    device.let_through.total = total;
  }
  if (kind == "residual" && device.IdN == 0) {
    missing("IdN");
    sound = false;
  }
  if (!sound || device.In <= 0) return std::nullopt;
  if (!band.earliest.empty() && !in_order(context, fields, band.earliest, band.latest)) return std::nullopt;
  if (device.kind == DeviceKind::residual) {
    device.residual = std::move(band);
    return device;
  }
  device.overcurrent = std::move(band);
  if (device.IdN > 0 && !put_residual(context, fields, residual, device)) return std::nullopt;
  return device;
}

}  // namespace sunder::netlists
