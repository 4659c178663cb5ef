#include "plan/number_lines.hpp"

#include <fmt/format.h>

#include <charconv>

namespace entrain::plan {
namespace {

constexpr std::size_t most_complaints = 100;

bool is_blank(char c) { return c == ' ' || c == '\t' || c == '\r'; }

std::optional<std::int64_t> whole(std::string_view word) {
  std::int64_t value = 0;
  const auto [end, code] = std::from_chars(word.data(), word.data() + word.size(), value);
  if (code != std::errc{} || end != word.data() + word.size()) return std::nullopt;
  return value;
}

}  // namespace

bool NumberLines::next_line() {
  while (!m_text.empty()) {
    const std::size_t end = m_text.find('\n');
    m_line = m_text.substr(0, end);
    m_text = end == std::string_view::npos ? std::string_view{} : m_text.substr(end + 1);
    ++m_line_number;
    while (!m_line.empty() && is_blank(m_line.front())) m_line.remove_prefix(1);
    if (!m_line.empty() && m_line.front() != '#') return true;
  }
  return false;
}

std::string_view NumberLines::word() {
  std::size_t start = 0;
  while (start < m_line.size() && is_blank(m_line[start])) ++start;
  std::size_t end = start;
  while (end < m_line.size() && !is_blank(m_line[end])) ++end;
  const std::string_view found = m_line.substr(start, end - start);
  m_line.remove_prefix(end);
  return found;
}

std::optional<std::int64_t> NumberLines::number(const char* what, std::int64_t least, std::int64_t most) {
  const std::string_view text = word();
  const auto value = whole(text);
  if (value && *value >= least && *value <= most) return value;
  complain(text.empty() ? fmt::format("no {}", what) : fmt::format("{} \"{}\"", what, printable(std::string(text), 40)),
           fmt::format("a whole number from {} to {}", least, most), "Correct the line");
  return std::nullopt;
}

std::optional<std::vector<std::int64_t>> NumberLines::numbers(const char* what, std::int64_t count, std::int64_t most_magnitude, std::optional<std::int64_t> dash) {
  std::vector<std::int64_t> values;
  if (count > 0) values.reserve(static_cast<std::size_t>(std::min<std::int64_t>(count, static_cast<std::int64_t>(m_line.size() / 2 + 1))));
  for (std::string_view text = word(); !text.empty(); text = word()) {
    if (dash && text == "-") {
      values.push_back(*dash);
      continue;
    }
    const auto value = whole(text);
    if (!value || *value > most_magnitude || *value < -most_magnitude) {
      complain(fmt::format("\"{}\" as entry {} of the {}", printable(std::string(text), 40), values.size() + 1, what),
               fmt::format("a whole number of at most {} either way{}", most_magnitude, dash ? ", or - to forbid" : ""), "Correct the entry");
      return std::nullopt;
    }
    values.push_back(*value);
  }
  if (count < 0 || static_cast<std::int64_t>(values.size()) == count) return values;
  complain(fmt::format("{} entries of the {}", values.size(), what), fmt::format("{}", count), "Make the row as long as the header lines say");
  return std::nullopt;
}

void NumberLines::end_line() {
  const std::string_view text = word();
  if (!text.empty()) complain(fmt::format("\"{}\" left over", printable(std::string(text), 40)), "the end of the line", "Remove it");
}

std::string NumberLines::where() const { return fmt::format("{} line {}", m_source, m_line_number); }

void NumberLines::complain(std::string found, std::string expected, std::string mend) {
  if (m_count++ < most_complaints) m_complaints.push_back(error(where(), std::move(found), std::move(expected), std::move(mend)));
}

Diagnostics NumberLines::complaints() const {
  Diagnostics all = m_complaints;
  if (m_count > most_complaints) all.push_back(error(m_source, fmt::format("{} more of this kind", m_count - most_complaints), "none", "Mend the first hundred and try again"));
  return all;
}

void add_number(std::string& text, std::int64_t value) {
  char digits[24];
  const auto end = std::to_chars(digits, digits + sizeof digits, value).ptr;
  text.append(digits, end);
}

}  // namespace entrain::plan
