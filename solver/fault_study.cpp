// SPDX-License-Identifier: Apache-2.0
#include "solver/fault_study.h"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <memory>
#include <numbers>

#include "models/registry.h"
#include "solver/iec60909.h"
#include "solver/state_grid.h"
#include "solver/study.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::Network;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

// A place as the user names it.
struct Place {
  enum class Kind { board, circuit, submain };
  Kind kind = Kind::board;
  int index = -1;
  double fraction = 1;  ///< along a circuit or submain
  bool given = false;   ///< it was said where along it
  int spur = -1;        ///< of a circuit's ring
  std::string text;
};

using Found = std::variant<Place, std::string>;

std::string unknown_place(const Network& network, const std::string& name) {
  std::vector<std::string> all;
  for (const models::Board& board : network.boards) all.push_back(board.name);
  for (const models::Submain& submain : network.submains) all.push_back(submain.name);
  for (const models::Circuit& circuit : network.circuits) all.push_back(models::address(network, circuit));
  const std::vector<std::string_view> views(all.begin(), all.end());
  const std::string_view near = models::nearest_name(name, views);
  for (const models::Transformer& t : network.transformers)
    if (t.name == name)
      return fmt::format("'{}' is a transformer; its terminals are boards '{}' and '{}'", name,
                         network.boards[at(t.from)].name, network.boards[at(t.to)].name);
  for (const models::Source& source : network.sources)
    if (source.name == name)
      return fmt::format("'{}' is a source; its terminals are board '{}'", name, network.boards[at(source.board)].name);
  for (const models::Link& link : network.links)
    if (link.name == name)
      return fmt::format("'{}' is a link; it joins boards '{}' and '{}'", name, network.boards[at(link.from)].name,
                         network.boards[at(link.to)].name);
  for (const models::Motor& motor : network.motors)
    if (motor.name == name)
      return fmt::format("'{}' is a motor; it stands at '{}'", name,
                         motor.board >= 0 ? network.boards[at(motor.board)].name
                                          : models::address(network, network.circuits[at(motor.circuit)]));
  std::string sentence = fmt::format("there is no board, submain or circuit '{}'", name);
  if (!near.empty()) sentence += fmt::format("; did you mean '{}'?", near);
  return sentence;
}

// "@40%" or "@32 m" as a fraction of the length.
std::variant<double, std::string> fraction_of(const std::string& text, double length, const std::string& what) {
  const bool percent = text.find('%') != std::string::npos;
  const auto value = models::parse_quantity(text, percent ? models::Quantity::percentage : models::Quantity::length);
  if (const auto* error = std::get_if<models::UnitError>(&value))
    return fmt::format("'@{}' is no place along {}: {}; such as @40% or @32 m", text, what, error->message);
  const double fraction = percent ? std::get<double>(value) : std::get<double>(value) / length;
  if (!(fraction >= 0) || fraction > 1 + 1e-9)
    return fmt::format("'@{}' lies beyond {}, which is {} long", text, what,
                       models::format_quantity(length, models::Quantity::length));
  return std::min(fraction, 1.0);
}

Found find_place(const Network& network, const std::string& text) {
  Place place;
  place.text = text;
  const std::size_t mark = text.find('@');
  const std::string name = text.substr(0, mark);
  double length = 0;
  for (std::size_t b = 0; b < network.boards.size(); ++b)
    if (network.boards[b].name == name) place.index = static_cast<int>(b);
  if (place.index >= 0) {
    if (mark != std::string::npos)
      return fmt::format("'{}' is a board; a place along it has no meaning, only along a submain or circuit", name);
    return place;
  }
  for (std::size_t s = 0; s < network.submains.size(); ++s)
    if (network.submains[s].name == name) {
      place.kind = Place::Kind::submain;
      place.index = static_cast<int>(s);
      length = network.submains[s].length.value;
    }
  for (std::size_t c = 0; c < network.circuits.size(); ++c) {
    const std::string address = models::address(network, network.circuits[c]);
    const bool spur = name.rfind(address + "/spur", 0) == 0;
    if (name != address && !spur) continue;
    const models::Circuit& circuit = network.circuits[c];
    if (spur) {
      const std::string number = name.substr(address.size() + 5);
      const bool digits =
          !number.empty() && number.size() < 4 && number.find_first_not_of("0123456789") == std::string::npos;
      const int k = digits ? std::stoi(number) : 0;
      if (k < 1 || k > static_cast<int>(circuit.spurs.size()))
        return fmt::format("circuit '{}' has {} spurs", address, circuit.spurs.size());
      place.spur = k - 1;
    }
    place.kind = Place::Kind::circuit;
    place.index = static_cast<int>(c);
    length = circuit.length.value;
  }
  if (place.index < 0) return unknown_place(network, name);
  if (mark == std::string::npos) return place;
  if (place.spur >= 0) return fmt::format("'{}' is the end of a spur; leave out the place along it", name);
  const auto fraction = fraction_of(text.substr(mark + 1), length, "'" + name + "'");
  if (const auto* why = std::get_if<std::string>(&fraction)) return *why;
  place.fraction = std::get<double>(fraction);
  place.given = true;
  return place;
}

