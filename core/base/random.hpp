// Random numbers whose stream is defined here, not by the standard library: same seed, same numbers, on any machine.
#pragma once

#include <cstdint>

namespace unply {

/// xoshiro256** 1.0 seeded by splitmix64. Source: Blackman & Vigna, Scrambled linear pseudorandom number generators,
/// ACM TOMS 47 (2021).
class Random {
 public:
  explicit Random(std::uint64_t seed);
  std::uint64_t bits();
  double uniform();                          // in [0, 1), 53 bits
  double normal();                           // standard normal, by the quantile function of the uniform
  std::uint64_t below(std::uint64_t limit);  // 0 .. limit - 1, without bias

 private:
  std::uint64_t state_[4];
};

}  // namespace unply
