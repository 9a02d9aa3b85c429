#include "tests/support/exact_fit.hpp"

#include <boost/multiprecision/cpp_bin_float.hpp>
#include <cmath>
#include <vector>

namespace unply::test {
namespace {

using Wide =
    boost::multiprecision::number<boost::multiprecision::cpp_bin_float<100>, boost::multiprecision::et_off>;
using Matrix = std::vector<std::vector<Wide>>;

/// Inverse of a positive definite matrix by elimination; `factor` is left as what the elimination made of it.
Matrix inverse_of(Matrix a) {
  const std::size_t size = a.size();
  Matrix inverse(size, std::vector<Wide>(size, Wide(0)));
  for (std::size_t i = 0; i < size; ++i) inverse[i][i] = 1;
  for (std::size_t k = 0; k < size; ++k) {
    const Wide pivot = 1 / a[k][k];
    for (std::size_t j = 0; j < size; ++j) {
      a[k][j] *= pivot;
      inverse[k][j] *= pivot;
    }
    for (std::size_t i = 0; i < size; ++i) {
      if (i == k) continue;
      const Wide factor = a[i][k];
      for (std::size_t j = 0; j < size; ++j) {
        a[i][j] -= factor * a[k][j];
        inverse[i][j] -= factor * inverse[k][j];
      }
    }
  }
  return inverse;
}

}  // namespace

ExactFit exact_fit(const RowSource& rows, bool intercept) {
  const std::size_t n = rows.rows(), p = rows.columns(), first = intercept ? 1 : 0, q = p + first;
  const std::size_t width = p + rows.has_response();
  std::vector<double> high(width * n), low(width * n);
  rows.fill(0, n, n, high.data(), low.data());
  const auto entry = [&](std::size_t i, std::size_t variable) -> Wide {
    if (intercept && variable == 0) return 1;
    return Wide(high[(variable - first) * n + i]) + Wide(low[(variable - first) * n + i]);
  };
  Matrix products(q + 1, std::vector<Wide>(q + 1, Wide(0)));
  std::vector<Wide> row(q + 1);
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t j = 0; j <= q; ++j) row[j] = j == q && !rows.has_response() ? Wide(0) : entry(i, j);
    for (std::size_t j = 0; j <= q; ++j)
      for (std::size_t k = 0; k <= j; ++k) products[j][k] += row[j] * row[k];
  }
  for (std::size_t j = 0; j <= q; ++j)
    for (std::size_t k = 0; k < j; ++k) products[k][j] = products[j][k];

  Matrix normal(q, std::vector<Wide>(q));
  for (std::size_t j = 0; j < q; ++j)
    for (std::size_t k = 0; k < q; ++k) normal[j][k] = products[j][k];
  const Matrix inverse = inverse_of(normal);

  ExactFit fit;
  Wide trace = 0;
  for (std::size_t j = 0; j < q; ++j) trace += inverse[j][j] * products[j][j];
  fit.condition = std::sqrt(static_cast<double>(q)) * static_cast<double>(Wide(sqrt(trace)));
  const auto size = static_cast<Eigen::Index>(p);
  fit.coefficients.resize(size);
  fit.standard_errors.resize(size);
  fit.variance_inflation.resize(size);
  std::vector<Wide> b(q, Wide(0));
  Wide residual = products[q][q];
  for (std::size_t j = 0; j < q; ++j) {
    for (std::size_t k = 0; k < q; ++k) b[j] += inverse[j][k] * products[k][q];
    residual -= b[j] * products[j][q];
  }
  const Wide variance = n > q ? Wide(residual / static_cast<double>(n - q)) : Wide(0);
  const Wide total = intercept
                         ? Wide(products[q][q] - products[0][q] * products[0][q] / static_cast<double>(n))
                         : products[q][q];
  for (std::size_t j = first; j < q; ++j) {
    const auto at = static_cast<Eigen::Index>(j - first);
    const Wide spread = intercept
                            ? Wide(products[j][j] - products[0][j] * products[0][j] / static_cast<double>(n))
                            : products[j][j];
    fit.coefficients[at] = static_cast<double>(b[j]);
    fit.standard_errors[at] = static_cast<double>(Wide(sqrt(Wide(variance * inverse[j][j]))));
    fit.variance_inflation[at] = static_cast<double>(Wide(spread * inverse[j][j]));
  }
  if (intercept) {
    fit.intercept = static_cast<double>(b[0]);
    fit.intercept_standard_error = static_cast<double>(Wide(sqrt(Wide(variance * inverse[0][0]))));
  }
  fit.residual_sd = static_cast<double>(Wide(sqrt(variance)));
  if (rows.has_response()) {
    fit.unexplained_share = static_cast<double>(Wide(residual / total));
    fit.r_squared = static_cast<double>(Wide((total - residual) / total));
    fit.f = static_cast<double>(Wide((total - residual) / static_cast<double>(p) / variance));
  }
  return fit;
}

}  // namespace unply::test
