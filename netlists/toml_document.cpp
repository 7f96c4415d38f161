// SPDX-License-Identifier: Apache-2.0
/// @file
/// TOML with recovery after errors.
#include "netlists/toml_document.h"

#include <fmt/format.h>

#include <algorithm>
#include <optional>
#include <vector>

#include "netlists/toml_parser.h"
#include "netlists/toml_slips.h"

namespace sunder::netlists {

namespace {

// The copy that is parsed, with its lines, so that one can be blanked without moving the others.
class Copy {
 public:
  explicit Copy(std::string_view text) : text_(text), starts_{0} {
    for (std::size_t i = text.find('\n'); i != std::string_view::npos; i = text.find('\n', i + 1)) {
      starts_.push_back(i + 1);
    }
  }

  [[nodiscard]] std::string_view text() const noexcept { return text_; }
  [[nodiscard]] std::size_t n_lines() const noexcept { return starts_.size(); }

  // Lines are counted from 1.
  [[nodiscard]] std::string_view line(std::size_t number) const noexcept {
    const std::size_t start = starts_[number - 1];
    const std::size_t end = number < starts_.size() ? starts_[number] - 1 : text_.size();
    return std::string_view(text_).substr(start, end - start);
  }
  [[nodiscard]] bool is_heading(std::size_t number) const noexcept {
    const std::string_view content = trimmed(line(number));
    return !content.empty() && content.front() == '[';
  }
  void blank(std::size_t number) {
    const std::size_t start = starts_[number - 1];
    std::fill_n(text_.begin() + static_cast<std::ptrdiff_t>(start), line(number).size(), ' ');
  }

