// Data sets of the literature: every figure of tests/reference that concerns least squares and collinearity,
// the published ones as printed, the recomputed ones (exact rational or high-precision arithmetic) to many
// digits. The sources of data and figures stand at the head of each reference file.
#include <Eigen/Dense>
#include <cmath>
#include <string>
#include <vector>

#include "core/diagnose/collinearity.hpp"
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

struct Published {
  std::vector<std::string> names;
  MatrixXd x;
  VectorXd y;
  Figures figures;
  LeastSquaresFit fit;
  Layout layout;

  Index place(const std::string& name) const {
    return std::find(names.begin(), names.end(), name) - names.begin();
  }
  double sst() const { return fit.response_sd * fit.response_sd * static_cast<double>(fit.rows - 1); }
  double sse() const { return fit.unexplained_share * sst(); }
  /// The model of some of its predictors.
  LeastSquaresFit of(const std::vector<std::string>& some) const {
    MatrixXd part(x.rows(), static_cast<Index>(some.size()));
    for (std::size_t k = 0; k < some.size(); ++k) part.col(static_cast<Index>(k)) = x.col(place(some[k]));
    return fit_of(part, y);
  }
};

Published read(const std::string& data, const std::string& figures, const std::string& response) {
  Published read;
  const Csv csv = read_csv(data);
  for (const std::string& heading : csv.headings) {
    if (heading != response) read.names.push_back(heading);
  }
  read.x.resize(static_cast<Index>(csv.rows.size()), static_cast<Index>(read.names.size()));
  for (std::size_t j = 0; j < read.names.size(); ++j) {
    read.x.col(static_cast<Index>(j)) = csv.numbers(read.names[j]);
  }
  read.y = csv.numbers(response);
  read.figures = read_figures(figures);
  read.fit = fit_of(read.x, read.y);
  read.layout = plain_layout(read.names);
  return read;
}

/// The rest of a key after its beginning; empty where it begins otherwise.
std::string after(const std::string& key, const std::string& beginning) {
  return key.compare(0, beginning.size(), beginning) == 0 ? key.substr(beginning.size()) : "";
}

/// The 15-digit figures of a reference file. Coefficients and VIFs come out of the fit with more digits than
/// asked; figures from singular values lose the condition number (at most 4e4 here) of the 16 digits of a
/// double.
void check_recomputed(const Published& data) {
  const auto tests = coefficient_tests(data.fit, data.fit.standard_errors, 0.95);
  const CoefficientTest intercept = intercept_test(data.fit, data.fit.intercept_standard_error, 0.95);
  const FitQuality quality = fit_quality(data.fit);
  const ConditionTable uncentred = condition_table(data.fit, data.layout, false);
  const ConditionTable centred = condition_table(data.fit, data.layout, true);
  const double largest_eigenvalue =
      static_cast<double>(uncentred.indices.size()) / uncentred.indices.array().square().inverse().sum();
  const double largest_correlation_eigenvalue =
      static_cast<double>(centred.indices.size()) / centred.indices.array().square().inverse().sum();
  const Index last = centred.indices.size() - 1;
  int checked = 0;
  for (const auto& [key, printed] : data.figures) {
    CAPTURE(key, printed);
    std::string rest;
    const auto agrees = [&](double value, double digits = 12) {
      ++checked;
      CHECK(matching_digits(value, std::stod(printed)) >= digits);
    };
    const auto of_term = [&](double CoefficientTest::*figure) {
      agrees(rest == "1" ? intercept.*figure : tests[static_cast<std::size_t>(data.place(rest))].*figure);
    };
    if (!(rest = after(key, "recomputed | ols | estimates | ")).empty()) of_term(&CoefficientTest::estimate);
    if (!(rest = after(key, "recomputed | ols | standard_errors | ")).empty())
      of_term(&CoefficientTest::standard_error);
    if (!(rest = after(key, "recomputed | ols | t | ")).empty()) of_term(&CoefficientTest::t);
    if (!(rest = after(key, "recomputed | ols | p_two_sided | ")).empty()) of_term(&CoefficientTest::p);
    if (!(rest = after(key, "recomputed | collinearity | vif | ")).empty()) {
      agrees(data.fit.variance_inflation[data.place(rest)]);
    }
    if (!(rest = after(key, "recomputed | collinearity | tolerance | ")).empty()) {
      agrees(1 / data.fit.variance_inflation[data.place(rest)]);
    }
    if (!(rest = after(key, "recomputed | collinearity | correlation_matrix | ")).empty()) {
      agrees(data.fit.correlation(std::stoi(rest) - 1, std::stoi(rest.substr(rest.rfind(' '))) - 1));
    }
    if (!(rest = after(key, "recomputed | collinearity | correlation_eigenvalues | ")).empty()) {
      const double index = centred.indices[std::stoi(rest) - 1];
      agrees(largest_correlation_eigenvalue / index / index, 10);
    }
    if (!(rest = after(key, "recomputed | collinearity | scaled_uncentred | eigenvalues | ")).empty()) {
      const double index = uncentred.indices[std::stoi(rest) - 1];
      agrees(largest_eigenvalue / index / index, 10);
    }
    if (!(rest = after(key, "recomputed | collinearity | scaled_uncentred | condition_indices | ")).empty()) {
      agrees(uncentred.indices[std::stoi(rest) - 1], 10);
    }
    rest = after(
        key, "recomputed | collinearity | scaled_uncentred | variance_proportions_rows_are_components | ");
    if (!rest.empty()) {  // ten digits printed; small shares are small differences in direction
      agrees(uncentred.proportions(std::stoi(rest) - 1, std::stoi(rest.substr(rest.rfind(' '))) - 1), 6);
    }
    if (key == "recomputed | collinearity | correlation_condition_index") agrees(centred.indices[last], 10);
    if (key == "recomputed | ols | n") agrees(static_cast<double>(data.fit.rows));
    if (key == "recomputed | ols | df_residual") agrees(static_cast<double>(data.fit.residual_df));
    if (key == "recomputed | ols | s") agrees(quality.residual_sd);
    if (key == "recomputed | ols | r_squared") agrees(quality.r_squared);
    if (key == "recomputed | ols | adjusted_r_squared") agrees(quality.adjusted_r_squared);
    if (key == "recomputed | ols | F") agrees(quality.f);
    if (key == "recomputed | ols | F_p") agrees(quality.p);
    if (key == "recomputed | ols | sse") agrees(data.sse());
    if (key == "recomputed | ols | sst") agrees(data.sst());
  }
  CHECK(checked >= 40);
}

