// SPDX-License-Identifier: Apache-2.0
/// @file
/// What each element of a network is in the grid of a state.
#include <fmt/format.h>

#include <Eigen/LU>
#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <numeric>

#include "solver/state_grid.h"
#include "solver/windings.h"

namespace sunder::solver {
namespace {

using models::Conductor;
using models::ConductorSet;
using models::Earthing;
using models::Network;
using models::Source;
using models::StarPoint;
using models::Winding;

constexpr Conductor kLines[] = {Conductor::L1, Conductor::L2, Conductor::L3};
constexpr Conductor kAll[] = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE};

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

bool is_tn(Earthing e) { return e == Earthing::TN_S || e == Earthing::TN_C_S || e == Earthing::TN_C; }

Complex scaled(Complex z, double reactance) { return {z.real(), z.imag() * reactance}; }

RunImpedance compact(const ConductorMatrix& z, bool pen) { return {z(0, 0), z(3, 3), z(4, 4), pen}; }

Eigen::MatrixXcd one_port(Complex y) {
  Eigen::MatrixXcd m(2, 2);
  m << y, -y, -y, y;
  return m;
}

bool zero(const StarPoint& star) { return star.ohms == 0 && star.reactance == 0; }

// Sequence data of a transformer, of its secondary [ohm].
struct Short {
  Complex z1, z0;
};
Short short_circuit(const models::Transformer& t) {
  Source like;
  like.secondary = t.secondary;
  like.rating = t.rating;
  like.uk = t.uk;
  like.losses = t.losses;
  like.x_over_r = t.x_over_r;
  const Complex z1 = transformer_impedance(like);
  if (!std::isnan(t.r0_over_r1)) return {z1, {z1.real() * t.r0_over_r1, z1.imag() * t.x0_over_x1}};
  auto stops = [](Winding w) { return w == Winding::delta || w == Winding::zigzag || w == Winding::zigzag_earthed; };
  // Ampere-turns of zero sequence balance in a delta or zigzag: without further data Z0 = Z1. Between
  // two stars the core decides, and only a measurement tells.
  if (stops(t.primary_winding) || stops(t.secondary_winding)) return {z1, z1};
  return {z1, {models::kNotGiven, 0}};
}

}  // namespace

void StateGrid::add_runs() {
  run_of_submain_.assign(network_.submains.size(), -1);
  const models::SupplyState& state = network_.states[at(tree_.state)];
  for (std::size_t i = 0; i < network_.submains.size(); ++i) {
    const models::Submain& s = network_.submains[i];
    if (!tree_.live(s.from) || !tree_.live(s.to) || state.submain_open[i]) continue;
    GridPiece piece{s.name, network_.boards[at(s.from)].name, network_.boards[at(s.to)].name, &s.device};
    ConductorSet carried;
    for (const Conductor c : kAll)
      if (s.conductors.has(c) && tree_.conductors[at(s.from)].has(c) && tree_.conductors[at(s.to)].has(c))
        carried.add(c);
    RunImpedance z;
    if (s.sequence.given) {
      const double scale = s.length.value / s.in_parallel;
      const Complex z1 = s.sequence.z1 * scale;
      const Complex back = (s.sequence.z0 * scale - z1) / 3.0;
      z = {z1, back, back, s.sequence.through == models::Return::both};
      if (!s.sequence.z0_given) {
        no_return_.emplace_back(part_[at(s.from)], "z0 of " + s.name);
        carried.remove(Conductor::N);
        carried.remove(Conductor::PE);
        z.pen = false;
      } else if (s.sequence.through == models::Return::earth) {
        // The ways back through the ground couple the lines: an element, not a run.
        std::vector<int> terminals;
        for (const int end : {s.from, s.to})
          for (const Conductor c : kLines) terminals.push_back(terminal_of(end, c));
        const Complex z0 = s.sequence.z0 * scale;
        add_passive(terminals, {0, 1, 2, 0, 1, 2}, [z1, z0](double k) {
          const Eigen::Matrix3cd series = sequence_matrix(scaled(z1, k), scaled(z0, k)).topLeftCorner<3, 3>();
          const Eigen::Matrix3cd y = series.inverse();
          Eigen::MatrixXcd both(6, 6);
          both << y, -y, -y, y;
          return both;
        });
        add_piece_of_element(piece, passive_.back().element, {0, 1, 2, -1, -1}, 1);
        continue;
      } else if (s.sequence.through == models::Return::neutral) {
        carried.remove(Conductor::PE);
      } else if (s.sequence.through == models::Return::protective) {
        carried.remove(Conductor::N);
      }
    } else {
      z = compact(run_matrix(network_, s.cable, s.length.value, s.in_parallel, s.pen, condition_), s.pen);
    }
    piece.run = run_of_submain_[i] = grid_.add_run(s.from, s.to, carried, z);
    impedances_.push_back(z);
    pieces_.push_back(piece);
  }
}

