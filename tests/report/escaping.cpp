// The escaping routine of markup and the quoting routine of tables: nothing from an input breaks out.
#include <catch2/catch.hpp>
#include <random>
#include <regex>

#include "report/csv.hpp"
#include "report/document.hpp"
#include "report/xml.hpp"

using namespace entrain::report;

namespace {

const std::string replaced = "\xEF\xBF\xBD";

// A second, simple reading of UTF-8 to judge the first.
bool is_valid_utf8(const std::string& text) {
  static const std::regex valid(
      "^(?:[\\x00-\\x7F]|[\\xC2-\\xDF][\\x80-\\xBF]|\\xE0[\\xA0-\\xBF][\\x80-\\xBF]|[\\xE1-\\xEC\\xEE\\xEF][\\x80-\\xBF]{2}|\\xED[\\x80-\\x9F][\\x80-\\xBF]|"
      "\\xF0[\\x90-\\xBF][\\x80-\\xBF]{2}|[\\xF1-\\xF3][\\x80-\\xBF]{3}|\\xF4[\\x80-\\x8F][\\x80-\\xBF]{2})*$");
  return std::regex_match(text, valid);
}

std::string unescaped(std::string text) {
  const std::pair<const char*, const char*> entities[] = {{"&lt;", "<"}, {"&gt;", ">"}, {"&quot;", "\""}, {"&#39;", "'"}, {"&#13;", "\r"}, {"&amp;", "&"}};
  for (const auto& [entity, letter] : entities)
    for (auto at = text.find(entity); at != std::string::npos; at = text.find(entity, at + 1)) text.replace(at, std::string(entity).size(), letter);
  return text;
}

}  // namespace

TEST_CASE("markup: the five letters that mean something become entities", "[report]") {
  CHECK(escaped("a < b && c > d") == "a &lt; b &amp;&amp; c &gt; d");
  CHECK(escaped("\"quoted\" 'once'") == "&quot;quoted&quot; &#39;once&#39;");
  CHECK(escaped("]]>") == "]]&gt;");
  CHECK(escaped("&amp;") == "&amp;amp;");
  CHECK(escaped("</title><script>alert(1)</script>") == "&lt;/title&gt;&lt;script&gt;alert(1)&lt;/script&gt;");
  CHECK(escaped("") == "");
}

TEST_CASE("markup: what no document may hold is replaced", "[report]") {
  CHECK(escaped(std::string("a\0b", 3)) == "a" + replaced + "b");
  CHECK(escaped("a\x01\x08\x0B\x0C\x1F\x7F") == "a" + replaced + replaced + replaced + replaced + replaced + replaced);
  CHECK(escaped("tab\tline\nend") == "tab\tline\nend");
  CHECK(escaped("\r") == "&#13;");
  CHECK(escaped("\xC2\x80\xC2\x9F") == replaced + replaced);          // C1 controls
  CHECK(escaped("\xEF\xBF\xBE\xEF\xBF\xBF") == replaced + replaced);  // U+FFFE, U+FFFF
  CHECK(escaped("\xF0\x9F\xBF\xBE") == replaced);                     // U+1FFFE
}

TEST_CASE("markup: invalid UTF-8 is replaced byte by byte", "[report]") {
  CHECK(escaped("\xFF") == replaced);
  CHECK(escaped("\xC0\xAF") == replaced + replaced);                    // overlong slash
  CHECK(escaped("\xE0\x80\xBC") == replaced + replaced + replaced);     // overlong <
  CHECK(escaped("\xED\xA0\x80") == replaced + replaced + replaced);     // surrogate
  CHECK(escaped("\xF4\x90\x80\x80") == replaced + replaced + replaced + replaced);
  CHECK(escaped("\xE2\x82") == replaced + replaced);                    // cut off
  CHECK(escaped("\xC3<") == replaced + "&lt;");                         // the broken lead does not swallow the letter after it
  CHECK(escaped("gr\xC3\xBC\xC3\x9F \xE2\x82\xAC \xF0\x9F\x9A\xA6") == "gr\xC3\xBC\xC3\x9F \xE2\x82\xAC \xF0\x9F\x9A\xA6");
}

TEST_CASE("markup: marks that turn the text around them are replaced, letters of any direction stay", "[report]") {
  CHECK(escaped("a\xE2\x80\xAE" "b") == "a" + replaced + "b");
  CHECK(escaped("\xE2\x81\xA6") == replaced);
  CHECK(escaped("\xD7\xA9\xD7\x9D") == "\xD7\xA9\xD7\x9D");
}

