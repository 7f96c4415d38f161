// SPDX-License-Identifier: Apache-2.0
/// @file
/// Each result struct describes its fields once, here; JSON, CSV and `sunder help json` follow.
#pragma once

#include <string>
#include <string_view>
#include <utility>
#include <variant>
#include <vector>

#include "models/network.h"
#include "solver/fault_study.h"
#include "solver/results.h"

namespace sunder::plots {

struct Value;
/// Keys and values in the order they are printed.
using Record = std::vector<std::pair<std::string, Value>>;

/// What a field holds: nothing (null), a flag, a number (not finite: null), text, texts, a record, records.
struct Value {
  std::variant<std::monostate, bool, double, std::string, std::vector<std::string>, std::vector<double>, Record,
               std::vector<Record>>
      data;

  Value() = default;
  Value(bool flag) : data(flag) {}                                   // NOLINT(*-explicit-*)
  Value(double number) : data(number) {}                             // NOLINT(*-explicit-*)
  Value(std::string text) : data(std::move(text)) {}                 // NOLINT(*-explicit-*)
  Value(std::string_view text) : data(std::string(text)) {}          // NOLINT(*-explicit-*)
  Value(const char* text) : data(std::string(text)) {}               // NOLINT(*-explicit-*)
  Value(std::vector<std::string> texts) : data(std::move(texts)) {}  // NOLINT(*-explicit-*)
  Value(std::vector<double> numbers) : data(std::move(numbers)) {}   // NOLINT(*-explicit-*)
  Value(Record record) : data(std::move(record)) {}                  // NOLINT(*-explicit-*)
  Value(std::vector<Record> records) : data(std::move(records)) {}   // NOLINT(*-explicit-*)
};

/// One field of a result struct.
template <class Row>
struct Field {
  std::string_view key;      ///< JSON key
  std::string_view heading;  ///< CSV heading without its unit
  std::string_view unit;     ///< "A", "ohm", ...; "" for none or where the row's `unit` says it
  std::string_view meaning;  ///< one sentence, with what null means
  Value (*get)(const models::Network& network, const Row& row);
};

// A field list for each struct, in the order of output. Units are SI but for percentages.
[[nodiscard]] const std::vector<Field<solver::FaultRow>>& fault_fields();
[[nodiscard]] const std::vector<Field<solver::Step>>& step_fields();
[[nodiscard]] const std::vector<Field<solver::Remedy>>& remedy_fields();
[[nodiscard]] const std::vector<Field<solver::Finding>>& finding_fields();
[[nodiscard]] const std::vector<Field<solver::ScheduleRow>>& schedule_fields();
[[nodiscard]] const std::vector<Field<solver::Flip>>& flip_fields();
[[nodiscard]] const std::vector<Field<solver::Stretch>>& stretch_fields();
[[nodiscard]] const std::vector<Field<solver::SweepPoint>>& sweep_point_fields();
[[nodiscard]] const std::vector<Field<solver::PathDevice>>& path_device_fields();
[[nodiscard]] const std::vector<Field<solver::DamageLine>>& damage_fields();
[[nodiscard]] const std::vector<Field<solver::ChartCurrent>>& chart_current_fields();
[[nodiscard]] const std::vector<Field<models::Assumption>>& assumption_fields();
[[nodiscard]] const std::vector<Field<solver::FaultQuery>>& fault_query_fields();
/// What a fault that is looked at closely has beyond fault_fields() of its row.
[[nodiscard]] const std::vector<Field<solver::FaultDetail>>& fault_detail_fields();
[[nodiscard]] const std::vector<Field<solver::ElementCurrent>>& element_current_fields();
[[nodiscard]] const std::vector<Field<solver::TouchVoltage>>& touch_voltage_fields();

/// The row as a record. A number that is unbounded (infinite) becomes null and is named in `reason`,
/// which is added where the row has no such field of its own.
template <class Row>
[[nodiscard]] Record record_of(const models::Network& network, const std::vector<Field<Row>>& fields, const Row& row);

template <class Row>
[[nodiscard]] std::vector<Record> records_of(const models::Network& network, const std::vector<Field<Row>>& fields,
                                             const std::vector<Row>& rows) {
  std::vector<Record> records;
  records.reserve(rows.size());
  for (const Row& row : rows) records.push_back(record_of(network, fields, row));
  return records;
}

/// Rows as CSV (RFC 4180 quoting, LF line ends, UTF-8 without BOM): headings with units, empty cells
/// for what is absent, "unbounded" for infinite values ("never" for times).
template <class Row>
[[nodiscard]] std::string csv_of(const models::Network& network, const std::vector<Field<Row>>& fields,
                                 const std::vector<Row>& rows);

/// One cell, quoted where it holds a comma, a quote or a line end.
[[nodiscard]] std::string csv_cell(std::string_view text);

/// What one field means, for `sunder help json`.
struct FieldHelp {
  std::string key, unit, meaning;
};
struct StructHelp {
  std::string format;  ///< "sunder.check/1"
  std::string place;   ///< "findings[]"
  std::vector<FieldHelp> fields;
};
/// Every record of every JSON form.
[[nodiscard]] std::vector<StructHelp> describe_json();

}  // namespace sunder::plots
