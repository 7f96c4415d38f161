// SPDX-License-Identifier: Apache-2.0
/// @file
/// Cable and cpc texts, and [cable.x] tables.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <utility>
#include <variant>

#include "netlists/element_keys.h"
#include "netlists/hints.h"
#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

using models::CableConstruction;
using models::CableSize;
using models::Confidence;
using models::CpcChoice;
using models::Material;
using models::Quantity;

constexpr std::string_view kForm = "form: <construction> <size> mm2, or <construction> <size>/<cpc size> mm2";
constexpr std::string_view kCpcForm =
    "a cpc is: \"core\", \"armour\", \"armour + core\", \"armour + 16 mm2\", \"16 mm2\" or \"PEN\"";

const CableConstruction* construction_named(const Context& context, std::string_view name) {
  const auto found = context.constructions.find(std::string(name));
  return found == context.constructions.end() ? nullptr
                                              : &context.network.constructions[static_cast<std::size_t>(found->second)];
}

// What gives r20 and x of a conductor beside a cable.
const CableConstruction& copper_singles(const Context& context) {
  static const CableConstruction none;
  if (const auto* usual = construction_named(context, "singles-pvc-cu")) return *usual;
  for (const CableConstruction& candidate : context.network.constructions) {
    if (candidate.cores == 0 && candidate.material == Material::copper) return candidate;
  }
  return none;
}

struct CableText {
  std::string name;  // construction
  std::size_t name_at = 0;
  double area = 0;      // [m2]
  double cpc_area = 0;  // behind the stroke [m2]; 0: none
};

std::optional<double> area_of(std::string_view number) {
  const auto parsed = models::parse_quantity(fmt::format("{} mm2", trimmed(number)), Quantity::area);
  if (!std::holds_alternative<double>(parsed)) return std::nullopt;
  const double area = std::get<double>(parsed);
  return std::isfinite(area) && area > 0 ? std::optional(area) : std::nullopt;
}

bool split_cable_text(Context& context, const Value& value, const std::string& what, CableText& out) {
  auto refuse = [&](std::string message, std::string_view hint = kForm) {
    context.complaints.error(value.at, value.width, std::move(message), std::string(hint));
    return false;
  };
  if (value.form != Value::Form::text) {
    return refuse(fmt::format("cable of {} is {}; a text is expected", what, word(value.form)));
  }
  std::string_view text = trimmed(value.text);
  const std::size_t lead = text.empty() ? 0 : value.text.find(text);
  bool unit = false;
  for (const std::string_view symbol : {"mm2", "mm\xC2\xB2"}) {
    if (text.size() <= symbol.size() || text.substr(text.size() - symbol.size()) != symbol) continue;
    text = trimmed(text.substr(0, text.size() - symbol.size()));
    unit = true;
    break;
  }
  const std::size_t blank = text.find_last_of(" \t");
  if (blank == std::string_view::npos) {
    return refuse(fmt::format("cable '{}' of {} is no construction with a size", value.text, what),
                  fmt::format("{}; `sunder help cables` lists the constructions", kForm));
  }
  const std::string_view size = text.substr(blank + 1);
  out.name = std::string(trimmed(text.substr(0, blank)));
  out.name_at = lead;
  if (!unit) return refuse(fmt::format("cable '{}' of {} has a size without the unit mm2", value.text, what));
  const std::size_t stroke = size.find('/');
  const auto area = area_of(size.substr(0, stroke));
  const auto cpc = stroke == std::string_view::npos ? std::optional(0.0) : area_of(size.substr(stroke + 1));
  if (size.find(',') != std::string_view::npos) {
    std::string point(size);
    std::replace(point.begin(), point.end(), ',', '.');
    return refuse(fmt::format("'{}' is no size, in the cable of {}", size, what),
                  fmt::format("decimals take a point: {} mm2", point));
  }
  if (!area || !cpc) return refuse(fmt::format("'{}' is no size, in the cable of {}", size, what));
  out.area = *area;
  out.cpc_area = *cpc;
  return true;
}

