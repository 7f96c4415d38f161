// SPDX-License-Identifier: Apache-2.0
// Which faults a place allows and what drives them.
#include <cmath>

#include "tests/reference/meshed_model.h"

namespace sunder::reference::meshed {

const char* word(Condition condition) { return condition == Condition::maximum ? "maximum" : "minimum"; }

const char* word(Fault fault) {
  switch (fault) {
    case Fault::three_phase:
      return "three-phase";
    case Fault::line_line:
      return "line-line";
    case Fault::line_neutral:
      return "line-neutral";
    case Fault::line_earth:
      return "line-earth";
    case Fault::two_lines_earth:
      return "two lines and earth";
  }
  return "";
}

bool is_tn(Earthing earthing) {
  return earthing == Earthing::tn_s || earthing == Earthing::tn_c_s || earthing == Earthing::tn_c;
}

double voltage_factor(const Network& network, const Board& board, Condition condition) {
  if (condition == Condition::maximum) return 1.1;
  if (board.high) return 1.0;
  return network.bs ? 0.95 : 0.9;
}

double temperature_coefficient(const Network& network, const Cable& cable) {
  if (network.bs) return 0.004;
  return cable.aluminium ? 0.00403 : 0.00393;
}

double driving_volts(const Board& board, Fault fault) {
  switch (fault) {
    case Fault::three_phase:
      return board.U / std::sqrt(3.0);
    case Fault::line_line:
      return board.U;
    default:
      return board.U0;
  }
}

std::vector<Asked> possible_faults(const Place& place) {
  std::vector<std::size_t> lines;
  for (std::size_t line = 0; line < 3; ++line) {
    if (place.has(line)) lines.push_back(line);
  }
  std::vector<Asked> asked;
  if (lines.size() == 3) asked.push_back({Fault::three_phase, lines});
  for (std::size_t i = 0; i < lines.size(); ++i) {
    if (place.has(kN)) asked.push_back({Fault::line_neutral, {lines[i]}});
    if (place.has(kPE)) asked.push_back({Fault::line_earth, {lines[i]}});
    for (std::size_t k = i + 1; k < lines.size(); ++k) {
      asked.push_back({Fault::line_line, {lines[i], lines[k]}});
      if (place.has(kPE)) asked.push_back({Fault::two_lines_earth, {lines[i], lines[k]}});
    }
  }
  return asked;
}

std::string phases_text(const Place& place, const Asked& asked) {
  std::string text;
  for (const std::size_t line : asked.lines) text += (text.empty() ? "L" : "-L") + std::to_string(line + 1);
  if (asked.fault == Fault::line_neutral) text += "-N";
  if (asked.fault == Fault::line_earth || asked.fault == Fault::two_lines_earth) {
    text += place.node[kPE] == Equations::kEarth ? "-earth" : "-PE";
  }
  return text;
}

std::vector<Equations::Closing> closings(const Network& network, Condition condition, const Place& place,
                                         const Asked& asked) {
  const Board& board = network.boards[static_cast<std::size_t>(place.board)];
  const double volts = voltage_factor(network, board, condition) * driving_volts(board, asked.fault);
  const auto force = [&](std::size_t line) {
    return std::polar(volts, -2.0 * 3.14159265358979323846 / 3.0 * static_cast<double>(line));
  };
  const auto& lines = asked.lines;
  switch (asked.fault) {
    case Fault::line_line:
      return {{place.node[lines[0]], place.node[lines[1]], volts}};
    case Fault::three_phase:
      // The common point has no other connection: two loops that end in the third line.
      return {{place.node[0], place.node[2], force(0) - force(2)}, {place.node[1], place.node[2], force(1) - force(2)}};
    case Fault::line_neutral:
      return {{place.node[lines[0]], place.node[kN], force(lines[0])}};
    case Fault::line_earth:
      return {{place.node[lines[0]], place.node[kPE], force(lines[0])}};
    case Fault::two_lines_earth:
      return {{place.node[lines[0]], place.node[kPE], force(lines[0])},
              {place.node[lines[1]], place.node[kPE], force(lines[1])}};
  }
  return {};
}

std::array<Complex, kConductors> into_fault(const Asked& asked, const Equations::Solution& solution) {
  std::array<Complex, kConductors> amps{};
  const auto& i = solution.closing;
  switch (asked.fault) {
    case Fault::three_phase:
      amps = {i[0], i[1], -i[0] - i[1], 0, 0};
      break;
    case Fault::line_line:
      amps[asked.lines[0]] = i[0];
      amps[asked.lines[1]] = -i[0];
      break;
    case Fault::line_neutral:
      amps[asked.lines[0]] = i[0];
      amps[kN] = -i[0];
      break;
    case Fault::line_earth:
      amps[asked.lines[0]] = i[0];
      amps[kPE] = -i[0];
      break;
    case Fault::two_lines_earth:
      amps[asked.lines[0]] = i[0];
      amps[asked.lines[1]] = i[1];
      amps[kPE] = -i[0] - i[1];
      break;
  }
  return amps;
}

}  // namespace sunder::reference::meshed
