#include "report/sheet_fit.hpp"

#include <algorithm>
#include <cmath>

#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

// Heights and widths in units of the ordinary letters' size (1 rem). The numbers repeat those of sheet_style.
struct Page {
  double width = 0;
};

double lines(const std::string& text, double size, double width) { return std::max(1.0, std::ceil(text_width(text, size) * 1.04 / std::max(2.0, width))); }

double name_height(const Section& head, const Page& page) {
  for (const Block& block : head.blocks)
    if (const auto* words = std::get_if<Section>(&block.content))
      for (const Block& word : words->blocks)
        if (const auto* paragraph = std::get_if<Paragraph>(&word.content); paragraph != nullptr && paragraph->role == "name")
          return 1.73 * lines(paragraph->text, 1.68, page.width - 20);
  return 1.73;
}

double head_height(const Section& head, const Page& page) { return std::max(17.0, 13.2 + name_height(head, page)) + 0.7; }

double notice_height(const Notice& notice, const Page& page) {
  if (notice.role == "quiet") return 1.2 + 1.35 * lines(notice.text + "   " + notice.detail, 1.03, page.width - 2);
  return 1.6 + 2.45 * lines(notice.text, 2.3, page.width - 2) + 1.3 * lines(notice.detail, 1, page.width - 2);
}

double fact_height(const Fact& fact, double width) {
  const double size = fact.role == "big" ? 1.95 : fact.role == "middle" ? 1.3 : 1.0;
  const double label = 0.97 * lines(fact.label, 0.84, width * 0.5);
  return std::max(label, size * (fact.role.empty() ? 1.2 : 1.08) * lines(fact.value + " " + fact.beside, size * 0.92, width * 0.56));
}

double card_height(const Facts& card, double width) {
  double height = 1.7 * lines(card.title, 1.4, width) + 1.0;
  for (const Fact& fact : card.facts) height += fact_height(fact, width);
  return height;
}

double cards_height(const Section& cards, const Page& page) {
  const auto per_row = static_cast<std::size_t>(std::max(1.0, std::floor((page.width + 0.6) / 17.6)));
  double height = 1.2;
  for (std::size_t i = 0; i < cards.blocks.size(); i += per_row) {
    const std::size_t in_row = std::min(per_row, cards.blocks.size());
    double tallest = 0;
    for (std::size_t k = i; k < std::min(i + in_row, cards.blocks.size()); ++k)
      if (const auto* card = std::get_if<Facts>(&cards.blocks[k].content)) tallest = std::max(tallest, card_height(*card, (page.width - 0.6 * static_cast<double>(in_row - 1)) / static_cast<double>(in_row) - 1.4));
    height += tallest + 0.6;
  }
  return height;
}

double cell_width(const Cell& cell, double size) { return text_width(cell.text, size, cell.strong) + (cell.beside.empty() ? 0 : text_width(" " + cell.beside, size * 0.78)) + 0.75; }

double longest_word(const std::string& text, double size) {
  double longest = 0;
  for (std::size_t from = 0; from <= text.size();) {
    const std::size_t to = std::min(text.find(' ', from), text.size());
    longest = std::max(longest, text_width(text.substr(from, to - from), size, true));
    from = to + 1;
  }
  return longest + 0.75;
}

bool is_dense(const Table& table) { return table.role == "phases dense"; }

// What is left for the second column, which alone breaks its lines.
double room_for_movements(const Table& table, const Page& page) {
  double rest = page.width;
  const double letters = is_dense(table) ? 0.98 : 1.12, head = is_dense(table) ? 0.72 : 0.8, less_padding = is_dense(table) ? 0.3 : 0;
  for (std::size_t c = 0; c < table.columns.size(); ++c) {
    if (c == 1) continue;
    double widest = longest_word(table.columns[c].name, head);
    for (const auto& row : table.rows)
      if (c < row.size()) widest = std::max(widest, cell_width(row[c], c == 0 ? 1.5 : letters));
    rest -= widest - less_padding;
  }
  return rest;
}

double phases_height(const Table& table, const Page& page) {
  const double room = std::max(5.0, room_for_movements(table, page));
  double height = 1.9 + 3 * 0.9 + 0.3 + 1.1 * lines(table.note, 0.8, page.width) + 0.7;
  for (const auto& row : table.rows) height += std::max(1.75, 1.04 * lines(row[1].text, 0.92, room - 0.7)) + 0.3;
  return height;
}

double list_height(const List& list, const Page& page) {
  double height = 2.4;
  for (const std::string& item : list.items) height += 0.97 * lines(item, 0.8, page.width - 1.5) + 0.2;
  return height;
}

double table_height(const Table& table, const Page& page) {
  if (table.role.rfind("phases", 0) == 0) return phases_height(table, page);
  return 1.9 + 1.5 + 1.95 * static_cast<double>(table.rows.size());
}

double height_of(const Block& block, const Page& page) {
  if (const auto* section = std::get_if<Section>(&block.content)) return section->role == "head" ? head_height(*section, page) : cards_height(*section, page);
  if (const auto* notice = std::get_if<Notice>(&block.content)) return notice_height(*notice, page);
  if (const auto* table = std::get_if<Table>(&block.content)) return table_height(*table, page);
  if (const auto* list = std::get_if<List>(&block.content)) return list_height(*list, page);
  return 2;
}

bool fits(const Section& front, double letters_pt, double width_mm, double height_mm) {
  const double rem_mm = letters_pt * 25.4 / 72;
  const Page page{width_mm / rem_mm};
  for (const Block& block : front.blocks)
    if (const auto* table = std::get_if<Table>(&block.content); table != nullptr && table->role.rfind("phases", 0) == 0 && room_for_movements(*table, page) < 7.5) return false;
  double height = 0;
  for (const Block& block : front.blocks) height += height_of(block, page);
  return height * rem_mm <= height_mm;
}

}  // namespace

double letters_for_one_page(const Section& front, PageSize page) {
  const double width_mm = page == PageSize::a4 ? 189 : 194.9, height_mm = page == PageSize::a4 ? 274 : 256.4;  // inside margins of 10 mm
  for (double letters = 11.5; letters > 6; letters -= 0.25)
    if (fits(front, letters, width_mm, height_mm)) return letters;
  return 6;
}

}  // namespace entrain::report
