// SPDX-License-Identifier: Apache-2.0
// The program against the equations: every node, and every branch for the faults of some nodes.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <cstdlib>
#include <optional>
#include <set>
#include <sstream>

#include "tests/reference/meshed_model.h"
#include "tests/reference/meshed_printed.h"
#include "tests/support/program.h"

namespace sunder::reference::meshed {

namespace {

constexpr double kTolerance = 1e-4;  // of a current,
constexpr double kTiny = 1e-3;       // or of this share of the greatest one of that fault
constexpr int kPlacesInDetail = 3;   // of each network

constexpr std::array<const char*, kConductors> kNames{" L1", " L2", " L3", " N", " PE"};

// How much of a fault is compared.
enum class Depth { current, conductors, elements };

// One network: its equations in both conditions, and all disagreements in words.
class Comparison {
 public:
  explicit Comparison(const Network& network)
      : network_(network),
        models_{build_model(network, Condition::maximum), build_model(network, Condition::minimum)} {}

  // A ring stands for its worst place: the middle or a spur's end.
  [[nodiscard]] static const Place* find(const std::string& node, const Model& model) {
    const Place* worst = nullptr;
    for (const Place& place : model.places) {
      if (place.name == node) return &place;
      if (place.name.rfind(node + "/", 0) != 0 || place.ring_metres == 0) continue;
      if (worst == nullptr || place.ring_metres > worst->ring_metres) worst = &place;
    }
    return worst;
  }

  void compare(const PrintedFault& printed, Depth depth) {
    const Condition condition = printed.condition == "maximum" ? Condition::maximum : Condition::minimum;
    const Model& model = models_[condition == Condition::maximum ? 0 : 1];
    const std::string what = printed.condition + " " + printed.node + " " + printed.fault + " " + printed.phases;
    const Place* place = find(printed.node, model);
    if (place == nullptr) return wrong(what, "no such place");
    seen_.insert({printed.condition, printed.node, printed.fault});
    const std::vector<Asked> possible = possible_faults(*place);
    std::optional<Equations::Solution> solution;
    Asked chosen;
    double worst = condition == Condition::maximum ? 0 : 1e99;
    for (const Asked& asked : possible) {
      if (word(asked.fault) != printed.fault) continue;
      auto one = model.equations.close(closings(network_, condition, *place, asked));
      const double amps = current_of(asked, one, condition);
      worst = condition == Condition::maximum ? std::max(worst, amps) : std::min(worst, amps);
      if (phases_text(*place, asked) != printed.phases && phases_text(*place, turned(asked)) != printed.phases)
        continue;
      chosen = asked;
      solution = std::move(one);
    }
    if (!solution) return wrong(what, "no such fault");
    const double expected = current_of(chosen, *solution, condition);
    if (!(std::fabs(printed.current - expected) <= kTolerance * expected)) {
      wrong(what, "current " + text(printed.current) + ", expected " + text(expected));
    }
    ++n_compared_;
    if (std::fabs(worst - expected) > kTolerance * expected) {
      wrong(what, "is not the governing choice: " + text(expected) + ", another has " + text(worst));
    }
    if (depth == Depth::current) return;
    compare_conductors(what, printed, chosen, *solution, place->node[kPE] == Equations::kEarth);
    if (depth == Depth::elements) compare_elements(what, printed, chosen, *solution, model);
  }

  // Faults that the network allows and the program did not print.
  void compare_completeness() {
    for (std::size_t i = 0; i < 2; ++i) {
      for (const Place& place : models_[i].places) {
        if (place.name.find("/middle") != std::string::npos) continue;
        for (const Asked& asked : possible_faults(place)) {
          if (asked.fault == Fault::two_lines_earth) continue;  // only where it is asked for
          const char* condition = word(i == 0 ? Condition::maximum : Condition::minimum);
          if (seen_.count({condition, place.name, word(asked.fault)}) == 0) {
            wrong(std::string(condition) + " " + place.name + " " + word(asked.fault), "is missing");
            seen_.insert({condition, place.name, word(asked.fault)});
          }
        }
      }
    }
  }

