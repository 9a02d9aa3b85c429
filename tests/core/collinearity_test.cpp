// Identities of collinearity measures on random tables, and what makes a collinear group. The identities are
// textbook (Belsley, Kuh & Welsch 1980; Fox & Monette 1992); "reference" computations use other routes than
// the code: fits of one predictor on the others, dense inverses, eigenvalues, canonical correlations.
#include "core/diagnose/collinearity.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>
#include <numeric>

#include "core/base/tolerance.hpp"
#include "core/diagnose/residual_checks.hpp"
#include "core/fit/inference.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/made_tables.hpp"
#include "tests/support/matrix_source.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

constexpr std::uint64_t seed = 20260205;

/// Random tables from independent to strongly tied predictors (VIF up to about 1e3).
std::vector<MatrixXd> random_tables() {
  Random random(seed);
  std::vector<MatrixXd> tables;
  for (const Index p : {2, 3, 6}) {
    for (const double common : {0.0, 0.7, 0.99, 0.999})
      tables.push_back(random_predictors(random, 30, p, common));
  }
  return tables;
}

MatrixXd without_column(const MatrixXd& x, Index column) {
  MatrixXd rest(x.rows(), x.cols() - 1);
  rest << x.leftCols(column), x.rightCols(x.cols() - 1 - column);
  return rest;
}

MatrixXd centred_unit(const MatrixXd& x) {
  MatrixXd z = x.rowwise() - x.colwise().mean();
  for (Index j = 0; j < z.cols(); ++j) z.col(j).normalize();
  return z;
}

/// Terms of several columns: `sizes` columns each, the first one a term of its own columns and so on.
Layout layout_of_terms(const std::vector<std::size_t>& sizes) {
  Layout layout;
  for (std::size_t t = 0; t < sizes.size(); ++t) {
    TermLayout term;
    term.name = "t" + std::to_string(t + 1);
    for (std::size_t k = 0; k < sizes[t]; ++k) {
      term.columns.push_back(layout.columns.size());
      layout.columns.push_back(term.name + ": " + std::to_string(k + 1));
      layout.term_of.push_back(t);
    }
    layout.terms.push_back(term);
  }
  return layout;
}

std::vector<std::vector<std::size_t>> members(const std::vector<CollinearGroup>& groups) {
  std::vector<std::vector<std::size_t>> all;
  for (const CollinearGroup& group : groups) all.push_back(group.columns);
  return all;
}

using Sets = std::vector<std::vector<std::size_t>>;

}  // namespace

TEST_CASE("V1-V3: a VIF is 1/(1-R^2), a diagonal of the inverse, and a factor of the standard error",
          "[property]") {
  CAPTURE(seed);
  Random random(seed + 1);
  for (const MatrixXd& x : random_tables()) {
    const VectorXd y = random_response(random, x, 1);
    const LeastSquaresFit fit = fit_of(x, y);
    const MatrixXd z = centred_unit(x);
    const MatrixXd inverse = (z.transpose() * z).inverse();  // loses up to 6 of 16 digits here
    for (Index j = 0; j < x.cols(); ++j) {
      const double unexplained = fit_of(without_column(x, j), x.col(j)).unexplained_share;
      CHECK(matching_digits(fit.variance_inflation[j], 1 / unexplained) >= 12);
      CHECK(matching_digits(fit.variance_inflation[j], inverse(j, j)) >= 9);
      const double squared =
          fit.residual_sd * fit.residual_sd / 29 / fit.sd[j] / fit.sd[j] * fit.variance_inflation[j];
      CHECK(matching_digits(fit.standard_errors[j], std::sqrt(squared)) >= 14);
    }
  }
}

