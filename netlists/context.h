// SPDX-License-Identifier: Apache-2.0
/// @file
/// What the parts of the reader share while one netlist is read.
#pragma once

#include <deque>
#include <optional>
#include <string>
#include <string_view>
#include <unordered_map>
#include <unordered_set>
#include <vector>

#include "models/network.h"
#include "models/registry.h"
#include "netlists/complaints.h"
#include "netlists/library.h"
#include "netlists/value.h"

namespace sunder::netlists {

/// Something with a name: what it is, its handle and where it was declared.
struct Named {
  std::string_view kind;  ///< "board", "supply", ...
  int handle = -1;
  models::Origin at{};
  bool between = false;  ///< a transformer between two boards; its handle is into `network.transformers`
};

using Names = std::unordered_map<std::string, Named>;

/// A run whose cable can be resolved only once its conductors are known.
struct PendingRun {
  const Value* cable = nullptr;
  const Value* cpc = nullptr;
  const Value* phases = nullptr;
  const Value* through = nullptr;  ///< `return` of a run by sequence impedances
};

/// Ways of a group as written, until circuits and submains are known.
struct PendingGroup {
  int board = -1;
  int group = -1;
  const Value* ways = nullptr;
};

struct Context {
  Complaints complaints;
  models::Network network;
  std::string folder;            ///< of the netlist, for schedules
  std::string lost;              ///< text that was left out after errors of form
  bool states_declared = false;  ///< some state stands in the netlist, be it faulty
  bool voltages_known = true;    ///< every voltage text was understood
  bool refused = false;          ///< an element's name was refused, so that others may miss it
  Names elements;                ///< all but circuits, states, devices and cables
  Names states;
  Names devices;   ///< [device.x]; handle into `named_devices`
  Names circuits;  ///< by "board/way"
  std::vector<models::Device> named_devices;
  std::unordered_map<std::string, int> constructions;            ///< into network.constructions
  std::unordered_map<std::string, int> families;                 ///< into network.families
  std::unordered_map<std::string, models::Device> device_texts;  ///< resolved before
  std::vector<PendingRun> submain_runs;                          ///< parallel to network.submains
  std::vector<PendingRun> circuit_runs;                          ///< parallel to network.circuits
  std::vector<PendingRun> link_runs;                             ///< parallel to network.links; phases alone
  std::vector<PendingGroup> groups;
  std::unordered_set<int> without_neutral;  ///< sources up to 1 kV whose star point is not brought out
  std::deque<Value> rows;                   ///< of schedules
  std::deque<std::string> texts;            ///< of files, so that diagnostics can show their lines

  void assume(std::string subject, std::string sentence, models::Origin at) {
    network.assumptions.push_back({std::move(subject), std::move(sentence), at});
  }
  /// Whether `name` may have been declared in text that was left out.
  [[nodiscard]] bool maybe_lost(std::string_view name) const noexcept {
    return !lost.empty() && lost.find(name) != std::string::npos;
  }
};

/// "did you mean 'x'?" with the nearest of `names`; "" where none is near.
[[nodiscard]] std::string did_you_mean(const Context& context, std::string_view wrong,
                                       const std::vector<std::string_view>& names);

/// The names of one kind in a table of names, in order of spelling.
[[nodiscard]] std::vector<std::string_view> names_of(const Names& names, std::string_view kind);

/// The handle of an element that `value` names, -1 after a complaint.
/// @param lead  begins the hint where no name is near
[[nodiscard]] int find_element(Context& context, const Value& value, std::string_view kind, std::string_view lead = {});

/// Checks a new name (characters, unique in `names`) and enters it. @return false after a complaint.
bool enter_name(Context& context, Names& names, const Member& member, std::string_view kind, int handle);

/// Reads a file into `text`: missing, a folder, too large are complaints at `at`, which end in false.
/// @param what  "schedule file" or "netlist", for the sentence
[[nodiscard]] bool load_text(Context& context, const std::string& path, std::string_view what, models::Origin at,
                             int width, std::string& text);

/// Empty, binary or not UTF-8: a complaint about `file`, and false.
[[nodiscard]] bool sound_text(Context& context, std::string_view text, std::uint32_t file, std::string_view what);

}  // namespace sunder::netlists
