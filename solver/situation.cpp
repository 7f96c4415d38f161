// SPDX-License-Identifier: Apache-2.0
#include "solver/situation.h"

#include <algorithm>
#include <cmath>

namespace sunder::solver {
namespace {

using models::Conductor;
using models::Network;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

Currents currents(const Network& network, const models::Source& source, const ConductorMatrix& net,
                  models::ConductorSet have, Condition condition) {
  Currents all;
  for (const Fault fault : kAllFaults)
    all[static_cast<std::size_t>(fault)] = fault_current(network, source, net, have, condition, fault);
  return all;
}

// The second fault of an IT system by the rule's own form: I = c U / (2 Zs), and c U0 / (2 Z's) where the
// neutral is distributed; the lesser of them in the minimum.
FaultCurrent second_fault(const StateSolution& solution, const models::Source& source, const GridPlace& place,
                          Condition condition) {
  const StateGrid& joined = condition == Condition::maximum ? *solution.joined_maximum : *solution.joined_minimum;
  FaultCurrent current = joined.current(place, Fault::line_earth);
  if (!current.usable()) return current;
  const double c = current.volts / source.U0;
  auto set = [&](double volts, double ohms) {
    current.volts = volts;
    current.ohms = 2 * ohms;
    current.loop *= current.ohms / std::abs(current.loop);
    current.amps = volts / current.ohms;
  };
  const double kappa = current.peak / (std::sqrt(2.0) * current.amps);
  set(c * source.U, current.ohms);
  if (place.have.has(Conductor::N) && condition == Condition::minimum) {
    const double neutral = joined.loop_ohms(place, Conductor::N, Conductor::PE);
    if (c * source.U0 / (2 * neutral) < current.amps) set(c * source.U0, neutral);
  }
  current.peak = kappa * std::sqrt(2.0) * current.amps;
  return current;
}

// Currents at a board and on a run beyond it.
Currents currents_from(const Network& network, const StateSolution& solution, const models::Source& source, int board,
                       const ConductorMatrix& beyond, models::ConductorSet have, Condition condition) {
  if (!solution.tree.grid) {
    const Walk& walk = condition == Condition::maximum ? solution.maximum : solution.minimum;
    return currents(network, source, walk.boards[at(board)] + beyond, have, condition);
  }
  const StateGrid& grid = solution.grid(condition);
  GridPlace place = grid.at_board(board);
  place.beyond = beyond;
  place.have = have;
  Currents all;
  for (const Fault fault : kAllFaults) all[static_cast<std::size_t>(fault)] = grid.current(place, fault);
  if (source.earthing == models::Earthing::IT && solution.joined != nullptr)
    all[static_cast<std::size_t>(Fault::line_earth)] = second_fault(solution, source, place, condition);
  return all;
}

// Inside one of several parallel cables a fault is fed from both of its ends: from the feeding end on, x of
// the way, Z = n x (1 - x/m) of what all together have.
void fill_inner(Situation& s, const StateSolution& solution, int board, const ConductorMatrix& together) {
  const double n = s.in_parallel;
  const double m = n / (n - 1);
  constexpr int kPlaces = 12;
  for (int i = 0; i <= kPlaces; ++i) {
    InnerFault inner;
    inner.fraction = std::min(1.0, m / 2 * i / kPlaces);
    inner.share = 1 - inner.fraction / m;
    inner.least = currents_from(*s.network, solution, *s.source, board, together * (n * inner.fraction * inner.share),
                                s.conductors, Condition::minimum);
    s.inner.push_back(std::move(inner));
  }
  s.far_min = s.inner.back().least;
}

// Conductors that both the board and the run have.
models::ConductorSet carried(models::ConductorSet board, models::ConductorSet run) {
  models::ConductorSet result;
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE})
    if (board.has(c) && run.has(c)) result.add(c);
  return result;
}

