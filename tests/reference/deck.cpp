// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/deck.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <iomanip>
#include <sstream>

#include "tests/support/program.h"

namespace sunder::reference {

namespace {

using Complex = std::complex<double>;

constexpr double kPi = 3.14159265358979323846;
constexpr double kOmega = 2.0 * kPi * 50.0;  // [rad/s]
// ngspice takes a resistor of 0 ohm for one of 1 mohm, so "none" is this; real ones are above 1e-5.
constexpr double kNoResistance = 1e-9;  // [ohm]
constexpr std::size_t kN = 3;
constexpr std::size_t kPE = 4;

// The conductor beside a cable in these networks: 16 mm2 copper, IEC 60228 class 2, with the reactance
// that the program's own data lists for a single of that size (models/library/cables-singles.toml).
constexpr double kSeparateR20 = 1.15e-3;  // [ohm/m]
constexpr double kSeparateX = 0.11e-3;    // [ohm/m]

// One path of a run along which current flows [ohm/m].
struct Strand {
  double r = 0;
  double x = 0;
};

struct Strands {
  Strand live;
  std::vector<Strand> protective;
};

// Resistances at the temperatures of a condition. Maximum: everything at 20 degC. Minimum: conductors
// in the cable at its insulation's limit, a conductor beside it at ambient, armour at 60 or 80 degC and
// ten per cent more for the lay of its wires.
Strands strands_of(const Run& run, Condition condition, double ambient_degc) {
  const Construction& construction = construction_of(run);
  const Size& size = size_of(run);
  const bool hot = condition == Condition::minimum;
  const double core = hot ? 1.0 + 0.004 * (construction.limit_degc - 20.0) : 1.0;
  const double beside = hot ? 1.0 + 0.004 * (ambient_degc - 20.0) : 1.0;
  const double armour_degc = construction.limit_degc > 80.0 ? 80.0 : 60.0;
  const double armour = hot ? 1.1 * (1.0 + 0.0045 * (armour_degc - 20.0)) : 1.0;

  Strands strands;
  strands.live = {size.r20 * 1e-3 * core, size.x * 1e-3};
  const Strand wires{size.armour_r20 * 1e-3 * armour, size.armour_x * 1e-3};
  const Strand separate{kSeparateR20 * beside, kSeparateX};
  switch (run.cpc) {
    case Cpc::built_in:
      strands.protective = {{size.cpc_r20 * 1e-3 * core, size.x * 1e-3}};
      break;
    case Cpc::core:
      strands.protective = {strands.live};
      break;
    case Cpc::single: {
      Run protective = run;
      protective.mm2 = run.cpc_mm2;
      const Size& single = size_of(protective);
      strands.protective = {{single.r20 * 1e-3 * core, single.x * 1e-3}};
      break;
    }
    case Cpc::armour:
      strands.protective = {wires};
      break;
    case Cpc::armour_and_core:
      strands.protective = {wires, strands.live};
      break;
    case Cpc::armour_and_separate:
      strands.protective = {wires, separate};
      break;
    case Cpc::separate:
      strands.protective = {separate};
      break;
  }
  return strands;
}

class Writer {
 public:
  Writer(const Network& network, Condition condition) : network_(network), condition_(condition) {
    text_ << std::setprecision(15);
  }

  Deck write() {
    at_board_[network_.boards.front().name] = network_.source.transformer ? transformer() : supply();
    for (const Board& board : network_.boards) write_board(board);
    return {text_.str(), std::move(places_), !network_.source.transformer};
  }

 private:
  using Nodes = std::array<std::string, 5>;

  std::string fresh() { return "k" + std::to_string(++count_); }

  void series(const std::string& from, const std::string& to, double r, double x) {
    const std::string id = std::to_string(++count_);
    const double ohms = r == 0.0 ? kNoResistance : r;
    if (x == 0.0) {
      text_ << "R" << id << ' ' << from << ' ' << to << ' ' << ohms << '\n';
      return;
    }
    text_ << "R" << id << ' ' << from << " j" << id << ' ' << ohms << '\n'
          << "L" << id << " j" << id << ' ' << to << ' ' << x / kOmega << '\n';
  }

