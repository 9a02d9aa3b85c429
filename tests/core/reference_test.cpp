#include "tests/support/reference.hpp"

#include "tests/support/catch.hpp"
#include <limits>

using namespace unply::test;

TEST_CASE("digits of agreement are the log relative error", "[support]") {
  CHECK(matching_digits(1.0, 1.0) == 16);
  CHECK(matching_digits(1.001, 1.0) == Approx(3).margin(0.01));
  CHECK(matching_digits(1e-5, 0.0) == Approx(5));
  CHECK(matching_digits(std::numeric_limits<double>::quiet_NaN(), 1.0) == 0);
}

TEST_CASE("a printed figure is matched to its last place and no further", "[support]") {
  CHECK(agrees_as_printed(0.71559, "0.7156"));
  CHECK_FALSE(agrees_as_printed(0.71569, "0.7156"));
  CHECK(agrees_as_printed(0.00334801, "0.334801E-02"));
  CHECK(agrees_as_printed(-39.91967, "-39.9197"));
}

TEST_CASE("figures and data of the reference folder are read as written", "[support]") {
  const Figures figures = read_figures("nist_longley");
  CHECK(figures.at("published | residual_sd") == "304.854073561965");
  const Csv csv = read_csv("nist_longley");
  CHECK(csv.headings.size() == 7);
  CHECK(csv.rows.size() == 16);
  CHECK(csv.numbers("x1")[0] == 83);
}