  void wrong(const std::string& what, const std::string& how) {
    ++n_wrong_;
    if (n_wrong_ <= 12) list_ += what + ": " + how + "\n";
  }

  [[nodiscard]] std::size_t n_wrong() const { return n_wrong_; }
  [[nodiscard]] std::size_t n_compared() const { return n_compared_; }
  [[nodiscard]] const std::string& list() const { return list_; }
  [[nodiscard]] const Model& model() const { return models_[0]; }

 private:
  static std::string text(double value) {
    std::ostringstream out;
    out.precision(8);
    out << value;
    return out.str();
  }
  static std::string text(Complex value) {
    return text(std::abs(value)) + " A at " + text(std::arg(value) * 57.29577951) + " deg";
  }

  // The current that stands for a fault: the greatest of its lines, in the minimum the least.
  static double current_of(const Asked& asked, const Equations::Solution& solution, Condition condition) {
    const auto amps = into_fault(asked, solution);
    std::vector<double> lines;
    for (const std::size_t line : asked.lines) lines.push_back(std::abs(amps[line]));
    const auto [least, greatest] = std::minmax_element(lines.begin(), lines.end());
    return condition == Condition::maximum ? *greatest : *least;
  }

  // One current of a fault. Angles are against the first driving voltage; here against that of L1.
  void check(const std::string& what, const std::string& where, Complex found, Complex right,
             const PrintedFault& printed, const Asked& asked, const std::array<Complex, kConductors>& expected) {
    ++n_compared_;
    const std::size_t first = asked.lines[0];
    const Complex turn = std::polar(1.0, std::arg(expected[first] / printed.into_fault[first]));
    double greatest = 0;
    for (const Complex& amps : expected) greatest = std::max(greatest, std::abs(amps));
    if (std::abs(found * turn - right) <= kTolerance * std::max(std::abs(right), kTiny * greatest)) return;
    wrong(what, where + " " + text(found * turn) + ", expected " + text(right));
  }

  void compare_conductors(const std::string& what, const PrintedFault& printed, const Asked& asked,
                          const Equations::Solution& solution, bool high) {
    const auto expected = into_fault(asked, solution);
    for (std::size_t c = 0; c < kConductors; ++c) {
      if (c == kPE && high) continue;  // above 1 kV the rest goes to earth, no conductor
      check(what, std::string("into the fault") + kNames[c], printed.into_fault[c], expected[c], printed, asked,
            expected);
    }
  }

  void compare_elements(const std::string& what, const PrintedFault& printed, const Asked& asked,
                        const Equations::Solution& solution, const Model& model) {
    const auto expected = into_fault(asked, solution);
    const auto check_one = [&](const std::string& where, Complex found, Complex right) {
      check(what, where, found, right, printed, asked, expected);
    };
    for (const Carried& carried : model.carried) {
      const auto found = printed.elements.find(carried.element);
      std::array<Complex, kConductors> right{};
      bool any = false;
      for (std::size_t c = 0; c < kConductors; ++c) {
        if (carried.amps[c]) right[c] = Equations::value(*carried.amps[c], solution);
        any = any || std::abs(right[c]) > 0.01;
      }
      if (found == printed.elements.end()) {
        if (any && must_be_printed(carried.element)) wrong(what, carried.element + " is not listed");
        continue;
      }
      if (supply_above_1kv(carried.element)) {
        right[kN] = 0;  // it has no neutral, and its star point is not listed
      }
      const auto& amps = found->second.amps;
      for (std::size_t c = 0; c < kN; ++c) {
        if (!carried.amps[c] || model.equations.determinate(*carried.amps[c])) {
          check_one(carried.element + kNames[c], amps[c], right[c]);
        }
      }
      // What neutral and protective conductor share is not told where one conductor is both.
      const bool apart = (!carried.amps[kN] || model.equations.determinate(*carried.amps[kN])) &&
                         (!carried.amps[kPE] || model.equations.determinate(*carried.amps[kPE]));
      if (apart && !combined(carried.element)) {
        check_one(carried.element + kNames[kN], amps[kN], right[kN]);
        check_one(carried.element + kNames[kPE], amps[kPE], right[kPE]);
      } else {
        Equations::Current sum;
        if (carried.amps[kN]) sum = sum + *carried.amps[kN];
        if (carried.amps[kPE]) sum = sum + *carried.amps[kPE];
        if (model.equations.determinate(sum)) {
          check_one(carried.element + " N and PE", amps[kN] + amps[kPE], right[kN] + right[kPE]);
        }
      }
    }
  }

