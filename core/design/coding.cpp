#include "core/design/coding.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstring>
#include <limits>
#include <unordered_map>

#include "core/base/double_double.hpp"
#include "core/base/error.hpp"
#include "core/base/names.hpp"
#include "core/base/tolerance.hpp"

namespace unply {
namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();

/// Rows handled at once where a term needs room for its factors: on the stack, in the first cache.
constexpr std::size_t chunk = 256;

std::size_t row_at(const std::vector<std::uint32_t>& rows, std::size_t i) {
  return rows.empty() ? i : rows[i];
}

bool needs_low(const TermCoding& term, const Coding& coding) {
  int degree = 0;
  bool centred = false;
  for (const TermCoding::Power& factor : term.numbers) {
    degree += factor.power;
    centred = centred || coding.variables[factor.variable].centre != 0;
  }
  return degree > 1 || centred;
}

}  // namespace

Labels read_labels(const Column& column, const std::vector<std::uint32_t>& rows, std::size_t count) {
  Labels labels;
  labels.of_row.resize(count);
  std::unordered_map<std::string, std::int32_t> by_name;
  const auto label_of = [&](const std::string& name) {
    const auto [found, is_new] = by_name.emplace(name, static_cast<std::int32_t>(labels.names.size()));
    if (is_new) labels.names.push_back(name);
    return found->second;
  };
  constexpr std::int32_t unread = -2;
  std::vector<std::int32_t> of_text(column.texts.size(), unread);
  std::unordered_map<std::uint64_t, std::int32_t> of_number;
  std::uint64_t last_bits = 0;
  std::int32_t last_label = unread;
  for (std::size_t i = 0; i < count; ++i) {
    const std::size_t row = row_at(rows, i);
    const std::int32_t code = column.codes.empty() ? -1 : column.codes[row];
    if (code >= 0) {
      std::int32_t& label = of_text[static_cast<std::size_t>(code)];
      if (label == unread) {
        const std::string_view name = trimmed(column.texts[static_cast<std::size_t>(code)]);
        label = name.empty() ? -1 : label_of(std::string(name));
      }
      labels.of_row[i] = label;
      continue;
    }
    const double number = column.numbers[row];
    if (std::isnan(number)) {
      labels.of_row[i] = -1;
      continue;
    }
    const std::uint64_t bits = std::bit_cast<std::uint64_t>(number);
    if (last_label == unread || bits != last_bits) {
      const auto [found, is_new] = of_number.emplace(bits, 0);
      if (is_new) found->second = label_of(plain_number(number));
      last_bits = bits;
      last_label = found->second;
    }
    labels.of_row[i] = last_label;
  }
  return labels;
}

CodedRows::CodedRows(std::shared_ptr<const Table> table, std::shared_ptr<const Coding> coding,
                     std::vector<std::size_t> columns, std::vector<std::vector<std::int32_t>> levels,
                     std::vector<std::uint32_t> rows, std::size_t count, std::ptrdiff_t response)
    : table_(std::move(table)),
      coding_(std::move(coding)),
      levels_(std::move(levels)),
      rows_(std::move(rows)),
      count_(count),
      response_(response < 0 ? nullptr : table_->columns[static_cast<std::size_t>(response)].numbers.data()) {
  const auto mark_incomplete = [&](std::size_t i) {
    if (incomplete_.empty()) incomplete_.assign(count_, 0);
    incomplete_[i] = 1;
  };
  for (std::size_t v = 0; v < columns.size(); ++v) {
    numbers_.push_back(table_->columns[columns[v]].numbers.data());
    if (coding_->variables[v].category) {
      for (std::size_t i = 0; i < count_; ++i)
        if (levels_[v][i] < 0) mark_incomplete(i);
    } else {
      const double* values = numbers_[v];
      bool complete = true;
      for (std::size_t i = 0; i < count_; ++i) complete &= !std::isnan(values[row_at(rows_, i)]);
      for (std::size_t i = 0; !complete && i < count_; ++i)
        if (std::isnan(values[row_at(rows_, i)])) mark_incomplete(i);
    }
  }
  has_low_.assign(coding_->columns, false);
  for (const TermCoding& term : coding_->terms)
    for (std::size_t j = 0; j < term.columns; ++j)
      has_low_[term.first_column + j] = needs_low(term, *coding_);
}

const double* CodedRows::numbers(const double* column, std::size_t first, std::size_t count,
                                 double* gathered) const {
  if (rows_.empty()) return column + first;
  for (std::size_t i = 0; i < count; ++i) gathered[i] = column[rows_[first + i]];
  return gathered;
}

void CodedRows::fill_variable(std::size_t variable, std::size_t first, std::size_t count, double* values) const {
  if (coding_->variables[variable].category) {
    for (std::size_t i = 0; i < count; ++i) values[i] = levels_[variable][first + i];
    return;
  }
  const double* const column = numbers_[variable];
  for (std::size_t i = 0; i < count; ++i) values[i] = column[row_at(rows_, first + i)];
}

