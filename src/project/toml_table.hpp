// Reads keys of a TOML table, collecting every problem with line and key and every key nobody asked for. Private to this room.
#pragma once

#include <fmt/format.h>

#include <cmath>
#include <optional>
#include <set>
#include <string>
#include <toml++/toml.h>
#include <vector>

#include "base/diagnostic.hpp"
#include "base/near_name.hpp"
#include "base/number_text.hpp"

namespace entrain::project {

struct TomlContext {
  std::string file;
  Diagnostics problems, notes;
};

class TomlTable {
 public:
  TomlTable(TomlContext& context, const toml::table& table, std::string path) : m_context(context), m_table(table), m_path(std::move(path)) {}
  TomlTable(const TomlTable&) = delete;
  TomlTable& operator=(const TomlTable&) = delete;
  ~TomlTable() {
    for (const auto& [key, node] : m_table)
      if (const std::string name(key.str()); m_asked.count(name) == 0)
        m_context.notes.push_back(warning(where(node, name), "a key this version does not know", "", did_you_mean(name, unused(), "Check its spelling:") + " it was not used"));
  }

  void problem(const toml::node& node, const std::string& key, std::string found, std::string expected, std::string mend) {
    m_context.problems.push_back(error(where(node, key), std::move(found), std::move(expected), std::move(mend)));
  }
  // Silent where the key is there with a value of another kind: that was said already.
  void missing(const std::string& key, const std::string& what) {
    if (const toml::node* node = m_table.get(key); node != nullptr && !node->is_string()) return;
    m_context.problems.push_back(error(m_path.empty() ? m_context.file : m_context.file + " " + m_path, "no key " + key, what, fmt::format("Add {} = ...", key)));
  }
  const toml::node* find(const std::string& key) {
    m_asked.insert(key);
    return m_table.get(key);
  }

  bool text(const std::string& key, std::string& out) {
    const toml::node* node = find(key);
    if (node == nullptr) return false;
    if (const auto value = node->value_exact<std::string>()) return out = *value, true;
    problem(*node, key, shown(*node), "a text in quotes", "Put it in quotes");
    return false;
  }
  // One of `words`, if the key is there.
  void word(const std::string& key, std::string& out, std::initializer_list<const char*> words) {
    std::string value, all;
    if (!text(key, value)) return;
    for (const char* candidate : words) {
      if (value == candidate) {
        out = value;
        return;
      }
      all += (all.empty() ? "" : ", ") + std::string(candidate);
    }
    problem(*m_table.get(key), key, printable(value), "one of " + all, did_you_mean(value, std::vector<std::string>(words.begin(), words.end()), "Use one of these words"));
  }
  bool number(const std::string& key, double& out, double least, double most) {
    const toml::node* node = find(key);
    if (node == nullptr) return false;
    const auto value = node->is_number() ? node->value<double>() : std::nullopt;
    if (value && std::isfinite(*value) && *value >= least && *value <= most) return out = *value, true;
    problem(*node, key, shown(*node), fmt::format("a number from {} to {}", number_text(least), number_text(most)), "Correct the value");
    return false;
  }
  bool whole(const std::string& key, int& out, int least, int most) {
    const toml::node* node = find(key);
    if (node == nullptr) return false;
    const auto value = node->value_exact<std::int64_t>();
    if (value && *value >= least && *value <= most) return out = static_cast<int>(*value), true;
    problem(*node, key, shown(*node), fmt::format("a whole number from {} to {}", least, most), "Correct the value");
    return false;
  }
  void truth(const std::string& key, bool& out) {
    const toml::node* node = find(key);
    if (node == nullptr) return;
    if (const auto value = node->value_exact<bool>()) out = *value;
    else problem(*node, key, shown(*node), "true or false", "Correct the value");
  }
  void texts(const std::string& key, std::vector<std::string>& out) {
    const toml::node* node = find(key);
    if (node == nullptr) return;
    const toml::array* array = node->as_array();
    if (array == nullptr) return problem(*node, key, shown(*node), "a list of texts", "Write it as [\"...\", \"...\"]");
    out.clear();
    for (const toml::node& element : *array) {
      if (const auto value = element.value_exact<std::string>()) out.push_back(*value);
      else problem(element, key, shown(element), "a text in quotes", "Put it in quotes");
    }
  }
  // Calls `use(table, path)` if the key holds a table.
  template <class Use>
  void table(const std::string& key, Use use) {
    const toml::node* node = find(key);
    if (node == nullptr) return;
    if (const toml::table* inner = node->as_table()) use(*inner, path_of(key));
    else problem(*node, key, shown(*node), "a table", fmt::format("Write it as [{}]", path_of(key)));
  }
  // Calls `use(table, path)` for every table of the list under the key.
  template <class Use>
  void tables(const std::string& key, Use use) {
    const toml::node* node = find(key);
    if (node == nullptr) return;
    const toml::array* array = node->as_array();
    if (array == nullptr || (!array->empty() && !array->is_array_of_tables())) return problem(*node, key, shown(*node), "a list of tables", fmt::format("Write it as [[{}]]", key));
    std::size_t i = 0;
    for (const toml::node& element : *array) use(*element.as_table(), fmt::format("{}[[{}]] {}", m_path.empty() ? "" : m_path + " ", key, ++i));
  }

  // "roads.source", "[[corridor]] 2 weights.forward"
  std::string path_of(const std::string& key) const {
    if (m_path.empty()) return key;
    const auto bracket = m_path.rfind("]] ");
    const bool numbered = bracket != std::string::npos && m_path.find_first_not_of("0123456789", bracket + 3) == std::string::npos;
    return m_path + (numbered ? " " : ".") + key;
  }
  TomlContext& context() { return m_context; }

  static std::string shown(const toml::node& node) {
    if (const auto value = node.value<std::string>()) return printable(*value);
    if (const auto v = node.as_integer()) return std::to_string(v->get());
    if (const auto f = node.as_floating_point()) return std::isfinite(f->get()) ? number_text(f->get(), 6) : "no finite number";
    if (const auto b = node.as_boolean()) return b->get() ? "true" : "false";
    if (node.is_table()) return "a table";
    return node.is_array() ? "a list" : "a date or time";
  }
  std::string where(const toml::node& node, const std::string& key) const {
    return fmt::format("{} line {}, {}", m_context.file, node.source().begin.line, printable(path_of(key)));
  }

 private:
  // Known keys that are not there: what a misspelt one may have meant.
  std::vector<std::string> unused() const {
    std::vector<std::string> names;
    for (const std::string& name : m_asked)
      if (!m_table.contains(name)) names.push_back(name);
    return names;
  }

  TomlContext& m_context;
  const toml::table& m_table;
  std::string m_path;
  std::set<std::string> m_asked;
};

}  // namespace entrain::project
