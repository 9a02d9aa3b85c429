// The truth that core/fit is measured against: least squares by normal equations in 100-digit arithmetic, on
// the very doubles that the fit reads.
#pragma once

#include <Eigen/Core>

#include "core/design/row_source.hpp"

namespace unply::test {

/// Full-rank X only. Every figure is rounded to a double once, at the end.
struct ExactFit {
  double intercept = 0, intercept_standard_error = 0;
  Eigen::VectorXd coefficients, standard_errors, variance_inflation;  // p
  double residual_sd = 0, r_squared = 0, unexplained_share = 0, f = 0;
  double condition = 0;  // Frobenius condition number of [1 X] with columns of unit length
};
ExactFit exact_fit(const RowSource& rows, bool intercept);

}  // namespace unply::test
