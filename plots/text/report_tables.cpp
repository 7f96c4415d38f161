// SPDX-License-Identifier: Apache-2.0
// Fault currents and the circuit schedule as tables for a terminal.
#include <fmt/format.h>

#include <cmath>
#include <map>

#include "plots/text/fields.h"
#include "plots/text/report.h"
#include "plots/text/tables.h"

namespace sunder::plots {
namespace {

using models::Quantity;
using solver::Condition;
using solver::FaultRow;

std::string current_text(const FaultRow* row) {
  if (row == nullptr) return "";
  return row->known ? value_text(row->current, Quantity::current) : "not known";
}

std::string ratio_text(double x_over_r) { return std::isfinite(x_over_r) ? fmt::format("{:.2f}", x_over_r) : "-"; }

// The same fault at the same node in one state: the two conditions side by side.
struct Pair {
  const FaultRow* maximum = nullptr;
  const FaultRow* minimum = nullptr;
};

std::string faults_of_state(const std::string& state, const std::vector<FaultRow>& rows, const TextStyle& style) {
  std::vector<std::string> nodes;  // in order of first appearance
  std::map<std::string, std::map<solver::Fault, Pair>> table_rows;
  for (const FaultRow& row : rows) {
    if (row.state != state) continue;
    auto [at, fresh] = table_rows.try_emplace(row.node);
    if (fresh) nodes.push_back(row.node);
    Pair& pair = at->second[row.fault];
    (row.condition == Condition::maximum ? pair.maximum : pair.minimum) = &row;
  }
  Table table({{"\nnode", Align::left, 12},
               {"\nfault", Align::left, 12},
               {"maximum\ncurrent", Align::right},
               {"\npeak", Align::right},
               {"\nX/R", Align::right},
               {"\nbetween", Align::left, 8},
               {"minimum\ncurrent", Align::right},
               {"\nloop ohm", Align::right},
               {"\nX/R", Align::right},
               {"\nbetween", Align::left, 8}});
  std::string needs;
  for (const std::string& node : nodes) {
    bool first = true;
    for (const auto& [fault, pair] : table_rows[node]) {
      const FaultRow* most = pair.maximum;
      const FaultRow* least = pair.minimum;
      const bool most_known = most != nullptr && most->known;
      const bool least_known = least != nullptr && least->known;
      table.add({first ? node : "", word(fault), current_text(most),
                 most_known ? value_text(most->peak, Quantity::current, 3) : "",
                 most_known ? ratio_text(most->x_over_r) : "", most != nullptr ? most->phases : "", current_text(least),
                 least_known ? cell_text(least->loop_ohms) : "", least_known ? ratio_text(least->x_over_r) : "",
                 least != nullptr ? least->phases : ""});
      for (const FaultRow* row : {most, least}) {
        if (row != nullptr && !row->known && !row->needs.empty()) {
          needs += wrap(fmt::format("{}, {} {}: needs {}", node, word(row->condition), word(fault), row->needs),
                        style.width, "  ? ");
        }
      }
      first = false;
    }
  }
  return ink(style, Ink::heading, "State " + state) + '\n' + table.text(style.width) + needs + '\n';
}

std::string title_line(const models::Network& network, const TextStyle& style, const std::string& what) {
  std::string out;
  if (!network.title.empty()) out += ink(style, Ink::heading, network.title) + '\n';
  std::string line = fmt::format("{}; rules {}", what, network.rules_name);
  if (!style.date.empty()) line += "; calculated " + style.date;
  if (!style.program.empty()) line += " by " + style.program;
  return out + wrap(line, style.width) + '\n';
}

}  // namespace

std::string faults_report(const models::Network& network, const std::vector<FaultRow>& rows, const TextStyle& style) {
  std::string out = title_line(network, style, "Prospective fault currents (r.m.s., symmetrical)");
  std::vector<std::string> states;
  for (const FaultRow& row : rows) {
    if (states.empty() || states.back() != row.state) {
      bool seen = false;
      for (const std::string& state : states) seen = seen || state == row.state;
      if (!seen) states.push_back(row.state);
    }
  }
  for (const std::string& state : states) out += faults_of_state(state, rows, style);
  out += wrap(
      "maximum: conductors at 20 degC and the strongest supply, for capacity. minimum: conductors hot and the "
      "weakest supply, for disconnection. loop: the impedance that the driving voltage acts on.",
      style.width);
  return out;
}

std::string schedule_report(const models::Network& network, const std::vector<solver::ScheduleRow>& rows,
                            const TextStyle& style) {
  std::string out = title_line(network, style, "Circuit schedule");
  // Three lines a way, so that nothing of device and cable has to be cut at 100 columns.
  Table table({{"way\nphases", Align::left, 10},
               {"serves\ndevice\ncable, protective conductor", Align::left, 24},
               {"length\ndrop\nZs ohm", Align::right},
               {"Ib A\nIn A\nIz A", Align::right},
               {"least A\ngreatest A", Align::right},
               {"time\nlimit", Align::right},
               {"verdict"}});
  std::string board;
  bool first = true;
  for (const solver::ScheduleRow& r : rows) {
    const std::string here = r.submain ? "" : r.address.substr(0, r.address.find('/'));
    if (!first && here != board) table.gap();
    board = here;
    first = false;
    std::string verdict = word(r.verdict);
    if (r.verdict == solver::Verdict::fails) verdict = "FAILS";
    if (r.verdict == solver::Verdict::undecided) verdict = "UNDECIDED";
    table.add({r.address + '\n' + r.phases,
               (r.serves.empty() && r.submain ? "submain" : r.serves) + '\n' + r.device + '\n' + r.cable +
                   (r.cpc.empty() ? "" : ", " + r.cpc),
               (std::isnan(r.length) ? "-" : models::format_number(r.length) + " m") + '\n' +
                   (std::isnan(r.drop) ? "-" : fmt::format("{:.2f} %", 100 * r.drop)) + '\n' + cell_text(r.Zs, 3),
               cell_text(r.Ib) + '\n' + cell_text(r.In) + '\n' + cell_text(r.Iz),
               cell_text(std::round(r.least), 6) + '\n' + cell_text(std::round(r.greatest), 6),
               value_text(r.time, Quantity::time, 3) + '\n' + value_text(r.limit, Quantity::time, 3), verdict});
  }
  out += table.text(style.width);
  out +=
      '\n' + wrap(
                 "Three lines a way, as in the heading. drop: from the supply terminals. Zs, least: far end, minimum "
                 "condition. greatest: at the device. time: latest disconnection. verdict: the worst of all checks of "
                 "the way; `sunder check` says why.",
                 style.width);
  return out;
}

std::string schedule_csv(const std::vector<solver::ScheduleRow>& rows) {
  static const models::Network nowhere;  // no column of the schedule points into a file
  return csv_of(nowhere, schedule_fields(), rows);
}

}  // namespace sunder::plots