/// Published figures by name; `units`: last printed places allowed beyond half of one.
struct Printed {
  const Published& data;
  int checked = 0;
  void operator()(const std::string& key, double value, double units = 0.5000001) {
    const std::string printed = data.figures.at("published | " + key);
    CAPTURE(key, printed, value);
    CHECK(agrees_as_printed(value, printed, units));
    ++checked;
  }
};

}  // namespace

TEST_CASE("the Longley data give the published collinearity figures", "[published]") {
  const Published data = read("nist_longley", "longley_collinearity", "y");
  check_recomputed(data);
  Printed printed{data};
  const ConditionTable table = condition_table(data.fit, data.layout, false);
  for (Index j = 0; j < 6; ++j) {
    const std::string name = "[" + data.names[static_cast<std::size_t>(j)] + "]";
    printed("vif" + name, data.fit.variance_inflation[j]);
    printed("R2_j" + name, 1 - 1 / data.fit.variance_inflation[j]);
    printed("standardized_ols" + name, data.fit.standardised[j]);
  }
  for (Index k = 0; k < 7; ++k) {
    const std::string component = std::to_string(k + 1);
    // the seventh was printed from single singular values; its last place is theirs
    printed("condition_index[" + component + "]", table.indices[k], k == 6 ? 1 : 0.5000001);
    for (Index j = 0; j < 7; ++j) {
      const std::string name = j == 0 ? "1" : data.names[static_cast<std::size_t>(j - 1)];
      printed("variance_proportion[" + component + "," + name + "]", table.proportions(k, j));
    }
  }
  const LeastSquaresFit reduced = data.of({"x3", "x4", "x6"});
  for (Index k = 0; k < 3; ++k) {
    const std::string name =
        "[" + std::vector<std::string>{"x3", "x4", "x6"}[static_cast<std::size_t>(k)] + "]";
    printed("vif_reduced" + name, reduced.variance_inflation[k]);
    printed("standardized_ols_reduced" + name, reduced.standardised[k]);
  }
  printed("partial_F(drop x1,x2,x5)", joint_test(data.fit, {0, 1, 4}).f);
  CHECK(printed.checked == 81);
}