  // L3-L1 is the same as L1-L3.
  static Asked turned(Asked asked) {
    std::reverse(asked.lines.begin(), asked.lines.end());
    return asked;
  }

  // Electrodes are no elements of the listing.
  [[nodiscard]] bool must_be_printed(const std::string& element) const {
    for (const Electrode& electrode : network_.electrodes) {
      if (electrode.name == element) return false;
    }
    return true;
  }

  [[nodiscard]] bool supply_above_1kv(const std::string& element) const {
    for (const Source& source : network_.sources) {
      if (source.name == element) return network_.boards[static_cast<std::size_t>(source.board)].high;
    }
    return false;
  }

  [[nodiscard]] bool combined(const std::string& element) const {
    for (const Run& run : network_.runs) {
      if (run.name == element) return run.length.pen || (run.sequence && run.through == Return::both);
    }
    return false;
  }

  const Network& network_;
  std::array<Model, 2> models_;
  std::set<std::array<std::string, 3>> seen_;
  std::size_t n_wrong_ = 0;
  std::size_t n_compared_ = 0;
  std::string list_;
};

std::size_t compare(unsigned seed) {
  const Network network = random_network(seed);
  const support::Folder folder;
  folder.write("net.toml", netlist_text(network));
  const support::Outcome all = support::run_sunder({"faults", "net.toml", "--json"}, folder);
  if (all.status != 0) {
    FAIL_CHECK(network.title << ": status " << all.status << "\n" << all.out.substr(0, 1500) << all.err);
    return 0;
  }
  Comparison comparison(network);
  for (const PrintedFault& fault : read_all_nodes(all.out)) comparison.compare(fault, Depth::current);
  comparison.compare_completeness();
  const auto study = [&](std::vector<std::string> options, Depth depth) {
    std::vector<std::string> arguments{"faults", "net.toml", "--json"};
    arguments.insert(arguments.end(), options.begin(), options.end());
    const support::Outcome one = support::run_sunder(arguments, folder);
    if (one.status != 0) {
      comparison.wrong(options.back(), "status " + std::to_string(one.status) + " " + one.out.substr(0, 300) + one.err);
      return;
    }
    for (const PrintedFault& fault : read_studies(one.out)) comparison.compare(fault, depth);
  };
  study({"--fault", "two-lines-earth"}, Depth::conductors);
  const std::vector<Place>& places = comparison.model().places;
  for (int i = 0; i < kPlacesInDetail; ++i) {
    const std::size_t n = places.size();
    const Place& place = places[(seed * 5 + static_cast<std::size_t>(i) * n / kPlacesInDetail) % n];
    if (place.ring_metres > 0) continue;
    const bool two_lines = i == 2 && place.has(0) && place.has(1) && place.has(kPE);
    study(two_lines ? std::vector<std::string>{"--currents", "--at", place.name, "--fault", "two-lines-earth"}
                    : std::vector<std::string>{"--currents", "--at", place.name},
          Depth::elements);
  }
  INFO(network.title << ", " << count_nodes(network) << " nodes: " << comparison.n_wrong() << " of "
                     << comparison.n_compared() << " currents are wrong\n"
                     << comparison.list());
  CHECK(comparison.n_wrong() == 0);
  return comparison.n_compared();
}

}  // namespace

TEST_CASE("200 random networks have the currents of their unreduced conductor networks", "[meshed]") {
  std::size_t n_compared = 0;
  for (unsigned seed = 1; seed <= 200; ++seed) n_compared += compare(seed);
  CHECK(n_compared > 100000);
}

}  // namespace sunder::reference::meshed
