// SPDX-License-Identifier: Apache-2.0
#include "plots/text/tables.h"

#include <catch2/catch.hpp>
#include <limits>
#include <sstream>

using namespace sunder;
using namespace sunder::plots;

namespace {

std::vector<std::string> lines_of(const std::string& text) {
  std::vector<std::string> lines;
  std::istringstream stream(text);
  for (std::string line; std::getline(stream, line);) lines.push_back(line);
  return lines;
}

}  // namespace

TEST_CASE("A table puts texts left and numbers right, under headings of the same alignment") {
  Table table({{"way"}, {"amps", Align::right}, {"end"}});
  table.add({"W2", "5", "x"});
  table.add({"workshop", "160", "y"});
  CHECK(table.text(80) ==
        "way       amps  end\n"
        "--------  ----  ---\n"
        "W2           5  x\n"
        "workshop   160  y\n");
}

TEST_CASE("Columns stay aligned where a cell has characters of several bytes") {
  Table table({{"name"}, {"n", Align::right}});
  table.add({"Düse", "1"});
  table.add({"plain", "22"});
  const auto lines = lines_of(table.text(80));
  REQUIRE(lines.size() == 4);
  CHECK(display_width(lines[2]) == display_width(lines[3]));
  CHECK(display_width("Düse") == 4);
  CHECK(display_width("电缆") == 4);  // wide characters take two columns
}

TEST_CASE("A table that is too wide clips its widest text column and keeps its numbers") {
  Table table({{"subject"}, {"value", Align::right}});
  table.add({std::string(120, 'a'), "12345"});
  for (const std::string& line : lines_of(table.text(60))) CHECK(display_width(line) <= 60);
  CHECK(table.text(60).find("12345") != std::string::npos);
  CHECK(table.text(60).find("a..") != std::string::npos);
}

TEST_CASE("A cell of several lines takes several lines of the table") {
  Table table({{"a\nb"}, {"c\nd", Align::right}});
  table.add({"1\n2", "30\n4"});
  CHECK(table.text(80) ==
        "a   c\n"
        "b   d\n"
        "-  --\n"
        "1  30\n"
        "2   4\n");
}

TEST_CASE("Clipping never cuts a character in two") {
  CHECK(clip("äöüäöü", 4) == "äö..");
  CHECK(clip("abc", 3) == "abc");
  CHECK(clip("abcd", 1) == ".");
  CHECK(clip("abcd", 0).empty());
}

TEST_CASE("Wrapped lines are not wider than asked, and later ones are indented under the first") {
  const std::string text = wrap("one two three four five six seven", 20, "  - ");
  CHECK(text == "  - one two three\n    four five six\n    seven\n");
  CHECK(wrap("", 20) == "\n");
  CHECK(wrap("averylongwordthatdoesnotfit", 10, "> ") == "> averylongwordthatdoesnotfit\n");
}

TEST_CASE("Values that are no numbers have words") {
  constexpr double kInfinite = std::numeric_limits<double>::infinity();
  CHECK(value_text(kInfinite, models::Quantity::time) == "never");
  CHECK(value_text(kInfinite, models::Quantity::current) == "unbounded");
  CHECK(value_text(solver::kNone, models::Quantity::current) == "-");
  CHECK(margin_text(solver::kNone).empty());
  CHECK(margin_text(-kInfinite).empty());
}

TEST_CASE("A margin carries its sign, also where rounding makes it zero") {
  CHECK(margin_text(0.125) == "+12.5 %");
  CHECK(margin_text(-3.1) == "-310 %");
  CHECK(margin_text(-60.0) == "< -999 %");
  CHECK(margin_text(6042.0) == "> +999 %");
  CHECK(margin_text(-0.0001) == "-0.0 %");
}

TEST_CASE("Text is coloured only where colour is on") {
  TextStyle plain;
  CHECK(verdict_text(plain, solver::Verdict::fails) == "FAILS");
  CHECK(verdict_text(plain, solver::Verdict::meets, 8) == "meets   ");
  TextStyle coloured;
  coloured.colour = true;
  CHECK(verdict_text(coloured, solver::Verdict::fails).find("\x1b[") == 0);
}
