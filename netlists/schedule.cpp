// SPDX-License-Identifier: Apache-2.0
/// @file
/// Schedules: rows of a spreadsheet saved as CSV, each a circuit.
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <filesystem>
#include <utility>
#include <variant>

#include "netlists/element_keys.h"
#include "netlists/hints.h"
#include "netlists/parts.h"

namespace sunder::netlists {

namespace {

using models::Key;
using models::ValueForm;

struct Cell {
  std::string text;
  models::Origin at{};
};

using Row = std::vector<Cell>;

// Splits text into rows of cells; quotes may hold separators, line ends and doubled quotes.
class CsvReader {
 public:
  CsvReader(std::string_view text, std::uint32_t file, Complaints& complaints)
      : text_(text), file_(file), complaints_(complaints) {
    constexpr std::string_view kMark = "\xEF\xBB\xBF";  // byte order mark
    if (text_.substr(0, kMark.size()) == kMark) text_.remove_prefix(kMark.size());
    separator_ = find_separator();
  }

  [[nodiscard]] bool at_end() const noexcept { return i_ >= text_.size(); }
  [[nodiscard]] char separator() const noexcept { return separator_; }

  [[nodiscard]] Row next_row() {
    Row row;
    while (true) {
      row.push_back(next_cell());
      if (at_end()) break;
      if (text_[i_] == separator_) {
        step();
        continue;
      }
      if (text_[i_] == '\r') step();
      if (!at_end() && text_[i_] == '\n') step();
      break;
    }
    return row;
  }

 private:
  // The sign that the heading line has most of, outside quotes; one column has none.
  [[nodiscard]] char find_separator() const noexcept {
    constexpr std::array kSigns = {';', '\t', ','};
    std::array<int, kSigns.size()> count{};
    bool quoted = false;
    for (const char c : text_) {
      if (c == '"') quoted = !quoted;
      if (c == '\n' && !quoted) break;
      for (std::size_t k = 0; k < kSigns.size(); ++k) {
        if (!quoted && c == kSigns[k]) ++count[k];
      }
    }
    const auto most = std::max_element(count.begin(), count.end());
    return *most == 0 ? ',' : kSigns[static_cast<std::size_t>(most - count.begin())];
  }

  void step() noexcept {
    const char c = text_[i_++];
    if (c == '\n') {
      ++line_;
      column_ = 1;
    } else if (at_end() || (static_cast<unsigned char>(text_[i_]) & 0xC0U) != 0x80U) {
      ++column_;  // the next byte begins a character
    }
  }

  [[nodiscard]] models::Origin here() const noexcept { return {file_, line_, column_}; }

  [[nodiscard]] bool at_boundary() const noexcept {
    return at_end() || text_[i_] == separator_ || text_[i_] == '\n' || text_[i_] == '\r';
  }

  [[nodiscard]] Cell next_cell() {
    while (!at_end() && (text_[i_] == ' ' || (text_[i_] == '\t' && separator_ != '\t'))) step();
    Cell cell{{}, here()};
    if (!at_end() && text_[i_] == '"') {
      const models::Origin open = here();
      step();
      cell.at = here();
      while (true) {
        if (at_end()) {
          complaints_.error(open, 1, "a quoted cell is not closed");
          return cell;
        }
        if (text_[i_] == '"') {
          step();
          if (at_end() || text_[i_] != '"') break;
        }
        cell.text += text_[i_];
        step();
      }
      if (!trimmed(rest_of_cell()).empty()) complaints_.error(here(), 1, "text stands behind the quotes of a cell");
    } else {
      cell.text = std::string(trimmed(rest_of_cell()));
    }
    while (!at_boundary()) step();
    return cell;
  }

  [[nodiscard]] std::string_view rest_of_cell() const noexcept {
    std::size_t end = i_;
    while (end < text_.size() && text_[end] != separator_ && text_[end] != '\n' && text_[end] != '\r') ++end;
    return text_.substr(i_, end - i_);
  }

