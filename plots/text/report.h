// SPDX-License-Identifier: Apache-2.0
/// @file
/// Results as text: terminal, CSV, JSON. Each function returns the whole text; the program prints it.
#pragma once

#include <string>
#include <vector>

#include "models/network.h"
#include "solver/fault_study.h"
#include "solver/results.h"

namespace sunder::plots {

struct TextStyle {
  bool colour = false;
  int width = 100;          ///< columns of the terminal
  bool every_step = false;  ///< the whole working instead of one or two lines
  std::string date;         ///< "2026-12-01", printed in the head of reports; "" leaves it out
  std::string program;      ///< "sunder 0.1.0", printed beside it
};

/// Short cautions that stand under every check report.
[[nodiscard]] const std::vector<std::string>& cautions();

/// Failures first with working and remedies, then what is undecided, then a summary by board, then
/// the assumptions and the cautions.
[[nodiscard]] std::string check_report(const models::Network& network, const std::vector<solver::Finding>& findings,
                                       const TextStyle& style);
[[nodiscard]] std::string check_json(const models::Network& network, const std::vector<solver::Finding>& findings);

[[nodiscard]] std::string faults_report(const models::Network& network, const std::vector<solver::FaultRow>& rows,
                                        const TextStyle& style);
[[nodiscard]] std::string faults_json(const models::Network& network, const std::vector<solver::FaultRow>& rows);

/// What stands under every report with touch voltages.
[[nodiscard]] const char* touch_caution();

/// Faults looked at closely: one line each, or, where currents or touch voltages were asked for, a paragraph each
/// with their tables.
[[nodiscard]] std::string fault_study_report(const models::Network& network, const solver::FaultQuery& query,
                                             const std::vector<solver::FaultDetail>& faults, const TextStyle& style);
[[nodiscard]] std::string fault_study_json(const models::Network& network, const solver::FaultQuery& query,
                                           const std::vector<solver::FaultDetail>& faults);

[[nodiscard]] std::string schedule_report(const models::Network& network, const std::vector<solver::ScheduleRow>& rows,
                                          const TextStyle& style);
[[nodiscard]] std::string schedule_csv(const std::vector<solver::ScheduleRow>& rows);
[[nodiscard]] std::string schedule_json(const models::Network& network, const std::vector<solver::ScheduleRow>& rows);

[[nodiscard]] std::string sweep_report(const models::Network& network, const solver::Sweep& sweep,
                                       const TextStyle& style);
[[nodiscard]] std::string sweep_json(const models::Network& network, const solver::Sweep& sweep);

}  // namespace sunder::plots
