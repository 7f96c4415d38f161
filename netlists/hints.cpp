// SPDX-License-Identifier: Apache-2.0
/// @file
/// Tables of what people write, and what they mean by it.
#include "netlists/hints.h"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <utility>

#include "netlists/value.h"

namespace sunder::netlists {

namespace {

using models::Key;
using models::Kind;

bool is_digit(char c) noexcept { return c >= '0' && c <= '9'; }

char lower(char c) noexcept { return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c; }

std::string lowered(std::string_view text) {
  std::string out(text);
  std::transform(out.begin(), out.end(), out.begin(), lower);
  return out;
}

// Letters and digits alone, in small letters: "TN-C-S" and "tncs" are the same.
std::string bare(std::string_view text) {
  std::string out;
  for (const char c : text) {
    const char small = lower(c);
    if (is_digit(small) || (small >= 'a' && small <= 'z')) out += small;
  }
  return out;
}

std::string without_digits(std::string_view text) {
  std::string out;
  for (const char c : text) {
    if (!is_digit(c)) out += c;
  }
  return out;
}

// A word of the trade (small letters) and the keys it may mean; the first that the kind has counts.
struct TradeWord {
  std::string_view word;
  std::array<std::string_view, 3> keys;
};

constexpr std::array kTradeWords = {
    TradeWord{"ib", {"load", "demand", ""}},
    TradeWord{"current", {"load", "demand", ""}},
    TradeWord{"design_current", {"load", "demand", ""}},
    TradeWord{"load", {"demand", "", ""}},
    TradeWord{"demand", {"load", "", ""}},
    TradeWord{"in", {"device", "incomer", ""}},
    TradeWord{"rating", {"In", "device", "incomer"}},
    TradeWord{"mcb", {"device", "incomer", ""}},
    TradeWord{"rcbo", {"device", "incomer", ""}},
    TradeWord{"rcd", {"device", "incomer", ""}},
    TradeWord{"breaker", {"device", "incomer", ""}},
    TradeWord{"fuse", {"device", "incomer", ""}},
    TradeWord{"protection", {"device", "incomer", ""}},
    TradeWord{"device", {"incomer", "", ""}},
    TradeWord{"incomer", {"device", "", ""}},
    TradeWord{"main_switch", {"incomer", "device", ""}},
    TradeWord{"switch", {"incomer", "device", ""}},
    TradeWord{"icu", {"Icn", "device", ""}},
    TradeWord{"breaking_capacity", {"Icn", "device", ""}},
    TradeWord{"csa", {"size", "cable", ""}},
    TradeWord{"area", {"size", "cable", ""}},
    TradeWord{"size", {"cable", "", ""}},
    TradeWord{"conductor", {"cable", "", ""}},
    TradeWord{"type", {"use", "earthing", "like"}},
    TradeWord{"curve", {"like", "device", ""}},
    TradeWord{"family", {"like", "device", ""}},
    TradeWord{"earth", {"cpc", "earthing", ""}},
    TradeWord{"pe", {"cpc", "", ""}},
    TradeWord{"ecc", {"cpc", "", ""}},
    TradeWord{"system", {"earthing", "", ""}},
    TradeWord{"it", {"Iz", "", ""}},
    TradeWord{"ccc", {"Iz", "", ""}},
    TradeWord{"capacity", {"Iz", "", ""}},
    TradeWord{"method", {"installed", "", ""}},
    TradeWord{"installation", {"installed", "", ""}},
    TradeWord{"power_factor", {"pf", "", ""}},
    TradeWord{"cos_phi", {"pf", "power_factor", ""}},
    TradeWord{"cosphi", {"pf", "power_factor", ""}},
    TradeWord{"pf", {"power_factor", "", ""}},
    TradeWord{"phase", {"phases", "", ""}},
    TradeWord{"lines", {"phases", "", ""}},
    TradeWord{"poles", {"phases", "pole_pairs", ""}},
    TradeWord{"name", {"serves", "title", ""}},
    TradeWord{"description", {"serves", "title", ""}},
    TradeWord{"distance", {"length", "", ""}},
    TradeWord{"parallel", {"in_parallel", "", ""}},
    TradeWord{"fed_from", {"from", "", ""}},
    TradeWord{"feeds", {"to", "", ""}},
    TradeWord{"to", {"feeds", "", ""}},
    TradeWord{"board", {"feeds", "on", ""}},
    TradeWord{"at", {"on", "", ""}},
    TradeWord{"circuit", {"on", "", ""}},
    TradeWord{"ra", {"resistance", "", ""}},
    TradeWord{"standard", {"rules", "", ""}},
    TradeWord{"vector_group", {"vector", "", ""}},
    TradeWord{"neutral_earthing", {"star_point", "", ""}},
    TradeWord{"resistance", {"impedance", "", ""}},
    TradeWord{"limits", {"stages", "", ""}},
    TradeWord{"eta", {"efficiency", "", ""}},
    TradeWord{"un", {"voltage", "", ""}},
    TradeWord{"power", {"rating", "load", "demand"}},
    TradeWord{"ipf", {"maximum", "three_phase", ""}},
    TradeWord{"pscc", {"maximum", "three_phase", ""}},
    TradeWord{"zs", {"Ze", "minimum", ""}},
    TradeWord{"r70", {"r20", "", ""}},
    TradeWord{"r90", {"r20", "", ""}},
};

const Key* by_trade(const Kind& kind, std::string_view key) {
  const std::string small = lowered(key);
  for (const TradeWord& known : kTradeWords) {
    if (known.word != small) continue;
    for (const std::string_view candidate : known.keys) {
      const Key* found = candidate.empty() || candidate == key ? nullptr : models::find_key(kind, candidate);
      if (found != nullptr) return found;
    }
  }
  return nullptr;
}

// The nearest key; figures in a name say what it is, so that r70 is no misspelt r20.
std::string_view near_key(const Kind& kind, std::string_view key) {
  std::vector<std::string_view> names;
  for (const Key& known : kind.keys) names.push_back(known.name);
  const std::string_view near = models::nearest_name(key, names);
  return without_digits(near) == without_digits(key) ? std::string_view{} : near;
}

std::string joined(const std::vector<std::string_view>& words) {
  std::string text;
  for (const std::string_view word : words) {
    if (!text.empty()) text += ", ";
    text += word;
  }
  return text;
}

std::string_view parent_of(std::string_view kind) noexcept {
  const std::size_t dot = kind.find('.');
  return dot == std::string_view::npos ? std::string_view{} : kind.substr(0, dot);
}

// Words that say what a device is and stand in no device text.
constexpr std::array<std::string_view, 10> kDeviceWords = {"mcb",   "rcbo",    "mccb", "rccb", "type",
                                                           "curve", "breaker", "fuse", "afdd", "elcb"};

std::string with_unit(std::string_view rest) {
  std::string text(trimmed(rest));
  const std::size_t end = std::min(text.find_first_not_of("0123456789."), text.size());
  const std::size_t next = text.find_first_not_of(' ', end);
  const bool unit = next != std::string::npos &&
                    (text[next] == 'A' || text.compare(next, 2, "mA") == 0 || text.compare(next, 2, "kA") == 0);
  if (end > 0 && !unit) text.insert(end, " A");
  return text;
}

// "B16" -> "B 16 A": a family, glued or not, and a rating. "" where it begins with no family.
std::string split_reading(const std::vector<models::DeviceFamily>& families, std::string_view text) {
  std::string best;
  std::size_t longest = 0;
  for (const models::DeviceFamily& family : families) {
    const std::size_t n = family.name.size();
    if (n <= longest || text.size() <= n || lowered(text.substr(0, n)) != lowered(family.name)) continue;
    const std::string_view rest = trimmed(text.substr(n));
    if (rest.empty() || !is_digit(rest.front())) continue;
    best = fmt::format("{} {}", family.name, with_unit(rest));
    longest = n;
  }
  return best;
}

}  // namespace

std::string listed(std::string_view what, const std::vector<std::string_view>& names) {
  constexpr std::size_t kShown = 8;
  if (names.empty()) return {};
  std::string text = fmt::format("{} are: ", what);
  for (std::size_t k = 0; k < std::min(kShown, names.size()); ++k) {
    if (k > 0) text += ", ";
    text += names[k];
  }
  if (names.size() > kShown) text += ", ...";
  return text;
}

std::string key_belongs(const Kind* here, std::string_view key) {
  if (here != nullptr && here->name.empty()) here = nullptr;
  std::string kinds;
  std::string inner;  // tables of a kind
  for (const Kind& kind : models::registry()) {
    if (models::find_key(kind, key) == nullptr) continue;
    if (kind.name.empty()) return fmt::format("'{}' belongs at the top of the file, before the first [table]", key);
    if (here != nullptr && parent_of(kind.name) == here->name) {
      return fmt::format("'{0}' belongs in {1}: {1} = {{ {0} = ... }}", key, kind.name.substr(here->name.size() + 1));
    }
    if (here != nullptr && kind.name == parent_of(here->name)) {
      return fmt::format("'{}' belongs to the {} itself, outside these brackets", key, kind.name);
    }
    std::string& list = kind.name.find('.') == std::string_view::npos ? kinds : inner;
    if (!list.empty()) list += ", ";
    list += kind.name;
  }
  if (kinds.empty()) kinds = std::move(inner);
  return kinds.empty() ? std::string{} : fmt::format("'{}' is a key of: {}", key, kinds);
}

std::string_view meant_key(const Kind& kind, std::string_view key) {
  const Key* trade = by_trade(kind, key);
  return trade != nullptr ? trade->name : near_key(kind, key);
}

std::string unknown_key_hint(const Kind& kind, std::string_view key, bool table) {
  if (const Key* trade = by_trade(kind, key))
    return fmt::format("{} is the key '{}': {}", key, trade->name, trade->help);
  std::vector<std::string_view> names;
  for (const Key& known : kind.keys) names.push_back(known.name);
  const std::string_view near = near_key(kind, key);
  const std::string all = joined(names);
  // one is the beginning of the other: plurals
  const bool plural = !near.empty() && (near.substr(0, key.size()) == key || key.substr(0, near.size()) == near);
  if (kind.name == "board" && table && near.empty()) {
    return "the circuits of a board stand in [circuit.BOARD]; it may have: " + all;
  }
  if (std::string place = key_belongs(&kind, key); !plural && !place.empty()) return place + "; here may stand: " + all;
  return near.empty() ? "it may have: " + all : fmt::format("did you mean '{}'?", near);
}

std::string_view meant_choice(std::string_view key, std::string_view text, const std::vector<std::string_view>& valid) {
  const std::string plain = bare(text);
  if (plain.empty()) return {};
  std::string_view begun;
  int n_begun = 0;
  for (const std::string_view choice : valid) {
    const std::string other = bare(choice);
    if (other == plain || (key == "earthing" && choice == "TN-C-S" && plain == "pme")) return choice;
    if (plain.size() < 2 || other.compare(0, plain.size(), plain) != 0) continue;
    begun = choice;
    ++n_begun;
  }
  return n_begun == 1 ? begun : std::string_view{};
}

std::string device_hint(const std::vector<models::DeviceFamily>& families, std::string_view text, std::string nearest) {
  std::string_view rest = trimmed(text);
  const std::size_t number = rest.find("88");
  const bool british = number != std::string_view::npos && bare(rest.substr(0, number + 2)) == "bs88";
  const std::string_view part = british ? rest.substr(number + 2, 2) : std::string_view{};
  if (british && part.substr(0, 1) != "-") return "did you mean 'BS 88-2' or 'BS 88-3'?";
  if (british && part != "-2" && part != "-3") return "known of BS 88 are 'BS 88-2' and 'BS 88-3'";
  bool residual = false;
  bool moulded = false;
  std::string kept;  // without the words that stand in no device text
  for (std::size_t i = 0; i < rest.size();) {
    const std::size_t end = std::min(rest.find(' ', i), rest.size());
    const std::string word = lowered(rest.substr(i, end - i));
    residual = residual || word == "rccb" || word == "elcb";
    moulded = moulded || word == "mccb";
    if (!word.empty() && std::find(kDeviceWords.begin(), kDeviceWords.end(), word) == kDeviceWords.end()) {
      kept += fmt::format("{}{}", kept.empty() ? "" : " ", rest.substr(i, end - i));
    }
    i = end + 1;
  }
  rest = kept;
  std::string reading = split_reading(families, rest);
  if (reading.empty() && !rest.empty() && is_digit(rest.front())) {
    const std::size_t blank = rest.rfind(' ');
    const std::string_view last = blank == std::string_view::npos ? std::string_view{} : rest.substr(blank + 1);
    for (const models::DeviceFamily& family : families) {
      if (family.name != last || last == "A") continue;
      reading = fmt::format("{} {}", family.name, with_unit(rest.substr(0, blank)));
    }
    if (with_unit(rest).find(" mA") < 5) {
      return fmt::format("the rated current stands first, such as 'RCD 63 A 30 mA A'; {}", kDeviceForm);
    }
    if (moulded) return "a moulded-case breaker is a [device.NAME] with its maker's points (`sunder help netlist`)";
    if (reading.empty() && residual) reading = fmt::format("RCD {}", with_unit(rest));
    if (reading.empty()) {
      return fmt::format("the family stands first, such as 'B {0}' or 'gG {0}'; {1}", with_unit(rest), kDeviceForm);
    }
  }
  if (!reading.empty()) return fmt::format("did you mean '{}'? {}", reading, kDeviceForm);
  if (!nearest.empty()) return nearest;
  return fmt::format("{}; `sunder help devices` lists the families", kDeviceForm);
}

std::string cable_hint(const std::vector<std::string_view>& names, std::string_view text) {
  constexpr std::string_view kAll = "`sunder help cables` lists the constructions";
  const std::string plain = bare(text);
  std::string wanted = lowered(text);
  for (const std::string_view flat : {"te", "tande", "twinandearth", "twinearth", "6242y"}) {
    if (plain == flat) wanted = "flat";
  }
  std::string found;
  std::size_t n = 0;
  for (const std::string_view name : names) {
    bool all = true;
    std::size_t i = wanted.find_first_not_of(" -/_,");
    if (i == std::string::npos) return std::string(kAll);
    while (i != std::string::npos) {
      const std::size_t end = std::min(wanted.find_first_of(" -/_,", i), wanted.size());
      all = all && name.find(wanted.substr(i, end - i)) != std::string_view::npos;
      i = wanted.find_first_not_of(" -/_,", end);
    }
    if (!all) continue;
    constexpr std::size_t kShown = 4;
    if (++n <= kShown) found += fmt::format("{}'{}'", n > 1 ? ", " : "", name);
    if (n == kShown + 1) found += ", ...";
  }
  return found.empty() ? std::string(kAll) : fmt::format("did you mean {}? {}", found, kAll);
}

}  // namespace sunder::netlists
