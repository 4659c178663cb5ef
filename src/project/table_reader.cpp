#include "project/table_reader.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cctype>
#include <cmath>

#include "base/near_name.hpp"
#include "base/number_text.hpp"

namespace entrain::project {
namespace {

constexpr std::size_t alike_shown = 20;
constexpr std::size_t header_search_rows = 50;

std::string lower(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

bool means_nothing(const std::string& text) { return text.empty() || text == "*" || text == "-"; }

std::string wanted_heading(const std::string& name, const std::map<std::string, std::string>& columns) {
  const auto found = columns.find(name);
  return found == columns.end() ? name : heading_name(found->second);
}

std::vector<std::string> names_of(const std::vector<ColumnRule>& rules) {
  std::vector<std::string> names;
  for (const ColumnRule& rule : rules) names.push_back(rule.name);
  return names;
}

std::string not_used(const std::string& name, const std::vector<std::string>& known) {
  const std::string near = did_you_mean(name, known, "");
  return near + (near.empty() ? "" : " ") + "It was not used";
}

// Digits with one comma and nothing else that a number could not have: "12,5".
bool has_decimal_comma(const std::string& text) {
  return std::count(text.begin(), text.end(), ',') == 1 && text.find_first_not_of("0123456789,+-") == std::string::npos;
}

}  // namespace

std::string cell_text(const std::string& cell) {
  std::string_view text = trim(cell);
  if (text.size() >= 3 && text.substr(0, 2) == "=\"" && text.back() == '"') text = text.substr(2, text.size() - 3);
  if (text.size() >= 2 && text.front() == '\'' && text[1] >= '0' && text[1] <= '9') text.remove_prefix(1);
  return std::string(trim(text));
}

std::string heading_name(const std::string& cell) {
  constexpr std::size_t longest = 200;  // no heading is longer; a cell of megabytes is not worth reading
  std::string text = lower(cell_text(cell.size() > longest ? cell.substr(0, longest) : cell));
  if (text.rfind("\xEF\xBB\xBF", 0) == 0) text.erase(0, 3);
  std::replace_if(text.begin(), text.end(), [](char c) { return c == ' ' || c == '-' || c == '\n'; }, '_');
  return text;
}

TableReader::TableReader(const TextGrid& grid, const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns) : m_grid(grid) {
  for (const auto& [ours, theirs] : columns)
    if (const auto names = names_of(rules); std::find(names.begin(), names.end(), ours) == names.end())
      m_notes.push_back(warning(m_grid.source + " [columns]", "a column this table does not have: " + printable(ours), "", not_used(ours, names)));
  find_header(rules, columns);
  if (has_header()) map_columns(rules, columns);
}

std::string TableReader::header_place() const { return fmt::format("{} row {}", m_grid.source, m_header + 1); }

void TableReader::find_header(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns) {
  std::vector<std::string> wanted;
  for (const ColumnRule& rule : rules) wanted.push_back(wanted_heading(rule.name, columns));
  std::size_t best = 0;
  m_header = m_grid.rows.size();
  for (std::size_t r = 0; r < std::min(m_grid.rows.size(), header_search_rows); ++r) {
    std::size_t known = 0;
    for (const std::string& cell : m_grid.rows[r]) known += std::find(wanted.begin(), wanted.end(), heading_name(cell)) != wanted.end();
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
    const std::string name = heading_name(cells[c]);
    if (name.empty()) continue;
    const auto rule = std::find_if(rules.begin(), rules.end(), [&](const ColumnRule& r) { return wanted_heading(r.name, columns) == name; });
    if (rule == rules.end()) m_unknown.push_back(name);
    else if (!m_index.emplace(rule->name, c).second)
      m_problems.push_back(error(header_place(), "column " + printable(cells[c]) + " twice", "each column once", "Remove or rename one of them"));
  }
  report_missing(rules, columns);
  std::vector<std::string> absent;
  for (const ColumnRule& rule : rules)
    if (!has(rule.name)) absent.push_back(rule.name);
  for (const std::string& name : m_unknown)
    m_notes.push_back(warning(header_place(), "unknown column " + printable(name), "", not_used(name, absent)));
}

void TableReader::report_missing(const std::vector<ColumnRule>& rules, const std::map<std::string, std::string>& columns) {
  for (const ColumnRule& rule : rules) {
    if (has(rule.name)) continue;
    const auto mapped = columns.find(rule.name);
    if (mapped != columns.end())
      m_problems.push_back(error(header_place(), "no column " + printable(mapped->second), "the column that [columns] names for " + rule.name, did_you_mean(heading_name(mapped->second), m_unknown, "Correct the name there")));
    else if (rule.required)
      m_problems.push_back(error(header_place(), "no column " + rule.name, "a column of that name",
                                 did_you_mean(rule.name, m_unknown, fmt::format("Add it, or map yours under [columns] as {} = \"...\"", rule.name))));
  }
}

void TableReader::require_one_of(const std::string& a, const std::string& b) {
  if (!has_header() || has(a) || has(b)) return;
  m_problems.push_back(error(header_place(), fmt::format("no column {} or {}", a, b), "one of the two",
                             did_you_mean(a, m_unknown, fmt::format("Add it, or map yours under [columns] as {} = \"...\"", a))));
}

std::vector<std::size_t> TableReader::data_rows() {
  std::vector<std::size_t> rows;
  for (std::size_t r = m_header + 1; r < m_grid.rows.size(); ++r) {
    const auto& cells = m_grid.rows[r];
    const auto filled = std::count_if(cells.begin(), cells.end(), [](const std::string& cell) { return !trim(cell).empty(); });
    const bool is_remark = filled == 1 && m_index.size() >= 3 && !cells.empty() && cells[0].find(' ') != std::string::npos;
    if (is_remark) m_notes.push_back(note(fmt::format("{} row {}", m_grid.source, r + 1), "a line of text, taken as a remark: " + printable(cells[0])));
    else if (filled > 0) rows.push_back(r + 1);
  }
  return rows;
}

std::string TableReader::text(std::size_t row, const std::string& column) const {
  const auto found = m_index.find(column);
  if (found == m_index.end() || found->second >= m_grid.rows[row - 1].size()) return {};
  std::string value = cell_text(m_grid.rows[row - 1][found->second]);
  return means_nothing(value) ? std::string() : value;
}

void TableReader::problem(std::size_t row, const std::string& column, std::string found, std::string expected, std::string mend) {
  if (++m_alike[{column, expected}] > alike_shown) return;
  m_problems.push_back(error(fmt::format("{} row {}, column {}", m_grid.source, row, column), std::move(found), std::move(expected), std::move(mend)));
}

Diagnostics TableReader::take_problems() {
  for (const auto& [kind, times] : m_alike)
    if (times > alike_shown)
      m_problems.push_back(error(fmt::format("{} column {}", m_grid.source, kind.first), fmt::format("{} more rows like the {} above", times - alike_shown, alike_shown), kind.second, "Correct them in the same way"));
  return std::move(m_problems);
}

std::string TableReader::required_text(std::size_t row, const std::string& column) {
  std::string value = text(row, column);
  if (value.empty() && has(column)) problem(row, column, "nothing", "a value", "Fill the cell or remove the row; of merged cells only the first holds the value");
  return value;
}

std::optional<double> TableReader::parsed(std::size_t row, const std::string& column, double least, double most, bool whole) {
  const std::string value = text(row, column);
  if (value.empty()) return std::nullopt;
  const auto number = parse_number(value);
  if (number && *number >= least && *number <= most && (!whole || *number == std::floor(*number))) return number;
  const char* mend = "Correct the cell";
  if (!number && has_decimal_comma(value)) mend = "Write a decimal point, not a comma, and no thousands separator";
  else if (!number && value.find('"') != std::string::npos) mend = "Check the quotes of this row";
  problem(row, column, printable(value), fmt::format("a {}number from {} to {}", whole ? "whole " : "", number_text(least, 2), number_text(most, 2)), mend);
  return std::nullopt;
}

std::optional<double> TableReader::number(std::size_t row, const std::string& column, double least, double most) { return parsed(row, column, least, most, false); }

double TableReader::required_number(std::size_t row, const std::string& column, double least, double most) {
  if (text(row, column).empty()) {
    if (has(column)) problem(row, column, "nothing", fmt::format("a number from {} to {}", number_text(least, 2), number_text(most, 2)), "Fill the cell or remove the row");
    return least;
  }
  return number(row, column, least, most).value_or(least);
}

std::optional<int> TableReader::whole(std::size_t row, const std::string& column, int least, int most) {
  const auto value = parsed(row, column, least, most, true);
  return value ? std::optional<int>(static_cast<int>(*value)) : std::nullopt;
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
  problem(row, column, printable(text(row, column)), "one of " + all, did_you_mean(value, words, "Use one of these words"));
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
