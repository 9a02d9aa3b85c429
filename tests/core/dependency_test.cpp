#include "core/diagnose/dependency.hpp"

#include <Eigen/QR>
#include <fstream>
#include <sstream>

#include "core/base/random.hpp"
#include "core/design/design.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/reference.hpp"

using namespace unply;

namespace {

struct Case {
  std::string name;
  bool intercept = true, exact = false;
  std::size_t rank = 0;                                  // intercept counted
  std::vector<std::map<std::string, double>> relations;  // "1" stands for the intercept's column
  std::vector<double> vif;
  std::vector<std::string> columns;
  std::vector<std::vector<double>> rows;
};

std::vector<std::string> parts_of(std::string text, const std::string& separator) {
  std::vector<std::string> parts;
  for (std::size_t at; (at = text.find(separator)) != std::string::npos;
       text = text.substr(at + separator.size()))
    parts.push_back(text.substr(0, at));
  parts.push_back(text);
  return parts;
}

double fraction(const std::string& text) {
  const auto parts = parts_of(text, "/");
  return parts.size() == 2 ? std::stod(parts[0]) / std::stod(parts[1]) : std::stod(text);
}

std::vector<Case> read_cases() {
  std::ifstream in(test::reference_path("exact_dependency_cases.txt"));
  REQUIRE(in);
  std::vector<Case> cases;
  for (std::string line; std::getline(in, line);) {
    const std::size_t colon = line.find(": ");
    if (line[0] == '#' || colon == std::string::npos) continue;
    const std::string key = line.substr(0, colon), value = line.substr(colon + 2);
    if (key == "case") {
      cases.emplace_back();
      cases.back().name = value;
    }
    Case& one = cases.back();
    if (key == "intercept") one.intercept = value == "yes";
    if (key == "rank") one.rank = std::stoul(value);
    if (key == "exact") one.exact = value == "True";
    if (key == "columns") one.columns = parts_of(value, " | ");
    if (key == "vif")
      for (const auto& part : parts_of(value, " | ")) one.vif.push_back(std::stod(part));
    if (key == "row") {
      one.rows.emplace_back();
      for (const auto& part : parts_of(value, " | ")) one.rows.back().push_back(std::stod(part));
    }
    if (key == "relation") {
      one.relations.emplace_back();
      for (const auto& part : parts_of(value, " | ")) {
        const auto factors = parts_of(part, " * ");
        one.relations.back()[factors[1]] = fraction(factors[0]);
      }
    }
  }
  return cases;
}

std::shared_ptr<const Table> table_of(const std::vector<std::string>& columns,
                                      const std::vector<std::vector<double>>& rows) {
  auto table = std::make_shared<Table>();
  table->rows = rows.size();
  for (std::size_t j = 0; j < columns.size(); ++j) {
    Column column;
    column.name = columns[j];
    for (const auto& row : rows) column.numbers.push_back(row[j]);
    table->columns.push_back(column);
  }
  return table;
}

std::vector<DependencyEquation> equations_of(const Design& design, bool intercept = true) {
  return dependency_equations(design, fit_least_squares(design, intercept), design.layout());
}

std::vector<std::string> texts(const std::vector<DependencyEquation>& equations) {
  std::vector<std::string> result;
  for (const auto& equation : equations) result.push_back(equation.text);
  return result;
}

Eigen::Index rank_of(const Eigen::MatrixXd& m) {
  return Eigen::ColPivHouseholderQR<Eigen::MatrixXd>(m).rank();
}

}  // namespace