TEST_CASE("the Hald cement data give the published fits of all fifteen subsets", "[published]") {
  const Published data = read("hald_cement", "hald_cement", "y");
  check_recomputed(data);
  Printed printed{data};
  printed("estimate[1]", data.fit.intercept_estimate);
  printed("se[1]", data.fit.intercept_standard_error);
  for (Index j = 0; j < 4; ++j) {
    const std::string name = "[" + data.names[static_cast<std::size_t>(j)] + "]";
    printed("estimate" + name, data.fit.coefficients[j]);
    printed("se" + name, data.fit.standard_errors[j]);
    printed("vif" + name, data.fit.variance_inflation[j]);
  }
  const FitQuality quality = fit_quality(data.fit);
  printed("s", quality.residual_sd);
  printed("R2", quality.r_squared);
  printed("F", quality.f);
  printed("SSE", data.sse());
  const ConditionTable centred = condition_table(data.fit, data.layout, true);
  const double largest = 4 / centred.indices.array().square().inverse().sum();
  for (Index k = 0; k < 4; ++k) {
    printed("corr_eigenvalue[" + std::to_string(k + 1) + "]",
            largest / centred.indices[k] / centred.indices[k]);
  }
  for (unsigned subset = 1; subset < 16; ++subset) {
    std::vector<std::string> some;
    std::string name;
    for (unsigned j = 0; j < 4; ++j) {
      if (subset & (1u << j)) some.push_back(data.names[j]);
    }
    for (const std::string& column : some) name += column;
    const LeastSquaresFit fit = data.of(some);
    printed("R2pct[" + name + "]", 100 * (1 - fit.unexplained_share));
    printed("SSE[" + name + "]", fit.unexplained_share * data.sst());
    const std::string recomputed = "recomputed | all_subsets | " + name + " | ";
    CHECK(matching_digits(fit.unexplained_share * data.sst(),
                          std::stod(data.figures.at(recomputed + "sse"))) >= 11);
    CHECK(matching_digits(100 * (1 - fit.unexplained_share),
                          std::stod(data.figures.at(recomputed + "r_squared_percent"))) >= 11);
  }
  printed("corr(x2,x4)", data.fit.correlation(1, 3));
  printed("vif(x2|x4)", data.of({"x2", "x4"}).variance_inflation[0]);
  printed("simple x2 intercept", data.of({"x2"}).intercept_estimate);
  printed("simple x2 slope", data.of({"x2"}).coefficients[0]);
  printed("simple x4 slope", data.of({"x4"}).coefficients[0]);
  CHECK(printed.checked == 57);
}

TEST_CASE("the body-fat data give the published figures", "[published]") {
  const Published data = read("bodyfat20", "bodyfat20", "bodyfat");
  check_recomputed(data);
  Printed printed{data};
  const ConditionTable table = condition_table(data.fit, data.layout, false);
  const std::vector<std::string> names = {"1", "triceps", "thigh", "midarm"};
  const double largest = 4 / table.indices.array().square().inverse().sum();
  // the estimates' correlations: those of the inverse of the columns' cross-products
  const MatrixXd inverse = (data.fit.uncentred_factor.transpose() * data.fit.uncentred_factor).inverse();
  printed("estimate[1]", data.fit.intercept_estimate);
  printed("se[1]", data.fit.intercept_standard_error);
  for (Index j = 0; j < 4; ++j) {
    const std::string component = std::to_string(j + 1);
    printed("condition_index[" + component + "]", table.indices[j]);
    printed("scaled_eigenvalue[" + component + "]", largest / table.indices[j] / table.indices[j]);
    for (Index k = 0; k < 4; ++k) {
      printed("variance_proportion[component " + component + "," + names[static_cast<std::size_t>(k)] + "]",
              table.proportions(j, k));
    }
    for (Index k = j + 1; k < 4; ++k) {
      printed("corr_of_estimates[" + names[static_cast<std::size_t>(j)] + "," +
                  names[static_cast<std::size_t>(k)] + "]",
              inverse(j, k) / std::sqrt(inverse(j, j) * inverse(k, k)));
    }
    if (j == 0) continue;
    const std::string name = "[" + names[static_cast<std::size_t>(j)] + "]";
    printed("estimate" + name, data.fit.coefficients[j - 1]);
    printed("se" + name, data.fit.standard_errors[j - 1]);
    printed("vif" + name, data.fit.variance_inflation[j - 1]);
    printed("tolerance" + name, 1 / data.fit.variance_inflation[j - 1]);
    printed("standardized_ols" + name, data.fit.standardised[j - 1]);
  }
  const FitQuality quality = fit_quality(data.fit);
  printed("R2", quality.r_squared);
  printed("s", quality.residual_sd);
  printed("F", quality.f);
  printed("SSE", data.sse());
  printed("SSR", data.sst() - data.sse());
  CHECK(printed.checked == 52);
}

