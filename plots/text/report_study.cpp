// SPDX-License-Identifier: Apache-2.0
// Faults looked at closely, for a terminal: what flows where, and what can be touched meanwhile.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <unordered_map>

#include "plots/text/report.h"
#include "plots/text/tables.h"

namespace sunder::plots {
namespace {

using models::Quantity;
using solver::Complex;
using solver::Condition;
using solver::ElementCurrent;
using solver::FaultDetail;
using solver::FaultQuery;
using solver::FaultRow;

constexpr const char* kConductors[] = {"L1", "L2", "L3", "N", "PE"};
constexpr double kNothing = 1e-6;  // of the greatest current: what rounding leaves over is printed as 0

std::string ratio_text(double x_over_r) { return std::isfinite(x_over_r) ? fmt::format("{:.2f}", x_over_r) : "-"; }

std::string head(const models::Network& network, const FaultQuery& query, const TextStyle& style) {
  std::string out;
  if (!network.title.empty()) out += ink(style, Ink::heading, network.title) + '\n';
  std::string line = "Faults in detail (r.m.s., symmetrical)";
  if (query.through_ohms > 0)
    line +=
        fmt::format(", each through {} of its own", models::format_quantity(query.through_ohms, Quantity::impedance));
  line += fmt::format("; rules {}", network.rules_name);
  if (!style.date.empty()) line += "; calculated " + style.date;
  if (!style.program.empty()) line += " by " + style.program;
  return out + wrap(line, style.width) + '\n';
}

// Of a pair both places, whichever of them the row is kept under.
std::string place_of(const FaultQuery& query, const FaultRow& row) {
  if (query.pair.empty() || row.node.find(query.pair) != std::string::npos) return row.node;
  return query.at + " and " + query.pair;
}

std::string kind_of(const FaultQuery& query, const FaultRow& row) {
  if (!query.pair.empty()) return "a line to earth at each of two places";
  return row.fault == solver::Fault::two_lines_earth ? fmt::format("fault of {}", word(row.fault))
                                                     : fmt::format("{} fault", word(row.fault));
}

// One line a fault, under a heading for each state; what belongs to one place stands together. Where one fault was
// asked for, it stands in the heading.
std::string list_of(const FaultQuery& query, const std::vector<FaultDetail>& faults, const TextStyle& style) {
  const bool one_kind = query.fault.has_value() || !query.pair.empty();
  std::string out;
  for (std::size_t first = 0; first < faults.size();) {
    const FaultRow& head = faults[first].row;
    std::vector<std::vector<const FaultRow*>> places;
    std::unordered_map<std::string, std::size_t> index;
    for (; first < faults.size() && faults[first].row.state == head.state; ++first) {
      const FaultRow& row = faults[first].row;
      const auto [at, fresh] = index.try_emplace(row.node, places.size());
      if (fresh) places.emplace_back();
      places[at->second].push_back(&row);
    }
    Table table({{one_kind ? "\nplace" : "place\n  fault", Align::left, 24},
                 {"\nbetween", Align::left, 8},
                 {"\ncondition", Align::left, 9},
                 {"driving\nvoltage", Align::right},
                 {"\ncurrent", Align::right},
                 {"\npeak", Align::right},
                 {"\nX/R", Align::right},
                 {"\nloop ohm", Align::right}});
    std::string needs;
    for (const auto& rows : places) {
      const std::string here = place_of(query, *rows.front());
      if (!one_kind) table.add({here});
      for (const FaultRow* row : rows) {
        const bool most = row->condition == Condition::maximum;
        table.add({!one_kind             ? fmt::format("  {}", word(row->fault))
                   : row == rows.front() ? here
                                         : "",
                   row->phases, word(row->condition), value_text(row->driving_volts, Quantity::voltage),
                   row->known ? value_text(row->current, Quantity::current) : "not known",
                   row->known && most ? value_text(row->peak, Quantity::current, 3) : "",
                   row->known ? ratio_text(row->x_over_r) : "", row->known ? cell_text(row->loop_ohms) : ""});
        if (row->known || row->needs.empty()) continue;
        needs += wrap(fmt::format("{}, {} {}: needs {}", here, word(row->condition), word(row->fault), row->needs),
                      style.width, "  ? ");
      }
    }
    out += ink(style, Ink::heading,
               fmt::format("State {}{}{}", head.state, one_kind ? ": " : "", one_kind ? kind_of(query, head) : "")) +
           '\n' + table.text(style.width) + needs + '\n';
  }
  return out;
}

// What each conductor brings to the fault, where that is more than one current out and back.
std::string shares_text(const FaultDetail& fault) {
  std::string text;
  bool unequal = false;
  for (std::size_t i = 0; i < fault.into_fault.size(); ++i) {
    const double amps = std::abs(fault.into_fault[i]);
    if (amps <= kNothing * fault.row.current) continue;
    unequal = unequal || std::fabs(amps - fault.row.current) > 1e-3 * fault.row.current;
    text += fmt::format("{}{} {}", text.empty() ? "" : ", ", kConductors[i], value_text(amps, Quantity::current));
  }
  return unequal ? text : "";
}

// Ib and Ik by IEC 60909.
std::string decay_text(const FaultDetail& fault, const TextStyle& style) {
  if (fault.breaking.empty()) return "";
  std::string text;
  for (const solver::BreakingCurrent& b : fault.breaking)
    text += fmt::format("{}{} at {}", text.empty() ? "Ib " : ", ", value_text(b.amps, Quantity::current),
                        value_text(b.seconds, Quantity::time));
  text +=
      std::isnan(fault.steady) ? "; Ik not known" : fmt::format("; Ik {}", value_text(fault.steady, Quantity::current));
  if (std::isfinite(fault.peak_by_b))
    text += fmt::format("; peak by method B {}", value_text(fault.peak_by_b, Quantity::current, 3));
  if (fault.motors_negligible) text += "; the motors may be left out by the standard and are counted all the same";
  return wrap(text, style.width, "  ");
}

std::string paragraph(const FaultQuery& query, const FaultDetail& fault, const TextStyle& style) {
  const FaultRow& row = fault.row;
  std::string out = ink(style, Ink::heading, place_of(query, row)) + '\n';
  out += wrap(fmt::format("{}{}{}; {} condition; state {}", kind_of(query, row), row.phases.empty() ? "" : ", ",
                          row.phases, word(row.condition), row.state),
              style.width, "  ");
  if (!row.known) return out + wrap(fmt::format("not known: needs {}", row.needs), style.width, "  ");
  std::string line =
      fmt::format("{}, driven by {} through a loop of {}, X/R {}", value_text(row.current, Quantity::current),
                  value_text(row.driving_volts, Quantity::voltage), value_text(row.loop_ohms, Quantity::impedance),
                  ratio_text(row.x_over_r));
  if (row.condition == Condition::maximum && std::isfinite(row.peak))
    line += fmt::format("; peak {}", value_text(row.peak, Quantity::current, 3));
  out += wrap(line, style.width, "  ");
  if (const std::string shares = shares_text(fault); !shares.empty())
    out += wrap("into the fault: " + shares, style.width, "  ");
  return out + decay_text(fault, style);
}

std::string currents_table(const FaultDetail& fault, const TextStyle& style) {
  if (fault.elements.empty()) return "";
  double greatest = 0;
  for (const ElementCurrent& element : fault.elements) {
    for (const Complex& amps : element.amps) greatest = std::max(greatest, std::abs(amps));
  }
  const auto cell = [greatest](double amps) { return amps <= kNothing * greatest ? "0" : cell_text(amps); };
  Table table({{"\nelement, its device", Align::left, 16},
               {"\nfrom -> to", Align::left, 16},
               {"\nL1 A", Align::right},
               {"\nL2 A", Align::right},
               {"\nL3 A", Align::right},
               {"\nN A", Align::right},
               {"\nPE A", Align::right},
               {"residual\nA", Align::right}});
  std::string idle;
  for (const ElementCurrent& e : fault.elements) {
    const bool carries = std::any_of(e.amps.begin(), e.amps.end(),
                                     [&](const Complex& amps) { return std::abs(amps) > kNothing * greatest; });
    const bool open_share = (", " + fault.undefined + ",").find(", " + e.element + ",") != std::string::npos;
    if (open_share) continue;
    if (!carries) {
      idle += (idle.empty() ? "" : ", ") + e.element;
      continue;
    }
    std::vector<std::string> cells{e.device.empty() ? e.element : e.element + "\n  " + e.device,
                                   e.to.empty() ? e.from : e.from + " -> " + e.to};
    for (const Complex& amps : e.amps) cells.push_back(cell(std::abs(amps)));
    cells.push_back(cell(e.residual));
    table.add(std::move(cells));
  }
  std::string out = '\n' + table.text(style.width, 2);
  if (!idle.empty()) out += wrap("nothing in " + idle, style.width, "  ");
  if (!fault.undefined.empty())
    out += wrap("not defined in " + fault.undefined + ": a loop of links without impedance", style.width, "  ");
  return out;
}

std::string touch_table(const FaultDetail& fault, const TextStyle& style) {
  if (fault.touch.empty()) return "";
  const auto volts = [](double v) { return std::isnan(v) ? "-" : fmt::format("{:.1f}", v); };
  Table table({{"protective\nconductor of", Align::left, 16},
               {"to main earthing\nterminal V", Align::right},
               {"to reference\nearth V", Align::right}});
  for (const solver::TouchVoltage& t : fault.touch) table.add({t.board, volts(t.to_terminal), volts(t.to_earth)});
  std::string out = '\n' + table.text(style.width, 2);
  if (std::isfinite(fault.between)) {
    out += wrap(fmt::format("greatest between two boards: {} V{}{}", volts(fault.between),
                            fault.between_boards.empty() ? "" : ", ", fault.between_boards),
                style.width, "  ");
  }
  return out;
}

}  // namespace

const char* touch_caution() {
  return "Touch voltages are those of the conductors declared; floors, soil and metalwork that is not declared are not "
         "in them; against reference earth all of a declared supply's loop is taken to lie in its return. A "
         "calculation does not replace measurement by a competent person.";
}

std::string fault_study_report(const models::Network& network, const FaultQuery& query,
                               const std::vector<FaultDetail>& faults, const TextStyle& style) {
  std::string out = head(network, query, style);
  const bool tables = query.currents || query.touch;
  if (!tables) out += list_of(query, faults, style);
  for (const FaultDetail& fault : faults) {
    if (!tables) break;
    out += paragraph(query, fault, style) + currents_table(fault, style) + touch_table(fault, style) + '\n';
  }
  if (faults.empty()) out += "No fault is possible there.\n\n";
  out += wrap(
      "maximum: conductors at 20 degC and the strongest supply. minimum: conductors hot and the weakest supply. loop: "
      "the impedance that the driving voltage acts on.",
      style.width);
  if (query.currents) {
    out += wrap(
        "residual: sum of lines and neutral, which a residual current device there sees. `--json` has the angles of "
        "all currents.",
        style.width);
  }
  if (query.touch) out += wrap(std::string("Caution: ") + touch_caution(), style.width);
  return out;
}

}  // namespace sunder::plots
