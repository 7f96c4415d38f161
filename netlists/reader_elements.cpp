// SPDX-License-Identifier: Apache-2.0
/// @file
/// Boards, submains, circuits and electrodes.
#include <fmt/format.h>

#include <algorithm>
#include <utility>
#include <variant>

#include "netlists/element_keys.h"
#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

using models::Board;
using models::Circuit;
using models::Conductor;
using models::Quantity;
using models::Submain;

// Whether an element is a table, as every element must be.
bool is_table(Context& context, const Value& value, const std::string& what) {
  if (value.form == Value::Form::table) return true;
  context.complaints.error(value.at, value.width, fmt::format("{} is {}; a table is expected", what, word(value.form)));
  context.refused = true;
  return false;
}

void read_groups(Context& context, ElementKeys& fields, int board, Board& made) {
  const Value* groups = fields.table("groups");
  if (groups == nullptr) return;
  for (const Member& member : groups->members) {
    const std::string what = fmt::format("group '{}' of {}", member.key, fields.what());
    if (!is_table(context, member.value, what)) continue;
    ElementKeys group_fields(context, member.value, *models::find_kind("board.groups"), what, member.at);
    models::Group group;
    group.name = member.key;
    group.at = member.at;
    if (const Value* device = group_fields.find("device")) {
      group.device = read_device(context, *device, fmt::format("device of {}", what)).value_or(models::Device{});
    }
    group.demand = group_fields.sourced("demand");
    context.groups.push_back({board, static_cast<int>(made.groups.size()), group_fields.list("ways")});
    made.groups.push_back(std::move(group));
  }
}

// "total" or a current; anything else is a complaint and counts as not required.
std::string read_selective(Context& context, ElementKeys& fields) {
  const auto text = fields.text("selective");
  if (!text) return {};
  std::string wanted(trimmed(*text));
  if (wanted != "total") {
    const auto parsed = models::parse_quantity(wanted, Quantity::current);
    if (!std::holds_alternative<double>(parsed) || !(std::get<double>(parsed) > 0)) {
      const Value& value = *fields.find("selective");
      context.complaints.error(
          value.at, value.width,
          fmt::format("selective of {} is '{}'; \"total\" or a current is expected", fields.what(), *text));
      return {};
    }
  }
  return wanted;
}

// Spurs as a list of tables, or as the cell "20 m:4 m; 31 m:3 m" of a schedule.
class SpurReader {
 public:
  SpurReader(Context& context, const std::string& what) : context_(context), what_(what) {}

  [[nodiscard]] std::vector<models::Spur> read(const Value& value) {
    std::vector<models::Spur> spurs;
    if (value.form == Value::Form::list) {
      for (const Value& item : value.items) {
        if (is_table(context_, item, fmt::format("a spur of {}", what_))) add(item, item.at, spurs);
      }
    } else if (value.form == Value::Form::text) {
      read_cell(value, spurs);
    } else {
      context_.complaints.error(
          value.at, value.width,
          fmt::format("spurs of {} is {}; a list of tables is expected", what_, word(value.form)));
    }
    return spurs;
  }

 private:
  void add(const Value& table, models::Origin at, std::vector<models::Spur>& spurs) {
    ElementKeys fields(context_, table, *models::find_kind("circuit.spurs"), fmt::format("a spur of {}", what_), at);
    const auto where = fields.quantity("at");
    const auto length = fields.quantity("length");
    if (where && length) spurs.push_back({*where, *length, at});
  }

  void read_cell(const Value& cell, std::vector<models::Spur>& spurs) {
    const std::string_view text = cell.text;
    std::size_t start = 0;
    while (start < text.size()) {
      const std::size_t end = std::min(text.find(';', start), text.size());
      const std::string_view one = text.substr(start, end - start);
      const std::size_t colon = one.find(':');
      if (!trimmed(one).empty() && colon == std::string_view::npos) {
        context_.complaints.error(inside(cell, start), std::max(1, characters(one)),
                                  fmt::format("spur '{}' of {} is not understood", trimmed(one), what_),
                                  "form: at:length, such as \"20 m:4 m; 31 m:3 m\"");
      } else if (!trimmed(one).empty()) {
        Value table;
        table.form = Value::Form::table;
        table.members.push_back(part("at", one.substr(0, colon), inside(cell, start)));
        table.members.push_back(part("length", one.substr(colon + 1), inside(cell, start + colon + 1)));
        add(table, inside(cell, start), spurs);
      }
      start = end + 1;
    }
  }

