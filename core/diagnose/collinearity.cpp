#include "core/diagnose/collinearity.hpp"

#include <Eigen/Cholesky>
#include <Eigen/Eigenvalues>
#include <Eigen/QR>
#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>

#include "core/base/directions.hpp"
#include "core/base/tolerance.hpp"
#include "core/diagnose/residual_checks.hpp"
#include "core/fit/inference.hpp"

namespace unply {
namespace {

using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

constexpr double infinity = std::numeric_limits<double>::infinity();

/// log det(A'A), A with at least as many rows as columns.
double log_det_gram(const MatrixXd& a) {
  const Eigen::HouseholderQR<MatrixXd> qr(a);
  double sum = 0;
  for (Index k = 0; k < a.cols(); ++k) sum += std::log(std::abs(qr.matrixQR()(k, k)));
  return 2 * sum;
}

/// Rows: coefficients; columns: directions. Entry: v_jk^2 / d_k^2, as a share of its row's sum.
MatrixXd variance_shares(const Directions& directions) {
  const Index r = directions.vectors.rows();
  MatrixXd shares(r, r);
  for (Index j = 0; j < r; ++j) {
    // relative to the smallest singular value, so that no quotient overflows
    for (Index k = 0; k < r; ++k) {
      const double ratio = directions.vectors(j, k) * (directions.singular[r - 1] / directions.singular[k]);
      shares(j, k) = ratio * ratio;
    }
    shares.row(j) /= shares.row(j).sum();
  }
  return shares;
}

/// Position of every column among the kept ones; -1 where it is not kept.
std::vector<Index> positions_of_kept(const LeastSquaresFit& fit) {
  std::vector<Index> position(fit.columns, -1);
  for (std::size_t k = 0; k < fit.kept.size(); ++k) position[fit.kept[k]] = static_cast<Index>(k);
  return position;
}

std::size_t root_of(std::vector<std::size_t>& parent, std::size_t i) {
  while (parent[i] != i) i = parent[i] = parent[parent[i]];
  return i;
}

/// Sets of 0 .. count - 1 that are connected by `tied`, each ascending, in the order of their first member.
template <class Tied>
std::vector<std::vector<std::size_t>> connected_sets(std::size_t count, Tied tied) {
  std::vector<std::size_t> parent(count);
  std::iota(parent.begin(), parent.end(), std::size_t{0});
  for (std::size_t i = 0; i < count; ++i) {
    for (std::size_t j = i + 1; j < count; ++j) {
      if (tied(i, j)) parent[root_of(parent, j)] = root_of(parent, i);
    }
  }
  std::vector<std::vector<std::size_t>> sets(count);
  for (std::size_t i = 0; i < count; ++i) sets[root_of(parent, i)].push_back(i);
  std::erase_if(sets, [](const auto& set) { return set.empty(); });
  std::sort(sets.begin(), sets.end());
  return sets;
}

bool intersect(const std::vector<std::size_t>& a, const std::vector<std::size_t>& b) {
  return std::any_of(a.begin(), a.end(),
                     [&](std::size_t x) { return std::count(b.begin(), b.end(), x) > 0; });
}

/// True where one of two terms is built from the other, or both from a third.
bool built_alike(const Layout& layout, std::size_t a, std::size_t b) {
  std::vector<std::size_t> of_a = layout.terms[a].built_from, of_b = layout.terms[b].built_from;
  of_a.push_back(a);
  of_b.push_back(b);
  return intersect(of_a, of_b);
}

/// Correlation matrix of some columns, exact to rounding: from the factor rather than from stored
/// correlations.
MatrixXd factor_of(const LeastSquaresFit& fit, const std::vector<Index>& position,
                   const std::vector<std::size_t>& columns) {
  MatrixXd factor(fit.correlation_factor.rows(), static_cast<Index>(columns.size()));
  for (std::size_t k = 0; k < columns.size(); ++k) {
    factor.col(static_cast<Index>(k)) = fit.correlation_factor.col(position[columns[k]]);
  }
  return factor;
}

MatrixXd part_of(const MatrixXd& matrix, const std::vector<std::size_t>& columns) {
  const Index m = static_cast<Index>(columns.size());
  MatrixXd part(m, m);
  for (Index i = 0; i < m; ++i) {
    for (Index j = 0; j < m; ++j) {
      part(i, j) = matrix(static_cast<Index>(columns[static_cast<std::size_t>(i)]),
                          static_cast<Index>(columns[static_cast<std::size_t>(j)]));
    }
  }
  return part;
}

Index index_of_largest(const VectorXd& weights) {
  Index largest = 0;
  weights.cwiseAbs().maxCoeff(&largest);
  return largest;
}

/// What the response adds to a group: its joint test and what is well determined.
void add_effects(CollinearGroup& group, const LeastSquaresFit& fit, const Directions& inside, double level,
                 const MatrixXd* covariance) {
  const Index m = static_cast<Index>(group.columns.size());
  VectorXd effects(m);  // on the response, of one standard deviation of each member
  for (Index k = 0; k < m; ++k) {
    const Index j = static_cast<Index>(group.columns[static_cast<std::size_t>(k)]);
    effects[k] = fit.coefficients[j] * fit.sd[j];
  }
  const double scale = fit.residual_sd / std::sqrt(static_cast<double>(fit.rows) - (fit.intercept ? 1 : 0));
  const MatrixXd spread =
      covariance ? MatrixXd(part_of(*covariance, group.columns) * (fit.response_sd * fit.response_sd))
                 : MatrixXd(part_of(fit.correlation_inverse, group.columns) * (scale * scale));
  const JointTest test =
      covariance ? joint_test(fit, group.columns, *covariance) : joint_test(fit, group.columns);
  group.f = test.f;
  group.p = test.p;
  group.df_numerator = test.df_numerator;

  const double quantile = t_quantile(level, static_cast<double>(fit.residual_df));
  const double narrowest_member = spread.diagonal().minCoeff();
  const double total = inside.singular.squaredNorm();
  for (Index k = 0; k < m; ++k) {
    VectorXd weights = inside.vectors.col(k);
    if (weights[index_of_largest(weights)] < 0) weights = -weights;
    if (!(weights.dot(spread * weights) < narrowest_member)) break;
    // moving along the direction until the combination has risen by its own standard deviation
    const VectorXd step = inside.singular[k] * weights;
    const double standard_error = std::sqrt(step.dot(spread * step));
    Combination combination;
    combination.weights.assign(weights.begin(), weights.end());
    combination.share = inside.singular[k] * inside.singular[k] / total;
    combination.estimate = step.dot(effects);
    combination.standard_error = standard_error;
    combination.lower = combination.estimate - quantile * standard_error;
    combination.upper = combination.estimate + quantile * standard_error;
    group.well_determined.push_back(std::move(combination));
  }
}

}  // namespace

std::vector<TermInflation> term_inflation(const LeastSquaresFit& fit, const Layout& layout) {
  const std::vector<Index> position = positions_of_kept(fit);
  const Index r = static_cast<Index>(fit.kept.size());
  MatrixXd inverse_factor;  // R^-1 = G G', G = T^-1; only needed for terms of several columns
  std::vector<TermInflation> result;
  for (std::size_t t = 0; t < layout.terms.size(); ++t) {
    std::vector<std::size_t> columns;
    for (std::size_t column : layout.terms[t].columns) {
      if (fit.estimable[column]) columns.push_back(column);
    }
    TermInflation inflation;
    inflation.term = t;
    inflation.df = columns.size();
    if (columns.empty()) {
      inflation.generalised = inflation.per_df_root = inflation.comparable = infinity;
    } else if (columns.size() == 1) {
      inflation.generalised = fit.variance_inflation[static_cast<Index>(columns[0])];
      inflation.per_df_root = std::sqrt(inflation.generalised);
      inflation.comparable = inflation.generalised;
    } else {
      if (inverse_factor.size() == 0) {
        inverse_factor =
            fit.correlation_factor.triangularView<Eigen::Upper>().solve(MatrixXd::Identity(r, r));
      }
      MatrixXd rows(r, static_cast<Index>(columns.size()));
      for (std::size_t k = 0; k < columns.size(); ++k) {
        rows.col(static_cast<Index>(k)) = inverse_factor.row(position[columns[k]]).transpose();
      }
      // never below 1 but for rounding
      const double log_generalised =
          std::max(0.0, log_det_gram(factor_of(fit, position, columns)) + log_det_gram(rows));
      inflation.generalised = std::exp(log_generalised);
      inflation.per_df_root = std::exp(log_generalised / (2 * static_cast<double>(columns.size())));
      inflation.comparable = inflation.per_df_root * inflation.per_df_root;
    }
    inflation.shared_variation = 1 - 1 / inflation.comparable;
    result.push_back(inflation);
  }
  return result;
}

ConditionTable condition_table(const LeastSquaresFit& fit, const Layout& layout, bool centred) {
  ConditionTable table;
  table.centred = centred;
  const MatrixXd& factor = centred ? fit.correlation_factor : fit.uncentred_factor;
  if (!centred && fit.intercept) {
    table.names.emplace_back();
    table.columns.push_back(fit.columns);
  }
  for (std::size_t column : fit.kept) {
    table.names.push_back(layout.columns[column]);
    table.columns.push_back(column);
  }
  if (factor.cols() == 0) return table;
  const Directions directions = directions_of(factor);
  table.indices = directions.singular[0] / directions.singular.array();
  table.proportions = variance_shares(directions).transpose();
  return table;
}

std::vector<CollinearGroup> collinear_groups(const LeastSquaresFit& fit, const Layout& layout, double level,
                                             const MatrixXd* covariance) {
  const Index r = static_cast<Index>(fit.kept.size());
  if (r < 2) return {};
  const Directions all = directions_of(fit.correlation_factor);
  const VectorXd indices = all.singular[0] / all.singular.array();
  const Index narrow = (indices.array() >= tolerance::moderate_condition_index).count();
  if (narrow == 0) return {};
  const MatrixXd shares = variance_shares(all);

  std::vector<std::size_t> involved;  // positions among the kept columns
  for (Index j = 0; j < r; ++j) {
    const std::size_t k = static_cast<std::size_t>(j);
    if (fit.estimable[fit.kept[k]] && shares.row(j).tail(narrow).sum() >= tolerance::shared_variance) {
      involved.push_back(k);
    }
  }
  const auto basis_row = [&](std::size_t k) { return all.vectors.row(static_cast<Index>(k)).tail(narrow); };
  const double least = 1 / (2 * static_cast<double>(involved.size()));
  const auto sets = connected_sets(involved.size(), [&](std::size_t i, std::size_t j) {
    const auto a = basis_row(involved[i]), b = basis_row(involved[j]);
    return std::abs(a.dot(b)) >= least * a.norm() * b.norm();
  });

  const std::vector<Index> position = positions_of_kept(fit);
  std::vector<CollinearGroup> groups;
  for (const std::vector<std::size_t>& set : sets) {
    CollinearGroup group;
    for (std::size_t member : set) {
      const std::size_t column = fit.kept[involved[member]];
      group.columns.push_back(column);
      const std::size_t term = layout.term_of[column];
      if (!std::count(group.terms.begin(), group.terms.end(), term)) group.terms.push_back(term);
    }
    std::sort(group.terms.begin(), group.terms.end());
    if (group.terms.size() < 2) continue;
    group.structural = connected_sets(group.terms.size(), [&](std::size_t i, std::size_t j) {
                         return built_alike(layout, group.terms[i], group.terms[j]);
                       }).size() == 1;

    // The largest index whose direction lies within the group; where none does, the one that lies there most.
    double most = -1;
    for (Index k = r - 1; k >= r - narrow; --k) {
      double within = 0;
      for (std::size_t member : set) {
        const double v = all.vectors(static_cast<Index>(involved[member]), k);
        within += v * v;
      }
      if (within > most) {
        most = within;
        group.condition_index = indices[k];
      }
      if (within >= tolerance::shared_variance) break;
    }
    group.strong = group.condition_index >= tolerance::strong_condition_index;

    const Directions inside = directions_of(factor_of(fit, position, group.columns));
    const Index m = static_cast<Index>(group.columns.size());
    const VectorXd smallest = inside.vectors.col(m - 1);
    const double largest_weight = smallest[index_of_largest(smallest)];
    const VectorXd weights = smallest / largest_weight;
    group.near_dependency.assign(weights.begin(), weights.end());
    group.near_dependency_sd = inside.singular[m - 1] / std::abs(largest_weight);

    if (fit.has_response) add_effects(group, fit, inside, level, covariance);
    groups.push_back(std::move(group));
  }
  return groups;
}

}  // namespace unply
