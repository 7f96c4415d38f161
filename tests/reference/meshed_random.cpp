// SPDX-License-Identifier: Apache-2.0
// Networks drawn from a written seed: a part above 1 kV, several parts below, transformers between them.
#include <algorithm>
#include <cmath>

#include "tests/reference/meshed.h"
#include "tests/reference/meshed_elements.h"

namespace sunder::reference::meshed {

namespace {

class Drawing : private Elements {
 public:
  explicit Drawing(unsigned seed) : Elements(seed) {
    n_.title = "meshed reference network drawn from seed " + std::to_string(seed);
    n_.bs = chance(50);
    most_nodes_ = 10 + below(51);
  }

  Network draw() {
    if (chance(65)) draw_high();
    const int n_parts = 1 + below(3);
    for (int i = 0; i < n_parts && room(4); ++i) draw_part();
    return n_;
  }

 private:
  // 110 kV or nothing above; then 10 or 20 kV with loops; perhaps 6 kV behind it.
  void draw_high() {
    const double U = one_of({10e3, 20e3});
    const int first = add_board(U, U / std::sqrt(3.0), true, kHigh);
    high_ = {first};
    if (chance(35)) {
      const int top = add_board(110e3, 110e3 / std::sqrt(3.0), true, kHigh);
      add_high_supply(top);
      Transformer t = chance(50) ? transformer(top, first, "D", "yn", clock(true))
                                 : transformer(top, first, one_of<const char*>({"YN", "Y"}), "yn", clock(false));
      t.rating = one_of({25e6, 40e6});
      t.losses = std::round(t.rating * between(0.004, 0.006));
      t.uk = between(0.09, 0.13);
      t.earthing = Earthing::none;
      if (chance(60)) t.star = {StarPoint::Kind::impedance, impedance(1, 40, 0.1, 1)};
      if (t.primary_group == "YN" && chance(50))
        t.primary_star = {StarPoint::Kind::impedance, impedance(1, 10, 0.1, 2)};
      n_.transformers.push_back(t);
    } else {
      add_high_supply(first);
    }
    const int more = below(4);
    for (int i = 0; i < more; ++i) {
      const int from = high_[static_cast<std::size_t>(below(static_cast<int>(high_.size())))];
      const int to = add_board(U, U / std::sqrt(3.0), true, kHigh);
      add_high_run(from, to);
      high_.push_back(to);
    }
    if (high_.size() > 2 && chance(60)) add_high_run(high_.back(), first);
    if (high_.size() > 1 && chance(25)) add_high_supply(high_.back());
    if (chance(40)) draw_middle(first);
  }

  // 6 kV: a unit that gives it an earth, and perhaps one without a star beside it.
  void draw_middle(int from) {
    const int to = add_board(6e3, 6e3 / std::sqrt(3.0), true, kHigh);
    const int hours = clock(true);
    Transformer earthed = transformer(from, to, "D", "yn", hours);
    Transformer beside = transformer(from, to, "YN", "d", hours);
    if (chance(50)) {
      earthed = transformer(from, to, one_of<const char*>({"YN", "Y"}), "yn", hours - 1);
      beside = transformer(from, to, "D", "d", hours - 1);
    } else if (chance(30)) {
      beside = transformer(from, to, "Y", "d", hours);
    }
    if (beside.primary_group == "YN" && chance(50)) {
      beside.primary_star = {StarPoint::Kind::impedance, impedance(1, 20, 0.1, 2)};
    }
    if (chance(50)) earthed.star = {StarPoint::Kind::impedance, impedance(1, 20, 0.1, 1)};
    earthed.earthing = beside.earthing = Earthing::none;
    n_.transformers.push_back(earthed);
    if (chance(75)) n_.transformers.push_back(beside);
    if (chance(50)) {
      const int far = add_board(6e3, 6e3 / std::sqrt(3.0), true, kHigh);
      add_high_run(to, far);
    }
    if (chance(50)) add_motor(static_cast<int>(n_.boards.size()) - 1, -1);
    high_.push_back(static_cast<int>(n_.boards.size()) - 1);
  }

  // ---- below 1 kV

  void draw_part() {
    Part part;
    part.earthing = one_of({Earthing::tn_s, Earthing::tn_s, Earthing::tn_s, Earthing::tn_c_s, Earthing::tn_c_s,
                            Earthing::tn_c, Earthing::tt, Earthing::it});
    if (chance(15)) {
      part.U = 690;
      part.U0 = 400;
    }
    const int main = add_board(part.U, part.U0, false, kAll);
    part.boards = part.full = {main};
    part.apart = part.earthing == Earthing::tn_s || (part.earthing == Earthing::tn_c_s && chance(50));
    if (is_tn(part.earthing) && !part.apart) part.pen = {main};
    draw_first_source(part, main);
    const int n_boards = 2 + below(9);
    for (int i = 1; i < n_boards && room(); ++i) extend(part);
    draw_loops(part);
    draw_further_sources(part);
    draw_earths(part);
    for (const int b : part.boards) draw_circuits(b);
    draw_motors(part);
    last_full_ = part.full;
    last_earthing_ = part.earthing;
  }

