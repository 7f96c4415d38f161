// SPDX-License-Identifier: Apache-2.0
/// @file
/// The vocabulary itself: one entry a key. Bands of the unusual are wide on purpose: they are there to
/// catch a slipped digit or a wrong unit, not to judge a design.
#include "models/vocabulary.h"

#include <utility>

#include "models/registry.h"

namespace sunder::models {

namespace {

using namespace vocabulary;

Kind top() {
  return {"",
          "The head of the file: what holds for the whole installation.",
          "title = \"Tidewater boatyard\"\nrules = \"BS 7671:2018+A2\"\n",
          {entry("title", ValueForm::text, "What reports and charts call the installation."),
           entry("rules", ValueForm::choice,
                 "The wiring rules, with their edition, that decide times, k, voltage drop and temperatures.")
               .need()
               .of("BS 7671:2018+A2|IEC 60364"),
           entry("currents", ValueForm::choice,
                 "How fault currents are computed: conductor by conductor, or with the corrections of IEC 60909.")
               .of("conductor|IEC 60909")
               .unless_given("conductor"),
           entry("tolerance", ValueForm::choice,
                 "By how much the low voltage may exceed its nominal, for the voltage factor of IEC 60909.")
               .of("+6 %|+10 %")
               .unless_given("+6 %"),
           amount("frequency", Quantity::frequency, "System frequency; the library's reactances are for 50 Hz.")
               .from(16, 400)
               .unless_given("50 Hz"),
           amount("ambient", Quantity::temperature,
                  "Temperature of the surroundings, at which a separate protective conductor starts a fault.")
               .from(-50, 90)
               .usual(-20, 50)
               .unless_given("30 degC"),
           entry("premises", ValueForm::choice, "Whether the rules for dwellings apply.")
               .of("dwelling|other")
               .unless_given("other")}};
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
  static const std::vector<Kind> kinds = [] {
    std::vector<Kind> all{top()};
    for (std::vector<Kind> (*part)() : {sources, runs}) {
      for (Kind& kind : part()) all.push_back(std::move(kind));
    }
    for (Kind (*kind)() : {device, cable, cable_sizes}) all.push_back(kind());
    return all;
  }();
  return kinds;
}

}  // namespace sunder::models
