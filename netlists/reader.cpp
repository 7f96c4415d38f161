// SPDX-License-Identifier: Apache-2.0
/// @file
/// The reader's order of work: form, head, data, elements, what joins them.
#include "netlists/reader.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <filesystem>
#include <utility>

#include "netlists/element_keys.h"
#include "netlists/hints.h"
#include "netlists/parts.h"
#include "netlists/toml_document.h"

namespace sunder::netlists {

namespace {

// Copies of the library, so that remedies may choose from them and the netlist may add to them.
void take_library(Context& context) {
  const Library& shared = library();
  context.network.constructions = shared.constructions;
  context.network.families = shared.families;
  for (std::size_t k = 0; k < shared.constructions.size(); ++k) {
    context.constructions.emplace(shared.constructions[k].name, static_cast<int>(k));
  }
  for (std::size_t k = 0; k < shared.families.size(); ++k) {
    context.families.emplace(shared.families[k].name, static_cast<int>(k));
  }
}

// Whether the table of a kind holds keys of an element, whose name was forgotten.
bool nameless(const Member& member) {
  const models::Kind* kind = models::find_kind(member.key);
  return kind != nullptr &&
         std::any_of(member.value.members.begin(), member.value.members.end(), [&](const Member& inner) {
           return inner.value.form != Value::Form::table && models::find_key(*kind, inner.key) != nullptr;
         });
}

// Everything at the top of the file is a key of the head or the table of a kind.
void check_top(Context& context, const Value& root) {
  const models::Kind& head = *models::find_kind("");
  for (const Member& member : root.members) {
    if (models::find_key(head, member.key) != nullptr) continue;
    const bool kind = member.key.find('.') == std::string::npos && models::find_kind(member.key) != nullptr;
    if (kind) {
      if (nameless(member)) {
        context.complaints.error(member.at, member.width, fmt::format("[{}] has no name", member.key),
                                 fmt::format("its keys stand in [{}.NAME]", member.key));
        context.lost += fmt::format("{}\n", member.key);
        continue;
      }
      if (member.value.form == Value::Form::table) continue;
      context.complaints.error(member.value.at, member.value.width,
                               fmt::format("'{}' is {}; its elements are tables", member.key, word(member.value.form)),
                               fmt::format("such as [{}.NAME]", member.key));
      continue;
    }
    const bool table = member.value.form == Value::Form::table;
    std::vector<std::string_view> names;
    if (!table) {
      for (const models::Key& key : head.keys) names.push_back(key.name);
    }
    for (const models::Kind& known : models::registry()) {
      if (!known.name.empty() && known.name.find('.') == std::string_view::npos) names.push_back(known.name);
    }
    std::string hint = table ? std::string{} : key_belongs(nullptr, member.key);
    if (hint.empty()) hint = did_you_mean(context, member.key, names);
    context.complaints.error(member.at, member.width,
                             table ? fmt::format("unknown kind of element '{}'", member.key)
                                   : fmt::format("unknown key '{}' at the top of the netlist", member.key),
                             std::move(hint));
    if (table) {
      // its elements are not missed elsewhere as well
      context.lost += fmt::format("{}\n", models::nearest_name(member.key, names));
      for (const Member& element : member.value.members) context.lost += fmt::format("{}\n", element.key);
    }
  }
}

// The head's own keys as a table, so that unknown ones are complained of once, by check_top.
Value head_of(const Value& root) {
  const models::Kind& kind = *models::find_kind("");
  Value head;
  head.form = Value::Form::table;
  head.at = root.at;
  for (const Member& member : root.members) {
    if (models::find_key(kind, member.key) != nullptr) head.members.push_back(member);
  }
  return head;
}

// A voltage tolerance, which only IEC 60909 asks for.
void read_tolerance(Context& context, ElementKeys& fields) {
  models::Network& network = context.network;
  const auto chosen = fields.choice("tolerance");
  constexpr double kWide = 0.10;
  if (chosen == "+10 %") network.tolerance = kWide;
  const Value* value = fields.find("tolerance");
  if (network.method == models::Method::iec60909) {
    if (value == nullptr) context.assume("", "tolerance of the low voltage taken as +6 %", {});
  } else if (value != nullptr && fields.find("currents") == nullptr) {
    context.complaints.error(value->at, value->width, "tolerance is asked for by IEC 60909 alone",
                             "currents = \"IEC 60909\"");
  } else if (value != nullptr) {
    context.complaints.error(value->at, value->width, "tolerance is asked for by IEC 60909 alone");
    context.complaints.note(fields.find("currents")->at, "currents is given here");
  }
}

void read_head(Context& context, const Value& root) {
  const Value head = head_of(root);
  models::Network& network = context.network;
  ElementKeys fields(context, head, *models::find_kind(""), "the netlist", {1, 1, 1});
  network.title = fields.text("title").value_or("");
  if (const auto rules = fields.choice("rules")) {
    network.rules_name = *rules;
    const auto& sets = library().rule_sets;
    const auto found =
        std::find_if(sets.begin(), sets.end(), [&](const models::RuleSet& set) { return set.name == *rules; });
    if (found != sets.end()) {
      network.rules = *found;
    } else {
      const Value& value = *fields.find("rules");
      context.complaints.error(value.at, value.width, fmt::format("the library has no rule set '{}'", *rules));
    }
  }
  if (fields.choice("currents").value_or("") == "IEC 60909") network.method = models::Method::iec60909;
  read_tolerance(context, fields);
  network.frequency = fields.quantity("frequency").value_or(network.frequency);
  const auto ambient = fields.quantity("ambient");
  network.ambient_degc = ambient.value_or(network.ambient_degc);
  if (fields.find("ambient") == nullptr) context.assume("", "ambient temperature taken as 30 degC", {});
  network.dwelling = fields.choice("premises").value_or("") == "dwelling";
  if (fields.find("premises") == nullptr) context.assume("", "premises taken as no dwelling", {});
  context.assume("", "the conductors of a run lie together: no mutual reactance beyond the cable data", {});
}

void read_kind(Context& context, const Value& root, std::string_view kind, void (*read)(Context&, const Value&)) {
  for (const Member& member : root.members) {
    if (member.key == kind && member.value.form == Value::Form::table && !nameless(member)) read(context, member.value);
  }
}

void read_schedules(Context& context, const Value& root) {
  const Value* boards = root.find("board");
  if (boards == nullptr) return;
  for (const Member& member : boards->members) {
    const Value* schedule = member.value.find("circuits_from");
    const auto found = context.elements.find(member.key);
    if (schedule == nullptr || found == context.elements.end() || found->second.kind != "board") continue;
    read_schedule(context, found->second.handle, *schedule);
  }
}

// Families that the netlist adds: a remedy may move along ratings, but a named device has one only.
void add_named_families(Context& context) {
  for (const models::Device& device : context.named_devices) {
    if (!device.present()) continue;
    models::DeviceFamily family;
    family.name = device.family;
    family.title = device.family;
    family.form = models::DeviceFamily::Form::points;
    family.kind = device.kind;
    family.I2_ratio = device.I2_ratio;
    family.ratings = {device.In};
    models::FamilyRow row;
    row.In = device.In;
    row.latest = device.overcurrent.latest.points;
    row.earliest = device.overcurrent.earliest.points;
    row.pre_arcing_min = device.let_through.pre_arcing_min;
    row.confidence = device.confidence;
    family.rows.push_back(std::move(row));
    family.confidence = device.confidence;
    family.source = device.source;
    context.network.families.push_back(std::move(family));
  }
}

void read_elements(Context& context, const Value& root) {
  check_top(context, root);
  read_head(context, root);
  take_library(context);
  read_kind(context, root, "device", read_named_devices);
  read_kind(context, root, "cable", read_constructions);
  read_kind(context, root, "board", read_boards);
  read_kind(context, root, "supply", read_supplies);
  read_kind(context, root, "transformer", read_transformers);
  read_kind(context, root, "generator", read_generators);
  read_kind(context, root, "inverter", read_inverters);
  read_kind(context, root, "submain", read_submains);
  read_kind(context, root, "circuit", read_circuits);
  read_schedules(context, root);
  read_kind(context, root, "electrode", read_electrodes);
  read_kind(context, root, "motor", read_motors);
  read_kind(context, root, "bond", read_bonds);
  read_kind(context, root, "link", read_links);
  const Value* states = root.find("state");
  context.states_declared = states != nullptr;
  const bool named = std::none_of(root.members.begin(), root.members.end(),
                                  [](const Member& member) { return member.key == "state" && nameless(member); });
  read_states(context, named && states != nullptr && states->form == Value::Form::table ? states : nullptr);
  join_up(context);
  add_named_families(context);
}

// Whether the first line is the heading of a schedule rather than TOML.
bool is_schedule(std::string_view text, const std::string& name) {
  constexpr std::string_view kMark = "\xEF\xBB\xBF";  // byte order mark
  if (text.substr(0, kMark.size()) == kMark) text.remove_prefix(kMark.size());
  const std::string_view line = trimmed(text.substr(0, text.find('\n')));
  if (line.empty() || line.front() == '[' || line.front() == '#' || line.find('=') != std::string_view::npos)
    return false;
  const std::size_t separator = line.find_first_of(",;\t");
  if (separator == std::string_view::npos) return false;
  std::string_view first = trimmed(line.substr(0, separator));
  if (first.size() > 2 && first.front() == '"') first = first.substr(1, first.size() - 2);
  return first == "way" || std::filesystem::path(name).extension() == ".csv";
}

Reading finish(Context& context) {
  Reading reading;
  reading.diagnostics = context.complaints.in_order();
  if (context.complaints.any_error()) return reading;
  for (std::string& name : context.complaints.file_names()) context.network.files.push_back(std::move(name));
  reading.network = std::move(context.network);
  return reading;
}

}  // namespace

Reading read_network_text(const std::string& text, const std::string& name, const std::string& folder) {
  Context context;
  context.folder = folder;
  const std::uint32_t file = context.complaints.add_file(name, text);
  if (!sound_text(context, text, file, "netlist")) return finish(context);
  if (is_schedule(text, name)) {
    context.complaints.error({file, 1, 1}, 3, "this is a schedule of circuits, not a netlist",
                             fmt::format("a netlist names it: [board.NAME] with circuits_from = \"{}\"",
                                         std::filesystem::path(name).filename().string()));
    return finish(context);
  }
  const TomlDocument document = parse_toml(text, file, context.complaints);
  context.lost = document.lost;
  if (document.parsed) read_elements(context, document.root);
  return finish(context);
}

std::variant<models::Device, std::string> read_device_text(const models::Network& network, const std::string& text) {
  for (const models::Circuit& circuit : network.circuits)
    if (circuit.device.present() && (circuit.device.text == text || circuit.device.family == text))
      return circuit.device;
  for (const models::Submain& submain : network.submains)
    if (submain.device.present() && (submain.device.text == text || submain.device.family == text))
      return submain.device;
  Context context;
  context.complaints.add_file("", text);
  context.network.families = network.families;
  for (std::size_t k = 0; k < network.families.size(); ++k)
    context.families.emplace(network.families[k].name, static_cast<int>(k));
  Value value;
  value.form = Value::Form::text;
  value.text = text;
  value.at = {1, 1, 1};
  value.width = characters(text);
  std::optional<models::Device> device = read_device(context, value, "device '" + text + "'");
  if (device) return *device;
  const std::vector<Diagnostic> complaints = context.complaints.in_order();
  if (complaints.empty()) return "'" + text + "' is no device";
  const Diagnostic& first = complaints.front();
  return first.hint.empty() ? first.message : first.message + "; " + first.hint;
}

Reading read_network(const std::string& path) {
  Context context;
  context.complaints.add_file(path, {});
  std::string text;
  if (!load_text(context, path, "netlist", {1, 0, 0}, 1, text)) return finish(context);
  std::string folder = std::filesystem::path(path).parent_path().string();
  if (folder.empty()) folder = ".";
  return read_network_text(text, path, folder);
}

}  // namespace sunder::netlists
