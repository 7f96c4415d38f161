// SPDX-License-Identifier: Apache-2.0
// A network with several sources as the program's netlist.
#include <iomanip>
#include <set>
#include <sstream>

#include "tests/reference/meshed.h"

namespace sunder::reference::meshed {

namespace {

std::string number(double value) {
  std::ostringstream text;
  text << std::setprecision(14) << value;
  return text.str();
}

std::string quoted(const std::string& text) { return '"' + text + '"'; }
std::string quoted(double value, const char* unit) { return '"' + number(value) + ' ' + unit + '"'; }

std::string quoted(Complex value, const char* unit) {
  std::ostringstream text;
  text << std::setprecision(14) << '"' << value.real() << (value.imag() < 0 ? "-j" : "+j") << std::abs(value.imag())
       << ' ' << unit << '"';
  return text.str();
}

const char* earthing_text(Earthing earthing) {
  switch (earthing) {
    case Earthing::tn_s:
      return "TN-S";
    case Earthing::tn_c_s:
      return "TN-C-S";
    case Earthing::tn_c:
      return "TN-C";
    case Earthing::tt:
      return "TT";
    case Earthing::it:
      return "IT";
    case Earthing::none:
      break;
  }
  return "";
}

std::string star_text(const StarPoint& star) {
  switch (star.kind) {
    case StarPoint::Kind::solid:
      return quoted("solid");
    case StarPoint::Kind::open:
      return quoted("open");
    default:
      return quoted(star.ohms, "ohm");
  }
}

const Cable& cable_of(const Length& length) { return cables()[static_cast<std::size_t>(length.cable)]; }

// `cable`, `cpc`, `length` and `in_parallel`, each "key = value" followed by `end`.
std::string length_keys(const Length& length, const char* end) {
  const Cable& cable = cable_of(length);
  std::ostringstream text;
  text << "cable = \"" << cable.name << ' ' << number(cable.mm2) << " mm2\"" << end;
  if (length.pen) {
    text << "cpc = \"PEN\"" << end;
  } else if (!length.separate_pe) {
    text << "cpc = \"none\"" << end;
  } else if (cable.cores > 0) {
    text << "cpc = \"core\"" << end;  // singles have a further one without being asked
  }
  text << "length = " << quoted(length.metres, "m") << end;
  if (length.in_parallel != 1) text << "in_parallel = " << length.in_parallel << end;
  return text.str();
}

std::string phases_keys(const Has& has) {
  std::string text;
  for (std::size_t line = 0; line < 3; ++line) {
    if (has[line]) text += (text.empty() ? "L" : " L") + std::to_string(line + 1);
  }
  // One line has a neutral without being asked.
  if (has[kN] && text.size() > 2) text += " N";
  return text;
}

class Writer {
 public:
  explicit Writer(const Network& network) : n_(network) { out_ << std::setprecision(14); }

  std::string write() {
    out_ << "title = " << quoted(n_.title) << "\nrules = " << quoted(n_.bs ? "BS 7671:2018+A2" : "IEC 60364") << "\n\n";
    for (const Source& source : n_.sources) write_source(source);
    for (const Transformer& transformer : n_.transformers) write_transformer(transformer);
    out_ << "[state.all]\nsources = [";
    const char* between = "";
    for (const Source& source : n_.sources) {
      out_ << between << quoted(source.name);
      between = ", ";
    }
    out_ << "]\n\n";
    for (const Board& board : n_.boards) {
      out_ << "[board." << board.name << "]\n" << (board.n_pe_link ? "n_pe_link = true\n\n" : "\n");
    }
    for (const Run& run : n_.runs) write_run(run);
    write_rest();
    write_circuits();
    write_cables();
    return out_.str();
  }

 private:
  [[nodiscard]] const Board& board(int i) const { return n_.boards[static_cast<std::size_t>(i)]; }
  [[nodiscard]] std::string board_name(int i) const { return quoted(board(i).name); }

  void write_voltage(const Board& at) {
    out_ << "voltage = ";
    if (at.high) {
      out_ << quoted(at.U / 1e3, "kV") << "\n";
    } else {
      out_ << '"' << number(at.U0) << '/' << number(at.U) << " V\"\n";
    }
  }

