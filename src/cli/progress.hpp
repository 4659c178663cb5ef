// A progress line on standard error: only on a terminal, only for work of over a second.
#pragma once

#include <chrono>
#include <string>

namespace entrain::cli {

class Progress {
 public:
  Progress(std::string what, bool quiet);
  void show(int done, int all);
  void end();

 private:
  std::string m_what;
  bool m_shown = false, m_enabled = false;
  std::chrono::steady_clock::time_point m_start;
};

}  // namespace entrain::cli
