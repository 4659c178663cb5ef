// The standards that come with the program, and messages as text.
#pragma once

#include <catch2/catch.hpp>

#include "standards/embedded.hpp"

namespace entrain::standards::sample {

inline DesignStandard standard(const std::string& id = "kinematic-us") {
  auto found = find_standard(id, "test");
  REQUIRE(found.has_value());
  return *found;
}

inline std::string text_of(const Diagnostics& diagnostics) {
  std::string text;
  for (const Diagnostic& d : diagnostics) text += to_text(d) + "\n";
  return text;
}

template <class T>
std::string problems_of(const Result<T>& result) {
  return result ? std::string("none") : text_of(result.error());
}

inline Change number(const std::string& key, double value) { return {key, "project.toml line 7", value, {}, {}}; }
inline Change word(const std::string& key, const std::string& value) { return {key, "project.toml line 8", {}, value, {}}; }
inline Change truth(const std::string& key, bool value) { return {key, "project.toml line 9", {}, {}, value}; }

}  // namespace entrain::standards::sample
