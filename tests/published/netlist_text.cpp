// SPDX-License-Identifier: Apache-2.0
#include "tests/published/netlist_text.h"

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

std::string bar() {
  return "[cable.bar]\nmaterial = \"copper\"\ninsulation = \"pvc70\"\ncores = 0\n"
         "sizes = [{ size = \"1000 mm2\", r20 = \"0.000001 mohm/m\" }]\nsource = \"a busbar of no "
         "impedance\"\n";
}

}  // namespace sunder::published
