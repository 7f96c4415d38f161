// SPDX-License-Identifier: Apache-2.0
/// @file
/// The parts of the reader, each in a file of its own; the order in which reader.cpp calls them matters
/// only where it says so. All complain into the context and return nothing where they could not read.
#pragma once

#include <optional>
#include <string>

#include "netlists/context.h"

namespace sunder::netlists {

// reader_devices.cpp
/// [device.x] tables; before anything that has a device.
void read_named_devices(Context& context, const Value& table);
/// A device text, an inline table, or the name of a [device.x].
/// @param what  "device of submain 'S1'"
[[nodiscard]] std::optional<models::Device> read_device(Context& context, const Value& value, const std::string& what);

// reader_cables.cpp
/// [cable.x] tables; before anything that has a cable.
void read_constructions(Context& context, const Value& table);
/// Resolves a cable text for a run that carries `conductors`.
/// @param subject  address for assumptions
/// @param tails    a missing cpc is then assumed, as large as the line conductor
/// @param at       the element, for what the text does not say
[[nodiscard]] bool read_cable(Context& context, const PendingRun& run, models::ConductorSet conductors,
                              const std::string& what, const std::string& subject, bool tails, models::Origin at,
                              models::Cable& out);

/// The cpc text of a run that has no protective conductor.
[[nodiscard]] const Value& no_cpc();
/// Whether a cpc says that the neutral is the protective conductor too.
[[nodiscard]] bool is_pen(const Value* cpc) noexcept;

// boards must be known
void read_supplies(Context& context, const Value& table);      // reader_sources.cpp
void read_transformers(Context& context, const Value& table);  // reader_transformers.cpp
void read_generators(Context& context, const Value& table);    // reader_machines.cpp
void read_inverters(Context& context, const Value& table);

// reader_elements.cpp
/// Boards without their schedules; before anything that names a board.
void read_boards(Context& context, const Value& table);
void read_submains(Context& context, const Value& table);
void read_circuits(Context& context, const Value& table);
/// One circuit of a table or a row of a schedule; `table` must outlive the reading.
void read_circuit(Context& context, int board, const Member& name, const Value& table);
void read_electrodes(Context& context, const Value& table);

// reader_machines.cpp; circuits must be known
void read_motors(Context& context, const Value& table);

// reader_states.cpp; states come last of all elements
void read_bonds(Context& context, const Value& table);
void read_links(Context& context, const Value& table);
void read_states(Context& context, const Value* table);
/// A state in which every link is as it says itself, and nothing else is open; without sources.
[[nodiscard]] models::SupplyState usual_state(const models::Network& network);

// schedule.cpp
/// The circuits of a schedule file; `value` is its path as the board names it.
void read_schedule(Context& context, int board, const Value& value);

// phase_walk.cpp
/// Conductors and voltages worked out from the sources to every board, and what they decide: cables of submains,
/// conductors of links, combined conductors, currents of motors.
void walk_phases(Context& context);

// wiring.cpp
/// What needs the whole network: groups, phases worked down from the sources, cables, demands, states.
void join_up(Context& context);

}  // namespace sunder::netlists
