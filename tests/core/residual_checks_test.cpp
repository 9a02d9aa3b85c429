// Every figure of the residual checks against what it stands for: really leaving a row out, really adding a
// column, or the textbook formula written out with plain matrices.
#include "core/diagnose/residual_checks.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>

#include "core/base/tolerance.hpp"
#include "core/diagnose/collinearity.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/made_tables.hpp"
#include "tests/support/matrix_source.hpp"
#include "tests/support/reference.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

constexpr std::uint64_t seed = 20260201;

struct Made {
  MatrixXd x;
  VectorXd y;
  bool intercept;
  MatrixXd whole() const { return intercept ? with_ones(x) : x; }
};

/// Small tables in which nothing is negligible: collinear, with and without intercept, scatter that grows.
std::vector<Made> made_tables() {
  Random random(seed);
  std::vector<Made> tables;
  for (const bool intercept : {true, false}) {
    for (const double common : {0.0, 0.9, 0.999}) {
      Made made{random_predictors(random, 25, 3, common), {}, intercept};
      made.y = random_response(random, made.x, 0.5);
      for (Index i = 0; i < 25; ++i) made.y[i] += 0.05 * static_cast<double>(i) * random.normal();
      tables.push_back(made);
    }
  }
  return tables;
}

ResidualChecks checks_of(const Made& made) {
  const MatrixSource source(made.x, made.y);
  return residual_checks(source, fit_least_squares(source, made.intercept), 0.95);
}

double largest_index(const MatrixXd& x, bool intercept) {
  const ConditionTable table = condition_table(
      fit_of(x, intercept), plain_layout(static_cast<std::size_t>(x.cols()), intercept), true);
  return table.indices[table.indices.size() - 1];
}

}  // namespace

// The direct formulas work on the matrices as they stand; the tables' condition numbers (below 1e3) leave
// them 10 digits.
TEST_CASE("leave-one-out error is that of fits with each row left out", "[checks]") {
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    double press = 0;
    for (Index i = 0; i < made.x.rows(); ++i) {
      const LeastSquaresFit fit = fit_of(without_row(made.x, i), without_row(made.y, i), made.intercept);
      const double fitted =
          (made.intercept ? fit.intercept_estimate : 0) + made.x.row(i).dot(fit.coefficients);
      press += (made.y[i] - fitted) * (made.y[i] - fitted);
    }
    const ResidualChecks checks = checks_of(made);
    CHECK(matching_digits(checks.press, press) >= 9);
    CHECK(matching_digits(checks.prediction_error, std::sqrt(press / 25)) >= 9);
    CHECK(checks.exact_leverage_rows == 0);
  }
}

TEST_CASE("robust standard errors and their covariance are the HC3 formula", "[checks]") {
  // MacKinnon & White (1985), the jackknife-like estimator: (X'X)^-1 X' diag(e^2 / (1-h)^2) X (X'X)^-1
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    const MatrixXd x = made.whole();
    const MatrixXd inverse = (x.transpose() * x).inverse();
    const VectorXd e = made.y - x * inverse * (x.transpose() * made.y);
    const VectorXd h = (x * inverse).cwiseProduct(x).rowwise().sum();
    const VectorXd weight = (e.array() / (1 - h.array())).square();
    const MatrixXd covariance = inverse * x.transpose() * weight.asDiagonal() * x * inverse;
    const ResidualChecks checks = checks_of(made);
    const LeastSquaresFit fit = fit_of(made.x, made.y, made.intercept);
    const Index one = made.intercept ? 1 : 0;
    for (Index j = 0; j < 3; ++j) {
      CHECK(matching_digits(checks.robust_standard_errors[j], std::sqrt(covariance(j + one, j + one))) >= 7);
      for (Index k = 0; k < 3; ++k) {
        const double scale = fit.sd[j] * fit.sd[k] / fit.response_sd / fit.response_sd;
        CHECK(checks.robust_covariance(j, k) ==
              Approx(covariance(j + one, k + one) * scale)
                  .epsilon(1e-6)
                  .margin(1e-8 * checks.robust_covariance.cwiseAbs().maxCoeff()));
      }
    }
    if (made.intercept) {
      CHECK(matching_digits(checks.robust_intercept_standard_error, std::sqrt(covariance(0, 0))) >= 7);
    }
  }
}