void StateGrid::add_piece_of_element(GridPiece piece, int element, std::vector<int> positions, double sign) {
  piece.element = element;
  piece.terminals = std::move(positions);
  piece.sign = sign;
  pieces_.push_back(std::move(piece));
}

void StateGrid::star_to_earth(int terminal, const StarPoint& star, double capacitance) {
  if (star.kind == StarPoint::Kind::solid || (star.kind == StarPoint::Kind::impedance && zero(star))) {
    grid_.join(terminal, Grid::kEarth);
    return;
  }
  const double omega = 2 * std::numbers::pi * network_.frequency;
  const bool open = star.kind == StarPoint::Kind::open || star.kind == StarPoint::Kind::absent;
  if (open && capacitance <= 0) return;
  add_passive({terminal, Grid::kEarth}, {0, 0}, [star, capacitance, omega](double k) {
    Complex y{0, omega * capacitance * k};
    if (star.kind == StarPoint::Kind::impedance) y += 1.0 / Complex{star.ohms, star.reactance * k};
    return one_port(y);
  });
}

// Whether a part offers zero-sequence currents a way: a source with its star point, a transformer that ends them
// in a delta or zigzag or passes them on to a part that does.
bool StateGrid::carries_zero(int part, int except) const {
  const models::SupplyState& state = network_.states[at(tree_.state)];
  for (const int s : state.sources) {
    const Source& source = network_.sources[at(s)];
    if (part_[at(source.board)] != part || source.inverter.present) continue;
    const SourceTerm term = source_term(network_, source, condition_, Fault::three_phase);
    if (!term.star_open) return true;
  }
  for (std::size_t i = 0; i < network_.transformers.size(); ++i) {
    const models::Transformer& t = network_.transformers[i];
    if (static_cast<int>(i) == except || state.transformer_open[i] || !tree_.live(t.from) || !tree_.live(t.to))
      continue;
    const bool from_here = part_[at(t.from)] == part && t.primary_winding == Winding::star_earthed;
    const bool to_here = part_[at(t.to)] == part && (t.secondary_winding == Winding::star_earthed ||
                                                     t.secondary_winding == Winding::zigzag_earthed);
    const Winding other = from_here ? t.secondary_winding : t.primary_winding;
    if (from_here && other == Winding::delta) return true;
    if (to_here && (other == Winding::delta || other == Winding::zigzag || other == Winding::star ||
                    t.secondary_winding == Winding::zigzag_earthed))
      return true;
    if (to_here && other == Winding::star_earthed && carries_zero(part_[at(t.from)], static_cast<int>(i))) return true;
  }
  return false;
}

