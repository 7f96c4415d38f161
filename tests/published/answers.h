// SPDX-License-Identifier: Apache-2.0
/// @file
/// What the program answers to a netlist, read back from its JSON.
///
/// Every value of this folder comes through here: nothing of the libraries is linked. A run that
/// cannot start fails the test with what the program said.
#pragma once

#include <string>
#include <vector>

#include "tests/support/json.h"
#include "tests/support/printed.h"

namespace sunder::published {

/// One row of `sunder faults`.
struct FaultAnswer {
  std::string condition, node, fault;
  double amps = 0;      ///< [A]
  double peak = 0;      ///< [A]; NaN in the minimum
  double ohms = 0;      ///< |Z| of the loop [ohm]
  double x_over_r = 0;  ///< of the loop
  double volts = 0;     ///< that drive the loop [V]
};

/// One finding of `sunder check` or of a point of `sunder vary`.
struct FindingAnswer {
  std::string check, subject, verdict, confidence, upstream, selectivity;
  double value = 0;  ///< SI; NaN where null
  double limit = 0;  ///< SI; NaN where null
};

/// One flip of `sunder vary`.
struct FlipAnswer {
  std::string check, subject, before, after;
  double at = 0;  ///< SI
};

struct PointAnswer {
  double value = 0;  ///< SI
  std::vector<FindingAnswer> findings;
};

struct SweepAnswer {
  std::vector<FlipAnswer> flips;
  std::vector<PointAnswer> points;
};

/// `sunder arguments.. net.toml --json`, the netlist's name put behind the command.
[[nodiscard]] support::Json answer(const std::string& netlist, std::vector<std::string> arguments);

[[nodiscard]] std::vector<FaultAnswer> faults(const std::string& netlist);
[[nodiscard]] std::vector<FindingAnswer> check(const std::string& netlist);
/// Voltage drop of a row of `sunder schedule` [1].
[[nodiscard]] double drop(const std::string& netlist, const std::string& address);

/// `sunder vary --set key --from from --to to`.
[[nodiscard]] SweepAnswer vary(const std::string& netlist, const std::string& key, const std::string& from,
                               const std::string& to);
/// `sunder vary --set key --values values`.
[[nodiscard]] SweepAnswer vary_values(const std::string& netlist, const std::string& key, const std::string& values);

/// The row with these names; fails the test if there is none.
[[nodiscard]] FaultAnswer at(const std::vector<FaultAnswer>& rows, const std::string& condition,
                             const std::string& node, const std::string& fault);
[[nodiscard]] FindingAnswer finding(const std::vector<FindingAnswer>& findings, const std::string& check,
                                    const std::string& subject);

/// Where the check of a subject leaves (or, going the other way, reaches) `meets`; fails the test
/// unless there is exactly one such flip, or if any finding on the way rests on low-confidence
/// data.
[[nodiscard]] double flip(const SweepAnswer& sweep, const std::string& check, const std::string& subject);

/// Of a page that mostly cuts digits and sometimes rounds them: checks that the value lies less than half a unit
/// of the last digit below the printed number and up to `units` of it above.
void check_cut(double value, const std::string& printed, double units = 1);

/// Matcher for a flip: as Printed, but both ends of the millionth to which `vary` knows a flip
/// count, so that a value on the tie between two printed numbers is not lost to the bisection.
class FlipPrints : public Catch::MatcherBase<double> {
 public:
  explicit FlipPrints(const std::string& digits, double unit = 1.0) : printed_(digits, unit) {}
  [[nodiscard]] bool match(const double& at) const override {
    constexpr double kFlipAccuracy = 1e-6;
    return printed_.match(at) || printed_.match(at * (1 - kFlipAccuracy)) || printed_.match(at * (1 + kFlipAccuracy));
  }
  [[nodiscard]] std::string describe() const override { return printed_.describe() + ", give or take a millionth"; }

 private:
  support::Printed printed_;
};

}  // namespace sunder::published
