#include "core/diagnose/ledger.hpp"

#include <Eigen/Dense>
#include <cmath>

#include "core/base/tolerance.hpp"
#include "core/diagnose/residual_checks.hpp"
#include "core/diagnose/verdict.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/made_tables.hpp"
#include "tests/support/matrix_source.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

constexpr std::uint64_t seed = 20260206;

double half_width_at(double n, double level, double s, double spread, double vif, std::size_t k,
                     bool intercept = true) {
  return t_quantile(level, n - static_cast<double>(k)) * s * std::sqrt(vif) / spread /
         std::sqrt(n - (intercept ? 1 : 0));
}

}  // namespace

TEST_CASE("the four factors of the ledger multiply to the standard error of the fit", "[ledger]") {
  CAPTURE(seed);
  Random random(seed);
  for (const bool intercept : {true, false}) {
    for (const double common : {0.0, 0.9, 0.9999}) {
      const MatrixXd x = random_predictors(random, 40, 4, common);
      const VectorXd y = random_response(random, x, 1);
      const LeastSquaresFit fit = fit_of(x, y, intercept);
      const Layout layout = plain_layout(4, intercept);
      const auto tests = coefficient_tests(fit, fit.standard_errors, 0.9);
      Model model;
      model.level = 0.9;
      model.intercept = intercept;
      for (const LedgerRow& row : precision_ledger(fit, layout, model)) {
        const Index j = static_cast<Index>(row.column);
        CHECK(row.residual_sd == Approx(fit.residual_sd).epsilon(1e-13));
        CHECK(row.rows_factor == 1 / std::sqrt(40.0 - intercept));
        CHECK(row.spread == fit.sd[j]);
        CHECK(row.vif == fit.variance_inflation[j]);
        CHECK(row.widening == Approx(std::sqrt(row.vif)));
        CHECK(row.residual_sd * row.rows_factor / row.spread * row.widening ==
              Approx(fit.standard_errors[j]).epsilon(1e-13));
        CHECK(row.standard_error == fit.standard_errors[j]);
        CHECK(row.standard_error_without_collinearity * row.widening == Approx(row.standard_error));
        CHECK(row.half_width == Approx(tests[row.column].interval.half_width()).epsilon(1e-12));
        CHECK(row.target_is_illustration);
        CHECK(row.target == std::abs(fit.coefficients[j]));
        CHECK(row.reached == (row.half_width <= row.target));
      }
    }
  }
}

TEST_CASE("with robust standard errors the ledger agrees with the robust intervals", "[ledger]") {
  CAPTURE(seed);
  Random random(seed);
  const MatrixXd x = random_predictors(random, 40, 3, 0.9);
  const MatrixSource source(x, random_response(random, x, 1));
  const LeastSquaresFit fit = fit_least_squares(source, true);
  const VectorXd robust = residual_checks(source, fit, 0.95).robust_standard_errors;
  const auto tests = coefficient_tests(fit, robust, 0.95);
  for (const LedgerRow& row : precision_ledger(fit, plain_layout(3), Model{}, robust)) {
    CHECK(row.half_width == Approx(tests[row.column].interval.half_width()).epsilon(1e-12));
    CHECK(row.residual_sd * row.rows_factor / row.spread * row.widening ==
          Approx(robust[static_cast<Index>(row.column)]).epsilon(1e-13));
  }
}

TEST_CASE("what a cause alone has to become brings the half-width to the target", "[ledger]") {
  CAPTURE(seed);
  Random random(seed);
  const MatrixXd x = random_predictors(random, 60, 4, 0.95);
  const LeastSquaresFit fit = fit_of(x, random_response(random, x, 2));
  Model model;
  const Layout layout = plain_layout(4);
  int unreachable = 0, reachable = 0;
  for (const double part : {0.02, 0.3, 0.9, 1.5}) {
    for (std::size_t j = 0; j < 4; ++j) {
      const LedgerRow now = precision_ledger(fit, layout, model)[j];
      Model with = model;
      with.smallest_effects[layout.columns[j]] =
          -2 * part * now.half_width;  // the sign of an effect does not count
      const LedgerRow row = precision_ledger(fit, layout, with)[j];
      CAPTURE(part, j);
      CHECK(row.target == Approx(part * now.half_width));
      CHECK(row.smallest_effect == Approx(2 * part * now.half_width));
      CHECK_FALSE(row.target_is_illustration);
      CHECK(row.reached == (part >= 1));
      const auto at = [&](double s, double spread, double vif) {
        return half_width_at(60, 0.95, s, spread, vif, 5);
      };
      CHECK(at(row.scatter_needed.value, row.spread, row.vif) == Approx(row.target));
      CHECK(at(row.residual_sd, row.spread_needed.value, row.vif) == Approx(row.target));
      CHECK(row.scatter_needed.reachable);
      CHECK(row.spread_needed.reachable);
      CHECK(row.rows.reachable);
      CHECK(half_width_at(row.rows.value, 0.95, row.residual_sd, row.spread, row.vif, 5) <= row.target);
      CHECK(half_width_at(row.rows.value - 1, 0.95, row.residual_sd, row.spread, row.vif, 5) > row.target);
      CHECK((row.rows.value > 60) == (part < 1));
      if (row.vif_needed.reachable) {
        ++reachable;
        CHECK(row.vif_needed.value >= 1);
        CHECK(at(row.residual_sd, row.spread, row.vif_needed.value) == Approx(row.target));
      } else {
        ++unreachable;
        CHECK(std::isnan(row.vif_needed.value));
        CHECK(at(row.residual_sd, row.spread, 1) > row.target);
      }
    }
  }
  CHECK(unreachable > 0);
  CHECK(reachable > 0);
}

