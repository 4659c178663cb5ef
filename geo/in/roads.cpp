#include "geo/in/roads.hpp"

#include <algorithm>
#include <filesystem>

namespace entrain::geo {
namespace {

namespace fs = std::filesystem;

bool ends_with(const std::string& text, const std::string& end) { return text.size() >= end.size() && text.compare(text.size() - end.size(), end.size(), end) == 0; }

bool is_osm(const std::string& path) {
  constexpr const char* endings[] = {".osm", ".osm.gz", ".osm.bz2", ".osm.pbf", ".pbf"};
  return std::any_of(std::begin(endings), std::end(endings), [&](const char* end) { return ends_with(path, end); });
}

}  // namespace

Result<Noted<network::RoadSource>> read_roads(const project::Roads& roads, const std::string& folder, project::Units units) {
  const fs::path given(roads.source);
  const std::string path = given.is_absolute() ? roads.source : (fs::path(folder) / given).lexically_normal().string();
  std::error_code code;
  if (!fs::exists(path, code)) return failure(error(path, "no such file", "the roads of the project", "Check source under [roads]; it starts at the project file's folder"));
  if (fs::is_directory(path, code) && !ends_with(path, ".gdb")) return failure(error(path, "a folder", "a file with roads", "Name the file under [roads]"));
  if (fs::is_regular_file(path, code) && fs::file_size(path, code) == 0) return failure(error(path, "an empty file", "roads", "Fetch or export the extract again"));
  return is_osm(path) ? read_osm_roads(path) : read_layer_roads(roads, path, units);
}

}  // namespace entrain::geo
