// Expected text of a command test: exact lines, with two kinds of pattern where exact text would say too much.
#pragma once

#include <string>
#include <vector>

namespace entrain::cli_tests {

std::vector<std::string> split_lines(const std::string& text);

// True if `lines` are what `expected` describes. A line "..." stands for any number of lines (also none), a line "~ REGEX" for one line
// that the regular expression (ECMAScript) matches as a whole; every other line stands for itself.
bool lines_match(const std::vector<std::string>& expected, const std::vector<std::string>& lines);

}  // namespace entrain::cli_tests
