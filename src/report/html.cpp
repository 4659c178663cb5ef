#include <string>

#include "base/number_text.hpp"
#include "report/document.hpp"
#include "report/style_sheet.hpp"

namespace entrain::report {
namespace {

const char* class_of(Align align) { return align == Align::left ? "" : align == Align::right ? "r" : "c"; }

Attributes with_class(const std::string& words) { return words.empty() ? Attributes{} : Attributes{{"class", words}}; }

// Names may run right to left: each keeps to itself.
void write_own(XmlWriter& writer, const std::string& text) { writer.leaf("bdi", text); }

void write_text_and_beside(XmlWriter& writer, const std::string& text, const std::string& beside) {
  write_own(writer, text);
  if (beside.empty()) return;
  writer.text(" ");
  writer.leaf("small", beside);
}

void write_header(XmlWriter& writer, const Table& table) {
  const auto head = writer.element("thead");
  const auto row = writer.element("tr");
  for (const Column& column : table.columns) {
    const auto cell = writer.element("th", with_class(class_of(column.align)));
    write_own(writer, column.name);
  }
}

// A word that would stretch its column.
bool has_long_word(const std::string& text) {
  std::size_t length = 0;
  for (const char c : text) {
    length = c == ' ' ? 0 : length + 1;
    if (length > 28) return true;
  }
  return false;
}

void write_cell(XmlWriter& writer, const Table& table, const Cell& cell, std::size_t position) {
  std::string words = position < table.columns.size() ? class_of(table.columns[position].align) : "";
  if (cell.strong) words += words.empty() ? "s" : " s";
  if (has_long_word(cell.text)) words += words.empty() ? "long" : " long";
  const auto element = writer.element("td", with_class(words));
  write_text_and_beside(writer, cell.text, cell.beside);
}

void write_rows(XmlWriter& writer, const Table& table) {
  const auto body = writer.element("tbody");
  for (const auto& cells : table.rows) {
    const auto row = writer.element("tr");
    for (std::size_t i = 0; i < cells.size(); ++i) write_cell(writer, table, cells[i], i);
    writer.line_end();
  }
}

struct Html {
  XmlWriter& writer;

  void operator()(const Heading& heading) const {
    const char* names[] = {"h1", "h2", "h3"};
    const auto element = writer.element(names[heading.level < 1 ? 0 : heading.level > 3 ? 2 : heading.level - 1]);
    write_own(writer, heading.text);
  }
  void operator()(const Paragraph& paragraph) const {
    const auto element = writer.element("p", with_class(paragraph.role));
    write_own(writer, paragraph.text);
  }
  void operator()(const Notice& notice) const {
    const auto element = writer.element("div", with_class("notice " + notice.role));
    writer.leaf("strong", notice.text);
    if (!notice.detail.empty()) write_own(writer, notice.detail);
  }
  void operator()(const Facts& facts) const {
    const auto element = writer.element("div", with_class(facts.role));
    if (!facts.title.empty()) (*this)(Heading{3, facts.title});
    const auto list = writer.element("dl", with_class(facts.role == "signed" ? "signed" : ""));
    for (const Fact& fact : facts.facts) {
      const auto label = [&] { writer.leaf("dt", fact.label); };
      label();
      const auto value = writer.element("dd", with_class(fact.role));
      write_text_and_beside(writer, fact.value, fact.beside);
    }
  }
  void operator()(const Table& table) const {
    const auto around = writer.element("div", with_class("wide"));
    {
      const auto element = writer.element("table", with_class(table.role));
      if (!table.title.empty()) writer.leaf("caption", table.title);
      write_header(writer, table);
      writer.line_end();
      write_rows(writer, table);
    }
    if (!table.note.empty()) writer.leaf("p", table.note, with_class("note"));
  }
  void operator()(const List& list) const {
    if (!list.title.empty()) (*this)(Heading{2, list.title});
    const auto element = writer.element("ul", with_class(list.role));
    for (const std::string& item : list.items) {
      const auto entry = writer.element("li");
      write_own(writer, item);
    }
  }
  void operator()(const Figure& figure) const {
    const auto element = writer.element("figure", with_class(figure.role));
    writer.splice(svg(figure.drawing, figure.id));
  }
  void operator()(const Links& links) const {
    if (!links.title.empty()) (*this)(Heading{2, links.title});
    const auto element = writer.element("ul");
    for (const auto& [path, text] : links.targets) {
      const auto entry = writer.element("li");
      writer.leaf("a", text, {{"href", path}});
    }
  }
  void operator()(const Section& section) const {
    const auto element = writer.element("section", with_class(section.role));
    writer.line_end();
    for (const Block& block : section.blocks) std::visit(*this, block.content), writer.line_end();
  }
};

std::string page_rule(const HtmlOptions& options) {
  const std::string size = options.page == PageSize::a4 ? "A4" : "letter";
  return "@page { size: " + size + (options.landscape ? " landscape" : " portrait") + "; margin: 10mm; }\nhtml { font-size: " + number_text(options.letters_pt, 2) + "pt; }\n";
}

}  // namespace

std::string html(const Document& document, const HtmlOptions& options) {
  XmlWriter writer(Dialect::html);
  {
    const auto root = writer.element("html", {{"lang", "en"}});
    {
      const auto head = writer.element("head");
      writer.empty("meta", {{"charset", "utf-8"}});
      writer.empty("meta", {{"name", "viewport"}, {"content", "width=device-width, initial-scale=1"}});
      writer.leaf("title", document.title);
      writer.style_sheet(std::string(common_style) + options.extra_style + page_rule(options));
    }
    writer.line_end();
    const auto body = writer.element("body");
    writer.line_end();
    for (const Block& block : document.blocks) std::visit(Html{writer}, block.content), writer.line_end();
  }
  return writer.take().bytes() + "\n";
}

}  // namespace entrain::report
