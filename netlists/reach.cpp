// SPDX-License-Identifier: Apache-2.0
/// @file
/// Spreading conductors from the sources.
#include "netlists/reach.h"

#include "netlists/parts.h"
#include "netlists/source_keys.h"

namespace sunder::netlists {

namespace {

using models::Conductor;
using models::ConductorSet;

constexpr ConductorSet kLines{Conductor::L1, Conductor::L2, Conductor::L3};

std::size_t slot(int handle) noexcept { return static_cast<std::size_t>(handle); }

ConductorSet without(ConductorSet set, ConductorSet others) {
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE}) {
    if (others.has(c)) set.remove(c);
  }
  return set;
}

bool has_neutral(const models::Transformer& transformer) noexcept {
  return transformer.U <= kLowVoltage && (transformer.secondary_winding == models::Winding::star_earthed ||
                                          transformer.secondary_winding == models::Winding::zigzag_earthed);
}

}  // namespace

Reach::Reach(const Context& context, const std::vector<std::optional<ConductorSet>>& wanted,
             const std::vector<std::optional<ConductorSet>>& joins)
    : context_(context),
      network_(context.network),
      wanted_(wanted),
      joins_(joins),
      leaving_(network_.boards.size()),
      arriving_(network_.boards.size()),
      primary_(network_.boards.size()),
      secondary_(network_.boards.size()),
      links_(network_.boards.size()),
      wrong_(network_.submains.size(), false) {
  for (std::size_t k = 0; k < network_.submains.size(); ++k) {
    const models::Submain& submain = network_.submains[k];
    if (submain.from >= 0) leaving_[slot(submain.from)].push_back(k);
    if (submain.to >= 0) arriving_[slot(submain.to)].push_back(k);
  }
  for (std::size_t k = 0; k < network_.transformers.size(); ++k) {
    const models::Transformer& transformer = network_.transformers[k];
    if (transformer.from >= 0) primary_[slot(transformer.from)].push_back(k);
    if (transformer.to >= 0) secondary_[slot(transformer.to)].push_back(k);
  }
  for (std::size_t k = 0; k < network_.links.size(); ++k) {
    const models::Link& link = network_.links[k];
    if (link.from < 0 || link.to < 0) continue;
    links_[slot(link.from)].push_back(k);
    links_[slot(link.to)].push_back(k);
  }
  // A submain with conductors that its board has not is wrong, and passes on all that could be meant; that changes
  // what the boards below it have.
  constexpr int kMostRounds = 4;
  for (int round = 0; round < kMostRounds; ++round) {
    start();
    spread();
    if (!find_wrong()) break;
  }
  join_neutrals();
}

void Reach::start() {
  places_.assign(network_.boards.size(), {});
  order_.clear();
  grown_.clear();
  links_seen_ = backward_seen_ = 0;
  backward_.assign(network_.submains.size(), false);
  link_fed_from_.assign(network_.links.size(), -1);
  for (std::size_t k = 0; k < network_.sources.size(); ++k) {
    const models::Source& source = network_.sources[k];
    if (source.board < 0) continue;
    ConductorSet set = source.lines;
    if (!source.high_voltage && context_.without_neutral.count(static_cast<int>(k)) == 0) set.add(Conductor::N);
    reach(source.board, set, source.U0, source.U, source.high_voltage);
  }
}

void Reach::reach(int board, ConductorSet set, double U0, double U, bool high) {
  Place& place = places_[slot(board)];
  if (!place.reached) {
    place.U0 = U0;
    place.U = U;
    place.high = high;
  }
  if (place.high) {
    set.remove(Conductor::N);
    set.remove(Conductor::PE);
  } else {
    set.add(Conductor::PE);  // where PE begins and ends is the topology's business
  }
  if (place.reached && place.has.contains(set)) return;
  for (const Conductor c : {Conductor::L1, Conductor::L2, Conductor::L3, Conductor::N, Conductor::PE}) {
    if (set.has(c)) place.has.add(c);
  }
  if (!place.reached) order_.push_back(board);
  place.reached = true;
  grown_.push_back(board);
}

ConductorSet Reach::carried(std::size_t k) const {
  const models::Submain& submain = network_.submains[k];
  ConductorSet has;
  const int feeding = backward_[k] ? submain.to : submain.from;
  if (feeding >= 0) has = places_[slot(feeding)].has;
  return wanted_[k] && !wrong_[k] ? *wanted_[k] : has;
}

void Reach::pass(std::size_t k, int from, int to) {
  const Place& place = places_[slot(from)];
  ConductorSet set = carried(k);
  const models::Submain& submain = network_.submains[k];
  if (submain.sequence.given &&
      (submain.sequence.through == models::Return::protective || submain.sequence.through == models::Return::earth)) {
    set.remove(Conductor::N);
  }
  reach(to, set, place.U0, place.U, place.high);
}

void Reach::pass_link(std::size_t k, int from, int to) {
  const Place& place = places_[slot(from)];
  reach(to, joins_[k] ? without(place.has, without(place.has, *joins_[k])) : place.has, place.U0, place.U, place.high);
}

