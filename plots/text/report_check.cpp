// SPDX-License-Identifier: Apache-2.0
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "plots/text/report.h"
#include "plots/text/tables.h"

namespace sunder::plots {
namespace {

using models::Network;
using models::place_text;
using solver::Finding;
using solver::Verdict;

std::string count_text(std::size_t n, const char* one, const char* many) {
  return fmt::format("{} {}", n, n == 1 ? one : many);
}

std::string head(const Network& network, const TextStyle& style) {
  std::string out;
  if (!network.title.empty()) out += ink(style, Ink::heading, network.title) + '\n';
  std::string states;
  for (const models::SupplyState& state : network.states) states += (states.empty() ? "" : ", ") + state.name;
  out += fmt::format("Rules {}", network.rules_name);
  if (!style.date.empty()) out += fmt::format("; calculated {}", style.date);
  if (!style.program.empty()) out += " by " + style.program;
  out += '\n';
  out += fmt::format("{}, {}, {}; {}: {}; ambient {}\n", count_text(network.boards.size(), "board", "boards"),
                     count_text(network.submains.size(), "submain", "submains"),
                     count_text(network.circuits.size(), "circuit", "circuits"),
                     network.states.size() == 1 ? "state" : "states", states,
                     models::format_quantity(network.ambient_degc, models::Quantity::temperature));
  return out;
}

std::string governing(const Finding& f) {
  std::string text;
  const auto add = [&text](const std::string& part) {
    if (part.empty()) return;
    if (!text.empty()) text += "; ";
    text += part;
  };
  if (!f.fault.empty()) add(f.fault + " fault");
  if (!f.condition.empty()) add(f.condition + " condition");
  if (!f.state.empty()) add("state " + f.state);
  add(f.clause);
  switch (f.confidence) {
    case models::Confidence::memory:
      add("data from memory, not compared with the standard");
      break;
    case models::Confidence::low:
      add("data of LOW confidence: check against the standard before use");
      break;
    case models::Confidence::declared:
    case models::Confidence::found:
    case models::Confidence::derived:
    case models::Confidence::checked:
      break;
  }
  return text;
}

std::string step_line(const Network& network, const solver::Step& step, int width, const std::string& indent) {
  std::string line;
  if (!step.what.empty()) line += step.what + ": ";
  line += step.formula;
  if (!step.numbers.empty()) line += (step.formula.empty() ? "" : " = ") + step.numbers;
  if (!std::isnan(step.result)) line += " = " + value_text(step.result, step.unit);
  const std::string place = place_text(network, step.at);
  if (!place.empty()) line += "  [" + place + "]";
  return wrap(line, width, indent);
}

std::string numbers_line(const Finding& f) {
  if (std::isnan(f.value) && std::isnan(f.limit)) return "";
  std::string line = "found " + (std::isnan(f.value) ? "none" : value_text(f.value, f.unit));
  if (!std::isnan(f.limit)) line += ", limit " + value_text(f.limit, f.unit);
  const std::string margin = margin_text(f.margin);
  if (!margin.empty()) line += ", margin " + margin;
  return line;
}

// Two steps are enough to redo the verdict by hand: the last ones lead to it.
constexpr std::size_t kKeySteps = 2;

std::string finding_block(const Network& network, const Finding& f, const TextStyle& style) {
  const std::string in = "    ";
  std::string title = f.subject;
  if (!f.upstream.empty()) title += " below " + f.upstream;
  std::string out =
      fmt::format("{} {}  {}", verdict_text(style, f.verdict, 9), ink(style, Ink::heading, title), f.check);
  const std::string place = place_text(network, f.at);
  const int used = 10 + display_width(title) + 2 + display_width(f.check) + 4 + display_width(place);
  if (!place.empty()) out += (used <= style.width ? std::string("  (") : '\n' + in + '(') + place + ')';
  out += '\n';
  if (!f.summary.empty()) out += wrap(f.summary, style.width, in);
  const std::string numbers = numbers_line(f);
  if (!numbers.empty()) out += wrap(numbers, style.width, in);
  if (!f.reason.empty()) out += wrap(f.reason, style.width, in + "because ");
  const std::string where = governing(f);
  if (!where.empty()) out += wrap(where, style.width, in);
  const std::size_t n = f.steps.size();
  const std::size_t from = style.every_step || n <= kKeySteps ? 0 : n - kKeySteps;
  for (std::size_t i = from; i < n; ++i) out += step_line(network, f.steps[i], style.width, in + "| ");
  if (style.every_step) {
    for (const std::string& text : f.assumptions) out += wrap(text, style.width, in + "assumed: ");
  }
  for (const std::string& need : f.needs) out += wrap(need, style.width, in + "needs ");
  for (const bool holds : {true, false}) {
    for (const solver::Remedy& remedy : f.remedies) {
      if (remedy.holds != holds) continue;
      std::string line = remedy.what;
      if (holds)
        line += ": then every check is met";
      else if (remedy.note.empty())
        line += ": not enough alone";
      else
        line += ": not enough alone, " + remedy.note;
      out += wrap(line, style.width, in + (holds ? "mend:  " : "tried: "));
    }
  }
  return out + '\n';
}

std::string section(const TextStyle& style, const std::string& title) { return ink(style, Ink::heading, title) + '\n'; }

// Which board a subject is counted under: a circuit's and a group's own, a submain's feeding one,
// a source's first one.
class BoardOf {
 public:
  explicit BoardOf(const Network& network) {
    const auto name = [&network](int board) {
      return board < 0 ? std::string() : network.boards[static_cast<std::size_t>(board)].name;
    };
    for (const models::Board& board : network.boards) boards_[board.name] = board.name;
    for (const models::Submain& submain : network.submains) boards_[submain.name] = name(submain.from);
    for (const models::Source& source : network.sources) boards_[source.name] = name(source.board);
    for (const models::Electrode& electrode : network.electrodes) boards_[electrode.name] = name(electrode.board);
  }
  [[nodiscard]] std::string operator()(const std::string& subject) const {
    if (const auto found = boards_.find(subject); found != boards_.end()) return found->second;
    const std::string front = subject.substr(0, subject.find_first_of("/."));
    if (const auto found = boards_.find(front); found != boards_.end()) return found->second;
    return "(elsewhere)";
  }

