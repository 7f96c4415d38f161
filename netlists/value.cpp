// SPDX-License-Identifier: Apache-2.0
/// @file
/// Small tools on text and values.
#include "netlists/value.h"

namespace sunder::netlists {

const Value* Value::find(std::string_view key) const noexcept {
  for (const Member& member : members) {
    if (member.key == key) return &member.value;
  }
  return nullptr;
}

std::string_view word(Value::Form form) noexcept {
  switch (form) {
    case Value::Form::text:
      return "a text";
    case Value::Form::number:
      return "a number";
    case Value::Form::flag:
      return "true or false";
    case Value::Form::list:
      return "a list";
    case Value::Form::table:
      return "a table";
    case Value::Form::other:
      break;
  }
  return "a date or time";
}

int characters(std::string_view text) noexcept {
  int n = 0;
  for (const char c : text) {
    if ((static_cast<unsigned char>(c) & 0xC0U) != 0x80U) ++n;  // not a continuation byte
  }
  return n;
}

std::string_view trimmed(std::string_view text) noexcept {
  constexpr std::string_view kBlanks = " \t\r\n";
  const std::size_t first = text.find_first_not_of(kBlanks);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(kBlanks) - first + 1);
}

std::size_t first_not_utf8(std::string_view text) noexcept {
  std::size_t i = 0;
  while (i < text.size()) {
    const auto lead = static_cast<unsigned char>(text[i]);
    std::size_t length = 0;
    if (lead < 0x80U)
      length = 1;
    else if (lead >= 0xC2U && lead <= 0xDFU)
      length = 2;
    else if (lead >= 0xE0U && lead <= 0xEFU)
      length = 3;
    else if (lead >= 0xF0U && lead <= 0xF4U)
      length = 4;
    if (length == 0 || i + length > text.size()) return i;
    for (std::size_t k = 1; k < length; ++k) {
      const auto byte = static_cast<unsigned char>(text[i + k]);
      if ((byte & 0xC0U) != 0x80U) return i;
      // the second byte excludes overlong forms, surrogates and what lies above U+10FFFF
      if (k == 1 && ((lead == 0xE0U && byte < 0xA0U) || (lead == 0xEDU && byte > 0x9FU) ||
                     (lead == 0xF0U && byte < 0x90U) || (lead == 0xF4U && byte > 0x8FU))) {
        return i;
      }
    }
    i += length;
  }
  return std::string_view::npos;
}

}  // namespace sunder::netlists
