// SPDX-License-Identifier: Apache-2.0
#include "tests/laws/mesh.h"

#include <ostream>

#include "tests/laws/site.h"

namespace sunder::laws {
namespace {

std::string number(int low, int high, double unit) { return std::to_string(*rc::gen::inRange(low, high + 1) * unit); }

std::string quoted(const std::string& key, const std::string& value) { return key + " = \"" + value + "\"\n"; }

const char* const kCables[] = {"cable = \"multicore-pvc-cu-5c 16 mm2\"\n",
                               "cable = \"swa-xlpe-cu-4c 35 mm2\"\ncpc = \"armour\"\n",
                               "cable = \"multicore-xlpe-al-4c 95 mm2\"\ncpc = \"35 mm2\"\n",
                               "cable = \"singles-xlpe-cu 120/70 mm2\"\nin_parallel = 2\n",
                               "z1 = \"0.077+j0.079 ohm/km\"\nz0 = \"0.3+j0.31 ohm/km\"\nreturn = \"N+PE\"\n"};

// Source tables behind which every board has five conductors.
std::vector<MeshThing> low_voltage(const MeshLimits& limits) {
  const std::string angle = limits.resistive ? "1" : number(30, 95, 0.01);
  std::vector<MeshThing> all;
  all.push_back({"[supply.grid]", "feeds", "B0",
                 "voltage = \"230/400 V\"\nearthing = \"TN-S\"\nmaximum = { three_phase = \"" + number(5, 40, 1e-3) +
                     " ohm\", power_factor = " + angle + " }\nminimum = { Ze = \"" + number(50, 400, 1e-3) +
                     " ohm\", Zn = \"" + number(50, 400, 1e-3) + " ohm\", power_factor = " + angle + " }\n"});
  if (!limits.resistive && *rc::gen::inRange(0, 2) == 0)
    all.push_back({"[generator.G1]", "feeds", "B1",
                   "voltage = \"230/400 V\"\nearthing = \"TN-S\"\nrating = \"" + number(100, 500, 1) +
                       " kVA\"\nxd_subtransient = \"" + number(8, 20, 1) + " %\"\nx0 = \"" + number(3, 8, 1) +
                       " %\"\nr = \"1 %\"\nsustained = 3\nstar_point = \"" +
                       *rc::gen::element<std::string>("solid", "open", "0.4 ohm") + "\"\n"});
  return all;
}

std::vector<MeshThing> high_voltage(std::vector<MeshThing>& things) {
  const std::string vector =
      *rc::gen::element<std::string>("Dyn11", "Dyn5", "Dyn1", "YNyn0", "YNyn6", "Yzn11", "Yzn5", "Dzn0", "Yyn0");
  const int units = *rc::gen::inRange(1, 3);
  // Both sequences: an earthed star on either side hands the zero sequence on.
  auto sequence = [](double factor) {
    return "{ z1 = \"0.1+j" + number(8, 20, 0.1 * factor) + " ohm\", z0 = \"0.3+j" + number(8, 50, 0.1 * factor) +
           " ohm\" }\n";
  };
  for (int k = 0; k < units; ++k)
    things.push_back(
        {"[transformer.T" + std::to_string(k + 1) + "]", "feeds", "B" + std::to_string(k),
         "from = \"HV\"\nprimary = \"20 kV\"\nvoltage = \"230/400 V\"\nsecondary = \"410 V\"\nvector = \"" + vector +
             "\"\nrating = \"" + number(100, 1000, 1) + " kVA\"\nuk = \"" + number(40, 60, 0.1) + " %\"\nx_over_r = " +
             number(2, 8, 1) + "\nr0_over_r1 = " + number(80, 200, 0.01) + "\nx0_over_x1 = " + number(60, 110, 0.01) +
             "\nearthing = \"TN-S\"\ntap = \"" + number(-5, 5, 1) + " %\"\n"});
  return {{"[supply.utility]", "feeds", "HV",
           "voltage = \"20 kV\"\nmaximum = " + sequence(1) + "minimum = " + sequence(4)}};
}

Mesh random_mesh(const MeshLimits& limits) {
  Mesh mesh;
  const int n = *rc::gen::inRange(3, 7);
  auto board = [](int i) { return "B" + std::to_string(i); };
  for (int i = 0; i < n; ++i) mesh.boards.push_back(board(i));
  if (!limits.resistive && *rc::gen::inRange(0, 2) == 0) {
    mesh.boards.emplace_back("HV");
    mesh.sources = high_voltage(mesh.things);
  } else {
    mesh.sources = low_voltage(limits);
  }
  mesh.extra = "[state.normal]\nsources = [" + names_of_sources(mesh) + "]\n";
  int count = 0;
  auto run = [&](int from, int to) {
    mesh.runs.push_back(random_run("S" + std::to_string(++count), board(from), board(to), limits));
  };
  for (int i = 1; i < n; ++i) run(*rc::gen::inRange(0, i), i);
  for (int k = *rc::gen::inRange(0, 3); k > 0; --k) {
    const int a = *rc::gen::inRange(0, n);
    const int b = *rc::gen::inRange(0, n);
    if (a != b) run(a, b);
  }
  if (limits.links && *rc::gen::inRange(0, 2) == 0) {
    const int a = *rc::gen::inRange(0, n);
    const int b = (a + 1 + *rc::gen::inRange(0, n - 1)) % n;
    mesh.links.push_back({"K1", board(a), board(b), *rc::gen::inRange(0, 4) != 0});
  }
  auto somewhere = [&] { return board(*rc::gen::inRange(1, n)); };
  if (*rc::gen::inRange(0, 2) == 0)
    mesh.things.push_back({"[electrode.rod]", "board", somewhere(), quoted("resistance", number(1, 50, 1) + " ohm")});
  if (*rc::gen::inRange(0, 3) == 0)
    mesh.things.push_back(
        {"[bond.pipe]", "from", somewhere(), "to = \"earth\"\n" + quoted("impedance", number(1, 50, 0.1) + " ohm")});
  if (!limits.resistive && *rc::gen::inRange(0, 2) == 0)
    mesh.things.push_back({"[motor.M1]", "on", somewhere(), quoted("rating", number(5, 90, 1) + " kW")});
  return mesh;
}

}  // namespace

std::string names_of_sources(const Mesh& mesh) {
  std::string names;
  for (const MeshThing& source : mesh.sources) {
    const std::size_t dot = source.head.find('.');
    names += (names.empty() ? "\"" : ", \"") + source.head.substr(dot + 1, source.head.size() - dot - 2) + "\"";
  }
  return names;
}

MeshRun random_run(const std::string& name, const std::string& from, const std::string& to, const MeshLimits& limits) {
  MeshRun made{name, from, to, quoted("length", number(2, 90, 1) + " m")};
  if (limits.resistive) {
    made.keys += "device = \"gG 63 A\"\ncable = \"wire " + *rc::gen::element<std::string>("10", "25") + " mm2\"\n";
    return made;
  }
  made.keys += *rc::gen::elementOf(std::vector<std::string>(std::begin(kCables), std::end(kCables)));
  if (made.keys.find("z1") == std::string::npos) made.keys += "device = \"gG 63 A\"\n";
  return made;
}

rc::Gen<Mesh> meshes(MeshLimits limits) {
  return rc::gen::exec([limits] { return random_mesh(limits); });
}

std::vector<std::string> tables(const Mesh& mesh) {
  std::vector<std::string> all;
  auto thing = [&](const MeshThing& t) { all.push_back(t.head + "\n" + quoted(t.key, t.board) + t.keys); };
  for (const MeshThing& source : mesh.sources) thing(source);
  for (const std::string& board : mesh.boards) all.push_back("[board." + board + "]\n");
  for (const MeshRun& run : mesh.runs)
    all.push_back("[submain." + run.name + "]\n" + quoted("from", run.from) + quoted("to", run.to) + run.keys);
  for (const MeshLink& link : mesh.links)
    all.push_back("[link." + link.name + "]\n" + quoted("from", link.from) + quoted("to", link.to) +
                  "phases = \"L1 L2 L3 N\"\nclosed = " + (link.closed ? "true" : "false") + "\n");
  for (const MeshThing& t : mesh.things) thing(t);
  all.push_back(
      "[cable.wire]\nmaterial = \"copper\"\ninsulation = \"pvc70\"\ncores = 5\nsizes = [{ size = \"10 mm2\", r20 = "
      "\"1.83 mohm/m\", x = \"0 mohm/m\" }, { size = \"25 mm2\", r20 = \"0.727 mohm/m\", x = \"0 mohm/m\" }]\n");
  return all;
}

std::string netlist(const Mesh& mesh) {
  std::string text = "rules = \"BS 7671:2018+A2\"\n";
  for (const std::string& table : tables(mesh)) text += table;
  return text + mesh.extra;
}

void showValue(const Mesh& mesh, std::ostream& out) { out << '\n' << netlist(mesh); }

std::vector<solver::FaultDetail> studied(const models::Network& network, const solver::FaultQuery& query) {
  auto answer = solver::study_faults(network, query);
  if (const auto* sentence = std::get_if<std::string>(&answer)) RC_FAIL(*sentence);
  return std::move(std::get<std::vector<solver::FaultDetail>>(answer));
}

std::map<std::string, double> currents_of(const models::Network& network) {
  std::map<std::string, double> all;
  for (const solver::FaultDetail& detail : studied(network, {})) {
    const solver::FaultRow& row = detail.row;
    if (row.known) all[row.state + " " + word(row.condition) + " " + row.node + " " + word(row.fault)] = row.current;
  }
  return all;
}

}  // namespace sunder::laws
