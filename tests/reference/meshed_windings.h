// SPDX-License-Identifier: Apache-2.0
/// @file
/// Windings on legs: how a vector group is connected, and the impedances of what feeds a network.
#pragma once

#include <array>
#include <utility>

#include "tests/reference/equations.h"
#include "tests/reference/meshed.h"

namespace sunder::reference::meshed {

struct WindingTerminals {
  std::array<int, 3> primary;
  int primary_star = 0;  ///< of Y and YN
  std::array<int, 3> secondary;
  int secondary_star = 0;  ///< of yn and zn: the point that is brought out
};

struct WindingCurrents {
  std::array<Equations::Current, 3> primary;    ///< into the transformer
  std::array<Equations::Current, 3> secondary;  ///< out of it
};

/// Three legs; the primary windings star or delta, the secondary ones star, delta or zigzag of half windings,
/// connected so that the secondary lags by 30 degrees times the clock number. The short-circuit impedance lies
/// in the secondary windings, (Z0 - Z1)/3 between their common point and the one brought out. Where no winding
/// lets zero-sequence ampere-turns be balanced, the yokes close the core: that is what a Z0 of such a unit means.
WindingCurrents build_windings(Equations& equations, const Transformer& transformer, const WindingTerminals& terminals);

/// Short-circuit impedance of a transformer on its secondary side [ohm].
[[nodiscard]] Complex short_circuit_ohms(double uk, double losses, double rating, double secondary);

/// Positive- and zero-sequence impedance of a source in a condition [ohm].
[[nodiscard]] std::pair<Complex, Complex> source_ohms(const Network& network, const Source& source,
                                                      Condition condition);

}  // namespace sunder::reference::meshed
