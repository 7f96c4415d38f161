// SPDX-License-Identifier: Apache-2.0
#include "tests/support/json.h"

#include <limits>
#include <nlohmann/json.hpp>
#include <ostream>

namespace sunder::support {

struct JsonBuilder {
  static Json from(const nlohmann::json& parsed) {
    Json json;
    if (parsed.is_discarded()) return json;
    json.kind_ = Json::Kind::null;
    if (parsed.is_boolean()) {
      json.kind_ = Json::Kind::flag;
      json.flag_ = parsed.get<bool>();
    } else if (parsed.is_number()) {
      json.kind_ = Json::Kind::number;
      json.number_ = parsed.get<double>();
    } else if (parsed.is_string()) {
      json.kind_ = Json::Kind::text;
      json.text_ = parsed.get<std::string>();
    } else if (parsed.is_array()) {
      json.kind_ = Json::Kind::list;
      for (const nlohmann::json& item : parsed) json.items_.push_back(from(item));
    } else if (parsed.is_object()) {
      json.kind_ = Json::Kind::object;
      for (const auto& [key, value] : parsed.items()) json.members_.emplace(key, from(value));
    }
    return json;
  }
};

Json Json::parse(std::string_view text) { return JsonBuilder::from(nlohmann::json::parse(text, nullptr, false)); }

double Json::number() const noexcept {
  return kind_ == Kind::number ? number_ : std::numeric_limits<double>::quiet_NaN();
}

const Json& Json::operator[](const std::string& key) const {
  static const Json none;
  const auto found = members_.find(key);
  return found == members_.end() ? none : found->second;
}

const Json& Json::operator[](int item) const {
  static const Json none;
  const auto index = static_cast<std::size_t>(item);
  return item < 0 || index >= items_.size() ? none : items_[index];
}

std::ostream& operator<<(std::ostream& out, const Json& json) {
  switch (json.kind_) {
    case Json::Kind::invalid:
      return out << "(nothing)";
    case Json::Kind::null:
      return out << "null";
    case Json::Kind::flag:
      return out << (json.flag_ ? "true" : "false");
    case Json::Kind::number:
      return out << json.number_;
    case Json::Kind::text:
      return out << '"' << json.text_ << '"';
    case Json::Kind::list:
      return out << "[" << json.items_.size() << " items]";
    case Json::Kind::object:
      break;
  }
  return out << "{" << json.members_.size() << " members}";
}

}  // namespace sunder::support
