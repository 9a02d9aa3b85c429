#include "core/fit/from_correlations.hpp"

#include <Eigen/Dense>
#include <cmath>
#include <functional>

#include "core/base/error.hpp"
#include "core/base/tolerance.hpp"
#include "core/diagnose/collinearity.hpp"
#include "core/diagnose/ledger.hpp"
#include "core/fit/inference.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/made_tables.hpp"
#include "tests/support/reference.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

/// Correlations, means and standard deviations of the columns of a table, the response last.
CorrelationTable summary_of(const MatrixXd& x, const VectorXd& y) {
  MatrixXd all(x.rows(), x.cols() + 1);
  all << x, y;
  CorrelationTable table;
  for (Index j = 0; j < x.cols(); ++j) table.names.push_back("x" + std::to_string(j + 1));
  table.names.push_back("y");
  table.response = "y";
  table.rows = static_cast<double>(x.rows());
  table.means = all.colwise().mean();
  MatrixXd centred = all.rowwise() - table.means->transpose();
  table.sds = centred.colwise().norm() / std::sqrt(table.rows - 1);
  centred *= centred.colwise().norm().cwiseInverse().asDiagonal();
  table.correlations = centred.transpose() * centred;
  return table;
}

CorrelationTable small(std::vector<std::string> names, const MatrixXd& correlations, double rows) {
  CorrelationTable table;
  table.names = std::move(names);
  table.correlations = correlations;
  table.rows = rows;
  return table;
}

MatrixXd three(double r12, double r13, double r23) {
  MatrixXd r(3, 3);
  r << 1, r12, r13, r12, 1, r23, r13, r23, 1;
  return r;
}

ErrorCode code_of(const CorrelationTable& table) {
  try {
    fit_from_correlations(table);
  } catch (const Error& error) { return error.code; }
  return ErrorCode::internal;
}

}  // namespace

TEST_CASE("a table's correlations, means and spreads give the fit of its rows", "[correlations]") {
  for (const std::string name : {"hald_cement", "nist_longley"}) {
    CAPTURE(name);
    const Csv csv = read_csv(name);
    MatrixXd x(static_cast<Index>(csv.rows.size()), static_cast<Index>(csv.headings.size()) - 1);
    for (Index j = 0; j < x.cols(); ++j) x.col(j) = csv.numbers("x" + std::to_string(j + 1));
    const VectorXd y = csv.numbers("y");
    const LeastSquaresFit of_rows = fit_of(x, y);
    const LeastSquaresFit fit = fit_from_correlations(summary_of(x, y));
    // correlations rounded to doubles and amplified by the inverse (VIF up to 1.8e3): 12 digits stay
    const double digits = 10;
    const auto agree = [&](const VectorXd& a, const VectorXd& b) {
      REQUIRE(a.size() == b.size());
      for (Index j = 0; j < a.size(); ++j) CHECK(matching_digits(a[j], b[j]) >= digits);
    };
    CHECK(fit.rows == of_rows.rows);
    CHECK(fit.kept == of_rows.kept);
    CHECK(fit.estimable == of_rows.estimable);
    CHECK(fit.residual_df == of_rows.residual_df);
    agree(fit.coefficients, of_rows.coefficients);
    agree(fit.standard_errors, of_rows.standard_errors);
    agree(fit.standardised, of_rows.standardised);
    agree(fit.variance_inflation, of_rows.variance_inflation);
    agree(fit.mean, of_rows.mean);
    agree(fit.sd, of_rows.sd);
    CHECK(matching_digits(fit.intercept_estimate, of_rows.intercept_estimate) >= digits);
    CHECK(matching_digits(fit.intercept_standard_error, of_rows.intercept_standard_error) >= digits);
    CHECK(matching_digits(fit.residual_sd, of_rows.residual_sd) >= digits);
    CHECK(matching_digits(fit.unexplained_share, of_rows.unexplained_share) >= digits);
    CHECK(matching_digits(fit_quality(fit).p, fit_quality(of_rows).p) >= 8);
    for (const bool centred : {true, false}) {
      const Layout layout = plain_layout(static_cast<std::size_t>(x.cols()));
      const ConditionTable table = condition_table(fit, layout, centred);
      const ConditionTable expected = condition_table(of_rows, layout, centred);
      agree(table.indices.head(3), expected.indices.head(3));
      CHECK((table.proportions - expected.proportions).cwiseAbs().maxCoeff() <= 1e-6);
    }
    CHECK(fit.trusted_digits >= 10);
    CHECK(fit.trusted_digits <= 15);
    CHECK_FALSE(fit.basis);
  }
}