void Reach::spread_from(int board) {
  for (const std::size_t k : leaving_[slot(board)]) {
    if (!backward_[k] && network_.submains[k].to >= 0) pass(k, board, network_.submains[k].to);
  }
  for (const std::size_t k : arriving_[slot(board)]) {
    if (backward_[k]) pass(k, board, network_.submains[k].from);
  }
  for (const std::size_t k : primary_[slot(board)]) {
    const models::Transformer& transformer = network_.transformers[k];
    if (transformer.to < 0) continue;
    ConductorSet set = kLines;
    if (has_neutral(transformer)) set.add(Conductor::N);
    reach(transformer.to, set, transformer.U0, transformer.U, transformer.U > kLowVoltage);
  }
  for (const std::size_t k : links_[slot(board)]) {
    const models::Link& link = network_.links[k];
    if (link_fed_from_[k] == board) pass_link(k, board, link.from == board ? link.to : link.from);
  }
}

// A link feeds where nothing else does.
bool Reach::try_links() {
  bool any = false;
  for (; links_seen_ < order_.size(); ++links_seen_) {
    const int board = order_[links_seen_];
    for (const std::size_t k : links_[slot(board)]) {
      const models::Link& link = network_.links[k];
      const int other = link.from == board ? link.to : link.from;
      if (places_[slot(other)].reached) continue;
      link_fed_from_[k] = board;
      pass_link(k, board, other);
      any = true;
    }
  }
  return any;
}

// So does a submain or a transformer from its far end.
bool Reach::try_backward() {
  for (; backward_seen_ < order_.size(); ++backward_seen_) {
    const int board = order_[backward_seen_];
    bool any = false;
    for (const std::size_t k : arriving_[slot(board)]) {
      const models::Submain& submain = network_.submains[k];
      if (submain.from < 0 || places_[slot(submain.from)].reached) continue;
      backward_[k] = true;
      pass(k, board, submain.from);
      any = true;
    }
    for (const std::size_t k : secondary_[slot(board)]) {
      const models::Transformer& transformer = network_.transformers[k];
      if (transformer.from < 0 || places_[slot(transformer.from)].reached) continue;
      reach(transformer.from, kLines, transformer.primary / kSqrt3, transformer.primary,
            transformer.primary > kLowVoltage);
      any = true;
    }
    if (any) return true;
  }
  return false;
}

void Reach::spread() {
  do {
    // in the order in which they grew, so that boards are reached breadth first
    for (std::size_t k = 0; k < grown_.size(); ++k) spread_from(grown_[k]);
    grown_.clear();
  } while (try_links() || try_backward());
}

bool Reach::find_wrong() {
  bool any = false;
  for (std::size_t k = 0; k < network_.submains.size(); ++k) {
    const models::Submain& submain = network_.submains[k];
    const int feeding = backward_[k] ? submain.to : submain.from;
    if (!wanted_[k] || wrong_[k] || feeding < 0 || !places_[slot(feeding)].reached) continue;
    const Place& place = places_[slot(feeding)];
    ConductorSet wanted = *wanted_[k];
    if (place.high) wanted.remove(Conductor::PE);
    if (place.has.contains(wanted)) continue;
    wrong_[k] = true;
    any = true;
  }
  return any;
}

// Where a combined conductor arrives, or the two are linked, neutral and protective conductor are one potential.
void Reach::join_neutrals() {
  std::vector<int> found;
  const auto join = [&](int board) {
    if (board < 0 || places_[slot(board)].joined || places_[slot(board)].high) return;
    places_[slot(board)].joined = true;
    found.push_back(board);
  };
  const auto combined = [](models::Earthing earthing, const models::StarPoint& star, bool tails, bool link_at_board) {
    if (link_at_board || earthing == models::Earthing::TN_C) return true;
    return earthing == models::Earthing::TN_C_S && !tails && star.kind == models::StarPoint::Kind::solid;
  };
  for (const models::Source& source : network_.sources) {
    if (combined(source.earthing, source.star, source.tails.present, source.link_at_board)) join(source.board);
  }
  for (const models::Transformer& transformer : network_.transformers) {
    if (has_neutral(transformer) &&
        combined(transformer.earthing, transformer.star, transformer.tails.present, transformer.link_at_board)) {
      join(transformer.to);
    }
  }
  for (std::size_t k = 0; k < network_.boards.size(); ++k) {
    if (network_.boards[k].n_pe_link) join(static_cast<int>(k));
  }
  while (!found.empty()) {
    const int board = found.back();
    found.pop_back();
    for (const auto* runs : {&leaving_[slot(board)], &arriving_[slot(board)]}) {
      for (const std::size_t k : *runs) {
        const models::Submain& submain = network_.submains[k];
        const bool by_sequence = submain.sequence.given && submain.sequence.through == models::Return::both;
        if (submain.pen || by_sequence) join(submain.from == board ? submain.to : submain.from);
      }
    }
    for (const std::size_t k : links_[slot(board)]) {
      join(network_.links[k].from == board ? network_.links[k].to : network_.links[k].from);
    }
  }
}

}  // namespace sunder::netlists