void StateGrid::add_transformers() {
  const models::SupplyState& state = network_.states[at(tree_.state)];
  for (std::size_t i = 0; i < network_.transformers.size(); ++i) {
    const models::Transformer& t = network_.transformers[i];
    if (!tree_.live(t.from) || !tree_.live(t.to) || state.transformer_open[i]) continue;
    int node = t.to;
    if (t.tails.present) {
      node = grid_.add_node({Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE});
      const RunImpedance z =
          compact(run_matrix(network_, t.tails.cable, t.tails.length, t.tails.in_parallel, t.link_at_board, condition_),
                  t.link_at_board);
      ConductorSet carried = tree_.conductors[at(t.to)];
      GridPiece tails{t.name + " tails", t.name + " terminals", network_.boards[at(t.to)].name, &t.device};
      tails.run = grid_.add_run(node, t.to, carried, z);
      impedances_.push_back(z);
      pieces_.push_back(tails);
    }
    Short z = short_circuit(t);
    // Between two earthed stars zero sequence passes on: where the primary has no way for it, the secondary has
    // none either.
    auto earthed_star = [](Winding w) { return w == Winding::star_earthed; };
    if (earthed_star(t.primary_winding) && earthed_star(t.secondary_winding) && !std::isnan(z.z0.real()) &&
        !carries_zero(part_[at(t.from)], static_cast<int>(i))) {
      z.z0 = {models::kNotGiven, 0};
      no_return_.emplace_back(part_[at(t.to)], "line_earth of " + system_of(network_, tree_, t.from).name);
    }
    const bool by_iec = network_.method == models::Method::iec60909 && condition_ == Condition::maximum;
    const int generator = by_iec ? unit_generator(network_, static_cast<int>(i)) : -1;
    const double k_t = generator >= 0 ? unit_correction(network_, network_.sources[at(generator)], static_cast<int>(i))
                                      : transformer_correction(network_, z.z1, t.rating, t.secondary, condition_);
    auto model = [t, z, k_t](double k) {
      return winding_model(t, scaled(z.z1 * k_t, k), std::isnan(z.z0.real()) ? z.z0 : scaled(z.z0 * k_t, k));
    };
    const WindingModel shape = model(1);
    std::vector<int> terminals, groups;
    for (const Conductor c : kLines) {
      terminals.push_back(terminal_of(t.from, c));
      groups.push_back(0);
    }
    if (shape.primary_star) {
      const int star = grid_.add_terminal(t.from);
      terminals.push_back(star);
      // A star above a zigzag carries no current of its own: then nothing connects it.
      groups.push_back(std::abs(shape.y(3, 3)) > 0 ? 0 : 2);
      star_to_earth(star, t.primary_star, 0);
    }
    for (const Conductor c : kLines) {
      terminals.push_back(terminal_of(node, c));
      groups.push_back(1);
    }
    if (shape.secondary_star) {
      const bool high = t.U > 1000;
      const int star = high ? grid_.add_terminal(node) : terminal_of(node, Conductor::N);
      terminals.push_back(star);
      groups.push_back(1);
      if (high) star_to_earth(star, t.star, 0);
    } else if (std::isnan(z.z0.real())) {
      no_return_.emplace_back(part_[at(t.to)], "r0_over_r1 and x0_over_x1 of " + t.name);
    }
    const int element = grid_.add_element(terminals, groups, shape.y);
    passive_.push_back({element, [model](double k) { return model(k).y; }});
    const int second = shape.secondary_first();
    add_piece_of_element({t.name + " primary", network_.boards[at(t.from)].name, t.name, &t.primary_device}, element,
                         {0, 1, 2, -1, -1}, 1);
    add_piece_of_element(
        {t.name + " secondary", t.name, t.tails.present ? t.name + " terminals" : network_.boards[at(t.to)].name,
         t.tails.present ? nullptr : &t.device},
        element, {second, second + 1, second + 2, shape.secondary_star ? second + 3 : -1, -1}, -1);
    star_nodes_.push_back({node, t.to, static_cast<int>(i), true, shape.secondary_star});
  }
}

