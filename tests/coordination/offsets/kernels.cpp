#include "coordination/offsets/kernels.hpp"

#include <catch2/catch.hpp>

#include "coordination/offsets/random.hpp"
#include "coordination/offsets/rows.hpp"

namespace entrain::offsets {
namespace {

std::vector<Lane> random_row(int cycle, Lane most, Random& random) {
  std::vector<Lane> row(static_cast<std::size_t>(row_lanes(cycle)), 0);
  for (Lane& entry : row) entry = random.chance(0.1) ? lane_ceiling : random.below(most) - most / 4;
  return row;
}

TEST_CASE("the convolution at hand is the plain one, whatever the cycle and the entries") {
  Random random(7);
  for (int cycle = 1; cycle <= 260; ++cycle)
    for (const Lane most : {4, 1000, lane_ceiling}) {
      const auto a = random_row(cycle, most, random), b = random_row(cycle, most, random);
      ConvolutionSpace space(cycle);
      std::vector<Lane> fast(a.size(), Lane{1} << 30), plain(fast);
      convolve_into(a.data(), b.data(), cycle, fast.data(), space);
      convolve_into_plainly(a.data(), b.data(), cycle, plain.data());
      fast.resize(static_cast<std::size_t>(cycle));
      plain.resize(static_cast<std::size_t>(cycle));
      REQUIRE(fast == plain);
    }
}

TEST_CASE("a convolution by hand") {
  // cycle 3: out[k] = min over i of a[i] + b[k - i].
  const std::vector<Lane> a = {0, 5, 1}, b = {4, 0, 9};
  std::vector<Lane> out(16, 100);
  convolve_into_plainly(a.data(), b.data(), 3, out.data());
  CHECK(std::vector<Lane>(out.begin(), out.begin() + 3) == std::vector<Lane>{1, 0, 5});
}

TEST_CASE("rows turn, reverse and give back what they say") {
  std::vector<Lane> row(16, 0), table = {1, 2, 3, 4, 5};
  table.resize(16);
  add_shifted(table.data(), 2, 5, row.data());
  CHECK(std::vector<Lane>(row.begin(), row.begin() + 5) == std::vector<Lane>{4, 5, 1, 2, 3});
  reverse_row(table.data(), 5, row.data());
  CHECK(std::vector<Lane>(row.begin(), row.begin() + 5) == std::vector<Lane>{1, 5, 4, 3, 2});
  for (const int parts : {1, 2, 3, 7}) {
    std::vector<Lane> theta(16, 0), rest(16, 0), m(16, 0);
    for (int d = 0; d < 16; ++d) m[static_cast<std::size_t>(d)] = 100 + 13 * d;
    give_back(theta.data(), rest.data(), m.data(), 100, parts, 16);
    for (int d = 0; d < 16; ++d) {
      const Lane given = rest[static_cast<std::size_t>(d)];
      CHECK(given + theta[static_cast<std::size_t>(d)] == 0);
      CHECK(given <= 13 * d / parts);
      CHECK(given >= 13 * d / parts - 1);
    }
  }
}

}  // namespace
}  // namespace entrain::offsets