TEST_CASE("V4, V5, V7, V8: VIFs and the eigenvalues of the correlations", "[property]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    const LeastSquaresFit fit = fit_of(x);
    const Index p = x.cols();
    const ConditionTable table = condition_table(fit, plain_layout(static_cast<std::size_t>(p)), true);
    const double largest = static_cast<double>(p) / table.indices.array().square().inverse().sum();
    const VectorXd eigenvalues = largest * table.indices.array().square().inverse();
    CHECK(fit.variance_inflation.sum() == Approx(eigenvalues.cwiseInverse().sum()).epsilon(1e-10));
    CHECK(eigenvalues.prod() == Approx(fit.correlation.determinant()).epsilon(1e-8));
    CHECK(eigenvalues.prod() <= 1 + 1e-12);
    CHECK(fit.variance_inflation.maxCoeff() <= (1 + 1e-12) / eigenvalues[p - 1]);
    CHECK(fit.variance_inflation.maxCoeff() >= (1 - 1e-12) / eigenvalues[p - 1] / static_cast<double>(p));
    if (p == 2) {
      const double r = fit.correlation(0, 1);
      CHECK(fit.variance_inflation[0] == Approx(1 / (1 - r * r)).epsilon(1e-10));
      CHECK(fit.variance_inflation[1] == Approx(fit.variance_inflation[0]).epsilon(1e-13));
    }
  }
}

TEST_CASE("V6: a VIF is at least 1, and one more predictor never lowers it", "[property]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    const VectorXd all = fit_of(x).variance_inflation;
    CHECK(all.minCoeff() >= 1);
    const VectorXd fewer = fit_of(x.leftCols(x.cols() - 1)).variance_inflation;
    for (Index j = 0; j < fewer.size(); ++j) CHECK(all[j] >= fewer[j] * (1 - 1e-13));
  }
}

TEST_CASE("V9: correlations of estimates are minus the partial correlations of the predictors",
          "[property]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    if (x.cols() < 3) continue;
    const LeastSquaresFit fit = fit_of(x);
    const MatrixXd& inverse = fit.correlation_inverse;
    const MatrixXd rest = x.rightCols(x.cols() - 2);
    const auto residual = [&](Index j) {
      const LeastSquaresFit of = fit_of(rest, x.col(j));
      return VectorXd((x.col(j) - rest * of.coefficients).array() - of.intercept_estimate);
    };
    const VectorXd a = residual(0), b = residual(1);
    const double partial = a.dot(b) / a.norm() / b.norm();
    CHECK(inverse(0, 1) / std::sqrt(inverse(0, 0) * inverse(1, 1)) ==
          Approx(-partial).epsilon(1e-8).margin(1e-10));
  }
}

TEST_CASE("V10: no measure of the predictors depends on the response", "[property]") {
  CAPTURE(seed);
  Random random(seed + 2);
  for (const MatrixXd& x : random_tables()) {
    const Layout layout = plain_layout(static_cast<std::size_t>(x.cols()));
    const LeastSquaresFit alone = fit_of(x), with = fit_of(x, VectorXd(random_matrix(random, x.rows(), 1)));
    CHECK(alone.variance_inflation.isApprox(with.variance_inflation, 1e-14));
    for (const bool centred : {false, true}) {
      const ConditionTable a = condition_table(alone, layout, centred),
                           b = condition_table(with, layout, centred);
      CHECK(a.indices.isApprox(b.indices, 1e-12));
      CHECK(a.proportions.isApprox(b.proportions, 1e-9));
    }
    CHECK(members(collinear_groups(alone, layout, 0.95)) == members(collinear_groups(with, layout, 0.95)));
  }
}

TEST_CASE("G1: the generalised VIF of one column is its VIF", "[property]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    const LeastSquaresFit fit = fit_of(x);
    const auto inflation = term_inflation(fit, plain_layout(static_cast<std::size_t>(x.cols())));
    for (std::size_t j = 0; j < inflation.size(); ++j) {
      CHECK(inflation[j].df == 1);
      CHECK(inflation[j].generalised == fit.variance_inflation[static_cast<Index>(j)]);
      CHECK(inflation[j].comparable == inflation[j].generalised);
      CHECK(inflation[j].per_df_root == Approx(std::sqrt(inflation[j].generalised)));
      CHECK(inflation[j].shared_variation == Approx(1 - 1 / inflation[j].generalised));
    }
  }
}