 private:
  std::string text_;
  std::vector<std::size_t> starts_;
};

// "[circuit.workshop] # note" -> "circuit.workshop"
std::string_view heading_name(std::string_view line) noexcept {
  const std::string_view content = trimmed(line);
  if (content.empty() || content.front() != '[') return {};
  char quote = '\0';
  for (std::size_t i = 1; i < content.size(); ++i) {
    const char c = content[i];
    if (quote != '\0') {
      if (c == quote) quote = '\0';
    } else if (c == '"' || c == '\'') {
      quote = c;
    } else if (c == ']') {
      return trimmed(content.substr(1, i - 1));
    }
  }
  return {};
}

// "board.workshop" -> "board 'workshop'", for the complaint that it stands twice.
std::string element_text(std::string_view heading) {
  const std::size_t dot = heading.find('.');
  if (dot == std::string_view::npos) return fmt::format("table '{}'", heading);
  std::string_view name = trimmed(heading.substr(dot + 1));
  if (name.size() >= 2 && (name.front() == '"' || name.front() == '\'') && name.back() == name.front()) {
    name = name.substr(1, name.size() - 2);
  }
  const std::string_view kind = trimmed(heading.substr(0, dot));
  if (kind == "circuit") return fmt::format("the table of circuits of board '{}'", name);
  return fmt::format("{} '{}'", kind, name);
}

// Whether `line` from `offset` on reads `key =`; the key may stand in quotes.
bool assigns(std::string_view line, std::size_t offset, std::string_view key) noexcept {
  std::string_view rest = line.substr(offset);
  const bool quoted = !rest.empty() && (rest.front() == '"' || rest.front() == '\'');
  if (quoted) rest.remove_prefix(1);
  if (rest.substr(0, key.size()) != key) return false;
  rest.remove_prefix(key.size());
  if (quoted && !rest.empty()) rest.remove_prefix(1);
  rest = trimmed(rest);
  return !rest.empty() && rest.front() == '=';
}

models::Origin place(std::uint32_t file, std::size_t line, std::string_view text, std::size_t offset) {
  return {file, static_cast<std::uint32_t>(line), static_cast<std::uint32_t>(characters(text.substr(0, offset)) + 1)};
}

// Where `key` is assigned in `line` before byte `end`, last (or first) one.
std::optional<std::size_t> assignment(std::string_view line, std::string_view key, std::size_t end, bool last) {
  std::optional<std::size_t> found;
  for (std::size_t i = 0; i < std::min(end, line.size()); ++i) {
    const bool starts = i == 0 || line[i - 1] == ' ' || line[i - 1] == '\t' || line[i - 1] == '{' || line[i - 1] == ',';
    if (!starts || !assigns(line, i, key)) continue;
    found = i;
    if (!last) break;
  }
  return found;
}

std::size_t byte_offset(std::string_view line, std::size_t column) noexcept {
  std::size_t n = 0;
  for (std::size_t i = 0; i < line.size(); ++i) {
    if ((static_cast<unsigned char>(line[i]) & 0xC0U) != 0x80U && ++n == column) return i;
  }
  return line.size();
}

// A key given twice: both places. The parser points at the sign '=' of the second.
void complain_of_key(const Copy& copy, std::size_t number, std::size_t column, std::string_view key, std::uint32_t file,
                     Complaints& complaints) {
  const std::string_view line = copy.line(number);
  const std::size_t end = byte_offset(line, column);
  const std::size_t second = assignment(line, key, end, true).value_or(std::min(end, line.size()));
  std::string_view heading;
  std::size_t first_line = 0;
  std::size_t first = 0;
  if (const auto same = assignment(line, key, second, false); same && *same < second) {
    first_line = number;
    first = *same;
  }
  for (std::size_t n = number - 1; n >= 1; --n) {
    if (copy.is_heading(n)) {
      heading = heading_name(copy.line(n));
      break;
    }
    if (first_line > 0) continue;
    const std::string_view candidate = copy.line(n);
    const std::size_t start = candidate.find_first_not_of(" \t");
    if (start != std::string_view::npos && assigns(candidate, start, key)) {
      first_line = n;
      first = start;
    }
  }
  constexpr std::string_view kCircuits = "circuit.";
  const bool in_line = first_line == number;
  std::string message;
  const bool circuit = !in_line && heading.substr(0, kCircuits.size()) == kCircuits;
  if (circuit) {
    message = fmt::format("circuit '{}/{}' is declared twice", heading.substr(kCircuits.size()), key);
  } else if (heading.empty() || in_line) {
    message = fmt::format("'{}' is given twice", key);
  } else {
    message = fmt::format("'{}' is given twice in {}", key, element_text(heading));
  }
  complaints.error(place(file, number, line, second), characters(key), std::move(message));
  if (first_line > 0) {
    complaints.note(place(file, first_line, copy.line(first_line), first),
                    circuit ? "first declared here" : "first given here");
  }
}

void complain_of_table(const Copy& copy, std::size_t number, std::string_view description, std::uint32_t file,
                       Complaints& complaints) {
  const std::string_view line = copy.line(number);
  const std::string_view name = heading_name(line);
  const std::size_t start = std::min(line.find('['), line.size());
  const models::Origin at = place(file, number, line, start);
  if (line.substr(start, 2) == "[[") {
    complaints.error(at, 2, "elements are tables with a name, not lists of tables", "such as [board.NAME]");
    return;
  }
  if (description.find(" as table") != std::string_view::npos) {
    complaints.error(at, characters(name) + 2, fmt::format("[{}] cannot be a table here: a value has its name", name));
    return;
  }
  complaints.error(at, characters(name) + 2, fmt::format("{} is declared twice", element_text(name)));
  for (std::size_t n = 1; n < number; ++n) {
    if (copy.is_heading(n) && heading_name(copy.line(n)) == name) {
      complaints.note(place(file, n, copy.line(n), copy.line(n).find('[')), "first declared here");
      return;
    }
  }
}

std::string replaced(std::string text, std::string_view from, std::string_view to) {
  for (std::size_t i = text.find(from); i != std::string::npos; i = text.find(from, i + to.size())) {
    text.replace(i, from.size(), to);
  }
  return text;
}

// The parser's sentence in our words.
std::string syntax_sentence(std::string_view description, bool at_line_end) {
  if (description.find("end-of-file") != std::string_view::npos) {
    return "a bracket or a text is still open at the end of the file";
  }
  if (at_line_end && description.find("unescaped control characters") != std::string_view::npos) {
    return "a text is not closed before the end of the line";
  }
  constexpr std::string_view kLead = "Error while parsing ";
  std::string text(description);
  if (description.substr(0, kLead.size()) == kLead) {
    if (const std::size_t colon = text.find(": "); colon != std::string::npos) text = text.substr(colon + 2);
  }
  text = replaced(std::move(text), ", saw ", ", got ");
  text = replaced(std::move(text), "'\\n'", "the end of the line");
  text = replaced(std::move(text), "'\\r'", "the end of the line");
  return text;
}

// Names in other alphabets.
std::string syntax_hint(std::string_view description, std::string_view line, std::size_t offset) {
  const bool beyond_ascii = offset < line.size() && (static_cast<unsigned char>(line[offset]) & 0x80U) != 0;
  if (beyond_ascii) {
    for (const std::string_view name_expected : {" key", "expected ']'", "expected '='"}) {
      if (description.find(name_expected) != std::string_view::npos)
        return "a name with such a character stands in quotes";
    }
  }
  if (description.find("expected ']'") != std::string_view::npos && offset < line.size() && offset > 0 &&
      line[offset - 1] == ' ') {
    const std::string_view name = trimmed(line);
    const std::size_t dot = name.find('.');
    if (dot != std::string_view::npos && name.front() == '[' && name.back() == ']') {
      return fmt::format("a name with blanks stands in quotes: {}.\"{}\"]", name.substr(0, dot),
                         name.substr(dot + 1, name.size() - dot - 2));
    }
  }
  if (description.find("expected comma or closing '}'") != std::string_view::npos)
    return "commas part the values in { }";
  return {};
}

class Converter {
 public:
  explicit Converter(std::uint32_t file) : file_(file) {}