TEST_CASE("a printed correlation matrix gives the published VIFs", "[correlations][published]") {
  // Montgomery & Runger, Applied Statistics and Probability for Engineers, supplement to chapter 12 (coded
  // cement data); correlations printed to 5 decimals
  const Figures figures = read_figures("ridge_from_correlation");
  CorrelationTable table;
  table.rows = 13;
  table.correlations.resize(4, 4);
  for (int i = 1; i <= 4; ++i) {
    table.names.push_back("x" + std::to_string(i));
    for (int j = 1; j <= 4; ++j) {
      table.correlations(i - 1, j - 1) = std::stod(
          figures.at("other | correlation_matrix | " + std::to_string(i) + " | " + std::to_string(j)));
    }
  }
  const LeastSquaresFit fit = fit_from_correlations(table);
  for (int i = 1; i <= 4; ++i) {
    CHECK(agrees_as_printed(fit.variance_inflation[i - 1],
                            figures.at("published | vif[" + std::to_string(i) + "]")));
  }
  // Half a unit of the fifth decimal, times four variables, times the norm of the inverse (about 180): 2
  // digits
  CHECK(fit.trusted_digits > 1);
  CHECK(fit.trusted_digits < 3);

  SECTION("and, with the correlations that the response must have had, its estimates at k = 0") {
    // R b = c from the printed b; scaled so that c is a set of correlations with R^2 = 0.98
    VectorXd b(4);
    for (int i = 1; i <= 4; ++i) b[i - 1] = std::stod(figures.at("other | b_at_k0 | " + std::to_string(i)));
    const double scale = std::sqrt(0.98 / b.dot(table.correlations * b));
    const VectorXd c = scale * table.correlations * b;
    CorrelationTable with = table;
    with.names.push_back("y");
    with.response = "y";
    with.correlations.conservativeResize(5, 5);
    with.correlations.col(4).head(4) = c;
    with.correlations.row(4).head(4) = c.transpose();
    with.correlations(4, 4) = 1;
    const LeastSquaresFit estimates = fit_from_correlations(with);
    for (int i = 1; i <= 4; ++i) {
      CHECK(agrees_as_printed(estimates.standardised[i - 1] / scale,
                              figures.at("other | b_at_k0 | " + std::to_string(i))));
    }
    CHECK(estimates.unexplained_share == Approx(0.02).epsilon(1e-9));
  }
}

TEST_CASE("without means or spreads everything is standardised and the intercept unknown", "[correlations]") {
  Random random(20260202);
  const MatrixXd x = random_predictors(random, 40, 3, 0.8);
  const VectorXd y = random_response(random, x, 1);
  CorrelationTable table = summary_of(x, y);
  const LeastSquaresFit whole = fit_from_correlations(table);
  const bool keep_means = GENERATE(true, false);
  const bool keep_sds = GENERATE(true, false);
  if (!keep_means) table.means.reset();
  if (!keep_sds) table.sds.reset();
  const LeastSquaresFit fit = fit_from_correlations(table);
  const bool both = keep_means && keep_sds;
  CHECK(fit.intercept_estimable == both);
  CHECK(std::isnan(fit.intercept_estimate) == !both);
  CHECK(std::isnan(fit.intercept_standard_error) == !both);
  CHECK((condition_table(fit, plain_layout(3), false).indices.size() > 0) == both);
  CHECK(condition_table(fit, plain_layout(3), true)
            .indices.isApprox(condition_table(whole, plain_layout(3), true).indices));
  CHECK(fit.standardised.isApprox(whole.standardised));
  CHECK(fit.variance_inflation.isApprox(whole.variance_inflation));
  if (keep_sds) {
    CHECK(fit.coefficients.isApprox(whole.coefficients));
  } else {
    CHECK(fit.coefficients.isApprox(whole.standardised));
  }
  const auto tests = coefficient_tests(fit, fit.standard_errors, 0.95);
  const auto expected = coefficient_tests(whole, whole.standard_errors, 0.95);
  for (std::size_t j = 0; j < 3; ++j) CHECK(tests[j].p == Approx(expected[j].p));
  // the ledger's identity needs no row
  for (const LedgerRow& row : precision_ledger(fit, plain_layout(3), Model{})) {
    CHECK(row.residual_sd * row.rows_factor / row.spread * row.widening == Approx(row.standard_error));
  }
}

