#include "report/csv.hpp"

#include "base/number_text.hpp"
#include "report/utf8.hpp"

namespace entrain::report {
namespace {

// "-5.5" and "-1 %" are values.
bool is_value(std::string_view text) {
  if (text.size() > 2 && text.substr(text.size() - 2) == " %") text.remove_suffix(2);
  return text == "-" || parse_number(text).has_value();
}

bool looks_like_a_formula(std::string_view text) {
  const std::string_view inside = trim(text);
  if (text.empty()) return false;
  const bool starts = std::string_view("=+-@\t\r").find(text.front()) != std::string_view::npos ||
                      (!inside.empty() && std::string_view("=+-@").find(inside.front()) != std::string_view::npos);
  return starts && !is_value(text);
}

std::string cleaned(std::string_view text) {
  std::string out;
  for (const CodePoint& point : code_points(text)) {
    const bool control = point.value < 0x20 && point.value != '\t' && point.value != '\n' && point.value != '\r';
    out += !point.valid || control || point.value == 0x7F || turns_direction(point.value) ? std::string_view("\xEF\xBF\xBD") : point.bytes;
  }
  return out;
}

bool needs_quotes(std::string_view text) { return text.find_first_of(",;\"\r\n\t") != std::string_view::npos || trim(text) != text; }

}  // namespace

std::string csv_cell(std::string_view text) {
  const std::string guarded = looks_like_a_formula(text) ? "'" + cleaned(text) : cleaned(text);
  if (!needs_quotes(guarded)) return guarded;
  std::string out = "\"";
  for (const char c : guarded) out += c == '"' ? std::string("\"\"") : std::string(1, c);
  return out + "\"";
}

std::string csv_row(const std::vector<std::string>& cells) {
  std::string out;
  for (std::size_t i = 0; i < cells.size(); ++i) out += (i == 0 ? "" : ",") + csv_cell(cells[i]);
  return out + "\r\n";
}

}  // namespace entrain::report
