// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/meshed_model.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "tests/reference/meshed_windings.h"

namespace sunder::reference::meshed {

namespace {

constexpr double kOmega = 2.0 * 3.14159265358979323846 * 50.0;  // [rad/s]

using Current = Equations::Current;
using Nodes = std::array<int, kConductors>;

constexpr int kAbsent = Place::kAbsent;

std::size_t at(int i) { return static_cast<std::size_t>(i); }

// Boards that conductors join: runs, closed links, bonds between protective conductors.
std::vector<int> galvanic_parts(const Network& network) {
  std::vector<int> part(network.boards.size());
  for (std::size_t i = 0; i < part.size(); ++i) part[i] = static_cast<int>(i);
  const auto unite = [&](int a, int b) {
    const int from = part[at(a)];
    const int to = part[at(b)];
    for (int& one : part) {
      if (one == from) one = to;
    }
  };
  for (const Run& run : network.runs) unite(run.from, run.to);
  for (const Link& link : network.links) {
    if (link.closed) unite(link.from, link.to);
  }
  for (const Bond& bond : network.bonds) {
    if (bond.to >= 0) unite(bond.from, bond.to);
  }
  return part;
}

class Builder {
 public:
  Builder(const Network& network, Condition condition) : network_(network), condition_(condition) {}

  Model build() {
    for (std::size_t i = 0; i < network_.boards.size(); ++i) {
      const Board& board = network_.boards[i];
      Place place;
      place.name = board.name;
      place.board = static_cast<int>(i);
      place.node = nodes_for(board.has);
      if (board.high) place.node[kPE] = Equations::kEarth;
      boards_.push_back(place.node);
      model_.places.push_back(place);
      if (board.n_pe_link) eq().join(place.node[kN], place.node[kPE]);
    }
    const std::vector<int> parts = galvanic_parts(network_);
    std::vector<bool> part_has_reference(network_.boards.size(), false);
    // The star of the first TN source of a part is reference earth.
    const auto is_reference = [&](int board, Earthing earthing) {
      const auto part = at(parts[at(board)]);
      if (network_.boards[at(board)].high || !is_tn(earthing) || part_has_reference[part]) return false;
      part_has_reference[part] = true;
      return true;
    };
    for (const Source& source : network_.sources) {
      build_source(source, is_reference(source.board, source.earthing));
    }
    for (const Transformer& transformer : network_.transformers) {
      build_transformer(transformer, is_reference(transformer.to, transformer.earthing));
    }
    for (const Run& run : network_.runs) build_run(run);
    for (const Link& link : network_.links) {
      if (link.closed) build_link(link);
    }
    for (std::size_t i = 0; i < network_.circuits.size(); ++i) build_circuit(network_.circuits[i]);
    if (condition_ == Condition::maximum) {
      for (const Motor& motor : network_.motors) build_motor(motor);
    }
    for (const Electrode& electrode : network_.electrodes) {
      carry(electrode.name).amps[kPE] =
          eq().branch(boards_[at(electrode.board)][kPE], Equations::kEarth, electrode.ohms);
    }
    for (const Bond& bond : network_.bonds) {
      const int to = bond.to < 0 ? Equations::kEarth : boards_[at(bond.to)][kPE];
      carry(bond.name).amps[kPE] = eq().branch(boards_[at(bond.from)][kPE], to, bond.ohms);
    }
    model_.rcond = eq().finish();
    return std::move(model_);
  }

 private:
  Equations& eq() { return model_.equations; }

  Carried& carry(const std::string& name) {
    model_.carried.push_back({name, {}});
    return model_.carried.back();
  }

  Nodes nodes_for(const Has& has) {
    Nodes nodes;
    for (std::size_t c = 0; c < kConductors; ++c) nodes[c] = has[c] ? eq().node() : kAbsent;
    return nodes;
  }

