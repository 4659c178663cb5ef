// The rules of the house hold in this tree, and each of them notices when it is broken.
#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>

#include "rules.hpp"

namespace fs = std::filesystem;
using namespace entrain::house;

namespace {

std::string listed(const std::vector<std::string>& sentences) {
  std::string text;
  for (const auto& sentence : sentences) text += sentence + "\n";
  return text;
}

const std::vector<SourceFile>& house() {
  static const auto files = source_files(ENTRAIN_SOURCE_DIR, {"src", "geo"});
  return files;
}

// A small tree on disk that is gone afterwards.
struct Tree {
  fs::path root;
  Tree() : root(fs::temp_directory_path() / ("entrain_house_" + std::to_string(reinterpret_cast<std::uintptr_t>(this)))) { fs::remove_all(root); }
  Tree(const Tree&) = delete;
  Tree& operator=(const Tree&) = delete;
  ~Tree() {
    std::error_code ignored;
    fs::remove_all(root, ignored);
  }
  Tree& add(const std::string& path, const std::string& text) {
    fs::create_directories((root / path).parent_path());
    std::ofstream(root / path, std::ios::binary) << text;
    return *this;
  }
  std::vector<SourceFile> files() const { return source_files(root, {"src", "geo"}); }
};

}  // namespace

TEST_CASE("rooms include only what the table allows") {
  REQUIRE(house().size() > 20);
  CHECK(listed(include_violations(house())) == "");
  CHECK(listed(review_independence_violations(house())) == "");
  CHECK(listed(link_violations(ENTRAIN_SOURCE_DIR)) == "");
}

TEST_CASE("libraries are silent and repeatable") {
  CHECK(listed(silence_violations(house())) == "");
  CHECK(listed(determinism_violations(house())) == "");
}

TEST_CASE("headers and files keep their form") {
  CHECK(listed(header_violations(house())) == "");
  CHECK(listed(length_violations(source_files(ENTRAIN_SOURCE_DIR, {"src", "geo", "tests"}))) == "");
}

TEST_CASE("the tree speaks of the project alone and holds nothing else") {
  CHECK(listed(wording_violations(ENTRAIN_SOURCE_DIR)) == "");
  CHECK(listed(top_level_violations(ENTRAIN_SOURCE_DIR)) == "");
  CHECK(listed(registration_violations(ENTRAIN_SOURCE_DIR)) == "");
}

TEST_CASE("a seeded wrong include is found") {
  Tree tree;
  tree.add("src/base/a.hpp", "#pragma once\n").add("src/plan/p.hpp", "#pragma once\n#include \"base/a.hpp\"\n");
  CHECK(include_violations(tree.files()).empty());
  tree.add("src/base/b.hpp", "#pragma once\n#include \"plan/p.hpp\"\n");
  tree.add("src/coordination/bands/c.cpp", "  #  include \"coordination/links/l.hpp\"\n");
  tree.add("src/review/r.cpp", "#include \"coordination/bands/c.hpp\"\n");
  tree.add("geo/out/g.cpp", "#include \"demand/demand.hpp\"\n");
  tree.add("src/report/t.cpp", "#include \"../drafting/draft.hpp\"\n");
  tree.add("src/attic/x.cpp", "\n");
  tree.add("src/cli/all.cpp", "#include \"drafting/draft.hpp\"\n#include \"geo/in/roads.hpp\"\n");
  CHECK(listed(include_violations(tree.files())) ==
        "geo/out/g.cpp: geo/out may not include demand (\"demand/demand.hpp\")\n"
        "src/attic/x.cpp: lies in no room of the table\n"
        "src/base/b.hpp: base may not include plan (\"plan/p.hpp\")\n"
        "src/coordination/bands/c.cpp: coordination/bands may not include coordination/links (\"coordination/links/l.hpp\")\n"
        "src/report/t.cpp: includes \"../drafting/draft.hpp\", which is in no room\n"
        "src/review/r.cpp: review may not include coordination/bands (\"coordination/bands/c.hpp\")\n");
}

