// SPDX-License-Identifier: Apache-2.0
/// @file
/// What may stand in the tables of boards, the runs between and behind them, and what joins or earths them.
#include <utility>

#include "models/vocabulary.h"

namespace sunder::models::vocabulary {

namespace {

Kind board() {
  return {
      "board",
      "A distribution board: one busbar with ways.",
      "[board.intake]\nincomer = \"switch 100 A\"\n",
      {entry("incomer", ValueForm::device, "The device through which it is fed."),
       entry("groups", ValueForm::table, "Devices that stand before some of its ways, by name."),
       entry("circuits_from", ValueForm::text, "A schedule file (CSV) of circuits, relative to the netlist's folder."),
       entry("n_pe_link", ValueForm::flag, "Whether its neutral and protective bars are joined.")
           .unless_given("false")}};
}

Kind board_groups() {
  return {"board.groups",
          "A device over some of a board's ways.",
          "groups = { sockets = { device = \"RCD 63 A 30 mA A\", ways = [\"W1\", \"W2\"] } }\n",
          {entry("device", ValueForm::device, "The device of the group.").need(),
           entry("ways", ValueForm::list, "Circuits of the board and submains that leave it.").need(), demand()}};
}

Key installed() {
  return entry("installed", ValueForm::text, "Installation method, as it shall stand in the schedule.");
}

Key selective() {
  return entry("selective", ValueForm::text,
               "Selectivity that is required of its device: \"total\", or up to a current.");
}

Kind submain() {
  return {"submain",
          "A cable from one board to another, with the device at its start.",
          "[submain.S1]\nfrom = \"intake\"\nto = \"workshop\"\ndevice = \"gG 80 A\"\n"
          "cable = \"swa-xlpe-cu-4c 35 mm2\"\ncpc = \"armour\"\nlength = \"48 m\"\n",
          {entry("from", ValueForm::reference, "The board that it leaves.").need(),
           entry("to", ValueForm::reference, "The board that it feeds.").need(),
           entry("phases", ValueForm::phases, "Its live conductors.").unless_given("all that its board has"),
           entry("device", ValueForm::device, "The device at its start.").need_without("z1"),
           entry("cable", ValueForm::cable, "Construction and size.").need_without("z1"),
           entry("cpc", ValueForm::cpc,
                 "Where its protective conductor is; \"PEN\": the neutral is it too; \"none\" towards a board with an "
                 "electrode of its own.")
               .unless_given("a spare core"),
           entry("z1", ValueForm::text,
                 "Positive-sequence impedance per length \"0.077+j0.079 mohm/m\", instead of a cable."),
           entry("z0", ValueForm::text,
                 "Zero-sequence impedance beside z1; without it no line-neutral or line-earth current is known."),
           entry("return", ValueForm::choice, "With z1: what carries the difference of z0 and z1.")
               .of("N|PE|N+PE|earth")
               .unless_given("N+PE, above 1 kV earth"),
           amount("length", Quantity::length, "Its length.").need().above(0, 100000).usual(0.5, 1000),
           number("in_parallel", "Equal cables in parallel.").from(1, 20).unless_given("1"), installed(), iz(),
           demand(), pf(), selective()}};
}

Kind circuit() {
  return {"circuit",
          "The circuits of a board, each a final circuit; the same keys are the columns of a schedule file.",
          "[circuit.workshop]\nW1 = { serves = \"lathe\", use = \"fixed\", phases = \"L1 L2 L3\", "
          "device = \"C 16 A 6 kA\", cable = \"singles-pvc-cu 2.5 mm2\", length = \"21 m\", load = \"11 A\" }\n",
          {entry("serves", ValueForm::text, "What it supplies, in free words."),
           entry("use", ValueForm::choice, "Decides disconnection time, voltage drop and additional protection.")
               .of("sockets|fixed|lighting|distribution")
               .unless_given("the strictest"),
           entry("phases", ValueForm::phases,
                 "Its live conductors: \"L2\" has a neutral, \"L1 L2\" and \"L1 L2 L3\" have none.")
               .need(),
           entry("device", ValueForm::device, "The device at its start.").need(),
           entry("cable", ValueForm::cable, "Construction and size.").need(),
           entry("cpc", ValueForm::cpc, "Where its protective conductor is; \"PEN\": the neutral is it too.")
               .unless_given("a spare core"),
           amount("length", Quantity::length, "Its length; of a ring the whole loop from end to end.")
               .need()
               .above(0, 100000)
               .usual(0.5, 500),
           number("in_parallel", "Equal cables in parallel.").from(1, 20).unless_given("1"),
           entry("ring", ValueForm::flag, "Whether both ends are at the board.").unless_given("false"),
           entry("spurs", ValueForm::table, "Spurs off a ring."),
           amount("load", Quantity::current, "Design current Ib in one line.").from(0, 20000).usual(0.01, 400), pf(),
           entry("motor", ValueForm::flag, "Whether its load is the rated current of a motor.").unless_given("false"),
           iz(), installed(), selective()}};
}

Kind circuit_spurs() {
  return {"circuit.spurs",
          "One spur off a ring; in a schedule file a cell \"20 m:4 m; 31 m:3 m\" (at:length).",
          "spurs = [{ at = \"20 m\", length = \"4 m\" }]\n",
          {amount("at", Quantity::length, "Where it leaves the ring, from the ring's start.").need().from(0, 100000),
           amount("length", Quantity::length, "Its length.").need().above(0, 100000).usual(0.1, 100)}};
}

Kind electrode() {
  return {"electrode",
          "An earth electrode at a board.",
          "[electrode.rod]\nboard = \"house\"\nresistance = \"80 ohm\"\n",
          {entry("board", ValueForm::reference, "The board whose protective conductors it earths.").need(),
           amount("resistance", Quantity::impedance, "Its resistance to earth, RA.")
               .need()
               .above(0, 100000)
               .usual(0.2, 200)}};
}

Kind bond() {
  return {"bond",
          "A conducting path between protective conductors that is no circuit: bonding conductor, pipe, cable sheath.",
          "[bond.pipe]\nfrom = \"intake\"\nto = \"workshop\"\nimpedance = \"0.05 ohm\"\n",
          {entry("from", ValueForm::reference, "The board at one end.").need(),
           entry("to", ValueForm::reference, "The board at the other, or \"earth\".").need(),
           entry("impedance", ValueForm::text, "Of it: \"0.05 ohm\" or \"0.05+j0.02 ohm\".").need()}};
}

Kind link() {
  return {
      "link",
      "A coupler, changeover or bypass switch: joins two boards without impedance.",
      "[link.coupler]\nfrom = \"intake\"\nto = \"workshop\"\nclosed = false\n",
      {entry("from", ValueForm::reference, "The board at one side.").need(),
       entry("to", ValueForm::reference, "The board at the other side.").need(),
       entry("phases", ValueForm::phases, "The conductors that it joins.").unless_given("all that both boards have"),
       entry("closed", ValueForm::flag, "Whether it is closed where a state does not say.").unless_given("true"),
       entry("device", ValueForm::device, "The device that makes and breaks it.")}};
}

Kind motor() {
  return {
      "motor",
      "An asynchronous motor, or a group of equal ones, that feeds into a fault.",
      "[motor.pump]\non = \"workshop/W1\"\nrating = \"5.5 kW\"\n",
      {entry("on", ValueForm::reference, "Its board, or the circuit at whose end it stands: \"workshop/W1\".").need(),
       entry("phases", ValueForm::phases, "Its lines.").unless_given("L1 L2 L3"),
       amount("rating", Quantity::power, "Rated mechanical power of one; or give current.")
           .above(0, 1e8)
           .usual(50, 5e6),
       amount("current", Quantity::current, "Rated current of one; or give rating.").above(0, 20000).usual(0.1, 1500),
       amount("voltage", Quantity::voltage, "Rated voltage between its lines.")
           .above(0, 150e3)
           .usual(100, 15e3)
           .unless_given("the nominal of its place"),
       number("pf", "Rated power factor.").above(0, 1).usual(0.5, 1).unless_given("0.85"),
       number("efficiency", "Rated efficiency.").above(0, 1).usual(0.5, 0.99).unless_given("0.9"),
       number("start", "Locked-rotor current over rated current.").from(1, 20).usual(2, 10).unless_given("5"),
       number("r_over_x", "Resistance over reactance with the rotor locked.")
           .from(0, 10)
           .usual(0.05, 1)
           .unless_given("0.42"),
       number("pole_pairs", "Pairs of poles.").from(1, 100).usual(1, 12).unless_given("1"),
       number("count", "Equal motors.").from(1, 10000).unless_given("1"),
       entry("converter", ValueForm::flag, "Whether a static converter that cannot feed back stands before it.")
           .unless_given("false")}};
}

Kind state() {
  return {"state",
          "A supply state: which sources are connected together at one time, and what is open or closed.",
          "[state.mains]\nsources = [\"grid\"]\n",
          {entry("sources", ValueForm::list, "Names of supplies, transformers, generators and inverters.").need(),
           entry("closed", ValueForm::list, "Links that are closed in it."),
           entry("open", ValueForm::list, "Links, submains and transformers between boards that are open in it.")}};
}

}  // namespace

std::vector<Kind> runs() {
  return {board(),     board_groups(), submain(), circuit(), circuit_spurs(),
          electrode(), state(),        motor(),   link(),    bond()};
}

}  // namespace sunder::models::vocabulary
