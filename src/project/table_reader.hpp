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
  std::vector<std::size_t> data_rows();

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
  // One of the columns has to be there.
  void require_one_of(const std::string& a, const std::string& b);

  void problem(std::size_t row, const std::string& column, std::string found, std::string expected, std::string mend);
  // What was collected: of many alike (same column, same expectation) the first twenty and how many more.
  Diagnostics take_problems();
  bool has_problems() const { return !m_problems.empty(); }
  Diagnostics& notes() { return m_notes; }

 private:
  void find_header(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns);
  void map_columns(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns);
  void report_missing(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns);
  std::string header_place() const;
  // The number behind a cell, or what is wrong with it.
  std::optional<double> parsed(std::size_t row, const std::string& column, double least, double most, bool whole);

  const TextGrid& m_grid;
  std::size_t m_header = 0;
  std::map<std::string, std::size_t> m_index;
  std::vector<std::string> m_unknown;                                              // headings that no rule knows
  std::map<std::pair<std::string, std::string>, std::size_t> m_alike;              // (column, expected) -> times
  Diagnostics m_problems, m_notes;
};

// The name behind a heading cell: small letters, blanks and hyphens as "_", no spreadsheet quoting.
std::string heading_name(const std::string& cell);
// What a cell holds: no blanks around, ="0015" and '0015 unwrapped.
std::string cell_text(const std::string& cell);

}  // namespace entrain::project
