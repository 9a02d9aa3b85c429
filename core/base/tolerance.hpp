// Every threshold of the project: one name, what it is relative to, its source. Each is pinned by a test.
#pragma once

#include <limits>

namespace unply::tolerance {

inline constexpr double unit_roundoff = std::numeric_limits<double>::epsilon() / 2;  // 2^-53

/// A column counts as an exact combination of others when the residual of that combination is no larger than what
/// rounding the cells to doubles can make: ||x_j - sum c_k x_k|| <= rank_relative * sum |c_k| ||x_k|| (columns as they
/// stand in the cells, not centred). Scale: unit roundoff. Source: backward error of a sum, Higham, Accuracy and
/// Stability of Numerical Algorithms, 2nd ed., sec. 3.1.
inline constexpr double rank_relative = 8 * unit_roundoff;

/// Condition index from which a near-dependency is called moderate / strong; share of a coefficient's variance that
/// ties it to that index. Source: Belsley, Kuh & Welsch, Regression Diagnostics (1980), sec. 3.2-3.3.
inline constexpr double moderate_condition_index = 10;
inline constexpr double strong_condition_index = 30;
inline constexpr double shared_variance = 0.5;

/// Reference marks of the VIF chart. Common practice, no source; never a verdict.
inline constexpr double vif_marks[] = {4, 5, 10};

}  // namespace unply::tolerance
