#include "geo/in/elevation.hpp"

#include <fmt/format.h>
#include <gdal_priv.h>
#include <ogr_spatialref.h>

#include <algorithm>
#include <cmath>
#include <filesystem>
#include <memory>
#include <optional>

#include "geo/in/gdal_quiet.hpp"
#include "network/geometry.hpp"

namespace entrain::geo {
namespace {

constexpr double reach_m = 60;      // over which a leg's grade is taken
constexpr double steepest = 0.20;

class Raster {
 public:
  // Problems stay in `problems`.
  Raster(const std::string& path, Diagnostics& problems) { open(path, problems); }
  void open(const std::string& path, Diagnostics& problems) {
    m_data.reset(GDALDataset::Open(path.c_str(), GDAL_OF_RASTER | GDAL_OF_READONLY));
    if (!m_data) return problems.push_back(error(path, "can't be read", "an elevation raster that GDAL opens", "Check elevation under [roads]"));
    if (m_data->GetGeoTransform(m_transform) != CE_None || m_data->GetSpatialRef() == nullptr)
      return problems.push_back(error(path, "a raster without place or coordinate system", "a georeferenced elevation raster", "Write it as GeoTIFF with its coordinate system"));
    m_width = m_data->GetRasterXSize();
    m_height = m_data->GetRasterYSize();
    if (static_cast<double>(m_width) * m_height > 4e8) return problems.push_back(error(path, "a raster of over 400 million cells", "a raster of the project's area", "Cut the raster to the area"));
    OGRSpatialReference degrees, own(*m_data->GetSpatialRef());
    degrees.SetWellKnownGeogCS("WGS84");
    degrees.SetAxisMappingStrategy(OAMS_TRADITIONAL_GIS_ORDER);
    own.SetAxisMappingStrategy(OAMS_TRADITIONAL_GIS_ORDER);
    m_to_raster.reset(OGRCreateCoordinateTransformation(&degrees, &own));
    GDALRasterBand* band = m_data->GetRasterBand(1);
    int has_none = 0;
    m_none = band->GetNoDataValue(&has_none);
    m_has_none = has_none != 0;
    m_cells.resize(static_cast<std::size_t>(m_width) * static_cast<std::size_t>(m_height));
    if (!m_to_raster || band->RasterIO(GF_Read, 0, 0, m_width, m_height, m_cells.data(), m_width, m_height, GDT_Float32, 0, 0) != CE_None)
      problems.push_back(error(path, "can't be read to its end", "a whole raster", "Write it again"));
  }

  std::optional<double> height_m(network::Point p) const {
    double x = p.lon, y = p.lat;
    if (!m_to_raster->Transform(1, &x, &y)) return std::nullopt;
    const double det = m_transform[1] * m_transform[5] - m_transform[2] * m_transform[4];
    const double dx = x - m_transform[0], dy = y - m_transform[3];
    const double column = (dx * m_transform[5] - dy * m_transform[2]) / det - 0.5, row = (dy * m_transform[1] - dx * m_transform[4]) / det - 0.5;
    if (!(column >= 0) || !(row >= 0) || column > m_width - 1 || row > m_height - 1) return std::nullopt;
    const int c = std::min(static_cast<int>(column), m_width - 2), r = std::min(static_cast<int>(row), m_height - 2);
    if (c < 0 || r < 0) return std::nullopt;
    const double fx = column - c, fy = row - r;
    double sum = 0;
    for (const auto& [dc, dr, weight] : {std::tuple{0, 0, (1 - fx) * (1 - fy)}, {1, 0, fx * (1 - fy)}, {0, 1, (1 - fx) * fy}, {1, 1, fx * fy}}) {
      const double value = m_cells[static_cast<std::size_t>(r + dr) * static_cast<std::size_t>(m_width) + static_cast<std::size_t>(c + dc)];
      if ((m_has_none && value == m_none) || !std::isfinite(value)) return std::nullopt;
      sum += weight * value;
    }
    return sum;
  }

