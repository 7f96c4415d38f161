// SPDX-License-Identifier: Apache-2.0
#include "solver/topology.h"

#include <fmt/format.h>

#include <boost/graph/adjacency_list.hpp>
#include <boost/graph/breadth_first_search.hpp>
#include <boost/graph/connected_components.hpp>

#include "solver/study.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Source;
using models::Submain;

using Undirected = boost::adjacency_list<boost::vecS, boost::vecS, boost::undirectedS>;
using Directed = boost::adjacency_list<boost::vecS, boost::vecS, boost::directedS>;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

// Boards that a source reaches by following submains from their feeding end.
std::vector<bool> reached(const Network& network) {
  const std::size_t n = network.boards.size();
  Directed graph(n + 1);  // vertex n stands for "a source"
  for (const Source& source : network.sources) boost::add_edge(n, at(source.board), graph);
  for (const Submain& submain : network.submains) boost::add_edge(at(submain.from), at(submain.to), graph);
  std::vector<boost::default_color_type> colours(n + 1, boost::white_color);
  boost::breadth_first_search(
      graph, n,
      boost::color_map(boost::make_iterator_property_map(colours.begin(), boost::get(boost::vertex_index, graph))));
  std::vector<bool> result(n);
  for (std::size_t i = 0; i < n; ++i) result[i] = colours[i] != boost::white_color;
  return result;
}

// A second feed of one board, or a submain that closes a ring among boards: both need the meshed
// solver. Submains form a forest exactly if no board has two feeders and none is its own ancestor.
void find_loops(const Network& network, std::vector<Trouble>& troubles) {
  std::vector<int> first(network.boards.size(), -1);
  for (std::size_t s = 0; s < network.submains.size(); ++s) {
    const Submain& submain = network.submains[s];
    int& feeder = first[at(submain.to)];
    if (feeder >= 0) {
      troubles.push_back(
          {fmt::format("board '{}' is fed by submains '{}' and '{}': a loop between boards is "
                       "solved in a later edition",
                       network.boards[at(submain.to)].name, network.submains[at(feeder)].name, submain.name),
           submain.at, "the first feed", network.submains[at(feeder)].at});
    } else {
      feeder = static_cast<int>(s);
    }
  }
  if (!troubles.empty()) return;
  Undirected graph(network.boards.size());
  for (const Submain& submain : network.submains) boost::add_edge(at(submain.from), at(submain.to), graph);
  std::vector<int> component(network.boards.size());
  const int n_components = network.boards.empty() ? 0 : boost::connected_components(graph, component.data());
  // In a forest, boards - submains = components.
  if (static_cast<int>(network.boards.size()) - static_cast<int>(network.submains.size()) == n_components) return;
  for (const Submain& submain : network.submains) {
    int board = submain.from;
    for (std::size_t hops = 0; board >= 0 && hops <= network.boards.size(); ++hops) {
      if (board == submain.to) {
        troubles.push_back({fmt::format("submain '{}' closes a loop of boards: a loop between boards is solved in "
                                        "a later edition",
                                        submain.name),
                            submain.at,
                            "",
                            {}});
        return;
      }
      const int feeder = first[at(board)];
      board = feeder < 0 ? -1 : network.submains[at(feeder)].from;
    }
  }
}

std::vector<int> feeders(const Network& network) {
  std::vector<int> result(network.boards.size(), -1);
  for (std::size_t s = 0; s < network.submains.size(); ++s) result[at(network.submains[s].to)] = static_cast<int>(s);
  return result;
}

// Two sources that meet in one state: at one board, or above one another.
void find_parallel_sources(const Network& network, std::vector<Trouble>& troubles) {
  const std::vector<int> feeder = feeders(network);
  for (const models::SupplyState& state : network.states) {
    std::vector<int> source_on(network.boards.size(), -1);
    for (const int s : state.sources) {
      const Source& source = network.sources[at(s)];
      int& other = source_on[at(source.board)];
      if (other >= 0) {
        troubles.push_back({fmt::format("state '{}' puts sources '{}' and '{}' on board '{}' together: sources in "
                                        "parallel are solved in a later edition",
                                        state.name, network.sources[at(other)].name, source.name,
                                        network.boards[at(source.board)].name),
                            state.at,
                            "",
                            {}});
        return;
      }
      other = s;
    }
    for (const int s : state.sources) {
      int board = network.sources[at(s)].board;
      for (int f = feeder[at(board)]; f >= 0; f = feeder[at(board)]) {
        board = network.submains[at(f)].from;
        if (source_on[at(board)] < 0) continue;
        troubles.push_back(
            {fmt::format("state '{}' has source '{}' feed a board that source '{}' feeds already: "
                         "sources in parallel are solved in a later edition",
                         state.name, network.sources[at(s)].name, network.sources[at(source_on[at(board)])].name),
             state.at,
             "",
             {}});
        return;
      }
    }
  }
}

ConductorSet supplied(const Source& source) {
  ConductorSet set = source.lines;
  set.add(Conductor::N);
  // In a TT supply the protective conductor starts at the installation's own electrode.
  if (source.earthing != models::Earthing::TT) set.add(Conductor::PE);
  return set;
}

