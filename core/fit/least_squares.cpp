#include "core/fit/least_squares.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>

#include "core/base/error.hpp"
#include "core/base/tolerance.hpp"
#include "core/fit/elimination.hpp"
#include "core/fit/reduction.hpp"

namespace unply {

/// Variables as in reduction.hpp.
struct Basis {
  bool intercept = true, has_response = false;
  std::size_t rows = 0;
  ColumnScaling scaling;
  Orthogonal orthogonal;
  std::vector<std::size_t> kept;  // variables, the intercept's first
  struct Dependency {
    std::size_t variable;
    std::vector<std::size_t> on;      // variables; the intercept's is 0
    std::vector<DoubleDouble> parts;  // of the scaled columns, not shifted
  };
  std::vector<Dependency> dependencies;

  std::size_t first() const { return intercept ? 1 : 0; }
  double shift(std::size_t variable) const {
    return intercept && variable == 0 ? 0 : scaling.shift[variable - first()];
  }
  int exponent(std::size_t variable) const {
    return intercept && variable == 0 ? 0 : scaling.exponent[variable - first()];
  }
};

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();
constexpr double infinity = std::numeric_limits<double>::infinity();
constexpr int most_passes = 8;

Eigen::Index index(std::size_t i) { return static_cast<Eigen::Index>(i); }

[[noreturn]] void out_of_range(std::size_t column) {
  throw Error(ErrorCode::value_out_of_range, {{FactId::column, std::to_string(column + 1)},
                                              {FactId::position, static_cast<double>(column + 1)}});
}

[[noreturn]] void too_few(std::size_t rows, std::size_t needed, std::size_t coefficients) {
  throw Error(ErrorCode::too_few_rows, {{FactId::rows, static_cast<double>(rows)},
                                        {FactId::needed, static_cast<double>(needed)},
                                        {FactId::count, static_cast<double>(coefficients)}});
}

/// value * 2^exponent; a result beyond the range of a double is an error of the column's units.
double in_units(const DoubleDouble& value, int exponent, std::size_t column) {
  const double result = std::ldexp(value.high, exponent);
  if (!std::isfinite(result)) out_of_range(column);
  return result;
}

/// Throws where results of the order of value * 2^exponent, or a few digits of them, cannot be held by a
/// double.
void check_range(const DoubleDouble& value, int exponent, std::size_t column) {
  const double result = std::ldexp(std::abs(value.high), exponent);
  if (value.high != 0 && !(result > 0x1p-960 && result < 0x1p960)) out_of_range(column);
}

// ----------------------------------------------------------------------------------------------------------
// passes

/// Which way each combination is formed in the next pass. Combinations that lose few digits are given up:
/// their columns stand as they are, and what they share with earlier columns is left to the cross-products.
std::vector<Forming> plan(Orthogonal& orthogonal, std::size_t response, bool exact, double stands,
                          double plain) {
  const std::size_t size = orthogonal.weights.size();
  std::vector<bool> stand(size, false);
  for (std::size_t i = 0; i < size; ++i)
    stand[i] = i != response && orthogonal.role[i] == ColumnRole::kept && orthogonal.growth[i] <= stands;
  orthogonal.reset(stand);
  std::vector<Forming> forming(size, Forming::as_it_stands);
  for (std::size_t i = 0; i < size; ++i) {
    const double* const row = orthogonal.weights.high(i);
    if (std::all_of(row, row + i, [](double weight) { return weight == 0; })) continue;
    const bool few_digits =
        i != response && orthogonal.role[i] == ColumnRole::kept && orthogonal.growth[i] <= plain;
    forming[i] = !exact && few_digits ? Forming::plain : Forming::doubled;
  }
  return forming;
}

struct Problem {
  const RowSource& rows;
  bool intercept;
  ColumnScaling scaling;
  std::vector<bool> dropped;  // variables
  std::size_t variables;
  std::size_t response;  // variable; beyond all where there is none
};

enum class Outcome { done, rescale };

/// Passes over the chosen rows until everything is settled.
Outcome orthogonalise(const Problem& problem, const RowChoice& choice, bool exact, int passes,
                      std::vector<Forming> forming, Orthogonal& orthogonal) {
  EliminationOptions options;
  options.intercept = problem.intercept;
  options.has_response = problem.rows.has_response();
  options.rows = choice.total;
  options.unit = exact ? tolerance::doubled_cross_product : tolerance::plain_cross_product;
  options.limit = exact ? tolerance::doubled_limit : tolerance::plain_limit;
  options.scaling = &problem.scaling;
  options.dropped = &problem.dropped;
  for (int pass = 0; pass < passes; ++pass) {
    const DoubledMatrix products = cross_products(problem.rows, problem.intercept, problem.scaling, choice,
                                                  orthogonal.weights, forming, exact);
    for (std::size_t i = 0; i < problem.variables; ++i)
      if (!std::isfinite(products.high(i)[i])) return Outcome::rescale;
    eliminate(products, options, orthogonal);
    // A sample may have shown a column smaller than it is.
    for (std::size_t i = 0; i < problem.variables; ++i)
      if (forming[i] == Forming::plain && orthogonal.growth[i] > 4 * tolerance::plain_combination)
        orthogonal.settled = false;
    if (orthogonal.settled) break;
    if (pass + 1 < passes)
      forming = plan(orthogonal, problem.response, exact, exact ? tolerance::stands_exact : 0,
                     tolerance::plain_combination);
  }
  return Outcome::done;
}

/// True where a column that was seen to be zero so far has values after all, too large or too small for the
/// scale that was assumed, or may have: its sum of squares is 0 or near the ends of the range.
bool needs_rescaling(const Orthogonal& orthogonal, const std::vector<bool>& unseen, std::size_t first) {
  for (std::size_t j = 0; j < unseen.size(); ++j) {
    const double norm = orthogonal.shifted_norm[j + first];
    if (unseen[j] && !(norm > 0x1p-400 && norm < 0x1p400)) return true;
  }
  return false;
}

/// Columns that belong to the basis of one pass and turned out to be dependent in a later one: everything
/// after them has to be made orthogonal without them.
bool drop_late_dependents(const Orthogonal& orthogonal, Problem& problem) {
  bool any = false;
  for (std::size_t i = 0; i < problem.variables; ++i) {
    if (i == problem.response || orthogonal.role[i] == ColumnRole::kept) continue;
    for (std::size_t k = i + 1; k < problem.variables && !problem.dropped[i]; ++k)
      if (orthogonal.weights.high(k)[i] != 0) problem.dropped[i] = any = true;
  }
  return any;
}

/// Whether so few rows are reduced in doubled precision throughout; taller tables begin with a sample.
constexpr std::size_t small_work = std::size_t{1} << 22, most_sampled = 16384;
std::size_t rows_sampled(std::size_t variables) {
  return std::max(std::min(small_work / (variables * variables), most_sampled), 32 * variables);
}
bool exact_throughout(std::size_t rows, std::size_t variables) {
  return rows <= std::max(small_work / (variables * variables), rows_sampled(variables));
}

Orthogonal reduce(Problem& problem) {
  const RowSource& rows = problem.rows;
  const std::size_t q = problem.variables;
  const bool exact = exact_throughout(rows.rows(), q);
  std::vector<bool> unseen;
  problem.scaling = scaling_from_sample(rows, problem.intercept, unseen);
  for (bool rescaled = false;;) {
    Orthogonal orthogonal = Orthogonal::start(q);
    std::vector<Forming> forming(q, Forming::as_it_stands);
    Outcome outcome = Outcome::done;
    if (exact) {
      outcome = orthogonalise(problem, RowChoice::all(rows), true, most_passes, forming, orthogonal);
    } else {
      outcome =
          orthogonalise(problem, RowChoice::spread(rows, rows_sampled(q)), true, 3, forming, orthogonal);
      if (outcome == Outcome::done) {
        forming =
            plan(orthogonal, problem.response, false, tolerance::stands_plain, tolerance::plain_combination);
        outcome = orthogonalise(problem, RowChoice::all(rows), false, most_passes, forming, orthogonal);
      }
    }
    if (outcome == Outcome::done && (rescaled || !needs_rescaling(orthogonal, unseen, problem.intercept))) {
      if (!drop_late_dependents(orthogonal, problem)) return orthogonal;
      continue;
    }
    if (rescaled)
      throw Error(ErrorCode::internal, {{FactId::text, std::string("sums of squares out of range")}});
    rescaled = true;
    problem.scaling = scaling_from_all(rows, problem.intercept);
  }
}

// ---------------------------------------------------------------------------------------------------
// dependencies

/// Coordinate m of column `variable`, not shifted, in the orthonormal basis.
DoubleDouble coordinate(const Basis& basis, std::size_t variable, std::size_t m, const DoubleDouble& length) {
  DoubleDouble b = basis.orthogonal.coordinates.at(variable, m);
  if (basis.intercept && m == 0 && variable != 0) b += DoubleDouble(basis.shift(variable));
  return b * length;
}

/// The combination that makes up a dependent column. Parts that rounding the cells could have made are left
/// out, and the others are fitted again, where the result is still exact.
Basis::Dependency dependency_of(const Basis& basis, std::size_t variable, double& work_left,
                                double& relative_residual) {
  const Orthogonal& orthogonal = basis.orthogonal;
  std::vector<std::size_t> before;
  for (std::size_t m : basis.kept)
    if (m < variable) before.push_back(m);

  const auto raw_weight = [&](std::size_t row, std::size_t m) {
    DoubleDouble weight = orthogonal.weights.at(row, m);
    if (basis.intercept && m == 0)
      for (std::size_t l = 1; l <= row; ++l)
        weight -= orthogonal.weights.at(row, l) * DoubleDouble(basis.shift(l));
    return weight;
  };
  Basis::Dependency all{variable, {}, {}};
  Basis::Dependency few{variable, {}, {}};
  for (std::size_t m : before) {
    const DoubleDouble part = -raw_weight(variable, m);
    double square = 0;  // of the part's sensitivity to the column it makes up
    for (std::size_t k : before) {
      if (k < m) continue;
      const double weight = raw_weight(k, m).high;
      square += weight * weight / orthogonal.squares[k].high;
    }
    if (part.high != 0) {
      all.on.push_back(m);
      all.parts.push_back(part);
    }
    if (std::abs(part.high) > tolerance::rank_relative * orthogonal.scale[variable] * std::sqrt(square))
      few.on.push_back(m);
  }
  const double scale = orthogonal.scale[variable];
  relative_residual = scale > 0 ? std::sqrt(orthogonal.squares[variable].high) / scale : 0;
  if (few.on.size() == all.on.size()) return all;

  // Fit the few again, in the coordinates of the orthonormal basis.
  const std::size_t count = few.on.size(), depth = before.size();
  work_left -= static_cast<double>(count * count * depth);
  if (work_left < 0) return all;
  std::vector<DoubleDouble> lengths;
  for (std::size_t m : before) lengths.push_back(sqrt(orthogonal.squares[m]));
  const auto coordinates_of = [&](std::size_t column) {
    std::vector<DoubleDouble> values;
    for (std::size_t m = 0; m < depth; ++m)
      values.push_back(coordinate(basis, column, before[m], lengths[m]));
    return values;
  };
  const auto dot = [](const std::vector<DoubleDouble>& a, const std::vector<DoubleDouble>& b) {
    DoubleDouble sum;
    for (std::size_t m = 0; m < a.size(); ++m) sum += a[m] * b[m];
    return sum;
  };
  std::vector<std::vector<DoubleDouble>> unit;
  std::vector<std::vector<DoubleDouble>> triangle(count, std::vector<DoubleDouble>(count));
  std::vector<DoubleDouble> rest = coordinates_of(variable), along;
  const auto take_out = [&](std::vector<DoubleDouble>& from, std::size_t k) {
    const DoubleDouble share = dot(unit[k], from);
    for (std::size_t m = 0; m < depth; ++m) from[m] -= share * unit[k][m];
    return share;
  };
  for (std::size_t c = 0; c < count; ++c) {
    std::vector<DoubleDouble> column = coordinates_of(few.on[c]);
    for (std::size_t k = 0; k < c; ++k) triangle[k][c] = take_out(column, k);
    triangle[c][c] = sqrt(dot(column, column));
    for (DoubleDouble& value : column) value /= triangle[c][c];
    unit.push_back(column);
    along.push_back(take_out(rest, c));
  }
  few.parts.resize(count);
  for (std::size_t c = count; c-- > 0;) {
    DoubleDouble value = along[c];
    for (std::size_t k = c + 1; k < count; ++k) value -= triangle[c][k] * few.parts[k];
    few.parts[c] = value / triangle[c][c];
  }
  double size = orthogonal.norm[variable];
  for (std::size_t c = 0; c < count; ++c) size += std::abs(few.parts[c].high) * orthogonal.norm[few.on[c]];
  const double residual = std::sqrt(dot(rest, rest).high + orthogonal.squares[variable].high);
  if (!(residual <= tolerance::rank_relative * size)) return all;
  relative_residual = size > 0 ? residual / size : 0;
  return few;
}

void find_dependencies(Basis& basis, LeastSquaresFit& fit) {
  const std::size_t first = basis.first();
  double work_left = 2e7;  // of fitting again: about a second, however many dependencies there are
  for (std::size_t variable = first; variable < first + fit.columns; ++variable) {
    if (basis.orthogonal.role[variable] == ColumnRole::kept) continue;
    LinearDependency dependency;
    dependency.column = variable - first;
    basis.dependencies.push_back(dependency_of(basis, variable, work_left, dependency.relative_residual));
    const Basis::Dependency& found = basis.dependencies.back();
    fit.estimable[dependency.column] = false;
    for (std::size_t k = 0; k < found.on.size(); ++k) {
      const std::size_t other = found.on[k];
      const int unit = basis.exponent(variable) - basis.exponent(other);
      check_range(found.parts[k], unit, dependency.column);
      const double part = in_units(found.parts[k], unit, dependency.column);
      if (other < first) {
        dependency.constant = part;
        fit.intercept_estimable = false;
      } else {
        dependency.on.push_back(other - first);
        dependency.coefficients.push_back(part);
        fit.estimable[other - first] = false;
      }
    }
    fit.dependencies.push_back(dependency);
  }
}

// --------------------------------------------------------------------------------------------------------
// results

struct Lengths {
  std::vector<DoubleDouble> orthogonal;  // of e_i, per variable
  std::vector<DoubleDouble> centred;     // of the scaled column about its mean (about 0 without an intercept)
  std::vector<DoubleDouble> whole;       // of the scaled column as it stands in the cells
};

Lengths lengths_of(const Basis& basis) {
  const Orthogonal& orthogonal = basis.orthogonal;
  const std::size_t size = orthogonal.weights.size(), first = basis.first();
  Lengths lengths;
  for (std::size_t i = 0; i < size; ++i) {
    lengths.orthogonal.push_back(sqrt(orthogonal.squares[i]));
    DoubleDouble centred = orthogonal.squares[i];
    for (std::size_t m = first; m < i; ++m)
      if (orthogonal.role[m] == ColumnRole::kept)
        centred += orthogonal.coordinates.at(i, m) * orthogonal.coordinates.at(i, m) * orthogonal.squares[m];
    DoubleDouble whole = centred;
    if (basis.intercept && i > 0) {
      const DoubleDouble mean = orthogonal.coordinates.at(i, 0) + DoubleDouble(basis.shift(i));
      whole += mean * mean * orthogonal.squares[0];
    }
    lengths.centred.push_back(sqrt(centred));
    lengths.whole.push_back(sqrt(whole));
  }
  return lengths;
}

void fill_moments(const Basis& basis, const Lengths& lengths, LeastSquaresFit& fit) {
  const Eigen::Index p = index(fit.columns);
  const std::size_t first = basis.first();
  const Orthogonal& orthogonal = basis.orthogonal;
  fit.mean = Eigen::VectorXd::Zero(p);
  fit.sd.resize(p);
  const DoubleDouble divisor = sqrt(DoubleDouble(static_cast<double>(fit.rows - first)));
  Eigen::MatrixXd unit =
      Eigen::MatrixXd::Zero(index(orthogonal.weights.size()), p);  // columns: of unit length, centred
  for (std::size_t j = 0; j < fit.columns; ++j) {
    const std::size_t i = j + first;
    if (basis.intercept)
      fit.mean[index(j)] =
          in_units(orthogonal.coordinates.at(i, 0) + DoubleDouble(basis.shift(i)), basis.exponent(i), j);
    const bool constant =
        !fit.estimable[j] && std::any_of(fit.dependencies.begin(), fit.dependencies.end(),
                                         [&](const auto& d) { return d.column == j && d.on.empty(); });
    fit.sd[index(j)] = constant ? 0 : in_units(lengths.centred[i] / divisor, basis.exponent(i), j);
    for (std::size_t m = first; m <= i && !constant; ++m)
      if (orthogonal.role[m] == ColumnRole::kept || m == i)
        unit(index(m), index(j)) =
            (orthogonal.coordinates.at(i, m) * lengths.orthogonal[m] / lengths.centred[i]).high;
  }
  fit.correlation = unit.transpose() * unit;
  for (Eigen::Index j = 0; j < p; ++j) {
    fit.correlation(j, j) = 1;
    if (fit.sd[j] > 0) continue;
    fit.correlation.row(j).setConstant(not_a_number);
    fit.correlation.col(j).setConstant(not_a_number);
  }
}

void fill_factors(const Basis& basis, const Lengths& lengths, LeastSquaresFit& fit) {
  const std::size_t first = basis.first(), rank = basis.kept.size();
  const Orthogonal& orthogonal = basis.orthogonal;
  const Eigen::Index kept = index(rank - first);
  fit.uncentred_factor = fit.uncentred_factor_low = Eigen::MatrixXd::Zero(index(rank), index(rank));
  fit.correlation_factor = fit.correlation_factor_low = Eigen::MatrixXd::Zero(kept, kept);
  Eigen::MatrixXd inverse = Eigen::MatrixXd::Zero(kept, kept);  // of the correlation factor, transposed
  for (std::size_t c = 0; c < rank; ++c) {
    const std::size_t i = basis.kept[c];
    for (std::size_t m = 0; m <= c; ++m) {
      const std::size_t k = basis.kept[m];
      const DoubleDouble whole = coordinate(basis, i, k, lengths.orthogonal[k]) / lengths.whole[i];
      fit.uncentred_factor(index(m), index(c)) = whole.high;
      fit.uncentred_factor_low(index(m), index(c)) = whole.low;
      if (m < first || c < first) continue;
      const DoubleDouble centred =
          orthogonal.coordinates.at(i, k) * lengths.orthogonal[k] / lengths.centred[i];
      fit.correlation_factor(index(m - first), index(c - first)) = centred.high;
      fit.correlation_factor_low(index(m - first), index(c - first)) = centred.low;
      inverse(index(c - first), index(m - first)) =
          (orthogonal.weights.at(i, k) * lengths.centred[k] / lengths.orthogonal[i]).high;
    }
  }
  const Eigen::MatrixXd product = inverse.transpose() * inverse;
  fit.correlation_inverse = Eigen::MatrixXd::Constant(index(fit.columns), index(fit.columns), not_a_number);
  fit.variance_inflation = Eigen::VectorXd::Constant(index(fit.columns), infinity);
  for (std::size_t a = 0; a < fit.kept.size(); ++a) {
    if (!fit.estimable[fit.kept[a]]) continue;
    fit.variance_inflation[index(fit.kept[a])] = product(index(a), index(a));
    for (std::size_t b = 0; b < fit.kept.size(); ++b)
      if (fit.estimable[fit.kept[b]])
        fit.correlation_inverse(index(fit.kept[a]), index(fit.kept[b])) = product(index(a), index(b));
  }
}

void fill_response(const Basis& basis, const Lengths& lengths, LeastSquaresFit& fit) {
  const Orthogonal& orthogonal = basis.orthogonal;
  const std::size_t first = basis.first(), y = orthogonal.weights.size() - 1;
  const int unit = basis.exponent(y);
  const DoubleDouble total = lengths.centred[y];
  if (basis.intercept)
    fit.response_mean =
        in_units(orthogonal.coordinates.at(y, 0) + DoubleDouble(basis.shift(y)), unit, fit.columns);
  fit.response_sd =
      in_units(total / sqrt(DoubleDouble(static_cast<double>(fit.rows - first))), unit, fit.columns);
  fit.unexplained_share = (orthogonal.squares[y] / (total * total)).high;
  if (total.high == 0) fit.unexplained_share = not_a_number;
  const DoubleDouble s = sqrt(orthogonal.squares[y] / DoubleDouble(static_cast<double>(fit.residual_df)));
  fit.residual_sd = in_units(s, unit, fit.columns);
  fit.response_factor.resize(index(fit.kept.size()));
  for (std::size_t a = 0; a < fit.kept.size(); ++a) {
    const std::size_t k = fit.kept[a] + first;
    fit.response_factor[index(a)] = (orthogonal.coordinates.at(y, k) * lengths.orthogonal[k] / total).high;
  }

  const auto sensitivity = [&](const auto& weight_of) {  // root of the diagonal of (X'X)^-1, scaled
    DoubleDouble sum;
    for (std::size_t k : basis.kept) {
      const DoubleDouble part = weight_of(k);
      sum += part * part / orthogonal.squares[k];
    }
    return sqrt(sum);
  };
  fit.coefficients = fit.standard_errors = fit.standardised =
      Eigen::VectorXd::Constant(index(fit.columns), not_a_number);
  for (std::size_t j : fit.kept) {
    if (!fit.estimable[j]) continue;
    const std::size_t i = j + first;
    check_range(total / lengths.centred[i], unit - basis.exponent(i), j);
    const DoubleDouble estimate = -orthogonal.weights.at(y, i);
    const DoubleDouble root = sensitivity([&](std::size_t k) { return orthogonal.weights.at(k, i); });
    fit.coefficients[index(j)] = in_units(estimate, unit - basis.exponent(i), j);
    fit.standard_errors[index(j)] = in_units(s * root, unit - basis.exponent(i), j);
    fit.standardised[index(j)] = (estimate * lengths.centred[i] / total).high;
  }
  fit.intercept_estimate = fit.intercept_standard_error = not_a_number;
  if (fit.intercept && fit.intercept_estimable) {
    const auto constant_of = [&](std::size_t row) {
      DoubleDouble constant = orthogonal.weights.at(row, 0);
      for (std::size_t l = 1; l <= row; ++l)
        constant -= orthogonal.weights.at(row, l) * DoubleDouble(basis.shift(l));
      return constant;
    };
    fit.intercept_estimate = in_units(-constant_of(y), unit, fit.columns);
    fit.intercept_standard_error = in_units(s * sensitivity(constant_of), unit, fit.columns);
  }
}

/// Decimal digits that the rounding of the passes leaves. A small estimate beside a large standard error has
/// fewer digits than its neighbours: rounding moves an estimate by a share of its standard error.
double digits_of(const Basis& basis, const LeastSquaresFit& fit) {
  const Orthogonal& orthogonal = basis.orthogonal;
  const bool exact = exact_throughout(fit.rows, orthogonal.weights.size());
  double error = 0;
  for (std::size_t k : basis.kept) {
    const double forming = exact                                                  ? 0x1p-102
                           : orthogonal.growth[k] <= tolerance::plain_combination ? 0x1p-52
                                                                                  : 0x1p-102;
    error = std::max(error, orthogonal.relative_error[k] + forming * orthogonal.growth[k]);
  }
  double largest = error;
  if (fit.has_response) {
    const std::size_t y = orthogonal.weights.size() - 1;
    const double unit =
        exact ? tolerance::doubled_cross_product * std::sqrt(static_cast<double>(fit.rows)) : 0x1p-52;
    const double lost =
        std::isfinite(orthogonal.relative_error[y])
            ? std::sqrt(orthogonal.relative_error[y] /
                        (exact ? tolerance::doubled_cross_product : tolerance::plain_cross_product))
            : 1;
    const double of_errors = unit * lost;
    for (std::size_t j : fit.kept) {
      if (!fit.estimable[j] || fit.coefficients[index(j)] == 0) continue;
      const double ratio = std::abs(fit.standard_errors[index(j)] / fit.coefficients[index(j)]);
      largest = std::max(largest, of_errors * ratio);
    }
  }
  return -std::log10(largest + 0x1p-53);
}

}  // namespace

