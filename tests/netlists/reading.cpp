// SPDX-License-Identifier: Apache-2.0
/// @file
/// What a sound netlist becomes: values in SI with their places, defaults, assumptions; and the text form
/// of diagnostics.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "tests/netlists/base.h"
#include "tests/netlists/folder.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::ConductorSet;
using models::Network;

Network read_sound(const std::string& text) {
  const Reading reading = read_network_text(text, "base.toml");
  INFO(said(reading));
  REQUIRE(reading.network.has_value());
  return *reading.network;
}

bool assumed(const Network& network, std::string_view subject, std::string_view sentence) {
  return std::any_of(network.assumptions.begin(), network.assumptions.end(),
                     [&](const models::Assumption& one) { return one.subject == subject && one.sentence == sentence; });
}

}  // namespace

TEST_CASE("A sound netlist reads without a word and in SI", "[netlists]") {
  const Reading reading = read_network_text(std::string(kBase), "base.toml");
  CHECK(said(reading).empty());
  const Network network = read_sound(std::string(kBase));
  CHECK(network.title == "Base");
  CHECK(network.rules.name == "BS 7671:2018+A2");
  CHECK(network.ambient_degc == 30.0);
  CHECK_FALSE(network.dwelling);
  REQUIRE(network.sources.size() == 1);
  const models::Source& grid = network.sources[0];
  CHECK(grid.U0 == 230.0);
  CHECK(grid.U == 400.0);
  CHECK(grid.earthing == models::Earthing::TN_C_S);
  CHECK_FALSE(grid.own_transformer);
  CHECK(grid.maximum.three_phase.amps == 16000.0);
  CHECK(grid.maximum.power_factor == 0.3);
  CHECK(grid.minimum.line_earth.ohms == 0.35);
  CHECK(grid.device.In == 100.0);
  CHECK(grid.device.kind == models::DeviceKind::fuse);
  REQUIRE(network.submains.size() == 1);
  const models::Submain& s1 = network.submains[0];
  CHECK(network.boards.at(static_cast<std::size_t>(s1.from)).name == "intake");
  CHECK(network.boards.at(static_cast<std::size_t>(s1.to)).name == "shop");
  CHECK(s1.conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE});
  CHECK(s1.cable.area == Approx(16e-6).epsilon(1e-12));
  CHECK(s1.device.Icn == 80000.0);
  REQUIRE(network.circuits.size() == 2);
  const models::Circuit& w1 = network.circuits[0];
  CHECK(w1.ring);
  CHECK(w1.conductors == ConductorSet{Conductor::L1, Conductor::N, Conductor::PE});
  CHECK(network.circuits[1].conductors == ConductorSet{Conductor::L1, Conductor::L2, Conductor::L3, Conductor::PE});
  CHECK(w1.group == 0);
  CHECK(network.circuits[1].group == -1);
  const models::Group& group = network.boards[1].groups.at(0);
  CHECK(group.ways == std::vector<std::string>{"W1"});
  CHECK(group.device.IdN == 0.03);
  REQUIRE(network.states.size() == 1);
  CHECK(network.states[0].name == "normal");
  CHECK(network.states[0].sources == std::vector<int>{0});
}

TEST_CASE("Values keep the line and the character that they came from", "[netlists]") {
  const Network network = read_sound(spoiled(1, "title = \"B\xC3\xA4se\""));
  const models::Submain& s1 = network.submains[0];
  CHECK(network.files.at(s1.length.at.file) == "base.toml");
  CHECK(s1.length.at.line == 22);
  CHECK(s1.length.at.column == 11);
  CHECK(s1.device.at.line == 20);
  CHECK(s1.cable.at.line == 21);
  CHECK(s1.demand.at.line == 23);
  CHECK(network.circuits[1].load.at.line == 27);
  CHECK(network.circuits[1].load.at.column == 127);
  CHECK(network.sources[0].maximum.three_phase.at.column == 28);
}

