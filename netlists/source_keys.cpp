// SPDX-License-Identifier: Apache-2.0
/// @file
/// Voltage, earthing, star point, link and tails of whatever delivers a voltage.
#include "netlists/source_keys.h"

#include <fmt/format.h>

#include <cmath>
#include <utility>
#include <variant>

#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::Earthing;
using models::Quantity;
using models::StarPoint;

constexpr double kLeast = 50;       // [V] below it nothing of this is asked
constexpr double kMost = 150e3;     // [V] end of what an installation takes part in
constexpr double kRounding = 0.03;  // nominal pairs are rounded: 230/400, 240/415, 277/480

// One value: a single phase up to 1 kV, three lines above it.
std::optional<Nominal> single_voltage(Context& context, const Value& value, const std::string& what, double volts) {
  Nominal nominal;
  if (volts > kLowVoltage) {
    nominal.high = true;
    nominal.U = volts;
    nominal.U0 = volts / kSqrt3;
    return nominal;
  }
  constexpr double kMostUsual = 260;  // [V] above it the voltage between lines was meant, as a rule
  if (volts > kMostUsual) {
    context.complaints.warn(value.at, value.width,
                            fmt::format("voltage of {} is '{}' and is taken as single-phase", what, value.text),
                            "three phases are written \"230/400 V\"");
  }
  nominal.U0 = volts;
  nominal.U = volts * kSqrt3;
  nominal.lines = {Conductor::L1};
  return nominal;
}

}  // namespace

std::optional<Nominal> read_voltage(Context& context, ElementKeys& fields, VoltageForms forms) {
  const Value* value = fields.find("voltage");
  if (value == nullptr) {
    context.voltages_known = false;
    return std::nullopt;
  }
  const bool single_allowed = forms != VoltageForms::three_phase;
  auto refuse = [&](std::string message) {
    context.voltages_known = false;
    context.complaints.error(
        value->at, value->width, std::move(message),
        single_allowed ? "such as \"230/400 V\", or \"230 V\" for a single phase" : "such as \"230/400 V\"");
    return std::nullopt;
  };
  if (value->form != Value::Form::text) {
    return refuse(fmt::format("voltage of {} is {}; a text is expected", fields.what(), word(value->form)));
  }
  const std::string_view text = value->text;
  const std::size_t stroke = text.find('/');
  const bool single = stroke == std::string_view::npos;
  const auto last = models::parse_quantity(single ? text : text.substr(stroke + 1), Quantity::voltage);
  if (const auto* error = std::get_if<models::UnitError>(&last)) {
    return refuse(fmt::format("voltage of {}: {}", fields.what(), error->message));
  }
  const double volts = std::get<double>(last);
  if (single) {
    if (!single_allowed && !(volts > kLowVoltage)) {
      return refuse(fmt::format("voltage of {} needs both values", fields.what()));
    }
    if (!(volts >= kLeast && volts <= kMost)) {
      return refuse(fmt::format("voltage of {} is '{}'; it must be 50 V to 150 kV", fields.what(), text));
    }
    return single_voltage(context, *value, fields.what(), volts);
  }
  if (text.substr(0, stroke).find('V') != std::string_view::npos) {
    return refuse(fmt::format("voltage of {} is '{}'; the unit stands once, behind both values", fields.what(), text));
  }
  if (volts > kLowVoltage && volts <= kMost) {
    context.voltages_known = false;
    context.complaints.error(
        value->at, value->width,
        fmt::format("voltage of {} is '{}'; above 1 kV the voltage between lines stands alone", fields.what(), text),
        fmt::format("such as \"{}\"", models::format_quantity(volts, Quantity::voltage)));
    return std::nullopt;
  }
  const auto first = models::parse_quantity(fmt::format("{} V", trimmed(text.substr(0, stroke))), Quantity::voltage);
  if (const auto* error = std::get_if<models::UnitError>(&first)) {
    return refuse(fmt::format("voltage of {}: {}", fields.what(), error->message));
  }
  const double phase = std::get<double>(first);
  if (!(phase >= kLeast && volts <= kLowVoltage)) {
    return refuse(fmt::format("voltage of {} is '{}'; it must be 50 V to 1000 V", fields.what(), text));
  }
  Nominal nominal;
  nominal.U0 = phase;
  nominal.U = volts;
  if (forms == VoltageForms::split_phase && std::abs(volts / phase / 2 - 1) <= kRounding) {
    nominal.split_phase = true;
    nominal.lines = {Conductor::L1, Conductor::L2};
    return nominal;
  }
  if (!(std::abs(volts / phase / kSqrt3 - 1) <= kRounding)) {
    return refuse(fmt::format("voltage of {} is '{}'; the second must be 1.73 times the first", fields.what(), text));
  }
  return nominal;
}

