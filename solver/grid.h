// SPDX-License-Identifier: Apache-2.0
/// @file
/// The conductor network as potentials to reference earth: runs in series, other elements by their
/// admittances, zero impedances by merging. Every EMF is zero; a fault is driven at its own place.
#pragma once

#include <Eigen/Core>
#include <complex>
#include <memory>
#include <vector>

#include "models/conductors.h"
#include "solver/block_system.h"
#include "solver/impedance.h"

namespace sunder::solver {

/// Series impedances of a run [ohm]; of a PEN, `neutral` is that of the combined conductor.
struct RunImpedance {
  Complex line, neutral, protective;
  bool pen = false;
};

/// Nodes have the terminals L1 L2 L3 N PE and up to three more (star points of elements that stand
/// there). How it is solved:
///
/// 1. A node at the far end of a single run, with nothing else on it, offers no path between
///    conductors or to earth: it is stripped, again and again, and walked outward at the end,
///    Z_child = Z_parent + z. A branching network of cables is stripped down to its source.
/// 2. Terminals that zero impedance joins become one unknown; those at reference earth vanish.
/// 3. A part that nothing ties to earth is found by its galvanic connections (windings do not
///    connect) and tied at one terminal, which changes no current between conductors; a current to
///    earth from it is then not defined (`tied`).
/// 4. What remains is a BlockSystem, a block being the nodes that share unknowns: linear in radial
///    parts, filled in as little as possible between them.
/// 5. Where all of that is the same for the three lines (no single-phase load, no winding that turns
///    phases), it falls apart into two grids without loss: what differs between lines, one unknown a
///    node, and what they have in common with N and PE. Both are grids again and strip further.
class Grid {
 public:
  static constexpr int kSlots = 8;
  static constexpr int kEarth = -1;  ///< reference earth as a terminal

  [[nodiscard]] static int terminal(int node, models::Conductor c) noexcept {
    return node * kSlots + static_cast<int>(models::index(c));
  }

  int add_node(models::ConductorSet conductors);
  /// A further terminal that stands at a node (beyond three, at a node that is made for it).
  int add_terminal(int node);
  /// @param carried  conductors that the run connects; with a PEN, N stands for both
  int add_run(int from, int to, models::ConductorSet carried, const RunImpedance& z);
  /// An element by the admittances between its terminals [S], symmetric; the terminals of one group
  /// are galvanically connected through it. kEarth may be one of the terminals.
  int add_element(std::vector<int> terminals, std::vector<int> groups, const Eigen::MatrixXcd& y);
  /// Zero impedance between two terminals, or to reference earth.
  void join(int a, int b);

  /// Other values on the same network: another condition, another split of a source.
  void set_run(int run, const RunImpedance& z);
  void set_element(int element, const Eigen::MatrixXcd& y);

  /// Orders the network. After everything is added, before solve().
  void prepare();
  /// @param factors_only  for `potentials` instead of `thevenin`
  /// @return false where the equations are singular; `trouble_node()` then tells near which node
  [[nodiscard]] bool solve(bool factors_only = false);
  /// How far the solution is from the equations: one ampere into every unknown, alternately out of it, the
  /// greatest current left over [A]. Leaves the factors behind as solve(true) does; infinite where singular.
  [[nodiscard]] double residual();
  [[nodiscard]] int trouble_node() const noexcept { return trouble_; }

  [[nodiscard]] std::size_t nodes() const noexcept { return conductors_.size(); }
  [[nodiscard]] std::size_t runs() const noexcept { return runs_.size(); }
  [[nodiscard]] models::ConductorSet conductors(int node) const { return conductors_[at(node)]; }

