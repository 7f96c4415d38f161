// SPDX-License-Identifier: Apache-2.0
#include "models/devices.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>

#include "models/units.h"

namespace sunder::models {
namespace {

// IEC 60898-1 and IEC 60269-1 lengthen the conventional time above this rating.
constexpr double kShortConventionalTo = 63;  // [A]
// Energy classes, S types and residual test currents of the standards, in amperes.
constexpr double kSmallResidual = 0.030;     // [A] the 5 IdN test may be done at 0.25 A up to here
constexpr double kSmallResidualTest = 0.25;  // [A]
constexpr double kGreatResidualTest = 500;   // [A]
// A residual device that must not operate at a current is drawn as a line up to this time.
constexpr double kNotOperating = 3600;  // [s]
// Pre-arcing I2t limits of IEC 60269-1 are those for melting in this time.
constexpr double kPreArcingTime = 0.01;  // [s]
// Ratings two steps up in the R10 series stand between 1.56 and 1.60 above.
constexpr double kTwoStepsUp = 1.55;
constexpr double kDisconnection = 0.4;  // [s]
// Above this fusing factor a fuse is not deemed to meet I2 <= 1.45 Iz.
constexpr double kDeemedRatio = 1.6;

const char* type_word(ResidualType type) noexcept {
  constexpr std::array kWords = {"AC", "A", "F", "B"};
  return kWords[static_cast<std::size_t>(type)];
}

std::string device_text(const DeviceSpec& spec) {
  std::string text = spec.family;
  if (spec.In > 0) text += " " + format_number(spec.In) + " A";
  if (spec.Icn > 0) text += " " + format_quantity(spec.Icn, Quantity::current);
  if (spec.IdN > 0) text += " " + format_number(spec.IdN * 1e3) + " mA";
  if (spec.selective) text += " S";
  if (spec.has_type) text += fmt::format(" {}", type_word(spec.type));
  if (spec.energy_class > 0) text += fmt::format(" class {}", spec.energy_class);
  return text;
}

bool same_rating(double a, double b) noexcept { return std::abs(a - b) <= 1e-9 * std::max(a, b); }

/// "the nearest are 63 and 80 A"
std::string nearest_ratings(const std::vector<double>& ratings, double In) {
  const auto above = std::upper_bound(ratings.begin(), ratings.end(), In);
  if (above == ratings.begin()) return fmt::format("the smallest is {} A", format_number(*above));
  if (above == ratings.end()) return fmt::format("the largest is {} A", format_number(ratings.back()));
  return fmt::format("the nearest are {} and {} A", format_number(*std::prev(above)), format_number(*above));
}

const FamilyRow* find_row(const DeviceFamily& family, double In) noexcept {
  const auto found = std::find_if(family.rows.begin(), family.rows.end(),
                                  [In](const FamilyRow& row) { return same_rating(row.In, In); });
  return found == family.rows.end() ? nullptr : &*found;
}

std::optional<DeviceError> check_rating(const DeviceSpec& spec, const DeviceFamily& family) {
  if (spec.In <= 0) {
    return DeviceError{fmt::format("'{}' needs its rated current, such as '{} 32 A'", spec.family, spec.family)};
  }
  if (family.ratings.empty()) return std::nullopt;
  const bool known = std::any_of(family.ratings.begin(), family.ratings.end(),
                                 [&spec](double rating) { return same_rating(rating, spec.In); });
  if (known) return std::nullopt;
  return DeviceError{fmt::format("'{}' has no rating of {} A; {}", family.name, format_number(spec.In),
                                 nearest_ratings(family.ratings, spec.In))};
}

// --- circuit-breakers ------------------------------------------------------------------------

std::optional<DeviceError> breaker_band(const DeviceSpec& spec, const DeviceFamily& family, Device& out) {
  double low = family.magnetic_low;
  double high = family.magnetic_high;
  const bool own = spec.multiple_low > 0 || spec.multiple_high > 0;
  if (own) {
    low = spec.multiple_low;
    high = spec.multiple_high;
    if (!(low > 1) || !(high > low)) {
      return DeviceError{fmt::format("instantaneous multiples {} and {} are out of order: above 1, the lower one first",
                                     format_number(low), format_number(high))};
    }
  }
  const double In = spec.In;
  const bool small = In <= family.small_to;
  const double conventional =
      In <= kShortConventionalTo ? family.conventional_time_small : family.conventional_time_large;
  const double thermal = small ? family.thermal_latest_small : family.thermal_latest_large;
  const double delayed = own ? 0 : small ? family.low_latest_small : family.low_latest_large;

  std::vector<CurvePoint> latest = {{family.conventional_trip * In, conventional}};
  if (family.thermal_gate > 0) latest.push_back({family.thermal_gate * In, thermal});
  if (delayed > 0) latest.push_back({low * In, delayed});
  latest.push_back({high * In, 0.1});

  std::vector<CurvePoint> earliest = {{family.no_trip * In, conventional}};
  // A magnetic release set below the thermal gate may act there.
  if (family.thermal_gate > 0 && low >= family.thermal_gate) {
    earliest.push_back({family.thermal_gate * In, family.thermal_earliest});
  }
  earliest.push_back({low * In, 0.1});

  out.overcurrent.latest = latest_staircase(latest);
  out.overcurrent.earliest = earliest_staircase(earliest, kImmediately);
  out.by_gates = true;
  out.instantaneous_low = low * In;
  out.instantaneous_high = high * In;
  out.I2_ratio = family.I2_ratio > 0 ? family.I2_ratio : family.conventional_trip;
  return std::nullopt;
}

std::optional<DeviceError> energy_limit(const DeviceSpec& spec, const DeviceFamily& family, Device& out) {
  if (spec.energy_class == 0) return std::nullopt;
  if (spec.energy_class == 1) return std::nullopt;  // class 1 sets no limit
  if (spec.Icn <= 0) {
    return DeviceError{fmt::format("energy class {} needs the breaking capacity, such as '{} {} A 6 kA class {}'",
                                   spec.energy_class, spec.family, format_number(spec.In), spec.energy_class)};
  }
  for (const EnergyRow& row : family.energy) {
    if (row.energy_class != spec.energy_class || !same_rating(row.Icn, spec.Icn)) continue;
    if (spec.In <= row.In_above || spec.In > row.In_to) continue;
    out.let_through.basis = LetThrough::Basis::energy_class;
    out.let_through.total = row.let_through;
    out.let_through.valid_from = out.instantaneous_high;
    out.let_through.confidence = row.confidence;
    out.let_through.source = "EN 60898-1, Annex ZA";
    return std::nullopt;
  }
  return DeviceError{fmt::format("EN 60898-1 has no energy class {} for type {} of {} A and {}", spec.energy_class,
                                 family.name, format_number(spec.In), format_quantity(spec.Icn, Quantity::current))};
}

// --- fuses -----------------------------------------------------------------------------------

/// Least pre-arcing I2t of the rating two steps up in the R10 series; 0 where there is none.
double pre_arcing_two_steps_up(const DeviceFamily& family, double In) noexcept {
  for (const FamilyRow& row : family.rows) {
    if (row.In >= kTwoStepsUp * In && row.pre_arcing_min > 0) return row.In <= 1.7 * In ? row.pre_arcing_min : 0;
  }
  return 0;
}

void fuse_let_through(const DeviceFamily& family, const FamilyRow& row, Device& out) {
  LetThrough& let = out.let_through;
  let.pre_arcing_min = row.pre_arcing_min;
  let.confidence = row.pre_arcing_confidence;
  const double two_up = pre_arcing_two_steps_up(family, row.In);
  if (row.pre_arcing_max > 0 && two_up > 0) {
    let.basis = LetThrough::Basis::fuse_limits;
    let.total = two_up;
    let.valid_from = std::sqrt(row.pre_arcing_max / kPreArcingTime);
    let.source = "IEC 60269-1, pre-arcing I2t limits, and its selectivity 1:1.6";
    return;
  }
  if (!family.falling_let_through || row.latest.empty()) return;
  // The greatest time not above 0.4 s, else the last point there is.
  const auto point =
      std::find_if(row.latest.begin(), row.latest.end(), [](const CurvePoint& p) { return p.time <= kDisconnection; });
  const CurvePoint& last = point == row.latest.end() ? row.latest.back() : *point;
  let.basis = LetThrough::Basis::falling;
  let.total = last.current * last.current * last.time;
  let.valid_from = last.current;
  let.confidence = row.confidence;
  let.source = "operating I2t of a cartridge fuse does not rise with current";
}

void fuse_band(const DeviceFamily& family, const FamilyRow& row, Device& out) {
  const bool gates = family.form == DeviceFamily::Form::gates;
  out.overcurrent.latest = gates ? latest_staircase(row.latest) : Curve{row.latest, AtStep::lower};
  if (!row.earliest.empty()) out.overcurrent.earliest = earliest_staircase(row.earliest, kImmediately);
  out.by_gates = gates || !row.between.empty();
  if (!row.between.empty()) out.interpolated = Curve{row.between, AtStep::lower};
  out.confidence = row.confidence;
  out.I2_ratio = row.I2_ratio > 0 ? row.I2_ratio : family.I2_ratio;
  out.I2_deemed = family.I2_deemed && out.I2_ratio <= kDeemedRatio;
  fuse_let_through(family, row, out);
}

// --- residual current devices ----------------------------------------------------------------

std::vector<CurvePoint> in_amperes(const std::vector<CurvePoint>& multiples, double IdN) {
  std::vector<CurvePoint> points;
  points.reserve(multiples.size());
  for (const CurvePoint& multiple : multiples) points.push_back({multiple.current * IdN, multiple.time});
  return points;
}

std::optional<DeviceError> residual_band(const DeviceSpec& spec, const DeviceFamily* family, Device& out) {
  if (spec.IdN <= 0) return std::nullopt;
  if (family == nullptr) return DeviceError{"no data on residual current devices"};
  const double smallest_selective = kSmallResidual * (1 + 1e-9);
  if (spec.selective && spec.IdN <= smallest_selective) {
    return DeviceError{fmt::format("type S exists above 30 mA only, not with {} mA", format_number(spec.IdN * 1e3))};
  }
  out.IdN = spec.IdN;
  out.selective_residual = spec.selective;
  out.residual_type = spec.has_type ? spec.type : ResidualType::AC;

  std::vector<CurvePoint> latest =
      in_amperes(spec.selective ? family->residual_latest_s : family->residual_latest, spec.IdN);
  if (!latest.empty() && spec.IdN <= smallest_selective) {
    latest.back().current = std::max(latest.back().current, kSmallResidualTest);
  }
  std::vector<CurvePoint> earliest = {{family->residual_no_trip * spec.IdN, kNotOperating}};
  if (spec.selective) {
    for (const CurvePoint& point : in_amperes(family->residual_earliest_s, spec.IdN)) earliest.push_back(point);
    if (family->residual_earliest_s_500 > 0) {
      earliest.push_back({kGreatResidualTest, family->residual_earliest_s_500});
    }
  }
  out.residual.latest = latest_staircase(latest);
  out.residual.earliest = earliest_staircase(earliest, kImmediately);
  return std::nullopt;
}

std::string joined_source(const std::string& a, const std::string& b) {
  if (a.empty() || a == b) return b;
  return b.empty() ? a : a + "; " + b;
}

}  // namespace

std::optional<DeviceError> resolve_device(const DeviceSpec& spec, const DeviceFamily* family,
                                          const DeviceFamily* residual, Device& out) {
  out = Device{};
  if (family != nullptr && family->form == DeviceFamily::Form::residual) {
    residual = family;
    family = nullptr;
  }
  out.text = device_text(spec);
  out.family = spec.family;
  out.In = spec.In;
  out.Icn = spec.Icn;

  if (family == nullptr || family->form == DeviceFamily::Form::isolator) {
    const bool alone = family == nullptr && residual != nullptr;
    if (alone && spec.IdN <= 0) {
      return DeviceError{fmt::format("'{}' needs its residual operating current, such as '30 mA'", spec.family)};
    }
    if (spec.In <= 0) {
      return DeviceError{fmt::format("'{}' needs its rated current, such as '{} 63 A'", spec.family, spec.family)};
    }
    if (spec.energy_class > 0 || spec.multiple_low > 0 || spec.multiple_high > 0) {
      return DeviceError{fmt::format("'{}' has no overcurrent release", spec.family)};
    }
    out.kind = spec.IdN > 0 ? DeviceKind::residual : DeviceKind::isolator;
    out.confidence = family != nullptr ? family->confidence : Confidence::declared;
    out.source = family != nullptr ? family->source : std::string{};
  } else {
    if (auto error = check_rating(spec, *family)) return error;
    out.kind = family->kind;
    out.overload_factor = family->overload_factor;
    out.confidence = family->confidence;
    out.source = family->source;
    if (spec.Icn <= 0 && family->least_Icn > 0) {
      out.Icn = family->least_Icn;
      out.Icn_confidence = family->least_Icn_confidence;
    }
    if (family->form == DeviceFamily::Form::breaker) {
      if (auto error = breaker_band(spec, *family, out)) return error;
      if (auto error = energy_limit(spec, *family, out)) return error;
    } else {
      if (spec.energy_class > 0 || spec.multiple_low > 0 || spec.multiple_high > 0) {
        return DeviceError{
            fmt::format("'{}' is a fuse: it has neither energy class nor instantaneous release", spec.family)};
      }
      if (spec.IdN > 0)
        return DeviceError{fmt::format("'{}' is a fuse: it does not act on residual current", spec.family)};
      const FamilyRow* row = find_row(*family, spec.In);
      if (row == nullptr) {
        return DeviceError{fmt::format("no data on '{}' of {} A", family->name, format_number(spec.In))};
      }
      fuse_band(*family, *row, out);
    }
  }
  if (spec.IdN > 0) {
    if (auto error = residual_band(spec, residual, out)) return error;
    out.confidence =
        out.kind == DeviceKind::residual ? residual->confidence : worse(out.confidence, residual->confidence);
    out.source = joined_source(out.source, residual->source);
  } else if (spec.selective || spec.has_type) {
    return DeviceError{fmt::format("'{}' has no residual operating current, so type {} means nothing", spec.family,
                                   spec.selective ? "S" : type_word(spec.type))};
  }
  return std::nullopt;
}

}  // namespace sunder::models