TEST_CASE("occupational prestige gives the published generalised VIFs", "[published]") {
  const Csv csv = read_csv("duncan");
  const std::vector<std::string> type = csv.column("type");
  const VectorXd income = csv.numbers("income"), education = csv.numbers("education"),
                 prestige = csv.numbers("prestige");
  const auto indicator = [&](const std::string& level) {
    VectorXd column(income.size());
    for (Index i = 0; i < column.size(); ++i) column[i] = type[static_cast<std::size_t>(i)] == level;
    return column;
  };
  const auto inflation_against = [&](const std::string& first, const std::string& second) {
    MatrixXd x(income.size(), 4);
    x << income, education, indicator(first), indicator(second);
    Layout layout = plain_layout({"income", "education", "type: " + first, "type: " + second});
    layout.terms.pop_back();
    layout.terms[2].kind = TermKind::category;
    layout.terms[2].columns = {2, 3};
    layout.term_of[3] = 2;
    return term_inflation(fit_of(x, prestige), layout);
  };
  Published data;
  data.figures = read_figures("gvif_duncan");
  Printed printed{data};
  const auto inflation = inflation_against("prof", "wc");
  const std::vector<std::string> terms = {"income", "education", "type"};
  for (std::size_t t = 0; t < 3; ++t) {
    printed("Duncan gvif " + terms[t], inflation[t].generalised);
    printed("Duncan gvif^(1/2df) " + terms[t], inflation[t].per_df_root);
    const std::string key = "recomputed | gvif | " + terms[t] + " | ";
    CHECK(matching_digits(inflation[t].generalised, std::stod(data.figures.at(key + "gvif"))) >= 13);
    CHECK(matching_digits(inflation[t].per_df_root, std::stod(data.figures.at(key + "gvif_1_2df"))) >= 13);
    CHECK(inflation[t].df == std::stoul(data.figures.at(key + "df")));
    CHECK(inflation[t].comparable == Approx(inflation[t].per_df_root * inflation[t].per_df_root));
    CHECK(inflation[t].shared_variation == Approx(1 - 1 / inflation[t].comparable));
    // Fox & Monette 1992: no other baseline changes it
    CHECK(matching_digits(inflation_against("bc", "wc")[t].generalised, inflation[t].generalised) >= 13);
    CHECK(matching_digits(inflation_against("prof", "bc")[t].generalised, inflation[t].generalised) >= 13);
  }
  MatrixXd two(income.size(), 2);
  two << income, education;
  printed("Duncan vif income", fit_of(two).variance_inflation[0]);
  printed("Duncan vif education", fit_of(two).variance_inflation[1]);
}

TEST_CASE("the diabetes data give the published least-squares figures", "[published]") {
  const Published data = read("diabetes", "diabetes", "y");
  check_recomputed(data);
  Printed printed{data};
  for (Index j = 0; j < 10; ++j) {
    const std::string name = "[" + data.names[static_cast<std::size_t>(j)] + "]";
    printed("OLS on unit-length columns" + name,
            data.fit.coefficients[j] * data.fit.sd[j] * std::sqrt(static_cast<double>(data.fit.rows - 1)));
    // the published VIFs come from the data as once distributed, rounded otherwise: one last place apart
    printed("vif" + name, data.fit.variance_inflation[j], 1);
  }
  printed("OLS intercept (mean y)", data.fit.response_mean);
  printed("R2", 1 - data.fit.unexplained_share);
  printed("s", data.fit.residual_sd);
}

TEST_CASE("the stack-loss data give the published figures", "[published]") {
  const Published data = read("stackloss", "stackloss", "loss");
  check_recomputed(data);
  Printed printed{data};
  printed("estimate[1]", data.fit.intercept_estimate);
  printed("se[1]", data.fit.intercept_standard_error);
  for (Index j = 0; j < 3; ++j) {
    const std::string name = "[" + data.names[static_cast<std::size_t>(j)] + "]";
    printed("estimate" + name, data.fit.coefficients[j]);
    printed("se" + name, data.fit.standard_errors[j]);
  }
  printed("s", data.fit.residual_sd);
  printed("R2", 1 - data.fit.unexplained_share);
  printed("F", fit_quality(data.fit).f);
}
