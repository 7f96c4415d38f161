// SPDX-License-Identifier: Apache-2.0
// Fields of a fault that is looked at closely.
#include <array>
#include <cmath>
#include <numbers>

#include "plots/text/fields.h"

namespace sunder::plots {
namespace {

using models::Network;
using solver::Complex;

constexpr std::array<const char*, 5> kConductors{"L1", "L2", "L3", "N", "PE"};

Record magnitudes(const std::array<Complex, 5>& amps) {
  Record record;
  for (std::size_t i = 0; i < amps.size(); ++i) record.emplace_back(kConductors[i], Value(std::abs(amps[i])));
  return record;
}

// -180 exclusive to 180 inclusive, so that rounding does not turn half a turn over.
double degrees_of(const Complex& amps) {
  const double degrees = std::arg(amps) * 180 / std::numbers::pi;
  return degrees <= -180 + 1e-9 ? degrees + 360 : degrees + 0.0;  // never -0
}

// A current of nothing has no angle: null.
Record angles(const std::array<Complex, 5>& amps) {
  Record record;
  for (std::size_t i = 0; i < amps.size(); ++i) {
    record.emplace_back(kConductors[i], amps[i] == Complex() ? Value() : Value(degrees_of(amps[i])));
  }
  return record;
}

}  // namespace

const std::vector<Field<solver::FaultQuery>>& fault_query_fields() {
  using Row = solver::FaultQuery;
  static const std::vector<Field<Row>> fields = {
      {"at", "at", "", "the place, with its share or length of the run; empty: every node",
       [](const Network&, const Row& r) { return Value(r.at); }},
      {"pair", "pair", "", "the second place of a fault at two places, else empty",
       [](const Network&, const Row& r) { return Value(r.pair); }},
      {"fault", "fault", "", "the one fault asked for; null: all that are possible",
       [](const Network&, const Row& r) { return r.fault ? Value(word(*r.fault)) : Value(); }},
      {"through_ohm", "through", "ohm", "resistance of the fault itself",
       [](const Network&, const Row& r) { return Value(r.through_ohms); }},
      {"state", "state", "", "the one supply state asked for; empty: every state",
       [](const Network&, const Row& r) { return Value(r.state); }},
      {"currents", "currents", "", "true: elements are filled",
       [](const Network&, const Row& r) { return Value(r.currents); }},
      {"touch", "touch", "", "true: touch and between are filled",
       [](const Network&, const Row& r) { return Value(r.touch); }},
  };
  return fields;
}

const std::vector<Field<solver::FaultDetail>>& fault_detail_fields() {
  using Row = solver::FaultDetail;
  static const std::vector<Field<Row>> fields = {
      {"into_fault", "into the fault", "A",
       "what each conductor delivers to the fault: amps and degrees, each with the keys L1 L2 L3 N PE; degrees "
       "against the first driving voltage, null where nothing flows; null if not known",
       [](const Network&, const Row& r) {
         if (!r.row.known) return Value();
         return Value(Record{{"amps", Value(magnitudes(r.into_fault))}, {"degrees", Value(angles(r.into_fault))}});
       }},
      {"elements", "elements", "", "what each run, transformer, source and motor carries; empty without --currents",
       [](const Network& n, const Row& r) { return Value(records_of(n, element_current_fields(), r.elements)); }},
      {"touch", "touch", "", "voltage of each board's protective conductor; empty without --touch",
       [](const Network& n, const Row& r) { return Value(records_of(n, touch_voltage_fields(), r.touch)); }},
      {"between_V", "between boards", "V", "greatest voltage between the protective conductors of two boards, or null",
       [](const Network&, const Row& r) { return Value(r.between); }},
      {"between_boards", "between which", "", "the two boards it lies between",
       [](const Network&, const Row& r) { return Value(r.between_boards); }},
      {"breaking", "breaking current", "A",
       "symmetrical breaking current Ib, a list of seconds and amps; by IEC 60909, three-phase, maximum, else empty",
       [](const Network&, const Row& r) {
         std::vector<Record> list;
         for (const solver::BreakingCurrent& b : r.breaking)
           list.push_back({{"seconds", Value(b.seconds)}, {"amps", Value(b.amps)}});
         return Value(list);
       }},
      {"peak_b_A", "peak by method B", "A", "ip by method B in the same case; `peak` is by method C; else null",
       [](const Network&, const Row& r) { return Value(r.peak_by_b); }},
      {"steady_A", "steady-state current", "A", "Ik in the same case; null: not known",
       [](const Network&, const Row& r) { return Value(r.steady); }},
      {"motors_negligible", "motors negligible", "",
       "true: the motors' rated currents are at most 1 % of the current without them (they are counted all the same)",
       [](const Network&, const Row& r) { return Value(r.motors_negligible); }},
      {"undefined", "undefined", "", "links in a loop without impedance, whose shares are not defined; with currents",
       [](const Network&, const Row& r) { return Value(r.undefined); }},
      {"imbalance", "imbalance", "", "greatest current sum left over at a node, as a share of the fault current",
       [](const Network&, const Row& r) { return r.row.known ? Value(r.imbalance) : Value(); }},
  };
  return fields;
}

const std::vector<Field<solver::ElementCurrent>>& element_current_fields() {
  using Row = solver::ElementCurrent;
  static const std::vector<Field<Row>> fields = {
      {"element", "element", "", "submain, circuit, transformer side, source or motor",
       [](const Network&, const Row& r) { return Value(r.element); }},
      {"from", "from", "", "the end where the current is counted as entering",
       [](const Network&, const Row& r) { return Value(r.from); }},
      {"to", "to", "", "the other end", [](const Network&, const Row& r) { return Value(r.to); }},
      {"device", "device", "", "device at its start, empty for none",
       [](const Network&, const Row& r) { return Value(r.device); }},
      {"amps", "current", "A", "r.m.s. current from `from` to `to`, with the keys L1 L2 L3 N PE",
       [](const Network&, const Row& r) { return Value(magnitudes(r.amps)); }},
      {"degrees", "angle", "deg", "its angle against the first driving voltage; null where nothing flows",
       [](const Network&, const Row& r) { return Value(angles(r.amps)); }},
      {"residual_A", "residual", "A", "sum of lines and neutral: what a residual current device there sees",
       [](const Network&, const Row& r) { return Value(r.residual); }},
  };
  return fields;
}

const std::vector<Field<solver::TouchVoltage>>& touch_voltage_fields() {
  using Row = solver::TouchVoltage;
  static const std::vector<Field<Row>> fields = {
      {"board", "board", "", "board whose protective conductor is meant",
       [](const Network&, const Row& r) { return Value(r.board); }},
      {"to_terminal_V", "to main earthing terminal", "V",
       "to the protective conductor of the board that the source feeds; null: not joined to it, or none",
       [](const Network&, const Row& r) { return Value(r.to_terminal); }},
      {"to_earth_V", "to reference earth", "V", "to earth far from every electrode; null: not determined",
       [](const Network&, const Row& r) { return Value(r.to_earth); }},
  };
  return fields;
}

}  // namespace sunder::plots
