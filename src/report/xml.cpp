#include "report/xml.hpp"

#include "report/utf8.hpp"

namespace entrain::report {
namespace {

constexpr std::string_view replacement = "\xEF\xBF\xBD";  // U+FFFD

bool is_allowed(const CodePoint& point) {
  if (!point.valid || turns_direction(point.value)) return false;
  if (point.value < 0x20) return point.value == '\t' || point.value == '\n' || point.value == '\r';
  return !(point.value >= 0x7F && point.value <= 0x9F) && (point.value & 0xFFFE) != 0xFFFE && !(point.value >= 0xFDD0 && point.value <= 0xFDEF);
}

std::string_view entity(char32_t value) {
  switch (value) {
    case '&': return "&amp;";
    case '<': return "&lt;";
    case '>': return "&gt;";
    case '"': return "&quot;";
    case '\'': return "&#39;";
    case '\r': return "&#13;";
    default: return {};
  }
}

}  // namespace

std::string escaped(std::string_view text) {
  std::string out;
  out.reserve(text.size() + text.size() / 8);
  for (const CodePoint& point : code_points(text)) {
    const std::string_view named = entity(point.value);
    out += !is_allowed(point) ? replacement : named.empty() ? point.bytes : named;
  }
  return out;
}

XmlWriter::XmlWriter(Dialect dialect) : m_dialect(dialect) {
  m_bytes = dialect == Dialect::html ? "<!DOCTYPE html>\n" : "";
}

XmlWriter::Scope::Scope(XmlWriter& writer, std::string_view name) : m_writer(writer), m_name(name) {}

XmlWriter::Scope::~Scope() {
  m_writer.m_bytes += "</";
  m_writer.m_bytes += m_name;
  m_writer.m_bytes += ">";
}

void XmlWriter::open(std::string_view name, const Attributes& attributes, std::string_view end) {
  m_bytes += '<';
  m_bytes += name;
  for (const auto& [key, value] : attributes) {
    if (key.empty()) continue;
    m_bytes += ' ';
    m_bytes += key;
    m_bytes += "=\"";
    m_bytes += escaped(value);
    m_bytes += '"';
  }
  m_bytes += end;
}

XmlWriter::Scope XmlWriter::element(std::string_view name, const Attributes& attributes) {
  open(name, attributes, ">");
  return Scope(*this, name);
}

void XmlWriter::leaf(std::string_view name, std::string_view text_inside, const Attributes& attributes) {
  const Scope scope = element(name, attributes);
  text(text_inside);
}

void XmlWriter::empty(std::string_view name, const Attributes& attributes) { open(name, attributes, m_dialect == Dialect::html ? ">" : "/>"); }

void XmlWriter::text(std::string_view text) { m_bytes += escaped(text); }

void XmlWriter::line_end() { m_bytes += '\n'; }

void XmlWriter::splice(const Markup& markup) { m_bytes += markup.bytes(); }

void XmlWriter::style_sheet(std::string_view css) {
  m_bytes += "<style>\n";
  m_bytes += css;
  m_bytes += "</style>\n";
}

Markup XmlWriter::take() { return Markup(std::move(m_bytes)); }

}  // namespace entrain::report
