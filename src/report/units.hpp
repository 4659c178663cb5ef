// Values with their units as people read them: one place for every number on paper.
#pragma once

#include <string>

namespace entrain::report {

enum class Units { us, metric };

// "us" -> us, anything else metric.
Units units_of(const std::string& word);

std::string seconds_text(double seconds);             // "34", "40.5": at most tenths
std::string length_text(double metres, Units units);  // "402 m" | "1,320 ft"
std::string speed_text(double mps, Units units);      // "46 km/h" | "29 mph"
std::string share_text(double share);                 // 0.311 -> "31 %"
std::string ratio_text(double ratio);                 // "0.61"
std::string count_text(double count);                 // "1,234": whole, with thousands separated

}  // namespace entrain::report
