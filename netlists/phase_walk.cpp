// SPDX-License-Identifier: Apache-2.0
/// @file
/// What follows from the conductors and the voltage that each board has: the cables of submains, the conductors of
/// links, where a combined conductor may be, the currents of motors.
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <optional>
#include <utility>

#include "netlists/parts.h"
#include "netlists/reach.h"
#include "netlists/source_keys.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;
using models::Quantity;

using Sets = std::vector<std::optional<ConductorSet>>;

constexpr std::array kLive = {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N};

std::size_t at(int handle) noexcept { return static_cast<std::size_t>(handle); }

std::string lacking(ConductorSet wanted, ConductorSet has) {
  std::string text;
  for (const Conductor c : kLive) {
    if (!wanted.has(c) || has.has(c)) continue;
    if (!text.empty()) text += ' ';
    text += models::name(c);
  }
  return text;
}

ConductorSet common_of(ConductorSet a, ConductorSet b) {
  ConductorSet both;
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE}) {
    if (a.has(c) && b.has(c)) both.add(c);
  }
  return both;
}

std::string_view kind_of(const models::Source& source) noexcept {
  if (source.generator.present) return "generator";
  if (source.inverter.present) return "inverter";
  return source.transformer ? "transformer" : "supply";
}

// Nominal voltages that can belong to one board: 230/400 and 240/415 do, 400 and 690 do not.
bool agree(double a, double b) noexcept {
  constexpr double kSlack = 0.1;
  return a <= 0 || b <= 0 || std::abs(a / b - 1) <= kSlack;
}

std::string volts(double value) { return models::format_quantity(value, Quantity::voltage); }

Sets read_all(Context& context, const std::vector<PendingRun>& runs, const auto& elements, std::string_view kind) {
  Sets sets(elements.size());
  for (std::size_t k = 0; k < elements.size(); ++k) {
    if (runs[k].phases == nullptr) continue;
    sets[k] = read_phases(context, *runs[k].phases, fmt::format("{} '{}'", kind, elements[k].name));
  }
  return sets;
}

class PhaseWalk {
 public:
  explicit PhaseWalk(Context& context)
      : context_(context),
        network_(context.network),
        wanted_(read_all(context, context.submain_runs, network_.submains, "submain")),
        joins_(read_all(context, context.link_runs, network_.links, "link")),
        reach_(context, wanted_, joins_),
        done_(network_.submains.size(), false) {}

  void run() {
    for (const int board : reach_.order()) {
      for (const std::size_t submain : reach_.leaving(board)) walk(submain);
    }
    complain_unfed();
    // submains of boards that nothing feeds still get their cables read, so that all errors come out in one run
    for (std::size_t k = 0; k < network_.submains.size(); ++k) {
      if (!done_[k]) walk(k);
    }
    for (std::size_t k = 0; k < network_.links.size(); ++k) join(k);
    for (std::size_t k = 0; k < network_.circuits.size(); ++k) check_circuit(k);
    check_voltages();
    check_earths();
    for (models::Motor& motor : network_.motors) finish(motor);
  }

 private:
  [[nodiscard]] const std::string& name_of(int board) const { return network_.boards[at(board)].name; }
  [[nodiscard]] bool known(int board) const { return board >= 0 && reach_.at(board).reached; }

  void refuse_phases(const PendingRun& run, models::Origin element, const std::string& what, ConductorSet wanted,
                     int board) {
    const ConductorSet has = reach_.at(board).has;
    const models::Origin place = run.phases != nullptr ? run.phases->at : element;
    context_.complaints.error(place, run.phases != nullptr ? run.phases->width : 1,
                              fmt::format("{} needs {}, but board '{}' has {}", what, lacking(wanted, has),
                                          name_of(board), models::phases_text(has)));
  }

  void complain_unfed() {
    const bool any_source = std::any_of(network_.sources.begin(), network_.sources.end(),
                                        [](const models::Source& source) { return source.board >= 0; });
    for (std::size_t k = 0; k < network_.boards.size(); ++k) {
      if (known(static_cast<int>(k))) continue;
      // a feed that could not be read has been complained of already
      if (any_source && !feed_unread(static_cast<int>(k))) {
        context_.complaints.error(network_.boards[k].at, 1,
                                  fmt::format("nothing feeds board '{}'", network_.boards[k].name),
                                  "a supply, a transformer or a submain leads to a board");
      }
    }
  }

