// SPDX-License-Identifier: Apache-2.0
/// @file
/// Which conductors arrive at each board, and at what voltage, over everything that may feed it.
#pragma once

#include <optional>
#include <vector>

#include "netlists/context.h"

namespace sunder::netlists {

/// What is known of a board once its feeds are followed.
struct Place {
  models::ConductorSet has;
  bool reached = false;
  bool high = false;    ///< above 1 kV: lines alone
  double U0 = 0;        ///< line to neutral [V]
  double U = 0;         ///< between lines [V]
  bool joined = false;  ///< neutral and protective conductor are one potential
};

/// Conductors and voltages of all boards, spread from the sources along transformers, submains and links. A board has
/// the union of what arrives. A submain feeds from its `from` board as long as anything else feeds that; only where
/// nothing does, the other end feeds it.
class Reach {
 public:
  /// @param wanted  conductors that each submain is said to have, nothing where it is not said (or not understood)
  /// @param joins   the same of each link
  Reach(const Context& context, const std::vector<std::optional<models::ConductorSet>>& wanted,
        const std::vector<std::optional<models::ConductorSet>>& joins);

  [[nodiscard]] const Place& at(int board) const { return places_[static_cast<std::size_t>(board)]; }
  [[nodiscard]] const std::vector<int>& order() const noexcept { return order_; }  ///< boards as they were reached
  /// Submains that leave a board as they were declared.
  [[nodiscard]] const std::vector<std::size_t>& leaving(int board) const {
    return leaving_[static_cast<std::size_t>(board)];
  }
  [[nodiscard]] bool fed_backward(std::size_t submain) const { return backward_[submain]; }
  /// Whether a submain is said to have conductors that its board has not.
  [[nodiscard]] bool wrong(std::size_t submain) const { return wrong_[submain]; }
  /// What a submain carries, without what its cpc or return takes away.
  [[nodiscard]] models::ConductorSet carried(std::size_t submain) const;

 private:
  void start();
  void spread();
  void spread_from(int board);
  bool try_links();
  bool try_backward();
  bool find_wrong();
  void join_neutrals();
  void reach(int board, models::ConductorSet set, double U0, double U, bool high);
  void pass(std::size_t submain, int from, int to);
  void pass_link(std::size_t link, int from, int to);

  const Context& context_;
  const models::Network& network_;
  const std::vector<std::optional<models::ConductorSet>>& wanted_;
  const std::vector<std::optional<models::ConductorSet>>& joins_;
  std::vector<Place> places_;
  std::vector<int> order_;
  std::vector<int> grown_;                          // boards whose conductors are to be passed on
  std::size_t links_seen_ = 0, backward_seen_ = 0;  // into order_
  std::vector<std::vector<std::size_t>> leaving_, arriving_, primary_, secondary_, links_;  // of each board
  std::vector<bool> backward_;                                                              // submains
  std::vector<int> link_fed_from_;  // board that feeds through a link, -1: both have feeds of their own
  std::vector<bool> wrong_;         // submains
};

}  // namespace sunder::netlists
