// SPDX-License-Identifier: Apache-2.0
#include "plots/text/json.h"

#include <cmath>
#include <nlohmann/json.hpp>

#include "plots/figures/charts.h"
#include "plots/text/report.h"

namespace sunder::plots {
namespace {

using Json = nlohmann::ordered_json;

Json to_json(const Record& record);

struct Writer {
  Json operator()(std::monostate) const { return nullptr; }
  Json operator()(bool flag) const { return flag; }
  Json operator()(double number) const { return std::isfinite(number) ? Json(number) : Json(nullptr); }
  Json operator()(const std::string& text) const { return text; }
  Json operator()(const std::vector<std::string>& texts) const {
    Json list = Json::array();
    for (const std::string& text : texts) list.push_back(text);
    return list;
  }
  Json operator()(const std::vector<double>& numbers) const {
    Json list = Json::array();
    for (const double number : numbers) list.push_back((*this)(number));
    return list;
  }
  Json operator()(const Record& record) const { return to_json(record); }
  Json operator()(const std::vector<Record>& records) const {
    Json list = Json::array();
    for (const Record& record : records) list.push_back(to_json(record));
    return list;
  }
};

Json to_json(const Record& record) {
  Json object = Json::object();
  for (const auto& [key, value] : record) object[key] = std::visit(Writer{}, value.data);
  return object;
}

// Bytes that are not UTF-8 are replaced: the output is valid whatever the input was.
std::string text_of(const Json& json) { return json.dump(2, ' ', false, Json::error_handler_t::replace) + '\n'; }

Json head(const char* format, const models::Network& network) {
  Json object = Json::object();
  object["format"] = format;
  object["title"] = network.title;
  object["rules"] = network.rules_name;
  Json states = Json::array();
  for (const models::SupplyState& state : network.states) states.push_back(state.name);
  object["states"] = std::move(states);
  return object;
}

template <class Row>
Json rows_json(const models::Network& network, const std::vector<Field<Row>>& fields, const std::vector<Row>& rows) {
  Json list = Json::array();
  for (const Row& row : rows) list.push_back(to_json(record_of(network, fields, row)));
  return list;
}

}  // namespace

std::string check_json(const models::Network& network, const std::vector<solver::Finding>& findings) {
  Json object = head("sunder.check/1", network);
  Json counts = Json::object();
  for (const solver::Verdict verdict :
       {solver::Verdict::fails, solver::Verdict::undecided, solver::Verdict::meets, solver::Verdict::noted}) {
    std::size_t n = 0;
    for (const solver::Finding& f : findings) n += f.verdict == verdict ? 1U : 0U;
    counts[word(verdict)] = n;
  }
  object["counts"] = std::move(counts);
  object["findings"] = rows_json(network, finding_fields(), findings);
  object["assumptions"] = rows_json(network, assumption_fields(), network.assumptions);
  object["cautions"] = cautions();
  return text_of(object);
}

std::string faults_json(const models::Network& network, const std::vector<solver::FaultRow>& rows) {
  Json object = head("sunder.faults/1", network);
  object["results"] = rows_json(network, fault_fields(), rows);
  return text_of(object);
}

std::string fault_study_json(const models::Network& network, const solver::FaultQuery& query,
                             const std::vector<solver::FaultDetail>& faults) {
  Json object = head("sunder.fault-study/1", network);
  object["asked"] = to_json(record_of(network, fault_query_fields(), query));
  Json list = Json::array();
  for (const solver::FaultDetail& fault : faults) {
    Json item = to_json(record_of(network, fault_fields(), fault.row));
    item.update(to_json(record_of(network, fault_detail_fields(), fault)));
    list.push_back(std::move(item));
  }
  object["faults"] = std::move(list);
  object["cautions"] = query.touch ? Json::array({touch_caution()}) : Json::array();
  return text_of(object);
}

std::string schedule_json(const models::Network& network, const std::vector<solver::ScheduleRow>& rows) {
  Json object = head("sunder.schedule/1", network);
  object["rows"] = rows_json(network, schedule_fields(), rows);
  return text_of(object);
}

std::string sweep_json(const models::Network& network, const solver::Sweep& sweep) {
  Json object = head("sunder.vary/1", network);
  object["key"] = sweep.key;
  object["unit"] = std::string(sweep.catalogue ? "" : models::si_symbol(sweep.unit));
  object["catalogue"] = sweep.catalogue;
  object["flips"] = rows_json(network, flip_fields(), sweep.flips);
  object["undecided"] = rows_json(network, stretch_fields(), sweep.undecided);
  object["points"] = rows_json(network, sweep_point_fields(), sweep.points);
  return text_of(object);
}

std::string chart_json(const solver::PathChart& chart) {
  const models::Network nowhere;  // no field of a chart points into a file
  Json object = Json::object();
  object["format"] = "sunder.chart/1";
  object["title"] = chart.title;
  object["address"] = chart.address;
  object["state"] = chart.state;
  object["voltage"] = chart.voltage;
  object["devices"] = rows_json(nowhere, path_device_fields(), chart.devices);
  object["damage"] = rows_json(nowhere, damage_fields(), chart.damage);
  object["currents"] = rows_json(nowhere, chart_current_fields(), chart.currents);
  return text_of(object);
}

std::string errors_json(const std::vector<Complaint>& complaints) {
  Json list = Json::array();
  for (const Complaint& c : complaints) {
    Json item = Json::object();
    item["severity"] = c.severity;
    item["file"] = c.file;
    item["line"] = c.line > 0 ? Json(c.line) : Json(nullptr);
    item["column"] = c.column > 0 ? Json(c.column) : Json(nullptr);
    item["message"] = c.message;
    item["source_line"] = c.source_line;
    item["hint"] = c.hint;
    list.push_back(std::move(item));
  }
  Json object = Json::object();
  object["format"] = "sunder.errors/1";
  object["errors"] = std::move(list);
  return text_of(object);
}

std::string help_json(const HelpTopic& topic) {
  Json object = Json::object();
  object["format"] = "sunder.help/1";
  object["topic"] = topic.name;
  object["title"] = topic.title;
  object["intro"] = topic.intro;
  Json sections = Json::array();
  for (const HelpSection& section : topic.sections) {
    Json part = Json::object();
    part["heading"] = section.heading;
    part["text"] = section.text;
    part["example"] = section.example;
    Json entries = Json::array();
    for (const HelpEntry& entry : section.entries) {
      Json item = Json::object();
      item["name"] = entry.name;
      item["text"] = entry.text;
      entries.push_back(std::move(item));
    }
    part["entries"] = std::move(entries);
    sections.push_back(std::move(part));
  }
  object["sections"] = std::move(sections);
  return text_of(object);
}

std::string record_json(const std::string& format, const Record& record) {
  Json object = Json::object();
  object["format"] = format;
  for (const auto& [key, value] : record) object[key] = std::visit(Writer{}, value.data);
  return text_of(object);
}

}  // namespace sunder::plots
