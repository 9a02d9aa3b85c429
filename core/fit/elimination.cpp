#include "core/fit/elimination.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/tolerance.hpp"

namespace unply {

Orthogonal Orthogonal::start(std::size_t variables) {
  Orthogonal result;
  result.weights = DoubledMatrix::identity(variables);
  result.coordinates = DoubledMatrix::identity(variables);
  result.squares.resize(variables);
  result.role.assign(variables, ColumnRole::unsettled);
  for (auto* values :
       {&result.norm, &result.shifted_norm, &result.scale, &result.growth, &result.relative_error})
    values->assign(variables, 0.0);
  return result;
}

void Orthogonal::reset(const std::vector<bool>& stand) {
  const std::size_t size = weights.size();
  DoubledMatrix inverse = DoubledMatrix::identity(size);
  for (std::size_t i = 0; i < size; ++i)
    for (std::size_t k = 0; k < i; ++k) {
      if (stand[i])
        weights.set(i, k, 0.0);
      else if (weights.high(i)[k] != 0)
        inverse.subtract(i, weights.at(i, k), inverse, k, 0, k + 1);
    }
  coordinates = inverse;
}

void eliminate(const DoubledMatrix& cross_products, const EliminationOptions& options,
               Orthogonal& orthogonal) {
  const std::size_t size = cross_products.size(), pivots = size - options.has_response;
  const double n = static_cast<double>(options.rows);
  const double root_n = std::sqrt(n);
  DoubledMatrix rest = cross_products;  // what is left of it: the upper triangle counts
  DoubledMatrix step = DoubledMatrix::identity(size), multiples = DoubledMatrix::identity(size);  // inverses
  DoubledMatrix weights(size), coordinates(size);
  std::vector<double> length(size);
  for (std::size_t i = 0; i < size; ++i) length[i] = std::sqrt(std::max(cross_products.high(i)[i], 0.0));

  orthogonal.settled = true;
  for (std::size_t k = 0; k < size; ++k) {
    double span = 0;
    for (std::size_t l = 0; l <= k; ++l) {
      span += std::abs(step.high(k)[l]) * length[l];
      if (step.high(k)[l] != 0) weights.subtract(k, -step.at(k, l), orthogonal.weights, l, 0, l + 1);
      if (orthogonal.coordinates.high(k)[l] != 0)
        coordinates.subtract(k, -orthogonal.coordinates.at(k, l), multiples, l, 0, l + 1);
    }
    const DoubleDouble own = rest.at(k, k);
    const double noise = options.unit * span * span;
    const double residual = std::sqrt(std::max(own.high, 0.0));

    // Sizes: of the column as it stands in the cells, and of the parts of its combination.
    double squares = own.high > 0 ? own.high : 0, constant_part = 0;
    for (std::size_t m = options.intercept ? 1 : 0; m < k; ++m)
      if (orthogonal.role[m] == ColumnRole::kept)
        squares += coordinates.high(k)[m] * coordinates.high(k)[m] * orthogonal.squares[m].high;
    double shifted = squares, unshifted = squares;
    if (options.intercept && k > 0) {
      const DoubleDouble mean = coordinates.at(k, 0);
      const double whole = (mean + DoubleDouble(options.scaling->shift[k - 1])).high;
      shifted += n * mean.high * mean.high;
      unshifted += n * whole * whole;
      DoubleDouble constant = weights.at(k, 0);
      for (std::size_t l = 1; l <= k; ++l)
        constant -= weights.at(k, l) * DoubleDouble(options.scaling->shift[l - 1]);
      constant_part = std::abs(constant.high) * root_n;
    }
    orthogonal.shifted_norm[k] = std::sqrt(shifted);
    orthogonal.norm[k] = std::sqrt(unshifted);
    double scale = constant_part, grown = 0;
    for (std::size_t l = 0; l <= k; ++l) {
      grown += std::abs(weights.high(k)[l]) * orthogonal.shifted_norm[l];
      if (!options.intercept || l > 0) scale += std::abs(weights.high(k)[l]) * orthogonal.norm[l];
    }
    orthogonal.scale[k] = scale;
    orthogonal.growth[k] = residual > 0 ? grown / residual : std::numeric_limits<double>::infinity();
    orthogonal.relative_error[k] = own.high > 0 ? noise / own.high : std::numeric_limits<double>::infinity();
    orthogonal.squares[k] = own.high > 0 ? own : DoubleDouble(0);

    const bool resolved = own.high > tolerance::resolved_pivot * noise;
    const double exact = tolerance::rank_relative * scale;
    ColumnRole& role = orthogonal.role[k];
    if (k ==
        pivots) {  // the response: its residual may vanish, and then nothing more can be learned about it
      const bool vanished = length[k] <= tolerance::vanished_residual * scale;
      role = vanished || orthogonal.relative_error[k] <= options.limit ? ColumnRole::kept
                                                                       : ColumnRole::unsettled;
      if (role != ColumnRole::kept) orthogonal.settled = false;
      continue;
    }
    if (options.dropped->at(k) || length[k] <= exact || (resolved && residual <= exact)) {
      role = ColumnRole::dependent;
      continue;
    }
    if (!resolved) {
      role = ColumnRole::unsettled;
      orthogonal.settled = false;
      continue;
    }
    role = ColumnRole::kept;
    if (orthogonal.relative_error[k] > options.limit) orthogonal.settled = false;
    for (std::size_t i = k + 1; i < size; ++i) {
      if (rest.high(k)[i] == 0) continue;
      const DoubleDouble factor = rest.at(k, i) / own;
      rest.subtract(i, factor, rest, k, i, size);
      step.subtract(i, factor, step, k, 0, k + 1);
      multiples.set(i, k, factor);
    }
  }
  orthogonal.weights = weights;
  orthogonal.coordinates = coordinates;
}

}  // namespace unply
