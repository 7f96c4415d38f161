// SPDX-License-Identifier: Apache-2.0
/// @file
/// The program: one command a function, each a few lines that call the libraries.
#include <fmt/format.h>
#include <unistd.h>

#include <CLI/CLI.hpp>
#include <algorithm>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <optional>
#include <string>
#include <vector>

#include "models/registry.h"
#include "netlists/library.h"
#include "netlists/reader.h"
#include "plots/figures/charts.h"
#include "plots/text/files.h"
#include "plots/text/help.h"
#include "plots/text/json.h"
#include "plots/text/report.h"
#include "plots/text/terminal.h"
#include "solver/fault_query.h"
#include "solver/fault_study.h"
#include "solver/study.h"

namespace {

using namespace sunder;
using netlists::Diagnostic;
using netlists::Severity;

constexpr int kAllMet = 0;
constexpr int kNotMet = 1;
constexpr int kCouldNotRun = 2;

struct Options {
  bool json = false;
  bool working = false;
  bool every_state = false;
  bool csv = false;
  std::string net, path, output, topic;
  solver::FaultOptions fault;
  solver::VaryRequest vary;
  std::string value_list;
};

const char* word(Severity severity) {
  switch (severity) {
    case Severity::error:
      return "error";
    case Severity::warning:
      return "warning";
    case Severity::note:
      return "note";
  }
  return "error";
}

// What is said before the work can start or goes wrong at its edges: to stderr as text, or as one JSON
// object on stdout. Always ends with kCouldNotRun.
int complain(const Options& options, const std::vector<Diagnostic>& diagnostics) {
  if (options.json) {
    std::vector<plots::Complaint> list;
    list.reserve(diagnostics.size());
    for (const Diagnostic& d : diagnostics) {
      list.push_back({word(d.severity), d.file, d.line, d.column, d.message, d.source_line, d.hint});
    }
    fmt::print("{}", plots::errors_json(list));
    return kCouldNotRun;
  }
  std::size_t errors = 0;
  for (const Diagnostic& d : diagnostics) {
    std::string text = netlists::format_diagnostic(d);
    if (d.file.empty())
      text =
          fmt::format("sunder: {}: {}\n{}", word(d.severity), d.message, d.hint.empty() ? "" : "  = " + d.hint + "\n");
    if (!text.empty() && text.back() != '\n') text += '\n';
    fmt::print(stderr, "{}", text);
    errors += d.severity == Severity::error ? d.stands_for : 0U;
  }
  if (!options.net.empty() && errors > 0 && !diagnostics.front().file.empty()) {
    fmt::print(stderr, "{} {}; nothing was calculated\n", errors, errors == 1 ? "error" : "errors");
  }
  return kCouldNotRun;
}

int complain(const Options& options, const std::string& message, const std::string& hint = "") {
  Diagnostic d;
  d.message = message;
  d.hint = hint;
  return complain(options, std::vector<Diagnostic>{d});
}

// A line of a file that has been read before, for the caret under a trouble that the solver found.
std::string line_of(const std::string& file, std::uint32_t line) {
  std::ifstream stream(file, std::ios::binary);
  std::string text;
  for (std::uint32_t i = 0; i < line; ++i) {
    if (!std::getline(stream, text)) return "";
  }
  if (!text.empty() && text.back() == '\r') text.pop_back();
  return text;
}

Diagnostic diagnostic_at(const models::Network& network, Severity severity, const std::string& message,
                         models::Origin at, const std::string& fallback) {
  Diagnostic d;
  d.severity = severity;
  d.message = message;
  d.file = at.file > 0 && at.file < network.files.size() ? network.files[at.file] : fallback;
  d.line = static_cast<int>(at.line);
  d.column = static_cast<int>(at.column);
  if (at.line > 0) d.source_line = line_of(d.file, at.line);
  return d;
}

// Reads and examines the netlist; nothing where it has errors, which have then been told.
std::optional<models::Network> load(const Options& options) {
  netlists::Reading reading = netlists::read_network(options.net);
  if (!reading.network) {
    complain(options, reading.diagnostics);
    return std::nullopt;
  }
  std::vector<Diagnostic> troubles;
  for (const solver::Trouble& trouble : solver::check_topology(*reading.network)) {
    troubles.push_back(diagnostic_at(*reading.network, Severity::error, trouble.message, trouble.at, options.net));
    if (!trouble.note.empty()) {
      troubles.push_back(diagnostic_at(*reading.network, Severity::note, trouble.note, trouble.second, options.net));
    }
  }
  if (!troubles.empty()) {
    std::vector<Diagnostic> all = reading.diagnostics;
    all.insert(all.end(), troubles.begin(), troubles.end());
    complain(options, all);
    return std::nullopt;
  }
  if (const std::string file = plots::same_file(options.output, reading.network->files); !file.empty()) {
    complain(options, fmt::format("'{}' is read by this netlist; name another file for the output", file));
    return std::nullopt;
  }
  for (const Diagnostic& d : reading.diagnostics) {  // warnings
    std::string text = netlists::format_diagnostic(d);
    if (!text.empty() && text.back() != '\n') text += '\n';
    fmt::print(stderr, "{}", text);
  }
  return std::move(reading.network);
}

plots::TextStyle style_of(const Options& options) {
  plots::TextStyle style = plots::style_for(STDOUT_FILENO, options.output.empty());
  style.every_step = options.working;
  style.program = "sunder " SUNDER_VERSION;
  return style;
}

// To stdout, or to the file named with -o.
int deliver(const Options& options, const std::string& text, int status) {
  if (!options.output.empty()) {
    const auto trouble = plots::write_file(options.output, text);
    return trouble ? complain(options, *trouble) : status;
  }
  const bool written = std::fwrite(text.data(), 1, text.size(), stdout) == text.size();
  if (!written || std::fflush(stdout) != 0) {
    fmt::print(stderr, "sunder: error: the output could not be written\n");
    return kCouldNotRun;
  }
  return status;
}

// Counts on a terminal only, on one line that is taken away again.
class Progress {
 public:
  Progress(const Options& options, const char* what)
      : on_(!options.json && ::isatty(STDERR_FILENO) == 1), what_(what) {}
  ~Progress() {
    if (shown_) fmt::print(stderr, "\r{:60}\r", "");
  }
  Progress(const Progress&) = delete;
  Progress& operator=(const Progress&) = delete;
  [[nodiscard]] std::function<void(std::size_t, std::size_t)> hook() {
    if (!on_) return {};
    return [this](std::size_t done, std::size_t of) {
      const std::size_t percent = of == 0 ? 100 : 100 * done / of;
      if (shown_ && percent == last_) return;
      last_ = percent;
      shown_ = true;
      fmt::print(stderr, "\r{}: {} of {}", what_, done, of);
    };
  }

