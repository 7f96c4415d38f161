// SPDX-License-Identifier: Apache-2.0
#include "solver/impedance.h"

#include <algorithm>

namespace sunder::solver {

using models::Cable;
using models::Network;
using models::Place;
using models::Strand;

double strand_degc(const Network& network, const Cable& cable, const Strand& strand, Condition condition) noexcept {
  if (condition == Condition::maximum) return 20.0;
  // IEC 60909 takes the least currents at the temperature at the end of the fault.
  if (network.method == models::Method::iec60909)
    if (const models::AdiabaticRow* k = models::adiabatic(network.rules, strand, cable.insulation); k != nullptr)
      return k->final_degc;
  const bool hot_insulation = cable.max_degc > 80.0;
  switch (strand.place) {
    case Place::core:
      return cable.max_degc;
    case Place::separate:
      return network.ambient_degc;
    case Place::armour:
    case Place::sheath:
      return hot_insulation ? network.rules.armour_degc_90 : network.rules.armour_degc_70;
    case Place::conduit:
      break;
  }
  return hot_insulation ? network.rules.conduit_degc_90 : network.rules.conduit_degc_70;
}

Complex strand_impedance(const Network& network, const Cable& cable, const Strand& strand,
                         Condition condition) noexcept {
  const double theta = strand_degc(network, cable, strand, condition);
  const double alpha = models::alpha20(network.rules, strand.material);
  const bool magnetic = strand.place == Place::armour && condition == Condition::minimum;
  const double factor = magnetic ? network.rules.armour_factor : 1.0;
  constexpr double kCableHz = 50;  // at which reactances of cables are stated
  return {strand.r20 * (1.0 + alpha * (theta - 20.0)) * factor, strand.x * (network.frequency / kCableHz)};
}

Complex protective_impedance(const Network& network, const Cable& cable, Condition condition) noexcept {
  Complex admittance = 0.0;
  for (const Strand& strand : cable.protective) admittance += 1.0 / strand_impedance(network, cable, strand, condition);
  return cable.protective.empty() ? Complex{} : 1.0 / admittance;
}

std::vector<double> protective_shares(const Network& network, const Cable& cable) {
  std::vector<double> shares(cable.protective.size(), 0.0);
  for (const Condition condition : {Condition::maximum, Condition::minimum}) {
    const Complex whole = protective_impedance(network, cable, condition);
    for (std::size_t i = 0; i < shares.size(); ++i) {
      const Complex own = strand_impedance(network, cable, cable.protective[i], condition);
      shares[i] = std::max(shares[i], std::abs(whole / own));
    }
  }
  return shares;
}

ConductorMatrix run_matrix(const Network& network, const Cable& cable, double length, int in_parallel, bool pen,
                           Condition condition) noexcept {
  const double scale = length / in_parallel;
  const Complex line = scale * strand_impedance(network, cable, cable.line, condition);
  const Complex neutral = cable.neutral ? scale * strand_impedance(network, cable, *cable.neutral, condition) : line;
  ConductorMatrix z = ConductorMatrix::Zero();
  z(0, 0) = z(1, 1) = z(2, 2) = line;
  z(3, 3) = neutral;
  if (pen) {
    // One conductor is both: currents in N and in PE meet the same impedance.
    z(4, 4) = z(3, 4) = z(4, 3) = neutral;
  } else {
    z(4, 4) = scale * protective_impedance(network, cable, condition);
  }
  return z;
}

}  // namespace sunder::solver
