#include "core/diagnose/residual_checks.hpp"

#include <Eigen/Cholesky>
#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/directions.hpp"
#include "core/base/tolerance.hpp"

namespace unply {
namespace {

using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

constexpr double infinity = std::numeric_limits<double>::infinity();
constexpr double unknown = std::numeric_limits<double>::quiet_NaN();
constexpr std::size_t influential_rows = 10;
constexpr std::size_t collinearity_rows = 5;

/// The `most` largest of what was offered, each with its key.
template <class Item>
class Largest {
 public:
  explicit Largest(std::size_t most) : most_(most) {}
  bool takes(double key) const { return most_ > 0 && (heap_.size() < most_ || key > heap_.front().first); }
  void add(double key, Item item) {
    if (!takes(key)) return;
    if (heap_.size() == most_) {
      std::pop_heap(heap_.begin(), heap_.end(), smaller_on_top);
      heap_.pop_back();
    }
    heap_.emplace_back(key, std::move(item));
    std::push_heap(heap_.begin(), heap_.end(), smaller_on_top);
  }
  /// Largest first.
  std::vector<Item> take() {
    std::sort_heap(heap_.begin(), heap_.end(), smaller_on_top);
    std::vector<Item> items;
    for (auto& entry : heap_) items.push_back(std::move(entry.second));
    return items;
  }

