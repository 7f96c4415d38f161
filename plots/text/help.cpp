// SPDX-License-Identifier: Apache-2.0
#include "plots/text/help.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "models/registry.h"
#include "plots/text/fields.h"
#include "plots/text/tables.h"

namespace sunder::plots {
namespace {

using models::Key;
using models::Quantity;
using models::ValueForm;

// Choices stand between bars, or blanks where none of them holds one.
std::string commas(std::string_view choices) {
  const char separator = choices.find('|') == std::string_view::npos ? ' ' : '|';
  std::string text;
  for (const char c : choices) {
    if (c == separator)
      text += ", ";
    else
      text += c;
  }
  return text;
}

std::string form_text(const Key& key) {
  switch (key.form) {
    case ValueForm::quantity: {
      const std::string_view units = models::accepted_units(key.quantity);
      return units.empty() ? "number" : fmt::format("value in {}", units);
    }
    case ValueForm::text:
      return "text";
    case ValueForm::choice:
      return (commas(key.choices) == key.choices ? "" : "one of ") + commas(key.choices);
    case ValueForm::flag:
      return "true or false";
    case ValueForm::number:
      return "number";
    case ValueForm::device:
      return "device (see the kind device)";
    case ValueForm::cable:
      return "cable: construction and size";
    case ValueForm::cpc:
      return "where the protective conductor is";
    case ValueForm::phases:
      return "phases";
    case ValueForm::reference:
      return "name of another element";
    case ValueForm::list:
      return "list of texts";
    case ValueForm::table:
      return "table";
    case ValueForm::points:
      return "list of points";
  }
  return "";
}

std::string key_text(const Key& key) {
  std::string text(key.help);
  if (!text.empty() && text.back() != '.') text += '.';
  text += " [" + form_text(key);
  const bool measured = key.form == ValueForm::quantity || key.form == ValueForm::number;
  if (measured && (key.least != 0 || key.most != 0)) {
    if (std::isfinite(key.most)) {
      text += fmt::format(", {} to {}", models::format_quantity(key.least, key.quantity),
                          models::format_quantity(key.most, key.quantity));
    } else {
      text += fmt::format(", from {}", models::format_quantity(key.least, key.quantity));
    }
  }
  if (measured && (key.plausible_least != 0 || key.plausible_most != 0)) {
    text += fmt::format("; warned about outside {} to {}", models::format_quantity(key.plausible_least, key.quantity),
                        models::format_quantity(key.plausible_most, key.quantity));
  }
  if (key.required) text += key.unless.empty() ? "; obligatory" : fmt::format("; obligatory without {}", key.unless);
  if (!key.by_default.empty()) text += fmt::format("; default {}", key.by_default);
  return text + ']';
}

std::string list_numbers(const std::vector<double>& numbers) {
  std::string text;
  for (const double number : numbers) text += (text.empty() ? "" : ", ") + models::format_number(number);
  return text;
}

constexpr double kAnySize = 5e-3;  // [m2] beyond any cable: the row has no upper size

std::string sizes_text(const models::CableConstruction& c) {
  std::string text;
  for (const models::CableSize& size : c.sizes) {
    if (!text.empty()) text += ", ";
    text += models::format_number(size.area * 1e6);
    if (size.cpc_area > 0) text += '/' + models::format_number(size.cpc_area * 1e6);
  }
  return text;
}

models::Confidence worst_of(const models::CableConstruction& c) {
  models::Confidence worst = models::Confidence::declared;
  for (const models::CableSize& size : c.sizes) {
    worst = models::worse(worst, models::worse(size.confidence, size.x_confidence));
    if (size.armour_area > 0) worst = models::worse(worst, size.armour_confidence);
  }
  return worst;
}

const char* status_meaning() {
  return "Status says how a value is supported: found (seen at the source named), derived (worked out from values "
         "seen), checked (from memory, an independent check agrees), memory (from memory), low (from memory, to be "
         "compared with the standard before use). The user's own data takes precedence and is called declared.";
}

}  // namespace

HelpTopic help_netlist() {
  HelpTopic topic{"netlist", "The netlist", "", {}};
  topic.intro =
      "A TOML file: one table per element, one line where possible. Values carry their unit (\"25 mm2\", \"16 kA\", "
      "\"0.35 ohm\", \"1.15 mohm/m\"). A value is addressed as S1.length or workshop/W4.length. Unknown keys are "
      "errors.";
  for (const models::Kind& kind : models::registry()) {
    HelpSection section;
    if (kind.name.empty())
      section.heading = "top of the file";
    else if (kind.name.find('.') != std::string_view::npos)
      section.heading = fmt::format("{} (table inside)", kind.name);
    else if (kind.name == "circuit")
      section.heading = "[circuit.BOARD]";
    else
      section.heading = fmt::format("[{}.NAME]", kind.name);
    section.text = std::string(kind.help);
    section.example = std::string(kind.example);
    for (const Key& key : kind.keys) section.entries.push_back({std::string(key.name), key_text(key)});
    topic.sections.push_back(std::move(section));
  }
  return topic;
}

HelpTopic help_checks(const std::vector<solver::CheckInfo>& checks) {
  HelpTopic topic{"checks", "The checks", "", {}};
  topic.intro =
      "Every check is made of every subject it applies to, in every supply state; the governing finding is shown. A "
      "verdict is meets, fails, undecided (with what would decide it: missing data is never a pass) or noted "
      "(reported, not required). `sunder check` ends with 0 when all are met, 1 when something fails or is "
      "undecided, 2 when it could not run.";
  HelpSection section{"checks", "", "", {}};
  for (const solver::CheckInfo& check : checks) {
    std::string text = check.compares;
    if (!text.empty() && text.back() != '.') text += '.';
    if (!check.applies.empty()) text += " Applies to: " + check.applies + '.';
    if (!check.needs.empty()) text += " Needs: " + check.needs + '.';
    section.entries.push_back({check.name, text});
  }
  topic.sections.push_back(std::move(section));
  return topic;
}

HelpTopic help_devices(const std::vector<models::DeviceFamily>& families) {
  HelpTopic topic{"devices", "Device families", "", {}};
  topic.intro =
      std::string(
          "A device is written <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]: \"B 32 A 6 kA 30 mA A\", "
          "\"gG 80 A\", \"RCD 63 A 30 mA A\", \"switch 100 A\"; or the name of a [device.NAME] with settings or points "
          "of "
          "its maker. ") +
      status_meaning();
  HelpSection section{"families", "", "", {}};
  for (const models::DeviceFamily& family : families) {
    std::string text = family.title + '.';
    std::vector<double> ratings = family.ratings;
    if (ratings.empty()) {
      for (const models::FamilyRow& row : family.rows) ratings.push_back(row.In);
    }
    if (!ratings.empty()) text += " Ratings [A]: " + list_numbers(ratings) + '.';
    text += fmt::format(" Status: {}. Source: {}", models::word(family.confidence), family.source);
    section.entries.push_back({family.name, text});
  }
  topic.sections.push_back(std::move(section));
  return topic;
}

HelpTopic help_cables(const std::vector<models::CableConstruction>& constructions) {
  HelpTopic topic{"cables", "Cable constructions", "", {}};
  topic.intro =
      std::string(
          "A cable is written <construction> <size>: \"swa-xlpe-cu-4c 35 mm2\", \"flat-pvc-cu 2.5/1.5 mm2\"; or a "
          "[cable.NAME] of the netlist. The key cpc says where the protective conductor is: core, armour, armour + "
          "core, "
          "armour + 16 mm2, 16 mm2. ") +
      status_meaning();
  HelpSection section{"constructions", "", "", {}};
  for (const models::CableConstruction& c : constructions) {
    std::string text =
        fmt::format("{}. Sizes [mm2]: {}. Limit {}. Status: {}. Source: {}", c.title, sizes_text(c),
                    models::format_quantity(c.max_degc, Quantity::temperature), models::word(worst_of(c)), c.source);
    section.entries.push_back({c.name, text});
  }
  topic.sections.push_back(std::move(section));
  return topic;
}

HelpTopic help_rules(const std::vector<models::RuleSet>& rule_sets) {
  HelpTopic topic{"rules", "Rule sets", "", {}};
  topic.intro = std::string(
                    "The key rules at the top of the netlist names the rule set and its edition; it decides times, k, "
                    "voltage-drop limits and temperatures. ") +
                status_meaning();
  for (const models::RuleSet& rules : rule_sets) {
    HelpSection section{rules.name, rules.title, "", {}};
    section.entries.push_back(
        {"voltage factors", fmt::format("maximum {}, minimum {}", models::format_number(rules.c_max),
                                        models::format_number(rules.c_min))});
    std::string times;
    for (const models::TimeRow& row : rules.times) {
      times +=
          fmt::format("{}{} to {} V: {}", times.empty() ? "" : "; ", word(row.earthing),
                      models::format_number(row.U0_to), models::format_quantity(row.final_circuit, Quantity::time));
    }
    section.entries.push_back(
        {"final circuits",
         fmt::format("{} ({}); up to {} A with sockets, {} A without", times, rules.times_clause,
                     models::format_number(rules.sockets_to), models::format_number(rules.fixed_to))});
    section.entries.push_back(
        {"distribution",
         fmt::format("TN {}, TT {} ({})", models::format_quantity(rules.distribution_tn, Quantity::time),
                     models::format_quantity(rules.distribution_tt, Quantity::time), rules.distribution_clause)});
    section.entries.push_back(
        {"voltage drop",
         fmt::format("public supply: lighting {}, other {}; own transformer: lighting {}, other {} ({})",
                     models::format_quantity(rules.drop_lighting_public, Quantity::percentage),
                     models::format_quantity(rules.drop_other_public, Quantity::percentage),
                     models::format_quantity(rules.drop_lighting_own, Quantity::percentage),
                     models::format_quantity(rules.drop_other_own, Quantity::percentage), rules.drop_clause)});
    section.entries.push_back(
        {"additional protection",
         fmt::format("{} for sockets up to {} A ({})", models::format_quantity(rules.additional_IdN, Quantity::current),
                     models::format_number(rules.additional_sockets_to), rules.additional_clause)});
    for (const models::AdiabaticRow& row : rules.k) {
      section.entries.push_back(
          {"k",
           fmt::format("{} {}, {}{}, {} to {} degC: {} ({}, {})", word(row.material), word(row.place), row.insulation,
                       row.area_to < kAnySize ? ", up to " + models::format_number(row.area_to * 1e6) + " mm2" : "",
                       models::format_number(row.initial_degc), models::format_number(row.final_degc),
                       models::format_number(row.k * 1e-6), row.clause, models::word(row.confidence))});
    }
    section.entries.push_back(
        {"support", fmt::format("Status: {}. Source: {}", models::word(rules.confidence), rules.source)});
    topic.sections.push_back(std::move(section));
  }
  return topic;
}

HelpTopic help_json_forms() {
  HelpTopic topic{"json", "JSON forms", "", {}};
  topic.intro =
      "Every command takes --json and prints one object whose key format names its form and version; keys may be "
      "added, never renamed within a version. Values are SI (percentages say so). What is not a number, never happens "
      "or "
      "is unbounded is null, with reason beside it. Places are file:line:column. A run that cannot start prints "
      "sunder.errors/1 (errors[]: severity, file, line, column, message, source_line, hint) and ends with 2. Further "
      "forms: sunder.help/1, sunder.new/1, sunder.version/1.";
  for (const StructHelp& part : describe_json()) {
    HelpSection section{part.format + "  " + part.place, "", "", {}};
    for (const FieldHelp& field : part.fields) {
      section.entries.push_back({field.key, field.meaning + (field.unit.empty() ? "" : " [" + field.unit + "]")});
    }
    topic.sections.push_back(std::move(section));
  }
  return topic;
}

std::string help_text(const HelpTopic& topic, const TextStyle& style) {
  std::string out = ink(style, Ink::heading, topic.title) + '\n';
  if (!topic.intro.empty()) out += wrap(topic.intro, style.width);
  for (const HelpSection& section : topic.sections) {
    out += '\n' + ink(style, Ink::heading, section.heading) + '\n';
    if (!section.text.empty()) out += wrap(section.text, style.width, "  ");
    int name_width = 0;
    for (const HelpEntry& entry : section.entries) name_width = std::max(name_width, display_width(entry.name));
    name_width = std::min(name_width, 22);
    for (const HelpEntry& entry : section.entries) {
      const int blanks = std::max(0, name_width - display_width(entry.name));
      out += wrap(entry.text, style.width, "  " + entry.name + std::string(static_cast<std::size_t>(blanks) + 2, ' '));
    }
    if (!section.example.empty()) {
      std::string_view example = section.example;
      while (!example.empty() && example.back() == '\n') example.remove_suffix(1);
      out += "  example:\n";
      while (!example.empty()) {
        const std::size_t end = std::min(example.find('\n'), example.size());
        out += "    " + std::string(example.substr(0, end)) + '\n';
        example.remove_prefix(std::min(end + 1, example.size()));
      }
    }
  }
  return out;
}

}  // namespace sunder::plots