// A place with the currents that flow into the fault there.
struct Spot {
  const Place* place = nullptr;
  Eigen::Matrix<Complex, 5, 1> into;
};

class Study {
 public:
  Study(const Network& network, const FaultQuery& query, int state, Condition condition)
      : network_(network),
        query_(query),
        tree_(grid_tree(network, state)),
        condition_(condition),
        grid_(network, tree_, condition) {
    if (network.method == models::Method::iec60909 && condition == Condition::maximum)
      without_motors_ = std::make_unique<StateGrid>(network, tree_, condition, false);
  }

  [[nodiscard]] bool live(const Place& place) const { return tree_.live(board_of(place)); }

  void add(const Place& place, std::vector<FaultDetail>& details) const {
    const GridPlace where = grid_place(place);
    for (const Fault fault : faults()) {
      const StateGrid::Flow flow = grid_.flow(where, fault, query_.through_ohms);
      if (!flow.current.possible) continue;
      FaultDetail detail = begin(place.text, fault, flow.current);
      if (flow.current.known) fill(detail, flow, {{&place, flow.into_fault}});
      if (flow.current.known && without_motors_ != nullptr && fault == Fault::three_phase)
        add_decay(detail, flow, where);
      details.push_back(std::move(detail));
    }
  }

  void add_pair(const Place& a, const Place& b, std::vector<FaultDetail>& details) const {
    const StateGrid::Flow flow = grid_.flow_between(grid_place(a), grid_place(b), query_.through_ohms);
    if (!flow.current.possible) return;
    FaultDetail detail = begin(a.text + " and " + b.text, Fault::line_earth, flow.current);
    if (flow.current.known) {
      // At each place the current of its line returns through its protective conductor.
      auto at_place = [&](std::size_t k) {
        Eigen::Matrix<Complex, 5, 1> into = Eigen::Matrix<Complex, 5, 1>::Zero();
        into(flow.pair_lines[k]) = flow.pair_amps[k];
        into(4) = -flow.pair_amps[k];
        return into;
      };
      fill(detail, flow, {{&a, at_place(0)}, {&b, at_place(1)}});
    }
    details.push_back(std::move(detail));
  }

 private:
  // The detailed study solves every state as a grid, also one that the checks walk.
  [[nodiscard]] static StateTree grid_tree(const Network& network, int state) {
    return state_tree(network, state, true);
  }

