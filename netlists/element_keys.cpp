// SPDX-License-Identifier: Apache-2.0
/// @file
/// Reading keys by the vocabulary.
#include "netlists/element_keys.h"

#include <fmt/format.h>

#include <algorithm>
#include <charconv>
#include <cmath>
#include <utility>
#include <variant>

#include "netlists/hints.h"

namespace sunder::netlists {

namespace {

using models::Key;
using models::Quantity;
using models::ValueForm;

std::string shown(const Key& key, double si) {
  return key.form == ValueForm::quantity ? models::format_quantity(si, key.quantity) : models::format_number(si);
}

// "sockets|fixed|lighting" -> "sockets, fixed, lighting"
std::vector<std::string_view> split_choices(std::string_view choices) {
  std::vector<std::string_view> list;
  while (!choices.empty()) {
    const std::size_t bar = choices.find('|');
    list.push_back(choices.substr(0, bar));
    choices = bar == std::string_view::npos ? std::string_view{} : choices.substr(bar + 1);
  }
  return list;
}

std::string joined(const std::vector<std::string_view>& words) {
  std::string text;
  for (const std::string_view word : words) {
    if (!text.empty()) text += ", ";
    text += word;
  }
  return text;
}

// "0,95": how it would be written with a point; "" for anything else.
std::string comma_hint(std::string_view text) {
  const std::size_t comma = text.find(',');
  if (comma == std::string_view::npos || text.find_first_not_of("0123456789,") != std::string_view::npos) return {};
  std::string point(text);
  point[comma] = '.';
  return point.find(',') == std::string::npos ? fmt::format("decimals take a point: {}", point) : std::string{};
}

}  // namespace

models::Origin inside(const Value& value, std::size_t offset) noexcept {
  models::Origin at = value.at;
  const std::string_view before = std::string_view(value.text).substr(0, offset);
  if (before.find('\n') == std::string_view::npos) at.column += static_cast<std::uint32_t>(characters(before));
  return at;
}

ElementKeys::ElementKeys(Context& context, const Value& table, const models::Kind& kind, std::string what,
                         models::Origin at)
    : context_(context), table_(table), kind_(kind), what_(std::move(what)), at_(at) {
  for (const Member& member : table.members) {
    if (models::find_key(kind, member.key) != nullptr) continue;
    std::string hint;
    meant_.push_back(meant_key(kind, member.key));
    if (!context.complaints.full()) {
      hint = unknown_key_hint(kind, member.key, member.value.form == Value::Form::table);
    }
    context.complaints.error(member.at, member.width, fmt::format("unknown key '{}' in {}", member.key, what_),
                             std::move(hint));
  }
  for (const Key& key : kind.keys) {
    const bool replaced = !key.unless.empty() && table.find(key.unless) != nullptr;
    if (key.required && !replaced) require(key.name);
  }
}

bool ElementKeys::require(std::string_view name) {
  if (table_.find(name) != nullptr) return true;
  const Key* key = models::find_key(kind_, name);
  if (key == nullptr || context_.maybe_lost(name)) return false;
  if (std::find(meant_.begin(), meant_.end(), name) != meant_.end()) return false;
  context_.complaints.error(at_, 1, fmt::format("{} has no '{}', which is obligatory", what_, name),
                            fmt::format("{}: {}", name, key->help));
  return false;
}

void ElementKeys::refuse(const std::vector<std::string_view>& keys, std::string_view reason, std::string_view hint) {
  for (const std::string_view key : keys) {
    const Value* value = find(key);
    if (value == nullptr) continue;
    context_.complaints.error(value->at, value->width, fmt::format("{} of {} {}", key, what_, reason),
                              std::string(hint));
  }
}

void ElementKeys::wrong_form(const Value& value, std::string_view key, std::string_view expected) {
  context_.complaints.error(value.at, value.width,
                            fmt::format("{} of {} is {}; {} is expected", key, what_, word(value.form), expected));
}

std::optional<double> ElementKeys::in_range(const Key& key, const Value& value, double si) {
  auto refuse = [&](std::string rule) {
    // 12 where 12 % was meant
    constexpr double kPercent = 100;
    const bool percent = key.form == ValueForm::quantity && key.quantity == Quantity::ratio && si > key.most &&
                         si / kPercent <= key.most;
    context_.complaints.error(
        value.at, value.width,
        fmt::format("{} of {} is {}; it must be {}", key.name, what_, shown(key, si), std::move(rule)),
        percent ? fmt::format("did you mean \"{} %\"?", shown(key, si)) : std::string{});
  };
  if (!std::isfinite(si)) {
    context_.complaints.error(value.at, value.width, fmt::format("{} of {} is not a finite number", key.name, what_));
    return std::nullopt;
  }
  const bool bounded = key.least != 0 || key.most != 0;
  if (bounded && key.above && si <= key.least) {
    refuse("above " + shown(key, key.least));
    return std::nullopt;
  }
  if (bounded && si < key.least) {
    refuse("at least " + shown(key, key.least));
    return std::nullopt;
  }
  if (bounded && si > key.most) {
    refuse("at most " + shown(key, key.most));
    return std::nullopt;
  }
  // a band that ends in a rounded decimal must hold its own end
  constexpr double kSlack = 1e-9;
  const bool banded = (key.plausible_least != 0 || key.plausible_most != 0) && key.name != unbanded_;
  if (banded && (si < key.plausible_least - kSlack * std::abs(key.plausible_least) ||
                 si > key.plausible_most + kSlack * std::abs(key.plausible_most))) {
    context_.complaints.warn(value.at, value.width,
                             fmt::format("{} of {} is {}; usual are {} to {}", key.name, what_, shown(key, si),
                                         shown(key, key.plausible_least), shown(key, key.plausible_most)));
  }
  return si;
}

std::optional<double> ElementKeys::quantity(std::string_view name) {
  const Value* value = find(name);
  const Key* key = models::find_key(kind_, name);
  if (value == nullptr || key == nullptr) return std::nullopt;
  const std::string expected = fmt::format("a text with a unit ({})", models::accepted_units(key->quantity));
  if (value->form == Value::Form::number && key->quantity == Quantity::ratio) {
    return in_range(*key, *value, value->number);
  }
  if (value->form == Value::Form::number) {
    context_.complaints.error(value->at, value->width,
                              fmt::format("{} of {} is {} without a unit", name, what_, value->text),
                              fmt::format("units that fit: {}", models::accepted_units(key->quantity)));
    return std::nullopt;
  }
  if (value->form != Value::Form::text) {
    wrong_form(*value, name, expected);
    return std::nullopt;
  }
  const auto parsed = models::parse_quantity(value->text, key->quantity);
  if (const auto* error = std::get_if<models::UnitError>(&parsed)) {
    context_.complaints.error(value->at, value->width, fmt::format("{} of {}: {}", name, what_, error->message));
    return std::nullopt;
  }
  return in_range(*key, *value, std::get<double>(parsed));
}

std::optional<double> ElementKeys::number(std::string_view name) {
  const Value* value = find(name);
  const Key* key = models::find_key(kind_, name);
  if (value == nullptr || key == nullptr) return std::nullopt;
  if (value->form == Value::Form::number) return in_range(*key, *value, value->number);
  if (value->form == Value::Form::text) {
    const std::string_view text = trimmed(value->text);
    double parsed = 0;
    const auto [end, status] = std::from_chars(text.data(), text.data() + text.size(), parsed);
    if (status == std::errc{} && end == text.data() + text.size()) return in_range(*key, *value, parsed);
    context_.complaints.error(value->at, value->width,
                              fmt::format("{} of {} is '{}'; a number is expected", name, what_, value->text),
                              comma_hint(text));
    return std::nullopt;
  }
  wrong_form(*value, name, "a number");
  return std::nullopt;
}

std::optional<int> ElementKeys::whole(std::string_view name) {
  const std::optional<double> value = number(name);
  if (!value) return std::nullopt;
  if (*value != std::floor(*value)) {
    const Value& at = *find(name);
    context_.complaints.error(at.at, at.width,
                              fmt::format("{} of {} is {}; a whole number is expected", name, what_, at.text));
    return std::nullopt;
  }
  return static_cast<int>(*value);
}

std::optional<std::string> ElementKeys::text(std::string_view name) {
  const Value* value = find(name);
  if (value == nullptr) return std::nullopt;
  if (value->form != Value::Form::text) {
    wrong_form(*value, name, "a text");
    return std::nullopt;
  }
  return value->text;
}

std::optional<std::string> ElementKeys::choice(std::string_view name) {
  const Value* value = find(name);
  const Key* key = models::find_key(kind_, name);
  const std::optional<std::string> read = text(name);
  if (!read || key == nullptr) return std::nullopt;
  const std::string chosen(trimmed(*read));
  const std::vector<std::string_view> valid = split_choices(key->choices);
  if (std::find(valid.begin(), valid.end(), chosen) != valid.end()) return chosen;
  const std::string_view meant = meant_choice(name, chosen, valid);
  std::string hint = meant.empty() ? did_you_mean(context_, chosen, valid) : fmt::format("did you mean '{}'?", meant);
  if (hint.empty()) hint = fmt::format("valid are: {}", joined(valid));
  context_.complaints.error(value->at, value->width, fmt::format("unknown {} '{}' of {}", name, chosen, what_),
                            std::move(hint));
  return std::nullopt;
}

std::optional<bool> ElementKeys::flag(std::string_view name) {
  const Value* value = find(name);
  if (value == nullptr) return std::nullopt;
  if (value->form == Value::Form::flag) return value->flag;
  if (value->form == Value::Form::text) {
    // cells of a schedule are texts, and spreadsheets write TRUE
    const std::string_view text = trimmed(value->text);
    for (const std::string_view yes : {"true", "TRUE", "yes"}) {
      if (text == yes) return true;
    }
    for (const std::string_view no : {"false", "FALSE", "no"}) {
      if (text == no) return false;
    }
    context_.complaints.error(value->at, value->width,
                              fmt::format("{} of {} is '{}'; true or false is expected", name, what_, value->text));
    return std::nullopt;
  }
  wrong_form(*value, name, "true or false");
  return std::nullopt;
}

models::Sourced<double> ElementKeys::sourced(std::string_view name) {
  models::Sourced<double> made;
  const Key* key = models::find_key(kind_, name);
  const std::optional<double> read = key != nullptr && key->form == ValueForm::number ? number(name) : quantity(name);
  if (!read) return made;
  made.value = *read;
  made.at = find(name)->at;
  made.given = true;
  return made;
}

std::optional<std::complex<double>> ElementKeys::impedance(std::string_view name, Quantity quantity, double least,
                                                           double most) {
  const std::optional<std::string> typed = text(name);
  if (!typed) return std::nullopt;
  const Value& value = *find(name);
  const auto parsed = models::parse_complex(*typed, quantity);
  if (const auto* error = std::get_if<models::UnitError>(&parsed)) {
    context_.complaints.error(value.at, value.width, fmt::format("{} of {}: {}", name, what_, error->message));
    return std::nullopt;
  }
  const std::complex<double> z = std::get<std::complex<double>>(parsed);
  const double size = std::abs(z);
  if (!(z.real() >= 0) || !(size > 0) || !std::isfinite(size)) {
    context_.complaints.error(value.at, value.width,
                              fmt::format("{} of {} is '{}'; {}", name, what_, *typed,
                                          z.real() < 0 ? "its resistance must not be negative" : "it must be above 0"));
    return std::nullopt;
  }
  if (size < least || size > most) {
    context_.complaints.warn(
        value.at, value.width,
        fmt::format("{} of {} is '{}'; usual are {} to {}", name, what_, *typed,
                    models::format_quantity(least, quantity), models::format_quantity(most, quantity)));
  }
  return z;
}

// How the table would be written; a single value of a supply's bound is put into it.
std::string ElementKeys::table_hint(std::string_view name, const Value& value) const {
  const bool bound = name == "maximum" || name == "minimum";
  if (bound && value.form == Value::Form::text) {
    if (std::holds_alternative<double>(models::parse_quantity(value.text, Quantity::current))) {
      return fmt::format("{} = {{ three_phase = \"{}\" }}", name, value.text);
    }
    if (std::holds_alternative<double>(models::parse_quantity(value.text, Quantity::impedance))) {
      return fmt::format("{} = {{ {} = \"{}\" }}", name, name == "minimum" ? "Ze" : "line_earth", value.text);
    }
  }
  const models::Kind* inner = models::find_kind(fmt::format("{}.{}", kind_.name, name));
  return inner == nullptr ? std::string{} : fmt::format("such as {}", trimmed(inner->example));
}

const Value* ElementKeys::table(std::string_view name) {
  const Value* value = find(name);
  if (value == nullptr || value->form == Value::Form::table) return value;
  context_.complaints.error(value->at, value->width,
                            fmt::format("{} of {} is {}; a table is expected", name, what_, word(value->form)),
                            table_hint(name, *value));
  return nullptr;
}

const Value* ElementKeys::list(std::string_view name) {
  const Value* value = find(name);
  if (value == nullptr || value->form == Value::Form::list) return value;
  wrong_form(*value, name, "a list");
  return nullptr;
}

std::optional<models::ConductorSet> read_phases(Context& context, const Value& value, const std::string& what) {
  using models::Conductor;
  constexpr std::string_view kExpected = "expected: \"L1\", \"L1 L2\", \"L1 L2 L3\" or \"L1 L2 L3 N\"";
  auto refuse = [&](std::size_t offset, int width, std::string message) {
    context.complaints.error(inside(value, offset), width, std::move(message), std::string(kExpected));
    return std::nullopt;
  };
  if (value.form != Value::Form::text) {
    return refuse(0, value.width, fmt::format("phases of {} is {}", what, word(value.form)));
  }
  models::ConductorSet set;
  const std::string_view text = value.text;
  std::size_t i = 0;
  while (i < text.size()) {
    if (text[i] == ' ' || text[i] == '\t') {
      ++i;
      continue;
    }
    const std::size_t end = std::min(text.find_first_of(" \t", i), text.size());
    const std::string_view word_text = text.substr(i, end - i);
    bool known = false;
    for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N}) {
      if (word_text != models::name(c)) continue;
      if (set.has(c)) {
        return refuse(i, characters(word_text), fmt::format("phases of {} names {} twice", what, word_text));
      }
      set.add(c);
      known = true;
    }
    if (!known) {
      return refuse(i, characters(word_text), fmt::format("unknown phase '{}' of {}", word_text, what));
    }
    i = end;
  }
  if (set.lines() == 0) return refuse(0, value.width, fmt::format("phases of {} names no line", what));
  if (set.lines() == 1) set.add(Conductor::N);
  set.add(Conductor::PE);
  return set;
}

}  // namespace sunder::netlists
