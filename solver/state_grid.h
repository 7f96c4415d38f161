// SPDX-License-Identifier: Apache-2.0
/// @file
/// One supply state of any network as a grid of conductors: loops, several sources, transformers,
/// machines, electrodes. What a fault finds at each place, and what everything carries meanwhile.
#pragma once

#include <array>
#include <functional>
#include <string>
#include <utility>
#include <vector>

#include "solver/fault_loops.h"
#include "solver/faults.h"
#include "solver/grid.h"
#include "solver/topology.h"

namespace sunder::solver {

/// A place in the grid: a node, or a point of a run between two.
struct GridPlace {
  int node = -1;        ///< node of the grid; a board's handle is its node
  int run = -1;         ///< run of the grid; then `fraction` of one of its cables from the `from` end
  double fraction = 0;  ///< 0..1
  int in_parallel = 1;  ///< equal cables that the run stands for
  ConductorMatrix beyond = ConductorMatrix::Zero();  ///< a run that ends here, from the node on [ohm]
  models::ConductorSet have;                         ///< conductors at the place
  int board = -1;                                    ///< whose voltage and earthing hold there
};

/// What a run, a winding or a source of the network is in the grid.
struct GridPiece {
  std::string name;      ///< "S1", "T1 primary", "grid", "M1"
  std::string from, to;  ///< names of its ends
  const models::Device* device = nullptr;
  int run = -1;                              ///< of the grid
  int element = -1;                          ///< of the grid
  std::vector<int> terminals{};              ///< of the element: which of its currents are L1 L2 L3 N PE; -1: none
  double sign = 1;                           ///< of the element's currents, so that they flow from `from` to `to`
  std::vector<std::pair<int, int>> joins{};  ///< terminals it joins without impedance
};

class StateGrid {
 public:
  /// Precondition: tree.grid, check_topology is empty.
  /// @param with_motors  in the maximum; never in the minimum
  StateGrid(const models::Network& network, StateTree tree, Condition condition, bool with_motors = true);
  /// Views and pieces point into the network: it must outlive the grid.
  StateGrid(StateGrid&&) = default;
  StateGrid(const StateGrid&) = delete;
  StateGrid& operator=(const StateGrid&) = delete;
  StateGrid& operator=(StateGrid&&) = delete;
  ~StateGrid() = default;

  /// The governing current of a fault at a place: greatest line current in the maximum, least in the
  /// minimum, over the equivalent choices of lines and over what the sources leave open.
  /// @param through  resistance of the fault itself [ohm]
  [[nodiscard]] FaultCurrent current(const GridPlace& place, Fault fault, double through = 0) const;

  /// Greatest |Z| of the loop between two conductors of a place over what the sources leave open [ohm].
  [[nodiscard]] double loop_ohms(const GridPlace& place, models::Conductor a, models::Conductor b) const;

  /// The board whose protective bar is the main earthing terminal of the part that a board is in: where its
  /// first star point is joined to it; the board itself where none is.
  [[nodiscard]] int main_board(int board) const;

  /// Where a board, the far end of a circuit, or a place along a submain is.
  [[nodiscard]] GridPlace at_board(int board) const;
  [[nodiscard]] GridPlace at_circuit(int circuit, CircuitEnd end) const;
  [[nodiscard]] GridPlace along_submain(int submain, double fraction) const;

  /// The fault that `current` found, with what flows everywhere.
  struct Flow {
    FaultCurrent current;
    Eigen::Matrix<Complex, 5, 1> into_fault = Eigen::Matrix<Complex, 5, 1>::Zero();
    std::vector<Complex> potentials;                   ///< by terminal of the grid [V]
    std::vector<Eigen::Matrix<Complex, 5, 1>> pieces;  ///< of each piece [A]
    double imbalance = 0;                              ///< greatest current left over at a terminal [1]
    std::string undefined;                             ///< links whose shares are not defined, "" if none
    // Of a fault at two places: the line of each (0..2) and the current from it into its PE.
    std::array<int, 2> pair_lines{-1, -1};
    std::array<Complex, 2> pair_amps{};
  };
  [[nodiscard]] Flow flow(const GridPlace& place, Fault fault, double through = 0) const;
  /// A line to PE at each of two places, two lines of the three: two loops that share the network where each is
  /// closed by itself (driven by c U0), one loop through both where nothing closes them (IT; driven by c U).
  [[nodiscard]] Flow flow_between(const GridPlace& a, const GridPlace& b, double through = 0) const;

  /// What the declared loops of supplies may add to every potential against reference earth, were all of
  /// them in the return instead of the line [V]: the sum of |I star| |Z| over supplies (TT aside, whose star
  /// is no part of the protective conductor).
  [[nodiscard]] double volts_of_returns(const Flow& flow) const;

  /// Potential of the protective conductor at the place of the fault itself [V].
  [[nodiscard]] Complex protective_potential(const GridPlace& place, const Flow& flow, Complex into_protective) const;

  /// What inverters alone deliver at a board, stage by stage; empty where another source feeds it.
  [[nodiscard]] std::vector<models::Stage> stages(int board) const;

