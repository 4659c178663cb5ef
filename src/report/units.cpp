#include "report/units.hpp"

#include "base/number_text.hpp"
#include "base/quantity.hpp"

namespace entrain::report {

Units units_of(const std::string& word) { return word == "us" ? Units::us : Units::metric; }

std::string seconds_text(double seconds) { return number_text(seconds, 1); }

std::string count_text(double count) {
  std::string text = fixed_text(count, 0);
  const std::size_t first = text.front() == '-' ? 1 : 0;
  for (std::size_t i = text.size(); i > first + 3; i -= 3) text.insert(i - 3, ",");
  return text;
}

std::string length_text(double metres, Units units) {
  return units == Units::us ? count_text(metres / metres_per_foot) + " ft" : count_text(metres) + " m";
}

std::string speed_text(double mps, Units units) {
  return units == Units::us ? fixed_text(mps / mps_per_mph, 0) + " mph" : fixed_text(mps / mps_per_kph, 0) + " km/h";
}

std::string share_text(double share) { return fixed_text(share * 100, 0) + " %"; }

std::string ratio_text(double ratio) { return fixed_text(ratio, 2); }

}  // namespace entrain::report
