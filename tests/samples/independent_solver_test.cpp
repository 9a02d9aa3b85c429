// What the Expected figures of the sample sheets rest on: the solver behind them against published values. It
// shares no code with the core, so that both agreeing in the sheets means something.
#include "sample-sheets/independent_solver.hpp"

#include <cmath>
#include <string>
#include <vector>

#include "tests/support/catch.hpp"
#include "tests/support/reference.hpp"

using namespace unply::samples;
using unply::test::Csv;
using unply::test::Figures;

namespace {

Reals column(const Csv& csv, const std::string& heading) {
  Reals result;
  for (const std::string& text : csv.column(heading)) result.emplace_back(text);
  return result;
}

}  // namespace

// Source: NIST Statistical Reference Datasets, linear least squares: Longley. Certified to 15 digits.
TEST_CASE(
    "estimates and standard deviations of Longley's data are the certified ones to the last printed digit",
    "[published]") {
  const Csv csv = unply::test::read_csv("nist_longley");
  const Figures figures = unply::test::read_figures("nist_longley");
  Predictors x;
  for (int j = 1; j <= 6; ++j) x.add("x" + std::to_string(j), column(csv, "x" + std::to_string(j)));
  const IndependentFit fit(x, column(csv, "y"));
  const auto agrees = [&](const std::string& key, const Real& value) {
    CAPTURE(key);
    // the printed value is rounded at its 15th digit
    const Real printed(figures.at(key));
    CHECK(abs(value / printed - 1) < Real("5.1e-15"));
  };
  agrees("published | estimates | 1", fit.intercept());
  agrees("published | standard_deviations | 1", fit.intercept_standard_error());
  for (const std::string& name : x.names) {
    agrees("published | estimates | " + name, fit.coefficient(name));
    agrees("published | standard_deviations | " + name, fit.standard_error(name));
  }
  agrees("published | residual_sd", fit.residual_sd());
  agrees("published | r_squared", fit.r_squared());
  agrees("published | F", fit.f());
}

// Source: Belsley, Kuh & Welsch, Regression Diagnostics (1980), on Longley's data; as printed.
TEST_CASE("VIFs and condition indices of Longley's data are the published ones", "[published]") {
  const Csv csv = unply::test::read_csv("nist_longley");
  const Figures figures = unply::test::read_figures("longley_collinearity");
  Predictors x;
  for (int j = 1; j <= 6; ++j) x.add("x" + std::to_string(j), column(csv, "x" + std::to_string(j)));
  const IndependentFit fit(x, column(csv, "y"));
  for (const std::string& name : x.names) {
    CAPTURE(name);
    CHECK(unply::test::agrees_as_printed(static_cast<double>(fit.vif(name)),
                                         figures.at("published | vif[" + name + "]")));
  }
  const IndependentFit::Condition condition = fit.condition();
  for (std::size_t l = 0; l < 7; ++l) {
    CAPTURE(l);
    // one unit of the last place: the largest, 43275.04359, was printed cut off instead of rounded
    const std::string& printed = figures.at("published | condition_index[" + std::to_string(l + 1) + "]");
    CHECK(unply::test::agrees_as_printed(static_cast<double>(condition.indices[l]), printed, 1));
  }
}

// Source: Abramowitz & Stegun, Handbook of Mathematical Functions (1964), tables 26.10 (t) and 26.9 (F), as
// printed.
TEST_CASE("quantiles of t and tails of F are the tabulated ones", "[published]") {
  const Real level = Real(95) / 100;
  CHECK(std::round(static_cast<double>(t_quantile(level, 1)) * 1000) == 12706);
  CHECK(std::round(static_cast<double>(t_quantile(level, 2)) * 1000) == 4303);
  CHECK(std::round(static_cast<double>(t_quantile(level, 10)) * 1000) == 2228);
  CHECK(std::round(static_cast<double>(t_quantile(level, 120)) * 1000) == 1980);
  CHECK(std::round(static_cast<double>(t_quantile(Real(99) / 100, 30)) * 1000) == 2750);
  // the upper 5 % points of F: half a unit of their last place changes the tail by less than 0.0005
  CHECK(std::abs(static_cast<double>(f_upper(Real("3.71"), 3, 10)) - 0.05) < 0.0005);
  CHECK(std::abs(static_cast<double>(f_upper(Real("2.68"), 3, 120)) - 0.05) < 0.0005);
  CHECK(std::abs(static_cast<double>(f_upper(Real("4.96"), 1, 10)) - 0.05) < 0.0005);
}