  std::string_view text_;
  std::uint32_t file_;
  Complaints& complaints_;
  char separator_ = ',';
  std::size_t i_ = 0;
  std::uint32_t line_ = 1;
  std::uint32_t column_ = 1;
};

struct Column {
  std::string name;  // of the key; "" for one that is not read
  std::string unit;  // behind bare numbers
  const Key* key = nullptr;
  models::Origin at{};
  int width = 1;
};

bool bare_number(std::string_view text) noexcept {
  const std::string_view number = trimmed(text);
  return !number.empty() && number.find_first_not_of("0123456789.+-eE") == std::string_view::npos &&
         number.find_first_of("0123456789") != std::string_view::npos;
}

// "12,5" or "12,5 m": digits, one comma, digits.
bool decimal_comma(std::string_view text) noexcept {
  const std::size_t comma = text.find(',');
  if (comma == std::string_view::npos || comma == 0 || comma + 1 >= text.size()) return false;
  auto digit = [](char c) { return c >= '0' && c <= '9'; };
  return digit(text[comma - 1]) && digit(text[comma + 1]);
}

class ScheduleReader {
 public:
  ScheduleReader(Context& context, int board, std::uint32_t file, std::string_view text)
      : context_(context), board_(board), file_(file), csv_(text, file, context.complaints) {}

  void read() {
    if (!read_headings(csv_.next_row())) return;
    while (!csv_.at_end()) {
      const Row row = csv_.next_row();
      const bool blank =
          std::all_of(row.begin(), row.end(), [](const Cell& cell) { return trimmed(cell.text).empty(); });
      if (!blank) read_row(row);
    }
  }

 private:
  bool read_headings(const Row& row) {
    const models::Kind& kind = *models::find_kind("circuit");
    std::vector<std::string_view> valid = {"way"};
    for (const Key& key : kind.keys) valid.push_back(key.name);
    bool has_way = false;
    for (const Cell& cell : row) {
      Column column;
      column.at = cell.at;
      column.width = std::max(1, characters(cell.text));
      std::string_view name = trimmed(cell.text);
      if (const std::size_t open = name.find('['); open != std::string_view::npos && name.back() == ']') {
        column.unit = std::string(trimmed(name.substr(open + 1, name.size() - open - 2)));
        name = trimmed(name.substr(0, open));
      }
      column.name = std::string(name);
      column.key = models::find_key(kind, name);
      const bool known = name == "way" || column.key != nullptr;
      const bool twice = !name.empty() && std::any_of(columns_.begin(), columns_.end(),
                                                      [&](const Column& other) { return other.name == column.name; });
      if (!name.empty() && !known) {
        std::string hint;
        if (!context_.complaints.full()) {
          const bool way = models::nearest_name(name, valid) == "way";
          hint = way ? std::string("did you mean 'way'?") : unknown_key_hint(kind, name, false);
        }
        context_.complaints.error(cell.at, column.width, fmt::format("unknown column '{}'", name), std::move(hint));
        if (!context_.complaints.full())
          context_.lost += fmt::format("{}\n", meant_key(kind, name));  // not missed in every row
        column.name.clear();
        complete_ = false;
      } else if (twice) {
        context_.complaints.error(cell.at, column.width, fmt::format("column '{}' stands twice", name));
        column.name.clear();
      } else if (!column.unit.empty()) {
        check_unit(column);
      }
      has_way = has_way || column.name == "way";
      columns_.push_back(std::move(column));
    }
    if (!has_way) {
      context_.complaints.error({file_, 1, 1}, 1, "the schedule has no column 'way', which names its circuits",
                                "columns: way and the keys of a circuit, such as \"length [m]\"");
    }
    return has_way;
  }

  void check_unit(Column& column) {
    const bool measured = column.key != nullptr && column.key->form == ValueForm::quantity;
    const bool fits = measured && std::holds_alternative<double>(
                                      models::parse_quantity(fmt::format("1 {}", column.unit), column.key->quantity));
    if (!fits) {
      context_.complaints.error(
          column.at, column.width,
          measured ? fmt::format("unit '{}' does not fit column '{}'", column.unit, column.name)
                   : fmt::format("column '{}' has no unit", column.name),
          measured ? fmt::format("units that fit: {}", models::accepted_units(column.key->quantity)) : std::string{});
      // so that its cells are not complained of as well
      const std::string_view accepted = measured ? models::accepted_units(column.key->quantity) : std::string_view{};
      column.unit = std::string(accepted.substr(0, accepted.find(',')));
    }
  }

