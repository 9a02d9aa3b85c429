#include "tests/support/matrix_source.hpp"

#include <algorithm>
#include <cmath>

namespace unply::test {

MatrixSource::MatrixSource(const Eigen::MatrixXd& x) : rows_(static_cast<std::size_t>(x.rows())) {
  for (Eigen::Index j = 0; j < x.cols(); ++j) add(x.col(j));
}

MatrixSource::MatrixSource(const Eigen::MatrixXd& x, const Eigen::VectorXd& y) : MatrixSource(x) {
  respond(y);
}

MatrixSource& MatrixSource::add(const Eigen::VectorXd& column) { return add(column, {}); }

MatrixSource& MatrixSource::add(const Eigen::VectorXd& high, const Eigen::VectorXd& low) {
  rows_ = static_cast<std::size_t>(high.size());
  columns_.push_back({high, low});
  return *this;
}

MatrixSource& MatrixSource::add_power(const Eigen::VectorXd& x, int degree) {
  Eigen::VectorXd high = x, low = Eigen::VectorXd::Zero(x.size());
  for (int power = 2; power <= degree; ++power)
    for (Eigen::Index i = 0; i < x.size(); ++i) {
      const double product = high[i] * x[i];
      const double rest = std::fma(high[i], x[i], -product) + low[i] * x[i];
      high[i] = product + rest;
      low[i] = rest - (high[i] - product);
    }
  return degree == 1 ? add(high) : add(high, low);
}

MatrixSource& MatrixSource::respond(const Eigen::VectorXd& y) {
  rows_ = static_cast<std::size_t>(y.size());
  response_ = y;
  return *this;
}

void MatrixSource::fill(std::size_t first, std::size_t count, std::size_t stride, double* high,
                        double* low) const {
  const auto copy = [&](const Eigen::VectorXd& from, double* to) {
    if (from.size() == 0)
      std::fill_n(to, count, 0.0);
    else
      std::copy_n(from.data() + first, count, to);
  };
  for (std::size_t j = 0; j < columns_.size(); ++j) {
    copy(columns_[j].high, high + j * stride);
    copy(columns_[j].low, low + j * stride);
  }
  if (has_response()) {
    copy(response_, high + columns_.size() * stride);
    copy({}, low + columns_.size() * stride);
  }
}

}  // namespace unply::test