TEST_CASE("a robust joint test of one column is its t squared, of all columns the formula", "[checks]") {
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    const LeastSquaresFit fit = fit_of(made.x, made.y, made.intercept);
    const ResidualChecks checks = checks_of(made);
    for (std::size_t j = 0; j < 3; ++j) {
      const double t =
          fit.coefficients[static_cast<Index>(j)] / checks.robust_standard_errors[static_cast<Index>(j)];
      const JointTest test = joint_test(fit, {j}, checks.robust_covariance);
      CHECK(test.f == Approx(t * t).epsilon(1e-10));
      CHECK(test.p == Approx(t_two_sided_p(t, static_cast<double>(fit.residual_df))).epsilon(1e-8));
    }
    const JointTest all = joint_test(fit, {0, 1, 2}, checks.robust_covariance);
    CHECK(all.df_numerator == 3);
    CHECK(all.f ==
          Approx(fit.standardised.dot(checks.robust_covariance.fullPivLu().solve(fit.standardised)) / 3)
              .epsilon(1e-6));
  }
}

TEST_CASE("Cook's distance and studentised residual are those of fits with the row left out", "[checks]") {
  // Cook (1977): squared shift of all fitted values over k s^2; studentised: the row's error over its
  // standard error
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    const MatrixXd x = made.whole();
    const LeastSquaresFit fit = fit_of(made.x, made.y, made.intercept);
    const auto fitted = [&](const LeastSquaresFit& of) {
      return VectorXd((made.x * of.coefficients).array() + (made.intercept ? of.intercept_estimate : 0));
    };
    std::vector<std::pair<double, Index>> distances;
    std::vector<double> studentised;
    for (Index i = 0; i < made.x.rows(); ++i) {
      const LeastSquaresFit without = fit_of(without_row(made.x, i), without_row(made.y, i), made.intercept);
      const double shift = (fitted(fit) - fitted(without)).squaredNorm();
      distances.emplace_back(shift / static_cast<double>(x.cols()) / fit.residual_sd / fit.residual_sd, i);
      const MatrixXd rest = without_row(x, i);
      const double leverage = x.row(i) * (rest.transpose() * rest).inverse() * x.row(i).transpose();
      studentised.push_back((made.y[i] - fitted(without)[i]) / without.residual_sd / std::sqrt(1 + leverage));
    }
    std::sort(distances.rbegin(), distances.rend());
    const ResidualChecks checks = checks_of(made);
    REQUIRE(checks.influential.size() == 10);
    for (std::size_t k = 0; k < 10; ++k) {
      const InfluentialRow& row = checks.influential[k];
      CHECK(row.row == static_cast<std::size_t>(distances[k].second));
      CHECK(matching_digits(row.cooks_distance, distances[k].first) >= 7);
      CHECK(matching_digits(row.studentised, studentised[row.row]) >= 7);
      CHECK(row.residual ==
            Approx(made.y[static_cast<Index>(row.row)] - fitted(fit)[static_cast<Index>(row.row)]));
    }
  }
}

TEST_CASE("the spread check is n R^2 of the squared residuals on the columns and an intercept", "[checks]") {
  // Koenker (1981)
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    const LeastSquaresFit fit = fit_of(made.x, made.y, made.intercept);
    const VectorXd e =
        (made.y - made.x * fit.coefficients).array() - (made.intercept ? fit.intercept_estimate : 0);
    const LeastSquaresFit auxiliary = fit_of(made.x, e.cwiseAbs2(), true);
    const ResidualChecks checks = checks_of(made);
    CHECK(checks.spread_df == 3);
    CHECK(checks.spread_statistic == Approx(25 * (1 - auxiliary.unexplained_share)).epsilon(1e-9));
    CHECK(checks.spread_p == Approx(chi_squared_upper_p(checks.spread_statistic, 3)).epsilon(1e-12));
  }
}

TEST_CASE("the curvature check is the F of the squared fitted values as one more column", "[checks]") {
  // Tukey (1949)
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    const LeastSquaresFit fit = fit_of(made.x, made.y, made.intercept);
    MatrixXd more(25, 4);
    more.leftCols(3) = made.x;
    const VectorXd fitted = (made.x * fit.coefficients).array() +
                            (made.intercept ? fit.intercept_estimate - fit.response_mean : 0);
    more.col(3) = fitted.cwiseAbs2();
    const JointTest added = joint_test(fit_of(more, made.y, made.intercept), {3});
    const ResidualChecks checks = checks_of(made);
    REQUIRE(checks.curvature_checked);
    CHECK(checks.curvature_f == Approx(added.f).epsilon(1e-7));
    CHECK(checks.curvature_p == Approx(added.p).epsilon(1e-7));
  }
}