  static Member part(std::string key, std::string_view text, models::Origin at) {
    Member member{std::move(key), at, 1, {}};
    member.value.form = Value::Form::text;
    member.value.text = std::string(trimmed(text));
    member.value.at = at;
    member.value.width = std::max(1, characters(text));
    return member;
  }

  Context& context_;
  const std::string& what_;
};

void check_ring(Context& context, ElementKeys& fields, const Circuit& circuit) {
  const Value* spurs = fields.find("spurs");
  if (!circuit.ring) {
    if (spurs != nullptr && !circuit.spurs.empty()) {
      context.complaints.error(spurs->at, spurs->width, fmt::format("{} has spurs but is no ring", fields.what()),
                               "ring = true");
    }
    return;
  }
  if (circuit.in_parallel > 1) {
    const Value& at = *fields.find("in_parallel");
    context.complaints.error(at.at, at.width,
                             fmt::format("{} is a ring and cannot have cables in parallel", fields.what()));
  }
  for (const models::Spur& spur : circuit.spurs) {
    if (!circuit.length || spur.at <= circuit.length.value) continue;
    context.complaints.error(spur.origin, 1,
                             fmt::format("a spur of {} is at {}, beyond the ring of {}", fields.what(),
                                         models::format_quantity(spur.at, Quantity::length),
                                         models::format_quantity(circuit.length.value, Quantity::length)));
  }
  // rings belong to 30 A and 32 A devices where they are used at all
  const double In = circuit.device.In;
  const Value* device = fields.find("device");
  if (device != nullptr && In > 0 && In != 30 && In != 32) {
    context.complaints.warn(device->at, device->width,
                            fmt::format("{} is a ring on a device of {}; usual are 30 A and 32 A", fields.what(),
                                        models::format_quantity(In, Quantity::current)));
  }
}

// z1 and z0 of a run, which stand in place of a cable.
void read_sequence(Context& context, ElementKeys& fields, models::Sequence& sequence) {
  constexpr double kLeast = 2e-6, kMost = 2e-2;  // [ohm/m]
  const Value* z1 = fields.find("z1");
  if (z1 == nullptr) {
    if (fields.find("z0") != nullptr) fields.refuse({"z0"}, "needs z1 beside it");
    if (fields.find("cable") != nullptr) fields.refuse({"return"}, "is for a run by z1; a cable has its own return");
    return;
  }
  if (const Value* cable = fields.find("cable")) {
    context.complaints.error(z1->at, z1->width,
                             fmt::format("{} has both a cable and z1; one is enough", fields.what()));
    context.complaints.note(cable->at, "cable is given here");
  } else {
    fields.refuse({"cpc"}, "belongs to a cable; of a run by z1, return says what carries the rest");
  }
  sequence.at = z1->at;
  if (const auto z = fields.impedance("z1", Quantity::impedance_per_length, kLeast, kMost)) {
    sequence.z1 = *z;
    sequence.given = true;
  }
  if (const auto z = fields.impedance("z0", Quantity::impedance_per_length, kLeast, kMost)) {
    sequence.z0 = *z;
    sequence.z0_given = sequence.given;
    if (sequence.given && (z->real() < sequence.z1.real() || z->imag() < sequence.z1.imag())) {
      const Value& value = *fields.find("z0");
      context.complaints.warn(
          value.at, value.width,
          fmt::format("z0 of {} is below its z1: the return would have less than no impedance", fields.what()));
    }
  }
  const std::string through = fields.choice("return").value_or("");
  using models::Return;
  if (through == "N") sequence.through = Return::neutral;
  if (through == "PE") sequence.through = Return::protective;
  if (through == "earth") sequence.through = Return::earth;
}

