#include "base/diagnostic.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <iterator>

namespace entrain {
namespace {

// Length of the valid UTF-8 sequence at `i`, 0 if there is none.
std::size_t utf8_length(const std::string& text, std::size_t i) {
  const auto byte = [&](std::size_t k) { return static_cast<unsigned char>(text[k]); };
  const unsigned char lead = byte(i);
  const std::size_t length = lead < 0x80 ? 1 : lead >= 0xC2 && lead < 0xE0 ? 2 : lead >= 0xE0 && lead < 0xF0 ? 3 : lead >= 0xF0 && lead < 0xF5 ? 4 : 0;
  if (length == 0 || i + length > text.size()) return 0;
  for (std::size_t k = 1; k < length; ++k)
    if ((byte(i + k) & 0xC0) != 0x80) return 0;
  return length;
}

const char* name(Severity severity) {
  switch (severity) {
    case Severity::error: return "error";
    case Severity::warning: return "warning";
    case Severity::note: return "note";
  }
  return "note";
}

}  // namespace

Diagnostic error(std::string where, std::string found, std::string expected, std::string mend) {
  return {Severity::error, std::move(where), std::move(found), std::move(expected), std::move(mend)};
}

Diagnostic warning(std::string where, std::string found, std::string expected, std::string mend) {
  return {Severity::warning, std::move(where), std::move(found), std::move(expected), std::move(mend)};
}

Diagnostic note(std::string where, std::string found) { return {Severity::note, std::move(where), std::move(found), {}, {}}; }

std::string printable(const std::string& text, std::size_t most) {
  std::string out;
  for (std::size_t i = 0; i < text.size();) {
    if (out.size() >= most) return out + "...";
    const std::size_t length = utf8_length(text, i);
    const unsigned char lead = static_cast<unsigned char>(text[i]);
    if (length == 0 || lead < 0x20 || lead == 0x7F) {
      out += fmt::format("\\x{:02X}", lead);
      ++i;
    } else {
      out.append(text, i, length);
      i += length;
    }
  }
  return out;
}

std::string to_text(const Diagnostic& d) {
  constexpr std::size_t whole = 4000;
  std::string text = fmt::format("{}: {}: {}", name(d.severity), printable(d.where, whole), printable(d.found, whole));
  if (!d.expected.empty()) text += fmt::format("; expected {}", printable(d.expected, whole));
  if (!d.mend.empty()) text += fmt::format(". {}", printable(d.mend, whole));
  return text;
}

bool has_errors(const Diagnostics& diagnostics) {
  return std::any_of(diagnostics.begin(), diagnostics.end(), [](const Diagnostic& d) { return d.severity == Severity::error; });
}

void append(Diagnostics& to, Diagnostics from) {
  to.insert(to.end(), std::make_move_iterator(from.begin()), std::make_move_iterator(from.end()));
}

}  // namespace entrain
