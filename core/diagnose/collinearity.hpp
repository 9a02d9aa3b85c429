// How far the predictors of a design move together: VIF, generalised VIF, condition indices, collinear groups.
// All of it from the fit's small matrices; no row is read.
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
  std::size_t df = 1;           // columns of the term that are estimable
  double generalised = 1;       // det(R_T) det(R_rest) / det(R); infinity where inestimable
  double per_df_root = 1;       // generalised^(1/(2 df))
  double comparable = 1;        // per_df_root squared: reads like a VIF
  double shared_variation = 0;  // 1 - 1 / comparable
};

/// Source: Marquardt 1970; Fox & Monette 1992.
std::vector<TermInflation> term_inflation(const LeastSquaresFit& fit, const Layout& layout);

/// Condition indices, ascending, and the share of each coefficient's variance that sits on each.
struct ConditionTable {
  bool centred = false;
  std::vector<std::string> names;   // of the coefficients; empty string = intercept
  std::vector<std::size_t> columns; // of the design; for the intercept: p
  Eigen::VectorXd indices;          // r
  Eigen::MatrixXd proportions;      // r x names; every column sums to 1
};

/// Columns scaled to unit length, intercept included, not centred; or centred without it.
/// Source: Belsley, Kuh & Welsch 1980, ch. 3.
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
  double condition_index = 0;        // largest that ties the group
  bool structural = false;           // members are built from each other (products, powers)
  bool strong = false;               // from tolerance::strong_condition_index, else moderate
  // near-dependency on the standardised columns: sum weights[k] z_k is nearly constant; largest weight is 1
  std::vector<double> near_dependency;
  double near_dependency_sd = 0;     // standard deviation of that sum
  // joint test that all effects of the group are zero (with a response)
  double f = 0, p = 1;
  std::size_t df_numerator = 0;
  std::vector<Combination> well_determined;  // (with a response) leading principal directions whose interval is narrower than any single term's
};

/// Predictors that share >= tolerance::shared_variance of their variance on the same condition index >= 10; indices
/// that share a predictor are merged into one group.
std::vector<CollinearGroup> collinear_groups(const LeastSquaresFit& fit, const Layout& layout, double level);

}  // namespace unply