  void read_row(const Row& row) {
    Member circuit;
    circuit.value.form = Value::Form::table;
    circuit.at = row.front().at;
    circuit.value.at = circuit.at;
    bool named = false;
    for (std::size_t k = 0; k < row.size(); ++k) {
      const Cell& cell = row[k];
      if (trimmed(cell.text).empty()) continue;
      const int width = std::max(1, characters(cell.text));
      if (k >= columns_.size()) {
        context_.complaints.error(cell.at, width,
                                  fmt::format("this row has more cells than the heading's {}", columns_.size()),
                                  "a text that holds the separator stands in quotes; decimals take a point");
        return;
      }
      Column& column = columns_[k];
      if (column.name.empty()) {
        if (complete_) context_.complaints.error(cell.at, width, fmt::format("column {} has no heading", k + 1));
        continue;
      }
      if (column.name == "way") {
        circuit.key = std::string(trimmed(cell.text));
        circuit.at = cell.at;
        circuit.width = width;
        named = true;
        continue;
      }
      circuit.value.members.push_back(read_cell(cell, column, width));
    }
    if (!named) {
      context_.complaints.error(circuit.at, 1, "this row has no way, the name of its circuit");
      return;
    }
    context_.rows.push_back(std::move(circuit.value));
    // the row must stay where it is, for cables are resolved from it later
    Member placed{std::move(circuit.key), circuit.at, circuit.width, {}};
    read_circuit(context_, board_, placed, context_.rows.back());
  }

  // One complaint a column of bare numbers, at its heading; the first unit that fits then stands for the rest.
  void demand_unit(Column& column, const Cell& cell) {
    const std::string_view accepted = models::accepted_units(column.key->quantity);
    if (accepted.empty() || std::holds_alternative<double>(models::parse_quantity(cell.text, column.key->quantity)))
      return;
    column.unit = std::string(accepted.substr(0, accepted.find(',')));
    context_.complaints.error(
        column.at, column.width, fmt::format("column '{}' has bare numbers and no unit", column.name),
        fmt::format("write the heading as '{} [{}]', or a unit in every cell", column.name, column.unit));
    context_.complaints.note(cell.at, fmt::format("such as '{}' here", cell.text));
  }

  // A cell as the value that the netlist would have.
  Member read_cell(const Cell& cell, Column& column, int width) {
    Member member{column.name, cell.at, width, {}};
    member.value.form = Value::Form::text;
    member.value.at = cell.at;
    member.value.width = width;
    member.value.text = cell.text;
    const bool measured = column.key->form == ValueForm::quantity;
    if ((measured || column.key->form == ValueForm::number) && decimal_comma(cell.text)) {
      std::string with_point = cell.text;
      std::replace(with_point.begin(), with_point.end(), ',', '.');
      context_.complaints.error(cell.at, width,
                                fmt::format("'{}' in column '{}' has a decimal comma", cell.text, column.name),
                                fmt::format("write {}", with_point));
      member.value.text = std::move(with_point);  // so that the key is not missed as well
    }
    if (measured && column.unit.empty() && bare_number(member.value.text)) demand_unit(column, cell);
    if (measured && !column.unit.empty() && bare_number(member.value.text)) {
      member.value.text = fmt::format("{} {}", member.value.text, column.unit);
    }
    return member;
  }

  Context& context_;
  int board_;
  std::uint32_t file_;
  CsvReader csv_;
  std::vector<Column> columns_;
  bool complete_ = true;  // every heading is known
};

}  // namespace

void read_schedule(Context& context, int board, const Value& value) {
  if (value.form != Value::Form::text) {
    context.complaints.error(value.at, value.width,
                             fmt::format("circuits_from is {}; the name of a file is expected", word(value.form)));
    return;
  }
  const std::filesystem::path path = std::filesystem::path(context.folder) / value.text;
  std::string text;
  if (!load_text(context, path.lexically_normal().string(), "schedule file", value.at, value.width, text)) return;
  context.texts.push_back(std::move(text));
  const std::string& kept = context.texts.back();
  const std::uint32_t file = context.complaints.add_file(path.lexically_normal().string(), kept);
  if (!sound_text(context, kept, file, "schedule")) return;
  ScheduleReader(context, board, file, kept).read();
}

}  // namespace sunder::netlists
