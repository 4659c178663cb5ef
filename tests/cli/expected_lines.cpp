#include "expected_lines.hpp"

#include <regex>
#include <sstream>

namespace entrain::cli_tests {
namespace {

bool line_matches(const std::string& expected, const std::string& line) {
  if (expected.compare(0, 2, "~ ") != 0) return expected == line;
  return std::regex_match(line, std::regex(expected.substr(2)));
}

}  // namespace

std::vector<std::string> split_lines(const std::string& text) {
  std::vector<std::string> lines;
  std::istringstream in(text);
  for (std::string line; std::getline(in, line);) lines.push_back(line);
  return lines;
}

bool lines_match(const std::vector<std::string>& expected, const std::vector<std::string>& lines) {
  // reachable[j]: the expected lines so far can stand for the first j lines
  std::vector<char> reachable(lines.size() + 1, 0);
  reachable[0] = 1;
  for (const auto& want : expected) {
    std::vector<char> next(lines.size() + 1, 0);
    if (want == "...") {
      char any = 0;
      for (std::size_t j = 0; j <= lines.size(); ++j) next[j] = any = static_cast<char>(any | reachable[j]);
    } else {
      for (std::size_t j = 0; j < lines.size(); ++j) next[j + 1] = reachable[j] && line_matches(want, lines[j]);
    }
    reachable = std::move(next);
  }
  return reachable[lines.size()] != 0;
}

}  // namespace entrain::cli_tests