  // A cable between what both ends have; a PEN joins neutral and protective conductor at both.
  void lay(const Length& length, double metres, const Nodes& from, const Nodes& to, Carried* carried) {
    Length piece = length;
    piece.metres = metres;
    const Complex z = conductor_ohms(network_, piece, condition_);
    for (std::size_t c = 0; c < kConductors; ++c) {
      if (from[c] == kAbsent || to[c] == kAbsent) continue;
      if (c == kPE && (length.pen || !length.separate_pe)) continue;
      const Current current = eq().branch(from[c], to[c], z);
      if (carried != nullptr) carried->amps[c] = current;
    }
    if (!length.pen) return;
    eq().join(from[kN], from[kPE]);
    eq().join(to[kN], to[kPE]);
  }

  static Nodes only(Nodes nodes, const Has& has) {
    for (std::size_t c = 0; c < kConductors; ++c) {
      if (!has[c]) nodes[c] = kAbsent;
    }
    return nodes;
  }

  void build_run(const Run& run) {
    const Nodes from = only(boards_[at(run.from)], run.has);
    const Nodes to = only(boards_[at(run.to)], run.has);
    Carried& carried = carry(run.name);
    if (!run.sequence) return lay(run.length, run.length.metres, from, to, &carried);
    const Complex z1 = run.z1 * 1e-3 * run.length.metres;
    const Complex back = (run.z0 - run.z1) / 3.0 * 1e-3 * run.length.metres;
    Eigen::MatrixXcd z = Eigen::MatrixXcd::Zero(3, 3);
    if (run.through == Return::earth) z.setConstant(back);
    z.diagonal().array() += z1;
    const auto currents = eq().coupled({from[0], from[1], from[2]}, {to[0], to[1], to[2]}, z);
    for (std::size_t line = 0; line < 3; ++line) carried.amps[line] = currents[line];
    if (run.through == Return::protective) carried.amps[kPE] = eq().carrier(from[kPE], to[kPE], back);
    if (run.through != Return::neutral && run.through != Return::both) return;
    carried.amps[kN] = eq().carrier(from[kN], to[kN], back);
    if (run.through == Return::neutral) return;
    eq().join(from[kN], from[kPE]);
    eq().join(to[kN], to[kPE]);
  }

  void build_link(const Link& link) {
    Carried& carried = carry(link.name);
    for (std::size_t c = 0; c < kConductors; ++c) {
      if (link.has[c]) carried.amps[c] = eq().join(boards_[at(link.from)][c], boards_[at(link.to)][c]);
    }
  }

  void build_circuit(const Circuit& circuit) {
    const Board& board = network_.boards[at(circuit.board)];
    const Nodes start = only(boards_[at(circuit.board)], circuit.has);
    Place place;
    place.name = board.name + "/" + circuit.name;
    place.board = circuit.board;
    if (!circuit.ring) {
      place.node = nodes_for(circuit.has);
      lay(circuit.length, circuit.length.metres, start, place.node, &carry(place.name));
      ends_.push_back(place.node);
      model_.places.push_back(place);
      return;
    }
    // From the board past the middle and every spur, in the order of their places, and back.
    struct Stop {
      double at = 0;
      int spur = -1;
    };
    std::vector<Stop> stops = {{circuit.length.metres / 2.0, -1}};
    for (std::size_t i = 0; i < circuit.spurs.size(); ++i) stops.push_back({circuit.spurs[i][0], static_cast<int>(i)});
    std::sort(stops.begin(), stops.end(), [](const Stop& a, const Stop& b) { return a.at < b.at; });
    Nodes here = start;
    double travelled = 0;
    for (const Stop& stop : stops) {
      if (stop.at > travelled) {
        const Nodes there = nodes_for(circuit.has);
        lay(circuit.length, stop.at - travelled, here, there, nullptr);
        here = there;
        travelled = stop.at;
      }
      Place own = place;
      own.node = here;
      own.ring_metres = stop.at * (circuit.length.metres - stop.at) / circuit.length.metres;
      if (stop.spur < 0) {
        own.name += "/middle";
      } else {
        own.name += "/spur" + std::to_string(stop.spur + 1);
        own.node = nodes_for(circuit.has);
        const double spur = circuit.spurs[at(stop.spur)][1];
        own.ring_metres += spur;
        lay(circuit.length, spur, here, own.node, nullptr);
      }
      model_.places.push_back(own);
    }
    lay(circuit.length, circuit.length.metres - travelled, here, start, nullptr);
    ends_.push_back(here);
  }