LeastSquaresFit fit_least_squares(const RowSource& rows, bool intercept) {
  const std::size_t n = rows.rows(), p = rows.columns(), first = intercept ? 1 : 0;
  const std::size_t variables = first + p + rows.has_response();
  if (n < 2) too_few(n, 2, p + first);
  LeastSquaresFit fit;
  fit.rows = n;
  fit.columns = p;
  fit.intercept = intercept;
  fit.has_response = rows.has_response();
  fit.estimable.assign(p, true);

  auto basis = std::make_shared<Basis>();
  basis->intercept = intercept;
  basis->has_response = fit.has_response;
  basis->rows = n;
  Problem problem{rows, intercept, {}, std::vector<bool>(variables, false), variables, first + p};
  basis->orthogonal = reduce(problem);
  basis->scaling = problem.scaling;
  for (std::size_t i = 0; i < first + p; ++i)
    if (basis->orthogonal.role[i] == ColumnRole::kept) {
      basis->kept.push_back(i);
      if (i >= first) fit.kept.push_back(i - first);
    }
  const std::size_t rank = basis->kept.size();
  if (fit.has_response && n <= rank) too_few(n, rank + 1, rank);
  fit.residual_df = static_cast<std::ptrdiff_t>(n) - static_cast<std::ptrdiff_t>(rank);

  find_dependencies(*basis, fit);
  const Lengths lengths = lengths_of(*basis);
  fill_moments(*basis, lengths, fit);
  fill_factors(*basis, lengths, fit);
  if (fit.has_response) fill_response(*basis, lengths, fit);
  fit.trusted_digits = digits_of(*basis, fit);
  fit.basis = basis;
  return fit;
}