TEST_CASE("G2-G4: the generalised VIF of sets of columns", "[property]") {
  CAPTURE(seed);
  Random random(seed + 3);
  for (const MatrixXd& x : random_tables()) {
    if (x.cols() < 6) continue;
    const Layout layout = layout_of_terms({2, 4});
    const auto inflation = term_inflation(fit_of(x), layout);
    // G2: unchanged by recoding the columns of a term among themselves
    MatrixXd recoded = x;
    recoded.leftCols(2) = x.leftCols(2) * (random_matrix(random, 2, 2) + 3 * MatrixXd::Identity(2, 2));
    recoded.leftCols(2).array() += 1;
    CHECK(matching_digits(term_inflation(fit_of(recoded), layout)[0].generalised, inflation[0].generalised) >=
          11);
    // G3: a set and its complement have the same, at least 1
    CHECK(matching_digits(inflation[1].generalised, inflation[0].generalised) >= 11);
    CHECK(inflation[0].generalised >= 1);
    CHECK(inflation[0].df == 2);
    CHECK(inflation[1].df == 4);
    // G4: 1 / prod(1 - canonical correlation^2)
    const auto orthonormal = [](const MatrixXd& part) {
      const MatrixXd z = centred_unit(part);
      return MatrixXd(Eigen::HouseholderQR<MatrixXd>(z).householderQ() *
                      MatrixXd::Identity(z.rows(), z.cols()));
    };
    const VectorXd canonical =
        Eigen::JacobiSVD<MatrixXd>(orthonormal(x.leftCols(2)).transpose() * orthonormal(x.rightCols(4)))
            .singularValues();
    CHECK(inflation[0].generalised == Approx(1 / (1 - canonical.array().square()).prod()).epsilon(1e-8));
    // the definition, by determinants
    const MatrixXd r = fit_of(x).correlation;
    CHECK(inflation[0].generalised == Approx(r.topLeftCorner(2, 2).determinant() *
                                             r.bottomRightCorner(4, 4).determinant() / r.determinant())
                                          .epsilon(1e-6));
  }
}

TEST_CASE("B1-B3: proportions sum to one, indices ascend from one, scale does not count but origin does",
          "[property]") {
  CAPTURE(seed);
  Random random(seed + 4);
  for (const MatrixXd& x : random_tables()) {
    const Layout layout = plain_layout(static_cast<std::size_t>(x.cols()));
    const LeastSquaresFit fit = fit_of(x);
    MatrixXd scaled = x, shifted = x;
    for (Index j = 0; j < x.cols(); ++j)
      scaled.col(j) *= (j % 2 ? -1 : 1) * std::pow(10.0, 20 * random.uniform() - 10);
    shifted.col(0).array() += 50 * fit.sd[0];
    for (const bool centred : {false, true}) {
      const ConditionTable table = condition_table(fit, layout, centred);
      CHECK(table.centred == centred);
      REQUIRE(table.names.size() == static_cast<std::size_t>(x.cols()) + !centred);
      CHECK(table.names.front() == (centred ? "x1" : ""));
      CHECK(table.columns.front() == (centred ? 0 : fit.columns));
      CHECK((table.proportions.colwise().sum().array() - 1).abs().maxCoeff() <= 1e-14);
      CHECK(table.proportions.minCoeff() >= 0);
      CHECK(table.indices[0] == 1);
      CHECK(std::is_sorted(table.indices.begin(), table.indices.end()));
      const ConditionTable of_scaled = condition_table(fit_of(scaled), layout, centred);
      CHECK(of_scaled.indices.isApprox(table.indices, 1e-10));
      CHECK((of_scaled.proportions - table.proportions).cwiseAbs().maxCoeff() <= 1e-7);
      const ConditionTable of_shifted = condition_table(fit_of(shifted), layout, centred);
      CHECK(of_shifted.indices.isApprox(table.indices, 1e-6) == centred);
    }
  }
}

TEST_CASE("B2, B4: condition indices are ratios of eigenvalues of the scaled cross-products", "[property]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    const Layout layout = plain_layout(static_cast<std::size_t>(x.cols()));
    for (const bool centred : {false, true}) {
      MatrixXd z = centred ? centred_unit(x) : with_ones(x);
      for (Index j = 0; j < z.cols(); ++j) z.col(j).normalize();
      const VectorXd eigenvalues =
          Eigen::SelfAdjointEigenSolver<MatrixXd>(z.transpose() * z).eigenvalues().reverse();
      const ConditionTable table = condition_table(fit_of(x), layout, centred);
      for (Index k = 0; k < eigenvalues.size(); ++k) {
        CHECK(table.indices[k] == Approx(std::sqrt(eigenvalues[0] / eigenvalues[k])).epsilon(1e-6));
      }
    }
  }
}

