// SPDX-License-Identifier: Apache-2.0
#include "solver/parameters.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "models/registry.h"
#include "solver/faults.h"

namespace sunder::solver {
namespace {

using models::Cable;
using models::Circuit;
using models::Loop;
using models::Network;
using models::Quantity;
using models::Source;
using models::Submain;

using Setter = std::function<void(Network&, double)>;

Parameter number(std::string key, Quantity unit, Setter set, bool own_run_only = false) {
  Parameter parameter;
  parameter.address = std::move(key);
  parameter.unit = unit;
  parameter.set = std::move(set);
  parameter.own_run_only = own_run_only;
  return parameter;
}

// "35 mm2" keeps the construction; "swa-xlpe-cu-4c 35 mm2" changes it.
std::optional<std::string> change_cable(const Network& network, Cable& cable, const std::string& text) {
  std::string name = cable.construction;
  std::string size = text;
  if (const std::size_t blank = text.find(' '); blank != std::string::npos) {
    const std::string first = text.substr(0, blank);
    for (const models::CableConstruction& c : network.constructions)
      if (c.name == first) {
        name = first;
        size = text.substr(blank + 1);
      }
  }
  std::string reduced;
  models::CpcChoice cpc = cable.cpc;
  if (const std::size_t slash = size.find('/'); slash != std::string::npos) {
    reduced = size.substr(slash + 1);
    size = size.substr(0, slash) + " mm2";
  }
  const auto area = models::parse_quantity(size, Quantity::area);
  if (const auto* error = std::get_if<models::UnitError>(&area)) return error->message;
  if (!reduced.empty()) {
    const auto cpc_area = models::parse_quantity(reduced, Quantity::area);
    if (const auto* error = std::get_if<models::UnitError>(&cpc_area)) return error->message;
    if (cpc.core) cpc.core_area = std::get<double>(cpc_area);
  }
  const models::CableConstruction* of = nullptr;
  const models::CableConstruction* singles = nullptr;
  for (const models::CableConstruction& c : network.constructions) {
    if (c.name == name) of = &c;
    if (c.name == "singles-pvc-cu") singles = &c;
  }
  if (of == nullptr || singles == nullptr) return "no cable construction '" + name + "'";
  // Where the cpc is follows the construction, as it does where the netlist does not say.
  if (of->built_in_cpc != cpc.built_in && (cpc.built_in || cpc.core)) {
    cpc.built_in = of->built_in_cpc;
    cpc.core = !of->built_in_cpc;
    cpc.core_area = 0;
  }
  Cable changed;
  if (auto error = models::resolve_cable(*of, std::get<double>(area), cpc, cable.n_loaded, cable.with_neutral, *singles,
                                         changed))
    return error->message;
  changed.at = cable.at;
  cable = changed;
  return std::nullopt;
}

std::vector<std::string> sizes_of(const Network& network, const Cable& cable) {
  std::vector<std::string> sizes;
  for (const models::CableConstruction& c : network.constructions) {
    if (c.name != cable.construction) continue;
    for (const models::CableSize& size : c.sizes) sizes.push_back(models::format_quantity(size.area, Quantity::area));
  }
  return sizes;
}

// The same text with every rating of the family: "B 16 A 6 kA class 3", "B 20 A 6 kA class 3", ...
std::vector<std::string> ratings_of(const Network& network, const models::Device& device) {
  std::vector<std::string> texts;
  const std::string rating = " " + models::format_number(device.In) + " A";
  const std::size_t at = device.text.find(rating);
  if (at == std::string::npos) return texts;
  for (const models::DeviceFamily& family : network.families) {
    if (family.name != device.family) continue;
    for (const double In : family.ratings)
      texts.push_back(device.text.substr(0, at) + " " + models::format_number(In) + " A" +
                      device.text.substr(at + rating.size()));
  }
  return texts;
}

// Keys that circuits and submains share. `get` finds the element again in the copy that is changed.
template <class Get>
std::vector<Parameter> run_parameters(const std::string& address, const VaryRequest& request, Network network, Get get,
                                      bool circuit) {
  std::vector<Parameter> all;
  auto value = [&](const char* key, Quantity unit, auto member) {
    all.push_back(number(
        address + "." + key, unit,
        [get, member](Network& n, double v) {
          auto& target = get(n).*member;
          target.value = v;
          target.given = true;
        },
        // a power factor moves the mean of every feed above
        circuit && std::string(key) != "pf"));
  };
  using Element = std::remove_reference_t<decltype(get(std::declval<Network&>()))>;
  value("length", Quantity::length, &Element::length);
  value("Iz", Quantity::current, &Element::Iz);
  value("pf", Quantity::ratio, &Element::pf);
  all.push_back(number(
      address + ".in_parallel", Quantity::count,
      [get](Network& n, double v) { get(n).in_parallel = std::max(1, static_cast<int>(std::lround(v))); }, circuit));
  Parameter cable;
  cable.address = address + ".cable";
  cable.numeric = false;
  cable.unit = Quantity::area;
  cable.own_run_only = circuit;
  cable.catalogue = sizes_of(network, get(network).cable);
  cable.set_text = [get](Network& n, const std::string& text) { return change_cable(n, get(n).cable, text); };
  all.push_back(cable);
  if (request.read_device) {
    Parameter device;
    device.address = address + ".device";
    device.numeric = false;
    device.unit = Quantity::current;
    device.own_run_only = circuit;
    device.catalogue = ratings_of(network, get(network).device);
    device.set_text = [get, read = request.read_device](Network& n,
                                                        const std::string& text) -> std::optional<std::string> {
      auto read_it = read(n, text);
      if (auto* error = std::get_if<std::string>(&read_it)) return *error;
      auto& element = get(n);
      const models::Origin at = element.device.at;
      element.device = std::get<models::Device>(read_it);
      element.device.at = at;
      return std::nullopt;
    };
    all.push_back(device);
  }
  return all;
}

// A declared loop can be a current or an impedance: the unit of the text decides.
void add_loops(std::vector<Parameter>& all, const std::string& address, std::size_t index, bool maximum,
               Quantity unit) {
  struct Named {
    const char* key;
    Loop models::Bound::*member;
  };
  static constexpr Named kLoops[] = {{"three_phase", &models::Bound::three_phase},
                                     {"line_neutral", &models::Bound::line_neutral},
                                     {"line_earth", &models::Bound::line_earth},
                                     {"Zn", &models::Bound::line_neutral},
                                     {"Ze", &models::Bound::line_earth}};
  for (const Named& named : kLoops) {
    const bool impedance_name = named.key[0] == 'Z';
    if (impedance_name && (maximum || unit != Quantity::impedance)) continue;
    all.push_back(number(fmt::format("{}.{}.{}", address, maximum ? "maximum" : "minimum", named.key), unit,
                         [index, maximum, member = named.member, unit](Network& network, double v) {
                           models::Bound& bound =
                               maximum ? network.sources[index].maximum : network.sources[index].minimum;
                           auto put = [&](Loop& loop) {
                             loop.ohms = unit == Quantity::impedance ? v : 0;
                             loop.amps = unit == Quantity::current ? v : 0;
                           };
                           put(bound.*member);
                           // In TN-C-S both loops return through one conductor: what holds for one holds for the other.
                           const bool combined = network.sources[index].earthing == models::Earthing::TN_C_S;
                           const bool both = bound.line_neutral.given() && bound.line_earth.given();
                           if (!combined || !both || member == &models::Bound::three_phase) return;
                           put(bound.line_neutral);
                           put(bound.line_earth);
                         }));
  }
}

std::vector<Parameter> source_parameters(const Source& source, std::size_t index, Quantity loop_unit) {
  std::vector<Parameter> all;
  const std::string& name = source.name;
  if (source.transformer) {
    auto value = [&](const char* key, Quantity unit, double Source::*member) {
      all.push_back(number(name + "." + key, unit,
                           [index, member](Network& network, double v) { network.sources[index].*member = v; }));
    };
    value("rating", Quantity::apparent_power, &Source::rating);
    value("uk", Quantity::percentage, &Source::uk);
    value("losses", Quantity::power, &Source::losses);
    value("fault_level.maximum", Quantity::apparent_power, &Source::fault_level_max);
    value("fault_level.minimum", Quantity::apparent_power, &Source::fault_level_min);
  } else {
    add_loops(all, name, index, true, loop_unit);
    add_loops(all, name, index, false, loop_unit);
  }
  all.push_back(number(name + ".demand", Quantity::current, [index](Network& network, double v) {
    network.sources[index].demand.value = v;
    network.sources[index].demand.given = true;
  }));
  if (source.tails.present)
    all.push_back(number(name + ".tails.length", Quantity::length,
                         [index](Network& network, double v) { network.sources[index].tails.length = v; }));
  return all;
}

// The unit that the first value is written in.
Quantity loop_unit(const VaryRequest& request) {
  const std::string& text = request.values.empty() ? request.from : request.values.front();
  return std::holds_alternative<double>(models::parse_quantity(text, Quantity::current)) ? Quantity::current
                                                                                         : Quantity::impedance;
}

std::vector<Parameter> parameters_of(const Network& network, const VaryRequest& request, const std::string& element) {
  std::vector<Parameter> all;
  for (std::size_t i = 0; i < network.sources.size(); ++i)
    if (network.sources[i].name == element) return source_parameters(network.sources[i], i, loop_unit(request));
  for (std::size_t i = 0; i < network.submains.size(); ++i)
    if (network.submains[i].name == element) {
      all = run_parameters(
          element, request, network, [i](Network& n) -> Submain& { return n.submains[i]; }, false);
      all.push_back(number(element + ".demand", Quantity::current, [i](Network& n, double v) {
        n.submains[i].demand.value = v;
        n.submains[i].demand.given = true;
      }));
      return all;
    }
  for (std::size_t i = 0; i < network.circuits.size(); ++i)
    if (models::address(network, network.circuits[i]) == element) {
      all = run_parameters(
          element, request, network, [i](Network& n) -> Circuit& { return n.circuits[i]; }, true);
      if (network.circuits[i].ring)
        all.erase(std::remove_if(all.begin(), all.end(),
                                 [&](const Parameter& p) { return p.address == element + ".in_parallel"; }),
                  all.end());
      // A ring reaches as far as its last spur.
      for (const models::Spur& spur : network.circuits[i].spurs)
        all.front().least = std::max(all.front().least, spur.at);
      all.push_back(number(element + ".load", Quantity::current, [i](Network& n, double v) {
        n.circuits[i].load.value = v;
        n.circuits[i].load.given = true;
      }));
      return all;
    }
  for (std::size_t i = 0; i < network.electrodes.size(); ++i)
    if (network.electrodes[i].name == element)
      all.push_back(number(element + ".resistance", Quantity::impedance,
                           [i](Network& n, double v) { n.electrodes[i].resistance = v; }));
  return all;
}

}  // namespace

namespace {

std::string_view kind_of(const Network& network, const std::string& element) {
  for (const Source& source : network.sources)
    if (source.name == element) return source.transformer ? "transformer" : "supply";
  for (const Submain& submain : network.submains)
    if (submain.name == element) return "submain";
  for (const models::Electrode& electrode : network.electrodes)
    if (electrode.name == element) return "electrode";
  return "circuit";
}

// The range that the netlist's vocabulary gives a key: "minimum.Ze" of a supply is Ze of supply.minimum.
Parameter within_range(Parameter parameter, std::string_view element_kind, const std::string& key) {
  std::string kind_name(element_kind);
  std::string name = key;
  if (const std::size_t dot = key.find('.'); dot != std::string::npos) {
    kind_name += "." + key.substr(0, dot);
    name = key.substr(dot + 1);
  }
  parameter.whole = parameter.unit == Quantity::count;
  const models::Kind* kind = models::find_kind(kind_name);
  const models::Key* found = kind == nullptr ? nullptr : models::find_key(*kind, name);
  if (found == nullptr || (found->least == 0 && found->most == 0)) return parameter;
  parameter.least = std::max(parameter.least, found->least);
  parameter.most = found->most;
  parameter.zero_allowed = parameter.least > found->least ? false : !found->above;
  return parameter;
}

}  // namespace

std::optional<std::string> contradiction(const Network& network) {
  for (const Source& source : network.sources) {
    models::ConductorSet all = source.lines;
    all.add(models::Conductor::N);
    all.add(models::Conductor::PE);
    for (const Fault fault : kAllFaults) {
      const auto at = [&](Condition condition) {
        return fault_current(network, source, ConductorMatrix::Zero(), all, condition, fault);
      };
      const FaultCurrent most = at(Condition::maximum);
      const FaultCurrent least = at(Condition::minimum);
      if (!most.usable() || !least.usable() || least.amps <= most.amps * (1 + 1e-9)) continue;
      return fmt::format("the least {} current of '{}' would be {}, above its greatest of {}", word(fault), source.name,
                         models::format_quantity(least.amps, Quantity::current),
                         models::format_quantity(most.amps, Quantity::current));
    }
  }
  return std::nullopt;
}

std::variant<Parameter, std::string> find_parameter(const Network& network, const VaryRequest& request) {
  const std::string& key = request.key;
  if (key == "ambient") {
    Parameter ambient = number(key, Quantity::temperature, [](Network& n, double v) { n.ambient_degc = v; });
    ambient.least = -40;
    ambient.zero_allowed = true;
    return ambient;
  }
  const std::size_t slash = key.find('/');
  const std::size_t dot = key.find('.', slash == std::string::npos ? 0 : slash);
  if (dot == std::string::npos || dot == 0)
    return fmt::format("'{}' names no value; write an address and a key, for example S1.length", key);
  const std::string element = key.substr(0, dot);
  const std::vector<Parameter> all = parameters_of(network, request, element);
  if (all.empty()) {
    const std::vector<std::string> known = addresses(network);
    const std::vector<std::string_view> views(known.begin(), known.end());
    const std::string_view near = models::nearest_name(element, views);
    return fmt::format("nothing that can be varied is called '{}'{}", element,
                       near.empty() ? std::string() : fmt::format("; did you mean '{}'?", near));
  }
  std::vector<std::string_view> keys;
  for (const Parameter& parameter : all) {
    if (parameter.address == key) return within_range(parameter, kind_of(network, element), key.substr(dot + 1));
    keys.emplace_back(std::string_view(parameter.address).substr(dot + 1));
  }
  const std::string_view near = models::nearest_name(key.substr(dot + 1), keys);
  std::string list;
  for (const std::string_view k : keys) list += (list.empty() ? "" : ", ") + std::string(k);
  return near.empty()
             ? fmt::format("'{}' has no value '{}' that can be varied; it has {}", element, key.substr(dot + 1), list)
             : fmt::format("'{}' has no value '{}' that can be varied; did you mean '{}'?", element,
                           key.substr(dot + 1), near);
}

std::variant<double, std::string> read_value(const Parameter& parameter, const std::string& text) {
  const auto parsed = models::parse_quantity(text, parameter.unit);
  if (const auto* error = std::get_if<models::UnitError>(&parsed))
    return fmt::format("{}: {}", parameter.address, error->message);
  const double value = std::get<double>(parsed);
  const bool possible = parameter.zero_allowed ? value >= parameter.least : value > parameter.least;
  if (parameter.whole && value != std::floor(value))
    return fmt::format("{} is {}; it must be a whole number", parameter.address, text);
  if (value > parameter.most)
    return fmt::format("{} is {}; it must be at most {}", parameter.address, text,
                       models::format_quantity(parameter.most, parameter.unit));
  if (!possible || !std::isfinite(value))
    return fmt::format("{} is {}; it must be {} {}", parameter.address, text,
                       parameter.zero_allowed ? "at least" : "above",
                       models::format_quantity(parameter.least, parameter.unit));
  return value;
}

}  // namespace sunder::solver
