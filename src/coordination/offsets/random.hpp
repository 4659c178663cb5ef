// A small deterministic source of numbers (xorshift64*, Marsaglia 2003, Vigna 2016): same seed, same numbers on every machine.
#pragma once

#include <cstdint>

namespace entrain::offsets {

class Random {
 public:
  explicit Random(std::uint64_t seed) : m_state(seed * 0x9E3779B97F4A7C15u + 0x2545F4914F6CDD1Du) {
    if (m_state == 0) m_state = 1;
    for (int i = 0; i < 4; ++i) next();
  }
  std::uint64_t next() {
    m_state ^= m_state >> 12;
    m_state ^= m_state << 25;
    m_state ^= m_state >> 27;
    return m_state * 0x2545F4914F6CDD1Du;
  }
  // 0 .. count - 1; count > 0.
  int below(int count) { return static_cast<int>(((next() >> 32) * static_cast<std::uint64_t>(count)) >> 32); }
  bool chance(double probability) { return static_cast<double>(next() >> 11) * 0x1.0p-53 < probability; }

 private:
  std::uint64_t m_state;
};

}  // namespace entrain::offsets