  void build_motor(const Motor& motor) {
    const Board& board = network_.boards[at(motor.board)];
    const Nodes& there = motor.circuit < 0 ? boards_[at(motor.board)] : ends_[at(motor.circuit)];
    const double volts = motor.volts > 0 ? motor.volts : board.U;
    const double z = volts / (std::sqrt(3.0) * motor.start * motor.amps) / motor.count;
    const double x = z / std::sqrt(1.0 + motor.r_over_x * motor.r_over_x);
    const int star = eq().node();  // of the motor's windings, connected to nothing else
    Carried& carried = carry(motor.name);
    for (std::size_t line = 0; line < 3; ++line) {
      carried.amps[line] = eq().branch(star, there[line], {motor.r_over_x * x, x});
    }
  }

  // What stands behind terminals with a star point: neutral, protective conductor, reference earth, tails.
  struct Terminals {
    std::string name, shown;
    int board = 0;
    Earthing earthing = Earthing::none;
    StarPoint star;
    bool has_star = true;
    bool is_reference = false;
    bool no_link = false;
    bool link_at_board = false;
    Length tails;
    double farads = 0;
  };

  // Connects line terminals and the star point to a board. @return nodes of the three line terminals
  void connect(const Terminals& t, const std::array<int, 3>& lines, const std::array<Current, 3>& out, int star) {
    const Nodes& bars = boards_[at(t.board)];
    Carried& own = carry(t.shown);
    for (std::size_t line = 0; line < 3; ++line) own.amps[line] = out[line];
    if (t.has_star) own.amps[kN] = (out[0] + out[1] + out[2]).times(-1.0);
    StarPoint::Kind kind = t.star.kind;
    if (kind == StarPoint::Kind::by_default) {
      kind = t.earthing == Earthing::it ? StarPoint::Kind::open : StarPoint::Kind::solid;
    }
    if (t.no_link) kind = StarPoint::Kind::open;
    const bool tails = t.tails.metres > 0;
    const Complex z = tails ? conductor_ohms(network_, t.tails, condition_) : Complex{};
    CarriedAmps amps;
    if (tails) {
      for (std::size_t line = 0; line < 3; ++line) amps[line] = eq().branch(lines[line], bars[line], z);
    }
    if (t.has_star) amps = connect_star(t, kind, star, z, std::move(amps));
    if (tails) carry(t.name + " tails").amps = amps;
  }

  // The star point to reference earth, to N and to PE. @return `amps` with what N and PE of the tails carry
  CarriedAmps connect_star(const Terminals& t, StarPoint::Kind kind, int star, Complex z, CarriedAmps amps) {
    const Board& board = network_.boards[at(t.board)];
    const Nodes& bars = boards_[at(t.board)];
    const bool tails = t.tails.metres > 0;
    if (board.high || t.earthing == Earthing::it) {
      if (kind == StarPoint::Kind::solid) eq().join(star, Equations::kEarth);
      if (kind == StarPoint::Kind::impedance) eq().carrier(star, Equations::kEarth, t.star.ohms);
      if (t.farads > 0) eq().branch(star, Equations::kEarth, 1.0 / Complex{0, kOmega * t.farads});
    }
    if (board.high) return amps;
    if (t.is_reference || t.earthing == Earthing::tt) eq().join(star, Equations::kEarth);
    amps[kN] = tails ? eq().branch(star, bars[kN], z) : eq().join(star, bars[kN]);
    if (t.link_at_board) {
      eq().join(bars[kN], bars[kPE]);
      return amps;
    }
    if (!is_tn(t.earthing) || kind == StarPoint::Kind::open) return amps;
    int protective = bars[kPE];
    if (tails) {
      protective = eq().node();
      amps[kPE] = eq().branch(protective, bars[kPE], z);
    }
    if (kind == StarPoint::Kind::solid) eq().join(star, protective);
    if (kind == StarPoint::Kind::impedance) eq().carrier(star, protective, t.star.ohms);
    return amps;
  }

