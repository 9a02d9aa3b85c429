#include "sample-sheets/independent_solver.hpp"

#include <algorithm>
#include <boost/math/constants/constants.hpp>
#include <stdexcept>
#include <utility>

namespace unply::samples {
namespace {

Real dot(const Reals& a, const Reals& b) {
  Real sum = 0;
  for (std::size_t i = 0; i < a.size(); ++i) sum += a[i] * b[i];
  return sum;
}

Reals times(const Matrix& a, const Reals& x) {
  Reals result;
  for (const Reals& row : a) result.push_back(dot(row, x));
  return result;
}

Real gamma_of_half(std::size_t twice) {  // Gamma(twice / 2)
  Real result = twice % 2 == 0 ? Real(1) : sqrt(boost::math::constants::pi<Real>());
  for (std::size_t k = 2 - twice % 2; k < twice; k += 2) result *= Real(k) / 2;
  return result;
}

/// Eigenvalues and vectors (columns) of a symmetric matrix by plane rotations (Jacobi).
void eigen(Matrix a, Reals& values, Matrix& vectors) {
  const std::size_t n = a.size();
  vectors.assign(n, Reals(n, Real(0)));
  for (std::size_t i = 0; i < n; ++i) vectors[i][i] = 1;
  for (int sweep = 0; sweep < 60; ++sweep) {
    for (std::size_t p = 0; p < n; ++p) {
      for (std::size_t q = p + 1; q < n; ++q) {
        if (a[p][q] == 0) continue;
        const Real theta = (a[q][q] - a[p][p]) / (2 * a[p][q]);
        const Real tangent = (theta < 0 ? Real(-1) : Real(1)) / (abs(theta) + sqrt(theta * theta + 1));
        const Real cosine = 1 / sqrt(tangent * tangent + 1), sine = tangent * cosine;
        for (std::size_t k = 0; k < n; ++k) {
          const Real first = a[k][p], second = a[k][q];
          a[k][p] = cosine * first - sine * second;
          a[k][q] = sine * first + cosine * second;
        }
        for (std::size_t k = 0; k < n; ++k) {
          const Real first = a[p][k], second = a[q][k];
          a[p][k] = cosine * first - sine * second;
          a[q][k] = sine * first + cosine * second;
        }
        for (std::size_t k = 0; k < n; ++k) {
          const Real first = vectors[k][p], second = vectors[k][q];
          vectors[k][p] = cosine * first - sine * second;
          vectors[k][q] = sine * first + cosine * second;
        }
      }
    }
  }
  values.clear();
  for (std::size_t i = 0; i < n; ++i) values.push_back(a[i][i]);
}

Matrix part(const Matrix& a, const std::vector<std::size_t>& chosen) {
  Matrix result;
  for (const std::size_t i : chosen) {
    result.emplace_back();
    for (const std::size_t j : chosen) result.back().push_back(a[i][j]);
  }
  return result;
}

}  // namespace

Predictors& Predictors::add(const std::string& name, Reals column) {
  names.push_back(name);
  columns.push_back(std::move(column));
  return *this;
}

std::size_t Predictors::at(const std::string& name) const {
  const auto found = std::find(names.begin(), names.end(), name);
  if (found == names.end()) throw std::out_of_range("no column " + name);
  return static_cast<std::size_t>(found - names.begin());
}

Real mean(const Reals& column) {
  Real sum = 0;
  for (const Real& value : column) sum += value;
  return sum / column.size();
}

Reals centred(const Reals& column) {
  const Real middle = mean(column);
  Reals result;
  for (const Real& value : column) result.push_back(value - middle);
  return result;
}

Reals product(const Reals& a, const Reals& b) {
  Reals result;
  for (std::size_t i = 0; i < a.size(); ++i) result.push_back(a[i] * b[i]);
  return result;
}

Real standard_deviation(const Reals& column) {
  const Reals deviations = centred(column);
  return sqrt(dot(deviations, deviations) / (column.size() - 1));
}

Matrix inverse(Matrix a) {  // Gauss-Jordan with row exchange
  const std::size_t n = a.size();
  Matrix result(n, Reals(n, Real(0)));
  for (std::size_t i = 0; i < n; ++i) result[i][i] = 1;
  for (std::size_t step = 0; step < n; ++step) {
    std::size_t pivot = step;
    for (std::size_t i = step + 1; i < n; ++i) {
      if (abs(a[i][step]) > abs(a[pivot][step])) pivot = i;
    }
    if (a[pivot][step] == 0) throw std::domain_error("singular");
    std::swap(a[step], a[pivot]);
    std::swap(result[step], result[pivot]);
    const Real scale = 1 / a[step][step];
    for (std::size_t j = 0; j < n; ++j) {
      a[step][j] *= scale;
      result[step][j] *= scale;
    }
    for (std::size_t i = 0; i < n; ++i) {
      if (i == step) continue;
      const Real factor = a[i][step];
      for (std::size_t j = 0; j < n; ++j) {
        a[i][j] -= factor * a[step][j];
        result[i][j] -= factor * result[step][j];
      }
    }
  }
  return result;
}

Real determinant(Matrix a) {
  Real result = 1;
  for (std::size_t step = 0; step < a.size(); ++step) {
    std::size_t pivot = step;
    for (std::size_t i = step + 1; i < a.size(); ++i) {
      if (abs(a[i][step]) > abs(a[pivot][step])) pivot = i;
    }
    if (a[pivot][step] == 0) return 0;
    if (pivot != step) {
      std::swap(a[step], a[pivot]);
      result = -result;
    }
    result *= a[step][step];
    for (std::size_t i = step + 1; i < a.size(); ++i) {
      const Real factor = a[i][step] / a[step][step];
      for (std::size_t j = step; j < a.size(); ++j) a[i][j] -= factor * a[step][j];
    }
  }
  return result;
}

Real incomplete_beta(const Real& x, std::size_t twice_a, std::size_t twice_b) {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  const Real a = Real(twice_a) / 2, b = Real(twice_b) / 2;
  if (x > (a + 1) / (a + b + 2)) return 1 - incomplete_beta(1 - x, twice_b, twice_a);
  const Real beta = gamma_of_half(twice_a) * gamma_of_half(twice_b) / gamma_of_half(twice_a + twice_b);
  Real term = 1, sum = 1;
  for (std::size_t k = 0; term > sum * std::numeric_limits<Real>::epsilon(); ++k) {
    term *= x * (a + b + k) / (a + 1 + k);
    sum += term;
  }
  return pow(x, a) * pow(1 - x, b) / (a * beta) * sum;
}

Real t_two_sided(const Real& t, std::size_t df) { return incomplete_beta(df / (df + t * t), df, 1); }

Real t_quantile(const Real& level, std::size_t df) {
  const Real constant =
      gamma_of_half(df + 1) / (gamma_of_half(df) * sqrt(df * boost::math::constants::pi<Real>()));
  Real t = 0;  // from the left of a concave function Newton's steps never overshoot
  for (int step = 0; step < 1000; ++step) {
    const Real density = constant * pow(1 + t * t / df, -(Real(df) + 1) / 2);
    const Real change = (level - (1 - t_two_sided(t, df))) / (2 * density);
    t += change;
    if (abs(change) <= 1e-40 * t) return t;
  }
  throw std::runtime_error("the quantile did not settle");
}

Real f_upper(const Real& f, std::size_t df_numerator, std::size_t df_denominator) {
  return incomplete_beta(df_denominator / (df_denominator + df_numerator * f), df_denominator, df_numerator);
}

IndependentFit::IndependentFit(const Predictors& predictors, const Reals& y)
    : predictors_(predictors), y_(y), n_(predictors.columns.front().size()) {
  for (const Reals& column : predictors_.columns) {
    if (column.size() != n_) throw std::invalid_argument("columns of different length");
  }
  const std::size_t k = predictors_.columns.size() + 1;
  cross_products_.assign(k, Reals(k, Real(0)));
  Reals right(k, Real(0));
  for (std::size_t i = 0; i < n_; ++i) {
    const Reals row = design_row(i);
    for (std::size_t a = 0; a < k; ++a) {
      for (std::size_t b = 0; b < k; ++b) cross_products_[a][b] += row[a] * row[b];
      if (!y_.empty()) right[a] += row[a] * y_[i];
    }
  }
  inverse_ = inverse(cross_products_);
  if (y_.empty()) return;
  if (y_.size() != n_) throw std::invalid_argument("response of another length");
  coefficients_ = times(inverse_, right);
  for (std::size_t i = 0; i < n_; ++i) residuals_.push_back(y_[i] - dot(design_row(i), coefficients_));
  residual_sum_ = dot(residuals_, residuals_);
  const Reals deviations = centred(y_);
  total_sum_ = dot(deviations, deviations);
}

Reals IndependentFit::design_row(std::size_t i) const {
  Reals row{Real(1)};
  for (const Reals& column : predictors_.columns) row.push_back(column[i]);
  return row;
}

Real IndependentFit::leverage(const Reals& row) const { return dot(row, times(inverse_, row)); }

Real IndependentFit::residual_sd() const { return sqrt(residual_sum_ / residual_df()); }

Real IndependentFit::intercept_standard_error() const { return residual_sd() * sqrt(inverse_[0][0]); }

Real IndependentFit::standard_error(const std::string& name) const {
  return residual_sd() * sqrt(inverse_[place(name)][place(name)]);
}

Real IndependentFit::robust_standard_error(const std::string& name) const {
  Real sum = 0;
  for (std::size_t i = 0; i < n_; ++i) {
    const Reals row = design_row(i);
    const Real share = dot(inverse_[place(name)], row) * residuals_[i] / (1 - leverage(row));
    sum += share * share;
  }
  return sqrt(sum);
}

Real IndependentFit::t(const std::string& name) const { return coefficient(name) / standard_error(name); }

Real IndependentFit::p(const std::string& name) const { return t_two_sided(abs(t(name)), residual_df()); }

Real IndependentFit::half_width(const std::string& name, const Real& level) const {
  return t_quantile(level, residual_df()) * standard_error(name);
}

Real IndependentFit::standardised(const std::string& name) const {
  return coefficient(name) * spread(name) / standard_deviation(y_);
}

Real IndependentFit::r_squared() const { return 1 - residual_sum_ / total_sum_; }

Real IndependentFit::adjusted_r_squared() const {
  return 1 - (residual_sum_ / residual_df()) / (total_sum_ / (n_ - 1));
}

Real IndependentFit::f() const {
  const std::size_t p = predictors_.columns.size();
  return ((total_sum_ - residual_sum_) / p) / (residual_sum_ / residual_df());
}

Real IndependentFit::f_p() const { return f_upper(f(), predictors_.columns.size(), residual_df()); }

Real IndependentFit::prediction_error() const {
  Real sum = 0;
  for (std::size_t i = 0; i < n_; ++i) {
    const Real left_out = residuals_[i] / (1 - leverage(design_row(i)));
    sum += left_out * left_out;
  }
  return sqrt(sum / n_);
}

Real IndependentFit::spread(const std::string& name) const {
  return standard_deviation(predictors_.columns[predictors_.at(name)]);
}

Real IndependentFit::vif(const std::string& name) const {
  const Real sd = spread(name);
  return inverse_[place(name)][place(name)] * (n_ - 1) * sd * sd;
}

Matrix IndependentFit::correlations(const std::vector<std::size_t>& columns) const {
  Matrix scaled;
  for (const std::size_t j : columns) {
    Reals column = centred(predictors_.columns[j]);
    const Real length = sqrt(dot(column, column));
    for (Real& value : column) value /= length;
    scaled.push_back(std::move(column));
  }
  Matrix result;
  for (const Reals& a : scaled) {
    result.emplace_back();
    for (const Reals& b : scaled) result.back().push_back(dot(a, b));
  }
  return result;
}

Real IndependentFit::generalised_vif(const std::vector<std::string>& term) const {
  std::vector<std::size_t> inside, outside, all;
  for (std::size_t j = 0; j < predictors_.columns.size(); ++j) {
    all.push_back(j);
    (std::count(term.begin(), term.end(), predictors_.names[j]) != 0 ? inside : outside).push_back(j);
  }
  return determinant(correlations(inside)) * determinant(correlations(outside)) /
         determinant(correlations(all));
}

Real IndependentFit::joint_f(const std::vector<std::string>& term) const {
  std::vector<std::size_t> places;
  for (const std::string& name : term) places.push_back(place(name));
  Reals effects;
  for (const std::size_t j : places) effects.push_back(coefficients_[j]);
  const Real s = residual_sd();
  return dot(effects, times(samples::inverse(part(inverse_, places)), effects)) / (places.size() * s * s);
}

Real IndependentFit::joint_p(const std::vector<std::string>& term) const {
  return f_upper(joint_f(term), term.size(), residual_df());
}

IndependentFit::Condition IndependentFit::condition() const {
  const std::size_t k = cross_products_.size();
  Matrix scaled = cross_products_;
  for (std::size_t i = 0; i < k; ++i) {
    for (std::size_t j = 0; j < k; ++j) scaled[i][j] /= sqrt(cross_products_[i][i] * cross_products_[j][j]);
  }
  Reals values;
  Matrix vectors;
  eigen(scaled, values, vectors);
  std::vector<std::size_t> order;
  for (std::size_t i = 0; i < k; ++i) order.push_back(i);
  std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return values[a] > values[b]; });
  Condition result;
  for (const std::size_t l : order) {
    result.indices.push_back(sqrt(values[order.front()] / values[l]));
    result.proportions.emplace_back();
    for (std::size_t j = 0; j < k; ++j) {
      Real all = 0;
      for (std::size_t m = 0; m < k; ++m) all += vectors[j][m] * vectors[j][m] / values[m];
      result.proportions.back().push_back(vectors[j][l] * vectors[j][l] / values[l] / all);
    }
  }
  return result;
}