// The parts of a cpc text, joined by '+'.
bool read_cpc(Context& context, const Value& value, const std::string& what, const CableConstruction& construction,
              bool may_lack, CpcChoice& choice) {
  if (value.form != Value::Form::text) {
    context.complaints.error(value.at, value.width,
                             fmt::format("cpc of {} is {}; a text is expected", what, word(value.form)),
                             std::string(kCpcForm));
    return false;
  }
  const std::string_view text = value.text;
  if (trimmed(text) == "none") {
    if (may_lack) return true;
    context.complaints.error(value.at, value.width, fmt::format("{} cannot do without a cpc", what),
                             "\"none\" is for a submain to a board that an electrode of its own earths");
    return false;
  }
  if (is_pen(&value)) return true;  // the neutral is it
  std::size_t start = 0;
  while (start <= text.size()) {
    const std::size_t end = std::min(text.find('+', start), text.size());
    const std::string_view part = trimmed(text.substr(start, end - start));
    bool twice = false;
    if (part == "core") {
      twice = choice.core || choice.built_in;
      (construction.built_in_cpc ? choice.built_in : choice.core) = true;
    } else if (part == "armour") {
      twice = choice.armour;
      choice.armour = true;
    } else {
      const auto parsed = models::parse_quantity(part, Quantity::area);
      const double area = std::holds_alternative<double>(parsed) ? std::get<double>(parsed) : 0;
      if (!std::isfinite(area) || area <= 0) {
        context.complaints.error(inside(value, start), std::max(1, characters(text.substr(start, end - start))),
                                 fmt::format("unknown cpc '{}' of {}", part, what), std::string(kCpcForm));
        return false;
      }
      twice = choice.separate > 0;
      choice.separate = area;
    }
    if (twice) {
      context.complaints.error(value.at, value.width, fmt::format("cpc '{}' of {} names a part twice", text, what),
                               std::string(kCpcForm));
      return false;
    }
    start = end + 1;
  }
  return true;
}

// Where the protective conductor is when the netlist does not say.
bool default_cpc(Context& context, const CableConstruction& construction, const Value& cable, int n_loaded, double area,
                 const std::string& what, const std::string& subject, bool tails, models::Origin at,
                 CpcChoice& choice) {
  const bool spare = construction.cores == 0 || construction.cores > n_loaded;
  if (tails) {
    choice.core = spare;
    choice.separate = spare ? 0 : area;
    context.assume(subject, fmt::format("main earthing conductor of {} taken as large as the line conductor", what),
                   at);
    return true;
  }
  if (construction.built_in_cpc) {
    choice.built_in = true;
  } else if (construction.cores > 0 && construction.cores < n_loaded) {
    return true;  // too few cores even without it, which is told when the cable is resolved
  } else if (spare) {
    choice.core = true;
  } else {
    context.complaints.error(cable.at, cable.width,
                             fmt::format("cable of {} has no core left for the protective conductor; "
                                         "say with cpc where it is",
                                         what),
                             std::string(kCpcForm));
    return false;
  }
  return true;
}

// Whether resistance times area fits the material: digits slip by ten more often than they are odd.
void check_resistance(Context& context, const Value* value, const std::string& what, double r20, double area,
                      Material material) {
  constexpr double kCopper = 1.7241e-8;     // [ohm*m] IEC 60028
  constexpr double kAluminium = 2.8264e-8;  // [ohm*m] IEC 60889
  constexpr double kSteel = 1.38e-7;        // [ohm*m] wire armour
  constexpr double kBand = 0.4;
  if (value == nullptr || r20 <= 0 || area <= 0) return;
  const double rho = material == Material::copper ? kCopper : material == Material::aluminium ? kAluminium : kSteel;
  const double ratio = r20 * area / rho;
  if (ratio >= 1 - kBand && ratio <= 1 + kBand) return;
  context.complaints.warn(value->at, value->width,
                          fmt::format("{} times its area is {} times the resistivity of {}", what,
                                      models::format_number(ratio, 3), models::word(material)));
}

Confidence confidence_named(std::string_view text) noexcept {
  for (const Confidence c :
       {Confidence::found, Confidence::derived, Confidence::checked, Confidence::memory, Confidence::low}) {
    if (models::word(c) == text) return c;
  }
  return Confidence::declared;
}

