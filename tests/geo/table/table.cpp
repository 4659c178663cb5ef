// Table files of every kind as grids of text, and real count sheets where they are at hand.
#include "geo/in/table.hpp"

#include <cpl_string.h>
#include <gdal_priv.h>
#include <ogrsf_frmts.h>
#include <rapidcheck.h>

#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>

#include "project/count_layouts.hpp"

using namespace entrain;
using namespace entrain::geo;
namespace fs = std::filesystem;

namespace {

using Rows = std::vector<std::vector<std::string>>;

std::string text_of(const Diagnostics& diagnostics) {
  std::string text;
  for (const Diagnostic& d : diagnostics) text += to_text(d) + "\n";
  return text;
}
template <class T>
std::string problems_of(const Result<T>& result) {
  return result ? std::string("none") : text_of(result.error());
}

Rows csv(const std::string& bytes) {
  const auto read = read_csv(bytes, "t.csv");
  REQUIRE(problems_of(read) == "none");
  return read->rows;
}

// A folder that is gone afterwards.
struct Folder {
  fs::path path = fs::temp_directory_path() / ("entrain_table_" + std::to_string(reinterpret_cast<std::uintptr_t>(this)));
  Folder() { fs::create_directories(path); }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  ~Folder() {
    std::error_code ignored;
    fs::remove_all(path, ignored);
  }
  std::string file(const std::string& name, const std::string& bytes) const {
    std::ofstream(path / name, std::ios::binary) << bytes;
    return (path / name).string();
  }
};

// Writes sheets of text cells with GDAL.
std::string write_sheets(const Folder& folder, const char* driver, const std::string& name, const std::vector<std::pair<std::string, Rows>>& sheets) {
  GDALAllRegister();
  const std::string path = (folder.path / name).string();
  GDALDatasetUniquePtr data(GetGDALDriverManager()->GetDriverByName(driver)->Create(path.c_str(), 0, 0, 0, GDT_Unknown, nullptr));
  REQUIRE(data);
  for (const auto& [sheet, rows] : sheets) {
    OGRLayer* layer = data->CreateLayer(sheet.c_str(), nullptr, wkbNone, nullptr);
    REQUIRE(layer != nullptr);
    for (const std::string& heading : rows[0]) {
      OGRFieldDefn field(heading.c_str(), OFTString);
      layer->CreateField(&field);
    }
    for (std::size_t r = 1; r < rows.size(); ++r) {
      OGRFeature feature(layer->GetLayerDefn());
      for (std::size_t c = 0; c < rows[r].size(); ++c)
        if (!rows[r][c].empty()) feature.SetField(static_cast<int>(c), rows[r][c].c_str());
      REQUIRE(layer->CreateFeature(&feature) == OGRERR_NONE);
    }
  }
  return path;
}

const Rows& signals() {
  static const Rows rows = {{"signal", "name", "offset_s"}, {"T1", "Caf\xC3\xA9 Street", "0012"}, {"T2", "", "7"}};
  return rows;
}

std::string counts(const std::string& name) {
  const fs::path path = fs::path(ENTRAIN_SHARED_DATA) / "counts" / name;
  return fs::exists(path) ? path.string() : std::string();
}

}  // namespace

TEST_CASE("CSV: quotes, ragged rows, line ends, marks, separators") {
  CHECK(csv("a,b\n1,2\n") == Rows{{"a", "b"}, {"1", "2"}});
  CHECK(csv("\xEF\xBB\xBF" "a,b\r\n1,2\r\n") == Rows{{"a", "b"}, {"1", "2"}});
  CHECK(csv("a,b\r1,2") == Rows{{"a", "b"}, {"1", "2"}});
  CHECK(csv("Title\n\na,b,c,\n1,\"x, \"\"y\"\"\nz\",3\n4\n") == Rows{{"Title"}, {""}, {"a", "b", "c", ""}, {"1", "x, \"y\"\nz", "3"}, {"4"}});
  CHECK(csv("a;b\n1,5;2\n") == Rows{{"a", "b"}, {"1,5", "2"}});
  CHECK(csv("a\tb\n1\t2\n") == Rows{{"a", "b"}, {"1", "2"}});
  CHECK(csv("t\n=\"0015\",x\n") == Rows{{"t"}, {"=\"0015\"", "x"}});
}

TEST_CASE("CSV: what can't be read is said with its line") {
  CHECK(problems_of(read_csv("", "t.csv")) == "error: t.csv: an empty file; expected a table with a row of column names. Fill the table or leave it out of the project\n");
  CHECK(problems_of(read_csv(std::string("\xFF\xFE" "a\0", 4), "t.csv")) == "error: t.csv: text in UTF-16; expected text in UTF-8. Save the table as CSV in UTF-8\n");
  CHECK(problems_of(read_csv(std::string("a,b\n\0,1", 7), "t.csv")) == "error: t.csv: bytes that are no text; expected a table as text. Check that this is a CSV file, or give it its right ending\n");
  CHECK(problems_of(read_csv("a,b\nCaf\xE9,1\n", "t.csv")) == "error: t.csv line 2: bytes that are no UTF-8; expected text in UTF-8. Save the table as CSV in UTF-8\n");
  CHECK(problems_of(read_csv("a,b\n1,2\n3,\"4\n5,6\n", "t.csv")) ==
        "error: t.csv line 3: a quotation mark that is never closed; expected a second one at the end of the cell. Close or remove it\n");
  CHECK(problems_of(read_csv(std::string(6'000'000, ','), "t.csv")) == "error: t.csv: more than 5 million cells; expected a table of a reasonable size. Split the table or leave out what is not needed\n");
}

