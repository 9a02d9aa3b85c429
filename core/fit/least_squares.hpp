// Least squares on the rows of a design: estimates, rank, exact dependencies, precision.
#pragma once

#include <Eigen/Core>
#include <cstddef>
#include <functional>
#include <memory>
#include <vector>

#include "core/design/row_source.hpp"

namespace unply {

/// Column `column` equals constant + sum_k coefficients[k] * X[on[k]], to within the rounding of the cells.
/// With nothing in `on` the column is constant.
struct LinearDependency {
  std::size_t column = 0;
  std::vector<std::size_t> on;
  std::vector<double> coefficients;
  double constant = 0;           // 0 where the model has no intercept
  double relative_residual = 0;  // ||residual|| / (|constant| sqrt(n) + sum |c_k| ||x_k|| + ||x_j||)
};

/// How the rows of X become orthonormal; kept for the passes over the rows that come after the fit.
struct Basis;

/// minimise ||y - b0 - X b||^2.  n rows, p columns; without an intercept b0 = 0.
/// "Standardised" means centred (about 0 without an intercept) and divided by `sd`.
struct LeastSquaresFit {
  std::size_t rows = 0;                        // n
  std::size_t columns = 0;                     // p
  bool intercept = true;
  bool has_response = false;

  // Of X alone.
  Eigen::VectorXd mean;                        // p; all 0 without an intercept
  Eigen::VectorXd sd;                          // p; sqrt(sum (x - mean)^2 / (n - intercept))
  std::vector<std::size_t> kept;               // columns that form the basis, ascending (earlier columns are preferred)
  std::vector<LinearDependency> dependencies;  // one for every column not kept
  std::vector<bool> estimable;                 // p: the coefficient is the same in every least-squares solution
  bool intercept_estimable = true;
  Eigen::MatrixXd correlation;                 // p x p, correlation of the columns (cosines without an intercept); NaN for constant columns
  Eigen::MatrixXd correlation_factor;          // r x r upper triangular, T'T = correlation matrix of the kept columns
  Eigen::MatrixXd uncentred_factor;            // the same for [1 X_kept], columns scaled to unit length, not centred; 1 first if intercept
  Eigen::MatrixXd correlation_factor_low;      // the two factors are high + low: what very small singular values need;
  Eigen::MatrixXd uncentred_factor_low;        // empty where unknown
  Eigen::MatrixXd correlation_inverse;         // p x p; rows and columns of inestimable coefficients are NaN
  Eigen::VectorXd variance_inflation;          // p; diagonal of the above; infinity where inestimable

  // With a response.
  double response_mean = 0, response_sd = 0;   // as mean and sd above
  double intercept_estimate = 0, intercept_standard_error = 0;  // NaN where inestimable or no intercept
  Eigen::VectorXd coefficients;                // p, in the units of the cells; NaN where inestimable
  Eigen::VectorXd standard_errors;             // p, s / (sqrt(n - intercept) sd_j) * sqrt(VIF_j)
  Eigen::VectorXd standardised;                // p, b_j sd_j / sd_y
  Eigen::VectorXd response_factor;             // r; T' response_factor = correlations of the kept columns with y; its
                                               // squared length is R^2. Empty where unknown
  double unexplained_share = 0;                // RSS / TSS (TSS about 0 without an intercept); NaN where TSS = 0
  std::ptrdiff_t residual_df = 0;              // n - rank - intercept
  double residual_sd = 0;                      // s

  double trusted_digits = 0;                   // decimal digits that the arithmetic supports in every estimate (without
                                               // a response: in every VIF); at most 16

  std::shared_ptr<const Basis> basis;          // empty for a fit from correlations
};

/// Throws Error: too_few_rows if n <= rank + intercept and there is a response, or n < 2; value_out_of_range where a
/// value is not finite or a result is beyond the range of a double. A rank-deficient X is an answer: read
/// `dependencies` and `estimable`.
///
/// Cross-products of shifted columns in doubled precision give a triangular factor R; wherever that is not enough, the
/// columns of X R^-1 are formed row by row in doubled precision and the same is done with them, until they are
/// orthogonal to within rounding. Of a tall table the first R comes from a sample of its rows, so that one pass over all
/// of them is enough. Up to condition 1e15 the results are those of exact arithmetic on the doubles that the cells hold,
/// to 13 digits and more.
///
/// Source: sums and products in doubled precision, Ogita, Rump & Oishi (2005); R^-1 as a preconditioner, Yamamoto,
/// Nakatsukasa, Yanagisawa & Fukaya (2015); block-wise reduction, Demmel, Grigori, Hoemmen & Langou (2012).
LeastSquaresFit fit_least_squares(const RowSource& rows, bool intercept);

/// A block of rows seen through the fit.
struct RowBlock {
  std::size_t first = 0, count = 0;
  Eigen::VectorXd fitted;        // NaN where the row needs an inestimable combination (new rows only)
  Eigen::VectorXd leverages;     // x_i' (X'X)^-1 x_i, intercept included; NaN where fitted is
  Eigen::MatrixXd orthonormal;   // count x (rank + intercept): rows of Q, where [1 X] = Q R; the intercept's column first
  Eigen::VectorXd response;      // empty where `rows` has no response
  Eigen::VectorXd residuals;     // empty where `rows` has no response
};

/// One pass over rows of the same layout: the rows of the fit themselves, or new ones (without response).
void for_each_row_block(const RowSource& rows, const LeastSquaresFit& fit,
                        const std::function<void(const RowBlock&)>& visit);

}  // namespace unply
