// SPDX-License-Identifier: Apache-2.0
/// @file
/// Supplies: what they declare, and whether the declarations can all be true.
#include <fmt/format.h>

#include <array>
#include <cmath>
#include <utility>
#include <variant>

#include "netlists/parts.h"
#include "netlists/source_keys.h"

namespace sunder::netlists {

namespace {

using models::Bound;
using models::Conductor;
using models::Loop;
using models::Quantity;
using models::Source;

constexpr double kSlack = 1 + 1e-9;  // rounding in two conversions of the same figure

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

// z1 and z0, which stand in place of the loops.
void read_sequence(Context& context, ElementKeys& fields, std::string_view key, const std::string& what, Bound& bound) {
  constexpr double kLeast = 1e-5, kMost = 250;  // [ohm]
  const Value* z1 = fields.find("z1");
  const Value* z0 = fields.find("z0");
  if (z1 == nullptr) {
    if (z0 != nullptr)
      context.complaints.error(z0->at, z0->width, fmt::format("the {} of {} has z0 but no z1", key, what));
    return;
  }
  for (const std::string_view other : {"three_phase", "power", "line_neutral", "line_earth", "Ze", "Zn"}) {
    const Value* loop = fields.find(other);
    if (loop == nullptr) continue;
    context.complaints.error(
        z1->at, z1->width,
        fmt::format("the {} of {} has both z1 and {}; give impedances by sequence or loops", key, what, other));
    context.complaints.note(loop->at, fmt::format("{} is given here", other));
    break;
  }
  fields.refuse({"power_factor", "x_over_r"}, "says nothing beside z1, which has its angle");
  if (const auto z = fields.impedance("z1", Quantity::impedance, kLeast, kMost)) {
    bound.sequence.z1 = *z;
    bound.sequence.given = true;
    bound.sequence.at = z1->at;
  }
  if (const auto z = fields.impedance("z0", Quantity::impedance, kLeast, kMost)) {
    bound.sequence.z0 = *z;
    bound.sequence.z0_given = bound.sequence.given;
  }
}

// Short-circuit power, which is three_phase said in another way.
void read_power(Context& context, ElementKeys& fields, const Source& source, Bound& bound) {
  const auto power = fields.quantity("power");
  if (!power) return;
  const Value& value = *fields.find("power");
  if (source.lines.lines() < 3) {
    fields.refuse({"power"}, "is of three phases, which it does not have", "use line_neutral and line_earth");
  } else if (bound.three_phase.given()) {
    context.complaints.error(value.at, value.width,
                             fmt::format("{} has both power and three_phase, which mean the same", fields.what()));
    context.complaints.note(bound.three_phase.at, "three_phase is given here");
  } else {
    bound.three_phase.amps = *power / (kSqrt3 * source.U);
    bound.three_phase.at = value.at;
  }
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
  read_sequence(context, fields, key, supply.what(), bound);
  bound.power_factor = read_angle(context, fields);
  read_power(context, fields, source, bound);
  if (source.high_voltage) {
    fields.refuse({"line_neutral", "Zn"}, "cannot be: above 1 kV there is no neutral");
    bound.line_neutral = {};
  }
  const bool split_open = source.lines.lines() > 2;
  if (key == "maximum" && split_open && bound.three_phase.given()) {
    for (const auto& [loop, name] :
         {std::pair{&bound.line_neutral, "line-neutral"}, std::pair{&bound.line_earth, "line-earth"}}) {
      const bool never = loop == &bound.line_neutral ? source.high_voltage : source.earthing == models::Earthing::IT;
      if (!loop->given() && !never) {
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
    if (!source.high_voltage) read_alias(context, fields, "Zn", "line_neutral", bound.line_neutral);
  }
  const bool of_lines =
      bound.line_neutral.given() ||
      (bound.line_earth.given() && source.earthing != models::Earthing::TT && source.earthing != models::Earthing::IT);
  if (key == "minimum" && split_open && !bound.three_phase.given() && of_lines) {
    context.assume(source.name,
                   fmt::format("no least three-phase current of {}: all of the least declared loop is taken "
                               "to lie in the line",
                               supply.what()),
                   bound.at);
  }
  if (bound.three_phase.given() && source.lines.lines() < 3) {
    context.complaints.error(bound.three_phase.at, 1,
                             fmt::format("{} is {} and has no three_phase current", supply.what(),
                                         source.split_phase ? "split-phase" : "single-phase"),
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
  const bool combined = source.earthing == models::Earthing::TN_C_S || source.earthing == models::Earthing::TN_C;
  if (combined && bound.line_neutral.given() && bound.line_earth.given()) {
    const double ln = amps_of(bound.line_neutral, c, source.U0);
    const double le = amps_of(bound.line_earth, c, source.U0);
    if (ln > le * kSlack || le > ln * kSlack) {
      context.complaints.error(bound.line_earth.at, 1,
                               fmt::format("{} line_earth of {} differs from line_neutral, but in {} both return "
                                           "through the one conductor",
                                           name, what, models::word(source.earthing)));
      context.complaints.note(bound.line_neutral.at, "line_neutral is given here");
    }
  }
}

void compare_bounds(Context& context, const Source& source, const std::string& what) {
  constexpr double kHighMax = 1.1, kHighMin = 1.0;  // IEC 60909-0, table 1, above 1 kV
  const double c_max = source.high_voltage ? kHighMax : context.network.rules.c_max;
  const double c_min = source.high_voltage ? kHighMin : context.network.rules.c_min;
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
  const models::Sequence& most = source.maximum.sequence;
  const models::Sequence& least = source.minimum.sequence;
  if (most.given && least.given && std::abs(least.z1) * kSlack < std::abs(most.z1)) {
    context.complaints.error(least.at, 1, fmt::format("minimum z1 of {} is below that of the maximum", what));
    context.complaints.note(most.at, "the maximum is given here");
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
    const auto nominal = read_voltage(context, fields, VoltageForms::split_phase);
    if (nominal) {
      source.U0 = nominal->U0;
      source.U = nominal->U;
      source.lines = nominal->lines;
      source.split_phase = nominal->split_phase;
      source.high_voltage = nominal->high;
    }
    if (const Value* feeds = fields.find("feeds")) source.board = find_element(context, *feeds, "board");
    source.earthing = read_earthing(fields, !maybe_high(fields, nominal)).value_or(source.earthing);
    source.link_at_board = read_star_and_link(context, fields, source.name, source.earthing, StarOwner::supply,
                                              source.high_voltage, source.star);
    source.capacitance = read_capacitance(fields, source.earthing);
    source.demand = fields.sourced("demand");
    source.pf = fields.sourced("pf");
    source.device = read_device_key(context, fields, "device");
    read_source_phases(context, fields, "supply", nominal.has_value(), source.split_phase, source.lines);
    const auto network = fields.choice("network");
    // who is supplied above 1 kV has a transformer of his own
    source.own_transformer = network.value_or(source.high_voltage ? "own transformer" : "") == "own transformer";
    if (fields.find("network") == nullptr && !source.high_voltage) {
      context.assume(source.name,
                     fmt::format("network of {} taken as public, which has the lower voltage-drop limits", what),
                     source.at);
    }
    read_bound(context, fields, "maximum", source, source.maximum);
    read_bound(context, fields, "minimum", source, source.minimum);
    if (nominal) compare_bounds(context, source, what);
    models::ConductorSet live = source.lines;
    if (!source.high_voltage) live.add(Conductor::N);
    read_tails(context, fields, "supply.tails", source.name, live, source.high_voltage, source.tails);
    context.network.sources.push_back(std::move(source));
  }
}

}  // namespace sunder::netlists
