// Roads from files: OpenStreetMap as text, cut, empty and odd; line layers in another coordinate system; GeoPackage out and in again.
#include "geo/in/roads.hpp"

#include <unistd.h>

#include <catch2/catch.hpp>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <iterator>

#include "geo/in/elevation.hpp"
#include "geo/in/table.hpp"
#include "geo/out/geopackage.hpp"
#include "network/build_network.hpp"

using namespace entrain;
namespace fs = std::filesystem;

namespace {

// A folder of its own that goes when the test ends.
class Scratch {
 public:
  Scratch() : m_path(fs::temp_directory_path() / ("entrain_geo_" + std::to_string(getpid()) + "_" + std::to_string(++s_count))) { fs::create_directories(m_path); }
  ~Scratch() {
    std::error_code code;
    fs::remove_all(m_path, code);
  }
  std::string file(const std::string& name, const std::string& text) const {
    std::ofstream(m_path / name, std::ios::binary) << text;
    return (m_path / name).string();
  }
  std::string path(const std::string& name) const { return (m_path / name).string(); }

 private:
  static inline int s_count = 0;
  fs::path m_path;
};

std::string bytes_of(const std::string& path) {
  std::ifstream in(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), std::istreambuf_iterator<char>()};
}

const std::string town = R"(<?xml version="1.0"?><osm version="0.6">
<node id="-1" lat="45.000" lon="-30.002"/><node id="5" lat="45.000" lon="-30.000"><tag k="highway" v="traffic_signals"/></node>
<node id="3" lat="45.000" lon="-29.998"/><node id="4" lat="45.001" lon="-30.000"/><node id="2" lat="44.999" lon="-30.000"/>
<node id="9" lat="45.0005" lon="-30.000"><tag k="highway" v="traffic_signals"/><tag k="traffic_signals" v="blinker"/></node>
<node id="8" lat="45.003" lon="-30.000"/>
<way id="20"><nd ref="4"/><nd ref="9"/><nd ref="5"/><nd ref="2"/><tag k="highway" v="tertiary"/><tag k="name" v="Oak Street"/><tag k="oneway" v="-1"/></way>
<way id="10"><nd ref="-1"/><nd ref="5"/><nd ref="3"/><tag k="highway" v="primary"/><tag k="name" v="Main Street"/><tag k="maxspeed" v="30 mph"/><tag k="lanes" v="4"/></way>
<way id="30"><nd ref="3"/><nd ref="777"/><tag k="highway" v="residential"/></way>
<way id="40"><nd ref="3"/><nd ref="4"/><tag k="highway" v="footway"/></way>
<relation id="7"><member type="way" ref="10" role="from"/><member type="node" ref="5" role="via"/><member type="way" ref="20" role="to"/><tag k="type" v="restriction"/><tag k="restriction" v="no_left_turn"/></relation>
</osm>)";

network::RoadSource read(const std::string& path) {
  auto result = geo::read_osm_roads(path);
  if (!result)
    for (const Diagnostic& d : result.error()) UNSCOPED_INFO(to_text(d));
  REQUIRE(result.has_value());
  return std::move(result->value);
}

}  // namespace

TEST_CASE("unsorted and negative ids, one-way against the way, missing nodes, restrictions, signals that are no ordinary ones") {
  const Scratch scratch;
  const auto roads = read(scratch.file("town.osm", town));
  REQUIRE(roads.ways.size() == 3);
  CHECK(roads.ways[0].id == 10);
  CHECK(roads.ways[0].speed_limit_mps == Approx(30 * 0.44704));
  CHECK(roads.ways[0].lanes == 4);
  CHECK(roads.ways[1].oneway == network::OneWay::backward);
  CHECK(roads.nodes.front().id == -1);
  CHECK(roads.restrictions.size() == 1);
  int unusual = 0;
  for (const auto& node : roads.nodes) unusual += node.signal == network::SignalTag::unusual;
  CHECK(unusual == 1);
  REQUIRE(roads.findings.size() == 1);
  CHECK(roads.findings[0].kind == "missing_node");
}