void read_size(Context& context, const Value& value, CableConstruction& made, const std::string& what) {
  const std::string size_of = fmt::format("a size of {}", what);
  if (value.form != Value::Form::table) {
    context.complaints.error(value.at, value.width,
                             fmt::format("{} is {}; a table is expected", size_of, word(value.form)));
    return;
  }
  ElementKeys fields(context, value, *models::find_kind("cable.sizes"), size_of, value.at);
  CableSize size;
  size.area = fields.quantity("size").value_or(0);
  size.r20 = fields.quantity("r20").value_or(0);
  size.x = fields.quantity("x").value_or(0);
  size.cpc_area = fields.quantity("cpc_size").value_or(0);
  size.cpc_r20 = fields.quantity("cpc_r20").value_or(0);
  size.armour_area = fields.quantity("armour_area").value_or(0);
  size.armour_r20 = fields.quantity("armour_r20").value_or(0);
  size.armour_x = fields.quantity("armour_x").value_or(0);
  size.confidence = confidence_named(fields.choice("status").value_or(""));
  size.x_confidence = confidence_named(fields.choice("x_status").value_or(""));
  size.armour_confidence = confidence_named(fields.choice("armour_status").value_or(""));
  auto refuse = [&](std::string message) { context.complaints.error(value.at, 1, std::move(message)); };
  const std::string name = models::format_quantity(size.area, Quantity::area);
  if ((size.cpc_area > 0) != (size.cpc_r20 > 0)) {
    refuse(fmt::format("{} of {}: cpc_size and cpc_r20 go together", name, what));
  }
  if ((size.armour_area > 0) != (size.armour_r20 > 0)) {
    refuse(fmt::format("{} of {}: armour_area and armour_r20 go together", name, what));
  }
  if (made.built_in_cpc && size.cpc_area <= 0) {
    refuse(fmt::format("{} of {} has no cpc_size, though the cable has a built-in cpc", name, what));
  }
  check_resistance(context, fields.find("r20"), fmt::format("r20 of {} of {}", name, what), size.r20, size.area,
                   made.material);
  check_resistance(context, fields.find("cpc_r20"), fmt::format("cpc_r20 of {} of {}", name, what), size.cpc_r20,
                   size.cpc_area, made.material);
  check_resistance(context, fields.find("armour_r20"), fmt::format("armour_r20 of {} of {}", name, what),
                   size.armour_r20, size.armour_area, made.armour_material);
  if (size.area <= 0 || size.r20 <= 0) return;
  for (const CableSize& other : made.sizes) {
    if (std::abs(other.area - size.area) < 1e-12) {
      refuse(fmt::format("{} of {} is given twice", name, what));
      return;
    }
  }
  made.sizes.push_back(size);
}

double usual_limit(std::string_view insulation) noexcept {
  constexpr double kPvc70 = 70;
  constexpr double kOther = 90;
  return insulation == "pvc70" ? kPvc70 : kOther;
}

}  // namespace

void read_constructions(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("cable '{}'", member.key);
    if (member.value.form != Value::Form::table) {
      context.complaints.error(member.value.at, member.value.width,
                               fmt::format("{} is {}; a table is expected", what, word(member.value.form)));
      continue;
    }
    if (trimmed(member.key).empty()) {
      context.complaints.error(member.at, member.width, "a cable has an empty name");
      continue;
    }
    if (construction_named(context, member.key) != nullptr) {
      context.complaints.error(member.at, member.width,
                               fmt::format("{} has the name of a construction of the library; choose another", what));
      continue;
    }
    ElementKeys fields(context, member.value, *models::find_kind("cable"), what, member.at);
    CableConstruction made;
    made.name = member.key;
    made.at = member.at;
    made.title = fields.text("title").value_or(member.key);
    made.material =
        fields.choice("material").value_or("copper") == "aluminium" ? Material::aluminium : Material::copper;
    made.insulation = fields.choice("insulation").value_or("");
    made.max_degc = fields.quantity("max").value_or(usual_limit(made.insulation));
    made.cores = fields.whole("cores").value_or(0);
    made.armour_material =
        fields.choice("armour").value_or("steel") == "aluminium" ? Material::aluminium : Material::steel;
    made.built_in_cpc = fields.flag("built_in_cpc").value_or(false);
    made.source = fields.text("source").value_or("");
    if (const Value* sizes = fields.list("sizes")) {
      if (sizes->items.empty()) {
        context.complaints.error(sizes->at, sizes->width, fmt::format("sizes of {} is an empty list", what));
      }
      for (const Value& size : sizes->items) read_size(context, size, made, what);
    }
    std::sort(made.sizes.begin(), made.sizes.end(),
              [](const CableSize& a, const CableSize& b) { return a.area < b.area; });
    context.constructions.emplace(made.name, static_cast<int>(context.network.constructions.size()));
    context.network.constructions.push_back(std::move(made));
  }
}