  struct Ends {
    int from = 0, to = 0;
  };
  [[nodiscard]] Ends ends(int run) const { return {runs_[at(run)].from, runs_[at(run)].to}; }
  [[nodiscard]] const RunImpedance& impedance(int run) const { return runs_[at(run)].z; }
  [[nodiscard]] models::ConductorSet carried(int run) const { return runs_[at(run)].carried; }
  [[nodiscard]] std::size_t elements() const noexcept { return elements_.size(); }
  [[nodiscard]] std::vector<int> terminals(int element) const;
  /// Pairs of terminals without impedance between them: those added, of a PEN at its ends, of a
  /// conductor of a run that has none.
  [[nodiscard]] std::vector<std::pair<int, int>> all_joins() const;

  /// Whether earth currents from this terminal are defined: its part has a way to reference earth.
  [[nodiscard]] bool earthed(int terminal) const;
  /// Whether two terminals are in one galvanic part (reference earth counts as a part).
  [[nodiscard]] bool connected(int a, int b) const;

  /// Thevenin matrix between the conductors of a node and reference earth [ohm]. Precondition: solve().
  [[nodiscard]] ConductorMatrix thevenin(int node) const;
  /// Transfer impedances between two nodes that are the ends of one run, or the same [ohm].
  [[nodiscard]] ConductorMatrix transfer(int a, int b) const;
  /// The core node on which a node's stripped part hangs.
  [[nodiscard]] int hangs_on(int node) const { return attach_[at(node)]; }

  /// Loops at a core node where the three lines are alike [ohm].
  struct BalancedLoops {
    Complex line, neutral, protective;  ///< of one line of a three-phase fault; line to N; line to PE
  };
  /// Whether they are, all over the core.
  [[nodiscard]] bool balanced() const noexcept { return lines_.get() != nullptr; }
  /// Precondition: balanced(), solve(); conductors that are not there count as at reference earth.
  [[nodiscard]] BalancedLoops balanced_loops(int core_node) const;

  /// Currents put into terminals [A].
  struct Injection {
    int terminal = 0;
    Complex amps;
  };
  /// Potentials of all terminals [V], by terminal. Precondition: solve(true).
  [[nodiscard]] std::vector<Complex> potentials(const std::vector<Injection>& injections) const;
  /// What a run carries from `from` to `to` [A], by conductor (of a PEN under N), for those potentials.
  [[nodiscard]] Eigen::Matrix<Complex, 5, 1> run_current(int run, const std::vector<Complex>& potentials) const;
  /// Currents into the terminals of an element [A].
  [[nodiscard]] Eigen::VectorXcd element_current(int element, const std::vector<Complex>& potentials) const;

  // For those who walk over all nodes: the core, and what hangs on each of its nodes, parents first.
  struct Path {
    Complex line, neutral, protective;  ///< from the attachment [ohm]
  };
  [[nodiscard]] const std::vector<int>& core() const noexcept { return core_; }
  [[nodiscard]] const std::vector<int>& outward() const noexcept { return outward_; }
  /// Where in outward() that which hangs on the i-th core node begins; one more at the end.
  [[nodiscard]] const std::vector<int>& hung() const noexcept { return hung_; }
  /// Of the i-th node of outward(). Precondition: solve().
  [[nodiscard]] const Path& path_of(std::size_t i) const { return path_[core_.size() + i]; }
  [[nodiscard]] models::ConductorSet reached_by(std::size_t i) const { return reached_[core_.size() + i]; }
  /// Run through which a stripped node hangs; -1: part of the core.
  [[nodiscard]] int feeder(int node) const { return feeder_[at(node)]; }
  /// Bytes held for the solution, all included.
  [[nodiscard]] std::size_t bytes() const noexcept;

 private:
  struct Run {
    int from = 0, to = 0;
    models::ConductorSet carried;
    RunImpedance z;
  };
  struct Element {
    std::size_t first = 0;  ///< into terminals_ and groups_
    int n = 0;
    std::size_t value = 0;  ///< into admittances_
  };
  // A grid inside a grid: copied with its whole, so that copies share no values.
  class Half {
   public:
    Half();
    Half(const Half& other);
    Half(Half&& other) noexcept;
    Half& operator=(Half other) noexcept;
    ~Half();
    void begin();
    [[nodiscard]] Grid* get() const noexcept { return grid_.get(); }
    [[nodiscard]] Grid* operator->() const noexcept { return grid_.get(); }
    [[nodiscard]] Grid& operator*() const noexcept { return *grid_; }

