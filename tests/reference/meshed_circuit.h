// SPDX-License-Identifier: Apache-2.0
/// @file
/// The text of a circuit for ngspice, element by element, with ideal connections as one node of one name.
#pragma once

#include <complex>
#include <map>
#include <set>
#include <string>
#include <utility>
#include <vector>

namespace sunder::reference::meshed {

/// What the current of a circuit's element counts as: with this sign in this conductor of that element.
struct Share {
  std::string element;
  std::size_t conductor = 0;
  int sign = 1;
};

[[nodiscard]] std::string lower(std::string text);
[[nodiscard]] std::string number(double value);

class SpiceCircuit {
 public:
  using Complex = std::complex<double>;

  [[nodiscard]] double omega() const;  ///< [rad/s]
  /// Two names of one node; "0" is reference earth.
  void same(const std::string& a, const std::string& b);
  /// Impedance; any sign. Zero: one node.
  void series(const std::string& a, const std::string& b, Complex ohms, std::vector<Share> shares);
  void resistor(const std::string& a, const std::string& b, double ohms);
  void resistor_named(const std::string& name, const std::string& a, const std::string& b, double ohms);
  void capacitor(const std::string& a, const std::string& b, double farads);
  /// @return its name
  std::string inductor(const std::string& a, const std::string& b, double henry, std::vector<Share> shares);
  /// Perfect coupling of each with each.
  void couple(const std::vector<std::string>& inductors);
  void source(const std::string& name, const std::string& plus, const std::string& minus, const std::string& ac,
              std::vector<Share> shares);
  void line(const std::string& name, const std::string& a, const std::string& b, const std::string& rest);
  void line4(const std::string& name, const std::string& a, const std::string& b, const std::string& c,
             const std::string& d, double value);

  [[nodiscard]] std::string text();
  /// By the name that the simulator gives the current's vector.
  [[nodiscard]] const std::map<std::string, std::vector<Share>>& shares() const { return shares_; }

 private:
  struct Line {
    std::string name;
    std::vector<std::string> nodes;
    std::string rest;
  };
  std::string root(const std::string& node);
  void keep(const std::string& element, std::vector<Share> shares);

  std::map<std::string, std::string> other_name_;
  std::vector<Line> lines_;
  std::map<std::string, std::vector<Share>> shares_;
  int count_ = 0;
};

/// The plots of an ascii file: currents by vector name.
[[nodiscard]] std::vector<std::map<std::string, std::complex<double>>> read_raw(const std::string& text);

}  // namespace sunder::reference::meshed