TEST_CASE("rows needed are the first number that does, by trying them all", "[ledger]") {
  CAPTURE(seed);
  Random random(seed);
  for (int trial = 0; trial < 200; ++trial) {
    const std::size_t k = 1 + random.below(8);
    const double level = 0.5 + 0.499 * random.uniform(), s = std::exp(random.normal()),
                 spread = std::exp(random.normal());
    const double vif = 1 + 10 * random.uniform() * random.uniform(),
                 target = s / spread * std::exp(random.normal() - 1);
    const bool intercept = random.uniform() < 0.7;
    CAPTURE(trial, k, level, s, spread, vif, target, intercept);
    double n = std::max(static_cast<double>(k) + 1, 2.0);
    while (half_width_at(n, level, s, spread, vif, k, intercept) > target) ++n;
    CHECK(rows_needed(target, level, s, spread, vif, k, intercept) == n);
  }
}

TEST_CASE("rows needed stay right for tiny, huge and impossible targets", "[ledger]") {
  // far out the t quantile is the normal one: n - 1 = (1.959964 s / (sd target))^2
  const double normal = 1.959963984540054;
  for (const double target : {1e-3, 1e-5, 1e-7}) {
    const double n = rows_needed(target, 0.95, 1, 1, 1, 3);
    CHECK(n == Approx(1 + normal * normal / target / target).epsilon(1e-5));
    CHECK(n == std::floor(n));
  }
  CHECK(tolerance::most_rows == 1e15);
  CHECK(std::isinf(rows_needed(1e-8, 0.95, 1, 1, 1, 3)));
  CHECK(std::isinf(rows_needed(1e-300, 0.95, 1e300, 1, 1, 3)));
  CHECK(std::isinf(rows_needed(0, 0.95, 1, 1, 1, 3)));
  CHECK(std::isinf(rows_needed(-1, 0.95, 1, 1, 1, 3)));
  CHECK(std::isinf(rows_needed(1, 0.95, 1, 0, 1, 3)));
  CHECK(rows_needed(1e300, 0.95, 1, 1, 1, 3) == 4);  // one degree of freedom
  CHECK(rows_needed(1, 0.95, 0, 1, 1, 3) == 4);      // no scatter
  CHECK(rows_needed(1e300, 0.95, 1, 1, 1, 1) == 2);
  CHECK(std::isnan(rows_needed(std::nan(""), 0.95, 1, 1, 1, 3)));
}

TEST_CASE("the smallest effect of a column: its own, its term's, else that of all terms", "[ledger]") {
  Layout layout = plain_layout({"A", "Clay: red", "Clay: white"});
  layout.terms.pop_back();
  layout.terms[1].name = "Clay";
  layout.terms[1].columns = {1, 2};
  layout.term_of[2] = 1;
  Model model;
  CHECK(std::isnan(smallest_effect_of(0, layout, model)));
  model.smallest_effect = 3;
  CHECK(smallest_effect_of(0, layout, model) == 3);
  model.smallest_effects = {{"Clay", 2}, {"Clay: white", -1}};
  CHECK(smallest_effect_of(0, layout, model) == 3);
  CHECK(smallest_effect_of(1, layout, model) == 2);
  CHECK(smallest_effect_of(2, layout, model) == 1);
  model.smallest_effects["A"] = 0;
  CHECK(std::isnan(smallest_effect_of(0, layout, model)));
}