  [[nodiscard]] Value table(const toml::table& from) const {
    Value made;
    made.form = Value::Form::table;
    made.at = at(from.source());
    made.members.reserve(from.size());
    for (const auto& [key, node] : from) {
      Member member;
      member.key = std::string(key.str());
      member.at = at(key.source());
      member.width = std::max(1, characters(key.str()));
      member.value = value(node);
      made.members.push_back(std::move(member));
    }
    // the parser keeps keys by spelling; diagnostics and networks go by place
    std::stable_sort(made.members.begin(), made.members.end(), [](const Member& a, const Member& b) {
      return a.at.line != b.at.line ? a.at.line < b.at.line : a.at.column < b.at.column;
    });
    return made;
  }

 private:
  [[nodiscard]] models::Origin at(const toml::source_region& region) const noexcept {
    return {file_, static_cast<std::uint32_t>(region.begin.line), static_cast<std::uint32_t>(region.begin.column)};
  }

  [[nodiscard]] Value value(const toml::node& node) const {
    if (const toml::table* inner = node.as_table()) return table(*inner);
    Value made;
    made.at = at(node.source());
    const toml::source_region& region = node.source();
    if (region.begin.line == region.end.line && region.end.column > region.begin.column) {
      made.width = static_cast<int>(region.end.column - region.begin.column);
    }
    if (const toml::array* list = node.as_array()) {
      made.form = Value::Form::list;
      for (const toml::node& item : *list) made.items.push_back(value(item));
    } else if (const auto* text = node.as_string()) {
      made.form = Value::Form::text;
      made.text = text->get();
      ++made.at.column;  // behind the quote
      made.width = std::max(1, characters(made.text));
    } else if (const auto* integer = node.as_integer()) {
      made.form = Value::Form::number;
      made.number = static_cast<double>(integer->get());
      made.text = std::to_string(integer->get());
    } else if (const auto* real = node.as_floating_point()) {
      made.form = Value::Form::number;
      made.number = real->get();
      made.text = fmt::format("{}", real->get());
    } else if (const auto* flag = node.as_boolean()) {
      made.form = Value::Form::flag;
      made.flag = flag->get();
      made.text = made.flag ? "true" : "false";
    }
    return made;
  }

