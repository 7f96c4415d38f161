// SPDX-License-Identifier: Apache-2.0
/// @file
/// What can be told only once all elements are known: states, groups, phases from the sources down,
/// the cables of submains, demands against loads.
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <optional>
#include <utility>

#include "netlists/element_keys.h"
#include "netlists/parts.h"

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
    if (!context.refused && !context.maybe_lost("supply") && !context.maybe_lost("transformer")) {
      context.complaints.error({1, 0, 0}, 1, "the netlist has no supply and no transformer");
    }
    return;
  }
  if (network.states.empty()) {
    if (network.sources.size() == 1) {
      network.states.push_back({"normal", {}, {0}});
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

std::string lacking(ConductorSet wanted, ConductorSet has) {
  std::string text;
  for (const Conductor c : kLive) {
    if (!wanted.has(c) || has.has(c)) continue;
    if (!text.empty()) text += ' ';
    text += models::name(c);
  }
  return text;
}

void refuse_phases(Context& context, const PendingRun& run, models::Origin element, const std::string& what,
                   ConductorSet wanted, ConductorSet has, const std::string& board) {
  const models::Origin place = run.phases != nullptr ? run.phases->at : element;
  context.complaints.error(
      place, run.phases != nullptr ? run.phases->width : 1,
      fmt::format("{} needs {}, but board '{}' has {}", what, lacking(wanted, has), board, models::phases_text(has)));
}

// Works the phases down from the sources and resolves the submains' cables on the way.
class PhaseWalk {
 public:
  explicit PhaseWalk(Context& context)
      : context_(context),
        network_(context.network),
        has_(network_.boards.size()),
        reached_(network_.boards.size(), false),
        leaving_(network_.boards.size()),
        done_(network_.submains.size(), false) {
    for (std::size_t k = 0; k < network_.submains.size(); ++k) {
      if (network_.submains[k].from >= 0) leaving_[at(network_.submains[k].from)].push_back(k);
    }
  }

  void run() {
    for (const models::Source& source : network_.sources) {
      if (source.board < 0) continue;
      ConductorSet set = source.lines;
      set.add(Conductor::N);
      set.add(Conductor::PE);
      reach(source.board, set);
    }
    for (std::size_t k = 0; k < queue_.size(); ++k) {
      for (const std::size_t submain : leaving_[at(queue_[k])]) walk(submain);
    }
    // boards that nothing feeds still get their cables read, so that all errors come out in one run
    const bool any_source = std::any_of(network_.sources.begin(), network_.sources.end(),
                                        [](const models::Source& source) { return source.board >= 0; });
    for (std::size_t k = 0; k < network_.boards.size(); ++k) {
      if (reached_[k]) continue;
      // a feed that could not be read has been complained of already
      if (any_source && !feed_unread(static_cast<int>(k))) {
        context_.complaints.error(network_.boards[k].at, 1,
                                  fmt::format("nothing feeds board '{}'", network_.boards[k].name),
                                  "a supply, a transformer or a submain leads to a board");
      }
    }
    for (std::size_t k = 0; k < network_.submains.size(); ++k) {
      if (!done_[k]) walk(k);
    }
    for (std::size_t k = 0; k < network_.circuits.size(); ++k) check_circuit(k);
  }

 private:
  void reach(int board, ConductorSet set) {
    for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE}) {
      if (set.has(c)) has_[at(board)].add(c);
    }
    if (reached_[at(board)]) return;
    reached_[at(board)] = true;
    queue_.push_back(board);
  }

  // Whether some submain or source names no board or might have been lost.
  [[nodiscard]] bool feed_unread(int board) const {
    if (!context_.lost.empty() || context_.refused) return true;
    const bool submain = std::any_of(network_.submains.begin(), network_.submains.end(),
                                     [&](const models::Submain& s) { return s.to == board && s.from < 0; });
    const bool source = std::any_of(network_.sources.begin(), network_.sources.end(),
                                    [](const models::Source& s) { return s.board < 0; });
    const bool lost_end = std::any_of(network_.submains.begin(), network_.submains.end(),
                                      [](const models::Submain& s) { return s.to < 0; });
    return submain || source || lost_end;
  }

  void walk(std::size_t k) {
    done_[k] = true;
    models::Submain& submain = network_.submains[k];
    const PendingRun& run = context_.submain_runs[k];
    const std::string what = fmt::format("submain '{}'", submain.name);
    ConductorSet has;
    if (submain.from >= 0) has = has_[at(submain.from)];
    bool sound = true;
    if (run.phases != nullptr) {
      const auto set = read_phases(context_, *run.phases, what);
      sound = set.has_value();
      submain.conductors = set.value_or(ConductorSet{});
      if (sound && submain.from >= 0 && reached_[at(submain.from)] && !has.contains(submain.conductors)) {
        refuse_phases(context_, run, submain.at, what, submain.conductors, has, network_.boards[at(submain.from)].name);
        submain.conductors = {};
        sound = false;
      }
    } else {
      submain.conductors = has;
      submain.conductors.add(Conductor::PE);
    }
    if (run.cpc != nullptr && trimmed(run.cpc->text) == "none") {
      submain.conductors.remove(Conductor::PE);
      context_.assume(submain.name, "no protective conductor: nothing along it is taken to need one (Class II)",
                      run.cpc->at);
    }
    // where the conductors are not known, at least the name, size and cpc are read
    const ConductorSet carried = submain.conductors.lines() > 0 ? submain.conductors : ConductorSet{Conductor::L1};
    if (read_cable(context_, run, carried, what, submain.name, false, submain.at, submain.cable)) assume_close(submain);
    if (submain.to >= 0 && submain.from >= 0 && reached_[at(submain.from)]) {
      // after an error pass on all that could be meant, so that one slip is one complaint
      // (the phases; where PE begins and ends is the topology's business)
      ConductorSet phases = sound ? submain.conductors : has;
      phases.add(Conductor::PE);
      reach(submain.to, phases);
    }
  }

  void assume_close(const models::Submain& submain) {
    for (const models::Strand& strand : submain.cable.protective) {
      if (strand.place == models::Place::armour && strand.x <= 0) {
        context_.assume(submain.name, fmt::format("no reactance of the armour of {} is known", submain.name),
                        submain.cable.at);
      }
      if (strand.place != models::Place::separate) continue;
      context_.assume(
          submain.name,
          fmt::format("the protective conductor beside the cable of {} is taken to run close to it, not bunched "
                      "with it: at ambient temperature, k as such",
                      submain.name),
          submain.at);
    }
  }

  void check_circuit(std::size_t k) {
    const models::Circuit& circuit = network_.circuits[k];
    if (circuit.conductors.empty() || !reached_[at(circuit.board)]) return;
    const ConductorSet has = has_[at(circuit.board)];
    if (has.contains(circuit.conductors)) return;
    const std::string& board = network_.boards[at(circuit.board)].name;
    refuse_phases(context_, context_.circuit_runs[k], circuit.at, fmt::format("circuit '{}/{}'", board, circuit.name),
                  circuit.conductors, has, board);
  }

  Context& context_;
  Network& network_;
  std::vector<ConductorSet> has_;
  std::vector<bool> reached_;
  std::vector<std::vector<std::size_t>> leaving_;
  std::vector<bool> done_;
  std::vector<int> queue_;
};

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
  for (const models::Submain& submain : network.submains)
    compare(submain.demand, submain.to, fmt::format("submain '{}'", submain.name));
  for (const models::Source& source : network.sources)
    compare(source.demand, source.board, fmt::format("source '{}'", source.name));
}

// A TT installation is nothing without its electrode.
void check_electrodes(Context& context) {
  const Network& network = context.network;
  if (!network.electrodes.empty() || context.maybe_lost("electrode")) return;
  for (const models::Source& source : network.sources) {
    if (source.earthing != models::Earthing::TT) continue;
    context.complaints.warn(source.at, 1, fmt::format("source '{}' is TT, but no board has an electrode", source.name));
  }
}

}  // namespace

void join_up(Context& context) {
  complete_states(context);
  check_ways(context);
  join_groups(context);
  PhaseWalk(context).run();
  check_demands(context);
  check_electrodes(context);
}

}  // namespace sunder::netlists
