// SPDX-License-Identifier: Apache-2.0
// Laws of meshed networks: currents add up, and what is the same network gives the same currents.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <random>
#include <set>

#include "solver/state_grid.h"
#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/mesh.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::close;
using laws::Mesh;
using laws::MeshRun;
using Complex = std::complex<double>;

// Both have the same places and the same currents there.
void assert_equal(const std::map<std::string, double>& a, const std::map<std::string, double>& b,
                  double tolerance = 1e-8) {
  RC_ASSERT(a.size() == b.size());
  for (const auto& [key, amps] : a) {
    RC_ASSERT(b.count(key) == 1U);
    if (!close(amps, b.at(key), tolerance))
      RC_FAIL(key + ": " + std::to_string(amps) + " A and " + std::to_string(b.at(key)) + " A");
  }
}

TEST_CASE("Currents add up at every board and across every cut") {
  laws::check_law([] {
    const Mesh mesh = *laws::meshes();
    const models::Network network = laws::network_of(laws::netlist(mesh));
    solver::FaultQuery query;
    query.at = *rc::gen::elementOf(mesh.boards);
    query.currents = true;
    std::set<std::string> own;  // boards whose star points meet the protective conductor or earth there
    for (const laws::MeshThing& source : mesh.sources) own.insert(source.board);
    for (const laws::MeshThing& thing : mesh.things)
      if (thing.key == "feeds") own.insert(thing.board);
    for (const solver::FaultDetail& detail : laws::studied(network, query)) {
      if (!detail.row.known) continue;
      RC_ASSERT(detail.imbalance < 1e-9);
      if (!detail.undefined.empty()) continue;
      std::set<std::string> inside;
      for (const std::string& board : mesh.boards)
        if (*rc::gen::inRange(0, 2) == 0) inside.insert(board);
      std::array<Complex, 5> sum{};
      bool with_source = false;
      for (const std::string& board : inside) with_source = with_source || own.count(board) > 0;
      for (const solver::ElementCurrent& element : detail.elements)
        for (std::size_t k = 0; k < 5; ++k) {
          if (inside.count(element.from) > 0) sum[k] -= element.amps[k];
          if (inside.count(element.to) > 0) sum[k] += element.amps[k];
        }
      if (inside.count(query.at) > 0)
        for (std::size_t k = 0; k < 5; ++k) sum[k] -= detail.into_fault[k];
      for (std::size_t k = 0; k < 3; ++k) RC_ASSERT(std::abs(sum[k]) < 1e-8 * detail.row.current);
      // Neutral and protective conductor may be joined: together. At high voltage earth itself takes part.
      if (!with_source && query.at != "HV") RC_ASSERT(std::abs(sum[3] + sum[4]) < 1e-8 * detail.row.current);
    }
  });
}

TEST_CASE("The order of tables changes no current") {
  laws::check_law([] {
    const Mesh mesh = *laws::meshes();
    std::vector<std::string> tables = laws::tables(mesh);
    const auto before = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    // Sources stay: the first star point is the reference.
    const auto first = tables.begin() + static_cast<std::ptrdiff_t>(mesh.sources.size());
    const bool transformers = mesh.boards.back() == "HV";
    if (!transformers) {
      std::mt19937 engine(static_cast<unsigned>(*rc::gen::inRange(0, 1 << 30)));
      std::shuffle(first, tables.end(), engine);
    } else {
      std::reverse(first, first + static_cast<std::ptrdiff_t>(mesh.boards.size() + mesh.runs.size()));
    }
    std::string text = "rules = \"BS 7671:2018+A2\"\n";
    for (const std::string& table : tables) text += table;
    text += mesh.extra;
    assert_equal(before, laws::currents_of(laws::network_of(text)));
  });
}

TEST_CASE("A submain written from its other end is the same submain") {
  laws::check_law([] {
    Mesh mesh = *laws::meshes();
    mesh.runs.push_back(laws::random_run("further", "B0", "B2", {}));
    const auto before = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    std::swap(mesh.runs.back().from, mesh.runs.back().to);
    assert_equal(before, laws::currents_of(laws::network_of(laws::netlist(mesh))));
  });
}

TEST_CASE("A closed coupler makes one node of two boards") {
  laws::check_law([] {
    laws::MeshLimits limits;
    limits.links = false;
    Mesh mesh = *laws::meshes(limits);
    const std::string a = "B0";
    const std::string b = "B2";
    // A run between the two would lead from a board to itself.
    mesh.runs.erase(std::remove_if(mesh.runs.begin(), mesh.runs.end(),
                                   [&](const MeshRun& run) {
                                     return (run.from == a && run.to == b) || (run.from == b && run.to == a);
                                   }),
                    mesh.runs.end());
    Mesh merged = mesh;
    for (MeshRun& run : merged.runs) {
      if (run.from == b) run.from = a;
      if (run.to == b) run.to = a;
    }
    for (laws::MeshThing& thing : merged.things)
      if (thing.board == b) thing.board = a;
    merged.boards.erase(std::find(merged.boards.begin(), merged.boards.end(), b));
    mesh.links.push_back({"K1", a, b, true});
    const auto coupled = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    const auto one = laws::currents_of(laws::network_of(laws::netlist(merged)));
    for (const auto& [key, amps] : one) RC_ASSERT(close(amps, coupled.at(key), 1e-8));
    for (const auto& [key, amps] : coupled) {
      const std::size_t at = key.find(" B2 ");
      if (at == std::string::npos) continue;
      RC_ASSERT(close(amps, coupled.at(key.substr(0, at) + " B0 " + key.substr(at + 4)), 1e-8));
    }
  });
}

