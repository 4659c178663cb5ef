#include "base/natural_order.hpp"

#include <algorithm>

namespace entrain {
namespace {

bool is_digit(char c) { return c >= '0' && c <= '9'; }

// Takes the run of digits at the front of `text`, without leading zeros.
std::string_view take_digits(std::string_view& text) {
  const auto stop = std::find_if_not(text.begin(), text.end(), is_digit);
  std::string_view run = text.substr(0, static_cast<std::size_t>(stop - text.begin()));
  text.remove_prefix(run.size());
  while (run.size() > 1 && run.front() == '0') run.remove_prefix(1);
  return run;
}

}  // namespace

bool natural_less(std::string_view a, std::string_view b) {
  const std::string_view whole_a = a, whole_b = b;
  while (!a.empty() && !b.empty()) {
    if (is_digit(a.front()) && is_digit(b.front())) {
      const std::string_view x = take_digits(a), y = take_digits(b);
      if (x.size() != y.size()) return x.size() < y.size();
      if (x != y) return x < y;
    } else {
      if (a.front() != b.front()) return static_cast<unsigned char>(a.front()) < static_cast<unsigned char>(b.front());
      a.remove_prefix(1);
      b.remove_prefix(1);
    }
  }
  if (a.empty() != b.empty()) return a.empty();
  return whole_a < whole_b;
}

}  // namespace entrain
