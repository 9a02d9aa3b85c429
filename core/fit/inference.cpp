#include "core/fit/inference.hpp"

#include <Eigen/Dense>
#include <boost/math/distributions/chi_squared.hpp>
#include <boost/math/distributions/fisher_f.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <cmath>
#include <limits>

namespace unply {
namespace {

using boost::math::complement;
// A statistic out of range gives NaN or infinity, never an exception: the tables show it as "not known".
using Quiet = boost::math::policies::policy<
    boost::math::policies::domain_error<boost::math::policies::ignore_error>,
    boost::math::policies::pole_error<boost::math::policies::ignore_error>,
    boost::math::policies::overflow_error<boost::math::policies::ignore_error>,
    boost::math::policies::evaluation_error<boost::math::policies::ignore_error>,
    boost::math::policies::promote_double<false>>;

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();

CoefficientTest test_of(double estimate, double standard_error, double df, double level) {
  CoefficientTest test;
  test.estimate = estimate;
  test.standard_error = standard_error;
  test.t = estimate / standard_error;  // a perfect fit: infinite, or NaN where the estimate is 0 as well
  test.p = t_two_sided_p(test.t, df);
  const double reach = standard_error == 0 ? 0 : t_quantile(level, df) * standard_error;
  test.interval = {estimate - reach, estimate + reach};
  return test;
}

}  // namespace

double t_two_sided_p(double t, double df) {
  if (std::isnan(t) || !(df > 0)) return not_a_number;
  if (std::isinf(t)) return 0;
  return 2 * cdf(complement(boost::math::students_t_distribution<double, Quiet>(df), std::abs(t)));
}

double t_quantile(double level, double df) {
  if (!(level > 0 && level < 1) || !(df > 0)) return not_a_number;
  return quantile(complement(boost::math::students_t_distribution<double, Quiet>(df), (1 - level) / 2));
}

double f_upper_p(double f, double df_numerator, double df_denominator) {
  if (std::isnan(f) || !(df_numerator > 0) || !(df_denominator > 0)) return not_a_number;
  if (std::isinf(f)) return f > 0 ? 0 : 1;
  if (f <= 0) return 1;
  return cdf(complement(boost::math::fisher_f_distribution<double, Quiet>(df_numerator, df_denominator), f));
}

double chi_squared_upper_p(double x, double df) {
  if (std::isnan(x) || !(df > 0)) return not_a_number;
  if (std::isinf(x)) return x > 0 ? 0 : 1;
  if (x <= 0) return 1;
  return cdf(complement(boost::math::chi_squared_distribution<double, Quiet>(df), x));
}

std::vector<CoefficientTest> coefficient_tests(const LeastSquaresFit& fit,
                                               const Eigen::VectorXd& standard_errors, double level) {
  std::vector<CoefficientTest> tests;
  tests.reserve(fit.columns);
  for (Eigen::Index j = 0; j < static_cast<Eigen::Index>(fit.columns); ++j)
    tests.push_back(test_of(fit.coefficients[j],
                            fit.estimable[static_cast<std::size_t>(j)] ? standard_errors[j] : not_a_number,
                            static_cast<double>(fit.residual_df), level));
  return tests;
}

CoefficientTest intercept_test(const LeastSquaresFit& fit, double standard_error, double level) {
  return test_of(fit.intercept_estimate,
                 fit.intercept && fit.intercept_estimable ? standard_error : not_a_number,
                 static_cast<double>(fit.residual_df), level);
}

JointTest joint_test(const LeastSquaresFit& fit, const std::vector<std::size_t>& columns) {
  std::vector<Eigen::Index> tested;
  for (std::size_t column : columns)
    if (fit.estimable[column]) tested.push_back(static_cast<Eigen::Index>(column));
  JointTest test;
  test.df_numerator = tested.size();
  test.df_denominator = fit.residual_df;
  const Eigen::Index count = static_cast<Eigen::Index>(tested.size());
  Eigen::VectorXd effect(count);
  Eigen::MatrixXd inverse(count, count);
  for (Eigen::Index a = 0; a < count; ++a) {
    effect[a] = fit.standardised[tested[a]];
    for (Eigen::Index b = 0; b < count; ++b) inverse(a, b) = fit.correlation_inverse(tested[a], tested[b]);
  }
  const double explained = count == 0 ? 0 : effect.dot(inverse.ldlt().solve(effect));
  test.f =
      explained / static_cast<double>(count) / (fit.unexplained_share / static_cast<double>(fit.residual_df));
  test.p = f_upper_p(test.f, static_cast<double>(count), static_cast<double>(fit.residual_df));
  return test;
}

FitQuality fit_quality(const LeastSquaresFit& fit) {
  FitQuality quality;
  quality.df_model = fit.kept.size();
  quality.residual_df = fit.residual_df;
  quality.residual_sd = fit.residual_sd;
  const double model = static_cast<double>(quality.df_model), residual = static_cast<double>(fit.residual_df);
  quality.r_squared = 1 - fit.unexplained_share;
  quality.adjusted_r_squared = 1 - fit.unexplained_share * (model + residual) / residual;
  quality.f = quality.r_squared / model / (fit.unexplained_share / residual);
  quality.p = f_upper_p(quality.f, model, residual);
  return quality;
}

}  // namespace unply
