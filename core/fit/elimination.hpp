// Cross-products -> columns made orthogonal in order, and which of them are exact combinations of earlier
// ones.
#pragma once

#include <cstddef>
#include <vector>

#include "core/base/double_double.hpp"
#include "core/fit/reduction.hpp"

namespace unply {

enum class ColumnRole {
  kept,       // part of the basis
  unsettled,  // too close to a combination of earlier columns for the cross-products at hand: form it and
              // look again
  dependent,  // an exact combination of the kept columns before it, to within the rounding of the cells
};

/// The variables of a fit (see reduction.hpp) made orthogonal in order: combination e_i = z_i + sum_k<i a_ik
/// z_k.
struct Orthogonal {
  DoubledMatrix weights;              // a, unit lower triangular
  DoubledMatrix coordinates;          // its inverse: z_i = e_i + sum_k<i b_ik e_k
  std::vector<DoubleDouble> squares;  // sum of squares of e_i over the rows
  std::vector<ColumnRole> role;       // of the response: kept where its residual is settled
  std::vector<double> norm;           // of the scaled column as it stands in the cells, not shifted
  std::vector<double> shifted_norm;   // of z_i
  std::vector<double> scale;   // sum_k |a_ik| norm_k, the constant included: what rounding is relative to
  std::vector<double> growth;  // sum_k |a_ik| ||z_k|| / ||e_i||: digits lost in forming e_i
  std::vector<double> relative_error;  // of squares: what the cross-products' rounding can have done
  bool settled = false;                // nothing is unsettled, and every relative error is within the limit

  static Orthogonal start(std::size_t variables);
  /// Combinations that are given up again: those columns stand as they are.
  void reset(const std::vector<bool>& stand);
};

struct EliminationOptions {
  bool intercept = true;
  bool has_response = false;
  std::size_t rows = 0;  // that the cross-products are over
  double unit = 0;       // relative error of one cross-product
  double limit = 0;      // relative error of `squares` that is good enough
  const ColumnScaling* scaling = nullptr;
  const std::vector<bool>* dropped = nullptr;  // variables that count as dependent from the start
};

/// One step: the cross-products of the combinations of `orthogonal` make them more nearly orthogonal, and
/// settle roles. A column is dependent where its residual is at most tolerance::rank_relative times its
/// `scale`.
void eliminate(const DoubledMatrix& cross_products, const EliminationOptions& options,
               Orthogonal& orthogonal);

}  // namespace unply
