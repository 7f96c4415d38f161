// SPDX-License-Identifier: Apache-2.0
/// @file
/// Which devices stand between a source and a place, when they operate, and how much heat passes
/// before they do.
#pragma once

#include <string>
#include <vector>

#include "models/network.h"
#include "solver/results.h"
#include "solver/topology.h"

namespace sunder::solver {

/// A device on the way from the source, with the element it belongs to.
struct Protector {
  const models::Device* device = nullptr;
  std::string
      address;  ///< of its element: "grid", "S1", "workshop" (incomer), "workshop.sockets" (group), "workshop/W2"
  models::Origin at{};
  int board = -1;  ///< board at its line side; -1: at the source
};

/// Devices from the source to the busbar of a board, source first, the board's incomer last.
[[nodiscard]] std::vector<Protector> path_to_board(const models::Network& network, const StateTree& tree, int board);

/// The same to the load side of a circuit's own device, group devices included.
[[nodiscard]] std::vector<Protector> path_to_circuit(const models::Network& network, const StateTree& tree,
                                                     int circuit);
[[nodiscard]] std::vector<Protector> path_to_submain(const models::Network& network, const StateTree& tree,
                                                     int submain);

/// The device nearest the fault that breaks overcurrents; nullptr if none on the path does.
[[nodiscard]] const Protector* overcurrent_protector(const std::vector<Protector>& path) noexcept;

/// Residual current that a residual element breaks by itself [A]: the breaking capacity of a combined
/// device; else the least that IEC 61008-1 demands, 10 In and no less than 500 A (from memory). Above
/// it the overcurrent device must act first.
[[nodiscard]] double residual_capacity(const models::Device& device) noexcept;

/// When a line-earth fault is disconnected.
struct Disconnection {
  double time = models::kNever;    ///< latest [s]
  const Protector* by = nullptr;   ///< what guarantees it; nullptr: nothing does
  bool residual = false;           ///< by its residual current element
  double needed = models::kNever;  ///< current at which `by` meets `limit` [A]
};

/// The earliest guarantee among the nearest overcurrent device and every residual current element on
/// the path, all seeing `current` [A]; `limit` [s] is used to tell the current that would be needed.
[[nodiscard]] Disconnection disconnection(const std::vector<Protector>& path, double current, double limit) noexcept;

/// A bound on the heat a device lets through.
struct Heat {
  double total = models::kNever;  ///< I2t [A2s]
  double time = models::kNever;   ///< latest operating time [s]
  bool from_data = false;         ///< what passes, not a mere bound: maker's points or a curve's own time
  const char* basis = "";
  models::Confidence confidence = models::Confidence::declared;
};

/// Greatest I2t that passes at a prospective current [A]:
///
///     t > 0.1 s on the latest edge:  I2 t (1 + m), of a fuse no more than at a gate it has passed
///     within 0.1 s:                  the least of I2 (m + n) 0.1 s, energy class, fuse limits, points
///
/// @param kappa  peak factor of the fault, for m (IEC 60909-0, heat of the d.c. component)
[[nodiscard]] Heat greatest_heat(const models::Device& device, double current, double kappa);

/// Least I2t that must pass at a prospective current [A]: I2 times the earliest time; nothing within half a cycle,
/// where a device may limit the current.
[[nodiscard]] double least_heat(const models::Device& device, double current) noexcept;

/// Heat of the d.c. component relative to that of the a.c. over `time` [s]:
/// m = (e^(4 f T ln(kappa-1)) - 1) / (2 f T ln(kappa-1)). Source: IEC 60909-0.
[[nodiscard]] double dc_heat(double kappa, double time, double frequency) noexcept;

/// Currents between which the heat bound may jump or turn: ends of the pieces of the latest edge and
/// of the let-through data inside (low, high) [A], each a hair to both sides.
[[nodiscard]] std::vector<double> heat_corners(const models::Device& device, double low, double high);

/// Currents of the vertical steps of a curve [A].
[[nodiscard]] std::vector<double> step_currents(const models::Curve& curve);

}  // namespace sunder::solver
