#include "core/base/random.hpp"

#include <boost/math/special_functions/erf.hpp>
#include <cmath>

namespace unply {
namespace {

std::uint64_t rotate_left(std::uint64_t x, int k) { return (x << k) | (x >> (64 - k)); }

}  // namespace

Random::Random(std::uint64_t seed) {
  for (std::uint64_t& word : state_) {  // splitmix64, so that similar seeds give unrelated streams
    seed += 0x9e3779b97f4a7c15u;
    std::uint64_t z = seed;
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9u;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebu;
    word = z ^ (z >> 31);
  }
}

std::uint64_t Random::bits() {
  const std::uint64_t result = rotate_left(state_[1] * 5, 7) * 9;
  const std::uint64_t t = state_[1] << 17;
  state_[2] ^= state_[0];
  state_[3] ^= state_[1];
  state_[1] ^= state_[2];
  state_[0] ^= state_[3];
  state_[2] ^= t;
  state_[3] = rotate_left(state_[3], 45);
  return result;
}

double Random::uniform() { return static_cast<double>(bits() >> 11) * 0x1p-53; }

double Random::normal() {
  const double u = (static_cast<double>(bits() >> 12) + 0.5) * 0x1p-52;  // never 0 or 1
  return -std::sqrt(2.0) * boost::math::erfc_inv(2 * u);
}

std::uint64_t Random::below(std::uint64_t limit) {
  const std::uint64_t unbiased = limit * (UINT64_MAX / limit);  // draws at or above it would favour small results
  std::uint64_t draw = bits();
  while (draw >= unbiased) draw = bits();
  return draw % limit;
}

}  // namespace unply
