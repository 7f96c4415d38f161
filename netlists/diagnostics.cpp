// SPDX-License-Identifier: Apache-2.0
/// @file
/// Diagnostics: gathering, ordering, and the one form in which they are written.
#include <fmt/format.h>

#include <algorithm>
#include <tuple>
#include <utility>

#include "netlists/complaints.h"
#include "netlists/reader.h"
#include "netlists/value.h"

namespace sunder::netlists {

namespace {

constexpr int kBefore = 60;   // characters of a long line kept before the caret
constexpr int kWidest = 110;  // characters of a line shown at most
constexpr std::string_view kCut = "...";

// Text split into characters (code points).
std::vector<std::string_view> split_characters(std::string_view text) {
  std::vector<std::string_view> pieces;
  std::size_t i = 0;
  while (i < text.size()) {
    std::size_t end = i + 1;
    while (end < text.size() && (static_cast<unsigned char>(text[end]) & 0xC0U) == 0x80U) ++end;
    pieces.push_back(text.substr(i, end - i));
    i = end;
  }
  return pieces;
}

// The line and the blanks under it up to the caret; tabs stay tabs in both, control characters are
// shown as a dot so that a terminal is not disturbed.
std::pair<std::string, std::string> line_and_caret(const Diagnostic& diagnostic) {
  const std::vector<std::string_view> pieces = split_characters(diagnostic.source_line);
  const int n = static_cast<int>(pieces.size());
  const int column = std::clamp(diagnostic.column, 1, n + 1);
  int first = 0;
  int last = n;
  if (n > kWidest) {
    first = std::max(0, std::min(column - 1 - kBefore, n - kWidest));
    last = std::min(n, first + kWidest);
  }
  std::string line(first > 0 ? kCut : std::string_view{});
  std::string under(line.size(), ' ');
  for (int i = first; i < last; ++i) {
    const std::string_view piece = pieces[static_cast<std::size_t>(i)];
    const bool control =
        piece.size() == 1 && piece != "\t" && (static_cast<unsigned char>(piece[0]) < 0x20U || piece[0] == '\x7f');
    line += control ? std::string_view{"."} : piece;
    if (i < column - 1) under += piece == "\t" ? '\t' : ' ';
  }
  if (last < n) line += kCut;
  const int width = std::clamp(diagnostic.width, 1, std::max(1, last - column + 1));
  under += '^';
  under.append(static_cast<std::size_t>(width - 1), '~');
  return {line, under};
}

std::string_view severity_word(Severity severity) noexcept {
  switch (severity) {
    case Severity::error:
      return "error";
    case Severity::warning:
      return "warning";
    case Severity::note:
      break;
  }
  return "note";
}

}  // namespace

std::uint32_t Complaints::add_file(std::string name, std::string_view text) {
  File file{std::move(name), text, {0}};
  for (std::size_t i = text.find('\n'); i != std::string_view::npos; i = text.find('\n', i + 1)) {
    file.starts.push_back(i + 1);
  }
  files_.push_back(std::move(file));
  return static_cast<std::uint32_t>(files_.size());
}

std::string Complaints::line_of(models::Origin at) const {
  if (at.file == 0 || at.file > files_.size() || at.line == 0) return {};
  const File& file = files_[at.file - 1];
  if (at.line > file.starts.size()) return {};
  const std::size_t start = file.starts[at.line - 1];
  std::string_view line = file.text.substr(start, file.text.find('\n', start) - start);
  if (!line.empty() && line.back() == '\r') line.remove_suffix(1);
  constexpr std::string_view kMark = "\xEF\xBB\xBF";  // byte order mark
  if (at.line == 1 && line.substr(0, kMark.size()) == kMark) line.remove_prefix(kMark.size());
  std::string shown;  // bytes that are not UTF-8 as the sign for such
  for (std::size_t bad = first_not_utf8(line); bad != std::string_view::npos; bad = first_not_utf8(line)) {
    shown += line.substr(0, bad);
    shown += "\xEF\xBF\xBD";
    line.remove_prefix(bad + 1);
  }
  return shown.append(line);
}

Diagnostic Complaints::make(Severity severity, models::Origin at, int width, std::string message) const {
  Diagnostic made;
  made.severity = severity;
  if (at.file > 0 && at.file <= files_.size()) made.file = files_[at.file - 1].name;
  made.line = static_cast<int>(at.line);
  made.column = static_cast<int>(at.column);
  made.width = width;
  made.message = std::move(message);
  if (severity != Severity::note) made.source_line = line_of(at);
  return made;
}

void Complaints::error(models::Origin at, int width, std::string message, std::string hint) {
  ++n_errors_;
  last_kept_ = n_errors_ <= kMost;
  if (!last_kept_) return;
  Entry entry{at, make(Severity::error, at, width, std::move(message)), {}};
  entry.main.hint = std::move(hint);
  entries_.push_back(std::move(entry));
}

void Complaints::warn(models::Origin at, int width, std::string message, std::string hint) {
  last_kept_ = true;
  Entry entry{at, make(Severity::warning, at, width, std::move(message)), {}};
  entry.main.hint = std::move(hint);
  entries_.push_back(std::move(entry));
}

void Complaints::note(models::Origin at, std::string message) {
  if (!last_kept_ || entries_.empty()) return;
  entries_.back().notes.push_back(make(Severity::note, at, 1, std::move(message)));
}

std::vector<std::string> Complaints::file_names() const {
  std::vector<std::string> names;
  for (const File& file : files_) names.push_back(file.name);
  return names;
}

std::vector<Diagnostic> Complaints::in_order() const {
  std::vector<const Entry*> order;
  for (const Entry& entry : entries_) order.push_back(&entry);
  std::stable_sort(order.begin(), order.end(), [](const Entry* a, const Entry* b) {
    return std::tie(a->at.file, a->at.line, a->at.column) < std::tie(b->at.file, b->at.line, b->at.column);
  });
  std::vector<Diagnostic> list;
  for (const Entry* entry : order) {
    list.push_back(entry->main);
    list.insert(list.end(), entry->notes.begin(), entry->notes.end());
  }
  if (n_errors_ > kMost && !files_.empty()) {
    list.push_back(
        make(Severity::error, {1, 0, 0}, 1, fmt::format("{} further errors are not listed", n_errors_ - kMost)));
    list.back().stands_for = n_errors_ - kMost;
  }
  return list;
}

std::string format_diagnostic(const Diagnostic& diagnostic) {
  std::string text = diagnostic.file;
  if (diagnostic.line > 0) {
    text += fmt::format(":{}", diagnostic.line);
    if (diagnostic.column > 0) text += fmt::format(":{}", diagnostic.column);
  }
  if (!text.empty()) text += ": ";
  text += fmt::format("{}: {}\n", severity_word(diagnostic.severity), diagnostic.message);
  const std::string number = std::to_string(diagnostic.line);
  if (diagnostic.line > 0 && !diagnostic.source_line.empty()) {
    const auto [line, under] = line_and_caret(diagnostic);
    text += fmt::format(" {} | {}\n", number, line);
    text += fmt::format(" {} | {}\n", std::string(number.size(), ' '), under);
  }
  if (!diagnostic.hint.empty()) {
    text += fmt::format("{}= {}\n", std::string(number.size() + 1, ' '), diagnostic.hint);
  }
  return text;
}

}  // namespace sunder::netlists
