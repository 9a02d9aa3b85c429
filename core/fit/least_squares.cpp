#include "core/fit/least_squares.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>

#include "core/base/error.hpp"
#include "core/base/tolerance.hpp"

namespace unply {

using Extended = long double;
using ExtendedMatrix = Eigen::Matrix<Extended, Eigen::Dynamic, Eigen::Dynamic>;
using ExtendedVector = Eigen::Matrix<Extended, Eigen::Dynamic, 1>;

struct Basis {
  std::vector<std::size_t> kept;
  ExtendedMatrix weights;       // (intercept + kept) square, upper triangular: [1 X_kept] weights = Q
  ExtendedVector coefficients;  // intercept + kept: a least-squares solution with 0 for the columns not kept
  ExtendedVector root_mean_square;  // p; size of each column, the yardstick for new rows
};

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();
constexpr double infinity = std::numeric_limits<double>::infinity();
constexpr std::size_t block_rows = 1024;

Eigen::Index index(std::size_t i) { return static_cast<Eigen::Index>(i); }

/// 2^-e for the exponent e of the largest entry: exact, and no square of a scaled entry overflows.
int exponent_of(const ExtendedVector& column) {
  int exponent = 0;
  const Extended largest = column.size() == 0 ? 0 : column.cwiseAbs().maxCoeff();
  if (largest > 0) std::frexp(largest, &exponent);
  return exponent;
}

double scaled(Extended value, int exponent, std::size_t column) {
  const double result = static_cast<double>(std::ldexp(value, exponent));
  if (!std::isfinite(result) || (result == 0 && value != 0))
    throw Error(ErrorCode::value_out_of_range, {{FactId::column, std::to_string(column + 1)},
                                                {FactId::position, static_cast<double>(column + 1)}});
  return result;
}

ExtendedMatrix gather(const RowSource& rows) {
  const std::size_t n = rows.rows(), width = rows.columns() + rows.has_response();
  ExtendedMatrix all(index(n), index(width));
  std::vector<double> high(width * block_rows), low(width * block_rows);
  for (std::size_t first = 0; first < n; first += block_rows) {
    const std::size_t count = std::min(block_rows, n - first);
    rows.fill(first, count, block_rows, high.data(), low.data());
    for (std::size_t j = 0; j < width; ++j)
      for (std::size_t i = 0; i < count; ++i)
        all(index(first + i), index(j)) =
            static_cast<Extended>(high[j * block_rows + i]) + low[j * block_rows + i];
  }
  return all;
}

}  // namespace

