// One file a command; `commands.cpp` holds the one list of them.
#pragma once

#include <CLI/CLI.hpp>
#include <functional>
#include <memory>
#include <string>
#include <vector>

#include "base/diagnostic.hpp"

namespace entrain::cli {

enum ExitCode { done = 0, violation = 1, wrong_usage = 2, unusable_input = 3, no_plan = 4 };

// Options every command has.
struct CommonOptions {
  std::vector<std::string> periods;
  std::string units;   // us | metric; empty: the project's
  bool json = false, quiet = false;
  int threads = 0;     // 0: as many as the machine has
  unsigned seed = 1;
};

// Declares its options on `app` and returns what to run once they are parsed; the return value is the exit code.
using Declare = std::function<int()> (*)(CLI::App& app, const CommonOptions& common);

struct Command {
  const char* name;
  const char* summary;
  Declare declare;
};
const std::vector<Command>& commands();

std::function<int()> declare_import(CLI::App& app, const CommonOptions& common);
std::function<int()> declare_draft(CLI::App& app, const CommonOptions& common);
std::function<int()> declare_review(CLI::App& app, const CommonOptions& common);
std::function<int()> declare_compare(CLI::App& app, const CommonOptions& common);
std::function<int()> declare_sheet(CLI::App& app, const CommonOptions& common);
std::function<int()> declare_offsets(CLI::App& app, const CommonOptions& common);

// Diagnostics to standard error, one a line; errors first is not the rule: order of discovery is.
void print_diagnostics(const Diagnostics& diagnostics, bool quiet);
// Prints the errors and returns the exit code that fits.
int fail(const Diagnostics& diagnostics, ExitCode code = unusable_input);

// Whole or not at all: writes beside the target and renames. Errors go to the result.
Diagnostics write_whole_file(const std::string& path, const std::string& bytes);
// The file's bytes, or what stood in the way (missing, a folder, unreadable, over `most` bytes).
struct FileText { std::string bytes; Diagnostics problems; };
FileText read_whole_file(const std::string& path, std::size_t most = std::size_t{1} << 30);

}  // namespace entrain::cli