/// Multiplies high + low by the powers, row by row; `from_one`: writes their product. At most one chunk of
/// rows.
void CodedRows::multiply(const std::vector<TermCoding::Power>& powers, bool from_one, std::size_t first,
                         std::size_t count, double* high, double* low) const {
  double gathered[chunk];
  for (const TermCoding::Power& factor : powers) {
    const double* const x = numbers(numbers_[factor.variable], first, count, gathered);
    const double centre = coding_->variables[factor.variable].centre;
    int times = factor.power;
    if (from_one) {
      for (std::size_t i = 0; i < count; ++i) {
        const DoubleDouble start = two_difference(x[i], centre);
        high[i] = start.high;
        low[i] = start.low;
      }
      from_one = false;
      --times;
    }
    for (; times > 0; --times) {
      for (std::size_t i = 0; i < count; ++i) {
        const DoubleDouble result = DoubleDouble(high[i], low[i]) * two_difference(x[i], centre);
        high[i] = result.high;
        low[i] = result.low;
      }
    }
  }
  if (from_one) {
    std::fill(high, high + count, 1.0);
    std::fill(low, low + count, 0.0);
  }
}

void CodedRows::fill(std::size_t first, std::size_t count, std::size_t stride, double* high,
                     double* low) const {
  const auto copy = [&](const double* from, double* to) {
    if (rows_.empty()) {
      std::memcpy(to, from + first, count * sizeof(double));
    } else {
      for (std::size_t i = 0; i < count; ++i) to[i] = from[rows_[first + i]];
    }
  };
  const auto clear = [&](double* to) { std::fill(to, to + count, 0.0); };
  for (const TermCoding& term : coding_->terms) {
    double* const h = high + term.first_column * stride;
    double* const l = low + term.first_column * stride;
    const bool with_low = has_low_[term.first_column];
    if (term.categories.empty() && !with_low) {
      copy(numbers_[term.numbers.front().variable], h);
      clear(l);
      continue;
    }
    if (!term.categories.empty()) {
      for (std::size_t j = 0; j < term.columns; ++j) {
        clear(h + j * stride);
        clear(l + j * stride);
      }
    }
    double chunk_high[chunk], chunk_low[chunk];
    for (std::size_t at = 0; at < count; at += chunk) {
      const std::size_t n = std::min(chunk, count - at);
      if (term.categories.empty()) {
        const bool starts = term.starts_from >= 0;
        if (starts) {
          const std::size_t from =
              coding_->terms[static_cast<std::size_t>(term.starts_from)].first_column * stride + at;
          std::memcpy(h + at, high + from, n * sizeof(double));
          std::memcpy(l + at, low + from, n * sizeof(double));
        }
        multiply(starts ? term.remaining : term.numbers, !starts, first + at, n, h + at, l + at);
        continue;
      }
      multiply(term.numbers, true, first + at, n, chunk_high, chunk_low);
      for (std::size_t i = 0; i < n; ++i) {
        std::size_t cell = 0;
        bool in_baseline = false;
        for (const std::size_t v : term.categories) {
          const std::int32_t level = levels_[v][first + at + i];
          in_baseline = in_baseline || level <= 0;
          cell = cell * (coding_->variables[v].levels.size() - 1) + static_cast<std::size_t>(level - 1);
        }
        if (in_baseline) continue;
        h[cell * stride + at + i] = chunk_high[i];
        l[cell * stride + at + i] = chunk_low[i];
      }
    }
  }
  if (response_ != nullptr) {
    copy(response_, high + coding_->columns * stride);
    clear(low + coding_->columns * stride);
  }
  if (!incomplete_.empty()) {
    for (std::size_t i = 0; i < count; ++i) {
      if (!incomplete_[first + i]) continue;
      for (std::size_t j = 0; j < coding_->columns; ++j) high[j * stride + i] = not_a_number;
    }
  }
}

void check_products(const Coding& coding, const std::vector<std::string>& names, const Table& table,
                    const std::vector<std::size_t>& columns, const std::vector<std::uint32_t>& rows,
                    std::size_t count) {
  std::vector<double> largest(coding.variables.size(), -1), smallest(coding.variables.size());
  const auto size_at = [&](std::size_t v, std::size_t i) {
    return std::abs(table.columns[columns[v]].numbers[row_at(rows, i)] - coding.variables[v].centre);
  };
  const double top = std::log2(tolerance::largest_product), bottom = std::log2(tolerance::smallest_product);
  for (std::size_t t = 0; t < coding.terms.size(); ++t) {
    const TermCoding& term = coding.terms[t];
    if (!needs_low(term, coding)) continue;
    const auto refuse = [&] { throw Error(ErrorCode::value_out_of_range, {{FactId::column, names[t]}}); };
    double highest = 0, lowest = 0;  // bounds on log2 of the product's size
    for (const TermCoding::Power& factor : term.numbers) {
      const std::size_t v = factor.variable;
      if (largest[v] < 0) {
        largest[v] = 0;
        smallest[v] = std::numeric_limits<double>::infinity();
        for (std::size_t i = 0; i < count; ++i) {
          const double size = size_at(v, i);
          if (size > largest[v]) largest[v] = size;
          if (size > 0 && size < smallest[v]) smallest[v] = size;
        }
      }
      if (largest[v] > tolerance::largest_product) refuse();
      if (largest[v] == 0) continue;  // the term is zero in every row
      highest += factor.power * std::log2(largest[v]);
      lowest += factor.power * std::log2(smallest[v]);
    }
    if (highest <= top && lowest >= bottom) continue;
    // The bounds mix rows; the rows themselves decide.
    double largest_row = -std::numeric_limits<double>::infinity();
    for (std::size_t i = 0; i < count; ++i) {
      double size = 0;
      for (const TermCoding::Power& factor : term.numbers)
        size += factor.power * std::log2(size_at(factor.variable, i));
      if (size > largest_row) largest_row = size;  // never for NaN
    }
    if (largest_row > top || (largest_row < bottom && std::isfinite(largest_row))) refuse();
  }
}

}  // namespace unply
