#include "core/diagnose/ledger.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/tolerance.hpp"

namespace unply {
namespace {

constexpr double infinity = std::numeric_limits<double>::infinity();
constexpr double unknown = std::numeric_limits<double>::quiet_NaN();

Needed needed(double value, bool reachable) { return {reachable ? value : unknown, reachable}; }

}  // namespace

double smallest_effect_of(std::size_t column, const Layout& layout, const Model& model) {
  double effect = model.smallest_effect.value_or(unknown);
  const TermLayout& term = layout.terms[layout.term_of[column]];
  for (const std::string& name : {layout.columns[column], term.name}) {
    const auto own = model.smallest_effects.find(name);
    if (own != model.smallest_effects.end()) {
      effect = own->second;
      break;
    }
  }
  effect = std::abs(effect);
  return effect > 0 && std::isfinite(effect) ? effect : unknown;
}

double rows_needed(double target, double level, double residual_sd, double spread, double vif,
                   std::size_t coefficients, bool intercept) {
  const double one = intercept ? 1 : 0;
  const double fewest = std::max(static_cast<double>(coefficients) + 1, 2.0);
  const double ratio = residual_sd * std::sqrt(vif) / spread / target;
  if (std::isnan(ratio) || std::isnan(target)) return residual_sd == 0 ? fewest : unknown;
  if (!(target > 0)) return infinity;
  const auto reached = [&](double n) {
    return t_quantile(level, n - static_cast<double>(coefficients)) * ratio <= std::sqrt(n - one);
  };
  // The normal quantile is below every t quantile: no fewer rows can do.
  const double limit = t_quantile(level, infinity) * ratio;
  double low = std::max(fewest, std::ceil(one + limit * limit) - 1);
  if (!(low < tolerance::most_rows)) return infinity;
  if (reached(low)) return low;
  double high = low, step = 1;  // low: not reached
  while (!reached(high)) {
    low = high;
    high += step;
    step *= 2;
    if (!(high < tolerance::most_rows)) return infinity;
  }
  while (high - low > 1) {
    const double middle = std::floor(low + (high - low) / 2);
    (reached(middle) ? high : low) = middle;
  }
  return high;
}

std::vector<LedgerRow> precision_ledger(const LeastSquaresFit& fit, const Layout& layout, const Model& model,
                                        const Eigen::VectorXd& standard_errors) {
  const double n = static_cast<double>(fit.rows);
  const double quantile = t_quantile(model.level, static_cast<double>(fit.residual_df));
  const std::size_t coefficients = fit.kept.size() + (fit.intercept ? 1 : 0);
  std::vector<LedgerRow> ledger;
  for (std::size_t column = 0; column < fit.columns; ++column) {
    const Eigen::Index j = static_cast<Eigen::Index>(column);
    LedgerRow row;
    row.column = column;
    row.estimable = fit.estimable[column];
    row.rows_factor = 1 / std::sqrt(n - (fit.intercept ? 1 : 0));
    row.spread = fit.sd[j];
    row.vif = fit.variance_inflation[j];
    row.widening = std::sqrt(row.vif);
    row.smallest_effect = smallest_effect_of(column, layout, model);
    row.target_is_illustration = std::isnan(row.smallest_effect);
    row.rows_shortfall = tolerance::few_rows_per_coefficient * static_cast<double>(coefficients) / n;
    row.scatter_shortfall = fit.unexplained_share / tolerance::large_unexplained_share;
    if (!row.estimable) {
      row.residual_sd = fit.residual_sd;
      row.standard_error = row.standard_error_without_collinearity = row.half_width = unknown;
      row.target = row.target_is_illustration ? unknown : row.smallest_effect / 2;
      row.rows = row.spread_needed = row.scatter_needed = row.vif_needed = needed(unknown, false);
      ledger.push_back(row);
      continue;
    }
    row.standard_error = standard_errors[j];
    row.standard_error_without_collinearity = row.standard_error / row.widening;
    row.residual_sd = row.standard_error_without_collinearity * row.spread / row.rows_factor;
    row.half_width = row.standard_error == 0 ? 0 : quantile * row.standard_error;
    row.target = row.target_is_illustration ? std::abs(fit.coefficients[j]) : row.smallest_effect / 2;
    if (!row.target_is_illustration) {
      const double noticeable =
          tolerance::noticeable_effect * fit.response_sd / (row.smallest_effect * row.spread);
      row.spread_shortfall = noticeable * noticeable;
    }
    row.reached = row.half_width <= row.target;

    const double rows = rows_needed(row.target, model.level, row.residual_sd, row.spread, row.vif,
                                    coefficients, fit.intercept);
    row.rows = needed(rows, std::isfinite(rows));
    const double narrowing =
        row.half_width == 0 ? 1 : row.half_width / row.target;  // needed; infinite for target 0
    row.spread_needed = needed(row.spread * narrowing, std::isfinite(row.spread * narrowing));
    row.scatter_needed = needed(row.residual_sd / narrowing, row.residual_sd / narrowing > 0);
    const double vif = row.vif / narrowing / narrowing;
    row.vif_needed = needed(vif, vif >= 1);
    ledger.push_back(row);
  }
  return ledger;
}

std::vector<LedgerRow> precision_ledger(const LeastSquaresFit& fit, const Layout& layout,
                                        const Model& model) {
  return precision_ledger(fit, layout, model, fit.standard_errors);
}

}  // namespace unply
