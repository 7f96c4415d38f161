// SPDX-License-Identifier: Apache-2.0
#include "tests/laws/site.h"

#include <cmath>
#include <cstdlib>
#include <iomanip>
#include <ostream>
#include <sstream>

#include "netlists/reader.h"
#include "solver/study.h"

namespace sunder::laws {
namespace {

std::string digits(double value) {
  std::ostringstream text;
  text << std::setprecision(15) << value;
  return text.str();
}

double between(int low, int high, double unit) { return *rc::gen::inRange(low, high + 1) * unit; }

struct Construction {
  const char* name;
  std::vector<const char*> sizes;
  const char* cpc;
};

// Three lines, neutral and protective conductor.
const std::vector<Construction> kSubmainCables = {
    {"swa-xlpe-cu-4c", {"16", "25", "35", "50", "70", "95"}, "armour"},
    {"swa-xlpe-cu-4c", {"25", "35", "70"}, "armour + 16 mm2"},
    {"swa-xlpe-cu-5c", {"6", "10", "16", "25"}, "armour + core"},
    {"swa-xlpe-cu-5c", {"10", "35"}, "core"},
    {"multicore-pvc-cu-5c", {"6", "10", "16", "25"}, ""},
    {"multicore-xlpe-al-4c", {"50", "95", "150"}, "35 mm2"},
    {"singles-xlpe-cu", {"25", "50/25", "120/70"}, ""},
};
const std::vector<Construction> kSingleCables = {
    {"flat-pvc-cu", {"1.5/1", "2.5/1.5", "4/1.5", "6/2.5"}, ""},
    {"singles-pvc-cu", {"1.5", "2.5", "4", "6/4"}, ""},
    {"swa-xlpe-cu-2c", {"2.5", "6", "10"}, "armour"},
    {"multicore-xlpe-cu-3c", {"2.5", "4"}, ""},
};
const std::vector<Construction> kThreeCables = {
    {"multicore-pvc-cu-4c", {"1.5", "2.5", "4", "6"}, ""},
    {"swa-xlpe-cu-3c", {"2.5", "6", "10"}, "armour"},
    {"swa-xlpe-cu-4c", {"6", "10", "16"}, "armour + core"},
    {"singles-pvc-cu", {"2.5", "6", "10"}, ""},
};
const std::vector<Construction> kFourCables = {
    {"multicore-pvc-cu-5c", {"2.5", "4", "6"}, ""},
    {"swa-xlpe-cu-4c", {"4", "10", "16"}, "armour"},
};

RunText run(const std::vector<Construction>& among, double metres, bool single) {
  const Construction& chosen = *rc::gen::elementOf(among);
  RunText made;
  made.cable = std::string(chosen.name) + " " + *rc::gen::elementOf(chosen.sizes) + " mm2";
  made.cpc = chosen.cpc;
  made.metres = metres;
  made.in_parallel = single ? 1 : *rc::gen::weightedElement<int>({{6, 1}, {1, 2}, {1, 3}});
  return made;
}

CircuitText circuit(const std::string& board, int number, const Limits& limits) {
  CircuitText made;
  made.board = board;
  made.name = "W" + std::to_string(number);
  made.use = *rc::gen::element<std::string>("sockets", "fixed", "lighting", "distribution");
  made.device = *rc::gen::element<std::string>("B 6 A 6 kA", "B 16 A 10 kA class 3", "B 32 A 10 kA", "C 10 A 6 kA",
                                               "C 32 A 10 kA class 3", "D 16 A 10 kA", "gG 20 A", "gG 32 A",
                                               "B 32 A 6 kA 30 mA A", "BS 88-2 20 A", "BS 88-3 32 A", "BS 3036 30 A");
  made.phases = *rc::gen::weightedElement<std::string>(
      {{4, "L1"}, {3, "L2"}, {2, "L3"}, {3, "L1 L2 L3"}, {2, "L1 L2 L3 N"}, {1, "L2 L3"}});
  made.run = run(kSingleCables, between(5, 900, 0.1), limits.single_cables);
  if (made.phases == "L1 L2 L3" || made.phases == "L2 L3")
    made.run = run(kThreeCables, made.run.metres, limits.single_cables);
  if (made.phases == "L1 L2 L3 N") made.run = run(kFourCables, made.run.metres, limits.single_cables);
  made.load = between(1, 200, 0.1);
  made.Iz = between(10, 60, 1);
  if (limits.sensible) {
    made.use = *rc::gen::element<std::string>("fixed", "distribution");
    const int In = *rc::gen::element(16, 20, 32);
    made.device = *rc::gen::element<std::string>("B", "C") + " " + std::to_string(In) + " A 10 kA class 3";
    made.load = 0.5 * In;
    made.Iz = 1.2 * In;
  }
  if (made.phases.size() == 2 && *rc::gen::inRange(0, 4) == 0) {
    made.ring = true;
    made.run.in_parallel = 1;
    made.run.metres += 20;
    const int spurs = *rc::gen::inRange(0, 3);
    for (int i = 0; i < spurs; ++i) made.spurs.push_back({made.run.metres * between(1, 99, 0.01), between(1, 80, 0.1)});
  }
  return made;
}

Site random_site(const Limits& limits) {
  Site site;
  site.transformer = !limits.supplies_only && *rc::gen::inRange(0, 3) == 0;
  if (limits.tn_only) {
    site.earthing = *rc::gen::element<std::string>("TN-S", "TN-C-S");
  } else {
    site.earthing = *rc::gen::element<std::string>("TN-S", "TN-C-S", "TT");
  }
  site.three_phase_ohms = between(limits.sensible ? 26 : 10, 60, 1e-3);
  site.Ze = between(100, 900, 1e-3);
  site.Zn = site.earthing == "TN-C-S" ? site.Ze : between(100, 500, 1e-3);
  if (site.earthing == "TT") {
    site.Ze = between(1, 30, 1);
    site.electrode = between(1, 180, 1);
  }
  if (limits.declared_angle || *rc::gen::inRange(0, 2) == 0) site.power_factor = between(10, 100, 0.01);
  site.kVA = *rc::gen::element<double>(100, 315, 500, 1000);
  site.uk_percent = between(30, 60, 0.1);
  site.losses_kW = site.kVA * between(5, 25, 1e-3);
  site.z0_over_z1 = between(60, 130, 0.01);
  site.fault_MVA = between(50, 500, 1);
  const int n_boards = *rc::gen::inRange(1, 6);
  int number = 0;
  for (int b = 0; b < n_boards; ++b) {
    const std::string name = "B" + std::to_string(b);
    site.boards.push_back(name);
    if (b > 0) {
      SubmainText submain;
      submain.name = "S" + std::to_string(b);
      submain.from = "B" + std::to_string(*rc::gen::inRange(0, b));
      submain.to = name;
      submain.device =
          *rc::gen::element<std::string>("gG 63 A", "gG 80 A", "gG 100 A", "C 63 A 10 kA", "BS 88-3 100 A");
      submain.run = run(kSubmainCables, between(3, 120, 1), limits.single_cables);
      site.submains.push_back(submain);
    }
    const int n_circuits = *rc::gen::inRange(b == n_boards - 1 ? 1 : 0, 4);
    for (int c = 0; c < n_circuits; ++c) site.circuits.push_back(circuit(name, ++number, limits));
  }
  return site;
}

std::string run_text(const RunText& run, const char* separator) {
  std::string text = "cable = \"" + run.cable + "\"" + separator;
  if (!run.cpc.empty()) text += "cpc = \"" + run.cpc + "\"" + separator;
  text += "length = \"" + digits(run.metres) + " m\"" + separator;
  if (run.in_parallel > 1) text += "in_parallel = " + std::to_string(run.in_parallel) + separator;
  return text;
}

std::string source_table(const Site& site) {
  const std::string name = site.transformer ? "[transformer.grid]\n" : "[supply.grid]\n";
  std::string text = name + "feeds = \"B0\"\nvoltage = \"230/400 V\"\nearthing = \"" + site.earthing + "\"\n";
  if (site.transformer) {
    text += "rating = \"" + digits(site.kVA) + " kVA\"\nuk = \"" + digits(site.uk_percent) + " %\"\nlosses = \"" +
            digits(site.losses_kW) + " kW\"\nz0_over_z1 = " + digits(site.z0_over_z1) + "\nfault_level = \"" +
            digits(site.fault_MVA) + " MVA\"\n";
    return text;
  }
  const std::string angle = site.power_factor < 0 ? "" : ", power_factor = " + digits(site.power_factor);
  return text + "maximum = { three_phase = \"" + digits(site.three_phase_ohms) + " ohm\"" + angle +
         " }\nminimum = { Ze = \"" + digits(site.Ze) + " ohm\", Zn = \"" + digits(site.Zn) + " ohm\"" + angle + " }\n";
}

std::string circuit_text(const CircuitText& circuit) {
  std::string text = circuit.name + " = { device = \"" + circuit.device + "\", use = \"" + circuit.use +
                     "\", phases = \"" + circuit.phases + "\", " + run_text(circuit.run, ", ");
  if (circuit.ring) text += "ring = true, ";
  if (!circuit.spurs.empty()) {
    text += "spurs = [";
    for (std::size_t i = 0; i < circuit.spurs.size(); ++i) {
      text += std::string(i == 0 ? "" : ", ") + "{ at = \"" + digits(circuit.spurs[i].at) + " m\", length = \"" +
              digits(circuit.spurs[i].metres) + " m\" }";
    }
    text += "], ";
  }
  return text + "Iz = \"" + digits(circuit.Iz) + " A\", load = \"" + digits(circuit.load) + " A\" }\n";
}

}  // namespace

CircuitText& Site::circuit(const std::string& address) {
  for (CircuitText& each : circuits)
    if (each.board + "/" + each.name == address) return each;
  std::abort();
}

rc::Gen<Site> sites(Limits limits) {
  return rc::gen::exec([limits] { return random_site(limits); });
}

std::vector<std::string> tables(const Site& site) {
  std::vector<std::string> all = {source_table(site)};
  for (const std::string& board : site.boards) all.push_back("[board." + board + "]\n");
  for (const SubmainText& submain : site.submains) {
    all.push_back("[submain." + submain.name + "]\nfrom = \"" + submain.from + "\"\nto = \"" + submain.to +
                  "\"\ndevice = \"" + submain.device + "\"\n" + run_text(submain.run, "\n"));
  }
  for (const std::string& board : site.boards) {
    std::string table = "[circuit." + board + "]\n";
    bool any = false;
    for (const CircuitText& circuit : site.circuits) {
      if (circuit.board != board) continue;
      table += circuit_text(circuit);
      any = true;
    }
    if (any) all.push_back(table);
  }
  if (site.electrode > 0) {
    all.push_back("[electrode.rod]\nboard = \"B0\"\nresistance = \"" + digits(site.electrode) + " ohm\"\n");
  }
  return all;
}

std::string netlist(const Site& site) {
  std::string text = "rules = \"BS 7671:2018+A2\"\n";
  for (const std::string& table : tables(site)) text += table;
  return text + site.extra;
}

models::Network network_of(const std::string& text) {
  netlists::Reading reading = netlists::read_network_text(text, "site.toml");
  std::string complaints;
  for (const auto& diagnostic : reading.diagnostics)
    if (diagnostic.severity != netlists::Severity::warning)
      complaints += netlists::format_diagnostic(diagnostic) + "\n";
  if (!reading.network) RC_FAIL("the netlist does not read:\n" + complaints + text);
  for (const solver::Trouble& trouble : solver::check_topology(*reading.network)) RC_FAIL(trouble.message);
  return std::move(*reading.network);
}

void showValue(const Site& site, std::ostream& out) { out << '\n' << netlist(site); }

std::string row_key(const solver::FaultRow& row) {
  return std::string(word(row.condition)) + " " + row.node + " " + word(row.fault);
}

Rows rows_of(const models::Network& network, const std::string& state) {
  Rows rows;
  for (const solver::FaultRow& row : solver::solve_faults(network))
    if (row.state == state) rows.emplace(row_key(row), row);
  return rows;
}

bool close(double a, double b, double tolerance) {
  return std::abs(a - b) <= tolerance * std::max(std::abs(a), std::abs(b));
}

}  // namespace sunder::laws