TEST_CASE("markup: random bytes come out valid, without bare marks, and valid texts come back", "[report]") {
  std::mt19937 random(20261201);
  std::uniform_int_distribution<int> byte(0, 255), length(0, 40);
  for (int round = 0; round < 4000; ++round) {
    std::string text;
    for (int i = length(random); i > 0; --i) text += static_cast<char>(byte(random));
    const std::string safe = escaped(text);
    CHECK(is_valid_utf8(safe));
    CHECK(safe.find_first_of("<>\"'\r") == std::string::npos);
    CHECK(!std::regex_search(safe, std::regex("&(?!(lt|gt|quot|amp|#39|#13);)")));
    if (is_valid_utf8(text) && safe.find(replaced) == std::string::npos) CHECK(unescaped(safe) == text);
  }
}

TEST_CASE("markup: scopes close in order, attributes are quoted, empty ones are left out", "[report]") {
  XmlWriter writer(Dialect::xml);
  {
    const auto outer = writer.element("a", {{"x", "1\" onload=\"y"}, {"", "gone"}});
    writer.leaf("b", "<i>");
    writer.empty("c", {{"z", "&"}});
  }
  CHECK(writer.take().bytes() == "<a x=\"1&quot; onload=&quot;y\"><b>&lt;i&gt;</b><c z=\"&amp;\"/></a>");
  XmlWriter html_writer(Dialect::html);
  html_writer.empty("br");
  CHECK(html_writer.take().bytes() == "<!DOCTYPE html>\n<br>");
}

TEST_CASE("tables: cells are quoted where they must be", "[report]") {
  CHECK(csv_cell("plain") == "plain");
  CHECK(csv_cell("a,b") == "\"a,b\"");
  CHECK(csv_cell("say \"go\"") == "\"say \"\"go\"\"\"");
  CHECK(csv_cell("two\nlines") == "\"two\nlines\"");
  CHECK(csv_cell(" blank") == "\" blank\"");
  CHECK(csv_cell("a;b") == "\"a;b\"");
  CHECK(csv_cell("") == "");
  CHECK(csv_row({"1", "a,b", ""}) == "1,\"a,b\",\r\n");
}

TEST_CASE("tables: what a spreadsheet would run is text, numbers stay numbers", "[report]") {
  CHECK(csv_cell("=1+1") == "'=1+1");
  CHECK(csv_cell("+49 30") == "'+49 30");
  CHECK(csv_cell("-5.5") == "-5.5");
  CHECK(csv_cell("+3") == "+3");
  CHECK(csv_cell("-") == "-");
  CHECK(csv_cell("-1 %") == "-1 %");
  CHECK(csv_cell("-1 %%") == "'-1 %%");
  CHECK(csv_cell("- %") == "- %");
  CHECK(csv_cell("-cmd|' /C calc'!A0") == "'-cmd|' /C calc'!A0");
  CHECK(csv_cell("@SUM(A1)") == "'@SUM(A1)");
  CHECK(csv_cell("  =1+1") == "'  =1+1");
  CHECK(csv_cell("\t=1") == "\"'\t=1\"");
  CHECK(csv_cell("=HYPERLINK(\"a\",\"b\")") == "\"'=HYPERLINK(\"\"a\"\",\"\"b\"\")\"");
  CHECK(csv_cell(std::string("a\0b\xFF", 4)) == "a" + replaced + "b" + replaced);
}

TEST_CASE("file names: plain letters alone, none twice, none reserved", "[report]") {
  CHECK(file_names({"T1", "T2"}) == std::vector<std::string>{"T1", "T2"});
  CHECK(file_names({"../../etc", "a/b", "a\\b", ""}) == std::vector<std::string>{"______etc", "a_b", "a_b_2", "_"});
  CHECK(file_names({"t1", "T1", "T1_2"}) == std::vector<std::string>{"t1", "T1_2", "T1_2_2"});
  CHECK(file_names({"con", "NUL", "COM1", "index"}) == std::vector<std::string>{"_con", "_NUL", "_COM1", "_index"});
  CHECK(file_names({std::string(5000, 'x')}).front().size() == 60);
  CHECK(file_names({"gr\xC3\xBCn"}) == std::vector<std::string>{"gr__n"});
}
