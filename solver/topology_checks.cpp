// SPDX-License-Identifier: Apache-2.0
// What the graph of a network can find before anything is solved.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "solver/study.h"
#include "solver/topology.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Submain;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

void find_dead_boards(const Network& network, std::vector<Trouble>& troubles) {
  std::vector<bool> fed(network.boards.size());
  std::vector<bool> active(network.sources.size());
  for (std::size_t i = 0; i < network.states.size(); ++i) {
    for (const int b : live_boards(network, static_cast<int>(i))) fed[at(b)] = true;
    for (const int s : network.states[i].sources) active[at(s)] = true;
  }
  for (std::size_t b = 0; b < network.boards.size(); ++b)
    if (!fed[b])
      troubles.push_back(
          {fmt::format("nobody feeds board '{}'", network.boards[b].name), network.boards[b].at, "", {}});
  for (std::size_t s = 0; s < network.sources.size(); ++s)
    if (!active[s])
      troubles.push_back(
          {fmt::format("source '{}' is in no state", network.sources[s].name), network.sources[s].at, "", {}});
}

// Boards that cables or links join must be of one nominal voltage.
void find_voltage_conflicts(const Network& network, std::vector<Trouble>& troubles) {
  for (std::size_t i = 0; i < network.states.size(); ++i) {
    const StateTree tree = state_tree(network, static_cast<int>(i));
    if (!tree.grid) continue;
    constexpr double kSame = 0.15;  // rated voltages of machines and no-load voltages lie within it
    auto compare = [&](double U, double other, const std::string& what, const std::string& board,
                       models::Origin where) {
      if (std::abs(U / other - 1) <= kSame) return;
      troubles.push_back(
          {fmt::format("{} has {} but board '{}' has {} in state '{}'", what,
                       models::format_quantity(U, models::Quantity::voltage), board,
                       models::format_quantity(other, models::Quantity::voltage), network.states[i].name),
           where,
           "",
           {}});
    };
    for (const Submain& submain : network.submains)
      if (tree.live(submain.from) && tree.live(submain.to))
        compare(system_of(network, tree, submain.from).U, system_of(network, tree, submain.to).U,
                "submain '" + submain.name + "' at board '" + network.boards[at(submain.from)].name + "'",
                network.boards[at(submain.to)].name, submain.at);
    for (const int s : network.states[i].sources)
      compare(network.sources[at(s)].U, system_of(network, tree, network.sources[at(s)].board).U,
              "source '" + network.sources[at(s)].name + "'", network.boards[at(network.sources[at(s)].board)].name,
              network.sources[at(s)].at);
    for (const models::Transformer& t : network.transformers)
      if (tree.live(t.from) && tree.live(t.to)) {
        compare(t.primary, system_of(network, tree, t.from).U, "the primary of transformer '" + t.name + "'",
                network.boards[at(t.from)].name, t.at);
        compare(t.U, system_of(network, tree, t.to).U, "the secondary of transformer '" + t.name + "'",
                network.boards[at(t.to)].name, t.at);
      }
    if (!troubles.empty()) return;
  }
}

// Parts that cables and links join, each board by the least board of its part.
std::vector<int> joined_parts(const Network& network, const StateTree& tree) {
  const models::SupplyState& state = network.states[at(tree.state)];
  std::vector<int> part(network.boards.size());
  for (std::size_t b = 0; b < part.size(); ++b) part[b] = static_cast<int>(b);
  auto join = [&](int a, int b) {
    if (!tree.live(a) || !tree.live(b)) return;
    const int keep = std::min(part[at(a)], part[at(b)]);
    const int drop = std::max(part[at(a)], part[at(b)]);
    if (keep == drop) return;
    for (int& p : part)
      if (p == drop) p = keep;
  };
  for (std::size_t i = 0; i < network.submains.size(); ++i)
    if (!state.submain_open[i]) join(network.submains[i].from, network.submains[i].to);
  for (std::size_t i = 0; i < network.links.size(); ++i)
    if (state.link_closed[i]) join(network.links[i].from, network.links[i].to);
  return part;
}

