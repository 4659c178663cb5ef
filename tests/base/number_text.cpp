#include "base/number_text.hpp"

#include <catch2/catch.hpp>
#include <cmath>

using namespace entrain;

TEST_CASE("numbers print without noise") {
  CHECK(number_text(40.50) == "40.5");
  CHECK(number_text(7.0) == "7");
  CHECK(number_text(-0.0001) == "0");
  CHECK(number_text(1e9) == "1000000000");
  CHECK(number_text(NAN) == "-");
  CHECK(fixed_text(-0.04, 1) == "0.0");
  CHECK(fixed_text(2.25, 1) == "2.2");
}

TEST_CASE("only a whole finite number is a number") {
  CHECK(parse_number(" +3.5 ") == 3.5);
  for (const char* text : {"", "3,5", "3.5s", "nan", "inf", "1e999", "0x10", "--1"}) CHECK_FALSE(parse_number(text).has_value());
  CHECK(parse_whole_number("12") == 12);
  CHECK_FALSE(parse_whole_number("12.0").has_value());
  CHECK_FALSE(parse_whole_number("99999999999999999999").has_value());
}