TEST_CASE("every case of known rank is decided as it was built", "[published][singular]") {
  // Source: tests/reference/exact_dependency_cases.txt (constructed; VIFs recomputed there in exact
  // arithmetic).
  const std::vector<Case> cases = read_cases();
  REQUIRE(cases.size() == 13);
  for (const Case& one : cases) {
    CAPTURE(one.name);
    Model model;
    model.intercept = one.intercept;
    const Design design = make_design(table_of(one.columns, one.rows), model);
    const LeastSquaresFit fit = fit_least_squares(design, one.intercept);
    CHECK(fit.kept.size() + one.intercept == one.rank);
    const auto equations = dependency_equations(design, fit, design.layout());
    CHECK(equations.empty() != one.exact);
    REQUIRE(equations.size() == one.relations.size());
    const auto p = static_cast<Eigen::Index>(one.columns.size());
    const auto k = static_cast<Eigen::Index>(equations.size());
    // The relations found span the space of the relations that the case was built from.
    Eigen::MatrixXd both = Eigen::MatrixXd::Zero(2 * k, p + 1);
    for (Eigen::Index i = 0; i < k; ++i) {
      for (const auto& [name, c] : one.relations[static_cast<std::size_t>(i)]) {
        const auto at = std::find(one.columns.begin(), one.columns.end(), name);
        both(i, name == "1" ? p : at - one.columns.begin()) = c;
      }
      const DependencyEquation& equation = equations[static_cast<std::size_t>(i)];
      for (std::size_t c = 0; c < equation.columns.size(); ++c)
        both(k + i, static_cast<Eigen::Index>(equation.columns[c])) = equation.coefficients[c];
      both(k + i, p) = -equation.constant;
      CHECK(equation.rounded);
    }
    if (k > 0) {
      CHECK(rank_of(both) == k);
      CHECK(rank_of(both.bottomRows(k)) == k);
    }
    REQUIRE(one.vif.size() == (one.exact ? 0u : one.columns.size()));
    for (std::size_t j = 0; j < one.vif.size(); ++j) {
      // Ten significant digits are printed. A VIF of 1e20 is what the doubles of the cells make of it: their
      // own rounding, 1e-16 of a cell, is 1e-6 of the deviation of 1e-10.
      const double digits = one.vif[j] > 1e18 ? 5 : one.vif[j] > 1e10 ? 9 : 9.5;
      CHECK(test::matching_digits(fit.variance_inflation[static_cast<Eigen::Index>(j)], one.vif[j]) >=
            digits);
    }
  }
}

TEST_CASE("an equation is written as a person would write it", "[dependency]") {
  const auto text_of_case = [](const std::string& name) {
    for (const Case& one : read_cases())
      if (one.name == name) return texts(equations_of(make_design(table_of(one.columns, one.rows), Model{})));
    return std::vector<std::string>{"no such case"};
  };
  using Texts = std::vector<std::string>;
  CHECK(text_of_case("every level and the intercept") == Texts{"employed + not_employed = 1"});
  CHECK(text_of_case("mixture") == Texts{"x1 + x2 + x3 + x4 = 10"});
  CHECK(text_of_case("linear copy") == Texts{"u = 3 * x - 7"});
  CHECK(text_of_case("decimal sum that rounds in binary") == Texts{"c = a + b"});
  CHECK(text_of_case("units far apart") == Texts{"mix = gdp + 10 * share"});
  CHECK(text_of_case("too few distinct values") == Texts{"x^3 = 6 - 11 * x + 6 * x^2"});
  CHECK(text_of_case("constant column") == Texts{"k"});
  CHECK(text_of_case("empty cell of an interaction") == Texts{"A2B2"});
}

TEST_CASE("the column that the others add up to stands alone, wherever it stands in the table",
          "[dependency]") {
  const std::vector<std::vector<double>> rows{{12, 5, 7}, {9, 1, 8}, {14, 11, 3}, {6, 2, 4}};
  CHECK(texts(equations_of(make_design(table_of({"Total", "Morning", "Evening"}, rows), Model{}))) ==
        std::vector<std::string>{"Total = Morning + Evening"});
  const std::vector<std::vector<double>> turned{{5, 12, 7}, {1, 9, 8}, {11, 14, 3}, {2, 6, 4}};
  CHECK(texts(equations_of(make_design(table_of({"Morning", "Total", "Evening"}, turned), Model{}))) ==
        std::vector<std::string>{"Total = Morning + Evening"});
}

