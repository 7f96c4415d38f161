// SPDX-License-Identifier: Apache-2.0
/// @file
/// Device texts and [device.x] tables.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <utility>
#include <variant>

#include "netlists/device_points.h"
#include "netlists/element_keys.h"
#include "netlists/hints.h"
#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

using models::Device;
using models::DeviceFamily;
using models::DeviceSpec;
using models::Quantity;
using models::ResidualType;

// A second current below this is a residual one: IdN ends at 30 A, breaking capacities begin at 1 kA.
constexpr double kResidualBelow = 100;

const DeviceFamily* family_named(const Context& context, std::string_view name) {
  const auto found = context.families.find(std::string(name));
  return found == context.families.end() ? nullptr : &context.network.families[static_cast<std::size_t>(found->second)];
}

std::vector<std::string_view> device_names(const Context& context) {
  std::vector<std::string_view> names;
  for (const DeviceFamily& family : context.network.families) names.push_back(family.name);
  for (const auto& [name, named] : context.devices) names.push_back(name);
  return names;
}

std::optional<ResidualType> residual_type(std::string_view text) noexcept {
  if (text == "AC") return ResidualType::AC;
  if (text == "A") return ResidualType::A;
  if (text == "F") return ResidualType::F;
  if (text == "B") return ResidualType::B;
  return std::nullopt;
}

// One blank-separated word of a device text.
struct Word {
  std::string_view text;
  std::size_t offset = 0;
};

std::vector<Word> words_of(std::string_view text, std::size_t from) {
  std::vector<Word> words;
  constexpr std::string_view kBlanks = " \t\r\n";
  std::size_t i = text.find_first_not_of(kBlanks, from);
  while (i != std::string_view::npos) {
    const std::size_t end = std::min(text.find_first_of(kBlanks, i), text.size());
    words.push_back({text.substr(i, end - i), i});
    i = text.find_first_not_of(kBlanks, end);
  }
  return words;
}

bool is_number_start(char c) noexcept { return (c >= '0' && c <= '9') || c == '.' || c == '-' || c == '+'; }

// The words behind the family: "32 A 6 kA 30 mA A class 3".
class SpecReader {
 public:
  SpecReader(Context& context, const Value& value, const std::string& what)
      : context_(context), value_(value), what_(what) {}

  bool read(std::size_t from, DeviceSpec& spec) {
    const std::vector<Word> words = words_of(value_.text, from);
    for (std::size_t i = 0; i < words.size(); ++i) {
      const Word& word = words[i];
      if (is_number_start(word.text.front())) {
        if (!current(words, i, spec)) return false;
      } else if (word.text == "S") {
        spec.selective = true;
      } else if (const auto type = residual_type(word.text)) {
        spec.has_type = true;
        spec.type = *type;
      } else if (word.text == "class" && i + 1 < words.size() && words[i + 1].text.size() == 1 &&
                 words[i + 1].text[0] >= '1' && words[i + 1].text[0] <= '3') {
        spec.energy_class = words[i + 1].text[0] - '0';
        ++i;
      } else {
        return refuse(word, fmt::format("'{}' is not understood in {}", word.text, what_));
      }
    }
    return true;
  }

 private:
  bool refuse(const Word& word, std::string message) {
    context_.complaints.error(inside(value_, word.offset), characters(word.text), std::move(message),
                              std::string(kDeviceForm));
    return false;
  }

  // A number and its unit are one word or two.
  bool current(const std::vector<Word>& words, std::size_t& i, DeviceSpec& spec) {
    Word whole = words[i];
    const bool unit_inside = whole.text.find_first_not_of("0123456789.+-") != std::string_view::npos;
    if (!unit_inside && i + 1 < words.size() && !is_number_start(words[i + 1].text.front())) {
      ++i;
      const std::size_t end = words[i].offset + words[i].text.size();
      whole.text = std::string_view(value_.text).substr(whole.offset, end - whole.offset);
    }
    const auto parsed = models::parse_quantity(whole.text, Quantity::current);
    if (const auto* error = std::get_if<models::UnitError>(&parsed)) {
      return refuse(whole, fmt::format("{}: {}", what_, error->message));
    }
    const double amps = std::get<double>(parsed);
    if (!(amps > 0) || !std::isfinite(amps)) {
      return refuse(whole, fmt::format("'{}' of {} must be above 0 A", whole.text, what_));
    }
    double& slot = spec.In == 0 ? spec.In : (amps < kResidualBelow ? spec.IdN : spec.Icn);
    if (slot != 0) return refuse(whole, fmt::format("'{}' is one current too many in {}", whole.text, what_));
    slot = amps;
    return true;
  }

