// SPDX-License-Identifier: Apache-2.0
/// @file
/// Bonds, links, and the supply states that open and close them.
#include <fmt/format.h>

#include <algorithm>
#include <utility>

#include "netlists/element_keys.h"
#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

bool is_table(Context& context, const Value& value, const std::string& what) {
  if (value.form == Value::Form::table) return true;
  context.complaints.error(value.at, value.width, fmt::format("{} is {}; a table is expected", what, word(value.form)));
  context.refused = true;
  return false;
}

// The two boards of a bond or link, which must differ.
void read_ends(Context& context, ElementKeys& fields, bool earth_allowed, int& from, int& to) {
  const Value* from_value = fields.find("from");
  const Value* to_value = fields.find("to");
  if (from_value != nullptr) from = find_element(context, *from_value, "board");
  const bool earth =
      earth_allowed && to_value != nullptr && to_value->form == Value::Form::text && trimmed(to_value->text) == "earth";
  if (earth) {
    const auto found = context.elements.find("earth");
    if (found == context.elements.end() || found->second.kind != "board") return;
    context.complaints.error(to_value->at, to_value->width,
                             fmt::format("to of {} is \"earth\", which is a board here too", fields.what()),
                             "give that board another name");
    return;
  }
  if (to_value != nullptr) {
    to = find_element(context, *to_value, "board", earth_allowed ? "or \"earth\"" : std::string_view{});
  }
  if (from < 0 || from != to) return;
  context.complaints.error(to_value->at, to_value->width,
                           fmt::format("{} leads from board '{}' to itself", fields.what(), to_value->text));
}

// One list of a state.
class SwitchReader {
 public:
  SwitchReader(Context& context, models::SupplyState& state, const std::string& what)
      : context_(context), state_(state), what_(what) {}

  void read(const Value* list, bool close) {
    if (list == nullptr) return;
    for (const Value& item : list->items) {
      if (item.form != Value::Form::text) {
        context_.complaints.error(
            item.at, item.width,
            fmt::format("the name of an element is expected in {}, got {}", what_, word(item.form)));
        continue;
      }
      if (mentioned_before(item, close)) continue;
      const auto found = context_.elements.find(item.text);
      if (found == context_.elements.end()) {
        unknown(item, close);
      } else {
        apply(item, found->second, close);
      }
    }
  }

 private:
  struct Mention {
    const Value* value;
    bool close;
  };

  bool mentioned_before(const Value& item, bool close) {
    for (const Mention& other : mentions_) {
      if (other.value->text != item.text) continue;
      context_.complaints.error(item.at, item.width,
                                other.close != close
                                    ? fmt::format("'{}' is both open and closed in {}", item.text, what_)
                                    : fmt::format("{} names '{}' twice", what_, item.text));
      context_.complaints.note(other.value->at, fmt::format("{} here", other.close ? "closed" : "open"));
      return true;
    }
    mentions_.push_back({&item, close});
    return false;
  }

  void unknown(const Value& item, bool close) {
    if (context_.refused || context_.maybe_lost(item.text)) return;
    std::vector<std::string_view> names = names_of(context_.elements, "link");
    if (!close) {
      for (const models::Submain& submain : context_.network.submains) names.push_back(submain.name);
      for (const models::Transformer& transformer : context_.network.transformers) names.push_back(transformer.name);
    }
    context_.complaints.error(
        item.at, item.width,
        fmt::format("unknown element '{}' in {} of {}", item.text, close ? "closed" : "open", what_),
        did_you_mean(context_, item.text, names));
  }

  void apply(const Value& item, const Named& named, bool close) {
    const auto slot = static_cast<std::size_t>(std::max(named.handle, 0));
    if (named.kind == "link" && slot < state_.link_closed.size()) {
      state_.link_closed[slot] = close;
      return;
    }
    const bool submain = named.kind == "submain" && slot < state_.submain_open.size();
    const bool transformer = named.between && slot < state_.transformer_open.size();
    if (close) {
      context_.complaints.error(
          item.at, item.width,
          fmt::format("{} closes '{}', which is a {}; only links are closed by a state", what_, item.text, named.kind),
          submain || transformer ? "it is closed where no state opens it" : "");
      context_.complaints.note(named.at, fmt::format("'{}' is declared here", item.text));
    } else if (submain) {
      state_.submain_open[slot] = true;
    } else if (transformer) {
      state_.transformer_open[slot] = true;
    } else {
      const bool source = named.kind == "supply" || named.kind == "transformer" || named.kind == "generator" ||
                          named.kind == "inverter";
      context_.complaints.error(item.at, item.width,
                                fmt::format("{} opens '{}', which is a {}; links, submains and transformers between "
                                            "boards can be opened",
                                            what_, item.text, named.kind),
                                source ? "a source that is off is left out of sources" : "");
      context_.complaints.note(named.at, fmt::format("'{}' is declared here", item.text));
    }
  }

