// SPDX-License-Identifier: Apache-2.0
#include "plots/figures/charts.h"

#include <catch2/catch.hpp>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "made.h"
#include "plots/figures/drawing.h"

using namespace sunder;
using Catch::Matchers::Contains;
namespace fs = std::filesystem;

namespace {

class Folder {
 public:
  Folder() {
    std::string name = (fs::temp_directory_path() / "sunder-test-XXXXXX").string();
    REQUIRE(::mkdtemp(name.data()) != nullptr);
    path_ = name;
  }
  ~Folder() {
    std::error_code ignored;
    fs::remove_all(path_, ignored);
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  [[nodiscard]] std::string file(const std::string& name) const { return (path_ / name).string(); }
  [[nodiscard]] std::ptrdiff_t count() const {
    return std::distance(fs::directory_iterator(path_), fs::directory_iterator());
  }

 private:
  fs::path path_;
};

std::string content(const std::string& path) {
  std::ifstream stream(path, std::ios::binary);
  std::ostringstream text;
  text << stream.rdbuf();
  return text.str();
}

std::size_t times(const std::string& text, const std::string& part) {
  std::size_t n = 0;
  for (std::size_t at = text.find(part); at != std::string::npos; at = text.find(part, at + 1)) ++n;
  return n;
}

}  // namespace

TEST_CASE("A coordination chart names every device and current once, with ticks in their units") {
  const Folder folder;
  REQUIRE(plots::draw_coordination(test::path_chart(), folder.file("c.svg")).value_or("") == "");
  const std::string svg = content(folder.file("c.svg"));
  for (const char* text :
       {"S1  gG 80 A<", "workshop/W2  B 32 A 30 mA<", "workshop/W2 residual 30 mA<", "S1 armour of 78 mm2<",
        "least line-earth at workshop/W2  231 A<", "greatest at intake  9.8 kA<",
        "prospective current at 230/400 V [A]<", "time [s]<", ">10 A<", ">1 kA<", ">10 kA<"}) {
    CAPTURE(text);
    CHECK(times(svg, text) == 1);
  }
  CHECK(folder.count() == 1);
}

TEST_CASE("Charts are drawn in each form that the ending asks for") {
  const Folder folder;
  REQUIRE(plots::draw_coordination(test::path_chart(), folder.file("c.png")).value_or("") == "");
  REQUIRE(plots::draw_sweep(test::sweep(), folder.file("s.pdf")).value_or("") == "");
  CHECK(content(folder.file("c.png")).substr(1, 3) == "PNG");
  CHECK(content(folder.file("s.pdf")).substr(0, 4) == "%PDF");
}

TEST_CASE("A sweep chart marks flips with value and direction, and names its curves and undecided stretches") {
  const Folder folder;
  REQUIRE(plots::draw_sweep(test::sweep(), folder.file("s.svg")).value_or("") == "");
  const std::string svg = content(folder.file("s.svg"));
  CHECK_THAT(svg, Contains("83.333 m  voltage drop, workshop/W2: meets \u2192 fails"));
  CHECK_THAT(svg, Contains("undecided: conductor heating, S1"));
  CHECK_THAT(svg, Contains("0 %"));
}

TEST_CASE("Names with quotes, markup and percent signs are drawn as they are") {
  const Folder folder;
  solver::PathChart chart = test::path_chart();
  chart.title = "O'Brien's <yard> & \"dock\" `date` {/*2 x} 100 %";
  REQUIRE(plots::draw_coordination(chart, folder.file("it's.svg")).value_or("") == "");
  CHECK_THAT(content(folder.file("it's.svg")), Contains("O'Brien's &lt;yard") && Contains(" &amp; \"dock\""));
  CHECK_THAT(content(folder.file("it's.svg")), Contains("`date` {/*2 x} 100 %"));
}

TEST_CASE("What cannot be drawn is refused with a sentence and leaves no file") {
  const Folder folder;
  CHECK_THAT(plots::draw_coordination(test::path_chart(), folder.file("c.gif")).value_or(""),
             Contains("expected .svg, .png or .pdf, got '.gif'"));
  CHECK_THAT(plots::draw_coordination(test::path_chart(), folder.file("none/c.svg")).value_or(""),
             Contains("cannot write"));
  solver::PathChart bare;
  bare.address = "intake";
  CHECK_THAT(plots::draw_coordination(bare, folder.file("c.svg")).value_or(""), Contains("has a curve to draw"));
  solver::Sweep one = test::sweep();
  one.points.resize(1);
  CHECK_THAT(plots::draw_sweep(one, folder.file("s.svg")).value_or(""), Contains("at least two values"));
  CHECK(folder.count() == 0);
}

TEST_CASE("A missing gnuplot and a failing one are told apart, and nothing is written") {
  const Folder folder;
  const char* before = std::getenv("PATH");
  const std::string kept = before != nullptr ? before : "";
  REQUIRE(::setenv("PATH", folder.file("nowhere").c_str(), 1) == 0);
  const auto missing = plots::draw_coordination(test::path_chart(), folder.file("c.svg"));
  REQUIRE(::setenv("PATH", kept.c_str(), 1) == 0);
  CHECK_THAT(missing.value_or(""), Contains("gnuplot was not found"));
  CHECK_THAT(plots::draw("this is no command\n", folder.file("d.svg")).value_or(""), Contains("exit status"));
  CHECK(folder.count() == 0);
}

TEST_CASE("A script is drawn the same twice") {
  const Folder folder;
  REQUIRE(plots::draw_coordination(test::path_chart(), folder.file("a.svg")).value_or("") == "");
  REQUIRE(plots::draw_coordination(test::path_chart(), folder.file("b.svg")).value_or("") == "");
  CHECK(content(folder.file("a.svg")) == content(folder.file("b.svg")));
}
