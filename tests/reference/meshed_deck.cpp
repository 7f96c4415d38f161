// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/meshed_deck.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <set>
#include <utility>

#include "tests/reference/meshed_circuit.h"
#include "tests/reference/meshed_seats.h"
#include "tests/support/program.h"

namespace sunder::reference::meshed {

namespace {

constexpr double kOpen = 1e13;  // of a switch [ohm]

std::size_t at(int i) { return static_cast<std::size_t>(i); }

class Deck {
 public:
  Deck(const Network& network, Condition condition) : n_(network), condition_(condition) {}

  SpiceCircuit& circuit() { return c_; }

  void write() {
    for (std::size_t i = 0; i < n_.boards.size(); ++i) {
      const Board& board = n_.boards[i];
      if (board.high) c_.same(bar(static_cast<int>(i), kPE), "0");
      if (board.n_pe_link) c_.same(bar(static_cast<int>(i), kN), bar(static_cast<int>(i), kPE));
    }
    find_references();
    for (std::size_t i = 0; i < n_.sources.size(); ++i) write_source(n_.sources[i]);
    for (const Transformer& t : n_.transformers) write_transformer(t);
    for (const Run& run : n_.runs) write_run(run);
    for (const Link& link : n_.links) {
      for (std::size_t c = 0; c < kConductors && link.closed; ++c) {
        if (link.has[c]) c_.same(bar(link.from, c), bar(link.to, c));
      }
    }
    for (const Circuit& circuit : n_.circuits) write_circuit(circuit);
    if (condition_ == Condition::maximum) {
      for (const Motor& motor : n_.motors) write_motor(motor);
    }
    for (const Electrode& e : n_.electrodes) c_.series(bar(e.board, kPE), "0", e.ohms, {{e.name, kPE, 1}});
    for (const Bond& b : n_.bonds) {
      c_.series(bar(b.from, kPE), b.to < 0 ? "0" : bar(b.to, kPE), b.ohms, {{b.name, kPE, 1}});
    }
  }

  // Voltage sources in each line towards a common point, and switches (resistors) to close them.
  void prepare_fault(const std::string& id, const DeckFault& fault, std::string& control) {
    const Board& board = *board_of(fault.place);
    const bool three = fault.fault == Fault::three_phase;
    const bool two = fault.fault == Fault::line_line;
    const double c = condition_ == Condition::maximum ? 1.1 : board.high ? 1.0 : n_.bs ? 0.95 : 0.9;
    const double volts = c * (three ? board.U / std::sqrt(3.0) : two ? board.U : board.U0);
    const std::string common = "f" + id;
    c_.resistor(common, "0", kOpen);
    for (std::size_t line = 0; line < 3; ++line) {
      const bool closed = std::find(fault.lines.begin(), fault.lines.end(), line) != fault.lines.end();
      if (!closed) continue;
      const std::string own = common + "l" + std::to_string(line);
      const bool driven = !two || line == fault.lines.front();
      const std::string amplitude =
          driven ? number(volts) + " " + number(two ? 0.0 : -120.0 * static_cast<double>(line)) : "0 0";
      close(own, fault.place + ":" + std::to_string(line), control);
      c_.source("V" + own, common, own, amplitude, {{"fault " + id, line, -1}});
    }
    std::size_t back = kConductors;
    if (fault.fault == Fault::line_neutral) back = kN;
    if (fault.fault == Fault::line_earth || fault.fault == Fault::two_lines_earth) back = kPE;
    if (back == kConductors) return;
    close(common + "b", fault.place + ":" + std::to_string(back), control);
    c_.source("V" + common + "b", common, common + "b", "0 0", {{"fault " + id, back, -1}});
  }

 private:
  [[nodiscard]] const Board& board(int i) const { return n_.boards[at(i)]; }
  [[nodiscard]] std::string bar(int i, std::size_t conductor) const {
    return board(i).name + ":" + std::to_string(conductor);
  }
  [[nodiscard]] const Board* board_of(const std::string& place) const {
    for (const Board& one : n_.boards) {
      if (place == one.name || place.rfind(one.name + "/", 0) == 0) return &one;
    }
    return nullptr;
  }