  // What machines give decays. Their parts are taken in phase with the whole and referred by nominal voltages.
  void add_decay(FaultDetail& detail, const StateGrid::Flow& flow, const GridPlace& where) const {
    const double U = system_of(network_, tree_, where.board).U;
    // Method B multiplies by 1.15 where several ways lead to the fault; R/X of every branch is not looked at, which
    // is on the safe side.
    const bool meshed = std::find(tree_.looped.begin(), tree_.looped.end(), true) != tree_.looped.end() ||
                        network_.states[at(tree_.state)].sources.size() > 1;
    const double kappa = meshed ? iec60909::kappa_b(flow.current.loop, U, false) : iec60909::kappa(flow.current.loop);
    detail.peak_by_b = iec60909::peak(kappa, flow.current.amps);
    const double driving = driving_voltage_at(network_, tree_, where.board, condition_, Fault::three_phase);
    struct Machine {
      double amps, rated, drop, watts;  // at the fault's level; drop relative to its own driving voltage
    };
    std::vector<Machine> machines;
    auto part = [&](const std::string& name) {
      for (std::size_t p = 0; p < flow.pieces.size(); ++p)
        if (grid_.pieces()[p].name == name) return flow.pieces[p].cwiseAbs().maxCoeff();
      return 0.0;
    };
    double motors = 0;
    for (const models::Motor& motor : network_.motors) {
      const int board = motor.board >= 0 ? motor.board : network_.circuits[at(motor.circuit)].board;
      if (!tree_.live(board) || motor.converter) continue;
      const double volts = motor.volts > 0 ? motor.volts : system_of(network_, tree_, board).U;
      const double own = driving_voltage_at(network_, tree_, board, condition_, Fault::three_phase);
      const Complex z = iec60909::motor({volts, motor.amps * motor.count, motor.start, motor.r_over_x});
      const double amps = part(motor.name);
      const double watts =
          motor.watts > 0 ? motor.watts : std::numbers::sqrt3 * volts * motor.amps * motor.pf * motor.efficiency;
      machines.push_back(
          {amps * volts / U, motor.amps * motor.count * volts / U, amps * z.imag() / own, watts / motor.pole_pairs});
      motors += motor.amps * motor.count * volts / U;
    }
    bool generators = false;
    for (const int s : network_.states[at(tree_.state)].sources) {
      const models::Source& source = network_.sources[at(s)];
      if (source.inverter.present) generators = true;  // its stages are told elsewhere; Ik is not known
      if (!source.generator.present) continue;
      generators = true;
      const double rated = source.generator.rating / (std::numbers::sqrt3 * source.U);
      const double amps = part(source.name);
      const double x = generator_impedance(source, condition_).imag() * generator_correction(network_, source);
      const double own = driving_voltage_at(network_, tree_, source.board, condition_, Fault::three_phase);
      machines.push_back({amps * source.U / U, rated * source.U / U, amps * x / own, 0});
      if (network_.states[at(tree_.state)].sources.size() == 1)
        detail.steady = iec60909::steady_state(rated, source.generator.sustained) * source.U / U;
    }
    for (const double seconds : {0.02, 0.05, 0.10, 0.25}) {
      std::vector<iec60909::MachinePart> parts;
      for (const Machine& m : machines) {
        double decay = iec60909::mu(m.amps / m.rated, seconds);
        if (m.watts > 0) decay *= iec60909::q(m.watts, seconds);
        parts.push_back({m.amps, m.drop * driving, decay});
      }
      detail.breaking.push_back({seconds, iec60909::breaking_current(flow.current.amps, driving, parts)});
    }
    const FaultCurrent without = without_motors_->current(where, Fault::three_phase, query_.through_ohms);
    if (!without.usable()) return;
    if (!generators) detail.steady = iec60909::steady_state_without_motors(without.amps);
    detail.motors_negligible = motors > 0 && iec60909::motors_negligible(motors, without.amps);
  }

  [[nodiscard]] std::vector<Fault> faults() const {
    if (query_.fault) return {*query_.fault};
    return {kAllFaults.begin(), kAllFaults.end()};
  }

  [[nodiscard]] int board_of(const Place& place) const {
    if (place.kind == Place::Kind::board) return place.index;
    return place.kind == Place::Kind::submain ? network_.submains[at(place.index)].from
                                              : network_.circuits[at(place.index)].board;
  }

  [[nodiscard]] GridPlace grid_place(const Place& place) const {
    if (place.kind == Place::Kind::board) return grid_.at_board(place.index);
    if (place.kind == Place::Kind::submain) return grid_.along_submain(place.index, place.fraction);
    const models::Circuit& circuit = network_.circuits[at(place.index)];
    if (place.spur >= 0) return grid_.at_circuit(place.index, spur_end(circuit, place.spur));
    return grid_.at_circuit(place.index, place.given ? CircuitEnd{place.fraction, -1} : worst_end(network_, circuit));
  }

  [[nodiscard]] FaultDetail begin(const std::string& node, Fault fault, const FaultCurrent& current) const {
    FaultDetail detail;
    FaultRow& row = detail.row;
    row.state = network_.states[at(tree_.state)].name;
    row.condition = condition_;
    row.node = node;
    row.fault = fault;
    row.phases = current.phases;
    row.known = current.known;
    row.needs = current.needs;
    row.current = current.known ? current.amps : kNone;
    row.peak = current.known ? current.peak : kNone;
    row.x_over_r = current.known && current.x_over_r >= 0 ? current.x_over_r : kNone;
    row.loop_ohms = current.known ? current.ohms : kNone;
    row.driving_volts = current.volts;
    return detail;
  }

