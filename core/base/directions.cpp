#include "core/base/directions.hpp"

#include <Eigen/SVD>
#include <limits>

namespace unply {
namespace {

constexpr Eigen::Index jacobi_columns = 100;

}  // namespace

Directions directions_of(const Eigen::MatrixXd& factor) {
  if (factor.cols() <= jacobi_columns) {
    const Eigen::JacobiSVD<Eigen::MatrixXd> svd(factor, Eigen::ComputeFullV);
    return {svd.singularValues(), svd.matrixV()};
  }
  const Eigen::BDCSVD<Eigen::MatrixXd> svd(factor, Eigen::ComputeFullV);
  return {svd.singularValues(), svd.matrixV()};
}

double condition_index_of(const Eigen::MatrixXd& factor) {
  const Eigen::VectorXd singular = directions_of(factor).singular;
  if (singular.size() == 0) return 1;
  const double smallest = singular[singular.size() - 1];
  return smallest > 0 ? singular[0] / smallest : std::numeric_limits<double>::infinity();
}

}  // namespace unply