  Context& context_;
  models::SupplyState& state_;
  const std::string& what_;
  std::vector<Mention> mentions_;
};

void read_state_sources(Context& context, const Value& sources, const std::string& what, models::SupplyState& state) {
  for (const Value& item : sources.items) {
    const auto found = item.form == Value::Form::text ? context.elements.find(item.text) : context.elements.end();
    const bool transformer = found != context.elements.end() && found->second.between;
    const bool is_source = found != context.elements.end() && !transformer &&
                           (found->second.kind == "supply" || found->second.kind == "transformer" ||
                            found->second.kind == "generator" || found->second.kind == "inverter");
    if (transformer) {
      context.complaints.error(
          item.at, item.width,
          fmt::format("transformer '{}' of {} stands between two boards and is no source", item.text, what),
          "name the supply that feeds its primary side");
      continue;
    }
    if (!is_source) {
      if (context.maybe_lost(item.text)) continue;
      std::vector<std::string_view> names;
      for (const models::Source& source : context.network.sources) names.push_back(source.name);
      context.complaints.error(item.at, item.width, fmt::format("unknown source '{}' of {}", item.text, what),
                               did_you_mean(context, item.text, names));
      continue;
    }
    if (std::find(state.sources.begin(), state.sources.end(), found->second.handle) != state.sources.end()) {
      context.complaints.error(item.at, item.width, fmt::format("{} names source '{}' twice", what, item.text));
      continue;
    }
    state.sources.push_back(found->second.handle);
  }
}

}  // namespace

void read_bonds(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("bond '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.bonds.size());
    if (!enter_name(context, context.elements, member, "bond", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("bond"), what, member.at);
    models::Bond bond;
    bond.name = member.key;
    bond.at = member.at;
    read_ends(context, fields, true, bond.from, bond.to);
    constexpr double kLeast = 1e-4, kMost = 1e3;  // [ohm]
    if (const auto z = fields.impedance("impedance", models::Quantity::impedance, kLeast, kMost)) {
      bond.ohms = z->real();
      bond.reactance = z->imag();
    }
    context.network.bonds.push_back(std::move(bond));
  }
}

void read_links(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("link '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.links.size());
    if (!enter_name(context, context.elements, member, "link", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("link"), what, member.at);
    models::Link link;
    link.name = member.key;
    link.at = member.at;
    read_ends(context, fields, false, link.from, link.to);
    link.closed = fields.flag("closed").value_or(true);
    if (const Value* device = fields.find("device")) {
      link.device = read_device(context, *device, fmt::format("device of {}", what)).value_or(models::Device{});
    }
    PendingRun run;
    run.phases = fields.find("phases");
    context.link_runs.push_back(run);
    context.network.links.push_back(std::move(link));
  }
}

models::SupplyState usual_state(const models::Network& network) {
  models::SupplyState state;
  for (const models::Link& link : network.links) state.link_closed.push_back(link.closed);
  state.submain_open.resize(network.submains.size(), false);
  state.transformer_open.resize(network.transformers.size(), false);
  return state;
}

void read_states(Context& context, const Value* table) {
  if (table == nullptr) return;
  context.states_declared = !table->members.empty();
  for (const Member& member : table->members) {
    const std::string what = fmt::format("state '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.states.size());
    if (!enter_name(context, context.states, member, "state", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("state"), what, member.at);
    models::SupplyState state = usual_state(context.network);
    state.name = member.key;
    state.at = member.at;
    const Value* sources = fields.list("sources");
    if (sources != nullptr && sources->items.empty()) {
      context.complaints.error(sources->at, sources->width, fmt::format("{} has no source", what));
    }
    SwitchReader switches(context, state, what);
    switches.read(fields.list("closed"), true);
    switches.read(fields.list("open"), false);
    if (sources == nullptr) continue;
    read_state_sources(context, *sources, what, state);
    context.network.states.push_back(std::move(state));
  }
}

}  // namespace sunder::netlists
