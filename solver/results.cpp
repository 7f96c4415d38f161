// SPDX-License-Identifier: Apache-2.0
#include "solver/results.h"

namespace sunder::solver {

const char* word(Condition condition) noexcept { return condition == Condition::maximum ? "maximum" : "minimum"; }

const char* word(Fault fault) noexcept {
  switch (fault) {
    case Fault::three_phase:
      return "three-phase";
    case Fault::line_line:
      return "line-line";
    case Fault::line_neutral:
      return "line-neutral";
    case Fault::two_lines_earth:
      return "two lines and earth";
    case Fault::line_earth:
      break;
  }
  return "line-earth";
}

const char* word(Verdict verdict) noexcept {
  switch (verdict) {
    case Verdict::meets:
      return "meets";
    case Verdict::fails:
      return "fails";
    case Verdict::noted:
      return "noted";
    case Verdict::undecided:
      break;
  }
  return "undecided";
}

}  // namespace sunder::solver