  Context& context_;
  const Value& value_;
  const std::string& what_;
};

// Family data put in; complaints at the text.
std::optional<Device> resolved(Context& context, const DeviceSpec& spec, const Value& value, const std::string& what) {
  const DeviceFamily* family = family_named(context, spec.family);
  const DeviceFamily* residual = family_named(context, "RCD");
  Device device;
  if (const auto error = models::resolve_device(spec, family, residual, device)) {
    context.complaints.error(value.at, value.width, fmt::format("{}: {}", what, error->message));
    return std::nullopt;
  }
  return device;
}

std::optional<Device> from_text(Context& context, const Value& value, const std::string& what) {
  const std::string_view text = value.text;
  const std::string key(trimmed(text));
  if (const auto named = context.devices.find(key); named != context.devices.end()) {
    return context.named_devices[static_cast<std::size_t>(named->second.handle)];
  }
  if (const auto known = context.device_texts.find(key); known != context.device_texts.end()) return known->second;
  const std::size_t start = std::min(text.find_first_not_of(" \t"), text.size());
  // the longest family name that the text begins with: "BS 88-2" before "B"
  const DeviceFamily* family = nullptr;
  for (const DeviceFamily& candidate : context.network.families) {
    const std::size_t end = start + candidate.name.size();
    if (text.substr(start, candidate.name.size()) != candidate.name) continue;
    if (end < text.size() && text[end] != ' ' && text[end] != '\t') continue;
    if (family == nullptr || candidate.name.size() > family->name.size()) family = &candidate;
  }
  if (family == nullptr) {
    // the name is what stands before the first current, if there is one
    // ("BS 88 16 A": a number before a number is part of the name)
    std::string_view name = trimmed(text);
    const std::vector<Word> words = words_of(text, start);
    for (std::size_t k = 1; k < words.size(); ++k) {
      if (!is_number_start(words[k].text.front())) continue;
      if (k + 1 < words.size() && is_number_start(words[k + 1].text.front()) &&
          words[k].text.find_first_not_of("0123456789-") == std::string_view::npos) {
        continue;
      }
      name = trimmed(text.substr(start, words[k].offset - start));
      break;
    }
    if (context.maybe_lost(name) && !name.empty()) return std::nullopt;
    std::string hint;
    if (!context.complaints.full()) {
      hint = device_hint(context.network.families, text, did_you_mean(context, name, device_names(context)));
    }
    context.complaints.error(
        inside(value, start), std::max(1, characters(name)),
        name.empty() ? fmt::format("{} is empty", what) : fmt::format("unknown device '{}' ({})", name, what),
        std::move(hint));
    return std::nullopt;
  }
  DeviceSpec spec;
  spec.family = family->name;
  if (!SpecReader(context, value, what).read(start + family->name.size(), spec)) return std::nullopt;
  if (spec.In == 0) {
    context.complaints.error(value.at, value.width, fmt::format("{}: '{}' has no rated current", what, key),
                             std::string(kDeviceForm));
    return std::nullopt;
  }
  std::optional<Device> device = resolved(context, spec, value, what);
  if (device) {
    device->text = key;
    context.device_texts.emplace(key, *device);
  }
  return device;
}

bool read_multiples(Context& context, const ElementKeys& fields, DeviceSpec& spec) {
  const Value* value = fields.find("instantaneous");
  if (value == nullptr) return true;
  if (value->form == Value::Form::text) {
    const std::vector<Word> words = words_of(value->text, 0);
    const auto low = words.size() == 2 ? models::parse_quantity(words[0].text, Quantity::count)
                                       : std::variant<double, models::UnitError>{models::UnitError{}};
    const auto high = words.size() == 2 ? models::parse_quantity(words[1].text, Quantity::count)
                                        : std::variant<double, models::UnitError>{models::UnitError{}};
    if (std::holds_alternative<double>(low) && std::holds_alternative<double>(high)) {
      spec.multiple_low = std::get<double>(low);
      spec.multiple_high = std::get<double>(high);
      if (spec.multiple_low > 0 && spec.multiple_high >= spec.multiple_low && spec.multiple_high <= 1000) return true;
    }
  }
  context.complaints.error(
      value->at, value->width,
      fmt::format("instantaneous of {} must be two multiples of In, the lower first", fields.what()),
      "such as \"7 10\"");
  return false;
}

