#include <fmt/format.h>

#include <algorithm>

#include "geo/in/table.hpp"

namespace entrain::geo {
namespace {

constexpr std::size_t most_cells = 5'000'000;

// The separator that the first line with any holds most often outside quotes.
char separator_of(const std::string& bytes) {
  std::size_t commas = 0, semicolons = 0, tabs = 0;
  bool quoted = false;
  for (std::size_t i = 0; i < std::min<std::size_t>(bytes.size(), 65536); ++i) {
    const char c = bytes[i];
    if (c == '"') quoted = !quoted;
    if (quoted) continue;
    commas += c == ',', semicolons += c == ';', tabs += c == '\t';
    if (c == '\n' && commas + semicolons + tabs > 0) break;
  }
  if (tabs > commas && tabs > semicolons) return '\t';
  return semicolons > commas ? ';' : ',';
}

class CsvReader {
 public:
  CsvReader(const std::string& bytes, std::size_t start) : m_bytes(bytes), m_separator(separator_of(bytes)), m_at(start) {}

  // 1-based line of a quotation mark that is never closed; 0: none. Rows behind it would be lost in one cell.
  std::size_t open_quote_line() const { return m_open_quote == std::string::npos ? 0 : 1 + static_cast<std::size_t>(std::count(m_bytes.begin(), m_bytes.begin() + static_cast<std::ptrdiff_t>(m_open_quote), '\n')); }

  // False when there are too many cells.
  bool read(std::vector<std::vector<std::string>>& rows) {
    std::size_t cells = 0;
    while (m_at < m_bytes.size()) {
      rows.emplace_back();
      do {
        rows.back().push_back(cell());
        if (++cells > most_cells) return false;
      } while (m_at < m_bytes.size() && m_bytes[m_at] == m_separator && ++m_at <= m_bytes.size());
      skip_line_end();
    }
    return true;
  }

 private:
  std::string cell() {
    std::string text;
    if (m_at < m_bytes.size() && m_bytes[m_at] == '"') {
      const std::size_t start = m_at;
      for (++m_at; m_at < m_bytes.size(); ++m_at) {
        if (m_bytes[m_at] != '"') text += m_bytes[m_at];
        else if (m_at + 1 < m_bytes.size() && m_bytes[m_at + 1] == '"') text += m_bytes[m_at++];
        else break;
      }
      if (m_at < m_bytes.size()) ++m_at;
      else if (m_open_quote == std::string::npos) m_open_quote = start;
    }
    while (m_at < m_bytes.size() && m_bytes[m_at] != m_separator && m_bytes[m_at] != '\n' && m_bytes[m_at] != '\r') text += m_bytes[m_at++];
    return text;
  }
  void skip_line_end() {
    if (m_at < m_bytes.size() && m_bytes[m_at] == '\r') ++m_at;
    if (m_at < m_bytes.size() && m_bytes[m_at] == '\n') ++m_at;
  }

  const std::string& m_bytes;
  char m_separator;
  std::size_t m_at, m_open_quote = std::string::npos;
};

// Separators outside quotes: refuses a bomb before it fills the memory.
std::size_t separators(const std::string& bytes, char separator) {
  std::size_t count = 0;
  bool quoted = false;
  for (const char c : bytes) {
    quoted = quoted != (c == '"');
    count += !quoted && c == separator;
  }
  return count;
}

// 1-based line of the first bytes that are no UTF-8, 0 if there are none.
std::size_t line_of_no_utf8(const std::string& bytes) {
  std::size_t line = 1;
  for (std::size_t i = 0; i < bytes.size(); ++i) {
    const unsigned char lead = static_cast<unsigned char>(bytes[i]);
    line += lead == '\n';
    if (lead < 0x80) continue;
    const std::size_t more = lead >= 0xC2 && lead < 0xE0 ? 1 : lead >= 0xE0 && lead < 0xF0 ? 2 : lead >= 0xF0 && lead < 0xF5 ? 3 : 0;
    if (more == 0 || i + more >= bytes.size()) return line;
    for (std::size_t k = 1; k <= more; ++k)
      if ((static_cast<unsigned char>(bytes[i + k]) & 0xC0) != 0x80) return line;
    i += more;
  }
  return 0;
}

}  // namespace

Result<project::TextGrid> read_csv(const std::string& bytes, const std::string& source) {
  if (bytes.size() >= 2 && (bytes.compare(0, 2, "\xFF\xFE") == 0 || bytes.compare(0, 2, "\xFE\xFF") == 0))
    return failure(error(source, "text in UTF-16", "text in UTF-8", "Save the table as CSV in UTF-8"));
  if (bytes.find('\0') != std::string::npos) return failure(error(source, "bytes that are no text", "a table as text", "Check that this is a CSV file, or give it its right ending"));
  const std::size_t start = bytes.compare(0, 3, "\xEF\xBB\xBF") == 0 ? 3 : 0;
  if (const std::size_t line = line_of_no_utf8(bytes); line > 0) return failure(error(fmt::format("{} line {}", source, line), "bytes that are no UTF-8", "text in UTF-8", "Save the table as CSV in UTF-8"));
  project::TextGrid grid{source, {}};
  CsvReader reader(bytes, start);
  if (separators(bytes, separator_of(bytes)) > most_cells || !reader.read(grid.rows)) return failure(error(source, "more than 5 million cells", "a table of a reasonable size", "Split the table or leave out what is not needed"));
  if (const std::size_t line = reader.open_quote_line(); line > 0)
    return failure(error(fmt::format("{} line {}", source, line), "a quotation mark that is never closed", "a second one at the end of the cell", "Close or remove it"));
  if (grid.rows.empty()) return failure(error(source, "an empty file", "a table with a row of column names", "Fill the table or leave it out of the project"));
  return grid;
}

}  // namespace entrain::geo
