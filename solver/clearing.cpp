// SPDX-License-Identifier: Apache-2.0
#include "solver/clearing.h"

#include <algorithm>
#include <cmath>

namespace sunder::solver {
namespace {

using models::Device;
using models::LetThrough;
using models::Network;

std::size_t at(int handle) { return static_cast<std::size_t>(handle); }

// The guarantee "within 0.1 s" of a standard: below it the time is not known, only bounded.
constexpr double kTenth = 0.1;

void push(std::vector<Protector>& path, const Device& device, const std::string& address, models::Origin where,
          int board) {
  if (device.present()) path.push_back({&device, address, where, board});
}

void push_group(std::vector<Protector>& path, const Network& network, int board, int group) {
  if (group < 0) return;
  const models::Group& of = network.boards[at(board)].groups[at(group)];
  push(path, of.device, network.boards[at(board)].name + "." + of.name, of.at, board);
}

// Let-through straight on log-log paper between a maker's points; beyond them he states nothing.
double points_heat(const std::vector<models::CurvePoint>& points, double current) {
  if (current < points.front().current) return models::kNever;
  if (current == points.front().current) return points.front().time;
  for (std::size_t i = 1; i < points.size(); ++i) {
    if (current > points[i].current) continue;
    const double share =
        std::log(current / points[i - 1].current) / std::log(points[i].current / points[i - 1].current);
    return points[i - 1].time * std::pow(points[i].time / points[i - 1].time, share);
  }
  return models::kNever;
}

}  // namespace

std::vector<Protector> path_to_board(const Network& network, const StateTree& tree, int board) {
  std::vector<int> boards;
  // Up to what feeds this voltage level: a current beyond a transformer is another current.
  for (int b = board; b >= 0;) {
    boards.push_back(b);
    const int f = tree.feeder[at(b)];
    if (tree.grid) {
      b = tree.transformer[at(b)] >= 0 ? -1 : tree.above[at(b)];
    } else {
      b = f < 0 ? -1 : network.submains[at(f)].from;
    }
  }
  std::vector<Protector> path;
  const int top = boards.back();
  if (!tree.grid || tree.sole[at(top)] || tree.transformer[at(top)] >= 0) {
    const models::Source& source = system_of(network, tree, top);
    push(path, source.device, source.name, source.at, -1);
  }
  for (auto b = boards.rbegin(); b != boards.rend(); ++b) {
    if (const int f = tree.feeder[at(*b)]; f >= 0) {
      const models::Submain& submain = network.submains[at(f)];
      push_group(path, network, submain.from, submain.group);
      push(path, submain.device, submain.name, submain.at, submain.from);
    }
    if (tree.grid && tree.link[at(*b)] >= 0) {
      const models::Link& link = network.links[at(tree.link[at(*b)])];
      push(path, link.device, link.name, link.at, tree.above[at(*b)]);
    }
    const models::Board& here = network.boards[at(*b)];
    push(path, here.incomer, here.name, here.at, *b);
  }
  return path;
}

std::vector<Protector> path_to_circuit(const Network& network, const StateTree& tree, int circuit) {
  const models::Circuit& of = network.circuits[at(circuit)];
  std::vector<Protector> path = path_to_board(network, tree, of.board);
  push_group(path, network, of.board, of.group);
  push(path, of.device, models::address(network, of), of.at, of.board);
  return path;
}

std::vector<Protector> path_to_submain(const Network& network, const StateTree& tree, int submain) {
  const models::Submain& of = network.submains[at(submain)];
  std::vector<Protector> path = path_to_board(network, tree, of.from);
  push_group(path, network, of.from, of.group);
  push(path, of.device, of.name, of.at, of.from);
  return path;
}

double residual_capacity(const Device& device) noexcept {
  constexpr double kMultiple = 10.0, kLeast = 500.0;  // [A] the second; IEC 61008-1, rated residual breaking capacity
  // Of a combined device that is its breaking capacity; where that is not given its own check says so.
  if (!device.overcurrent.empty()) {
    if (device.Icn <= 0) return models::kNever;
    return device.Icn;
  }
  return std::max(kMultiple * device.In, kLeast);
}

const Protector* overcurrent_protector(const std::vector<Protector>& path) noexcept {
  for (auto p = path.rbegin(); p != path.rend(); ++p)
    if (!p->device->overcurrent.empty()) return &*p;
  return nullptr;
}

Disconnection disconnection(const std::vector<Protector>& path, double current, double limit) noexcept {
  Disconnection best;
  auto consider = [&](const Protector& by, const models::Curve& latest, bool residual) {
    const double time = latest.time_at(current);
    const double needed = models::current_for(latest, limit);
    // Of equal times (never, too) the device that needs the least current is the one to name.
    const bool better = time < best.time || best.by == nullptr || (time == best.time && needed < best.needed);
    if (better) best = {time, &by, residual, needed};
  };
  if (const Protector* overcurrent = overcurrent_protector(path); overcurrent != nullptr)
    consider(*overcurrent, overcurrent->device->overcurrent.latest, false);
  for (auto p = path.rbegin(); p != path.rend(); ++p)
    if (!p->device->residual.empty() && current <= residual_capacity(*p->device))
      consider(*p, p->device->residual.latest, true);
  return best;
}

double dc_heat(double kappa, double time, double frequency) noexcept {
  const double log = std::log(std::clamp(kappa, 1.02, 1.999) - 1.0);
  return (std::exp(4.0 * frequency * time * log) - 1.0) / (2.0 * frequency * time * log);
}

Heat greatest_heat(const Device& device, double current, double kappa) {
  Heat heat;
  heat.confidence = device.confidence;
  heat.time = device.overcurrent.latest.time_at(current);
  if (std::isinf(heat.time)) return heat;
  const double square = current * current;
  constexpr double kFrequency = 50.0;
  if (heat.time > kTenth * (1 + 1e-9)) {
    heat.total = square * heat.time * (1.0 + dc_heat(kappa, heat.time, kFrequency));
    // A gate is a bound, and so is what is held above the last point of a figure; a sloping piece is the
    // figure's own.
    constexpr double kAside = 1e-6;
    const models::Curve& latest = device.overcurrent.latest;
    const bool sloping = latest.time_at(current * (1 - kAside)) > latest.time_at(current * (1 + kAside));
    heat.from_data = (!device.by_gates || sloping) && current <= device.overcurrent.latest.points.back().current;
    heat.basis = "latest operating time";
    // Pre-arcing I2t of a fuse does not rise with current: each gate passed bounds all above it.
    if (device.kind == models::DeviceKind::fuse && device.by_gates)
      for (const models::CurvePoint& gate : device.overcurrent.latest.points) {
        const double total = gate.current * gate.current * gate.time;
        if (gate.current > current || total >= heat.total) continue;
        heat.total = total;
        heat.basis = "gate of the fuse below this current";
      }
  } else {
    heat.total = square * kTenth * (1.0 + dc_heat(kappa, kTenth, kFrequency));
    heat.basis = "safe bound I2 (m + n) 0.1 s";
  }
  // A class or a fuse's limits bound the heat at every current; only a maker's points say what it is.
  auto bound = [&](double total, const char* basis, bool data_at_this_current = false) {
    heat.from_data = heat.from_data || data_at_this_current;
    if (total >= heat.total) return;
    heat.total = total;
    heat.basis = basis;
    heat.confidence = models::worse(device.confidence, device.let_through.confidence);
  };
  const LetThrough& data = device.let_through;
  // Let-through is that of a short-circuit operation: a class or a maker's points say nothing of the
  // delayed trip at currents where the latest time is longer.
  const bool short_circuit = heat.time <= kTenth * (1 + 1e-9);
  switch (data.basis) {
    case LetThrough::Basis::none:
      break;
    case LetThrough::Basis::energy_class:
      if (short_circuit && current <= device.Icn) bound(data.total, "energy class");
      break;
    case LetThrough::Basis::fuse_limits: {
      // Pre-arcing I2t of a fuse does not rise with current, so its last gate bounds all above it.
      const models::CurvePoint& last = device.overcurrent.latest.points.back();
      if (current >= last.current) bound(last.current * last.current * last.time, "last gate of the fuse");
      if (current >= data.valid_from) bound(data.total, "fuse I2t limits");
      break;
    }
    case LetThrough::Basis::falling:
      if (current >= data.valid_from) bound(data.total, "last figure point of the fuse");
      break;
    case LetThrough::Basis::points:
      if (short_circuit && !data.points.empty()) {
        // Of a breaker it rises with the current, so that the first point bounds what is below it; of a
        // fuse it falls.
        const bool rising = device.kind == models::DeviceKind::breaker;
        const double from = rising ? std::max(current, data.points.front().current) : current;
        const double total = points_heat(data.points, from);
        if (std::isfinite(total)) bound(total, "maker's let-through", current >= data.points.front().current);
      }
      break;
  }
  return heat;
}

double least_heat(const Device& device, double current) noexcept {
  const double time = device.overcurrent.earliest.time_at(current);
  // "At once" is drawn at kImmediately but assures nothing; and within half a cycle a device may limit the
  // current, so that the prospective one tells nothing of the least heat.
  constexpr double kHalfCycle = 0.008;  // [s] at 60 Hz, the shorter
  return std::isinf(time) || time <= std::max(models::kImmediately, kHalfCycle) ? 0.0 : current * current * time;
}

std::vector<double> step_currents(const models::Curve& curve) {
  std::vector<double> steps;
  for (std::size_t i = 0; i < curve.points.size(); ++i) {
    const bool vertical = i > 0 && curve.points[i].current == curve.points[i - 1].current;
    const bool start = i == 0;  // from "never" to the first guarantee
    if (vertical || start) steps.push_back(curve.points[i].current);
  }
  return steps;
}

std::vector<double> heat_corners(const Device& device, double low, double high) {
  std::vector<double> corners;
  auto add = [&](double current) {
    constexpr double kHair = 1e-9;
    for (const double near : {current * (1 - kHair), current * (1 + kHair)})
      if (near > low && near < high) corners.push_back(near);
  };
  for (const models::CurvePoint& point : device.overcurrent.latest.points) add(point.current);
  for (const models::CurvePoint& point : device.let_through.points) add(point.current);
  if (device.let_through.valid_from > 0) add(device.let_through.valid_from);
  if (device.let_through.basis == LetThrough::Basis::energy_class && device.Icn > 0) add(device.Icn);
  std::sort(corners.begin(), corners.end());
  return corners;
}

}  // namespace sunder::solver