TEST_CASE("a file that is cut, empty, missing or something else is refused with a sentence") {
  const Scratch scratch;
  const auto refused = [&](const std::string& path) {
    project::Roads roads;
    roads.source = path;
    const auto result = geo::read_roads(roads, ".", project::Units::us);
    REQUIRE_FALSE(result.has_value());
    REQUIRE(result.error().size() == 1);
    CHECK_FALSE(result.error()[0].mend.empty());
    return to_text(result.error()[0]);
  };
  CHECK(refused(scratch.path("none.osm")).find("no such file") != std::string::npos);
  CHECK(refused(scratch.file("empty.osm", "")).find("an empty file") != std::string::npos);
  CHECK(refused(scratch.file("cut.osm", town.substr(0, town.size() / 2))).find("XML") != std::string::npos);
  CHECK(refused(scratch.file("noise.osm.pbf", std::string(5000, 'x'))).find("cut off") != std::string::npos);
  CHECK(refused(scratch.file("noise.osm.bz2", "BZh9 not really")).find("cut off") != std::string::npos);
  CHECK(refused(scratch.file("noise.gpkg", "no database")).find("expected") != std::string::npos);
  CHECK(refused(scratch.file("bomb.osm", "<?xml version=\"1.0\"?><!DOCTYPE o [<!ENTITY a \"aaaaaaaaaa\"><!ENTITY b \"&a;&a;&a;&a;&a;&a;&a;&a;\">]><osm version=\"0.6\">&b;</osm>")).size() > 10);
}

TEST_CASE("absurd places, names and counts do not hurt") {
  const Scratch scratch;
  std::string odd = town;
  const auto replace = [&](const std::string& from, const std::string& to) { odd.replace(odd.find(from), from.size(), to); };
  replace("lon=\"-29.998\"", "lon=\"1e9\"");
  replace("v=\"4\"", "v=\"1000000000\"");
  replace("Oak Street", "Oak&#10;&lt;b&gt;Street");
  const auto result = geo::read_osm_roads(scratch.file("odd.osm", odd));
  if (result) {
    CHECK(result->value.ways[0].lanes == 0);
    CHECK(result->value.ways[1].name == "Oak <b>Street");
  } else {
    CHECK(result.error().size() == 1);
  }
}

TEST_CASE("speed limits in the ways people write them") {
  CHECK(geo::parse_speed_mps("50") == Approx(50 / 3.6));
  CHECK(geo::parse_speed_mps("30 mph") == Approx(13.4112));
  CHECK(geo::parse_speed_mps("30mph") == Approx(13.4112));
  for (const char* text : {"", "none", "RU:urban", "-5", "9999", "walk", "50;30"}) CHECK(geo::parse_speed_mps(text) == 0);
}

TEST_CASE("a line layer: ends snapped, columns mapped, every odd feature told") {
  const Scratch scratch;
  const std::string lines = R"({"type":"FeatureCollection","features":[
{"type":"Feature","properties":{"street":"Main Street","mph":30,"ow":"no"},"geometry":{"type":"LineString","coordinates":[[-30.002,45.0],[-30.0,45.0]]}},
{"type":"Feature","properties":{"street":"Main Street","mph":999,"ow":"no"},"geometry":{"type":"LineString","coordinates":[[-30.000001,45.0],[-29.998,45.0]]}},
{"type":"Feature","properties":{"street":"Oak","mph":25,"ow":"yes"},"geometry":{"type":"LineString","coordinates":[[-30.0,45.001],[-30.0,45.000001]]}},
{"type":"Feature","properties":{"street":"Nowhere"},"geometry":{"type":"LineString","coordinates":[[-30.0,95.0],[-30.0,96.0]]}},
{"type":"Feature","properties":{"street":"Point"},"geometry":{"type":"Point","coordinates":[-30.0,45.0]}}]})";
  project::Roads roads;
  roads.source = scratch.file("lines.geojson", lines);
  roads.columns = {{"name", "street"}, {"speed_limit", "mph"}, {"oneway", "ow"}};
  roads.speed_unit = "mph";
  const auto result = geo::read_roads(roads, ".", project::Units::us);
  REQUIRE(result.has_value());
  const auto& source = result->value;
  REQUIRE(source.ways.size() == 3);
  CHECK(source.ways[0].nodes.back() == source.ways[1].nodes.front());
  CHECK(source.ways[2].nodes.back() == source.ways[1].nodes.front());
  CHECK(source.ways[2].oneway == network::OneWay::forward);
  CHECK(source.ways[0].speed_limit_mps == Approx(13.4112));
  CHECK(source.ways[1].speed_limit_mps == 0);
  std::vector<std::string> kinds;
  for (const auto& finding : source.findings) kinds.push_back(finding.kind);
  std::sort(kinds.begin(), kinds.end());
  CHECK(kinds == std::vector<std::string>{"no_place", "not_a_line", "odd_speed"});
  roads.columns["lanes"] = "no_such_column";
  const auto wrong = geo::read_roads(roads, ".", project::Units::us);
  REQUIRE_FALSE(wrong.has_value());
  CHECK(to_text(wrong.error()[0]).find("no column no_such_column") != std::string::npos);
}

