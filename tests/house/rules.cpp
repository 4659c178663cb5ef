#include "rules.hpp"

#include <algorithm>
#include <fstream>
#include <iterator>
#include <regex>
#include <sstream>

namespace entrain::house {
namespace {

namespace fs = std::filesystem;
using Sentences = std::vector<std::string>;

std::string text_of(const fs::path& path) {
  std::ifstream in(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), std::istreambuf_iterator<char>()};
}

std::vector<std::string> lines_of(const std::string& text) {
  std::vector<std::string> lines;
  std::istringstream in(text);
  for (std::string line; std::getline(in, line);) lines.push_back(line);
  return lines;
}

// The text with comments blanked and string and character literals emptied; line breaks stay.
std::string code_of(const std::string& text) {
  static const std::regex raw_string(R"x(R"([^( ]*)\()x");
  std::string out;
  for (std::size_t i = 0; i < text.size();) {
    const auto starts = [&](const char* what) { return text.compare(i, std::char_traits<char>::length(what), what) == 0; };
    const auto keep_breaks = [&](std::size_t to) {
      for (; i < std::min(to, text.size()); ++i)
        if (text[i] == '\n') out += '\n';
    };
    std::smatch match;
    const std::string head = text.substr(i, 24);
    if (starts("//")) {
      keep_breaks(std::min(text.find('\n', i), text.size()));
    } else if (starts("/*")) {
      keep_breaks(text.find("*/", i) == std::string::npos ? text.size() : text.find("*/", i) + 2);
    } else if (starts("R\"") && std::regex_search(head, match, raw_string, std::regex_constants::match_continuous)) {
      const std::string end = ")" + match[1].str() + "\"";
      const std::size_t at = text.find(end, i);
      out += "\"\"";
      keep_breaks(at == std::string::npos ? text.size() : at + end.size());
    } else if (text[i] == '"' || (text[i] == '\'' && (i == 0 || !std::isalnum(static_cast<unsigned char>(text[i - 1]))))) {
      const char quote = text[i];
      std::size_t end = i + 1;
      while (end < text.size() && text[end] != quote && text[end] != '\n') end += text[end] == '\\' ? 2 : 1;
      out += quote;
      out += quote;
      i = end + 1;
    } else {
      out += text[i++];
    }
  }
  return out;
}

bool starts_with(const std::string& text, const std::string& head) { return text.compare(0, head.size(), head) == 0; }
bool ends_with(const std::string& text, const std::string& tail) { return text.size() >= tail.size() && text.compare(text.size() - tail.size(), tail.size(), tail) == 0; }
bool in_library(const std::string& path) { return (starts_with(path, "src/") && !starts_with(path, "src/cli/")) || starts_with(path, "geo/"); }
bool in_house(const std::string& path) { return starts_with(path, "src/") || starts_with(path, "geo/"); }

std::vector<std::string> included_by(const SourceFile& file) {
  static const std::regex include("^\\s*#\\s*include\\s*\"([^\"]+)\"");
  std::vector<std::string> found;
  std::smatch match;
  for (const auto& line : file.lines)
    if (std::regex_search(line, match, include)) found.push_back(match[1]);
  return found;
}

std::string place(const SourceFile& file, std::size_t index) { return file.path + ":" + std::to_string(index + 1); }

Sentences sorted(Sentences sentences) {
  std::sort(sentences.begin(), sentences.end());
  return sentences;
}

struct Ban {
  std::regex pattern;
  const char* what;
};

void search(const std::vector<SourceFile>& files, const std::vector<Ban>& bans, bool (*concerned)(const std::string&), Sentences& found) {
  for (const auto& file : files) {
    if (!concerned(file.path)) continue;
    for (std::size_t i = 0; i < file.code.size(); ++i)
      for (const auto& ban : bans)
        if (std::regex_search(file.code[i], ban.pattern)) found.push_back(place(file, i) + ": " + ban.what);
  }
}

}  // namespace

std::vector<SourceFile> source_files(const fs::path& root, const std::vector<std::string>& folders) {
  std::vector<SourceFile> files;
  for (const auto& folder : folders) {
    if (!fs::is_directory(root / folder)) continue;
    for (const auto& entry : fs::recursive_directory_iterator(root / folder)) {
      const auto extension = entry.path().extension();
      if (!entry.is_regular_file() || (extension != ".hpp" && extension != ".cpp")) continue;
      const std::string text = text_of(entry.path());
      files.push_back({fs::relative(entry.path(), root).generic_string(), lines_of(text), lines_of(code_of(text))});
    }
  }
  std::sort(files.begin(), files.end(), [](const auto& a, const auto& b) { return a.path < b.path; });
  return files;
}

const std::map<std::string, std::set<std::string>>& allowed_rooms() {
  static const std::set<std::string> numbers = {"base", "network", "demand", "standards", "traffic"};
  static const std::map<std::string, std::set<std::string>> table = {
      {"base", {}},
      {"project", {"base"}},
      {"plan", {"base"}},
      {"network", {"base"}},
      {"demand", {"base", "network", "project"}},
      {"standards", {"base"}},
      {"traffic", {"base"}},
      {"timing", numbers},
      {"coordination/bands", {"base"}},
      {"coordination/offsets", {"base"}},
      {"coordination/links", {"base", "timing", "traffic"}},
      {"evaluation", {"base", "plan", "traffic"}},
      {"drafting",
       {"base", "project", "plan", "network", "demand", "standards", "traffic", "timing", "coordination/bands", "coordination/offsets", "coordination/links",
        "evaluation"}},
      {"review", {"base", "plan"}},
      {"report", {"base", "plan", "evaluation", "review"}},
      {"geo/in", {"base", "project", "network", "demand"}},
      {"geo/out", {"base", "plan", "network"}},
  };
  return table;
}

std::string room_of(const std::string& path) {
  const std::string inside = starts_with(path, "src/") ? path.substr(4) : path;
  if (starts_with(inside, "cli/")) return "cli";
  for (const auto& [room, uses] : allowed_rooms())
    if (starts_with(inside, room + "/")) return room;
  return {};
}

Sentences include_violations(const std::vector<SourceFile>& files) {
  Sentences found;
  std::set<std::string> known;
  for (const auto& file : files) known.insert(file.path);
  for (const auto& file : files) {
    if (!in_house(file.path)) continue;
    const std::string room = room_of(file.path);
    if (room.empty()) found.push_back(file.path + ": lies in no room of the table");
    if (room.empty() || room == "cli") continue;
    for (const auto& name : included_by(file)) {
      const std::string beside = (fs::path(file.path).parent_path() / name).generic_string();
      const std::string target = room_of(name);
      if (target.empty() && known.count(beside) == 0) {
        found.push_back(file.path + ": includes \"" + name + "\", which is in no room");
      } else if (!target.empty() && target != room && allowed_rooms().at(room).count(target) == 0) {
        found.push_back(file.path + ": " + room + " may not include " + target + " (\"" + name + "\")");
      }
    }
  }
  return sorted(found);
}

Sentences review_independence_violations(const std::vector<SourceFile>& files) {
  std::map<std::string, const SourceFile*> by_path;
  for (const auto& file : files) by_path[file.path] = &file;
  Sentences found;
  for (const auto& file : files) {
    if (!starts_with(file.path, "src/review/")) continue;
    std::vector<std::string> open = {file.path};
    std::set<std::string> seen;
    while (!open.empty()) {
      const std::string path = open.back();
      open.pop_back();
      if (!seen.insert(path).second || by_path.count(path) == 0) continue;
      if (path == "src/base/circle.hpp" || path == "src/base/tenths.hpp") found.push_back(file.path + ": reaches " + path + ", which the planner uses");
      for (const auto& name : included_by(*by_path.at(path))) open.push_back(starts_with(name, "geo/") ? name : "src/" + name);
    }
  }
  return sorted(found);
}

Sentences link_violations(const fs::path& root) {
  static const std::regex call(R"(entrain_room\(\s*(\w+)([^)]*)\))");
  static const std::regex uses(R"(\bUSES\b([\w\s]*?)(?:\bLIBRARIES\b|\bSOURCES\b|$))");
  const auto plain = [](std::string room) {
    std::replace(room.begin(), room.end(), '/', '_');
    return room;
  };
  const auto last = [](const std::string& room) { return room.substr(room.rfind('/') + 1); };  // "coordination/bands" is built as "bands"
  std::map<std::string, std::set<std::string>> allowed;
  for (const auto& [room, rooms] : allowed_rooms())
    for (const auto& other : rooms) for (const auto& name : {plain(room), last(room)})
        for (const auto& used : {plain(other), last(other)}) allowed[name].insert(used);
  Sentences found;
  for (const char* folder : {"src", "geo"}) {
    if (!fs::is_directory(root / folder)) continue;
    for (const auto& entry : fs::recursive_directory_iterator(root / folder)) {
      if (entry.path().filename() != "CMakeLists.txt") continue;
      const std::string text = text_of(entry.path());
      for (std::sregex_iterator it(text.begin(), text.end(), call), end; it != end; ++it) {
        const std::string room = (*it)[1], body = (*it)[2];
        std::smatch match;
        if (room == "base" || !std::regex_search(body, match, uses)) continue;
        std::istringstream words(match[1].str());
        for (std::string word; words >> word;)
          if (word != "base" && allowed[room].count(word) == 0)
            found.push_back(fs::relative(entry.path(), root).generic_string() + ": " + room + " may not use " + word);
      }
    }
  }
  return sorted(found);
}

Sentences silence_violations(const std::vector<SourceFile>& files) {
  static const std::vector<Ban> bans = {
      {std::regex(R"(\bstd::(cout|cerr|clog|cin)\b|#\s*include\s*<iostream>)"), "a library does not print"},
      {std::regex(R"(\b(printf|fprintf|puts|fputs|putchar|fputc|perror)\s*\(|\bfmt::print\b)"), "a library does not print"},
      {std::regex(R"((std::|(^|[;{}=,(\s])::|(^|[;{})])\s*)(exit|_Exit|quick_exit|abort|terminate)\s*\()"), "a library does not end the program"},
      {std::regex(R"(\b(getenv|setenv|putenv|secure_getenv|system|popen)\s*\()"), "a library does not read the environment or run commands"},
      {std::regex(R"(\bstd::chrono::(system|steady|high_resolution)_clock\b|\b(clock_gettime|gettimeofday|localtime|gmtime)\s*\(|\btime\s*\(\s*(nullptr|NULL|0|&))"),
       "a library does not read a clock"},
      {std::regex(R"(\bstd::random_device\b|\b(rand|srand|random|drand48)\s*\(\s*\)|\bsrand\s*\()"), "a library takes its seed from the caller"},
      {std::regex(R"(\b(setlocale|std::locale|strtod|strtof|atof|atoi)\b|\bstd::(stod|stof|stold|stoi|stol)\b)"), "numbers are read and written without a locale"},
  };
  Sentences found;
  search(files, bans, in_library, found);
  return sorted(found);
}

Sentences determinism_violations(const std::vector<SourceFile>& files) {
  Sentences found;
  const std::vector<Ban> remainder = {{std::regex(R"(\b(std::)?(fmod|fmodf|remquo)\s*\()"), "remainders of times stand in src/base/circle"}};
  search(files, remainder, [](const std::string& path) { return in_house(path) && !starts_with(path, "src/base/circle") && !starts_with(path, "src/review/"); }, found);
  const std::vector<Ban> unordered = {{std::regex(R"(\bstd::unordered_)"), "an output must not depend on a hash order"}};
  search(files, unordered, [](const std::string& path) { return starts_with(path, "src/report/") || starts_with(path, "src/cli/") || starts_with(path, "src/plan/"); }, found);
  return sorted(found);
}

Sentences header_violations(const std::vector<SourceFile>& files) {
  static const std::regex returns_result(R"(^\s*(inline |static |friend |constexpr |virtual )*Result<.*>\s+\w+\()");
  Sentences found;
  for (const auto& file : files) {
    if (!ends_with(file.path, ".hpp")) continue;
    const bool once = std::any_of(file.lines.begin(), file.lines.end(), [](const std::string& line) { return line == "#pragma once"; });
    if (!once) found.push_back(file.path + ": has no #pragma once");
    for (std::size_t i = 0; i < file.code.size(); ++i) {
      if (!std::regex_search(file.code[i], returns_result)) continue;
      const bool marked_above = i > 0 && file.code[i - 1].find("[[nodiscard]]") != std::string::npos && file.code[i - 1].find(';') == std::string::npos;
      if (!marked_above) found.push_back(place(file, i) + ": returns a Result and is not [[nodiscard]]");
    }
  }
  return sorted(found);
}

Sentences length_violations(const std::vector<SourceFile>& files, std::size_t most) {
  Sentences found;
  for (const auto& file : files)
    if (file.lines.size() > most) found.push_back(file.path + ": " + std::to_string(file.lines.size()) + " lines, at most " + std::to_string(most));
  return sorted(found);
}

}  // namespace entrain::house