  // A length of a run from given nodes to new ones, each parallel cable by itself.
  Nodes lay(const Run& run, double length, const Nodes& from, const std::vector<int>& lines, bool neutral) {
    const Strands strands = strands_of(run, condition_, network_.ambient_degc);
    Nodes to;
    for (const int line : lines) to[static_cast<std::size_t>(line)] = fresh();
    if (neutral) to[kN] = fresh();
    to[kPE] = fresh();
    connect(run, length, from, to);
    return to;
  }

  void connect(const Run& run, double length, const Nodes& from, const Nodes& to) {
    const Strands strands = strands_of(run, condition_, network_.ambient_degc);
    for (int cable = 0; cable < run.in_parallel; ++cable) {
      for (std::size_t conductor = 0; conductor < 4; ++conductor) {
        if (to[conductor].empty()) continue;
        series(from[conductor], to[conductor], strands.live.r * length, strands.live.x * length);
      }
      if (to[kPE].empty()) continue;
      for (const Strand& strand : strands.protective) {
        series(from[kPE], to[kPE], strand.r * length, strand.x * length);
      }
    }
  }

  // Node 0 is the star point. Each line of a declared supply holds an impedance that every question
  // sets to the declared loop of its kind of fault, so the return conductors hold none.
  Nodes supply() {
    Nodes at;
    for (std::size_t line = 0; line < 3; ++line) {
      const std::string id = std::to_string(line + 1);
      at[line] = "s" + id;
      text_ << "Rsource" << id << " 0 js" << id << ' ' << kNoResistance << '\n'
            << "Lsource" << id << " js" << id << " s" << id << " 0\n";
    }
    at[kN] = "0";
    at[kPE] = "0";
    return end_of_tails(at);
  }

  // Dyn: MV lines a b c behind the network's impedance, three delta windings, three star windings.
  // An ideal core makes u2 = u1 / ratio and i1 = i2 / ratio; the short-circuit impedance stands in the
  // star winding. What Z0 lacks or has more than Z1 stands at the star point.
  Nodes transformer() {
    const Source& source = network_.source;
    constexpr double kPrimary = 11e3;  // [V]; any other would do
    const double z = source.uk * source.secondary * source.secondary / source.rating;
    const double r = source.losses * source.secondary * source.secondary / (source.rating * source.rating);
    const double x = std::sqrt(z * z - r * r);
    const bool greatest = condition_ == Condition::maximum;
    const double level = greatest ? source.fault_level_max : source.fault_level_min;
    // Volts of one star winding for a volt of one delta winding.
    const double turns = source.secondary / std::sqrt(3.0) / kPrimary;
    const double zq = level > 0 ? (greatest ? 1.1 : 1.0) * kPrimary * kPrimary / level : 0.0;

    const double excess = (source.z0_over_z1 - 1.0) / 3.0;
    std::string star = "0";
    if (excess != 0.0) {
      star = "star";
      series("0", star, excess * r, excess * x);
    }
    const std::array<std::string, 3> mv = {"mva", "mvb", "mvc"};
    for (const std::string& node : mv) series("0", node, 0.0995 * zq, 0.995 * zq);
    Nodes at;
    for (std::size_t leg = 0; leg < 3; ++leg) {
      const std::string id = std::to_string(leg + 1);
      const std::string& from = mv[leg];
      const std::string& to = mv[(leg + 2) % 3];
      text_ << "Eleg" << id << " e" << id << ' ' << star << ' ' << from << ' ' << to << ' ' << turns << '\n'
            << "Vleg" << id << " e" << id << " w" << id << " 0\n"
            << "Fleg" << id << ' ' << from << ' ' << to << " Vleg" << id << ' ' << turns << '\n';
      at[leg] = "s" + id;
      series("w" + id, at[leg], r, x);
    }
    at[kN] = "0";
    at[kPE] = "0";
    return end_of_tails(at);
  }

