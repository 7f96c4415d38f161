// SPDX-License-Identifier: Apache-2.0
// Laws of time-current bands, for every device of the library.
#include "models/devices.h"

#include <cmath>

#include "netlists/library.h"
#include "solver/clearing.h"
#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/library_devices.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::Site;

// A current anywhere from a tenth of the rating to five hundred times it.
double current_near(double In) { return In * std::pow(10.0, *rc::gen::inRange(-1000, 2700) * 0.001); }

TEST_CASE("No library device operates later at its latest than it may at its earliest") {
  laws::check_law([] {
    const models::Device& device = *rc::gen::elementOf(laws::library_devices());
    RC_LOG() << device.text << '\n';
    for (const auto& [band, rating] :
         {std::pair{&device.overcurrent, device.In}, std::pair{&device.residual, device.IdN}}) {
      if (band->empty() || band->earliest.empty()) continue;
      const double current = current_near(rating);
      RC_LOG() << current << " A\n";
      const double latest = band->latest.time_at(current);
      const double earliest = band->earliest.time_at(current);
      // Below its first assured point a device does not operate at all.
      RC_ASSERT(std::isinf(latest) || earliest <= latest);
    }
  });
}

TEST_CASE("More current never makes a library device slower, neither at its latest nor at its earliest") {
  laws::check_law([] {
    const models::Device& device = *rc::gen::elementOf(laws::library_devices());
    RC_LOG() << device.text << '\n';
    for (const auto& [band, rating] :
         {std::pair{&device.overcurrent, device.In}, std::pair{&device.residual, device.IdN}}) {
      for (const models::Curve* curve : {&band->latest, &band->earliest}) {
        if (curve->empty()) continue;
        const double a = current_near(rating);
        const double b = a * (1 + *rc::gen::inRange(0, 2000) * 0.001);
        RC_ASSERT(curve->time_at(b) <= curve->time_at(a) * (1 + 1e-12));
      }
    }
    if (!device.interpolated.empty()) {
      const double a = current_near(device.In);
      RC_ASSERT(device.interpolated.time_at(1.3 * a) <= device.interpolated.time_at(a));
    }
  });
}

TEST_CASE("The current for a time is the least at which the curve is that fast") {
  laws::check_law([] {
    const models::Device& device = *rc::gen::elementOf(laws::library_devices());
    RC_LOG() << device.text << '\n';
    const models::Curve& curve = device.overcurrent.empty() ? device.residual.latest : device.overcurrent.latest;
    if (curve.empty()) return;
    const double time = std::pow(10.0, *rc::gen::inRange(-1500, 3500) * 0.001);
    const double current = models::current_for(curve, time);
    if (std::isinf(current)) {
      RC_ASSERT(curve.points.back().time > time);
      return;
    }
    RC_ASSERT(curve.time_at(current * (1 + 1e-9)) <= time * (1 + 1e-6));
    RC_ASSERT(curve.time_at(current * (1 - 1e-9)) >= time * (1 - 1e-6));
  });
}

TEST_CASE("The heat a library device lets through is never below the least that must pass") {
  laws::check_law([] {
    const models::Device& device = *rc::gen::elementOf(laws::library_devices());
    RC_LOG() << device.text << '\n';
    if (device.overcurrent.empty()) return;
    const double current = current_near(device.In);
    RC_LOG() << current << " A\n";
    const solver::Heat most = solver::greatest_heat(device, current, 1.02 + *rc::gen::inRange(0, 900) * 0.001);
    RC_ASSERT(std::isinf(most.time) || solver::least_heat(device, current) <= most.total * (1 + 1e-9));
  });
}

int rank(solver::Verdict verdict) {
  return verdict == solver::Verdict::fails ? 0 : verdict == solver::Verdict::undecided ? 1 : 2;
}

TEST_CASE("A greater earth-fault loop never turns a disconnection time from not met to met") {
  laws::check_law([] {
    laws::Limits limits;
    limits.supplies_only = true;
    const Site site = *laws::sites(limits);
    models::Network network = laws::network_of(site);
    // Every circuit gets some library device, so that all families come up; but none that breaks residual
    // currents alone: above its own capacity such a one is not trusted, so that more current may be worse.
    for (models::Circuit& circuit : network.circuits) {
      const models::Device device = *rc::gen::elementOf(laws::library_devices());
      if (device.kind != models::DeviceKind::residual) circuit.device = device;
    }
    solver::CheckOptions options;
    options.remedies = false;
    const auto ranks = [&](double ohms) {
      network.sources.front().minimum.line_earth.ohms = ohms;
      std::map<std::string, int> all;
      for (const solver::Finding& finding : solver::run_checks(network, options))
        if (finding.check == "disconnection time") all.emplace(finding.subject, rank(finding.verdict));
      return all;
    };
    const double Ze = std::pow(10.0, *rc::gen::inRange(-2000, 2000) * 0.001);
    const auto smaller = ranks(Ze);
    const auto greater = ranks(Ze * (1 + *rc::gen::inRange(1, 1000) * 0.01));
    for (const auto& [subject, found] : greater) {
      RC_LOG() << subject << '\n';
      RC_ASSERT(found <= smaller.at(subject));
    }
  });
}

}  // namespace
