// Identities of least squares, on random tables with fixed seeds. Numbered O1 to O8 after the project's list of
// invariants; all are textbook algebra (e.g. Seber & Lee, Linear Regression Analysis, 2nd ed., ch. 3-4).
#include <Eigen/Dense>
#include <cmath>
#include <vector>

#include "core/base/random.hpp"
#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/matrix_source.hpp"
#include "tests/support/reference.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

struct Table {
  MatrixXd x;
  VectorXd y;
};

/// Predictors that share a common part (VIF about 5 to 50) at different places and scales.
Table draw(Random& random, Index rows, Index columns) {
  Table table{MatrixXd(rows, columns), VectorXd(rows)};
  for (Index i = 0; i < rows; ++i) {
    const double shared = random.normal();
    table.y[i] = 3 + random.normal();
    for (Index j = 0; j < columns; ++j) {
      const double scale = std::pow(10.0, static_cast<double>(j) - 1);
      table.x(i, j) = scale * (static_cast<double>(j) + shared + 0.3 * random.normal());
      table.y[i] += 0.5 * table.x(i, j) / scale;
    }
  }
  return table;
}

LeastSquaresFit fit_of(const MatrixXd& x, const VectorXd& y, bool intercept = true) {
  return fit_least_squares(MatrixSource(x, y), intercept);
}

struct Rows {
  VectorXd fitted, residuals;
};
Rows rows_of(const MatrixXd& x, const VectorXd& y, const LeastSquaresFit& fit) {
  Rows rows{VectorXd(x.rows()), VectorXd(x.rows())};
  for_each_row_block(MatrixSource(x, y), fit, [&](const RowBlock& block) {
    rows.fitted.segment(static_cast<Index>(block.first), static_cast<Index>(block.count)) = block.fitted;
    rows.residuals.segment(static_cast<Index>(block.first), static_cast<Index>(block.count)) = block.residuals;
  });
  return rows;
}

double squares(const LeastSquaresFit& fit) {
  return fit.residual_sd * fit.residual_sd * static_cast<double>(fit.residual_df);
}
double slope(const VectorXd& y, const VectorXd& x) { return x.dot(y) / x.squaredNorm(); }
double t_of(const LeastSquaresFit& fit, Index j) { return fit.coefficients[j] / fit.standard_errors[j]; }

MatrixXd without(const MatrixXd& x, Index column) {
  MatrixXd rest(x.rows(), x.cols() - 1);
  rest << x.leftCols(column), x.rightCols(x.cols() - column - 1);
  return rest;
}

/// Each identity is checked to 12 digits: both sides carry at least 15, and the largest condition number of these tables
/// (about 1e2 after centring) enters the second side, which is formed in plain doubles.
void check_equal(double a, double b, double scale) {
  CAPTURE(a, b);
  CHECK(std::abs(a - b) <= 1e-12 * scale);
}

const std::vector<std::uint64_t> seeds = {1, 2, 3, 4, 5, 6, 7, 8};

}  // namespace

TEST_CASE("O1: residuals are orthogonal to every column and to the constant", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 5);
    const Rows rows = rows_of(table.x, table.y, fit_of(table.x, table.y));
    for (Index j = 0; j < 5; ++j)
      check_equal(table.x.col(j).dot(rows.residuals), 0, table.x.col(j).norm() * table.y.norm());
    check_equal(rows.residuals.sum(), 0, std::sqrt(40.0) * table.y.norm());
    check_equal(rows.residuals.squaredNorm(), squares(fit_of(table.x, table.y)), rows.residuals.squaredNorm());
  }
}

TEST_CASE("O2: R^2 is 1 - SSE/SST and the squared correlation of response and fitted values", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 5);
    const LeastSquaresFit fit = fit_of(table.x, table.y);
    const Rows rows = rows_of(table.x, table.y, fit);
    const VectorXd y = table.y.array() - table.y.mean(), fitted = rows.fitted.array() - rows.fitted.mean();
    const double r2 = fit_quality(fit).r_squared;
    check_equal(r2, 1 - squares(fit) / y.squaredNorm(), 1);
    check_equal(r2, std::pow(y.dot(fitted), 2) / (y.squaredNorm() * fitted.squaredNorm()), 1);
    check_equal(r2, fit.response_factor.squaredNorm(), 1);
  }
}

TEST_CASE("O3: other units of the columns change the estimates and nothing else", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 5);
    Table other = table;
    VectorXd units(5);
    for (Index j = 0; j < 5; ++j) {
      units[j] = std::exp(random.normal()) * (random.uniform() < 0.5 ? -1 : 1);
      other.x.col(j) = units[j] * table.x.col(j).array() + 0.1 * random.normal() * table.x.col(j).norm();
    }
    const double unit = std::exp(random.normal());
    other.y = unit * table.y.array() + random.normal();
    const LeastSquaresFit a = fit_of(table.x, table.y), b = fit_of(other.x, other.y);
    for (Index j = 0; j < 5; ++j) {
      const double t = t_of(a, j) * (units[j] < 0 ? -1 : 1);
      check_equal(b.coefficients[j], unit * a.coefficients[j] / units[j], b.standard_errors[j]);
      check_equal(t_of(b, j), t, 1 + std::abs(t));
      check_equal(b.variance_inflation[j], a.variance_inflation[j], a.variance_inflation[j]);
    }
    check_equal(fit_quality(b).r_squared, fit_quality(a).r_squared, 1);
    check_equal(fit_quality(b).f, fit_quality(a).f, fit_quality(a).f);
  }
}

