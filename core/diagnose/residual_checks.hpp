// What the residuals and leverages say about the model: one pass over the rows.
#pragma once

#include <Eigen/Core>
#include <vector>

#include "core/design/layout.hpp"
#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

/// Cook's distance e^2 h / (k s^2 (1 - h)^2), k coefficients; studentised: e / (s_without sqrt(1 - h)),
/// s_without of the fit without the row (NaN where that has no degree of freedom left).
struct InfluentialRow {
  std::size_t row = 0;  // of the design (0-based); RowSelection::row gives the table's
  double residual = 0, leverage = 0, cooks_distance = 0, studentised = 0;
};

/// A row whose removal changes the condition number most. Condition index of the centred columns (uncentred
/// without an intercept), as in collinear_groups; infinite where the row alone keeps a column from being a
/// combination of others. Source: Hadi 1988.
struct CollinearityRow {
  std::size_t row = 0;
  double condition_with = 0, condition_without = 0;  // largest condition index
};

struct ResidualChecks {
  double press = 0;                        // sum of squared leave-one-out residuals
  double prediction_error = 0;             // sqrt(PRESS / n)
  Eigen::VectorXd robust_standard_errors;  // p, HC3 (MacKinnon & White 1985)
  double robust_intercept_standard_error = 0;
  Eigen::MatrixXd robust_covariance;  // p x p, HC3, of LeastSquaresFit::standardised; NaN where inestimable
  std::vector<std::size_t>
      conclusions_change;  // columns whose interval excludes 0 under one kind of standard error only
  double spread_statistic = 0, spread_p = 1;  // Koenker 1981: n R^2 of e^2 on X, chi-squared on rank
  std::size_t spread_df = 0;
  double curvature_f = 0,
         curvature_p = 1;          // added square of the fitted values (Tukey 1949, one degree of freedom)
  bool curvature_checked = false;  // false where no degree of freedom is left for it
  std::vector<InfluentialRow> influential;         // largest Cook's distances, at most 10, largest first
  std::vector<CollinearityRow> collinearity_rows;  // at most 5, largest change first
  std::size_t exact_leverage_rows = 0;  // rows with leverage 1: fitted exactly, left out of PRESS and HC3
};

/// One pass over the rows of the fit; memory for p x p numbers and the rows kept. Without a response only
/// the rows that carry collinearity are given.
///
/// PRESS = sum (e_i / (1 - h_i))^2. HC3: (X'X)^-1 (sum x_i x_i' (e_i / (1 - h_i))^2) (X'X)^-1. Koenker: the
/// squared residuals are regressed on the columns and an intercept. Curvature: F of the squared fitted values
/// as one more column, from Q' f^2, f^2' f^2 and f^2' e. Rows that carry collinearity are sought among those
/// of highest leverage h (a removal changes the condition number by a factor of at most 1 / (1 - h), besides
/// rescaling), each by exact downdating: without row i the factor T of the correlations becomes (I - a q q')
/// T, q the row's part of the orthonormal basis, whose columns are scaled to unit length again.
ResidualChecks residual_checks(const RowSource& rows, const LeastSquaresFit& fit, double level);

/// F-test that the coefficients of `columns` are all zero, under a covariance of the standardised
/// coefficients (ResidualChecks::robust_covariance): b' V^-1 b / q on q and n - k degrees of freedom.
JointTest joint_test(const LeastSquaresFit& fit, const std::vector<std::size_t>& columns,
                     const Eigen::MatrixXd& covariance);

}  // namespace unply
