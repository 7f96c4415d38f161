// SPDX-License-Identifier: Apache-2.0
/// @file
/// Where the coils of a vector group sit, written out by clock number.
#pragma once

#include <map>
#include <utility>

namespace sunder::reference::meshed {

// Which lines of the primary a coil lies between (or on), by clock number and for terminal L1; L2 and L3 follow
// by turning A to B to C to A. From the definition: clock 1 is a lag of 30 degrees, and V_A - V_C lags V_A by it.
struct Seat {
  int plus, minus;
};
inline Seat between_lines(int clock) {
  static const std::map<int, Seat> seats = {{1, {0, 2}}, {3, {1, 2}}, {5, {1, 0}},
                                            {7, {2, 0}}, {9, {2, 1}}, {11, {0, 1}}};
  return seats.at(clock);
}
// V_A, -V_C, V_B, -V_A, V_C, -V_B lag by 0, 60, 120 ... degrees. @return leg, sign
inline std::pair<int, int> on_leg(int clock) {
  static const std::map<int, std::pair<int, int>> seats = {{0, {0, 1}},  {2, {2, -1}}, {4, {1, 1}},
                                                           {6, {0, -1}}, {8, {2, 1}},  {10, {1, -1}}};
  return seats.at(clock);
}
// Legs whose delta coils A-B, B-C, C-A are 0, 1, 2: the difference of two is three times a phase voltage.
inline Seat between_deltas(int clock) {
  static const std::map<int, Seat> seats = {{0, {0, 2}}, {2, {1, 2}}, {4, {1, 0}},
                                            {6, {2, 0}}, {8, {2, 1}}, {10, {0, 1}}};
  return seats.at(clock);
}

}  // namespace sunder::reference::meshed
