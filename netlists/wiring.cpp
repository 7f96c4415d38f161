// SPDX-License-Identifier: Apache-2.0
/// @file
/// What can be told only once all elements are known: states, groups, demands against loads, electrodes.
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <utility>

#include "netlists/parts.h"
#include "netlists/source_keys.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Quantity;

constexpr std::array kLive = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N};

std::size_t at(int handle) noexcept { return static_cast<std::size_t>(handle); }

// Without a state the one source is always connected; several need to be told apart.
void complete_states(Context& context) {
  Network& network = context.network;
  if (network.sources.empty()) {
    const std::array kinds = {"supply", "transformer", "generator", "inverter"};
    const bool lost =
        std::any_of(kinds.begin(), kinds.end(), [&](const char* kind) { return context.maybe_lost(kind); });
    if (!context.refused && !lost) {
      context.complaints.error({1, 0, 0}, 1, "the netlist has no supply and no transformer");
    }
    return;
  }
  if (network.states.empty()) {
    if (network.sources.size() == 1) {
      models::SupplyState normal = usual_state(network);
      normal.name = "normal";
      normal.sources = {0};
      network.states.push_back(std::move(normal));
    } else if (!context.states_declared && !context.maybe_lost("state")) {
      context.complaints.error(
          network.sources[1].at, 1,
          fmt::format("{} sources need states that say which are connected together", network.sources.size()),
          fmt::format("such as [state.normal] with sources = [\"{}\"]", network.sources[0].name));
      context.complaints.note(network.sources[0].at, "the first source is declared here");
    }
  }
}

// A way is a circuit of the board or a submain that leaves it.
void join_groups(Context& context) {
  Network& network = context.network;
  for (const PendingGroup& pending : context.groups) {
    if (pending.ways == nullptr) continue;
    const models::Board& board = network.boards[at(pending.board)];
    models::Group& group = network.boards[at(pending.board)].groups[at(pending.group)];
    for (const Value& way : pending.ways->items) {
      if (way.form != Value::Form::text) {
        context.complaints.error(
            way.at, way.width,
            fmt::format("a way of group '{}' is {}; a name is expected", group.name, word(way.form)));
        continue;
      }
      int* slot = nullptr;
      const auto circuit = context.circuits.find(fmt::format("{}/{}", board.name, way.text));
      if (circuit != context.circuits.end() && at(circuit->second.handle) < network.circuits.size()) {
        slot = &network.circuits[at(circuit->second.handle)].group;
      } else if (const auto element = context.elements.find(way.text);
                 element != context.elements.end() && element->second.kind == "submain" &&
                 at(element->second.handle) < network.submains.size() &&
                 network.submains[at(element->second.handle)].from == pending.board) {
        slot = &network.submains[at(element->second.handle)].group;
      }
      if (slot == nullptr) {
        if (context.refused || context.maybe_lost(way.text)) continue;
        std::vector<std::string_view> names;
        if (!context.complaints.full()) {
          for (const models::Circuit& c : network.circuits) {
            if (c.board == pending.board) names.push_back(c.name);
          }
          for (const models::Submain& s : network.submains) {
            if (s.from == pending.board) names.push_back(s.name);
          }
        }
        context.complaints.error(
            way.at, way.width,
            fmt::format("group '{}' names way '{}', which board '{}' does not have", group.name, way.text, board.name),
            did_you_mean(context, way.text, names));
        continue;
      }
      if (*slot >= 0) {
        context.complaints.error(
            way.at, way.width,
            fmt::format("way '{}' of board '{}' is in two groups or twice in one", way.text, board.name));
        context.complaints.note(board.groups[at(*slot)].at, "the other mention is in this group");
        continue;
      }
      *slot = pending.group;
      group.ways.push_back(way.text);
    }
  }
}

// A circuit and a submain that leave one board under one name could not be told apart.
void check_ways(Context& context) {
  for (const models::Submain& submain : context.network.submains) {
    if (submain.from < 0) continue;
    const std::string& board = context.network.boards[at(submain.from)].name;
    const auto circuit = context.circuits.find(fmt::format("{}/{}", board, submain.name));
    if (circuit == context.circuits.end()) continue;
    context.complaints.error(submain.at, 1,
                             fmt::format("board '{}' has two ways of the name '{}'", board, submain.name));
    context.complaints.note(circuit->second.at, "the circuit is declared here");
  }
}

// What a board's ways take, line by line.
struct BoardLoad {
  double largest = 0;           // [A]
  std::array<double, 3> sum{};  // [A] a line
  bool complete = true;         // every way tells its current
  int n_ways = 0;
};

void add_load(BoardLoad& load, ConductorSet conductors, const models::Sourced<double>& current) {
  ++load.n_ways;
  if (!current) {
    load.complete = false;
    return;
  }
  load.largest = std::max(load.largest, current.value);
  for (std::size_t line = 0; line < load.sum.size(); ++line) {
    if (conductors.has(kLive[line])) load.sum[line] += current.value;
  }
}

