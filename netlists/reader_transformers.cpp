// SPDX-License-Identifier: Apache-2.0
/// @file
/// Transformers, as sources and between two boards: impedance, vector group, zero sequence, star points.
#include <fmt/format.h>

#include <cmath>
#include <optional>
#include <utility>

#include "netlists/parts.h"
#include "netlists/source_keys.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::Quantity;
using models::Source;
using models::Transformer;
using models::Winding;

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

// What one winding impedance comes from.
struct Rated {
  double rating = 0;    // [VA]
  double uk = 0;        // [1]
  double losses = 0;    // [W]
  double x_over_r = 0;  // [1]
};

Rated read_impedance(Context& context, ElementKeys& fields) {
  Rated rated;
  rated.rating = fields.quantity("rating").value_or(0);
  rated.uk = fields.quantity("uk").value_or(0);
  rated.losses = fields.quantity("losses").value_or(0);
  rated.x_over_r = fields.number("x_over_r").value_or(0);
  const bool losses = fields.find("losses") != nullptr;
  const Value* ratio = fields.find("x_over_r");
  if (losses && ratio != nullptr) {
    context.complaints.error(ratio->at, ratio->width,
                             fmt::format("{} has both losses and x_over_r; one is enough", fields.what()));
    context.complaints.note(fields.find("losses")->at, "losses is given here");
  } else if (!losses && ratio == nullptr && !context.maybe_lost("losses")) {
    context.complaints.error(fields.at(), 1, fmt::format("{} has neither 'losses' nor 'x_over_r'", fields.what()));
  }
  // R of a transformer is losses over rating, and cannot exceed the whole impedance uk
  if (rated.losses > 0 && rated.rating > 0 && rated.uk > 0 && rated.losses / rated.rating >= rated.uk) {
    const Value& at = *fields.find("losses");
    context.complaints.error(at.at, at.width,
                             fmt::format("losses of {} are {} of its rating, not below uk", fields.what(),
                                         models::format_quantity(rated.losses / rated.rating, Quantity::percentage)));
  }
  if (ratio != nullptr && ratio->form == Value::Form::number && rated.x_over_r == 0) {
    rated.losses = rated.uk * rated.rating;  // all of uk is resistance
  }
  return rated;
}

struct VectorGroup {
  Winding primary = Winding::delta;
  Winding secondary = Winding::star_earthed;
  int clock = 11;
  std::string text = "Dyn11";
};

bool has_neutral(Winding winding) noexcept {
  return winding == Winding::star_earthed || winding == Winding::zigzag_earthed;
}

// Whether zero-sequence currents of the other side find no way through it, or none of its own impedance.
bool closes_zero_sequence(Winding winding) noexcept {
  return winding == Winding::delta || winding == Winding::zigzag || winding == Winding::zigzag_earthed;
}

// One winding at the beginning of `text`, in capitals or small letters, and taken off it.
std::optional<Winding> take_winding(std::string_view& text, bool capitals) {
  const std::string_view letters = capitals ? "DYZ" : "dyz";
  if (text.empty()) return std::nullopt;
  const std::size_t which = letters.find(text.front());
  if (which == std::string_view::npos) return std::nullopt;
  text.remove_prefix(1);
  const bool neutral = which > 0 && !text.empty() && text.front() == (capitals ? 'N' : 'n');
  if (neutral) text.remove_prefix(1);
  if (which == 0) return Winding::delta;
  if (which == 1) return neutral ? Winding::star_earthed : Winding::star;
  return neutral ? Winding::zigzag_earthed : Winding::zigzag;
}

