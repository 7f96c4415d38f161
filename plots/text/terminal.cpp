// SPDX-License-Identifier: Apache-2.0
#include "plots/text/terminal.h"

#include <fmt/format.h>
#include <sys/ioctl.h>
#include <unistd.h>

#include <algorithm>
#include <cstdlib>
#include <ctime>
#include <string_view>

namespace sunder::plots {

std::string today() {
  std::time_t now = std::time(nullptr);
  std::tm day{};
  const char* fixed = std::getenv("SOURCE_DATE_EPOCH");
  if (fixed != nullptr && *fixed != '\0') {
    now = static_cast<std::time_t>(std::strtoll(fixed, nullptr, 10));
    if (::gmtime_r(&now, &day) == nullptr) return "";
  } else if (::localtime_r(&now, &day) == nullptr) {
    return "";
  }
  return fmt::format("{:04}-{:02}-{:02}", day.tm_year + 1900, day.tm_mon + 1, day.tm_mday);
}

TextStyle style_for(int descriptor, bool shown) {
  TextStyle style;
  const bool terminal = shown && ::isatty(descriptor) == 1;
  const char* no_colour = std::getenv("NO_COLOR");
  const char* kind = std::getenv("TERM");
  style.colour =
      terminal && (no_colour == nullptr || *no_colour == '\0') && (kind == nullptr || std::string_view(kind) != "dumb");
  struct winsize size {};
  if (terminal && ::ioctl(descriptor, TIOCGWINSZ, &size) == 0 && size.ws_col > 0) {
    style.width = std::clamp(static_cast<int>(size.ws_col), 70, 160);
  }
  style.date = today();
  return style;
}

}  // namespace sunder::plots
