// All eleven data sets of the linear-regression part of the NIST Statistical Reference Datasets
// (https://www.itl.nist.gov/div898/strd/, doi:10.18434/T43G6C): certified values to 15 digits, and the same
// recomputed in exact rational arithmetic to 30 (tests/reference/nist_*.txt).
#include <Eigen/Core>
#include <iostream>
#include <string>
#include <vector>

#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/matrix_source.hpp"
#include "tests/support/reference.hpp"

using namespace unply;
using namespace unply::test;

namespace {

struct Set {
  std::string name;
  int degree;  // of the polynomial in x; 0: the columns x1 ... x6 as they stand
  bool intercept;
};

const std::vector<Set> sets = {{"norris", 1, true},   {"pontius", 2, true},  {"noint1", 1, false},
                               {"noint2", 1, false},  {"filip", 10, true},   {"longley", 0, true},
                               {"wampler1", 5, true}, {"wampler2", 5, true}, {"wampler3", 5, true},
                               {"wampler4", 5, true}, {"wampler5", 5, true}};

struct Prepared {
  MatrixSource source;
  std::vector<std::string> terms;
};

Prepared prepare(const Set& set) {
  const Csv csv = read_csv("nist_" + set.name);
  Prepared prepared;
  for (int k = 1; k <= set.degree; ++k) {
    prepared.source.add_power(csv.numbers("x"), k);
    prepared.terms.push_back(k == 1 ? "x" : "x^" + std::to_string(k));
  }
  for (int k = 1; set.degree == 0 && k <= 6; ++k) {
    prepared.terms.push_back("x" + std::to_string(k));
    prepared.source.add(csv.numbers(prepared.terms.back()));
  }
  prepared.source.respond(csv.numbers("y"));
  return prepared;
}

}  // namespace

TEST_CASE("every certified figure of the eleven NIST sets is met to 13 digits", "[published]") {
  for (const Set& set : sets) {
    CAPTURE(set.name);
    const Prepared prepared = prepare(set);
    const Figures figures = read_figures("nist_" + set.name);
    const LeastSquaresFit fit = fit_least_squares(prepared.source, set.intercept);
    REQUIRE(fit.dependencies.empty());
    double fewest = 16;
    const auto figure = [&](const std::string& what) {
      return std::stod(figures.at("recomputed | " + what));
    };
    const auto compare = [&](const std::string& what, double value, double certified) {
      CAPTURE(what, value, certified);
      const double digits = matching_digits(value, certified);
      fewest = std::min(fewest, digits);
      CHECK(digits >= 13);
    };
    // Where a standard deviation is certified as 0 the arithmetic may leave 2^-50 of the response's spread,
    // carried to the coefficient as s is: |se| <= 2^-50 sd_y * sqrt((X'X)^-1_jj).
    const bool perfect = std::stod(figures.at("published | residual_sd")) == 0;
    const auto compare_deviation = [&](const std::string& term, double value, double unit) {
      if (!perfect) return compare("sd " + term, value, figure("standard_deviations | " + term));
      CAPTURE(term, value, unit);
      CHECK(value <= std::ldexp(fit.response_sd * unit, -50));
    };
    if (set.intercept) {
      compare("1", fit.intercept_estimate, figure("estimates | 1"));
      if (!perfect) compare("sd 1", fit.intercept_standard_error, figure("standard_deviations | 1"));
    }
    for (std::size_t j = 0; j < prepared.terms.size(); ++j) {
      const std::string& term = prepared.terms[j];
      const auto at = static_cast<Eigen::Index>(j);
      compare(term, fit.coefficients[at], figure("estimates | " + term));
      compare_deviation(
          term, fit.standard_errors[at],
          std::sqrt(fit.variance_inflation[at] / static_cast<double>(fit.rows - set.intercept)) / fit.sd[at]);
      const auto vif =
          figures.find("other | collinearity | vif | " + term);  // not listed for a single column
      compare("VIF " + term, fit.variance_inflation[at], vif == figures.end() ? 1 : std::stod(vif->second));
    }
    const FitQuality quality = fit_quality(fit);
    compare("R^2", quality.r_squared, figure("r_squared"));
    CHECK(fit.residual_df == std::stoi(figures.at("published | df_residual")));
    if (perfect) {
      CHECK(fit.residual_sd <= std::ldexp(fit.response_sd, -50));
      CHECK(quality.f > 1e25);
    } else {
      compare("s", fit.residual_sd, figure("residual_sd"));
      compare("F", quality.f, figure("F"));
      // the certified figures as printed; Wampler5's printed F is off in its 17th digit, so 15 digits at most
      compare("printed s", fit.residual_sd, std::stod(figures.at("published | residual_sd")));
      compare("printed F", quality.f, std::stod(figures.at("published | F")));
    }
    std::cout << set.name << ": fewest matching digits " << fewest << ", trusted " << fit.trusted_digits
              << "\n";
  }
}
