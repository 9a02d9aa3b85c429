// Rows in blocks -> one small matrix of cross-products, in doubled precision. The rows are read, never kept.
//
// The variables of a fit, in order: the intercept's column of ones (if any), the p columns of X, the response
// (if any). Inside, a column x is z = 2^-exponent x - shift: nothing overflows when squared, and a column
// whose values differ only far behind the point loses nothing.
#pragma once

#include <cstddef>
#include <vector>

#include "core/base/double_double.hpp"
#include "core/design/row_source.hpp"
#include "core/fit/reduction_kernel.hpp"

namespace unply {

/// Memory for doubles that begins at a multiple of 64 bytes.
class AlignedDoubles {
 public:
  explicit AlignedDoubles(std::size_t count = 0);  // not set
  ~AlignedDoubles();
  AlignedDoubles(const AlignedDoubles& other);
  AlignedDoubles& operator=(AlignedDoubles other) noexcept;
  AlignedDoubles(AlignedDoubles&& other) noexcept;
  double* data() { return data_; }
  const double* data() const { return data_; }
  std::size_t size() const { return size_; }

 private:
  std::size_t size_ = 0;
  double* data_ = nullptr;
};

/// A small square matrix in doubled precision, row by row.
class DoubledMatrix {
 public:
  explicit DoubledMatrix(std::size_t size = 0);  // zeros
  static DoubledMatrix identity(std::size_t size);

  std::size_t size() const { return size_; }
  DoubleDouble at(std::size_t i, std::size_t j) const { return {high(i)[j], low(i)[j]}; }
  void set(std::size_t i, std::size_t j, const DoubleDouble& value) {
    high(i)[j] = value.high;
    low(i)[j] = value.low;
  }
  const double* high(std::size_t i) const { return values_.data() + 2 * i * stride_; }
  const double* low(std::size_t i) const { return values_.data() + (2 * i + 1) * stride_; }
  double* high(std::size_t i) { return values_.data() + 2 * i * stride_; }
  double* low(std::size_t i) { return values_.data() + (2 * i + 1) * stride_; }

  /// Row i of this -= factor * row j of `other`, entries first .. last - 1 (and perhaps neighbours up to
  /// whole lanes).
  void subtract(std::size_t i, const DoubleDouble& factor, const DoubledMatrix& other, std::size_t j,
                std::size_t first, std::size_t last);

 private:
  std::size_t size_ = 0, stride_ = 0;
  AlignedDoubles values_;
};

/// How the columns of X and the response are scaled and shifted (p, then 1 if there is a response).
struct ColumnScaling {
  std::vector<int> exponent;
  std::vector<double> shift;
};

/// From a few rows spread over the table. Columns that hold nothing but 0 there have `unseen` set.
ColumnScaling scaling_from_sample(const RowSource& rows, bool intercept, std::vector<bool>& unseen);
/// From the largest value of every column; reads all rows. Throws Error value_out_of_range for a value that
/// is not finite.
ColumnScaling scaling_from_all(const RowSource& rows, bool intercept);

/// Which rows a pass reads: all of them, or runs of `run` rows that begin at `starts`.
struct RowChoice {
  std::size_t total = 0;
  std::size_t run = 0;  // 0: all rows
  std::vector<std::size_t> starts;

  static RowChoice all(const RowSource& rows);
  /// About `wanted` rows in short runs evenly spread over the table.
  static RowChoice spread(const RowSource& rows, std::size_t wanted);
};

/// Reads blocks of rows: scaled, shifted, and filled up with zeros to whole lanes.
class BlockReader {
 public:
  BlockReader(const RowSource& rows, bool intercept, const ColumnScaling& scaling, const RowChoice& choice);

  /// False when there are no more rows.
  bool next();
  std::size_t first() const { return first_; }  // row of the table, where all rows are read
  std::size_t count() const { return count_; }
  std::size_t padded() const { return padded_; }
  std::size_t stride() const { return stride_; }
  const std::vector<kernel::BlockColumn>& columns() const { return columns_; }  // one per variable

 private:
  const RowSource& rows_;
  const ColumnScaling& scaling_;
  const RowChoice& choice_;
  bool intercept_;
  std::size_t width_, stride_, first_ = 0, count_ = 0, padded_ = 0, next_ = 0;
  AlignedDoubles high_, low_, ones_;
  std::vector<bool> has_low_;
  std::vector<kernel::BlockColumn> columns_;
};

/// How a pass forms one variable's combination from the columns before it.
enum class Forming {
  as_it_stands,  // the column itself, its high part
  plain,         // in doubles
  doubled,       // in doubled precision
};

/// Forms combinations of a block's columns: combination i is column i plus sum_k<i weights(i, k) column k.
class Combiner {
 public:
  /// `keep_low`: low parts are kept too. `of`: which combinations; empty: all.
  Combiner(const DoubledMatrix& weights, const std::vector<Forming>& forming, bool keep_low,
           std::size_t stride);
  void form(const BlockReader& block);
  const std::vector<kernel::BlockColumn>& columns() const { return columns_; }

 private:
  struct Doubled {
    std::size_t variable;
    std::vector<std::size_t> on;
    std::vector<double> high, low;
  };
  struct Plain {
    std::size_t variables[kernel::combined_at_once];
    std::size_t count, depth;
    std::vector<double> weights;
  };
  bool keep_low_;
  std::size_t stride_;
  std::vector<Forming> forming_;
  std::vector<Doubled> doubled_;
  std::vector<Plain> plain_;
  AlignedDoubles high_, low_, spare_;
  std::vector<kernel::BlockColumn> columns_, gathered_;
  std::vector<const double*> gathered_plain_;
};

/// Cross-products of the combinations over the chosen rows; both triangles are set. In doubled precision, or
/// (`exact` false) in plain doubles within a block, save those with the response.
DoubledMatrix cross_products(const RowSource& rows, bool intercept, const ColumnScaling& scaling,
                             const RowChoice& choice, const DoubledMatrix& weights,
                             const std::vector<Forming>& forming, bool exact);

/// Rows of a block for so many variables: the block stays in the cache that is nearest.
std::size_t rows_of_a_block(std::size_t variables);

}  // namespace unply
