// SPDX-License-Identifier: Apache-2.0
#include "solver/topology.h"

#include <fmt/format.h>

#include <algorithm>
#include <boost/graph/adjacency_list.hpp>
#include <boost/graph/biconnected_components.hpp>
#include <cmath>
#include <map>

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Source;
using models::Submain;

using Graph = boost::adjacency_list<boost::vecS, boost::vecS, boost::undirectedS, boost::no_property,
                                    boost::property<boost::edge_index_t, std::size_t>>;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

ConductorSet supplied(const Source& source) {
  ConductorSet set = source.lines;
  if (source.high_voltage) return set;
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

// What joins two boards.
struct Edge {
  enum class Kind { submain, transformer, link };
  Kind kind = Kind::submain;
  int index = 0;
  int from = -1, to = -1;
};

bool open_in(const std::vector<bool>& open, std::size_t i) { return i < open.size() && open[i]; }

// Everything that is closed in a state.
std::vector<Edge> closed_edges(const Network& network, const models::SupplyState& state) {
  std::vector<Edge> edges;
  for (std::size_t i = 0; i < network.submains.size(); ++i)
    if (!open_in(state.submain_open, i))
      edges.push_back({Edge::Kind::submain, static_cast<int>(i), network.submains[i].from, network.submains[i].to});
  for (std::size_t i = 0; i < network.transformers.size(); ++i)
    if (!open_in(state.transformer_open, i))
      edges.push_back(
          {Edge::Kind::transformer, static_cast<int>(i), network.transformers[i].from, network.transformers[i].to});
  for (std::size_t i = 0; i < network.links.size(); ++i) {
    const bool closed = i < state.link_closed.size() ? state.link_closed[i] : network.links[i].closed;
    if (closed) edges.push_back({Edge::Kind::link, static_cast<int>(i), network.links[i].from, network.links[i].to});
  }
  return edges;
}

// Boards that nothing else can feed are fed through whatever leaves them, against its direction.
std::vector<bool> fed_from_below(const Network& network) {
  std::vector<bool> orphan(network.boards.size(), true);
  for (const Source& source : network.sources) orphan[at(source.board)] = false;
  for (const Submain& submain : network.submains) orphan[at(submain.to)] = false;
  for (const models::Transformer& transformer : network.transformers) orphan[at(transformer.to)] = false;
  for (const models::Link& link : network.links) orphan[at(link.from)] = orphan[at(link.to)] = false;
  return orphan;
}

// Live boards of a state, in the order in which they are reached: a submain or transformer feeds from
// its `from` end, a link from either; one that leaves a dead board is open (an interlocked changeover).
std::vector<int> reach(const Network& network, const std::vector<int>& sources, std::vector<Edge>& edges) {
  const std::vector<bool> orphan = fed_from_below(network);
  std::vector<std::vector<int>> at_board(network.boards.size());
  for (std::size_t e = 0; e < edges.size(); ++e) {
    at_board[at(edges[e].from)].push_back(static_cast<int>(e));
    at_board[at(edges[e].to)].push_back(static_cast<int>(e));
  }
  std::vector<int> order;
  std::vector<bool> live(network.boards.size());
  auto enter = [&](int board) {
    if (live[at(board)]) return;
    live[at(board)] = true;
    order.push_back(board);
  };
  for (const int s : sources) {
    std::size_t next = order.size();
    enter(network.sources[at(s)].board);
    for (; next < order.size(); ++next)
      for (const int e : at_board[at(order[next])]) {
        const Edge& edge = edges[at(e)];
        if (edge.from == order[next]) {
          enter(edge.to);
        } else if (edge.kind == Edge::Kind::link || (edge.kind == Edge::Kind::submain && orphan[at(edge.from)])) {
          enter(edge.from);
        }
      }
  }
  edges.erase(
      std::remove_if(edges.begin(), edges.end(), [&](const Edge& e) { return !live[at(e.from)] || !live[at(e.to)]; }),
      edges.end());
  return order;
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

namespace {

// The boards that a transformer feeds see it as their source.
Source stand_in(const models::Transformer& t) {
  Source source;
  source.name = t.name;
  source.at = t.at;
  source.transformer = true;
  source.board = t.to;
  source.U0 = t.U0;
  source.U = t.U;
  source.high_voltage = t.U > 1000;
  source.earthing = t.earthing;
  source.own_transformer = t.own_transformer;
  source.rating = t.rating;
  source.uk = t.uk;
  source.losses = t.losses;
  source.x_over_r = t.x_over_r;
  source.secondary = t.secondary;
  source.star = t.star;
  source.device = t.device;
  source.tails = t.tails;
  return source;
}

// Whether cables hung on declared sources are all there is: then paths add up and nothing need be solved.
bool needs_grid(const Network& network, const StateTree& tree, const std::vector<Edge>& edges) {
  using models::Earthing;
  if (network.method == models::Method::iec60909) return true;
  const std::vector<int>& sources = network.states[at(tree.state)].sources;
  std::vector<int> feeds(network.boards.size(), 0);
  for (const int s : sources) {
    const Source& source = network.sources[at(s)];
    const bool plain = !source.generator.present && !source.inverter.present && !source.high_voltage &&
                       !source.split_phase && source.z0_known && !source.maximum.sequence.given &&
                       !source.minimum.sequence.given && source.earthing != Earthing::IT &&
                       source.earthing != Earthing::TN_C &&
                       (!source.transformer || source.star.kind == models::StarPoint::Kind::solid);
    if (!plain || ++feeds[at(source.board)] > 1) return true;
  }
  for (const Edge& edge : edges) {
    if (edge.kind != Edge::Kind::submain || ++feeds[at(edge.to)] > 1) return true;
    const Submain& submain = network.submains[at(edge.index)];
    if (submain.pen || submain.sequence.given) return true;
  }
  auto live = [&](int board) { return board >= 0 && tree.live(board); };
  for (const models::Motor& motor : network.motors)
    if (live(motor.board >= 0 ? motor.board : network.circuits[at(motor.circuit)].board)) return true;
  for (const models::Bond& bond : network.bonds)
    if (live(bond.from) || live(bond.to)) return true;
  for (const models::Circuit& circuit : network.circuits)
    if (circuit.pen) return true;
  for (std::size_t b = 0; b < network.boards.size(); ++b) {
    if (!tree.live(static_cast<int>(b))) continue;
    if (network.boards[b].n_pe_link) return true;
    if (network.boards[b].electrode < 0) continue;
    const Source& source = network.sources[at(tree.source_of[b])];
    const int f = tree.feeder[b];
    const bool carried = f >= 0 && network.submains[at(f)].conductors.has(Conductor::PE);
    if (source.earthing != Earthing::TT) return true;
    if (carried && tree.electrode[at(network.submains[at(f)].from)] >= 0) return true;  // two earths on one PE
  }
  return false;
}

// Boards of the forest, outward from each source.
void hang(const Network& network, const std::vector<int>& sources, const std::vector<Edge>& edges, StateTree& tree) {
  std::vector<std::vector<int>> leaving(network.boards.size());
  for (const Edge& edge : edges)
    if (edge.kind == Edge::Kind::submain) leaving[at(edge.from)].push_back(edge.index);
  std::vector<bool> fed(network.boards.size());
  for (const int s : sources) {
    const Source& source = network.sources[at(s)];
    const int root = source.board;
    if (fed[at(root)]) continue;
    fed[at(root)] = true;
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
        if (fed[at(submain.to)]) continue;
        fed[at(submain.to)] = true;
        tree.source_of[at(submain.to)] = s;
        tree.feeder[at(submain.to)] = f;
        tree.conductors[at(submain.to)] = both(tree.conductors[at(board)], submain.conductors);
        if (submain.conductors.has(Conductor::PE)) tree.electrode[at(submain.to)] = tree.electrode[at(board)];
        tree.order.push_back(submain.to);
      }
    }
  }
}

// What each board has and who feeds it, where edges form any graph: voltage and earthing from the
// nearest source or transformer, conductors from all sides.
void spread(const Network& network, const std::vector<int>& sources, const std::vector<int>& order,
            const std::vector<Edge>& edges, StateTree& tree) {
  tree.order = order;
  for (const models::Transformer& t : network.transformers) tree.stand_ins.push_back(stand_in(t));
  std::vector<std::vector<int>> around(network.boards.size());
  for (std::size_t e = 0; e < edges.size(); ++e) {
    around[at(edges[e].from)].push_back(static_cast<int>(e));
    around[at(edges[e].to)].push_back(static_cast<int>(e));
  }
  std::vector<int> queue;
  for (const int s : sources) {
    const int board = network.sources[at(s)].board;
    if (tree.source_of[at(board)] < 0) queue.push_back(board);
    if (tree.source_of[at(board)] < 0) tree.source_of[at(board)] = s;
  }
  for (std::size_t i = 0; i < queue.size(); ++i)
    for (const int e : around[at(queue[i])]) {
      const Edge& edge = edges[at(e)];
      const int other = edge.from == queue[i] ? edge.to : edge.from;
      if (tree.source_of[at(other)] >= 0) continue;
      // A primary board has the voltage of what feeds it, not that of the secondary.
      if (edge.kind == Edge::Kind::transformer && other == edge.from) continue;
      tree.source_of[at(other)] = tree.source_of[at(queue[i])];
      tree.stand_in[at(other)] = edge.kind == Edge::Kind::transformer ? edge.index : tree.stand_in[at(queue[i])];
      queue.push_back(other);
    }
  for (const int s : sources) {
    const Source& source = network.sources[at(s)];
    for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE})
      if (supplied(source).has(c)) tree.conductors[at(source.board)].add(c);
  }
  for (const int b : order) {
    if (network.boards[at(b)].electrode >= 0) tree.conductors[at(b)].add(Conductor::PE);
    if (network.boards[at(b)].n_pe_link) tree.conductors[at(b)].add(Conductor::PE);
  }
  for (const models::Bond& bond : network.bonds)
    for (const int b : {bond.from, bond.to})
      if (b >= 0) tree.conductors[at(b)].add(Conductor::PE);
  for (bool changed = true; changed;) {
    changed = false;
    auto pass = [&](ConductorSet carried, int from, int to) {
      ConductorSet more = tree.conductors[at(to)];
      for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE})
        if (carried.has(c) && tree.conductors[at(from)].has(c)) more.add(c);
      if (more == tree.conductors[at(to)]) return;
      tree.conductors[at(to)] = more;
      changed = true;
    };
    for (const Edge& edge : edges) {
      if (edge.kind == Edge::Kind::transformer) {
        const models::Transformer& t = network.transformers[at(edge.index)];
        Source secondary = tree.stand_ins[at(edge.index)];
        ConductorSet all = supplied(secondary);
        if (t.secondary_winding != models::Winding::star_earthed &&
            t.secondary_winding != models::Winding::zigzag_earthed)
          all.remove(Conductor::N);
        ConductorSet more = tree.conductors[at(edge.to)];
        for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE})
          if (all.has(c)) more.add(c);
        changed = changed || more != tree.conductors[at(edge.to)];
        tree.conductors[at(edge.to)] = more;
        continue;
      }
      ConductorSet carried = edge.kind == Edge::Kind::submain ? network.submains[at(edge.index)].conductors
                                                              : network.links[at(edge.index)].conductors;
      if (edge.kind == Edge::Kind::link) carried.add(Conductor::PE);
      if (edge.kind == Edge::Kind::submain && network.submains[at(edge.index)].pen) carried.add(Conductor::PE);
      pass(carried, edge.from, edge.to);
      pass(carried, edge.to, edge.from);
    }
  }
}

