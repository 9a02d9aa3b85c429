// Designs that tests make themselves: seeded random tables of chosen shape, layouts for them, and their fits.
#pragma once

#include <Eigen/Core>
#include <string>
#include <vector>

#include "core/base/random.hpp"
#include "core/design/layout.hpp"
#include "core/fit/least_squares.hpp"

namespace unply::test {

/// Every column a plain term of its own; names as given, else x1, x2, ...
Layout plain_layout(std::vector<std::string> names, bool intercept = true);
Layout plain_layout(std::size_t columns, bool intercept = true);

/// n x p standard normal draws.
Eigen::MatrixXd random_matrix(Random& random, Eigen::Index n, Eigen::Index p);

/// n x p: normal draws that share a common cause (weight `common`, 0..1, of the variance), with a spread and
/// a mean of its own for each column.
Eigen::MatrixXd random_predictors(Random& random, Eigen::Index n, Eigen::Index p, double common);

/// 1 + X (1, -1/2, 1/3, ...)' / sd + noise * normal draws.
Eigen::VectorXd random_response(Random& random, const Eigen::MatrixXd& x, double noise);

LeastSquaresFit fit_of(const Eigen::MatrixXd& x, bool intercept = true);
LeastSquaresFit fit_of(const Eigen::MatrixXd& x, const Eigen::VectorXd& y, bool intercept = true);

/// X (and y) without row `row`.
Eigen::MatrixXd without_row(const Eigen::MatrixXd& x, Eigen::Index row);

/// X with a column of ones before it.
Eigen::MatrixXd with_ones(const Eigen::MatrixXd& x);

}  // namespace unply::test