 private:
  std::map<std::string, std::string> boards_;
};

std::string board_summary(const Network& network, const std::vector<Finding>& findings, const TextStyle& style) {
  struct Tally {
    std::size_t counts[4] = {0, 0, 0, 0};
    const Finding* tightest = nullptr;
  };
  const BoardOf board_of(network);
  std::map<std::string, Tally> tallies;
  for (const Finding& f : findings) {
    Tally& tally = tallies[board_of(f.subject)];
    ++tally.counts[static_cast<std::size_t>(f.verdict)];
    // A residual device either is the one asked for or is not: no margin to be tight.
    if (f.verdict == Verdict::noted || !std::isfinite(f.margin) || f.check == "additional protection") continue;
    if (tally.tightest == nullptr || f.margin < tally.tightest->margin) tally.tightest = &f;
  }
  Table table({{"board"},
               {"fail", Align::right},
               {"undecided", Align::right},
               {"meet", Align::right},
               {"noted", Align::right},
               {"least margin", Align::right},
               {"where"}});
  const auto add = [&](const std::string& name, const Tally& tally) {
    const auto n = [&tally](Verdict v) { return std::to_string(tally.counts[static_cast<std::size_t>(v)]); };
    table.add({name, n(Verdict::fails), n(Verdict::undecided), n(Verdict::meets), n(Verdict::noted),
               tally.tightest != nullptr ? margin_text(tally.tightest->margin) : "",
               tally.tightest != nullptr ? tally.tightest->subject + ", " + tally.tightest->check : ""});
  };
  for (const models::Board& board : network.boards) {
    if (const auto found = tallies.find(board.name); found != tallies.end()) {
      add(board.name, found->second);
      tallies.erase(found);
    }
  }
  for (const auto& [name, tally] : tallies) add(name, tally);
  return table.text(style.width, 2);
}

std::string selectivity_list(const std::vector<Finding>& findings, const TextStyle& style) {
  // What it rests on is often the same sentence: told once, by number.
  std::vector<std::string> bases;
  Table table({{"downstream", Align::left, 14},
               {"upstream", Align::left, 14},
               {"selective"},
               {"up to", Align::right},
               {"available", Align::right},
               {"basis", Align::right}});
  for (const Finding& f : findings) {
    if (f.upstream.empty()) continue;
    std::string result = f.selectivity;
    if (f.verdict == Verdict::fails) result += " (required)";
    const std::string why = f.basis.empty() ? f.reason : f.basis;
    std::string number;
    if (!why.empty()) {
      const auto found = std::find(bases.begin(), bases.end(), why);
      number = fmt::format("({})", found - bases.begin() + 1);
      if (found == bases.end()) bases.push_back(why);
    }
    const bool whole = f.selectivity == "total" && std::isnan(f.limit_A);
    table.add({f.subject, f.upstream, result, whole ? "" : value_text(f.limit_A, models::Quantity::current, 3),
               value_text(f.available_A, models::Quantity::current, 3), number});
  }
  if (table.empty()) return "";
  std::string out = section(style, "Selectivity, pair by pair") + table.text(style.width, 2);
  for (std::size_t i = 0; i < bases.size(); ++i) out += wrap(bases[i], style.width, fmt::format("  ({}) ", i + 1));
  return out + '\n';
}

std::string assumption_register(const Network& network, const std::vector<Finding>& findings, const TextStyle& style) {
  std::string list;
  std::set<std::string> seen;
  const auto add = [&](const std::string& text) {
    if (seen.insert(text).second) list += wrap(text, style.width, "  - ");
  };
  for (const models::Assumption& a : network.assumptions) {
    const std::string place = place_text(network, a.at);
    add(fmt::format("{}{}{}{}", a.subject, a.subject.empty() ? "" : ": ", a.sentence,
                    place.empty() ? "" : "  (" + place + ")"));
  }
  // The same sentence under many findings is one assumption with a count.
  std::map<std::string, std::set<std::string>> shared;
  for (const Finding& f : findings) {
    for (const std::string& text : f.assumptions) shared[text].insert(f.subject);
  }
  for (const auto& [text, subjects] : shared) {
    add(subjects.size() == 1 ? fmt::format("{}: {}", *subjects.begin(), text)
                             : fmt::format("{} (in {} subjects)", text, subjects.size()));
  }
  if (list.empty()) list = "  none\n";
  return section(style, "Assumptions: what was taken and not declared") + list + '\n';
}

std::string weak_data(const std::vector<Finding>& findings, const TextStyle& style) {
  std::map<std::string, std::vector<std::string>> low;
  std::size_t memory = 0;
  for (const Finding& f : findings) {
    if (f.confidence == models::Confidence::low) low[f.check].push_back(f.subject);
    if (f.confidence == models::Confidence::memory) ++memory;
  }
  if (low.empty() && memory == 0) return "";
  std::string out = section(style, "Data that needs confirming");
  for (const auto& [check, subjects] : low) {
    std::string line = check + " rests on values of low confidence for ";
    for (const std::string& subject : subjects) line += subject + (&subject == &subjects.back() ? "" : ", ");
    out += wrap(line, style.width, "  ! ");
  }
  if (memory > 0) {
    out += wrap(fmt::format("{} on reference data written from memory; `--working` and `--json` say which",
                            count_text(memory, "finding rests", "findings rest")),
                style.width, "  - ");
  }
  return out + '\n';
}

}  // namespace

const std::vector<std::string>& cautions() {
  static const std::vector<std::string> texts = {
      "A calculation does not replace inspection and testing by a competent person.",
      "Missing data is not a pass: what is undecided is not shown to be safe.",
      "Curves of a standard or a family are not the fitted device; the maker's data takes precedence.",
      "What is shown holds for the supply states listed and for no other.",
      "Local regulations, the edition in force and the licensed person decide.",
  };
  return texts;
}

std::string check_report(const Network& network, const std::vector<Finding>& findings, const TextStyle& style) {
  std::size_t counts[4] = {0, 0, 0, 0};
  for (const Finding& f : findings) ++counts[static_cast<std::size_t>(f.verdict)];
  const auto count = [&counts](Verdict v) { return counts[static_cast<std::size_t>(v)]; };

  std::string out = head(network, style);
  out += '\n';
  const bool clean = count(Verdict::fails) == 0 && count(Verdict::undecided) == 0;
  const std::string result =
      fmt::format("{} of {} checks FAIL, {} undecided, {} met, {} noted.", count(Verdict::fails), findings.size(),
                  count(Verdict::undecided), count(Verdict::meets), count(Verdict::noted));
  if (findings.empty())
    out += "Nothing to check: the network has no circuit, submain or device.\n";
  else if (clean)
    out += ink(style, Ink::good,
               fmt::format("All {} checks are met, {} noted.", count(Verdict::meets), count(Verdict::noted))) +
           '\n';
  else
    out += ink(style, count(Verdict::fails) > 0 ? Ink::bad : Ink::open, result) + '\n';
  out += '\n';

  for (const Verdict verdict : {Verdict::fails, Verdict::undecided}) {
    if (count(verdict) == 0) continue;
    out += section(style, verdict == Verdict::fails ? "What fails" : "What is undecided, and what would decide it");
    for (const Finding& f : findings) {
      if (f.verdict == verdict) out += finding_block(network, f, style);
    }
  }
  const auto reported = [](const Finding& f) { return f.verdict == Verdict::noted && f.upstream.empty(); };
  if (!style.every_step && std::any_of(findings.begin(), findings.end(), reported)) {
    out += section(style, "What is noted, not demanded");
    for (const Finding& f : findings) {
      if (reported(f)) out += finding_block(network, f, style);
    }
  }
  if (style.every_step && count(Verdict::meets) + count(Verdict::noted) > 0) {
    out += section(style, "What is met or noted");
    for (const Finding& f : findings) {
      if (f.verdict == Verdict::meets || f.verdict == Verdict::noted) out += finding_block(network, f, style);
    }
  }
  if (!findings.empty()) out += section(style, "By board") + board_summary(network, findings, style) + '\n';
  out += selectivity_list(findings, style);
  out += assumption_register(network, findings, style);
  out += weak_data(findings, style);
  out += section(style, "Cautions");
  for (const std::string& text : cautions()) out += wrap(text, style.width, "  - ");
  return out;
}

}  // namespace sunder::plots
