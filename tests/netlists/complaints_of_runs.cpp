// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about submains and circuits, word for word.
#include <catch2/catch.hpp>

#include "tests/netlists/base.h"

namespace sunder::netlists {

TEST_CASE("A submain is read strictly and unusual values are warned about", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {19, R"~(to = "intake")~",
       R"~(15:8+1 error: nothing feeds board 'shop' | a supply, a transformer or a submain leads to a board
19:7+6 error: submain 'S1' leads from board 'intake' to itself
)~"},
      {18, R"~(from = "shed")~",
       R"~(18:9+4 error: unknown board 'shed' | boards are: intake, shop
)~"},
      {20, R"~()~",
       R"~(17:10+1 error: submain 'S1' has no 'device', which is obligatory | device: The device at its start.
)~"},
      {22, R"~(length = "-30 m")~",
       R"~(22:11+5 error: length of submain 'S1' is -30 m; it must be above 0 m
)~"},
      {22, R"~(length = "0 m")~",
       R"~(22:11+3 error: length of submain 'S1' is 0 m; it must be above 0 m
)~"},
      {22, R"~(length = "35 mm2")~",
       R"~(22:11+6 error: length of submain 'S1': 'mm2' is a unit of area; a length is written in m, km, cm, mm
)~"},
      {22, R"~(length = "35")~",
       R"~(22:11+2 error: length of submain 'S1': '35' has no unit; a length is written in m, km, cm, mm
)~"},
      {22, R"~(length = 35)~",
       R"~(22:10+2 error: length of submain 'S1' is 35 without a unit | units that fit: m, km, cm, mm
)~"},
      {22, R"~(length = "1200 m")~",
       R"~(22:11+6 warning: length of submain 'S1' is 1200 m; usual are 0.5 m to 1000 m
)~"},
      {22, R"~(length = "1e999 m")~",
       R"~(22:11+7 error: length of submain 'S1': the number of '1e999 m' is out of range
)~"},
      {22, R"~(length = true)~",
       R"~(22:10+4 error: length of submain 'S1' is true or false; a text with a unit (m, km, cm, mm) is expected
)~"},
      {22, R"~(length = "35,5 m")~",
       R"~(22:11+6 error: length of submain 'S1': '35,5 m' has a comma in its number; write '35.5 m'
)~"},
      {24, R"~(pf = 1.2)~",
       R"~(24:6+3 error: pf of submain 'S1' is 1.2; it must be at most 1
)~"},
      {24, R"~(pf = "high")~",
       R"~(24:7+4 error: pf of submain 'S1' is 'high'; a number is expected
)~"},
      {24, R"~(pf = 0.3)~",
       R"~(24:6+3 warning: pf of submain 'S1' is 0.3; usual are 0.5 to 1
)~"},
      {24, R"~(in_parallel = 1.5)~",
       R"~(24:15+3 error: in_parallel of submain 'S1' is 1.5; a whole number is expected
)~"},
      {24, R"~(in_parallel = 0)~",
       R"~(24:15+1 error: in_parallel of submain 'S1' is 0; it must be at least 1
)~"},
      {24, R"~(phases = "L1 L1")~",
       R"~(24:14+2 error: phases of submain 'S1' names L1 twice | expected: "L1", "L1 L2", "L1 L2 L3" or "L1 L2 L3 N"
)~"},
      {24, R"~(phases = "N")~",
       R"~(24:11+1 error: phases of submain 'S1' names no line | expected: "L1", "L1 L2", "L1 L2 L3" or "L1 L2 L3 N"
)~"},
      {24, R"~(phases = "L1 L2 L3 PE")~",
       R"~(24:20+2 error: unknown phase 'PE' of submain 'S1' | expected: "L1", "L1 L2", "L1 L2 L3" or "L1 L2 L3 N"
)~"},
      {24, R"~(phases = "L1")~",
       R"~(27:33+8 error: circuit 'shop/W2' needs L2 L3, but board 'shop' has L1 N
)~"},
      {23, R"~(demand = "12 A")~",
       R"~(23:11+1 warning: demand of submain 'S1' is 12 A, below the largest load of board 'shop', 20 A
)~"},
      {23, R"~(demand = "40 A")~",
       R"~(23:11+1 warning: demand of submain 'S1' is 40 A, above the sum of the loads of board 'shop', 31 A in one line
)~"},
      {24, R"~(selective = "always")~",
       R"~(24:14+6 error: selective of submain 'S1' is 'always'; "total" or a current is expected
)~"},
      {24, R"~(Iz = "5000 A")~",
       R"~(24:7+6 warning: Iz of submain 'S1' is 5 kA; usual are 5 A to 3 kA
)~"},
      {24, R"~(lenght = "3 m")~",
       R"~(24:1+6 error: unknown key 'lenght' in submain 'S1' | did you mean 'length'?
)~"},
      {24, R"~(colour = "red")~",
       R"~(24:1+6 error: unknown key 'colour' in submain 'S1' | it may have: from, to, phases, device, cable, cpc, z1, z0, return, length, in_parallel, installed, Iz, demand, pf, selective
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("A circuit is read strictly and unusual values are warned about", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {26,
       R"~(W1 = { use = "sockets", phases = "L4", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, load = "20 A", pf = 1 })~",
       R"~(26:35+2 error: unknown phase 'L4' of circuit 'shop/W1' | expected: "L1", "L1 L2", "L1 L2 L3" or "L1 L2 L3 N"
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", spurs = [{ at = "20 m", length = "4 m" }], load = "20 A", pf = 1 })~",
       R"~(26:124+33 error: circuit 'shop/W1' has spurs but is no ring | ring = true
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, in_parallel = 2, load = "20 A", pf = 1 })~",
       R"~(26:143+1 error: circuit 'shop/W1' is a ring and cannot have cables in parallel
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, spurs = [{ at = "41 m", length = "4 m" }], load = "20 A", pf = 1 })~",
       R"~(26:138+1 error: a spur of circuit 'shop/W1' is at 41 m, beyond the ring of 40 m
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, spurs = [{ at = "20 m" }], load = "20 A", pf = 1 })~",
       R"~(26:138+1 error: a spur of circuit 'shop/W1' has no 'length', which is obligatory | length: Its length.
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, spurs = 3, load = "20 A", pf = 1 })~",
       R"~(26:137+1 error: spurs of circuit 'shop/W1' is a number; a list of tables is expected
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = 1, load = "20 A", pf = 1 })~",
       R"~(26:123+1 error: ring of circuit 'shop/W1' is a number; true or false is expected
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = "maybe", load = "20 A", pf = 1 })~",
       R"~(26:124+5 error: ring of circuit 'shop/W1' is 'maybe'; true or false is expected
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 20 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, load = "20 A", pf = 1 })~",
       R"~(26:50+11 warning: circuit 'shop/W1' is a ring on a device of 20 A; usual are 30 A and 32 A
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "0 m", ring = true, load = "20 A", pf = 1 })~",
       R"~(26:109+3 error: length of circuit 'shop/W1' is 0 m; it must be above 0 m
)~"},
      {26,
       R"~(W1 = { use = "sockets", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1 mm2", length = "40 m", ring = true, load = "20 A", pf = 1 })~",
       R"~(26:73+21 error: cable of circuit 'shop/W1': 'flat-pvc-cu' of 2.5 mm2 has a protective conductor of 1.5 mm2
)~"},
      {26,
       R"~(W1 = { use = "socket", phases = "L1", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, load = "20 A", pf = 1 })~",
       R"~(26:15+6 error: unknown use 'socket' of circuit 'shop/W1' | did you mean 'sockets'?
)~"},
      {26,
       R"~(W1 = { use = "sockets", device = "B 32 A 6 kA", cable = "flat-pvc-cu 2.5/1.5 mm2", length = "40 m", ring = true, load = "20 A", pf = 1 })~",
       R"~(26:1+1 error: circuit 'shop/W1' has no 'phases', which is obligatory | phases: Its live conductors: "L2" has a neutral, "L1 L2" and "L1 L2 L3" have none.
)~"},
      {26, R"~(W1 = 3)~",
       R"~(26:6+1 error: circuit 'shop/W1' is a number; a table is expected
)~"},
      {25, R"~([circuit.shpo])~",
       R"~(25:10+4 error: unknown board 'shpo' | did you mean 'shop'?
)~"},
      {27,
       R"~(W2 = { use = "fixed", phases = "L1 L2 L3 N", device = "C 16 A 6 kA", cable = "multicore-xlpe-cu-3c 2.5 mm2", length = "21 m", load = "11 A", pf = 0.8 })~",
       R"~(27:79+28 error: cable of circuit 'shop/W2': 'multicore-xlpe-cu-3c' has 3 cores, but 4 loaded conductors are needed
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

}  // namespace sunder::netlists
