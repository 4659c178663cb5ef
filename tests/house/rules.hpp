// Rules of the house that a machine can watch: which room may include which, what a library may not do, how long a file may be.
// Each rule looks at a source tree and returns one sentence for each violation, sorted; an empty list is good.
#pragma once

#include <filesystem>
#include <map>
#include <set>
#include <string>
#include <vector>

namespace entrain::house {

struct SourceFile {
  std::string path;                // relative to the root, with slashes
  std::vector<std::string> lines;  // as they are
  std::vector<std::string> code;   // the same without comments and with empty string literals
};

// Every .hpp and .cpp file under `folders` of `root`, sorted by path.
std::vector<SourceFile> source_files(const std::filesystem::path& root, const std::vector<std::string>& folders);

// Rooms and what each may include besides itself. Sub-rooms are rooms of their own.
const std::map<std::string, std::set<std::string>>& allowed_rooms();
// "src/coordination/bands/x.cpp" and "coordination/bands/x.hpp" -> "coordination/bands"; empty: in no room.
std::string room_of(const std::string& path);

std::vector<std::string> include_violations(const std::vector<SourceFile>& files);
// The review may read plans, ids and `Result`; nothing it includes, however far down, may be circular time or a planner's header.
std::vector<std::string> review_independence_violations(const std::vector<SourceFile>& files);
// USES in the rooms' CMakeLists.txt repeats the table or less.
std::vector<std::string> link_violations(const std::filesystem::path& root);

// Libraries are silent: no printing, exit, abort, clock, environment, global random, locale outside src/cli.
std::vector<std::string> silence_violations(const std::vector<SourceFile>& files);
// Remainders of times stand in one file; nothing unordered reaches an output.
std::vector<std::string> determinism_violations(const std::vector<SourceFile>& files);
// Functions that return a Result are [[nodiscard]]; headers start with #pragma once.
std::vector<std::string> header_violations(const std::vector<SourceFile>& files);
// At most `most` lines a file.
std::vector<std::string> length_violations(const std::vector<SourceFile>& files, std::size_t most = 600);

// Text files of the project (every folder, hidden ones but .git included) speak of the project alone.
std::vector<std::string> wording_violations(const std::filesystem::path& root);
// Nothing but the agreed names at the top.
std::vector<std::string> top_level_violations(const std::filesystem::path& root);
// Every folder of tests/cli is named in its CMakeLists.txt, and every example in its runner is a folder.
std::vector<std::string> registration_violations(const std::filesystem::path& root);

}  // namespace entrain::house
