// The known name closest to one that was not found: "did you mean ...?".
#pragma once

#include <algorithm>
#include <array>
#include <cstddef>
#include <string>
#include <string_view>

namespace entrain {

// Insertions, deletions, exchanges of a letter or of two neighbours between the names, small and capital letters alike
// (Damerau 1964, neighbours once). Names over 48 bytes are never near.
inline std::size_t name_distance(std::string_view a, std::string_view b) {
  constexpr std::size_t longest = 48;
  if (a.size() > longest || b.size() > longest) return longest;
  const auto same = [](char x, char y) {
    const auto small = [](char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c + 32) : c; };
    return small(x) == small(y);
  };
  std::array<std::array<std::size_t, longest + 1>, longest + 1> cost{};
  for (std::size_t i = 0; i <= a.size(); ++i)
    for (std::size_t j = 0; j <= b.size(); ++j) {
      if (i == 0 || j == 0) {
        cost[i][j] = i + j;
        continue;
      }
      cost[i][j] = std::min({cost[i - 1][j] + 1, cost[i][j - 1] + 1, cost[i - 1][j - 1] + (same(a[i - 1], b[j - 1]) ? 0 : 1)});
      if (i > 1 && j > 1 && same(a[i - 1], b[j - 2]) && same(a[i - 2], b[j - 1])) cost[i][j] = std::min(cost[i][j], cost[i - 2][j - 2] + 1);
    }
  return cost[a.size()][b.size()];
}

// The first nearest of `known` within a third of the name's length, rounded up, or nothing.
template <class Names>
std::string near_name(std::string_view name, const Names& known) {
  std::size_t best = (name.size() + 2) / 3 + 1;
  std::string found;
  for (const auto& candidate : known) {
    const std::size_t distance = name_distance(name, candidate);
    if (distance < best && distance < std::string_view(candidate).size()) best = distance, found = std::string(candidate);
  }
  return found;
}

// "Did you mean NAME?", or `otherwise` where nothing is near: what to do about an unknown name.
template <class Names>
std::string did_you_mean(std::string_view name, const Names& known, const std::string& otherwise) {
  const std::string near = near_name(name, known);
  return near.empty() ? otherwise : "Did you mean " + near + "?";
}

}  // namespace entrain
