// SPDX-License-Identifier: Apache-2.0
// Laws of transformers, machines and parallel cables, each by the formula of its text-book case.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <numbers>
#include <sstream>

#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/mesh.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::close;
using laws::studied;
using solver::Condition;
using solver::Fault;
using Complex = std::complex<double>;

std::string text_of(double value) {
  std::ostringstream text;
  text.precision(15);
  text << value;
  return text.str();
}

double some(int low, int high, double unit) { return *rc::gen::inRange(low, high + 1) * unit; }

solver::FaultDetail one(const models::Network& network, const std::string& at, Fault fault, Condition condition) {
  solver::FaultQuery query;
  query.at = at;
  query.fault = fault;
  query.currents = true;
  for (const solver::FaultDetail& detail : studied(network, query))
    if (detail.row.condition == condition) return detail;
  RC_FAIL("no such row");
  return {};
}

// Magnitudes of the three line currents of an element, ascending.
std::array<double, 3> lines_of(const solver::FaultDetail& detail, const std::string& name) {
  for (const solver::ElementCurrent& element : detail.elements) {
    if (element.element != name) continue;
    std::array<double, 3> amps{std::abs(element.amps[0]), std::abs(element.amps[1]), std::abs(element.amps[2])};
    std::sort(amps.begin(), amps.end());
    return amps;
  }
  RC_FAIL("no current of " + name);
  return {};
}

TEST_CASE("A Dyn unit carries 2:1:1 before a fault between lines and 1:1:0 before one to earth") {
  laws::check_law([] {
    const double primary = *rc::gen::element<double>(6000, 11000, 20000);
    const double tap = some(-5, 5, 0.01);
    const std::string text =
        "rules = \"BS 7671:2018+A2\"\n[supply.utility]\nfeeds = \"HV\"\nvoltage = \"" + text_of(primary / 1000) +
        " kV\"\nmaximum = { power = \"" + text_of(some(50, 500, 1)) +
        " MVA\" }\nminimum = { power = \"40 MVA\" }\n[board.HV]\n[board.LV]\n[transformer.T1]\nfrom = \"HV\"\nfeeds = "
        "\"LV\"\nprimary = \"" +
        text_of(primary / 1000) + " kV\"\nsecondary = \"433 V\"\nvoltage = \"230/400 V\"\nvector = \"Dyn" +
        *rc::gen::element<std::string>("1", "5", "7", "11") + "\"\ntap = \"" + text_of(tap * 100) +
        " %\"\nrating = \"" + text_of(some(100, 2000, 1)) + " kVA\"\nuk = \"" + text_of(some(40, 60, 0.1)) +
        " %\"\nx_over_r = " + text_of(some(2, 9, 1)) + "\nearthing = \"TN-S\"\n";
    const models::Network network = laws::network_of(text);
    const double ratio = 433 / (primary * (1 + tap));
    for (const Condition condition : {Condition::maximum, Condition::minimum}) {
      const solver::FaultDetail lines = one(network, "LV", Fault::line_line, condition);
      const double coil = lines.row.current * ratio / std::numbers::sqrt3;
      for (const char* place : {"T1 primary", "utility"}) {
        const auto amps = lines_of(lines, place);
        RC_ASSERT(close(amps[0], coil) && close(amps[1], coil) && close(amps[2], 2 * coil));
      }
      const solver::FaultDetail earth = one(network, "LV", Fault::line_earth, condition);
      const double leg = earth.row.current * ratio / std::numbers::sqrt3;
      for (const char* place : {"T1 primary", "utility"}) {
        const auto amps = lines_of(earth, place);
        RC_ASSERT(amps[0] < 1e-9 * leg && close(amps[1], leg) && close(amps[2], leg));
      }
      const solver::FaultDetail three = one(network, "LV", Fault::three_phase, condition);
      for (const double amps : lines_of(three, "T1 primary")) RC_ASSERT(close(amps, three.row.current * ratio));
    }
  });
}

TEST_CASE("c multiplies the nominal voltage and never the no-load voltage of a unit") {
  laws::check_law([] {
    const double no_load = some(400, 440, 1);
    const double kVA = some(100, 2000, 1);
    const double uk = some(40, 60, 0.001);
    const std::string unit = "voltage = \"230/400 V\"\nsecondary = \"" + text_of(no_load) + " V\"\nrating = \"" +
                             text_of(kVA) + " kVA\"\nuk = \"" + text_of(uk * 100) +
                             " %\"\nx_over_r = 4\nearthing = \"TN-S\"\n";
    const std::string stiff = "rules = \"BS 7671:2018+A2\"\n[board.LV]\n[transformer.T1]\nfeeds = \"LV\"\n" + unit;
    const std::string inside =
        "rules = \"BS 7671:2018+A2\"\n[supply.utility]\nfeeds = \"HV\"\nvoltage = \"11 kV\"\nmaximum = { z1 = \"1e-9 "
        "ohm\", z0 = \"1e-9 ohm\" }\nminimum = { z1 = \"1e-9 ohm\", z0 = \"1e-9 ohm\" "
        "}\n[board.HV]\n[board.LV]\n[transformer.T1]\nfrom = \"HV\"\nfeeds = \"LV\"\nprimary = \"11 kV\"\n" +
        unit;
    const double ohms = uk * no_load * no_load / (kVA * 1e3);
    for (const std::string& text : {stiff, inside}) {
      const auto detail = one(laws::network_of(text), "LV", Fault::three_phase, Condition::maximum);
      RC_ASSERT(close(detail.row.current, 1.10 * 400 / std::numbers::sqrt3 / ohms, 1e-6));
      RC_ASSERT(close(detail.row.driving_volts, 1.10 * 400 / std::numbers::sqrt3));
    }
  });
}