void fill_circuit(Situation& s, const StateSolution& solution, int index) {
  const Network& network = *s.network;
  const models::Circuit& circuit = network.circuits[at(index)];
  s.circuit = &circuit;
  s.address = models::address(network, circuit);
  s.at = circuit.at;
  s.device = &circuit.device;
  s.cable = &circuit.cable;
  s.length = circuit.length.value;
  s.in_parallel = circuit.in_parallel;
  s.ring = circuit.ring;
  s.use = circuit.use;
  s.board_index = circuit.board;
  s.path = path_to_circuit(network, solution.tree, index);
  const std::size_t board = at(circuit.board);
  s.conductors = carried(solution.tree.conductors[board], circuit.conductors);
  s.far_min = currents_from(network, solution, *s.source, circuit.board,
                            circuit_matrix(network, circuit, worst_end(network, circuit), Condition::minimum),
                            s.conductors, Condition::minimum);
  s.origin_max = currents_from(network, solution, *s.source, circuit.board, ConductorMatrix::Zero(), s.conductors,
                               Condition::maximum);
  if (circuit.in_parallel > 1 && !circuit.ring)
    fill_inner(s, solution, circuit.board, circuit_matrix(network, circuit, {}, Condition::minimum));
  const Drop own = circuit_drop(network, circuit, *s.source);
  s.drop = solution.loading.drop[board];
  s.drop.share += own.share;
  s.drop.length += own.length;
  if (s.drop.known && !own.known) {
    s.drop.known = false;
    s.drop.needs = own.needs;
    s.drop.why = own.why;
  }
}

void fill_submain(Situation& s, const StateSolution& solution, int index) {
  const Network& network = *s.network;
  const models::Submain& submain = network.submains[at(index)];
  s.submain = &submain;
  s.address = submain.name;
  s.at = submain.at;
  s.device = &submain.device;
  if (!submain.sequence.given) s.cable = &submain.cable;
  s.length = submain.length.value;
  s.in_parallel = submain.in_parallel;
  s.use = models::Use::distribution;
  s.board_index = submain.from;
  s.looped = solution.tree.grid && solution.tree.looped[at(index)];
  s.path = path_to_submain(network, solution.tree, index);
  models::ConductorSet own = submain.conductors;
  if (submain.pen) own.add(Conductor::PE);
  s.conductors = carried(solution.tree.conductors[at(submain.from)], own);
  const ConductorMatrix none = ConductorMatrix::Zero();
  s.far_min = currents_from(network, solution, *s.source, submain.to, none, solution.tree.conductors[at(submain.to)],
                            Condition::minimum);
  if (!s.conductors.has(Conductor::PE)) s.far_min[static_cast<std::size_t>(Fault::line_earth)] = {};
  s.origin_max = currents_from(network, solution, *s.source, submain.from, none, s.conductors, Condition::maximum);
  if (submain.in_parallel > 1 && !submain.sequence.given && !s.looped)
    fill_inner(
        s, solution, submain.from,
        run_matrix(network, submain.cable, submain.length.value, submain.in_parallel, submain.pen, Condition::minimum));
  s.drop = solution.loading.drop[at(submain.to)];
}

void fill_tails(Situation& s, const StateSolution& solution, int index) {
  const Network& network = *s.network;
  const models::Source& source = network.sources[at(index)];
  s.address = source.name;
  s.at = source.tails.present ? source.tails.at : source.at;
  s.device = &source.device;
  if (source.tails.present) s.cable = &source.tails.cable;
  s.length = source.tails.length;
  s.in_parallel = source.tails.in_parallel;
  s.use = models::Use::distribution;
  s.conductors = solution.tree.conductors[at(source.board)];
  // A TT installation's protective conductor starts at its electrode, beyond the tails.
  if (source.earthing == models::Earthing::TT) s.conductors.remove(Conductor::PE);
  if (source.device.present()) s.path.push_back({&source.device, source.name, source.at, -1});
  s.looped = solution.tree.grid && !solution.tree.sole[at(source.board)];
  const ConductorMatrix none = ConductorMatrix::Zero();
  s.far_min = currents_from(network, solution, source, source.board, none, s.conductors, Condition::minimum);
  // In a grid the current at the board stands for the one before the tails.
  s.origin_max = solution.tree.grid
                     ? currents_from(network, solution, source, source.board, none, s.conductors, Condition::maximum)
                     : currents(network, source, none, s.conductors, Condition::maximum);
  s.drop = solution.loading.drop[at(source.board)];
}

