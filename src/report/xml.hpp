// The only place where markup is written: a scoped writer with one escaping routine. Names from inputs can't break out of it.
#pragma once

#include <initializer_list>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

namespace entrain::report {

// `text` for the inside of an element or of a quoted attribute, in XML and HTML alike. & < > " ' become entities. What no document may
// hold (invalid UTF-8, control characters other than tab and line ends, U+FFFE, U+FFFF) and what would turn the text around it
// (direction marks that embed, override or isolate) become U+FFFD. The result is valid UTF-8.
std::string escaped(std::string_view text);

// Finished markup. Only XmlWriter makes it, so that text from inputs is never taken for markup.
class Markup {
 public:
  const std::string& bytes() const { return m_bytes; }

 private:
  friend class XmlWriter;
  explicit Markup(std::string bytes) : m_bytes(std::move(bytes)) {}
  std::string m_bytes;
};

using Attribute = std::pair<std::string_view, std::string>;
using Attributes = std::vector<Attribute>;

enum class Dialect { html, xml };

// Writes elements in order. Element and attribute names are the program's own words; attribute values and texts are escaped.
// An attribute with an empty name is left out.
class XmlWriter {
 public:
  explicit XmlWriter(Dialect dialect);
  XmlWriter(const XmlWriter&) = delete;
  XmlWriter& operator=(const XmlWriter&) = delete;

  // Closes its element when it goes out of scope.
  class [[nodiscard]] Scope {
   public:
    Scope(XmlWriter& writer, std::string_view name);
    Scope(const Scope&) = delete;
    Scope& operator=(const Scope&) = delete;
    ~Scope();

   private:
    XmlWriter& m_writer;
    std::string m_name;
  };

  Scope element(std::string_view name, const Attributes& attributes = {});
  // An element that holds a text alone.
  void leaf(std::string_view name, std::string_view text, const Attributes& attributes = {});
  // An element that holds nothing: <br>, <rect .../>.
  void empty(std::string_view name, const Attributes& attributes = {});
  void text(std::string_view text);
  void line_end();
  void splice(const Markup& markup);
  // Style sheets are written in this project and never hold a text from outside.
  void style_sheet(std::string_view css);
  // The document so far. Call when every scope is closed.
  Markup take();

 private:
  void open(std::string_view name, const Attributes& attributes, std::string_view end);

  Dialect m_dialect;
  std::string m_bytes;
};

}  // namespace entrain::report
