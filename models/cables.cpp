// SPDX-License-Identifier: Apache-2.0
#include "models/cables.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>

#include "models/units.h"

namespace sunder::models {
namespace {

bool same_area(double a, double b) noexcept { return std::abs(a - b) <= 1e-6 * std::max(a, b); }

std::string mm2(double area) { return format_number(area * 1e6); }

const CableSize* find_size(const CableConstruction& construction, double area) noexcept {
  const auto found = std::find_if(construction.sizes.begin(), construction.sizes.end(),
                                  [area](const CableSize& size) { return same_area(size.area, area); });
  return found == construction.sizes.end() ? nullptr : &*found;
}

/// "nearest are 25 and 35 mm2"
std::string nearest_sizes(const CableConstruction& construction, double area) {
  if (construction.sizes.empty()) return "it has no sizes";
  const auto above = std::find_if(construction.sizes.begin(), construction.sizes.end(),
                                  [area](const CableSize& size) { return size.area > area; });
  if (above == construction.sizes.begin()) return fmt::format("its smallest is {} mm2", mm2(above->area));
  if (above == construction.sizes.end()) {
    return fmt::format("its largest is {} mm2", mm2(construction.sizes.back().area));
  }
  return fmt::format("the nearest are {} and {} mm2", mm2(std::prev(above)->area), mm2(above->area));
}

CableError no_size(const CableConstruction& construction, double area) {
  return {fmt::format("'{}' has no {} mm2; {}", construction.name, mm2(area), nearest_sizes(construction, area))};
}

Strand core_strand(const CableConstruction& construction, const CableSize& size, const char* what) {
  Strand strand;
  strand.material = construction.material;
  strand.place = Place::core;
  strand.area = size.area;
  strand.r20 = size.r20;
  strand.x = size.x;
  strand.confidence = worse(size.confidence, size.x_confidence);
  strand.label = fmt::format("{} mm2 {}", mm2(size.area), what);
  return strand;
}

std::optional<CableError> add_core_cpc(const CableConstruction& construction, const CableSize& size,
                                       const CpcChoice& cpc, int n_loaded, Cable& out) {
  if (construction.cores > 0) {
    if (n_loaded + 1 > construction.cores) {
      return CableError{
          fmt::format("'{}' has {} cores, but {} loaded conductors and a core as protective conductor need {}",
                      construction.name, construction.cores, n_loaded, n_loaded + 1)};
    }
    if (cpc.core_area > 0 && !same_area(cpc.core_area, size.area)) {
      return CableError{
          fmt::format("all cores of '{}' have the size of its line conductors; a protective core of {} mm2 "
                      "is not one of them",
                      construction.name, mm2(cpc.core_area))};
    }
    out.protective.push_back(core_strand(construction, size, "core"));
    return std::nullopt;
  }
  const double area = cpc.core_area > 0 ? cpc.core_area : size.area;
  const CableSize* single = find_size(construction, area);
  if (single == nullptr) return no_size(construction, area);
  out.protective.push_back(core_strand(construction, *single, "single"));
  return std::nullopt;
}

std::optional<CableError> add_built_in_cpc(const CableConstruction& construction, const CableSize& size,
                                           const CpcChoice& cpc, Cable& out) {
  if (!construction.built_in_cpc || size.cpc_area <= 0) {
    return CableError{fmt::format("'{}' has no protective conductor of its own", construction.name)};
  }
  if (cpc.core_area > 0 && !same_area(cpc.core_area, size.cpc_area)) {
    return CableError{fmt::format("the protective conductor of '{}' {} mm2 has {} mm2, not {} mm2", construction.name,
                                  mm2(size.area), mm2(size.cpc_area), mm2(cpc.core_area))};
  }
  Strand strand = core_strand(construction, size, "");
  strand.area = size.cpc_area;
  strand.r20 = size.cpc_r20;
  strand.label = fmt::format("{} mm2 built in", mm2(size.cpc_area));
  out.protective.push_back(strand);
  return std::nullopt;
}

std::optional<CableError> add_armour(const CableConstruction& construction, const CableSize& size, Cable& out) {
  if (size.armour_area <= 0 || size.armour_r20 <= 0) {
    return CableError{fmt::format("'{}' {} mm2 has no armour", construction.name, mm2(size.area))};
  }
  Strand strand;
  strand.material = construction.armour_material;
  strand.place = Place::armour;
  strand.area = size.armour_area;
  strand.r20 = size.armour_r20;
  strand.x = size.armour_x;
  strand.confidence = size.armour_confidence;
  strand.label = fmt::format("armour of {} mm2", mm2(size.armour_area));
  out.protective.push_back(strand);
  return std::nullopt;
}

std::optional<CableError> add_separate(const CableConstruction& separate, double area, Cable& out) {
  const CableSize* size = find_size(separate, area);
  if (size == nullptr) return no_size(separate, area);
  Strand strand = core_strand(separate, *size, "beside it");
  strand.place = Place::separate;
  strand.insulation = separate.insulation;
  out.protective.push_back(strand);
  return std::nullopt;
}

/// "flat-pvc-cu 2.5/1.5 mm2"
std::string cable_text(const CableConstruction& construction, const CableSize& size, const CpcChoice& cpc) {
  const double second = cpc.built_in ? size.cpc_area : cpc.core ? cpc.core_area : 0;
  if (second > 0 && !same_area(second, size.area)) {
    return fmt::format("{} {}/{} mm2", construction.name, mm2(size.area), mm2(second));
  }
  return fmt::format("{} {} mm2", construction.name, mm2(size.area));
}

}  // namespace

const char* word(Material material) noexcept {
  constexpr std::array kWords = {"copper", "aluminium", "steel", "lead"};
  return kWords[static_cast<std::size_t>(material)];
}

const char* word(Place place) noexcept {
  constexpr std::array kWords = {"core", "separate", "armour", "sheath", "conduit"};
  return kWords[static_cast<std::size_t>(place)];
}

std::optional<CableError> resolve_cable(const CableConstruction& construction, double area, const CpcChoice& cpc,
                                        int n_loaded, bool neutral, const CableConstruction& separate, Cable& out) {
  out = Cable{};
  const CableSize* size = find_size(construction, area);
  if (size == nullptr) return no_size(construction, area);
  if (construction.cores > 0 && n_loaded > construction.cores) {
    return CableError{fmt::format("'{}' has {} cores, but {} loaded conductors are needed", construction.name,
                                  construction.cores, n_loaded)};
  }
  out.text = cable_text(construction, *size, cpc);
  out.construction = construction.name;
  out.title = construction.title;
  out.insulation = construction.insulation;
  out.max_degc = construction.max_degc;
  out.cores = construction.cores;
  out.line = core_strand(construction, *size, construction.cores > 0 ? "core" : "single");
  out.area = size->area;
  out.cpc = cpc;
  out.n_loaded = n_loaded;
  out.with_neutral = neutral;
  out.source = construction.source;
  out.at = construction.at;

  if (cpc.core) {
    if (auto error = add_core_cpc(construction, *size, cpc, n_loaded, out)) return error;
  }
  if (cpc.built_in) {
    if (auto error = add_built_in_cpc(construction, *size, cpc, out)) return error;
  }
  if (cpc.armour) {
    if (auto error = add_armour(construction, *size, out)) return error;
  }
  if (cpc.separate > 0) {
    if (auto error = add_separate(separate, cpc.separate, out)) return error;
  }
  return std::nullopt;
}

}  // namespace sunder::models
