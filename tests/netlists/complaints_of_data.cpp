// SPDX-License-Identifier: Apache-2.0
/// @file
/// What is said about devices and cables, word for word.
#include <catch2/catch.hpp>

#include "tests/netlists/base.h"

namespace sunder::netlists {

TEST_CASE("A device that cannot be understood is refused with the reason", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {20, R"~(device = "gG 63 V")~",
       R"~(20:14+4 error: device of submain 'S1': 'V' is a unit of voltage; a current is written in A, kA, mA | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {20, R"~(device = "gG 64 A")~",
       R"~(20:11+7 error: device of submain 'S1': 'gG' has no rating of 64 A; the nearest are 63 and 80 A
)~"},
      {20, R"~(device = "gg 63 A")~",
       R"~(20:11+2 error: unknown device 'gg' (device of submain 'S1') | did you mean 'gG 63 A'? form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {20, R"~(device = "gG")~",
       R"~(20:11+2 error: device of submain 'S1': 'gG' has no rated current | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {20, R"~(device = "")~",
       R"~(20:11+1 error: device of submain 'S1' is empty | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]; `sunder help devices` lists the families
)~"},
      {20, R"~(device = "gG 63 A 80 kA 9 kA")~",
       R"~(20:25+4 error: '9 kA' is one current too many in device of submain 'S1' | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {20, R"~(device = "gG 63 A quick")~",
       R"~(20:19+5 error: 'quick' is not understood in device of submain 'S1' | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {20, R"~(device = "gG 0 A")~",
       R"~(20:14+3 error: '0 A' of device of submain 'S1' must be above 0 A | form: <family> <In> [<Icn>] [<IdN> [S] [AC|A|F|B]] [class 1|2|3]
)~"},
      {20, R"~(device = 63)~",
       R"~(20:10+2 error: device of submain 'S1' is a number; a text such as "B 32 A" is expected
)~"},
      {20, R"~(device = { In = "63 A" })~",
       R"~(20:10+1 error: device of submain 'S1' has neither 'like' (a family) nor 'latest' (points)
)~"},
      {20, R"~(device = { like = "gX", In = "63 A" })~",
       R"~(20:20+2 error: unknown device family 'gX' of device of submain 'S1' | did you mean 'gG'?
)~"},
      {20, R"~(device = { like = "C", In = "63 A", instantaneous = "10 7" })~",
       R"~(20:54+4 error: instantaneous of device of submain 'S1' must be two multiples of In, the lower first | such as "7 10"
)~"},
      {20, R"~(device = { like = "C", In = "63 A", latest = [] })~",
       R"~(20:46+2 error: device of submain 'S1' has both 'like' and 'latest'; points stand without a family
)~"},
      {20, R"~(device = "gG 63 A 30 mA")~",
       R"~(20:11+13 error: device of submain 'S1': 'gG' is a fuse: it does not act on residual current
)~"},
      {20, R"~(device = "C 63 A 30 mA S")~",
       R"~(20:11+14 error: device of submain 'S1': type S exists above 30 mA only, not with 30 mA
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
)~",
       R"~(28:9+1 error: device 'd' is given by points and has no 'latest'
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
latest = []
)~",
       R"~(32:10+2 error: latest of device 'd' has no points
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
latest = [["200 A"]]
)~",
       R"~(32:11+9 error: latest of device 'd': a pair of two texts is expected
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
latest = [["200 A", "10 s"], ["100 A", "1 s"]]
)~",
       R"~(32:32+5 error: latest of device 'd': currents must not fall from point to point
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
latest = [["200 A", "10 s"], ["300 A", "11 s"]]
)~",
       R"~(32:41+4 error: latest of device 'd': times must not rise with the current
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
latest = [["200 A", "10 A"]]
)~",
       R"~(32:22+4 error: latest of device 'd': 'A' is a unit of current; a time is written in s, ms, min, h
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
source = "maker"
latest = [["200 A", "10 s"], ["400 A", "1 s"]]
earliest = [["150 A", "20 s"], ["400 A", "2 s"]]
)~",
       R"~(33:12+1 error: device 'd': earliest time is above the latest at 400 A
)~"},
      {0, R"~([device.d]
kind = "fuse"
In = "100 A"
latest = [["200 A", "10 s"]]
)~",
       R"~(28:9+1 error: device 'd' is given by points and has no 'source'
)~"},
      {0, R"~([device.d]
kind = "residual"
In = "100 A"
source = "maker"
latest = [["30 mA", "0.3 s"]]
)~",
       R"~(28:9+1 error: device 'd' is given by points and has no 'IdN'
)~"},
      {0, R"~([device.gG]
like = "C"
In = "6 A"
)~",
       R"~(28:9+2 error: device 'gG' has the name of a device family; choose another
)~"},
      {0, R"~([device]
d = 3
)~",
       R"~(29:5+1 error: device 'd' is a number; a table is expected
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

