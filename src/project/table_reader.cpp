#include "project/table_reader.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cctype>
#include <cmath>

#include "base/number_text.hpp"

namespace entrain::project {
namespace {

// ="0015" and '0015 are spreadsheet ways to keep a text; blanks around a cell mean nothing.
std::string cleaned(const std::string& cell) {
  std::string_view text = trim(cell);
  if (text.size() >= 3 && text.substr(0, 2) == "=\"" && text.back() == '"') text = text.substr(2, text.size() - 3);
  return std::string(trim(text));
}

std::string lower(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

std::string heading(const std::string& cell) {
  std::string text = lower(cleaned(cell));
  if (text.rfind("\xEF\xBB\xBF", 0) == 0) text.erase(0, 3);
  std::replace(text.begin(), text.end(), ' ', '_');
  return text;
}

bool means_nothing(const std::string& text) { return text.empty() || text == "*" || text == "-"; }

std::string wanted_heading(const std::string& name, const std::map<std::string, std::string>& columns) {
  const auto found = columns.find(name);
  return found == columns.end() ? name : heading(found->second);
}

}  // namespace

TableReader::TableReader(const TextGrid& grid, const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns) : m_grid(grid) {
  find_header(rules, columns);
  if (has_header()) map_columns(rules, columns);
}

void TableReader::find_header(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns) {
  std::size_t best = 0;
  m_header = m_grid.rows.size();
  for (std::size_t r = 0; r < std::min<std::size_t>(m_grid.rows.size(), 50); ++r) {
    std::size_t known = 0;
    for (const std::string& cell : m_grid.rows[r])
      known += std::any_of(rules.begin(), rules.end(), [&](const ColumnRule& rule) { return heading(cell) == wanted_heading(rule.name, columns); });
    if (known > best) best = known, m_header = r;
  }
  if (has_header()) return;
  std::string names;
  for (const ColumnRule& rule : rules)
    if (rule.required) names += (names.empty() ? "" : ", ") + rule.name;
  const bool empty = m_grid.rows.empty();
  m_problems.push_back(error(m_grid.source, empty ? "an empty table" : "no row of column names", "a first row with the columns " + names,
                             empty ? "Fill the table or leave it out of [tables]" : "Add the row of column names, or map yours under [columns]"));
}

void TableReader::map_columns(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns) {
  const auto& cells = m_grid.rows[m_header];
  for (std::size_t c = 0; c < cells.size(); ++c) {
    const std::string name = heading(cells[c]);
    if (name.empty()) continue;
    const auto rule = std::find_if(rules.begin(), rules.end(), [&](const ColumnRule& r) { return wanted_heading(r.name, columns) == name; });
    if (rule == rules.end()) {
      m_notes.push_back(warning(fmt::format("{} row {}", m_grid.source, m_header + 1), "unknown column " + printable(cells[c]), "", "It was not used"));
    } else if (!m_index.emplace(rule->name, c).second) {
      m_problems.push_back(error(fmt::format("{} row {}", m_grid.source, m_header + 1), "column " + printable(cells[c]) + " twice", "each column once", "Remove or rename one of them"));
    }
  }
  for (const ColumnRule& rule : rules)
    if (rule.required && !has(rule.name))
      m_problems.push_back(error(fmt::format("{} row {}", m_grid.source, m_header + 1), "no column " + rule.name, "a column of that name",
                                 fmt::format("Add it, or map yours under [columns] as {} = \"...\"", rule.name)));
}

std::vector<std::size_t> TableReader::data_rows() const {
  std::vector<std::size_t> rows;
  for (std::size_t r = m_header + 1; r < m_grid.rows.size(); ++r) {
    const auto& cells = m_grid.rows[r];
    if (std::any_of(cells.begin(), cells.end(), [](const std::string& cell) { return !trim(cell).empty(); })) rows.push_back(r + 1);
  }
  return rows;
}

std::string TableReader::text(std::size_t row, const std::string& column) const {
  const auto found = m_index.find(column);
  if (found == m_index.end() || found->second >= m_grid.rows[row - 1].size()) return {};
  std::string value = cleaned(m_grid.rows[row - 1][found->second]);
  return means_nothing(value) ? std::string() : value;
}

void TableReader::problem(std::size_t row, const std::string& column, std::string found, std::string expected, std::string mend) {
  m_problems.push_back(error(fmt::format("{} row {}, column {}", m_grid.source, row, column), std::move(found), std::move(expected), std::move(mend)));
}

std::string TableReader::required_text(std::size_t row, const std::string& column) {
  std::string value = text(row, column);
  if (value.empty() && has(column)) problem(row, column, "nothing", "a value", "Fill the cell or remove the row");
  return value;
}

std::optional<double> TableReader::number(std::size_t row, const std::string& column, double least, double most) {
  const std::string value = text(row, column);
  if (value.empty()) return std::nullopt;
  const auto parsed = parse_number(value);
  if (parsed && *parsed >= least && *parsed <= most) return parsed;
  const bool comma = !parsed && value.find(',') != std::string::npos;
  problem(row, column, printable(value), fmt::format("a number from {} to {}", number_text(least, 6), number_text(most, 6)),
          comma ? "Write numbers with a decimal point and no thousands separator" : "Correct the cell");
  return std::nullopt;
}

double TableReader::required_number(std::size_t row, const std::string& column, double least, double most) {
  if (text(row, column).empty()) {
    if (has(column)) problem(row, column, "nothing", fmt::format("a number from {} to {}", number_text(least, 6), number_text(most, 6)), "Fill the cell or remove the row");
    return least;
  }
  return number(row, column, least, most).value_or(least);
}

std::optional<int> TableReader::whole(std::size_t row, const std::string& column, int least, int most) {
  const std::string value = text(row, column);
  if (value.empty()) return std::nullopt;
  const auto parsed = parse_number(value);
  if (parsed && *parsed == std::floor(*parsed) && *parsed >= least && *parsed <= most) return static_cast<int>(*parsed);
  problem(row, column, printable(value), fmt::format("a whole number from {} to {}", least, most), "Correct the cell");
  return std::nullopt;
}

bool TableReader::truth(std::size_t row, const std::string& column) {
  const std::string value = lower(text(row, column));
  if (value.empty()) return false;
  if (value == "yes" || value == "true" || value == "1" || value == "y" || value == "x") return true;
  if (value != "no" && value != "false" && value != "0" && value != "n") problem(row, column, printable(value), "yes or no", "Correct the cell");
  return false;
}

std::string TableReader::word(std::size_t row, const std::string& column, const std::vector<std::string>& words) {
  const std::string value = lower(text(row, column));
  if (value.empty() || std::find(words.begin(), words.end(), value) != words.end()) return value;
  std::string all;
  for (const std::string& candidate : words) all += (all.empty() ? "" : ", ") + candidate;
  problem(row, column, printable(text(row, column)), "one of " + all, "Use one of these words");
  return {};
}

std::optional<double> TableReader::in_either_unit(std::size_t row, const std::string& si, const std::string& other, double factor, double least, double most) {
  const auto a = number(row, si, least, most);
  const auto b = number(row, other, least / factor, most / factor);
  if (!b) return a;
  const double converted = *b * factor;
  if (a && std::fabs(*a - converted) > 0.01 * converted + 0.01)
    problem(row, si + " and " + other, fmt::format("{} and {}", number_text(*a), number_text(*b)), "the same value in both units", "Keep one of the two columns");
  return a ? a : std::optional<double>(converted);
}

}  // namespace entrain::project
