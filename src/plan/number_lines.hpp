// Line-by-line text of words and whole numbers: what the text forms of offset problems and certificates share.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "base/diagnostic.hpp"

namespace entrain::plan {

// Walks over the lines of a text and over the words of the current line.
class NumberLines {
 public:
  NumberLines(std::string_view text, std::string source) : m_text(text), m_source(std::move(source)) {}

  // Moves to the next line that holds something and does not start with #. False at the end.
  bool next_line();
  // The next word of the line; empty at its end.
  std::string_view word();
  // The next word as a whole number within the limits; a complaint and nothing otherwise.
  std::optional<std::int64_t> number(const char* what, std::int64_t least, std::int64_t most);
  // All further words as whole numbers; with `dash`, "-" stands for that value. A complaint and nothing if one is not, or the count is not
  // `count` (-1: any).
  std::optional<std::vector<std::int64_t>> numbers(const char* what, std::int64_t count, std::int64_t most_magnitude, std::optional<std::int64_t> dash = {});
  // A complaint if words are left over.
  void end_line();

  void complain(std::string found, std::string expected, std::string mend);
  std::string where() const;
  bool complained() const { return m_count > 0; }
  // Everything that was wrong: the first hundred, then how many more.
  Diagnostics complaints() const;

 private:
  std::string_view m_text, m_line;
  std::string m_source;
  std::size_t m_line_number = 0, m_count = 0;
  Diagnostics m_complaints;
};

void add_number(std::string& text, std::int64_t value);

}  // namespace entrain::plan