  // Whether some feed names no board or might have been lost.
  [[nodiscard]] bool feed_unread(int board) const {
    if (!context_.lost.empty() || context_.refused) return true;
    const bool submain = std::any_of(network_.submains.begin(), network_.submains.end(), [&](const models::Submain& s) {
      return (s.to == board && s.from < 0) || s.to < 0;
    });
    const bool source = std::any_of(network_.sources.begin(), network_.sources.end(),
                                    [](const models::Source& s) { return s.board < 0; });
    const bool transformer =
        std::any_of(network_.transformers.begin(), network_.transformers.end(),
                    [&](const models::Transformer& t) { return (t.to == board && t.from < 0) || t.to < 0; });
    const bool link = std::any_of(network_.links.begin(), network_.links.end(),
                                  [](const models::Link& l) { return l.from < 0 || l.to < 0; });
    return submain || source || transformer || link;
  }

  void walk(std::size_t k) {
    done_[k] = true;
    models::Submain& submain = network_.submains[k];
    PendingRun run = context_.submain_runs[k];
    const std::string what = fmt::format("submain '{}'", submain.name);
    const int feeding = reach_.fed_backward(k) ? submain.to : submain.from;
    const bool high = known(feeding) && reach_.at(feeding).high;
    if (reach_.wrong(k)) {
      refuse_phases(run, submain.at, what, *wanted_[k], feeding);
      submain.conductors = {};
    } else if (run.phases != nullptr) {
      submain.conductors = wanted_[k].value_or(ConductorSet{});
    } else {
      submain.conductors = reach_.carried(k);
      submain.conductors.add(Conductor::PE);
    }
    if (high) {
      submain.conductors.remove(Conductor::PE);
      if (run.cpc != nullptr && trimmed(run.cpc->text) != "none") {
        context_.complaints.error(
            run.cpc->at, run.cpc->width,
            fmt::format("cpc of {} has no meaning: above 1 kV the lines alone are carried", what));
      }
      submain.pen = false;
      run.cpc = &no_cpc();
    } else if (run.cpc != nullptr && trimmed(run.cpc->text) == "none") {
      submain.conductors.remove(Conductor::PE);
      context_.assume(submain.name, "no protective conductor: nothing along it is taken to need one (Class II)",
                      run.cpc->at);
    }
    if (run.cable == nullptr && submain.sequence.at.line > 0) {
      finish_sequence(submain, run, what, high);
      return;
    }
    if (submain.pen && !check_pen(*run.cpc, submain.conductors, feeding, what, run.phases != nullptr)) return;
    // where the conductors are not known, at least the name, size and cpc are read
    const ConductorSet carried = submain.conductors.lines() > 0 ? submain.conductors : ConductorSet{Conductor::L1};
    if (read_cable(context_, run, carried, what, submain.name, false, submain.at, submain.cable)) assume_close(submain);
  }

  // A combined conductor needs a neutral, and a board where the two are one already.
  bool check_pen(const Value& cpc, ConductorSet conductors, int feeding, const std::string& what, bool phases_said) {
    if (conductors.lines() == 0 || !known(feeding)) return true;  // complained of
    if (!conductors.has(Conductor::N)) {
      context_.complaints.error(cpc.at, cpc.width,
                                phases_said
                                    ? fmt::format("cpc of {} is PEN, but its phases have no N", what)
                                    : fmt::format("cpc of {} is PEN, but board '{}' has no N", what, name_of(feeding)));
      return false;
    }
    if (reach_.at(feeding).joined) return true;
    context_.complaints.error(
        cpc.at, cpc.width,
        fmt::format("cpc of {} is PEN, but at board '{}' N and PE are separate: neutral and protective conductor must "
                    "not be joined again",
                    what, name_of(feeding)),
        "n_pe_link = true is for a board where they are joined for the first time");
    return true;
  }

