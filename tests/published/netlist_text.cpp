// SPDX-License-Identifier: Apache-2.0
#include "tests/published/netlist_text.h"

#include <cmath>
#include <iomanip>
#include <sstream>

namespace sunder::published {

std::string digits(double value) {
  std::ostringstream text;
  text << std::fixed << std::setprecision(12) << value;
  return text.str();
}

std::string head(const char* rules) { return std::string("rules = \"") + rules + "\"\n"; }

std::string supply(const std::string& voltage, const std::string& maximum, const std::string& minimum,
                   const std::string& earthing) {
  return "[supply.grid]\nfeeds = \"main\"\nvoltage = \"" + voltage + "\"\nearthing = \"" + earthing +
         "\"\nmaximum = { " + maximum + " }\nminimum = { " + minimum + " }\n";
}

std::string stiff_supply(const std::string& voltage) {
  const std::string loops = "line_neutral = \"0.0000001 ohm\", line_earth = \"0.0000001 ohm\", power_factor = 1";
  return supply(voltage, "three_phase = \"0.0000001 ohm\", " + loops, loops);
}

std::string complex_digits(std::complex<double> z) {
  return digits(z.real()) + (z.imag() < 0 ? "-j" : "+j") + digits(std::abs(z.imag()));
}

std::string boards(const std::vector<std::string>& names) {
  std::string text;
  for (const std::string& name : names) text += "[board." + name + "]\n";
  return text;
}

std::string run(const SequenceRun& of) {
  const auto per_length = [&of](std::complex<double> z) {
    return "\"" + complex_digits(z / of.metres * 1e3) + " mohm/m\"\n";
  };
  return "[submain." + of.name + "]\nfrom = \"" + of.from + "\"\nto = \"" + of.to + "\"\nlength = \"" +
         digits(of.metres) + " m\"\nz1 = " + per_length(of.z1) + (of.z0 ? "z0 = " + per_length(*of.z0) : "") + of.rest;
}

std::string sequence_supply(const std::string& board, const std::string& voltage, std::complex<double> z1,
                            std::optional<std::complex<double>> z0, const std::string& rest) {
  const std::string bound =
      "{ z1 = \"" + complex_digits(z1) + " ohm\"" + (z0 ? ", z0 = \"" + complex_digits(*z0) + " ohm\"" : "") + " }\n";
  return "[supply.grid]\nfeeds = \"" + board + "\"\nvoltage = \"" + voltage + "\"\n" + rest + "maximum = " + bound +
         "minimum = " + bound;
}

std::string bar() {
  return "[cable.bar]\nmaterial = \"copper\"\ninsulation = \"pvc70\"\ncores = 0\n"
         "sizes = [{ size = \"1000 mm2\", r20 = \"0.000001 mohm/m\" }]\nsource = \"a busbar of no "
         "impedance\"\n";
}

}  // namespace sunder::published