ConductorSet both(ConductorSet a, ConductorSet b) {
  ConductorSet result;
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE})
    if (a.has(c) && b.has(c)) result.add(c);
  return result;
}

void find_dead_boards(const Network& network, std::vector<Trouble>& troubles) {
  const std::vector<bool> reach = reached(network);
  for (std::size_t b = 0; b < network.boards.size(); ++b)
    if (!reach[b])
      troubles.push_back(
          {fmt::format("nobody feeds board '{}'", network.boards[b].name), network.boards[b].at, "", {}});
  std::vector<bool> active(network.sources.size());
  for (const models::SupplyState& state : network.states)
    for (const int s : state.sources) active[at(s)] = true;
  for (std::size_t s = 0; s < network.sources.size(); ++s)
    if (!active[s])
      troubles.push_back(
          {fmt::format("source '{}' is in no state", network.sources[s].name), network.sources[s].at, "", {}});
}

// An electrode must be the only earth of the conductors it holds: two on one protective conductor,
// or one below a TN supply whose protective conductor does not reach it, need the meshed solver.
void find_electrode_conflicts(const Network& network, std::vector<Trouble>& troubles) {
  for (std::size_t i = 0; i < network.states.size(); ++i) {
    const StateTree tree = state_tree(network, static_cast<int>(i));
    for (const int b : tree.order) {
      const int own = network.boards[at(b)].electrode;
      if (own < 0) continue;
      const models::Electrode& electrode = network.electrodes[at(own)];
      const int f = tree.feeder[at(b)];
      const bool fed_by_source = f < 0 || network.sources[at(tree.source_of[at(b)])].board == b;
      const bool carried = !fed_by_source && network.submains[at(f)].conductors.has(Conductor::PE);
      const models::Earthing earthing = network.sources[at(tree.source_of[at(b)])].earthing;
      if (earthing == models::Earthing::TT) {
        const int above = carried ? tree.electrode[at(network.submains[at(f)].from)] : -1;
        if (above >= 0)
          troubles.push_back(
              {fmt::format("electrodes '{}' and '{}' hold one protective conductor (submain '{}' joins "
                           "them): several earths in parallel are solved in a later edition",
                           network.electrodes[at(above)].name, electrode.name, network.submains[at(f)].name),
               electrode.at, "the other electrode", network.electrodes[at(above)].at});
      } else if (!fed_by_source && !carried) {
        troubles.push_back({fmt::format("board '{}' is earthed by electrode '{}' alone below a {} supply: a TT part of "
                                        "a TN installation is solved in a later edition",
                                        network.boards[at(b)].name, electrode.name, models::word(earthing)),
                            electrode.at,
                            "",
                            {}});
      }
    }
    if (!troubles.empty()) return;
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

std::vector<std::vector<int>> submains_from(const Network& network) {
  std::vector<std::vector<int>> result(network.boards.size());
  for (std::size_t s = 0; s < network.submains.size(); ++s)
    result[at(network.submains[s].from)].push_back(static_cast<int>(s));
  return result;
}

std::vector<std::vector<int>> circuits_on(const Network& network) {
  std::vector<std::vector<int>> result(network.boards.size());
  for (std::size_t c = 0; c < network.circuits.size(); ++c)
    result[at(network.circuits[c].board)].push_back(static_cast<int>(c));
  return result;
}

StateTree state_tree(const Network& network, int state) {
  StateTree tree;
  tree.state = state;
  const std::size_t n = network.boards.size();
  tree.source_of.assign(n, -1);
  tree.feeder.assign(n, -1);
  tree.electrode.assign(n, -1);
  tree.conductors.assign(n, {});
  tree.order.reserve(n);
  const std::vector<std::vector<int>> leaving = submains_from(network);
  for (const int s : network.states[at(state)].sources) {
    const Source& source = network.sources[at(s)];
    const int root = source.board;
    tree.source_of[at(root)] = s;
    tree.conductors[at(root)] = supplied(source);
    std::size_t next = tree.order.size();
    tree.order.push_back(root);
    for (; next < tree.order.size(); ++next) {
      const int board = tree.order[next];
      if (source.earthing == models::Earthing::TT && network.boards[at(board)].electrode >= 0) {
        tree.electrode[at(board)] = network.boards[at(board)].electrode;
        tree.conductors[at(board)].add(Conductor::PE);
      }
      for (const int f : leaving[at(board)]) {
        const Submain& submain = network.submains[at(f)];
        tree.source_of[at(submain.to)] = s;
        tree.feeder[at(submain.to)] = f;
        tree.conductors[at(submain.to)] = both(tree.conductors[at(board)], submain.conductors);
        if (submain.conductors.has(Conductor::PE)) tree.electrode[at(submain.to)] = tree.electrode[at(board)];
        tree.order.push_back(submain.to);
      }
    }
  }
  return tree;
}

std::vector<Trouble> check_topology(const Network& network) {
  std::vector<Trouble> troubles;
  find_loops(network, troubles);
  if (!troubles.empty()) return troubles;  // what follows walks trees
  find_parallel_sources(network, troubles);
  find_dead_boards(network, troubles);
  if (!troubles.empty()) return troubles;
  find_electrode_conflicts(network, troubles);
  find_missing_conductors(network, troubles);
  return troubles;
}

}  // namespace sunder::solver