TEST_CASE("rows that carry collinearity have the condition index of the table without them", "[checks]") {
  // Hadi (1988): change of the condition number when the row is left out
  CAPTURE(seed);
  for (Made made : made_tables()) {
    made.x.row(7) = made.x.colwise().mean();  // far out in a direction in which the other rows hardly vary
    made.x(7, 0) += 3 * (made.x.col(0).maxCoeff() - made.x.col(0).minCoeff());
    const ResidualChecks checks = checks_of(made);
    REQUIRE(checks.collinearity_rows.size() == 5);
    double last = 1e300;
    for (const CollinearityRow& row : checks.collinearity_rows) {
      CHECK(matching_digits(row.condition_with, largest_index(made.x, made.intercept)) >= 10);
      CHECK(matching_digits(
                row.condition_without,
                largest_index(without_row(made.x, static_cast<Index>(row.row)), made.intercept)) >= 10);
      const double change = std::abs(std::log(row.condition_without / row.condition_with));
      CHECK(change <= last);
      last = change;
    }
    // 25 rows, 50 candidates: no row was passed over
    for (Index i = 0; i < 25; ++i) {
      const double change = std::abs(std::log(largest_index(without_row(made.x, i), made.intercept) /
                                              checks.collinearity_rows[0].condition_with));
      const auto& rows = checks.collinearity_rows;
      const bool listed = std::any_of(rows.begin(), rows.end(),
                                      [&](const auto& r) { return r.row == static_cast<std::size_t>(i); });
      CHECK((listed || change <= last * (1 + 1e-9)));
    }
  }
}

TEST_CASE("a row that alone keeps two columns apart has leverage 1 and is left out of leave-one-out figures",
          "[checks]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x(12, 2);
  x.col(0) = random_matrix(random, 12, 1);
  x.col(1) = x.col(0);
  x(4, 1) += 1;
  const VectorXd y = random_response(random, x, 1);
  const Made made{x, y, true};
  const ResidualChecks checks = checks_of(made);
  CHECK(checks.exact_leverage_rows == 1);
  // the other rows know one column only: what is left is the fit of y on it without row 4
  const Made rest{without_row(x, 4).leftCols(1), without_row(y, 4), true};
  CHECK(checks.press == Approx(checks_of(rest).press).epsilon(1e-10));
  REQUIRE_FALSE(checks.collinearity_rows.empty());
  CHECK(checks.collinearity_rows[0].row == 4);
  CHECK(std::isinf(checks.collinearity_rows[0].condition_without));
  CHECK(std::isfinite(checks.robust_standard_errors[0]));
  CHECK(std::isfinite(checks.robust_standard_errors[1]));
}

TEST_CASE("an exact fit has nothing to check and nothing that is not a number", "[checks]") {
  CAPTURE(seed);
  Random random(seed);
  const MatrixXd x = random_matrix(random, 12, 2);
  const ResidualChecks checks = checks_of({x, VectorXd(x.col(0) + 2 * x.col(1)), true});
  CHECK(checks.prediction_error <= 1e-14);
  CHECK(checks.spread_p == 1);
  CHECK_FALSE(checks.curvature_checked);
  CHECK(checks.influential.empty());
  CHECK(checks.conclusions_change.empty());
  CHECK(checks.robust_standard_errors.cwiseAbs().maxCoeff() <= 1e-13);
}