 private:
  bool on_;
  bool shown_ = false;
  std::size_t last_ = 0;
  const char* what_;
};

int run_check(const Options& options) {
  const auto network = load(options);
  if (!network) return kCouldNotRun;
  solver::CheckOptions how;
  how.every_state = options.every_state;
  std::vector<solver::Finding> findings;
  {
    Progress progress(options, "checking");
    how.progress = progress.hook();
    findings = solver::run_checks(*network, how);
  }
  const bool met = std::none_of(findings.begin(), findings.end(), [](const solver::Finding& f) {
    return f.verdict == solver::Verdict::fails || f.verdict == solver::Verdict::undecided;
  });
  const std::string text =
      options.json ? plots::check_json(*network, findings) : plots::check_report(*network, findings, style_of(options));
  return deliver(options, text, met ? kAllMet : kNotMet);
}

int run_fault_study(const Options& options) {
  const auto read = solver::read_fault_query(options.fault);
  if (const auto* refusal = std::get_if<solver::Refusal>(&read))
    return complain(options, refusal->message, refusal->hint);
  const auto& query = std::get<solver::FaultQuery>(read);
  const auto network = load(options);
  if (!network) return kCouldNotRun;
  const auto result = solver::study_faults(*network, query);
  if (const std::string* why = std::get_if<std::string>(&result)) return complain(options, *why);
  const auto& faults = std::get<std::vector<solver::FaultDetail>>(result);
  return deliver(options,
                 options.json ? plots::fault_study_json(*network, query, faults)
                              : plots::fault_study_report(*network, query, faults, style_of(options)),
                 kAllMet);
}

int run_faults(const Options& options) {
  if (options.fault.any()) return run_fault_study(options);
  const auto network = load(options);
  if (!network) return kCouldNotRun;
  const auto rows = solver::solve_faults(*network);
  return deliver(
      options,
      options.json ? plots::faults_json(*network, rows) : plots::faults_report(*network, rows, style_of(options)),
      kAllMet);
}

int run_schedule(const Options& options) {
  const auto network = load(options);
  if (!network) return kCouldNotRun;
  const auto rows = solver::schedule(*network);
  if (options.json) return deliver(options, plots::schedule_json(*network, rows), kAllMet);
  if (options.csv) return deliver(options, plots::schedule_csv(rows), kAllMet);
  return deliver(options, plots::schedule_report(*network, rows, style_of(options)), kAllMet);
}

int run_draw(const Options& options) {
  if (options.output.empty() && !options.json) {
    return complain(options, "draw needs -o FILE, the drawing to write",
                    "the ending decides the form: .svg, .png or .pdf");
  }
  const auto network = load(options);
  if (!network) return kCouldNotRun;
  const auto result = solver::path_chart(*network, options.path);
  if (const std::string* why = std::get_if<std::string>(&result)) return complain(options, *why);
  const auto& chart = std::get<solver::PathChart>(result);
  if (!options.output.empty()) {
    if (const auto trouble = plots::draw_coordination(chart, options.output)) return complain(options, *trouble);
  }
  Options to_screen = options;
  to_screen.output.clear();
  return deliver(to_screen, options.json ? plots::chart_json(chart) : fmt::format("written: {}\n", options.output),
                 kAllMet);
}

int run_vary(const Options& options) {
  const bool range = !options.vary.from.empty() || !options.vary.to.empty();
  const bool list = !options.vary.values.empty();
  if (range == list) {
    return complain(options,
                    range ? "vary takes a range or a list, not both" : "vary needs a range or a list of values",
                    "--from \"10 m\" --to \"200 m\", or --values \"2.5 mm2,4 mm2\"");
  }
  if (range && (options.vary.from.empty() || options.vary.to.empty())) {
    return complain(options, "a range needs both of --from and --to");
  }
  const auto network = load(options);
  if (!network) return kCouldNotRun;
  std::variant<solver::Sweep, std::string> result;
  {
    Progress progress(options, "solving");
    solver::VaryRequest request = options.vary;
    request.read_device = netlists::read_device_text;
    result = solver::vary(*network, request, progress.hook());
  }
  if (const std::string* why = std::get_if<std::string>(&result)) return complain(options, *why);
  const auto& sweep = std::get<solver::Sweep>(result);
  if (!options.output.empty()) {
    if (const auto trouble = plots::draw_sweep(sweep, options.output)) return complain(options, *trouble);
  }
  Options to_screen = options;
  to_screen.output.clear();
  return deliver(
      to_screen,
      options.json ? plots::sweep_json(*network, sweep) : plots::sweep_report(*network, sweep, style_of(to_screen)),
      kAllMet);
}

int run_new(const Options& options) {
  const std::string title = std::filesystem::path(options.net).stem().string();
  const std::string text = netlists::starter_netlist(title);
  if (const auto trouble = plots::write_file(options.net, text, plots::IfExists::refuse))
    return complain(options, *trouble);
  if (options.json)
    return deliver({}, plots::record_json("sunder.new/1", {{"file", options.net}, {"title", title}}), kAllMet);
  return deliver({}, fmt::format("written: {}\nnext: sunder check {}\n", options.net, options.net), kAllMet);
}

const std::vector<std::string_view>& topics() {
  static const std::vector<std::string_view> names = {"netlist", "checks", "devices", "cables", "rules", "json"};
  return names;
}

int run_help(const Options& options, const CLI::App& app) {
  plots::HelpTopic topic;
  if (options.topic.empty()) {
    plots::HelpSection commands{"commands", "", "", {}};
    for (const CLI::App* command : app.get_subcommands({})) {
      commands.entries.push_back({command->get_name(), command->get_description()});
    }
    plots::HelpSection more{"topics of `sunder help TOPIC`", "", "", {}};
    const char* about[] = {"kinds and keys of the file",     "what is compared with what",
                           "device families and their data", "cable constructions and their data",
                           "rule sets and their limits",     "the forms of --json"};
    for (std::size_t i = 0; i < topics().size(); ++i) more.entries.push_back({std::string(topics()[i]), about[i]});
    topic = {
        "",
        "sunder: proves that every fault in a low-voltage installation is cleared",
        "Usage: sunder COMMAND NET [OPTIONS]. `sunder COMMAND --help` lists the options of a command; all take --json.",
        {commands, more}};
  } else if (options.topic == "netlist")
    topic = plots::help_netlist();
  else if (options.topic == "checks")
    topic = plots::help_checks(solver::list_checks());
  else if (options.topic == "devices")
    topic = plots::help_devices(netlists::library().families);
  else if (options.topic == "cables")
    topic = plots::help_cables(netlists::library().constructions);
  else if (options.topic == "rules")
    topic = plots::help_rules(netlists::library().rule_sets);
  else if (options.topic == "json")
    topic = plots::help_json_forms();
  else {
    const std::string_view near = models::nearest_name(options.topic, topics());
    return complain(options, "there is no help topic '" + options.topic + "'",
                    near.empty() ? "topics: netlist, checks, devices, cables, rules, json"
                                 : fmt::format("did you mean '{}'?", near));
  }
  return deliver(options, options.json ? plots::help_json(topic) : plots::help_text(topic, style_of(options)), kAllMet);
}

int print_version(const Options& options) {
  std::vector<std::string> rules;
  for (const models::RuleSet& set : netlists::library().rule_sets) rules.push_back(set.name);
  if (options.json) {
    return deliver(
        options,
        plots::record_json("sunder.version/1", {{"program", "sunder"}, {"version", SUNDER_VERSION}, {"rules", rules}}),
        kAllMet);
  }
  return deliver(options, "sunder " SUNDER_VERSION "\n", kAllMet);
}

// Comma separated values, blanks around each taken off.
std::vector<std::string> split(const std::string& list) {
  std::vector<std::string> values;
  std::size_t from = 0;
  while (from <= list.size() && !list.empty()) {
    const std::size_t end = std::min(list.find(',', from), list.size());
    const std::size_t first = list.find_first_not_of(" \t", from);
    if (first < end) values.push_back(list.substr(first, list.find_last_not_of(" \t", end - 1) - first + 1));
    from = end + 1;
  }
  return values;
}

// What is left over after parsing: an unknown option or command, or one argument too many.
int unexpected(const Options& options, const std::string& extra, const CLI::App& where, bool command) {
  std::vector<std::string> names;
  if (extra.size() > 1 && extra.front() == '-') {
    for (const CLI::Option* option : where.get_options()) {
      for (const std::string& name : option->get_lnames()) names.push_back("--" + name);
      for (const std::string& name : option->get_snames()) names.push_back("-" + name);
    }
  } else if (command) {
    for (const CLI::App* sub : where.get_subcommands({})) names.push_back(sub->get_name());
  }
  const std::vector<std::string_view> views(names.begin(), names.end());
  const std::string wrong = extra.substr(0, extra.find('='));
  const std::string_view near = models::nearest_name(wrong, views);
  if (near == wrong) return complain(options, fmt::format("unexpected argument '{}'", extra));  // behind "--"
  std::string hint;
  if (!near.empty())
    hint = fmt::format("did you mean '{}'?", near);
  else if (command && std::filesystem::path(extra).extension() == ".toml")
    hint = fmt::format("did you mean 'sunder check {}'?", extra);
  else if (command && !names.empty())
    hint = "`sunder help` lists the commands";
  else
    hint = fmt::format("`sunder {}--help` lists the options",
                       where.get_name().empty() || command ? "" : where.get_name() + " ");
  const char* what = extra.front() == '-' && extra.size() > 1 ? "unknown option"
                     : command                                ? "unknown command"
                                                              : "unexpected argument";
  return complain(options, fmt::format("{} '{}'", what, wrong), hint);
}

// The parser's sentences in our words: "--set: 1 required TEXT missing", "--steps: Value 1 not in range 2 to 5".
std::string plain_complaint(const std::string& sentence) {
  const std::string option = sentence.substr(0, sentence.find(':'));
  if (sentence == "NET is required") return "the name of a netlist file is needed";
  if (option == "--pair") return "--pair takes two places";
  if (sentence.find("required TEXT missing") != std::string::npos) return option + " needs a value";
  if (sentence.find("At Most 1 required") != std::string::npos) return option + " is given more than once";
  const std::size_t range = sentence.find(" not in range ");
  return range == std::string::npos
             ? sentence
             : option + " takes " + sentence.substr(range + std::string(" not in range ").size());
}

int run(int argc, char** argv) {
  Options options;
  CLI::App app{"sunder proves that every fault in a low-voltage installation is cleared."};
  app.name("sunder");
  app.require_subcommand(0, 1);
  app.allow_extras();
  bool version = false;
  app.add_flag("--version", version, "Print the version");
  app.add_flag("--json", options.json, "Print JSON");

  const auto command = [&](const char* name, const char* about) {
    CLI::App* sub = app.add_subcommand(name, about);
    sub->allow_extras();
    sub->add_flag("--json", options.json, "Print JSON (`sunder help json`)");
    return sub;
  };
  const auto on_netlist = [&](const char* name, const char* about) {
    CLI::App* sub = command(name, about);
    sub->add_option("NET", options.net, "Netlist file")->required();
    return sub;
  };
  const auto output = [&](CLI::App* sub, const char* about) { sub->add_option("-o,--output", options.output, about); };

  CLI::App* check = on_netlist("check", "Make all checks; what fails comes first, with working and remedies");
  check->add_flag("--working", options.working, "Show every step of every finding");
  check->add_flag("--every-state", options.every_state, "One finding a state, not the governing one alone");
  output(check, "Write the report to this file");
  CLI::App* faults = on_netlist("faults", "Prospective currents at every node, or one fault in detail");
  faults->add_option("--at", options.fault.at, "One place: an address, S1@40% or S1@32m along its run");
  faults->add_option("--fault", options.fault.fault, "One fault: " + solver::fault_names());
  faults->add_option("--through", options.fault.through, "Resistance of the fault itself, such as 0.1ohm");
  faults->add_option("--pair", options.fault.pair, "Two places, a line to earth at each")
      ->expected(2)
      ->allow_extra_args(false);
  faults->add_flag("--currents", options.fault.currents, "What each run, source and device carries");
  faults->add_flag("--touch", options.fault.touch, "Voltages of protective conductors");
  faults->add_option("--state", options.fault.state, "One supply state");
  output(faults, "Write the table to this file");
  CLI::App* schedule = on_netlist("schedule", "One row a circuit: device, cable, currents, impedance, time, verdict");
  schedule->add_flag("--csv", options.csv, "Comma separated values with unit headings");
  output(schedule, "Write the schedule to this file");
  CLI::App* draw = on_netlist("draw", "Coordination chart of the path from the source to an element");
  draw->add_option("--path", options.path, "Address of the element, such as workshop/W2")->required();
  output(draw, "Drawing to write: .svg, .png or .pdf");
  CLI::App* vary = on_netlist("vary", "Solve along a range or list of one value; find where verdicts flip");
  vary->add_option("--set", options.vary.key, "Address of the value, such as S1.length")->required();
  vary->add_option("--from", options.vary.from, "Start of the range, with its unit");
  vary->add_option("--to", options.vary.to, "End of the range, with its unit");
  vary->add_option("--steps", options.vary.steps, "Values tried along the range")
      ->check(CLI::Range(2, 100000))
      ->capture_default_str();
  vary->add_option("--values", options.value_list, "Values to try instead, separated by commas");
  output(vary, "Drawing to write: .svg, .png or .pdf");
  CLI::App* fresh = command("new", "Write a commented starter netlist");
  fresh->add_option("NET", options.net, "File to write; never overwritten")->required();
  CLI::App* help = command("help", "Explain a topic: netlist, checks, devices, cables, rules, json");
  help->add_option("TOPIC", options.topic, "Topic");

  // --json decides the form of errors too, also of those that parsing itself finds.
  for (int i = 1; i < argc && std::string(argv[i]) != "--"; ++i)
    options.json = options.json || std::string(argv[i]) == "--json";
  const bool json = options.json;
  try {
    app.parse(argc, argv);
  } catch (const CLI::CallForHelp&) {
    return app.exit(CLI::CallForHelp());
  } catch (const CLI::ParseError& error) {
    options.json = json;
    return complain(options, plain_complaint(error.what()),
                    "`sunder help` lists the commands, `sunder COMMAND --help` their options");
  }
  options.json = json;
  options.vary.values = split(options.value_list);
  for (const CLI::App* sub : app.get_subcommands()) {
    for (const std::string& extra : sub->remaining()) {
      if (extra != "--") return unexpected(options, extra, *sub, false);
    }
  }
  for (const std::string& extra : app.remaining()) {
    if (extra != "--") return unexpected(options, extra, app, true);
  }
  if (version) return print_version(options);
  if (*check) return run_check(options);
  if (*faults) return run_faults(options);
  if (*schedule) return run_schedule(options);
  if (*draw) return run_draw(options);
  if (*vary) return run_vary(options);
  if (*fresh) return run_new(options);
  const int status = run_help(options, app);
  return *help || status != kAllMet ? status : kCouldNotRun;
}

}  // namespace

int main(int argc, char** argv) {
  try {
    return run(argc, argv);
  } catch (const std::exception& error) {
    std::fprintf(stderr,
                 "sunder: internal error: %s\nThis is a defect of sunder; please report it, with the netlist if you "
                 "may share it.\n",
                 error.what());
  } catch (...) {
    std::fprintf(stderr,
                 "sunder: internal error\nThis is a defect of sunder; please report it, with the netlist if you may "
                 "share it.\n");
  }
  return kCouldNotRun;
}
