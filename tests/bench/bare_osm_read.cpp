// The least there is to reading an OpenStreetMap file: every entity once, nothing kept. What the import is measured against.
// g++ -std=c++20 -O2 -o bare_osm_read tests/bench/bare_osm_read.cpp -lbz2 -lz -lexpat -lpthread
#include <cstdio>
#include <osmium/handler.hpp>
#include <osmium/io/any_input.hpp>
#include <osmium/visitor.hpp>

namespace {

struct Count : osmium::handler::Handler {
  long entities = 0;
  void node(const osmium::Node&) { ++entities; }
  void way(const osmium::Way&) { ++entities; }
  void relation(const osmium::Relation&) { ++entities; }
};

}  // namespace

int main(int argc, char** argv) {
  if (argc != 2) return 2;
  osmium::io::Reader reader{osmium::io::File{argv[1]}};
  Count count;
  osmium::apply(reader, count);
  reader.close();
  std::printf("%ld\n", count.entities);
}
