// SPDX-License-Identifier: Apache-2.0
// Laws of the text: order means nothing, and quantities survive being written and read.
#include <algorithm>
#include <cmath>
#include <map>
#include <random>

#include "models/units.h"
#include "solver/study.h"
#include "tests/laws/check_law.h"
#include "tests/laws/site.h"

namespace {

using namespace sunder;
using laws::Rows;
using laws::Site;

// Lines of a table below its heading, in another order.
std::string shuffled_lines(const std::string& table, std::mt19937& random) {
  std::vector<std::string> lines;
  std::size_t from = 0;
  while (from < table.size()) {
    const std::size_t end = table.find('\n', from);
    lines.push_back(table.substr(from, end - from + 1));
    from = end + 1;
  }
  std::shuffle(std::next(lines.begin()), lines.end(), random);
  std::string text;
  for (const std::string& line : lines) text += line;
  return text;
}

using Findings = std::map<std::string, solver::Finding>;

Findings findings_of(const models::Network& network) {
  solver::CheckOptions options;
  options.remedies = false;
  Findings all;
  for (const solver::Finding& finding : solver::run_checks(network, options))
    all.emplace(finding.check + " of " + finding.subject + " below " + finding.upstream, finding);
  return all;
}

TEST_CASE("The order of tables and of the lines in them changes no current and no finding") {
  laws::check_law([] {
    const Site site = *laws::sites();
    std::mt19937 random(static_cast<unsigned>(*rc::gen::inRange(0, 1 << 30)));
    std::vector<std::string> tables = laws::tables(site);
    for (std::string& table : tables) table = shuffled_lines(table, random);
    std::shuffle(tables.begin(), tables.end(), random);
    std::string text = "rules = \"BS 7671:2018+A2\"\n";
    for (const std::string& table : tables) text += table;

    const models::Network one = laws::network_of(site);
    const models::Network other = laws::network_of(text);
    const Rows rows = laws::rows_of(one);
    const Rows again = laws::rows_of(other);
    RC_ASSERT(rows.size() == again.size());
    for (const auto& [key, row] : rows) {
      RC_ASSERT(row.known == again.at(key).known);
      if (row.known) RC_ASSERT(laws::close(row.current, again.at(key).current, 1e-12));
    }
    const Findings found = findings_of(one);
    const Findings found_again = findings_of(other);
    RC_ASSERT(found.size() == found_again.size());
    for (const auto& [key, finding] : found) {
      const solver::Finding& same = found_again.at(key);
      RC_ASSERT(finding.verdict == same.verdict);
      RC_ASSERT(std::isnan(finding.value) == std::isnan(same.value));
      if (std::isfinite(finding.value)) RC_ASSERT(laws::close(finding.value, same.value, 1e-9));
    }
  });
}

TEST_CASE("A quantity that is written with twelve digits reads back as itself") {
  using models::Quantity;
  laws::check_law([] {
    const auto quantity =
        *rc::gen::element(Quantity::length, Quantity::area, Quantity::current, Quantity::voltage, Quantity::impedance,
                          Quantity::impedance_per_length, Quantity::apparent_power, Quantity::power, Quantity::time,
                          Quantity::temperature, Quantity::ratio, Quantity::percentage, Quantity::let_through,
                          Quantity::adiabatic_k, Quantity::voltage_drop_per, Quantity::count);
    const double value = *rc::gen::inRange(1, 1000000) * std::pow(10.0, *rc::gen::inRange(-9, 4));
    const std::string text = models::format_quantity(value, quantity, 12);
    RC_LOG() << text << '\n';
    const auto read = models::parse_quantity(text, quantity);
    RC_ASSERT(std::holds_alternative<double>(read));
    RC_ASSERT(laws::close(std::get<double>(read), value, 1e-11));
  });
}

TEST_CASE("What is printed with four digits is within half a unit of the fourth") {
  using models::Quantity;
  laws::check_law([] {
    const auto quantity = *rc::gen::element(Quantity::length, Quantity::current, Quantity::impedance, Quantity::time,
                                            Quantity::let_through);
    const double value = *rc::gen::inRange(1, 1000000) * std::pow(10.0, *rc::gen::inRange(-6, 3));
    const auto read = models::parse_quantity(models::format_quantity(value, quantity), quantity);
    RC_ASSERT(std::holds_alternative<double>(read));
    RC_ASSERT(laws::close(std::get<double>(read), value, 0.5001e-3));
  });
}

}  // namespace
