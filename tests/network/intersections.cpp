// Intersections of drawn streets: legs, movements, restrictions, clusters, links. Every direction is looked at.
#include <catch2/catch.hpp>

#include "network/geometry.hpp"
#include "street_map.hpp"

using namespace entrain;
using namespace entrain::street_map;
using network::OneWay;

namespace {

network::Network built(const network::RoadSource& source, const network::NetworkRequest& request) {
  auto result = network::build_network(source, request);
  if (!result)
    for (const Diagnostic& d : result.error()) UNSCOPED_INFO(to_text(d));
  REQUIRE(result.has_value());
  return std::move(result->value);
}

const std::vector<std::string> cross = {"..n..", ".....", "w.X.e", ".....", "..s.."};

}  // namespace

TEST_CASE("four streets make four legs and twelve movements, named by direction of travel") {
  const auto network = built(draw(cross, {{"wXe", "Main Street"}, {"nXs", "Oak Street"}}), request());
  REQUIRE(network.signals.size() == 1);
  const auto& signal = network.signals[0];
  CHECK(signal.name == "Main Street at Oak Street");
  REQUIRE(signal.legs.size() == 4);
  for (const char* id : {"N", "E", "S", "W"}) CHECK(leg(signal, id).lanes_in == 1);
  CHECK(signal.movements.size() == 12);
  for (const char* approach : {"NB", "EB", "SB", "WB"})
    for (const char* turn : {"-L", "-T", "-R"}) CHECK(has_movement(signal, std::string(approach) + turn));
  // Eastbound left goes north.
  for (const auto& m : signal.movements)
    if (m.id == "EB-L") CHECK((signal.legs[static_cast<std::size_t>(m.from_leg)].id + signal.legs[static_cast<std::size_t>(m.to_leg)].id) == "WN");
  CHECK(signal.crossings.size() == 4);
}

TEST_CASE("one-way streets have no way in against them") {
  const auto network = built(draw(cross, {{"wXe", "Main Street"}, {"sXn", "Oak Street", OneWay::forward}}), request());
  const auto& signal = network.signals[0];
  CHECK(leg(signal, "N").lanes_in == 0);
  CHECK(leg(signal, "S").lanes_out == 0);
  CHECK_FALSE(has_movement(signal, "SB-T"));
  CHECK(has_movement(signal, "NB-T"));
  CHECK(has_movement(signal, "EB-L"));
  CHECK_FALSE(has_movement(signal, "EB-R"));
}

TEST_CASE("a turn restriction takes its movement away, an only-restriction all others") {
  auto source = draw(cross, {{"wX", "Main Street"}, {"Xe", "Main Street"}, {"nX", "Oak Street"}, {"Xs", "Oak Street"}});
  network::TurnRestriction no_left;
  no_left.id = 1;
  no_left.from_way = way_id(0);
  no_left.via_node = node_id('x');
  no_left.to_way = way_id(2);
  network::TurnRestriction only_straight = no_left;
  only_straight.id = 2;
  only_straight.kind = network::RestrictionKind::only;
  only_straight.from_way = way_id(2);
  only_straight.to_way = way_id(3);
  source.restrictions = {no_left, only_straight};
  const auto network = built(source, request());
  const auto& signal = network.signals[0];
  CHECK_FALSE(has_movement(signal, "EB-L"));
  CHECK(has_movement(signal, "EB-T"));
  CHECK(has_movement(signal, "EB-R"));
  CHECK(has_movement(signal, "SB-T"));
  CHECK_FALSE(has_movement(signal, "SB-L"));
  CHECK_FALSE(has_movement(signal, "SB-R"));
}

TEST_CASE("three legs: a stem meets a bar") {
  const auto network = built(draw({"w.X.e", ".....", "..s.."}, {{"wXe", "Main Street"}, {"Xs", "Oak Street"}}), request());
  const auto& signal = network.signals[0];
  REQUIRE(signal.legs.size() == 3);
  CHECK(signal.movements.size() == 6);
  CHECK(has_movement(signal, "NB-L"));
  CHECK(has_movement(signal, "NB-R"));
  CHECK_FALSE(has_movement(signal, "NB-T"));
  CHECK(has_movement(signal, "WB-L"));
  CHECK(has_movement(signal, "EB-R"));
}