TEST_CASE("inestimable columns, an exact fit and an estimate of nothing have sane ledgers", "[ledger]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 20, 3);
  SECTION("a dependency") {
    x.col(2) = x.col(0);
    const LeastSquaresFit fit = fit_of(x, random_response(random, x, 1));
    const auto ledger = precision_ledger(fit, plain_layout(3), Model{});
    CHECK_FALSE(ledger[0].estimable);
    CHECK(std::isinf(ledger[0].vif));
    CHECK(std::isnan(ledger[0].half_width));
    CHECK_FALSE(ledger[0].rows.reachable);
    CHECK_FALSE(ledger[2].estimable);
    CHECK(ledger[1].estimable);
    CHECK(std::isfinite(ledger[1].half_width));
    CHECK(ledger[1].rows.value >= 4);
  }
  SECTION("an exact fit") {
    x = (x * 8).array().round();
    const LeastSquaresFit fit = fit_of(x, VectorXd(2 * x.col(0) - x.col(1)));
    for (const LedgerRow& row : precision_ledger(fit, plain_layout(3), Model{})) {
      CAPTURE(row.column);
      CHECK(row.half_width <= 1e-13);
      if (row.column < 2) CHECK(row.reached);
      CHECK_FALSE(std::isnan(row.rows.reachable ? row.rows.value : 0));
    }
  }
  SECTION("an estimate of exactly 0") {
    MatrixXd cross(4, 1);
    cross << 1, -1, 1, -1;
    const LeastSquaresFit fit = fit_of(cross, (VectorXd(4) << 1, 1, -1, -1).finished());
    const LedgerRow row = precision_ledger(fit, plain_layout(1), Model{})[0];
    CHECK(row.target == 0);
    CHECK_FALSE(row.reached);
    CHECK_FALSE(row.rows.reachable);
    CHECK_FALSE(row.spread_needed.reachable);
    CHECK_FALSE(row.scatter_needed.reachable);
    CHECK_FALSE(row.vif_needed.reachable);
  }
}

TEST_CASE("shortfalls of rows, spread and scatter are their marks' multiples", "[ledger][tolerance]") {
  CHECK(tolerance::few_rows_per_coefficient == 5);
  CHECK(tolerance::noticeable_effect == 0.1);
  CHECK(tolerance::large_unexplained_share == 0.5);
  CAPTURE(seed);
  Random random(seed);
  const MatrixXd x = random_matrix(random, 25, 2);
  const LeastSquaresFit fit = fit_of(x, random_response(random, x, 1));
  Model model;
  model.smallest_effect = 0.2;
  const LedgerRow row = precision_ledger(fit, plain_layout(2), model)[1];
  CHECK(row.rows_shortfall == Approx(5 * 3 / 25.0));
  CHECK(row.scatter_shortfall == Approx(2 * fit.unexplained_share));
  CHECK(row.spread_shortfall == Approx(std::pow(0.1 * fit.response_sd / 0.2 / fit.sd[1], 2)));
  CHECK(precision_ledger(fit, plain_layout(2), Model{})[1].spread_shortfall == 0);
}

// -- verdicts
// -------------------------------------------------------------------------------------------------------

namespace {

/// One column, half-width 1 and standard error to match; the rest as the case wants it.
TermVerdict verdict_of(double estimate, double half_width, double smallest_effect, double vif = 1,
                       double rows_shortfall = 0, double spread_shortfall = 0, double scatter_shortfall = 0) {
  CoefficientTest test;
  test.estimate = estimate;
  test.interval = {estimate - half_width, estimate + half_width};
  LedgerRow row;
  row.vif = vif;
  row.widening = std::sqrt(vif);
  row.half_width = half_width;
  row.smallest_effect = smallest_effect;
  row.target_is_illustration = std::isnan(smallest_effect);
  row.target = row.target_is_illustration ? std::abs(estimate) : smallest_effect / 2;
  row.reached = half_width <= row.target;
  row.rows_shortfall = rows_shortfall;
  row.spread_shortfall = spread_shortfall;
  row.scatter_shortfall = scatter_shortfall;
  return verdicts({test}, {row}, {}, plain_layout(1), Model{})[0];
}

const double none = std::nan("");

}  // namespace

TEST_CASE("an interval that leaves 0 out is clear, with its size against the smallest effect", "[verdict]") {
  struct Case {
    double estimate, half_width, effect;
    EffectSize size;
  };
  const std::vector<Case> cases = {
      {2, 1, none, EffectSize::not_asked},     {3, 1, 2, EffectSize::beyond},
      {2.5, 1, 2, EffectSize::size_uncertain}, {2, 1, 3.5, EffectSize::too_small},
      {2, 1, 3, EffectSize::size_uncertain},   {5, 1, 2, EffectSize::beyond},
  };
  for (const Case& one : cases) {
    for (const double sign : {1.0, -1.0}) {
      CAPTURE(one.estimate, one.effect, sign);
      const TermVerdict verdict = verdict_of(sign * one.estimate, one.half_width, one.effect, 500);
      CHECK(verdict.kind == VerdictKind::clear);
      CHECK(verdict.size == one.size);
      CHECK(verdict.collinearity == CollinearityRole::none);
      CHECK(verdict.other == OtherCause::none);
    }
  }
}