TEST_CASE("the network goes to a GeoPackage with the same bytes each time, and its layers can be read") {
  const Scratch scratch;
  network::NetworkRequest request;
  request.defaults = network::default_road_values(true);
  const auto built = network::build_network(read(scratch.file("town.osm", town)), request);
  REQUIRE(built.has_value());
  const std::string one = scratch.path("one.gpkg"), two = scratch.path("two.gpkg");
  REQUIRE(geo::write_network_geopackage(built->value, one, 1700000000).has_value());
  REQUIRE(geo::write_network_geopackage(built->value, two, 1700000000).has_value());
  CHECK(bytes_of(one) == bytes_of(two));
  CHECK(bytes_of(one).size() > 10000);
  const auto signals = geo::read_table(one, "signals");
  REQUIRE(signals.has_value());
  CHECK(signals->rows.size() == 1 + built->value.signals.size());
  for (const char* layer : {"junctions", "roads", "links", "approaches", "movements", "crossings", "corridors", "findings", "layer_styles"}) CHECK(geo::read_table(one, layer).has_value());
  CHECK_FALSE(geo::write_network_geopackage(built->value, scratch.file("a_file", "x") + "/inside.gpkg", 0).has_value());
}

TEST_CASE("extracts give as many road ways and signal nodes as an independent reader counts") {
  const fs::path data = fs::path(ENTRAIN_SHARED_DATA) / "osm";
  if (!fs::exists(data / "bangor-me.osm.pbf") || std::system("command -v osmium > /dev/null 2>&1") != 0) {
    WARN("no extracts or no osmium-tool: skipped");
    return;
  }
  const Scratch scratch;
  for (const char* name : {"bangor-me.osm.pbf", "helsinki-centre.osm.pbf", "krems.osm.gz"}) {
    CAPTURE(name);
    const std::string filtered = scratch.path("signals.osm.pbf"), counted = scratch.path("count.txt");
    const std::string command = "osmium tags-filter -R -O -o " + filtered + " " + (data / name).string() + " n/highway=traffic_signals > /dev/null 2>&1 && osmium fileinfo -e -g data.count.nodes " + filtered + " > " + counted;
    REQUIRE(std::system(command.c_str()) == 0);
    const int all = std::stoi(bytes_of(counted));
    const auto roads = read((data / name).string());
    int ours = 0;
    for (const auto& node : roads.nodes) ours += node.signal != network::SignalTag::none;
    // Those on no road for vehicles (foot and cycle ways, tram tracks) are not ours; crossings with signals are, though not under that tag.
    CHECK(ours > 0);
    int ordinary = 0;
    for (const auto& node : roads.nodes) ordinary += node.signal == network::SignalTag::traffic_signals || node.signal == network::SignalTag::unusual;
    CHECK(ordinary <= all);
    CHECK(ordinary >= 0.6 * all);
  }
}
