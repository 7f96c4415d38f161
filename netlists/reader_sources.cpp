// SPDX-License-Identifier: Apache-2.0
/// @file
/// Supplies and transformers: what they declare, and whether the declarations can all be true.
#include <fmt/format.h>

#include <cmath>
#include <utility>
#include <variant>

#include "netlists/element_keys.h"
#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

using models::Bound;
using models::Conductor;
using models::Loop;
using models::Quantity;
using models::Source;

constexpr double kSqrt3 = 1.7320508075688772;
constexpr double kSlack = 1 + 1e-9;  // rounding in two conversions of the same figure

// "230/400 V" or "230 V".
bool read_voltage(Context& context, ElementKeys& fields, Source& source, bool single_allowed) {
  const Value* value = fields.find("voltage");
  if (value == nullptr) return false;
  auto refuse = [&](std::string message) {
    context.complaints.error(
        value->at, value->width, std::move(message),
        single_allowed ? "such as \"230/400 V\", or \"230 V\" for a single phase" : "such as \"230/400 V\"");
    return false;
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
  constexpr double kLeast = 50;   // [V] below it nothing of this is asked
  constexpr double kMost = 1000;  // [V] end of low voltage
  if (single) {
    if (!single_allowed) return refuse(fmt::format("voltage of {} needs both values", fields.what()));
    if (!(volts >= kLeast && volts <= kMost)) {
      return refuse(fmt::format("voltage of {} is '{}'; it must be 50 V to 1000 V", fields.what(), text));
    }
    constexpr double kMostUsual = 260;  // [V] above it the voltage between lines was meant, as a rule
    if (volts > kMostUsual) {
      context.complaints.warn(value->at, value->width,
                              fmt::format("voltage of {} is '{}' and is taken as single-phase", fields.what(), text),
                              "three phases are written \"230/400 V\"");
    }
    source.U0 = volts;
    source.U = volts * kSqrt3;
    source.lines = {Conductor::L1};
    return true;
  }
  if (text.substr(0, stroke).find('V') != std::string_view::npos) {
    return refuse(fmt::format("voltage of {} is '{}'; the unit stands once, behind both values", fields.what(), text));
  }
  const auto first = models::parse_quantity(fmt::format("{} V", trimmed(text.substr(0, stroke))), Quantity::voltage);
  if (const auto* error = std::get_if<models::UnitError>(&first)) {
    return refuse(fmt::format("voltage of {}: {}", fields.what(), error->message));
  }
  const double phase = std::get<double>(first);
  if (!(phase >= kLeast && volts <= kMost)) {
    return refuse(fmt::format("voltage of {} is '{}'; it must be 50 V to 1000 V", fields.what(), text));
  }
  constexpr double kRounding = 0.03;  // nominal pairs are rounded: 230/400, 240/415, 277/480
  if (!(std::abs(volts / phase / kSqrt3 - 1) <= kRounding)) {
    return refuse(fmt::format("voltage of {} is '{}'; the second must be 1.73 times the first", fields.what(), text));
  }
  source.U0 = phase;
  source.U = volts;
  return true;
}

// A current or an impedance, told apart by its unit.
void read_loop(Context& context, ElementKeys& fields, std::string_view key, Loop& loop) {
  const Value* value = fields.find(key);
  if (value == nullptr) return;
  auto refuse = [&](std::string message) {
    context.complaints.error(value->at, value->width, std::move(message), "such as \"16 kA\" or \"0.35 ohm\"");
  };
  if (value->form != Value::Form::text) {
    refuse(fmt::format("{} of {} is {}; a current or an impedance is expected", key, fields.what(), word(value->form)));
    return;
  }
  const auto amps = models::parse_quantity(value->text, Quantity::current);
  const auto ohms = models::parse_quantity(value->text, Quantity::impedance);
  const bool is_current = std::holds_alternative<double>(amps);
  if (!is_current && !std::holds_alternative<double>(ohms)) {
    refuse(fmt::format("{} of {} is '{}'; a current or an impedance is expected", key, fields.what(), value->text));
    return;
  }
  const double si = is_current ? std::get<double>(amps) : std::get<double>(ohms);
  constexpr double kMostAmps = 1e6;
  constexpr double kMostOhms = 1e4;
  if (!(si > 0) || si > (is_current ? kMostAmps : kMostOhms)) {
    refuse(fmt::format("{} of {} is '{}'; it must be above 0 and at most {}", key, fields.what(), value->text,
                       is_current ? "1000 kA" : "10000 ohm"));
    return;
  }
  (is_current ? loop.amps : loop.ohms) = si;
  loop.at = value->at;
  constexpr double kFewAmps = 5, kManyAmps = 200e3, kFewOhms = 0.0005, kManyOhms = 250;
  const bool usual = is_current ? si >= kFewAmps && si <= kManyAmps : si >= kFewOhms && si <= kManyOhms;
  if (!usual) {
    context.complaints.warn(value->at, value->width,
                            fmt::format("{} of {} is '{}'; usual are {}", key, fields.what(), value->text,
                                        is_current ? "5 A to 200 kA" : "0.0005 ohm to 250 ohm"));
  }
}

// Power factor from either key, -1 where neither is given.
double read_angle(Context& context, ElementKeys& fields) {
  const auto power_factor = fields.number("power_factor");
  const auto ratio = fields.number("x_over_r");
  if (const Value* both = fields.find("x_over_r"); both != nullptr && fields.find("power_factor") != nullptr) {
    context.complaints.error(both->at, both->width,
                             fmt::format("{} has both power_factor and x_over_r; one is enough", fields.what()));
    context.complaints.note(fields.find("power_factor")->at, "power_factor is given here");
  }
  if (power_factor) return *power_factor;
  return ratio ? 1 / std::hypot(1.0, *ratio) : -1;  // cos(atan(X/R))
}

void read_alias(Context& context, ElementKeys& fields, std::string_view alias, std::string_view key, Loop& loop) {
  const auto ohms = fields.quantity(alias);
  if (!ohms) return;
  const Value& value = *fields.find(alias);
  if (loop.given()) {
    context.complaints.error(value.at, value.width,
                             fmt::format("{} has both {} and {}, which mean the same", fields.what(), alias, key));
    context.complaints.note(loop.at, fmt::format("{} is given here", key));
    return;
  }
  loop.ohms = *ohms;
  loop.at = value.at;
}

void read_bound(Context& context, ElementKeys& supply, std::string_view key, const Source& source, Bound& bound) {
  const Value* table = supply.table(key);
  if (table == nullptr) return;
  const std::string kind = fmt::format("supply.{}", key);
  ElementKeys fields(context, *table, *models::find_kind(kind), fmt::format("the {} of {}", key, supply.what()),
                     table->at);
  bound.at = table->at;
  read_loop(context, fields, "three_phase", bound.three_phase);
  read_loop(context, fields, "line_neutral", bound.line_neutral);
  read_loop(context, fields, "line_earth", bound.line_earth);
  bound.power_factor = read_angle(context, fields);
  const bool split_open = source.lines.lines() > 1;
  if (key == "maximum" && split_open && bound.three_phase.given()) {
    for (const auto& [loop, name] :
         {std::pair{&bound.line_neutral, "line-neutral"}, std::pair{&bound.line_earth, "line-earth"}}) {
      if (!loop->given()) {
        context.assume(source.name,
                       fmt::format("no greatest {} current of {}: taken as the three-phase one, without "
                                   "return impedance",
                                   name, supply.what()),
                       bound.at);
      }
    }
  }
  if (key == "maximum" && split_open && !bound.three_phase.given() && bound.line_neutral.given()) {
    context.assume(source.name,
                   fmt::format("no greatest three-phase current of {}: taken as twice the line-neutral one, "
                               "which holds while the neutral is no smaller than the line",
                               supply.what()),
                   bound.at);
  }
  if (key == "minimum") {
    read_alias(context, fields, "Ze", "line_earth", bound.line_earth);
    read_alias(context, fields, "Zn", "line_neutral", bound.line_neutral);
  }
  const bool of_lines =
      bound.line_neutral.given() || (bound.line_earth.given() && source.earthing != models::Earthing::TT);
  if (key == "minimum" && split_open && !bound.three_phase.given() && of_lines) {
    context.assume(source.name,
                   fmt::format("no least three-phase current of {}: all of the least declared loop is taken "
                               "to lie in the line",
                               supply.what()),
                   bound.at);
  }
  if (bound.three_phase.given() && source.lines.lines() == 1) {
    context.complaints.error(bound.three_phase.at, 1,
                             fmt::format("{} is single-phase and has no three_phase current", supply.what()),
                             "use line_neutral and line_earth");
  }
  const bool any = bound.three_phase.given() || bound.line_neutral.given() || bound.line_earth.given();
  if (!any && table->members.empty()) {
    context.complaints.error(table->at, 1, fmt::format("the {} of {} is empty", key, supply.what()));
  }
  if (any && bound.power_factor < 0) {
    context.assume(source.name,
                   fmt::format("no power factor for the {} of {}: every angle from resistive to the "
                               "test power factor of IEC 60947-2 is taken",
                               key, supply.what()),
                   bound.at);
  }
}

// A loop as a current at the condition's voltage factor [A]; 0 where not given.
double amps_of(const Loop& loop, double c, double volts) {
  if (loop.amps > 0) return loop.amps;
  return loop.ohms > 0 ? c * volts / loop.ohms : 0;
}

std::string shown(const Loop& loop) {
  return loop.amps > 0 ? models::format_quantity(loop.amps, Quantity::current)
                       : models::format_quantity(loop.ohms, Quantity::impedance);
}

// Within one bound: a loop through a return conductor cannot have less impedance than its line alone.
void compare_loops(Context& context, const Bound& bound, std::string_view name, const std::string& what, double c,
                   const Source& source) {
  const double three = amps_of(bound.three_phase, c, source.U0);
  for (const auto& [loop, label] :
       {std::pair{&bound.line_neutral, "line_neutral"}, std::pair{&bound.line_earth, "line_earth"}}) {
    if (three <= 0 || amps_of(*loop, c, source.U0) <= three * kSlack) continue;
    context.complaints.error(loop->at, 1,
                             fmt::format("{} {} of {} has less impedance than one line alone ({})", name, label, what,
                                         shown(bound.three_phase)));
    context.complaints.note(bound.three_phase.at, "three_phase is given here");
  }
  if (source.earthing == models::Earthing::TN_C_S && bound.line_neutral.given() && bound.line_earth.given()) {
    const double ln = amps_of(bound.line_neutral, c, source.U0);
    const double le = amps_of(bound.line_earth, c, source.U0);
    if (ln > le * kSlack || le > ln * kSlack) {
      context.complaints.error(bound.line_earth.at, 1,
                               fmt::format("{} line_earth of {} differs from line_neutral, but in TN-C-S both return "
                                           "through the one conductor",
                                           name, what));
      context.complaints.note(bound.line_neutral.at, "line_neutral is given here");
    }
  }
}

void compare_bounds(Context& context, const Source& source, const std::string& what) {
  const double c_max = context.network.rules.c_max;
  const double c_min = context.network.rules.c_min;
  compare_loops(context, source.maximum, "maximum", what, c_max, source);
  compare_loops(context, source.minimum, "minimum", what, c_min, source);
  const double most_three = amps_of(source.maximum.three_phase, c_max, source.U0);
  for (const auto& [most, least, label] :
       {std::tuple{&source.maximum.three_phase, &source.minimum.three_phase, "three_phase"},
        std::tuple{&source.maximum.line_neutral, &source.minimum.line_neutral, "line_neutral"},
        std::tuple{&source.maximum.line_earth, &source.minimum.line_earth, "line_earth"}}) {
    // what the maximum leaves open is at most the three-phase current
    const bool own = most->given();
    const double upper = own ? amps_of(*most, c_max, source.U0) : most_three;
    const double lower = amps_of(*least, c_min, source.U0);
    if (upper <= 0 || lower <= upper * kSlack) continue;
    context.complaints.error(least->at, 1,
                             fmt::format("minimum {} of {} is {}, which is {}, above the maximum of {}", label, what,
                                         shown(*least), models::format_quantity(lower, Quantity::current),
                                         models::format_quantity(upper, Quantity::current)));
    context.complaints.note(own ? most->at : source.maximum.three_phase.at, "the maximum is given here");
  }
}

void read_tails(Context& context, ElementKeys& element, std::string_view kind, Source& source) {
  const Value* table = element.table("tails");
  if (table == nullptr) return;
  const std::string what = fmt::format("the tails of {}", element.what());
  ElementKeys fields(context, *table, *models::find_kind(kind), what, table->at);
  source.tails.at = table->at;
  source.tails.length = fields.quantity("length").value_or(0);
  source.tails.in_parallel = fields.whole("in_parallel").value_or(1);
  source.tails.Iz = fields.sourced("Iz");
  models::ConductorSet conductors = source.lines;
  conductors.add(Conductor::N);
  PendingRun run;
  run.cable = fields.find("cable");
  run.cpc = fields.find("cpc");
  source.tails.present = read_cable(context, run, conductors, what, source.name, true, table->at, source.tails.cable) &&
                         source.tails.length > 0;
}

models::Earthing earthing_named(std::string_view text) noexcept {
  if (text == "TN-C-S") return models::Earthing::TN_C_S;
  return text == "TT" ? models::Earthing::TT : models::Earthing::TN_S;
}

// What supply and transformer have in common.
void read_common(Context& context, ElementKeys& fields, Source& source) {
  if (const Value* feeds = fields.find("feeds")) source.board = find_element(context, *feeds, "board");
  if (const auto earthing = fields.choice("earthing")) source.earthing = earthing_named(*earthing);
  source.demand = fields.sourced("demand");
  source.pf = fields.sourced("pf");
  if (const Value* device = fields.find("device")) {
    source.device =
        read_device(context, *device, fmt::format("device of {}", fields.what())).value_or(models::Device{});
  }
}

void read_fault_level(Context& context, ElementKeys& fields, Source& source) {
  const Value* value = fields.find("fault_level");
  if (value == nullptr) {
    context.assume(source.name,
                   fmt::format("no fault level before {}: stiff for the greatest currents, the least ones "
                               "are unknown",
                               fields.what()),
                   source.at);
    return;
  }
  const models::Kind& kind = *models::find_kind("transformer.fault_level");
  if (value->form == Value::Form::table) {
    ElementKeys levels(context, *value, kind, fmt::format("the fault level of {}", fields.what()), value->at);
    const auto most = levels.quantity("maximum");
    const auto least = levels.quantity("minimum");
    if (most) source.fault_level_max = *most;
    if (least) source.fault_level_min = *least;
    if (!most) {
      context.assume(source.name, fmt::format("no maximum fault level before {}: taken as stiff there", fields.what()),
                     value->at);
    }
    if (source.fault_level_min > source.fault_level_max) {
      const Value& at = *levels.find("minimum");
      context.complaints.error(at.at, at.width,
                               fmt::format("minimum fault level of {} is above the maximum", fields.what()));
      context.complaints.note(levels.find("maximum")->at, "the maximum is given here");
    }
    return;
  }
  // a single value holds for both; the same range as in the table
  Value both;
  both.form = Value::Form::table;
  both.members.push_back({"maximum", value->at, value->width, *value});
  ElementKeys level(context, both, kind, fmt::format("the fault level of {}", fields.what()), value->at);
  if (const auto va = level.quantity("maximum")) {
    source.fault_level_max = *va;
    source.fault_level_min = *va;
    context.assume(source.name, fmt::format("one fault level before {}: taken as most and least", fields.what()),
                   value->at);
  }
}

void read_impedance(Context& context, ElementKeys& fields, Source& source) {
  source.rating = fields.quantity("rating").value_or(0);
  source.uk = fields.quantity("uk").value_or(0);
  source.losses = fields.quantity("losses").value_or(0);
  source.x_over_r = fields.number("x_over_r").value_or(0);
  const bool losses = fields.find("losses") != nullptr;
  const Value* ratio = fields.find("x_over_r");
  if (losses && ratio != nullptr) {
    context.complaints.error(ratio->at, ratio->width,
                             fmt::format("{} has both losses and x_over_r; one is enough", fields.what()));
    context.complaints.note(fields.find("losses")->at, "losses is given here");
  } else if (!losses && ratio == nullptr && !context.maybe_lost("losses")) {
    context.complaints.error(source.at, 1, fmt::format("{} has neither 'losses' nor 'x_over_r'", fields.what()));
  }
  // R of a transformer is losses over rating, and cannot exceed the whole impedance uk
  if (source.losses > 0 && source.rating > 0 && source.uk > 0 && source.losses / source.rating >= source.uk) {
    const Value& at = *fields.find("losses");
    context.complaints.error(at.at, at.width,
                             fmt::format("losses of {} are {} of its rating, not below uk", fields.what(),
                                         models::format_quantity(source.losses / source.rating, Quantity::percentage)));
  }
  if (ratio != nullptr && ratio->form == Value::Form::number && source.x_over_r == 0) {
    source.losses = source.uk * source.rating;  // all of uk is resistance
  }
}

}  // namespace

