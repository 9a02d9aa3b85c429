// The same fit from a published correlation table: no rows needed.
#pragma once

#include <Eigen/Core>
#include <optional>
#include <string>
#include <vector>

#include "core/fit/least_squares.hpp"

namespace unply {

struct CorrelationTable {
  std::vector<std::string> names;  // of the variables, response included
  std::string response;            // empty: predictors only
  // As names. An entry that is NaN is taken from the other side of the diagonal (published tables often print
  // one triangle); a diagonal of NaN is 1.
  Eigen::MatrixXd correlations;
  double rows = 0;                       // n
  std::optional<Eigen::VectorXd> means;  // as names
  std::optional<Eigen::VectorXd> sds;    // as names (n - 1); without them 1: everything is standardised
};

/// The fit that the rows behind the table would give, an intercept included, to the digits that the table
/// prints.
///
///   R_xx = T'T,  standardised coefficients R_xx^-1 r_xy,  unexplained share 1 - r_xy' R_xx^-1 r_xy
///
/// Without means, or without sds (a mean in what units?), the intercept and the uncentred columns are
/// unknown: intercept_estimable is false, the estimate NaN, uncentred_factor empty, mean 0. `basis` is empty.
///
/// An entry printed with d decimals stands for anything within half a unit, so a table of true correlations
/// may have a smallest eigenvalue down to -m times half a unit (m variables; the norm of the rounding is at
/// most that). Below it the table is refused; between it and 0, columns are left out, later ones first, and
/// given in `dependencies`. trusted_digits counts the same way: digits that survive the rounding of the
/// table, amplified by its inverse.
///
/// Throws Error: correlation_shape, correlation_diagonal, correlation_asymmetric, correlation_outside,
/// correlation_not_psd, unknown_column (response), duplicate_heading, too_few_rows, impossible_setting (n
/// that is not whole; a mean that is no number; a standard deviation that is not above 0).
LeastSquaresFit fit_from_correlations(const CorrelationTable& table);

}  // namespace unply