 private:
  static bool smaller_on_top(const std::pair<double, Item>& a, const std::pair<double, Item>& b) {
    return a.first > b.first;
  }
  std::size_t most_;
  std::vector<std::pair<double, Item>> heap_;
};

struct Candidate {
  std::size_t row = 0;
  double leverage = 0;
  VectorXd orthonormal;  // without the intercept's entry
};

/// Everything that one pass adds up. Residuals are in units of s, fitted values centred and in units of the
/// response's standard deviation, so that fourth powers neither overflow nor cancel.
struct Sums {
  explicit Sums(Index width)
      : meat(MatrixXd::Zero(width, width)), q(width), q_square(width), q_fitted(width) {
    q.setZero();
    q_square.setZero();
    q_fitted.setZero();
  }
  MatrixXd meat;               // sum q q' (e / (1 - h))^2, e in units of s
  double press = 0;            // sum (e / (1 - h))^2
  VectorXd q;                  // Q' 1
  VectorXd q_square;           // Q' e^2
  double square = 0;           // 1' e^2
  double fourth = 0;           // sum e^4
  VectorXd q_fitted;           // Q' f^2
  double fitted_fourth = 0;    // sum f^4
  double fitted_residual = 0;  // sum f^2 e
  std::size_t exact_rows = 0;
};

/// Condition index of the standardised columns when one row is left out.
double condition_without(const LeastSquaresFit& fit, const Candidate& candidate) {
  const VectorXd& q = candidate.orthonormal;
  const double n = static_cast<double>(fit.rows);
  // T'T (n - 1) loses n/(n-1) z z', z = sqrt(n-1) T'q: the row is taken out about the mean of the rows that
  // stay.
  const double rest = fit.intercept ? n * (1 - candidate.leverage) / (n - 1) : 1 - candidate.leverage;
  if (rest <= tolerance::exact_leverage) return infinity;
  const double along = q.squaredNorm();
  MatrixXd factor = fit.correlation_factor;
  if (along > 0) factor -= q * ((1 - std::sqrt(rest)) / along * (q.transpose() * factor)).eval();
  for (Index k = 0; k < factor.cols(); ++k) factor.col(k).normalize();
  return condition_index_of(factor);
}

std::vector<CollinearityRow> rows_that_carry_collinearity(const LeastSquaresFit& fit,
                                                          std::vector<Candidate> candidates) {
  if (candidates.empty()) return {};
  const double with = condition_index_of(fit.correlation_factor);
  std::vector<CollinearityRow> rows;
  for (const Candidate& candidate : candidates) {
    rows.push_back({candidate.row, with, condition_without(fit, candidate)});
  }
  const auto change = [](const CollinearityRow& row) {
    return std::abs(std::log(row.condition_without / row.condition_with));
  };
  std::stable_sort(rows.begin(), rows.end(),
                   [&](const CollinearityRow& a, const CollinearityRow& b) { return change(a) > change(b); });
  if (rows.size() > collinearity_rows) rows.resize(collinearity_rows);
  return rows;
}

std::size_t candidate_count(const LeastSquaresFit& fit) {
  const std::size_t columns = fit.kept.size();
  const std::size_t n = fit.rows - (fit.intercept ? 1 : 0);
  if (columns < 2 || n <= columns) return 0;  // nothing to tie, or no row that could be spared
  const std::size_t most = static_cast<std::size_t>(tolerance::collinearity_candidates);
  return columns <= 50 ? most : std::max(collinearity_rows, most * 50 / columns * 50 / columns);
}

/// Robust covariance of coefficients from the meat on the orthonormal basis.
void add_robust_errors(ResidualChecks& checks, const LeastSquaresFit& fit, const MatrixXd& meat) {
  const Index p = static_cast<Index>(fit.columns), r = static_cast<Index>(fit.kept.size());
  const Index one = fit.intercept ? 1 : 0;
  const double n = static_cast<double>(fit.rows), s = fit.residual_sd;
  // Effects of one standard deviation: W q'y with W = T^-1 / sqrt(n - 1); the intercept: the mean less what
  // they bring.
  const MatrixXd weights =
      fit.correlation_factor.triangularView<Eigen::Upper>().solve(MatrixXd::Identity(r, r)) /
      std::sqrt(n - static_cast<double>(one));
  const MatrixXd covariance =
      weights * meat.bottomRightCorner(r, r) * weights.transpose();  // in units of s^2
  const double relative = fit.response_sd > 0 ? s / fit.response_sd : 0;
  checks.robust_covariance = MatrixXd::Constant(p, p, unknown);
  checks.robust_standard_errors = VectorXd::Constant(p, unknown);
  for (Index a = 0; a < r; ++a) {
    const std::size_t i = fit.kept[static_cast<std::size_t>(a)];
    if (!fit.estimable[i]) continue;
    const Index row = static_cast<Index>(i);
    checks.robust_standard_errors[row] = std::sqrt(std::max(0.0, covariance(a, a))) * s / fit.sd[row];
    for (Index b = 0; b < r; ++b) {
      const std::size_t j = fit.kept[static_cast<std::size_t>(b)];
      if (fit.estimable[j]) {
        checks.robust_covariance(row, static_cast<Index>(j)) = covariance(a, b) * relative * relative;
      }
    }
  }
  checks.robust_intercept_standard_error = unknown;
  if (fit.intercept && fit.intercept_estimable) {
    VectorXd combination(r + 1);
    combination[0] = 1 / std::sqrt(n);
    VectorXd means(r);
    for (Index a = 0; a < r; ++a) {
      const Index j = static_cast<Index>(fit.kept[static_cast<std::size_t>(a)]);
      means[a] = fit.mean[j] / fit.sd[j];
    }
    combination.tail(r) = -weights.transpose() * means;
    checks.robust_intercept_standard_error =
        s * std::sqrt(std::max(0.0, combination.dot(meat * combination)));
  }
}

/// Koenker's n R^2 of the squared residuals on the columns and an intercept.
void add_spread_check(ResidualChecks& checks, const LeastSquaresFit& fit, const Sums& sums) {
  const double n = static_cast<double>(fit.rows);
  double explained = sums.q_square.squaredNorm();
  checks.spread_df = fit.kept.size();
  if (!fit.intercept) {
    // the part of the intercept that the columns do not already hold
    const double outside = n - sums.q.squaredNorm();
    if (outside > tolerance::curvature_outside * n) {
      const double along = sums.square - sums.q.dot(sums.q_square);
      explained += along * along / outside;
    } else if (checks.spread_df > 0) {
      --checks.spread_df;
    }
  }
  const double level = sums.square * sums.square / n;  // what the intercept alone explains
  const double total = sums.fourth - level;
  if (checks.spread_df == 0 || !(total > tolerance::curvature_outside * sums.fourth)) return;
  checks.spread_statistic = n * std::clamp((explained - level) / total, 0.0, 1.0);
  checks.spread_p = chi_squared_upper_p(checks.spread_statistic, static_cast<double>(checks.spread_df));
}

/// Tukey's one degree of freedom: the squared fitted values as one more column.
void add_curvature_check(ResidualChecks& checks, const LeastSquaresFit& fit, const Sums& sums) {
  const double df = static_cast<double>(fit.residual_df) - 1;
  const double outside = sums.fitted_fourth - sums.q_fitted.squaredNorm();
  if (df < 1 || !(outside > tolerance::curvature_outside * sums.fitted_fourth)) return;
  const double explained = sums.fitted_residual * sums.fitted_residual / outside;
  const double rest = std::max(0.0, sums.square - explained);
  checks.curvature_checked = true;
  checks.curvature_f = explained / (rest / df);
  checks.curvature_p = f_upper_p(checks.curvature_f, 1, df);
}

}  // namespace

ResidualChecks residual_checks(const RowSource& rows, const LeastSquaresFit& fit, double level) {
  const double n = static_cast<double>(fit.rows), s = fit.residual_sd;
  const Index one = fit.intercept ? 1 : 0, width = static_cast<Index>(fit.kept.size()) + one;
  const double k = static_cast<double>(width), df = static_cast<double>(fit.residual_df);
  const bool exact = !(s > tolerance::exact_fit * fit.response_sd);
  const double residual_unit = s > 0 ? 1 / s : 0;
  const double fitted_unit = fit.response_sd > 0 ? 1 / fit.response_sd : 0;

  Sums sums(width);
  Largest<InfluentialRow> influential(influential_rows);
  Largest<Candidate> candidates(candidate_count(fit));
  MatrixXd weighted;
  for_each_row_block(rows, fit, [&](const RowBlock& block) {
    const Index count = static_cast<Index>(block.count);
    for (Index i = 0; i < count; ++i) {
      if (!candidates.takes(block.leverages[i])) continue;
      candidates.add(block.leverages[i], {block.first + static_cast<std::size_t>(i), block.leverages[i],
                                          block.orthonormal.row(i).tail(width - one).transpose()});
    }
    if (!fit.has_response) return;
    const VectorXd e = block.residuals * residual_unit, e_square = e.cwiseAbs2();
    const VectorXd f =
        ((block.response - block.residuals).array() - fit.response_mean).matrix() * fitted_unit;
    const VectorXd f_square = f.cwiseAbs2();
    weighted.resize(count, width);
    for (Index i = 0; i < count; ++i) {
      const double h = block.leverages[i], rest = 1 - h;
      const bool fitted_exactly = rest <= tolerance::exact_leverage;
      const double deleted = fitted_exactly ? 0 : e[i] / rest;
      sums.exact_rows += fitted_exactly;
      sums.press += deleted * deleted;
      weighted.row(i) = block.orthonormal.row(i) * deleted;
      if (fitted_exactly || exact) continue;
      const double cook = width == 0 ? 0 : deleted * deleted * h / k;
      if (influential.takes(cook)) {
        const double left = (df - e[i] * deleted) / (df - 1);  // variance without the row, in units of s^2
        influential.add(cook, {block.first + static_cast<std::size_t>(i), block.residuals[i], h, cook,
                               df > 1 ? e[i] / std::sqrt(std::max(0.0, left) * rest) : unknown});
      }
    }
    sums.meat.selfadjointView<Eigen::Lower>().rankUpdate(weighted.transpose());
    sums.q += block.orthonormal.colwise().sum().transpose();
    sums.q_square += block.orthonormal.transpose() * e_square;
    sums.square += e_square.sum();
    sums.fourth += e_square.squaredNorm();
    sums.q_fitted += block.orthonormal.transpose() * f_square;
    sums.fitted_fourth += f_square.squaredNorm();
    sums.fitted_residual += f_square.dot(e);
  });
  sums.meat.triangularView<Eigen::StrictlyUpper>() = sums.meat.transpose();

  ResidualChecks checks;
  checks.collinearity_rows = rows_that_carry_collinearity(fit, candidates.take());
  if (!fit.has_response) return checks;
  checks.exact_leverage_rows = sums.exact_rows;
  checks.press = sums.press * s * s;
  checks.prediction_error = std::sqrt(sums.press / n) * s;
  add_robust_errors(checks, fit, sums.meat);
  if (!exact) {
    add_spread_check(checks, fit, sums);
    add_curvature_check(checks, fit, sums);
    const double quantile = t_quantile(level, df);
    for (std::size_t column = 0; column < fit.columns; ++column) {
      const Index j = static_cast<Index>(column);
      if (!fit.estimable[column]) continue;
      const double size = std::abs(fit.coefficients[j]);
      const bool clear = size > quantile * fit.standard_errors[j];
      const bool clear_when_robust = size > quantile * checks.robust_standard_errors[j];
      if (clear != clear_when_robust) checks.conclusions_change.push_back(column);
    }
  } else {
    checks.spread_df = fit.kept.size();
  }
  checks.influential = influential.take();
  return checks;
}

JointTest joint_test(const LeastSquaresFit& fit, const std::vector<std::size_t>& columns,
                     const MatrixXd& covariance) {
  std::vector<Index> tested;
  for (std::size_t column : columns) {
    if (fit.estimable[column]) tested.push_back(static_cast<Index>(column));
  }
  const Index count = static_cast<Index>(tested.size());
  JointTest test;
  test.df_numerator = tested.size();
  test.df_denominator = fit.residual_df;
  if (count == 0) return test;
  VectorXd effect(count), size(count);
  MatrixXd correlation(count, count);
  for (Index a = 0; a < count; ++a) size[a] = std::sqrt(covariance(tested[a], tested[a]));
  for (Index a = 0; a < count; ++a) {
    effect[a] = fit.standardised[tested[a]] / size[a];
    for (Index b = 0; b < count; ++b)
      correlation(a, b) = covariance(tested[a], tested[b]) / size[a] / size[b];
  }
  test.f = effect.dot(correlation.ldlt().solve(effect)) / static_cast<double>(count);
  test.p = f_upper_p(test.f, static_cast<double>(count), static_cast<double>(fit.residual_df));
  return test;
}

}  // namespace unply
