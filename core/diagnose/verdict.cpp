#include "core/diagnose/verdict.hpp"

#include <algorithm>
#include <cmath>

#include "core/base/tolerance.hpp"

namespace unply {
namespace {

EffectSize size_of(const Interval& interval, double smallest_effect) {
  if (std::isnan(smallest_effect)) return EffectSize::not_asked;
  const double nearest = std::min(std::abs(interval.lower), std::abs(interval.upper));
  const double farthest = std::max(std::abs(interval.lower), std::abs(interval.upper));
  if (nearest >= smallest_effect) return EffectSize::beyond;
  return farthest < smallest_effect ? EffectSize::too_small : EffectSize::size_uncertain;
}

CollinearityRole role_of(const LedgerRow& row) {
  if (row.reached) return CollinearityRole::none;
  if (row.half_width / row.widening <= row.target) return CollinearityRole::would_account;
  // an infinite narrowing (target 0) leaves collinearity no share
  const double share = std::log(row.widening) / std::log(row.half_width / row.target);
  return share >= tolerance::partly_share ? CollinearityRole::partly : CollinearityRole::not_the_cause;
}

OtherCause other_cause(const LedgerRow& row) {
  if (row.rows_shortfall >= row.spread_shortfall && row.rows_shortfall >= row.scatter_shortfall) {
    return OtherCause::rows;
  }
  return row.spread_shortfall >= row.scatter_shortfall ? OtherCause::spread : OtherCause::scatter;
}

}  // namespace

std::vector<TermVerdict> verdicts(const std::vector<CoefficientTest>& tests,
                                  const std::vector<LedgerRow>& ledger,
                                  const std::vector<CollinearGroup>& groups, const Layout& layout,
                                  const Model& model) {
  std::vector<TermVerdict> result;
  for (std::size_t column = 0; column < layout.columns.size(); ++column) {
    const CoefficientTest& test = tests[column];
    const LedgerRow& row = ledger[column];
    TermVerdict verdict;
    verdict.column = column;
    verdict.smallest_effect = row.smallest_effect;
    for (std::size_t g = 0; g < groups.size(); ++g) {
      const std::vector<std::size_t>& members = groups[g].columns;
      if (!std::binary_search(members.begin(), members.end(), column)) continue;
      verdict.group = g;
      verdict.group_clear = groups[g].p < 1 - model.level;
    }
    const Interval& interval = test.interval;
    if (!row.estimable) {
      verdict.kind = VerdictKind::not_estimable;
    } else if (interval.lower > 0 || interval.upper < 0) {
      verdict.kind = VerdictKind::clear;
      verdict.size = size_of(interval, row.smallest_effect);
    } else if (-row.smallest_effect < interval.lower && interval.upper < row.smallest_effect) {
      verdict.kind = VerdictKind::ruled_out;
    } else {
      verdict.kind = VerdictKind::undecided;
      verdict.collinearity = role_of(row);
      if (verdict.collinearity == CollinearityRole::partly ||
          verdict.collinearity == CollinearityRole::not_the_cause) {
        verdict.other = other_cause(row);
      }
    }
    result.push_back(verdict);
  }
  return result;
}

}  // namespace unply