void fill_board(Situation& s, const StateSolution& solution, int index) {
  const Network& network = *s.network;
  const models::Board& board = network.boards[at(index)];
  s.address = board.name;
  s.at = board.at;
  s.board_index = index;
  s.device = &board.incomer;
  s.conductors = solution.tree.conductors[at(index)];
  s.path = path_to_board(network, solution.tree, index);
  const ConductorMatrix none = ConductorMatrix::Zero();
  s.origin_max = currents_from(network, solution, *s.source, index, none, s.conductors, Condition::maximum);
  s.far_min = currents_from(network, solution, *s.source, index, none, s.conductors, Condition::minimum);
  if (solution.tree.grid && s.source->earthing == models::Earthing::IT) {
    const StateGrid& grid = solution.grid(Condition::maximum);
    s.first_fault = grid.current(grid.at_board(index), Fault::line_earth);
  }
  s.drop = solution.loading.drop[at(index)];
}

// For the second fault of an IT system: its star points joined to the protective conductors.
void join_isolated(const Network& network, int state, StateSolution& solution) {
  auto isolated = [](const auto& of) { return of.earthing == models::Earthing::IT; };
  const bool any = std::any_of(network.sources.begin(), network.sources.end(), isolated) ||
                   std::any_of(network.transformers.begin(), network.transformers.end(), isolated);
  if (!any) return;
  solution.joined = std::make_unique<Network>(network);
  auto join = [&](auto& of) {
    if (!isolated(of)) return;
    of.earthing = models::Earthing::TN_C_S;
    of.star = {};
  };
  for (models::Source& source : solution.joined->sources) join(source);
  for (models::Transformer& transformer : solution.joined->transformers) join(transformer);
  const StateTree tree = state_tree(*solution.joined, state, true);
  solution.joined_maximum = std::make_unique<StateGrid>(*solution.joined, tree, Condition::maximum);
  solution.joined_minimum = std::make_unique<StateGrid>(*solution.joined, tree, Condition::minimum);
}

template <class Better>
const FaultCurrent* pick(const Currents& currents, FaultList faults, Fault* which, Better better) {
  const FaultCurrent* best = nullptr;
  for (const Fault fault : faults) {
    const FaultCurrent& current = of(currents, fault);
    if (!current.possible) continue;
    if (best == nullptr || (best->known && (!current.known || better(current.amps, best->amps)))) {
      best = &current;
      if (which != nullptr) *which = fault;
    }
  }
  return best;
}

}  // namespace

bool has_origin(const models::Source& source) { return source.tails.present || source.device.present(); }

StateSolution solve_state(const Network& network, int state) {
  StateSolution solution;
  solution.tree = state_tree(network, state);
  if (solution.tree.grid) {
    solution.grid_maximum = std::make_unique<StateGrid>(network, solution.tree, Condition::maximum);
    solution.grid_minimum = std::make_unique<StateGrid>(network, solution.tree, Condition::minimum);
    join_isolated(network, state, solution);
  } else {
    solution.maximum = walk(network, solution.tree, Condition::maximum);
    solution.minimum = walk(network, solution.tree, Condition::minimum);
  }
  solution.loading = load_network(network, solution.tree);
  return solution;
}

bool is_live(const Network& network, const StateSolution& solution, Subject subject) {
  const auto index = at(subject.index);
  switch (subject.kind) {
    case SubjectKind::circuit:
      return solution.tree.live(network.circuits[index].board);
    // Live and feeding: a submain whose far board has a source of its own in this state is open.
    case SubjectKind::submain: {
      const models::Submain& submain = network.submains[index];
      if (!solution.tree.grid) return solution.tree.feeder[at(submain.to)] == subject.index;
      const std::vector<bool>& open = network.states[at(solution.tree.state)].submain_open;
      const bool closed = index >= open.size() || !open[index];
      return closed && solution.tree.live(submain.from) && solution.tree.live(submain.to);
    }
    case SubjectKind::board:
      return solution.tree.live(subject.index);
    case SubjectKind::tails:
      break;
  }
  const std::vector<int>& active = network.states[at(solution.tree.state)].sources;
  return has_origin(network.sources[index]) && std::find(active.begin(), active.end(), subject.index) != active.end();
}

