// SPDX-License-Identifier: Apache-2.0
#include "models/network.h"

#include <fmt/format.h>

namespace sunder::models {

std::string address(const Network& network, const Circuit& circuit) {
  if (circuit.board < 0) return circuit.name;
  return network.boards.at(static_cast<std::size_t>(circuit.board)).name + "/" + circuit.name;
}

std::string place_text(const Network& network, Origin at) {
  if (at.file == 0 || at.file >= network.files.size()) return "";
  return fmt::format("{}:{}:{}", network.files[at.file], at.line, at.column);
}

}  // namespace sunder::models