  void write_end(Earthing earthing, const StarPoint& star, const Length& tails) {
    if (earthing != Earthing::none) out_ << "earthing = " << quoted(earthing_text(earthing)) << "\n";
    if (star.kind != StarPoint::Kind::by_default) out_ << "star_point = " << star_text(star) << "\n";
    if (tails.metres > 0) {
      std::string keys = length_keys(tails, ", ");
      keys.resize(keys.size() - 2);
      out_ << "tails = { " << keys << " }\n";
    }
  }

  void write_source(const Source& s) {
    const char* const kinds[] = {"supply", "transformer", "generator"};
    out_ << '[' << kinds[static_cast<int>(s.kind)] << '.' << s.name << "]\nfeeds = " << board_name(s.board) << "\n";
    write_voltage(board(s.board));
    write_end(s.earthing, s.star, s.tails);
    if (s.link_at_board) out_ << "link = \"board\"\n";
    switch (s.kind) {
      case Source::Kind::supply:
        out_ << "maximum = { z1 = " << quoted(s.z1[0], "mohm") << ", z0 = " << quoted(s.z0[0], "mohm")
             << " }\nminimum = { z1 = " << quoted(s.z1[1], "mohm") << ", z0 = " << quoted(s.z0[1], "mohm") << " }\n";
        if (s.farads > 0) out_ << "capacitance = " << quoted(s.farads * 1e6, "uF") << "\n";
        break;
      case Source::Kind::transformer:
        write_ratings(s.rating, s.uk, s.losses, s.secondary);
        out_ << "fault_level = { maximum = " << quoted(s.level_max / 1e6, "MVA")
             << ", minimum = " << quoted(s.level_min / 1e6, "MVA") << " }\n";
        write_z0(s.r0_over_r1, s.x0_over_x1);
        break;
      case Source::Kind::generator:
        out_ << "rating = " << quoted(s.rating / 1e3, "kVA") << "\nxd_subtransient = " << number(s.xd_subtransient)
             << "\nx0 = " << number(s.x0) << "\nr = " << number(s.r) << "\n";
        if (s.sustained > 0) {
          out_ << "sustained = " << number(s.sustained) << "\n";
        } else {
          out_ << "xd = " << number(s.xd) << "\n";
        }
        break;
    }
    out_ << "\n";
  }

  void write_ratings(double rating, double uk, double losses, double secondary) {
    out_ << "rating = " << quoted(rating / 1e3, "kVA") << "\nuk = " << quoted(uk * 100, "%")
         << "\nlosses = " << quoted(losses / 1e3, "kW") << "\nsecondary = " << quoted(secondary, "V") << "\n";
  }

  void write_z0(double r, double x) { out_ << "r0_over_r1 = " << number(r) << "\nx0_over_x1 = " << number(x) << "\n"; }

  void write_transformer(const Transformer& t) {
    out_ << "[transformer." << t.name << "]\nfrom = " << board_name(t.from) << "\nfeeds = " << board_name(t.to)
         << "\nvector = \"" << t.primary_group << t.secondary_group << t.clock << "\"\n";
    write_voltage(board(t.to));
    write_end(t.earthing, t.star, t.tails);
    write_ratings(t.rating, t.uk, t.losses, t.secondary);
    out_ << "primary = " << quoted(t.primary, "V") << "\n";
    if (t.tap != 0.0) out_ << "tap = " << quoted(t.tap * 100, "%") << "\n";
    if (t.z0_given) write_z0(t.r0_over_r1, t.x0_over_x1);
    if (t.primary_star.kind != StarPoint::Kind::by_default) {
      out_ << "primary_star = " << star_text(t.primary_star) << "\n";
    }
    if (t.no_link) out_ << "link = \"none\"\n";
    if (t.link_at_board) out_ << "link = \"board\"\n";
    out_ << "\n";
  }

