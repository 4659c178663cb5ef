#include <fmt/format.h>
#include <gdal_priv.h>
#include <ogrsf_frmts.h>

#include <algorithm>
#include <cctype>
#include <cmath>
#include <map>
#include <set>

#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "geo/in/gdal_quiet.hpp"
#include "geo/in/roads.hpp"

namespace entrain::geo {
namespace {

using network::OneWay;
using network::RoadSource;

std::string lower(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

network::RoadClass class_of(const std::string& word) {
  static const std::map<std::string, network::RoadClass> classes = {
      {"motorway", network::RoadClass::motorway}, {"freeway", network::RoadClass::motorway},   {"trunk", network::RoadClass::trunk},         {"primary", network::RoadClass::primary},
      {"arterial", network::RoadClass::primary},  {"major", network::RoadClass::primary},      {"secondary", network::RoadClass::secondary}, {"collector", network::RoadClass::tertiary},
      {"tertiary", network::RoadClass::tertiary}, {"minor", network::RoadClass::tertiary},     {"residential", network::RoadClass::residential},
      {"local", network::RoadClass::residential}, {"service", network::RoadClass::service},    {"ramp", network::RoadClass::ramp}};
  const auto found = classes.find(lower(word));
  return found == classes.end() ? network::RoadClass::tertiary : found->second;
}

// Gives line ends ids, the same to ends within the tolerance.
class Snapper {
 public:
  Snapper(double tolerance_m, RoadSource& source) : m_tolerance_m(tolerance_m), m_source(source) {}

  std::int64_t end(double lon, double lat) {
    const double north = 111320.0, east = north * std::max(0.01, std::cos(lat * 0.017453292519943295));
    const double cell = std::max(m_tolerance_m, 0.01);
    const auto x = static_cast<std::int64_t>(std::floor(lon * east / cell)), y = static_cast<std::int64_t>(std::floor(lat * north / cell));
    for (std::int64_t dx = -1; dx <= 1; ++dx)
      for (std::int64_t dy = -1; dy <= 1; ++dy) {
        const auto found = m_cells.find({x + dx, y + dy});
        if (found == m_cells.end()) continue;
        for (const std::int64_t id : found->second) {
          const auto& n = m_source.nodes[static_cast<std::size_t>(id - 1)];
          if (std::hypot((n.lon - lon) * east, (n.lat - lat) * north) <= m_tolerance_m + 1e-9) return id;
        }
      }
    const std::int64_t id = inner(lon, lat);
    m_cells[{x, y}].push_back(id);
    return id;
  }
  std::int64_t inner(double lon, double lat) {
    network::RoadNode node;
    node.id = static_cast<std::int64_t>(m_source.nodes.size()) + 1;
    node.lon = lon;
    node.lat = lat;
    m_source.nodes.push_back(node);
    return node.id;
  }

 private:
  double m_tolerance_m;
  RoadSource& m_source;
  std::map<std::pair<std::int64_t, std::int64_t>, std::vector<std::int64_t>> m_cells;
};

class LayerReader {
 public:
  LayerReader(const project::Roads& roads, const std::string& path, project::Units units) : m_roads(roads), m_path(path), m_units(units), m_snapper(roads.snap_tolerance_m, m_source) {
    m_source.file = path;
    m_source.ways_share_node_ids = false;
  }

  Result<Noted<RoadSource>> read() {
    const GdalQuiet quiet;
    const GDALDatasetUniquePtr data(GDALDataset::Open(m_path.c_str(), GDAL_OF_VECTOR | GDAL_OF_READONLY));
    if (!data) return failure(error(m_path, quiet.errors().empty() ? "no format that is known" : "can't be read: " + printable(quiet.errors(), 300), "a vector file that GDAL opens, or OpenStreetMap data", "Check the file and its ending"));
    OGRLayer* layer = choose_layer(*data);
    if (layer == nullptr || !map_columns(*layer)) return failure(std::move(m_problems));
    const auto to_degrees = transformation(*layer);
    if (!m_problems.empty()) return failure(std::move(m_problems));
    layer->ResetReading();
    for (const auto& feature : *layer) add_feature(*feature, to_degrees.get());
    if (!quiet.errors().empty()) return failure(error(m_path, "reading stopped: " + printable(quiet.errors(), 300), "a whole layer", "Write the layer again"));
    report_dangles();
    if (m_source.ways.empty()) return failure(error(m_path, "no lines", "road centrelines", "Check the layer"));
    return Noted<RoadSource>{std::move(m_source), std::move(m_notes)};
  }

 private:
  OGRLayer* choose_layer(GDALDataset& data) {
    std::string names;
    for (int i = 0; i < data.GetLayerCount(); ++i) {
      OGRLayer* layer = data.GetLayer(i);
      names += (names.empty() ? "" : ", ") + std::string(layer->GetName());
      if (m_roads.layer.empty() ? wkbFlatten(layer->GetGeomType()) == wkbLineString || wkbFlatten(layer->GetGeomType()) == wkbMultiLineString || data.GetLayerCount() == 1 : m_roads.layer == layer->GetName())
        return layer;
    }
    m_problems.push_back(error(m_path, m_roads.layer.empty() ? "no line layer" : "no layer " + printable(m_roads.layer), "one of: " + printable(names), "Name the layer under [roads] as layer = \"...\""));
    return nullptr;
  }

  bool map_columns(OGRLayer& layer) {
    constexpr const char* ours[] = {"name", "speed_limit", "lanes", "oneway", "class", "width_m", "lanes_forward", "lanes_backward", "level"};
    const OGRFeatureDefn* definition = layer.GetLayerDefn();
    std::string fields;
    for (int f = 0; f < definition->GetFieldCount(); ++f) fields += (f > 0 ? ", " : "") + std::string(definition->GetFieldDefn(f)->GetNameRef());
    for (const auto& [our, theirs] : m_roads.columns) {
      if (std::find(std::begin(ours), std::end(ours), our) == std::end(ours))
        m_problems.push_back(error("[roads] columns", "unknown word " + printable(our), "one of name, speed_limit, lanes, oneway, class, width_m, lanes_forward, lanes_backward, level", "Correct the word"));
      else if (definition->GetFieldIndex(theirs.c_str()) < 0)
        m_problems.push_back(error(m_path + " layer " + layer.GetName(), "no column " + printable(theirs), "one of " + printable(fields, 300), "Correct it under [roads] columns"));
    }
    for (const char* our : ours) {
      const auto mapped = m_roads.columns.find(our);
      m_field[our] = definition->GetFieldIndex(mapped == m_roads.columns.end() ? our : mapped->second.c_str());
    }
    return m_problems.empty();
  }

  std::unique_ptr<OGRCoordinateTransformation> transformation(OGRLayer& layer) {
    const OGRSpatialReference* from = layer.GetSpatialRef();
    OGRSpatialReference to;
    to.SetWellKnownGeogCS("WGS84");
    to.SetAxisMappingStrategy(OAMS_TRADITIONAL_GIS_ORDER);
    if (from == nullptr) {
      m_notes.push_back(warning(m_path, "no coordinate system stated: degrees in WGS 84 assumed"));
      return nullptr;
    }
    OGRSpatialReference source(*from);
    source.SetAxisMappingStrategy(OAMS_TRADITIONAL_GIS_ORDER);
    std::unique_ptr<OGRCoordinateTransformation> made(OGRCreateCoordinateTransformation(&source, &to));
    if (!made) m_problems.push_back(error(m_path, "a coordinate system that can't be turned into degrees", "one that PROJ knows", "Write the layer in another coordinate system"));
    return made;
  }

  std::string text(const OGRFeature& feature, const char* our) const {
    const int field = m_field.at(our);
    return field >= 0 && feature.IsFieldSetAndNotNull(field) ? feature.GetFieldAsString(field) : "";
  }
  int count(const OGRFeature& feature, const char* our) {
    const std::string value = text(feature, our);
    if (value.empty()) return 0;
    const auto number = parse_number(value);
    if (number && *number >= 1 && *number <= 16) return static_cast<int>(*number);
    add_finding("odd_lanes", fmt::format("feature {}: {} lanes: not used", feature.GetFID(), printable(value)));
    return 0;
  }
  double speed(const OGRFeature& feature) {
    const std::string value = text(feature, "speed_limit");
    if (value.empty()) return 0;
    const bool miles = m_roads.speed_unit.empty() ? m_units == project::Units::us : m_roads.speed_unit == "mph";
    const auto number = parse_number(value);
    const double mps = number ? *number * (miles ? mps_per_mph : mps_per_kph) : parse_speed_mps(value);
    if (mps > 0.5 && mps < 70) return mps;
    add_finding("odd_speed", fmt::format("feature {}: speed limit {}: not used", feature.GetFID(), printable(value)));
    return 0;
  }
  static OneWay oneway(const std::string& value) {
    const std::string word = lower(value);
    if (word == "yes" || word == "true" || word == "1" || word == "f" || word == "ft" || word == "forward") return OneWay::forward;
    if (word == "-1" || word == "tf" || word == "t" || word == "backward" || word == "reverse") return OneWay::backward;
    return OneWay::no;
  }

  void add_feature(const OGRFeature& feature, OGRCoordinateTransformation* to_degrees) {
    const OGRGeometry* geometry = feature.GetGeometryRef();
    if (geometry == nullptr || geometry->IsEmpty()) return add_finding("no_geometry", fmt::format("feature {} has no geometry", feature.GetFID()));
    std::unique_ptr<OGRGeometry> copy(geometry->clone());
    copy->flattenTo2D();
    if (to_degrees != nullptr && copy->transform(to_degrees) != OGRERR_NONE) return add_finding("no_place", fmt::format("feature {} can't be placed on the earth", feature.GetFID()));
    if (wkbFlatten(copy->getGeometryType()) == wkbLineString) return add_line(feature, *copy->toLineString());
    if (wkbFlatten(copy->getGeometryType()) == wkbMultiLineString) {
      for (const OGRLineString* line : copy->toMultiLineString()) add_line(feature, *line);
      return;
    }
    add_finding("not_a_line", fmt::format("feature {} is no line", feature.GetFID()));
  }

  void add_line(const OGRFeature& feature, const OGRLineString& line) {
    const int points = line.getNumPoints();
    for (int i = 0; i < points; ++i)
      if (!(std::fabs(line.getX(i)) <= 180) || !(std::fabs(line.getY(i)) <= 90)) return add_finding("no_place", fmt::format("feature {} lies outside the earth", feature.GetFID()));
    if (points < 2 || points > 1'000'000) return add_finding("odd_line", fmt::format("feature {} has {} points", feature.GetFID(), points));
    network::RoadWay way;
    way.id = static_cast<std::int64_t>(m_source.ways.size()) + 1;
    way.road_class = class_of(text(feature, "class"));
    way.oneway = oneway(text(feature, "oneway"));
    way.name = printable(text(feature, "name"), 200);
    way.speed_limit_mps = speed(feature);
    way.lanes = count(feature, "lanes");
    way.lanes_forward = count(feature, "lanes_forward");
    way.lanes_backward = count(feature, "lanes_backward");
    if (const auto width = parse_number(text(feature, "width_m")); width && *width > 0 && *width < 200) way.width_m = *width;
    way.nodes.push_back(m_snapper.end(line.getX(0), line.getY(0)));
    for (int i = 1; i + 1 < points; ++i) way.nodes.push_back(m_snapper.inner(line.getX(i), line.getY(i)));
    way.nodes.push_back(m_snapper.end(line.getX(points - 1), line.getY(points - 1)));
    if (way.nodes.front() == way.nodes.back() && points == 2) return add_finding("zero_length", fmt::format("feature {} is shorter than the snap tolerance", feature.GetFID()));
    if (!m_seen.insert({std::min(way.nodes.front(), way.nodes.back()), std::max(way.nodes.front(), way.nodes.back()), points}).second)
      add_finding("duplicate_line", fmt::format("feature {} joins the same ends as another with as many points: a duplicate?", feature.GetFID()));
    ++m_ends[way.nodes.front()];
    ++m_ends[way.nodes.back()];
    m_source.ways.push_back(std::move(way));
  }

  void report_dangles() {
    const auto dangles = std::count_if(m_ends.begin(), m_ends.end(), [](const auto& end) { return end.second == 1; });
    if (dangles > 0) m_notes.push_back(note(m_path, fmt::format("{} line ends meet no other line within {} m", dangles, number_text(m_roads.snap_tolerance_m))));
    if (m_roads.split_at_crossings) m_notes.push_back(warning(m_path, "split_at_crossings is not supported yet: lines are joined at their ends only"));
  }

  void add_finding(const char* kind, std::string sentence) { m_source.findings.push_back({kind, std::move(sentence), 0, 0, false}); }

  const project::Roads& m_roads;
  const std::string& m_path;
  project::Units m_units;
  RoadSource m_source;
  Snapper m_snapper;
  std::map<std::string, int> m_field;
  std::map<std::int64_t, int> m_ends;
  std::set<std::tuple<std::int64_t, std::int64_t, int>> m_seen;
  Diagnostics m_problems, m_notes;
};

}  // namespace

Result<Noted<RoadSource>> read_layer_roads(const project::Roads& roads, const std::string& path, project::Units units) { return LayerReader(roads, path, units).read(); }

}  // namespace entrain::geo
