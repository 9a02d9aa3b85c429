#include "core/base/random.hpp"

#include "tests/support/catch.hpp"
#include <cmath>

using unply::Random;

// The first outputs of xoshiro256** for the state 1, 2, 3, 4 are well known (11520, 0, 1509978240, ...); here the state
// comes from splitmix64, whose first outputs for seed 1234567 are published with the generator:
// 6457827717110365317, 3203168211198807973, 9817491932198370423, 4593380528125082431
// (values from memory of the reference implementation's documentation; recomputed by an independent program).
TEST_CASE("the stream is the published generator's", "[published]") {
  const std::uint64_t state1 = 3203168211198807973u;
  const std::uint64_t times5 = state1 * 5;
  Random random(1234567);
  CHECK(random.bits() == ((times5 << 7) | (times5 >> 57)) * 9);
}

TEST_CASE("uniform and normal draws have the moments of their distributions", "[property]") {
  const std::uint64_t seed = 7;
  CAPTURE(seed);
  Random random(seed);
  const int n = 200000;
  double u1 = 0, u2 = 0, z1 = 0, z2 = 0, z4 = 0;
  for (int i = 0; i < n; ++i) {
    const double u = random.uniform(), z = random.normal();
    u1 += u;
    u2 += u * u;
    z1 += z;
    z2 += z * z;
    z4 += z * z * z * z;
  }
  // five standard errors of each moment
  CHECK(std::abs(u1 / n - 0.5) < 5 * std::sqrt(1.0 / 12 / n));
  CHECK(std::abs(u2 / n - 1.0 / 3) < 5 * std::sqrt(4.0 / 45 / n));
  CHECK(std::abs(z1 / n) < 5 / std::sqrt(n));
  CHECK(std::abs(z2 / n - 1) < 5 * std::sqrt(2.0 / n));
  CHECK(std::abs(z4 / n - 3) < 5 * std::sqrt(96.0 / n));
}

TEST_CASE("whole numbers below a limit are all reached, none beyond", "[property]") {
  Random random(3);
  int seen[7] = {};
  for (int i = 0; i < 7000; ++i) ++seen[random.below(7)];
  for (int count : seen) CHECK(std::abs(count - 1000) < 150);  // five standard deviations
}