std::vector<Subject> subjects(const Network& network, const StateSolution& solution) {
  std::vector<Subject> all;
  auto add = [&](SubjectKind kind, std::size_t n) {
    for (int i = 0; i < static_cast<int>(n); ++i)
      if (is_live(network, solution, {kind, i})) all.push_back({kind, i});
  };
  add(SubjectKind::circuit, network.circuits.size());
  add(SubjectKind::submain, network.submains.size());
  add(SubjectKind::tails, network.sources.size());
  for (const int b : solution.tree.order) all.push_back({SubjectKind::board, b});
  return all;
}

Situation situation(const Network& network, const StateSolution& solution, Subject subject) {
  Situation s;
  s.network = &network;
  s.tree = &solution.tree;
  s.loading = &solution.loading;
  s.kind = subject.kind;
  s.state = network.states[at(solution.tree.state)].name;
  int source = subject.index;
  if (subject.kind == SubjectKind::circuit) {
    source = solution.tree.source_of[at(network.circuits[at(subject.index)].board)];
  } else if (subject.kind == SubjectKind::submain) {
    source = solution.tree.source_of[at(network.submains[at(subject.index)].from)];
  } else if (subject.kind == SubjectKind::board) {
    source = solution.tree.source_of[at(subject.index)];
  }
  s.source = &network.sources[at(source)];
  const int seen_from = subject.kind == SubjectKind::circuit   ? network.circuits[at(subject.index)].board
                        : subject.kind == SubjectKind::submain ? network.submains[at(subject.index)].from
                        : subject.kind == SubjectKind::board   ? subject.index
                                                               : -1;
  if (seen_from >= 0) s.source = &system_of(network, solution.tree, seen_from);
  s.motors = solution.loading.motors[at(source)];
  s.motors_unknown = solution.loading.motors_unknown[at(source)];
  switch (subject.kind) {
    case SubjectKind::circuit:
      fill_circuit(s, solution, subject.index);
      break;
    case SubjectKind::submain:
      fill_submain(s, solution, subject.index);
      break;
    case SubjectKind::tails:
      fill_tails(s, solution, subject.index);
      break;
    default:
      fill_board(s, solution, subject.index);
      break;
  }
  if (s.board_index >= 0) s.board = &network.boards[at(s.board_index)];
  if (solution.tree.grid) {
    const int where = s.board_index >= 0 ? s.board_index : s.source->board;
    s.stages = solution.grid(Condition::minimum).stages(where);
  }
  return s;
}

const FaultCurrent* greatest(const Currents& currents, FaultList faults, Fault* which) {
  return pick(currents, faults, which, [](double a, double b) { return a > b; });
}

const FaultCurrent* least(const Currents& currents, FaultList faults, Fault* which) {
  return pick(currents, faults, which, [](double a, double b) { return a < b; });
}

namespace {
// 240 V systems are of the nominal voltage 230 V (IEC 60038): 240/230 and a hair.
constexpr double kSameNominal = 1.045;
}  // namespace

TimeLimit time_limit(const Situation& s) {
  const models::RuleSet& rules = s.network->rules;
  const bool tt = s.source->earthing == models::Earthing::TT;
  // The second fault of an IT system is cleared in the times of a TN one (411.6.4).
  const bool as_tn = s.source->earthing == models::Earthing::IT || s.source->earthing == models::Earthing::TN_C;
  const models::Earthing as_listed = as_tn ? models::Earthing::TN_S : s.source->earthing;
  TimeLimit limit;
  limit.assumed_use = s.kind == SubjectKind::circuit && s.use == models::Use::unknown;
  // A switch or residual device without overcurrent release does not rate a circuit.
  const Protector* by = overcurrent_protector(s.path);
  const double In = by != nullptr ? by->device->In : 0;
  const bool sockets = s.use == models::Use::sockets || s.use == models::Use::unknown;
  const bool final_circuit = s.kind == SubjectKind::circuit && s.use != models::Use::distribution &&
                             In <= (sockets ? rules.sockets_to : rules.fixed_to);
  limit.distribution = !final_circuit;
  limit.seconds = tt ? rules.distribution_tt : rules.distribution_tn;
  if (!final_circuit) return limit;
  for (const models::TimeRow& row : rules.times)
    if (row.earthing == as_listed && s.source->U0 <= row.U0_to * kSameNominal) {
      limit.seconds = row.final_circuit;
      break;
    }
  return limit;
}

}  // namespace sunder::solver
