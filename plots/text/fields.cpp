// SPDX-License-Identifier: Apache-2.0
#include "plots/text/fields.h"

#include <cmath>

namespace sunder::plots {
namespace {

using models::Network;
using models::place_text;
using solver::Finding;

// Why value or limit of a finding is null: its own reason, or what the number itself says.
std::string reason_of(const Finding& finding) {
  if (!finding.reason.empty()) return finding.reason;
  std::string text;
  const auto add = [&text](const char* name, double number, bool time) {
    if (std::isfinite(number)) return;
    if (!text.empty()) text += "; ";
    text += name;
    if (std::isnan(number))
      text += " does not exist";
    else
      text += time ? " is unlimited: never" : " is unbounded";
  };
  add("value", finding.value, finding.unit == models::Quantity::time);
  add("limit", finding.limit, finding.unit == models::Quantity::time);
  return text;
}

}  // namespace

const std::vector<Field<solver::FaultRow>>& fault_fields() {
  using Row = solver::FaultRow;
  static const std::vector<Field<Row>> fields = {
      {"state", "state", "", "supply state", [](const Network&, const Row& r) { return Value(r.state); }},
      {"condition", "condition", "", "maximum or minimum",
       [](const Network&, const Row& r) { return Value(word(r.condition)); }},
      {"node", "node", "", "board, circuit end board/circuit, or spur end board/circuit/spur1",
       [](const Network&, const Row& r) { return Value(r.node); }},
      {"fault", "fault", "", "three-phase, line-line, line-neutral or line-earth; where asked for, two lines and earth",
       [](const Network&, const Row& r) { return Value(word(r.fault)); }},
      {"phases", "phases", "", "the governing choice of conductors",
       [](const Network&, const Row& r) { return Value(r.phases); }},
      {"current_A", "current", "A", "prospective r.m.s. current; null if not known, see reason",
       [](const Network&, const Row& r) { return r.known ? Value(r.current) : Value(); }},
      {"peak_A", "peak", "A", "peak of the first asymmetric half-cycle; null in the minimum",
       [](const Network&, const Row& r) { return r.known ? Value(r.peak) : Value(); }},
      {"x_over_r", "X/R", "", "reactance over resistance of the loop",
       [](const Network&, const Row& r) { return r.known ? Value(r.x_over_r) : Value(); }},
      {"loop_ohm", "loop", "ohm", "impedance of the loop that driving_V drives",
       [](const Network&, const Row& r) { return r.known ? Value(r.loop_ohms) : Value(); }},
      {"driving_V", "driving voltage", "V", "c times U0, or c times U between lines",
       [](const Network&, const Row& r) { return Value(r.driving_volts); }},
      {"reason", "reason", "", "why the current is not known, else empty",
       [](const Network&, const Row& r) { return Value(r.known ? std::string() : "needs " + r.needs); }},
  };
  return fields;
}

const std::vector<Field<solver::Step>>& step_fields() {
  using Row = solver::Step;
  static const std::vector<Field<Row>> fields = {
      {"what", "what", "", "what this line of working obtains",
       [](const Network&, const Row& r) { return Value(r.what); }},
      {"formula", "formula", "", "in symbols", [](const Network&, const Row& r) { return Value(r.formula); }},
      {"numbers", "numbers", "", "the formula with its numbers put in",
       [](const Network&, const Row& r) { return Value(r.numbers); }},
      {"result", "result", "", "in `unit`; null where there is no single number",
       [](const Network&, const Row& r) { return Value(r.result); }},
      {"unit", "unit", "", "unit of result",
       [](const Network&, const Row& r) { return Value(models::si_symbol(r.unit)); }},
      {"at", "at", "", "file:line:column of the input that matters most, empty if none",
       [](const Network& n, const Row& r) { return Value(place_text(n, r.at)); }},
  };
  return fields;
}

const std::vector<Field<solver::Remedy>>& remedy_fields() {
  using Row = solver::Remedy;
  static const std::vector<Field<Row>> fields = {
      {"what", "what", "", "the change in words", [](const Network&, const Row& r) { return Value(r.what); }},
      {"key", "key", "", "address of the value to change", [](const Network&, const Row& r) { return Value(r.key); }},
      {"value", "value", "", "new value in `unit`; null where it is not a number",
       [](const Network&, const Row& r) { return Value(r.value); }},
      {"unit", "unit", "", "unit of value",
       [](const Network&, const Row& r) { return Value(models::si_symbol(r.unit)); }},
      {"holds", "holds", "", "true: every check was repeated with it and is met",
       [](const Network&, const Row& r) { return Value(r.holds); }},
      {"note", "note", "", "what would still not be met", [](const Network&, const Row& r) { return Value(r.note); }},
  };
  return fields;
}

const std::vector<Field<Finding>>& finding_fields() {
  using Row = Finding;
  static const std::vector<Field<Row>> fields = {
      {"check", "check", "", "name of the check", [](const Network&, const Row& r) { return Value(r.check); }},
      {"subject", "subject", "", "address of what is checked",
       [](const Network&, const Row& r) { return Value(r.subject); }},
      {"verdict", "verdict", "", "meets, fails, undecided or noted",
       [](const Network&, const Row& r) { return Value(word(r.verdict)); }},
      {"value", "value", "", "what was found, in `unit`; null: see reason",
       [](const Network&, const Row& r) { return Value(r.value); }},
      {"limit", "limit", "", "what the rules ask, in `unit`; null: see reason",
       [](const Network&, const Row& r) { return Value(r.limit); }},
      {"unit", "unit", "", "unit of value and limit",
       [](const Network&, const Row& r) { return Value(models::si_symbol(r.unit)); }},
      {"margin", "margin", "", "signed, as a share of the limit; below 0: not met; null: no number",
       [](const Network&, const Row& r) { return Value(r.margin); }},
      {"state", "state", "", "governing supply state", [](const Network&, const Row& r) { return Value(r.state); }},
      {"condition", "condition", "", "governing condition, empty if none",
       [](const Network&, const Row& r) { return Value(r.condition); }},
      {"fault", "fault", "", "governing fault, empty if none",
       [](const Network&, const Row& r) { return Value(r.fault); }},
      {"clause", "clause", "", "clause of the rule set", [](const Network&, const Row& r) { return Value(r.clause); }},
      {"confidence", "confidence", "",
       "worst support of the data used: declared, found, derived, checked, memory or low",
       [](const Network&, const Row& r) { return Value(models::word(r.confidence)); }},
      {"summary", "summary", "", "the working in one sentence",
       [](const Network&, const Row& r) { return Value(r.summary); }},
      {"reason", "reason", "", "why value or limit is null, or why undecided",
       [](const Network&, const Row& r) { return Value(reason_of(r)); }},
      {"at", "at", "", "file:line:column of the subject",
       [](const Network& n, const Row& r) { return Value(place_text(n, r.at)); }},
      {"needs", "needs", "", "what would decide it", [](const Network&, const Row& r) { return Value(r.needs); }},
      {"assumptions", "assumptions", "", "taken without being declared",
       [](const Network&, const Row& r) { return Value(r.assumptions); }},
      {"steps", "steps", "", "the working, in order",
       [](const Network& n, const Row& r) { return Value(records_of(n, step_fields(), r.steps)); }},
      {"remedies", "remedies", "", "for a failure: changes that were tried",
       [](const Network& n, const Row& r) { return Value(records_of(n, remedy_fields(), r.remedies)); }},
  };
  return fields;
}

namespace {

// Only in findings on pairs of devices, after the fields above.
const std::vector<Field<Finding>>& pair_fields() {
  using Row = Finding;
  static const std::vector<Field<Row>> fields = {
      {"upstream", "upstream", "", "address of the upstream device (pairs only)",
       [](const Network&, const Row& r) { return Value(r.upstream); }},
      {"selectivity", "selectivity", "", "total, partial, none or undecided (pairs only)",
       [](const Network&, const Row& r) { return Value(r.selectivity); }},
      {"limit_A", "limit current", "A", "selective up to this current; null: no single limit (pairs only)",
       [](const Network&, const Row& r) { return Value(r.limit_A); }},
      {"available_A", "available current", "A", "greatest current behind the downstream device (pairs only)",
       [](const Network&, const Row& r) { return Value(r.available_A); }},
      {"basis", "basis", "", "on what it rests (pairs only)",
       [](const Network&, const Row& r) { return Value(r.basis); }},
  };
  return fields;
}

}  // namespace

const std::vector<Field<solver::ScheduleRow>>& schedule_fields() {
  using Row = solver::ScheduleRow;
  static const std::vector<Field<Row>> fields = {
      {"address", "address", "", "submain, or board/circuit",
       [](const Network&, const Row& r) { return Value(r.address); }},
      {"kind", "kind", "", "circuit or submain",
       [](const Network&, const Row& r) { return Value(r.submain ? "submain" : "circuit"); }},
      {"serves", "serves", "", "as declared", [](const Network&, const Row& r) { return Value(r.serves); }},
      {"phases", "phases", "", "live conductors", [](const Network&, const Row& r) { return Value(r.phases); }},
      {"device", "device", "", "protective device", [](const Network&, const Row& r) { return Value(r.device); }},
      {"cable", "cable", "", "construction and size", [](const Network&, const Row& r) { return Value(r.cable); }},
      {"cpc", "cpc", "", "protective conductor", [](const Network&, const Row& r) { return Value(r.cpc); }},
      {"length_m", "length", "m", "length (ring: whole loop)",
       [](const Network&, const Row& r) { return Value(r.length); }},
      {"Ib_A", "Ib", "A", "design current; null: not declared",
       [](const Network&, const Row& r) { return Value(r.Ib); }},
      {"In_A", "In", "A", "rated current of the device", [](const Network&, const Row& r) { return Value(r.In); }},
      {"Iz_A", "Iz", "A", "current-carrying capacity; null: not declared",
       [](const Network&, const Row& r) { return Value(r.Iz); }},
      {"drop_percent", "voltage drop", "%", "from the supply terminals; null: not known",
       [](const Network&, const Row& r) { return Value(100 * r.drop); }},
      {"Zs_ohm", "Zs", "ohm", "earth-fault loop impedance in the minimum condition",
       [](const Network&, const Row& r) { return Value(r.Zs); }},
      {"least_A", "least current", "A", "least line-earth or line-neutral current at the far end",
       [](const Network&, const Row& r) { return Value(r.least); }},
      {"greatest_A", "greatest current", "A", "greatest current at the device",
       [](const Network&, const Row& r) { return Value(r.greatest); }},
      {"time_s", "time", "s", "latest disconnection; null: never or not known",
       [](const Network&, const Row& r) { return Value(r.time); }},
      {"limit_s", "limit", "s", "longest disconnection time allowed",
       [](const Network&, const Row& r) { return Value(r.limit); }},
      {"verdict", "verdict", "", "worst verdict of all checks of this row",
       [](const Network&, const Row& r) { return Value(word(r.verdict)); }},
  };
  return fields;
}

const std::vector<Field<solver::Flip>>& flip_fields() {
  using Row = solver::Flip;
  static const std::vector<Field<Row>> fields = {
      {"check", "check", "", "name of the check", [](const Network&, const Row& r) { return Value(r.check); }},
      {"subject", "subject", "", "address", [](const Network&, const Row& r) { return Value(r.subject); }},
      {"before", "before", "", "verdict below `at`",
       [](const Network&, const Row& r) { return Value(word(r.before)); }},
      {"after", "after", "", "verdict above `at`", [](const Network&, const Row& r) { return Value(word(r.after)); }},
      {"at", "at", "",
       "parameter value in the parameter's unit (catalogue: index, from 0, of the first value after it)",
       [](const Network&, const Row& r) { return Value(r.at); }},
      {"state", "state", "", "governing supply state", [](const Network&, const Row& r) { return Value(r.state); }},
  };
  return fields;
}

const std::vector<Field<solver::Stretch>>& stretch_fields() {
  using Row = solver::Stretch;
  static const std::vector<Field<Row>> fields = {
      {"check", "check", "", "name of the check", [](const Network&, const Row& r) { return Value(r.check); }},
      {"subject", "subject", "", "address", [](const Network&, const Row& r) { return Value(r.subject); }},
      {"from", "from", "", "undecided from this parameter value",
       [](const Network&, const Row& r) { return Value(r.from); }},
      {"to", "to", "", "to this one", [](const Network&, const Row& r) { return Value(r.to); }},
      {"needs", "needs", "", "what would decide it", [](const Network&, const Row& r) { return Value(r.needs); }},
  };
  return fields;
}

const std::vector<Field<solver::SweepPoint>>& sweep_point_fields() {
  using Row = solver::SweepPoint;
  static const std::vector<Field<Row>> fields = {
      {"value", "value", "", "parameter value in the parameter's unit",
       [](const Network&, const Row& r) { return Value(r.value); }},
      {"text", "text", "", "catalogue: the value as text", [](const Network&, const Row& r) { return Value(r.text); }},
      {"findings", "findings", "", "governing findings there, as in sunder.check/1, without steps",
       [](const Network& n, const Row& r) { return Value(records_of(n, finding_fields(), r.findings)); }},
  };
  return fields;
}

const std::vector<Field<models::Assumption>>& assumption_fields() {
  using Row = models::Assumption;
  static const std::vector<Field<Row>> fields = {
      {"subject", "subject", "", "address", [](const Network&, const Row& r) { return Value(r.subject); }},
      {"sentence", "sentence", "", "what was taken", [](const Network&, const Row& r) { return Value(r.sentence); }},
      {"at", "at", "", "file:line:column, empty if none",
       [](const Network& n, const Row& r) { return Value(place_text(n, r.at)); }},
  };
  return fields;
}

namespace {

std::vector<Record> curve_records(const models::Curve& curve) {
  std::vector<Record> points;
  points.reserve(curve.points.size());
  for (const models::CurvePoint& p : curve.points) {
    points.push_back({{"current_A", Value(p.current)}, {"time_s", Value(p.time)}});
  }
  return points;
}

}  // namespace

const std::vector<Field<solver::PathDevice>>& path_device_fields() {
  using Row = solver::PathDevice;
  static const std::vector<Field<Row>> fields = {
      {"address", "address", "", "element that carries the device",
       [](const Network&, const Row& r) { return Value(r.address); }},
      {"label", "label", "", "as written on the chart", [](const Network&, const Row& r) { return Value(r.label); }},
      {"device", "device", "", "device text", [](const Network&, const Row& r) { return Value(r.device.text); }},
      {"least_A", "least current", "A", "least current it must clear",
       [](const Network&, const Row& r) { return Value(r.least); }},
      {"greatest_A", "greatest current", "A", "greatest current through it; its curves end there",
       [](const Network&, const Row& r) { return Value(r.greatest); }},
      {"earliest", "earliest", "", "points current_A, time_s of the earliest operating time",
       [](const Network&, const Row& r) { return Value(curve_records(r.device.overcurrent.earliest)); }},
      {"latest", "latest", "", "points current_A, time_s of the latest operating time",
       [](const Network&, const Row& r) { return Value(curve_records(r.device.overcurrent.latest)); }},
      {"residual_earliest", "residual earliest", "", "the same against the residual current",
       [](const Network&, const Row& r) { return Value(curve_records(r.device.residual.earliest)); }},
      {"residual_latest", "residual latest", "", "the same against the residual current",
       [](const Network&, const Row& r) { return Value(curve_records(r.device.residual.latest)); }},
      {"source", "source", "", "where the curves come from",
       [](const Network&, const Row& r) { return Value(r.device.source); }},
      {"confidence", "confidence", "", "support of the curves",
       [](const Network&, const Row& r) { return Value(models::word(r.device.confidence)); }},
  };
  return fields;
}

const std::vector<Field<solver::DamageLine>>& damage_fields() {
  using Row = solver::DamageLine;
  static const std::vector<Field<Row>> fields = {
      {"label", "label", "", "conductor", [](const Network&, const Row& r) { return Value(r.label); }},
      {"k2s2_A2s", "k2S2", "A2s", "adiabatic withstand, t = k2S2 / I2 up to 5 s",
       [](const Network&, const Row& r) { return Value(r.k2s2); }},
  };
  return fields;
}

const std::vector<Field<solver::ChartCurrent>>& chart_current_fields() {
  using Row = solver::ChartCurrent;
  static const std::vector<Field<Row>> fields = {
      {"label", "label", "", "what the current is", [](const Network&, const Row& r) { return Value(r.label); }},
      {"current_A", "current", "A", "r.m.s.", [](const Network&, const Row& r) { return Value(r.current); }},
  };
  return fields;
}

std::string csv_cell(std::string_view text) {
  if (text.find_first_of(",\"\r\n") == std::string_view::npos) return std::string(text);
  std::string quoted = "\"";
  for (const char c : text) {
    if (c == '"') quoted += '"';
    quoted += c;
  }
  return quoted + '"';
}

template <class Row>
Record record_of(const Network& network, const std::vector<Field<Row>>& fields, const Row& row) {
  Record record;
  record.reserve(fields.size() + 1);
  std::string unbounded;
  bool has_reason = false;
  for (const Field<Row>& field : fields) {
    Value value = field.get(network, row);
    if (const double* number = std::get_if<double>(&value.data); number != nullptr && std::isinf(*number)) {
      if (!unbounded.empty()) unbounded += "; ";
      unbounded += std::string(field.key) + (field.unit == "s" ? " never comes" : " is unbounded");
    }
    has_reason = has_reason || field.key == "reason";
    record.emplace_back(field.key, std::move(value));
  }
  if (!has_reason && !unbounded.empty()) record.emplace_back("reason", Value(unbounded));
  if constexpr (std::is_same_v<Row, Finding>) {
    if (!row.upstream.empty()) {
      for (const auto& field : pair_fields()) record.emplace_back(field.key, field.get(network, row));
    }
  }
  return record;
}

template <class Row>
std::string csv_of(const Network& network, const std::vector<Field<Row>>& fields, const std::vector<Row>& rows) {
  std::string text;
  for (const Field<Row>& field : fields) {
    if (&field != &fields.front()) text += ',';
    std::string heading(field.heading);
    if (!field.unit.empty()) heading += " [" + std::string(field.unit) + "]";
    text += csv_cell(heading);
  }
  text += '\n';
  for (const Row& row : rows) {
    for (const Field<Row>& field : fields) {
      if (&field != &fields.front()) text += ',';
      const Value value = field.get(network, row);
      if (const double* number = std::get_if<double>(&value.data)) {
        if (std::isinf(*number))
          text += field.unit == "s" ? "never" : "unbounded";
        else if (!std::isnan(*number))
          text += models::format_number(*number, 6);
      } else if (const std::string* words = std::get_if<std::string>(&value.data)) {
        text += csv_cell(*words);
      }
    }
    text += '\n';
  }
  return text;
}

template Record record_of(const Network&, const std::vector<Field<solver::FaultRow>>&, const solver::FaultRow&);
template Record record_of(const Network&, const std::vector<Field<solver::Step>>&, const solver::Step&);
template Record record_of(const Network&, const std::vector<Field<solver::Remedy>>&, const solver::Remedy&);
template Record record_of(const Network&, const std::vector<Field<Finding>>&, const Finding&);
template Record record_of(const Network&, const std::vector<Field<solver::ScheduleRow>>&, const solver::ScheduleRow&);
template Record record_of(const Network&, const std::vector<Field<solver::Flip>>&, const solver::Flip&);
template Record record_of(const Network&, const std::vector<Field<solver::Stretch>>&, const solver::Stretch&);
template Record record_of(const Network&, const std::vector<Field<solver::SweepPoint>>&, const solver::SweepPoint&);
template Record record_of(const Network&, const std::vector<Field<solver::PathDevice>>&, const solver::PathDevice&);
template Record record_of(const Network&, const std::vector<Field<solver::DamageLine>>&, const solver::DamageLine&);
template Record record_of(const Network&, const std::vector<Field<solver::ChartCurrent>>&, const solver::ChartCurrent&);
template Record record_of(const Network&, const std::vector<Field<models::Assumption>>&, const models::Assumption&);
template Record record_of(const Network&, const std::vector<Field<solver::FaultQuery>>&, const solver::FaultQuery&);
template Record record_of(const Network&, const std::vector<Field<solver::FaultDetail>>&, const solver::FaultDetail&);
template Record record_of(const Network&, const std::vector<Field<solver::ElementCurrent>>&,
                          const solver::ElementCurrent&);
template Record record_of(const Network&, const std::vector<Field<solver::TouchVoltage>>&, const solver::TouchVoltage&);
template std::string csv_of(const Network&, const std::vector<Field<solver::ScheduleRow>>&,
                            const std::vector<solver::ScheduleRow>&);
template std::string csv_of(const Network&, const std::vector<Field<solver::FaultRow>>&,
                            const std::vector<solver::FaultRow>&);

namespace {

template <class Row>
void describe(std::vector<StructHelp>& all, const char* format, const char* place,
              const std::vector<Field<Row>>& fields) {
  StructHelp help{format, place, {}};
  for (const Field<Row>& f : fields) {
    help.fields.push_back({std::string(f.key), std::string(f.unit), std::string(f.meaning)});
  }
  all.push_back(std::move(help));
}

}  // namespace

std::vector<StructHelp> describe_json() {
  std::vector<StructHelp> all;
  describe(all, "sunder.faults/1", "results[]", fault_fields());
  describe(all, "sunder.fault-study/1", "asked", fault_query_fields());
  describe(all, "sunder.fault-study/1", "faults[]", fault_fields());
  describe(all, "sunder.fault-study/1", "faults[], besides", fault_detail_fields());
  describe(all, "sunder.fault-study/1", "faults[].elements[]", element_current_fields());
  describe(all, "sunder.fault-study/1", "faults[].touch[]", touch_voltage_fields());
  describe(all, "sunder.check/1", "findings[]", finding_fields());
  describe(all, "sunder.check/1", "findings[], pairs of devices only", pair_fields());
  describe(all, "sunder.check/1", "findings[].steps[]", step_fields());
  describe(all, "sunder.check/1", "findings[].remedies[]", remedy_fields());
  describe(all, "sunder.check/1", "assumptions[]", assumption_fields());
  describe(all, "sunder.schedule/1", "rows[]", schedule_fields());
  describe(all, "sunder.vary/1", "points[]", sweep_point_fields());
  describe(all, "sunder.vary/1", "flips[]", flip_fields());
  describe(all, "sunder.vary/1", "undecided[]", stretch_fields());
  describe(all, "sunder.chart/1", "devices[]", path_device_fields());
  describe(all, "sunder.chart/1", "damage[]", damage_fields());
  describe(all, "sunder.chart/1", "currents[]", chart_current_fields());
  return all;
}

}  // namespace sunder::plots
