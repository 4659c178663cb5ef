// Reads keys of a TOML table, collecting every problem with line and key and every key nobody asked for. Private to this room.
#pragma once

#include <fmt/format.h>

#include <cmath>
#include <locale>
#include <optional>
#include <set>
#include <sstream>
#include <string>
#include <toml++/toml.h>
#include <vector>

#include "base/diagnostic.hpp"

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
      if (m_asked.count(std::string(key.str())) == 0)
        m_context.notes.push_back(warning(where(node, std::string(key.str())), "a key this version does not know", "", "Check its spelling; it was not used"));
  }

  void problem(const toml::node& node, const std::string& key, std::string found, std::string expected, std::string mend) {
    m_context.problems.push_back(error(where(node, key), std::move(found), std::move(expected), std::move(mend)));
  }
  void missing(const std::string& key, const std::string& what) {
    m_context.problems.push_back(error(fmt::format("{} {}", m_context.file, m_path), "no key " + key, what, fmt::format("Add {} = ...", key)));
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
    problem(*m_table.get(key), key, printable(value), "one of " + all, "Use one of these words");
  }
  bool number(const std::string& key, double& out, double least, double most) {
    const toml::node* node = find(key);
    if (node == nullptr) return false;
    const auto value = node->is_number() ? node->value<double>() : std::nullopt;
    if (value && std::isfinite(*value) && *value >= least && *value <= most) return out = *value, true;
    problem(*node, key, shown(*node), fmt::format("a number from {} to {}", least, most), "Correct the value");
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
    if (array == nullptr || !array->is_array_of_tables()) return problem(*node, key, shown(*node), "a list of tables", fmt::format("Write it as [[{}]]", path_of(key)));
    std::size_t i = 0;
    for (const toml::node& element : *array) use(*element.as_table(), fmt::format("[[{}]] {}", path_of(key), ++i));
  }

  std::string path_of(const std::string& key) const { return m_path.empty() ? key : m_path + "." + key; }
  TomlContext& context() { return m_context; }

  static std::string shown(const toml::node& node) {
    if (const auto value = node.value<std::string>()) return printable(*value);
    std::ostringstream out;
    out.imbue(std::locale::classic());
    if (const auto v = node.as_integer()) out << v->get();
    else if (const auto f = node.as_floating_point()) out << f->get();
    else if (const auto b = node.as_boolean()) out << (b->get() ? "true" : "false");
    else out << "a " << node.type();
    return printable(out.str());
  }
  std::string where(const toml::node& node, const std::string& key) const {
    return fmt::format("{} line {}, {}", m_context.file, node.source().begin.line, path_of(key));
  }

 private:
  TomlContext& m_context;
  const toml::table& m_table;
  std::string m_path;
  std::set<std::string> m_asked;
};

}  // namespace entrain::project