TEST_CASE("Every assumption taken is listed with its subject", "[netlists]") {
  const std::string transformer =
      "[transformer.T]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nrating = \"500 kVA\"\nuk = \"4.75 %\"\n"
      "x_over_r = 4\nearthing = \"TN-S\"\n[state.a]\nsources = [\"grid\"]\n[state.b]\nsources = [\"T\"]\n";
  struct Case {
    int line;
    std::string text;
    std::string_view subject, sentence;
  };
  const std::vector<Case> cases = {
      {1, "", "", "the conductors of a run lie together: no mutual reactance beyond the cable data"},
      {3, "", "", "ambient temperature taken as 30 degC"},
      {4, "", "", "premises taken as no dwelling"},
      {9, "", "grid", "network of supply 'grid' taken as public, which has the lower voltage-drop limits"},
      {10, "maximum = { three_phase = \"16 kA\" }", "grid",
       "no power factor for the maximum of supply 'grid': every angle from resistive to the test power factor of IEC "
       "60947-2 is taken"},
      {11, "minimum = { Ze = \"0.35 ohm\" }", "grid",
       "no power factor for the minimum of supply 'grid': every angle from resistive to the test power factor of IEC "
       "60947-2 is taken"},
      {9, "tails = { cable = \"singles-pvc-cu 25 mm2\", length = \"2 m\" }", "grid",
       "main earthing conductor of the tails of supply 'grid' taken as large as the line conductor"},
      {24, "", "S1", "pf of S1 taken as 1"},
      {24, "cpc = \"16 mm2\"", "S1",
       "the protective conductor beside the cable of S1 is taken to run close to it, not bunched with it: "
       "at ambient temperature, k as such"},
      {27,
       R"(W2 = { phases = "L1", device = "B 6 A", cable = "flat-pvc-cu 1.5/1 mm2", length = "21 m", load = "4 A" })",
       "shop/W2", "use of shop/W2 not given: the strictest limits are taken"},
      {27,
       R"(W2 = { phases = "L1", device = "B 6 A", cable = "flat-pvc-cu 1.5/1 mm2", length = "21 m", load = "4 A" })",
       "shop/W2", "pf of shop/W2 taken as 1"},
      {0, transformer, "T",
       "no fault level before transformer 'T': stiff for the greatest currents, the least ones are unknown"},
      {0, transformer, "T", "no-load voltage of transformer 'T' taken as 400 V"},
      {0, transformer, "T", "zero-sequence impedance of transformer 'T' taken as its positive-sequence one"},
      {0,
       transformer.substr(0, transformer.find("[state")) + "fault_level = \"250 MVA\"\n" +
           transformer.substr(transformer.find("[state")),
       "T", "one fault level before transformer 'T': taken as most and least"},
  };
  for (const Case& one : cases) {
    CAPTURE(one.line, one.text, one.sentence);
    const Network network = read_sound(spoiled(one.line, one.text));
    CHECK(assumed(network, one.subject, one.sentence));
    if (one.line > 1) CHECK_FALSE(assumed(read_sound(std::string(kBase)), one.subject, one.sentence));
  }
}

TEST_CASE("What only a check needs stays not given", "[netlists]") {
  const Network network = read_sound(
      spoiled(27, R"(W2 = { phases = "L1", device = "C 6 A", cable = "flat-pvc-cu 1.5/1 mm2", length = "21 m" })"));
  const models::Circuit& w2 = network.circuits[1];
  CHECK_FALSE(w2.load.given);
  CHECK_FALSE(w2.Iz.given);
  CHECK_FALSE(network.submains[0].Iz.given);
  CHECK_FALSE(assumed(network, "shop/W2", "pf of shop/W2 taken as 1"));
}

