// SPDX-License-Identifier: Apache-2.0
// Currents behind a generator with its unit transformer, by hand.
#include <catch2/catch.hpp>
#include <cmath>
#include <complex>
#include <numbers>

#include "solver/fault_study.h"
#include "tests/solver/reading.h"

namespace {

using namespace sunder;
using tests::read;

double three_phase(const std::string& taps, const std::string& at) {
  const models::Network network = read(R"(rules = "IEC 60364"
currents = "IEC 60909"
[generator.G]
feeds = "machine"
voltage = "10.5 kV"
rating = "40 MVA"
xd_subtransient = 0.14
r = 0.01
sustained = 2.5
pf = 0.8
[transformer.U]
from = "machine"
feeds = "yard"
vector = "Dyn11"
voltage = "33 kV"
primary = "10.5 kV"
secondary = "34.5 kV"
rating = "40 MVA"
uk = "10 %"
losses = "160 kW"
star_point = "open"
)" + taps + "[board.machine]\n[board.yard]\n");
  solver::FaultQuery query;
  query.at = at;
  query.fault = solver::Fault::three_phase;
  const auto studied = solver::study_faults(network, query);
  REQUIRE(std::holds_alternative<std::vector<solver::FaultDetail>>(studied));
  return std::get<std::vector<solver::FaultDetail>>(studied).front().row.current;
}

// Of the high side: x"d and xT on its rated voltage and 40 MVA.
double by_hand(double factor) {
  const double base = 34.5e3 * 34.5e3 / 40e6;
  const double r = 160e3 / 40e6;
  const std::complex<double> z =
      base * (std::complex<double>{0.01, 0.14} + std::complex<double>{r, std::sqrt(0.1 * 0.1 - r * r)});
  return 1.1 * 33e3 / std::numbers::sqrt3 / std::abs(factor * z);
}

}  // namespace

// IEC 60909-0, power-station units (formulas from memory): KS = UnQ^2/UrG^2 UrTLV^2/UrTHV^2 cmax / (1 + |x"d - xT| sin
// phi), KSO = UnQ/UrG UrTLV/UrTHV cmax / (1 + x"d sin phi).
TEST_CASE("A generator with its unit transformer is corrected as one", "[iec60909]") {
  const double ratio = 33.0 / 34.5;
  const double xt = std::sqrt(0.1 * 0.1 - 0.004 * 0.004);
  const double on_load = ratio * ratio * 1.1 / (1 + (0.14 - xt) * 0.6);
  const double fixed = ratio * 1.1 / (1 + 0.14 * 0.6);
  CHECK(three_phase("on_load_taps = true\n", "yard") == Approx(by_hand(on_load)).epsilon(1e-6));
  CHECK(three_phase("", "yard") == Approx(by_hand(fixed)).epsilon(1e-6));
}