 private:
  GDALDatasetUniquePtr m_data;
  std::unique_ptr<OGRCoordinateTransformation> m_to_raster;
  double m_transform[6] = {};
  int m_width = 0, m_height = 0;
  double m_none = 0;
  bool m_has_none = false;
  std::vector<float> m_cells;
};

// Least-squares slope of the heights sampled along the first `over_m` of a shape; nothing where the raster has no heights.
std::optional<double> slope(const Raster& raster, const std::vector<network::Point>& shape, double over_m) {
  const double length = std::min(over_m, network::length_m(shape));
  if (length < 5) return 0.0;
  constexpr int samples = 13;
  double sum_h = 0, sum_s = 0, sum_sh = 0, sum_ss = 0;
  for (int i = 0; i < samples; ++i) {
    const double s = length * i / (samples - 1);
    const auto h = raster.height_m(network::point_along(shape, s));
    if (!h) return std::nullopt;
    sum_h += *h, sum_s += s, sum_sh += s * *h, sum_ss += s * s;
  }
  const double slope = (samples * sum_sh - sum_s * sum_h) / (samples * sum_ss - sum_s * sum_s);
  return std::clamp(std::isfinite(slope) ? slope : 0.0, -steepest, steepest);
}

// The last part of the roads that arrive on a leg, from the stop line backwards.
void grade_legs(const Raster& raster, network::Network& network) {
  for (const network::SignalLink& link : network.links) {
    if (link.to_leg < 0) continue;
    std::vector<network::Point> back(link.shape.rbegin(), link.shape.rend());
    const auto grade = slope(raster, back, 2 * reach_m);
    if (grade) network.signals[static_cast<std::size_t>(link.to_signal)].legs[static_cast<std::size_t>(link.to_leg)].grade_in = 0.0 - *grade;
  }
}

}  // namespace

Result<Noted<network::Network>> with_grades(network::Network network, const std::string& raster_path) {
  std::error_code code;
  if (!std::filesystem::exists(raster_path, code)) return failure(error(raster_path, "no such file", "an elevation raster", "Check elevation under [roads]"));
  const GdalQuiet quiet;
  Diagnostics problems, notes;
  const Raster raster(raster_path, problems);
  if (!problems.empty()) return failure(std::move(problems));
  int outside = 0;
  for (auto [e, end] = boost::edges(network.graph); e != end; ++e) {
    network::Road& road = network.graph[*e];
    if (road.bridge_or_tunnel) continue;
    const auto grade = slope(raster, road.shape, 1e9);
    if (grade) road.grade = *grade;
    else ++outside;
  }
  for (std::size_t s = 0; s < network.signals.size(); ++s)
    for (network::Leg& leg : network.signals[s].legs) leg.grade_in = 0;
  // Legs without a link from another signal: the road that ends at the intersection on that side.
  for (auto [e, end] = boost::edges(network.graph); e != end; ++e) {
    const int s = network.graph[boost::target(*e, network.graph)].signal;
    if (s < 0 || network.graph[boost::source(*e, network.graph)].signal == s) continue;
    const network::Road& road = network.graph[*e];
    const double bearing = network::bearing_deg(network.graph[boost::target(*e, network.graph)].place, network::point_along({road.shape.rbegin(), road.shape.rend()}, 30));
    for (network::Leg& leg : network.signals[static_cast<std::size_t>(s)].legs)
      if (std::fabs(network::turn_deg(leg.bearing_deg, bearing)) < 25 && leg.lanes_in > 0) leg.grade_in = road.grade;
  }
  grade_legs(raster, network);
  for (network::SignalLink& link : network.links)
    if (const auto grade = slope(raster, link.shape, 1e9)) link.grade = *grade;
  if (outside > 0) notes.push_back(warning(raster_path, fmt::format("does not cover {} roads: their grade is taken as level", outside)));
  return Noted<network::Network>{std::move(network), std::move(notes)};
}

}  // namespace entrain::geo
