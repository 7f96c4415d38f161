// SPDX-License-Identifier: Apache-2.0
#include <cmath>
#include <numbers>

#include "solver/clearing.h"
#include "solver/faults.h"
#include "solver/situation.h"
#include "tests/solver/reading.h"

using namespace sunder;
using Catch::Matchers::WithinAbs;
using Catch::Matchers::WithinRel;
using solver::Condition;
using solver::Fault;
using tests::read;
using tests::supply;

namespace {

double current(const models::Network& network, const std::string& node, Condition condition, Fault fault) {
  for (const solver::FaultRow& row : solver::solve_faults(network))
    if (row.node == node && row.condition == condition && row.fault == fault) return row.current;
  FAIL("no " << word(fault) << " at " << node);
  return 0;
}

}  // namespace

TEST_CASE("The peak factor is 1.02 for a resistive loop and 2 for an inductive one", "[faults]") {
  // IEC 60909-0: kappa = 1.02 + 0.98 e^(-3R/X); the ends are the formula's own limits.
  CHECK_THAT(solver::peak_factor(0.0), WithinAbs(1.02, 1e-12));
  CHECK_THAT(solver::peak_factor(std::numeric_limits<double>::infinity()), WithinAbs(2.0, 1e-12));
  CHECK_THAT(solver::peak_factor(1.0 / 0.3), WithinAbs(1.4184, 1e-4));
}

TEST_CASE("The heat of the d.c. component is the integral of its square", "[clearing]") {
  // i_dc = sqrt2 I e^(-2 pi f t R/X) with kappa = 1 + e^(-pi R/X) (first peak after half a period), the
  // relation IEC 60909-0 builds m on. Simpson's rule over the same time.
  const double kappa = GENERATE(1.1, 1.4, 1.8);
  const double time = GENERATE(0.02, 0.1, 1.0);
  const double decay = 2 * 50.0 * std::log(kappa - 1.0);  // of the current [1/s]
  const int n = 20000;
  double integral = 0;
  for (int i = 0; i <= n; ++i) {
    const double value = 2.0 * std::exp(2.0 * decay * time * i / n);
    integral += value * (i == 0 || i == n ? 1 : i % 2 == 1 ? 4 : 2);
  }
  integral *= time / n / 3.0;
  CHECK_THAT(solver::dc_heat(kappa, time, 50.0), WithinRel(integral / time, 1e-6));
}

TEST_CASE("A declared current and a declared impedance are reproduced at the terminals", "[faults]") {
  const models::Network network = read(supply());
  CHECK_THAT(current(network, "main", Condition::maximum, Fault::three_phase), WithinRel(16000.0, 1e-12));
  CHECK_THAT(current(network, "main", Condition::maximum, Fault::line_neutral), WithinRel(16000.0, 1e-12));
  CHECK_THAT(current(network, "main", Condition::maximum, Fault::line_earth), WithinRel(16000.0, 1e-12));
  CHECK_THAT(current(network, "main", Condition::minimum, Fault::line_earth), WithinRel(0.95 * 230 / 0.35, 1e-12));
}

TEST_CASE("An undeclared angle is taken where the current is least, inside its range", "[faults]") {
  // 0.35 ohm at 0.9 .. 1 in front of a loop of pure resistance: the least current is that of angle 0.
  const models::Network network = read(R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-C-S"
maximum = { three_phase = "16 kA" }
minimum = { Ze = "0.35 ohm" }
[board.main]
[cable.wire]
material = "copper"
insulation = "pvc70"
cores = 0
sizes = [{ size = "2.5 mm2", r20 = "7.41 mohm/m", x = "0 mohm/m" }]
[circuit.main]
C1 = { phases = "L1", device = "B 16 A 6 kA", cable = "wire 2.5 mm2", length = "40 m", load = "10 A", Iz = "20 A" }
)");
  const double loop = 0.35 + 2 * 40 * 7.41e-3 * (1 + 0.004 * 50);
  CHECK_THAT(current(network, "main/C1", Condition::minimum, Fault::line_earth), WithinRel(0.95 * 230 / loop, 1e-9));
  // Greatest: the inductive end, 90 % of which is at right angles to the cable's resistance.
  const double zs = 1.1 * 230 / 16000.0;
  const std::complex<double> z = std::polar(zs, std::acos(0.3)) + 2 * 40 * 7.41e-3;
  CHECK_THAT(current(network, "main/C1", Condition::maximum, Fault::line_earth),
             WithinRel(1.1 * 230 / std::abs(z), 1e-9));
}

TEST_CASE("The worst place of a ring is its mid-point unless a spur is worse", "[faults]") {
  auto ring = [](const std::string& spurs) {
    return read(supply() + R"([circuit.main]
R1 = { phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "60 m", ring = true, load = "20 A", Iz = "27 A")" +
                spurs + " }\n");
  };
  const models::Network plain = ring("");
  const models::Network spur = ring(R"(, spurs = [{ at = "30 m", length = "6 m" }])");
  const solver::CircuitEnd end = solver::worst_end(plain, plain.circuits[0]);
  CHECK(end.spur == -1);
  CHECK_THAT(end.fraction, WithinAbs(0.5, 1e-12));
  CHECK(solver::worst_end(spur, spur.circuits[0]).spur == 0);
  CHECK(current(spur, "main/R1", Condition::minimum, Fault::line_earth) ==
        current(spur, "main/R1/spur1", Condition::minimum, Fault::line_earth));
}

TEST_CASE("A fuse's heat bound does not rise where only a late gate is known", "[clearing]") {
  // gG 32 A, IEC 60269-1 gates: 150 A within 5 s, 350 A within 0.1 s. Pre-arcing I2t does not rise with
  // current, so no current between passes more than 150^2 x 5 A2s.
  const models::Network network = read(supply() + R"([circuit.main]
C1 = { phases = "L1", device = "gG 32 A 50 kA", cable = "singles-pvc-cu 6 mm2", length = "20 m", load = "20 A", Iz = "40 A" }
)");
  const models::Device& fuse = network.circuits[0].device;
  for (const double amps : {151.0, 200.0, 300.0, 349.0})
    CHECK(solver::greatest_heat(fuse, amps, 1.02).total <= 150.0 * 150.0 * 5.0 * 1.01);
}

TEST_CASE("A TT fault returns through both electrodes", "[faults]") {
  const models::Network network = read(R"(rules = "BS 7671:2018+A2"
[supply.grid]
feeds = "main"
voltage = "230 V"
earthing = "TT"
maximum = { line_neutral = "16 kA", power_factor = 0.55 }
minimum = { Ze = "21 ohm", Zn = "0.35 ohm", power_factor = 1 }
[electrode.rod]
board = "main"
resistance = "80 ohm"
[board.main]
)");
  CHECK_THAT(current(network, "main", Condition::minimum, Fault::line_earth), WithinRel(0.95 * 230 / 101.0, 1e-12));
}
