// Singular values of a small factor and the directions that belong to them. In a file of its own: the decompositions
// are by far the slowest templates to compile.
#pragma once

#include <Eigen/Core>

namespace unply {

struct Directions {
  Eigen::VectorXd singular;  // descending
  Eigen::MatrixXd vectors;   // right singular vectors, one a column, in the same order
};

/// A = U diag(singular) vectors'. One-sided Jacobi up to 100 columns, which is more accurate for the small ones
/// (Demmel & Veselic 1992); divide and conquer beyond, which is faster. A has at least as many rows as columns.
Directions directions_of(const Eigen::MatrixXd& factor);

/// Largest over smallest singular value; infinity where the smallest is 0, 1 where there is no column.
double condition_index_of(const Eigen::MatrixXd& factor);

}  // namespace unply
