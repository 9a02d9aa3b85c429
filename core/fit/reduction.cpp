#include "core/fit/reduction.hpp"

#include <algorithm>
#include <cmath>
#include <cstring>
#include <limits>
#include <new>
#include <string>
#include <utility>

#include "core/base/error.hpp"

namespace unply {

using kernel::BlockColumn;
using kernel::lanes;
using kernel::LaneSum;
using kernel::pair_count;
using kernel::pair_index;

namespace {

constexpr std::align_val_t alignment{64};
constexpr std::size_t run_rows = 64;  // rows of one run of a sample
constexpr std::size_t scaling_rows = 8 * run_rows;
constexpr double far_from_zero = 4;  // |mean| / sd from which a column is shifted

std::size_t whole_lanes(std::size_t count) { return (count + lanes - 1) / lanes * lanes; }

/// Exponent e with |value| < 2^e, kept where 2^-e is an ordinary double.
int exponent_of(double value) {
  int exponent = 0;
  if (value != 0) std::frexp(value, &exponent);
  return std::clamp(exponent, -1000, 1022);
}

[[noreturn]] void out_of_range(std::size_t column) {
  throw Error(ErrorCode::value_out_of_range, {{FactId::column, std::to_string(column + 1)},
                                              {FactId::position, static_cast<double>(column + 1)}});
}

/// Shift of one column from the rows of a sample. Zero where nothing is lost without: then every value stays
/// exact.
double shift_of(const double* high, std::size_t count, double scale) {
  double mean = 0, squares = 0;
  for (std::size_t i = 0; i < count; ++i) mean += high[i] * scale / static_cast<double>(count);
  double largest = high[0] * scale, smallest = largest;
  for (std::size_t i = 0; i < count; ++i) {
    const double value = high[i] * scale;
    squares += (value - mean) * (value - mean);
    largest = std::max(largest, value);
    smallest = std::min(smallest, value);
  }
  if (largest == smallest) return largest;
  const double sd = std::sqrt(squares / static_cast<double>(count));
  if (!(std::abs(mean) > far_from_zero * sd)) return 0;
  // A shift of few digits leaves most differences exact.
  const int grain = exponent_of(sd);
  return std::ldexp(std::nearbyint(std::ldexp(mean, -grain)), grain);
}

}  // namespace

AlignedDoubles::AlignedDoubles(std::size_t count)
    : size_(count),
      data_(count == 0 ? nullptr : static_cast<double*>(::operator new(count * sizeof(double), alignment))) {}
AlignedDoubles::~AlignedDoubles() {
  if (data_) ::operator delete(data_, alignment);
}
AlignedDoubles::AlignedDoubles(const AlignedDoubles& other) : AlignedDoubles(other.size_) {
  if (size_ > 0) std::memcpy(data_, other.data_, size_ * sizeof(double));
}
AlignedDoubles::AlignedDoubles(AlignedDoubles&& other) noexcept
    : size_(std::exchange(other.size_, 0)), data_(std::exchange(other.data_, nullptr)) {}
AlignedDoubles& AlignedDoubles::operator=(AlignedDoubles other) noexcept {
  std::swap(size_, other.size_);
  std::swap(data_, other.data_);
  return *this;
}

DoubledMatrix::DoubledMatrix(std::size_t size)
    : size_(size), stride_(whole_lanes(size)), values_(2 * size * whole_lanes(size)) {
  std::fill_n(values_.data(), values_.size(), 0.0);
}

DoubledMatrix DoubledMatrix::identity(std::size_t size) {
  DoubledMatrix result(size);
  for (std::size_t i = 0; i < size; ++i) result.set(i, i, 1.0);
  return result;
}

void DoubledMatrix::subtract(std::size_t i, const DoubleDouble& factor, const DoubledMatrix& other,
                             std::size_t j, std::size_t first, std::size_t last) {
  if (first >= last) return;
  const std::size_t from = first / lanes * lanes, count = whole_lanes(last) - from;
  kernel::chosen().subtract_multiple(count, factor.high, factor.low, other.high(j) + from,
                                     other.low(j) + from, high(i) + from, low(i) + from);
}

std::size_t rows_of_a_block(std::size_t variables) {
  return variables <= 24   ? kernel::block_rows
         : variables <= 64 ? kernel::block_rows / 2
                           : kernel::block_rows / 4;
}

RowChoice RowChoice::all(const RowSource& rows) {
  RowChoice choice;
  choice.total = rows.rows();
  return choice;
}

RowChoice RowChoice::spread(const RowSource& rows, std::size_t wanted) {
  const std::size_t n = rows.rows(), runs = std::max<std::size_t>(1, wanted / run_rows);
  if (runs * run_rows >= n) return all(rows);
  RowChoice choice;
  choice.run = run_rows;
  choice.total = runs * run_rows;
  for (std::size_t k = 0; k < runs; ++k)
    choice.starts.push_back(
        runs == 1 ? 0
                  : static_cast<std::size_t>(static_cast<double>(n - run_rows) * static_cast<double>(k) /
                                             static_cast<double>(runs - 1)));
  return choice;
}

ColumnScaling scaling_from_sample(const RowSource& rows, bool intercept, std::vector<bool>& unseen) {
  const std::size_t width = rows.columns() + rows.has_response(), n = rows.rows();
  const std::size_t stride = whole_lanes(std::min(n, scaling_rows));
  std::vector<double> high(width * stride), low(width * stride);
  const RowChoice choice = RowChoice::spread(rows, scaling_rows);
  if (choice.run == 0) {
    rows.fill(0, n, stride, high.data(), low.data());
  } else {
    for (std::size_t k = 0; k < choice.starts.size(); ++k)
      rows.fill(choice.starts[k], choice.run, stride, high.data() + k * choice.run,
                low.data() + k * choice.run);
  }
  ColumnScaling scaling;
  unseen.assign(width, false);
  for (std::size_t j = 0; j < width; ++j) {
    const double* column = high.data() + j * stride;
    double largest = 0;
    for (std::size_t i = 0; i < choice.total; ++i) {
      if (!std::isfinite(column[i])) out_of_range(j);
      largest = std::max(largest, std::abs(column[i]));
    }
    unseen[j] = largest == 0;
    scaling.exponent.push_back(exponent_of(largest));
    scaling.shift.push_back(intercept ? shift_of(column, choice.total, std::ldexp(1.0, -scaling.exponent[j]))
                                      : 0);
  }
  return scaling;
}

ColumnScaling scaling_from_all(const RowSource& rows, bool intercept) {
  const std::size_t width = rows.columns() + rows.has_response(), n = rows.rows();
  const std::size_t stride = rows_of_a_block(width);
  std::vector<double> high(width * stride), low(width * stride), largest(width, 0.0);
  for (std::size_t first = 0; first < n; first += stride) {
    const std::size_t count = std::min(stride, n - first);
    rows.fill(first, count, stride, high.data(), low.data());
    for (std::size_t j = 0; j < width; ++j)
      for (std::size_t i = 0; i < count; ++i) {
        const double value = std::abs(high[j * stride + i]);
        if (!std::isfinite(value)) out_of_range(j);
        largest[j] = std::max(largest[j], value);
      }
  }
  std::vector<bool> unseen;
  const ColumnScaling sampled = scaling_from_sample(rows, intercept, unseen);
  ColumnScaling scaling;
  for (std::size_t j = 0; j < width; ++j) {
    scaling.exponent.push_back(exponent_of(largest[j]));
    scaling.shift.push_back(std::ldexp(sampled.shift[j], sampled.exponent[j] - scaling.exponent[j]));
  }
  return scaling;
}

BlockReader::BlockReader(const RowSource& rows, bool intercept, const ColumnScaling& scaling,
                         const RowChoice& choice)
    : rows_(rows),
      scaling_(scaling),
      choice_(choice),
      intercept_(intercept),
      width_(rows.columns() + rows.has_response()),
      stride_(std::min(rows_of_a_block(width_ + intercept), whole_lanes(choice.total))),
      high_(width_ * stride_),
      low_(width_ * stride_),
      ones_(stride_),
      columns_(width_ + intercept) {
  for (std::size_t j = 0; j < width_; ++j) has_low_.push_back(j < rows.columns() && rows.has_low(j));
  std::fill_n(ones_.data(), stride_, 1.0);
}

bool BlockReader::next() {
  double* const high = high_.data();
  double* const low = low_.data();
  if (choice_.run == 0) {
    if (next_ >= choice_.total) return false;
    first_ = next_;
    count_ = std::min(stride_, choice_.total - first_);
    rows_.fill(first_, count_, stride_, high, low);
    next_ += count_;
  } else {
    if (next_ >= choice_.starts.size()) return false;
    first_ = choice_.starts[next_];
    count_ = 0;
    for (; next_ < choice_.starts.size() && count_ + choice_.run <= stride_; count_ += choice_.run)
      rows_.fill(choice_.starts[next_++], choice_.run, stride_, high + count_, low + count_);
  }
  padded_ = whole_lanes(count_);
  const kernel::Kernels& kernels = kernel::chosen();
  const std::size_t filling = padded_ - count_;
  for (std::size_t j = 0; j < width_; ++j) {
    double* const column = high + j * stride_;
    double* const rest = low + j * stride_;
    std::fill_n(column + count_, filling, 0.0);
    std::fill_n(rest + count_, filling, 0.0);
    const bool lows = kernels.shift(padded_, std::ldexp(1.0, -scaling_.exponent[j]), scaling_.shift[j],
                                    has_low_[j], column, rest);
    std::fill_n(column + count_, filling, 0.0);
    std::fill_n(rest + count_, filling, 0.0);
    columns_[j + intercept_] = {column, lows ? rest : nullptr};
  }
  if (intercept_) {
    std::fill_n(ones_.data() + count_, filling, 0.0);
    columns_[0] = {ones_.data(), nullptr};
  }
  return true;
}

Combiner::Combiner(const DoubledMatrix& weights, const std::vector<Forming>& forming, bool keep_low,
                   std::size_t stride)
    : keep_low_(keep_low),
      stride_(stride),
      forming_(forming),
      high_(weights.size() * stride),
      low_(keep_low ? weights.size() * stride : 0),
      spare_(stride),
      columns_(weights.size()) {
  for (std::size_t i = 0; i < weights.size(); ++i) {
    if (forming[i] == Forming::doubled) {
      Doubled combination{i, {}, {}, {}};
      for (std::size_t k = 0; k < i; ++k) {
        if (weights.high(i)[k] == 0) continue;
        combination.on.push_back(k);
        combination.high.push_back(weights.high(i)[k]);
        combination.low.push_back(weights.low(i)[k]);
      }
      doubled_.push_back(combination);
    } else if (forming[i] == Forming::plain) {
      if (plain_.empty() || plain_.back().count == kernel::combined_at_once) plain_.push_back({{}, 0, 0, {}});
      Plain& group = plain_.back();
      group.variables[group.count++] = i;
      group.depth = i;
    }
  }
  for (Plain& group : plain_) {
    group.weights.assign(group.depth * kernel::combined_at_once, 0.0);
    for (std::size_t c = 0; c < group.count; ++c)
      for (std::size_t k = 0; k < group.variables[c]; ++k)
        group.weights[k * kernel::combined_at_once + c] = weights.high(group.variables[c])[k];
  }
}

void Combiner::form(const BlockReader& block) {
  const kernel::Kernels& kernels = kernel::chosen();
  const std::vector<BlockColumn>& from = block.columns();
  for (std::size_t i = 0; i < columns_.size(); ++i)
    columns_[i] = {forming_[i] == Forming::as_it_stands ? from[i].high : high_.data() + i * stride_,
                   keep_low_ && forming_[i] == Forming::as_it_stands ? from[i].low : nullptr};
  for (const Doubled& combination : doubled_) {
    const std::size_t i = combination.variable;
    gathered_.clear();
    for (std::size_t k : combination.on) gathered_.push_back(from[k]);
    double* const low = keep_low_ ? low_.data() + i * stride_ : nullptr;
    kernels.combine(block.padded(), from[i], gathered_.size(), gathered_.data(), combination.high.data(),
                    combination.low.data(), high_.data() + i * stride_, low);
    columns_[i].low = low;
  }
  for (const Plain& group : plain_) {
    gathered_plain_.clear();
    for (std::size_t k = 0; k < group.depth; ++k) gathered_plain_.push_back(from[k].high);
    const double* starts[kernel::combined_at_once];
    double* out[kernel::combined_at_once];
    for (std::size_t c = 0; c < kernel::combined_at_once; ++c) {
      const bool used = c < group.count;
      starts[c] = from[group.variables[used ? c : 0]].high;
      out[c] = used ? high_.data() + group.variables[c] * stride_ : spare_.data();
    }
    kernels.combine_plain(block.padded(), starts, group.depth, gathered_plain_.data(), group.weights.data(),
                          out);
  }
}

DoubledMatrix cross_products(const RowSource& rows, bool intercept, const ColumnScaling& scaling,
                             const RowChoice& choice, const DoubledMatrix& weights,
                             const std::vector<Forming>& forming, bool exact) {
  const std::size_t variables = weights.size();
  const std::size_t plain = exact ? 0 : variables - rows.has_response();
  BlockReader reader(rows, intercept, scaling, choice);
  Combiner combiner(weights, forming, exact, reader.stride());
  AlignedDoubles memory(pair_count(variables) * sizeof(LaneSum) / sizeof(double));
  std::fill_n(memory.data(), memory.size(), 0.0);
  LaneSum* const sums = reinterpret_cast<LaneSum*>(memory.data());
  std::vector<const double*> high(variables);
  const kernel::Kernels& kernels = kernel::chosen();
  while (reader.next()) {
    combiner.form(reader);
    const std::vector<BlockColumn>& columns = combiner.columns();
    for (std::size_t i = 0; i < plain; ++i) high[i] = columns[i].high;
    if (plain > 0) kernels.cross_products(reader.padded(), plain, high.data(), sums);
    for (std::size_t j = plain; j < variables; ++j)
      kernels.cross_products_doubled(reader.padded(), columns[j], j + 1, columns.data(),
                                     sums + pair_index(0, j));
  }
  DoubledMatrix result(variables);
  for (std::size_t j = 0; j < variables; ++j)
    for (std::size_t i = 0; i <= j; ++i) {
      const LaneSum& sum = sums[pair_index(i, j)];
      DoubleDouble total;
      for (std::size_t lane = 0; lane < lanes; ++lane)
        total += DoubleDouble(sum.high[lane]) + DoubleDouble(sum.low[lane]);
      result.set(i, j, total);
      result.set(j, i, total);
    }
  return result;
}

}  // namespace unply
