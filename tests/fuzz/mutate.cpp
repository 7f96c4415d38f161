// SPDX-License-Identifier: Apache-2.0
/// @file
/// fuzz_netlists [ITERATIONS [FIRST [FILE ...]]]: reads mutated netlists and schedules, solves and checks
/// those that are sound. Ends with 0 when none crashed, hung or broke a promise of the libraries; the same
/// iteration number gives the same case.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <ctime>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <string>
#include <utility>
#include <vector>

#include "netlists/reader.h"
#include "solver/fault_study.h"
#include "solver/study.h"
#include "tests/fuzz/mutations.h"

namespace {

using namespace sunder;
using fuzz::Dice;
using fuzz::mutated;

constexpr double kLongest = 2.0;  // [s] a case may take

const char* const kSchedule =
    "way,serves,use,phases,device,cable,length [m],load [A],pf,Iz [A],ring,spurs\n"
    "C1,sockets,sockets,L1,B 32 A 6 kA 30 mA A,flat-pvc-cu 2.5/1.5 mm2,54,20,1,27,true,20 m:4 m; 31 m:3 m\n"
    "C2,\"lathe, large\",fixed,L1 L2 L3,C 16 A 6 kA,singles-pvc-cu 2.5 mm2,21,11,0.8,24,,\n"
    "C3,lights,lighting,L2,B 6 A 6 kA,flat-pvc-cu 1.5/1 mm2,32,3,,14.5,,\n";

// Two sources with states, a transformer, groups, an electrode, points, a construction: what the starter has not.
const char* const kRich = R"(title = "Rich"
rules = "IEC 60364"
[supply.grid]
feeds = "intake"
voltage = "230/400 V"
earthing = "TN-S"
maximum = { three_phase = "16 kA", line_neutral = "12 kA", x_over_r = 2 }
minimum = { Ze = "0.35 ohm", Zn = "0.3 ohm", power_factor = 0.9 }
device = "feeder"
tails = { cable = "singles-pvc-cu 25 mm2", length = "2 m", cpc = "16 mm2" }
[transformer.T1]
feeds = "intake"
voltage = "230/400 V"
rating = "500 kVA"
uk = "4.75 %"
losses = "5.1 kW"
secondary = "433 V"
fault_level = { maximum = "500 MVA", minimum = "150 MVA" }
earthing = "TN-S"
device = "gG 800 A"
[board.intake]
incomer = "switch 100 A"
groups = { g = { device = "RCD 100 A 300 mA S A", ways = ["W1", "S2"] } }
[board.hall]
[board.shed]
[submain.S1]
from = "intake"
to = "hall"
device = "gG 63 A"
cable = "swa-xlpe-cu-4c 25 mm2"
cpc = "armour + 16 mm2"
length = "60 m"
demand = "30 A"
selective = "total"
[submain.S2]
from = "intake"
to = "shed"
phases = "L2"
device = "C 40 A 10 kA class 3"
cable = "tray 10 mm2"
length = "25 m"
in_parallel = 2
[circuit.intake]
W1 = { phases = "L1", device = "B 16 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "12 m", load = "9 A" }
[circuit.hall]
H1 = { use = "sockets", phases = "L3", device = "B 32 A 6 kA 30 mA A", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "70 m", ring = true, spurs = [{ at = "20 m", length = "4 m" }] }
H2 = { use = "fixed", phases = "L1 L2 L3", device = "C 20 A 6 kA", cable = "singles-pvc-cu 4 mm2", length = "33 m", motor = true, load = "14 A", pf = 0.8 }
[circuit.shed]
W2 = { use = "lighting", phases = "L2", device = "B 6 A 6 kA", cable = "flat-pvc-cu 1.5/1 mm2", length = "40 m" }
[electrode.rod]
board = "shed"
resistance = "80 ohm"
[state.mains]
sources = ["grid"]
[state.own]
sources = ["T1"]
[device.feeder]
kind = "fuse"
In = "100 A"
Icn = "80 kA"
latest = [["200 A", "3600 s"], ["500 A", "10 s"], ["1.5 kA", "0.1 s"]]
earliest = [["160 A", "3600 s"], ["400 A", "10 s"], ["1 kA", "0.1 s"]]
let_through = [["1 kA", "90 kA2s"], ["50 kA", "90 kA2s"]]
source = "invented for this test"
[cable.tray]
material = "copper"
insulation = "xlpe90"
cores = 3
sizes = [{ size = "10 mm2", r20 = "1.83 mohm/m", x = "0.09 mohm/m" }]
)";

struct Counts {
  long read = 0, refused = 0, unsound = 0, solved = 0, findings = 0;
};

// A promise that a library broke: said with what is needed to have the case again.
[[noreturn]] void broken(long iteration, const std::string& why, const std::string& text) {
  fmt::print(stderr, "iteration {}: {}\n----\n{}\n----\n", iteration, why, text);
  std::abort();
}

void solve(const models::Network& network, Dice& dice, long iteration, const std::string& text, Counts& counts) {
  if (!solver::check_topology(network).empty()) {
    ++counts.unsound;
    return;
  }
  for (const solver::FaultRow& row : solver::solve_faults(network)) {
    if (row.known && (std::isnan(row.current) || row.current < 0)) {
      broken(iteration, fmt::format("current {} at {}", row.current, row.node), text);
    }
  }
  // One place looked at closely, also along a run.
  solver::FaultQuery query;
  const std::size_t n = network.submains.size();
  query.at = n > 0 && dice.below(2) == 0 ? network.submains[dice.below(n)].name + "@40%"
                                         : network.boards[dice.below(network.boards.size())].name;
  query.currents = query.touch = true;
  const auto studied = solver::study_faults(network, query);
  if (const auto* details = std::get_if<std::vector<solver::FaultDetail>>(&studied))
    for (const solver::FaultDetail& detail : *details)
      if (detail.row.known && !(detail.imbalance < 1e-3))
        broken(iteration, fmt::format("currents at {} do not add up: {}", detail.row.node, detail.imbalance), text);
  solver::CheckOptions options;
  options.remedies = dice.below(10) == 0;
  options.every_state = dice.below(4) == 0;
  for (const solver::Finding& finding : solver::run_checks(network, options)) {
    ++counts.findings;
    if (finding.check.empty() || finding.subject.empty()) broken(iteration, "a finding without check or subject", text);
    if (finding.verdict == solver::Verdict::meets && std::isnan(finding.value) && finding.reason.empty()) {
      broken(iteration, fmt::format("{} of {} meets without value or reason", finding.check, finding.subject), text);
    }
  }
  ++counts.solved;
}

std::string file_text(const std::string& path) {
  std::ifstream stream(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(stream), {}};
}

// One case: a mutated netlist, or a sound one with a mutated schedule.
void run_case(long iteration, const std::vector<std::string>& seeds, const std::filesystem::path& folder,
              Counts& counts) {
  Dice dice(static_cast<std::uint64_t>(iteration) * 0xD1B54A32D192ED03ULL + 1);
  const std::string& seed = seeds[dice.below(seeds.size())];
  const std::string& other = seeds[dice.below(seeds.size())];
  std::string text;
  std::string shown;
  if (dice.below(4) == 0) {
    text = netlists::starter_netlist("schedule") + "[board.annex]\ncircuits_from = \"case.csv\"\n" +
           "[submain.S9]\nfrom = \"intake\"\nto = \"annex\"\ndevice = \"gG 63 A\"\n"
           "cable = \"multicore-xlpe-cu-5c 16 mm2\"\nlength = \"20 m\"\n";
    const std::string rows = mutated(kSchedule, other, dice);
    std::ofstream(folder / "case.csv", std::ios::binary) << rows;
    shown = rows;
  } else {
    text = mutated(seed, other, dice);
    shown = text;
  }
  // Time of this process's work, so that a busy machine is not taken for a hang.
  const std::clock_t start = std::clock();
  const netlists::Reading reading = netlists::read_network_text(text, "case.toml", folder.string());
  bool any_error = false;
  for (const netlists::Diagnostic& diagnostic : reading.diagnostics) {
    any_error = any_error || diagnostic.severity == netlists::Severity::error;
    if (netlists::format_diagnostic(diagnostic).empty()) broken(iteration, "an empty diagnostic", shown);
  }
  if (any_error == reading.network.has_value()) broken(iteration, "a network despite errors, or none without", shown);
  ++(reading.network ? counts.read : counts.refused);
  if (reading.network) solve(*reading.network, dice, iteration, shown, counts);
  const double took = static_cast<double>(std::clock() - start) / CLOCKS_PER_SEC;
  if (took > kLongest) broken(iteration, fmt::format("took {:.1f} s", took), shown);
}

}  // namespace

