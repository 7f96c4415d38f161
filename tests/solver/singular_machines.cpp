// SPDX-License-Identifier: Apache-2.0
// What transformers, generators and inverters leave open: told with what would decide it, never a number.
#include "tests/solver/singular.h"

using namespace sunder;
using namespace sunder::tests::singular;
using Catch::Matchers::Contains;
using Catch::Matchers::WithinRel;
using tests::read;

TEST_CASE("A star-star unit without zero-sequence data has a floating neutral", "[singular]") {
  const std::string text = kUtility + unit("vector = \"Yyn0\"\nearthing = \"TN-S\"\n");
  CHECK(needs(text, "lv", Fault::line_neutral) == "r0_over_r1 and x0_over_x1 of T1");
  CHECK(needs(text, "lv", Fault::line_earth) == "r0_over_r1 and x0_over_x1 of T1");
  CHECK(needs(text, "lv", Fault::two_lines_earth) == "r0_over_r1 and x0_over_x1 of T1");
  CHECK(current(text, "lv", Fault::line_line) > 1000);
  CHECK(current(text + "r0_over_r1 = 2\nx0_over_x1 = 10\n", "lv", Fault::line_earth) > 1000);
}

TEST_CASE("A star-star source without zero-sequence data asks for them too", "[singular]") {
  const std::string text = kRules + R"([board.lv]
[transformer.T1]
feeds = "lv"
voltage = "230/400 V"
rating = "400 kVA"
uk = "4 %"
x_over_r = 4
fault_level = "250 MVA"
vector = "Yyn0"
earthing = "TN-S"
)";
  CHECK_THAT(needs(text, "lv", Fault::line_neutral), Contains("x0_over_x1 of T1"));
  CHECK_THAT(needs(text, "lv", Fault::line_earth), Contains("x0_over_x1 of T1"));
}

TEST_CASE("A generator without x0 asks for it where its star point takes part", "[singular]") {
  const std::string text = kRules + R"([board.main]
[generator.G]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
rating = "250 kVA"
xd_subtransient = "12 %"
sustained = 3
)";
  CHECK(needs(text, "main", Fault::line_neutral) == "G.x0");
  CHECK(needs(text, "main", Fault::line_earth) == "G.x0");
  CHECK_THAT(current(text, "main", Fault::three_phase), WithinRel(1.1 * 400 / std::sqrt(3) / (0.12 * 0.64), 1e-9));
}

TEST_CASE("A generator without a sustained current or xd has no least current", "[singular]") {
  const models::Network network = read(kRules + R"([board.main]
[generator.G]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
rating = "250 kVA"
xd_subtransient = "12 %"
x0 = "5 %"
)");
  for (const FaultDetail& detail : details(network, "main", Fault::three_phase)) {
    CHECK(detail.row.known == (detail.row.condition == Condition::maximum));
    if (!detail.row.known) CHECK(detail.row.needs == "G.sustained");
  }
}

TEST_CASE("A winding without star point has no line-earth current and no neutral", "[singular]") {
  for (const char* vector : {"Dd0", "Yd1", "YNd11"}) {
    const std::string text = kUtility + unit(std::string("vector = \"") + vector + "\"\n");
    INFO(vector);
    CHECK_FALSE(needs(text, "lv", Fault::line_earth).empty());
    const models::Network network = read(text);
    CHECK(current(text, "lv", Fault::three_phase) > 1000);
    solver::FaultQuery query;
    query.at = "lv";
    query.fault = Fault::line_neutral;
    const auto answer = solver::study_faults(network, query);
    REQUIRE(std::holds_alternative<std::string>(answer));
    CHECK(std::get<std::string>(answer) == "no line-neutral fault is possible at 'lv': its conductors are not there");
  }
}

