// RowSource: the rows of a design in blocks. What the fit reads; nobody ever holds the whole n x p matrix.
#pragma once

#include <cstddef>

namespace unply {

class RowSource {
 public:
  virtual ~RowSource() = default;

  virtual std::size_t rows() const = 0;      // n
  virtual std::size_t columns() const = 0;   // p, the intercept not counted
  virtual bool has_response() const = 0;

  /// Rows first .. first + count - 1, column by column: entry (i, j) goes to high[j * stride + i]; the response, if
  /// any, is column p. Products and powers are formed in double-double: the entry is high + low, |low| <= ulp(high)/2.
  /// Plain columns have low = 0. Both arrays hold (p + has_response) * stride doubles. Thread-safe.
  virtual void fill(std::size_t first, std::size_t count, std::size_t stride, double* high, double* low) const = 0;

  /// False where low is zero in every row of this column.
  virtual bool has_low(std::size_t column) const = 0;
};

}  // namespace unply
