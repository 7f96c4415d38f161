// SPDX-License-Identifier: Apache-2.0
/// @file
/// Generators and inverters as sources, motors as what feeds a fault beside them.
#include <fmt/format.h>

#include <cmath>
#include <limits>
#include <optional>
#include <utility>

#include "netlists/device_points.h"
#include "netlists/hints.h"
#include "netlists/parts.h"
#include "netlists/source_keys.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::Quantity;
using models::Source;

bool is_table(Context& context, const Value& value, const std::string& what) {
  if (value.form == Value::Form::table) return true;
  context.complaints.error(value.at, value.width, fmt::format("{} is {}; a table is expected", what, word(value.form)));
  context.refused = true;
  return false;
}

// What generators and inverters have in common.
void read_machine(Context& context, ElementKeys& fields, std::string_view kind, VoltageForms forms, Source& source) {
  source.own_transformer = true;
  const auto nominal = read_voltage(context, fields, forms);
  if (nominal) {
    source.U0 = nominal->U0;
    source.U = nominal->U;
    source.lines = nominal->lines;
    source.high_voltage = nominal->high;
  }
  if (const Value* feeds = fields.find("feeds")) source.board = find_element(context, *feeds, "board");
  source.earthing = read_earthing(fields, !maybe_high(fields, nominal)).value_or(source.earthing);
  source.link_at_board = read_star_and_link(context, fields, source.name, source.earthing, StarOwner::other,
                                            source.high_voltage, source.star);
  source.capacitance = read_capacitance(fields, source.earthing);
  source.demand = fields.sourced("demand");
  source.device = read_device_key(context, fields, "device");
  if (forms != VoltageForms::three_phase) {
    read_source_phases(context, fields, kind, nominal.has_value(), false, source.lines);
  }
  models::ConductorSet live = source.lines;
  if (!source.high_voltage) live.add(Conductor::N);
  read_tails(context, fields, fmt::format("{}.tails", kind), source.name, live, source.high_voltage, source.tails);
}

// A reactance that must not be below another one, where both are given.
void check_ascending(Context& context, ElementKeys& fields, std::string_view less, double less_value,
                     std::string_view more, double more_value) {
  if (!(less_value > more_value)) return;  // also where one is not given
  const Value& at = *fields.find(more);
  context.complaints.error(at.at, at.width, fmt::format("{} of {} is below {}", more, fields.what(), less));
  context.complaints.note(fields.find(less)->at, fmt::format("{} is given here", less));
}

void read_reactances(Context& context, ElementKeys& fields, models::Generator& made) {
  made.rating = fields.quantity("rating").value_or(0);
  made.xd_subtransient = fields.quantity("xd_subtransient").value_or(0);
  made.xd_transient = fields.quantity("xd_transient").value_or(models::kNotGiven);
  made.xd = fields.quantity("xd").value_or(models::kNotGiven);
  made.x2 = fields.quantity("x2").value_or(models::kNotGiven);
  made.x0 = fields.quantity("x0").value_or(models::kNotGiven);
  made.r = fields.quantity("r").value_or(models::kNotGiven);
  made.T_subtransient = fields.quantity("T_subtransient").value_or(models::kNotGiven);
  made.T_transient = fields.quantity("T_transient").value_or(models::kNotGiven);
  made.sustained = fields.number("sustained").value_or(models::kNotGiven);
  check_ascending(context, fields, "xd_subtransient", made.xd_subtransient, "xd_transient", made.xd_transient);
  check_ascending(context, fields, "xd_transient", made.xd_transient, "xd", made.xd);
  if (std::isnan(made.xd_transient))
    check_ascending(context, fields, "xd_subtransient", made.xd_subtransient, "xd", made.xd);
  check_ascending(context, fields, "T_subtransient", made.T_subtransient, "T_transient", made.T_transient);
}