LeastSquaresFit fit_least_squares(const RowSource& rows, bool intercept) {
  const std::size_t n = rows.rows(), p = rows.columns(), one = intercept ? 1 : 0;
  if (n < 2)
    throw Error(ErrorCode::too_few_rows, {{FactId::rows, static_cast<double>(n)},
                                          {FactId::needed, 2.0},
                                          {FactId::count, static_cast<double>(p + one)}});
  LeastSquaresFit fit;
  fit.rows = n;
  fit.columns = p;
  fit.intercept = intercept;
  fit.has_response = rows.has_response();

  ExtendedMatrix all = gather(rows);
  std::vector<int> exponent(index(all.cols()));
  for (Eigen::Index j = 0; j < all.cols(); ++j) {
    exponent[j] = exponent_of(all.col(j));
    for (Eigen::Index i = 0; i < all.rows(); ++i) all(i, j) = std::ldexp(all(i, j), -exponent[j]);
  }

  // Orthonormal columns in order, each orthogonalised twice; the intercept's first.
  const Extended root_n = std::sqrt(static_cast<Extended>(n));
  const Eigen::Index width = index(p + one);
  ExtendedMatrix q(index(n), width), r = ExtendedMatrix::Zero(width, width);
  Eigen::Index rank = 0;
  if (intercept) {
    q.col(0).setConstant(1 / root_n);
    r(0, 0) = root_n;
    rank = 1;
  }
  ExtendedVector norms(index(p));
  std::vector<std::ptrdiff_t> place(p, -1);
  fit.estimable.assign(p, true);
  for (std::size_t j = 0; j < p; ++j) {
    ExtendedVector v = all.col(index(j));
    norms[index(j)] = v.norm();
    ExtendedVector h = ExtendedVector::Zero(rank);
    for (int pass = 0; pass < 2; ++pass) {
      for (Eigen::Index k = 0; k < rank; ++k) {
        const Extended dot = q.col(k).dot(v);
        v -= dot * q.col(k);
        h[k] += dot;
      }
    }
    const ExtendedVector c = r.topLeftCorner(rank, rank).triangularView<Eigen::Upper>().solve(h);
    Extended scale = norms[index(j)];
    if (intercept) scale += std::abs(c[0]) * root_n;
    for (std::size_t k = 0; k < fit.kept.size(); ++k)
      scale += std::abs(c[index(k + one)]) * norms[index(fit.kept[k])];
    const Extended residual = v.norm();
    if (residual <= static_cast<Extended>(tolerance::rank_relative) * scale ||
        static_cast<std::size_t>(rank) == n) {
      LinearDependency dependency;
      dependency.column = j;
      dependency.relative_residual = scale == 0 ? 0 : static_cast<double>(residual / scale);
      fit.estimable[j] = false;
      const auto negligible = [&](Extended part) {
        return std::abs(part) <= static_cast<Extended>(tolerance::rank_relative) * scale;
      };
      if (intercept && !negligible(c[0] * root_n)) {
        dependency.constant = scaled(c[0], exponent[j], j);
        fit.intercept_estimable = false;
      }
      for (std::size_t k = 0; k < fit.kept.size(); ++k) {
        const std::size_t other = fit.kept[k];
        if (negligible(c[index(k + one)] * norms[index(other)])) continue;
        dependency.on.push_back(other);
        dependency.coefficients.push_back(scaled(c[index(k + one)], exponent[j] - exponent[other], j));
        fit.estimable[other] = false;
      }
      fit.dependencies.push_back(dependency);
      continue;
    }
    q.col(rank) = v / residual;
    r.col(rank).head(rank) = h;
    r(rank, rank) = residual;
    place[j] = rank++;
    fit.kept.push_back(j);
  }
  const Eigen::Index kept = index(fit.kept.size());

  // Moments and correlations of all columns.
  fit.mean = Eigen::VectorXd::Zero(index(p));
  fit.sd.resize(index(p));
  ExtendedMatrix centred = all;
  if (intercept) centred.rowwise() -= all.colwise().mean();
  const ExtendedVector lengths = centred.colwise().norm();
  for (std::size_t j = 0; j < p; ++j) {
    if (intercept) fit.mean[index(j)] = scaled(all.col(index(j)).mean(), exponent[j], j);
    fit.sd[index(j)] = scaled(lengths[index(j)] / std::sqrt(static_cast<Extended>(n - one)), exponent[j], j);
    const auto& of = fit.dependencies;
    const bool constant = std::any_of(
        of.begin(), of.end(), [&](const LinearDependency& d) { return d.column == j && d.on.empty(); });
    if (constant) fit.sd[index(j)] = 0;
  }
  fit.correlation.resize(index(p), index(p));
  for (Eigen::Index i = 0; i < index(p); ++i)
    for (Eigen::Index j = 0; j < index(p); ++j) {
      const bool known = fit.sd[i] > 0 && fit.sd[j] > 0;
      fit.correlation(i, j) =
          !known   ? not_a_number
          : i == j ? 1
                   : static_cast<double>(centred.col(i).dot(centred.col(j)) / (lengths[i] * lengths[j]));
    }

  const ExtendedMatrix factor = r.topLeftCorner(rank, rank);
  ExtendedMatrix centred_factor = factor.bottomRightCorner(kept, kept), whole_factor = factor;
  for (Eigen::Index k = 0; k < kept; ++k) centred_factor.col(k) /= centred_factor.col(k).norm();
  for (Eigen::Index k = 0; k < rank; ++k) whole_factor.col(k) /= whole_factor.col(k).norm();
  fit.correlation_factor = centred_factor.cast<double>();
  fit.uncentred_factor = whole_factor.cast<double>();

  const ExtendedMatrix centred_inverse =
      centred_factor.triangularView<Eigen::Upper>().solve(ExtendedMatrix::Identity(kept, kept));
  const ExtendedMatrix inverse = centred_inverse * centred_inverse.transpose();
  fit.correlation_inverse = Eigen::MatrixXd::Constant(index(p), index(p), not_a_number);
  fit.variance_inflation = Eigen::VectorXd::Constant(index(p), infinity);
  for (Eigen::Index a = 0; a < kept; ++a) {
    const std::size_t i = fit.kept[a];
    if (!fit.estimable[i]) continue;
    fit.variance_inflation[index(i)] = static_cast<double>(inverse(a, a));
    for (Eigen::Index b = 0; b < kept; ++b)
      if (fit.estimable[fit.kept[b]])
        fit.correlation_inverse(index(i), index(fit.kept[b])) = static_cast<double>(inverse(a, b));
  }

  auto basis = std::make_shared<Basis>();
  basis->kept = fit.kept;
  basis->weights = factor.triangularView<Eigen::Upper>().solve(ExtendedMatrix::Identity(rank, rank));
  basis->coefficients = ExtendedVector::Zero(rank);
  basis->root_mean_square.resize(index(p));
  for (std::size_t j = 0; j < p; ++j)
    basis->root_mean_square[index(j)] = std::ldexp(norms[index(j)] / root_n, exponent[j]);
  const ExtendedMatrix weights = basis->weights;
  for (Eigen::Index k = 0; k < kept; ++k)
    for (Eigen::Index i = 0; i < rank; ++i)
      basis->weights(k + index(one), i) =
          std::ldexp(basis->weights(k + index(one), i), -exponent[fit.kept[k]]);

  const double condition = static_cast<double>(whole_factor.norm() * std::sqrt(static_cast<Extended>(rank)) *
                                               (rank == 0 ? 0 : weights.norm()));
  fit.trusted_digits = std::clamp(18 - std::log10(std::max(condition, 1.0)), 0.0, 15.0);

  if (fit.has_response) {
    fit.residual_df = static_cast<std::ptrdiff_t>(n) - rank;
    if (fit.residual_df <= 0)
      throw Error(ErrorCode::too_few_rows, {{FactId::rows, static_cast<double>(n)},
                                            {FactId::needed, static_cast<double>(rank + 1)},
                                            {FactId::count, static_cast<double>(rank)}});
    const int shift = exponent[p];
    const ExtendedVector y = all.col(index(p));
    const Extended mean = intercept ? y.mean() : 0;
    const Extended length = (y.array() - mean).matrix().norm();
    fit.response_mean = scaled(mean, shift, p);
    fit.response_sd = scaled(length / std::sqrt(static_cast<Extended>(n - one)), shift, p);

    ExtendedVector rest = y, along = ExtendedVector::Zero(rank);
    for (int pass = 0; pass < 2; ++pass)
      for (Eigen::Index k = 0; k < rank; ++k) {
        const Extended dot = q.col(k).dot(rest);
        rest -= dot * q.col(k);
        along[k] += dot;
      }
    const Extended rss = rest.squaredNorm();
    const Extended s = std::sqrt(rss / fit.residual_df);
    fit.unexplained_share = length == 0 ? 0 : static_cast<double>(rss / (length * length));
    fit.residual_sd = scaled(s, shift, p);
    const ExtendedVector solution = weights * along;
    fit.coefficients = Eigen::VectorXd::Constant(index(p), not_a_number);
    fit.standard_errors = fit.coefficients;
    fit.standardised = fit.coefficients;
    for (Eigen::Index k = 0; k < kept; ++k) {
      const std::size_t j = fit.kept[k];
      const Extended in_units = std::ldexp(solution[k + index(one)], shift - exponent[j]);
      basis->coefficients.conservativeResize(rank);
      basis->coefficients[k + index(one)] = in_units;
      if (!fit.estimable[j]) continue;
      fit.coefficients[index(j)] = scaled(solution[k + index(one)], shift - exponent[j], j);
      fit.standard_errors[index(j)] = scaled(s * weights.row(k + index(one)).norm(), shift - exponent[j], j);
      fit.standardised[index(j)] = static_cast<double>(solution[k + index(one)] * lengths[index(j)] / length);
    }
    fit.intercept_estimate = fit.intercept_standard_error = not_a_number;
    if (intercept) {
      basis->coefficients[0] = std::ldexp(solution[0], shift);
      if (fit.intercept_estimable) {
        fit.intercept_estimate = scaled(solution[0], shift, p);
        fit.intercept_standard_error = scaled(s * weights.row(0).norm(), shift, p);
      }
    }
  }
  fit.basis = basis;
  return fit;
}