  void close(const std::string& node, const std::string& place, std::string& control) {
    const std::string name = "Rs" + node;
    c_.resistor_named(name, node, place, kOpen);
    control += "alter " + lower(name) + " = 1e-7\n";
    opening_ += "alter " + lower(name) + " = 1e13\n";
  }

 public:
  // To open what `prepare_fault` closed since the last call.
  std::string take_opening() { return std::exchange(opening_, {}); }

 private:
  // Ohms of one conductor at the temperatures of the condition.
  [[nodiscard]] Complex ohms(const Length& length) const {
    const Cable& cable = cables()[at(length.cable)];
    double r = cable.r20;
    if (condition_ == Condition::minimum) {
      const double per_degree = n_.bs ? 0.004 : cable.aluminium ? 0.00403 : 0.00393;
      r += r * per_degree * (cable.limit_degc - 20);
    }
    return Complex{r, cable.x} * length.metres / (1000.0 * length.in_parallel);
  }

  void lay(const std::string& name, const Length& length, double share, const std::string& from, const std::string& to,
           const Has& has) {
    for (std::size_t c = 0; c < kConductors; ++c) {
      if (!has[c] || (c == kPE && (length.pen || !length.separate_pe))) continue;
      const std::string conductor = ":" + std::to_string(c);
      std::vector<Share> shares;
      if (!name.empty()) shares = {{name, c, 1}};
      c_.series(from + conductor, to + conductor, ohms(length) * share, shares);
    }
    if (!length.pen) return;
    c_.same(from + ":3", from + ":4");
    c_.same(to + ":3", to + ":4");
  }

  void write_run(const Run& run) {
    const std::string from = board(run.from).name;
    const std::string to = board(run.to).name;
    if (!run.sequence) return lay(run.name, run.length, 1.0, from, to, run.has);
    const Complex z1 = run.z1 * run.length.metres / 1000.0;
    const Complex back = (run.z0 - run.z1) * run.length.metres / 3000.0;
    for (std::size_t line = 0; line < 3; ++line) {
      const std::string conductor = ":" + std::to_string(line);
      std::string start = from + conductor;
      if (run.through == Return::earth) {
        // The earth's drop, of the sum of the lines, enters each of them.
        const std::string earth = "q" + run.name;
        const std::string inner = run.name + "i" + std::to_string(line);
        c_.source("V" + inner, start, inner, "0 0", {});
        c_.line("F" + inner, "0", earth, "V" + inner + " 1");
        c_.line4("E" + inner, inner, inner + "e", earth, "0", 1.0);
        start = inner + "e";
      }
      c_.series(start, to + conductor, z1, {{run.name, line, 1}});
    }
    if (run.through == Return::earth) c_.series("q" + run.name, "0", back, {});
    if (run.through == Return::protective) c_.series(from + ":4", to + ":4", back, {{run.name, kPE, 1}});
    if (run.through == Return::neutral) c_.series(from + ":3", to + ":3", back, {{run.name, kN, 1}});
    if (run.through == Return::both) {
      c_.series(from + ":3", to + ":3", back, {{run.name, kN, 1}});
      c_.same(from + ":3", from + ":4");
      c_.same(to + ":3", to + ":4");
    }
  }

  void write_circuit(const Circuit& circuit) {
    const std::string start = board(circuit.board).name;
    const std::string name = start + "/" + circuit.name;
    if (!circuit.ring) return lay(name, circuit.length, 1.0, start, name, circuit.has);
    // Two halves: what hangs on spurs carries nothing while the fault is elsewhere.
    lay("", circuit.length, 0.5, start, name + "m", circuit.has);
    lay("", circuit.length, 0.5, name + "m", start, circuit.has);
  }

  void write_motor(const Motor& motor) {
    std::string place = board(motor.board).name;
    if (motor.circuit >= 0) place += "/" + n_.circuits[at(motor.circuit)].name;
    const double volts = motor.volts > 0 ? motor.volts : board(motor.board).U;
    const double z = volts / (std::sqrt(3.0) * motor.start * motor.amps * motor.count);
    const double angle = std::atan2(1.0, motor.r_over_x);
    for (std::size_t line = 0; line < 3; ++line) {  // a delta has three times the impedance of the star
      const std::size_t next = (line + 1) % 3;
      c_.series(place + ":" + std::to_string(line), place + ":" + std::to_string(next), std::polar(3.0 * z, angle),
                {{motor.name, line, -1}, {motor.name, next, 1}});
    }
  }

