#include <fmt/format.h>
#include <zlib.h>

#include <algorithm>
#include <osmium/handler.hpp>
#include <osmium/io/any_input.hpp>
#include <osmium/osm/entity_bits.hpp>
#include <osmium/visitor.hpp>

#include "geo/in/osm_tags.hpp"
#include "geo/in/roads.hpp"

namespace entrain::geo {
namespace {

using network::Finding;
using network::RoadSource;

constexpr std::size_t most_way_nodes = 1'000'000;

// First pass: ways and turn restrictions.
class WayReader : public osmium::handler::Handler {
 public:
  explicit WayReader(RoadSource& source) : m_source(source) {}

  void way(const osmium::Way& way) {
    if (!is_road(way.tags())) return;
    network::RoadWay road = road_of(way.tags());
    road.id = way.id();
    if (way.nodes().size() > most_way_nodes) return add_finding("giant_way", fmt::format("way {} has {} nodes and was left out", way.id(), way.nodes().size()));
    for (const auto& node : way.nodes())
      if (road.nodes.empty() || road.nodes.back() != node.ref()) road.nodes.push_back(node.ref());
    if (road.nodes.size() < 2) return add_finding("short_way", fmt::format("way {} has fewer than two nodes", way.id()));
    m_source.ways.push_back(std::move(road));
  }

  void relation(const osmium::Relation& relation) {
    if (!relation.tags().has_tag("type", "restriction")) return;
    const auto restriction = restriction_of(relation);
    if (restriction) m_source.restrictions.push_back(*restriction);
    else add_finding("restriction_not_used", fmt::format("restriction {} has a kind or members that are not used", relation.id()));
  }

 private:
  void add_finding(const char* kind, std::string sentence) { m_source.findings.push_back({kind, std::move(sentence), 0, 0, false}); }
  RoadSource& m_source;
};

// Second pass: the nodes that roads use.
class NodeReader : public osmium::handler::Handler {
 public:
  NodeReader(RoadSource& source, const std::vector<std::int64_t>& wanted) : m_source(source), m_wanted(wanted) {}

  void node(const osmium::Node& node) {
    if (!std::binary_search(m_wanted.begin(), m_wanted.end(), node.id())) return;
    if (!node.location().valid()) return;
    network::RoadNode out = road_node_of(node.tags());
    out.id = node.id();
    out.lon = node.location().lon();
    out.lat = node.location().lat();
    m_source.nodes.push_back(std::move(out));
  }

 private:
  RoadSource& m_source;
  const std::vector<std::int64_t>& m_wanted;
};

std::vector<std::int64_t> wanted_nodes(const RoadSource& source) {
  std::vector<std::int64_t> ids;
  for (const auto& way : source.ways) ids.insert(ids.end(), way.nodes.begin(), way.nodes.end());
  std::sort(ids.begin(), ids.end());
  ids.erase(std::unique(ids.begin(), ids.end()), ids.end());
  return ids;
}

// Ways and nodes once each, in order of id; duplicates and missing nodes become findings.
void tidy(RoadSource& source, const std::vector<std::int64_t>& wanted) {
  const auto by_id = [](const auto& a, const auto& b) { return a.id < b.id; };
  const auto same_id = [](const auto& a, const auto& b) { return a.id == b.id; };
  std::stable_sort(source.ways.begin(), source.ways.end(), by_id);
  const auto ways_end = std::unique(source.ways.begin(), source.ways.end(), same_id);
  if (const auto twice = source.ways.end() - ways_end; twice > 0) source.findings.push_back({"duplicate_way", fmt::format("{} ways stand twice in the file", twice), 0, 0, false});
  source.ways.erase(ways_end, source.ways.end());
  std::stable_sort(source.nodes.begin(), source.nodes.end(), by_id);
  source.nodes.erase(std::unique(source.nodes.begin(), source.nodes.end(), same_id), source.nodes.end());
  std::sort(source.restrictions.begin(), source.restrictions.end(), by_id);
  const std::size_t missing = wanted.size() - source.nodes.size();
  if (missing > 0)
    source.findings.push_back({"missing_node", fmt::format("{} nodes that roads use are not in the file (a clipped edge?): the roads are cut there", missing), 0, 0, false});
}

template <class Reader>
void read_pass(const osmium::io::File& file, osmium::osm_entity_bits::type kinds, Reader& reader) {
  osmium::io::Reader input(file, kinds, osmium::io::read_meta::no);
  osmium::apply(input, reader);
  input.close();
}

// libosmium takes the end of a cut gzip stream for the end of the data: read it once to its checksum.
bool gzip_is_whole(const std::string& path) {
  gzFile file = gzopen(path.c_str(), "rb");
  if (file == nullptr) return false;
  std::vector<char> buffer(1 << 16);
  int got = 0;
  while ((got = gzread(file, buffer.data(), static_cast<unsigned>(buffer.size()))) > 0) {
  }
  int code = Z_OK;
  gzerror(file, &code);
  const int closed = gzclose(file);
  return got == 0 && code == Z_OK && closed == Z_OK;
}

}  // namespace

Result<Noted<RoadSource>> read_osm_roads(const std::string& path) {
  RoadSource source;
  source.file = path;
  if (path.size() > 3 && path.compare(path.size() - 3, 3, ".gz") == 0 && !gzip_is_whole(path))
    return failure(error(path, "a gzip file that is cut off or damaged", "a whole OpenStreetMap file", "Fetch or export the extract again"));
  try {
    const osmium::io::File file(path);
    WayReader ways(source);
    read_pass(file, osmium::osm_entity_bits::way | osmium::osm_entity_bits::relation, ways);
    const std::vector<std::int64_t> wanted = wanted_nodes(source);
    source.nodes.reserve(wanted.size());
    NodeReader nodes(source, wanted);
    read_pass(file, osmium::osm_entity_bits::node, nodes);
    tidy(source, wanted);
  } catch (const std::exception& problem) {
    return failure(error(path, printable(problem.what(), 200), "a whole OpenStreetMap file (.osm, .osm.gz, .osm.bz2 or .osm.pbf)", "Fetch or export the extract again; it may be cut off"));
  }
  if (source.ways.empty()) return failure(error(path, "no roads for vehicles", "ways with a highway tag", "Check that the extract covers the streets and was not filtered"));
  return Noted<RoadSource>{std::move(source), {}};
}

}  // namespace entrain::geo
