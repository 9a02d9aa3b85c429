#include "core/diagnose/recording_precision.hpp"

#include <Eigen/QR>
#include <cmath>
#include <limits>

#include "core/base/random.hpp"
#include "core/base/tolerance.hpp"

namespace unply {
namespace {

using Eigen::ArrayXd;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

constexpr double unknown = std::numeric_limits<double>::quiet_NaN();
constexpr std::size_t block_rows = 4096;

Index index(std::size_t i) { return static_cast<Index>(i); }

/// One column of the design as a product: powers of number variables, within one cell of its categories.
struct Formation {
  std::vector<TermCoding::Power> numbers;
  std::vector<std::pair<std::size_t, double>> cell;  // category variable, level
};

std::vector<Formation> formations_of(const Coding& coding) {
  std::vector<Formation> columns;
  for (const TermCoding& term : coding.terms) {
    for (std::size_t j = 0; j < term.columns; ++j) {
      Formation column;
      column.numbers = term.numbers;
      std::size_t cell = j;
      for (std::size_t c = term.categories.size(); c-- > 0;) {  // the last category's levels change fastest
        const std::size_t variable = term.categories[c],
                          others = coding.variables[variable].levels.size() - 1;
        column.cell.emplace_back(variable, static_cast<double>(cell % others + 1));
        cell /= others;
      }
      columns.push_back(std::move(column));
    }
  }
  return columns;
}

/// Values of every variable over some rows: numbers less their centre, levels as they are.
using Variables = std::vector<ArrayXd>;

Variables read_variables(const CodedRows& rows, std::size_t first, std::size_t count) {
  Variables variables;
  for (std::size_t v = 0; v < rows.coding().variables.size(); ++v) {
    ArrayXd values(index(count));
    rows.fill_variable(v, first, count, values.data());
    variables.push_back(values - rows.coding().variables[v].centre);
  }
  return variables;
}

ArrayXd inside_cell(const Formation& column, const Variables& variables, Index count) {
  ArrayXd inside = ArrayXd::Ones(count);
  for (const auto& [variable, level] : column.cell) {
    inside *= (variables[variable] == level).cast<double>();
  }
  return inside;
}

ArrayXd value_of(const Formation& column, const Variables& variables, Index count) {
  ArrayXd value = inside_cell(column, variables, count);
  for (const TermCoding::Power& factor : column.numbers) {
    for (int k = 0; k < factor.power; ++k) value *= variables[factor.variable];
  }
  return value;
}

/// Derivative of a column by one of its variables.
ArrayXd slope_of(const Formation& column, std::size_t by, const Variables& variables, Index count) {
  ArrayXd slope = inside_cell(column, variables, count);
  for (const TermCoding::Power& factor : column.numbers) {
    const int power = factor.variable == by ? factor.power - 1 : factor.power;
    for (int k = 0; k < power; ++k) slope *= variables[factor.variable];
    if (factor.variable == by) slope *= factor.power;
  }
  return slope;
}

bool is_plain(const Formation& column) {
  return column.cell.empty() && column.numbers.size() == 1 && column.numbers[0].power == 1;
}

/// The units of what was recorded.
struct Recorded {
  std::vector<double> of_variable;
  double of_response = 0;
  bool anything() const {
    for (const double unit : of_variable) {
      if (unit > 0) return true;
    }
    return of_response > 0;
  }
};

Recorded read_units(const Design& design) {
  const CodedRows& rows = design.coded_rows();
  const std::size_t n = rows.rows(), width = rows.columns() + rows.has_response();
  Recorded recorded;
  ArrayXd values(index(block_rows));
  for (std::size_t v = 0; v < rows.coding().variables.size(); ++v) {
    PrintedDigits digits;
    for (std::size_t first = 0; first < n; first += block_rows) {
      const std::size_t count = std::min(block_rows, n - first);
      rows.fill_variable(v, first, count, values.data());
      for (std::size_t i = 0; i < count; ++i) digits.read(values[index(i)]);
    }
    recorded.of_variable.push_back(rows.coding().variables[v].category ? 0 : recorded_unit(digits));
  }
  if (!rows.has_response()) return recorded;
  PrintedDigits digits;
  std::vector<double> high(width * block_rows), low(width * block_rows);
  for (std::size_t first = 0; first < n; first += block_rows) {
    const std::size_t count = std::min(block_rows, n - first);
    rows.fill(first, count, block_rows, high.data(), low.data());
    for (std::size_t i = 0; i < count; ++i) digits.read(high[rows.columns() * block_rows + i]);
  }
  recorded.of_response = recorded_unit(digits);
  return recorded;
}

RecordingPrecision start(const Design& design, const LeastSquaresFit& fit, const Recorded& recorded) {
  RecordingPrecision result;
  result.response_unit = recorded.of_response;
  for (const Formation& column : formations_of(design.coded_rows().coding())) {
    result.unit.push_back(is_plain(column) ? recorded.of_variable[column.numbers[0].variable] : 0);
  }
  result.movement = VectorXd::Constant(index(fit.columns), unknown);
  result.against_standard_error = result.movement;
  for (std::size_t j = 0; j < fit.columns && fit.has_response; ++j) {
    if (fit.estimable[j]) result.movement[index(j)] = 0;
  }
  return result;
}

void compare_with_standard_errors(RecordingPrecision& result, const LeastSquaresFit& fit) {
  if (!fit.has_response) return;
  for (Index j = 0; j < result.movement.size(); ++j) {
    const double movement = result.movement[j];
    result.against_standard_error[j] = movement == 0 ? 0 : movement / fit.standard_errors[j];
  }
}

/// Coefficients of y on the columns of X, by orthogonal reduction of centred columns of unit length. Both
/// sides of a comparison come through here, so that its own rounding cancels.
VectorXd solve(MatrixXd x, VectorXd y, bool intercept) {
  if (intercept) {
    x.rowwise() -= x.colwise().mean().eval();
    y.array() -= y.mean();
  }
  const VectorXd lengths = x.colwise().norm();
  for (Index k = 0; k < x.cols(); ++k) x.col(k) /= lengths[k];
  return Eigen::HouseholderQR<MatrixXd>(x).solve(y).cwiseQuotient(lengths);
}

RecordingPrecision by_refits(const Design& design, const LeastSquaresFit& fit, const Recorded& recorded,
                             std::uint64_t seed, int refits) {
  RecordingPrecision result = start(design, fit, recorded);
  result.refits = refits;
  result.seed = seed;
  const Index n = index(fit.rows), r = index(fit.kept.size());
  const std::vector<Formation> formations = formations_of(design.coded_rows().coding());
  const Variables variables = read_variables(design.coded_rows(), 0, fit.rows);
  VectorXd response(n);
  {
    std::vector<double> high((fit.columns + 1) * fit.rows), low(high.size());
    design.fill(0, fit.rows, fit.rows, high.data(), low.data());
    for (Index i = 0; i < n; ++i) response[i] = high[fit.columns * fit.rows + static_cast<std::size_t>(i)];
  }
  const auto coefficients_at = [&](const Variables& at, const VectorXd& y) {
    MatrixXd x(n, r);
    for (Index k = 0; k < r; ++k) {
      x.col(k) = value_of(formations[fit.kept[static_cast<std::size_t>(k)]], at, n).matrix();
    }
    return solve(std::move(x), y, fit.intercept);
  };
  const VectorXd as_recorded = coefficients_at(variables, response);
  Random random(seed);
  VectorXd squares = VectorXd::Zero(r);
  for (int refit = 0; refit < refits; ++refit) {
    Variables moved = variables;
    for (std::size_t v = 0; v < moved.size(); ++v) {
      if (recorded.of_variable[v] == 0) continue;
      for (Index i = 0; i < n; ++i) moved[v][i] += (random.uniform() - 0.5) * recorded.of_variable[v];
    }
    VectorXd y = response;
    if (recorded.of_response > 0) {
      for (Index i = 0; i < n; ++i) y[i] += (random.uniform() - 0.5) * recorded.of_response;
    }
    squares += (coefficients_at(moved, y) - as_recorded).cwiseAbs2();
  }
  for (Index k = 0; k < r; ++k) {
    const std::size_t column = fit.kept[static_cast<std::size_t>(k)];
    if (fit.estimable[column]) result.movement[index(column)] = std::sqrt(squares[k] / refits);
  }
  compare_with_standard_errors(result, fit);
  return result;
}

/// Effects of one standard deviation of each kept column, in the solution with 0 for the columns not kept.
VectorXd effects_of(const Design& design, const LeastSquaresFit& fit, const MatrixXd& inverse_factor) {
  const Index r = index(fit.kept.size());
  VectorXd along = VectorXd::Zero(r);
  for_each_row_block(design, fit, [&](const RowBlock& block) {
    along +=
        block.orthonormal.rightCols(r).transpose() * (block.response.array() - fit.response_mean).matrix();
  });
  return inverse_factor * along;
}

RecordingPrecision in_closed_form(const Design& design, const LeastSquaresFit& fit,
                                  const Recorded& recorded) {
  RecordingPrecision result = start(design, fit, recorded);
  const Index r = index(fit.kept.size());
  const double n = static_cast<double>(fit.rows), one = fit.intercept ? 1 : 0;
  const MatrixXd inverse_factor =  // S^-1
      fit.correlation_factor.triangularView<Eigen::Upper>().solve(MatrixXd::Identity(r, r)) /
      std::sqrt(n - one);
  const VectorXd effects = effects_of(design, fit, inverse_factor);
  const std::vector<Formation> formations = formations_of(design.coded_rows().coding());

  // Of every variable that was recorded to some digit: its variance, and the kept columns that it moves.
  struct Mover {
    std::size_t variable;
    double variance;
    std::vector<Index> columns;
  };
  std::vector<Mover> movers;
  for (std::size_t v = 0; v < recorded.of_variable.size(); ++v) {
    if (recorded.of_variable[v] == 0) continue;
    Mover mover{v, recorded.of_variable[v] * recorded.of_variable[v] / 12, {}};
    for (Index k = 0; k < r; ++k) {
      for (const TermCoding::Power& factor : formations[fit.kept[static_cast<std::size_t>(k)]].numbers) {
        if (factor.variable == v) mover.columns.push_back(k);
      }
    }
    if (!mover.columns.empty()) movers.push_back(std::move(mover));
  }

  MatrixXd scatter = MatrixXd::Zero(r, r);   // sum q q' var(dy - b'dx)
  MatrixXd residual = MatrixXd::Zero(r, r);  // sum e^2 E dx dx'
  MatrixXd cross = MatrixXd::Zero(r, r);     // sum q e b' E dx dx'
  VectorXd pull = VectorXd::Zero(r);         // sum E dx dx' b
  for_each_row_block(design, fit, [&](const RowBlock& block) {
    const Index count = index(block.count);
    const Variables variables = read_variables(design.coded_rows(), block.first, block.count);
    const auto q = block.orthonormal.rightCols(r);
    VectorXd variance = VectorXd::Constant(count, recorded.of_response * recorded.of_response / 12);
    for (const Mover& mover : movers) {
      MatrixXd slopes(count, index(mover.columns.size()));  // dx by the variable, in standard deviations
      VectorXd pulled = VectorXd::Zero(count);              // b'dx
      for (std::size_t m = 0; m < mover.columns.size(); ++m) {
        const Index k = mover.columns[m];
        const std::size_t column = fit.kept[static_cast<std::size_t>(k)];
        slopes.col(index(m)) =
            slope_of(formations[column], mover.variable, variables, count).matrix() / fit.sd[index(column)];
        pulled += effects[k] * slopes.col(index(m));
      }
      variance += mover.variance * pulled.cwiseAbs2();
      const MatrixXd weighted = block.residuals.asDiagonal() * slopes;
      const MatrixXd gram = weighted.transpose() * weighted;
      const MatrixXd crossed = q.transpose() * pulled.asDiagonal() * weighted;
      const VectorXd drawn = slopes.transpose() * pulled;
      for (std::size_t a = 0; a < mover.columns.size(); ++a) {
        const Index k = mover.columns[a];
        for (std::size_t b = 0; b < mover.columns.size(); ++b) {
          residual(k, mover.columns[b]) += mover.variance * gram(index(a), index(b));
        }
        cross.col(k) += mover.variance * crossed.col(index(a));
        pull[k] += mover.variance * drawn[index(a)];
      }
    }
    scatter += q.transpose() * variance.asDiagonal() * q;
  });
  const MatrixXd bent = cross * inverse_factor;
  const MatrixXd inner =
      scatter + inverse_factor.transpose() * residual * inverse_factor - bent - bent.transpose();
  const VectorXd mean_change =
      -static_cast<double>(fit.residual_df) / n * (inverse_factor * (inverse_factor.transpose() * pull));
  for (Index k = 0; k < r; ++k) {
    const std::size_t column = fit.kept[static_cast<std::size_t>(k)];
    if (!fit.estimable[column]) continue;
    const double variance = inverse_factor.row(k).dot(inner * inverse_factor.row(k).transpose());
    result.movement[index(column)] =
        std::hypot(std::sqrt(std::max(0.0, variance)), mean_change[k]) / fit.sd[index(column)];
  }
  compare_with_standard_errors(result, fit);
  return result;
}

}  // namespace

double recorded_unit(const PrintedDigits& digits) {
  if (!digits.decimals()) return 0;
  if (*digits.decimals() > 0) return std::pow(10.0, -*digits.decimals());
  return digits.largest() >= tolerance::whole_numbers_exact ? 1 : 0;
}

RecordingPrecision recording_precision(const Design& design, const LeastSquaresFit& fit, std::uint64_t seed) {
  const Recorded recorded = read_units(design);
  if (!fit.has_response || !recorded.anything()) {
    RecordingPrecision result = start(design, fit, recorded);
    compare_with_standard_errors(result, fit);
    return result;
  }
  const double columns = static_cast<double>(fit.columns) + 1;
  if (static_cast<double>(fit.rows) * columns * columns > tolerance::recording_refit_work) {
    return in_closed_form(design, fit, recorded);
  }
  return by_refits(design, fit, recorded, seed, tolerance::recording_refits);
}

RecordingPrecision recording_by_refits(const Design& design, const LeastSquaresFit& fit, std::uint64_t seed,
                                       int refits) {
  return by_refits(design, fit, read_units(design), seed, refits);
}

RecordingPrecision recording_in_closed_form(const Design& design, const LeastSquaresFit& fit) {
  return in_closed_form(design, fit, read_units(design));
}

}  // namespace unply
