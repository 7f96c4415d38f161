// SPDX-License-Identifier: Apache-2.0
/// @file
/// Reads the library's own data files. They are ours, so a defect is one sentence in
/// Library::errors (kept empty by a test), not a diagnostic with a caret.
#include "netlists/library.h"

#include <algorithm>
#include <array>
#include <string_view>
#include <utility>

#include "models/library_files.h"
#include "netlists/library_fields.h"

namespace sunder::netlists {
namespace {

using models::Confidence;
using models::Quantity;

constexpr double kSquareMillimetre = 1e-6;  // [m2]

constexpr std::array<std::pair<std::string_view, models::Material>, 4> kMaterials = {{
    {"copper", models::Material::copper},
    {"aluminium", models::Material::aluminium},
    {"steel", models::Material::steel},
    {"lead", models::Material::lead},
}};

// --- cables ----------------------------------------------------------------------------------

models::CableSize read_size(Fields& fields, Confidence usual) {
  models::CableSize size;
  fields.quantity("size", Quantity::area, size.area, true);
  fields.quantity("r20", Quantity::impedance_per_length, size.r20, true);
  fields.quantity("x", Quantity::impedance_per_length, size.x, true);
  fields.quantity("cpc_size", Quantity::area, size.cpc_area);
  fields.quantity("cpc_r20", Quantity::impedance_per_length, size.cpc_r20);
  fields.quantity("armour_area", Quantity::area, size.armour_area);
  fields.quantity("armour_r20", Quantity::impedance_per_length, size.armour_r20);
  fields.quantity("armour_x", Quantity::impedance_per_length, size.armour_x);
  size.confidence = usual;
  size.x_confidence = usual;
  fields.status("status", size.confidence, true);
  fields.status("x_status", size.x_confidence, true);
  fields.status("armour_status", size.armour_confidence, size.armour_area > 0);
  return size;
}

models::CableConstruction read_construction(const std::string& name, Fields& fields) {
  models::CableConstruction cable;
  cable.name = name;
  Confidence usual = Confidence::memory;
  bool armoured = false;
  fields.text("title", cable.title, true);
  fields.choice("material", kMaterials, cable.material, true);
  fields.text("insulation", cable.insulation, true);
  fields.quantity("max", Quantity::temperature, cable.max_degc, true);
  fields.whole("cores", cable.cores);
  armoured = fields.has("armour");
  fields.choice("armour", kMaterials, cable.armour_material);
  fields.flag("built_in_cpc", cable.built_in_cpc);
  fields.text("source", cable.source, true);
  fields.status("status", usual, true);
  fields.tables("sizes", true, [&](Fields& row) { cable.sizes.push_back(read_size(row, usual)); });
  for (std::size_t i = 0; i < cable.sizes.size(); ++i) {
    const models::CableSize& size = cable.sizes[i];
    if (i > 0 && size.area <= cable.sizes[i - 1].area) fields.complain("sizes are not ascending");
    if ((size.armour_area > 0) != armoured || (size.armour_r20 > 0) != armoured) {
      fields.complain("armour of the cable and of its sizes disagree");
    }
    if ((size.cpc_area > 0) != cable.built_in_cpc || (size.cpc_r20 > 0) != cable.built_in_cpc) {
      fields.complain("built_in_cpc and the protective conductors of its sizes disagree");
    }
  }
  return cable;
}

// --- devices ---------------------------------------------------------------------------------

models::FamilyRow read_family_row(Fields& fields) {
  models::FamilyRow row;
  fields.number("In", row.In, true);
  fields.points("latest", row.latest);
  fields.points("earliest", row.earliest);
  fields.points("between", row.between);
  fields.number("pre_arcing_min", row.pre_arcing_min);
  fields.number("pre_arcing_max", row.pre_arcing_max);
  fields.status("pre_arcing_status", row.pre_arcing_confidence, row.pre_arcing_min > 0);
  fields.number("I2_ratio", row.I2_ratio);
  fields.status("status", row.confidence, true);
  fields.text("note", row.note);
  return row;
}

models::EnergyRow read_energy_row(Fields& fields, const std::string& family) {
  models::EnergyRow row;
  row.family = family;
  fields.number("In_above", row.In_above, true);
  fields.number("In_to", row.In_to, true);
  fields.number("Icn", row.Icn, true);
  fields.whole("class", row.energy_class);
  fields.number("let_through", row.let_through, true);
  fields.status("status", row.confidence, true);
  return row;
}

models::DeviceFamily read_family(const std::string& name, Fields& fields) {
  using Form = models::DeviceFamily::Form;
  using models::DeviceKind;
  static constexpr std::array<std::pair<std::string_view, Form>, 5> kForms = {{
      {"breaker", Form::breaker},
      {"gates", Form::gates},
      {"points", Form::points},
      {"isolator", Form::isolator},
      {"residual", Form::residual},
  }};
  static constexpr std::array<std::pair<std::string_view, DeviceKind>, 4> kKinds = {{
      {"isolator", DeviceKind::isolator},
      {"breaker", DeviceKind::breaker},
      {"fuse", DeviceKind::fuse},
      {"residual", DeviceKind::residual},
  }};
  models::DeviceFamily family;
  family.name = name;
  fields.text("title", family.title, true);
  fields.choice("form", kForms, family.form, true);
  fields.choice("kind", kKinds, family.kind, true);
  const bool breaker = family.form == Form::breaker;
  fields.number("no_trip", family.no_trip, breaker);
  fields.number("conventional_trip", family.conventional_trip, breaker);
  fields.number("thermal_gate", family.thermal_gate);
  fields.number("thermal_earliest", family.thermal_earliest);
  fields.number("thermal_latest_small", family.thermal_latest_small);
  fields.number("thermal_latest_large", family.thermal_latest_large);
  fields.number("magnetic_low", family.magnetic_low, breaker);
  fields.number("magnetic_high", family.magnetic_high, breaker);
  fields.number("low_latest_small", family.low_latest_small);
  fields.number("low_latest_large", family.low_latest_large);
  fields.number("small_to", family.small_to);
  fields.number("conventional_time_small", family.conventional_time_small);
  fields.number("conventional_time_large", family.conventional_time_large);
  fields.number("I2_ratio", family.I2_ratio);
  fields.number("overload_factor", family.overload_factor);
  fields.flag("I2_deemed", family.I2_deemed);
  fields.number("least_Icn", family.least_Icn);
  fields.status("least_Icn_status", family.least_Icn_confidence, family.least_Icn > 0);
  fields.flag("falling_let_through", family.falling_let_through);
  fields.numbers("ratings", family.ratings);
  fields.points("residual_latest", family.residual_latest);
  fields.points("residual_latest_s", family.residual_latest_s);
  fields.points("residual_earliest_s", family.residual_earliest_s);
  fields.number("residual_earliest_s_500", family.residual_earliest_s_500);
  fields.number("residual_no_trip", family.residual_no_trip);
  fields.text("source", family.source, true);
  fields.status("status", family.confidence, true);
  const bool has_rows = family.form == Form::gates || family.form == Form::points;
  fields.tables("rows", has_rows, [&](Fields& row) { family.rows.push_back(read_family_row(row)); });
  fields.tables("energy", false, [&](Fields& row) { family.energy.push_back(read_energy_row(row, name)); });
  if (!std::is_sorted(family.ratings.begin(), family.ratings.end())) fields.complain("ratings are not ascending");
  if (has_rows) {
    std::vector<double> of_rows;
    for (const models::FamilyRow& row : family.rows) of_rows.push_back(row.In);
    if (of_rows != family.ratings) fields.complain("ratings and rows disagree");
  }
  return family;
}

// --- rules -----------------------------------------------------------------------------------

models::AdiabaticRow read_k(Fields& fields) {
  using models::Place;
  static constexpr std::array<std::pair<std::string_view, Place>, 5> kPlaces = {{
      {"core", Place::core},
      {"separate", Place::separate},
      {"armour", Place::armour},
      {"sheath", Place::sheath},
      {"conduit", Place::conduit},
  }};
  models::AdiabaticRow row;
  fields.choice("place", kPlaces, row.place, true);
  fields.choice("material", kMaterials, row.material, true);
  fields.text("insulation", row.insulation, true);
  fields.quantity("area_to", Quantity::area, row.area_to, true);
  fields.number("initial_degc", row.initial_degc, true);
  fields.number("final_degc", row.final_degc, true);
  fields.number("k", row.k, true);
  row.k /= kSquareMillimetre;
  fields.text("clause", row.clause, true);
  fields.status("status", row.confidence, true);
  return row;
}

models::TimeRow read_time(Fields& fields, std::vector<Confidence>& statuses) {
  using models::Earthing;
  static constexpr std::array<std::pair<std::string_view, Earthing>, 3> kEarthings = {{
      {"TN-S", Earthing::TN_S},
      {"TN-C-S", Earthing::TN_C_S},
      {"TT", Earthing::TT},
  }};
  models::TimeRow row;
  fields.choice("earthing", kEarthings, row.earthing, true);
  fields.number("U0_to", row.U0_to, true);
  fields.number("final_circuit", row.final_circuit, true);
  fields.status("status", statuses.emplace_back(), true);
  return row;
}

models::RuleSet read_rules(Fields& fields) {
  models::RuleSet rules;
  const std::pair<const char*, std::string&> texts[] = {
      {"name", rules.name},
      {"title", rules.title},
      {"times_clause", rules.times_clause},
      {"distribution_clause", rules.distribution_clause},
      {"touch_clause", rules.touch_clause},
      {"drop_clause", rules.drop_clause},
      {"additional_clause", rules.additional_clause},
      {"clearance_clause", rules.clearance_clause},
      {"heating_clause", rules.heating_clause},
      {"capacity_clause", rules.capacity_clause},
      {"overload_clause", rules.overload_clause},
      {"selectivity_clause", rules.selectivity_clause},
      {"source", rules.source},
  };
  for (const auto& [key, value] : texts) fields.text(key, value, true);
  const std::pair<const char*, double&> numbers[] = {
      {"c_max", rules.c_max},
      {"c_min", rules.c_min},
      {"alpha_copper", rules.alpha_copper},
      {"alpha_aluminium", rules.alpha_aluminium},
      {"alpha_steel", rules.alpha_steel},
      {"armour_factor", rules.armour_factor},
      {"armour_degc_70", rules.armour_degc_70},
      {"armour_degc_90", rules.armour_degc_90},
      {"conduit_degc_70", rules.conduit_degc_70},
      {"conduit_degc_90", rules.conduit_degc_90},
      {"sockets_to", rules.sockets_to},
      {"fixed_to", rules.fixed_to},
      {"distribution_tn", rules.distribution_tn},
      {"distribution_tt", rules.distribution_tt},
      {"touch_limit", rules.touch_limit},
      {"drop_lighting_public", rules.drop_lighting_public},
      {"drop_other_public", rules.drop_other_public},
      {"drop_lighting_own", rules.drop_lighting_own},
      {"drop_other_own", rules.drop_other_own},
      {"drop_extra_per_m", rules.drop_extra_per_m},
      {"drop_extra_from", rules.drop_extra_from},
      {"drop_extra_max", rules.drop_extra_max},
      {"additional_IdN", rules.additional_IdN},
      {"additional_sockets_to", rules.additional_sockets_to},
      {"I2_factor", rules.I2_factor},
      {"ring_device_to", rules.ring_device_to},
      {"ring_Iz", rules.ring_Iz},
  };
  for (const auto& [key, value] : numbers) fields.number(key, value, true);
  fields.flag("additional_dwelling_lighting", rules.additional_dwelling_lighting);
  fields.status("status", rules.confidence, true);
  std::vector<Confidence> statuses;
  fields.tables("times", true, [&](Fields& row) { rules.times.push_back(read_time(row, statuses)); });
  fields.tables("k", true, [&](Fields& row) { rules.k.push_back(read_k(row)); });
  for (const Confidence status : statuses) rules.confidence = models::worse(rules.confidence, status);
  return rules;
}

// --- files -----------------------------------------------------------------------------------

/// Calls `read` with name and fields of each table under `kind`.
template <class Read>
void each_named(const toml::table& root, std::string_view kind, const std::string& file,
                std::vector<std::string>& errors, const Read& read) {
  const toml::table* tables = root[kind].as_table();
  if (tables == nullptr) return;
  for (const auto& [key, node] : *tables) {
    const std::string name(key.str());
    const toml::table* table = node.as_table();
    if (table == nullptr) {
      errors.push_back(fmt::format("{}: '{}.{}' is not a table", file, kind, name));
      continue;
    }
    Fields fields(*table, fmt::format("{}: {}", file, name), errors);
    read(name, fields);
    fields.finish();
  }
}

void read_file(const std::string& name, const std::string& text, Library& library) {
  const toml::parse_result parsed = toml::parse(text, name);
  if (!parsed) {
    const toml::parse_error& error = parsed.error();
    library.errors.push_back(fmt::format("{}:{}: {}", name, error.source().begin.line, error.description()));
    return;
  }
  const toml::table& root = parsed.table();
  each_named(root, "cable", name, library.errors, [&](const std::string& key, Fields& fields) {
    library.constructions.push_back(read_construction(key, fields));
  });
  each_named(root, "family", name, library.errors,
             [&](const std::string& key, Fields& fields) { library.families.push_back(read_family(key, fields)); });
  if (const toml::table* table = root["rules"].as_table()) {
    Fields fields(*table, name, library.errors);
    library.rule_sets.push_back(read_rules(fields));
    fields.finish();
  }
  for (const auto& [key, node] : root) {
    if (key != "cable" && key != "family" && key != "rules") {
      library.errors.push_back(fmt::format("{}: unknown kind '{}'", name, key.str()));
    }
  }
}

template <class T>
void sort_by_name(std::vector<T>& items, std::vector<std::string>& errors) {
  std::sort(items.begin(), items.end(), [](const T& a, const T& b) { return a.name < b.name; });
  for (std::size_t i = 1; i < items.size(); ++i) {
    if (items[i].name == items[i - 1].name) errors.push_back(fmt::format("'{}' is there twice", items[i].name));
  }
}

}  // namespace

Library parse_library(const std::vector<std::pair<std::string, std::string>>& files) {
  Library library;
  for (const auto& [name, text] : files) read_file(name, text, library);
  sort_by_name(library.constructions, library.errors);
  sort_by_name(library.families, library.errors);
  sort_by_name(library.rule_sets, library.errors);
  return library;
}

const Library& library() {
  static const Library parsed = [] {
    std::vector<std::pair<std::string, std::string>> files;
    for (const models::LibraryFile& file : models::library_files()) {
      files.emplace_back(std::string(file.name), std::string(file.text));
    }
    return parse_library(files);
  }();
  return parsed;
}

}  // namespace sunder::netlists