TEST_CASE("A transformer is read with its angle, its fault levels and its link", "[netlists]") {
  const Network network =
      read_sound(std::string(kBase) +
                 "[transformer.T]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nrating = \"500 kVA\"\n"
                 "uk = \"4.75 %\"\nlosses = \"5.1 kW\"\nsecondary = \"433 V\"\nearthing = \"TN-C-S\"\n"
                 "link = \"board\"\nz0_over_z1 = 0.9\n"
                 "fault_level = { maximum = \"500 MVA\", minimum = \"150 MVA\" }\n"
                 "tails = { cable = \"singles-pvc-cu 240 mm2\", length = \"8 m\", in_parallel = 2 }\n"
                 "[state.a]\nsources = [\"grid\"]\n[state.b]\nsources = [\"T\"]\n");
  const models::Source& t = network.sources.at(1);
  CHECK(t.transformer);
  CHECK(t.own_transformer);
  CHECK(t.rating == 500e3);
  CHECK(t.uk == Approx(0.0475).epsilon(1e-12));
  CHECK(t.losses == 5100.0);
  CHECK(t.secondary == 433.0);
  CHECK(t.fault_level_max == 500e6);
  CHECK(t.fault_level_min == 150e6);
  CHECK(t.z0_over_z1 == 0.9);
  CHECK(t.link_at_board);
  CHECK(t.tails.present);
  CHECK(t.tails.in_parallel == 2);
  CHECK(t.tails.length == 8.0);
  CHECK(network.states.size() == 2);
}

TEST_CASE("A single-phase supply and its phase are worked down to the boards", "[netlists]") {
  std::string text = spoiled(7, "voltage = \"230 V\"\nphases = \"L2\"");
  text.replace(text.find("three_phase"), 11, "line_earth");
  text.replace(text.find("\"L1\""), 4, "\"L2\"");
  text.replace(text.find("\"L1 L2 L3\""), 10, "\"L2\"");
  text.replace(text.find("multicore-xlpe-cu-5c"), 20, "multicore-xlpe-cu-3c");
  const Network network = read_sound(text);
  CHECK(network.sources[0].lines == ConductorSet{Conductor::L2});
  CHECK(network.sources[0].U0 == 230.0);
  CHECK(network.submains[0].conductors == ConductorSet{Conductor::L2, Conductor::N, Conductor::PE});
}

TEST_CASE("X over R of a bound is its power factor", "[netlists]") {
  const Network network = read_sound(spoiled(10, "maximum = { three_phase = \"16 kA\", x_over_r = 0.75 }"));
  // cos(atan(3/4)) = 4/5
  CHECK(network.sources[0].maximum.power_factor == Approx(0.8).epsilon(1e-12));
}

TEST_CASE("A named device is its family with its own settings, or its points", "[netlists]") {
  const std::string devices = R"([device.soft]
like = "C"
In = "20 A"
Icn = "10 kA"
instantaneous = "7 8"
[device.link]
kind = "fuse"
In = "63 A"
Icn = "80 kA"
latest = [["100 A", "1000 s"], ["300 A", "5 s"], ["800 A", "0.1 s"]]
earliest = [["90 A", "1000 s"], ["200 A", "5 s"], ["500 A", "0.1 s"]]
let_through = [["1 kA", "9 kA2s"], ["50 kA", "27 kA2s"]]
pre_arcing = "6 kA2s"
I2 = "100.8 A"
source = "invented"
)";
  std::string text = spoiled(20, "device = \"link\"") + devices;
  text.replace(text.find("\"C 16 A 6 kA\""), 13, "\"soft\"");
  const Network network = read_sound(text);
  const models::Device& soft = network.circuits[1].device;
  CHECK(soft.kind == models::DeviceKind::breaker);
  CHECK(soft.text == "soft");
  CHECK(soft.Icn == 10000.0);
  CHECK(soft.instantaneous_low == Approx(140.0).epsilon(1e-12));
  CHECK(soft.instantaneous_high == Approx(160.0).epsilon(1e-12));
  const models::Device& link = network.submains[0].device;
  CHECK(link.kind == models::DeviceKind::fuse);
  CHECK(link.In == 63.0);
  CHECK(link.I2_ratio == Approx(1.6).epsilon(1e-12));
  REQUIRE(link.overcurrent.latest.points.size() == 3);
  CHECK(link.overcurrent.latest.points[1].current == 300.0);
  CHECK(link.overcurrent.latest.points[1].time == 5.0);
  CHECK(link.let_through.basis == models::LetThrough::Basis::points);
  CHECK(link.let_through.pre_arcing_min == 6000.0);
  CHECK(link.confidence == models::Confidence::declared);
  CHECK(std::count_if(network.families.begin(), network.families.end(),
                      [](const models::DeviceFamily& f) { return f.name == "link" || f.name == "soft"; }) == 2);
}

