// t, F, p and intervals: the only user of the distributions of Boost.Math.
#pragma once

#include <Eigen/Core>
#include <vector>

#include "core/fit/least_squares.hpp"

namespace unply {

double t_two_sided_p(double t, double df);        // by complement: exact far out in the tail
double t_quantile(double level, double df);       // half-width of a two-sided interval at `level`, in standard errors
double f_upper_p(double f, double df_numerator, double df_denominator);
double chi_squared_upper_p(double x, double df);

struct Interval {
  double lower = 0, upper = 0;
  double half_width() const { return (upper - lower) / 2; }
};

struct CoefficientTest {
  double estimate = 0, standard_error = 0, t = 0, p = 1;
  Interval interval;
};

/// One per column; NaN where inestimable. `standard_errors`: those of the fit, or robust ones of the same shape.
std::vector<CoefficientTest> coefficient_tests(const LeastSquaresFit& fit, const Eigen::VectorXd& standard_errors,
                                               double level);
CoefficientTest intercept_test(const LeastSquaresFit& fit, double standard_error, double level);

/// F-test that the coefficients of `columns` are all zero. `covariance_factor`: see robust_covariance in
/// core/diagnose/residual_checks.hpp; ordinary test from the fit alone.
struct JointTest {
  double f = 0, p = 1;
  std::size_t df_numerator = 0;
  std::ptrdiff_t df_denominator = 0;
};
JointTest joint_test(const LeastSquaresFit& fit, const std::vector<std::size_t>& columns);

struct FitQuality {
  double r_squared = 0, adjusted_r_squared = 0, residual_sd = 0, f = 0, p = 1;
  std::size_t df_model = 0;
  std::ptrdiff_t residual_df = 0;
};
FitQuality fit_quality(const LeastSquaresFit& fit);

}  // namespace unply
