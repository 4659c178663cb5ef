// CSV, terminal text and file names.
#include <algorithm>
#include <set>
#include <string>

#include "report/csv.hpp"
#include "report/document.hpp"
#include "report/text_layout.hpp"
#include "report/utf8.hpp"

namespace entrain::report {
namespace {

std::string with_beside(const Cell& cell) { return cell.beside.empty() ? cell.text : cell.text + " (" + cell.beside + ")"; }

std::vector<std::string> names_of(const Table& table) {
  std::vector<std::string> names;
  for (const Column& column : table.columns) names.push_back(column.name);
  return names;
}

std::vector<std::string> texts_of(const std::vector<Cell>& row) {
  std::vector<std::string> texts;
  for (const Cell& cell : row) texts.push_back(with_beside(cell));
  return texts;
}

std::string row_of(const std::string& block, std::vector<std::string> cells) {
  cells.insert(cells.begin(), block);
  return csv_row(cells);
}

struct Csv {
  std::string& out;
  void operator()(const Heading& heading) const { out += row_of("heading", {heading.text}); }
  void operator()(const Paragraph& paragraph) const { out += row_of("text", {paragraph.text}); }
  void operator()(const Notice& notice) const { out += row_of("notice", {notice.text, notice.detail}); }
  void operator()(const Facts& facts) const {
    for (const Fact& fact : facts.facts) out += row_of(facts.title, fact.beside.empty() ? std::vector{fact.label, fact.value} : std::vector{fact.label, fact.value, fact.beside});
  }
  void operator()(const Table& table) const {
    out += row_of(table.title, names_of(table));
    for (const auto& row : table.rows) out += row_of(table.title, texts_of(row));
    if (!table.note.empty()) out += row_of(table.title, {table.note});
  }
  void operator()(const List& list) const {
    for (const std::string& item : list.items) out += row_of(list.title, {item});
  }
  void operator()(const Figure&) const {}
  void operator()(const Links&) const {}
  void operator()(const Section& section) const {
    for (const Block& block : section.blocks) std::visit(*this, block.content);
  }
};

// Columns of a terminal that a text takes.
std::size_t display_width(const std::string& text) {
  std::size_t width = 0;
  for (const CodePoint& point : code_points(text)) {
    const double share = text_width(point.bytes, 1);
    width += !point.valid ? 4 : share == 0 ? 0 : point.value >= 0x1100 && share > 1 ? 2 : 1;
  }
  return width;
}

std::string safe_for_terminal(const std::string& text) {
  std::string out;
  for (const CodePoint& point : code_points(text)) {
    const bool bad = !point.valid || point.value < 0x20 || (point.value >= 0x7F && point.value <= 0x9F) || turns_direction(point.value);
    out += bad ? std::string_view("\xEF\xBF\xBD") : point.bytes;
  }
  return out;
}

std::string padded(const std::string& text, std::size_t width, Align align) {
  const std::size_t own = display_width(text), gap = width > own ? width - own : 0;
  const std::size_t before = align == Align::left ? 0 : align == Align::right ? gap : gap / 2;
  return std::string(before, ' ') + text + std::string(gap - before, ' ');
}

using TextRows = std::vector<std::vector<std::string>>;

std::size_t longest_word(const std::string& text) {
  std::size_t longest = 0;
  for (std::size_t from = 0; from <= text.size();) {
    const std::size_t to = std::min(text.find(' ', from), text.size());
    longest = std::max(longest, display_width(text.substr(from, to - from)));
    from = to + 1;
  }
  return longest;
}

// As wide as the widest cell, or as the longest word of the header.
std::vector<std::size_t> column_widths(const TextRows& rows, const std::vector<std::string>& names) {
  std::vector<std::size_t> widths;
  for (const std::string& name : names) widths.push_back(longest_word(name));
  for (const auto& row : rows)
    for (std::size_t i = 0; i < row.size() && i < widths.size(); ++i) widths[i] = std::max(widths[i], display_width(row[i]));
  return widths;
}

std::vector<std::string> broken(const std::string& text, std::size_t width) {
  std::vector<std::string> lines(1);
  for (std::size_t from = 0; from <= text.size();) {
    const std::size_t to = std::min(text.find(' ', from), text.size());
    const std::string word = text.substr(from, to - from), longer = lines.back().empty() ? word : lines.back() + " " + word;
    if (display_width(longer) <= width || lines.back().empty()) lines.back() = longer;
    else lines.push_back(word);
    from = to + 1;
  }
  return lines;
}

// The header's names broken at blanks, standing on the rule below them.
TextRows header_rows(const std::vector<std::string>& names, const std::vector<std::size_t>& widths) {
  std::vector<std::vector<std::string>> columns;
  std::size_t height = 0;
  for (std::size_t i = 0; i < names.size(); ++i) {
    columns.push_back(broken(names[i], widths[i]));
    height = std::max(height, columns.back().size());
  }
  TextRows rows(height, std::vector<std::string>(names.size()));
  for (std::size_t i = 0; i < columns.size(); ++i)
    for (std::size_t k = 0; k < columns[i].size(); ++k) rows[height - columns[i].size() + k][i] = columns[i][k];
  return rows;
}

std::string line_of(const std::vector<std::string>& row, const std::vector<std::size_t>& widths, const Table& table) {
  std::string line;
  for (std::size_t i = 0; i < row.size() && i < widths.size(); ++i) line += (i == 0 ? "" : "  ") + padded(row[i], widths[i], table.columns[i].align);
  const auto last = line.find_last_not_of(' ');
  return line.substr(0, last == std::string::npos ? 0 : last + 1) + "\n";
}

bool is_plain(char c) { return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '-' || c == '_'; }

std::string lower(std::string text) {
  for (char& c : text)
    if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
  return text;
}

// Names that some systems keep for devices.
bool is_reserved(const std::string& name) {
  static const std::set<std::string> reserved = {"con", "prn", "aux", "nul", "index"};
  const std::string small = lower(name);
  const bool numbered = small.size() == 4 && (small.substr(0, 3) == "com" || small.substr(0, 3) == "lpt");
  return reserved.count(small) != 0 || numbered;
}

std::string plain_name(const std::string& id) {
  std::string name;
  for (const char c : id.substr(0, 60)) name += is_plain(c) ? c : '_';
  return name.empty() || is_reserved(name) ? "_" + name : name;
}

}  // namespace

std::string csv(const Document& document) {
  std::string out;
  for (const Block& block : document.blocks) std::visit(Csv{out}, block.content);
  return out;
}

std::string csv(const Table& table) {
  std::string out = csv_row(names_of(table));
  for (const auto& row : table.rows) out += csv_row(texts_of(row));
  return out;
}

std::string terminal_text(const Table& table) {
  std::vector<std::string> names = names_of(table);
  for (std::string& name : names) name = safe_for_terminal(name);
  TextRows rows;
  for (const auto& row : table.rows) rows.push_back(texts_of(row));
  for (auto& row : rows)
    for (auto& text : row) text = safe_for_terminal(text);
  const auto widths = column_widths(rows, names);
  std::string out = table.title.empty() ? "" : safe_for_terminal(table.title) + "\n";
  for (const auto& row : header_rows(names, widths)) out += line_of(row, widths, table);
  std::vector<std::string> rules;
  for (const std::size_t width : widths) rules.emplace_back(width, '-');
  out += line_of(rules, widths, table);
  for (const auto& row : rows) out += line_of(row, widths, table);
  return table.note.empty() ? out : out + safe_for_terminal(table.note) + "\n";
}

std::vector<std::string> file_names(const std::vector<std::string>& ids) {
  std::vector<std::string> names;
  std::set<std::string> taken;
  for (const std::string& id : ids) {
    const std::string base = plain_name(id);
    std::string name = base;
    for (int k = 2; !taken.insert(lower(name)).second; ++k) name = base + "_" + std::to_string(k);
    names.push_back(name);
  }
  return names;
}

}  // namespace entrain::report
