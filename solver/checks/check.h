// SPDX-License-Identifier: Apache-2.0
/// @file
/// What a check is: a value with a name and a pure function from a solved situation to findings.
/// Adding one: one file in this folder with a function that returns a Check, one line in list.cpp.
#pragma once

#include <string>
#include <vector>

#include "solver/situation.h"
#include "solver/study.h"

namespace sunder::solver {

struct Check {
  CheckInfo info;
  bool (*applies)(const Situation& s) = nullptr;
  /// Does not solve, print or read other checks. One finding; a pair of devices has one each.
  std::vector<Finding> (*judge)(const Situation& s) = nullptr;
};

/// All checks in the order of reports. Appending to it adds a check for the process.
[[nodiscard]] std::vector<Check>& checks();

[[nodiscard]] Check breaking_capacity_check();
[[nodiscard]] Check disconnection_check();
[[nodiscard]] Check clearance_check();
[[nodiscard]] Check heating_check();
[[nodiscard]] Check overload_check();
[[nodiscard]] Check voltage_drop_check();
[[nodiscard]] Check additional_protection_check();
[[nodiscard]] Check earth_electrode_check();
[[nodiscard]] Check first_fault_check();
[[nodiscard]] Check selectivity_check();

// What the checks share.

/// A finding with its subject, state and place filled in, undecided until judged.
[[nodiscard]] Finding begin_finding(const Situation& s, const std::string& check);

/// Marks it undecided for want of something.
void lack(Finding& finding, const std::string& need, const std::string& reason);

/// Undecided where several feeds share the current of the subject's device: which clears first decides what the
/// others carry. @return whether it is so
bool lack_sequence(Finding& finding, const Situation& s);

/// Undecided where inverters alone feed the subject and give up before `time` [s]: after their last stage nothing
/// flows that a device could clear. @return whether it is so
bool lack_source(Finding& finding, const Situation& s, double time);

/// Sets value, limit, margin and verdict for "value must not exceed limit": margin = 1 - value / limit.
void compare_upper(Finding& finding, double value, double limit, models::Quantity unit);

/// Low-confidence data is taken with a band of this share: a verdict with less margin is undecided.
inline constexpr double kLowConfidenceBand = 0.10;

/// Turns a verdict that low-confidence data could flip into undecided. Last step of every judge.
void weigh_confidence(Finding& finding);

/// Worst confidence of the conductors from the source to the far end of the subject.
[[nodiscard]] models::Confidence path_confidence(const Situation& s, bool protective);

/// "1.37 ohm" and the like, three digits.
[[nodiscard]] std::string say(double value, models::Quantity unit);

/// ln(current / step) of each step: the distances that `vary` watches.
void watch_steps(Finding& finding, double current, const std::vector<double>& steps);

}  // namespace sunder::solver
