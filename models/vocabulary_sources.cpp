// SPDX-License-Identifier: Apache-2.0
/// @file
/// What may stand in the tables of supplies, transformers, generators and inverters. Bands of the unusual are wide
/// on purpose, as everywhere in the vocabulary.
#include <utility>

#include "models/vocabulary.h"

namespace sunder::models::vocabulary {

namespace {

constexpr std::string_view kEarthings = "TN-S|TN-C-S|TN-C|TT|IT";

// The nominal voltage that a source or transformer delivers.
Key voltage() {
  return entry("voltage", ValueForm::text,
               "Nominal voltage: \"230/400 V\" for three phases; above 1 kV one value, \"20 kV\".")
      .need();
}

Key star_point(std::string_view what, std::string_view by_default) {
  return entry("star_point", ValueForm::text, what).unless_given(by_default);
}

Key capacitance() {
  return amount("capacitance", Quantity::capacitance,
                "Of the whole IT network to earth, all lines together; decides the first fault's current.")
      .from(0, 1e-2)
      .usual(1e-8, 1e-4);
}

Key rating(std::string_view what) {
  return amount("rating", Quantity::apparent_power, what).need().above(0, 1e9).usual(5e3, 1e8);
}

Key tails(std::string_view what) { return entry("tails", ValueForm::table, what); }

Key link(std::string_view choices, std::string_view by_default) {
  return entry("link", ValueForm::choice, "Where neutral and protective conductor part; none: not joined at all.")
      .of(choices)
      .unless_given(by_default);
}

Kind supply() {
  return {"supply",
          "A connection to a network whose most and least currents are declared.",
          "[supply.grid]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nearthing = \"TN-C-S\"\n"
          "maximum = { three_phase = \"16 kA\" }\nminimum = { Ze = \"0.35 ohm\" }\n",
          {entry("feeds", ValueForm::reference, "The board that it supplies.").need(),
           entry("voltage", ValueForm::text,
                 "Nominal voltage: \"230/400 V\" for three phases, \"230 V\" for a single phase, \"120/240 V\" for a "
                 "split phase; above 1 kV one value, \"20 kV\".")
               .need(),
           entry("phases", ValueForm::phases, "The line that a single-phase supply delivers.").unless_given("L1"),
           entry("earthing", ValueForm::choice, "System earthing; obligatory up to 1 kV.").of(kEarthings),
           star_point("How its star point is earthed: \"solid\", \"open\" or an impedance.", "open in IT, else solid"),
           capacitance(),
           entry("network", ValueForm::choice, "Whose transformer feeds it; decides the voltage-drop limits.")
               .of("public|own transformer")
               .unless_given("public"),
           entry("maximum", ValueForm::table, "The most that the network may deliver at the terminals."),
           entry("minimum", ValueForm::table, "The least that the network may deliver at the terminals."),
           entry("device", ValueForm::device, "The device at the origin, such as the distributor's fuse."),
           entry("tails", ValueForm::table, "The conductors from that device to the board."), demand(), mean_pf()}};
}

std::vector<Key> bound_keys() {
  return {
      entry("three_phase", ValueForm::text, "Three-phase short-circuit current, or impedance of one line."),
      entry("line_neutral", ValueForm::text, "Line-neutral short-circuit current, or loop impedance."),
      entry("line_earth", ValueForm::text, "Line-earth fault current, or loop impedance."),
      number("power_factor", "Power factor of the loops; without it and x_over_r a range of angles is taken.")
          .from(0, 1)
          .usual(0.05, 1),
      number("x_over_r", "Reactance over resistance of the loops, instead of power_factor.").from(0, 1000).usual(0, 50),
      amount("power", Quantity::apparent_power, "Three-phase short-circuit power, instead of three_phase.")
          .above(0, 1e12)
          .usual(1e6, 2e10),
      entry("z1", ValueForm::text, "Positive-sequence impedance \"0.05+j0.5 mohm\", instead of the loops."),
      entry("z0", ValueForm::text,
            "Zero-sequence impedance beside z1; without it no line-neutral or line-earth current is known.")};
}

Kind supply_maximum() {
  return {"supply.maximum", "The most that a supply may deliver.",
          "maximum = { three_phase = \"16 kA\", power_factor = 0.3 }\n", bound_keys()};
}

Kind supply_minimum() {
  std::vector<Key> keys = bound_keys();
  keys.push_back(amount("Ze", Quantity::impedance,
                        "Earth-fault loop impedance outside the installation; in TT the source's side, without RA.")
                     .above(0, 10000)
                     .usual(0.005, 250));
  keys.push_back(amount("Zn", Quantity::impedance, "Line-neutral loop impedance outside the installation.")
                     .above(0, 10000)
                     .usual(0.005, 5));
  return {"supply.minimum", "The least that a supply may deliver.", "minimum = { Ze = \"0.35 ohm\" }\n",
          std::move(keys)};
}

std::vector<Key> tails_keys() {
  return {
      entry("cable", ValueForm::cable, "Construction and size.").need(),
      amount("length", Quantity::length, "Length from the device to the board.").need().above(0, 10000).usual(0.2, 200),
      entry("cpc", ValueForm::cpc, "The main earthing conductor that runs with them.")
          .unless_given("as the line conductor"),
      number("in_parallel", "Equal conductors in parallel.").from(1, 20).unless_given("1"), iz()};
}

Kind transformer() {
  return {
      "transformer",
      "A transformer of the installation: a source, or with `from` a passage between two boards.",
      "[transformer.T1]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nrating = \"500 kVA\"\nuk = \"4.75 %\"\n"
      "losses = \"5.1 kW\"\nearthing = \"TN-S\"\nfault_level = \"250 MVA\"\n",
      {entry("feeds", ValueForm::reference, "The board that it supplies.").need(),
       entry("from", ValueForm::reference, "The board that feeds its primary side; without it, it is a source."),
       voltage(),
       rating("Rated power."),
       amount("uk", Quantity::percentage, "Short-circuit voltage.").need().above(0, 0.5).usual(0.02, 0.2),
       amount("losses", Quantity::power, "Load losses at rated current; or give x_over_r.")
           .above(0, 1e7)
           .usual(100, 1e6),
       number("x_over_r", "Reactance over resistance; or give losses.").from(0, 1000).usual(0.5, 60),
       amount("secondary", Quantity::voltage, "Rated no-load voltage between lines of the secondary side.")
           .above(0, 150e3)
           .usual(200, 40e3)
           .unless_given("the nominal voltage between lines"),
       amount("primary", Quantity::voltage, "Rated voltage between lines of the primary side; obligatory with from.")
           .above(0, 500e3)
           .usual(200, 150e3),
       entry("on_load_taps", ValueForm::flag,
             "Whether the unit transformer of a generator has an on-load tap changer (IEC 60909).")
           .unless_given("false"),
       amount("tap", Quantity::percentage, "Position of the tap changer, as a change of the primary voltage.")
           .from(-0.2, 0.2)
           .unless_given("0 %"),
       entry("vector", ValueForm::text,
             "Vector group: primary D, Y, YN, Z or ZN, secondary d, y, yn, z or zn, clock number.")
           .unless_given("Dyn11"),
       entry("fault_level", ValueForm::text,
             "Short-circuit power of the network before it: \"250 MVA\", or a table of most and least.")
           .unless_given("unlimited for the most, unknown for the least"),
       entry("earthing", ValueForm::choice,
             "System earthing of the secondary side; obligatory up to 1 kV where the vector group has a neutral.")
           .of(kEarthings),
       link("star point|board|none", "star point"),
       star_point("How its secondary star point is earthed, and so joined to PE: \"solid\", \"open\" or an impedance.",
                  "open in IT, else solid"),
       capacitance(),
       entry("primary_star", ValueForm::text,
             "How the star point of a YN or ZN primary is earthed: \"solid\", \"open\" or an impedance.")
           .unless_given("solid"),
       number("z0_over_z1", "Zero-sequence impedance over positive-sequence impedance.")
           .above(0, 100)
           .usual(0.3, 10)
           .unless_given("1"),
       number("r0_over_r1", "Zero-sequence resistance over positive-sequence resistance; with x0_over_x1.")
           .above(0, 1000)
           .usual(0.1, 30),
       number("x0_over_x1", "Zero-sequence reactance over positive-sequence reactance; with r0_over_r1.")
           .above(0, 1000)
           .usual(0.1, 30),
       entry("device", ValueForm::device, "The device on its low side."),
       entry("primary_device", ValueForm::device, "The device on its primary side."),
       tails("The conductors from its low side to the board."),
       demand(),
       mean_pf()}};
}

Kind fault_level() {
  return {"transformer.fault_level",
          "The most and the least short-circuit power before a transformer.",
          "fault_level = { maximum = \"500 MVA\", minimum = \"150 MVA\" }\n",
          {amount("maximum", Quantity::apparent_power, "The most.").above(0, 1e12).usual(5e6, 2e10),
           amount("minimum", Quantity::apparent_power, "The least.").above(0, 1e12).usual(5e6, 2e10)}};
}

// A reactance of a machine in per unit of its rating.
Entry per_unit(std::string_view name, double most, double usual_least, double usual_most, std::string_view help) {
  return amount(name, Quantity::ratio, help).above(0, most).usual(usual_least, usual_most);
}

Kind generator() {
  return {
      "generator",
      "A synchronous generator as a source.",
      "[generator.G1]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nearthing = \"TN-S\"\nrating = \"250 kVA\"\n"
      "xd_subtransient = \"12 %\"\nx0 = \"4 %\"\nsustained = 3\n",
      {entry("feeds", ValueForm::reference, "The board that it supplies.").need(),
       voltage(),
       entry("earthing", ValueForm::choice, "System earthing; obligatory up to 1 kV.").of(kEarthings),
       rating("Rated power."),
       per_unit("xd_subtransient", 2, 0.03, 0.5, "Saturated subtransient reactance, per unit or in %.").need(),
       per_unit("xd_transient", 5, 0.05, 0.8, "Saturated transient reactance, per unit or in %."),
       per_unit("xd", 20, 0.3, 6, "Synchronous reactance, per unit or in %."),
       per_unit("x2", 2, 0.03, 0.6, "Negative-sequence reactance, per unit or in %.")
           .unless_given("as xd_subtransient"),
       per_unit(
           "x0", 2, 0.002, 0.4,
           "Zero-sequence reactance, per unit or in %; without it no line-neutral or line-earth current is known."),
       amount("r", Quantity::ratio, "Armature resistance, per unit or in %.")
           .from(0, 1)
           .usual(0, 0.2)
           .unless_given("by IEC 60909-0 from rating and voltage"),
       amount("T_subtransient", Quantity::time, "Subtransient time constant.").above(0, 10).usual(0.002, 0.3),
       amount("T_transient", Quantity::time, "Transient time constant.").above(0, 100).usual(0.02, 15),
       number("sustained", "Maker's sustained three-phase short-circuit current over rated current.")
           .above(0, 20)
           .usual(0.3, 6),
       number("pf", "Rated power factor.").above(0, 1).usual(0.5, 1).unless_given("0.8"),
       star_point("How its star point is earthed, and so joined to PE: \"solid\", \"open\" or an impedance; \"none\": "
                  "not brought out.",
                  "open in IT, else solid"),
       capacitance(),
       link("star point|board|none", "star point"),
       entry("device", ValueForm::device, "The device at its terminals."),
       tails("The conductors from its terminals to the board."),
       demand()}};
}

Kind inverter() {
  return {
      "inverter",
      "An inverter or uninterruptible supply as a source: its current is limited, in stages.",
      "[inverter.UPS]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nearthing = \"TN-S\"\n"
      "stages = [[\"600 A\", \"20 ms\"], [\"150 A\"]]\n",
      {entry("feeds", ValueForm::reference, "The board that it supplies.").need(),
       entry("voltage", ValueForm::text, "Nominal voltage: \"230/400 V\", or \"230 V\" for a single phase.").need(),
       entry("phases", ValueForm::phases, "The line that a single-phase inverter delivers.").unless_given("L1"),
       entry("earthing", ValueForm::choice, "System earthing; obligatory up to 1 kV.").of(kEarthings),
       entry("stages", ValueForm::points,
             "Currents in a fault and until when each is kept: [\"600 A\", \"20 ms\"], the last without a time: for "
             "ever.")
           .need(),
       entry("follows", ValueForm::flag, "Whether it feeds only into a live network, never alone.")
           .unless_given("false"),
       star_point("How its star point is earthed, and so joined to PE: \"solid\", \"open\" or an impedance.",
                  "open in IT, else solid"),
       capacitance(), link("star point|board|none", "star point"),
       entry("device", ValueForm::device, "The device at its terminals."),
       tails("The conductors from its terminals to the board."), demand()}};
}

}  // namespace

std::vector<Kind> sources() {
  return {supply(),
          supply_maximum(),
          supply_minimum(),
          {"supply.tails", "The conductors from a supply's device to its board.",
           "tails = { cable = \"singles-pvc-cu 25 mm2\", length = \"2 m\", cpc = \"16 mm2\" }\n", tails_keys()},
          transformer(),
          fault_level(),
          {"transformer.tails", "The conductors from a transformer's low side to its board.",
           "tails = { cable = \"singles-pvc-cu 240 mm2\", length = \"8 m\", in_parallel = 2 }\n", tails_keys()},
          generator(),
          {"generator.tails", "The conductors from a generator to its board.",
           "tails = { cable = \"singles-pvc-cu 95 mm2\", length = \"12 m\" }\n", tails_keys()},
          inverter(),
          {"inverter.tails", "The conductors from an inverter to its board.",
           "tails = { cable = \"singles-pvc-cu 16 mm2\", length = \"6 m\" }\n", tails_keys()}};
}

}  // namespace sunder::models::vocabulary