  Nodes end_of_tails(const Nodes& from) {
    const Source& source = network_.source;
    Nodes at = from;
    if (source.tails_present) {
      Nodes to = {fresh(), fresh(), fresh(), fresh(), ""};
      if (!source.link_at_board && source.earthing != Earthing::TT) to[kPE] = fresh();
      connect(source.tails, source.tails.length, from, to);
      if (source.link_at_board) to[kPE] = to[kN];
      at = to;
    }
    if (source.earthing == Earthing::TT) {
      at[kPE] = fresh();
      series("0", at[kPE], network_.electrode, 0.0);
    }
    return at;
  }

  void write_board(const Board& board) {
    const Nodes& at = at_board_.at(board.name);
    places_.push_back({board.name, at});
    for (const Submain& submain : network_.submains) {
      if (submain.from != board.name) continue;
      const std::string phases = phases_of_board(network_, submain.to);
      at_board_[submain.to] = lay(submain.run, submain.run.length, at, lines_of(phases), neutral_of(phases));
    }
    for (const Circuit& circuit : network_.circuits) {
      if (circuit.board != board.name) continue;
      const std::vector<int> lines = lines_of(circuit.phases);
      const bool neutral = neutral_of(circuit.phases);
      const std::string name = board.name + "/" + circuit.name;
      if (circuit.ring) {
        write_ring(circuit, name, at, lines, neutral);
      } else {
        places_.push_back({name, lay(circuit.run, circuit.run.length, at, lines, neutral)});
      }
    }
  }

  // Out from the board, past every place of interest, and back to the board.
  void write_ring(const Circuit& circuit, const std::string& name, const Nodes& board, const std::vector<int>& lines,
                  bool neutral) {
    struct Stop {
      double at = 0;
      int spur = -1;  // -1: the middle
    };
    const double whole = circuit.run.length;
    std::vector<Stop> stops = {{whole / 2.0, -1}};
    for (std::size_t i = 0; i < circuit.spurs.size(); ++i) {
      stops.push_back({circuit.spurs[i].at, static_cast<int>(i)});
    }
    std::sort(stops.begin(), stops.end(), [](const Stop& a, const Stop& b) { return a.at < b.at; });
    Nodes here = board;
    double travelled = 0;
    for (const Stop& stop : stops) {
      if (stop.at > travelled) here = lay(circuit.run, stop.at - travelled, here, lines, neutral);
      travelled = stop.at;
      if (stop.spur < 0) {
        places_.push_back({name + "/middle", here});
        continue;
      }
      const double length = circuit.spurs[static_cast<std::size_t>(stop.spur)].length;
      places_.push_back(
          {name + "/spur" + std::to_string(stop.spur + 1), lay(circuit.run, length, here, lines, neutral)});
    }
    // `connect` goes to the conductors that the second set has: only those of the ring.
    Nodes end = board;
    for (std::size_t conductor = 0; conductor < 5; ++conductor) {
      if (here[conductor].empty()) end[conductor].clear();
    }
    connect(circuit.run, whole - travelled, here, end);
  }

