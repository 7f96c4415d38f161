// SPDX-License-Identifier: Apache-2.0
/// @file
/// Names of elements, and text files as a whole.
#include <fmt/format.h>

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <system_error>

#include "netlists/context.h"
#include "netlists/hints.h"

namespace sunder::netlists {

std::string did_you_mean(const Context& context, std::string_view wrong, const std::vector<std::string_view>& names) {
  if (context.complaints.full()) return {};
  const std::string_view near = models::nearest_name(wrong, names);
  return near.empty() ? std::string{} : fmt::format("did you mean '{}'?", near);
}

std::vector<std::string_view> names_of(const Names& names, std::string_view kind) {
  std::vector<std::string_view> list;
  for (const auto& [name, named] : names) {
    if (named.kind == kind) list.push_back(name);
  }
  std::sort(list.begin(), list.end());
  return list;
}

int find_element(Context& context, const Value& value, std::string_view kind, std::string_view lead) {
  if (value.form != Value::Form::text) {
    context.complaints.error(value.at, value.width,
                             fmt::format("the name of a {} is expected, got {}", kind, word(value.form)));
    return -1;
  }
  const auto found = context.elements.find(value.text);
  if (found != context.elements.end() && found->second.kind == kind) return found->second.handle;
  if (context.maybe_lost(value.text)) return -1;
  std::string hint;
  if (!context.complaints.full()) {
    const std::vector<std::string_view> names = names_of(context.elements, kind);
    hint = did_you_mean(context, value.text, names);
    if (hint.empty()) {
      const std::string others = listed(fmt::format("{}s", kind), names);
      hint = fmt::format("{}{}{}", lead, lead.empty() || others.empty() ? "" : "; ", others);
    }
  }
  context.complaints.error(value.at, value.width, fmt::format("unknown {} '{}'", kind, value.text), std::move(hint));
  if (found != context.elements.end()) {
    context.complaints.note(found->second.at, fmt::format("'{}' is a {}", value.text, found->second.kind));
  }
  return -1;
}

bool enter_name(Context& context, Names& names, const Member& member, std::string_view kind, int handle) {
  const std::string& name = member.key;
  if (trimmed(name).empty()) {
    context.complaints.error(member.at, member.width, fmt::format("a {} has an empty name", kind));
    return false;
  }
  for (const char c : name) {
    const auto byte = static_cast<unsigned char>(c);
    if (byte >= 0x20U && byte != 0x7FU && c != '/' && c != '.' && c != '@') continue;
    context.complaints.error(member.at, member.width,
                             byte < 0x20U || byte == 0x7FU
                                 ? fmt::format("the name of a {} holds a control character", kind)
                                 : fmt::format("{} '{}' has '{}' in its name; addresses use / . and @", kind, name, c));
    return false;
  }
  const auto [place, entered] = names.try_emplace(name, Named{kind, handle, member.at});
  if (entered) return true;
  // kinds are not read in order of place; the later place is the one to complain of
  const Named& other = place->second;
  const bool here =
      other.at.file < member.at.file ||
      (other.at.file == member.at.file &&
       (other.at.line < member.at.line || (other.at.line == member.at.line && other.at.column < member.at.column)));
  context.complaints.error(here ? member.at : other.at, member.width,
                           other.kind == kind ? fmt::format("{} '{}' is declared twice", kind, name)
                                              : fmt::format("'{}' is the name of both a {} and a {}", name,
                                                            here ? other.kind : kind, here ? kind : other.kind));
  context.complaints.note(here ? other.at : member.at, "first declared here");
  context.refused = true;
  return false;
}

bool load_text(Context& context, const std::string& path, std::string_view what, models::Origin at, int width,
               std::string& text) {
  auto refuse = [&](std::string message) {
    context.complaints.error(at, width, std::move(message));
    return false;
  };
  std::error_code status;
  // a path with a zero byte would silently be cut there by the system
  if (path.find('\0') != std::string::npos || !std::filesystem::exists(path, status)) {
    return refuse(fmt::format("{} '{}' does not exist", what, path.substr(0, path.find('\0'))));
  }
  if (std::filesystem::is_directory(path, status)) return refuse(fmt::format("{} '{}' is a folder", what, path));
  if (!std::filesystem::is_regular_file(path, status)) {
    return refuse(fmt::format("{} '{}' is not a file", what, path));
  }
  const std::uintmax_t size = std::filesystem::file_size(path, status);
  if (status) return refuse(fmt::format("{} '{}' cannot be read", what, path));
  if (size > kLargestFile) {
    return refuse(fmt::format("{} '{}' has {} bytes; at most {} are read", what, path, size, kLargestFile));
  }
  std::ifstream stream(path, std::ios::binary);
  text.resize(static_cast<std::size_t>(size));
  if (!stream || !stream.read(text.data(), static_cast<std::streamsize>(size))) {
    return refuse(fmt::format("{} '{}' cannot be read", what, path));
  }
  return true;
}

bool sound_text(Context& context, std::string_view text, std::uint32_t file, std::string_view what) {
  auto refuse = [&](std::string message) {
    context.complaints.error({file, 0, 0}, 1, std::move(message));
    return false;
  };
  if (text.size() > kLargestFile) {
    return refuse(fmt::format("the {} has {} bytes; at most {} are read", what, text.size(), kLargestFile));
  }
  constexpr std::string_view kMark = "\xEF\xBB\xBF";  // byte order mark
  const std::string_view content = text.substr(0, kMark.size()) == kMark ? text.substr(kMark.size()) : text;
  if (trimmed(content).empty()) return refuse(fmt::format("the {} is empty", what));
  const std::size_t zero = text.find('\0');
  if (zero != std::string_view::npos) {
    return refuse(fmt::format("the {} is not a text: byte {} is zero", what, zero + 1));
  }
  const std::size_t bad = first_not_utf8(text);
  if (bad == std::string_view::npos) return true;
  const std::string_view before = text.substr(0, bad);
  const auto line = static_cast<std::uint32_t>(1 + std::count(before.begin(), before.end(), '\n'));
  const std::size_t start = before.rfind('\n');
  const std::string_view in_line = start == std::string_view::npos ? before : before.substr(start + 1);
  context.complaints.error({file, line, static_cast<std::uint32_t>(characters(in_line) + 1)}, 1,
                           fmt::format("the {} is not UTF-8: byte 0x{:02X}", what,
                                       static_cast<unsigned>(static_cast<unsigned char>(text[bad]))),
                           "save it with the encoding UTF-8");
  return false;
}

}  // namespace sunder::netlists
