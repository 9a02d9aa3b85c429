// Compiled once for every instruction set, each time into a namespace of its own (UNPLY_KERNEL_LEVEL).
// Nothing shared with other files may be instantiated here: the linker would keep one copy, possibly the one
// that this machine cannot run. So: no Eigen, no standard containers or algorithms.
#include "core/fit/reduction_kernel.hpp"

#if defined(__AVX512F__) || (defined(__AVX2__) && defined(__FMA__))
#include <immintrin.h>
#endif

namespace unply::kernel {
namespace UNPLY_KERNEL_LEVEL {
extern const Kernels kernels;
}

namespace UNPLY_KERNEL_LEVEL {
namespace {

// A register of the machine and how many of them make up all lanes.
#if defined(__AVX512F__)
typedef double Register __attribute__((vector_size(64)));
typedef long long Bits __attribute__((vector_size(64)));
#elif defined(__AVX2__) && defined(__FMA__)
typedef double Register __attribute__((vector_size(32)));
typedef long long Bits __attribute__((vector_size(32)));
#else
typedef double Register __attribute__((vector_size(16)));
typedef long long Bits __attribute__((vector_size(16)));
#endif
constexpr std::size_t width = sizeof(Register) / sizeof(double);
constexpr int tile = sizeof(Register) == 64 ? 4 : 3;  // columns x columns of sums held in registers
constexpr int doubled_tile = sizeof(Register) == 64 ? 4 : 2;

#define UNPLY_INLINE inline __attribute__((always_inline))

UNPLY_INLINE Register load(const double* from) { return *reinterpret_cast<const Register*>(from); }
UNPLY_INLINE void store(double* to, Register value) { *reinterpret_cast<Register*>(to) = value; }
UNPLY_INLINE Register all(double value) { return Register{} + value; }

// a * b = product + error, exactly.
struct Factor {
  Register value;
#if !defined(__AVX512F__) && !(defined(__AVX2__) && defined(__FMA__))
  Register upper, lower;  // 26 bits each: Dekker 1971
#endif
};
UNPLY_INLINE Factor factor(Register value) {
#if defined(__AVX512F__) || (defined(__AVX2__) && defined(__FMA__))
  return {value};
#else
  const Register spread = value * 134217729.0;  // 2^27 + 1
  const Register upper = spread - (spread - value);
  return {value, upper, value - upper};
#endif
}
UNPLY_INLINE Register product_error(const Factor& a, const Factor& b, Register product) {
#if defined(__AVX512F__)
  return _mm512_fmsub_pd(a.value, b.value, product);
#elif defined(__AVX2__) && defined(__FMA__)
  return _mm256_fmsub_pd(a.value, b.value, product);
#else
  return ((a.upper * b.upper - product) + a.upper * b.lower + a.lower * b.upper) + a.lower * b.lower;
#endif
}

// sum + value = sum + error, exactly; returns the error.
UNPLY_INLINE Register add_exactly(Register& sum, Register value) {
  const Register next = sum + value, part = next - sum;
  const Register error = (sum - (next - part)) + (value - part);
  sum = next;
  return error;
}

bool shift(std::size_t rows, double scale, double shift_by, bool read_low, double* high, double* low) {
  if (scale == 1 && shift_by == 0) {
    if (!read_low) return false;
  } else if (shift_by == 0) {
    for (std::size_t i = 0; i < rows; i += width) store(high + i, load(high + i) * scale);
    if (!read_low) return false;
    for (std::size_t i = 0; i < rows; i += width) store(low + i, load(low + i) * scale);
  } else {
    const Register minus = all(-shift_by);
    Bits errors = Bits{};  // stays zero while every difference is exact
    for (std::size_t i = 0; i < rows; i += width) {
      Register value = load(high + i) * scale;
      const Register error = add_exactly(value, minus);
      errors = errors | (Bits)error;
      store(high + i, value);
      if (read_low) {
        // the parts are brought back to |low| <= ulp(high) / 2
        const Register rest = load(low + i) * scale + error, sum = value + rest;
        store(high + i, sum);
        store(low + i, rest - (sum - value));
      } else {
        store(low + i, error);
      }
    }
    if (!read_low) {
      bool any = false;
      for (std::size_t lane = 0; lane < width; ++lane)
        any = any || (static_cast<unsigned long long>(errors[lane]) << 1) != 0;  // -0 too
      return any;
    }
  }
  bool any = false;
  for (std::size_t i = 0; i < rows; ++i) any = any || low[i] != 0;
  return any;
}

template <int groups>
UNPLY_INLINE void combine_groups(BlockColumn start, std::size_t first, std::size_t count,
                                 const BlockColumn* columns, const double* weights_high,
                                 const double* weights_low, double* out_high, double* out_low) {
  Register sum[groups], rest[groups];
  for (int g = 0; g < groups; ++g) {
    const std::size_t at = first + static_cast<std::size_t>(g) * width;
    sum[g] = start.high ? load(start.high + at) : Register{};
    rest[g] = start.low ? load(start.low + at) : Register{};
  }
  for (std::size_t k = 0; k < count; ++k) {
    const Factor high = factor(all(weights_high[k]));
    const Register low = all(weights_low[k]);
    for (int g = 0; g < groups; ++g) {
      const std::size_t at = first + static_cast<std::size_t>(g) * width;
      const Factor x = factor(load(columns[k].high + at));
      const Register product = x.value * high.value;
      Register error = product_error(x, high, product) + x.value * low;
      if (columns[k].low) error = error + load(columns[k].low + at) * high.value;
      rest[g] = rest[g] + (add_exactly(sum[g], product) + error);
    }
  }
  for (int g = 0; g < groups; ++g) {
    const std::size_t at = first + static_cast<std::size_t>(g) * width;
    const Register high = sum[g] + rest[g];
    store(out_high + at, high);
    if (out_low) store(out_low + at, rest[g] - (high - sum[g]));
  }
}

void combine(std::size_t rows, BlockColumn start, std::size_t count, const BlockColumn* columns,
             const double* weights_high, const double* weights_low, double* out_high, double* out_low) {
  constexpr int groups = width == lanes ? 4 : 2;
  std::size_t first = 0;
  for (; first + groups * width <= rows; first += groups * width)
    combine_groups<groups>(start, first, count, columns, weights_high, weights_low, out_high, out_low);
  for (; first < rows; first += width)
    combine_groups<1>(start, first, count, columns, weights_high, weights_low, out_high, out_low);
}

template <int groups>
UNPLY_INLINE void combine_plain_groups(const double* const* starts, std::size_t first, std::size_t count,
                                       const double* const* columns, const double* weights,
                                       double* const* out) {
  constexpr int outputs = static_cast<int>(combined_at_once);
  Register sum[outputs][groups];
  for (int c = 0; c < outputs; ++c)
    for (int g = 0; g < groups; ++g)
      sum[c][g] = load(starts[c] + first + static_cast<std::size_t>(g) * width);
  for (std::size_t k = 0; k < count; ++k) {
    Register x[groups];
    for (int g = 0; g < groups; ++g) x[g] = load(columns[k] + first + static_cast<std::size_t>(g) * width);
    for (int c = 0; c < outputs; ++c) {
      const Register weight = all(weights[k * combined_at_once + static_cast<std::size_t>(c)]);
      for (int g = 0; g < groups; ++g) sum[c][g] = sum[c][g] + weight * x[g];
    }
  }
  for (int c = 0; c < outputs; ++c)
    for (int g = 0; g < groups; ++g) store(out[c] + first + static_cast<std::size_t>(g) * width, sum[c][g]);
}

void combine_plain(std::size_t rows, const double* const* starts, std::size_t count,
                   const double* const* columns, const double* weights, double* const* out) {
  constexpr int groups = width == lanes ? 3 : 2;
  std::size_t first = 0;
  for (; first + groups * width <= rows; first += groups * width)
    combine_plain_groups<groups>(starts, first, count, columns, weights, out);
  for (; first < rows; first += width) combine_plain_groups<1>(starts, first, count, columns, weights, out);
}

UNPLY_INLINE void add_to(LaneSum& sum, std::size_t lane, Register value, Register rest) {
  Register high = load(sum.high + lane);
  const Register low = load(sum.low + lane) + (add_exactly(high, value) + rest);
  store(sum.high + lane, high);
  store(sum.low + lane, low);
}

// Products of `down` columns from i on with `across` columns from j on; on the diagonal i = j, each pair
// once.
template <int down, int across, bool diagonal>
UNPLY_INLINE void cross_tile(std::size_t rows, std::size_t i, std::size_t j, const double* const* columns,
                             LaneSum* sums) {
  for (std::size_t lane = 0; lane < lanes; lane += width) {
    Register sum[down][across];
    for (int a = 0; a < down; ++a)
      for (int b = 0; b < across; ++b) sum[a][b] = Register{};
    for (std::size_t row = lane; row < rows; row += lanes) {
      Register x[down], y[across];
      for (int a = 0; a < down; ++a) x[a] = load(columns[i + static_cast<std::size_t>(a)] + row);
      for (int b = 0; b < across; ++b)
        y[b] = diagonal ? x[b] : load(columns[j + static_cast<std::size_t>(b)] + row);
      for (int a = 0; a < down; ++a)
        for (int b = diagonal ? a : 0; b < across; ++b) sum[a][b] = sum[a][b] + x[a] * y[b];
    }
    for (int a = 0; a < down; ++a)
      for (int b = diagonal ? a : 0; b < across; ++b)
        add_to(sums[pair_index(i + static_cast<std::size_t>(a), j + static_cast<std::size_t>(b))], lane,
               sum[a][b], Register{});
  }
}

// The same for a last tile that is narrower than `tile`.
template <int down, int across, bool diagonal>
void cross_narrow(std::size_t rows, std::size_t i, std::size_t j, std::size_t wide,
                  const double* const* columns, LaneSum* sums) {
  if constexpr (across > 1) {
    if (wide < across)
      return cross_narrow < diagonal ? across - 1 : down, across - 1,
             diagonal > (rows, i, j, wide, columns, sums);
  }
  cross_tile<down, across, diagonal>(rows, i, j, columns, sums);
}

void cross_products(std::size_t rows, std::size_t count, const double* const* columns, LaneSum* sums) {
  for (std::size_t j = 0; j < count; j += tile) {
    const std::size_t wide = count - j < tile ? count - j : tile;
    for (std::size_t i = 0; i < j; i += tile)
      cross_narrow<tile, tile, false>(rows, i, j, wide, columns, sums);
    cross_narrow<tile, tile, true>(rows, j, j, wide, columns, sums);
  }
}

alignas(64) const double zeros[block_rows] = {};

template <int across, bool lows>
UNPLY_INLINE void cross_doubled_tile(std::size_t rows, BlockColumn a, const BlockColumn* columns,
                                     LaneSum* sums) {
  const double* const a_low = a.low ? a.low : zeros;
  const double* b_low[across];
  for (int b = 0; b < across; ++b) b_low[b] = columns[b].low ? columns[b].low : zeros;
  for (std::size_t lane = 0; lane < lanes; lane += width) {
    Register sum[across], rest[across];
    for (int b = 0; b < across; ++b) sum[b] = rest[b] = Register{};
    for (std::size_t row = lane; row < rows; row += lanes) {
      const Factor x = factor(load(a.high + row));
      for (int b = 0; b < across; ++b) {
        const Factor y = factor(load(columns[b].high + row));
        const Register product = x.value * y.value;
        Register error = product_error(x, y, product);
        if (lows) error = error + (x.value * load(b_low[b] + row) + load(a_low + row) * y.value);
        rest[b] = rest[b] + (add_exactly(sum[b], product) + error);
      }
    }
    for (int b = 0; b < across; ++b) add_to(sums[b], lane, sum[b], rest[b]);
  }
}

template <bool lows>
void cross_doubled(std::size_t rows, BlockColumn a, std::size_t count, const BlockColumn* columns,
                   LaneSum* sums) {
  std::size_t k = 0;
  for (; k + doubled_tile <= count; k += doubled_tile)
    cross_doubled_tile<doubled_tile, lows>(rows, a, columns + k, sums + k);
  for (; k < count; ++k) cross_doubled_tile<1, lows>(rows, a, columns + k, sums + k);
}

void cross_products_doubled(std::size_t rows, BlockColumn a, std::size_t count, const BlockColumn* columns,
                            LaneSum* sums) {
  bool lows = a.low != nullptr;
  for (std::size_t k = 0; k < count; ++k) lows = lows || columns[k].low != nullptr;
  lows ? cross_doubled<true>(rows, a, count, columns, sums)
       : cross_doubled<false>(rows, a, count, columns, sums);
}

void subtract_multiple(std::size_t count, double factor_high, double factor_low, const double* x_high,
                       const double* x_low, double* y_high, double* y_low) {
  const Factor high = factor(all(-factor_high));
  const Register low = all(-factor_low);
  for (std::size_t i = 0; i < count; i += width) {
    const Factor x = factor(load(x_high + i));
    const Register product = x.value * high.value;
    const Register error = product_error(x, high, product) + (x.value * low + load(x_low + i) * high.value);
    Register sum = load(y_high + i);
    const Register rest = add_exactly(sum, product) + (load(y_low + i) + error);
    const Register total = sum + rest;
    store(y_high + i, total);
    store(y_low + i, rest - (total - sum));
  }
}

}  // namespace

const Kernels kernels = {UNPLY_KERNEL_NAME, shift,          combine,
                         combine_plain,     cross_products, cross_products_doubled,
                         subtract_multiple};

}  // namespace UNPLY_KERNEL_LEVEL
}  // namespace unply::kernel
