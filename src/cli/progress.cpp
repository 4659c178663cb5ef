#include "cli/progress.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <cstdio>

namespace entrain::cli {

Progress::Progress(std::string what, bool quiet)
    : m_what(std::move(what)), m_enabled(!quiet && isatty(STDERR_FILENO) == 1), m_start(std::chrono::steady_clock::now()) {}

void Progress::show(int done, int all) {
  if (!m_enabled || std::chrono::steady_clock::now() - m_start < std::chrono::seconds(1)) return;
  fmt::print(stderr, "\r{} {} of {}", m_what, done, all);
  std::fflush(stderr);
  m_shown = true;
}

void Progress::end() {
  if (m_shown) fmt::print(stderr, "\r{:60}\r", "");
  m_shown = false;
}

}  // namespace entrain::cli
