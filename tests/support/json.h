// SPDX-License-Identifier: Apache-2.0
/// @file
/// JSON as tests read it: parsed once by a library behind this header, so that its heavy header is
/// compiled in one place.
#pragma once

#include <iosfwd>
#include <map>
#include <string>
#include <string_view>
#include <vector>

namespace sunder::support {

class Json {
 public:
  enum class Kind { invalid, null, flag, number, text, list, object };

  /// A text that is not JSON gives Kind::invalid.
  [[nodiscard]] static Json parse(std::string_view text);

  [[nodiscard]] Kind kind() const noexcept { return kind_; }
  [[nodiscard]] bool valid() const noexcept { return kind_ != Kind::invalid; }
  [[nodiscard]] bool is_null() const noexcept { return kind_ == Kind::null; }
  [[nodiscard]] bool is_number() const noexcept { return kind_ == Kind::number; }
  [[nodiscard]] bool contains(const std::string& key) const { return members_.count(key) > 0; }
  [[nodiscard]] std::size_t size() const noexcept { return kind_ == Kind::object ? members_.size() : items_.size(); }

  /// NaN for anything but a number.
  [[nodiscard]] double number() const noexcept;
  /// "" for anything but a text.
  [[nodiscard]] const std::string& text() const noexcept { return text_; }
  [[nodiscard]] bool flag() const noexcept { return flag_; }

  /// A value of kind invalid where there is no such key or item, so that a chain of them is safe.
  [[nodiscard]] const Json& operator[](const std::string& key) const;
  [[nodiscard]] const Json& operator[](const char* key) const { return (*this)[std::string(key)]; }
  [[nodiscard]] const Json& operator[](int item) const;
  [[nodiscard]] const Json& at(const std::string& key) const { return (*this)[key]; }

  [[nodiscard]] auto begin() const noexcept { return items_.begin(); }
  [[nodiscard]] auto end() const noexcept { return items_.end(); }

  friend bool operator==(const Json& json, const char* text) { return json.kind_ == Kind::text && json.text_ == text; }
  friend bool operator==(const Json& json, const std::string& text) {
    return json.kind_ == Kind::text && json.text_ == text;
  }
  friend bool operator==(const Json& json, double number) {
    return json.kind_ == Kind::number && json.number_ == number;
  }
  friend std::ostream& operator<<(std::ostream& out, const Json& json);

 private:
  friend struct JsonBuilder;
  Kind kind_ = Kind::invalid;
  bool flag_ = false;
  double number_ = 0;
  std::string text_;
  std::vector<Json> items_;
  std::map<std::string, Json> members_;
};

}  // namespace sunder::support
