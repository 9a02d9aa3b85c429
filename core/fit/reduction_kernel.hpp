// The few loops over rows that the time goes into, compiled for several instruction sets and chosen at run
// time.
#pragma once

#include <cstddef>

namespace unply::kernel {

/// Every sum over rows runs in this many lanes: row i belongs to lane i mod lanes, whatever the width of the
/// machine's registers. The order of all operations, hence every bit of a result, is the same on every
/// instruction set.
inline constexpr std::size_t lanes = 8;

/// Most rows of a block; blocks are filled up with zeros to a multiple of `lanes`. Every column of a block
/// begins at a multiple of 64 bytes.
inline constexpr std::size_t block_rows = 512;

/// A sum in doubled precision, lane by lane.
struct LaneSum {
  double high[lanes];
  double low[lanes];
};

/// A column of a block, entry high + low; `low` is null where all low parts are zero.
struct BlockColumn {
  const double* high;
  const double* low;
};

/// Where the sum of the products of columns i and j stands among all pairs.
constexpr std::size_t pair_index(std::size_t i, std::size_t j) {
  return i < j ? j * (j + 1) / 2 + i : i * (i + 1) / 2 + j;
}
constexpr std::size_t pair_count(std::size_t columns) { return columns * (columns + 1) / 2; }

/// How many combinations `combine_plain` forms at once.
inline constexpr std::size_t combined_at_once = 4;

struct Kernels {
  const char* name;

  /// x = scale * x - shift, in place; `scale` is a power of two. With `read_low`, low holds low parts on
  /// entry. Writes low only where it returns true: some low part is not zero.
  bool (*shift)(std::size_t rows, double scale, double shift, bool read_low, double* high, double* low);

  /// out = start + sum_k (weights_high[k] + weights_low[k]) columns[k], in doubled precision: relative to the
  /// sum of the sizes of its parts the error is about count * 2^-105. `out_low` may be null.
  void (*combine)(std::size_t rows, BlockColumn start, std::size_t count, const BlockColumn* columns,
                  const double* weights_high, const double* weights_low, double* out_high, double* out_low);

  /// out[c] = starts[c] + sum_k weights[combined_at_once k + c] columns[k] for c < combined_at_once, in plain
  /// doubles.
  void (*combine_plain)(std::size_t rows, const double* const* starts, std::size_t count,
                        const double* const* columns, const double* weights, double* const* out);

  /// sums[pair_index(i, j)] += sum over the rows of columns[i] * columns[j]: plain doubles within the block,
  /// doubled precision from block to block.
  void (*cross_products)(std::size_t rows, std::size_t count, const double* const* columns, LaneSum* sums);

  /// sums[k] += sum over the rows of a * columns[k], in doubled precision throughout.
  void (*cross_products_doubled)(std::size_t rows, BlockColumn a, std::size_t count,
                                 const BlockColumn* columns, LaneSum* sums);

  /// y -= (factor_high + factor_low) x, in doubled precision; `count` is a multiple of `lanes`.
  void (*subtract_multiple)(std::size_t count, double factor_high, double factor_low, const double* x_high,
                            const double* x_low, double* y_high, double* y_low);
};

/// The instruction sets that this machine has, slowest first; at least one.
std::size_t available_count();
const Kernels& available(std::size_t which);

/// The fastest of them, unless another was asked for.
const Kernels& chosen();

/// For tests: all that follows uses `which`.
void choose(std::size_t which);

}  // namespace unply::kernel