TEST_CASE("a review that reaches circular time through another header is found") {
  Tree tree;
  tree.add("src/base/circle.hpp", "#pragma once\n").add("src/plan/plan.hpp", "#pragma once\n#include \"base/circle.hpp\"\n");
  tree.add("src/review/review.cpp", "#include \"plan/plan.hpp\"\n");
  CHECK(listed(review_independence_violations(tree.files())) == "src/review/review.cpp: reaches src/base/circle.hpp, which the planner uses\n");
}

TEST_CASE("a seeded wrong link is found") {
  Tree tree;
  tree.add("src/review/CMakeLists.txt", "entrain_room(review\n  SOURCES a.cpp\n  USES plan timing\n  LIBRARIES fmt::fmt)\n");
  tree.add("src/coordination/links/CMakeLists.txt", "entrain_room(links SOURCES a.cpp USES timing traffic)\n");
  tree.add("src/drafting/CMakeLists.txt", "entrain_room(drafting SOURCES a.cpp USES base bands links LIBRARIES Threads::Threads)\n");
  CHECK(listed(link_violations(tree.root)) == "src/review/CMakeLists.txt: review may not use timing\n");
}

TEST_CASE("a library that talks, ends, asks the clock or the environment is found") {
  Tree tree;
  tree.add("src/plan/loud.cpp", R"x(// std::cout << "a comment may say it"
const char* s = "fmt::print(\"a string may say it\") exit(1)";
void f() { fmt::print("x"); }
void g() { std::abort(); }
auto h() { return std::getenv("HOME"); }
auto i() { return std::chrono::steady_clock::now(); }
int j() { return rand(); }
double k(const char* t) { return strtod(t, nullptr); }
void good() { snprintf(buffer, 3, "a"); exit_time_s(); sometime(0); }
)x");
  tree.add("src/cli/loud.cpp", "void f() { fmt::print(\"x\"); }\n");
  CHECK(listed(silence_violations(tree.files())) ==
        "src/plan/loud.cpp:3: a library does not print\n"
        "src/plan/loud.cpp:4: a library does not end the program\n"
        "src/plan/loud.cpp:5: a library does not read the environment or run commands\n"
        "src/plan/loud.cpp:6: a library does not read a clock\n"
        "src/plan/loud.cpp:7: a library takes its seed from the caller\n"
        "src/plan/loud.cpp:8: numbers are read and written without a locale\n");
}

TEST_CASE("stray remainders, hash orders, bare results and long files are found") {
  Tree tree;
  tree.add("src/timing/a.cpp", "double f(double x) { return std::fmod(x, 90); }\n").add("src/base/circle.cpp", "double f(double x) { return std::fmod(x, 90); }\n");
  tree.add("src/report/b.hpp", "#pragma once\nstd::unordered_map<int, int> m;\n[[nodiscard]] Result<int> fine(int x);\nResult<int> bare(int x);\n");
  tree.add("src/plan/c.hpp", "int x;\n");
  CHECK(listed(determinism_violations(tree.files())) ==
        "src/report/b.hpp:2: an output must not depend on a hash order\n"
        "src/timing/a.cpp:1: remainders of times stand in src/base/circle\n");
  CHECK(listed(header_violations(tree.files())) ==
        "src/plan/c.hpp: has no #pragma once\n"
        "src/report/b.hpp:4: returns a Result and is not [[nodiscard]]\n");
  CHECK(listed(length_violations(tree.files(), 3)) == "src/report/b.hpp: 4 lines, at most 3\n");
}

TEST_CASE("words about elsewhere, stray files and cases that never run are found") {
  Tree tree;
  tree.add("README.md", std::string("see /t") + "mp/plan.json\n").add("notes.md", "fine\n");
  tree.add("tests/cli/CMakeLists.txt", "entrain_cli_cases(\n  known)\n").add("tests/cli/known/command", "\n").add("tests/cli/forgotten/command", "\n");
  CHECK(listed(wording_violations(tree.root)) == std::string("README.md: says \"/t") + "mp/\"\n");
  CHECK(listed(top_level_violations(tree.root)) == "notes.md: is not one of the agreed names at the top\n");
  CHECK(listed(registration_violations(tree.root)) == "tests/cli/forgotten: is not in tests/cli/CMakeLists.txt, so it never runs\n");
}