TEST_CASE("coefficients become simple numbers only where the rows agree", "[dependency]") {
  const auto text_for = [](double factor, double constant) {
    std::vector<std::vector<double>> rows;
    for (const double x : {-40.0, -3.5, 0.0, 12.25, 21.0, 36.6, 100.0})
      rows.push_back({x, constant + factor * x});
    const auto equations = equations_of(make_design(table_of({"x", "y"}, rows), Model{}));
    REQUIRE(equations.size() == 1);
    CAPTURE(equations[0].coefficients, equations[0].constant);
    return equations[0].text + (equations[0].rounded ? "" : " (about)");
  };
  CHECK(text_for(1.8, 32) == "y = 32 + 1.8 * x");
  CHECK(text_for(1, 0) == "y = x");
  CHECK(text_for(-1, 0) == "y = -x");
  CHECK(text_for(-1, 100) == "x + y = 100");
  CHECK(text_for(1.0 / 3, 0) == "x = 3 * y");
  CHECK(text_for(2.0 / 3, 1) == "y = 1 + 2/3 * x");
  CHECK(text_for(0.45359237, 0) == "y = 0.45359237 * x");
  CHECK(text_for(1.0000001, 0) == "y = 1.0000001 * x");  // not 1, though 1 is within the first distance tried
  CHECK(text_for(0.3333333, 0) == "y = 0.3333333 * x");  // not 1/3
  CHECK(text_for(3.14159265358979, 0) == "y = 3.14159 * x (about)");
  CHECK(text_for(1000, -2.5) == "y = 1000 * x - 2.5");
}

TEST_CASE("two dependencies are shown in their shortest forms", "[dependency]") {
  // The fit explains both totals by the parts; the second is shorter said by the first.
  const std::vector<std::vector<double>> rows{{1, 5, 2, 8, 16},  {2, 3, 9, 14, 28}, {7, 1, 1, 9, 18},
                                              {4, 4, 8, 16, 32}, {3, 9, 1, 13, 26}, {8, 2, 5, 15, 30}};
  CHECK(texts(equations_of(make_design(table_of({"a", "b", "c", "all", "double"}, rows), Model{}))) ==
        std::vector<std::string>{"all = a + b + c", "double = 2 * all"});
}

TEST_CASE("a heading with an operator in it is set in quotes", "[dependency]") {
  const std::vector<std::vector<double>> rows{{1, 2}, {2, 4}, {4, 8}};
  CHECK(texts(equations_of(make_design(table_of({"a - b", "y"}, rows), Model{}))) ==
        std::vector<std::string>{"y = 2 * 'a - b'"});
}

TEST_CASE("without an intercept a constant column is no dependency, and two constant ones are",
          "[dependency]") {
  Model model;
  model.intercept = false;
  const std::vector<std::vector<double>> rows{{1, 4, 2}, {1, 4, 5}, {1, 4, 3}, {1, 4, 9}};
  const auto equations = equations_of(make_design(table_of({"one", "four", "x"}, rows), model), false);
  CHECK(texts(equations) == std::vector<std::string>{"four = 4 * one"});
}

TEST_CASE("more columns than rows give as many equations as columns too many, each true in every row",
          "[dependency][property]") {
  // Tolerance: the equations hold to the rounding of their parts.
  const std::size_t n = 12, p = 40;
  std::vector<std::string> names;
  std::vector<std::vector<double>> rows(n, std::vector<double>(p));
  const std::uint64_t seed = 20260411;
  CAPTURE(seed);
  Random random(seed);
  for (std::size_t j = 0; j < p; ++j) names.push_back("v" + std::to_string(j));
  for (auto& row : rows)
    for (double& x : row) x = static_cast<double>(random.below(1000000)) / 1e3;
  const auto equations = equations_of(make_design(table_of(names, rows), Model{}));
  REQUIRE(equations.size() == p - (n - 1));
  for (const auto& equation : equations) {
    for (const auto& row : rows) {
      double sum = -equation.constant, scale = std::abs(equation.constant);
      for (std::size_t k = 0; k < equation.columns.size(); ++k) {
        sum += equation.coefficients[k] * row[equation.columns[k]];
        scale += std::abs(equation.coefficients[k] * row[equation.columns[k]]);
      }
      CHECK(std::abs(sum) <= 1e-12 * scale);
    }
  }
}
