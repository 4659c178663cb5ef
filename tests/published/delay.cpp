// Delay, capacity, cycle length and dispersion against published values; each names its source.
#include <catch2/catch.hpp>
#include <cmath>

#include "evaluation/evaluate.hpp"
#include "traffic/delay.hpp"

using namespace entrain::traffic;

TEST_CASE("Webster's delay, c = 60, g = 30, q = 600/h, s = 1800/h", "[published]") {
  // Form: Salter, Highway Traffic Analysis and Design, ch. 43; recomputed: 11.2500 + 4.0000 - 1.35515 = 13.89485 s.
  CHECK(webster_delay_s(60, 30, 600 / 3600.0, 1800 / 3600.0) == Approx(13.89485).epsilon(1e-6));
  CHECK(std::isinf(webster_delay_s(60, 30, 900 / 3600.0, 1800 / 3600.0)));
}

TEST_CASE("Highway Capacity Manual 2000 delay terms", "[published]") {
  // Inputs: Roess, Prassas, McShane, Traffic Engineering; recomputed from the manual's formulas.
  CHECK(uniform_delay_s(90, 36, 800.0 / 775) == Approx(27.000).epsilon(1e-5));
  CHECK(overflow_delay_s(800.0 / 775, 775) == Approx(40.897).epsilon(1e-4));
  CHECK(uniform_delay_s(60, 30, 600.0 / 900) == Approx(11.250).epsilon(1e-5));
  CHECK(overflow_delay_s(600.0 / 900, 900) == Approx(3.899).epsilon(1e-3));
}

TEST_CASE("Progression factors at g/C = .40", "[published]") {
  // HCM 2000 exhibit 16-12, constants from memory, values recomputed.
  const double expected[] = {1.445, 1.136, 1.0, .895, .555, .333};
  for (int type = 1; type <= 6; ++type) CHECK(progression_factor(type, 0.40) == Approx(expected[type - 1]).margin(0.0006));
}

TEST_CASE("Webster's optimum cycle", "[published]") {
  // Webster (1958): flows 1000/2500 and 900/3000, L = 12 s.
  CHECK(webster_cycle_s(12, 1000.0 / 2500 + 900.0 / 3000) == Approx(76.667).epsilon(1e-4));
  // Rogers, Highway Engineering, example 5.6: y = .25 .25 .22, L = 12.
  CHECK(webster_cycle_s(12, .72) == Approx(82.143).epsilon(1e-5));
  CHECK(std::isinf(webster_cycle_s(12, 1.0)));
}

TEST_CASE("Level of service by control delay", "[published]") {
  // FHWA-HOP-08-024 p. 3-14: A <= 10, B <= 20, C <= 35, D <= 55, E <= 80 s.
  using entrain::evaluation::level_of_service;
  CHECK(level_of_service(10) == "A");
  CHECK(level_of_service(10.1) == "B");
  CHECK(level_of_service(35) == "C");
  CHECK(level_of_service(55) == "D");
  CHECK(level_of_service(80) == "E");
  CHECK(level_of_service(80.1) == "F");
}