void StateGrid::add_sources() {
  std::vector<int> others(network_.boards.size(), 0);
  const std::vector<int>& active = network_.states[at(tree_.state)].sources;
  for (const int s : active)
    if (!network_.sources[at(s)].inverter.present) ++others[at(whole_[at(network_.sources[at(s)].board)])];
  for (std::size_t s = 0; s < network_.sources.size(); ++s) {
    if (std::find(active.begin(), active.end(), static_cast<int>(s)) == active.end()) continue;
    const Source& source = network_.sources[s];
    SourcePlace place;
    place.source = static_cast<int>(s);
    place.node = source.board;
    place.alone = source.inverter.present && others[at(whole_[at(source.board)])] == 0;
    if (place.alone && source.inverter.follows) {
      place.alone = false;
      const bool led = std::any_of(active.begin(), active.end(), [&](int other) {
        const Source& o = network_.sources[at(other)];
        return o.inverter.present && !o.inverter.follows && whole_[at(o.board)] == whole_[at(source.board)];
      });
      if (!led) followers_.emplace_back(whole_[at(source.board)], source.name);
    }
    if (source.inverter.present && !place.alone) {
      sources_.push_back(place);
      continue;  // adds its limited current, see added_by_inverters
    }
    ConductorSet carried = tree_.conductors[at(source.board)];
    if (source.earthing == Earthing::TT) carried.remove(Conductor::PE);
    if (source.tails.present) {
      place.node = grid_.add_node(carried);
      const RunImpedance z = compact(run_matrix(network_, source.tails.cable, source.tails.length,
                                                source.tails.in_parallel, source.link_at_board, condition_),
                                     source.link_at_board);
      GridPiece tails{source.name + " tails", source.name + " terminals", network_.boards[at(source.board)].name,
                      &source.device};
      tails.run = grid_.add_run(place.node, source.board, carried, z);
      impedances_.push_back(z);
      pieces_.push_back(tails);
    }
    place.star = source.high_voltage ? grid_.add_terminal(place.node) : terminal_of(place.node, Conductor::N);
    if (place.alone) {
      for (const Conductor c : kLines)
        if (source.lines.has(c)) grid_.join(terminal_of(place.node, c), place.star);
    } else {
      SourceValue value;
      const SourceTerm term = source_term(network_, source, condition_, Fault::three_phase);
      value.star_open = term.star_open;
      if (!source.z0_known)
        no_return_.emplace_back(part_[at(source.board)], "r0_over_r1 and x0_over_x1 of " + source.name);
      value.series.diagonal().head<3>().setOnes();
      std::vector<int> terminals, groups;
      for (const Conductor c : kLines)
        if (source.lines.has(c)) {
          terminals.push_back(terminal_of(place.node, c));
          groups.push_back(0);
        }
      terminals.push_back(place.star);
      groups.push_back(value.star_open ? 1 : 0);
      place.element = grid_.add_element(terminals, groups, source_admittance(place, value, 1));
      GridPiece piece{source.name, source.name,
                      source.tails.present ? source.name + " terminals" : network_.boards[at(source.board)].name,
                      source.tails.present ? nullptr : &source.device};
      std::vector<int> positions{-1, -1, -1, -1, -1};
      int position = 0;
      for (const Conductor c : kLines)
        if (source.lines.has(c)) positions[index(c)] = position++;
      if (!source.high_voltage) positions[index(Conductor::N)] = position;
      add_piece_of_element(piece, place.element, positions, -1);
    }
    if (source.high_voltage) {
      star_to_earth(place.star, source.star, 0);
    } else {
      star_nodes_.push_back({place.node, source.board, static_cast<int>(s), false, true});
    }
    sources_.push_back(place);
  }
}

