#include "base/natural_order.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <string>
#include <vector>

using namespace entrain;

TEST_CASE("ids are listed as people list them") {
  std::vector<std::string> ids = {"T10", "T2", "T1b", "T1", "A", "T02", ""};
  std::sort(ids.begin(), ids.end(), NaturalLess{});
  CHECK(ids == std::vector<std::string>{"", "A", "T1", "T1b", "T02", "T2", "T10"});
}

TEST_CASE("the order is strict and total on distinct ids") {
  const std::vector<std::string> ids = {"", "0", "00", "1", "01", "a1", "a01", "a1b", "a10", "b"};
  for (const auto& a : ids)
    for (const auto& b : ids) CHECK((natural_less(a, b) + natural_less(b, a)) == (a == b ? 0 : 1));
}