TEST_CASE("an interval that holds 0 and no effect that matters rules one out, whatever the VIF",
          "[verdict]") {
  for (const double estimate : {0.0, 0.5, -0.5}) {
    const TermVerdict verdict = verdict_of(estimate, 1, 1.6, 900);
    CHECK(verdict.kind == VerdictKind::ruled_out);
    CHECK(verdict.collinearity == CollinearityRole::none);
  }
  CHECK(verdict_of(0.5, 1, 1.5).kind == VerdictKind::undecided);  // 1.5 itself is not excluded
  CHECK(verdict_of(1, 1, none).kind == VerdictKind::undecided);   // touching 0 is not leaving it out
}

TEST_CASE("an undecided effect says what collinearity has to do with it", "[verdict]") {
  CHECK(tolerance::partly_share == 0.5);
  struct Case {
    double vif;
    CollinearityRole role;
  };
  // half-width 1, smallest effect 0.2, so H = 0.1: ten times too wide
  for (const Case& one : std::vector<Case>{{101, CollinearityRole::would_account},
                                           {99, CollinearityRole::partly},
                                           {10.1, CollinearityRole::partly},
                                           {9.9, CollinearityRole::not_the_cause},
                                           {1, CollinearityRole::not_the_cause}}) {
    CAPTURE(one.vif);
    const TermVerdict verdict = verdict_of(0.5, 1, 0.2, one.vif, 1, 2, 3);
    CHECK(verdict.kind == VerdictKind::undecided);
    CHECK(verdict.collinearity == one.role);
    CHECK(verdict.other ==
          (one.role == CollinearityRole::would_account ? OtherCause::none : OtherCause::scatter));
    CHECK(verdict.smallest_effect == 0.2);
  }
  // without a smallest effect the estimate is the measure: 1 against 0.5, twice too wide
  CHECK(verdict_of(0.5, 1, none, 4.1).collinearity == CollinearityRole::would_account);
  CHECK(verdict_of(0.5, 1, none, 2.1).collinearity == CollinearityRole::partly);
  CHECK(verdict_of(0.5, 1, none, 1.9).collinearity == CollinearityRole::not_the_cause);
  CHECK(verdict_of(0, 1, none, 900).collinearity == CollinearityRole::not_the_cause);
}

TEST_CASE("the other cause is the one furthest from its mark", "[verdict]") {
  const auto cause = [](double rows, double spread, double scatter) {
    return verdict_of(0.5, 1, 0.2, 1, rows, spread, scatter).other;
  };
  CHECK(cause(3, 2, 1) == OtherCause::rows);
  CHECK(cause(1, 3, 2) == OtherCause::spread);
  CHECK(cause(2, 1, 3) == OtherCause::scatter);
  CHECK(cause(0.3, 0.2, 0.1) == OtherCause::rows);
}

TEST_CASE("at the target half-width no effect is left undecided", "[verdict]") {
  // an interval no longer than d cannot hold 0 and d
  CAPTURE(seed);
  Random random(seed);
  for (int trial = 0; trial < 2000; ++trial) {
    const double effect = std::exp(random.normal()), estimate = 3 * random.normal();
    const double half_width = effect / 2 * (1 - 1e-12) * random.uniform();
    CAPTURE(trial, effect, estimate, half_width);
    CHECK(verdict_of(estimate, half_width, effect).kind != VerdictKind::undecided);
  }
}

TEST_CASE("verdicts of a fit: inestimable columns, groups and their joint tests", "[verdict]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 60, 5);
  x.col(1) = x.col(0) + 0.03 * x.col(1);
  x.col(4) = x.col(3);
  const VectorXd y = x.col(0) + x.col(1) + random_matrix(random, 60, 1);
  const LeastSquaresFit fit = fit_of(x, y);
  const Layout layout = plain_layout(5);
  Model model;
  model.smallest_effect = 1;
  const auto tests = coefficient_tests(fit, fit.standard_errors, model.level);
  const auto groups = collinear_groups(fit, layout, model.level);
  REQUIRE(groups.size() == 1);
  const auto all = verdicts(tests, precision_ledger(fit, layout, model), groups, layout, model);
  REQUIRE(all.size() == 5);
  for (std::size_t j = 0; j < 5; ++j) CHECK(all[j].column == j);
  for (const std::size_t j : {0, 1}) {
    CHECK(all[j].kind == VerdictKind::undecided);
    CHECK(all[j].collinearity == CollinearityRole::would_account);
    REQUIRE(all[j].group.has_value());
    CHECK(*all[j].group == 0);
    CHECK(all[j].group_clear);
  }
  CHECK_FALSE(all[2].group.has_value());
  CHECK(all[2].kind == VerdictKind::ruled_out);
  CHECK(all[3].kind == VerdictKind::not_estimable);
  CHECK(all[4].kind == VerdictKind::not_estimable);
}
