#include "core/fit/inference.hpp"

#include <boost/math/distributions/chi_squared.hpp>
#include <boost/math/distributions/fisher_f.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <cmath>
#include <limits>

#include "core/base/double_double.hpp"
#include "core/base/tolerance.hpp"

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

using DoubledVector = std::vector<DoubleDouble>;

DoubleDouble dot(const DoubledVector& a, const DoubledVector& b) {
  DoubleDouble sum;
  for (std::size_t k = 0; k < a.size(); ++k) sum += a[k] * b[k];
  return sum;
}
double squared_length(const DoubledVector& a) { return dot(a, a).high; }

void add_multiple(DoubledVector& to, const DoubleDouble& factor, const DoubledVector& from) {
  for (std::size_t k = 0; k < to.size(); ++k) to[k] += factor * from[k];
}

DoubleDouble factor_at(const LeastSquaresFit& fit, Eigen::Index i, Eigen::Index j) {
  const bool low = fit.correlation_factor_low.size() > 0;
  return {fit.correlation_factor(i, j), low ? fit.correlation_factor_low(i, j) : 0};
}

DoubledVector column_of_factor(const LeastSquaresFit& fit, std::size_t column) {
  DoubledVector result(static_cast<std::size_t>(fit.correlation_factor.rows()));
  for (std::size_t i = 0; i <= column; ++i)
    result[i] = factor_at(fit, static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(column));
  return result;
}

DoubledVector row_of_inverse(const LeastSquaresFit& fit, std::size_t row) {
  DoubledVector result(static_cast<std::size_t>(fit.correlation_factor.rows()));
  for (std::size_t j = row; j < result.size(); ++j) {
    DoubleDouble value = j == row ? 1.0 : 0.0;
    for (std::size_t i = row; i < j; ++i)
      value -= result[i] * factor_at(fit, static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(j));
    result[j] = value / factor_at(fit, static_cast<Eigen::Index>(j), static_cast<Eigen::Index>(j));
  }
  return result;
}

/// The response in the orthonormal columns of the factor.
DoubledVector response_in_factor(const LeastSquaresFit& fit) {
  DoubledVector result(fit.kept.size());
  if (fit.response_factor.size() > 0) {
    for (std::size_t k = 0; k < result.size(); ++k)
      result[k] = fit.response_factor[static_cast<Eigen::Index>(k)];
    return result;
  }
  for (std::size_t k = 0; k < result.size(); ++k)
    add_multiple(result, fit.standardised[static_cast<Eigen::Index>(fit.kept[k])], column_of_factor(fit, k));
  return result;
}

/// Orthonormal directions, in doubled precision: nearly collinear columns span what they span to all digits.
class Directions {
 public:
  explicit Directions(Eigen::Index dimension) : dimension_(static_cast<std::size_t>(dimension)) {}

  /// Adds what `vector` reaches beyond the directions so far, unless that is at most `negligible`.
  void add(DoubledVector vector, double negligible) {
    for (int pass = 0; pass < 2; ++pass)
      for (const DoubledVector& direction : directions_)
        add_multiple(vector, -dot(direction, vector), direction);
    const DoubleDouble length = sqrt(dot(vector, vector));
    if (!(length.high > negligible)) return;
    for (DoubleDouble& value : vector) value /= length;
    directions_.push_back(vector);
  }
  std::size_t count() const { return directions_.size(); }
  DoubledVector part_within(const DoubledVector& vector) const {
    DoubledVector part(dimension_);
    for (const DoubledVector& direction : directions_) add_multiple(part, dot(direction, vector), direction);
    return part;
  }
  DoubledVector part_beside(DoubledVector vector) const {
    for (const DoubledVector& direction : directions_)
      add_multiple(vector, -dot(direction, vector), direction);
    return vector;
  }

 private:
  std::size_t dimension_;
  std::vector<DoubledVector> directions_;
};

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
  std::vector<bool> tested(fit.columns, false);
  for (std::size_t column : columns) tested[column] = true;
  std::vector<std::size_t> place(fit.columns, fit.columns), within, beside;  // places among the kept columns
  bool all_estimable = true;
  for (std::size_t k = 0; k < fit.kept.size(); ++k) {
    place[fit.kept[k]] = k;
    (tested[fit.kept[k]] ? within : beside).push_back(k);
  }
  for (std::size_t column : columns) all_estimable = all_estimable && fit.estimable[column];

  // What the tested columns explain beyond the others is the part of the response in the orthonormal columns'
  // space that the others do not reach. That part is spanned by the tested columns' rows of the factor's
  // inverse, and is orthogonal to the others' columns of the factor: whichever are fewer.
  const Eigen::Index rank = fit.correlation_factor.rows();
  Directions directions(rank);
  const DoubledVector response = response_in_factor(fit);
  JointTest test;
  double explained = 0;
  if (all_estimable && within.size() <= beside.size()) {
    for (std::size_t k : within) directions.add(row_of_inverse(fit, k), 0);
    test.df_numerator = directions.count();
    explained = squared_length(directions.part_within(response));
  } else {
    for (std::size_t k : beside) directions.add(column_of_factor(fit, k), 0);
    for (const LinearDependency& dependency : fit.dependencies) {
      if (tested[dependency.column] || !(fit.sd[static_cast<Eigen::Index>(dependency.column)] > 0)) continue;
      DoubledVector column(static_cast<std::size_t>(rank));
      double size = 0;
      for (std::size_t k = 0; k < dependency.on.size(); ++k) {
        const auto on = static_cast<Eigen::Index>(dependency.on[k]);
        const double share =
            dependency.coefficients[k] * (fit.sd[on] / fit.sd[static_cast<Eigen::Index>(dependency.column)]);
        add_multiple(column, share, column_of_factor(fit, place[dependency.on[k]]));
        size += std::abs(share);
      }
      directions.add(column, tolerance::rank_relative * (1 + size));
    }
    test.df_numerator = fit.kept.size() - directions.count();
    explained = squared_length(directions.part_beside(response));
  }
  test.df_denominator = fit.residual_df;
  const double numerator = static_cast<double>(test.df_numerator),
               denominator = static_cast<double>(fit.residual_df);
  test.f = explained / numerator / (fit.unexplained_share / denominator);
  test.p = f_upper_p(test.f, numerator, denominator);
  return test;
}

FitQuality fit_quality(const LeastSquaresFit& fit) {
  FitQuality quality;
  quality.df_model = fit.kept.size();
  quality.residual_df = fit.residual_df;
  quality.residual_sd = fit.residual_sd;
  const double model = static_cast<double>(quality.df_model), residual = static_cast<double>(fit.residual_df);
  // Whichever is small is the one that is known to all its digits.
  quality.r_squared = fit.response_factor.size() > 0 && fit.unexplained_share > 0.5
                          ? fit.response_factor.squaredNorm()
                          : 1 - fit.unexplained_share;
  quality.adjusted_r_squared = 1 - fit.unexplained_share * (model + residual) / residual;
  quality.f = quality.r_squared / model / (fit.unexplained_share / residual);
  quality.p = f_upper_p(quality.f, model, residual);
  return quality;
}

}  // namespace unply