TEST_CASE("A cable of the netlist is resolved like one of the library", "[netlists]") {
  const Network network = read_sound(spoiled(21, "cable = \"tray 35 mm2\"") + R"([cable.tray]
title = "tray cable"
material = "copper"
insulation = "xlpe90"
cores = 5
sizes = [{ size = "35 mm2", r20 = "0.524 mohm/m", x = "0.08 mohm/m" }, { size = "16 mm2", r20 = "1.15 mohm/m", status = "low" }]
source = "invented"
)");
  const models::Cable& cable = network.submains[0].cable;
  CHECK(cable.line.r20 == Approx(0.524e-3).epsilon(1e-12));
  CHECK(cable.line.x == Approx(0.08e-3).epsilon(1e-12));
  CHECK(cable.max_degc == 90.0);
  CHECK(cable.line.confidence == models::Confidence::declared);
  const auto tray = std::find_if(network.constructions.begin(), network.constructions.end(),
                                 [](const models::CableConstruction& c) { return c.name == "tray"; });
  REQUIRE(tray != network.constructions.end());
  REQUIRE(tray->sizes.size() == 2);
  CHECK(tray->sizes[0].area < tray->sizes[1].area);
  CHECK(tray->sizes[0].confidence == models::Confidence::low);
}

TEST_CASE("All errors of a file come in one run, in order of place", "[netlists]") {
  std::string text(kBase);
  text.replace(text.find("voltage = \"230/400 V\""), 21, "voltage = 230/400 V");
  text.replace(text.find("\"35 m\""), 6, "\"-35 m\"");
  text.replace(text.find("cable = \"multicore-xlpe-cu-5c"), 29, "cable = \"multicore-xlpe-5c");
  text += "[board.shop]\n[state.x\nsources = [\"grid\"]\n[electrode.rod]\nboard = \"shp\"\nresistance = \"9 ohm\"\n";
  CHECK(said(read_network_text(text, "base.toml")) ==
        R"(7:11+9 error: voltage is a text without quotes | a text needs quotes: voltage = "230/400 V"
21:10+17 error: unknown cable 'multicore-xlpe-5c' | did you mean 'multicore-xlpe-cu-5c'?
22:11+5 error: length of submain 'S1' is -35 m; it must be above 0 m
28:1+12 error: board 'shop' is declared twice
15:1+1 note: first declared here
29:9+1 error: expected ']', got the end of the line
32:10+3 error: unknown board 'shp' | did you mean 'shop'?
)");
}

TEST_CASE("Reading ends after twenty errors of form and a hundred of content", "[netlists]") {
  std::string form(kBase);
  for (int k = 0; k < 30; ++k) form += "x" + std::to_string(k) + " = = 1\n";
  const Reading reading = read_network_text(form, "base.toml");
  REQUIRE(reading.diagnostics.size() == 21);
  CHECK(reading.diagnostics.back().message == "the rest was not read after 20 errors of form");
  std::string content(kBase);
  for (int k = 0; k < 130; ++k) content += "y" + std::to_string(k) + " = 1\n";
  const Reading many = read_network_text(content, "base.toml");
  REQUIRE(many.diagnostics.size() == 101);
  CHECK(format_diagnostic(many.diagnostics.back()) == "base.toml: error: 30 further errors are not listed\n");
}

