// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/meshed_circuit.h"

#include <algorithm>
#include <cctype>
#include <cstdlib>
#include <iomanip>
#include <sstream>

namespace sunder::reference::meshed {

std::string lower(std::string text) {
  for (char& c : text) c = static_cast<char>(std::tolower(static_cast<unsigned char>(c)));
  return text;
}

std::string number(double value) {
  std::ostringstream text;
  text << std::setprecision(15) << value;
  return text.str();
}

double SpiceCircuit::omega() const { return 2.0 * 3.14159265358979323846 * 50.0; }

std::string SpiceCircuit::root(const std::string& node) {
  std::string here = node;
  for (auto found = other_name_.find(here); found != other_name_.end(); found = other_name_.find(here)) {
    here = found->second;
  }
  return here;
}

void SpiceCircuit::same(const std::string& a, const std::string& b) {
  const std::string one = root(a);
  const std::string two = root(b);
  if (one == two) return;
  if (one == "0") {
    other_name_[two] = one;
  } else {
    other_name_[one] = two;
  }
}

void SpiceCircuit::keep(const std::string& element, std::vector<Share> shares) {
  if (!shares.empty()) shares_[lower(element) + "#branch"] = std::move(shares);
}

void SpiceCircuit::series(const std::string& a, const std::string& b, Complex ohms, std::vector<Share> shares) {
  if (ohms == 0.0) return same(a, b);
  const std::string middle = "j" + std::to_string(++count_);
  if (ohms.imag() == 0.0) {
    source("V" + middle, a, middle, "0 0", std::move(shares));
    return resistor(middle, b, ohms.real());
  }
  if (ohms.real() == 0.0) {
    inductor(a, b, ohms.imag() / omega(), std::move(shares));
    return;
  }
  inductor(a, middle, ohms.imag() / omega(), std::move(shares));
  resistor(middle, b, ohms.real());
}

void SpiceCircuit::resistor(const std::string& a, const std::string& b, double ohms) {
  resistor_named("R" + std::to_string(++count_), a, b, ohms);
}

void SpiceCircuit::resistor_named(const std::string& name, const std::string& a, const std::string& b, double ohms) {
  lines_.push_back({name, {a, b}, number(ohms)});
}

void SpiceCircuit::capacitor(const std::string& a, const std::string& b, double farads) {
  lines_.push_back({"C" + std::to_string(++count_), {a, b}, number(farads)});
}

std::string SpiceCircuit::inductor(const std::string& a, const std::string& b, double henry,
                                   std::vector<Share> shares) {
  const std::string name = "L" + std::to_string(++count_);
  lines_.push_back({name, {a, b}, number(henry)});
  keep(name, std::move(shares));
  return name;
}

void SpiceCircuit::couple(const std::vector<std::string>& inductors) {
  for (std::size_t i = 0; i < inductors.size(); ++i) {
    for (std::size_t k = i + 1; k < inductors.size(); ++k) {
      lines_.push_back({"K" + std::to_string(++count_), {}, inductors[i] + " " + inductors[k] + " 1"});
    }
  }
}

void SpiceCircuit::source(const std::string& name, const std::string& plus, const std::string& minus,
                          const std::string& ac, std::vector<Share> shares) {
  lines_.push_back({name, {plus, minus}, "dc 0 ac " + ac});
  keep(name, std::move(shares));
}

void SpiceCircuit::line(const std::string& name, const std::string& a, const std::string& b, const std::string& rest) {
  lines_.push_back({name, {a, b}, rest});
}

void SpiceCircuit::line4(const std::string& name, const std::string& a, const std::string& b, const std::string& c,
                         const std::string& d, double value) {
  lines_.push_back({name, {a, b, c, d}, number(value)});
}

std::string SpiceCircuit::text() {
  // Names of places have characters that the simulator might read otherwise: nodes are numbers to it.
  std::map<std::string, int> numbers = {{"0", 0}};
  std::ostringstream out;
  out << "reference network\n.options noopac\n";
  for (const auto& [vector, shares] : shares_) out << ".save " << vector << "\n";
  for (const Line& one : lines_) {
    out << one.name;
    for (const std::string& node : one.nodes) {
      out << ' ' << numbers.emplace(root(node), static_cast<int>(numbers.size())).first->second;
    }
    out << ' ' << one.rest << '\n';
  }
  out << ".end\n";
  return out.str();
}

std::vector<std::map<std::string, std::complex<double>>> read_raw(const std::string& text) {
  std::vector<std::map<std::string, std::complex<double>>> plots;
  std::istringstream lines(text);
  std::vector<std::string> names;
  int n_variables = 0;
  for (std::string line; std::getline(lines, line);) {
    if (line.rfind("No. Variables:", 0) == 0) n_variables = std::atoi(line.c_str() + 14);
    if (line.rfind("Variables:", 0) == 0) {
      names.clear();
      for (int i = 0; i < n_variables && std::getline(lines, line); ++i) {
        std::istringstream words(line);
        std::string index, name;
        words >> index >> name;
        names.push_back(name);
      }
    }
    if (line.rfind("Values:", 0) != 0) continue;
    plots.emplace_back();
    for (int i = 0; i < n_variables && std::getline(lines, line); ++i) {
      if (i == 0) line.erase(0, line.find_first_of(" \t", line.find_first_not_of(" \t")));  // number of the point
      const auto comma = line.find(',');
      if (comma == std::string::npos) continue;
      std::string name = names[static_cast<std::size_t>(i)];
      if (name.rfind("i(", 0) == 0) name = name.substr(2, name.size() - 3) + "#branch";
      plots.back()[name] = {std::strtod(line.c_str(), nullptr), std::strtod(line.c_str() + comma + 1, nullptr)};
    }
  }
  return plots;
}

}  // namespace sunder::reference::meshed
