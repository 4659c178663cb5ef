// Design standards as files: complete, every value with its source, every flaw named.
#include "standards.hpp"

using namespace entrain;
using namespace entrain::standards;
using namespace entrain::standards::sample;

namespace {

// The text of a standard with one line changed.
std::string with(const std::string& from, const std::string& to) {
  std::string text(*embedded_standard("kinematic-us"));
  const auto at = text.find(from);
  REQUIRE(at != std::string::npos);
  return text.replace(at, from.size(), to);
}

std::string problems_with(const std::string& from, const std::string& to) { return problems_of(read_standard(with(from, to), "s.toml")); }

}  // namespace

TEST_CASE("every standard that comes with the program is complete and names its sources") {
  const auto ids = embedded_standard_ids();
  REQUIRE(ids.size() >= 2);
  for (const auto id : ids) {
    const DesignStandard s = standard(std::string(id));
    CHECK(s.id == id);
    CHECK_FALSE(s.title.empty());
    for (const auto& key : required_keys()) CHECK(s.values.count(key) == 1);
    for (const auto& [key, value] : s.values) {
      INFO(id << " " << key);
      CHECK(value.source.size() > 10);
      CHECK(value.least.has_value());
      CHECK(value.most.has_value());
    }
    CHECK(s.value("yellow_min_s") >= 3);
    CHECK(s.value("walk_limit_s") <= s.value("walk_min_s"));
    CHECK(s.value("walking_speed_total_mps") <= s.value("walking_speed_mps"));
  }
}

TEST_CASE("an unknown standard lists the known ones") {
  CHECK(problems_of(find_standard("kinematic_us", "project.toml [standards] base")) ==
        "error: project.toml [standards] base: unknown design standard kinematic_us; expected one of clearing-metric, kinematic-us. Did you mean kinematic-us?\n");
  CHECK(problems_of(find_standard("", "p")) == "error: p: unknown design standard ; expected one of clearing-metric, kinematic-us. Name one of these\n");
}

TEST_CASE("a value without its source, out of range or missing is refused") {
  CHECK(problems_with("source = \"MUTCD 11th edition, part 4: walk at least 7 s\"", "source = \"\"") ==
        "error: s.toml line 29, walk_min_s: a value without its source; expected { value = ..., source = \"...\" }. Correct the design standard\n");
  CHECK(problems_with("perception_s              = { value = 1.0,", "perception_s = { value = 9,") ==
        "error: s.toml line 10, perception_s: 9; expected 0.5 to 3. Correct the design standard\n");
  CHECK(problems_with("perception_s              = { value = 1.0,", "perception_s = { value = nan,") ==
        "error: s.toml line 10, perception_s: no finite value; expected { value = ..., source = \"...\" }. Correct the design standard\n");
  CHECK(problems_with("stop_weight_s ", "stop_wait_s ") == "error: s.toml [values]: no key stop_weight_s; expected every standard to hold it. Add the value with its source\n");
  CHECK(problems_with("yellow_max_s              = { value = 6.0,    least = 3,", "yellow_max_s = { value = 2.0, least = 1,") ==
        "error: s.toml [values]: yellow_min_s 3 above yellow_max_s 2; expected the least not above the most. Correct the design standard\n");
}

TEST_CASE("a rounding rule that could shorten a safety time is refused") {
  CHECK(problems_with("red_clearance_s      = \"up_to_tenth\"", "red_clearance_s = \"nearest_tenth\"") ==
        "error: s.toml line 67, red_clearance_s: a rule that may shorten the value; expected a rule that goes up: only yellow may go to the nearest tenth. Correct the design standard\n");
  CHECK(problems_with("walk_s               = \"up_to_second\"", "walk_s = \"up_to_tenth\"").find("up_to_second: controllers take whole seconds here") != std::string::npos);
  CHECK(problems_with("walk_s               = \"up_to_second\"", "walk_s = \"down\"").find("expected one of up_to_second, up_to_half_second, up_to_tenth, nearest_tenth") != std::string::npos);
}

TEST_CASE("bytes that are no standard are one error") {
  for (const char* bytes : {"", "[values", "\xFF\xFE", "[values]\nperception_s = 1", "values = 3", "yellow_step = 7", "[[yellow_step]]\nyellow_s = 1", "[clearing.x]\npassing_s = -1"})
    CHECK_FALSE(read_standard(bytes, "s.toml").has_value());
  CHECK(problems_of(read_standard("a = = 1", "s.toml")).rfind("error: s.toml line 1: ", 0) == 0);
  CHECK(problems_with("[allowed]", "[allow]").find("unknown part; expected one of [values], [rounding], [allowed], [words], [clearing], [[yellow_step]]. Did you mean allowed?") !=
        std::string::npos);
}
