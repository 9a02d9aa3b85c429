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

/// SE_j = s * 1/sqrt(n-1) * 1/sd(x_j) * sqrt(VIF_j)     (textbook identity; sqrt(n) without an intercept)
///
/// Where the standard errors are robust ones, `residual_sd` is the scatter that would give them by the same
/// identity, so that the four factors still multiply to the standard error that the intervals are made of.
struct LedgerRow {
  std::size_t column = 0;
  bool estimable = true;
  double residual_sd = 0;  // s: scatter
  double rows_factor = 0;  // 1 / sqrt(n - 1)
  double spread = 0;       // sd(x_j)
  double vif = 1;
  double standard_error = 0;
  double standard_error_without_collinearity = 0;  // SE / sqrt(VIF)
  double widening = 1;                  // sqrt(VIF): how many times collinearity widened the interval
  double half_width = 0;                // at the model's level
  double smallest_effect = 0;           // that matters; NaN where not given
  double target = 0;                    // H: half the smallest effect
  bool target_is_illustration = false;  // no smallest effect given: the estimate's own size
  bool reached = false;                 // half_width <= target
  Needed rows;                          // rows needed, t-quantile followed as the rows grow
  Needed spread_needed;
  Needed scatter_needed;  // residual sd; unreachable where 0 or below
  Needed vif_needed;      // unreachable below 1
  // How far each cause other than collinearity is from the mark at which it is unremarkable, on the scale of
  // rows (which count as scatter^2 / spread^2); above 1: short of it. d is the smallest effect that matters;
  // without one, nothing says what the spread should suffice for, and its shortfall is 0.
  double rows_shortfall = 0;     // tolerance::few_rows_per_coefficient * k / n
  double spread_shortfall = 0;   // (tolerance::noticeable_effect * sd_y / (d sd_j))^2
  double scatter_shortfall = 0;  // unexplained share of the response / tolerance::large_unexplained_share
};

/// The smallest effect that matters for a column: the model's own figure for the column or its term, else the
/// one for every term, without its sign; NaN where there is none (or none above 0).
double smallest_effect_of(std::size_t column, const Layout& layout, const Model& model);

/// One row per column of the design; needs a response. `standard_errors`: those that the tests were made
/// with.
///
/// The target half-width is H = d / 2, d the smallest effect that matters: an interval no longer than d
/// cannot hold both 0 and an effect of size d, so at a half-width of H the verdict is clear or ruled out,
/// never undecided, whatever the estimate. (At a half-width of d an effect that is really nil would
/// practically never be ruled out.) Without a smallest effect H is the estimate's own size: the half-width at
/// which this very estimate would be told from 0. That is an illustration, not a power analysis: Hoenig &
/// Heisey 2001.
///
/// needed spread = spread * h/H,  needed scatter = s * H/h,  needed VIF = VIF * (H/h)^2, h the half-width
/// now.
std::vector<LedgerRow> precision_ledger(const LeastSquaresFit& fit, const Layout& layout, const Model& model,
                                        const Eigen::VectorXd& standard_errors);
std::vector<LedgerRow> precision_ledger(const LeastSquaresFit& fit, const Layout& layout, const Model& model);

/// Smallest whole n at which the half-width falls to `target`, spread, scatter and VIF staying as they are.
///   t(level, n - k) * s * sqrt(VIF) / (sd sqrt(n - 1)) <= target,  k = coefficients incl. intercept
/// (sqrt(n) without an intercept). Infinity where that is more than tolerance::most_rows, or the target is
/// not above 0.
double rows_needed(double target, double level, double residual_sd, double spread, double vif,
                   std::size_t coefficients, bool intercept = true);

}  // namespace unply
