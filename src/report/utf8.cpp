#include "report/utf8.hpp"

namespace entrain::report {
namespace {

unsigned char byte_at(std::string_view text, std::size_t i) { return static_cast<unsigned char>(text[i]); }

std::size_t length_by_lead(unsigned char lead) {
  if (lead < 0x80) return 1;
  if (lead >= 0xC2 && lead < 0xE0) return 2;
  if (lead >= 0xE0 && lead < 0xF0) return 3;
  if (lead >= 0xF0 && lead < 0xF5) return 4;
  return 0;
}

bool is_shortest_scalar(char32_t value, std::size_t length) {
  constexpr char32_t least[] = {0, 0, 0x80, 0x800, 0x10000};
  return value >= least[length] && value <= 0x10FFFF && !(value >= 0xD800 && value <= 0xDFFF);
}

CodePoint code_point_at(std::string_view text, std::size_t i) {
  const unsigned char lead = byte_at(text, i);
  const std::size_t length = length_by_lead(lead);
  const CodePoint broken{lead, text.substr(i, 1), false};
  if (length == 0 || i + length > text.size()) return broken;
  char32_t value = length == 1 ? lead : lead & (0x7Fu >> length);
  for (std::size_t k = 1; k < length; ++k) {
    if ((byte_at(text, i + k) & 0xC0) != 0x80) return broken;
    value = value << 6 | (byte_at(text, i + k) & 0x3Fu);
  }
  return is_shortest_scalar(value, length) ? CodePoint{value, text.substr(i, length), true} : broken;
}

}  // namespace

std::vector<CodePoint> code_points(std::string_view text) {
  std::vector<CodePoint> points;
  points.reserve(text.size());
  for (std::size_t i = 0; i < text.size(); i += points.back().bytes.size()) points.push_back(code_point_at(text, i));
  return points;
}

bool turns_direction(char32_t value) { return (value >= 0x202A && value <= 0x202E) || (value >= 0x2066 && value <= 0x2069); }

bool is_right_to_left(char32_t value) {
  return (value >= 0x0590 && value <= 0x08FF) || (value >= 0xFB1D && value <= 0xFDFF) || (value >= 0xFE70 && value <= 0xFEFC) ||
         (value >= 0x10800 && value <= 0x10FFF) || (value >= 0x1E800 && value <= 0x1EFFF);
}

}  // namespace entrain::report
