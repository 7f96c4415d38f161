// SPDX-License-Identifier: Apache-2.0
#include "models/rules.h"

#include <array>

namespace sunder::models {

const char* word(Earthing earthing) noexcept {
  constexpr std::array kWords = {"TN-S", "TN-C-S", "TT", "TN-C", "IT"};
  return kWords[static_cast<std::size_t>(earthing)];
}

const char* word(Use use) noexcept {
  constexpr std::array kWords = {"unknown", "sockets", "fixed", "lighting", "distribution"};
  return kWords[static_cast<std::size_t>(use)];
}

const AdiabaticRow* adiabatic(const RuleSet& rules, const Strand& strand, const std::string& insulation) noexcept {
  const std::string& own = strand.insulation.empty() ? insulation : strand.insulation;
  // Nominal sizes are typed and divided: 300 mm2 must count as "up to 300 mm2".
  const double area = strand.area * (1 - 1e-9);
  const AdiabaticRow* best = nullptr;
  for (const AdiabaticRow& row : rules.k) {
    if (row.place != strand.place || row.material != strand.material || row.insulation != own) continue;
    if (area > row.area_to) continue;
    if (best == nullptr || row.area_to < best->area_to) best = &row;
  }
  return best;
}

double alpha20(const RuleSet& rules, Material material) noexcept {
  switch (material) {
    case Material::copper:
      return rules.alpha_copper;
    case Material::aluminium:
      return rules.alpha_aluminium;
    case Material::steel:
      return rules.alpha_steel;
    case Material::lead:
      break;
  }
  return 0.004;  // IEC 60287-1-1, lead
}

}  // namespace sunder::models