// The electrode that earths each protective conductor: the nearest along conductors that carry it.
void find_electrodes(const Network& network, const std::vector<int>& order, const std::vector<Edge>& edges,
                     StateTree& tree) {
  std::vector<int> queue;
  for (const int b : order)
    if (network.boards[at(b)].electrode >= 0) {
      tree.electrode[at(b)] = network.boards[at(b)].electrode;
      queue.push_back(b);
    }
  std::vector<std::vector<int>> around(network.boards.size());
  for (std::size_t e = 0; e < edges.size(); ++e)
    for (const int end : {edges[e].from, edges[e].to}) around[at(end)].push_back(static_cast<int>(e));
  for (std::size_t i = 0; i < queue.size(); ++i)
    for (const int e : around[at(queue[i])]) {
      const Edge& edge = edges[at(e)];
      if (edge.kind == Edge::Kind::transformer) continue;
      const Submain* submain = edge.kind == Edge::Kind::submain ? &network.submains[at(edge.index)] : nullptr;
      if (submain != nullptr && !submain->pen && !submain->conductors.has(Conductor::PE)) continue;
      const int other = edge.from == queue[i] ? edge.to : edge.from;
      if (tree.electrode[at(other)] >= 0) continue;
      tree.electrode[at(other)] = tree.electrode[at(queue[i])];
      queue.push_back(other);
    }
}