TEST_CASE("one degree of freedom, a dependency, a single column: sane figures", "[checks]") {
  CAPTURE(seed);
  Random random(seed);
  SECTION("n = p + 2") {
    const MatrixXd x = random_matrix(random, 5, 3);
    const ResidualChecks checks = checks_of({x, random_response(random, x, 1), true});
    CHECK_FALSE(checks.curvature_checked);
    CHECK(std::isfinite(checks.press));
    CHECK(checks.robust_standard_errors.allFinite());
    REQUIRE_FALSE(checks.influential.empty());
    CHECK(std::isnan(checks.influential[0].studentised));
  }
  SECTION("a column that is the sum of two others") {
    MatrixXd x(20, 4);
    x.leftCols(2) = random_matrix(random, 20, 2);
    x.col(2) = x.col(0) + x.col(1);
    x.col(3) = random_matrix(random, 20, 1);
    const VectorXd y = random_response(random, x, 1);
    const ResidualChecks checks = checks_of({x, y, true});
    MatrixXd kept(20, 3);
    kept << x.leftCols(2), x.col(3);
    const ResidualChecks of_kept = checks_of({kept, y, true});
    CHECK(std::isnan(checks.robust_standard_errors[0]));
    CHECK(std::isnan(checks.robust_standard_errors[2]));
    CHECK(checks.robust_standard_errors[3] == Approx(of_kept.robust_standard_errors[2]).epsilon(1e-12));
    CHECK(checks.press == Approx(of_kept.press).epsilon(1e-12));
    CHECK(checks.spread_df == 3);
  }
  SECTION("a single column has no collinearity to carry") {
    const MatrixXd x = random_matrix(random, 8, 1);
    CHECK(checks_of({x, random_response(random, x, 1), true}).collinearity_rows.empty());
  }
  SECTION("an intercept alone") {
    const MatrixXd x(8, 0);
    const VectorXd y = random_matrix(random, 8, 1);
    const ResidualChecks checks = checks_of({x, y, true});
    CHECK(checks.prediction_error == Approx((y.array() - y.mean()).matrix().norm() / std::sqrt(8.0) * 8 / 7));
    CHECK(checks.spread_p == 1);
  }
  SECTION("no response: only the rows that carry collinearity") {
    const MatrixXd x = random_matrix(random, 8, 2);
    const MatrixSource source(x);
    const ResidualChecks checks = residual_checks(source, fit_least_squares(source, true), 0.95);
    CHECK(checks.collinearity_rows.size() == 5);
    CHECK(checks.influential.empty());
  }
}

TEST_CASE("figures of the residuals do not depend on the response's units", "[checks][property]") {
  CAPTURE(seed);
  for (const Made& made : made_tables()) {
    const ResidualChecks checks = checks_of(made);
    const ResidualChecks scaled = checks_of({made.x, made.y * 1e100, made.intercept});
    CHECK(scaled.prediction_error == Approx(checks.prediction_error * 1e100).epsilon(1e-9));
    CHECK(scaled.spread_statistic == Approx(checks.spread_statistic).epsilon(1e-9));
    CHECK(scaled.curvature_f == Approx(checks.curvature_f).epsilon(1e-7));
    CHECK(scaled.influential[0].cooks_distance == Approx(checks.influential[0].cooks_distance).epsilon(1e-9));
    CHECK(scaled.robust_standard_errors[1] == Approx(checks.robust_standard_errors[1] * 1e100).epsilon(1e-9));
  }
}

TEST_CASE("a conclusion changes where the interval excludes zero under one kind of standard error only",
          "[checks]") {
  CAPTURE(seed);
  Random random(seed);
  std::size_t changes = 0;
  for (int table = 0; table < 40; ++table) {
    CAPTURE(table);
    MatrixXd x = random_matrix(random, 30, 3);
    VectorXd y = 0.6 * x.col(0);
    for (Index i = 0; i < 30; ++i) y[i] += x(i, 0) * x(i, 0) * random.normal();
    const Made made{x, y, true};
    const LeastSquaresFit fit = fit_of(x, y);
    const ResidualChecks checks = checks_of(made);
    const auto ordinary = coefficient_tests(fit, fit.standard_errors, 0.95);
    const auto robust = coefficient_tests(fit, checks.robust_standard_errors, 0.95);
    for (std::size_t j = 0; j < 3; ++j) {
      const bool listed =
          std::count(checks.conclusions_change.begin(), checks.conclusions_change.end(), j) > 0;
      CHECK(listed == ((ordinary[j].p < 0.05) != (robust[j].p < 0.05)));
      changes += listed;
    }
  }
  CHECK(changes > 0);
}

TEST_CASE("the thresholds of the residual checks are those that are documented", "[checks][tolerance]") {
  CHECK(tolerance::exact_leverage == 1e-10);
  CHECK(tolerance::exact_fit == 64 * tolerance::unit_roundoff);
  CHECK(tolerance::curvature_outside == 1e-10);
  CHECK(tolerance::collinearity_candidates == 50);
}
