#include "core/base/printed_digits.hpp"

#include <cmath>
#include <limits>
#include <vector>

#include "core/base/random.hpp"
#include "tests/support/catch.hpp"

using namespace unply;

namespace {

std::optional<int> decimals_of(const std::vector<double>& values) {
  PrintedDigits digits;
  for (const double value : values) digits.read(value);
  return digits.decimals();
}

}  // namespace

TEST_CASE("decimals of a column are those of its longest number", "[base]") {
  CHECK(decimals_of({}) == 0);
  CHECK(decimals_of({1, 250, -3}) == 0);
  CHECK(decimals_of({1, 2.5, 0.125}) == 3);
  CHECK(decimals_of({12.3, -0.1, 1e6}) == 1);
  CHECK(decimals_of({0.1 + 0.2}) == 1);  // the rounding of a sum is no digit
  CHECK(decimals_of({1e-9, 2.5e-9}) == 10);
  CHECK(decimals_of({-6.860120914}) == 9);
  CHECK(decimals_of({1e15}).has_value() == false);
  CHECK(decimals_of({std::nan(""), std::numeric_limits<double>::infinity(), 0.5}) == 1);
}

TEST_CASE("numbers with more than 14 significant digits were computed", "[base]") {
  CHECK_FALSE(decimals_of({1.0 / 3, 0.5}).has_value());
  CHECK_FALSE(decimals_of({1e10, 1e-10}).has_value());
  CHECK(decimals_of({1e7, 1e-7}) == 7);
  const std::uint64_t seed = 20260203;
  CAPTURE(seed);
  Random random(seed);
  std::vector<double> drawn(10);
  for (double& value : drawn) value = random.normal();
  CHECK_FALSE(decimals_of(drawn).has_value());
}

TEST_CASE("every number of up to 12 digits is read back with its decimals", "[base]") {
  const std::uint64_t seed = 20260204;
  CAPTURE(seed);
  Random random(seed);
  for (int decimals = 0; decimals <= 12; ++decimals) {
    std::vector<double> values;
    for (int i = 0; i < 200; ++i) {
      values.push_back(static_cast<double>(random.below(1000000000000)) / std::pow(10.0, decimals));
    }
    values.push_back(std::pow(10.0, -decimals));
    CAPTURE(decimals);
    CHECK(decimals_of(values) == decimals);
  }
}