  void draw_first_source(const Part& part, int main) {
    const bool from_low = !last_full_.empty() && part.earthing != Earthing::tt && chance(25);
    if ((!high_.empty() && chance(75)) || from_low) {
      const auto& above = from_low ? last_full_ : high_;
      const int from = above[static_cast<std::size_t>(below(static_cast<int>(above.size())))];
      const int n = chance(30) ? 2 : 1;
      const int kind = below(from_low ? 4 : 5);
      const int hours = clock(kind < 2);
      for (int i = 0; i < n; ++i) {
        Transformer t = kind == 0   ? transformer(from, main, "D", "yn", hours)
                        : kind == 1 ? transformer(from, main, "Y", "zn", hours)
                        : kind == 2 ? transformer(from, main, "Y", "yn", hours)
                        : kind == 3 ? transformer(from, main, "D", "zn", hours)
                                    : transformer(from, main, "YN", "yn", hours);
        t.earthing = part.earthing;
        if (part.earthing == Earthing::it) {
          t.star = {StarPoint::Kind::impedance, impedance(20, 300, 0.01, 0.1)};
        } else if (part.earthing == Earthing::tn_s && chance(15)) {
          t.star = {StarPoint::Kind::impedance, impedance(0.01, 0.5, 0.1, 1)};
        } else if (part.earthing == Earthing::tn_s && chance(15)) {
          t.no_link = true;
          board(main).n_pe_link = true;
        }
        draw_tails(part, t.tails, &t.link_at_board);
        n_.transformers.push_back(t);
      }
      return;
    }
    Source s;
    s.board = main;
    s.earthing = part.earthing;
    const int kind = part.earthing == Earthing::it ? 0 : below(4);
    if (kind <= 1) {
      s.kind = Source::Kind::supply;
      s.name = name("AL");
      draw_supply(s, part);
    } else if (kind == 2) {
      s.kind = Source::Kind::transformer;
      s.name = name("C");
      draw_transformer_source(s, part);
    } else {
      draw_generator(s, part);
    }
    add_source(s);
  }

  // Keeps the order of kinds, which is that of the names.
  void add_source(const Source& s) {
    auto place = n_.sources.begin();
    while (place != n_.sources.end() && place->name < s.name) ++place;
    n_.sources.insert(place, s);
  }

  // One more board, fed from an earlier one.
  void extend(Part& part) {
    const int to = add_board(part.U, part.U0, false, kAll);
    const int kind = below(100);
    if (kind < 20 && !part.pen.empty()) {
      Run run = full_run(any(part.pen), to);
      run.length = cable({6, 7, 8}, 90);
      run.length.pen = true;
      if (chance(40)) run = sequence_run(run.from, to, Return::both);
      n_.runs.push_back(run);
      part.pen.push_back(to);
      part.full.push_back(to);
    } else if (kind < 30) {
      // Two lines that belong together: one with a neutral, one with a protective conductor.
      const int from = any(part.full);
      n_.runs.push_back(sequence_run(from, to, Return::neutral));
      n_.runs.push_back(sequence_run(from, to, Return::protective));
      part.full.push_back(to);
    } else if (kind < 38) {
      Link link;
      link.name = name("K");
      link.from = any(part.full);
      link.to = to;
      link.has = kAll;
      n_.links.push_back(link);
      part.full.push_back(to);
    } else if (kind < 48) {
      Run run = full_run(any(part.full), to);
      run.has = kNoNeutral;
      board(to).has = kNoNeutral;
      n_.runs.push_back(run);
    } else if (kind < 58) {
      Run run = full_run(any(part.full), to);
      run.has = {false, false, false, true, true};
      run.has[static_cast<std::size_t>(below(3))] = true;
      run.length.cable = one_of({9, 10});
      board(to).has = run.has;
      n_.runs.push_back(run);
    } else if (kind < 66 && part.earthing != Earthing::it) {
      // An electrode of its own, and no protective conductor to it.
      Run run = full_run(any(part.full), to);
      run.length.separate_pe = false;
      run.has = kNoPE;
      if (chance(30)) {
        run = sequence_run(run.from, to, Return::earth);
        board(to).has = kNoNeutral;
      }
      n_.runs.push_back(run);
      n_.electrodes.push_back({name("E"), to, between(2, 60)});
    } else {
      n_.runs.push_back(full_run(any(part.full), to));
      part.full.push_back(to);
    }
    part.boards.push_back(to);
  }

