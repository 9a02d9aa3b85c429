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
/// Of a clear effect, against the smallest effect that matters.
enum class EffectSize { not_asked, beyond, size_uncertain, too_small };
/// Of an undecided one: would it be settled (half-width <= H) had the predictors moved independently?
enum class CollinearityRole { none, would_account, partly, not_the_cause };
/// The largest other cause: what is furthest from what it would have to be.
enum class OtherCause { none, rows, spread, scatter };

struct TermVerdict {
  std::size_t column = 0;
  VerdictKind kind = VerdictKind::undecided;
  EffectSize size = EffectSize::not_asked;
  CollinearityRole collinearity = CollinearityRole::none;
  OtherCause other = OtherCause::none;
  double smallest_effect = 0;             // NaN where not given
  std::optional<std::size_t> group;       // index of its collinear group
  bool group_clear = false;               // the group's joint test is below 1 - level
};

std::vector<TermVerdict> verdicts(const std::vector<CoefficientTest>& tests, const std::vector<LedgerRow>& ledger,
                                  const std::vector<CollinearGroup>& groups, const Layout& layout, const Model& model);

}  // namespace unply
