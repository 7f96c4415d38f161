// SPDX-License-Identifier: Apache-2.0
/// @file
/// How the entries of the vocabulary are written down, and the parts of it that stand in files of their own.
#pragma once

#include <limits>
#include <string_view>
#include <vector>

#include "models/registry.h"

namespace sunder::models::vocabulary {

inline constexpr double kUnbounded = std::numeric_limits<double>::infinity();

// A key under construction, so that an entry below reads as a sentence.
struct Entry {
  Key key;

  [[nodiscard]] Entry need() {
    key.required = true;
    return *this;
  }
  // obligatory where the key `other` does not stand in its place
  [[nodiscard]] Entry need_without(std::string_view other) {
    key.required = true;
    key.unless = other;
    return *this;
  }
  // possible from `least` (included) to `most` (included)
  [[nodiscard]] Entry from(double least, double most) {
    key.least = least;
    key.most = most;
    return *this;
  }
  // possible above `least` (excluded) to `most` (included)
  [[nodiscard]] Entry above(double least, double most = kUnbounded) {
    key.least = least;
    key.most = most;
    key.above = true;
    return *this;
  }
  [[nodiscard]] Entry usual(double least, double most) {
    key.plausible_least = least;
    key.plausible_most = most;
    return *this;
  }
  [[nodiscard]] Entry of(std::string_view choices) {
    key.choices = choices;
    return *this;
  }
  [[nodiscard]] Entry unless_given(std::string_view by_default) {
    key.by_default = by_default;
    return *this;
  }
  operator Key() const { return key; }  // an entry stands for its key
};

inline Entry entry(std::string_view name, ValueForm form, std::string_view help) {
  Key key;
  key.name = name;
  key.form = form;
  key.help = help;
  return {key};
}

inline Entry amount(std::string_view name, Quantity quantity, std::string_view help) {
  Entry made = entry(name, ValueForm::quantity, help);
  made.key.quantity = quantity;
  return made;
}

inline Entry number(std::string_view name, std::string_view help) { return entry(name, ValueForm::number, help); }

inline Key iz() {
  return amount("Iz", Quantity::current, "Current-carrying capacity as installed, of all in parallel together.")
      .above(0, 20000)
      .usual(5, 3000);
}

inline Key pf() { return number("pf", "Power factor of the load.").above(0, 1).usual(0.5, 1).unless_given("1"); }

// The demand of what a submain or a source feeds.
inline Key demand() {
  return amount("demand", Quantity::current, "Greatest load current in one line, after diversity.")
      .from(0, 20000)
      .usual(0.05, 2500)
      .unless_given("the sum of the loads");
}

inline Key mean_pf() {
  return number("pf", "Power factor of the demand.").above(0, 1).usual(0.5, 1).unless_given("the mean of the loads");
}

// vocabulary_sources.cpp
/// Supplies, transformers, generators and inverters, each with the tables inside it.
[[nodiscard]] std::vector<Kind> sources();

// vocabulary_runs.cpp
/// Boards, submains, circuits, links, bonds, electrodes, motors and states, each with the tables inside it.
[[nodiscard]] std::vector<Kind> runs();

}  // namespace sunder::models::vocabulary