TEST_CASE("one triangle of a correlation table is enough", "[correlations]") {
  MatrixXd r = three(0.5, 0.3, -0.2);
  const LeastSquaresFit whole = fit_from_correlations(small({"a", "b", "c"}, r, 20));
  for (Index i = 0; i < 3; ++i) {
    for (Index j = i; j < 3; ++j) r(i, j) = std::nan("");
  }
  const LeastSquaresFit fit = fit_from_correlations(small({"a", "b", "c"}, r, 20));
  CHECK(fit.variance_inflation == whole.variance_inflation);
  CHECK(fit.correlation == whole.correlation);
}

TEST_CASE("a copy in a correlation table is a dependency, and the rest is estimated", "[correlations]") {
  MatrixXd r(4, 4);  // a, b, copy of a (reversed), y
  r << 1, 0.4, -1, 0.6, 0.4, 1, -0.4, 0.5, -1, -0.4, 1, -0.6, 0.6, 0.5, -0.6, 1;
  CorrelationTable table = small({"a", "b", "copy", "y"}, r, 30);
  table.response = "y";
  table.means = VectorXd::Constant(4, 3);
  table.sds = (VectorXd(4) << 2, 1, 4, 1).finished();
  const LeastSquaresFit fit = fit_from_correlations(table);
  CHECK(fit.kept == std::vector<std::size_t>{0, 1});
  REQUIRE(fit.dependencies.size() == 1);
  CHECK(fit.dependencies[0].column == 2);
  CHECK(fit.dependencies[0].on == std::vector<std::size_t>{0});
  CHECK(fit.dependencies[0].coefficients[0] == Approx(-2));  // 4 / 2, reversed
  CHECK(fit.dependencies[0].constant == Approx(9));
  CHECK(fit.estimable == std::vector<bool>{false, true, false});
  CHECK(std::isnan(fit.coefficients[0]));
  CHECK(std::isinf(fit.variance_inflation[2]));
  CHECK(fit.residual_df == 27);
  const LeastSquaresFit without = fit_from_correlations([&] {
    MatrixXd part(3, 3);
    part << 1, 0.4, 0.6, 0.4, 1, 0.5, 0.6, 0.5, 1;
    CorrelationTable rest = small({"a", "b", "y"}, part, 30);
    rest.response = "y";
    rest.sds = (VectorXd(3) << 2, 1, 1).finished();
    return rest;
  }());
  CHECK(fit.coefficients[1] == Approx(without.coefficients[1]));
  CHECK(fit.standard_errors[1] == Approx(without.standard_errors[1]));
}

TEST_CASE("a table that no data can have is refused, one that rounding explains is not",
          "[correlations][error]") {
  // x3 = (x1 - x2) / sqrt(2(1-r)): an exact dependency, r12 = 0.28, r13 = 0.6, r23 = -0.6; printed to one
  // decimal fewer it is no longer positive semidefinite, by less than the rounding
  const MatrixXd exact = three(0.28, 0.6, -0.6);
  CHECK(fit_from_correlations(small({"a", "b", "c"}, exact, 20)).dependencies.size() == 1);
  const MatrixXd printed = three(0.3, 0.6, -0.6);
  CHECK(Eigen::SelfAdjointEigenSolver<MatrixXd>(printed).eigenvalues()[0] < -0.001);
  CHECK(fit_from_correlations(small({"a", "b", "c"}, printed, 20)).dependencies.size() == 1);
  // the same miss with more decimals is no rounding
  CHECK(code_of(small({"a", "b", "c"}, three(0.3001, 0.6, -0.6), 20)) == ErrorCode::correlation_not_psd);
  CHECK(code_of(small({"a", "b", "c"}, three(0.9, 0.9, -0.9), 20)) == ErrorCode::correlation_not_psd);
}

