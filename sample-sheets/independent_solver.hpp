// The Expected figures of the sample sheets: least squares in 50 decimal digits by the textbook route, normal
// equations and their inverse. Shares nothing with core/, whose results these figures are held against.
#pragma once

#include <boost/multiprecision/cpp_bin_float.hpp>
#include <cstddef>
#include <string>
#include <vector>

namespace unply::samples {

using Real =
    boost::multiprecision::number<boost::multiprecision::cpp_bin_float<50>, boost::multiprecision::et_off>;
using Reals = std::vector<Real>;
using Matrix = std::vector<Reals>;  // rows

/// Columns of a design without the intercept, each with its name; all of the same length.
struct Predictors {
  std::vector<std::string> names;
  std::vector<Reals> columns;

  Predictors& add(const std::string& name, Reals column);
  std::size_t at(const std::string& name) const;  // throws std::out_of_range
};

Reals centred(const Reals& column);
Reals product(const Reals& a, const Reals& b);
Real mean(const Reals& column);
Real standard_deviation(const Reals& column);  // divisor n - 1

/// minimise ||y - b0 - X b||^2, by (A'A)^-1 A'y with A = [1 X].
class IndependentFit {
 public:
  /// y may be empty: then only what depends on X alone may be asked.
  IndependentFit(const Predictors& predictors, const Reals& y);

  std::size_t rows() const { return n_; }
  std::size_t residual_df() const { return n_ - 1 - predictors_.columns.size(); }
  const Real& intercept() const { return coefficients_[0]; }
  const Real& coefficient(const std::string& name) const { return coefficients_[place(name)]; }
  Real intercept_standard_error() const;
  Real standard_error(const std::string& name) const;
  Real robust_standard_error(const std::string& name) const;  // HC3: squared residuals over (1 - leverage)^2
  Real t(const std::string& name) const;
  Real p(const std::string& name) const;
  Real half_width(const std::string& name, const Real& level) const;
  Real standardised(const std::string& name) const;
  Real residual_sd() const;
  Real r_squared() const;
  Real adjusted_r_squared() const;
  Real f() const;
  Real f_p() const;
  Real prediction_error() const;  // sqrt(PRESS / n)

  Real spread(const std::string& name) const;
  Real vif(const std::string& name) const;
  /// det(R_T) det(R_rest) / det(R) for the columns T.
  Real generalised_vif(const std::vector<std::string>& term) const;
  /// F that all coefficients of these columns are zero.
  Real joint_f(const std::vector<std::string>& term) const;
  Real joint_p(const std::vector<std::string>& term) const;

  struct Condition {
    Reals indices;       // ascending
    Matrix proportions;  // one row an index; columns: intercept first, then the predictors in their order
  };
  /// [1 X] with columns of unit length, not centred.
  Condition condition() const;

  struct Prediction {
    Real value, half_width, leverage;  // interval for one new observation
  };
  Prediction predict(const Reals& row, const Real& level) const;

  /// Smallest n with t(level, n - k) s sqrt(VIF) / (sd sqrt(n - 1)) <= target.
  std::size_t rows_needed(const std::string& name, const Real& target, const Real& level) const;

 private:
  std::size_t place(const std::string& name) const { return predictors_.at(name) + 1; }
  Reals design_row(std::size_t i) const;
  Real leverage(const Reals& design_row) const;
  Matrix correlations(const std::vector<std::size_t>& columns) const;

  Predictors predictors_;
  Reals y_;
  std::size_t n_ = 0;
  Matrix cross_products_;  // A'A
  Matrix inverse_;         // of A'A
  Reals coefficients_;
  Reals residuals_;
  Real residual_sum_ = 0;
  Real total_sum_ = 0;
};

/// Least squares from a correlation table alone: everything in standard deviations.
struct FromCorrelations {
  Reals standardised, standard_errors, vif;
  Real r_squared;
};
FromCorrelations solve_correlations(const Matrix& predictors, const Reals& with_response, std::size_t rows);

Matrix inverse(Matrix a);
Real determinant(Matrix a);
/// Regularised incomplete beta I_x(a, b) for a and b in whole halves, by its series of positive terms
/// (Abramowitz & Stegun 26.5.4) or that of the complement, whichever is the smaller tail.
Real incomplete_beta(const Real& x, std::size_t twice_a, std::size_t twice_b);
Real t_two_sided(const Real& t, std::size_t df);     // P(|T| > t), t >= 0
Real t_quantile(const Real& level, std::size_t df);  // the t with P(|T| <= t) = level
Real f_upper(const Real& f, std::size_t df_numerator, std::size_t df_denominator);  // P(F > f)

}  // namespace unply::samples
