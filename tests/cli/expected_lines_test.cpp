#include <catch2/catch.hpp>

#include "expected_lines.hpp"

using entrain::cli_tests::lines_match;
using Lines = std::vector<std::string>;

TEST_CASE("plain lines stand for themselves") {
  CHECK(lines_match({}, {}));
  CHECK(lines_match({"a", "b"}, {"a", "b"}));
  CHECK_FALSE(lines_match({"a"}, {"a", "b"}));
  CHECK_FALSE(lines_match({"a", "b"}, {"a"}));
  CHECK_FALSE(lines_match({"a.c"}, {"abc"}));
}

TEST_CASE("dots stand for any number of lines") {
  CHECK(lines_match({"..."}, {}));
  CHECK(lines_match({"...", "b", "..."}, {"a", "b", "b", "c"}));
  CHECK(lines_match({"a", "...", "c"}, {"a", "c"}));
  CHECK_FALSE(lines_match({"...", "x", "..."}, {"a", "b"}));
}

TEST_CASE("a regular expression stands for one whole line") {
  CHECK(lines_match({"~ took [0-9]+ ms"}, {"took 12 ms"}));
  CHECK_FALSE(lines_match({"~ took [0-9]+"}, {"took 12 ms"}));
  CHECK_FALSE(lines_match({"~ .*"}, {}));
}
