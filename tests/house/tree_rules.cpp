#include <algorithm>
#include <fstream>
#include <iterator>
#include <regex>

#include "rules.hpp"

namespace entrain::house {
namespace {

namespace fs = std::filesystem;
using Sentences = std::vector<std::string>;

std::string text_of(const fs::path& path) {
  std::ifstream in(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), std::istreambuf_iterator<char>()};
}

bool is_left_alone(const std::string& name) { return name == ".git" || name == "build" || name == "out"; }

// Written in pieces so that this file does not break its own rule.
const std::regex& unwanted_words() {
  static const std::regex words(std::string("/wo") + "rk/(main|shared|\\.library)|/t" + "mp/|/ro" + "ot/|\\bissue[ _#]*[0-9]|deb\\.deb" + "ian|py" + "pi\\.org|crates\\." +
                                    "io|npm" + "js\\.|proxy\\.go" + "lang|\\bFIX" + "ME\\b|\\bTO" + "DO\\b",
                                std::regex::icase);
  return words;
}

}  // namespace

Sentences wording_violations(const fs::path& root) {
  static const std::set<std::string> text_kinds = {".hpp", ".cpp", ".txt", ".md", ".toml", ".json", ".csv", ".sh", ".osm", ".cmake", ""};
  Sentences found;
  for (auto it = fs::recursive_directory_iterator(root); it != fs::recursive_directory_iterator(); ++it) {
    if (it->is_directory() && is_left_alone(it->path().filename().string())) it.disable_recursion_pending();
    if (!it->is_regular_file() || text_kinds.count(it->path().extension().string()) == 0) continue;
    const std::string text = text_of(it->path());
    if (text.find('\0') != std::string::npos) continue;
    std::smatch match;
    if (std::regex_search(text, match, unwanted_words()))
      found.push_back(fs::relative(it->path(), root).generic_string() + ": says \"" + match.str() + "\"");
  }
  std::sort(found.begin(), found.end());
  return found;
}

Sentences top_level_violations(const fs::path& root) {
  static const std::set<std::string> agreed = {"CMakeLists.txt", "CMakePresets.json", "README.md", "DEVELOPERS.md", "src", "geo", "data", "tests", "examples", "build", "out"};
  Sentences found;
  for (const auto& entry : fs::directory_iterator(root)) {
    const std::string name = entry.path().filename().string();
    if (name.front() != '.' && agreed.count(name) == 0) found.push_back(name + ": is not one of the agreed names at the top");
  }
  std::sort(found.begin(), found.end());
  return found;
}

Sentences registration_violations(const fs::path& root) {
  Sentences found;
  const fs::path cases = root / "tests" / "cli";
  if (!fs::is_directory(cases)) return found;
  const std::string list = text_of(cases / "CMakeLists.txt");
  for (const auto& entry : fs::directory_iterator(cases)) {
    const std::string name = entry.path().filename().string();
    if (entry.is_directory() && !std::regex_search(list, std::regex("(^|\\s)" + name + "(\\s|\\)|$)")))
      found.push_back("tests/cli/" + name + ": is not in tests/cli/CMakeLists.txt, so it never runs");
  }
  std::sort(found.begin(), found.end());
  return found;
}

}  // namespace entrain::house
