#include "base/diagnostic.hpp"

#include <catch2/catch.hpp>

using namespace entrain;

TEST_CASE("a diagnostic says where, what was found, what was expected and how to mend it") {
  CHECK(to_text(error("signals.csv row 7, column lon", "x12", "a longitude in degrees", "Correct the cell")) ==
        "error: signals.csv row 7, column lon: x12; expected a longitude in degrees. Correct the cell");
  CHECK(to_text(note("roads.osm", "3 blinkers left out")) == "note: roads.osm: 3 blinkers left out");
}

TEST_CASE("text from inputs is safe to print") {
  CHECK(printable("a\nb\x1b[31m") == "a\\x0Ab\\x1B[31m");
  CHECK(printable("caf\xC3\xA9") == "caf\xC3\xA9");
  CHECK(printable("bad\xFF\xC3") == "bad\\xFF\\xC3");
  CHECK(printable(std::string(500, 'x')).size() == 123);
}