  std::array<int, 3> line_terminals(int board, bool tails) {
    const Nodes& bars = boards_[at(board)];
    std::array<int, 3> lines{bars[0], bars[1], bars[2]};
    if (tails) lines = {eq().node(), eq().node(), eq().node()};
    return lines;
  }

  void build_source(const Source& source, bool is_reference) {
    const auto [z1, z0] = source_ohms(network_, source, condition_);
    const std::array<int, 3> lines = line_terminals(source.board, source.tails.metres > 0);
    const int star = eq().node();
    Eigen::MatrixXcd z = Eigen::MatrixXcd::Constant(3, 3, (z0 - z1) / 3.0);
    z.diagonal().array() += z1;
    const auto out = eq().coupled({star, star, star}, {lines[0], lines[1], lines[2]}, z);
    connect({source.name, source.name, source.board, source.earthing, source.star, true, is_reference, false,
             source.link_at_board, source.tails, source.farads},
            lines, {out[0], out[1], out[2]}, star);
  }

  void build_transformer(const Transformer& t, bool is_reference) {
    const std::array<int, 3> lines = line_terminals(t.to, t.tails.metres > 0);
    const Nodes& bars = boards_[at(t.from)];
    const bool star = t.secondary_group != "d";
    const WindingTerminals terminals{{bars[0], bars[1], bars[2]}, eq().node(), lines, star ? eq().node() : kAbsent};
    const WindingCurrents currents = build_windings(eq(), t, terminals);
    if (t.primary_group == "YN") {
      if (t.primary_star.kind == StarPoint::Kind::impedance) {
        eq().carrier(terminals.primary_star, Equations::kEarth, t.primary_star.ohms);
      } else if (t.primary_star.kind != StarPoint::Kind::open) {
        eq().join(terminals.primary_star, Equations::kEarth);
      }
    } else if (t.primary_group == "D") {
      eq().join(terminals.primary_star, Equations::kEarth);  // there is none: the unknown is tied
    }
    Carried& primary = carry(t.name + " primary");
    for (std::size_t line = 0; line < 3; ++line) primary.amps[line] = currents.primary[line];
    connect({t.name, t.name + " secondary", t.to, t.earthing, t.star, star, is_reference, t.no_link, t.link_at_board,
             t.tails, 0},
            lines, currents.secondary, terminals.secondary_star);
  }

  const Network& network_;
  Condition condition_;
  Model model_;
  std::vector<Nodes> boards_;
  std::vector<Nodes> ends_;  // of circuits
};

}  // namespace

const Place& Model::place(const std::string& name) const {
  for (const Place& one : places) {
    if (one.name == name) return one;
  }
  FAIL("no place " << name);
  return places.front();
}

Model build_model(const Network& network, Condition condition) { return Builder(network, condition).build(); }

Complex conductor_ohms(const Network& network, const Length& length, Condition condition) {
  const Cable& cable = cables()[at(length.cable)];
  const double rise = condition == Condition::minimum ? cable.limit_degc - 20.0 : 0.0;
  const Complex per_metre{cable.r20 * (1.0 + temperature_coefficient(network, cable) * rise), cable.x};
  return per_metre * 1e-3 * length.metres / static_cast<double>(length.in_parallel);
}

}  // namespace sunder::reference::meshed
