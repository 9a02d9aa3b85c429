// The same fit from a published correlation table: no rows needed.
#pragma once

#include <Eigen/Core>
#include <optional>
#include <string>
#include <vector>

#include "core/fit/least_squares.hpp"

namespace unply {

struct CorrelationTable {
  std::vector<std::string> names;          // of the variables, response included
  std::string response;                    // empty: predictors only
  Eigen::MatrixXd correlations;            // as names
  double rows = 0;                         // n
  std::optional<Eigen::VectorXd> means;    // as names; without them 0
  std::optional<Eigen::VectorXd> sds;      // as names (n - 1); without them 1: everything is standardised
};

/// Throws Error: correlation_shape, correlation_diagonal, correlation_asymmetric, correlation_outside,
/// correlation_not_psd (smallest eigenvalue below what the printed digits explain), too_few_rows.
LeastSquaresFit fit_from_correlations(const CorrelationTable& table);

}  // namespace unply
