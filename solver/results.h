// SPDX-License-Identifier: Apache-2.0
/// @file
/// What the solver hands out: fault currents, findings with their working, schedule rows. Values
/// only; text is made when they are printed (plots/).
#pragma once

#include <initializer_list>
#include <limits>
#include <optional>
#include <string>
#include <vector>

#include "models/network.h"
#include "models/units.h"

namespace sunder::solver {

inline constexpr double kNone = std::numeric_limits<double>::quiet_NaN();  ///< "no such value"

enum class Condition { maximum, minimum };
/// Two lines and earth is computed where it is asked for, not judged.
enum class Fault { three_phase, line_line, line_neutral, line_earth, two_lines_earth };
enum class Verdict { meets, fails, undecided, noted };

inline constexpr std::initializer_list<Fault> kAllFaults{Fault::three_phase, Fault::line_line, Fault::line_neutral,
                                                         Fault::line_earth};

/// 0 fails, 1 undecided, 2 meets, 3 noted: the less, the more it governs.
[[nodiscard]] constexpr int severity(Verdict verdict) noexcept {
  return verdict == Verdict::fails ? 0 : verdict == Verdict::undecided ? 1 : verdict == Verdict::meets ? 2 : 3;
}

[[nodiscard]] const char* word(Condition condition) noexcept;  ///< "maximum"
[[nodiscard]] const char* word(Fault fault) noexcept;          ///< "line-earth"
[[nodiscard]] const char* word(Verdict verdict) noexcept;      ///< "meets"

/// The prospective current of one fault at one node in one state and condition.
struct FaultRow {
  std::string state;
  Condition condition = Condition::maximum;
  std::string node;  ///< "workshop", "workshop/W2", "workshop/W2/spur1"
  Fault fault = Fault::line_earth;
  std::string phases;        ///< "L1-PE", "L1-N", "L1-L2", "L1-L2-L3": the governing choice
  double current = 0;        ///< [A] rms
  double peak = kNone;       ///< [A]; kNone in the minimum
  double x_over_r = 0;       ///< of the loop
  double loop_ohms = 0;      ///< |Z| of the loop that `driving_volts` drives [ohm]
  double driving_volts = 0;  ///< c*U0 or c*U [V]
  bool known = true;         ///< false: undeclared data; `needs` says which
  std::string needs;
};

/// One line of working: formula, the same with numbers, the result, and where its inputs stand.
struct Step {
  std::string what;     ///< "earth-fault loop at the far end"
  std::string formula;  ///< "Zs = Ze + R1 + R2"
  std::string numbers;  ///< "0.35 + 0.21 + 0.27"
  double result = kNone;
  models::Quantity unit = models::Quantity::count;
  models::Origin at{};  ///< of the input that matters most; file 0: none
};

struct Remedy {
  std::string what;      ///< "shorten W2 to 31.4 m", "use 4/1.5 mm2"
  std::string key;       ///< address of the value: "workshop/W2.length"
  double value = kNone;  ///< in the SI unit of `unit`
  models::Quantity unit = models::Quantity::count;
  bool holds = false;  ///< every check of the subject is met with it, none elsewhere gets worse
  std::string note;    ///< what would still not be met, "" when it holds
};

/// One check of one subject. `fails` over `undecided` over `meets`, then least margin, governs.
struct Finding {
  std::string check;    ///< "disconnection time"
  std::string subject;  ///< "workshop/W2", "S1", "intake"
  Verdict verdict = Verdict::undecided;
  double value = kNone;  ///< SI; kNone with `reason` (never operates, no bound)
  double limit = kNone;
  models::Quantity unit = models::Quantity::count;
  double margin = kNone;  ///< signed, relative to the limit; negative: not met
  std::string state;
  std::string condition;  ///< "maximum", "minimum", or ""
  std::string fault;      ///< "line-earth", ..., or ""
  std::string clause;
  models::Confidence confidence = models::Confidence::declared;
  std::string summary;             ///< the working in one sentence: "1.62 ohm lets 135 A flow; C 16 A needs 160 A"
  std::string reason;              ///< why value or limit is absent, or why undecided
  std::vector<std::string> needs;  ///< what would decide it: "Icn of the device of W3"
  std::vector<std::string> assumptions;
  std::vector<Step> steps;
  std::vector<Remedy> remedies;
  models::Origin at{};
  // pairs of devices (check "selectivity")
  std::string upstream;     ///< address of the upstream device's element, "" if not a pair
  std::string selectivity;  ///< "total", "partial", "none", "undecided"
  double limit_A = kNone;
  double available_A = kNone;
  std::string basis;
  // for `vary`: log distances to the points at which value or verdict may jump, in a fixed order
  std::vector<double> breakpoints;
};

/// One row of the circuit schedule.
struct ScheduleRow {
  std::string address, serves, phases, device, cable, cpc;
  bool submain = false;
  double length = kNone;                      ///< [m]
  double Ib = kNone, In = kNone, Iz = kNone;  ///< [A]
  double drop = kNone;                        ///< [1] from the supply terminals
  double Zs = kNone;                          ///< [ohm] at the minimum condition
  double least = kNone;                  ///< [A] least line-earth, line-neutral or line-line current at the far end
  double greatest = kNone;               ///< [A] greatest current at the device
  double time = kNone;                   ///< [s] latest disconnection, infinite: never
  double limit = kNone;                  ///< [s]
  Verdict verdict = Verdict::undecided;  ///< worst of the checks of this circuit
};

/// Curves, currents and damage lines of one path, for the coordination chart.
struct PathDevice {
  std::string address;  ///< "grid", "S1", "workshop/W2", "workshop (incomer)"
  std::string label;    ///< "workshop/W2  B 32 A"
  models::Device device;
  double least = kNone;     ///< least current it must clear [A]
  double greatest = kNone;  ///< greatest current through it [A]
};
struct DamageLine {
  std::string label;  ///< "S1 armour of 78 mm2"
  double k2s2 = 0;    ///< [A2s], t = k2s2 / I2, drawn up to 5 s
};
struct ChartCurrent {
  std::string label;   ///< "least line-earth at workshop/W2"
  double current = 0;  ///< [A]
};
struct PathChart {
  std::string title, address, state;
  std::string voltage;              ///< "230/400 V" that the currents are taken at, "" if not one
  std::vector<PathDevice> devices;  ///< source first
  std::vector<DamageLine> damage;
  std::vector<ChartCurrent> currents;
};

/// Result of `vary`.
struct Flip {
  std::string check, subject;
  Verdict before = Verdict::meets, after = Verdict::fails;
  double at = 0;  ///< parameter value [SI] (catalogue: index of the first value after it)
  std::string state;
};
struct SweepPoint {
  double value = 0;               ///< [SI]
  std::string text;               ///< catalogue: the value as text
  std::vector<Finding> findings;  ///< governing, without steps
};
struct Stretch {
  std::string check, subject;
  double from = 0, to = 0;  ///< undecided between these
  std::string needs;
};
struct Sweep {
  std::string key;
  models::Quantity unit = models::Quantity::count;
  bool catalogue = false;
  std::vector<SweepPoint> points;
  std::vector<Flip> flips;
  std::vector<Stretch> undecided;
};

}  // namespace sunder::solver
