#include "core/fit/from_correlations.hpp"

#include <Eigen/Eigenvalues>
#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/error.hpp"
#include "core/base/printed_digits.hpp"
#include "core/base/tolerance.hpp"

namespace unply {
namespace {

using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;
using Extended = long double;
using ExtendedMatrix = Eigen::Matrix<Extended, Eigen::Dynamic, Eigen::Dynamic>;
using ExtendedVector = Eigen::Matrix<Extended, Eigen::Dynamic, 1>;

constexpr double unknown = std::numeric_limits<double>::quiet_NaN();
constexpr double infinity = std::numeric_limits<double>::infinity();

/// Half a unit of the last decimal of a printed table; 0 where the correlations were computed.
double half_unit_of(const MatrixXd& correlations) {
  PrintedDigits digits;
  for (const double r : correlations.reshaped()) digits.read(r);
  return digits.decimals() ? 0.5 * std::pow(10.0, -*digits.decimals()) : 0;
}

Error two_columns(ErrorCode code, const CorrelationTable& table, Index i, Index j, double value) {
  const std::vector<std::string> columns = {table.names[static_cast<std::size_t>(i)],
                                            table.names[static_cast<std::size_t>(j)]};
  return Error(code, {{FactId::columns, columns}, {FactId::value, value}});
}

/// The whole symmetric matrix with a diagonal of exactly 1, or a refusal.
MatrixXd checked_correlations(const CorrelationTable& table) {
  MatrixXd r = table.correlations;
  const Index m = static_cast<Index>(table.names.size());
  if (r.rows() != r.cols() || r.rows() != m || m == 0) {
    throw Error(ErrorCode::correlation_shape, {{FactId::count, static_cast<double>(r.rows())},
                                               {FactId::number, static_cast<double>(r.cols())}});
  }
  for (Index i = 0; i < m; ++i) {
    if (std::isnan(r(i, i))) r(i, i) = 1;
    if (!(std::abs(r(i, i) - 1) <= tolerance::correlation_rounding)) {
      throw Error(ErrorCode::correlation_diagonal,
                  {{FactId::name, table.names[static_cast<std::size_t>(i)]}, {FactId::value, r(i, i)}});
    }
    r(i, i) = 1;
    for (Index j = 0; j < i; ++j) {
      if (std::isnan(r(i, j))) r(i, j) = r(j, i);
      if (std::isnan(r(j, i))) r(j, i) = r(i, j);
      for (const double value : {r(i, j), r(j, i)}) {
        if (!(std::abs(value) <= 1 + tolerance::correlation_rounding)) {
          throw two_columns(ErrorCode::correlation_outside, table, i, j, value);
        }
      }
      if (std::abs(r(i, j) - r(j, i)) > tolerance::correlation_rounding) {
        Error error = two_columns(ErrorCode::correlation_asymmetric, table, i, j, r(i, j));
        error.facts.set(FactId::number, r(j, i));
        throw error;
      }
      const double mean = std::clamp((r(i, j) + r(j, i)) / 2, -1.0, 1.0);
      r(i, j) = r(j, i) = mean;
    }
  }
  return r;
}

/// Means or standard deviations, one a name.
void check_summary(const CorrelationTable& table, const VectorXd& values, const char* setting,
                   bool above_zero) {
  const auto refuse = [&](const std::string& value) {
    throw Error(ErrorCode::impossible_setting,
                {{FactId::setting, std::string(setting)},
                 {FactId::value, value},
                 {FactId::allowed, std::string(above_zero ? "> 0" : "a number for each variable")}});
  };
  if (values.size() != static_cast<Index>(table.names.size())) refuse(std::to_string(values.size()));
  for (const double value : values) {
    if (!std::isfinite(value) || (above_zero && !(value > 0))) refuse(std::to_string(value));
  }
}

void check_rows(double rows, double needed, std::size_t coefficients) {
  if (rows >= needed) return;
  throw Error(
      ErrorCode::too_few_rows,
      {{FactId::rows, rows}, {FactId::needed, needed}, {FactId::count, static_cast<double>(coefficients)}});
}

/// The standardised problem reduced to the columns that can be kept.
struct Reduced {
  ExtendedMatrix factor;          // r x r upper triangular
  std::vector<std::size_t> kept;  // among the predictors
};

/// Cholesky column by column; a column whose remainder is rounding depends on those before it.
Reduced reduce(const MatrixXd& correlation, double rounding, LeastSquaresFit& fit) {
  const Index p = correlation.rows();
  Reduced reduced;
  ExtendedMatrix t = ExtendedMatrix::Zero(p, p);
  Index rank = 0;
  for (Index j = 0; j < p; ++j) {
    ExtendedVector along(rank);
    for (Index k = 0; k < rank; ++k)
      along[k] = correlation(static_cast<Index>(reduced.kept[static_cast<std::size_t>(k)]), j);
    const auto triangle = t.topLeftCorner(rank, rank).triangularView<Eigen::Upper>();
    triangle.transpose().solveInPlace(along);
    const Extended rest = 1 - along.squaredNorm();
    if (rest > static_cast<Extended>(static_cast<double>(p) * 8 * tolerance::unit_roundoff)) {
      t.col(rank).head(rank) = along;
      t(rank, rank) = std::sqrt(rest);
      reduced.kept.push_back(static_cast<std::size_t>(j));
      ++rank;
      continue;
    }
    triangle.solveInPlace(along);  // now the coefficients, in standard deviations
    LinearDependency dependency;
    dependency.column = static_cast<std::size_t>(j);
    fit.estimable[dependency.column] = false;
    double scale = fit.sd[j] * std::sqrt(static_cast<double>(fit.rows)), constant = fit.mean[j];
    for (Index k = 0; k < rank; ++k) {
      const double c = static_cast<double>(along[k]);
      if (std::abs(c) <= rounding) continue;
      const std::size_t other = reduced.kept[static_cast<std::size_t>(k)];
      const double in_units = c * fit.sd[j] / fit.sd[static_cast<Index>(other)];
      dependency.on.push_back(other);
      dependency.coefficients.push_back(in_units);
      constant -= in_units * fit.mean[static_cast<Index>(other)];
      scale += std::abs(c) * fit.sd[j] * std::sqrt(static_cast<double>(fit.rows));
      fit.estimable[other] = false;
    }
    dependency.constant = constant;
    dependency.relative_residual =
        fit.sd[j] * std::sqrt(static_cast<double>(fit.rows) * std::abs(static_cast<double>(rest))) / scale;
    if (std::abs(constant) > rounding * fit.sd[j]) fit.intercept_estimable = false;
    fit.dependencies.push_back(std::move(dependency));
  }
  reduced.factor = t.topLeftCorner(rank, rank);
  return reduced;
}

}  // namespace

LeastSquaresFit fit_from_correlations(const CorrelationTable& table) {
  const MatrixXd all = checked_correlations(table);
  const Index m = all.rows();
  for (std::size_t i = 0; i < table.names.size(); ++i) {
    if (std::count(table.names.begin(), table.names.end(), table.names[i]) > 1) {
      throw Error(ErrorCode::duplicate_heading,
                  {{FactId::name, table.names[i]}, {FactId::addresses, std::vector<std::string>{}}});
    }
  }
  Index response = -1;
  if (!table.response.empty()) {
    const auto at = std::find(table.names.begin(), table.names.end(), table.response);
    if (at == table.names.end()) {
      throw Error(ErrorCode::unknown_column,
                  {{FactId::name, table.response}, {FactId::allowed, table.names}});
    }
    response = at - table.names.begin();
  }
  check_rows(table.rows, 2, static_cast<std::size_t>(m - (response >= 0)) + 1);
  if (!(table.rows <= tolerance::most_rows) || table.rows != std::floor(table.rows)) {
    throw Error(ErrorCode::impossible_setting, {{FactId::setting, std::string("rows")},
                                                {FactId::value, std::to_string(table.rows)},
                                                {FactId::allowed, std::string("a whole number")}});
  }
  if (table.means) check_summary(table, *table.means, "means", false);
  if (table.sds) check_summary(table, *table.sds, "standard deviations", true);
  const bool in_units = table.means.has_value() && table.sds.has_value();

  const double smallest =
      Eigen::SelfAdjointEigenSolver<MatrixXd>(all, Eigen::EigenvaluesOnly).eigenvalues()[0];
  const double explained_by_rounding =
      static_cast<double>(m) * (half_unit_of(all) + 8 * tolerance::unit_roundoff);
  if (smallest < -explained_by_rounding) {
    throw Error(ErrorCode::correlation_not_psd, {{FactId::value, smallest}});
  }

  std::vector<Index> predictors;
  for (Index i = 0; i < m; ++i) {
    if (i != response) predictors.push_back(i);
  }
  const Index p = static_cast<Index>(predictors.size());
  LeastSquaresFit fit;
  fit.rows = static_cast<std::size_t>(table.rows);
  fit.columns = static_cast<std::size_t>(p);
  fit.has_response = response >= 0;
  fit.mean = VectorXd::Zero(p);
  fit.sd = VectorXd::Ones(p);
  fit.correlation.resize(p, p);
  for (Index i = 0; i < p; ++i) {
    if (in_units) fit.mean[i] = (*table.means)[predictors[static_cast<std::size_t>(i)]];
    if (table.sds) fit.sd[i] = (*table.sds)[predictors[static_cast<std::size_t>(i)]];
    for (Index j = 0; j < p; ++j) {
      fit.correlation(i, j) =
          all(predictors[static_cast<std::size_t>(i)], predictors[static_cast<std::size_t>(j)]);
    }
  }
  fit.estimable.assign(fit.columns, true);
  fit.intercept_estimable = in_units;

  const Reduced reduced = reduce(fit.correlation, explained_by_rounding, fit);
  fit.kept = reduced.kept;
  const Index r = static_cast<Index>(fit.kept.size());
  fit.correlation_factor = reduced.factor.cast<double>();
  const ExtendedMatrix inverse_factor =
      reduced.factor.triangularView<Eigen::Upper>().solve(ExtendedMatrix::Identity(r, r));
  const ExtendedMatrix inverse = inverse_factor * inverse_factor.transpose();
  fit.correlation_inverse = MatrixXd::Constant(p, p, unknown);
  fit.variance_inflation = VectorXd::Constant(p, infinity);
  for (Index a = 0; a < r; ++a) {
    const std::size_t i = fit.kept[static_cast<std::size_t>(a)];
    if (!fit.estimable[i]) continue;
    fit.variance_inflation[static_cast<Index>(i)] = static_cast<double>(inverse(a, a));
    for (Index b = 0; b < r; ++b) {
      const std::size_t j = fit.kept[static_cast<std::size_t>(b)];
      if (fit.estimable[j]) {
        fit.correlation_inverse(static_cast<Index>(i), static_cast<Index>(j)) =
            static_cast<double>(inverse(a, b));
      }
    }
  }
  const double n = table.rows;
  if (in_units) {
    // [1 X] = Q [sqrt n, sqrt n mean'; 0, sqrt(n-1) T sd], columns then scaled to unit length
    fit.uncentred_factor = MatrixXd::Zero(r + 1, r + 1);
    fit.uncentred_factor(0, 0) = 1;
    for (Index a = 0; a < r; ++a) {
      const Index j = static_cast<Index>(fit.kept[static_cast<std::size_t>(a)]);
      const double level = std::sqrt(n) * fit.mean[j], spread = std::sqrt(n - 1) * fit.sd[j];
      const double length = std::hypot(level, spread);
      fit.uncentred_factor(0, a + 1) = level / length;
      fit.uncentred_factor.col(a + 1).tail(r) = fit.correlation_factor.col(a) * (spread / length);
    }
  }
  // A change of half a unit in every entry moves R^-1 b by at most this share of b.
  const double amplified = explained_by_rounding * static_cast<double>(r > 0 ? inverse.norm() : Extended{0});
  fit.trusted_digits = amplified > 0 ? std::clamp(-std::log10(amplified), 0.0, 15.0) : 15;
  if (!fit.has_response) return fit;

  fit.residual_df = static_cast<std::ptrdiff_t>(fit.rows) - r - 1;
  check_rows(n, static_cast<double>(r + 2), static_cast<std::size_t>(r + 1));
  fit.response_mean = in_units ? (*table.means)[response] : 0;
  fit.response_sd = table.sds ? (*table.sds)[response] : 1;
  ExtendedVector along(r);
  for (Index a = 0; a < r; ++a) {
    along[a] = all(predictors[fit.kept[static_cast<std::size_t>(a)]], response);
  }
  const ExtendedVector projected = inverse_factor.transpose() * along;
  fit.unexplained_share = static_cast<double>(std::max(Extended{0}, 1 - projected.squaredNorm()));
  fit.residual_sd =
      fit.response_sd * std::sqrt((n - 1) * fit.unexplained_share / static_cast<double>(fit.residual_df));
  const ExtendedVector standardised = inverse_factor * projected;
  fit.standardised = fit.coefficients = fit.standard_errors = VectorXd::Constant(p, unknown);
  VectorXd step = VectorXd::Zero(r);  // of the intercept: mean over standard deviation
  for (Index a = 0; a < r; ++a) {
    const std::size_t column = fit.kept[static_cast<std::size_t>(a)];
    const Index j = static_cast<Index>(column);
    step[a] = fit.mean[j] / fit.sd[j];
    if (!fit.estimable[column]) continue;
    fit.standardised[j] = static_cast<double>(standardised[a]);
    fit.coefficients[j] = fit.standardised[j] * fit.response_sd / fit.sd[j];
    fit.standard_errors[j] =
        fit.residual_sd / std::sqrt(n - 1) / fit.sd[j] * std::sqrt(fit.variance_inflation[j]);
  }
  fit.intercept_estimate = fit.intercept_standard_error = unknown;
  if (fit.intercept_estimable) {
    fit.intercept_estimate = fit.response_mean - fit.response_sd * step.dot(standardised.cast<double>());
    const double reach = (inverse_factor.transpose() * step.cast<Extended>()).cast<double>().squaredNorm();
    fit.intercept_standard_error = fit.residual_sd * std::sqrt(1 / n + reach / (n - 1));
  }
  return fit;
}

}  // namespace unply
