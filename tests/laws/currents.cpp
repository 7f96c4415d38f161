// SPDX-License-Identifier: Apache-2.0
// Laws of fault currents in random radial networks.
#include <cmath>
#include <complex>
#include <numbers>

#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::close;
using laws::Rows;
using laws::Site;
using Complex = std::complex<double>;

// Series impedance of one conductor over a metre, worked out here: BS 7671 takes 0.004/K for copper
// and aluminium, 0.0045/K and a factor 1.1 for steel armour, 60 degC of armour below 70 degC
// insulation and 80 degC below 90 degC.
Complex conductor(const models::Cable& cable, const models::Strand& strand, bool hot) {
  double degc = 20;
  if (hot) {
    degc = strand.place == models::Place::armour     ? (cable.max_degc > 80 ? 80 : 60)
           : strand.place == models::Place::separate ? 30
                                                     : cable.max_degc;
  }
  const bool steel = strand.material == models::Material::steel;
  const double magnetic = hot && strand.place == models::Place::armour ? 1.1 : 1.0;
  return {strand.r20 * (1 + (steel ? 0.0045 : 0.004) * (degc - 20)) * magnetic, strand.x};
}

// Line conductor and protective conductors (in parallel with each other), there and back, over a
// metre.
Complex earth_loop(const models::Cable& cable, bool hot) {
  Complex admittance = 0;
  for (const models::Strand& strand : cable.protective) admittance += 1.0 / conductor(cable, strand, hot);
  return conductor(cable, cable.line, hot) + 1.0 / admittance;
}

// Loop of all submains down to a board.
Complex submains_loop(const models::Network& network, int board, bool hot) {
  Complex sum = 0;
  for (bool more = true; more;) {
    more = false;
    for (const models::Submain& submain : network.submains) {
      if (submain.to != board) continue;
      sum += earth_loop(submain.cable, hot) * (submain.length.value / submain.in_parallel);
      board = submain.from;
      more = true;
      break;
    }
  }
  return sum;
}

// The source's part of a line-earth loop, as declared.
Complex source_loop(const Site& site, bool hot) {
  if (!site.transformer) {
    return std::polar(hot ? site.Ze : site.three_phase_ohms, std::acos(site.power_factor));
  }
  const double base = 400.0 * 400.0 / (site.kVA * 1e3);
  const double r = site.losses_kW / site.kVA * base;
  const double z = site.uk_percent / 100 * base;
  const Complex winding(r, std::sqrt(z * z - r * r));
  const Complex network = (hot ? 1.0 : 1.1) * 160e3 / (site.fault_MVA * 1e6) * Complex(0.0995, 0.995);
  return (2.0 * (winding + network) + winding * site.z0_over_z1) / 3.0;
}

TEST_CASE(
    "The earth-fault loop is the complex sum of the source and of R1 + R2 of every run, rings by x "
    "(1 - x)") {
  laws::check_law([] {
    laws::Limits limits;
    limits.declared_angle = true;
    limits.tn_only = true;
    const Site site = *laws::sites(limits);
    const models::Network network = laws::network_of(site);
    const Rows rows = laws::rows_of(network);
    for (const models::Circuit& circuit : network.circuits) {
      for (const bool hot : {false, true}) {
        const Complex before = source_loop(site, hot) + submains_loop(network, circuit.board, hot);
        const Complex metre = earth_loop(circuit.cable, hot);
        const std::string node = models::address(network, circuit);
        const auto ohms = [&](const std::string& place) {
          return rows.at(std::string(hot ? "minimum " : "maximum ") + place + " line-earth").loop_ohms;
        };
        if (!circuit.ring) {
          RC_ASSERT(close(ohms(node), std::abs(before + metre * (circuit.length.value / circuit.in_parallel))));
          continue;
        }
        double worst = circuit.length.value / 4;  // the mid-point, unless a spur's end is farther
        for (std::size_t i = 0; i < circuit.spurs.size(); ++i) {
          const double x = circuit.spurs[i].at / circuit.length.value;
          const double metres = circuit.length.value * x * (1 - x) + circuit.spurs[i].length;
          worst = std::max(worst, metres);
          RC_ASSERT(close(ohms(node + "/spur" + std::to_string(i + 1)), std::abs(before + metre * metres)));
        }
        RC_ASSERT(close(ohms(node), std::abs(before + metre * worst)));
      }
    }
  });
}

