// What the residuals and leverages say about the model: one pass over the rows.
#pragma once

#include <Eigen/Core>
#include <vector>

#include "core/design/layout.hpp"
#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

struct InfluentialRow {
  std::size_t row = 0;          // of the design (0-based); RowSelection::row gives the table's
  double residual = 0, leverage = 0, cooks_distance = 0, studentised = 0;
};

/// A row whose removal changes the condition number most. Source: Hadi 1988.
struct CollinearityRow {
  std::size_t row = 0;
  double condition_with = 0, condition_without = 0;  // largest condition index
};

struct ResidualChecks {
  double press = 0;                    // sum of squared leave-one-out residuals
  double prediction_error = 0;         // sqrt(PRESS / n)
  Eigen::VectorXd robust_standard_errors;   // p, HC3 (MacKinnon & White 1985)
  double robust_intercept_standard_error = 0;
  Eigen::MatrixXd robust_covariance;   // p x p of the standardised coefficients, for joint tests
  std::vector<std::size_t> conclusions_change;  // columns whose interval excludes 0 under one kind of standard error only
  double spread_statistic = 0, spread_p = 1;    // Koenker 1981: n R^2 of e^2 on X, chi-squared on rank
  std::size_t spread_df = 0;
  double curvature_f = 0, curvature_p = 1;      // added square of the fitted values (Tukey 1949, one degree of freedom)
  bool curvature_checked = false;               // false where no degree of freedom is left for it
  std::vector<InfluentialRow> influential;      // largest Cook's distances, at most 10, largest first
  std::vector<CollinearityRow> collinearity_rows;  // at most 5, largest change first
  std::size_t exact_leverage_rows = 0;          // rows with leverage 1: fitted exactly, left out of PRESS and HC3
};

ResidualChecks residual_checks(const RowSource& rows, const LeastSquaresFit& fit, double level);

}  // namespace unply
