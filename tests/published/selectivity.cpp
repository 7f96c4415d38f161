// SPDX-License-Identifier: Apache-2.0
// The published rule on selectivity of fuses.
#include <catch2/catch.hpp>
#include <string>
#include <utility>
#include <vector>

#include "tests/published/answers.h"
#include "tests/published/netlist_text.h"

namespace {

using namespace sunder::published;

std::string pair_of(const std::string& upstream, const std::string& downstream) {
  const auto all =
      check(head() +
            supply("230/400 V", "three_phase = \"20 kA\", power_factor = 0.3", "Ze = \"0.1 ohm\", Zn = \"0.1 ohm\"") +
            bar() + "[board.main]\n[board.sub]\n[submain.S]\nfrom = \"main\"\nto = \"sub\"\ndevice = \"" + upstream +
            "\"\ncable = \"bar 1000 mm2\"\nlength = \"1 m\"\n[circuit.sub]\nW = { use = \"fixed\", "
            "phases = \"L1 L2 L3\", device "
            "= \"" +
            downstream + "\", cable = \"bar 1000 mm2\", length = \"1 m\" }\n");
  for (const FindingAnswer& item : all)
    if (item.check == "selectivity" && item.subject == "sub/W" && item.upstream == "S") return item.selectivity;
  FAIL("no selectivity of sub/W below S");
  return "";
}

// Tag S: 1.6 : 1 for gG links,
// https://lawsonfuses.com/knowledge-centre/application-guidance-lawson-fuses; the I2t limits behind
// it, https://ajdocs.ru/gsp/2881/16. One step (1.25 : 1) is never guaranteed.
TEST_CASE("gG fuses are selective at 1.6 to 1 and not at 1.25 to 1") {
  const std::vector<std::pair<const char*, const char*>> two_steps = {{"25", "16"},   {"32", "20"},  {"40", "25"},
                                                                      {"63", "40"},   {"80", "50"},  {"100", "63"},
                                                                      {"160", "100"}, {"250", "160"}};
  for (const auto& [up, down] : two_steps) {
    CAPTURE(up, down);
    CHECK(pair_of(std::string("gG ") + up + " A", std::string("gG ") + down + " A") == "total");
  }
  const std::vector<std::pair<const char*, const char*>> one_step = {{"20", "16"}, {"50", "40"}, {"125", "100"}};
  for (const auto& [up, down] : one_step) {
    CAPTURE(up, down);
    CHECK(pair_of(std::string("gG ") + up + " A", std::string("gG ") + down + " A") != "total");
  }
}

// Least pre-arcing I2t of IEC 60269-1 Table 7, tag S: https://ajdocs.ru/gsp/2881/16. By the same
// rule of 1.6 : 1 a fuse lets through no more than the least that melts the rating two steps above
// it.
TEST_CASE("At short-circuit a gG fuse lets through no more than melts the fuse two steps above it") {
  const std::vector<std::pair<const char*, const char*>> rows = {{"16", "1000"},  {"20", "1800"},  {"25", "3000"},
                                                                 {"32", "5000"},  {"40", "9000"},  {"50", "16000"},
                                                                 {"63", "27000"}, {"80", "46000"}, {"100", "86000"}};
  for (const auto& [In, printed] : rows) {
    CAPTURE(In);
    const std::string loops = "three_phase = \"20 kA\", power_factor = 0.3";
    const auto all =
        check(head() + supply("230/400 V", loops, loops + ", Ze = \"0.02 ohm\", Zn = \"0.02 ohm\"") + bar() +
              "[board.main]\n[circuit.main]\nW = { use = \"fixed\", phases = \"L1 L2 L3\", device "
              "= \"gG " +
              In + " A\", cable = \"bar 1000 mm2\", length = \"1 m\" }\n");
    const FindingAnswer heating = finding(all, "conductor heating", "main/W");
    CHECK(heating.confidence != "low");
    CHECK_THAT(heating.value, sunder::support::Printed(printed));
  }
}

}  // namespace