TEST_CASE(
    "A machine with an open star feeds positive and negative sequence into a line-earth fault, no zero sequence") {
  laws::check_law([] {
    const Complex z1{some(1, 30, 1e-3), some(1, 60, 1e-3)};
    const Complex z0{some(1, 30, 1e-3), some(1, 60, 1e-3)};
    const double kVA = some(50, 500, 1);
    const double x = some(8, 25, 0.01);
    auto complex_text = [](Complex z) { return text_of(z.real()) + "+j" + text_of(z.imag()) + " ohm"; };
    const std::string values = "{ z1 = \"" + complex_text(z1) + "\", z0 = \"" + complex_text(z0) + "\" }\n";
    const models::Network network = laws::network_of(
        "rules = \"BS 7671:2018+A2\"\n[board.B]\n[supply.grid]\nfeeds = \"B\"\nvoltage = \"230/400 V\"\nearthing = "
        "\"TN-S\"\nmaximum = " +
        values + "minimum = " + values +
        "[generator.G]\nfeeds = \"B\"\nvoltage = \"230/400 V\"\nearthing = \"TN-S\"\nstar_point = \"none\"\nrating = "
        "\"" +
        text_of(kVA) + " kVA\"\nxd_subtransient = " + text_of(x) +
        "\nr = 0\nx0 = 0.05\nsustained = 3\n"
        "[state.both]\nsources = [\"grid\", \"G\"]\n");
    const solver::FaultDetail detail = one(network, "B", Fault::line_earth, Condition::maximum);
    const Complex machine{0, x * 400 * 400 / (kVA * 1e3)};
    const Complex beside = z1 * machine / (z1 + machine);
    const double volts = 1.10 * 230;
    const Complex fault = 3 * volts / (2.0 * beside + z0);
    RC_ASSERT(close(detail.row.current, std::abs(fault), 1e-8));
    // Its share of I1 = I2 = If/3: twice that in the faulty line, once against it in each of the others.
    const double share = std::abs(fault / 3.0 * beside / machine);
    const auto amps = lines_of(detail, "G");
    RC_ASSERT(close(amps[0], share, 1e-8) && close(amps[1], share, 1e-8) && close(amps[2], 2 * share, 1e-8));
    for (const solver::ElementCurrent& element : detail.elements)
      if (element.element == "G")
        RC_ASSERT(std::abs(element.amps[0] + element.amps[1] + element.amps[2]) < 1e-9 * std::abs(fault));
  });
}

TEST_CASE("Inside n equal cables in parallel a fault meets x (m - x) / m of one, m = n / (n - 1)") {
  laws::check_law([] {
    const int n = *rc::gen::inRange(2, 6);
    const double metres = some(10, 200, 1);
    const double percent = some(0, 1000, 0.1);
    const std::string head =
        "rules = \"BS 7671:2018+A2\"\n[supply.grid]\nfeeds = \"A\"\nvoltage = \"230/400 V\"\nearthing = "
        "\"TN-S\"\nmaximum = { three_phase = \"16 kA\", power_factor = 0.3 }\nminimum = { Ze = \"0.2 ohm\", Zn = \"0.2 "
        "ohm\", power_factor = 0.9 }\n[board.A]\n[board.B]\n";
    auto cable = [&](int k, int in_parallel) {
      return "[submain.S" + std::to_string(k) +
             "]\nfrom = \"A\"\nto = \"B\"\ndevice = \"gG 100 A\"\ncable = "
             "\"swa-xlpe-cu-4c 70 mm2\"\ncpc = \"armour\"\nlength = \"" +
             text_of(metres) + " m\"\nin_parallel = " + std::to_string(in_parallel) + "\n";
    };
    std::string separate = head;
    for (int k = 1; k <= n; ++k) separate += cable(k, 1);
    const models::Network bundle = laws::network_of(head + cable(1, n));
    const models::Network cables = laws::network_of(separate);
    const models::Network lone = laws::network_of(head + cable(1, 1));
    const double x = percent / 100;
    const double m = static_cast<double>(n) / (n - 1);
    const std::string place = "S1@" + text_of(percent) + "%";
    for (const Condition condition : {Condition::maximum, Condition::minimum})
      for (const Fault fault : {Fault::line_earth, Fault::line_neutral, Fault::line_line, Fault::three_phase}) {
        auto loop = [&](const models::Network& network, const std::string& at) {
          const solver::FaultDetail detail = one(network, at, fault, condition);
          // Every loop here is driven by one voltage and flows in its own conductors.
          const double turn = std::atan(detail.row.x_over_r);
          return std::polar(detail.row.loop_ohms, turn);
        };
        const Complex before = loop(lone, "A");
        const Complex whole = loop(lone, "B") - before;  // Z1, one cable from end to end
        const Complex expected = before + whole * (x * (m - x) / m);
        RC_ASSERT(std::abs(loop(bundle, place) - expected) < 1e-8 * std::abs(expected));
        RC_ASSERT(std::abs(loop(cables, place) - expected) < 1e-8 * std::abs(expected));
      }
  });
}

}  // namespace
