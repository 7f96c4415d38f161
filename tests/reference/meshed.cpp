// SPDX-License-Identifier: Apache-2.0
#include "tests/reference/meshed.h"

namespace sunder::reference::meshed {

const std::vector<Cable>& cables() {
  static const std::vector<Cable> all = {
      {"lab-xlpe-5c", false, 90, 5, 10, 1.83, 0.091},   {"lab-xlpe-5c", false, 90, 5, 25, 0.727, 0.083},
      {"lab-xlpe-5c", false, 90, 5, 70, 0.268, 0.079},  {"lab-xlpe-5c", false, 90, 5, 150, 0.124, 0.077},
      {"lab-pvc-al-5c", true, 70, 5, 35, 0.868, 0.085}, {"lab-pvc-al-5c", true, 70, 5, 120, 0.253, 0.080},
      {"lab-pvc-4c", false, 70, 4, 35, 0.524, 0.083},   {"lab-pvc-4c", false, 70, 4, 95, 0.193, 0.080},
      {"lab-pvc-4c", false, 70, 4, 240, 0.0754, 0.078}, {"lab-pvc-3c", false, 70, 3, 2.5, 7.41, 0.109},
      {"lab-pvc-3c", false, 70, 3, 6, 3.08, 0.1},       {"lab-singles", false, 70, 0, 120, 0.153, 0.089},
      {"lab-singles", false, 70, 0, 240, 0.0754, 0.087}};
  return all;
}

int count_nodes(const Network& network) {
  std::size_t n = network.boards.size() + network.circuits.size();
  for (const Circuit& circuit : network.circuits) n += circuit.spurs.size();
  return static_cast<int>(n);
}

}  // namespace sunder::reference::meshed
