// Any table file as a plain grid of text: CSV, XLSX, ODS, GeoPackage and whatever else GDAL's vector drivers open.
#pragma once

#include <string>

#include "base/result.hpp"
#include "project/tables.hpp"

namespace entrain::geo {

// Reads the named sheet or layer (also as "counts.xlsx#AM"), else the only or first one. CSV is read as text (quotes, ragged rows, semicolons or tabs where the first
// lines show them, UTF-8 with or without a mark). Errors: missing or empty file, no UTF-8, an open quote, no driver, more than 5 million cells.
[[nodiscard]] Result<project::TextGrid> read_table(const std::string& path, const std::string& sheet = "");

// The CSV part alone, for text in memory.
[[nodiscard]] Result<project::TextGrid> read_csv(const std::string& bytes, const std::string& source);

}  // namespace entrain::geo
