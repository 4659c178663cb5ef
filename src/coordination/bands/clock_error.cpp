#include "coordination/bands/clock_error.hpp"

#include <algorithm>
#include <limits>

namespace entrain::bands {
namespace {

constexpr double infinite = std::numeric_limits<double>::infinity();

// The largest and the second largest of some values, so that any one of them can be left out.
struct TopTwo {
  double first = -infinite, second = -infinite;
  std::size_t owner = 0;
  void add(std::size_t index, double value) {
    if (value > first)
      second = first, first = value, owner = index;
    else
      second = std::max(second, value);
  }
  double without(std::size_t index) const { return index == owner ? second : first; }
};

}  // namespace

double guaranteed_band(const std::vector<FrameWindow>& windows, const std::vector<double>& error_s) {
  double width = infinite;
  TopTwo lefts;
  for (std::size_t j = 0; j < windows.size(); ++j)
    lefts.add(j, windows[j].left_s + (j < error_s.size() ? error_s[j] : 0));
  for (std::size_t i = 0; i < windows.size(); ++i) {
    width = std::min(width, windows[i].right_s - windows[i].left_s);
    width = std::min(width, windows[i].right_s - (i < error_s.size() ? error_s[i] : 0) - lefts.without(i));
  }
  return std::max(0.0, width);
}

std::vector<Bearable> bearable_errors(const std::vector<FrameWindow>& windows, double loss_s) {
  TopTwo lefts, rights;  // rights negated
  for (std::size_t i = 0; i < windows.size(); ++i) lefts.add(i, windows[i].left_s), rights.add(i, -windows[i].right_s);
  const double band = std::max(0.0, -rights.first - lefts.first);
  std::vector<Bearable> out;
  for (std::size_t i = 0; i < windows.size(); ++i)
    out.push_back({std::max(0.0, loss_s + windows[i].right_s - lefts.without(i) - band),
                   std::max(0.0, loss_s - rights.without(i) - windows[i].left_s - band)});
  return out;
}

}  // namespace entrain::bands