TEST_CASE("CSV: written cells come back, whatever they hold") {
  CHECK(rc::check([] {
    static const std::string letters = "ab1 ,;\"\n\r\t=*";
    Rows rows;
    for (int r = *rc::gen::inRange(1, 5); r > 0; --r) {
      rows.emplace_back();
      for (int c = 3; c > 0; --c) {
        std::string cell;
        for (int i = *rc::gen::inRange(0, 6); i > 0; --i) cell += letters[static_cast<std::size_t>(*rc::gen::inRange(0, static_cast<int>(letters.size())))];
        rows.back().push_back(cell);
      }
    }
    std::string bytes = "a,b,c\n";
    for (const auto& row : rows)
      for (std::size_t c = 0; c < row.size(); ++c) {
        bytes += '"';
        for (const char letter : row[c]) bytes += letter == '"' ? "\"\"" : std::string(1, letter);
        bytes += c + 1 < row.size() ? "\"," : "\"\n";
      }
    const auto read = read_csv(bytes, "t.csv");
    RC_ASSERT(read.has_value());
    RC_ASSERT(Rows(read->rows.begin() + 1, read->rows.end()) == rows);
  }));
}

TEST_CASE("CSV: any bytes give a grid or an error") {
  CHECK(rc::check([] {
    static const std::string letters = std::string("a,\";\n\r\t\xFF\xEF\xBB\xBF\xC3\xA9", 14) + std::string(1, '\0');
    std::string bytes;
    for (int i = *rc::gen::inRange(0, 40); i > 0; --i) bytes += letters[static_cast<std::size_t>(*rc::gen::inRange(0, static_cast<int>(letters.size())))];
    const auto read = read_csv(bytes, "t.csv");
    if (!read) RC_ASSERT(read.error().size() == 1u);
  }));
}

TEST_CASE("spreadsheets and databases give the same grid as text") {
  const Folder folder;
  for (const auto& [driver, name] : {std::pair{"XLSX", "t.xlsx"}, std::pair{"ODS", "t.ods"}, std::pair{"GPKG", "t.gpkg"}}) {
    INFO(driver);
    if (GetGDALDriverManager()->GetDriverCount() == 0) GDALAllRegister();
    if (GetGDALDriverManager()->GetDriverByName(driver) == nullptr) continue;
    const std::string path = write_sheets(folder, driver, name, {{"first", {{"x"}, {"1"}}}, {"second", signals()}});
    const auto by_name = read_table(path, "second"), by_mark = read_table(path + "#second"), first = read_table(path);
    REQUIRE(problems_of(by_name) == "none");
    CHECK(by_name->rows == signals());
    REQUIRE(problems_of(by_mark) == "none");
    CHECK(by_mark->rows == signals());
    REQUIRE(problems_of(first) == "none");
    CHECK(first->rows == Rows{{"x"}, {"1"}});
    CHECK(problems_of(read_table(path, "third")) == "error: " + path + ": no sheet third; expected one of: first, second. Name a sheet that is there\n");
  }
}

TEST_CASE("files that are no table are one clear error") {
  const Folder folder;
  const std::string missing = (folder.path / "none.csv").string();
  CHECK(problems_of(read_table(missing)) == "error: " + missing + ": no such file; expected a table. Check the path in [tables]; it starts at the project file's folder\n");
  CHECK(problems_of(read_table(folder.path.string())) == "error: " + folder.path.string() + ": a folder; expected a table file. Name the file in [tables]\n");
  const std::string empty = folder.file("e.xlsx", "");
  CHECK(problems_of(read_table(empty)) == "error: " + empty + ": an empty file; expected a table with a row of column names. Fill the table or leave it out of the project\n");
  for (const char* name : {"t.xlsx", "t.ods", "t.gpkg", "t.dat"}) CHECK_FALSE(read_table(folder.file(name, "this is no table\n")).has_value());
  const std::string whole = write_sheets(folder, "XLSX", "whole.xlsx", {{"s", signals()}});
  std::ifstream in(whole, std::ios::binary);
  const std::string bytes((std::istreambuf_iterator<char>(in)), std::istreambuf_iterator<char>());
  CHECK_FALSE(read_table(folder.file("cut.xlsx", bytes.substr(0, bytes.size() / 2))).has_value());
}

TEST_CASE("the example's spreadsheet keeps its row numbers") {
  const auto read = read_table(ENTRAIN_SOURCE_DIR "/examples/nerrow/counts.xlsx");
  REQUIRE(problems_of(read) == "none");
  const auto rows = project::read_movement_rows(*read);
  REQUIRE(problems_of(rows) == "none");
  CHECK(rows->value.size() > 10);
}

TEST_CASE("real count sheets are read, or refused with the reason") {
  if (counts("toronto_tmc_raw_15min_sample.csv").empty()) return;
  const auto raw = read_table(counts("toronto_tmc_raw_15min_sample.csv"));
  REQUIRE(problems_of(raw) == "none");
  const auto counted = project::read_movements(*raw, {{"signal", "px"}}, {});
  REQUIRE(problems_of(counted) == "none");
  CHECK(counted->value.size() == 12);
  double eastbound = 0;
  for (const auto& row : counted->value) {
    CHECK(row.signal == "2627");
    if (row.approach == "EB" && row.turn == "T") eastbound = *row.volume_vph;
  }
  CHECK(eastbound > 200);
  // Totals a day and no movements: nothing to plan from, and it says so.
  const auto summary = read_table(counts("toronto_tmc_summary_downtown.csv"));
  REQUIRE(problems_of(summary) == "none");
  CHECK_FALSE(project::read_movements(*summary, {}, {}).has_value());
  const auto road_count = read_table(counts("boston_atr_24h_2017-01-11.xlsx"));
  REQUIRE(problems_of(road_count) == "none");
  CHECK_FALSE(project::read_movements(*road_count, {}, {}).has_value());
}
