// A duration or a point of time in tenths of a second: the finest step a signal controller takes.
#pragma once

#include <compare>
#include <cstdint>

namespace entrain {

struct Tenths {
  std::int32_t count = 0;  // tenths of a second

  static constexpr Tenths from_seconds(std::int32_t seconds) { return {seconds * 10}; }
  // Nearest tenth; the argument must be finite and within +-10^8 s.
  static constexpr Tenths nearest(double seconds) {
    return {static_cast<std::int32_t>(seconds * 10.0 + (seconds < 0 ? -0.5 : 0.5))};
  }

  constexpr double seconds() const { return count / 10.0; }
  constexpr bool is_whole_second() const { return count % 10 == 0; }

  constexpr auto operator<=>(const Tenths&) const = default;
  constexpr Tenths operator+(Tenths other) const { return {count + other.count}; }
  constexpr Tenths operator-(Tenths other) const { return {count - other.count}; }
  constexpr Tenths operator-() const { return {-count}; }
  constexpr Tenths operator*(std::int32_t factor) const { return {count * factor}; }
  constexpr Tenths& operator+=(Tenths other) { count += other.count; return *this; }
  constexpr Tenths& operator-=(Tenths other) { count -= other.count; return *this; }
};

// Least whole second that is not earlier.
constexpr Tenths round_up_to_second(Tenths t) { return {(t.count + (t.count >= 0 ? 9 : 0)) / 10 * 10}; }

}  // namespace entrain