IndependentFit::Prediction IndependentFit::predict(const Reals& row, const Real& level) const {
  Reals full{Real(1)};
  full.insert(full.end(), row.begin(), row.end());
  Prediction result;
  result.value = dot(full, coefficients_);
  result.leverage = leverage(full);
  result.half_width = t_quantile(level, residual_df()) * residual_sd() * sqrt(1 + result.leverage);
  return result;
}

std::size_t IndependentFit::rows_needed(const std::string& name, const Real& target,
                                        const Real& level) const {
  const std::size_t k = coefficients_.size();
  const Real factor = residual_sd() * sqrt(vif(name)) / spread(name);
  const auto enough = [&](std::size_t n) {
    return t_quantile(level, n - k) * factor / sqrt(Real(n - 1)) <= target;
  };
  std::size_t too_few = k, plenty = k + 1;
  while (!enough(plenty)) {
    too_few = plenty;
    plenty *= 2;
  }
  while (plenty - too_few > 1) {
    const std::size_t middle = too_few + (plenty - too_few) / 2;
    (enough(middle) ? plenty : too_few) = middle;
  }
  return plenty;
}

FromCorrelations solve_correlations(const Matrix& predictors, const Reals& with_response, std::size_t rows) {
  FromCorrelations result;
  const Matrix inverted = inverse(predictors);
  result.standardised = times(inverted, with_response);
  result.r_squared = dot(result.standardised, with_response);
  const Real s = sqrt((1 - result.r_squared) * (rows - 1) / (rows - 1 - predictors.size()));
  for (std::size_t j = 0; j < predictors.size(); ++j) {
    result.vif.push_back(inverted[j][j]);
    result.standard_errors.push_back(s * sqrt(inverted[j][j] / (rows - 1)));
  }
  return result;
}

}  // namespace unply::samples
