// GDAL as a silent library: its messages are caught and can be asked for. Private to geo.
#pragma once

#include <string>
#include <vector>

namespace entrain::geo {

// Registers the drivers once. While one of these lives, GDAL's messages of this thread are collected instead of printed.
class GdalQuiet {
 public:
  GdalQuiet();
  ~GdalQuiet();
  GdalQuiet(const GdalQuiet&) = delete;
  GdalQuiet& operator=(const GdalQuiet&) = delete;

  // The collected errors (not warnings), joined; empty if there were none.
  std::string errors() const;
  void collect(bool is_error, const char* message);

 private:
  std::vector<std::string> m_errors;
};

}  // namespace entrain::geo
