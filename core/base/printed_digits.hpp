// How the numbers of a column were written down: the decimals that all of them need.
#pragma once

#include <optional>

namespace unply {

/// Reads numbers one by one; those that are not finite do not count.
class PrintedDigits {
 public:
  void read(double value);

  /// The fewest d with every number times 10^d whole, to within the rounding of a double. None where one of
  /// them would need more than 14 significant digits: it was computed, not written down. 0 where nothing was
  /// read.
  std::optional<int> decimals() const;
  double largest() const { return largest_; }  // size of the largest number

 private:
  int decimals_ = 0;
  bool written_ = true;
  double largest_ = 0;
};

}  // namespace unply
