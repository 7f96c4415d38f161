// SPDX-License-Identifier: Apache-2.0
/// @file
/// Quantities with units: what is read, what is refused, what is printed.
#include "models/units.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <complex>
#include <limits>

namespace {

using namespace sunder::models;

double read(const std::string& text, Quantity quantity) {
  const auto value = parse_quantity(text, quantity);
  if (const auto* error = std::get_if<UnitError>(&value)) FAIL(error->message);
  return std::get<double>(value);
}

std::string refused(const std::string& text, Quantity quantity) {
  const auto value = parse_quantity(text, quantity);
  const auto* error = std::get_if<UnitError>(&value);
  return error == nullptr ? "accepted" : error->message;
}

TEST_CASE("Every unit converts to the SI unit of its quantity") {
  struct Row {
    const char* text;
    Quantity quantity;
    double si;
  };
  const auto row = GENERATE(values<Row>({
      {"42 m", Quantity::length, 42},
      {"1.2 km", Quantity::length, 1200},
      {"30 cm", Quantity::length, 0.3},
      {"12 mm", Quantity::length, 0.012},
      {"25 mm2", Quantity::area, 25e-6},
      {"1 cm2", Quantity::area, 1e-4},
      {"0.5 m2", Quantity::area, 0.5},
      {"16 kA", Quantity::current, 16000},
      {"30 mA", Quantity::current, 0.030},
      {"32 A", Quantity::current, 32},
      {"230 V", Quantity::voltage, 230},
      {"11 kV", Quantity::voltage, 11000},
      {"350 mV", Quantity::voltage, 0.35},
      {"0.35 ohm", Quantity::impedance, 0.35},
      {"87 mohm", Quantity::impedance, 0.087},
      {"500 uohm", Quantity::impedance, 5e-4},
      {"1.667 kohm", Quantity::impedance, 1667},
      {"1.15 mohm/m", Quantity::impedance_per_length, 1.15e-3},
      {"0.524 ohm/km", Quantity::impedance_per_length, 0.524e-3},
      {"0.002 ohm/m", Quantity::impedance_per_length, 0.002},
      {"80 uohm/m", Quantity::impedance_per_length, 80e-6},
      {"500 kVA", Quantity::apparent_power, 5e5},
      {"250 MVA", Quantity::apparent_power, 2.5e8},
      {"5.1 kW", Quantity::power, 5100},
      {"0.4 s", Quantity::time, 0.4},
      {"40 ms", Quantity::time, 0.04},
      {"2 min", Quantity::time, 120},
      {"1 h", Quantity::time, 3600},
      {"70 degC", Quantity::temperature, 70},
      {"-5 degC", Quantity::temperature, -5},
      {"0.8", Quantity::ratio, 0.8},
      {"80 %", Quantity::ratio, 0.8},
      {"4.75 %", Quantity::percentage, 0.0475},
      {"20 kA2s", Quantity::let_through, 20e3},
      {"300 A2s", Quantity::let_through, 300},
      {"1.3 MA2s", Quantity::let_through, 1.3e6},
      {"115", Quantity::adiabatic_k, 115e6},
      {"18 mV/A/m", Quantity::voltage_drop_per, 0.018},
      {"2", Quantity::count, 2},
  }));
  CAPTURE(row.text);
  CHECK(read(row.text, row.quantity) == Approx(row.si).epsilon(1e-14));
}

TEST_CASE("Signs of print and of the keyboard mean the same unit") {
  CHECK(read("25 mm²", Quantity::area) == read("25 mm2", Quantity::area));
  CHECK(read("25 mm^2", Quantity::area) == read("25 mm2", Quantity::area));
  CHECK(read("0.35 Ω", Quantity::impedance) == 0.35);
  CHECK(read("87 mΩ", Quantity::impedance) == read("87 mohm", Quantity::impedance));
  CHECK(read("1.15 mΩ/m", Quantity::impedance_per_length) == 1.15e-3);
  CHECK(read("80 µΩ/m", Quantity::impedance_per_length) == 80e-6);
  CHECK(read("80 μohm/m", Quantity::impedance_per_length) == 80e-6);
  CHECK(read("70 °C", Quantity::temperature) == 70);
  CHECK(read("20 kA²s", Quantity::let_through) == 20e3);
  CHECK(read("−5 degC", Quantity::temperature) == -5);
}

TEST_CASE("A blank between number and unit is as good as none or a hard one") {
  CHECK(read("16kA", Quantity::current) == 16000);
  CHECK(read("  16   kA ", Quantity::current) == 16000);
  CHECK(read("16\u00A0kA", Quantity::current) == 16000);
  CHECK(read("+16 kA", Quantity::current) == 16000);
  CHECK(read(".5 m", Quantity::length) == 0.5);
  CHECK(read("1e3 A", Quantity::current) == 1000);
}

TEST_CASE("A size typed in mm2 is the double that its SI value is written as") {
  CHECK(read("2.5 mm2", Quantity::area) == 2.5e-6);
  CHECK(read("0.524 mohm/m", Quantity::impedance_per_length) == 0.524e-3);
  CHECK(read("30 mA", Quantity::current) == 0.03);
}

TEST_CASE("What is not a quantity is refused in one sentence") {
  struct Row {
    const char* text;
    Quantity quantity;
    const char* message;
  };
  const auto row = GENERATE(values<Row>({
      {"", Quantity::area, "no value; expected an area such as '25 mm2'"},
      {"  ", Quantity::length, "no value; expected a length such as '42 m'"},
      {"big", Quantity::area, "'big' does not begin with a number; expected an area such as '25 mm2'"},
      {"nan A", Quantity::current, "'nan A' does not begin with a number; expected a current such as '16 A'"},
      {"inf m", Quantity::length, "'inf m' does not begin with a number; expected a length such as '42 m'"},
      {"- 5 m", Quantity::length, "'- 5 m' does not begin with a number; expected a length such as '42 m'"},
      {"2,5 mm2", Quantity::area, "'2,5 mm2' has a comma in its number; write '2.5 mm2'"},
      {"1,000 A", Quantity::current, "'1,000 A' has a comma in its number; write '1000 A' or '1.000 A'"},
      {"1 000 A", Quantity::current, "'1 000 A' has a gap in its number; write the digits without blanks"},
      {"25", Quantity::area, "'25' has no unit; an area is written in mm2, cm2, m2"},
      {"42", Quantity::length, "'42' has no unit; a length is written in m, km, cm, mm"},
      {"16", Quantity::current, "'16' has no unit; a current is written in A, kA, mA"},
      {"0.35", Quantity::impedance, "'0.35' has no unit; an impedance is written in ohm, mohm, uohm, kohm"},
      {"4.75", Quantity::percentage, "'4.75' has no unit; a percentage is written in %"},
      {"25 A", Quantity::area, "'A' is a unit of current; an area is written in mm2, cm2, m2"},
      {"25 mm2", Quantity::length, "'mm2' is a unit of area; a length is written in m, km, cm, mm"},
      {"16 KA", Quantity::current, "unknown unit 'KA'; did you mean 'kA'?"},
      {"500 kva", Quantity::apparent_power, "unknown unit 'kva'; did you mean 'kVA'?"},
      {"16 furlong", Quantity::length, "unknown unit 'furlong'; a length is written in m, km, cm, mm"},
      {"2 A", Quantity::count, "'A' does not belong here: a number has no unit"},
      {"1e999 A", Quantity::current, "the number of '1e999 A' is out of range"},
  }));
  CAPTURE(row.text);
  CHECK(refused(row.text, row.quantity) == row.message);
}

TEST_CASE("Numbers keep the significant digits asked for and no more characters") {
  CHECK(format_number(1.37) == "1.37");
  CHECK(format_number(0.0873) == "0.0873");
  CHECK(format_number(16000) == "16000");
  CHECK(format_number(123456) == "123500");
  CHECK(format_number(123456, 6) == "123456");
  CHECK(format_number(9999.6) == "10000");
  CHECK(format_number(0.99996) == "1");
  CHECK(format_number(-2.5) == "-2.5");
  CHECK(format_number(-16000) == "-16000");
  CHECK(format_number(0) == "0");
  CHECK(format_number(2.0 / 3.0, 2) == "0.67");
  CHECK(format_number(1.5e-9) == "1.5e-9");
  CHECK(format_number(2.5e20) == "2.5e20");
}

TEST_CASE("Quantities are printed in the unit an engineer would write") {
  CHECK(format_quantity(25e-6, Quantity::area) == "25 mm2");
  CHECK(format_quantity(0.0113, Quantity::time) == "11.3 ms");
  CHECK(format_quantity(0.4, Quantity::time) == "0.4 s");
  CHECK(format_quantity(3600, Quantity::time) == "1 h");
  CHECK(format_quantity(16000, Quantity::current) == "16 kA");
  CHECK(format_quantity(999.97, Quantity::current) == "1 kA");
  CHECK(format_quantity(0.03, Quantity::current) == "30 mA");
  CHECK(format_quantity(0, Quantity::current) == "0 A");
  CHECK(format_quantity(400, Quantity::voltage) == "400 V");
  CHECK(format_quantity(1.37, Quantity::impedance) == "1.37 ohm");
  CHECK(format_quantity(0.0873, Quantity::impedance) == "87.3 mohm");
  CHECK(format_quantity(0.524e-3, Quantity::impedance_per_length) == "0.524 mohm/m");
  CHECK(format_quantity(5e5, Quantity::apparent_power) == "500 kVA");
  CHECK(format_quantity(29756, Quantity::let_through) == "29.76 kA2s");
  CHECK(format_quantity(115e6, Quantity::adiabatic_k) == "115");
  CHECK(format_quantity(0.03, Quantity::percentage) == "3 %");
  CHECK(format_quantity(0.018, Quantity::voltage_drop_per) == "18 mV/A/m");
  CHECK(format_quantity(std::nan(""), Quantity::current) == "none");
  CHECK(format_quantity(std::numeric_limits<double>::infinity(), Quantity::time) == "unbounded");
}

TEST_CASE("What is printed is read back as the same value") {
  const auto quantity =
      GENERATE(Quantity::length, Quantity::area, Quantity::current, Quantity::voltage, Quantity::impedance,
               Quantity::impedance_per_length, Quantity::apparent_power, Quantity::power, Quantity::time,
               Quantity::temperature, Quantity::ratio, Quantity::percentage, Quantity::let_through,
               Quantity::adiabatic_k, Quantity::voltage_drop_per, Quantity::count);
  const auto value = GENERATE(1e-5, 0.0123, 0.5, 7.0, 96.5, 1250.0, 43210.0, 8.5e6);
  CAPTURE(static_cast<int>(quantity), value);
  CHECK(read(format_quantity(value, quantity, 12), quantity) == Approx(value).epsilon(1e-11));
}

TEST_CASE("An impedance is read with its reactance, in one unit or two") {
  struct Row {
    const char* text;
    Quantity quantity;
    double r, x;
  };
  const auto row = GENERATE(values<Row>({
      {"0.0531+j0.5311 mohm", Quantity::impedance, 0.0531e-3, 0.5311e-3},
      {"5+j20 ohm", Quantity::impedance, 5, 20},
      {"5 + j20 ohm", Quantity::impedance, 5, 20},
      {"5 ohm + j20 mohm", Quantity::impedance, 5, 0.02},
      {"5+20j ohm", Quantity::impedance, 5, 20},
      {"0.1 ohm", Quantity::impedance, 0.1, 0},
      {"j0.2 ohm", Quantity::impedance, 0, 0.2},
      {"0.2j ohm", Quantity::impedance, 0, 0.2},
      {"-j0.2 ohm", Quantity::impedance, 0, -0.2},
      {"1-j0.2 ohm", Quantity::impedance, 1, -0.2},
      {"-1+j0.2 ohm", Quantity::impedance, -1, 0.2},
      {"1e-3+j2e-3 ohm", Quantity::impedance, 1e-3, 2e-3},
      {"1e-3+2e-3j ohm", Quantity::impedance, 1e-3, 2e-3},
      {"+.5+j.25 ohm", Quantity::impedance, 0.5, 0.25},
      {"0.077+j0.079 mohm/m", Quantity::impedance_per_length, 0.077e-3, 0.079e-3},
      {"0.077+j0.079 ohm/km", Quantity::impedance_per_length, 0.077e-3, 0.079e-3},
      {"3\u22124j \u03A9", Quantity::impedance, 3, -4},
  }));
  CAPTURE(row.text);
  const auto value = parse_complex(row.text, row.quantity);
  REQUIRE(std::holds_alternative<std::complex<double>>(value));
  const auto z = std::get<std::complex<double>>(value);
  CHECK_THAT(z.real(), Catch::Matchers::WithinRel(row.r, 1e-12));
  CHECK_THAT(z.imag(), Catch::Matchers::WithinRel(row.x, 1e-12));
}

TEST_CASE("A text that is no impedance is refused with what is missing") {
  const auto said = [](const char* text) {
    const auto value = parse_complex(text, Quantity::impedance);
    const auto* error = std::get_if<UnitError>(&value);
    return error == nullptr ? std::string("accepted") : error->message;
  };
  CHECK(said("") == "no value; expected an impedance such as '0.35 ohm'");
  CHECK(said("5+j20") == "'+20' has no unit; an impedance is written in ohm, mohm, uohm, kohm");
  CHECK(said("5+j20 A") == "'A' is a unit of current; an impedance is written in ohm, mohm, uohm, kohm");
  for (const char* text : {"j", "5+j", "5j+j20 ohm", "5 j20 ohm", "5+jj20 ohm"}) {
    CAPTURE(text);
    CHECK(said(text).find("is no impedance with a reactance; expected one such as '0.05+j0.02 ohm'") !=
          std::string::npos);
  }
  CHECK(said("x+j20 ohm") == "'x' does not begin with a number; expected an impedance such as '0.35 ohm'");
  CHECK(said("5+jx ohm") != "accepted");
}

TEST_CASE("Frequencies and capacitances are read and printed in the usual units") {
  CHECK(read("50 Hz", Quantity::frequency) == 50.0);
  CHECK(read("0.4 kHz", Quantity::frequency) == 400.0);
  CHECK(read("2 uF", Quantity::capacitance) == 2e-6);
  CHECK(read("2 \u00B5F", Quantity::capacitance) == 2e-6);
  CHECK(read("300 nF", Quantity::capacitance) == 300e-9);
  CHECK(read("1 mF", Quantity::capacitance) == 1e-3);
  CHECK(read("1 F", Quantity::capacitance) == 1.0);
  CHECK(refused("2", Quantity::capacitance) == "'2' has no unit; a capacitance is written in uF, nF, mF, F");
  CHECK(format_quantity(60, Quantity::frequency) == "60 Hz");
  CHECK(format_quantity(2.5e-6, Quantity::capacitance) == "2.5 uF");
  CHECK(format_quantity(3e-8, Quantity::capacitance) == "30 nF");
  CHECK(si_symbol(Quantity::frequency) == "Hz");
  CHECK(si_symbol(Quantity::capacitance) == "F");
}

}  // namespace
