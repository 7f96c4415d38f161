// SPDX-License-Identifier: Apache-2.0
// Everything the coordination chart of one path shows: bands, currents, damage lines.
#include <fmt/format.h>

#include <optional>
#include <string_view>

#include "models/registry.h"
#include "solver/situation.h"
#include "solver/study.h"

namespace sunder::solver {
namespace {

using models::Network;

// The circuit, submain or board with this address, solved; tails share their source's name and come
// last. Nothing where it is dead in this state.
std::optional<Situation> find(const Network& network, const StateSolution& solution, const std::string& address) {
  for (const Subject& subject : subjects(network, solution)) {
    const auto i = static_cast<std::size_t>(subject.index);
    const bool same =
        (subject.kind == SubjectKind::circuit && models::address(network, network.circuits[i]) == address) ||
        (subject.kind == SubjectKind::submain && network.submains[i].name == address) ||
        (subject.kind == SubjectKind::tails && network.sources[i].name == address) ||
        (subject.kind == SubjectKind::board && network.boards[i].name == address);
    if (same) return situation(network, solution, subject);
  }
  return std::nullopt;
}

// One line a conductor; conductors that stand the same share one.
void add_damage(PathChart& chart, const Network& network, const models::Cable& cable, const std::string& whose) {
  std::vector<DamageLine> lines;
  auto add = [&](const models::Strand& strand, const std::string& role) {
    const models::AdiabaticRow* k = models::adiabatic(network.rules, strand, cable.insulation);
    if (k == nullptr) return;
    const double k2s2 = k->k * k->k * strand.area * strand.area;
    for (DamageLine& line : lines) {
      if (line.k2s2 != k2s2) continue;
      line.label = fmt::format("{} line and cpc {}", whose, strand.label);
      return;
    }
    lines.push_back({fmt::format("{} {} {}", whose, role, strand.label), k2s2});
  };
  add(cable.line, "line");
  for (const models::Strand& strand : cable.protective) add(strand, "cpc");
  chart.damage.insert(chart.damage.end(), lines.begin(), lines.end());
}

// Greatest current of a fault on the load side of a device.
FaultCurrent greatest_through(const Network& network, const StateSolution& solution, const Situation& end,
                              const Protector& protector, Fault fault) {
  if (solution.tree.grid) {
    const StateGrid& grid = solution.grid(Condition::maximum);
    GridPlace place = grid.at_board(protector.board >= 0 ? protector.board : end.source->board);
    place.have = end.conductors;
    return grid.current(place, fault);
  }
  const ConductorMatrix net = protector.board < 0 ? ConductorMatrix(ConductorMatrix::Zero())
                                                  : solution.maximum.boards[static_cast<std::size_t>(protector.board)];
  return fault_current(network, *end.source, net, end.conductors, Condition::maximum, fault);
}

// One device of the path with the currents it may see on the conductors that lead to the address.
PathDevice describe(const Network& network, const StateSolution& solution, const Situation& end,
                    const Protector& protector, const std::optional<Situation>& element) {
  PathDevice device;
  device.address = protector.address;
  device.device = *protector.device;
  device.label = protector.address + "  " + protector.device->text;
  if (element) {
    const FaultCurrent* low =
        least(element->far_min, {Fault::line_earth, Fault::line_neutral, Fault::line_line}, nullptr);
    if (low != nullptr && low->known) device.least = low->amps;
  }
  for (const Fault fault : kAllFaults) {
    const FaultCurrent current = greatest_through(network, solution, end, protector, fault);
    if (current.usable() && !(device.greatest >= current.amps)) device.greatest = current.amps;
  }
  return device;
}

PathChart chart_of(const Network& network, const StateSolution& solution, const Situation& end) {
  PathChart chart;
  chart.title = network.title;
  chart.address = end.address;
  chart.state = end.state;
  const std::string lines = models::format_quantity(end.source->U, models::Quantity::voltage, 3);
  const std::string neutral = models::format_number(end.source->U0, 3);
  chart.voltage = end.source->lines.lines() == 1 ? neutral + " V" : neutral + "/" + lines;
  bool own_drawn = false;
  for (const Protector& protector : end.path) {
    if (protector.device->overcurrent.empty() && protector.device->residual.empty()) continue;
    const std::optional<Situation> element = find(network, solution, protector.address);
    if (element && element->cable != nullptr) add_damage(chart, network, *element->cable, protector.address);
    own_drawn = own_drawn || protector.address == end.address;
    chart.devices.push_back(describe(network, solution, end, protector, element));
  }
  if (!own_drawn && end.cable != nullptr) add_damage(chart, network, *end.cable, end.address);
  for (const Fault fault : {Fault::line_earth, Fault::line_neutral, Fault::line_line}) {
    const FaultCurrent& current = of(end.far_min, fault);
    if (current.usable()) chart.currents.push_back({fmt::format("least {}", word(fault)), current.amps});
  }
  const FaultCurrent* most = greatest(end.origin_max, kAllFaults, nullptr);
  if (most != nullptr && most->known) chart.currents.push_back({"greatest at the device", most->amps});
  return chart;
}

}  // namespace

std::variant<PathChart, std::string> path_chart(const Network& network, const std::string& address) {
  for (std::size_t state = 0; state < network.states.size(); ++state) {
    const StateSolution solution = solve_state(network, static_cast<int>(state));
    if (const std::optional<Situation> end = find(network, solution, address)) return chart_of(network, solution, *end);
  }
  const std::vector<std::string> known = addresses(network);
  const std::vector<std::string_view> views(known.begin(), known.end());
  const std::string_view near = models::nearest_name(address, views);
  return fmt::format("no board, submain or circuit is called '{}'{}", address,
                     near.empty() ? std::string() : fmt::format("; did you mean '{}'?", near));
}

}  // namespace sunder::solver