   private:
    std::unique_ptr<Grid> grid_;
  };
  struct Unknown {
    int block = -1;  ///< -1: at reference earth (or tied to it)
    int row = 0;
  };

  /// Where the admittance of one conductor of a core run goes.
  struct Fill {
    int run = 0;
    models::Conductor conductor{};
    std::size_t from = kNowhere, to = kNowhere, between = kNowhere, back = kNowhere;
  };
  static constexpr std::size_t kNowhere = static_cast<std::size_t>(-1);

  [[nodiscard]] static std::size_t at(int i) noexcept { return static_cast<std::size_t>(i); }
  [[nodiscard]] std::size_t slot(int terminal) const;
  [[nodiscard]] bool in_core(const Run& run) const { return feeder_[at(run.from)] < 0 && feeder_[at(run.to)] < 0; }
  /// Galvanic part of a terminal; -1: nothing reaches it.
  [[nodiscard]] int part_of(int terminal) const;
  void strip();
  void merge();
  void tie_floating();
  void number();
  void place_runs();
  void fill();
  void walk();
  [[nodiscard]] bool alike() const;
  [[nodiscard]] bool alike(const Element& element) const;
  void split();
  void pass_on_run(std::size_t core_run);
  void pass_on_element(std::size_t element);
  void find_loops();
  [[nodiscard]] Eigen::MatrixXcd between_lines(const Element& element) const;
  [[nodiscard]] Eigen::MatrixXcd split_admittance(const Element& element, bool common) const;
  [[nodiscard]] Complex inverse(const Unknown& a, const Unknown& b) const;
  [[nodiscard]] ConductorMatrix core_transfer(int a, int b) const;
  [[nodiscard]] Complex shared(int node) const;

  std::vector<models::ConductorSet> conductors_;
  std::vector<int> extra_;  // further terminals of each node; empty while no node has one
  std::vector<Run> runs_;
  std::vector<Element> elements_;
  std::vector<int> terminals_, groups_;
  std::vector<Complex> admittances_;
  std::vector<std::pair<int, int>> joins_;
  // after prepare(); a place is the number in the core, or behind it in the order of outward_
  std::vector<int> feeder_, attach_, core_, outward_, hung_, place_;
  std::vector<int> parent_;                    // place that each of outward_ hangs on
  std::vector<RunImpedance> series_;           // of each of outward_
  std::vector<int> series_of_;                 // of each run, into series_; -1: a run of the core
  std::vector<models::ConductorSet> reached_;  // by place: conductors that the path carries
  std::vector<int> core_runs_;
  std::vector<int> root_;         // of each slot of the core: the terminal that stands for it
  std::vector<Unknown> unknown_;  // by slot of the core
  std::vector<int> part_;         // galvanic part of each slot; 0: with reference earth
  std::vector<bool> part_tied_;   // parts that nothing earths
  std::vector<Fill> fills_;
  std::vector<int> block_node_;  // one node of each block
  BlockSystem system_;
  Half lines_, common_;                             // the two grids of an alike core, nodes by core number
  std::vector<int> line_element_, common_element_;  // of each element; -1: none
  std::vector<int> line_run_, common_run_;          // of each core run; -1: none
  std::vector<int> core_run_of_;                    // of each run, into core_runs_; -1: stripped
  struct LoopPlaces {                               // of an alike core node, in the values of the halves
    std::size_t line = kNowhere, zero = kNowhere, neutral = kNowhere, protective = kNowhere, zero_neutral = kNowhere,
                zero_protective = kNowhere;
  };
  std::vector<LoopPlaces> loop_places_;  // by core number
  // after solve()
  std::vector<Path> path_;  // by place
  int trouble_ = -1;
};

}  // namespace sunder::solver