void for_each_row_block(const RowSource& rows, const LeastSquaresFit& fit,
                        const std::function<void(const RowBlock&)>& visit) {
  if (!fit.basis) throw Error(ErrorCode::internal, {{FactId::text, std::string("a fit without rows")}});
  const Basis& basis = *fit.basis;
  const std::size_t n = rows.rows(), p = rows.columns(), width = p + rows.has_response(),
                    one = fit.intercept ? 1 : 0;
  const Eigen::Index rank = basis.weights.rows();
  std::vector<double> high(width * block_rows), low(width * block_rows);
  for (std::size_t first = 0; first < n; first += block_rows) {
    const std::size_t count = std::min(block_rows, n - first);
    rows.fill(first, count, block_rows, high.data(), low.data());
    const auto entry = [&](std::size_t i, std::size_t j) {
      return static_cast<Extended>(high[j * block_rows + i]) + low[j * block_rows + i];
    };
    ExtendedMatrix x(index(count), rank);
    if (fit.intercept) x.col(0).setOnes();
    for (std::size_t k = 0; k < basis.kept.size(); ++k)
      for (std::size_t i = 0; i < count; ++i) x(index(i), index(k + one)) = entry(i, basis.kept[k]);
    RowBlock block;
    block.first = first;
    block.count = count;
    block.orthonormal = (x * basis.weights).cast<double>();
    block.leverages = block.orthonormal.rowwise().squaredNorm();
    ExtendedVector fitted = x * basis.coefficients;
    block.fitted = fitted.cast<double>();
    for (const LinearDependency& dependency : fit.dependencies)
      for (std::size_t i = 0; i < count; ++i) {
        Extended gap = entry(i, dependency.column) - dependency.constant;
        Extended scale = std::abs(entry(i, dependency.column)) +
                         basis.root_mean_square[index(dependency.column)] +
                         2 * std::abs(static_cast<Extended>(dependency.constant));
        for (std::size_t k = 0; k < dependency.on.size(); ++k) {
          const Extended part = dependency.coefficients[k] * entry(i, dependency.on[k]);
          gap -= part;
          scale += std::abs(part) +
                   std::abs(dependency.coefficients[k] * basis.root_mean_square[index(dependency.on[k])]);
        }
        if (!(std::abs(gap) <= static_cast<Extended>(tolerance::rank_relative) * scale))
          block.fitted[index(i)] = not_a_number;
      }
    if (rows.has_response()) {
      block.response.resize(index(count));
      block.residuals.resize(index(count));
      for (std::size_t i = 0; i < count; ++i) {
        block.response[index(i)] = high[p * block_rows + i];
        block.residuals[index(i)] = static_cast<double>(entry(i, p) - fitted[index(i)]);
      }
    }
    visit(block);
  }
}

}  // namespace unply