  const Network& network_;
  Condition condition_;
  std::ostringstream text_;
  std::vector<Place> places_;
  std::map<std::string, Nodes> at_board_;
  int count_ = 0;
};

// The conductors between which a question's current flows, and its share with phase angle [degrees].
struct Injection {
  std::string node;
  double amps = 1;
  double degrees = 0;
};

std::vector<Injection> injections(const Place& place, const Question& question) {
  const auto line = [&](std::size_t i) { return place.nodes[static_cast<std::size_t>(question.lines[i])]; };
  switch (question.fault) {
    case Fault::three_phase:
      return {{line(0), 1, 0}, {line(1), 1, -120}, {line(2), 1, 120}};
    case Fault::line_line:
      return {{line(0), 1, 0}, {line(1), -1, 0}};
    case Fault::line_neutral:
      return {{line(0), 1, 0}, {place.nodes[kN], -1, 0}};
    case Fault::line_earth:
      return {{line(0), 1, 0}, {place.nodes[kPE], -1, 0}};
  }
  std::abort();
}

[[noreturn]] void ngspice_failed(const support::Outcome& outcome) {
  std::fprintf(stderr, "ngspice did not answer (status %d)\n%s\n%s\n", outcome.status, outcome.out.c_str(),
               outcome.err.c_str());
  std::abort();
}

}  // namespace

Deck build_deck(const Network& network, Condition condition) { return Writer(network, condition).write(); }

std::vector<Complex> ask(const Deck& deck, const std::vector<Question>& questions) {
  std::ostringstream text;
  text << std::setprecision(15) << "sunder reference network\n" << deck.circuit;
  std::ostringstream control;
  control << std::setprecision(15) << ".control\nset numdgt=12\n";
  std::map<std::string, bool> has_source;
  std::size_t n_printed = 0;
  for (const Question& question : questions) {
    const auto flows = injections(deck.places[static_cast<std::size_t>(question.place)], question);
    if (deck.declared_source) {
      const double r = std::max(question.source.real(), kNoResistance);
      for (const char* line : {"1", "2", "3"}) {
        control << "alter rsource" << line << " = " << r << "\nalter lsource" << line << " = "
                << question.source.imag() / kOmega << "\n";
      }
    }
    for (const Injection& flow : flows) {
      if (flow.node == "0") continue;
      if (!has_source[flow.node]) text << "I" << flow.node << " 0 " << flow.node << " dc 0 ac 0 0\n";
      has_source[flow.node] = true;
      control << "alter i" << flow.node << " acmag = " << flow.amps << "\nalter i" << flow.node
              << " acphase = " << flow.degrees << "\n";
    }
    control << "ac lin 1 50 50\nprint";
    for (const Injection& flow : flows) {
      if (flow.node == "0") continue;
      control << " real(v(" << flow.node << ")) imag(v(" << flow.node << "))";
      n_printed += 2;
    }
    control << "\n";
    for (const Injection& flow : flows) {
      if (flow.node != "0") control << "alter i" << flow.node << " acmag = 0\n";
    }
    control << "destroy all\n";
  }
  control << "quit\n.endc\n.end\n";

  const support::Folder folder;
  folder.write("deck.cir", text.str() + control.str());
  // ngspice frees and asks for its memory anew in each analysis; told to keep it, it is twenty times faster.
  const support::Outcome outcome =
      support::run_program({"env", "MALLOC_TRIM_THRESHOLD_=1000000000", "MALLOC_MMAP_THRESHOLD_=1000000000",
                            "MALLOC_TOP_PAD_=64000000", "ngspice", "-b", "deck.cir"},
                           folder);
  std::vector<double> printed;
  std::istringstream lines(outcome.out);
  for (std::string line; std::getline(lines, line);) {
    if (line.rfind("real(", 0) != 0 && line.rfind("imag(", 0) != 0) continue;
    printed.push_back(std::atof(line.c_str() + line.find('=') + 1));
  }
  if (printed.size() != n_printed) ngspice_failed(outcome);

  std::vector<Complex> answers;
  auto next = printed.begin();
  for (const Question& question : questions) {
    const auto flows = injections(deck.places[static_cast<std::size_t>(question.place)], question);
    // The voltage across what carries the current is the sum of conjugate(I) * V over its conductors:
    // V1 - V2 for a loop; for three lines, turned back by their angles, three times that of one.
    Complex across = 0;
    for (const Injection& flow : flows) {
      if (flow.node == "0") continue;
      const Complex volts{*next, *(next + 1)};
      next += 2;
      across += std::polar(1.0, -flow.degrees * kPi / 180.0) * flow.amps * volts;
    }
    answers.push_back(question.fault == Fault::three_phase ? across / 3.0 : across);
  }
  return answers;
}

}  // namespace sunder::reference