// Closed forms: t with one degree of freedom is Cauchy's distribution; F with two numerator degrees has the
// tail (1 + 2 f / d)^(-d / 2); F(1, d) is the square of t(d).
TEST_CASE("tails follow their closed forms to forty digits, far out too", "[property]") {
  for (const char* text : {"0.01", "0.5", "1", "7", "1000"}) {
    const Real t(text);
    CAPTURE(text);
    const Real cauchy = 1 - 2 * atan(t) / (4 * atan(Real(1)));
    CHECK(abs(t_two_sided(t, 1) / cauchy - 1) < Real("1e-40"));
    CHECK(abs(f_upper(t, 2, 226) / pow(1 + 2 * t / 226, -113) - 1) < Real("1e-40"));
    CHECK(abs(f_upper(t * t, 1, 57) / t_two_sided(t, 57) - 1) < Real("1e-40"));
  }
  CHECK(abs(1 - t_two_sided(t_quantile(Real(95) / 100, 226), 226) - Real(95) / 100) < Real("1e-39"));
}

TEST_CASE("VIF, generalised VIF and the two joint tests agree where theory says so", "[property]") {
  const Csv csv = unply::test::read_csv("nist_longley");
  Predictors x;
  for (int j = 1; j <= 6; ++j) x.add("x" + std::to_string(j), column(csv, "x" + std::to_string(j)));
  const IndependentFit fit(x, column(csv, "y"));
  for (const std::string& name : x.names) {
    // one column: generalised VIF = VIF, F = t squared, and SE = s / (sqrt(n - 1) sd) sqrt(VIF)
    CHECK(abs(fit.generalised_vif({name}) / fit.vif(name) - 1) < Real("1e-30"));
    CHECK(abs(fit.joint_f({name}) / (fit.t(name) * fit.t(name)) - 1) < Real("1e-30"));
    CHECK(abs(fit.joint_p({name}) / fit.p(name) - 1) < Real("1e-30"));
    const Real ledger = fit.residual_sd() * sqrt(fit.vif(name) / (fit.rows() - 1)) / fit.spread(name);
    CHECK(abs(ledger / fit.standard_error(name) - 1) < Real("1e-30"));
  }
  // all columns: the joint test is that of the whole model
  CHECK(abs(fit.joint_f(x.names) / fit.f() - 1) < Real("1e-30"));
  // proportions of variance: every coefficient's add up to 1; squared indices times eigenvalues are the
  // largest one
  const IndependentFit::Condition condition = fit.condition();
  for (std::size_t j = 0; j < 7; ++j) {
    Real sum = 0;
    for (const Reals& line : condition.proportions) sum += line[j];
    CHECK(abs(sum - 1) < Real("1e-30"));
  }
  // leaving a row out and predicting it: the sum over rows behind PRESS
  Real press = 0;
  const Reals y = column(csv, "y");
  for (std::size_t out = 0; out < y.size(); ++out) {
    Predictors others;
    Reals rest = y, row;
    rest.erase(rest.begin() + static_cast<std::ptrdiff_t>(out));
    for (std::size_t j = 0; j < 6; ++j) {
      Reals values = x.columns[j];
      row.push_back(values[out]);
      values.erase(values.begin() + static_cast<std::ptrdiff_t>(out));
      others.add(x.names[j], values);
    }
    const Real error = y[out] - IndependentFit(others, rest).predict(row, Real(95) / 100).value;
    press += error * error;
  }
  CHECK(abs(sqrt(press / y.size()) / fit.prediction_error() - 1) < Real("1e-30"));
}

// Source: the definition of rows_needed; n = 16 rows are at their own half-width.
TEST_CASE("the rows needed for the present half-width are the present rows", "[property]") {
  const Csv csv = unply::test::read_csv("nist_longley");
  Predictors x;
  for (int j = 1; j <= 6; ++j) x.add("x" + std::to_string(j), column(csv, "x" + std::to_string(j)));
  const IndependentFit fit(x, column(csv, "y"));
  const Real level = Real(95) / 100;
  const Real now = fit.half_width("x3", level);
  CHECK(fit.rows_needed("x3", now * (1 + Real("1e-30")), level) == 16);
  CHECK(fit.rows_needed("x3", now * (1 - Real("1e-30")), level) == 17);
  CHECK(fit.rows_needed("x3", now / 2, level) > 16 + 16);
}