TEST_CASE("without an intercept measures are of the columns about zero", "[collinearity]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    const Layout layout = plain_layout(static_cast<std::size_t>(x.cols()), false);
    const LeastSquaresFit fit = fit_of(x, false);
    MatrixXd z = x;
    for (Index j = 0; j < z.cols(); ++j) z.col(j).normalize();
    const MatrixXd inverse = (z.transpose() * z).inverse();
    for (Index j = 0; j < x.cols(); ++j)
      CHECK(matching_digits(fit.variance_inflation[j], inverse(j, j)) >= 7);
    const ConditionTable table = condition_table(fit, layout, false);
    CHECK(table.names == layout.columns);
    CHECK(table.indices.isApprox(condition_table(fit, layout, true).indices, 1e-12));
  }
}

TEST_CASE("a dependency leaves the measures of the other columns finite", "[collinearity]") {
  Random random(seed);
  CAPTURE(seed);
  MatrixXd x(30, 6);
  x.leftCols(5) = random_predictors(random, 30, 5, 0.9);
  x.col(5) = x.col(0) + x.col(1);
  const LeastSquaresFit fit = fit_of(x);
  REQUIRE(fit.kept.size() == 5);
  const LeastSquaresFit kept = fit_of(x.leftCols(5));
  const auto plain = term_inflation(fit, plain_layout(6));
  for (const std::size_t j : {0, 1, 5}) {
    CHECK(std::isinf(plain[j].generalised));
    CHECK(plain[j].df == 0);
    CHECK(plain[j].shared_variation == 1);
  }
  for (const std::size_t j : {2, 3, 4}) {
    CHECK(matching_digits(plain[j].generalised, kept.variance_inflation[static_cast<Index>(j)]) >= 12);
  }
  // a term with one estimable column of two is measured by that column; one of two estimable columns as ever
  const auto terms = term_inflation(fit, layout_of_terms({1, 2, 2, 1}));
  CHECK(std::isinf(terms[0].generalised));
  CHECK(terms[1].df == 1);
  CHECK(matching_digits(terms[1].generalised, kept.variance_inflation[2]) >= 12);
  CHECK(terms[2].df == 2);
  CHECK(matching_digits(terms[2].generalised, term_inflation(kept, layout_of_terms({3, 2}))[1].generalised) >=
        11);
  const ConditionTable table = condition_table(fit, plain_layout(6), true);
  CHECK(table.columns == std::vector<std::size_t>{0, 1, 2, 3, 4});
}

TEST_CASE("determinants of three hundred columns neither overflow nor vanish", "[collinearity]") {
  Random random(seed);
  CAPTURE(seed);
  const MatrixXd x = random_predictors(random, 400, 300, 0.9999);
  const LeastSquaresFit fit = fit_of(x);
  const auto inflation = term_inflation(fit, layout_of_terms({150, 150}));
  CHECK(std::isfinite(inflation[0].per_df_root));
  CHECK(inflation[0].per_df_root > 1);
  CHECK(inflation[0].per_df_root == Approx(inflation[1].per_df_root).epsilon(1e-9));
  // beyond jacobi_columns another decomposition is used: it has to agree with the sum of the VIFs (V4)
  const ConditionTable table = condition_table(fit, plain_layout(300), true);
  const double largest = 300 / table.indices.array().square().inverse().sum();
  CHECK(table.indices.array().square().sum() / largest == Approx(fit.variance_inflation.sum()).epsilon(1e-9));
  CHECK((table.proportions.colwise().sum().array() - 1).abs().maxCoeff() <= 1e-13);
}

TEST_CASE("no columns, one column, a constant column: measures without a crash", "[collinearity]") {
  Random random(seed);
  MatrixXd x(20, 2);
  x.col(0) = random_matrix(random, 20, 1);
  x.col(1).setConstant(3);
  const LeastSquaresFit fit = fit_of(x);
  const auto inflation = term_inflation(fit, plain_layout(2));
  CHECK(inflation[0].generalised == 1);
  CHECK(std::isinf(inflation[1].generalised));
  CHECK(condition_table(fit, plain_layout(2), true).indices.size() == 1);
  CHECK(condition_table(fit, plain_layout(2), false).indices.size() == 2);
  CHECK(collinear_groups(fit, plain_layout(2), 0.95).empty());
  const MatrixXd none(20, 0);
  const LeastSquaresFit empty = fit_of(none, VectorXd(random_matrix(random, 20, 1)));
  CHECK(term_inflation(empty, plain_layout(std::size_t{0})).empty());
  CHECK(condition_table(empty, plain_layout(std::size_t{0}), true).indices.size() == 0);
  CHECK(condition_table(empty, plain_layout(std::size_t{0}), false).indices.size() == 1);
}