TEST_CASE("A cable that cannot be understood is refused with the reason", "[netlists]") {
  const std::vector<Complaint> complaints = {
      {21, R"~(cable = "multicore-xlpe-5c 16 mm2")~",
       R"~(21:10+17 error: unknown cable 'multicore-xlpe-5c' | did you mean 'multicore-xlpe-cu-5c'?
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 17 mm2")~",
       R"~(21:10+27 error: cable of submain 'S1': 'multicore-xlpe-cu-5c' has no 17 mm2; the nearest are 16 and 25 mm2
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 16")~",
       R"~(21:10+23 error: cable 'multicore-xlpe-cu-5c 16' of submain 'S1' has a size without the unit mm2 | form: <construction> <size> mm2, or <construction> <size>/<cpc size> mm2
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c")~",
       R"~(21:10+20 error: cable 'multicore-xlpe-cu-5c' of submain 'S1' is no construction with a size | form: <construction> <size> mm2, or <construction> <size>/<cpc size> mm2; `sunder help cables` lists the constructions
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c x mm2")~",
       R"~(21:10+26 error: 'x' is no size, in the cable of submain 'S1' | form: <construction> <size> mm2, or <construction> <size>/<cpc size> mm2
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 16/6 mm2")~",
       R"~(21:10+29 error: cable of submain 'S1': 'multicore-xlpe-cu-5c' has equal cores; no second size fits
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-4c 16 mm2")~",
       R"~(21:10+27 error: cable of submain 'S1' has no core left for the protective conductor; say with cpc where it is | a cpc is: "core", "armour", "armour + core", "armour + 16 mm2", "16 mm2" or "PEN"
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 16 mm2"
cpc = "armour")~",
       R"~(22:8+6 error: cpc of submain 'S1': 'multicore-xlpe-cu-5c' 16 mm2 has no armour
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 16 mm2"
cpc = "armor")~",
       R"~(22:8+5 error: unknown cpc 'armor' of submain 'S1' | a cpc is: "core", "armour", "armour + core", "armour + 16 mm2", "16 mm2" or "PEN"
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 16 mm2"
cpc = "core + core")~",
       R"~(22:8+11 error: cpc 'core + core' of submain 'S1' names a part twice | a cpc is: "core", "armour", "armour + core", "armour + 16 mm2", "16 mm2" or "PEN"
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-5c 16 mm2"
cpc = "17 mm2")~",
       R"~(22:8+6 error: cpc of submain 'S1': 'singles-pvc-cu' has no 17 mm2; the nearest are 16 and 25 mm2
)~"},
      {21, R"~(cable = "multicore-xlpe-cu-3c 16 mm2")~",
       R"~(21:10+27 error: cable of submain 'S1': 'multicore-xlpe-cu-3c' has 3 cores, but 4 loaded conductors are needed
)~"},
      {21, R"~(cable = 16)~",
       R"~(21:9+2 error: cable of submain 'S1' is a number; a text is expected | form: <construction> <size> mm2, or <construction> <size>/<cpc size> mm2
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
)~",
       R"~(28:8+1 error: cable 'c' has no 'sizes', which is obligatory | sizes: Its sizes.
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
sizes = []
)~",
       R"~(32:9+2 error: sizes of cable 'c' is an empty list
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
sizes = [3]
)~",
       R"~(32:10+1 error: a size of cable 'c' is a number; a table is expected
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
sizes = [{ size = "16 mm2" }]
)~",
       R"~(32:10+1 error: a size of cable 'c' has no 'r20', which is obligatory | r20: Resistance of a line conductor at 20 degC.
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
sizes = [{ size = "16 mm2", r20 = "11.5 mohm/m" }]
)~",
       R"~(32:36+11 warning: r20 of 16 mm2 of cable 'c' times its area is 10.7 times the resistivity of copper
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
sizes = [{ size = "16 mm2", r20 = "1.15 mohm/m" }, { size = "16 mm2", r20 = "1.15 mohm/m" }]
)~",
       R"~(32:52+1 error: 16 mm2 of cable 'c' is given twice
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
sizes = [{ size = "16 mm2", r20 = "1.15 mohm/m", armour_area = "40 mm2" }]
)~",
       R"~(32:10+1 error: 16 mm2 of cable 'c': armour_area and armour_r20 go together
)~"},
      {0, R"~([cable.c]
material = "copper"
insulation = "xlpe90"
cores = 4
built_in_cpc = true
sizes = [{ size = "16 mm2", r20 = "1.15 mohm/m", cpc_size = "6 mm2" }]
)~",
       R"~(33:10+1 error: 16 mm2 of cable 'c': cpc_size and cpc_r20 go together
)~"},
      {0, R"~([cable.flat-pvc-cu]
material = "copper"
insulation = "xlpe90"
cores = 4
)~",
       R"~(28:8+11 error: cable 'flat-pvc-cu' has the name of a construction of the library; choose another
)~"},
      {0, R"~([cable.c]
material = "gold"
insulation = "xlpe90"
cores = 4
sizes = [{ size = "16 mm2", r20 = "1.15 mohm/m" }]
)~",
       R"~(29:13+4 error: unknown material 'gold' of cable 'c' | valid are: copper, aluminium
)~"},
  };
  for (const Complaint& complaint : complaints) {
    CAPTURE(complaint.line, complaint.text);
    CHECK(said(read_network_text(spoiled(complaint.line, complaint.text), "base.toml", "/")) == complaint.said);
  }
}

}  // namespace sunder::netlists