TEST_CASE("The line-line current is the three-phase current times half the root of three") {
  // Both are driven by the declared voltage between lines.
  laws::check_law([] {
    const Rows rows = laws::rows_of(laws::network_of(*laws::sites()));
    for (const auto& [key, row] : rows) {
      if (row.fault != solver::Fault::three_phase) continue;
      const auto& lines = rows.at(std::string(word(row.condition)) + " " + row.node + " line-line");
      RC_ASSERT(row.known == lines.known);
      if (row.known) RC_ASSERT(close(lines.current, row.current * std::numbers::sqrt3 / 2));
    }
  });
}

TEST_CASE(
    "Loops between lines are driven by c U, loops through neutral or earth by c U0, and I = U / "
    "Z") {
  laws::check_law([] {
    for (const auto& [key, row] : laws::rows_of(laws::network_of(*laws::sites()))) {
      if (!row.known) continue;
      const double c = row.condition == solver::Condition::maximum ? 1.10 : 0.95;
      const double volts = row.fault == solver::Fault::line_line     ? 400
                           : row.fault == solver::Fault::three_phase ? 400 / std::numbers::sqrt3
                                                                     : 230;
      RC_ASSERT(close(row.driving_volts, c * volts));
      RC_ASSERT(close(row.current * row.loop_ohms, row.driving_volts));
    }
  });
}

TEST_CASE(
    "The minimum current of a fault is below its maximum, and no peak below root two times the "
    "current") {
  laws::check_law([] {
    const Rows rows = laws::rows_of(laws::network_of(*laws::sites()));
    for (const auto& [key, row] : rows) {
      if (row.condition != solver::Condition::maximum || !row.known) continue;
      const auto& least = rows.at("minimum" + key.substr(std::string("maximum").size()));
      if (least.known) RC_ASSERT(least.current < row.current);
      RC_ASSERT(row.peak >= 1.02 * std::numbers::sqrt2 * row.current * (1 - 1e-12));
      RC_ASSERT(row.peak <= 2 * std::numbers::sqrt2 * row.current * (1 + 1e-12));
    }
  });
}

TEST_CASE("Adding length raises no current anywhere") {
  laws::check_law([] {
    Site site = *laws::sites();
    const Rows before = laws::rows_of(laws::network_of(site));
    const double factor = 1 + *rc::gen::inRange(1, 300) * 0.01;
    const auto runs = static_cast<int>(site.submains.size() + site.circuits.size());
    const auto chosen = static_cast<std::size_t>(*rc::gen::inRange(0, runs));
    if (chosen < site.submains.size()) {
      site.submains[chosen].run.metres *= factor;
    } else {
      site.circuits[chosen - site.submains.size()].run.metres *= factor;
    }
    for (const auto& [key, row] : laws::rows_of(laws::network_of(site)))
      if (row.known) RC_ASSERT(row.current <= before.at(key).current * (1 + 1e-12));
  });
}

TEST_CASE("n equal cables in parallel are one of an nth of the length") {
  laws::check_law([] {
    laws::Limits limits;
    limits.single_cables = true;
    Site site = *laws::sites(limits);
    const Rows single = laws::rows_of(laws::network_of(site));
    const int n = *rc::gen::inRange(2, 6);
    for (laws::SubmainText& submain : site.submains) {
      submain.run.metres *= n;
      submain.run.in_parallel = n;
    }
    for (laws::CircuitText& circuit : site.circuits) {
      if (circuit.ring) continue;
      circuit.run.metres *= n;
      circuit.run.in_parallel = n;
    }
    for (const auto& [key, row] : laws::rows_of(laws::network_of(site)))
      if (row.known) RC_ASSERT(close(row.current, single.at(key).current));
  });
}

TEST_CASE("Twice all impedances halve every current and leave every X/R") {
  laws::check_law([] {
    laws::Limits limits;
    limits.declared_angle = true;  // otherwise the range of angles depends on the current
    Site site = *laws::sites(limits);
    const Rows before = laws::rows_of(laws::network_of(site));
    site.three_phase_ohms *= 2;
    site.Ze *= 2;
    site.Zn *= 2;
    site.kVA /= 2;
    site.losses_kW /= 2;
    site.fault_MVA /= 2;
    site.electrode *= 2;
    for (laws::SubmainText& submain : site.submains) submain.run.metres *= 2;
    for (laws::CircuitText& circuit : site.circuits) {
      circuit.run.metres *= 2;
      for (laws::SpurText& spur : circuit.spurs) {
        spur.at *= 2;
        spur.metres *= 2;
      }
    }
    for (const auto& [key, row] : laws::rows_of(laws::network_of(site))) {
      if (!row.known) continue;
      RC_ASSERT(close(2 * row.current, before.at(key).current));
      RC_ASSERT(close(row.x_over_r, before.at(key).x_over_r, 1e-6));
    }
  });
}

}  // namespace