// -- collinear groups
// -----------------------------------------------------------------------------------------------

TEST_CASE("columns that share one cause are one group, however many narrow directions they have",
          "[groups]") {
  // q columns with one common cause have q - 1 condition indices of like size, among which each coefficient's
  // variance is divided arbitrarily: hardly ever half of it on one index for two of them
  CAPTURE(seed);
  Random random(seed);
  for (const Index q : {2, 3, 5, 12}) {
    CAPTURE(q);
    MatrixXd x(120, q + 2);
    const VectorXd cause = random_matrix(random, 120, 1);
    x = random_matrix(random, 120, q + 2);
    for (Index j = 0; j < q; ++j) x.col(j + 1) = 500 + 20 * (cause + 0.06 * x.col(j + 1)).array();
    const VectorXd y = 3 * cause + random_matrix(random, 120, 1);
    const auto groups = collinear_groups(fit_of(x, y), plain_layout(static_cast<std::size_t>(q + 2)), 0.95);
    REQUIRE(groups.size() == 1);
    std::vector<std::size_t> expected(static_cast<std::size_t>(q));
    std::iota(expected.begin(), expected.end(), std::size_t{1});
    CHECK(groups[0].columns == expected);
    CHECK(groups[0].condition_index >= tolerance::moderate_condition_index);
    CHECK_FALSE(groups[0].structural);
    // what they have in common is what the data know: raising all together by one standard deviation of their
    // sum
    REQUIRE(groups[0].well_determined.size() == 1);
    const Combination& sum = groups[0].well_determined[0];
    CHECK(sum.share > 0.99);
    for (const double weight : sum.weights)
      CHECK(weight == Approx(1 / std::sqrt(static_cast<double>(q))).epsilon(0.02));
    CHECK(sum.lower < sum.estimate);
    CHECK(sum.upper > sum.estimate);
    CHECK(sum.lower > 0);
  }
}

TEST_CASE("two sets that are tied independently of each other are two groups", "[groups]") {
  CAPTURE(seed);
  Random random(seed);
  for (int table = 0; table < 20; ++table) {
    CAPTURE(table);
    // both of the same narrowness: the decomposition mixes their directions at will
    MatrixXd x = random_matrix(random, 200, 7);
    x.col(3) = x.col(0) + 0.05 * x.col(3);
    x.col(4) = x.col(1) + x.col(2) + 0.05 * x.col(4);
    const auto groups = collinear_groups(fit_of(x), plain_layout(7), 0.95);
    CHECK(members(groups) == Sets{{0, 3}, {1, 2, 4}});
  }
}

TEST_CASE("a stronger tie does not hide a weaker one that shares a column with it", "[groups]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 200, 4);
  x.col(1) = x.col(0) + 0.001 * x.col(1);
  x.col(2) = x.col(0) + 0.05 * x.col(2);
  CHECK(members(collinear_groups(fit_of(x), plain_layout(4), 0.95)) == Sets{{0, 1, 2}});
}

TEST_CASE("columns of small relative spread are no group unless they move together", "[groups]") {
  // a year and an absolute temperature: each is tied to the intercept, neither to the other
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 100, 3);
  x.col(0).array() += 2000;
  x.col(1) = 300 + 0.5 * x.col(1).array();
  const LeastSquaresFit fit = fit_of(x);
  const ConditionTable table = condition_table(fit, plain_layout(3), false);
  CHECK(table.indices[3] > tolerance::strong_condition_index);
  CHECK(collinear_groups(fit, plain_layout(3), 0.95).empty());
}

