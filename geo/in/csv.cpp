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
      for (++m_at; m_at < m_bytes.size(); ++m_at) {
        if (m_bytes[m_at] != '"') text += m_bytes[m_at];
        else if (m_at + 1 < m_bytes.size() && m_bytes[m_at + 1] == '"') text += m_bytes[m_at++];
        else break;
      }
      if (m_at < m_bytes.size()) ++m_at;
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
  std::size_t m_at;
};

}  // namespace

Result<project::TextGrid> read_csv(const std::string& bytes, const std::string& source) {
  if (bytes.size() >= 2 && (bytes.compare(0, 2, "\xFF\xFE") == 0 || bytes.compare(0, 2, "\xFE\xFF") == 0))
    return failure(error(source, "text in UTF-16", "text in UTF-8", "Save the table as CSV in UTF-8"));
  if (bytes.find('\0') != std::string::npos) return failure(error(source, "bytes that are no text", "a table as text", "Check that this is a CSV file, or give it its right ending"));
  const std::size_t start = bytes.compare(0, 3, "\xEF\xBB\xBF") == 0 ? 3 : 0;
  project::TextGrid grid{source, {}};
  if (!CsvReader(bytes, start).read(grid.rows)) return failure(error(source, "more than 5 million cells", "a table of a reasonable size", "Split the table or leave out what is not needed"));
  if (grid.rows.empty()) return failure(error(source, "an empty file", "a table with a row of column names", "Fill the table or leave it out of the project"));
  return grid;
}

}  // namespace entrain::geo