const Value& no_cpc() {
  static const Value none = [] {
    Value made;
    made.form = Value::Form::text;
    made.text = "none";
    return made;
  }();
  return none;
}

bool is_pen(const Value* cpc) noexcept {
  return cpc != nullptr && cpc->form == Value::Form::text && trimmed(cpc->text) == "PEN";
}

bool read_cable(Context& context, const PendingRun& run, models::ConductorSet conductors, const std::string& what,
                const std::string& subject, bool tails, models::Origin at, models::Cable& out) {
  if (run.cable == nullptr) return false;  // complained of as a missing key
  const Value& value = *run.cable;
  CableText text;
  if (!split_cable_text(context, value, what, text)) return false;
  const CableConstruction* construction = construction_named(context, text.name);
  if (construction == nullptr) {
    if (context.maybe_lost(text.name)) return false;
    std::vector<std::string_view> names;
    if (!context.complaints.full()) {
      for (const CableConstruction& known : context.network.constructions) names.push_back(known.name);
    }
    std::string hint = did_you_mean(context, text.name, names);
    if (hint.empty()) hint = cable_hint(names, text.name);
    context.complaints.error(inside(value, text.name_at), characters(text.name),
                             fmt::format("unknown cable '{}'", text.name), std::move(hint));
    return false;
  }
  const bool neutral = conductors.has(models::Conductor::N);
  const bool may_lack = !tails && !conductors.has(models::Conductor::PE);
  const int n_loaded = conductors.lines() + (neutral ? 1 : 0);
  CpcChoice choice;
  if (run.cpc != nullptr) {
    if (!read_cpc(context, *run.cpc, what, *construction, may_lack, choice)) return false;
  } else if (!default_cpc(context, *construction, value, n_loaded, text.area, what, subject,
                          tails && text.cpc_area == 0, at, choice)) {
    return false;
  }
  if (text.cpc_area > 0) {
    const auto size = std::find_if(construction->sizes.begin(), construction->sizes.end(),
                                   [&](const CableSize& s) { return std::abs(s.area - text.area) < 1e-3 * text.area; });
    const bool fits =
        size == construction->sizes.end() || std::abs(size->cpc_area - text.cpc_area) < 1e-3 * text.cpc_area;
    if (construction->built_in_cpc && !fits) {
      context.complaints.error(value.at, value.width,
                               fmt::format("cable of {}: '{}' of {} has a protective conductor of {}", what, text.name,
                                           models::format_quantity(text.area, Quantity::area),
                                           models::format_quantity(size->cpc_area, Quantity::area)));
      return false;
    }
    if (!construction->built_in_cpc && construction->cores != 0) {
      context.complaints.error(value.at, value.width,
                               fmt::format("cable of {}: '{}' has equal cores; no second size fits", what, text.name));
      return false;
    }
    if (!construction->built_in_cpc) choice.core_area = text.cpc_area;
  }
  if (is_pen(run.cpc) && construction->cores > 0 && n_loaded > construction->cores) {
    context.complaints.error(run.cpc->at, run.cpc->width,
                             fmt::format("cpc of {} is PEN, but the {} cores of '{}' leave none for the neutral", what,
                                         construction->cores, construction->name));
    return false;
  }
  if (const auto error =
          models::resolve_cable(*construction, text.area, choice, n_loaded, neutral, copper_singles(context), out)) {
    const bool has_size = std::any_of(construction->sizes.begin(), construction->sizes.end(), [&](const CableSize& s) {
      return std::abs(s.area - text.area) < 1e-3 * text.area;
    });
    const bool by_cpc = has_size && run.cpc != nullptr && construction->cores != 0 && n_loaded <= construction->cores;
    const Value& blamed = by_cpc ? *run.cpc : value;
    context.complaints.error(blamed.at, blamed.width,
                             fmt::format("{} of {}: {}", by_cpc ? "cpc" : "cable", what, error->message));
    return false;
  }
  out.text = std::string(trimmed(value.text));
  out.at = value.at;
  return true;
}

}  // namespace sunder::netlists
