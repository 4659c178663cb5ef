// Reads members of a JSON object, collecting every problem with its path and every key nobody asked for. Private to this room.
#pragma once

#include <fmt/format.h>

#include <cmath>
#include <nlohmann/json.hpp>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "base/diagnostic.hpp"

namespace entrain::plan {

struct JsonContext {
  std::string source;
  Diagnostics problems;
  std::vector<std::string> unknown_keys;

  void problem(const std::string& path, std::string found, std::string expected) {
    problems.push_back(error(fmt::format("{} {}", source, path), std::move(found), std::move(expected), "Mend this key in the plan file"));
  }
};

class JsonObject {
 public:
  using Json = nlohmann::json;

  JsonObject(JsonContext& context, const Json& value, std::string path) : m_context(context), m_value(value), m_path(std::move(path)) {
    if (!value.is_object()) m_context.problem(m_path, value.type_name(), "an object");
  }
  JsonObject(const JsonObject&) = delete;
  JsonObject& operator=(const JsonObject&) = delete;
  ~JsonObject() {
    if (!m_value.is_object()) return;
    for (const auto& member : m_value.items())
      if (m_asked.count(member.key()) == 0) m_context.unknown_keys.push_back(path_of(member.key()));
  }

  template <class T>
  void required(const char* key, T& out) {
    if (const Json* member = find(key)) read(*member, path_of(key), out);
    else m_context.problem(path_of(key), "nothing", "this key");
  }
  // Absent or null leaves `out` as it is.
  template <class T>
  void optional(const char* key, T& out) {
    const Json* member = find(key);
    if (member != nullptr && !member->is_null()) read(*member, path_of(key), out);
  }
  template <class T>
  void optional(const char* key, std::optional<T>& out) {
    const Json* member = find(key);
    if (member == nullptr || member->is_null()) return;
    T value{};
    read(*member, path_of(key), value);
    out = std::move(value);
  }
  // Calls `each(element, path)` for every element of the array under `key`.
  template <class Each>
  void list(const char* key, bool is_required, Each each) {
    const Json* member = find(key);
    if (member == nullptr || member->is_null()) {
      if (is_required) m_context.problem(path_of(key), "nothing", "an array");
      return;
    }
    if (!member->is_array()) return m_context.problem(path_of(key), member->type_name(), "an array");
    for (std::size_t i = 0; i < member->size(); ++i) each((*member)[i], fmt::format("{}[{}]", path_of(key), i));
  }
  // Calls `use(object, path)` if the member is there and not null.
  template <class Use>
  void child(const char* key, Use use) {
    const Json* member = find(key);
    if (member != nullptr && !member->is_null()) use(*member, path_of(key));
  }
  // One of `words`, by position in the enumeration.
  template <class Enum>
  void word(const char* key, Enum& out, std::initializer_list<const char*> words) {
    std::string text;
    const std::size_t before = m_context.problems.size();
    const Json* member = find(key);
    if (member == nullptr || member->is_null()) return;
    read(*member, path_of(key), text);
    if (m_context.problems.size() != before) return;
    int position = 0;
    std::string all;
    for (const char* candidate : words) {
      if (text == candidate) {
        out = static_cast<Enum>(position);
        return;
      }
      all += (position++ != 0 ? ", " : "") + std::string(candidate);
    }
    m_context.problem(path_of(key), printable(text), "one of " + all);
  }

  std::string path_of(const std::string& key) const { return m_path.empty() ? key : m_path + "." + key; }

 private:
  const Json* find(const char* key) {
    m_asked.insert(key);
    if (!m_value.is_object()) return nullptr;
    const auto member = m_value.find(key);
    return member == m_value.end() ? nullptr : &*member;
  }

  void read(const Json& value, const std::string& path, double& out) {
    if (value.is_number() && std::isfinite(value.get<double>())) out = value.get<double>();
    else m_context.problem(path, printable(value.dump(-1, ' ', false, Json::error_handler_t::replace)), "a finite number");
  }
  void read(const Json& value, const std::string& path, int& out) {
    const double number = value.is_number() ? value.get<double>() : NAN;
    if (std::isfinite(number) && std::fabs(number) <= 1e9 && number == std::floor(number)) out = static_cast<int>(number);
    else m_context.problem(path, printable(value.dump(-1, ' ', false, Json::error_handler_t::replace)), "a whole number");
  }
  void read(const Json& value, const std::string& path, bool& out) {
    if (value.is_boolean()) out = value.get<bool>();
    else m_context.problem(path, printable(value.dump(-1, ' ', false, Json::error_handler_t::replace)), "true or false");
  }
  void read(const Json& value, const std::string& path, std::string& out) {
    if (value.is_string()) out = value.get<std::string>();
    else m_context.problem(path, printable(value.dump(-1, ' ', false, Json::error_handler_t::replace)), "a text");
  }
  template <class T>
  void read(const Json& value, const std::string& path, std::vector<T>& out) {
    if (!value.is_array()) return m_context.problem(path, value.type_name(), "an array");
    for (std::size_t i = 0; i < value.size(); ++i) {
      T element{};
      read(value[i], fmt::format("{}[{}]", path, i), element);
      out.push_back(std::move(element));
    }
  }
  template <class T>
  void read(const Json& value, const std::string& path, std::map<std::string, T>& out) {
    if (!value.is_object()) return m_context.problem(path, value.type_name(), "an object");
    for (const auto& member : value.items()) read(member.value(), path + "." + member.key(), out[member.key()]);
  }

  JsonContext& m_context;
  const Json& m_value;
  std::string m_path;
  std::set<std::string> m_asked;
};

}  // namespace entrain::plan
