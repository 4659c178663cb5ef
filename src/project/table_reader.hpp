// A grid of text as rows under named columns: finds the header, maps names, reads cells, collects every problem. Private to this room.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "project/tables.hpp"

namespace entrain::project {

// What a table may hold. `alternatives`: one of them is enough (length_m or length_ft).
struct ColumnRule {
  std::string name;
  bool required = false;
};

class TableReader {
 public:
  TableReader(const TextGrid& grid, const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns);

  bool has_header() const { return m_header < m_grid.rows.size(); }
  bool has(const std::string& column) const { return m_index.count(column) != 0; }
  // Rows below the header that hold anything; 1-based line numbers.
  std::vector<std::size_t> data_rows() const;

  // Cells of a row; empty, "*" and "-" mean nothing. Problems are collected.
  std::string text(std::size_t row, const std::string& column) const;
  std::string required_text(std::size_t row, const std::string& column);
  std::optional<double> number(std::size_t row, const std::string& column, double least, double most);
  double required_number(std::size_t row, const std::string& column, double least, double most);
  std::optional<int> whole(std::size_t row, const std::string& column, int least, int most);
  bool truth(std::size_t row, const std::string& column);
  std::string word(std::size_t row, const std::string& column, const std::vector<std::string>& words);
  // A length or speed that may stand under either of two columns in different units; both and different is an error.
  std::optional<double> in_either_unit(std::size_t row, const std::string& si, const std::string& other, double factor, double least, double most);

  void problem(std::size_t row, const std::string& column, std::string found, std::string expected, std::string mend);
  Diagnostics& problems() { return m_problems; }
  Diagnostics& notes() { return m_notes; }

 private:
  void find_header(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns);
  void map_columns(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns);

  const TextGrid& m_grid;
  std::size_t m_header = 0;
  std::map<std::string, std::size_t> m_index;
  Diagnostics m_problems, m_notes;
};

}  // namespace entrain::project
