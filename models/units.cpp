// SPDX-License-Identifier: Apache-2.0
#include "models/units.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <system_error>
#include <utility>

namespace sunder::models {
namespace {

/// One spelling of a unit: si = number * factor.
struct Unit {
  std::string_view symbol;
  double factor;
  Quantity quantity;
};

// kA2s is a thousand A2s (not (kA)2s), as the data sheets of protective devices use it.
constexpr std::array kUnits = {
    Unit{"m", 1, Quantity::length},
    Unit{"km", 1e3, Quantity::length},
    Unit{"cm", 1e-2, Quantity::length},
    Unit{"mm", 1e-3, Quantity::length},
    Unit{"mm2", 1e-6, Quantity::area},
    Unit{"cm2", 1e-4, Quantity::area},
    Unit{"m2", 1, Quantity::area},
    Unit{"A", 1, Quantity::current},
    Unit{"kA", 1e3, Quantity::current},
    Unit{"mA", 1e-3, Quantity::current},
    Unit{"V", 1, Quantity::voltage},
    Unit{"kV", 1e3, Quantity::voltage},
    Unit{"mV", 1e-3, Quantity::voltage},
    Unit{"ohm", 1, Quantity::impedance},
    Unit{"mohm", 1e-3, Quantity::impedance},
    Unit{"uohm", 1e-6, Quantity::impedance},
    Unit{"kohm", 1e3, Quantity::impedance},
    Unit{"mohm/m", 1e-3, Quantity::impedance_per_length},
    Unit{"ohm/km", 1e-3, Quantity::impedance_per_length},
    Unit{"ohm/m", 1, Quantity::impedance_per_length},
    Unit{"uohm/m", 1e-6, Quantity::impedance_per_length},
    Unit{"VA", 1, Quantity::apparent_power},
    Unit{"kVA", 1e3, Quantity::apparent_power},
    Unit{"MVA", 1e6, Quantity::apparent_power},
    Unit{"GVA", 1e9, Quantity::apparent_power},
    Unit{"W", 1, Quantity::power},
    Unit{"kW", 1e3, Quantity::power},
    Unit{"MW", 1e6, Quantity::power},
    Unit{"s", 1, Quantity::time},
    Unit{"ms", 1e-3, Quantity::time},
    Unit{"min", 60, Quantity::time},
    Unit{"h", 3600, Quantity::time},
    Unit{"degC", 1, Quantity::temperature},
    Unit{"C", 1, Quantity::temperature},
    Unit{"%", 1e-2, Quantity::ratio},
    Unit{"%", 1e-2, Quantity::percentage},
    Unit{"A2s", 1, Quantity::let_through},
    Unit{"kA2s", 1e3, Quantity::let_through},
    Unit{"MA2s", 1e6, Quantity::let_through},
    Unit{"mV/A/m", 1e-3, Quantity::voltage_drop_per},
    Unit{"mV/(Am)", 1e-3, Quantity::voltage_drop_per},
    Unit{"mV/Am", 1e-3, Quantity::voltage_drop_per},
    Unit{"V/A/km", 1e-3, Quantity::voltage_drop_per},
    Unit{"V/A/m", 1, Quantity::voltage_drop_per},
    Unit{"Hz", 1, Quantity::frequency},
    Unit{"kHz", 1e3, Quantity::frequency},
    Unit{"F", 1, Quantity::capacitance},
    Unit{"mF", 1e-3, Quantity::capacitance},
    Unit{"uF", 1e-6, Quantity::capacitance},
    Unit{"nF", 1e-9, Quantity::capacitance},
};

struct Description {
  std::string_view name;  // with its article
  std::string_view example;
  std::string_view accepted;  // "" where a bare number is meant
  std::string_view si;
  double bare_factor;  // of a bare number; 0: a unit is obligatory
};

const Description& description(Quantity quantity) noexcept {
  static constexpr std::array kDescriptions = {
      Description{"a length", "42 m", "m, km, cm, mm", "m", 0},
      Description{"an area", "25 mm2", "mm2, cm2, m2", "m2", 0},
      Description{"a current", "16 A", "A, kA, mA", "A", 0},
      Description{"a voltage", "230 V", "V, kV, mV", "V", 0},
      Description{"an impedance", "0.35 ohm", "ohm, mohm, uohm, kohm", "ohm", 0},
      Description{"an impedance per length", "1.15 mohm/m", "mohm/m, ohm/km, ohm/m, uohm/m", "ohm/m", 0},
      Description{"an apparent power", "500 kVA", "VA, kVA, MVA, GVA", "VA", 0},
      Description{"a power", "5.1 kW", "W, kW, MW", "W", 0},
      Description{"a time", "0.4 s", "s, ms, min, h", "s", 0},
      Description{"a temperature", "70 degC", "degC", "degC", 0},
      Description{"a ratio", "0.8", "%, or a bare number", "1", 1},
      Description{"a percentage", "4.75 %", "%", "1", 0},
      Description{"an I2t value", "20 kA2s", "A2s, kA2s, MA2s", "A2s", 0},
      Description{"an adiabatic constant k", "115", "", "A*sqrt(s)/m2", 1e6},
      Description{"a voltage drop", "18 mV/A/m", "mV/A/m, V/A/km, V/A/m", "V/(A*m)", 0},
      Description{"a number", "2", "", "1", 1},
      Description{"a frequency", "50 Hz", "Hz, kHz", "Hz", 0},
      Description{"a capacitance", "2 uF", "uF, nF, mF, F", "F", 0},
  };
  return kDescriptions.at(static_cast<std::size_t>(quantity));
}

void replace_all(std::string& text, std::string_view from, std::string_view to) {
  for (std::size_t at = text.find(from); at != std::string::npos; at = text.find(from, at + to.size())) {
    text.replace(at, from.size(), to);
  }
}

/// One spelling for signs that keyboards and spreadsheets write differently.
std::string plain_spelling(std::string_view typed) {
  std::string text(typed);
  static constexpr std::pair<std::string_view, std::string_view> kSigns[] = {
      {"\u00B2", "2"},     {"^2", "2"},        {"\u03A9", "ohm"}, {"\u2126", "ohm"}, {"Ohm", "ohm"},
      {"\u00B0C", "degC"}, {"\u2103", "degC"}, {"\u00B5", "u"},   {"\u03BC", "u"},   {"\u00B7", ""},
      {"\u22C5", ""},      {"*", ""},          {"\u00A0", " "},   {"\u2009", " "},   {"\u202F", " "},
      {"\u2212", "-"},     {"\t", " "},        {"sqmm", "mm2"},   {"ohms", "ohm"},
  };
  for (const auto& [from, to] : kSigns) replace_all(text, from, to);
  const std::size_t first = text.find_first_not_of(' ');
  if (first == std::string::npos) return {};
  return text.substr(first, text.find_last_not_of(' ') - first + 1);
}

std::string without_blanks(std::string_view text) {
  std::string out;
  for (const char c : text) {
    if (c != ' ') out += c;
  }
  return out;
}

bool is_digit(char c) noexcept { return c >= '0' && c <= '9'; }

std::string lower(std::string_view text) {
  std::string out;
  for (const char c : text) out += (c >= 'A' && c <= 'Z') ? static_cast<char>(c - 'A' + 'a') : c;
  return out;
}

std::string expected(const Description& about) {
  return fmt::format("expected {} such as '{}'", about.name, about.example);
}

/// The unit that differs from `unit` in capitals only, "" if there is none or more than one.
std::string_view same_but_for_case(std::string_view unit, Quantity quantity) {
  std::string_view found;
  for (const Unit& known : kUnits) {
    if (known.quantity != quantity || lower(known.symbol) != lower(unit)) continue;
    if (!found.empty()) return {};
    found = known.symbol;
  }
  return found;
}

UnitError unknown_unit(std::string_view unit, Quantity quantity) {
  const Description& about = description(quantity);
  if (about.accepted.empty()) {
    return {fmt::format("'{}' does not belong here: {} has no unit", unit, about.name)};
  }
  if (const std::string_view meant = same_but_for_case(unit, quantity); !meant.empty()) {
    return {fmt::format("unknown unit '{}'; did you mean '{}'?", unit, meant)};
  }
  for (const Unit& known : kUnits) {
    if (known.symbol == unit) {
      return {fmt::format("'{}' is a unit of {}; {} is written in {}", unit,
                          description(known.quantity).name.substr(description(known.quantity).name.find(' ') + 1),
                          about.name, about.accepted)};
    }
  }
  return {fmt::format("unknown unit '{}'; {} is written in {}", unit, about.name, about.accepted)};
}

/// A comma followed by three digits may have been meant either way, so both are shown.
UnitError comma_in_number(std::string_view typed, const std::string& text) {
  const std::size_t comma = text.find(',');
  const std::size_t end = std::min(text.size(), text.find_first_not_of("0123456789", comma + 1));
  std::string point = text;
  point[comma] = '.';
  if (end - comma - 1 == 3) {
    std::string joined = text;
    joined.erase(comma, 1);
    return {fmt::format("'{}' has a comma in its number; write '{}' or '{}'", typed, joined, point)};
  }
  return {fmt::format("'{}' has a comma in its number; write '{}'", typed, point)};
}

/// Number in `unit` of `scale` SI units each, printed with its symbol.
std::string scaled(double si_value, double scale, std::string_view symbol, int digits) {
  return fmt::format("{} {}", format_number(si_value / scale, digits), symbol);
}

}  // namespace

std::variant<double, UnitError> parse_quantity(std::string_view typed, Quantity quantity) {
  const Description& about = description(quantity);
  const std::string text = plain_spelling(typed);
  if (text.empty()) return UnitError{fmt::format("no value; {}", expected(about))};

  std::string_view rest = text;
  if (rest.front() == '+') rest.remove_prefix(1);
  // from_chars would take "inf" and "nan", which are no quantities.
  const std::size_t sign = !rest.empty() && rest.front() == '-' ? 1 : 0;
  const bool has_number =
      rest.size() > sign &&
      (is_digit(rest[sign]) || (rest[sign] == '.' && rest.size() > sign + 1 && is_digit(rest[sign + 1])));
  if (!has_number) return UnitError{fmt::format("'{}' does not begin with a number; {}", typed, expected(about))};

  double number = 0;
  const auto [end, status] = std::from_chars(rest.data(), rest.data() + rest.size(), number);
  if (status == std::errc::result_out_of_range || !std::isfinite(number)) {
    return UnitError{fmt::format("the number of '{}' is out of range", typed)};
  }
  rest.remove_prefix(static_cast<std::size_t>(end - rest.data()));
  if (!rest.empty() && rest.front() == ',') return comma_in_number(typed, text);
  const std::size_t blank = rest.find_first_not_of(' ');
  if (blank != std::string_view::npos && blank > 0 && is_digit(rest[blank])) {
    return UnitError{fmt::format("'{}' has a gap in its number; write the digits without blanks", typed)};
  }

  const std::string unit = without_blanks(rest);
  if (unit.empty()) {
    if (about.bare_factor > 0) return number * about.bare_factor;
    return UnitError{fmt::format("'{}' has no unit; {} is written in {}", typed, about.name, about.accepted)};
  }
  for (const Unit& known : kUnits) {
    if (known.quantity == quantity && known.symbol == unit) {
      // Dividing by a whole number keeps "25 mm2" and 25e-6 the same double; 25 * 1e-6 is not.
      return known.factor < 1 ? number / std::round(1 / known.factor) : number * known.factor;
    }
  }
  return unknown_unit(unit, quantity);
}

std::variant<std::complex<double>, UnitError> parse_complex(std::string_view typed, Quantity quantity) {
  const std::string text = plain_spelling(typed);
  const std::size_t mark = text.find('j');
  if (mark == std::string::npos) {
    const auto real = parse_quantity(typed, quantity);
    if (const auto* error = std::get_if<UnitError>(&real)) return *error;
    return std::complex<double>(std::get<double>(real), 0);
  }
  const std::string example = quantity == Quantity::impedance_per_length ? "0.077+j0.079 ohm/km" : "0.05+j0.02 ohm";
  const auto refuse = [&] {
    return UnitError{fmt::format("'{}' is no impedance with a reactance; expected one such as '{}'", typed, example)};
  };
  if (text.find('j', mark + 1) != std::string::npos) return refuse();
  std::string real_text = without_blanks(std::string_view(text).substr(0, mark));
  std::string imaginary = without_blanks(std::string_view(text).substr(mark + 1));
  if (imaginary.empty()) return refuse();
  // the sign between the parts; a sign behind 'e' belongs to an exponent
  std::size_t sign = real_text.find_last_of("+-");
  while (sign != std::string::npos && sign > 0 && (real_text[sign - 1] == 'e' || real_text[sign - 1] == 'E')) {
    sign = real_text.find_last_of("+-", sign - 1);
  }
  const bool behind = !is_digit(imaginary.front()) && imaginary.front() != '.';  // "0.2j ohm"
  if (behind) {
    const std::size_t start = sign == std::string::npos ? 0 : sign;
    imaginary = real_text.substr(start) + imaginary;
    real_text.resize(start);
  } else if (!real_text.empty()) {
    if (sign != real_text.size() - 1) return refuse();
    imaginary = real_text.substr(sign) + imaginary;
    real_text.resize(sign);
  }
  const auto reactance = parse_quantity(imaginary, quantity);
  if (const auto* error = std::get_if<UnitError>(&reactance)) return *error;
  if (real_text.empty()) return std::complex<double>(0, std::get<double>(reactance));
  if (is_digit(real_text.back()) || real_text.back() == '.') {
    const std::size_t unit = imaginary.find_first_not_of("+-0123456789.eE");
    real_text += imaginary.substr(std::min(unit, imaginary.size()));
  }
  const auto resistance = parse_quantity(real_text, quantity);
  if (const auto* error = std::get_if<UnitError>(&resistance)) return *error;
  return std::complex<double>(std::get<double>(resistance), std::get<double>(reactance));
}

std::string format_number(double value, int digits) {
  if (std::isnan(value)) return "none";
  if (std::isinf(value)) return value > 0 ? "unbounded" : "-unbounded";
  if (value == 0) return "0";
  const std::string rounded_text = fmt::format("{:.{}e}", value, digits - 1);
  const std::size_t mark = rounded_text.find('e');
  int exponent = 0;
  const std::string_view exponent_text = std::string_view(rounded_text).substr(mark + 1);
  const bool negative = exponent_text.front() == '-';
  std::from_chars(exponent_text.data() + 1, exponent_text.data() + exponent_text.size(), exponent);
  if (negative) exponent = -exponent;

  const bool plain = exponent >= -6 && exponent <= 14;
  std::string text;
  if (plain && exponent < digits - 1) {
    text = fmt::format("{:.{}f}", value, digits - 1 - exponent);
  } else {
    text = rounded_text.substr(0, mark);
  }
  if (text.find('.') != std::string::npos) {
    text.erase(text.find_last_not_of('0') + 1);
    if (text.back() == '.') text.pop_back();
  }
  if (!plain) return fmt::format("{}e{}", text, exponent);
  if (exponent >= digits - 1) {
    // All significant digits stand before the point: write them and fill with noughts.
    std::string whole;
    for (const char c : text) {
      if (c != '.') whole += c;
    }
    const std::size_t length = static_cast<std::size_t>(exponent) + 1 + (whole.front() == '-' ? 1U : 0U);
    whole.resize(std::max(length, whole.size()), '0');
    return whole;
  }
  return text;
}

std::string format_quantity(double si_value, Quantity quantity, int digits) {
  if (!std::isfinite(si_value)) return format_number(si_value, digits);
  // Chosen by the rounded value, so that 999.97 A with four digits becomes "1 kA", not "1000 A".
  const double size = std::abs(si_value) * (1 + 0.5 * std::pow(10.0, -digits));
  switch (quantity) {
    case Quantity::length:
      return scaled(si_value, 1, "m", digits);
    case Quantity::area:
      return scaled(si_value, 1e-6, "mm2", digits);
    case Quantity::current:
      if (size >= 1e3) return scaled(si_value, 1e3, "kA", digits);
      if (size < 1 && si_value != 0) return scaled(si_value, 1e-3, "mA", digits);
      return scaled(si_value, 1, "A", digits);
    case Quantity::voltage:
      return size >= 1e3 ? scaled(si_value, 1e3, "kV", digits) : scaled(si_value, 1, "V", digits);
    case Quantity::impedance:
      if (size < 0.1 && si_value != 0) return scaled(si_value, 1e-3, "mohm", digits);
      return scaled(si_value, 1, "ohm", digits);
    case Quantity::impedance_per_length:
      return scaled(si_value, 1e-3, "mohm/m", digits);
    case Quantity::apparent_power:
      if (size >= 1e6) return scaled(si_value, 1e6, "MVA", digits);
      return size >= 1e3 ? scaled(si_value, 1e3, "kVA", digits) : scaled(si_value, 1, "VA", digits);
    case Quantity::power:
      if (size >= 1e6) return scaled(si_value, 1e6, "MW", digits);
      return size >= 1e3 ? scaled(si_value, 1e3, "kW", digits) : scaled(si_value, 1, "W", digits);
    case Quantity::time:
      if (size < 0.1 && si_value != 0) return scaled(si_value, 1e-3, "ms", digits);
      if (si_value >= 3600 && std::fmod(si_value, 3600.0) == 0) return scaled(si_value, 3600, "h", digits);
      return scaled(si_value, 1, "s", digits);
    case Quantity::temperature:
      return scaled(si_value, 1, "degC", digits);
    case Quantity::percentage:
      return scaled(si_value, 1e-2, "%", digits);
    case Quantity::let_through:
      if (size >= 1e6) return scaled(si_value, 1e6, "MA2s", digits);
      return size >= 1e3 ? scaled(si_value, 1e3, "kA2s", digits) : scaled(si_value, 1, "A2s", digits);
    case Quantity::adiabatic_k:
      return format_number(si_value / 1e6, digits);
    case Quantity::voltage_drop_per:
      return scaled(si_value, 1e-3, "mV/A/m", digits);
    case Quantity::frequency:
      return scaled(si_value, 1, "Hz", digits);
    case Quantity::capacitance:
      return size >= 1e-6 ? scaled(si_value, 1e-6, "uF", digits) : scaled(si_value, 1e-9, "nF", digits);
    case Quantity::ratio:
    case Quantity::count:
      break;
  }
  return format_number(si_value, digits);
}

std::string_view si_symbol(Quantity quantity) noexcept { return description(quantity).si; }

std::string_view accepted_units(Quantity quantity) noexcept { return description(quantity).accepted; }

}  // namespace sunder::models