void StateGrid::add_motors() {
  circuit_node_.assign(network_.circuits.size(), -1);
  for (const models::Motor& motor : network_.motors) {
    const int board = motor.board >= 0 ? motor.board : network_.circuits[at(motor.circuit)].board;
    if (!tree_.live(board)) continue;
    int node = board;
    if (motor.circuit >= 0) {
      int& end = circuit_node_[at(motor.circuit)];
      const models::Circuit& circuit = network_.circuits[at(motor.circuit)];
      if (end < 0) {
        ConductorSet carried;
        for (const Conductor c : kAll)
          if (circuit.conductors.has(c) && tree_.conductors[at(board)].has(c)) carried.add(c);
        end = grid_.add_node(carried);
        const RunImpedance z =
            compact(circuit_matrix(network_, circuit, worst_end(network_, circuit), condition_), circuit.pen);
        const std::string name = models::address(network_, circuit);
        GridPiece piece{name, network_.boards[at(board)].name, name, &circuit.device};
        piece.run = grid_.add_run(board, end, carried, z);
        impedances_.push_back(z);
        pieces_.push_back(piece);
      }
      node = end;
    }
    // The least currents count without what motors give.
    if (condition_ == Condition::minimum || motor.converter || !with_motors_) continue;
    const Source& system = system_of(network_, tree_, board);
    const int lines = motor.lines.lines();
    const double nominal = lines == 1 ? system.U0 : system.U;
    const double volts = motor.volts > 0 ? motor.volts : nominal;
    const double root = lines == 3 ? std::numbers::sqrt3 : 1.0;
    const double amps = motor.amps > 0 ? motor.amps : motor.watts / (root * volts * motor.pf * motor.efficiency);
    const double size = volts / (root * motor.start * amps * motor.count);
    const Complex z = std::polar(size, std::atan2(1.0, motor.r_over_x));
    std::vector<int> terminals, positions{-1, -1, -1, -1, -1};
    for (const Conductor c : kLines)
      if (motor.lines.has(c)) {
        positions[index(c)] = static_cast<int>(terminals.size());
        terminals.push_back(terminal_of(node, c));
      }
    if (lines == 1) {
      positions[index(Conductor::N)] = 1;
      terminals.push_back(terminal_of(node, Conductor::N));
    }
    const std::size_t n = terminals.size();
    add_passive(terminals, std::vector<int>(n, 0), [z, n](double k) -> Eigen::MatrixXcd {
      const Complex y = 1.0 / scaled(z, k);
      if (n == 2) return one_port(y);
      const Eigen::Matrix3cd without_zero = Eigen::Matrix3cd::Identity() - Eigen::Matrix3cd::Constant(1.0 / 3.0);
      return y * without_zero;
    });
    add_piece_of_element({motor.name, motor.name,
                          motor.circuit >= 0 ? models::address(network_, network_.circuits[at(motor.circuit)])
                                             : network_.boards[at(board)].name},
                         passive_.back().element, positions, -1);
  }
}

void StateGrid::add_links() {
  const models::SupplyState& state = network_.states[at(tree_.state)];
  for (std::size_t i = 0; i < network_.links.size(); ++i) {
    const models::Link& link = network_.links[i];
    if (!tree_.live(link.from) || !tree_.live(link.to) || !state.link_closed[i]) continue;
    GridPiece piece{link.name, network_.boards[at(link.from)].name, network_.boards[at(link.to)].name, &link.device};
    for (const Conductor c : kAll) {
      const bool joined = link.conductors.has(c) || c == Conductor::PE;
      if (!joined || !tree_.conductors[at(link.from)].has(c) || !tree_.conductors[at(link.to)].has(c)) continue;
      piece.joins.emplace_back(terminal_of(link.from, c), terminal_of(link.to, c));
      grid_.join(piece.joins.back().first, piece.joins.back().second);
    }
    pieces_.push_back(piece);
  }
  for (std::size_t b = 0; b < network_.boards.size(); ++b) {
    const int board = static_cast<int>(b);
    if (!tree_.live(board) || !network_.boards[b].n_pe_link) continue;
    grid_.join(terminal_of(board, Conductor::N), terminal_of(board, Conductor::PE));
  }
  for (const models::Circuit& circuit : network_.circuits)
    if (circuit.pen && tree_.live(circuit.board))
      grid_.join(terminal_of(circuit.board, Conductor::N), terminal_of(circuit.board, Conductor::PE));
}