TEST_CASE("every defect of a correlation table has its code", "[correlations][error]") {
  const MatrixXd good = three(0.5, 0.3, -0.2);
  const std::vector<std::string> names = {"a", "b", "c"};
  struct Case {
    std::string what;
    ErrorCode code;
    std::function<void(CorrelationTable&)> spoil;
  };
  const double nan = std::nan("");
  const std::vector<Case> cases = {
      {"not square", ErrorCode::correlation_shape, [](auto& t) { t.correlations.conservativeResize(2, 3); }},
      {"a name missing", ErrorCode::correlation_shape, [](auto& t) { t.names.pop_back(); }},
      {"nothing at all", ErrorCode::correlation_shape,
       [](auto& t) {
         t.names.clear();
         t.correlations.resize(0, 0);
       }},
      {"diagonal", ErrorCode::correlation_diagonal, [](auto& t) { t.correlations(1, 1) = 0.999; }},
      {"asymmetric", ErrorCode::correlation_asymmetric, [](auto& t) { t.correlations(1, 0) = 0.51; }},
      {"above one", ErrorCode::correlation_outside,
       [](auto& t) { t.correlations(1, 0) = t.correlations(0, 1) = 1.01; }},
      {"neither side", ErrorCode::correlation_outside,
       [=](auto& t) { t.correlations(1, 0) = t.correlations(0, 1) = nan; }},
      {"infinite", ErrorCode::correlation_outside, [](auto& t) { t.correlations(2, 0) = INFINITY; }},
      {"unknown response", ErrorCode::unknown_column, [](auto& t) { t.response = "z"; }},
      {"one name twice", ErrorCode::duplicate_heading, [](auto& t) { t.names[1] = "a"; }},
      {"n = 1", ErrorCode::too_few_rows, [](auto& t) { t.rows = 1; }},
      {"n no number", ErrorCode::too_few_rows, [=](auto& t) { t.rows = nan; }},
      {"n = p + 1", ErrorCode::too_few_rows,
       [](auto& t) {
         t.response = "a";
         t.rows = 3;
       }},
      {"n not whole", ErrorCode::impossible_setting, [](auto& t) { t.rows = 20.5; }},
      {"n infinite", ErrorCode::impossible_setting, [](auto& t) { t.rows = INFINITY; }},
      {"sd of 0", ErrorCode::impossible_setting, [](auto& t) { t.sds = VectorXd::Zero(3); }},
      {"too few sds", ErrorCode::impossible_setting, [](auto& t) { t.sds = VectorXd::Ones(2); }},
      {"mean no number", ErrorCode::impossible_setting,
       [=](auto& t) { t.means = VectorXd::Constant(3, nan); }},
  };
  for (const Case& one : cases) {
    CAPTURE(one.what);
    CorrelationTable table = small(names, good, 20);
    one.spoil(table);
    CHECK(code_of(table) == one.code);
  }
  CorrelationTable fewest = small(names, good, 4);  // n = p + 2
  fewest.response = "a";
  CHECK(fit_from_correlations(fewest).residual_df == 1);
}

TEST_CASE("a response that the predictors determine leaves no scatter", "[correlations]") {
  CorrelationTable table = small({"a", "b", "y"}, three(0, 0.6, 0.8), 20);
  table.response = "y";
  const LeastSquaresFit fit = fit_from_correlations(table);
  CHECK(fit.unexplained_share <= 1e-15);
  CHECK(fit.residual_sd <= 1e-7);
  CHECK(fit.coefficients[0] == Approx(0.6));
  CHECK(fit.coefficients[1] == Approx(0.8));
}

TEST_CASE("the thresholds of correlation tables are those that are documented", "[correlations][tolerance]") {
  CHECK(tolerance::correlation_rounding == 1e-8);
  MatrixXd r = three(0.5, 0.3, -0.2);
  r(0, 0) = 1 + 0.9e-8;
  CHECK(code_of(small({"a", "b", "c"}, r, 20)) == ErrorCode::internal);  // accepted
  r(0, 0) = 1 + 1.1e-8;
  CHECK(code_of(small({"a", "b", "c"}, r, 20)) == ErrorCode::correlation_diagonal);
}
