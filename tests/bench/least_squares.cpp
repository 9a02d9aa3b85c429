// The fit as a function that the benchmark script calls: columns in memory in, a few numbers out.
#include "core/fit/least_squares.hpp"

#include <Eigen/SVD>
#include <algorithm>
#include <cstring>

#include "core/fit/inference.hpp"
#include "core/fit/reduction.hpp"

namespace {

class ColumnsInMemory : public unply::RowSource {
 public:
  ColumnsInMemory(const double* x, const double* y, std::size_t n, std::size_t p) : x_(x), y_(y), n_(n), p_(p) {}
  std::size_t rows() const override { return n_; }
  std::size_t columns() const override { return p_; }
  bool has_response() const override { return y_ != nullptr; }
  bool has_low(std::size_t) const override { return false; }
  void fill(std::size_t first, std::size_t count, std::size_t stride, double* high, double* low) const override {
    for (std::size_t j = 0; j < p_ + has_response(); ++j) {
      const double* const column = j < p_ ? x_ + j * n_ : y_;
      std::memcpy(high + j * stride, column + first, count * sizeof(double));
      if (low != nullptr) std::memset(low + j * stride, 0, count * sizeof(double));
    }
  }

 private:
  const double* x_;
  const double* y_;
  std::size_t n_, p_;
};

}  // namespace

/// x: n x p, column by column. Writes estimates, standard errors and VIFs (p each); with `collinearity` also the condition
/// indices (p + 1) and variance proportions ((p + 1)^2). Returns s.
extern "C" __attribute__((visibility("default"))) double bench_fit(const double* x, const double* y, std::size_t n,
                                                                   std::size_t p, int collinearity, double* out) {
  const unply::LeastSquaresFit fit = unply::fit_least_squares(ColumnsInMemory(x, y, n, p), true);
  const auto write = [&out](const auto& values) {
    for (Eigen::Index i = 0; i < values.size(); ++i) *out++ = values.data()[i];
  };
  write(fit.coefficients);
  write(fit.standard_errors);
  write(fit.variance_inflation);
  if (collinearity) {
    const Eigen::JacobiSVD<Eigen::MatrixXd> svd(fit.uncentred_factor, Eigen::ComputeFullV);
    const Eigen::VectorXd values = svd.singularValues();
    const Eigen::VectorXd indices = values[0] / values.array();
    Eigen::MatrixXd shares = (svd.matrixV() * values.cwiseInverse().asDiagonal()).cwiseAbs2();
    for (Eigen::Index j = 0; j < shares.rows(); ++j) shares.row(j) /= shares.row(j).sum();
    write(indices);
    write(shares);
  }
  return fit.residual_sd;
}

/// Reading alone, as the fit reads: what one pass costs at least.
extern "C" __attribute__((visibility("default"))) double bench_read(const double* x, const double* y, std::size_t n,
                                                                    std::size_t p) {
  const ColumnsInMemory rows(x, y, n, p);
  const std::size_t stride = unply::rows_read_at_once(p + 2);
  std::vector<double> high((p + 1) * stride);
  double sink = 0;
  for (std::size_t first = 0; first < n; first += stride) {
    rows.fill(first, std::min(stride, n - first), stride, high.data(), nullptr);
    sink += high[0];
  }
  return sink;
}

extern "C" __attribute__((visibility("default"))) std::size_t bench_instruction_sets() { return unply::kernel::available_count(); }
extern "C" __attribute__((visibility("default"))) const char* bench_choose(std::size_t which) {
  unply::kernel::choose(which);
  return unply::kernel::chosen().name;
}
