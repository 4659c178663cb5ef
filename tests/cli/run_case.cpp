// Runs one command test: a folder of plain files. In a copy of the folder it runs the program with the arguments in `command`
// ({source} stands for the project's folder; several lines run one after another, all but the last must exit with 0; "$ ..." is a line for the
// shell) and compares
//   expected_exit   the exit code
//   stdout, stderr  the text (see expected_lines.hpp). No stderr file: it must be empty. No stdout file: it must be empty unless the exit code is 0
//   files           every file the command leaves behind, one a line ("out/..." : anything below out). No such file: it leaves nothing
//   contains        lines "FILE REGEX": the file must hold a match
//   same            lines "FILE FILE": both must hold the same bytes
//   prepare         a bash script that makes inputs too large or too odd to keep
// Files that were there before must be unchanged. With --accept as last argument the outcome becomes the expectation: look at it before keeping it.
#include <stdlib.h>
#include <sys/wait.h>

#include <cstdio>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <iterator>
#include <map>
#include <regex>
#include <set>
#include <string>
#include <vector>

#include "expected_lines.hpp"

namespace fs = std::filesystem;
using entrain::cli_tests::lines_match;
using entrain::cli_tests::split_lines;

namespace {

std::string text_of(const fs::path& path) {
  std::ifstream in(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), std::istreambuf_iterator<char>()};
}

void write(const fs::path& path, const std::string& text) { std::ofstream(path, std::ios::binary) << text; }

std::string replaced(std::string text, const std::string& what, const std::string& by) {
  for (std::size_t at = text.find(what); at != std::string::npos; at = text.find(what, at + by.size())) text.replace(at, what.size(), by);
  return text;
}

std::string quoted(const std::string& word) { return "'" + replaced(word, "'", "'\\''") + "'"; }

struct Case {
  std::string program;
  fs::path folder, source, scratch;
  bool accept = false;
};

struct Outcome {
  int exit_code = 0;
  std::string out, err;
  std::vector<std::string> new_files, changed_files;
};

const std::set<std::string>& own_files() {
  static const std::set<std::string> names = {"command", "expected_exit", "stdout", "stderr", "files", "contains", "same", "prepare"};
  return names;
}

std::map<std::string, std::string> snapshot(const fs::path& folder) {
  std::map<std::string, std::string> files;
  for (const auto& entry : fs::recursive_directory_iterator(folder))
    if (entry.is_regular_file()) files[fs::relative(entry.path(), folder).generic_string()] = text_of(entry.path());
  return files;
}

int shell(const fs::path& folder, const std::string& line) {
  const int status = std::system(("cd " + quoted(folder.string()) + " && " + line).c_str());
  return WIFEXITED(status) ? WEXITSTATUS(status) : 1000;
}

std::vector<std::string> commands_of(const Case& test) {
  std::vector<std::string> lines;
  for (const auto& line : split_lines(text_of(test.folder / "command")))
    if (!line.empty() && line[0] != '#') lines.push_back(replaced(line, "{source}", quoted(test.source.string())));
  return lines;
}

std::string shown(const Case& test, const std::string& text) { return replaced(text, test.source.string(), "{source}"); }

Outcome run(const Case& test) {
  const fs::path inside = test.scratch / "case";
  fs::create_directories(inside);
  for (const auto& entry : fs::directory_iterator(test.folder))
    if (own_files().count(entry.path().filename().string()) == 0) fs::copy(entry.path(), inside / entry.path().filename(), fs::copy_options::recursive);
  if (fs::exists(test.folder / "prepare") && shell(inside, "ENTRAIN_SOURCE=" + quoted(test.source.string()) + " bash -eu " + quoted((test.folder / "prepare").string())) != 0)
    return {1001, "", "prepare failed", {}, {}};
  const auto before = snapshot(inside);
  Outcome outcome;
  const auto lines = commands_of(test);
  for (const auto& line : lines) {
    const std::string command = line.compare(0, 2, "$ ") == 0 ? "( " + line.substr(2) + " )" : quoted(test.program) + " " + line;
    outcome.exit_code = shell(inside, command + " </dev/null >../stdout 2>../stderr");
    if (outcome.exit_code != 0 && &line != &lines.back()) break;
  }
  outcome.out = shown(test, text_of(test.scratch / "stdout"));
  outcome.err = shown(test, text_of(test.scratch / "stderr"));
  const auto after = snapshot(inside);
  for (const auto& [name, text] : after)
    if (before.count(name) == 0) outcome.new_files.push_back(name);
  for (const auto& [name, text] : before)
    if (after.count(name) == 0 || after.at(name) != text) outcome.changed_files.push_back(name);
  return outcome;
}

