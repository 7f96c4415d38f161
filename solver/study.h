// SPDX-License-Identifier: Apache-2.0
/// @file
/// The solver's front door: a network in, results out.
#pragma once

#include <functional>
#include <string>
#include <variant>
#include <vector>

#include "models/network.h"
#include "solver/results.h"

namespace sunder::solver {

/// A part that cannot be solved, in the user's words, with its place.
struct Trouble {
  std::string message;
  models::Origin at{};
  std::string note;  ///< of a second place, "" if none
  models::Origin second{};
};

/// What the graph can find before anything is solved: a board nobody feeds, two feeds that close a
/// loop, two sources on one part, a circuit on a phase its board does not have. Empty: sound.
[[nodiscard]] std::vector<Trouble> check_topology(const models::Network& network);

/// Prospective currents at every node, state, condition and possible fault, in the order of states,
/// condition (maximum first), nodes as in the netlist.
/// Precondition: check_topology is empty.
[[nodiscard]] std::vector<FaultRow> solve_faults(const models::Network& network);

struct CheckOptions {
  bool every_state = false;  ///< one finding per state instead of the governing one
  bool remedies = true;      ///< compute them for failures
  std::function<void(std::size_t done, std::size_t of)> progress;  ///< may be empty
};

/// All checks of all subjects; governing findings in the order fails, undecided, noted, meets, then margin.
/// Precondition: check_topology is empty.
[[nodiscard]] std::vector<Finding> run_checks(const models::Network& network, const CheckOptions& options);

[[nodiscard]] std::vector<ScheduleRow> schedule(const models::Network& network);

/// Everything the coordination chart of the path from the source to `address` shows.
/// @return the sentence that says why not: no such address (nearest one named).
[[nodiscard]] std::variant<PathChart, std::string> path_chart(const models::Network& network,
                                                              const std::string& address);

struct VaryRequest {
  std::string key;                  ///< "S1.length"
  std::string from, to;             ///< "10 m", "200 m": a range
  int steps = 24;                   ///< sample points of a range
  std::vector<std::string> values;  ///< or a list / catalogue
  /// Reads a device text for `--set W1.device`; device catalogues are refused where it is empty.
  std::function<std::variant<models::Device, std::string>(const models::Network&, const std::string&)> read_device;
};

/// Re-solves along the parameter, finds every flip by bisection to 1e-6 of the parameter.
/// @return the sentence that says why not: unknown address or key (nearest named), wrong unit, empty range.
[[nodiscard]] std::variant<Sweep, std::string> vary(const models::Network& network, const VaryRequest& request,
                                                    const std::function<void(std::size_t, std::size_t)>& progress);

/// Every address of the network that takes values: names of sources, submains, "board/circuit".
[[nodiscard]] std::vector<std::string> addresses(const models::Network& network);

/// Description of one check for help, JSON and docs.
struct CheckInfo {
  std::string name;      ///< "disconnection time"
  std::string compares;  ///< one sentence
  std::string applies;   ///< "circuits, submains"
  std::string needs;     ///< "length, device; Icn ..."
};
[[nodiscard]] std::vector<CheckInfo> list_checks();

}  // namespace sunder::solver