  void write_run(const Run& run) {
    out_ << "[submain." << run.name << "]\nfrom = " << board_name(run.from) << "\nto = " << board_name(run.to) << "\n";
    const bool high = board(run.from).high;
    if (!high) out_ << "phases = " << quoted(phases_keys(run.has)) << "\n";
    if (!run.sequence) {
      out_ << "device = \"gG 80 A\"\n" << length_keys(run.length, "\n") << "\n";
      return;
    }
    const char* const returns[] = {"N", "PE", "N+PE", "earth"};
    out_ << "z1 = " << quoted(run.z1, "mohm/m") << "\nz0 = " << quoted(run.z0, "mohm/m")
         << "\nreturn = " << quoted(returns[static_cast<int>(run.through)])
         << "\nlength = " << quoted(run.length.metres, "m") << "\n\n";
  }

  void write_rest() {
    for (const Link& link : n_.links) {
      out_ << "[link." << link.name << "]\nfrom = " << board_name(link.from) << "\nto = " << board_name(link.to)
           << (link.closed ? "\n\n" : "\nclosed = false\n\n");
    }
    for (const Electrode& electrode : n_.electrodes) {
      out_ << "[electrode." << electrode.name << "]\nboard = " << board_name(electrode.board)
           << "\nresistance = " << quoted(electrode.ohms, "ohm") << "\n\n";
    }
    for (const Bond& bond : n_.bonds) {
      out_ << "[bond." << bond.name << "]\nfrom = " << board_name(bond.from)
           << "\nto = " << (bond.to < 0 ? quoted("earth") : board_name(bond.to))
           << "\nimpedance = " << quoted(bond.ohms, "ohm") << "\n\n";
    }
    for (const Motor& motor : n_.motors) {
      std::string on = board(motor.board).name;
      if (motor.circuit >= 0) on += "/" + n_.circuits[static_cast<std::size_t>(motor.circuit)].name;
      out_ << "[motor." << motor.name << "]\non = " << quoted(on) << "\ncurrent = " << quoted(motor.amps, "A") << "\n";
      if (motor.volts > 0) out_ << "voltage = " << quoted(motor.volts, "V") << "\n";
      out_ << "start = " << number(motor.start) << "\nr_over_x = " << number(motor.r_over_x)
           << "\ncount = " << motor.count << "\n\n";
    }
  }

  void write_circuits() {
    std::set<int> boards;
    for (const Circuit& circuit : n_.circuits) boards.insert(circuit.board);
    for (const int b : boards) {
      out_ << "[circuit." << board(b).name << "]\n";
      for (const Circuit& circuit : n_.circuits) {
        if (circuit.board != b) continue;
        out_ << circuit.name << " = { phases = " << quoted(phases_keys(circuit.has)) << ", device = \"B 32 A 10 kA\", "
             << length_keys(circuit.length, ", ");
        if (circuit.ring) out_ << "ring = true, ";
        for (const auto& spur : circuit.spurs) {
          out_ << "spurs = [{ at = " << quoted(spur[0], "m") << ", length = " << quoted(spur[1], "m") << " }], ";
        }
        out_ << "use = \"fixed\" }\n";
      }
      out_ << "\n";
    }
  }

  void write_cables() {
    std::string name;
    for (const Cable& cable : cables()) {
      if (cable.name != name) {
        if (!name.empty()) out_ << "]\n\n";
        name = cable.name;
        out_ << "[cable." << name << "]\ntitle = \"made up for the reference networks\"\nmaterial = "
             << quoted(cable.aluminium ? "aluminium" : "copper")
             << "\ninsulation = " << quoted(cable.limit_degc > 80 ? "xlpe90" : "pvc70") << "\ncores = " << cable.cores
             << "\nsource = \"tests/reference\"\nsizes = [\n";
      }
      out_ << "  { size = " << quoted(cable.mm2, "mm2") << ", r20 = " << quoted(cable.r20, "mohm/m")
           << ", x = " << quoted(cable.x, "mohm/m") << " },\n";
    }
    out_ << "]\n";
  }

  const Network& n_;
  std::ostringstream out_;
};

}  // namespace

std::string netlist_text(const Network& network) { return Writer(network).write(); }

}  // namespace sunder::reference::meshed
