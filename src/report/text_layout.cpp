#include "report/text_layout.hpp"

#include <algorithm>

#include "report/utf8.hpp"

namespace entrain::report {
namespace {

bool is_any_of(char32_t value, std::string_view letters) { return value < 0x80 && letters.find(static_cast<char>(value)) != std::string_view::npos; }

bool has_no_width(char32_t value) {
  return (value >= 0x0300 && value <= 0x036F) || (value >= 0x200B && value <= 0x200F) || turns_direction(value) || (value >= 0xFE00 && value <= 0xFE0F);
}

// Share of the em.
double advance(char32_t value) {
  if (has_no_width(value)) return 0;
  if (is_any_of(value, "il.,:;|!'j ")) return 0.36;
  if (is_any_of(value, "ftr()[]{}/\\-I\"")) return 0.46;
  if (is_any_of(value, "mMW@%")) return 1.0;
  if (is_any_of(value, "wGOQDHNU&")) return 0.84;
  if (value >= 'A' && value <= 'Z') return 0.74;
  if (value < 0x80) return 0.65;
  return value < 0x1100 ? 0.75 : 1.1;
}

bool is_control(const CodePoint& point) { return !point.valid || point.value < 0x20 || (point.value >= 0x7F && point.value <= 0x9F) || turns_direction(point.value); }

std::string shown(const CodePoint& point) {
  if (point.valid && (point.value == '\n' || point.value == '\r' || point.value == '\t')) return " ";
  return is_control(point) ? "\xEF\xBF\xBD" : std::string(point.bytes);
}

std::vector<std::string> words_of(std::string_view text) {
  std::vector<std::string> words(1);
  for (const CodePoint& point : code_points(text)) {
    const std::string piece = shown(point);
    if (piece != " ") words.back() += piece;
    else if (!words.back().empty()) words.emplace_back();
  }
  if (words.back().empty()) words.pop_back();
  return words;
}

// A run of labels that touch each other: pool-adjacent-violators.
struct Block {
  double sum = 0;  // of wanted - position within the block
  double count = 0;
  double centre() const { return sum / count; }
};

}  // namespace

double text_width(std::string_view text, double size, bool strong) {
  double width = 0;
  for (const CodePoint& point : code_points(text)) width += advance(point.valid ? point.value : 0xFFFD);
  return width * size * (strong ? 1.12 : 1.0);
}

std::string fitted(std::string_view text, double size, double width, bool strong) {
  std::string whole, cut;
  double used = 0;
  const double room = width - text_width("\xE2\x80\xA6", size, strong);
  for (const CodePoint& point : code_points(text)) {
    const std::string piece = shown(point);
    whole += piece;
    used += text_width(piece, size, strong);
    if (used <= room) cut = whole;
  }
  return used <= width ? whole : cut + "\xE2\x80\xA6";
}

std::vector<std::string> wrapped(std::string_view text, double size, double width, std::size_t most) {
  std::vector<std::string> lines;
  for (const std::string& word : words_of(text)) {
    const std::string longer = lines.empty() ? word : lines.back() + " " + word;
    if (!lines.empty() && (text_width(longer, size) <= width || lines.size() == most)) lines.back() = longer;
    else lines.push_back(word);
  }
  for (std::string& line : lines) line = fitted(line, size, width);
  return lines;
}

std::string isolated(std::string_view text) {
  const std::vector<CodePoint> points = code_points(text);
  const bool turned = std::any_of(points.begin(), points.end(), [](const CodePoint& p) { return p.valid && is_right_to_left(p.value); });
  // A left-to-right mark on either side: the neighbours keep their places.
  return turned ? "\xE2\x80\x8E" + std::string(text) + "\xE2\x80\x8E" : std::string(text);
}

std::vector<double> spread(const std::vector<double>& wanted, double height, double low, double high) {
  const double count = static_cast<double>(wanted.size());
  if (wanted.empty()) return {};
  const double step = std::min(height, (high - low) / count);
  std::vector<Block> blocks;
  for (std::size_t i = 0; i < wanted.size(); ++i) {
    blocks.push_back({wanted[i] - step * static_cast<double>(i), 1});
    while (blocks.size() > 1 && blocks[blocks.size() - 2].centre() >= blocks.back().centre()) {
      const Block last = blocks.back();
      blocks.pop_back();
      blocks.back().sum += last.sum;
      blocks.back().count += last.count;
    }
  }
  std::vector<double> centres;
  const double first = low + step / 2, last = high - step / 2 - step * (count - 1);
  for (const Block& block : blocks)
    for (double k = 0; k < block.count; ++k)
      centres.push_back(std::clamp(block.centre(), first, std::max(first, last)) + step * static_cast<double>(centres.size()));
  return centres;
}

bool LabelPlacer::is_free(const Box& box, double margin) const {
  return is_inside(box, m_frame) && std::none_of(m_taken.begin(), m_taken.end(), [&](const Box& other) { return overlap(box, other, margin); });
}

int LabelPlacer::place(const std::vector<Box>& candidates, double margin) {
  for (std::size_t i = 0; i < candidates.size(); ++i) {
    if (!is_free(candidates[i], margin)) continue;
    m_taken.push_back(candidates[i]);
    return static_cast<int>(i);
  }
  return -1;
}

}  // namespace entrain::report
