// SPDX-License-Identifier: Apache-2.0
// Published greatest lengths by the conventional method, L = 0.8 U0 S / (rho (1 + m) Ia): the
// program varies the length until the disconnection time flips. The guides drive the circuit alone
// with 0.8 U0, the program with Cmin U0 and no source impedance, so its length is multiplied by 0.8
// / Cmin.
#include <catch2/catch.hpp>
#include <string>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"

namespace {

using namespace sunder::published;

// A cable whose line conductor has, at 70 degC, the hot resistivity of the guide [ohm mm2/m] over
// `area` [mm2] and whose protective conductor has m times its resistance. The rule set takes 1.2 at
// 70 degC.
std::string cable(const std::string& name, double rho, double area, double m, const std::string& material = "copper") {
  const double r20 = rho / area / 1.2 * 1e3;  // [mohm/m]
  return "[cable." + name + "]\nmaterial = \"" + material +
         "\"\ninsulation = \"pvc70\"\ncores = 2\nbuilt_in_cpc = true\nsizes = [{ size = \"10 "
         "mm2\", r20 = \"" +
         digits(r20) + " mohm/m\", cpc_size = \"10 mm2\", cpc_r20 = \"" + digits(m * r20) +
         " mohm/m\" }]\nsource = \"resistivity of the guide\"\n";
}

double greatest_length(const std::string& device, const std::string& cable_table, const std::string& voltage,
                       const std::string& devices = "") {
  const std::string text = head() + stiff_supply(voltage) + cable_table + devices +
                           "[board.main]\n[circuit.main]\nW = { use = \"fixed\", phases = \"L1\", device = \"" +
                           device + "\", cable = \"c 10 mm2\", length = \"10 m\" }\n";
  return flip(vary(text, "main/W.length", "10 m", "2000 m"), "disconnection time", "main/W") * 0.8 / kMinBritish;
}

// Tag S: https://studylib.net/doc/18223823/maximum-cable-length (B curves, rho 0.0225, m = 1; 50
// mm2 counts as 47.5).
TEST_CASE("Circuits behind type B breakers may be as long as a published table says") {
  CHECK_THAT(greatest_length("B 2 A", cable("c", 0.0225, 1.5, 1), "230/400 V"), FlipPrints("613"));
  CHECK_THAT(greatest_length("B 2 A", cable("c", 0.0225, 2.5, 1), "230/400 V"), FlipPrints("1022"));
  CHECK_THAT(greatest_length("B 125 A", cable("c", 0.0225, 47.5, 1), "230/400 V"), FlipPrints("311"));
}

// Tag S:
// https://www.yumpu.com/en/document/view/3640297/chapter-a-general-rules-of-electrical-installation-design/177;
// that table takes 14 In for type D and rho 0.023.
TEST_CASE(
    "A circuit behind a type D breaker that trips at 14 In may be as long as a published table "
    "says") {
  CHECK_THAT(greatest_length("d14", cable("c", 0.023, 1.5, 1), "230/400 V",
                             "[device.d14]\nlike = \"D\"\nIn = \"1 A\"\ninstantaneous = \"10 14\"\n"),
             FlipPrints("429"));
}

// Tag S:
// https://earecoebandung.id/online-resources/Basic-Electricity/5-EarthingsystemTNandIT_design_web_gen_web/co/Simplified_method_1_Resistive_loop.html
TEST_CASE("A circuit behind a type C breaker at 220 V may be as long as a published example says") {
  const double length = greatest_length("C 10 A", cable("c", 0.0225, 1.5, 1), "220/380 V");
  CHECK(length >= 58.6);  // 58.67, printed cut to 58.6
  CHECK(length < 58.7);
}

// Tag S: https://studylib.net/doc/18223823/maximum-cable-length, factors for m = 1 2 3 4.
TEST_CASE("Smaller protective conductors and aluminium shorten a circuit by the published factors") {
  const double whole = greatest_length("B 2 A", cable("c", 0.0225, 1.5, 1), "230/400 V");
  const auto share = [&](double rho, double m, const char* material) {
    return greatest_length("B 2 A", cable("c", rho, 1.5, m, material), "230/400 V") / whole;
  };
  CHECK_THAT(share(0.0225, 2, "copper"), FlipPrints("0.67"));
  CHECK_THAT(share(0.0225, 3, "copper"), FlipPrints("0.50"));
  CHECK_THAT(share(0.0225, 4, "copper"), FlipPrints("0.40"));
  CHECK_THAT(share(0.036, 1, "aluminium"), FlipPrints("0.62"));  // 0.625
  CHECK_THAT(share(0.036, 3, "aluminium"), FlipPrints("0.31"));
  CHECK_THAT(share(0.036, 4, "aluminium"), FlipPrints("0.25"));
  const double two = share(0.036, 2, "aluminium");
  CHECK(two >= 0.41);  // 0.4167, printed cut to 0.41
  CHECK(two < 0.42);
}

}  // namespace
