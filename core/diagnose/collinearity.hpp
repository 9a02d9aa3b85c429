// How far the predictors of a design move together: VIF, generalised VIF, condition indices, collinear
// groups. All of it from the fit's small matrices; no row is read.
#pragma once

#include <Eigen/Core>
#include <string>
#include <vector>

#include "core/design/layout.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

/// Inflation of one term. For a term of one column the generalised VIF is the VIF.
struct TermInflation {
  std::size_t term = 0;
  std::size_t df = 1;           // columns of the term that are estimable; the measures are of these
  double generalised = 1;       // det(R_T) det(R_rest) / det(R); infinity where inestimable
  double per_df_root = 1;       // generalised^(1/(2 df))
  double comparable = 1;        // per_df_root squared: reads like a VIF
  double shared_variation = 0;  // 1 - 1 / comparable
};

/// One per term of the layout. det(R_T) det(R_rest) / det(R) = det(R_T) det((R^-1)_TT), both determinants as
/// logarithms from orthogonal reductions of the fit's triangular factor: they neither overflow with hundreds
/// of columns nor lose digits to products. Without an intercept R holds cosines instead of correlations.
/// Source: Marquardt 1970; Fox & Monette 1992.
std::vector<TermInflation> term_inflation(const LeastSquaresFit& fit, const Layout& layout);

/// Condition indices, ascending, and the share of each coefficient's variance that sits on each.
struct ConditionTable {
  bool centred = false;
  std::vector<std::string> names;    // of the coefficients; empty string = intercept
  std::vector<std::size_t> columns;  // of the design; for the intercept: p
  Eigen::VectorXd indices;           // r
  Eigen::MatrixXd proportions;       // r x names; every column sums to 1
};

/// Columns scaled to unit length, intercept included, not centred; or centred without it. Columns that the
/// fit did not keep (exact combinations of others) have no place in the table. Source: Belsley, Kuh & Welsch
/// 1980, ch. 3.
ConditionTable condition_table(const LeastSquaresFit& fit, const Layout& layout, bool centred);

/// A combination of the standardised columns of a group, with what the data say about it.
struct Combination {
  std::vector<double> weights;  // on the standardised columns, unit length, largest positive
  double share = 0;             // of the group's variance
  double estimate = 0;          // effect on y of raising the combination by one standard deviation of its own
  double standard_error = 0, lower = 0, upper = 0;
};

struct CollinearGroup {
  std::vector<std::size_t> columns;  // of the design, ascending
  std::vector<std::size_t> terms;
  double condition_index = 0;  // largest that ties the group
  bool strong = false;         // from tolerance::strong_condition_index, else moderate
  bool structural = false;     // its terms are tied because they were built from one another: A, A^2, A*B
  // near-dependency on the standardised columns: sum weights[k] z_k is nearly constant; largest weight is 1
  std::vector<double> near_dependency;
  double near_dependency_sd = 0;  // standard deviation of that sum
  // joint test that all effects of the group are zero (with a response)
  double f = 0, p = 1;
  std::size_t df_numerator = 0;
  // (with a response) leading principal directions of the group, as long as the interval for a step of unit
  // length (in standard deviations of the members: sum of squares 1) is narrower than for such a step of any
  // member by itself
  std::vector<Combination> well_determined;
};

/// Predictors that the data cannot tell apart well, from the centred condition table (without an intercept:
/// the uncentred one). Centred, because effects and their joint tests do not depend on where a scale has its
/// zero: in the uncentred table a column of small relative spread (a year, an absolute temperature) is tied
/// to the intercept, and two such columns would pass for a group although they move independently.
///
///   S         = { k : condition index k >= tolerance::moderate_condition_index }, the narrow directions
///   involved  = estimable columns with sum over S of the variance proportions >= tolerance::shared_variance
///   together  = i, j with |P_ij| >= sqrt(P_ii P_jj) / (2 m), P = V_S V_S' the projection onto the narrow
///   directions,
///               m the number of involved columns; a group is a connected set of these
///
/// With one narrow direction that is the plain rule "shares of at least one half on the same index". With
/// several, the shares are added, because indices of similar size divide a coefficient's variance between
/// them arbitrarily (three columns that all move together have two such indices, and no two columns need
/// share half of one); P tells apart sets that are narrow independently of one another, whatever basis the
/// decomposition happened to choose: it is zero between them, and at least 1 / (m - 1) of its diagonal where
/// m columns follow one common cause. A set whose columns all belong to one term is left out: its joint test
/// is the term's own.
///
/// `level`: of the intervals. `covariance`: p x p, of the standardised coefficients
/// (ResidualChecks::robust_covariance) where joint tests and intervals are to be robust; else null.
///
/// Source: Belsley, Kuh & Welsch 1980, sec. 3.2-3.3 (shares of competing near-dependencies are added).
std::vector<CollinearGroup> collinear_groups(const LeastSquaresFit& fit, const Layout& layout, double level,
                                             const Eigen::MatrixXd* covariance = nullptr);

}  // namespace unply