void read_supplies(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("supply '{}'", member.key);
    if (member.value.form != Value::Form::table) {
      context.complaints.error(member.value.at, member.value.width,
                               fmt::format("{} is {}; a table is expected", what, word(member.value.form)));
      continue;
    }
    const int handle = static_cast<int>(context.network.sources.size());
    if (!enter_name(context, context.elements, member, "supply", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("supply"), what, member.at);
    Source source;
    source.name = member.key;
    source.at = member.at;
    const bool known = read_voltage(context, fields, source, true);
    read_common(context, fields, source);
    if (const Value* phases = fields.find("phases")) {
      const auto set = read_phases(context, *phases, what);
      if (set && source.lines.lines() == 1 && set->lines() == 1) {
        source.lines = *set;
        source.lines.remove(Conductor::N);
        source.lines.remove(Conductor::PE);
      } else if (set && known) {
        context.complaints.error(phases->at, phases->width,
                                 source.lines.lines() == 1
                                     ? fmt::format("{} has one voltage, so one line", what)
                                     : fmt::format("{} is three-phase and delivers L1 L2 L3", what),
                                 "phases is for a single-phase supply: \"L1\", \"L2\" or \"L3\"");
      }
    }
    const auto network = fields.choice("network");
    source.own_transformer = network.value_or("") == "own transformer";
    if (fields.find("network") == nullptr) {
      context.assume(source.name,
                     fmt::format("network of {} taken as public, which has the lower voltage-drop limits", what),
                     source.at);
    }
    read_bound(context, fields, "maximum", source, source.maximum);
    read_bound(context, fields, "minimum", source, source.minimum);
    if (known) compare_bounds(context, source, what);
    read_tails(context, fields, "supply.tails", source);
    context.network.sources.push_back(std::move(source));
  }
}