// Transformers that meet on both sides must turn the phases alike: unequal clock numbers in parallel are a
// short-circuit.
void find_phase_conflicts(const Network& network, std::vector<Trouble>& troubles) {
  if (network.transformers.size() < 2) return;
  for (std::size_t i = 0; i < network.states.size(); ++i) {
    const StateTree tree = state_tree(network, static_cast<int>(i));
    const std::vector<int> part = joined_parts(network, tree);
    struct Turn {
      int hours = -1;
      int by = -1;  // transformer that told it
    };
    std::vector<Turn> turn(network.boards.size());
    for (const int b : tree.order) {
      if (turn[at(part[at(b)])].hours < 0) turn[at(part[at(b)])].hours = 0;
      for (bool more = true; more;) {
        more = false;
        for (std::size_t t = 0; t < network.transformers.size(); ++t) {
          const models::Transformer& of = network.transformers[t];
          if (network.states[i].transformer_open[t] || !tree.live(of.from) || !tree.live(of.to)) continue;
          Turn& from = turn[at(part[at(of.from)])];
          Turn& to = turn[at(part[at(of.to)])];
          const int hours = (from.hours + of.clock) % 12;
          if (from.hours < 0 && to.hours < 0) continue;
          if (from.hours < 0) {
            from = {(to.hours + 12 - of.clock % 12) % 12, static_cast<int>(t)};
            more = true;
          } else if (to.hours < 0) {
            to = {hours, static_cast<int>(t)};
            more = true;
          } else if (to.hours != hours) {
            const bool known = to.by >= 0;
            troubles.push_back(
                {fmt::format("transformer '{}' turns the phases of board '{}' by {} hours and not by {} in state '{}': "
                             "unequal clock numbers must not be joined",
                             of.name, network.boards[at(of.to)].name, hours, to.hours, network.states[i].name),
                 of.at, known ? "what it is joined with" : "",
                 known ? network.transformers[at(to.by)].at : models::Origin{}});
            return;
          }
        }
      }
    }
  }
}

void find_missing_conductors(const Network& network, std::vector<Trouble>& troubles) {
  for (std::size_t i = 0; i < network.states.size(); ++i) {
    const StateTree tree = state_tree(network, static_cast<int>(i));
    auto complain = [&](const std::string& what, ConductorSet wanted, int board, models::Origin where) {
      wanted.remove(Conductor::PE);
      const ConductorSet have = tree.conductors[at(board)];
      if (have.contains(wanted)) return;
      ConductorSet offered = have;
      offered.remove(Conductor::PE);
      troubles.push_back(
          {fmt::format("{} takes {} but board '{}' has {} in state '{}'", what, models::phases_text(wanted),
                       network.boards[at(board)].name, models::phases_text(offered), network.states[i].name),
           where,
           "",
           {}});
    };
    for (const models::Circuit& circuit : network.circuits)
      if (tree.live(circuit.board))
        complain("circuit '" + models::address(network, circuit) + "'", circuit.conductors, circuit.board, circuit.at);
    for (const Submain& submain : network.submains)
      if (tree.live(submain.from))
        complain("submain '" + submain.name + "'", submain.conductors, submain.from, submain.at);
    if (!troubles.empty()) return;
  }
}

}  // namespace

std::vector<Trouble> check_topology(const Network& network) {
  std::vector<Trouble> troubles;
  find_dead_boards(network, troubles);
  if (!troubles.empty()) return troubles;
  find_voltage_conflicts(network, troubles);
  find_phase_conflicts(network, troubles);
  if (!troubles.empty()) return troubles;
  find_missing_conductors(network, troubles);
  return troubles;
}

}  // namespace sunder::solver
