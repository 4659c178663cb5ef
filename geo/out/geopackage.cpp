#include "geo/out/geopackage.hpp"

#include <cpl_conv.h>
#include <cpl_error.h>
#include <fmt/format.h>
#include <gdal_priv.h>
#include <ogrsf_frmts.h>

#include <chrono>
#include <cmath>
#include <filesystem>
#include <functional>

#include "base/number_text.hpp"
#include "geo/out/layer_styles.hpp"

namespace entrain::geo {
namespace {

using network::Network;
using network::Point;

struct Field {
  const char* name;
  OGRFieldType type;
};

struct Row {
  std::vector<std::string> texts;  // by field; numbers as text, converted by GDAL; empty: null
  std::vector<Point> shape;        // one point, or a line
};

struct Layer {
  const char* name;
  OGRwkbGeometryType geometry;
  std::vector<Field> fields;
  std::vector<Row> rows;
};

std::string number(double value, int decimals) { return number_text(value, decimals); }
std::string whole(long long value) { return fmt::format("{}", value); }

Layer junctions_of(const Network& network) {
  Layer layer{"junctions", wkbPoint, {{"node_id", OFTInteger64}, {"signal", OFTString}}, {}};
  for (std::size_t v = 0; v < boost::num_vertices(network.graph); ++v) {
    const auto& j = network.graph[v];
    layer.rows.push_back({{whole(j.node_id), j.signal >= 0 ? network.signals[static_cast<std::size_t>(j.signal)].id : ""}, {j.place}});
  }
  return layer;
}

Layer roads_of(const Network& network) {
  Layer layer{"roads", wkbLineString,
              {{"way_id", OFTInteger64}, {"name", OFTString}, {"length_m", OFTReal}, {"speed_limit_mps", OFTReal}, {"speed_is_default", OFTInteger}, {"lanes", OFTInteger},
               {"lanes_are_default", OFTInteger}, {"grade_percent", OFTReal}}, {}};
  for (auto [e, end] = boost::edges(network.graph); e != end; ++e) {
    const auto& r = network.graph[*e];
    layer.rows.push_back({{whole(r.way_id), r.name, number(r.length_m, 3), number(r.speed_limit_mps, 3), whole(r.speed_is_default), whole(r.lanes), whole(r.lanes_are_default), number(100 * r.grade, 2)}, r.shape});
  }
  return layer;
}

Layer signals_of(const Network& network) {
  Layer layer{"signals", wkbPoint, {{"signal", OFTString}, {"name", OFTString}, {"legs", OFTInteger}, {"movements", OFTInteger}, {"traffic_side", OFTString}}, {}};
  for (const auto& s : network.signals)
    layer.rows.push_back({{s.id, s.name, whole(static_cast<long long>(s.legs.size())), whole(static_cast<long long>(s.movements.size())), s.traffic_side == TrafficSide::right ? "right" : "left"}, {s.place}});
  return layer;
}

// A place `metres` out from the signal along a bearing, for legs that need a place of their own.
Point out_along(Point from, double bearing_deg, double metres) {
  const double radians = bearing_deg * 0.017453292519943295;
  return {from.lon + metres * std::sin(radians) / (111320.0 * std::cos(from.lat * 0.017453292519943295)), from.lat + metres * std::cos(radians) / 111320.0};
}

Layer approaches_of(const Network& network) {
  Layer layer{"approaches", wkbPoint,
              {{"signal", OFTString}, {"leg", OFTString}, {"street", OFTString}, {"bearing_deg", OFTReal}, {"lanes_in", OFTInteger}, {"lanes_out", OFTInteger}, {"speed_limit_mps", OFTReal},
               {"speed_is_default", OFTInteger}, {"grade_in_percent", OFTReal}, {"width_m", OFTReal}, {"neighbour", OFTString}}, {}};
  for (const auto& s : network.signals)
    for (const auto& l : s.legs)
      layer.rows.push_back({{s.id, l.id, l.street, number(l.bearing_deg, 1), whole(l.lanes_in), whole(l.lanes_out), number(l.speed_limit_mps, 3), whole(l.speed_is_default), number(100 * l.grade_in, 2),
                             number(l.width_m, 2), l.neighbour}, {out_along(s.place, l.bearing_deg, 30)}});
  return layer;
}

Layer movements_of(const Network& network) {
  Layer layer{"movements", wkbLineString, {{"signal", OFTString}, {"movement", OFTString}, {"from_leg", OFTString}, {"to_leg", OFTString}, {"turn", OFTString}, {"turn_angle_deg", OFTReal}}, {}};
  constexpr const char* turns[] = {"L", "T", "R", "U"};
  for (const auto& s : network.signals)
    for (const auto& m : s.movements) {
      const auto &a = s.legs[static_cast<std::size_t>(m.from_leg)], &b = s.legs[static_cast<std::size_t>(m.to_leg)];
      layer.rows.push_back({{s.id, m.id, a.id, b.id, turns[static_cast<int>(m.turn)], number(m.turn_angle_deg, 1)}, {out_along(s.place, a.bearing_deg, 20), s.place, out_along(s.place, b.bearing_deg, 20)}});
    }
  return layer;
}

Layer crossings_of(const Network& network) {
  Layer layer{"crossings", wkbPoint, {{"signal", OFTString}, {"crossing", OFTString}, {"leg", OFTString}, {"length_m", OFTReal}, {"length_is_default", OFTInteger}}, {}};
  for (const auto& s : network.signals)
    for (const auto& c : s.crossings) {
      const auto& leg = s.legs[static_cast<std::size_t>(c.leg)];
      layer.rows.push_back({{s.id, c.id, leg.id, number(c.length_m, 2), whole(c.length_is_default)}, {out_along(s.place, leg.bearing_deg, 12)}});
    }
  return layer;
}

Layer links_of(const Network& network) {
  Layer layer{"links", wkbLineString,
              {{"link", OFTString}, {"from_signal", OFTString}, {"to_signal", OFTString}, {"length_m", OFTReal}, {"travel_time_s", OFTReal}, {"travel_time_origin", OFTString}, {"travel_time_sd_s", OFTReal},
               {"grade_percent", OFTReal}, {"lanes", OFTInteger}}, {}};
  for (const auto& l : network.links) {
    const auto& t = network::travel_time(l, "");
    layer.rows.push_back({{l.id, network.signals[static_cast<std::size_t>(l.from_signal)].id, network.signals[static_cast<std::size_t>(l.to_signal)].id, number(l.length_m, 3), number(t.mean_s, 3), t.origin,
                           t.sd_s ? number(*t.sd_s, 3) : "", number(100 * l.grade, 2), whole(l.lanes)}, l.shape});
  }
  return layer;
}

Layer corridors_of(const Network& network) {
  Layer layer{"corridors", wkbLineString, {{"corridor", OFTString}, {"name", OFTString}, {"direction", OFTString}, {"label", OFTString}, {"signals", OFTString}, {"length_m", OFTReal}}, {}};
  for (const auto& c : network.corridors)
    for (const auto& d : c.directions) {
      Row row;
      std::string ids;
      double length = 0;
      for (const auto& stop : d.stops) {
        ids += (ids.empty() ? "" : " ") + network.signals[static_cast<std::size_t>(stop.signal)].id;
        length += stop.distance_m;
        for (const int l : stop.links) {
          const auto& shape = network.links[static_cast<std::size_t>(l)].shape;
          row.shape.insert(row.shape.end(), shape.begin(), shape.end());
        }
      }
      row.texts = {c.id, c.name, d.name, d.label, ids, number(length, 3)};
      layer.rows.push_back(std::move(row));
    }
  return layer;
}

Layer findings_of(const Network& network) {
  Layer layer{"findings", wkbPoint, {{"kind", OFTString}, {"sentence", OFTString}}, {}};
  for (const auto& f : network.findings) layer.rows.push_back({{f.kind, f.sentence}, f.has_place ? std::vector<Point>{{f.lon, f.lat}} : std::vector<Point>{}});
  return layer;
}

void set_geometry(OGRFeature& feature, const Layer& layer, const std::vector<Point>& shape) {
  if (shape.empty()) return;
  if (layer.geometry == wkbPoint) {
    OGRPoint point(shape[0].lon, shape[0].lat);
    feature.SetGeometry(&point);
    return;
  }
  if (shape.size() < 2) return;
  OGRLineString line;
  for (const Point& p : shape) line.addPoint(p.lon, p.lat);
  feature.SetGeometry(&line);
}

bool write_layer(GDALDataset& data, const Layer& layer, OGRSpatialReference* system) {
  OGRLayer* out = data.CreateLayer(layer.name, system, layer.geometry, nullptr);
  if (out == nullptr) return false;
  for (const Field& field : layer.fields) {
    OGRFieldDefn definition(field.name, field.type);
    if (out->CreateField(&definition) != OGRERR_NONE) return false;
  }
  for (const Row& row : layer.rows) {
    const std::unique_ptr<OGRFeature> feature(OGRFeature::CreateFeature(out->GetLayerDefn()));
    for (std::size_t f = 0; f < layer.fields.size(); ++f)
      if (!row.texts[f].empty()) feature->SetField(static_cast<int>(f), row.texts[f].c_str());
    set_geometry(*feature, layer, row.shape);
    if (out->CreateFeature(feature.get()) != OGRERR_NONE) return false;
  }
  return true;
}

bool write_styles(GDALDataset& data, const std::string& now) {
  OGRLayer* out = data.CreateLayer("layer_styles", nullptr, wkbNone, nullptr);
  if (out == nullptr) return false;
  for (const char* name : {"f_table_catalog", "f_table_schema", "f_table_name", "f_geometry_column", "styleName", "styleQML", "styleSLD", "description", "owner", "update_time"}) {
    OGRFieldDefn definition(name, OFTString);
    if (out->CreateField(&definition) != OGRERR_NONE) return false;
  }
  OGRFieldDefn use_default("useAsDefault", OFTInteger);
  if (out->CreateField(&use_default) != OGRERR_NONE) return false;
  for (const LayerStyle& style : layer_styles()) {
    const std::unique_ptr<OGRFeature> feature(OGRFeature::CreateFeature(out->GetLayerDefn()));
    feature->SetField("f_table_catalog", "");
    feature->SetField("f_table_schema", "");
    feature->SetField("f_table_name", style.layer);
    feature->SetField("f_geometry_column", "geom");
    feature->SetField("styleName", style.layer);
    feature->SetField("styleQML", "");
    feature->SetField("styleSLD", style.sld.c_str());
    feature->SetField("description", "");
    feature->SetField("owner", "");
    feature->SetField("update_time", now.c_str());
    feature->SetField("useAsDefault", 1);
    if (out->CreateFeature(feature.get()) != OGRERR_NONE) return false;
  }
  return true;
}

// Seconds since 1970 as a date, without asking any clock.
std::string date_text(std::int64_t epoch) {
  const std::chrono::sys_seconds when{std::chrono::seconds{epoch}};
  const auto day = std::chrono::floor<std::chrono::days>(when);
  const std::chrono::year_month_day date{day};
  const std::chrono::hh_mm_ss time{when - day};
  return fmt::format("{:04}-{:02}-{:02}T{:02}:{:02}:{:02}.000Z", static_cast<int>(date.year()), static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()), time.hours().count(), time.minutes().count(),
                     time.seconds().count());
}

bool write_all(const Network& network, const std::string& path, const std::string& now) {
  GDALDriver* driver = GetGDALDriverManager()->GetDriverByName("GPKG");
  if (driver == nullptr) return false;
  const GDALDatasetUniquePtr data(driver->Create(path.c_str(), 0, 0, 0, GDT_Unknown, nullptr));
  if (!data) return false;
  OGRSpatialReference system;
  system.SetWellKnownGeogCS("WGS84");
  system.SetAxisMappingStrategy(OAMS_TRADITIONAL_GIS_ORDER);
  data->StartTransaction();
  for (const auto& make : {junctions_of, roads_of, signals_of, approaches_of, movements_of, crossings_of, links_of, corridors_of, findings_of})
    if (!write_layer(*data, make(network), &system)) return false;
  return write_styles(*data, now) && data->CommitTransaction() == OGRERR_NONE;
}

}  // namespace

Result<std::string> write_network_geopackage(const Network& network, const std::string& path, std::int64_t source_date_epoch) {
  namespace fs = std::filesystem;
  GDALAllRegister();
  CPLPushErrorHandler(CPLQuietErrorHandler);
  const std::string now = date_text(source_date_epoch);
  CPLSetConfigOption("OGR_CURRENT_DATE", now.c_str());
  const std::string beside = path + ".part.gpkg";
  std::error_code code;
  fs::remove(beside, code);
  if (fs::path(path).has_parent_path()) fs::create_directories(fs::path(path).parent_path(), code);
  const bool written = write_all(network, beside, now);
  const std::string message = CPLGetLastErrorMsg();
  CPLPopErrorHandler();
  if (written) fs::rename(beside, path, code);
  if (written && !code) return path;
  const std::string reason = written ? code.message() : message;
  fs::remove(beside, code);
  return failure(error(path, "can't be written: " + printable(reason), "a folder that can be written to", "Choose another file"));
}

}  // namespace entrain::geo