TEST_CASE("a divided road with stop-line signals is one intersection with four legs") {
  // 10 m a place: the carriageways lie 20 m apart, stop lines 20 m before the near junction. n1 comes in southbound, m1 goes out northbound.
  const std::vector<std::string> rows = {"......p.q......", "...............", "...............", "......A........", "...............", "w...B.x.y.C...e", "...............", "........D......", "...............", "......u.v......"};
  const auto network = built(draw(rows, {{"pAxu", "Wide Avenue", OneWay::forward}, {"vDyq", "Wide Avenue", OneWay::forward}, {"wBxyCe", "Cross Street"}}, 10), request());
  REQUIRE(network.signals.size() == 1);
  const auto& signal = network.signals[0];
  CHECK(signal.junctions.size() == 2);
  CHECK(signal.nodes.size() == 4);
  REQUIRE(signal.legs.size() == 4);
  CHECK(leg(signal, "N").lanes_in == 2);
  CHECK(leg(signal, "N").lanes_out == 2);
  for (const char* id : {"SB-T", "NB-T", "EB-T", "WB-T", "SB-L", "NB-L", "EB-L", "WB-L"}) CHECK(has_movement(signal, id));
  // Southbound traffic comes in on the west side of the northbound carriageway: traffic keeps right.
  CHECK(network.traffic_side == TrafficSide::right);
  CHECK_FALSE(network.traffic_side_assumed);
}

TEST_CASE("mirrored carriageways mean that traffic keeps left") {
  const std::vector<std::string> rows = {"......p.q......", "...............", "...............", "........A......", "...............", "w...B.x.y.C...e", "...............", "......D........", "...............", "......u.v......"};
  const auto network = built(draw(rows, {{"qAyv", "Wide Avenue", OneWay::forward}, {"uDxp", "Wide Avenue", OneWay::forward}, {"wBxyCe", "Cross Street"}}, 10), request());
  REQUIRE(network.signals.size() == 1);
  CHECK(network.traffic_side == TrafficSide::left);
}

TEST_CASE("links run from signal to signal, through junctions without one, both ways") {
  const auto network = built(draw({"..a.b.c..", ".........", "w.X.j.Y.e", ".........", "..k.l.m.."}, {{"wXjYe", "Main Street"}, {"aXk", "First"}, {"bjl", "Second"}, {"cYm", "Third"}}), request());
  REQUIRE(network.signals.size() == 2);
  const auto* east = link_between(network, 'x', 'y');
  const auto* west = link_between(network, 'y', 'x');
  REQUIRE(east != nullptr);
  REQUIRE(west != nullptr);
  CHECK(east->length_m == Approx(400).epsilon(0.002));
  CHECK(east->travel_times.at("").mean_s == Approx(400 / 13.4).epsilon(0.01));
  CHECK(east->travel_times.at("").origin == "speed_limit");
  CHECK(signal_at(network, 'y').legs[static_cast<std::size_t>(east->to_leg)].id == "W");
  CHECK(leg(signal_at(network, 'y'), "W").neighbour == signal_at(network, 'x').id);
}

TEST_CASE("a one-way street gives a link in its direction only") {
  const auto network = built(draw({"..a...c..", ".........", "w.X...Y.e", ".........", "..k...m.."}, {{"wXYe", "Main Street", OneWay::forward}, {"aXk", "First"}, {"cYm", "Third"}}), request());
  CHECK(link_between(network, 'x', 'y') != nullptr);
  CHECK(link_between(network, 'y', 'x') == nullptr);
}

TEST_CASE("sites claim the signal near them; a site far from any road says how far") {
  auto wanted = request();
  const auto source = draw(cross, {{"wXe", "Main Street"}, {"nXs", "Oak Street"}});
  network::SignalSite near;
  near.id = "T1";
  near.lon = -30.0 + 210 / 78846.8;
  near.lat = 45.0 - 190 / 111131.8;
  near.where = "signals.csv row 2";
  wanted.signals = {near};
  CHECK(built(source, wanted).signals.at(0).id == "T1");
  network::SignalSite far = near;
  far.id = "T2";
  far.lat = 46.0;
  far.where = "signals.csv row 3";
  wanted.signals.push_back(far);
  const auto result = network::build_network(source, wanted);
  REQUIRE_FALSE(result.has_value());
  REQUIRE(result.error().size() == 1);
  CHECK(result.error()[0].where == "signals.csv row 3");
  CHECK(result.error()[0].found.find("the nearest road lies") != std::string::npos);
}

TEST_CASE("self-loops, parts without length and missing nodes are counted, never fatal") {
  auto source = draw(cross, {{"wXe", "Main Street"}, {"nXs", "Oak Street"}, {"XnX", "Loop"}});
  source.ways[2].nodes = {node_id('x'), node_id('n'), node_id('x')};
  source.ways.push_back(source.ways[0]);
  source.ways.back().id = 99;
  source.ways.back().nodes = {node_id('w'), 424242, node_id('e')};
  CHECK(built(source, request()).signals.size() == 1);
}

TEST_CASE("no roads at all is an error, not an empty network") {
  network::RoadSource source;
  source.file = "empty.osm";
  CHECK_FALSE(network::build_network(source, request()).has_value());
}