  // A circuit in fault carries what flows into it; one that feeds nothing back is no part of the grid.
  void add_circuit(FaultDetail& detail, const Spot& spot) const {
    const Place& place = *spot.place;
    const models::Circuit& circuit = network_.circuits[at(place.index)];
    ElementCurrent element;
    element.element = models::address(network_, circuit);
    element.from = network_.boards[at(circuit.board)].name;
    element.to = place.text;
    if (circuit.device.present()) element.device = circuit.device.text;
    const bool listed = std::any_of(detail.elements.begin(), detail.elements.end(),
                                    [&](const ElementCurrent& e) { return e.element == element.element; });
    if (listed) return;
    Complex sum = 0;
    for (std::size_t k = 0; k < 5; ++k) {
      element.amps[k] = spot.into(static_cast<Eigen::Index>(k));
      if (k < 4) sum += element.amps[k];
    }
    element.residual = std::abs(sum);
    detail.elements.insert(detail.elements.begin(), std::move(element));
  }

  // The device through which a board is fed carries what its one feeder delivers.
  void add_incomers(FaultDetail& detail, const std::vector<Spot>& spots) const {
    std::vector<ElementCurrent> incomers;
    for (const int b : tree_.order) {
      const models::Board& board = network_.boards[at(b)];
      if (!board.incomer.present()) continue;
      std::string feeder;
      if (tree_.feeder[at(b)] >= 0) feeder = network_.submains[at(tree_.feeder[at(b)])].name;
      if (tree_.link[at(b)] >= 0) feeder = network_.links[at(tree_.link[at(b)])].name;
      for (const ElementCurrent& element : detail.elements) {
        const bool source_side = tree_.sole[at(b)] || tree_.transformer[at(b)] >= 0;
        const bool feeds = feeder.empty() ? source_side && element.to == board.name : element.element == feeder;
        if (!feeds) continue;
        ElementCurrent incomer = element;
        incomer.element = board.name + ".incomer";
        incomer.device = board.incomer.text;
        incomer.from = element.element;
        incomer.to = board.name;
        if (element.from == board.name)
          for (Complex& amps : incomer.amps) amps = -amps;
        // What a fault inside the run takes does not reach the board.
        for (const Spot& spot : spots)
          if (spot.place->kind == Place::Kind::submain && network_.submains[at(spot.place->index)].name == feeder &&
              network_.submains[at(spot.place->index)].to == b)
            for (std::size_t k = 0; k < 5; ++k) incomer.amps[k] -= spot.into(static_cast<Eigen::Index>(k));
        Complex sum = 0;
        for (std::size_t k = 0; k < 4; ++k) sum += incomer.amps[k];
        incomer.residual = std::abs(sum);
        incomers.push_back(std::move(incomer));
        break;
      }
    }
    for (ElementCurrent& incomer : incomers) detail.elements.push_back(std::move(incomer));
  }

  void fill(FaultDetail& detail, const StateGrid::Flow& flow, const std::vector<Spot>& spots) const {
    detail.imbalance = flow.imbalance;
    for (std::size_t k = 0; k < 5; ++k) detail.into_fault[k] = flow.into_fault(static_cast<Eigen::Index>(k));
    if (query_.currents) {
      for (std::size_t p = 0; p < flow.pieces.size(); ++p) {
        const GridPiece& piece = grid_.pieces()[p];
        ElementCurrent element;
        element.element = piece.name;
        element.from = piece.from;
        element.to = piece.to;
        if (piece.device != nullptr && piece.device->present()) element.device = piece.device->text;
        Complex sum = 0;
        for (std::size_t k = 0; k < 5; ++k) {
          element.amps[k] = flow.pieces[p](static_cast<Eigen::Index>(k));
          if (k < 4) sum += element.amps[k];
        }
        element.residual = std::abs(sum);
        detail.elements.push_back(std::move(element));
      }
      detail.undefined = flow.undefined;
    }
    if (query_.currents) add_incomers(detail, spots);
    if (query_.currents)
      for (const Spot& spot : spots)
        if (spot.place->kind == Place::Kind::circuit) add_circuit(detail, spot);
    if (query_.touch) touch(detail, flow, spots);
  }