  void draw_loops(const Part& part) {
    if (part.full.size() < 2) return;
    const int n_loops = below(4);
    for (int i = 0; i < n_loops; ++i) {
      const int from = any(part.full);
      const int to = any(part.full);
      if (from == to) continue;
      n_.runs.push_back(full_run(from, to));
      if (chance(30)) n_.runs.push_back(full_run(from, to));
    }
    if (chance(30)) {
      const int from = any(part.full);
      const int to = any(part.full);
      const bool joined = std::any_of(n_.links.begin(), n_.links.end(), [&](const Link& link) {
        return (link.from == from && link.to == to) || (link.from == to && link.to == from);
      });
      if (from != to && !joined) n_.links.push_back({name("K"), from, to, kAll, chance(50)});
    }
  }

  void draw_further_sources(const Part& part) {
    const int n_more = part.earthing == Earthing::it ? 0 : below(3);
    for (int i = 0; i < n_more; ++i) {
      Source s;
      s.board = any(part.full);
      s.earthing = part.earthing;
      if (chance(70)) {
        draw_generator(s, part);
        if (is_tn(part.earthing) && chance(40)) {
          s.star = {StarPoint::Kind::open, {}};
        } else if (part.earthing == Earthing::tn_s && chance(30)) {
          s.star = {StarPoint::Kind::impedance, impedance(0.1, 5, 0.1, 1)};
        }
      } else {
        s.name = name("AL");
        draw_supply(s, part);
      }
      add_source(s);
    }
  }

  void draw_earths(const Part& part) {
    const int main = part.boards.front();
    const auto earth = [&](int b, double most) {
      const bool has_one = std::any_of(n_.electrodes.begin(), n_.electrodes.end(),
                                       [&](const Electrode& electrode) { return electrode.board == b; });
      if (!has_one) n_.electrodes.push_back({name("E"), b, between(1, most)});
    };
    if (!is_tn(part.earthing)) earth(main, 40);
    for (const int b : part.boards) {
      if (is_tn(part.earthing) && board(b).has[kPE] && chance(12)) earth(b, 100);
      if (is_tn(part.earthing) && board(b).has[kN] && board(b).has[kPE] && chance(10)) board(b).n_pe_link = true;
      if (chance(8)) n_.bonds.push_back({name("P"), b, -1, impedance(0.2, 20, 0.02, 0.2)});
    }
    if (part.boards.size() > 2 && chance(50)) {
      const int to = part.boards.back();
      n_.bonds.push_back({name("P"), main, to, impedance(0.002, 0.1, 0.1, 1)});
    }
    if (!last_full_.empty() && is_tn(part.earthing) && is_tn(last_earthing_) && chance(50)) {
      n_.bonds.push_back({name("P"), last_full_.back(), main, impedance(0.005, 0.1, 0.1, 1)});
    }
  }

  void draw_circuits(int b) {
    const Has& there = board(b).has;
    const int n_circuits = below(5);
    for (int i = 0; i < n_circuits && room(); ++i) {
      Circuit c;
      c.name = "W" + std::to_string(i + 1);
      c.board = b;
      c.has = there;
      const bool three = there[0] && there[1] && there[2];
      if (three && chance(60)) {
        c.has[0] = c.has[1] = c.has[2] = false;
        const auto line = static_cast<std::size_t>(below(3));
        c.has[line] = true;
        if (!there[kN]) c.has[(line + 1) % 3] = true;
      } else if (three && chance(40)) {
        c.has[kN] = false;
      }
      const auto n_live = std::count(c.has.begin(), c.has.begin() + 4, true);
      c.length = n_live == 2 ? cable({9, 10}, 60) : cable({0, 1, 4}, 60);
      if (c.length.in_parallel == 1 && chance(20)) {
        c.ring = true;
        if (room(2) && chance(50)) c.spurs = {{between(1, c.length.metres), between(1, 12)}};
        if (!c.spurs.empty() && c.spurs[0][0] >= c.length.metres) c.spurs.clear();
      }
      n_.circuits.push_back(c);
    }
  }

  void draw_motors(const Part& part) {
    for (std::size_t i = 0; i < n_.circuits.size(); ++i) {
      const Circuit& c = n_.circuits[i];
      const bool own = std::find(part.boards.begin(), part.boards.end(), c.board) != part.boards.end();
      if (own && !c.ring && c.has[0] && c.has[1] && c.has[2] && chance(50)) add_motor(c.board, static_cast<int>(i));
    }
    if (chance(40)) add_motor(any(part.full), -1);
  }

  std::vector<int> high_;
  std::vector<int> last_full_;
  Earthing last_earthing_ = Earthing::tn_s;
};

}  // namespace

Network random_network(unsigned seed) { return Drawing(seed).draw(); }

}  // namespace sunder::reference::meshed
