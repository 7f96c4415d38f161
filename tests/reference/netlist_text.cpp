// SPDX-License-Identifier: Apache-2.0
// A network as the program's netlist.
#include <iomanip>
#include <sstream>

#include "tests/reference/network.h"

namespace sunder::reference {

namespace {

std::string number(double value) {
  std::ostringstream text;
  text << std::setprecision(12) << value;
  return text.str();
}

std::string quoted(double value, const char* unit) { return '"' + number(value) + ' ' + unit + '"'; }

std::string quoted(const std::string& text) { return '"' + text + '"'; }

// `cable`, `cpc`, `length` and `in_parallel` of a run, each "key = value, " or one a line.
std::string run_keys(const Run& run, const char* end) {
  std::ostringstream text;
  text << "cable = \"" << run.construction << ' ' << number(run.mm2);
  const Size& size = size_of(run);
  if (run.cpc == Cpc::built_in) text << '/' << number(size.cpc_mm2);
  if (run.cpc == Cpc::single && run.cpc_mm2 != run.mm2) text << '/' << number(run.cpc_mm2);
  text << " mm2\"" << end;
  switch (run.cpc) {
    case Cpc::built_in:
    case Cpc::single:
      break;  // what such a cable has without being asked
    case Cpc::core:
      text << "cpc = \"core\"" << end;
      break;
    case Cpc::armour:
      text << "cpc = \"armour\"" << end;
      break;
    case Cpc::armour_and_core:
      text << "cpc = \"armour + core\"" << end;
      break;
    case Cpc::armour_and_separate:
      text << "cpc = \"armour + 16 mm2\"" << end;
      break;
    case Cpc::separate:
      text << "cpc = \"16 mm2\"" << end;
      break;
  }
  text << "length = " << quoted(run.length, "m") << end;
  if (run.in_parallel != 1) text << "in_parallel = " << run.in_parallel << end;
  return text.str();
}

std::string bound_keys(const Bound& bound, bool minimum) {
  std::ostringstream text;
  const char* between = "{ ";
  const auto loop = [&](const char* name, const char* as_impedance, const Loop& value) {
    if (!value.given()) return;
    const bool impedance = value.ohms > 0;
    text << between << (impedance && minimum ? as_impedance : name) << " = "
         << (impedance ? quoted(value.ohms, "ohm") : quoted(value.amps, "A"));
    between = ", ";
  };
  loop("three_phase", "three_phase", bound.three_phase);
  loop("line_neutral", "Zn", bound.line_neutral);
  loop("line_earth", "Ze", bound.line_earth);
  if (bound.power_factor >= 0) text << between << "power_factor = " << number(bound.power_factor);
  text << " }";
  return text.str();
}

void write_source(std::ostream& out, const Network& network) {
  const Source& source = network.source;
  out << (source.transformer ? "[transformer.source]\n" : "[supply.source]\n")
      << "feeds = " << quoted(network.boards.front().name) << "\nvoltage = \"230/400 V\"\n"
      << "earthing = "
      << (source.earthing == Earthing::TN_S ? "\"TN-S\""
          : source.earthing == Earthing::TT ? "\"TT\""
                                            : "\"TN-C-S\"")
      << "\n";
  if (source.transformer) {
    out << "rating = " << quoted(source.rating / 1e3, "kVA") << "\nuk = " << quoted(source.uk * 100, "%")
        << "\nlosses = " << quoted(source.losses / 1e3, "kW") << "\nsecondary = " << quoted(source.secondary, "V")
        << "\nz0_over_z1 = " << number(source.z0_over_z1) << "\n";
    if (source.fault_level_max > 0) {
      out << "fault_level = { maximum = " << quoted(source.fault_level_max / 1e6, "MVA")
          << ", minimum = " << quoted(source.fault_level_min / 1e6, "MVA") << " }\n";
    }
    if (source.link_at_board) out << "link = \"board\"\n";
  } else {
    out << "maximum = " << bound_keys(source.maximum, false) << "\nminimum = " << bound_keys(source.minimum, true)
        << "\n";
  }
  if (source.tails_present) {
    std::string tails = run_keys(source.tails, ", ");
    tails.resize(tails.size() - 2);
    out << "tails = { " << tails << " }\n";
  }
  out << "\n";
}

void write_construction(std::ostream& out, const Construction& construction) {
  out << "[cable." << construction.name << "]\ntitle = \"made up for the reference networks\"\n"
      << "material = " << (construction.aluminium ? "\"aluminium\"" : "\"copper\"")
      << "\ninsulation = " << (construction.limit_degc > 80 ? "\"xlpe90\"" : "\"pvc70\"")
      << "\ncores = " << construction.cores << "\n";
  if (construction.armoured) out << "armour = \"steel\"\n";
  if (construction.built_in_cpc) out << "built_in_cpc = true\n";
  out << "source = \"tests/reference\"\nsizes = [\n";
  for (const Size& size : construction.sizes) {
    out << "  { size = " << quoted(size.mm2, "mm2") << ", r20 = " << quoted(size.r20, "mohm/m")
        << ", x = " << quoted(size.x, "mohm/m");
    if (size.cpc_mm2 > 0) {
      out << ", cpc_size = " << quoted(size.cpc_mm2, "mm2") << ", cpc_r20 = " << quoted(size.cpc_r20, "mohm/m");
    }
    if (size.armour_mm2 > 0) {
      out << ", armour_area = " << quoted(size.armour_mm2, "mm2")
          << ", armour_r20 = " << quoted(size.armour_r20, "mohm/m")
          << ", armour_x = " << quoted(size.armour_x, "mohm/m");
    }
    out << " },\n";
  }
  out << "]\n\n";
}

}  // namespace

std::string netlist_text(const Network& network) {
  std::ostringstream out;
  out << "title = " << quoted(network.title)
      << "\nrules = \"BS 7671:2018+A2\"\nambient = " << quoted(network.ambient_degc, "degC") << "\n\n";
  write_source(out, network);
  for (const Board& board : network.boards) out << "[board." << board.name << "]\n\n";
  if (network.electrode > 0) {
    out << "[electrode.rods]\nboard = " << quoted(network.boards.front().name)
        << "\nresistance = " << quoted(network.electrode, "ohm") << "\n\n";
  }
  for (const Submain& submain : network.submains) {
    out << "[submain." << submain.name << "]\nfrom = " << quoted(submain.from) << "\nto = " << quoted(submain.to)
        << "\ndevice = \"gG 80 A\"\n";
    if (!submain.phases.empty()) out << "phases = " << quoted(submain.phases) << "\n";
    out << run_keys(submain.run, "\n") << "\n";
  }
  for (const Board& board : network.boards) {
    out << "[circuit." << board.name << "]\n";
    for (const Circuit& circuit : network.circuits) {
      if (circuit.board != board.name) continue;
      out << circuit.name << " = { phases = " << quoted(circuit.phases) << ", device = \"B 32 A 10 kA\", "
          << run_keys(circuit.run, ", ");
      if (circuit.ring) out << "ring = true, ";
      if (!circuit.spurs.empty()) {
        out << "spurs = [";
        const char* between = "";
        for (const Spur& spur : circuit.spurs) {
          out << between << "{ at = " << quoted(spur.at, "m") << ", length = " << quoted(spur.length, "m") << " }";
          between = ", ";
        }
        out << "], ";
      }
      out << "use = \"fixed\" }\n";
    }
    out << "\n";
  }
  for (const Construction& construction : constructions()) write_construction(out, construction);
  return out.str();
}

}  // namespace sunder::reference
