#include "core/fit/inference.hpp"

#include "tests/support/catch.hpp"

using namespace unply;

// Upper 2.5 % points of Student's t and upper 5 % points of F and chi-squared as printed in every statistics
// handbook (e.g. Abramowitz & Stegun, Handbook of Mathematical Functions, tables 26.8 - 26.10; values from
// memory).
TEST_CASE("quantiles and tails are those of the handbook's tables", "[published]") {
  CHECK(t_quantile(0.95, 10) == Approx(2.228).margin(0.0005));
  CHECK(t_quantile(0.99, 5) == Approx(4.032).margin(0.0005));
  CHECK(t_two_sided_p(2.228, 10) == Approx(0.05).margin(5e-5));
  CHECK(f_upper_p(3.71, 3, 10) == Approx(0.05).margin(2e-4));
  CHECK(chi_squared_upper_p(18.307, 10) == Approx(0.05).margin(5e-6));
}