TEST_CASE("a group begins at the moderate index and is strong from the strong one", "[groups][tolerance]") {
  CHECK(tolerance::moderate_condition_index == 10);
  CHECK(tolerance::strong_condition_index == 30);
  CHECK(tolerance::shared_variance == 0.5);
  // two columns of correlation r have the index sqrt((1 + r) / (1 - r)); orthogonal columns of equal length
  // make it exact
  const auto group_at = [](double index) {
    MatrixXd x(8, 2);
    x.col(0) << 1, 1, 1, 1, -1, -1, -1, -1;
    x.col(1) << 1, -1, 1, -1, 1, -1, 1, -1;
    const double r = (index * index - 1) / (index * index + 1);
    x.col(1) = r * x.col(0) + std::sqrt(1 - r * r) * x.col(1);
    return collinear_groups(fit_of(x), plain_layout(2), 0.95);
  };
  CHECK(group_at(9.999).empty());
  REQUIRE(group_at(10.001).size() == 1);
  CHECK(group_at(10.001)[0].condition_index == Approx(10.001).epsilon(1e-9));
  CHECK_FALSE(group_at(29.999)[0].strong);
  CHECK(group_at(30.001)[0].strong);
  // the near-dependency of two columns of correlation r: z1 - z2, of variance 2 (1 - r)
  const CollinearGroup group = group_at(20)[0];
  CHECK(std::max(group.near_dependency[0], group.near_dependency[1]) == 1);
  CHECK(std::min(group.near_dependency[0], group.near_dependency[1]) == Approx(-1));
  CHECK(group.near_dependency_sd == Approx(std::sqrt(2 * (1 - 399.0 / 401))).epsilon(1e-9));
}

TEST_CASE("the near-dependency is as narrow as it says", "[groups]") {
  CAPTURE(seed);
  for (const MatrixXd& x : random_tables()) {
    const LeastSquaresFit fit = fit_of(x);
    for (const CollinearGroup& group :
         collinear_groups(fit, plain_layout(static_cast<std::size_t>(x.cols())), 0.95)) {
      VectorXd sum = VectorXd::Zero(x.rows());
      double largest = 0;
      for (std::size_t k = 0; k < group.columns.size(); ++k) {
        const Index j = static_cast<Index>(group.columns[k]);
        sum += group.near_dependency[k] / fit.sd[j] * (x.col(j).array() - fit.mean[j]).matrix();
        largest = std::max(largest, std::abs(group.near_dependency[k]));
      }
      CHECK(largest == 1);
      CHECK(group.near_dependency_sd == Approx(sum.norm() / std::sqrt(29.0)).epsilon(1e-8));
    }
  }
}

TEST_CASE("the joint test of a group is that of leaving all its columns out", "[groups]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 60, 5);
  x.col(2) = x.col(0) + x.col(1) + 0.05 * x.col(2);
  const VectorXd y = random_response(random, x, 2);
  const LeastSquaresFit fit = fit_of(x, y), without = fit_of(x.rightCols(2), y);
  const auto groups = collinear_groups(fit, plain_layout(5), 0.95);
  REQUIRE(members(groups) == Sets{{0, 1, 2}});
  const double f = (without.unexplained_share - fit.unexplained_share) / 3 / (fit.unexplained_share / 54);
  CHECK(groups[0].f == Approx(f).epsilon(1e-9));
  CHECK(groups[0].p == Approx(f_upper_p(f, 3, 54)).epsilon(1e-9));
  CHECK(groups[0].df_numerator == 3);
}

TEST_CASE("a well-determined combination is an estimate of its own, by refitting on it", "[groups]") {
  // In the model of principal components, the coefficient of a component's score is the effect of a unit step
  // along it.
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 60, 4);
  x.col(2) = x.col(0) + x.col(1) + 0.05 * x.col(2);
  const VectorXd y = random_response(random, x, 2);
  const LeastSquaresFit fit = fit_of(x, y);
  const auto groups = collinear_groups(fit, plain_layout(4), 0.95);
  REQUIRE(members(groups) == Sets{{0, 1, 2}});
  REQUIRE(groups[0].well_determined.size() == 2);
  MatrixXd z(60, 3);
  for (Index j = 0; j < 3; ++j) z.col(j) = (x.col(j).array() - fit.mean[j]) / fit.sd[j];
  Eigen::SelfAdjointEigenSolver<MatrixXd> eigen(z.transpose() * z / 59);
  MatrixXd scores(60, 4);
  scores << z * eigen.eigenvectors().rowwise().reverse(), x.col(3);
  const LeastSquaresFit refit = fit_of(scores, y);
  for (std::size_t k = 0; k < 2; ++k) {
    const Combination& combination = groups[0].well_determined[k];
    const Index j = static_cast<Index>(k);
    const VectorXd weights = Eigen::Map<const VectorXd>(combination.weights.data(), 3);
    CHECK(weights.norm() == Approx(1));
    CHECK(weights.maxCoeff() == Approx(weights.cwiseAbs().maxCoeff()));
    const double sign = weights.dot(eigen.eigenvectors().col(2 - j)) > 0 ? 1 : -1;
    CHECK(combination.share == Approx(eigen.eigenvalues()[2 - j] / 3).epsilon(1e-9));
    CHECK(combination.estimate == Approx(sign * refit.coefficients[j] * refit.sd[j]).epsilon(1e-8));
    CHECK(combination.standard_error == Approx(refit.standard_errors[j] * refit.sd[j]).epsilon(1e-8));
    const double reach = t_quantile(0.95, 55) * combination.standard_error;
    CHECK(combination.lower == Approx(combination.estimate - reach));
    CHECK(combination.upper == Approx(combination.estimate + reach));
  }
}

