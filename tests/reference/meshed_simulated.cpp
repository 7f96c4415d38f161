// SPDX-License-Identifier: Apache-2.0
// The equations against ngspice: two ways from the same tables that share neither windings nor solution.
#include <catch2/catch.hpp>
#include <sstream>

#include "tests/reference/meshed_deck.h"
#include "tests/reference/meshed_model.h"

namespace sunder::reference::meshed {

namespace {

constexpr double kTolerance = 1e-4;  // of the current, or of the greatest one of that fault
constexpr unsigned kNetworks = 200;
constexpr std::size_t kPlaces = 1;  // of each network, another one in each condition

// One choice of lines of every fault at some places: boards and ends of circuits.
std::vector<DeckFault> some_faults(const Model& model, std::size_t turn) {
  std::vector<const Place*> places;
  for (const Place& place : model.places) {
    if (place.name.find("/middle") == std::string::npos && place.name.find("/spur") == std::string::npos) {
      places.push_back(&place);
    }
  }
  std::vector<DeckFault> faults;
  for (std::size_t i = 0; i < kPlaces; ++i) {
    const Place& place = *places[(turn * 7 + i * places.size() / kPlaces) % places.size()];
    const std::vector<Asked> possible = possible_faults(place);
    for (const Fault fault : kFaults) {
      std::vector<Asked> choices;
      for (const Asked& asked : possible) {
        if (asked.fault == fault) choices.push_back(asked);
      }
      if (choices.empty()) continue;
      const Asked& one = choices[(turn + i) % choices.size()];
      faults.push_back({place.name, one.fault, one.lines});
    }
  }
  return faults;
}

std::size_t compare(const Network& network, const Model& model, const DeckFault& fault, const DeckAnswer& answer,
                    Condition condition) {
  const Place& place = model.place(fault.place);
  const Asked asked{fault.fault, fault.lines};
  const auto solution = model.equations.close(closings(network, condition, place, asked));
  const auto expected = into_fault(asked, solution);
  double greatest = 0;
  for (const Complex& amps : expected) greatest = std::max(greatest, std::abs(amps));
  std::size_t n_wrong = 0;
  std::size_t n_compared = 0;
  const auto check = [&](const std::string& what, std::size_t conductor, Complex found, Complex right) {
    ++n_compared;
    const double allowed = kTolerance * std::max(std::abs(right), 1e-2 * greatest);
    if (std::abs(found - right) <= allowed) return;
    ++n_wrong;
    UNSCOPED_INFO(what << " conductor " << conductor << ": ngspice " << found << ", equations " << right);
  };
  for (std::size_t c = 0; c < kConductors; ++c) check("fault", c, answer.into_fault[c], expected[c]);
  for (const Carried& carried : model.carried) {
    for (std::size_t c = 0; c < kConductors; ++c) {
      const auto found = answer.carried.find({carried.element, c});
      if (found == answer.carried.end() || !carried.amps[c]) continue;
      check(carried.element, c, found->second, Equations::value(*carried.amps[c], solution));
    }
  }
  INFO(network.title << ", " << word(condition) << ", " << fault.place << " " << phases_text(place, asked) << " ("
                     << word(fault.fault) << "), greatest " << greatest << " A");
  CHECK(n_wrong == 0);
  return n_compared;
}

}  // namespace

TEST_CASE("200 random networks have the same currents by equations and in ngspice", "[meshed-ngspice]") {
  std::size_t n_compared = 0;
  for (const Condition condition : {Condition::maximum, Condition::minimum}) {
    std::vector<Network> networks;
    std::vector<Model> models;
    std::vector<std::vector<DeckFault>> faults;
    for (unsigned seed = 1; seed <= kNetworks; ++seed) {
      networks.push_back(random_network(seed));
      models.push_back(build_model(networks.back(), condition));
      faults.push_back(some_faults(models.back(), seed + (condition == Condition::maximum ? 0 : 1)));
    }
    const auto answers = simulate(networks, faults, condition);
    for (std::size_t i = 0; i < networks.size(); ++i) {
      for (std::size_t k = 0; k < faults[i].size(); ++k) {
        n_compared += compare(networks[i], models[i], faults[i][k], answers[i][k], condition);
      }
    }
  }
  CHECK(n_compared > 60000);
}

}  // namespace sunder::reference::meshed
