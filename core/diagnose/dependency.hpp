// Exact dependencies as equations a reader can check: `Mon + Tue + ... = 1`, `Temp_F = 32 + 1.8 * Temp_C`.
#pragma once

#include <string>
#include <vector>

#include "core/design/layout.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

struct DependencyEquation {
  std::vector<std::size_t> columns;   // involved, ascending
  std::vector<double> coefficients;   // sum coefficients[k] * X[columns[k]] = constant; small rationals where they hold
  double constant = 0;
  bool rounded = false;               // coefficients were replaced by small rationals, and the equation still holds
  bool is_constant = false;           // one column that never changes: `Width is constant`
  std::string text;                   // the equation; for a constant column its name only
};

/// One equation per dependency, in the fewest columns found. `rows` is read once, to confirm each rounded equation.
std::vector<DependencyEquation> dependency_equations(const RowSource& rows, const LeastSquaresFit& fit,
                                                     const Layout& layout);

}  // namespace unply
