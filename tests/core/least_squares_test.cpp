#include "core/fit/least_squares.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>
#include <iostream>

#include "core/base/error.hpp"
#include "core/base/random.hpp"
#include "core/base/tolerance.hpp"
#include "core/fit/inference.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/exact_fit.hpp"
#include "tests/support/matrix_source.hpp"
#include "tests/support/reference.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

MatrixXd normal_matrix(Random& random, Index rows, Index columns) {
  MatrixXd result(rows, columns);
  for (Index j = 0; j < columns; ++j)
    for (Index i = 0; i < rows; ++i) result(i, j) = random.normal();
  return result;
}
VectorXd normal_vector(Random& random, Index rows) { return normal_matrix(random, rows, 1).col(0); }

/// Singular values from 1 down to 1 / condition, evenly on a logarithmic scale; rounding the entries to
/// doubles changes the smallest of them a little, for the fit and for the truth alike.
MatrixXd of_condition(Random& random, Index rows, Index columns, double condition) {
  const MatrixXd left = Eigen::HouseholderQR<MatrixXd>(normal_matrix(random, rows, columns)).householderQ() *
                        MatrixXd::Identity(rows, columns);
  const MatrixXd right =
      Eigen::HouseholderQR<MatrixXd>(normal_matrix(random, columns, columns)).householderQ();
  VectorXd values(columns);
  for (Index k = 0; k < columns; ++k)
    values[k] = std::pow(condition, -static_cast<double>(k) / static_cast<double>(columns - 1));
  return std::sqrt(static_cast<double>(rows)) * left * values.asDiagonal() * right.transpose();
}

struct Digits {
  double estimates = 16, errors = 16, inflation = 16, whole = 16;
  double fewest() const { return std::min({estimates, errors, inflation, whole}); }
};
Digits digits_of(const LeastSquaresFit& fit, const ExactFit& truth) {
  Digits digits;
  const auto lower = [](double& fewest, double value, double certified) {
    fewest = std::min(fewest, matching_digits(value, certified));
  };
  for (Index j = 0; j < fit.coefficients.size(); ++j) {
    lower(digits.estimates, fit.coefficients[j], truth.coefficients[j]);
    lower(digits.errors, fit.standard_errors[j], truth.standard_errors[j]);
    lower(digits.inflation, fit.variance_inflation[j], truth.variance_inflation[j]);
  }
  if (fit.intercept) {
    lower(digits.estimates, fit.intercept_estimate, truth.intercept);
    lower(digits.errors, fit.intercept_standard_error, truth.intercept_standard_error);
  }
  const FitQuality quality = fit_quality(fit);
  lower(digits.whole, fit.residual_sd, truth.residual_sd);
  lower(digits.whole, quality.r_squared, truth.r_squared);
  lower(digits.whole, quality.f, truth.f);
  return digits;
}

}  // namespace

TEST_CASE("designs of condition 1e4 to 1e15 are solved to 13 digits", "[singular]") {
  const std::uint64_t seed = 2024;
  CAPTURE(seed);
  Random random(seed);
  for (const bool intercept : {true, false})
    for (const double condition : {1e1, 1e4, 1e6, 1e8, 1e10, 1e12, 1e13, 1e14, 1e15}) {
      const Index n = 60, p = 6;
      const MatrixXd x = of_condition(random, n, p, condition);
      const VectorXd y = x * normal_vector(random, p) + 0.1 * normal_vector(random, n);
      const MatrixSource source(x, y);
      const ExactFit truth = exact_fit(source, intercept);
      const LeastSquaresFit fit = fit_least_squares(source, intercept);
      const Digits digits = digits_of(fit, truth);
      std::cout << intercept << " " << condition << " " << truth.condition << ": " << digits.estimates << " "
                << digits.errors << " " << digits.inflation << " " << digits.whole << " "
                << fit.trusted_digits << "\n";
      CAPTURE(intercept, condition, truth.condition);
      CHECK(fit.dependencies.empty());
      CHECK(digits.fewest() >= 13);
    }
}

TEST_CASE("tall tables of condition 1e1 to 1e15 are solved to 13 digits", "[singular]") {
  const std::uint64_t seed = 2025;
  CAPTURE(seed);
  Random random(seed);
  for (const double condition : {1e0, 1e1, 1e2, 1e4, 1e6, 1e10, 1e13, 1e15}) {
    const Index n = 24000, p = 12;
    const MatrixXd x = of_condition(random, n, p, condition);
    const VectorXd y = x * normal_vector(random, p) + 0.1 * normal_vector(random, n);
    const MatrixSource source(x, y);
    const ExactFit truth = exact_fit(source, true);
    const LeastSquaresFit fit = fit_least_squares(source, true);
    const Digits digits = digits_of(fit, truth);
    std::cout << condition << " " << truth.condition << ": " << digits.estimates << " " << digits.errors
              << " " << digits.inflation << " " << digits.whole << " " << fit.trusted_digits << "\n";
    CAPTURE(condition, truth.condition);
    CHECK(fit.dependencies.empty());
    CHECK(digits.fewest() >= 13);
  }
}