void for_each_row_block(const RowSource& rows, const LeastSquaresFit& fit,
                        const std::function<void(const RowBlock&)>& visit) {
  if (!fit.basis) throw Error(ErrorCode::internal, {{FactId::text, std::string("a fit without rows")}});
  const Basis& basis = *fit.basis;
  const Orthogonal& orthogonal = basis.orthogonal;
  const std::size_t first = basis.first(), predictors = first + fit.columns;
  const kernel::Kernels& kernels = kernel::chosen();

  DoubledMatrix weights(predictors);
  std::vector<Forming> forming(predictors, Forming::as_it_stands);
  std::vector<double> unit_length;
  for (std::size_t k : basis.kept) {
    bool alone = true;
    for (std::size_t l = 0; l <= k; ++l) {
      weights.set(k, l, orthogonal.weights.at(k, l));
      alone = alone && (l == k || weights.high(k)[l] == 0);
    }
    if (!alone)
      forming[k] = orthogonal.growth[k] <= tolerance::plain_combination ? Forming::plain : Forming::doubled;
    unit_length.push_back(1 / std::sqrt(orthogonal.squares[k].high));
  }
  const RowChoice choice = RowChoice::all(rows);
  BlockReader reader(rows, basis.intercept, basis.scaling, choice);
  Combiner combiner(weights, forming, false, reader.stride());
  AlignedDoubles high(reader.stride()), low(reader.stride());
  const auto combine = [&](kernel::BlockColumn start, const std::vector<std::size_t>& on,
                           const std::vector<DoubleDouble>& factors) {
    std::vector<kernel::BlockColumn> columns;
    std::vector<double> factors_high, factors_low;
    for (std::size_t k = 0; k < on.size(); ++k) {
      columns.push_back(reader.columns()[on[k]]);
      factors_high.push_back(factors[k].high);
      factors_low.push_back(factors[k].low);
    }
    kernels.combine(reader.padded(), start, on.size(), columns.data(), factors_high.data(),
                    factors_low.data(), high.data(), low.data());
  };
  std::vector<DoubleDouble> of_residual, of_fitted;  // factors of the kept columns
  const std::size_t y = predictors;
  if (fit.has_response) {
    for (std::size_t k : basis.kept) {
      of_residual.push_back(orthogonal.weights.at(y, k));
      of_fitted.push_back(-of_residual.back());
    }
    if (basis.intercept) of_fitted[0] += DoubleDouble(basis.shift(y));
  }
  const double response_unit = fit.has_response ? std::ldexp(1.0, basis.exponent(y)) : 1;

  RowBlock block;
  while (reader.next()) {
    const std::size_t count = reader.count();
    block.first = reader.first();
    block.count = count;
    combiner.form(reader);
    block.orthonormal.resize(index(count), index(basis.kept.size()));
    for (std::size_t k = 0; k < basis.kept.size(); ++k)
      block.orthonormal.col(index(k)) =
          Eigen::Map<const Eigen::VectorXd>(combiner.columns()[basis.kept[k]].high, index(count)) *
          unit_length[k];
    block.leverages = block.orthonormal.rowwise().squaredNorm();

    if (fit.has_response && rows.has_response()) {
      combine(reader.columns()[y], basis.kept, of_residual);
      block.residuals = Eigen::Map<const Eigen::VectorXd>(high.data(), index(count)) * response_unit;
      block.response.resize(index(count));
      block.fitted.resize(index(count));
      const kernel::BlockColumn& shifted = reader.columns()[y];
      for (std::size_t i = 0; i < count; ++i) {
        const DoubleDouble value =
            two_sum(shifted.high[i], basis.shift(y)) + DoubleDouble(shifted.low ? shifted.low[i] : 0);
        block.response[index(i)] = value.high * response_unit;
        block.fitted[index(i)] = (value - DoubleDouble(high.data()[i], low.data()[i])).high * response_unit;
      }
    } else if (fit.has_response) {
      combine({nullptr, nullptr}, basis.kept, of_fitted);
      block.fitted = Eigen::Map<const Eigen::VectorXd>(high.data(), index(count)) * response_unit;
    }

    // A row that does not obey a dependency needs a combination that the data of the fit say nothing about.
    for (const Basis::Dependency& dependency : basis.dependencies) {
      std::vector<std::size_t> on;
      std::vector<DoubleDouble> factors;
      DoubleDouble constant = basis.shift(dependency.variable);
      for (std::size_t k = 0; k < dependency.on.size(); ++k) {
        if (basis.intercept && dependency.on[k] == 0) {
          constant -= dependency.parts[k];
          continue;
        }
        constant -= dependency.parts[k] * DoubleDouble(basis.shift(dependency.on[k]));
        on.push_back(dependency.on[k]);
        factors.push_back(-dependency.parts[k]);
      }
      if (basis.intercept) {
        on.push_back(0);
        factors.push_back(constant);
      }
      combine(reader.columns()[dependency.variable], on, factors);
      const auto size_in_row = [&](std::size_t variable, std::size_t i) {
        const double value = reader.columns()[variable].high[i] + basis.shift(variable);
        return std::max(std::abs(value), orthogonal.norm[variable]);
      };
      for (std::size_t i = 0; i < count; ++i) {
        double size = size_in_row(dependency.variable, i);
        for (std::size_t k = 0; k < dependency.on.size(); ++k)
          size += std::abs(dependency.parts[k].high) * size_in_row(dependency.on[k], i);
        if (std::abs(high.data()[i]) <= tolerance::rank_relative * size) continue;  // NaN goes on
        block.leverages[index(i)] = not_a_number;
        if (fit.has_response) block.fitted[index(i)] = not_a_number;
      }
    }
    visit(block);
  }
}

}  // namespace unply