// "dyn11" -> "Dyn11": the first letter (and its N) in capitals, the rest in small ones.
std::string usual_capitals(std::string_view text) {
  std::string made;
  for (std::size_t k = 0; k < text.size(); ++k) {
    char c = text[k];
    const bool letter = (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z');
    const bool first = k == 0 || (k == 1 && (c == 'n' || c == 'N'));
    if (letter) c = static_cast<char>(first ? c & ~0x20 : c | 0x20);
    made += c;
  }
  return made;
}

std::optional<VectorGroup> parse_vector(std::string_view text) {
  VectorGroup group;
  group.text = std::string(text);
  const auto primary = take_winding(text, true);
  const auto secondary = primary ? take_winding(text, false) : std::nullopt;
  constexpr std::size_t kMostDigits = 2;
  if (!secondary || text.empty() || text.size() > kMostDigits) return std::nullopt;
  if (text.find_first_not_of("0123456789") != std::string_view::npos) return std::nullopt;
  group.primary = *primary;
  group.secondary = *secondary;
  constexpr int kTen = 10;
  group.clock = 0;
  for (const char c : text) group.clock = kTen * group.clock + (c - '0');
  return group;
}

VectorGroup read_vector(Context& context, ElementKeys& fields) {
  const auto typed = fields.text("vector");
  if (!typed) return {};
  const Value& value = *fields.find("vector");
  auto refuse = [&](std::string message, std::string hint) {
    context.complaints.error(value.at, value.width, std::move(message), std::move(hint));
    return VectorGroup{};
  };
  constexpr int kMostClock = 11;
  const std::string_view text = trimmed(*typed);
  const auto group = parse_vector(text);
  if (!group) {
    const std::string usual = usual_capitals(text);
    const bool capitals = usual != text && parse_vector(usual);
    std::string_view rest = text;
    const bool windings = take_winding(rest, true) && take_winding(rest, false);
    if (windings && rest.empty()) {
      return refuse(fmt::format("vector of {} is '{}', without its clock number", fields.what(), text),
                    fmt::format("such as \"{}{}\"", text, text == "Dyn" || text == "Yzn" ? "11" : "0"));
    }
    return refuse(fmt::format("vector of {} is '{}', which is no vector group", fields.what(), text),
                  capitals ? fmt::format("did you mean '{}'?", usual)
                           : "primary D, Y, YN, Z or ZN, secondary d, y, yn, z or zn, clock number: such as \"Dyn11\"");
  }
  if (group->clock > kMostClock) {
    return refuse(fmt::format("vector of {} is '{}', but clock numbers end at 11", fields.what(), text), {});
  }
  // Between a star and a delta (or zigzag) the voltages differ by an odd number of 30 degrees, otherwise by an even
  // one.
  const bool odd = closes_zero_sequence(group->primary) != closes_zero_sequence(group->secondary);
  if ((group->clock % 2 == 1) != odd) {
    return refuse(fmt::format("vector of {} is '{}', which cannot be wound: with these windings the clock number is {}",
                              fields.what(), text, odd ? "odd" : "even"),
                  odd ? "possible are 1, 3, 5, 7, 9, 11" : "possible are 0, 2, 4, 6, 8, 10");
  }
  return *group;
}

// Zero-sequence ratios, NaN where they are not known.
struct ZeroSequence {
  double r = models::kNotGiven;
  double x = models::kNotGiven;
};

ZeroSequence read_zero_sequence(Context& context, ElementKeys& fields, const std::string& name,
                                const VectorGroup& group) {
  const auto both = fields.number("z0_over_z1");
  const auto r = fields.number("r0_over_r1");
  const auto x = fields.number("x0_over_x1");
  const Value* both_value = fields.find("z0_over_z1");
  const Value* r_value = fields.find("r0_over_r1");
  const Value* x_value = fields.find("x0_over_x1");
  if ((r_value == nullptr) != (x_value == nullptr)) {
    const Value& one = r_value != nullptr ? *r_value : *x_value;
    context.complaints.error(one.at, one.width,
                             fmt::format("{} has {} but no {}; they go together", fields.what(),
                                         r_value != nullptr ? "r0_over_r1" : "x0_over_x1",
                                         r_value != nullptr ? "x0_over_x1" : "r0_over_r1"));
  }
  if (both_value != nullptr && (r_value != nullptr || x_value != nullptr)) {
    const Value& other = r_value != nullptr ? *r_value : *x_value;
    context.complaints.error(other.at, other.width,
                             fmt::format("{} has both {} and z0_over_z1; one is enough", fields.what(),
                                         r_value != nullptr ? "r0_over_r1" : "x0_over_x1"));
    context.complaints.note(both_value->at, "z0_over_z1 is given here");
  }
  if (r && x) return {*r, *x};
  if (both) return {*both, *both};
  if (both_value != nullptr || r_value != nullptr || x_value != nullptr) return {1, 1};  // complained of
  if (!closes_zero_sequence(group.primary) && !closes_zero_sequence(group.secondary)) return {};
  context.assume(name, fmt::format("zero-sequence impedance of {} taken as its positive-sequence one", fields.what()),
                 fields.at());
  return {1, 1};
}

// Earthing, star point and link, which need a neutral.
struct Neutral {
  models::Earthing earthing = models::Earthing::TN_S;
  models::StarPoint star;
  bool link_at_board = false;
};

Neutral read_neutral(Context& context, ElementKeys& fields, const std::string& name, const VectorGroup& group,
                     bool high, StarOwner owner) {
  Neutral neutral;
  const bool brought_out = has_neutral(group.secondary);
  const auto earthing = read_earthing(fields, !high && brought_out);
  neutral.earthing = earthing.value_or(brought_out || high ? models::Earthing::TN_S : models::Earthing::IT);
  if (brought_out) {
    neutral.link_at_board = read_star_and_link(context, fields, name, neutral.earthing, owner, high, neutral.star);
    return neutral;
  }
  neutral.star.kind = models::StarPoint::Kind::open;
  fields.refuse({"star_point", "link"}, fmt::format("has no meaning: the secondary of {} has no neutral", group.text));
  if (earthing && *earthing != models::Earthing::IT && !high) {
    const Value& at = *fields.find("earthing");
    context.complaints.error(at.at, at.width,
                             fmt::format("earthing of {} is {}, but the secondary of {} has no neutral to be earthed",
                                         fields.what(), models::word(*earthing), group.text),
                             "a secondary yn or zn has one");
    if (const Value* vector = fields.find("vector")) context.complaints.note(vector->at, "vector is given here");
  }
  return neutral;
}

double read_secondary(Context& context, ElementKeys& fields, const std::string& name, double nominal) {
  const auto secondary = fields.quantity("secondary");
  if (fields.find("secondary") == nullptr) {
    context.assume(name,
                   fmt::format("no-load voltage of {} taken as {}", fields.what(),
                               models::format_quantity(nominal, Quantity::voltage)),
                   fields.at());
  }
  if (!secondary) return nominal;
  constexpr double kLeast = 0.8, kMost = 1.25;  // of the nominal: beyond, a digit has slipped
  if (*secondary < kLeast * nominal || *secondary > kMost * nominal) {
    const Value& at = *fields.find("secondary");
    context.complaints.warn(at.at, at.width,
                            fmt::format("secondary of {} is {}, far from its nominal voltage of {}", fields.what(),
                                        models::format_quantity(*secondary, Quantity::voltage),
                                        models::format_quantity(nominal, Quantity::voltage)));
  }
  return *secondary;
}

models::ConductorSet live_conductors(bool high, const VectorGroup& group) {
  models::ConductorSet set{Conductor::L1, Conductor::L2, Conductor::L3};
  if (!high && has_neutral(group.secondary)) set.add(Conductor::N);
  return set;
}

void read_as_source(Context& context, ElementKeys& fields, Source& source) {
  source.transformer = true;
  source.own_transformer = true;
  const auto nominal = read_voltage(context, fields, VoltageForms::three_phase);
  if (nominal) {
    source.U0 = nominal->U0;
    source.U = nominal->U;
    source.high_voltage = nominal->high;
  }
  if (const Value* feeds = fields.find("feeds")) source.board = find_element(context, *feeds, "board");
  const VectorGroup group = read_vector(context, fields);
  const Neutral neutral =
      read_neutral(context, fields, source.name, group, maybe_high(fields, nominal), StarOwner::transformer);
  source.earthing = neutral.earthing;
  source.star = neutral.star;
  source.link_at_board = neutral.link_at_board;
  source.capacitance = read_capacitance(fields, source.earthing);
  source.demand = fields.sourced("demand");
  source.pf = fields.sourced("pf");
  source.device = read_device_key(context, fields, "device");
  const Rated rated = read_impedance(context, fields);
  source.rating = rated.rating;
  source.uk = rated.uk;
  source.losses = rated.losses;
  source.x_over_r = rated.x_over_r;
  source.secondary = read_secondary(context, fields, source.name, source.U);
  read_fault_level(context, fields, source);
  const ZeroSequence zero = read_zero_sequence(context, fields, source.name, group);
  source.z0_known = !std::isnan(zero.r);
  source.z0_over_z1 = source.z0_known ? zero.x : 1;
  source.r0_over_r1 = zero.r;
  source.x0_over_x1 = zero.x;
  fields.refuse({"primary", "tap", "on_load_taps", "primary_star", "primary_device"},
                "is for a transformer between two boards, which has 'from'");
  if (!source.high_voltage && !has_neutral(group.secondary)) {
    context.without_neutral.insert(static_cast<int>(context.network.sources.size()));
  }
  read_tails(context, fields, "transformer.tails", source.name, live_conductors(source.high_voltage, group),
             source.high_voltage, source.tails);
}

// A transformer whose primary side is a board of the netlist.
void read_between(Context& context, ElementKeys& fields, Transformer& made) {
  const auto nominal = read_voltage(context, fields, VoltageForms::three_phase);
  if (nominal) {
    made.U0 = nominal->U0;
    made.U = nominal->U;
  }
  const bool high = nominal && nominal->high;
  const Value* from = fields.find("from");
  const Value* feeds = fields.find("feeds");
  made.from = find_element(context, *from, "board");
  if (feeds != nullptr) made.to = find_element(context, *feeds, "board");
  if (made.from >= 0 && made.from == made.to) {
    context.complaints.error(feeds->at, feeds->width,
                             fmt::format("{} leads from board '{}' to itself", fields.what(), feeds->text));
  }
  const VectorGroup group = read_vector(context, fields);
  made.primary_winding = group.primary;
  made.secondary_winding = group.secondary;
  made.clock = group.clock;
  if (fields.find("vector") == nullptr) {
    context.assume(made.name, fmt::format("vector group of {} taken as Dyn11", fields.what()), made.at);
  }
  const Neutral neutral =
      read_neutral(context, fields, made.name, group, maybe_high(fields, nominal), StarOwner::other);
  made.earthing = neutral.earthing;
  made.star = neutral.star;
  made.link_at_board = neutral.link_at_board;
  made.capacitance = read_capacitance(fields, made.earthing);
  made.primary_star = read_star(context, fields, "primary_star").value_or(models::StarPoint{});
  if (!has_neutral(group.primary)) {
    made.primary_star.kind = models::StarPoint::Kind::open;
    fields.refuse({"primary_star"}, fmt::format("has no meaning: the primary of {} has no neutral", group.text));
  } else if (fields.find("primary_star") == nullptr) {
    context.assume(made.name, fmt::format("primary star point of {} taken as solidly earthed", fields.what()), made.at);
  }
  made.demand = fields.sourced("demand");
  made.pf = fields.sourced("pf");
  made.device = read_device_key(context, fields, "device");
  made.primary_device = read_device_key(context, fields, "primary_device");
  const Rated rated = read_impedance(context, fields);
  made.rating = rated.rating;
  made.uk = rated.uk;
  made.losses = rated.losses;
  made.x_over_r = rated.x_over_r;
  made.secondary = read_secondary(context, fields, made.name, made.U);
  fields.require("primary");
  made.primary = fields.quantity("primary").value_or(0);
  made.tap = fields.quantity("tap").value_or(0);
  made.on_load_taps = fields.flag("on_load_taps").value_or(false);
  const ZeroSequence zero = read_zero_sequence(context, fields, made.name, group);
  made.r0_over_r1 = zero.r;
  made.x0_over_x1 = zero.x;
  fields.refuse({"fault_level"}, "is of a network before it, but it has 'from'",
                "the supply of that board declares its most and least");
  read_tails(context, fields, "transformer.tails", made.name, live_conductors(high, group), high, made.tails);
}

}  // namespace

void read_transformers(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("transformer '{}'", member.key);
    if (member.value.form != Value::Form::table) {
      context.complaints.error(member.value.at, member.value.width,
                               fmt::format("{} is {}; a table is expected", what, word(member.value.form)));
      continue;
    }
    models::Network& network = context.network;
    const bool between = member.value.find("from") != nullptr;
    const int handle = static_cast<int>(between ? network.transformers.size() : network.sources.size());
    if (!enter_name(context, context.elements, member, "transformer", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("transformer"), what, member.at);
    if (between) {
      context.elements[member.key].between = true;
      Transformer made;
      made.name = member.key;
      made.at = member.at;
      read_between(context, fields, made);
      network.transformers.push_back(std::move(made));
    } else {
      Source source;
      source.name = member.key;
      source.at = member.at;
      read_as_source(context, fields, source);
      network.sources.push_back(std::move(source));
    }
  }
}

}  // namespace sunder::netlists
