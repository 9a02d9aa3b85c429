// Digits that the data carry: how far each coefficient moves when every cell is moved within its last recorded digit.
#pragma once

#include <Eigen/Core>
#include <cstdint>
#include <vector>

#include "core/design/layout.hpp"
#include "core/design/design.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

struct RecordingPrecision {
  std::vector<double> unit;         // per plain column of the design: last recorded digit, e.g. 0.1; 0: taken as exact
  Eigen::VectorXd movement;         // p: standard deviation of the coefficient under the perturbation
  Eigen::VectorXd against_standard_error;  // p: movement / standard error
  int refits = 0;                   // 0: closed form of first order
  std::uint64_t seed = 0;
};

/// Every cell of a plain column (and the response) is moved by a uniform draw within half a unit of its last recorded
/// digit; products and powers follow. Source: Beaton, Rubin & Barone 1976.
RecordingPrecision recording_precision(const Design& design, const LeastSquaresFit& fit, std::uint64_t seed);

}  // namespace unply