void check_demands(Context& context) {
  if (context.complaints.any_error()) return;  // a load may be missing for that reason
  const Network& network = context.network;
  std::vector<BoardLoad> loads(network.boards.size());
  for (const models::Circuit& circuit : network.circuits) {
    add_load(loads[at(circuit.board)], circuit.conductors, circuit.load);
  }
  for (const models::Submain& submain : network.submains) {
    if (submain.from >= 0) add_load(loads[at(submain.from)], submain.conductors, submain.demand);
  }
  const auto compare = [&](const models::Sourced<double>& declared, int handle, const std::string& what) {
    if (!declared || handle < 0) return;
    constexpr double kSlack = 1e-9;
    const BoardLoad& load = loads[at(handle)];
    const std::string& board = network.boards[at(handle)].name;
    const double demand = declared.value;
    const double sum = *std::max_element(load.sum.begin(), load.sum.end());
    if (demand < load.largest * (1 - kSlack)) {
      context.complaints.warn(declared.at, 1,
                              fmt::format("demand of {} is {}, below the largest load of board '{}', {}", what,
                                          models::format_quantity(demand, Quantity::current), board,
                                          models::format_quantity(load.largest, Quantity::current)));
    } else if (load.complete && load.n_ways > 0 && demand > sum * (1 + kSlack)) {
      context.complaints.warn(
          declared.at, 1,
          fmt::format("demand of {} is {}, above the sum of the loads of board '{}', {} in one line", what,
                      models::format_quantity(demand, Quantity::current), board,
                      models::format_quantity(sum, Quantity::current)));
    }
  };
  // of a board with several feeds, each has a share that is not known here
  std::vector<int> feeds(network.boards.size(), 0);
  const auto count = [&](int board) {
    if (board >= 0) ++feeds[at(board)];
  };
  for (const models::Submain& submain : network.submains) count(submain.to);
  for (const models::Transformer& transformer : network.transformers) count(transformer.to);
  for (const models::Link& link : network.links) {
    count(link.from);
    count(link.to);
  }
  const auto alone = [&](int board) { return board >= 0 && feeds[at(board)] == 1; };
  for (const models::Submain& submain : network.submains) {
    if (alone(submain.to)) compare(submain.demand, submain.to, fmt::format("submain '{}'", submain.name));
  }
  for (const models::Transformer& transformer : network.transformers) {
    if (alone(transformer.to))
      compare(transformer.demand, transformer.to, fmt::format("transformer '{}'", transformer.name));
  }
  for (const models::Source& source : network.sources)
    compare(source.demand, source.board, fmt::format("source '{}'", source.name));
}

// A TT or IT installation is nothing without its electrode, or another way to earth.
void check_electrodes(Context& context) {
  const Network& network = context.network;
  const bool bonded =
      std::any_of(network.bonds.begin(), network.bonds.end(), [](const models::Bond& bond) { return bond.to < 0; });
  if (!network.electrodes.empty() || bonded || context.maybe_lost("electrode")) return;
  const auto own_earth = [](models::Earthing earthing) {
    return earthing == models::Earthing::TT || earthing == models::Earthing::IT;
  };
  for (const models::Source& source : network.sources) {
    if (!own_earth(source.earthing) || source.high_voltage) continue;
    context.complaints.warn(
        source.at, 1,
        fmt::format("source '{}' is {}, but no board has an electrode", source.name, models::word(source.earthing)));
  }
  for (const models::Transformer& transformer : network.transformers) {
    if (!own_earth(transformer.earthing) || transformer.U > kLowVoltage) continue;
    context.complaints.warn(transformer.at, 1,
                            fmt::format("transformer '{}' is {}, but no board has an electrode", transformer.name,
                                        models::word(transformer.earthing)));
  }
}

// A combined conductor must not break easily: IEC 60364-5-54, 543.4.1 (from memory), 10 mm2 of copper or 16 mm2
// of aluminium.
void check_pens(Context& context) {
  auto check = [&](const models::Cable& cable, bool pen, const std::string& what, models::Origin at) {
    if (!pen || !cable.neutral) return;
    const bool copper = cable.neutral->material == models::Material::copper;
    const double least = copper ? 10e-6 : 16e-6;  // [m2]
    if (cable.neutral->area >= least * (1 - 1e-9)) return;
    context.complaints.warn(
        at, 1,
        fmt::format("the PEN of {} has {}", what, models::format_quantity(cable.neutral->area, models::Quantity::area)),
        copper ? "at least 10 mm2 of copper is demanded (IEC 60364-5-54, 543.4)"
               : "at least 16 mm2 of aluminium is demanded (IEC 60364-5-54, 543.4)");
  };
  for (const models::Submain& s : context.network.submains)
    check(s.cable, s.pen, fmt::format("submain '{}'", s.name), s.at);
  for (const models::Circuit& c : context.network.circuits)
    check(c.cable, c.pen, fmt::format("circuit '{}'", models::address(context.network, c)), c.at);
}

}  // namespace

void join_up(Context& context) {
  complete_states(context);
  check_ways(context);
  join_groups(context);
  walk_phases(context);
  check_demands(context);
  check_electrodes(context);
  check_pens(context);
}

}  // namespace sunder::netlists