TEST_CASE("O4: an estimate is the slope between what the other columns leave of both sides", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 5);
    const LeastSquaresFit fit = fit_of(table.x, table.y);
    for (Index j = 0; j < 5; ++j) {
      const MatrixXd rest = without(table.x, j);
      const VectorXd y = rows_of(rest, table.y, fit_of(rest, table.y)).residuals;
      const VectorXd x = rows_of(rest, table.x.col(j), fit_of(rest, table.x.col(j))).residuals;
      check_equal(fit.coefficients[j], slope(y, x), std::abs(fit.coefficients[j]) + fit.standard_errors[j]);
      // and the VIF is the share of the column that the others leave, upside down
      check_equal(fit.variance_inflation[j],
                  (table.x.col(j).array() - table.x.col(j).mean()).matrix().squaredNorm() / x.squaredNorm(),
                  fit.variance_inflation[j]);
    }
  }
}

TEST_CASE("O5: t^2 is the F of leaving the column out, and the joint test says the same", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 5);
    const LeastSquaresFit fit = fit_of(table.x, table.y);
    const double variance = fit.residual_sd * fit.residual_sd;
    for (Index j = 0; j < 5; ++j) {
      const double f = (squares(fit_of(without(table.x, j), table.y)) - squares(fit)) / variance;
      check_equal(t_of(fit, j) * t_of(fit, j), f, 1 + f);
      check_equal(joint_test(fit, {static_cast<std::size_t>(j)}).f, f, 1 + f);
    }
    // several columns: both ways of the joint test (few columns, and all but few)
    const double of_two = (squares(fit_of(table.x.rightCols(3), table.y)) - squares(fit)) / 2 / variance;
    check_equal(joint_test(fit, {0, 1}).f, of_two, 1 + of_two);
    const double of_four = (squares(fit_of(table.x.col(4), table.y)) - squares(fit)) / 4 / variance;
    check_equal(joint_test(fit, {0, 1, 2, 3}).f, of_four, 1 + of_four);
    check_equal(joint_test(fit, {0, 1, 2, 3, 4}).f, fit_quality(fit).f, fit_quality(fit).f);
  }
}

TEST_CASE("O6: every row m times leaves estimates and R^2, and multiplies SSE", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 5);
    const Index m = 3;
    const LeastSquaresFit once = fit_of(table.x, table.y), often = fit_of(table.x.replicate(m, 1), table.y.replicate(m, 1));
    for (Index j = 0; j < 5; ++j) check_equal(often.coefficients[j], once.coefficients[j], once.standard_errors[j]);
    check_equal(fit_quality(often).r_squared, fit_quality(once).r_squared, 1);
    check_equal(often.residual_sd * often.residual_sd, m * squares(once) / static_cast<double>(m * 40 - 5 - 1),
                once.residual_sd * once.residual_sd);
  }
}

TEST_CASE("O7: recombined columns span the same, and the estimates follow", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 4);
    MatrixXd recombination(4, 4);  // whole numbers: the products are exact but for the tables' own last bits
    recombination << 1, 2, 0, 0, 0, 1, 0, -1, 0, 0, 1, 0, 1, 0, 2, 1;
    const LeastSquaresFit a = fit_of(table.x, table.y), b = fit_of(table.x * recombination, table.y);
    const Rows before = rows_of(table.x, table.y, a), after = rows_of(table.x * recombination, table.y, b);
    for (Index i = 0; i < 40; ++i) check_equal(after.fitted[i], before.fitted[i], table.y.norm());
    check_equal(squares(b), squares(a), squares(a));
    const VectorXd back = recombination * b.coefficients;
    for (Index j = 0; j < 4; ++j) check_equal(back[j], a.coefficients[j], std::abs(a.coefficients[j]) + a.standard_errors[j]);
  }
}

TEST_CASE("O8: an exact combination of columns changes neither rank nor fitted values", "[property]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    Random random(seed);
    const Table table = draw(random, 40, 4);
    MatrixXd more(40, 5);
    more << table.x, 2 * table.x.col(1) - table.x.col(3);
    const LeastSquaresFit a = fit_of(table.x, table.y), b = fit_of(more, table.y);
    REQUIRE(b.dependencies.size() == 1);
    CHECK(b.kept == a.kept);
    CHECK(b.residual_df == a.residual_df);
    check_equal(b.residual_sd, a.residual_sd, a.residual_sd);
    const Rows before = rows_of(table.x, table.y, a), after = rows_of(more, table.y, b);
    for (Index i = 0; i < 40; ++i) check_equal(after.fitted[i], before.fitted[i], table.y.norm());
    // what does not take part in the combination keeps its estimate and its VIF
    for (const Index j : {0, 2}) {
      CHECK(b.estimable[static_cast<std::size_t>(j)]);
      check_equal(b.coefficients[j], a.coefficients[j], a.standard_errors[j]);
      check_equal(b.variance_inflation[j], a.variance_inflation[j], a.variance_inflation[j]);
    }
    for (const std::size_t j : {1, 3, 4}) CHECK_FALSE(b.estimable[j]);
    CHECK(b.intercept_estimable);
  }
}