  void finish_sequence(models::Submain& submain, const PendingRun& run, const std::string& what, bool high) {
    using models::Return;
    Return& through = submain.sequence.through;
    if (run.through == nullptr) {
      through = high ? Return::earth : Return::both;
    } else if (high && through != Return::earth) {
      context_.complaints.error(
          run.through->at, run.through->width,
          fmt::format("return of {} is '{}', but above 1 kV only the earth returns", what, run.through->text));
      return;
    }
    ConductorSet& set = submain.conductors;
    const bool neutral = through == Return::neutral || through == Return::both;
    const bool said = run.phases != nullptr && set.lines() > 0;
    if (said && !neutral && set.has(Conductor::N) && run.through != nullptr && set.lines() > 1) {
      context_.complaints.error(run.through->at, run.through->width,
                                fmt::format("return of {} is '{}', but its phases have an N", what, run.through->text));
    }
    if (through == Return::neutral && set.lines() > 0 && !set.has(Conductor::N)) {
      context_.complaints.error(run.through->at, run.through->width,
                                fmt::format("return of {} is 'N', but it has no N", what));
    }
    if (!neutral) set.remove(Conductor::N);
    if (through == Return::neutral || through == Return::earth) set.remove(Conductor::PE);
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

  // A link joins what both its boards have, or of that what it is said to join.
  void join(std::size_t k) {
    models::Link& link = network_.links[k];
    if (!known(link.from) || !known(link.to)) return;
    const std::string what = fmt::format("link '{}'", link.name);
    const ConductorSet common = common_of(reach_.at(link.from).has, reach_.at(link.to).has);
    link.conductors = common;
    if (common.lines() == 0) {
      context_.complaints.error(link.at, 1,
                                fmt::format("{} has nothing to join: board '{}' has {}, board '{}' has {}", what,
                                            name_of(link.from), models::phases_text(reach_.at(link.from).has),
                                            name_of(link.to), models::phases_text(reach_.at(link.to).has)));
      return;
    }
    if (!joins_[k]) return;
    for (const int board : {link.from, link.to}) {
      if (lacking(*joins_[k], reach_.at(board).has).empty()) continue;
      refuse_phases(context_.link_runs[k], link.at, what, *joins_[k], board);
      return;
    }
    link.conductors = common_of(common, *joins_[k]);
  }

  void check_circuit(std::size_t k) {
    models::Circuit& circuit = network_.circuits[k];
    if (circuit.conductors.empty() || !known(circuit.board)) return;
    const Place& place = reach_.at(circuit.board);
    const std::string& board = name_of(circuit.board);
    const PendingRun& run = context_.circuit_runs[k];
    const std::string what = fmt::format("circuit '{}/{}'", board, circuit.name);
    if (place.high) {
      context_.complaints.error(
          circuit.at, 1, fmt::format("{} stands on a board of {}; final circuits end at 1 kV", what, volts(place.U)));
    } else if (!place.has.contains(circuit.conductors)) {
      refuse_phases(run, circuit.at, what, circuit.conductors, circuit.board);
    } else if (circuit.pen) {
      check_pen(*run.cpc, circuit.conductors, circuit.board, what, true);
    }
  }

  void check_pair(models::Origin origin, const std::string& what, int a, int b) {
    if (!known(a) || !known(b)) return;
    const Place& one = reach_.at(a);
    const Place& other = reach_.at(b);
    if (agree(one.U0, other.U0)) return;
    context_.complaints.error(origin, 1,
                              fmt::format("{} joins board '{}' of {} and board '{}' of {}", what, name_of(a),
                                          volts(one.U), name_of(b), volts(other.U)));
  }

  void check_voltages() {
    if (!context_.voltages_known) return;
    for (const models::Source& source : network_.sources) {
      if (!known(source.board) || agree(source.U0, reach_.at(source.board).U0)) continue;
      context_.complaints.error(
          source.at, 1,
          fmt::format("{} '{}' delivers {} between lines to board '{}', which has {}", kind_of(source), source.name,
                      volts(source.U), name_of(source.board), volts(reach_.at(source.board).U)));
    }
    for (const models::Submain& submain : network_.submains) {
      check_pair(submain.at, fmt::format("submain '{}'", submain.name), submain.from, submain.to);
    }
    for (const models::Link& link : network_.links) {
      check_pair(link.at, fmt::format("link '{}'", link.name), link.from, link.to);
    }
    for (const models::Transformer& transformer : network_.transformers) {
      const std::string what = fmt::format("transformer '{}'", transformer.name);
      if (known(transformer.to) && !agree(transformer.U0, reach_.at(transformer.to).U0)) {
        context_.complaints.error(
            transformer.at, 1,
            fmt::format("{} delivers {} between lines to board '{}', which has {}", what, volts(transformer.U),
                        name_of(transformer.to), volts(reach_.at(transformer.to).U)));
      }
      if (!known(transformer.from)) continue;
      const Place& place = reach_.at(transformer.from);
      constexpr double kLeast = 0.8, kMost = 1.25;
      if (transformer.primary > 0 &&
          (transformer.primary < kLeast * place.U || transformer.primary > kMost * place.U)) {
        context_.complaints.error(transformer.at, 1,
                                  fmt::format("{} has a primary of {}, but board '{}' has {}", what,
                                              volts(transformer.primary), name_of(transformer.from), volts(place.U)));
      }
      if (place.has.lines() < 3) {
        context_.complaints.error(transformer.at, 1,
                                  fmt::format("{} needs L1 L2 L3, but board '{}' has {}", what,
                                              name_of(transformer.from), models::phases_text(place.has)));
      }
    }
  }

  // What belongs to protective conductors and neutrals, which boards above 1 kV have not.
  void check_earths() {
    const auto high = [&](int board) { return known(board) && reach_.at(board).high; };
    for (const models::Electrode& electrode : network_.electrodes) {
      if (!high(electrode.board)) continue;
      context_.complaints.error(electrode.at, 1,
                                fmt::format("electrode '{}' earths the protective conductors of board '{}', which "
                                            "has none above 1 kV",
                                            electrode.name, name_of(electrode.board)));
    }
    for (const models::Bond& bond : network_.bonds) {
      for (const int board : {bond.from, bond.to}) {
        if (!high(board)) continue;
        context_.complaints.error(bond.at, 1,
                                  fmt::format("bond '{}' joins protective conductors, and board '{}' has none above "
                                              "1 kV",
                                              bond.name, name_of(board)));
      }
    }
    for (std::size_t k = 0; k < network_.boards.size(); ++k) {
      const models::Board& board = network_.boards[k];
      if (!board.n_pe_link || !known(static_cast<int>(k)) || reach_.at(static_cast<int>(k)).has.has(Conductor::N)) {
        continue;
      }
      context_.complaints.error(board.at, 1, fmt::format("board '{}' has no N to be linked with PE", board.name));
    }
  }

  // Lines and voltage of its place, and from them the rated current.
  void finish(models::Motor& motor) {
    const bool on_circuit = motor.circuit >= 0 && at(motor.circuit) < network_.circuits.size();
    const int board = on_circuit ? network_.circuits[at(motor.circuit)].board : motor.board;
    if (!known(board)) return;
    const Place& place = reach_.at(board);
    const std::string what = fmt::format("motor '{}'", motor.name);
    const ConductorSet has = on_circuit ? network_.circuits[at(motor.circuit)].conductors : place.has;
    if (!has.empty() && !has.contains(motor.lines)) {
      const std::string where =
          on_circuit ? fmt::format("circuit '{}'", models::address(network_, network_.circuits[at(motor.circuit)]))
                     : fmt::format("board '{}'", name_of(board));
      context_.complaints.error(
          motor.at, 1,
          fmt::format("{} needs {}, but {} has {}", what, lacking(motor.lines, has), where, models::phases_text(has)),
          "phases = \"L1 L2\" is a motor between two lines");
      return;
    }
    if (motor.volts > 0 && !agree(motor.volts, place.U)) {
      context_.complaints.warn(
          motor.at, 1,
          fmt::format("{} is rated {}, but its place has {} between lines", what, volts(motor.volts), volts(place.U)));
    }
    const double U = motor.volts > 0 ? motor.volts : place.U;
    if (motor.amps <= 0 && motor.watts > 0 && U > 0) {
      const double phases = motor.lines.lines() == 3 ? kSqrt3 : 1;
      motor.amps = motor.watts / (phases * U * motor.pf * motor.efficiency);
    }
  }

  Context& context_;
  Network& network_;
  Sets wanted_;
  Sets joins_;
  Reach reach_;
  std::vector<bool> done_;
};

}  // namespace

void walk_phases(Context& context) { PhaseWalk(context).run(); }

}  // namespace sunder::netlists