  void touch(FaultDetail& detail, const StateGrid::Flow& flow, const std::vector<Spot>& spots) const {
    const int main = grid_.main_board(board_of(*spots.front().place));
    auto protective = [&](int b) { return flow.potentials[at(Grid::terminal(b, Conductor::PE))]; };
    const double returns = grid_.volts_of_returns(flow);
    double low = 0;
    std::vector<int> boards;
    for (const int b : tree_.order) {
      if (!tree_.conductors[at(b)].has(Conductor::PE)) continue;
      boards.push_back(b);
      TouchVoltage volts;
      volts.board = network_.boards[at(b)].name;
      volts.to_earth = std::abs(protective(b)) + returns;
      if (tree_.conductors[at(main)].has(Conductor::PE)) volts.to_terminal = std::abs(protective(b) - protective(main));
      detail.touch.push_back(std::move(volts));
    }
    // What is touched first: the exposed part at the place of the fault.
    for (const Spot& spot : spots) {
      const GridPlace where = grid_place(*spot.place);
      if (spot.place->kind == Place::Kind::board || !where.have.has(Conductor::PE)) continue;
      const Complex there = grid_.protective_potential(where, flow, spot.into(4));
      TouchVoltage volts;
      volts.board = spot.place->text;
      volts.to_earth = std::abs(there) + returns;
      if (tree_.conductors[at(main)].has(Conductor::PE)) volts.to_terminal = std::abs(there - protective(main));
      detail.touch.push_back(std::move(volts));
    }
    for (std::size_t i = 0; i < boards.size(); ++i)
      for (std::size_t j = 0; j < i; ++j) {
        const double volts = std::abs(protective(boards[i]) - protective(boards[j]));
        if (!(volts > low)) continue;
        low = volts;
        detail.between = volts;
        detail.between_boards =
            fmt::format("{} and {}", network_.boards[at(boards[j])].name, network_.boards[at(boards[i])].name);
      }
  }

  const Network& network_;
  const FaultQuery& query_;
  StateTree tree_;
  Condition condition_;
  StateGrid grid_;
  std::unique_ptr<StateGrid> without_motors_;  ///< by IEC 60909, maximum
};

}  // namespace

std::variant<std::vector<FaultDetail>, std::string> study_faults(const Network& network, const FaultQuery& query) {
  std::vector<Place> places;
  if (query.at.empty()) {
    for (std::size_t b = 0; b < network.boards.size(); ++b) {
      Place place;
      place.index = static_cast<int>(b);
      place.text = network.boards[b].name;
      places.push_back(place);
    }
    for (std::size_t c = 0; c < network.circuits.size(); ++c) {
      Place place;
      place.kind = Place::Kind::circuit;
      place.index = static_cast<int>(c);
      place.text = models::address(network, network.circuits[c]);
      places.push_back(place);
    }
  } else {
    for (const std::string& text : {query.at, query.pair}) {
      if (text.empty()) continue;
      const Found found = find_place(network, text);
      if (const auto* why = std::get_if<std::string>(&found)) return *why;
      places.push_back(std::get<Place>(found));
    }
  }
  std::vector<FaultDetail> details;
  bool state_found = query.state.empty();
  bool any_live = false;
  for (std::size_t s = 0; s < network.states.size(); ++s) {
    if (!query.state.empty() && network.states[s].name != query.state) continue;
    state_found = true;
    for (const Condition condition : {Condition::maximum, Condition::minimum}) {
      const Study study(network, query, static_cast<int>(s), condition);
      if (!query.pair.empty()) {
        if (!study.live(places[0]) || !study.live(places[1])) continue;
        any_live = true;
        study.add_pair(places[0], places[1], details);
        continue;
      }
      for (const Place& place : places) {
        if (!study.live(place)) continue;
        any_live = true;
        study.add(place, details);
      }
    }
  }
  if (!state_found) {
    std::vector<std::string_view> names;
    for (const models::SupplyState& state : network.states) names.push_back(state.name);
    const std::string_view near = models::nearest_name(query.state, names);
    return fmt::format("there is no state '{}'{}", query.state,
                       near.empty() ? "" : fmt::format("; did you mean '{}'?", near));
  }
  if (!any_live) return fmt::format("'{}' is dead in {}", query.at, query.state.empty() ? "every state" : query.state);
  if (details.empty())
    return fmt::format("no {} fault is possible at '{}': its conductors are not there",
                       query.fault          ? word(*query.fault)
                       : query.pair.empty() ? "such"
                                            : "double line-earth",
                       query.at);
  return details;
}

}  // namespace sunder::solver