void assume_reactances(Context& context, ElementKeys& fields, const std::string& name, models::Generator& made) {
  const auto pf = fields.number("pf");
  if (pf) {
    made.pf = *pf;
  } else if (fields.find("pf") == nullptr) {
    context.assume(name, fmt::format("rated power factor of {} taken as 0.8", fields.what()), fields.at());
  }
  if (fields.find("x2") == nullptr) {
    context.assume(name, fmt::format("negative-sequence reactance of {} taken as its subtransient one", fields.what()),
                   fields.at());
  }
  if (fields.find("r") == nullptr) {
    context.assume(
        name, fmt::format("armature resistance of {} taken by IEC 60909-0 from its rating and voltage", fields.what()),
        fields.at());
  }
}

// One stage: a current with the time until which it is kept, the last one perhaps for ever.
std::optional<models::Stage> read_stage(Context& context, const Value& item, const std::string& what, bool last) {
  const bool lone = item.form == Value::Form::list && item.items.size() == 1;
  if (item.form != Value::Form::list || item.items.empty() || item.items.size() > 2 || (lone && !last)) {
    context.complaints.error(item.at, item.width,
                             lone ? fmt::format("{}: only the last stage may be without a time", what)
                                  : fmt::format("{}: a current and a time are expected", what),
                             "such as [[\"600 A\", \"20 ms\"], [\"150 A\"]]");
    return std::nullopt;
  }
  models::Stage stage;
  const auto amps = point_value(context, item.items[0], Quantity::current, what);
  if (lone) {
    stage.seconds = std::numeric_limits<double>::infinity();
  } else if (const auto seconds = point_value(context, item.items[1], Quantity::time, what)) {
    stage.seconds = *seconds;
  } else {
    return std::nullopt;
  }
  if (!amps) return std::nullopt;
  stage.amps = *amps;
  return stage;
}

void read_stages(Context& context, ElementKeys& fields, std::vector<models::Stage>& stages) {
  const Value* list = fields.list("stages");
  if (list == nullptr) return;
  const std::string what = fmt::format("stages of {}", fields.what());
  if (list->items.empty()) context.complaints.error(list->at, list->width, fmt::format("{} has no stage", what));
  for (std::size_t k = 0; k < list->items.size(); ++k) {
    const Value& item = list->items[k];
    const auto stage = read_stage(context, item, what, k + 1 == list->items.size());
    if (!stage) continue;
    if (!stages.empty() && stage->amps >= stages.back().amps) {
      context.complaints.error(item.items[0].at, item.items[0].width,
                               fmt::format("{}: currents must fall from stage to stage", what));
    } else if (!stages.empty() && stage->seconds <= stages.back().seconds) {
      context.complaints.error(item.items[1].at, item.items[1].width,
                               fmt::format("{}: times must rise from stage to stage", what));
    } else {
      stages.push_back(*stage);
    }
  }
}

// The board, or the circuit "board/way", that a motor stands on.
void read_place(Context& context, ElementKeys& fields, models::Motor& made) {
  const Value* on = fields.find("on");
  if (on == nullptr) return;
  if (on->form != Value::Form::text || on->text.find('/') == std::string::npos) {
    made.board = find_element(context, *on, "board", "a circuit is named \"board/way\"");
    return;
  }
  const auto found = context.circuits.find(on->text);
  if (found != context.circuits.end()) {
    made.circuit = found->second.handle;
    return;
  }
  if (context.refused || context.maybe_lost(on->text.substr(on->text.find('/') + 1))) return;
  std::vector<std::string_view> names = names_of(context.circuits, "circuit");
  std::string hint = did_you_mean(context, on->text, names);
  if (hint.empty() && !context.complaints.full()) hint = listed("circuits", names);
  context.complaints.error(on->at, on->width, fmt::format("unknown circuit '{}' of {}", on->text, fields.what()),
                           std::move(hint));
}

