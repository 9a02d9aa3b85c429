#include "core/base/double_double.hpp"

#include <boost/multiprecision/cpp_bin_float.hpp>

#include "core/base/random.hpp"
#include "tests/support/catch.hpp"

using unply::DoubleDouble;
using unply::Random;
using Wide = boost::multiprecision::cpp_bin_float_100;

namespace {

Wide wide(const DoubleDouble& a) { return Wide(a.high) + Wide(a.low); }

// both parts at random, many exponents apart
DoubleDouble draw(Random& random) {
  const double high = std::ldexp(random.normal(), static_cast<int>(random.below(80)) - 40);
  return unply::two_sum(high, high * random.normal() * 0x1p-55);
}

double relative_error(const DoubleDouble& value, const Wide& exact) {
  return exact == 0 ? std::abs(value.high) : static_cast<double>(abs(Wide((wide(value) - exact) / exact)));
}

}  // namespace

TEST_CASE("sums, differences and products of two doubles are split without error", "[property]") {
  const std::uint64_t seed = 11;
  CAPTURE(seed);
  Random random(seed);
  for (int i = 0; i < 2000; ++i) {
    const double a = draw(random).high, b = draw(random).high;
    CHECK(wide(unply::two_sum(a, b)) == Wide(a) + Wide(b));
    CHECK(wide(unply::two_difference(a, b)) == Wide(a) - Wide(b));
    CHECK(wide(unply::two_product(a, b)) == Wide(a) * Wide(b));
  }
}

// The bounds stated beside the operations (Joldes, Muller & Popescu 2017), against 100 decimal digits.
TEST_CASE("doubled-precision operations keep their error bounds", "[property]") {
  const std::uint64_t seed = 12;
  CAPTURE(seed);
  Random random(seed);
  const double u2 = 0x1p-106;
  for (int i = 0; i < 2000; ++i) {
    const DoubleDouble a = draw(random), b = draw(random);
    CHECK(relative_error(a + b, wide(a) + wide(b)) <= 3.1 * u2);
    CHECK(relative_error(a - b, wide(a) - wide(b)) <= 3.1 * u2);
    CHECK(relative_error(a * b, wide(a) * wide(b)) <= 5 * u2);
    CHECK(relative_error(a / b, wide(a) / wide(b)) <= 10 * u2);
    CHECK(relative_error(sqrt(abs(a)), sqrt(abs(wide(a)))) <= 4 * u2);
  }
}

TEST_CASE("differences that cancel keep what the operands hold", "[property]") {
  const DoubleDouble a(1, 0x1p-80), b(1, 0x1p-90);
  CHECK((a - b).high == 0x1p-80 - 0x1p-90);
  CHECK(a.high == 1);
  CHECK(b < a);
  CHECK_FALSE(a < b);
  CHECK(abs(b - a) == a - b);
}

TEST_CASE("zero and infinity pass through division and root", "[property]") {
  CHECK((DoubleDouble(0) / DoubleDouble(3)).high == 0);
  CHECK(std::isinf((DoubleDouble(1) / DoubleDouble(0)).high));
  CHECK(sqrt(DoubleDouble(0)).high == 0);
  CHECK(std::isnan(sqrt(DoubleDouble(-1)).high));
}
