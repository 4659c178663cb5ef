// Corridors: listed, along a street, broken; travel times by their priority; networks without roads.
#include "network/corridors.hpp"

#include <catch2/catch.hpp>

#include "street_map.hpp"

using namespace entrain;
using namespace entrain::street_map;

namespace {

// Three signals X, Y, Z along Main Street; cross streets First, Second, Third.
network::RoadSource main_street() {
  return draw({"..a...b...c..", ".............", "w.X...Y...Z.e", ".............", "..k...l...m.."}, {{"wXYZe", "Main Street"}, {"aXk", "First Avenue"}, {"bYl", "Second Avenue"}, {"cZm", "Third Avenue"}});
}

network::CorridorRequest along(const std::string& street, const std::string& from, const std::string& to) {
  network::CorridorRequest corridor;
  corridor.id = "main";
  corridor.street = street;
  corridor.from = from;
  corridor.to = to;
  corridor.where = "project.toml [[corridor]] main";
  return corridor;
}

std::string ids(const network::Network& network, const network::CorridorDirection& direction) {
  std::string text;
  for (const auto& stop : direction.stops) text += network.signals[static_cast<std::size_t>(stop.signal)].id + " ";
  return text;
}

}  // namespace

TEST_CASE("a street between two named cross streets, whatever its spelling") {
  for (const auto& [street, from, to] : {std::tuple{"Main Street", "S1", "S3"}, {"MAIN ST.", "First Avenue", "Third Ave"}, {"main street", "Main Street / First Avenue", "Third Avenue / Main St"}, {"Main St", "", ""}}) {
    CAPTURE(street, from, to);
    auto wanted = request();
    wanted.corridors = {along(street, from, to)};
    const auto result = network::build_network(main_street(), wanted);
    REQUIRE(result.has_value());
    const auto& corridor = result->value.corridors.at(0);
    REQUIRE(corridor.directions.size() == 2);
    const std::string forward = ids(result->value, corridor.directions[0]), backward = ids(result->value, corridor.directions[1]);
    CHECK((forward == "S1 S2 S3 " || forward == "S3 S2 S1 "));
    CHECK(backward != forward);
    CHECK(corridor.directions[0].stops[1].distance_m == Approx(400).epsilon(0.002));
    const bool eastwards = forward == "S1 S2 S3 ";
    CHECK(corridor.directions[0].label == (eastwards ? "EB" : "WB"));
    for (const auto& stop : corridor.directions[0].stops) CHECK(stop.movement == (eastwards ? "EB-T" : "WB-T"));
  }
}

TEST_CASE("an unknown street or end says what was expected") {
  auto wanted = request();
  wanted.corridors = {along("Elm Street", "", ""), along("Main Street", "S1", "Ninth Avenue")};
  const auto result = network::build_network(main_street(), wanted);
  REQUIRE_FALSE(result.has_value());
  REQUIRE(result.error().size() == 2);
  CHECK(result.error()[0].found == "street Elm Street");
  CHECK(result.error()[1].found == "to = Ninth Avenue");
}

TEST_CASE("a corridor without a way says where it breaks and how far the roads lead") {
  auto source = main_street();
  source.ways[0].nodes = {node_id('w'), node_id('x'), node_id('y')};
  source.ways.push_back(source.ways[0]);
  source.ways.back().id = 77;
  source.ways.back().nodes = {node_id('z'), node_id('e')};
  auto wanted = request();
  network::CorridorRequest listed;
  listed.id = "main";
  listed.signals = {"S1", "S2", "S3"};
  listed.where = "project.toml [[corridor]] main";
  wanted.corridors = {listed};
  const auto result = network::build_network(source, wanted);
  REQUIRE_FALSE(result.has_value());
  CHECK(to_text(result.error()[0]).find("no way from S2 to S3") != std::string::npos);
}

TEST_CASE("travel times: measured for the period, then the corridor's speed, then the limit") {
  auto wanted = request();
  wanted.periods = {"am", "pm"};
  wanted.corridors = {along("Main Street", "S1", "S3")};
  wanted.corridors[0].progression_speed_mps[""] = 20;
  network::MeasuredTravelTime measured;
  measured.from_signal = "S1";
  measured.to_signal = "S2";
  measured.period = "am";
  measured.mean_s = 41;
  measured.where = "travel_times.csv row 2";
  wanted.travel_times = {measured};
  const auto result = network::build_network(main_street(), wanted);
  REQUIRE(result.has_value());
  const auto* link = link_between(result->value, 'x', 'y');
  CHECK(network::travel_time(*link, "am").mean_s == 41);
  CHECK(network::travel_time(*link, "am").origin == "measured");
  CHECK(network::travel_time(*link, "pm").origin == "progression_speed");
  CHECK(network::travel_time(*link, "pm").mean_s == Approx(link->length_m / 20));
  CHECK(network::travel_time(*link_between(result->value, 'y', 'x'), "am").origin == "progression_speed");
}

TEST_CASE("a measured time between signals that are no neighbours is an error") {
  auto wanted = request();
  network::MeasuredTravelTime measured;
  measured.from_signal = "S1";
  measured.to_signal = "S3";
  measured.mean_s = 41;
  measured.where = "travel_times.csv row 2";
  wanted.travel_times = {measured};
  const auto result = network::build_network(main_street(), wanted);
  REQUIRE_FALSE(result.has_value());
  CHECK(result.error()[0].where == "travel_times.csv row 2");
}

TEST_CASE("without roads the travel times are the network") {
  auto wanted = request();
  for (const auto& [from, to] : {std::pair{"A", "B"}, {"B", "C"}, {"C", "B"}, {"B", "A"}}) {
    network::MeasuredTravelTime m;
    m.from_signal = from;
    m.to_signal = to;
    m.mean_s = 20;
    m.length_m = 250;
    wanted.travel_times.push_back(m);
  }
  network::CorridorRequest listed;
  listed.id = "main";
  listed.signals = {"A", "B", "C"};
  wanted.corridors = {listed};
  const auto result = network::network_from_travel_times(wanted);
  REQUIRE(result.has_value());
  CHECK(result->value.signals.size() == 3);
  CHECK(result->value.links.size() == 4);
  CHECK(ids(result->value, result->value.corridors.at(0).directions.at(1)) == "C B A ");
  CHECK_FALSE(result->value.has_roads);
}

TEST_CASE("street names agree across case and common short words") {
  using network::plain_street_name;
  CHECK(plain_street_name("West Burnside Street") == plain_street_name("W Burnside St."));
  CHECK(plain_street_name("MAIN  AVENUE") == plain_street_name("Main Ave"));
  CHECK(plain_street_name("Main Street") != plain_street_name("Main Avenue"));
}