void read_transformers(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("transformer '{}'", member.key);
    if (member.value.form != Value::Form::table) {
      context.complaints.error(member.value.at, member.value.width,
                               fmt::format("{} is {}; a table is expected", what, word(member.value.form)));
      continue;
    }
    const int handle = static_cast<int>(context.network.sources.size());
    if (!enter_name(context, context.elements, member, "transformer", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("transformer"), what, member.at);
    Source source;
    source.name = member.key;
    source.at = member.at;
    source.transformer = true;
    source.own_transformer = true;
    read_voltage(context, fields, source, false);
    read_common(context, fields, source);
    read_impedance(context, fields, source);
    source.secondary = fields.quantity("secondary").value_or(source.U);
    if (fields.find("secondary") == nullptr) {
      context.assume(
          source.name,
          fmt::format("no-load voltage of {} taken as {}", what, models::format_quantity(source.U, Quantity::voltage)),
          source.at);
    }
    read_fault_level(context, fields, source);
    source.z0_over_z1 = fields.number("z0_over_z1").value_or(1);
    if (fields.find("z0_over_z1") == nullptr) {
      context.assume(source.name, fmt::format("zero-sequence impedance of {} taken as its positive-sequence one", what),
                     source.at);
    }
    source.link_at_board = fields.choice("link").value_or("") == "board";
    if (source.link_at_board && source.earthing != models::Earthing::TN_C_S && fields.find("earthing") != nullptr) {
      const Value& at = *fields.find("link");
      context.complaints.error(at.at, at.width, fmt::format("link of {} is at the board, which makes it TN-C-S", what));
      context.complaints.note(fields.find("earthing")->at, "earthing is given here");
    }
    read_tails(context, fields, "transformer.tails", source);
    context.network.sources.push_back(std::move(source));
  }
}

}  // namespace sunder::netlists