int main(int argc, char** argv) {
  const long iterations = argc > 1 ? std::atol(argv[1]) : 2000;
  const long first = argc > 2 ? std::atol(argv[2]) : 0;
  std::vector<std::string> seeds = {sunder::netlists::starter_netlist("A \"seed\""), kRich};
  for (int k = 3; k < argc; ++k) seeds.push_back(file_text(argv[k]));
  std::error_code status;
  const std::filesystem::path folder =
      std::filesystem::temp_directory_path(status) / fmt::format("fuzz_netlists_{}_{}", first, iterations);
  std::filesystem::create_directories(folder, status);
  // every seed of ours must be sound itself, or nothing behind the reader is reached
  Counts counts;
  for (std::size_t k = 0; k < 2; ++k) {
    const auto reading = sunder::netlists::read_network_text(seeds[k], "seed.toml");
    if (reading.network && sunder::solver::check_topology(*reading.network).empty()) continue;
    for (const auto& diagnostic : reading.diagnostics)
      fmt::print(stderr, "{}", sunder::netlists::format_diagnostic(diagnostic));
    broken(-1, "a seed is not sound", seeds[k]);
  }
  for (long n = first; n < first + iterations; ++n) run_case(n, seeds, folder, counts);
  std::filesystem::remove_all(folder, status);
  fmt::print("{} cases: {} refused, {} read, {} of them not sound, {} solved, {} findings\n", iterations,
             counts.refused, counts.read, counts.unsound, counts.solved, counts.findings);
  return counts.solved > 0 ? 0 : 1;
}