void read_source_phases(Context& context, ElementKeys& fields, std::string_view kind, bool known, bool split_phase,
                        models::ConductorSet& lines) {
  const Value* phases = fields.find("phases");
  if (phases == nullptr) return;
  const auto set = read_phases(context, *phases, fields.what());
  if (!set) return;
  if (lines.lines() == 1 && set->lines() == 1) {
    lines = *set;
    lines.remove(Conductor::N);
    lines.remove(Conductor::PE);
    return;
  }
  if (!known) return;
  std::string message = lines.lines() == 1 ? fmt::format("{} has one voltage, so one line", fields.what())
                        : split_phase      ? fmt::format("{} is split-phase and delivers L1 L2", fields.what())
                                           : fmt::format("{} is three-phase and delivers L1 L2 L3", fields.what());
  context.complaints.error(phases->at, phases->width, std::move(message),
                           fmt::format("phases is for a single-phase {}: \"L1\", \"L2\" or \"L3\"", kind));
}

bool is_tn(Earthing earthing) noexcept { return earthing != Earthing::TT && earthing != Earthing::IT; }

bool maybe_high(const ElementKeys& fields, const std::optional<Nominal>& nominal) noexcept {
  if (nominal) return nominal->high;
  const Value* value = fields.find("voltage");
  return value != nullptr && value->text.find("kV") != std::string::npos;
}

std::optional<Earthing> read_earthing(ElementKeys& fields, bool obligatory) {
  if (obligatory && !fields.require("earthing")) return std::nullopt;
  const auto text = fields.choice("earthing");
  if (!text) return std::nullopt;
  for (const Earthing earthing : {Earthing::TN_S, Earthing::TN_C_S, Earthing::TN_C, Earthing::TT, Earthing::IT}) {
    if (*text == models::word(earthing)) return earthing;
  }
  return std::nullopt;
}

double read_capacitance(ElementKeys& fields, Earthing earthing) {
  const double farads = fields.quantity("capacitance").value_or(0);
  if (earthing == Earthing::IT) return farads;
  if (fields.find("earthing") != nullptr) fields.refuse({"capacitance"}, "is asked for in IT alone");
  return 0;
}

std::optional<StarPoint> read_star(Context& context, ElementKeys& fields, std::string_view key) {
  const Value* value = fields.find(key);
  if (value == nullptr) return std::nullopt;
  StarPoint star;
  const std::string_view text = value->form == Value::Form::text ? trimmed(value->text) : std::string_view{};
  if (text == "solid") return star;
  if (text == "open" || text == "none") {
    star.kind = text == "open" ? StarPoint::Kind::open : StarPoint::Kind::absent;
    return star;
  }
  if (value->form == Value::Form::text && text.find_first_of("0123456789") == std::string_view::npos) {
    const std::string hint = did_you_mean(context, text, {"solid", "open"});
    context.complaints.error(value->at, value->width, fmt::format("unknown {} '{}' of {}", key, text, fields.what()),
                             hint.empty() ? "it is \"solid\", \"open\" or an impedance such as \"1000 ohm\"" : hint);
    return std::nullopt;
  }
  constexpr double kFew = 1e-3, kMany = 1e5;  // [ohm]
  const auto z = fields.impedance(key, Quantity::impedance, kFew, kMany);
  if (!z) return std::nullopt;
  star.kind = StarPoint::Kind::impedance;
  star.ohms = z->real();
  star.reactance = z->imag();
  return star;
}

