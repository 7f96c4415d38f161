// SPDX-License-Identifier: Apache-2.0
/// @file
/// The vocabulary is whole, its examples can be read, and every band of the unusual holds at both edges.
#include <catch2/catch.hpp>
#include <cmath>

#include "models/registry.h"
#include "tests/netlists/base.h"

namespace sunder::netlists {

namespace {

using models::Key;
using models::Kind;
using models::ValueForm;

// A netlist in which `key` of `kind` has `value`; "" where this file knows no place for it.
std::string netlist_with(std::string_view kind, std::string_view key, const std::string& value) {
  const std::string pair = std::string(key) + " = " + value;
  const std::string states = "\n[state.a]\nsources = [\"grid\"]\n[state.b]\nsources = [\"T\"]\n";
  // `others` without the pair that is under test, then that pair
  auto without = [&](std::vector<std::string> others, std::string_view between) {
    std::string text;
    for (const std::string& other : others) {
      if (other.substr(0, other.find(' ')) != key) text += other + std::string(between);
    }
    return text + pair;
  };
  if (kind.empty()) return spoiled(3, pair);
  if (kind == "supply.maximum") return spoiled(10, "maximum = { three_phase = \"16 kA\", " + pair + " }");
  if (kind == "supply.minimum") return spoiled(11, "minimum = { " + pair + " }");
  if (kind == "supply.tails") {
    return spoiled(9, "tails = { " + without({"cable = \"singles-pvc-cu 25 mm2\"", "length = \"2 m\""}, ", ") + " }");
  }
  if (kind == "transformer" || kind == "transformer.tails" || kind == "transformer.fault_level") {
    std::vector<std::string> keys = {"feeds = \"intake\"", "voltage = \"230/400 V\"", "rating = \"500 kVA\"",
                                     "uk = \"4.75 %\"", "earthing = \"TN-S\""};
    if (key != "x_over_r") keys.emplace_back("losses = \"5.1 kW\"");
    if (key == "primary") keys.emplace_back("from = \"shop\"");
    if (kind == "transformer") return std::string(kBase) + "[transformer.T]\n" + without(keys, "\n") + states;
    std::string text = std::string(kBase) + "[transformer.T]\n";
    for (const std::string& one : keys) text += one + "\n";
    if (kind == "transformer.fault_level") return text + "fault_level = { " + pair + " }" + states;
    return text + "tails = { " + without({"cable = \"singles-pvc-cu 25 mm2\"", "length = \"2 m\""}, ", ") + " }" +
           states;
  }
  if (kind == "generator" || kind == "inverter" || kind == "generator.tails" || kind == "inverter.tails") {
    const std::string element(kind.substr(0, kind.find('.')));
    std::vector<std::string> keys = {"feeds = \"intake\"", "voltage = \"230/400 V\"", "earthing = \"TN-S\""};
    if (element == "inverter") keys.emplace_back("stages = [[\"90 A\"]]");
    if (element == "generator") {
      keys.emplace_back("rating = \"250 kVA\"");
      keys.emplace_back("xd_subtransient = \"3 %\"");
    }
    std::string text = std::string(kBase) + "[" + element + ".T]\n";
    if (kind == element) return text + without(keys, "\n") + states;
    for (const std::string& one : keys) text += one + "\n";
    return text + "tails = { " + without({"cable = \"singles-pvc-cu 25 mm2\"", "length = \"2 m\""}, ", ") + " }" +
           states;
  }
  if (kind == "motor") {
    std::vector<std::string> keys = {"on = \"shop\""};
    if (key != "current") keys.emplace_back("rating = \"5.5 kW\"");
    return std::string(kBase) + "[motor.M]\n" + without(keys, "\n") + "\n";
  }
  if (kind == "supply" && key == "capacitance") return spoiled(8, "earthing = \"IT\"\n" + pair);
  if (kind == "supply") return spoiled(9, pair);
  if (kind == "board.groups") {
    return spoiled(
        16, "groups = { rcd = { " + without({"device = \"RCD 63 A 30 mA A\"", "ways = [\"W1\"]"}, ", ") + " } }");
  }
  if (kind == "submain") return spoiled(key == "length" ? 22 : key == "demand" ? 23 : 24, pair);
  if (kind == "circuit") {
    return std::string(kBase) + "W3 = { " +
           without({"phases = \"L1\"", "device = \"C 16 A\"", "cable = \"singles-pvc-cu 2.5 mm2\"", "length = \"9 m\""},
                   ", ") +
           " }\n";
  }
  if (kind == "circuit.spurs") {
    return std::string(kBase) +
           "W3 = { phases = \"L1\", device = \"B 32 A\", cable = \"singles-pvc-cu 4 mm2\", length = \"400 m\", ring = "
           "true, "
           "spurs = [{ " +
           without({"at = \"2 m\"", "length = \"3 m\""}, ", ") + " }] }\n";
  }
  if (kind == "electrode") {
    return std::string(kBase) + "[electrode.rod]\n" + without({"board = \"shop\"", "resistance = \"9 ohm\""}, "\n") +
           "\n";
  }
  if (kind == "device") {
    return std::string(kBase) + "[device.d]\n" +
           without({"kind = \"fuse\"", "In = \"6 A\"", "latest = [[\"200 A\", \"1 s\"]]", "source = \"invented\""},
                   "\n") +
           "\n";
  }
  const std::string cable = std::string(kBase) + "[cable.c]\n";
  const std::string size = "sizes = [{ size = \"16 mm2\", r20 = \"1.15 mohm/m\" }]";
  if (kind == "cable") {
    return cable + without({"material = \"copper\"", "insulation = \"pvc70\"", "cores = 4", size}, "\n") + "\n";
  }
  if (kind == "cable.sizes") {
    return cable + "material = \"copper\"\ninsulation = \"pvc70\"\ncores = 4\nsizes = [{ " +
           without({"size = \"16 mm2\"", "r20 = \"1.15 mohm/m\"", "armour_r20 = \"3 mohm/m\""}, ", ") + " }]\n";
  }
  return {};
}

std::string value_text(const Key& key, double si) {
  constexpr int kDigits = 12;
  return key.form == ValueForm::quantity ? '"' + models::format_quantity(si, key.quantity, kDigits) + '"'
                                         : models::format_number(si, kDigits);
}

bool says_unusual(const std::string& text, const Key& key) {
  const std::string all = said(read_network_text(text, "base.toml"));
  for (std::size_t i = all.find("usual are"); i != std::string::npos; i = all.find("usual are", i + 1)) {
    const std::size_t start = all.rfind('\n', i) == std::string::npos ? 0 : all.rfind('\n', i);
    if (all.substr(start, i - start).find("warning: " + std::string(key.name) + " of") != std::string::npos)
      return true;
  }
  return false;
}

}  // namespace

TEST_CASE("Every kind and key of the vocabulary has help, an example and what its form needs", "[netlists]") {
  for (const Kind& kind : models::registry()) {
    CAPTURE(kind.name);
    CHECK(kind.help.size() > 10);
    CHECK(kind.help.back() == '.');
    CHECK_FALSE(kind.example.empty());
    CHECK(models::find_kind(kind.name) == &kind);
    CHECK_FALSE(kind.keys.empty());
    for (const Key& key : kind.keys) {
      CAPTURE(key.name);
      CHECK(key.help.size() > 3);
      CHECK(key.help.back() == '.');
      CHECK(models::find_key(kind, key.name) == &key);
      CHECK((key.form == ValueForm::choice) == !key.choices.empty());
      CHECK(key.least <= key.most);
      CHECK(key.plausible_least <= key.plausible_most);
      const bool bounded = key.least != 0 || key.most != 0;
      if (bounded && key.plausible_most != 0) {
        CHECK(key.plausible_least >= key.least);
        CHECK(key.plausible_most <= key.most);
      }
      // a table's own keys are listed as a kind of their own
      if (key.form == ValueForm::table) {
        const std::string own = std::string(kind.name) + "." + std::string(key.name);
        CHECK(models::find_kind(own) != nullptr);
      }
    }
  }
  CHECK(models::find_kind("nothing") == nullptr);
  CHECK(models::find_key(*models::find_kind("submain"), "nothing") == nullptr);
}

TEST_CASE("The example of every kind has no error of form and no unknown key", "[netlists]") {
  for (const Kind& kind : models::registry()) {
    if (kind.name.find('.') != std::string_view::npos) continue;
    CAPTURE(kind.name, kind.example);
    const std::string all = said(read_network_text(std::string(kind.example), "example.toml"));
    for (const char* wrong : {"unknown key", "expected", "obligatory | ", "unknown device", "unknown cable", "unit"}) {
      const std::size_t at = all.find(wrong);
      // what an example alone cannot have: the rest of a netlist
      const bool rules = at != std::string::npos && all.rfind("the netlist has no 'rules'", at) != std::string::npos;
      CHECK((at == std::string::npos || rules));
    }
  }
}

TEST_CASE("Every band of the unusual is silent at its edges and warns just beyond them", "[netlists]") {
  int n_bands = 0;
  for (const Kind& kind : models::registry()) {
    for (const Key& key : kind.keys) {
      if (key.plausible_least == 0 && key.plausible_most == 0) continue;
      CAPTURE(kind.name, key.name);
      ++n_bands;
      REQUIRE_FALSE(netlist_with(kind.name, key.name, "1").empty());
      // counts move by one, measures by a hundredth
      const bool counted = key.name == "cores";
      const double low = counted ? key.plausible_least - 1 : key.plausible_least - 0.01 * std::abs(key.plausible_least);
      const double high = counted ? key.plausible_most + 1 : key.plausible_most + 0.01 * std::abs(key.plausible_most);
      CHECK_FALSE(says_unusual(netlist_with(kind.name, key.name, value_text(key, key.plausible_least)), key));
      CHECK_FALSE(says_unusual(netlist_with(kind.name, key.name, value_text(key, key.plausible_most)), key));
      if (key.plausible_least > key.least) {
        CHECK(says_unusual(netlist_with(kind.name, key.name, value_text(key, low)), key));
      }
      if (key.plausible_most < key.most) {
        CHECK(says_unusual(netlist_with(kind.name, key.name, value_text(key, high)), key));
      }
    }
  }
  CHECK(n_bands > 30);
}

TEST_CASE("The nearest name is within a third of the length and stable", "[netlists]") {
  const std::vector<std::string_view> names = {"length", "load", "level", "flat-pvc-cu", "swa-xlpe-cu-4c", "a"};
  CHECK(models::nearest_name("lenght", names) == "length");
  CHECK(models::nearest_name("laod", names) == "load");
  CHECK(models::nearest_name("swa-xpe-cu-4c", names) == "swa-xlpe-cu-4c");
  CHECK(models::nearest_name("colour", names).empty());
  CHECK(models::nearest_name("b", names).empty());
  CHECK(models::nearest_name("ab", names).empty());
  CHECK(models::nearest_name("", names).empty());
  CHECK(models::nearest_name("cat", {"car", "bat", "cap"}) == "bat");
  CHECK(models::nearest_name(std::string(100000, 'x'), names).empty());
}

}  // namespace sunder::netlists