// Blocks and cut vertices, seen from the sources: a board behind a bridge is fed through it alone, a
// board of a larger block hangs with the whole block on one board above or on the sources themselves.
void find_ways(const Network& network, const std::vector<int>& sources, const std::vector<Edge>& edges,
               StateTree& tree) {
  const std::size_t n = network.boards.size();
  std::map<std::pair<int, int>, std::vector<int>> between;  // boards (n: the sources) to edges; -1: a source
  for (std::size_t e = 0; e < edges.size(); ++e)
    between[std::minmax(edges[e].from, edges[e].to)].push_back(static_cast<int>(e));
  for (const int s : sources) between[{network.sources[at(s)].board, static_cast<int>(n)}].push_back(-1);
  Graph graph(n + 1);
  std::vector<const std::vector<int>*> of;
  std::vector<std::pair<int, int>> ends;
  for (const auto& [pair, list] : between) {
    boost::add_edge(at(pair.first), at(pair.second), of.size(), graph);
    of.push_back(&list);
    ends.push_back(pair);
  }
  std::vector<std::size_t> block(of.size());
  const std::size_t blocks = boost::biconnected_components(
      graph, boost::make_iterator_property_map(block.begin(), boost::get(boost::edge_index, graph)));
  std::vector<std::vector<std::size_t>> members(blocks);
  for (std::size_t e = 0; e < of.size(); ++e) members[block[e]].push_back(e);
  std::vector<std::vector<std::size_t>> at_vertex(n + 1);
  for (std::size_t e = 0; e < of.size(); ++e) {
    at_vertex[at(ends[e].first)].push_back(e);
    at_vertex[at(ends[e].second)].push_back(e);
  }
  std::vector<bool> entered(blocks);
  std::vector<int> queue{static_cast<int>(n)};
  std::vector<bool> seen(n + 1);
  seen[n] = true;
  for (std::size_t i = 0; i < queue.size(); ++i)
    for (const std::size_t e : at_vertex[at(queue[i])]) {
      const std::size_t b = block[e];
      if (entered[b]) continue;
      entered[b] = true;
      const bool bridge = members[b].size() == 1 && of[members[b].front()]->size() == 1;
      for (const std::size_t member : members[b]) {
        for (const int edge : *of[member])
          if (!bridge && edge >= 0 && edges[at(edge)].kind == Edge::Kind::submain)
            tree.looped[at(edges[at(edge)].index)] = true;
        for (const int vertex : {ends[member].first, ends[member].second}) {
          if (seen[at(vertex)]) continue;
          seen[at(vertex)] = true;
          queue.push_back(vertex);
          tree.above[at(vertex)] = queue[i] == static_cast<int>(n) ? -1 : queue[i];
          const int edge = of[member]->front();
          if (bridge && edge < 0) tree.sole[at(vertex)] = true;
          if (!bridge || edge < 0) continue;
          const Edge& through = edges[at(edge)];
          if (through.kind == Edge::Kind::submain) tree.feeder[at(vertex)] = through.index;
          if (through.kind == Edge::Kind::transformer) tree.transformer[at(vertex)] = through.index;
          if (through.kind == Edge::Kind::link) tree.link[at(vertex)] = through.index;
        }
      }
    }
}

}  // namespace

