// Digits that the data carry: how far each coefficient moves when every cell is moved within its last
// recorded digit.
#pragma once

#include <Eigen/Core>
#include <cstdint>
#include <vector>

#include "core/base/printed_digits.hpp"
#include "core/design/design.hpp"
#include "core/fit/least_squares.hpp"

namespace unply {

struct RecordingPrecision {
  std::vector<double>
      unit;  // p: of plain columns the last recorded digit, e.g. 0.1; 0: taken as exact, or not plain
  double response_unit = 0;
  Eigen::VectorXd
      movement;  // p: root mean square change of the coefficient; NaN where inestimable, or no response
  Eigen::VectorXd against_standard_error;  // p: movement / standard error
  int refits = 0;                          // 0: closed form
  std::uint64_t seed = 0;
};

/// Last recorded digit of a column of numbers.
///
/// Numbers with decimals: 10^-d, d the fewest decimals that write all of them (see PrintedDigits). Numbers
/// that no decimals write were computed: exact. Whole numbers: exact (0) while the largest is below
/// tolerance::whole_numbers_exact, since counts, years, scores and codes are; from there on 1, since amounts
/// of that size (a gross national product in millions) are rounded, and for a count of that size half a unit
/// is nothing.
double recorded_unit(const PrintedDigits& digits);

/// Every cell of a number column (and the response) is moved by a uniform draw within half a unit of its last
/// recorded digit; products and powers follow; what products were centred at stays. The fit is on the columns
/// that `fit` kept.
///
/// Where rows * (columns + 1)^2 <= tolerance::recording_refit_work: tolerance::recording_refits seeded
/// refits, and movement is the root mean square of new less old coefficient. Else to first order in the
/// moves, plus the mean of the second (the pull towards zero that moved predictors exert), S = sqrt(n-1) T on
/// standardised columns:
///
///   change = S^-1 sum_i [ q_i (dy_i - b'dx_i) + S^-T dx_i e_i ],   mean change = -(residual df / n) (S'S)^-1
///   sum_i E dx_i dx_i' b
///
/// movement^2 = variance + (mean change)^2; moves of a cell have variance unit^2 / 12.
///
/// Source: Beaton, Rubin & Barone 1976.
RecordingPrecision recording_precision(const Design& design, const LeastSquaresFit& fit, std::uint64_t seed);

/// One of the two ways, whatever the size of the table.
RecordingPrecision recording_by_refits(const Design& design, const LeastSquaresFit& fit, std::uint64_t seed,
                                       int refits);
RecordingPrecision recording_in_closed_form(const Design& design, const LeastSquaresFit& fit);

}  // namespace unply