models::Use use_named(std::string_view text) noexcept {
  if (text == "sockets") return models::Use::sockets;
  if (text == "fixed") return models::Use::fixed;
  if (text == "lighting") return models::Use::lighting;
  return text == "distribution" ? models::Use::distribution : models::Use::unknown;
}

}  // namespace

void read_boards(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("board '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.boards.size());
    if (!enter_name(context, context.elements, member, "board", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("board"), what, member.at);
    Board board;
    board.name = member.key;
    board.at = member.at;
    if (const Value* incomer = fields.find("incomer")) {
      board.incomer = read_device(context, *incomer, fmt::format("incomer of {}", what)).value_or(models::Device{});
    }
    read_groups(context, fields, handle, board);
    board.n_pe_link = fields.flag("n_pe_link").value_or(false);
    context.network.boards.push_back(std::move(board));
  }
}

void read_submains(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("submain '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.submains.size());
    if (!enter_name(context, context.elements, member, "submain", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("submain"), what, member.at);
    Submain submain;
    submain.name = member.key;
    submain.at = member.at;
    const Value* from = fields.find("from");
    const Value* to = fields.find("to");
    if (from != nullptr) submain.from = find_element(context, *from, "board");
    if (to != nullptr) submain.to = find_element(context, *to, "board");
    if (submain.from >= 0 && submain.from == submain.to) {
      context.complaints.error(to->at, to->width, fmt::format("{} leads from board '{}' to itself", what, to->text));
    }
    if (const Value* device = fields.find("device")) {
      submain.device = read_device(context, *device, fmt::format("device of {}", what)).value_or(models::Device{});
    }
    // lines written by their impedances are as long as a network is wide
    if (fields.find("z1") != nullptr) fields.ignore_band("length");
    submain.length = fields.sourced("length");
    submain.in_parallel = fields.whole("in_parallel").value_or(1);
    submain.installed = fields.text("installed").value_or("");
    submain.Iz = fields.sourced("Iz");
    submain.demand = fields.sourced("demand");
    submain.pf = fields.sourced("pf");
    if (!submain.pf) {
      submain.pf.value = 1;
      if (submain.demand) context.assume(submain.name, fmt::format("pf of {} taken as 1", submain.name), submain.at);
    }
    submain.selective = read_selective(context, fields);
    submain.cpc_given = fields.find("cpc") != nullptr;
    submain.pen = is_pen(fields.find("cpc"));
    read_sequence(context, fields, submain.sequence);
    context.submain_runs.push_back(
        {fields.find("cable"), fields.find("cpc"), fields.find("phases"), fields.find("return")});
    context.network.submains.push_back(std::move(submain));
  }
}

void read_circuits(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("circuit table '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    Value name;
    name.form = Value::Form::text;
    name.text = member.key;
    name.at = member.at;
    name.width = member.width;
    const bool single = std::any_of(member.value.members.begin(), member.value.members.end(), [](const Member& inner) {
      return models::find_key(*models::find_kind("circuit"), inner.key) != nullptr;
    });
    const std::string lead = single ? fmt::format("one circuit by itself is [circuit.BOARD.{}]", member.key)
                                    : std::string("the circuits of a board stand in [circuit.BOARD]");
    const int board = find_element(context, name, "board", lead);
    if (board < 0) {
      context.refused = true;
      continue;
    }
    for (const Member& circuit : member.value.members) read_circuit(context, board, circuit, circuit.value);
  }
}

void read_circuit(Context& context, int board, const Member& member, const Value& table) {
  const std::string address =
      fmt::format("{}/{}", context.network.boards[static_cast<std::size_t>(board)].name, member.key);
  const std::string what = fmt::format("circuit '{}'", address);
  if (!is_table(context, table, what)) return;
  // the name itself is checked without its board, and entered with it
  Names own;
  if (!enter_name(context, own, {member.key, member.at, member.width, {}}, "circuit", 0)) return;
  const int handle = static_cast<int>(context.network.circuits.size());
  const auto [place, entered] = context.circuits.try_emplace(address, Named{"circuit", handle, member.at});
  if (!entered) {
    context.complaints.error(member.at, member.width, fmt::format("{} is declared twice", what));
    context.complaints.note(place->second.at, "first declared here");
    return;
  }
  ElementKeys fields(context, table, *models::find_kind("circuit"), what, member.at);
  Circuit circuit;
  circuit.name = member.key;
  circuit.at = member.at;
  circuit.board = board;
  circuit.serves = fields.text("serves").value_or("");
  if (const auto use = fields.choice("use")) {
    circuit.use = use_named(*use);
  } else if (fields.find("use") == nullptr) {
    context.assume(address, fmt::format("use of {} not given: the strictest limits are taken", address), member.at);
  }
  if (const Value* phases = fields.find("phases")) {
    circuit.conductors = read_phases(context, *phases, what).value_or(models::ConductorSet{});
  }
  if (const Value* device = fields.find("device")) {
    circuit.device = read_device(context, *device, fmt::format("device of {}", what)).value_or(models::Device{});
  }
  circuit.length = fields.sourced("length");
  circuit.in_parallel = fields.whole("in_parallel").value_or(1);
  circuit.ring = fields.flag("ring").value_or(false);
  if (const Value* spurs = fields.find("spurs")) circuit.spurs = SpurReader(context, what).read(*spurs);
  circuit.load = fields.sourced("load");
  circuit.pf = fields.sourced("pf");
  if (!circuit.pf) {
    circuit.pf.value = 1;
    if (circuit.load) context.assume(address, fmt::format("pf of {} taken as 1", address), member.at);
  }
  circuit.motor = fields.flag("motor").value_or(false);
  circuit.Iz = fields.sourced("Iz");
  circuit.installed = fields.text("installed").value_or("");
  circuit.selective = read_selective(context, fields);
  check_ring(context, fields, circuit);
  const PendingRun run{fields.find("cable"), fields.find("cpc"), fields.find("phases")};
  circuit.pen = is_pen(run.cpc);
  if (circuit.pen && !circuit.conductors.empty() && !circuit.conductors.has(Conductor::N)) {
    context.complaints.error(run.cpc->at, run.cpc->width,
                             fmt::format("cpc of {} is PEN, but its phases have no N", what));
    circuit.pen = false;
  } else if (!circuit.conductors.empty() &&
             read_cable(context, run, circuit.conductors, what, address, false, member.at, circuit.cable)) {
    for (const models::Strand& strand : circuit.cable.protective) {
      if (strand.place != models::Place::separate) continue;
      context.assume(
          address,
          fmt::format("the protective conductor beside the cable of {} is taken to run close to it, not bunched with "
                      "it: at ambient temperature, k as such",
                      address),
          member.at);
    }
  }
  context.circuit_runs.push_back(run);
  context.network.circuits.push_back(std::move(circuit));
}

void read_electrodes(Context& context, const Value& table) {
  for (const Member& member : table.members) {
    const std::string what = fmt::format("electrode '{}'", member.key);
    if (!is_table(context, member.value, what)) continue;
    const int handle = static_cast<int>(context.network.electrodes.size());
    if (!enter_name(context, context.elements, member, "electrode", handle)) continue;
    ElementKeys fields(context, member.value, *models::find_kind("electrode"), what, member.at);
    models::Electrode electrode;
    electrode.name = member.key;
    electrode.at = member.at;
    electrode.resistance = fields.quantity("resistance").value_or(0);
    if (const Value* board = fields.find("board")) {
      electrode.board = find_element(context, *board, "board");
      if (electrode.board >= 0) {
        Board& earthed = context.network.boards[static_cast<std::size_t>(electrode.board)];
        if (earthed.electrode >= 0) {
          context.complaints.error(
              board->at, board->width,
              fmt::format("board '{}' has two electrodes; give their joint resistance once", earthed.name));
          context.complaints.note(context.network.electrodes[static_cast<std::size_t>(earthed.electrode)].at,
                                  "the other is declared here");
        }
        earthed.electrode = handle;
      }
    }
    context.network.electrodes.push_back(std::move(electrode));
  }
}

}  // namespace sunder::netlists