bool read_star_and_link(Context& context, ElementKeys& fields, const std::string& name, Earthing earthing,
                        StarOwner owner, bool high, StarPoint& star) {
  const bool declared = owner == StarOwner::supply;
  const Value* star_value = fields.find("star_point");
  const Value* link_value = fields.find("link");
  const std::string link = fields.choice("link").value_or("");
  const auto note_earthing = [&] {
    if (const Value* at = fields.find("earthing")) context.complaints.note(at->at, "earthing is given here");
  };
  star.kind = earthing == Earthing::IT ? StarPoint::Kind::open : StarPoint::Kind::solid;
  if (const auto read = read_star(context, fields, "star_point")) {
    const bool solid = read->kind == StarPoint::Kind::solid;
    const bool direct = earthing == Earthing::TT || (declared && is_tn(earthing) && !high);
    if (read->kind == StarPoint::Kind::absent && owner != StarOwner::other) {
      context.complaints.error(star_value->at, star_value->width,
                               fmt::format("star_point of {} is none, which is for generators", fields.what()),
                               "it is \"solid\", \"open\" or an impedance such as \"1000 ohm\"");
    } else if (earthing == Earthing::IT && solid) {
      context.complaints.error(star_value->at, star_value->width,
                               fmt::format("star_point of {} is solid, but in IT it is open or earthed through an "
                                           "impedance",
                                           fields.what()));
      note_earthing();
    } else if (direct && !solid && read->kind != StarPoint::Kind::absent) {
      context.complaints.error(star_value->at, star_value->width,
                               fmt::format("star_point of {} is '{}', but in {} it is earthed directly", fields.what(),
                                           trimmed(star_value->text), models::word(earthing)));
      note_earthing();
    } else {
      star = *read;
    }
  }
  if (high && context.voltages_known && is_tn(earthing) && fields.find("earthing") != nullptr) {
    const Value& value = *fields.find("earthing");
    context.complaints.error(value.at, value.width,
                             fmt::format("earthing of {} is {}, but above 1 kV there is no neutral and no protective "
                                         "conductor",
                                         fields.what(), models::word(earthing)),
                             "star_point says how its star point is earthed");
  }
  const bool combined = earthing == Earthing::TN_C_S || earthing == Earthing::TN_C;
  if (high) fields.refuse({"link"}, "has no meaning above 1 kV, where there is no neutral");
  if (link == "board" && !combined && !high && fields.find("earthing") != nullptr) {
    context.complaints.error(link_value->at, link_value->width,
                             fmt::format("link of {} is at the board, which makes it TN-C-S", fields.what()));
    note_earthing();
  }
  if (link == "none" && !high) {
    if (star_value != nullptr) {
      context.complaints.error(link_value->at, link_value->width,
                               fmt::format("{} has both link = \"none\" and star_point; one is enough", fields.what()));
      context.complaints.note(star_value->at, "star_point is given here");
    }
    star = {StarPoint::Kind::open, 0, 0};
  }
  const bool unsaid = star_value == nullptr && link_value == nullptr;
  if (unsaid && high && star.kind == StarPoint::Kind::solid) {
    context.assume(name, fmt::format("star point of {} taken as solidly earthed", fields.what()), fields.at());
  } else if (unsaid && owner == StarOwner::other && is_tn(earthing) && star.kind == StarPoint::Kind::solid) {
    context.assume(name, fmt::format("star point of {} taken as solidly earthed and joined to PE", fields.what()),
                   fields.at());
  }
  // in TN-C the tails are lines and a combined conductor
  return link == "board" || (earthing == Earthing::TN_C && fields.find("tails") != nullptr && link.empty());
}

void read_tails(Context& context, ElementKeys& element, std::string_view kind, const std::string& name,
                models::ConductorSet conductors, bool high, models::Tails& tails) {
  const Value* table = element.table("tails");
  if (table == nullptr) return;
  const std::string what = fmt::format("the tails of {}", element.what());
  ElementKeys fields(context, *table, *models::find_kind(kind), what, table->at);
  tails.at = table->at;
  tails.length = fields.quantity("length").value_or(0);
  tails.in_parallel = fields.whole("in_parallel").value_or(1);
  tails.Iz = fields.sourced("Iz");
  PendingRun run;
  run.cable = fields.find("cable");
  run.cpc = fields.find("cpc");
  if (high) {
    fields.refuse({"cpc"}, "has no meaning: above 1 kV the lines alone are carried");
    run.cpc = &no_cpc();
  }
  tails.present = read_cable(context, run, conductors, what, name, !high, table->at, tails.cable) && tails.length > 0;
}

models::Device read_device_key(Context& context, ElementKeys& fields, std::string_view key) {
  const Value* value = fields.find(key);
  if (value == nullptr) return {};
  return read_device(context, *value, fmt::format("{} of {}", key, fields.what())).value_or(models::Device{});
}

}  // namespace sunder::netlists