  // Boards that conductors reach from a board.
  [[nodiscard]] std::set<int> reached_from(int first) const {
    std::set<int> reached = {first};
    for (bool grown = true; grown;) {
      grown = false;
      const auto pass = [&](int a, int b) {
        if ((reached.count(a) > 0) == (reached.count(b) > 0)) return;
        reached.insert({a, b});
        grown = true;
      };
      for (const Run& run : n_.runs) pass(run.from, run.to);
      for (const Link& link : n_.links) {
        if (link.closed) pass(link.from, link.to);
      }
      for (const Bond& bond : n_.bonds) {
        if (bond.to >= 0) pass(bond.from, bond.to);
      }
    }
    return reached;
  }

  void find_references() {
    std::set<int> done;
    const auto visit = [&](const std::string& name, int board_index, Earthing earthing) {
      if (board(board_index).high || !is_tn(earthing) || done.count(board_index) > 0) return;
      const std::set<int> part = reached_from(board_index);
      done.insert(part.begin(), part.end());
      at_reference_.insert(name);
    };
    for (const Source& s : n_.sources) visit(s.name, s.board, s.earthing);
    for (const Transformer& t : n_.transformers) visit(t.name, t.to, t.earthing);
  }

  // From the terminals "NAME:0".."NAME:2" and the star "NAME:s" to the board.
  template <typename Element>
  void connect(const Element& e, int to, bool has_star, bool no_link) {
    const std::string own = e.name + "t";
    const bool tails = e.tails.metres > 0;
    for (std::size_t line = 0; line < 3; ++line) {
      const std::string conductor = ":" + std::to_string(line);
      if (tails) {
        c_.series(own + conductor, bar(to, line), ohms(e.tails), {{e.name + " tails", line, 1}});
      } else {
        c_.same(own + conductor, bar(to, line));
      }
    }
    if (!has_star) return;
    const std::string star = e.name + ":s";
    const bool by_default = e.star.kind == StarPoint::Kind::by_default;
    const bool solid =
        !no_link && (e.star.kind == StarPoint::Kind::solid || (by_default && e.earthing != Earthing::it));
    const bool impedance = !no_link && e.star.kind == StarPoint::Kind::impedance;
    if (board(to).high || e.earthing == Earthing::it) {
      if (solid) c_.same(star, "0");
      if (impedance) c_.series(star, "0", e.star.ohms, {});
    }
    if (board(to).high) return;
    if (at_reference_.count(e.name) > 0 || e.earthing == Earthing::tt) c_.same(star, "0");
    if (tails) {
      c_.series(star, bar(to, kN), ohms(e.tails), {{e.name + " tails", kN, 1}});
    } else {
      c_.same(star, bar(to, kN));
    }
    if (e.link_at_board) {
      c_.same(bar(to, kN), bar(to, kPE));
    } else if (is_tn(e.earthing) && (solid || impedance)) {
      const std::string terminal = own + ":4";
      if (solid) c_.same(star, terminal);
      if (impedance) c_.series(star, terminal, e.star.ohms, {});
      if (tails) {
        c_.series(terminal, bar(to, kPE), ohms(e.tails), {{e.name + " tails", kPE, 1}});
      } else {
        c_.same(terminal, bar(to, kPE));
      }
    }
  }

