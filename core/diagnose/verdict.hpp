// The verdict per term: clear, ruled out, or undecided and why.
#pragma once

#include <optional>
#include <vector>

#include "core/design/layout.hpp"
#include "core/design/model.hpp"
#include "core/diagnose/collinearity.hpp"
#include "core/diagnose/ledger.hpp"

namespace unply {

enum class VerdictKind { clear, ruled_out, undecided, not_estimable };
/// Of a clear effect, against the smallest effect that matters: the whole interval at or beyond it, on both
/// sides of it, or short of it.
enum class EffectSize { not_asked, beyond, size_uncertain, too_small };
/// Of an undecided one: would it be settled (half-width <= H, see precision_ledger) had the predictors moved
/// independently, with the same rows, spread and scatter? `partly`: no, but of the narrowing that is needed,
/// as a ratio, collinearity stands for at least tolerance::partly_share: log sqrt(VIF) >= share *
/// log(half-width / H).
enum class CollinearityRole { none, would_account, partly, not_the_cause };
/// The largest other cause, where collinearity would not account for it alone. The causes multiply, so each
/// alone would have to give way by the same factor; what tells them apart is how far each is from the mark at
/// which it is unremarkable: the largest of rows_shortfall, spread_shortfall and scatter_shortfall of the
/// ledger.
enum class OtherCause { none, rows, spread, scatter };

struct TermVerdict {
  std::size_t column = 0;
  VerdictKind kind = VerdictKind::undecided;
  EffectSize size = EffectSize::not_asked;
  CollinearityRole collinearity = CollinearityRole::none;
  OtherCause other = OtherCause::none;
  double smallest_effect = 0;        // NaN where not given
  std::optional<std::size_t> group;  // index of its collinear group
  bool group_clear = false;          // the group's joint test is below 1 - level
};

/// One per column of the design. Interval L..U, smallest effect d (optional):
///   not estimable                     not_estimable
///   0 outside [L, U]                  clear
///   0 inside, [L, U] within (-d, d)   ruled_out
///   else                              undecided
/// The tests, the ledger and the groups are of one fit and one kind of standard error.
std::vector<TermVerdict> verdicts(const std::vector<CoefficientTest>& tests,
                                  const std::vector<LedgerRow>& ledger,
                                  const std::vector<CollinearGroup>& groups, const Layout& layout,
                                  const Model& model);

}  // namespace unply
