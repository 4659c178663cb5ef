// A network as one picture, to see in ten seconds whether a map was understood: roads, signals, corridors, findings. No tiles, to scale.
#pragma once

#include <string>
#include <vector>

#include "report/drawing.hpp"
#include "report/units.hpp"

namespace entrain::report {

struct MapPoint {
  double lon = 0, lat = 0;  // degrees, WGS 84
};

enum class RoadClass { major, middle, minor };

struct MapRoad {
  std::vector<MapPoint> points;
  RoadClass road_class = RoadClass::minor;
  bool one_way = false;  // in the order of the points
};

struct MapSignal {
  std::string id, name;
  MapPoint at;
  bool pedestrian_only = false;
};

struct MapCorridor {
  std::string name;
  std::vector<std::vector<MapPoint>> paths;  // one a direction, or one for both
};

struct MapFinding {
  MapPoint at;
  std::string text;
};

struct MapContent {
  std::string title, subtitle;
  std::vector<MapRoad> roads;
  std::vector<MapSignal> signals;
  std::vector<MapCorridor> corridors;
  std::vector<MapFinding> findings;
};

struct MapOptions {
  Units units = Units::metric;
  bool whole_extent = false;  // false: what signals, corridors and findings cover, with a margin, where there are any
};

// North is up. Signals carry their ids, findings letters (a, b, ...); both are listed beside the map, findings with their sentences. Labels
// never overlap: one that finds no free place is left out and the key says how many. Points that are not finite are left out.
Drawing map_picture(const MapContent& content, const MapOptions& options);

// As a file of its own.
std::string map_picture_svg(const MapContent& content, const MapOptions& options);

}  // namespace entrain::report
