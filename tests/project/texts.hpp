// Small projects and tables as text, and messages as text.
#pragma once

#include <string>

#include "project/project.hpp"
#include "project/tables.hpp"

namespace entrain::project::sample {

inline std::string text_of(const Diagnostics& diagnostics) {
  std::string text;
  for (const Diagnostic& d : diagnostics) text += to_text(d) + "\n";
  return text;
}

template <class T>
std::string problems_of(const Result<T>& result) {
  return result ? std::string("none") : text_of(result.error());
}

// Cells separated by commas, one row a line: the plain form of a table.
inline TextGrid grid(const std::string& text, const std::string& source = "t.csv") {
  TextGrid table{source, {}};
  std::string cell;
  std::vector<std::string> row;
  for (const char c : text) {
    if (c == ',' || c == '\n') row.push_back(cell), cell.clear();
    if (c == '\n') table.rows.push_back(row), row.clear();
    if (c != ',' && c != '\n') cell += c;
  }
  if (!cell.empty() || !row.empty()) row.push_back(cell), table.rows.push_back(row);
  return table;
}

inline Result<Noted<Project>> project_of(const std::string& text) { return read_project(text, "folder", "p.toml"); }

}  // namespace entrain::project::sample