  [[nodiscard]] const std::vector<GridPiece>& pieces() const noexcept { return pieces_; }
  [[nodiscard]] const Grid& grid() const noexcept { return views_.front().grid; }
  /// What was taken where nothing is declared, a sentence each.
  [[nodiscard]] const std::vector<std::string>& taken() const noexcept { return taken_; }
  /// Sentence about a part that could not be solved, "" if all was.
  [[nodiscard]] const std::string& trouble() const noexcept { return trouble_; }

 private:
  /// What a source is in one view: impedances among its lines [ohm].
  struct SourceValue {
    ConductorMatrix series = ConductorMatrix::Zero();
    bool star_open = false;
  };
  /// One way to fill in what the sources leave open.
  struct View {
    Grid grid;
    std::vector<SourceValue> sources;
    double reactance = 1;  ///< factor on every reactance (the lower frequency of IEC 60909, method C)
  };
  struct SourcePlace {
    int source = -1;
    int node = -1;
    int element = -1;
    int star = Grid::kEarth;  ///< terminal
    bool alone = false;       ///< an inverter that is the only source of its part: no impedance of its own
  };
  /// A star point of a low-voltage source or transformer.
  struct Star {
    int node = -1;   ///< of the grid, where its terminals are
    int board = -1;  ///< that it feeds
    int index = 0;   ///< into sources or transformers
    bool of_transformer = false;
    bool brought_out = true;
  };
  /// The views that count for one kind of fault; each with its twin at the lower frequency in `slow`.
  struct Candidates {
    bool known = true;
    std::string needs;
    std::vector<int> views, slow;
  };
  /// Something that stays the same over the views but for its reactance.
  struct Passive {
    int element = -1;
    std::function<Eigen::MatrixXcd(double reactance)> y;
  };
  /// The governing choice of one fault.
  struct Governing {
    FaultCurrent current;
    int view = -1;
    const FaultLoops* loops = nullptr;
  };

  void find_parts();
  void add_runs();
  void add_links();
  void add_transformers();
  void add_sources();
  void add_motors();
  void add_earths();
  void connect_stars();
  void solve_views();
  [[nodiscard]] int view_for(const std::vector<SourceValue>& values, double reactance);
  void add_passive(std::vector<int> terminals, std::vector<int> groups, std::function<Eigen::MatrixXcd(double)> y);
  void add_piece_of_element(GridPiece piece, int element, std::vector<int> positions, double sign);
  [[nodiscard]] bool carries_zero(int part, int except) const;
  void spread_capacitance(const Star& star, const models::Transformer& transformer);
  void star_to_earth(int terminal, const models::StarPoint& star, double capacitance);
  [[nodiscard]] Eigen::MatrixXcd source_admittance(const SourcePlace& place, const SourceValue& value,
                                                   double reactance) const;
  /// Series matrix of one of the equal cables that a place's run stands for [ohm].
  [[nodiscard]] static ConductorMatrix one_cable(const Grid& grid, const GridPlace& place);
  [[nodiscard]] ConductorMatrix place_matrix(const View& view, const GridPlace& place) const;
  [[nodiscard]] std::string why_not(const GridPlace& place, Fault fault) const;
  [[nodiscard]] Governing govern(const GridPlace& place, Fault fault, double through) const;
  [[nodiscard]] double added_by_inverters(int board) const;
  [[nodiscard]] double limit_of_inverter(int board) const;
  [[nodiscard]] Flow trace(int view, const std::vector<Grid::Injection>& injections, const GridPlace* inside,
                           const Eigen::Matrix<Complex, 5, 1>& into_fault) const;
  [[nodiscard]] int terminal_of(int node, models::Conductor c) const { return Grid::terminal(node, c); }

  const models::Network& network_;
  const StateTree tree_;
  Condition condition_;
  bool with_motors_;
  Grid grid_;  ///< as built, before any view has set its values
  std::vector<GridPiece> pieces_;
  std::vector<int> run_of_submain_;
  std::vector<int> circuit_node_;  ///< of circuits at whose end a motor stands; -1: none
  std::vector<SourcePlace> sources_;
  std::vector<Star> star_nodes_;
  std::vector<int> part_;      ///< of each board: what cables and links connect
  std::vector<int> whole_;     ///< of each board: what transformers connect too
  std::vector<bool> earthed_;  ///< parts whose star point is at reference earth
  std::vector<Passive> passive_;
  std::vector<RunImpedance> impedances_;                ///< of the runs, at the network's frequency
  std::vector<std::pair<int, std::string>> no_return_;  ///< of a part: what would tell its zero sequence
  std::vector<std::pair<int, std::string>> followers_;  ///< of a whole that only followers feed: one of them
  std::vector<std::string> taken_;
  std::string trouble_;
  std::vector<View> views_;
  std::vector<Candidates> of_fault_;
};

/// Voltage that drives a fault at a board [V], of three lines and of two lines and earth that of one line.
[[nodiscard]] double driving_voltage_at(const models::Network& network, const StateTree& tree, int board,
                                        Condition condition, Fault fault) noexcept;

}  // namespace sunder::solver
