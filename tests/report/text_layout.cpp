// Where labels go: as near as they can, never on each other.
#include <catch2/catch.hpp>
#include <algorithm>
#include <cmath>
#include <random>

#include "report/text_layout.hpp"
#include "report/units.hpp"

using namespace entrain::report;

namespace {

double displacement(const std::vector<double>& wanted, const std::vector<double>& got) {
  double sum = 0;
  for (std::size_t i = 0; i < wanted.size(); ++i) sum += (wanted[i] - got[i]) * (wanted[i] - got[i]);
  return sum;
}

// The least displacement on a grid, by trying everything: three labels.
double best_of_three(const std::vector<double>& wanted, double height, double low, double high, double step) {
  double best = 1e18;
  for (double a = low + height / 2; a <= high - height / 2; a += step)
    for (double b = a + height; b <= high - height / 2; b += step)
      for (double c = b + height; c <= high - height / 2 + 1e-9; c += step) best = std::min(best, displacement(wanted, {a, b, c}));
  return best;
}

}  // namespace

TEST_CASE("spread: labels with room stay where they are", "[report]") {
  CHECK(spread({10, 40, 90}, 12, 0, 100) == std::vector<double>{10, 40, 90});
  CHECK(spread({}, 12, 0, 100).empty());
}

TEST_CASE("spread: two on one spot part evenly, a crowd at the edge stays inside", "[report]") {
  CHECK(spread({50, 50}, 10, 0, 100) == std::vector<double>{45, 55});
  CHECK(spread({0, 0, 0}, 10, 0, 100) == std::vector<double>{5, 15, 25});
  CHECK(spread({100, 100, 100}, 10, 0, 100) == std::vector<double>{75, 85, 95});
}

TEST_CASE("spread: too many labels share the room", "[report]") {
  const auto got = spread(std::vector<double>(10, 5), 20, 0, 100);
  for (std::size_t i = 0; i < got.size(); ++i) CHECK(got[i] == Approx(5 + 10 * static_cast<double>(i)));
}

TEST_CASE("spread: apart, inside, in order, and no arrangement is nearer", "[report]") {
  std::mt19937 random(7);
  std::uniform_real_distribution<double> anywhere(0, 60);
  for (int round = 0; round < 60; ++round) {
    std::vector<double> wanted{anywhere(random), anywhere(random), anywhere(random)};
    std::sort(wanted.begin(), wanted.end());
    const auto got = spread(wanted, 12, 0, 60);
    for (std::size_t i = 0; i < got.size(); ++i) {
      CHECK(got[i] >= 6 - 1e-9);
      CHECK(got[i] <= 54 + 1e-9);
      if (i > 0) CHECK(got[i] - got[i - 1] >= 12 - 1e-9);
    }
    CHECK(displacement(wanted, got) <= best_of_three(wanted, 12, 0, 60, 0.5) + 1e-6);
  }
}

TEST_CASE("fitted: whole where it fits, cut at a character where not", "[report]") {
  CHECK(fitted("Kiln Street", 10, 1000) == "Kiln Street");
  const std::string cut = fitted("\xC3\x9C\xC3\x9C\xC3\x9C\xC3\x9C\xC3\x9C\xC3\x9C\xC3\x9C\xC3\x9C", 10, 40);
  CHECK(text_width(cut, 10) <= 40);
  CHECK(cut.substr(cut.size() - 3) == "\xE2\x80\xA6");
  CHECK((cut.size() - 3) % 2 == 0);
  CHECK(fitted("a\nb\x01", 10, 1000) == "a b\xEF\xBF\xBD");
}

TEST_CASE("wrapped: every line fits, nothing is lost but in the last line", "[report]") {
  const auto lines = wrapped("one two three four five six seven", 10, 60, 10);
  std::string all;
  for (const auto& line : lines) {
    CHECK(text_width(line, 10) <= 60);
    all += (all.empty() ? "" : " ") + line;
  }
  CHECK(all == "one two three four five six seven");
  CHECK(wrapped("one two three four five six seven", 10, 60, 2).size() == 2);
  CHECK(wrapped("   ", 10, 60, 2).empty());
}

TEST_CASE("placer: free places alone, inside the frame alone", "[report]") {
  LabelPlacer placer({0, 0, 100, 50});
  CHECK(placer.place({{0, 0, 30, 10}}) == 0);
  CHECK(placer.place({{5, 5, 30, 10}, {90, 0, 30, 10}, {40, 0, 30, 10}}) == 2);
  CHECK(placer.place({{35, 5, 30, 10}}) == -1);
}

TEST_CASE("values: units as asked, no negative zero, thousands apart", "[report]") {
  CHECK(length_text(402.336, Units::us) == "1,320 ft");
  CHECK(length_text(402.336, Units::metric) == "402 m");
  CHECK(speed_text(13.4112, Units::us) == "30 mph");
  CHECK(speed_text(12.5, Units::metric) == "45 km/h");
  CHECK(seconds_text(-0.04) == "0");
  CHECK(seconds_text(40.5) == "40.5");
  CHECK(seconds_text(34) == "34");
  CHECK(count_text(1234567.4) == "1,234,567");
  CHECK(count_text(-1234) == "-1,234");
  CHECK(count_text(999) == "999");
  CHECK(share_text(-0.0001) == "0 %");
}
