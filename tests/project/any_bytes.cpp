// No bytes crash a reader or make it hang.
#include <rapidcheck.h>

#include <catch2/catch.hpp>

#include "project/count_layouts.hpp"
#include "project/validate.hpp"
#include "texts.hpp"

using namespace entrain;
using namespace entrain::project;
using namespace entrain::project::sample;

namespace {

const std::vector<std::string>& pieces() {
  static const std::vector<std::string> all = {"[[corridor]]\n", "id = \"a\"\n", "signals = [\"A\", \"B\"]\n", "[[period]]\n", "cycle_s = { min = 60, max = 90 }\n", "weights = { forward = 1 }\n",
                                               "[standards]\n", "x = [[[[", "name = \"n\"\n", "[[standards.exception]]\n", "value = nan\n", "key = \"yellow_s\"\n", "[tables]\n", "\"\"\"", "\0\0",
                                               "from = 06:30:00\n", "value = 1979-05-27\n", "value = inf\n", "[columns]\n", "movements = { signal = 3 }\n", "\xFF", "'", "=", "{", "\\u0000", "groups_at.A.forward = \"2\"\n"};
  return all;
}

std::string mixed_text() {
  std::string text;
  for (int i = *rc::gen::inRange(0, 14); i > 0; --i) {
    const int at = *rc::gen::inRange(0, static_cast<int>(pieces().size()) + 1);
    if (at < static_cast<int>(pieces().size())) text += pieces()[static_cast<std::size_t>(at)];
    else text += static_cast<char>(*rc::gen::inRange(0, 256));
  }
  return text;
}

std::string any_cell() {
  static const std::vector<std::string> cells = {"", "signal", "T1", "EB", "T", "1e308", "-0", "nan", "inf", "*", "=\"1\"", "=\"", "'", "\xFF\xFE", "12,5", "\"", "volume_vph", "approach", "turn",
                                                 "begin_of_green", "0x10", std::string(1, '\0'), "9999999999999999999999", "yes", "cycle_s", "group", "yellow_s", "NBL", "NBT", "time_start", "07:15"};
  return cells[static_cast<std::size_t>(*rc::gen::inRange(0, static_cast<int>(cells.size())))];
}

}  // namespace

TEST_CASE("any text as a project gives a project or errors") {
  CHECK(rc::check([] {
    const auto read = project_of(mixed_text());
    if (read) validate(read->value, {});
    else RC_ASSERT(has_errors(read.error()));
  }));
}

TEST_CASE("deep nesting and long texts are refused or read, never fatal") {
  CHECK_FALSE(project_of("a = " + std::string(100000, '[')).has_value());
  CHECK_FALSE(project_of("a = " + std::string(5000, '[') + std::string(5000, ']')).has_value());
  std::string tables;
  for (int i = 0; i < 400; ++i) tables += (i > 0 ? ".a" : "a");
  (void)project_of("[" + tables + "]\nx = 1\n");
  std::string dotted = "a";
  for (int i = 0; i < 20000; ++i) dotted += ".a";
  (void)project_of(dotted + " = 1\n");
  const auto read = project_of("name = \"" + std::string(10 << 20, 'x') + "\"\n");
  REQUIRE(read.has_value());
  CHECK(read->value.name.size() == (10u << 20));
}

TEST_CASE("any cells as a table give rows or errors, and a cell of 10 MB is cut in the message") {
  CHECK(rc::check([] {
    TextGrid table{"t.csv", {}};
    for (int r = *rc::gen::inRange(0, 6); r > 0; --r) {
      table.rows.emplace_back();
      for (int c = *rc::gen::inRange(0, 7); c > 0; --c) table.rows.back().push_back(any_cell());
    }
    (void)read_signal_rows(table), (void)read_movement_rows(table), (void)read_crossing_rows(table), (void)read_travel_time_rows(table), (void)read_timing_rows(table), (void)read_conflict_rows(table);
    (void)read_count_layouts(table, {});
  }));
  TextGrid table{"t.csv", {{"signal", "lon", "lat"}, {"T1", std::string(10 << 20, '7'), "1"}, {std::string(10 << 20, 'h')}}};
  const std::string problems = problems_of(read_signal_rows(table));
  CHECK(problems.find("7777...; expected a number from -180 to 180") != std::string::npos);
  CHECK(problems.size() < 2000);
}