TEST_CASE("A netlist that is no text is refused as a whole", "[netlists]") {
  CHECK(said(read_network_text("", "n.toml")) == "0:0+1 error: the netlist is empty\n");
  CHECK(said(read_network_text(" \n\t\n", "n.toml")) == "0:0+1 error: the netlist is empty\n");
  CHECK(said(read_network_text(std::string("a = 1\0b", 7), "n.toml")) ==
        "0:0+1 error: the netlist is not a text: byte 6 is zero\n");
  CHECK(said(read_network_text("title = \"caf\xE9\"\n", "n.toml")) ==
        "1:13+1 error: the netlist is not UTF-8: byte 0xE9 | save it with the encoding UTF-8\n");
  CHECK(said(read_network_text("# nothing\n", "n.toml")) ==
        "0:0+1 error: the netlist has no supply and no transformer\n"
        "1:1+1 error: the netlist has no 'rules', which is obligatory | rules: The wiring rules, with their edition, "
        "that decide times, k, voltage drop and temperatures.\n");
  const Folder folder("sunder_netlists");
  CHECK(said(read_network(folder.path("none.toml"))) ==
        "0:0+1 error: netlist '" + folder.path("none.toml") + "' does not exist\n");
  CHECK(said(read_network(folder.path())) == "0:0+1 error: netlist '" + folder.path() + "' is a folder\n");
  const std::string large = folder.write("large.toml", "#");
  std::filesystem::resize_file(large, kLargestFile + 1);
  CHECK(said(read_network(large)) ==
        "0:0+1 error: netlist '" + large + "' has 67108865 bytes; at most 67108864 are read\n");
  const std::string sound = folder.write("sound.toml", kBase);
  CHECK(said(read_network(sound)).empty());
}

TEST_CASE("Byte order mark and CRLF of a netlist change nothing", "[netlists]") {
  std::string text = "\xEF\xBB\xBF";
  for (const char c : spoiled(22, "length = \"-3 m\"")) text += c == '\n' ? std::string("\r\n") : std::string(1, c);
  const Reading reading = read_network_text(text, "base.toml");
  REQUIRE(reading.diagnostics.size() == 1);
  CHECK(format_diagnostic(reading.diagnostics[0]) ==
        "base.toml:22:11: error: length of submain 'S1' is -3 m; it must be above 0 m\n"
        " 22 | length = \"-3 m\"\n"
        "    |           ^~~~\n");
}

TEST_CASE("The starter netlist reads without a word, whatever its title", "[netlists]") {
  for (const char* title : {"Shed", "a \"quoted\" \\ title", "caf\xC3\xA9", "two\nlines\t", ""}) {
    const Reading reading = read_network_text(starter_netlist(title), "starter.toml");
    CHECK(said(reading).empty());
    REQUIRE(reading.network.has_value());
    CHECK(reading.network->title == title);
  }
}

TEST_CASE("A diagnostic shows its line with a caret, tabs kept and long lines cut", "[netlists]") {
  Diagnostic d;
  d.file = "a.toml";
  d.line = 7;
  d.column = 3;
  d.width = 4;
  d.message = "unknown key 'abcd'";
  d.source_line = "\t\tabcd = 1";
  d.hint = "did you mean 'abc'?";
  CHECK(format_diagnostic(d) ==
        "a.toml:7:3: error: unknown key 'abcd'\n 7 | \t\tabcd = 1\n   | \t\t^~~~\n  = did you mean 'abc'?\n");
  d.hint.clear();
  d.severity = Severity::warning;
  d.column = 12;
  d.source_line = "\xC3\xA9\xC3\xA9\xC3\xA9 = \"\xE2\x82\xAC\xE2\x82\xAC\" x";
  CHECK(format_diagnostic(d) ==
        "a.toml:7:12: warning: unknown key 'abcd'\n 7 | " + d.source_line + "\n   |            ^\n");
  d.source_line = std::string(300, 'a') + "HERE" + std::string(300, 'b');
  d.column = 301;
  CHECK(format_diagnostic(d) == "a.toml:7:301: warning: unknown key 'abcd'\n 7 | ..." + std::string(60, 'a') + "HERE" +
                                    std::string(46, 'b') + "...\n   | " + std::string(63, ' ') + "^~~~\n");
  d.severity = Severity::note;
  d.source_line.clear();
  CHECK(format_diagnostic(d) == "a.toml:7:301: note: unknown key 'abcd'\n");
}

}  // namespace sunder::netlists