std::vector<int> live_boards(const Network& network, int state) {
  std::vector<Edge> edges = closed_edges(network, network.states[at(state)]);
  return reach(network, network.states[at(state)].sources, edges);
}

const Source& system_of(const Network& network, const StateTree& tree, int board) {
  const int own = tree.stand_in.empty() ? -1 : tree.stand_in[at(board)];
  return own >= 0 ? tree.stand_ins[at(own)] : network.sources[at(tree.source_of[at(board)])];
}

std::vector<int> feeders_above(const Network& network, const StateTree& tree, int board) {
  std::vector<int> submains;
  while (board >= 0) {
    const int feeder = tree.feeder[at(board)];
    if (feeder >= 0) submains.push_back(feeder);
    if (tree.grid) {
      board = tree.transformer[at(board)] >= 0 ? -1 : tree.above[at(board)];
    } else {
      board = feeder < 0 ? -1 : network.submains[at(feeder)].from;
    }
  }
  return submains;
}

bool high_voltage(const Network& network, const StateTree& tree, int board) {
  return system_of(network, tree, board).high_voltage;
}

StateTree state_tree(const Network& network, int state, bool as_grid) {
  StateTree tree;
  tree.state = state;
  const std::size_t n = network.boards.size();
  auto clear = [&] {
    tree.source_of.assign(n, -1);
    tree.feeder.assign(n, -1);
    tree.electrode.assign(n, -1);
    tree.conductors.assign(n, {});
    tree.order.clear();
    tree.order.reserve(n);
  };
  clear();
  const models::SupplyState& of = network.states[at(state)];
  std::vector<Edge> edges = closed_edges(network, of);
  const std::vector<int> order = reach(network, of.sources, edges);
  hang(network, of.sources, edges, tree);
  tree.grid = as_grid || tree.order.size() != order.size() || needs_grid(network, tree, edges);
  if (!tree.grid) return tree;
  clear();
  tree.stand_in.assign(n, -1);
  tree.above.assign(n + 1, -1);
  tree.transformer.assign(n + 1, -1);
  tree.link.assign(n + 1, -1);
  tree.sole.assign(n + 1, false);
  tree.looped.assign(network.submains.size(), false);
  spread(network, of.sources, order, edges, tree);
  find_electrodes(network, order, edges, tree);
  find_ways(network, of.sources, edges, tree);
  return tree;
}

}  // namespace sunder::solver