TEST_CASE("An earthed star on both sides hands on that the zero sequence before it is not declared", "[singular]") {
  // The supply declares its power alone. Whatever zero sequence the secondary carries would flow in it.
  const std::string text = kUtility + unit("vector = \"YNyn0\"\nearthing = \"TN-S\"\nr0_over_r1 = 1\nx0_over_x1 = 1\n");
  CHECK_THAT(needs(text, "hv", Fault::line_earth), Contains("line_earth of utility"));
  CHECK_THAT(needs(text, "lv", Fault::line_earth), Contains("line_earth of utility"));
  CHECK_THAT(needs(text, "lv", Fault::line_neutral), Contains("line_earth of utility"));
  // 20 kV, 250 MVA: 1.1 x 250 MVA / 1.1 = S; the fault between lines has half the root of three of it.
  CHECK_THAT(current(text, "hv", Fault::three_phase), WithinRel(250e6 / std::sqrt(3) / 20e3, 1e-9));
  CHECK_THAT(current(text, "hv", Fault::line_line), WithinRel(250e6 / 2 / 20e3, 1e-9));
  CHECK(current(text, "lv", Fault::three_phase) > 1000);
}

TEST_CASE("A part between two units, behind a delta, floats and is solved between its lines", "[singular]") {
  const std::string text = kUtility + R"([board.mv]
[transformer.T0]
from = "hv"
feeds = "mv"
primary = "20 kV"
voltage = "6 kV"
secondary = "6 kV"
rating = "4 MVA"
uk = "6 %"
x_over_r = 10
vector = "Yd1"
[transformer.T1]
from = "mv"
feeds = "lv"
primary = "6 kV"
secondary = "400 V"
voltage = "230/400 V"
rating = "400 kVA"
uk = "4 %"
x_over_r = 10
earthing = "TN-S"
)";
  CHECK_FALSE(needs(text, "mv", Fault::line_earth).empty());
  // All angles are nearly those of X/R = 10: on 400 V, 1.1 x 0.16/250, 0.06 x 0.16/4, 0.04 x 0.16/0.4 ohm.
  const double ohms = 1.1 * 0.16 / 250 + 0.06 * 0.16 / 4 + 0.04 * 0.16 / 0.4;
  CHECK_THAT(current(text, "lv", Fault::three_phase), WithinRel(1.1 * 400 / std::sqrt(3) / ohms, 1e-4));
}

TEST_CASE("An inverter alone delivers its limit into every fault, at its own terminals too", "[singular]") {
  const std::string text = kRules + R"([board.main]
[board.b]
[inverter.U]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
stages = [["600 A", "20 ms"], ["150 A"]]
[submain.S1]
from = "main"
to = "b"
)" + kCable;
  for (const char* board : {"main", "b"})
    for (const Fault fault : {Fault::three_phase, Fault::line_line, Fault::line_neutral, Fault::line_earth}) {
      INFO(board << " " << word(fault));
      CHECK(current(text, board, fault) == 600);
      CHECK(current(text, board, fault, Condition::minimum) == 150);
    }
  // What flows on the way is that current, not more.
  for (const FaultDetail& detail : details(read(text), "b", Fault::line_earth, true)) {
    CHECK_THAT(std::abs(detail.into_fault[0]), WithinRel(detail.row.current, 1e-9));
    for (const solver::ElementCurrent& element : detail.elements)
      CHECK(std::abs(element.amps[0]) <= detail.row.current * (1 + 1e-9));
  }
}

TEST_CASE("An inverter that only follows feeds nothing alone", "[singular]") {
  const models::Network network = read(kRules + R"([board.main]
[inverter.U]
feeds = "main"
voltage = "230/400 V"
earthing = "TN-S"
follows = true
stages = [["600 A", "20 ms"], ["150 A"]]
)");
  for (const FaultDetail& detail : details(network, "main", Fault::line_earth)) CHECK_FALSE(detail.row.known);
}

TEST_CASE("The neutral of an IT generator is brought out though its star point is not earthed", "[singular]") {
  const std::string text = kRules + R"([board.main]
[generator.G]
feeds = "main"
voltage = "230/400 V"
earthing = "IT"
rating = "250 kVA"
xd_subtransient = "12 %"
x0 = "5 %"
r = "0 %"
sustained = 3
[electrode.rod]
board = "main"
resistance = "10 ohm"
)";
  // (2 x"d + x0)/3 on 0.64 ohm.
  CHECK_THAT(current(text, "main", Fault::line_neutral), WithinRel(1.1 * 230 / (0.64 * 0.29 / 3), 1e-9));
  CHECK_THAT(needs(text, "main", Fault::line_earth), Contains("star_point of G"));
}