  std::uint32_t file_;
};

// Blanks a line, or a whole table when the line is its heading; keeps what is lost.
void leave_out(Copy& copy, std::size_t number, std::string& lost) {
  const bool whole = copy.is_heading(number);
  std::size_t n = number;
  do {
    lost += copy.line(n);
    lost += '\n';
    copy.blank(n);
    ++n;
  } while (whole && n <= copy.n_lines() && !copy.is_heading(n));
}

// A table in { } that does not end in its line: one complaint, and all of its lines are left out.
void complain_of_open_table(Copy& copy, std::size_t number, std::uint32_t file, Complaints& complaints,
                            std::string& lost) {
  const std::string_view line = copy.line(number);
  std::size_t above = number;
  while (above > 1 && !copy.is_heading(above)) --above;
  const std::size_t open = std::min(line.find('{'), line.size());
  complaints.error(place(file, number, line, open), 1, "a table in { } does not end in its line",
                   one_line_hint(heading_name(copy.line(above)), line));
  int depth = 0;
  std::size_t last = number;
  for (std::size_t n = number; n <= copy.n_lines() && (n == number || !copy.is_heading(n)); ++n) {
    depth += open_braces(copy.line(n));
    if (depth > 0) continue;
    last = n;
    break;
  }
  for (std::size_t n = number; n <= last; ++n) {
    lost += fmt::format("{}\n", copy.line(n));
    copy.blank(n);
  }
}

}  // namespace

TomlDocument parse_toml(std::string_view text, std::uint32_t file, Complaints& complaints) {
  TomlDocument document;
  document.root.form = Value::Form::table;
  document.root.at = {file, 1, 1};
  Copy copy(text);
  for (int attempt = 0; attempt <= kMostSyntaxErrors; ++attempt) {
    const toml::parse_result result = toml::parse(copy.text());
    if (result) {
      document.root = Converter(file).table(result.table());
      document.parsed = true;
      return document;
    }
    const toml::parse_error& error = result.error();
    const std::string_view description = error.description();
    std::size_t number = std::clamp<std::size_t>(error.source().begin.line, 1, copy.n_lines());
    const std::size_t column = std::max<std::size_t>(error.source().begin.column, 1);
    constexpr std::string_view kTwice = "cannot redefine existing ";
    const std::size_t twice = description.find(kTwice);
    if (twice != std::string_view::npos && description.find(" as table") != std::string_view::npos) {
      while (number > 1 && !copy.is_heading(number)) --number;  // the place may be behind the heading
    }
    const std::string_view line = copy.line(number);
    if (attempt == kMostSyntaxErrors) {
      complaints.error({file, static_cast<std::uint32_t>(number), static_cast<std::uint32_t>(column)}, 1,
                       fmt::format("the rest was not read after {} errors of form", kMostSyntaxErrors));
      return document;
    }
    if (twice != std::string_view::npos && copy.is_heading(number)) {
      complain_of_table(copy, number, description, file, complaints);
    } else if (twice != std::string_view::npos) {
      const std::size_t open = description.find('\'', twice);
      const std::size_t close = description.rfind('\'');
      const std::string_view key = open < close ? description.substr(open + 1, close - open - 1) : description;
      complain_of_key(copy, number, column, key, file, complaints);
    } else if (const auto slip = find_slip(line)) {
      complaints.error(place(file, number, line, slip->offset), characters(line.substr(slip->offset, slip->length)),
                       slip->message, slip->hint);
    } else if (text_left_open(line) && open_braces(line) > 0) {
      complaints.error({file, static_cast<std::uint32_t>(number), static_cast<std::uint32_t>(column)}, 1,
                       "the quotes of this line do not pair", "every text stands between two quotes");
    } else if (description.find("closing '}'") != std::string_view::npos && open_braces(line) > 0 &&
               line.find('{') != std::string_view::npos) {
      complain_of_open_table(copy, number, file, complaints, document.lost);
      continue;
    } else {
      complaints.error({file, static_cast<std::uint32_t>(number), static_cast<std::uint32_t>(column)}, 1,
                       syntax_sentence(description, column > static_cast<std::size_t>(characters(line))),
                       syntax_hint(description, line, byte_offset(line, column)));
    }
    // An open bracket or quote that runs to the end of the file cannot be mended line by line.
    if (description.find("end-of-file") != std::string_view::npos || trimmed(line).empty()) return document;
    leave_out(copy, number, document.lost);
  }
  return document;
}

}  // namespace sunder::netlists
