#include "geo/in/table.hpp"

#include <fmt/format.h>
#include <gdal_priv.h>
#include <ogrsf_frmts.h>

#include <algorithm>
#include <cctype>
#include <filesystem>
#include <fstream>
#include <iterator>

#include "geo/in/gdal_quiet.hpp"

namespace entrain::geo {
namespace {

namespace fs = std::filesystem;

std::string ending(const std::string& path) {
  std::string text = fs::path(path).extension().string();
  std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

Diagnostics missing_or_empty(const std::string& path) {
  std::error_code code;
  if (!fs::exists(path, code)) return {error(path, "no such file", "a table", "Check the path in [tables]; it starts at the project file's folder")};
  if (fs::is_directory(path, code)) return {error(path, "a folder", "a table file", "Name the file in [tables]")};
  if (fs::file_size(path, code) == 0) return {error(path, "an empty file", "a table with a row of column names", "Fill the table or leave it out of the project")};
  if (fs::file_size(path, code) > (std::uintmax_t{512} << 20)) return {error(path, "more than 512 MB", "a table of a reasonable size", "Leave out what is not needed")};
  return {};
}

std::string sheets_of(GDALDataset& data) {
  std::string names;
  for (int i = 0; i < data.GetLayerCount(); ++i) names += (i > 0 ? ", " : "") + std::string(data.GetLayer(i)->GetName());
  return names;
}

// Layers with real field names (GeoPackage) put them in the first row; spreadsheets are read without headers.
void read_layer(OGRLayer& layer, bool with_names, project::TextGrid& grid) {
  const OGRFeatureDefn* definition = layer.GetLayerDefn();
  const int fields = definition->GetFieldCount();
  if (with_names) {
    auto& row = grid.rows.emplace_back();
    for (int f = 0; f < fields; ++f) row.emplace_back(definition->GetFieldDefn(f)->GetNameRef());
  }
  layer.ResetReading();
  for (const auto& feature : layer) {
    auto& row = grid.rows.emplace_back();
    for (int f = 0; f < fields; ++f) row.emplace_back(feature->IsFieldSetAndNotNull(f) ? feature->GetFieldAsString(f) : "");
  }
}

Result<project::TextGrid> read_by_gdal(const std::string& path, const std::string& sheet) {
  const GdalQuiet quiet;
  const CPLStringList no_options;
  CPLSetThreadLocalConfigOption("OGR_XLSX_HEADERS", "DISABLE");
  CPLSetThreadLocalConfigOption("OGR_XLSX_FIELD_TYPES", "STRING");
  CPLSetThreadLocalConfigOption("OGR_ODS_HEADERS", "DISABLE");
  CPLSetThreadLocalConfigOption("OGR_ODS_FIELD_TYPES", "STRING");
  const GDALDatasetUniquePtr data(GDALDataset::Open(path.c_str(), GDAL_OF_VECTOR | GDAL_OF_READONLY));
  if (!data) return failure(error(path, quiet.errors().empty() ? "no format that is known" : "can't be read: " + printable(quiet.errors(), 300), "a table that GDAL opens (CSV, XLSX, ODS, GeoPackage ...)", "Save it again in one of these formats"));
  OGRLayer* layer = sheet.empty() ? data->GetLayer(0) : data->GetLayerByName(sheet.c_str());
  if (layer == nullptr) return failure(error(path, sheet.empty() ? "no sheet" : "no sheet " + printable(sheet), "one of: " + printable(sheets_of(*data)), "Name a sheet that is there"));
  project::TextGrid grid{path, {}};
  const std::string end = ending(path);
  read_layer(*layer, end != ".xlsx" && end != ".ods" && end != ".xls", grid);
  if (!quiet.errors().empty()) return failure(error(path, "stopped in the middle: " + printable(quiet.errors(), 300), "a whole table", "Save it again"));
  return grid;
}

}  // namespace

Result<project::TextGrid> read_table(const std::string& path, const std::string& sheet) {
  std::error_code code;
  if (const auto mark = path.rfind('#'); sheet.empty() && mark != std::string::npos && mark + 1 < path.size() && !fs::exists(path, code))
    return read_table(path.substr(0, mark), path.substr(mark + 1));
  if (Diagnostics problems = missing_or_empty(path); !problems.empty()) return failure(std::move(problems));
  const std::string end = ending(path);
  if (end != ".csv" && end != ".tsv" && end != ".txt") return read_by_gdal(path, sheet);
  std::ifstream in(path, std::ios::binary);
  const std::string bytes((std::istreambuf_iterator<char>(in)), std::istreambuf_iterator<char>());
  return read_csv(bytes, path);
}

}  // namespace entrain::geo