void StateGrid::add_earths() {
  for (const models::Electrode& electrode : network_.electrodes) {
    if (electrode.board < 0 || !tree_.live(electrode.board)) continue;
    const double ohms = electrode.resistance;
    add_passive({terminal_of(electrode.board, Conductor::PE), Grid::kEarth}, {0, 0},
                [ohms](double) { return one_port(1.0 / ohms); });
    add_piece_of_element({electrode.name, network_.boards[at(electrode.board)].name, "earth"}, passive_.back().element,
                         {-1, -1, -1, -1, 0}, 1);
  }
  for (const models::Bond& bond : network_.bonds) {
    if (!tree_.live(bond.from) || (bond.to >= 0 && !tree_.live(bond.to))) continue;
    const int from = terminal_of(bond.from, Conductor::PE);
    const int to = bond.to < 0 ? Grid::kEarth : terminal_of(bond.to, Conductor::PE);
    GridPiece piece{bond.name, network_.boards[at(bond.from)].name,
                    bond.to < 0 ? "earth" : network_.boards[at(bond.to)].name};
    const Complex z{bond.ohms, bond.reactance};
    if (z == Complex{}) {
      grid_.join(from, to);
      piece.joins.emplace_back(from, to);
      pieces_.push_back(piece);
      continue;
    }
    add_passive({from, to}, {0, 0}, [z](double k) { return one_port(1.0 / scaled(z, k)); });
    add_piece_of_element(piece, passive_.back().element, {-1, -1, -1, -1, 0}, 1);
  }
}

// Without a star point the capacitance of an isolated network lies between its lines and earth.
void StateGrid::spread_capacitance(const Star& star, const models::Transformer& transformer) {
  const double each = 2 * std::numbers::pi * network_.frequency * transformer.capacitance / 3;
  for (const Conductor c : kLines)
    add_passive({terminal_of(star.node, c), Grid::kEarth}, {0, 0}, [each](double k) {
      return one_port(Complex{0, each * k});
    });
}

// Star points: sources in the order of the file, then transformers. The first of a TN part is at
// reference earth, further ones only through conductors: two earthed stars would offer a way through
// the ground that has no impedance.
void StateGrid::connect_stars() {
  std::stable_sort(star_nodes_.begin(), star_nodes_.end(), [](const Star& a, const Star& b) {
    return std::pair{a.of_transformer, a.index} < std::pair{b.of_transformer, b.index};
  });
  for (const Star& star : star_nodes_) {
    const Source* source = star.of_transformer ? nullptr : &network_.sources[at(star.index)];
    const models::Transformer* transformer = star.of_transformer ? &network_.transformers[at(star.index)] : nullptr;
    if (transformer != nullptr && !star.brought_out && transformer->capacitance > 0)
      spread_capacitance(star, *transformer);
    if (transformer != nullptr && (transformer->U > 1000 || !star.brought_out)) continue;
    const Earthing earthing = source != nullptr ? source->earthing : transformer->earthing;
    const StarPoint& how = source != nullptr ? source->star : transformer->star;
    const bool at_board = source != nullptr ? source->link_at_board : transformer->link_at_board;
    const int n = terminal_of(star.node, Conductor::N);
    const int pe = terminal_of(star.node, Conductor::PE);
    const auto part = at(part_[at(star.board)]);
    if (how.kind == StarPoint::Kind::absent) continue;
    if (earthing == Earthing::TT) {
      grid_.join(n, Grid::kEarth);
      continue;
    }
    if (earthing == Earthing::IT) {
      star_to_earth(n, how, source != nullptr ? source->capacitance : transformer->capacitance);
      continue;
    }
    if (at_board) {
      const int board_n = terminal_of(star.board, Conductor::N);
      grid_.join(board_n, terminal_of(star.board, Conductor::PE));
    } else if (how.kind == StarPoint::Kind::solid) {
      grid_.join(n, pe);
    } else if (how.kind == StarPoint::Kind::impedance) {
      add_passive({n, pe}, {0, 0}, [how](double k) { return one_port(1.0 / Complex{how.ohms, how.reactance * k}); });
    }
    if (is_tn(earthing) && !earthed_[part]) {
      grid_.join(n, Grid::kEarth);
      earthed_[part] = true;
    }
  }
}

}  // namespace sunder::solver
