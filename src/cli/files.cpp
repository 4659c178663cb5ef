#include <fmt/format.h>
#include <sys/stat.h>

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <iterator>

#include "cli/command.hpp"

namespace entrain::cli {

void print_diagnostics(const Diagnostics& diagnostics, bool quiet) {
  constexpr std::size_t most = 200;  // a table of 100,000 wrong rows says the same 100,000 times
  std::size_t shown = 0, held_back = 0;
  for (const Diagnostic& d : diagnostics) {
    if (d.severity != Severity::error && quiet) continue;
    if (++shown <= most) fmt::print(stderr, "{}\n", to_text(d));
    else ++held_back;
  }
  if (held_back > 0) fmt::print(stderr, "... and {} more like these\n", held_back);
}

int fail(const Diagnostics& diagnostics, ExitCode code) {
  print_diagnostics(diagnostics, false);
  return code;
}

Diagnostics write_whole_file(const std::string& path, const std::string& bytes) {
  namespace fs = std::filesystem;
  std::error_code code;
  const fs::path target(path), beside(path + ".part");
  if (target.has_parent_path()) fs::create_directories(target.parent_path(), code);
  {
    std::ofstream out(beside, std::ios::binary | std::ios::trunc);
    out.write(bytes.data(), static_cast<std::streamsize>(bytes.size()));
    out.flush();
    if (!out) {
      const std::string reason = std::strerror(errno);
      out.close();
      fs::remove(beside, code);
      return {error(path, "can't be written: " + reason, "a folder that can be written to", "Choose another output folder or free some space")};
    }
  }
  fs::rename(beside, target, code);
  if (!code) return {};
  const std::string reason = code.message();
  fs::remove(beside, code);
  return {error(path, "can't be written: " + reason, "a file name that is free or a file that may be replaced", "Choose another output folder")};
}

FileText read_whole_file(const std::string& path, std::size_t most) {
  namespace fs = std::filesystem;
  const auto refuse = [&](std::string found, std::string expected, std::string mend) {
    return FileText{{}, {error(path, std::move(found), std::move(expected), std::move(mend))}};
  };
  std::error_code code;
  const fs::file_status status = fs::status(path, code);
  if (!fs::exists(status)) return refuse("no such file", "a file", "Check the path");
  if (fs::is_directory(status)) return refuse("a folder", "a file", "Name a file inside it");
  if (!fs::is_regular_file(status)) return refuse("not a regular file", "a file", "Copy it to a file first");
  if (fs::file_size(path, code) > most || code) return refuse("too large", fmt::format("at most {} bytes", most), "Use a smaller file");
  std::ifstream in(path, std::ios::binary);
  FileText text;
  text.bytes.assign(std::istreambuf_iterator<char>(in), std::istreambuf_iterator<char>());
  if (!in && !in.eof()) return refuse("can't be read", "a readable file", "Check its permissions");
  return text;
}

}  // namespace entrain::cli