TEST_CASE("robust joint tests and intervals where a robust covariance is given", "[groups]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 60, 3);
  x.col(1) = x.col(0) + 0.05 * x.col(1);
  const VectorXd y = random_response(random, x, 2);
  const MatrixSource source(x, y);
  const LeastSquaresFit fit = fit_least_squares(source, true);
  const MatrixXd robust = residual_checks(source, fit, 0.95).robust_covariance;
  const auto groups = collinear_groups(fit, plain_layout(3), 0.95, &robust);
  REQUIRE(groups.size() == 1);
  CHECK(groups[0].f == joint_test(fit, {0, 1}, robust).f);
  // the ordinary covariance handed in as if it were a robust one changes nothing
  const double share = fit.unexplained_share / static_cast<double>(fit.residual_df);
  const MatrixXd ordinary = fit.correlation_inverse * share;
  const auto same = collinear_groups(fit, plain_layout(3), 0.95, &ordinary);
  const auto plain = collinear_groups(fit, plain_layout(3), 0.95);
  CHECK(same[0].f == Approx(plain[0].f).epsilon(1e-9));
  CHECK(same[0].well_determined[0].standard_error ==
        Approx(plain[0].well_determined[0].standard_error).epsilon(1e-9));
}

TEST_CASE("a term tied with what it is built from is a structural group; one term alone is none",
          "[groups]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x(80, 4);
  x.col(0) = 20 + random_matrix(random, 80, 1).array();
  x.col(1) = x.col(0).cwiseAbs2();
  x.col(2) = 20 + random_matrix(random, 80, 1).array();
  x.col(3) = random_matrix(random, 80, 1);
  Layout layout = plain_layout({"A", "A^2", "B", "C"});
  layout.terms[1].kind = TermKind::power;
  layout.terms[1].built_from = {0};
  auto groups = collinear_groups(fit_of(x), layout, 0.95);
  REQUIRE(members(groups) == Sets{{0, 1}});
  CHECK(groups[0].structural);
  x.col(2) = x.col(0) + 0.02 * x.col(2);  // and something else is tied in
  groups = collinear_groups(fit_of(x), layout, 0.95);
  REQUIRE(members(groups) == Sets{{0, 1, 2}});
  CHECK_FALSE(groups[0].structural);
  // the same columns as one term: its own joint test says it all
  MatrixXd category(80, 3);
  category << x.col(0), x.col(1), x.col(3);
  CHECK(collinear_groups(fit_of(category), layout_of_terms({2, 1}), 0.95).empty());
  CHECK(members(collinear_groups(fit_of(category), layout_of_terms({1, 2}), 0.95)) == Sets{{0, 1}});
}

TEST_CASE("groups hold estimable columns only", "[groups]") {
  CAPTURE(seed);
  Random random(seed);
  MatrixXd x = random_matrix(random, 80, 6);
  x.col(1) = x.col(0) + 0.02 * x.col(1);
  x.col(5) = x.col(3) + x.col(4);
  const VectorXd y = random_response(random, x, 1);
  const auto groups = collinear_groups(fit_of(x, y), plain_layout(6), 0.95);
  REQUIRE(members(groups) == Sets{{0, 1}});
  CHECK(std::isfinite(groups[0].f));
}