bool complain(const std::string& what, const std::string& expected, const std::string& found) {
  std::cout << "--- " << what << ", expected:\n" << expected << "--- found:\n" << found << "---\n";
  return false;
}

std::string joined(const std::vector<std::string>& lines) {
  std::string text;
  for (const auto& line : lines) text += line + "\n";
  return text;
}

bool check_text(const Case& test, const char* name, const std::string& found, bool must_be_silent) {
  const fs::path file = test.folder / name;
  if (!fs::exists(file)) return !must_be_silent || found.empty() || complain(name, "", found);
  const std::string expected = text_of(file);
  return lines_match(split_lines(expected), split_lines(found)) || complain(name, expected, found);
}

bool check_files(const Case& test, const Outcome& outcome) {
  const auto wanted = split_lines(text_of(test.folder / "files"));
  std::vector<std::string> below, left;
  std::set<std::string> missing;
  for (const auto& line : wanted) {
    const bool open = line.size() > 4 && line.compare(line.size() - 4, 4, "/...") == 0;
    if (open) below.push_back(line.substr(0, line.size() - 3));
    else if (!line.empty()) missing.insert(line);
  }
  for (const auto& name : outcome.new_files) {
    bool known = missing.erase(name) > 0;
    for (const auto& folder : below) known = known || name.compare(0, folder.size(), folder) == 0;
    if (!known || name.find(".part") != std::string::npos) left.push_back(name);
  }
  if (left.empty() && missing.empty() && outcome.changed_files.empty()) return true;
  return complain("files", joined(wanted), joined(outcome.new_files) + (outcome.changed_files.empty() ? "" : "changed: " + joined(outcome.changed_files)));
}

bool check_contents(const Case& test) {
  bool good = true;
  for (const auto& line : split_lines(text_of(test.folder / "contains"))) {
    const std::size_t blank = line.find(' ');
    if (line.empty() || blank == std::string::npos) continue;
    const std::string text = text_of(test.scratch / "case" / line.substr(0, blank));
    if (!std::regex_search(text, std::regex(line.substr(blank + 1)))) good = complain("contains", line + "\n", text.substr(0, 2000) + "\n");
  }
  return good;
}

bool check_same(const Case& test) {
  bool good = true;
  for (const auto& line : split_lines(text_of(test.folder / "same"))) {
    const fs::path inside = test.scratch / "case";
    const std::size_t blank = line.find(' ');
    if (line.empty() || blank == std::string::npos) continue;
    const std::string a = text_of(inside / line.substr(0, blank)), b = text_of(inside / line.substr(blank + 1));
    if (a.empty() || a != b) good = complain("same", line + "\n", a.empty() ? "the first is missing or empty\n" : "different bytes\n");
  }
  return good;
}

bool check(const Case& test, const Outcome& outcome) {
  const int expected = std::stoi("0" + text_of(test.folder / "expected_exit"));
  bool good = expected == outcome.exit_code || complain("exit code", std::to_string(expected) + "\n", std::to_string(outcome.exit_code) + "\n");
  good &= check_text(test, "stdout", outcome.out, expected != 0);
  good &= check_text(test, "stderr", outcome.err, true);
  good &= check_files(test, outcome);
  good &= check_contents(test);
  good &= check_same(test);
  return good;
}

void accept(const Case& test, const Outcome& outcome) {
  write(test.folder / "expected_exit", std::to_string(outcome.exit_code) + "\n");
  if (!outcome.out.empty() && outcome.exit_code != 0) write(test.folder / "stdout", outcome.out);
  if (!outcome.err.empty()) write(test.folder / "stderr", outcome.err);
  if (!outcome.new_files.empty() && !fs::exists(test.folder / "files")) write(test.folder / "files", joined(outcome.new_files));
}

}  // namespace

int main(int argc, char** argv) {
  if (argc < 4) {
    std::cout << "usage: run_case PROGRAM CASE_FOLDER PROJECT_FOLDER [--accept]\n";
    return 2;
  }
  std::string scratch = (fs::temp_directory_path() / "entrain_case_XXXXXX").string();
  if (mkdtemp(scratch.data()) == nullptr) return 2;
  const Case test{argv[1], argv[2], argv[3], scratch, argc > 4 && std::string(argv[4]) == "--accept"};
  const Outcome outcome = run(test);
  if (test.accept) accept(test, outcome);
  const bool good = check(test, outcome);
  std::error_code ignored;
  fs::remove_all(scratch, ignored);
  std::cout << (good ? "as expected\n" : "NOT as expected\n");
  return good ? 0 : 1;
}