// A family member with settings of its own.
std::optional<Device> like_family(Context& context, const Value& like, ElementKeys& fields) {
  DeviceSpec spec;
  const std::string name = fields.text("like").value_or("");
  const DeviceFamily* family = family_named(context, name);
  if (family == nullptr) {
    if (like.form == Value::Form::text) {
      const std::string near = did_you_mean(context, name, device_names(context));
      context.complaints.error(like.at, like.width,
                               fmt::format("unknown device family '{}' of {}", name, fields.what()),
                               near.empty() ? "`sunder help devices` lists the families" : near);
    }
    return std::nullopt;
  }
  spec.family = name;
  spec.In = fields.quantity("In").value_or(0);
  spec.Icn = fields.quantity("Icn").value_or(0);
  spec.IdN = fields.quantity("IdN").value_or(0);
  spec.selective = fields.flag("S").value_or(false);
  if (const auto type = fields.choice("type")) {
    spec.has_type = true;
    spec.type = residual_type(*type).value_or(ResidualType::AC);
  }
  spec.energy_class = fields.whole("energy_class").value_or(0);
  bool sound = read_multiples(context, fields, spec) && spec.In > 0;
  for (const std::string_view key : {"kind", "latest", "earliest", "let_through", "pre_arcing", "I2"}) {
    if (const Value* extra = fields.find(key)) {
      context.complaints.error(
          extra->at, extra->width,
          fmt::format("{} has both 'like' and '{}'; points stand without a family", fields.what(), key));
      sound = false;
    }
  }
  if (!sound) return std::nullopt;
  return resolved(context, spec, like, fields.what());
}

std::optional<Device> from_table(Context& context, const Value& value, const std::string& what, models::Origin at) {
  ElementKeys fields(context, value, *models::find_kind("device"), what, at);
  if (const Value* like = fields.find("like")) return like_family(context, *like, fields);
  if (fields.find("latest") != nullptr || fields.find("kind") != nullptr) {
    return device_by_points(context, fields, family_named(context, "RCD"));
  }
  if (!context.maybe_lost("like") && !context.maybe_lost("latest")) {
    context.complaints.error(at, 1, fmt::format("{} has neither 'like' (a family) nor 'latest' (points)", what));
  }
  return std::nullopt;
}

}  // namespace

void read_named_devices(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("device '{}'", member.key);
    if (member.value.form != Value::Form::table) {
      context.complaints.error(member.value.at, member.value.width,
                               fmt::format("{} is {}; a table is expected", what, word(member.value.form)));
      continue;
    }
    if (family_named(context, member.key) != nullptr) {
      context.complaints.error(member.at, member.width,
                               fmt::format("{} has the name of a device family; choose another", what));
      continue;
    }
    const int handle = static_cast<int>(context.named_devices.size());
    if (!enter_name(context, context.devices, member, "device", handle)) continue;
    Device device = from_table(context, member.value, what, member.at).value_or(Device{});
    device.text = member.key;
    device.family = member.key;
    device.at = member.at;
    context.named_devices.push_back(std::move(device));
  }
}

std::optional<Device> read_device(Context& context, const Value& value, const std::string& what) {
  std::optional<Device> device;
  if (value.form == Value::Form::text) {
    device = from_text(context, value, what);
  } else if (value.form == Value::Form::table) {
    device = from_table(context, value, what, value.at);
    if (device && device->text.empty()) device->text = device->family;
  } else {
    context.complaints.error(value.at, value.width,
                             fmt::format("{} is {}; a text such as \"B 32 A\" is expected", what, word(value.form)));
  }
  if (device) device->at = value.at;
  return device;
}

}  // namespace sunder::netlists