  void write_source(const Source& s) {
    Complex z1, z0;
    const bool most = condition_ == Condition::maximum;
    const double U = board(s.board).U;
    if (s.kind == Source::Kind::supply) {
      z1 = s.z1[most ? 0 : 1] / 1000.0;
      z0 = s.z0[most ? 0 : 1] / 1000.0;
    } else if (s.kind == Source::Kind::transformer) {
      const double base = s.secondary * s.secondary / s.rating;
      const double ur = s.losses / s.rating;
      const double ux = std::sqrt(s.uk * s.uk - ur * ur);
      const double q = (most ? 1.1 / s.level_max : 1.0 / s.level_min) * s.secondary * s.secondary;
      z1 = base * Complex{ur, ux} + std::polar(q, std::atan(10.0));
      z0 = base * Complex{ur * s.r0_over_r1, ux * s.x0_over_x1};
    } else {
      const double base = U * U / s.rating;
      const double r = most ? s.r : 0.0;  // the sustained current is one of reactances
      z0 = base * Complex{r, s.x0};
      z1 = base * Complex{r, most ? s.xd_subtransient : s.xd};
      if (!most && s.sustained > 0) z1 = {0, U / (std::sqrt(3.0) * s.sustained * s.rating / (std::sqrt(3.0) * U))};
    }
    const std::string inner = s.name + "x";
    for (std::size_t line = 0; line < 3; ++line) {
      c_.series(inner, s.name + "t:" + std::to_string(line), z1, {{s.name, line, 1}, {s.name, kN, -1}});
    }
    c_.series(s.name + ":s", inner, (z0 - z1) / 3.0, {});
    if (s.farads > 0) c_.capacitor(s.name + ":s", "0", s.farads);
    connect(s, s.board, true, false);
  }

  void write_transformer(const Transformer& t) {
    const double base = t.secondary * t.secondary / t.rating;
    const double ur = t.losses / t.rating;
    const Complex z1 = base * Complex{ur, std::sqrt(t.uk * t.uk - ur * ur)};
    const Complex z0{z1.real() * t.r0_over_r1, z1.imag() * t.x0_over_x1};
    const std::string p = t.name + " primary";
    const std::string s = t.name + " secondary";
    const bool delta = t.primary_group == "D";
    const bool secondary_delta = t.secondary_group == "d";
    // Henry of one turn (a volt a turn): a magnetising reactance of a milliard short-circuit reactances.
    const double henry = 1e9 * std::abs(z1) / (c_.omega() * t.secondary * t.secondary);
    std::array<std::vector<std::string>, 3> legs;
    const auto coil = [&](int leg, double volts, const std::string& from, const std::string& to,
                          std::vector<Share> shares) {
      legs[at(leg)].push_back(c_.inductor(from, to, volts * volts * henry, std::move(shares)));
    };

    const double primary = t.primary * (1 + t.tap);
    const std::string primary_star = t.name + ":p";
    for (std::size_t line = 0; line < 3; ++line) {
      const std::size_t next = (line + 1) % 3;
      const int leg = static_cast<int>(line);
      if (delta) {
        coil(leg, primary, bar(t.from, line), bar(t.from, next), {{p, line, 1}, {p, next, -1}});
      } else {
        coil(leg, primary / std::sqrt(3.0), bar(t.from, line), primary_star, {{p, line, 1}});
      }
    }
    if (t.primary_group == "YN") {
      if (t.primary_star.kind == StarPoint::Kind::impedance) {
        c_.series(primary_star, "0", t.primary_star.ohms, {});
      } else {
        c_.same(primary_star, "0");
      }
    }

    const std::string common = t.name + "x";
    for (std::size_t line = 0; line < 3; ++line) {
      const int k = static_cast<int>(line);
      const std::string terminal = t.name + "t:" + std::to_string(line);
      const std::string inner = t.name + "y" + std::to_string(line);
      // The impedance first, then the coil from `inner`; reversed coils by their ends.
      const auto wound = [&](int leg, int sign, double volts, const std::string& from, const std::string& to) {
        coil(leg, volts, sign > 0 ? from : to, sign > 0 ? to : from, {});
      };
      if (secondary_delta) {
        const std::size_t next = (line + 1) % 3;
        const std::string end = t.name + "t:" + std::to_string(next);
        c_.series(terminal, inner, 3.0 * z1, {{s, line, -1}, {s, next, 1}});
        if (delta) {
          const Seat seat = between_lines((t.clock + 11) % 12);
          // Coil A-B is leg 0, B-C leg 1, C-A leg 2; the other way round it is reversed.
          const bool forward = seat.minus == (seat.plus + 1) % 3;
          wound(((forward ? seat.plus : seat.minus) + k) % 3, forward ? 1 : -1, t.secondary, inner, end);
        } else {
          const auto [leg, sign] = on_leg((t.clock + 11) % 12);
          wound((leg + k) % 3, sign, t.secondary, inner, end);
        }
        continue;
      }
      c_.series(terminal, inner, z1, {{s, line, -1}, {s, kN, 1}});
      if (t.secondary_group == "zn") {
        const Seat seat = delta ? between_deltas(t.clock) : between_lines(t.clock);
        wound((seat.plus + k) % 3, 1, t.secondary / 3.0, inner, inner + "h");
        wound((seat.minus + k) % 3, -1, t.secondary / 3.0, inner + "h", common);
      } else if (delta) {
        const Seat seat = between_lines(t.clock);
        const bool forward = seat.minus == (seat.plus + 1) % 3;
        wound(((forward ? seat.plus : seat.minus) + k) % 3, forward ? 1 : -1, t.secondary / std::sqrt(3.0), inner,
              common);
      } else {
        const auto [leg, sign] = on_leg(t.clock);
        wound((leg + k) % 3, sign, t.secondary / std::sqrt(3.0), inner, common);
      }
    }
    if (!secondary_delta) c_.series(common, t.name + ":s", (z0 - z1) / 3.0, {});
    // A delta that does not exist carries what the core's path carries.
    if (t.primary_group == "Y" && !secondary_delta) {
      for (int k = 0; k < 3; ++k) {
        const auto corner = [&](int i) { return i % 3 == 0 ? std::string("0") : t.name + "d" + std::to_string(i % 3); };
        coil(k, t.secondary, corner(k), corner(k + 1), {});
      }
    }
    for (const auto& leg : legs) c_.couple(leg);
    connect(t, t.to, !secondary_delta, t.no_link);
  }

