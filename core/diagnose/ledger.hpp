// The precision ledger: why an interval is as wide as it is, and what each cause alone would have to become.
#pragma once

#include <optional>
#include <vector>

#include "core/design/layout.hpp"
#include "core/design/model.hpp"
#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

/// What one cause would have to become, the others staying as they are, for the target half-width.
struct Needed {
  double value = 0;        // NaN where unreachable
  bool reachable = false;  // e.g. a VIF below 1 is not
};

/// SE_j = s * 1/sqrt(n-1) * 1/sd(x_j) * sqrt(VIF_j)     (textbook identity)
struct LedgerRow {
  std::size_t column = 0;
  bool estimable = true;
  double residual_sd = 0;      // s: scatter
  double rows_factor = 0;      // 1 / sqrt(n - 1)
  double spread = 0;           // sd(x_j)
  double vif = 1;
  double standard_error = 0;
  double standard_error_without_collinearity = 0;  // SE / sqrt(VIF)
  double widening = 1;         // sqrt(VIF): how many times collinearity widened the interval
  double half_width = 0;       // at the model's level
  double target = 0;           // H
  bool target_is_illustration = false;  // no smallest effect given: the estimate's own size
  bool reached = false;        // half_width <= target
  Needed rows;                 // rows needed, t-quantile followed as the rows grow
  Needed spread_needed;
  Needed scatter_needed;       // residual sd; unreachable where 0 or below
  Needed vif_needed;           // unreachable below 1
};

std::vector<LedgerRow> precision_ledger(const LeastSquaresFit& fit, const Layout& layout, const Model& model);

/// Smallest n at which the half-width falls to `target`, spread, scatter and VIF staying as they are.
///   t(level, n - k) * s * sqrt(VIF) / (sd sqrt(n - 1)) <= target,  k = coefficients incl. intercept
double rows_needed(double target, double level, double residual_sd, double spread, double vif, std::size_t coefficients);

}  // namespace unply
