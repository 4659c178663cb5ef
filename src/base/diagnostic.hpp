// What is wrong with an input, or worth knowing about it: where, what was found, what was expected, how to mend it.
#pragma once

#include <string>
#include <vector>

namespace entrain {

enum class Severity { error, warning, note };

struct Diagnostic {
  Severity severity = Severity::error;
  std::string where;     // "signals.csv row 7, column lon" | "roads.osm way 120" | "project.toml [[period]] am"
  std::string found;     // the value or the situation, as the user would recognise it
  std::string expected;  // what would have been right; may be empty for notes
  std::string mend;      // what to do; may be empty for notes
  bool operator==(const Diagnostic&) const = default;
};

using Diagnostics = std::vector<Diagnostic>;

Diagnostic error(std::string where, std::string found, std::string expected, std::string mend);
Diagnostic warning(std::string where, std::string found, std::string expected = {}, std::string mend = {});
Diagnostic note(std::string where, std::string found);

// One line: "error: WHERE: found FOUND; expected EXPECTED. MEND". Control characters are shown as \xNN.
std::string to_text(const Diagnostic& diagnostic);
bool has_errors(const Diagnostics& diagnostics);
void append(Diagnostics& to, Diagnostics from);

// `text` with control characters and invalid UTF-8 shown as \xNN and cut to `most` bytes, safe to print.
std::string printable(const std::string& text, std::size_t most = 120);

}  // namespace entrain