  const Network& n_;
  Condition condition_;
  SpiceCircuit c_;
  std::string opening_;
  std::set<std::string> at_reference_;
};

}  // namespace

std::vector<std::vector<DeckAnswer>> simulate(const std::vector<Network>& networks,
                                              const std::vector<std::vector<DeckFault>>& faults, Condition condition) {
  const support::Folder folder;
  std::string control = "reference networks\n.control\nset filetype=ascii\nset appendwrite\n";
  std::vector<std::map<std::string, std::vector<Share>>> shares;
  for (std::size_t i = 0; i < networks.size(); ++i) {
    Deck deck(networks[i], condition);
    deck.write();
    std::string runs;
    for (std::size_t k = 0; k < faults[i].size(); ++k) {
      std::string closing;
      deck.prepare_fault(std::to_string(k), faults[i][k], closing);
      runs += closing + "ac lin 1 50 50\nwrite answers.raw all\n" + deck.take_opening() + "destroy all\n";
    }
    const std::string file = "deck" + std::to_string(i) + ".cir";
    folder.write(file, deck.circuit().text());
    shares.push_back(deck.circuit().shares());
    control += "source " + file + "\n" + runs + "remcirc\n";
  }
  folder.write("all.cir", control + "quit\n.endc\n.end\n");
  const support::Outcome outcome =
      support::run_program({"env", "MALLOC_TRIM_THRESHOLD_=1000000000", "MALLOC_MMAP_THRESHOLD_=1000000000",
                            "MALLOC_TOP_PAD_=64000000", "ngspice", "-b", "all.cir"},
                           folder);
  const auto plots = read_raw(folder.read("answers.raw"));
  std::size_t n_expected = 0;
  for (const auto& some : faults) n_expected += some.size();
  if (plots.size() != n_expected) {
    FAIL("ngspice gave " << plots.size() << " of " << n_expected << " answers\n" << outcome.out << outcome.err);
  }
  std::vector<std::vector<DeckAnswer>> answers(networks.size());
  auto plot = plots.begin();
  for (std::size_t i = 0; i < networks.size(); ++i) {
    for (std::size_t k = 0; k < faults[i].size(); ++k, ++plot) {
      DeckAnswer answer;
      for (const auto& [vector, amps] : *plot) {
        const auto found = shares[i].find(vector);
        if (found == shares[i].end()) continue;
        for (const Share& share : found->second) {
          if (share.element.rfind("fault ", 0) != 0) {
            answer.carried[{share.element, share.conductor}] += static_cast<double>(share.sign) * amps;
          } else if (share.element == "fault " + std::to_string(k)) {
            answer.into_fault[share.conductor] += static_cast<double>(share.sign) * amps;
          }
        }
      }
      answers[i].push_back(std::move(answer));
    }
  }
  return answers;
}

}  // namespace sunder::reference::meshed
