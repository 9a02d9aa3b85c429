// A RowSource over columns held in memory, each entry high + low: what the tests of core/fit feed it.
#pragma once

#include <Eigen/Core>
#include <vector>

#include "core/design/row_source.hpp"

namespace unply::test {

class MatrixSource : public RowSource {
 public:
  MatrixSource() = default;
  /// Columns of X as they stand (low parts zero); no response.
  explicit MatrixSource(const Eigen::MatrixXd& x);
  MatrixSource(const Eigen::MatrixXd& x, const Eigen::VectorXd& y);

  MatrixSource& add(const Eigen::VectorXd& column);
  MatrixSource& add(const Eigen::VectorXd& high, const Eigen::VectorXd& low);
  /// x^degree, formed in doubled precision: relative error below degree * 2^-104.
  MatrixSource& add_power(const Eigen::VectorXd& x, int degree);
  MatrixSource& respond(const Eigen::VectorXd& y);

  std::size_t rows() const override { return rows_; }
  std::size_t columns() const override { return columns_.size(); }
  bool has_response() const override { return response_.size() > 0; }
  void fill(std::size_t first, std::size_t count, std::size_t stride, double* high,
            double* low) const override;
  bool has_low(std::size_t column) const override { return columns_[column].low.size() > 0; }

 private:
  struct Column {
    Eigen::VectorXd high, low;  // low is empty where it is zero
  };
  std::size_t rows_ = 0;
  std::vector<Column> columns_;
  Eigen::VectorXd response_;
};

}  // namespace unply::test
