// Unit conversions at the border. Inside, everything is SI: seconds, metres, metres per second, vehicles per second.
#pragma once

namespace entrain {

inline constexpr double metres_per_foot = 0.3048;      // exact, international foot
inline constexpr double mps_per_mph = 0.44704;         // exact, international mile
inline constexpr double mps_per_kph = 1.0 / 3.6;
inline constexpr double gravity_mps2 = 9.80665;        // standard acceleration of free fall
inline constexpr double seconds_per_hour = 3600.0;
inline constexpr double seconds_per_day = 86400.0;

// Which side of the road traffic keeps to.
enum class TrafficSide { right, left };

}  // namespace entrain
