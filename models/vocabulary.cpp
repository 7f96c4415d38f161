// SPDX-License-Identifier: Apache-2.0
/// @file
/// The vocabulary itself: one entry a key. Bands of the unusual are wide on purpose: they are there to
/// catch a slipped digit or a wrong unit, not to judge a design.
#include <limits>
#include <utility>

#include "models/registry.h"

namespace sunder::models {

namespace {

constexpr double kUnbounded = std::numeric_limits<double>::infinity();

// A key under construction, so that an entry below reads as a sentence.
struct Entry {
  Key key;

  [[nodiscard]] Entry need() {
    key.required = true;
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

Entry entry(std::string_view name, ValueForm form, std::string_view help) {
  Key key;
  key.name = name;
  key.form = form;
  key.help = help;
  return {key};
}

Entry amount(std::string_view name, Quantity quantity, std::string_view help) {
  Entry made = entry(name, ValueForm::quantity, help);
  made.key.quantity = quantity;
  return made;
}

Entry number(std::string_view name, std::string_view help) { return entry(name, ValueForm::number, help); }

Kind top() {
  return {"",
          "The head of the file: what holds for the whole installation.",
          "title = \"Tidewater boatyard\"\nrules = \"BS 7671:2018+A2\"\n",
          {entry("title", ValueForm::text, "What reports and charts call the installation."),
           entry("rules", ValueForm::choice,
                 "The wiring rules, with their edition, that decide times, k, voltage drop and temperatures.")
               .need()
               .of("BS 7671:2018+A2|IEC 60364"),
           entry("currents", ValueForm::choice, "How fault currents are computed: conductor by conductor.")
               .of("conductor")
               .unless_given("conductor"),
           amount("ambient", Quantity::temperature,
                  "Temperature of the surroundings, at which a separate protective conductor starts a fault.")
               .from(-50, 90)
               .usual(-20, 50)
               .unless_given("30 degC"),
           entry("premises", ValueForm::choice, "Whether the rules for dwellings apply.")
               .of("dwelling|other")
               .unless_given("other")}};
}

Key iz() {
  return amount("Iz", Quantity::current, "Current-carrying capacity as installed, of all in parallel together.")
      .above(0, 20000)
      .usual(5, 3000);
}

Key pf() { return number("pf", "Power factor of the load.").above(0, 1).usual(0.5, 1).unless_given("1"); }

// The demand of what a submain or a source feeds.
Key demand() {
  return amount("demand", Quantity::current, "Greatest load current in one line, after diversity.")
      .from(0, 20000)
      .usual(0.05, 2500)
      .unless_given("the sum of the loads");
}

Key mean_pf() {
  return number("pf", "Power factor of the demand.").above(0, 1).usual(0.5, 1).unless_given("the mean of the loads");
}

Kind supply() {
  return {"supply",
          "A connection to a network whose most and least currents are declared.",
          "[supply.grid]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nearthing = \"TN-C-S\"\n"
          "maximum = { three_phase = \"16 kA\" }\nminimum = { Ze = \"0.35 ohm\" }\n",
          {entry("feeds", ValueForm::reference, "The board that it supplies.").need(),
           entry("voltage", ValueForm::text,
                 "Nominal voltage: \"230/400 V\" for three phases, \"230 V\" for a single phase.")
               .need(),
           entry("phases", ValueForm::phases, "The line that a single-phase supply delivers.").unless_given("L1"),
           entry("earthing", ValueForm::choice, "System earthing.").need().of("TN-S|TN-C-S|TT"),
           entry("network", ValueForm::choice, "Whose transformer feeds it; decides the voltage-drop limits.")
               .of("public|own transformer")
               .unless_given("public"),
           entry("maximum", ValueForm::table, "The most that the network may deliver at the terminals."),
           entry("minimum", ValueForm::table, "The least that the network may deliver at the terminals."),
           entry("device", ValueForm::device, "The device at the origin, such as the distributor's fuse."),
           entry("tails", ValueForm::table, "The conductors from that device to the board."), demand(), mean_pf()}};
}

std::vector<Key> bound_keys() {
  return {entry("three_phase", ValueForm::text, "Three-phase short-circuit current, or impedance of one line."),
          entry("line_neutral", ValueForm::text, "Line-neutral short-circuit current, or loop impedance."),
          entry("line_earth", ValueForm::text, "Line-earth fault current, or loop impedance."),
          number("power_factor", "Power factor of the loops; without it and x_over_r a range of angles is taken.")
              .from(0, 1)
              .usual(0.05, 1),
          number("x_over_r", "Reactance over resistance of the loops, instead of power_factor.")
              .from(0, 1000)
              .usual(0, 50)};
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
  return {"transformer",
          "A transformer of the installation as its source.",
          "[transformer.T1]\nfeeds = \"intake\"\nvoltage = \"230/400 V\"\nrating = \"500 kVA\"\nuk = \"4.75 %\"\n"
          "losses = \"5.1 kW\"\nearthing = \"TN-S\"\nfault_level = \"250 MVA\"\n",
          {entry("feeds", ValueForm::reference, "The board that it supplies.").need(),
           entry("voltage", ValueForm::text, "Nominal voltage of the low side: \"230/400 V\".").need(),
           amount("rating", Quantity::apparent_power, "Rated power.").need().above(0, 1e9).usual(5e3, 5e6),
           amount("uk", Quantity::percentage, "Short-circuit voltage.").need().above(0, 0.5).usual(0.02, 0.12),
           amount("losses", Quantity::power, "Load losses at rated current; or give x_over_r.")
               .above(0, 1e7)
               .usual(100, 1e5),
           number("x_over_r", "Reactance over resistance; or give losses.").from(0, 1000).usual(0.5, 30),
           amount("secondary", Quantity::voltage, "Rated no-load voltage between lines of the low side.")
               .above(0, 1000)
               .usual(200, 760)
               .unless_given("the nominal voltage between lines"),
           entry("fault_level", ValueForm::text,
                 "Short-circuit power of the network before it: \"250 MVA\", or a table of most and least.")
               .unless_given("unlimited for the most, unknown for the least"),
           entry("earthing", ValueForm::choice, "System earthing of the low side.").need().of("TN-S|TN-C-S|TT"),
           entry("link", ValueForm::choice, "Where neutral and protective conductor part.")
               .of("star point|board")
               .unless_given("star point"),
           number("z0_over_z1", "Zero-sequence impedance over positive-sequence impedance.")
               .above(0, 100)
               .usual(0.3, 10)
               .unless_given("1"),
           entry("device", ValueForm::device, "The device on its low side."),
           entry("tails", ValueForm::table, "The conductors from its low side to the board."), demand(), mean_pf()}};
}

Kind fault_level() {
  return {"transformer.fault_level",
          "The most and the least short-circuit power before a transformer.",
          "fault_level = { maximum = \"500 MVA\", minimum = \"150 MVA\" }\n",
          {amount("maximum", Quantity::apparent_power, "The most.").above(0, 1e12).usual(5e6, 2e10),
           amount("minimum", Quantity::apparent_power, "The least.").above(0, 1e12).usual(5e6, 2e10)}};
}

Kind board() {
  return {"board",
          "A distribution board: one busbar with ways.",
          "[board.intake]\nincomer = \"switch 100 A\"\n",
          {entry("incomer", ValueForm::device, "The device through which it is fed."),
           entry("groups", ValueForm::table, "Devices that stand before some of its ways, by name."),
           entry("circuits_from", ValueForm::text,
                 "A schedule file (CSV) of circuits, relative to the netlist's folder.")}};
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
           entry("device", ValueForm::device, "The device at its start.").need(),
           entry("cable", ValueForm::cable, "Construction and size.").need(),
           entry("cpc", ValueForm::cpc,
                 "Where its protective conductor is; \"none\" towards a board with an electrode of its own.")
               .unless_given("a spare core"),
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
           entry("cpc", ValueForm::cpc, "Where its protective conductor is.").unless_given("a spare core"),
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

Kind state() {
  return {"state",
          "A supply state: which sources are connected together at one time.",
          "[state.mains]\nsources = [\"grid\"]\n",
          {entry("sources", ValueForm::list, "Names of supplies and transformers.").need()}};
}

Kind device() {
  return {"device",
          "A device with a name: a family member with its own settings (like), or a maker's points (kind).",
          "[device.\"feeder breaker\"]\nlike = \"C\"\nIn = \"40 A\"\nIcn = \"10 kA\"\ninstantaneous = \"7 10\"\n",
          {entry("like", ValueForm::text, "The family that it belongs to: B, C, D, gG, RCD, ..."),
           entry("kind", ValueForm::choice, "What it is, when given by points.").of("breaker|fuse|residual"),
           amount("In", Quantity::current, "Rated current.").need().above(0, 10000).usual(0.5, 2000),
           amount("Icn", Quantity::current, "Breaking capacity.").above(0, 500000).usual(1000, 200000),
           amount("IdN", Quantity::current, "Rated residual operating current.").above(0, 100).usual(0.01, 30),
           entry("S", ValueForm::flag, "Whether its residual release is delayed, type S.").unless_given("false"),
           entry("type", ValueForm::choice, "Residual currents that it responds to.").of("AC|A|F|B").unless_given("AC"),
           number("energy_class", "Energy limiting class.").from(1, 3),
           entry("instantaneous", ValueForm::text,
                 "The maker's multiples of In between which the instantaneous release operates: \"7 10\"."),
           entry("latest", ValueForm::points, "Latest operating time against current."),
           entry("earliest", ValueForm::points, "Earliest operating time against current."),
           entry("let_through", ValueForm::points, "Greatest let-through I2t against prospective current."),
           amount("pre_arcing", Quantity::let_through, "Least I2t that may melt a fuse.").above(0, 1e12).usual(1, 1e9),
           amount("I2", Quantity::current, "Conventional operating current.").above(0, 20000),
           entry("source", ValueForm::text, "Where its points were published.")}};
}

Kind cable() {
  return {"cable",
          "A cable construction.",
          "[cable.\"tray-5c\"]\ntitle = \"5-core copper XLPE\"\nmaterial = \"copper\"\ninsulation = \"xlpe90\"\n"
          "cores = 5\nsizes = [{ size = \"35 mm2\", r20 = \"0.524 mohm/m\", x = \"0.08 mohm/m\" }]\n"
          "source = \"maker's sheet\"\n",
          {entry("title", ValueForm::text, "What schedules call it."),
           entry("material", ValueForm::choice, "Material of its conductors.").need().of("copper|aluminium"),
           entry("insulation", ValueForm::choice, "Insulation, which decides k.").need().of("pvc70|pvc90|xlpe90"),
           amount("max", Quantity::temperature, "Greatest conductor temperature in operation.")
               .from(30, 250)
               .usual(60, 105)
               .unless_given("by insulation"),
           number("cores", "Number of cores besides a built-in protective conductor; 0 for singles.")
               .need()
               .from(0, 61)
               .usual(0, 7),
           entry("armour", ValueForm::choice, "Material of its armour wires.").of("steel|aluminium"),
           entry("built_in_cpc", ValueForm::flag, "Whether it has a reduced protective conductor, as flat cables.")
               .unless_given("false"),
           entry("sizes", ValueForm::table, "Its sizes.").need(),
           entry("source", ValueForm::text, "Where its data was published.")}};
}

Kind cable_sizes() {
  constexpr std::string_view kWords = "found|derived|checked|memory|low|declared";
  return {
      "cable.sizes",
      "One size of a cable construction.",
      "sizes = [{ size = \"35 mm2\", r20 = \"0.524 mohm/m\", x = \"0.08 mohm/m\" }]\n",
      {amount("size", Quantity::area, "Nominal area of a line conductor.").need().above(0, 0.01).usual(0.5e-6, 1200e-6),
       amount("r20", Quantity::impedance_per_length, "Resistance of a line conductor at 20 degC.").need().above(0, 10),
       amount("x", Quantity::impedance_per_length, "Reactance of a conductor.")
           .from(0, 0.1)
           .usual(0.04e-3, 0.3e-3)
           .unless_given("0"),
       amount("cpc_size", Quantity::area, "Area of the built-in protective conductor.").above(0, 0.01),
       amount("cpc_r20", Quantity::impedance_per_length, "Its resistance at 20 degC.").above(0, 10),
       amount("armour_area", Quantity::area, "Area of all armour wires together.").above(0, 0.1).usual(5e-6, 1500e-6),
       amount("armour_r20", Quantity::impedance_per_length, "Resistance of the armour at 20 degC.").above(0, 10),
       amount("armour_x", Quantity::impedance_per_length, "Reactance of the armour.").from(0, 0.1).unless_given("0"),
       entry("status", ValueForm::choice, "How well the conductor values are supported.")
           .of(kWords)
           .unless_given("declared"),
       entry("x_status", ValueForm::choice, "How well the reactance is supported.").of(kWords).unless_given("declared"),
       entry("armour_status", ValueForm::choice, "How well the armour values are supported.")
           .of(kWords)
           .unless_given("declared")}};
}

}  // namespace

const std::vector<Kind>& registry() {
  static const std::vector<Kind> kinds = {
      top(),
      supply(),
      supply_maximum(),
      supply_minimum(),
      {"supply.tails", "The conductors from a supply's device to its board.",
       "tails = { cable = \"singles-pvc-cu 25 mm2\", length = \"2 m\", cpc = \"16 mm2\" }\n", tails_keys()},
      transformer(),
      fault_level(),
      {"transformer.tails", "The conductors from a transformer's low side to its board.",
       "tails = { cable = \"singles-pvc-cu 240 mm2\", length = \"8 m\", in_parallel = 2 }\n", tails_keys()},
      board(),
      board_groups(),
      submain(),
      circuit(),
      circuit_spurs(),
      electrode(),
      state(),
      device(),
      cable(),
      cable_sizes()};
  return kinds;
}

}  // namespace sunder::models
