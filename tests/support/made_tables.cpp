#include "tests/support/made_tables.hpp"

#include <cmath>

#include "tests/support/matrix_source.hpp"

namespace unply::test {

Layout plain_layout(std::vector<std::string> names, bool intercept) {
  Layout layout;
  layout.response = "y";
  layout.intercept = intercept;
  for (std::size_t j = 0; j < names.size(); ++j) {
    layout.term_of.push_back(j);
    TermLayout term;
    term.name = names[j];
    term.columns = {j};
    layout.terms.push_back(std::move(term));
  }
  layout.columns = std::move(names);
  return layout;
}

Layout plain_layout(std::size_t columns, bool intercept) {
  std::vector<std::string> names;
  for (std::size_t j = 1; j <= columns; ++j) names.push_back("x" + std::to_string(j));
  return plain_layout(std::move(names), intercept);
}

Eigen::MatrixXd random_matrix(Random& random, Eigen::Index n, Eigen::Index p) {
  Eigen::MatrixXd x(n, p);
  for (Eigen::Index i = 0; i < n; ++i) {
    for (Eigen::Index j = 0; j < p; ++j) x(i, j) = random.normal();
  }
  return x;
}

Eigen::MatrixXd random_predictors(Random& random, Eigen::Index n, Eigen::Index p, double common) {
  Eigen::MatrixXd x = std::sqrt(1 - common) * random_matrix(random, n, p);
  const Eigen::VectorXd cause = std::sqrt(common) * random_matrix(random, n, 1);
  for (Eigen::Index j = 0; j < p; ++j) {
    const double spread = std::pow(10.0, 4 * random.uniform() - 2), mean = 10 * random.uniform() - 5;
    x.col(j) = spread * ((x.col(j) + cause).array() + mean);
  }
  return x;
}

Eigen::VectorXd random_response(Random& random, const Eigen::MatrixXd& x, double noise) {
  Eigen::VectorXd y = Eigen::VectorXd::Ones(x.rows()) + noise * random_matrix(random, x.rows(), 1);
  for (Eigen::Index j = 0; j < x.cols(); ++j) {
    const Eigen::VectorXd centred = x.col(j).array() - x.col(j).mean();
    const double sd = centred.norm() / std::sqrt(static_cast<double>(x.rows() - 1));
    y += (j % 2 == 0 ? 1.0 : -1.0) / static_cast<double>(j + 1) / sd * x.col(j);
  }
  return y;
}

LeastSquaresFit fit_of(const Eigen::MatrixXd& x, bool intercept) {
  return fit_least_squares(MatrixSource(x), intercept);
}

LeastSquaresFit fit_of(const Eigen::MatrixXd& x, const Eigen::VectorXd& y, bool intercept) {
  return fit_least_squares(MatrixSource(x, y), intercept);
}

Eigen::MatrixXd without_row(const Eigen::MatrixXd& x, Eigen::Index row) {
  Eigen::MatrixXd rest(x.rows() - 1, x.cols());
  rest.topRows(row) = x.topRows(row);
  rest.bottomRows(x.rows() - 1 - row) = x.bottomRows(x.rows() - 1 - row);
  return rest;
}

Eigen::MatrixXd with_ones(const Eigen::MatrixXd& x) {
  Eigen::MatrixXd all(x.rows(), x.cols() + 1);
  all.col(0).setOnes();
  all.rightCols(x.cols()) = x;
  return all;
}

}  // namespace unply::test