TEST_CASE("An open coupler is no coupler") {
  laws::check_law([] {
    laws::MeshLimits limits;
    limits.links = false;
    Mesh mesh = *laws::meshes(limits);
    const auto without = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    mesh.links.push_back({"K1", "B0", "B2", false});
    assert_equal(without, laws::currents_of(laws::network_of(laws::netlist(mesh))));
  });
}

TEST_CASE("A state gives what it gives alone") {
  laws::check_law([] {
    laws::MeshLimits limits;
    limits.links = false;
    Mesh mesh = *laws::meshes(limits);
    mesh.links.push_back({"K1", "B0", "B2", false});
    const std::string sources = laws::names_of_sources(mesh);
    const std::string open = "[state.open]\nsources = [" + sources + "]\n";
    const std::string closed = "[state.closed]\nsources = [" + sources + "]\nclosed = [\"K1\"]\n";
    mesh.extra = open;
    auto alone = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    mesh.extra = closed;
    for (const auto& [key, amps] : laws::currents_of(laws::network_of(laws::netlist(mesh)))) alone.emplace(key, amps);
    mesh.extra = *rc::gen::inRange(0, 2) == 0 ? open + closed : closed + open;
    assert_equal(alone, laws::currents_of(laws::network_of(laws::netlist(mesh))), 1e-12);
  });
}

TEST_CASE("Among resistances a further run raises no loop impedance") {
  // Rayleigh: what is added between two points of a network of resistances lowers every resistance in it.
  laws::check_law([] {
    laws::MeshLimits limits;
    limits.resistive = true;
    Mesh mesh = *laws::meshes(limits);
    const auto before = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    const auto n = static_cast<int>(mesh.boards.size());
    const int a = *rc::gen::inRange(0, n);
    const int b = (a + 1 + *rc::gen::inRange(0, n - 1)) % n;
    mesh.runs.push_back(laws::random_run("further", mesh.boards[static_cast<std::size_t>(a)],
                                         mesh.boards[static_cast<std::size_t>(b)], limits));
    const auto after = laws::currents_of(laws::network_of(laws::netlist(mesh)));
    RC_ASSERT(after.size() == before.size());
    for (const auto& [key, amps] : after) RC_ASSERT(amps >= before.at(key) * (1 - 1e-9));
  });
}

// Currents by walking along the forest and by the grid, and how far apart they may be.
void compare_walk_and_grid(const laws::Site& site, double tolerance) {
  const models::Network network = laws::network_of(site);
  RC_ASSERT(!solver::state_tree(network, 0).grid);
  const laws::Rows walked = laws::rows_of(network);
  for (const solver::Condition condition : {solver::Condition::maximum, solver::Condition::minimum}) {
    const solver::StateGrid grid(network, solver::state_tree(network, 0, true), condition);
    RC_ASSERT(grid.trouble().empty());
    for (const solver::Fault fault : solver::kAllFaults) {
      auto compare = [&](const solver::GridPlace& place, const std::string& node) {
        const std::string key = std::string(word(condition)) + " " + node + " " + word(fault);
        const solver::FaultCurrent found = grid.current(place, fault);
        RC_ASSERT(found.possible == (walked.count(key) > 0));
        if (!found.possible) return;
        const solver::FaultRow& row = walked.at(key);
        if (found.known != row.known)
          RC_FAIL(key + ": needs '" + row.needs + "' walked, '" + found.needs + "' by the grid");
        if (!row.known) return;
        if (!close(found.amps, row.current, tolerance))
          RC_FAIL(key + ": " + std::to_string(row.current) + " A walked, " + std::to_string(found.amps) +
                  " A by the grid");
        // An open angle is met at the step that gives the current; X/R then is that step's.
        if (tolerance < 1e-6) RC_ASSERT(close(found.x_over_r, row.x_over_r, 1e-6));
        if (condition == solver::Condition::maximum && !close(found.peak, row.peak, std::max(tolerance, 1e-6)))
          RC_FAIL(key + ": peak " + std::to_string(row.peak) + " A walked, " + std::to_string(found.peak) +
                  " A by the grid");
      };
      for (std::size_t b = 0; b < network.boards.size(); ++b)
        compare(grid.at_board(static_cast<int>(b)), network.boards[b].name);
      for (std::size_t c = 0; c < network.circuits.size(); ++c) {
        const models::Circuit& circuit = network.circuits[c];
        const std::string node = models::address(network, circuit);
        compare(grid.at_circuit(static_cast<int>(c), solver::worst_end(network, circuit)), node);
        for (std::size_t s = 0; s < circuit.spurs.size(); ++s)
          compare(grid.at_circuit(static_cast<int>(c), solver::spur_end(circuit, static_cast<int>(s))),
                  node + "/spur" + std::to_string(s + 1));
      }
    }
  }
}

TEST_CASE("A tree solved as a grid is a tree walked") {
  laws::check_law([] {
    laws::Limits limits;
    limits.declared_angle = true;
    compare_walk_and_grid(*laws::sites(limits), 1e-9);
  });
}

TEST_CASE("With an open angle of the supply the grid meets the walk within 0.4 %") {
  laws::check_law([] {
    laws::Limits limits;
    limits.supplies_only = true;
    laws::Site site = *laws::sites(limits);
    site.power_factor = -1;
    compare_walk_and_grid(site, 0.004);
  });
}

}  // namespace