void read_motor_phases(Context& context, ElementKeys& fields, models::Motor& made) {
  const Value* phases = fields.find("phases");
  if (phases == nullptr) return;
  auto set = read_phases(context, *phases, fields.what());
  if (!set) return;
  if (set->lines() < 2) {
    context.complaints.error(phases->at, phases->width,
                             fmt::format("{} has one line, and motors of a single phase are not solved", fields.what()),
                             "\"L1 L2 L3\", or \"L1 L2\" between two lines");
    return;
  }
  set->remove(Conductor::N);
  set->remove(Conductor::PE);
  made.lines = *set;
}

void read_motor_ratings(Context& context, ElementKeys& fields, models::Motor& made) {
  const models::Motor usual;
  const bool rating = fields.find("rating") != nullptr;
  if (!rating && fields.find("current") == nullptr && !context.maybe_lost("rating")) {
    context.complaints.error(made.at, 1, fmt::format("{} has neither 'rating' nor 'current'", fields.what()),
                             "rating = \"5.5 kW\", or the rated current");
  }
  if (rating && fields.find("current") != nullptr) {
    const Value& value = *fields.find("current");
    context.complaints.error(value.at, value.width,
                             fmt::format("{} has both rating and current; one is enough", fields.what()));
    context.complaints.note(fields.find("rating")->at, "rating is given here");
  }
  made.watts = fields.quantity("rating").value_or(0);
  made.amps = fields.quantity("current").value_or(0);
  made.volts = fields.quantity("voltage").value_or(0);
  made.pf = fields.number("pf").value_or(usual.pf);
  made.efficiency = fields.number("efficiency").value_or(usual.efficiency);
  made.start = fields.number("start").value_or(usual.start);
  made.r_over_x = fields.number("r_over_x").value_or(usual.r_over_x);
  made.pole_pairs = fields.whole("pole_pairs").value_or(usual.pole_pairs);
  made.count = fields.whole("count").value_or(usual.count);
  made.converter = fields.flag("converter").value_or(false);
  if (made.converter) return;  // it does not feed back, so that nothing of this matters
  const auto assume = [&](std::string sentence) { context.assume(made.name, std::move(sentence), made.at); };
  const bool no_pf = fields.find("pf") == nullptr;
  const bool no_efficiency = fields.find("efficiency") == nullptr;
  if (rating && fields.find("current") == nullptr) {
    if (no_pf) assume(fmt::format("rated power factor of {} taken as 0.85", fields.what()));
    if (no_efficiency) assume(fmt::format("rated efficiency of {} taken as 0.9", fields.what()));
  }
  if (fields.find("start") == nullptr)
    assume(fmt::format("starting current of {} taken as 5 times rated", fields.what()));
  if (fields.find("r_over_x") == nullptr) assume(fmt::format("R/X of {} taken as 0.42", fields.what()));
}

}  // namespace

void read_generators(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("generator '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.sources.size());
    if (!enter_name(context, context.elements, member, "generator", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("generator"), what, member.at);
    Source source;
    source.name = member.key;
    source.at = member.at;
    source.generator.present = true;
    read_machine(context, fields, "generator", VoltageForms::three_phase, source);
    read_reactances(context, fields, source.generator);
    assume_reactances(context, fields, source.name, source.generator);
    context.network.sources.push_back(std::move(source));
  }
}

void read_inverters(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("inverter '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.sources.size());
    if (!enter_name(context, context.elements, member, "inverter", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("inverter"), what, member.at);
    Source source;
    source.name = member.key;
    source.at = member.at;
    source.inverter.present = true;
    read_machine(context, fields, "inverter", VoltageForms::single_phase, source);
    read_stages(context, fields, source.inverter.stages);
    source.inverter.follows = fields.flag("follows").value_or(false);
    context.network.sources.push_back(std::move(source));
  }
}

void read_motors(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("motor '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.motors.size());
    if (!enter_name(context, context.elements, member, "motor", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("motor"), what, member.at);
    models::Motor made;
    made.name = member.key;
    made.at = member.at;
    read_place(context, fields, made);
    read_motor_phases(context, fields, made);
    read_motor_ratings(context, fields, made);
    context.network.motors.push_back(std::move(made));
  }
}

}  // namespace sunder::netlists
