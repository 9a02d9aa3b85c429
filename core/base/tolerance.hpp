// Every threshold of the project: one name, what it is relative to, its source. Each is pinned by a test.
#pragma once

#include <limits>

namespace unply::tolerance {

inline constexpr double unit_roundoff = std::numeric_limits<double>::epsilon() / 2;  // 2^-53

/// A column counts as an exact combination of others when the residual of that combination is no larger than what
/// rounding the cells to doubles can make: ||x_j - sum c_k x_k|| <= rank_relative * sum |c_k| ||x_k|| (columns as they
/// stand in the cells, not centred). Scale: unit roundoff. Source: backward error of a sum, Higham, Accuracy and
/// Stability of Numerical Algorithms, 2nd ed., sec. 3.1.
inline constexpr double rank_relative = 8 * unit_roundoff;

/// A residual sum of squares taken from cross-products is usable only where it is at least so many times what their
/// rounding can have done to it; below, the residual itself is formed row by row. Own choice: a margin of six bits.
inline constexpr double resolved_pivot = 64;

/// Relative error of one sum of products over rows: in doubled precision, and in plain doubles within a block but
/// doubled from block to block. Scale: 2^-53. Own choice: bounds that were not passed on tables of up to 1,048,576 rows.
inline constexpr double doubled_cross_product = 0x1p-98;
inline constexpr double plain_cross_product = 0x1p-51;

/// Relative error of a residual sum of squares that ends the passes over the rows. Own choice: in doubled precision,
/// below the rounding of a double; in plain doubles, 13 digits in the worst case.
inline constexpr double doubled_limit = 0x1p-58;
inline constexpr double plain_limit = 0x1p-44;

/// How many times the sizes of the parts of a combination may exceed its own size (its digits lost: the logarithm of
/// that) for the column to be left as it stands, or for the combination to be formed in plain doubles. Own choice.
inline constexpr double stands_exact = 1024;
inline constexpr double stands_plain = 4;
inline constexpr double plain_combination = 16;

/// A residual of the response this small, relative to the sizes of the parts it is the difference of, is taken as it
/// is: the fit is perfect. Scale: below the rounding of the cells, above that of doubled precision. Own choice.
inline constexpr double vanished_residual = unit_roundoff / 128;

/// Condition index from which a near-dependency is called moderate / strong; share of a coefficient's variance that
/// ties it to that index. Source: Belsley, Kuh & Welsch, Regression Diagnostics (1980), sec. 3.2-3.3.
inline constexpr double moderate_condition_index = 10;
inline constexpr double strong_condition_index = 30;
inline constexpr double shared_variance = 0.5;

/// A cause of an undecided effect is held against few_rows_per_coefficient and these marks. Noticeable effect: over
/// one standard deviation of the predictor, in standard deviations of the response; the "small" correlation of Cohen,
/// Statistical Power Analysis for the Behavioral Sciences, 2nd ed. (1988), sec. 3.2. Unexplained share: of the
/// response's variance; own choice.
inline constexpr double noticeable_effect = 0.1;
inline constexpr double large_unexplained_share = 0.5;

/// Share of a needed narrowing, in logarithms, from which collinearity is named as part of the cause. Own choice.
inline constexpr double partly_share = 0.5;

/// Numbers of rows above this are given as out of reach: not far beyond it whole numbers are no longer all doubles.
/// Scale: rows. Own choice.
inline constexpr double most_rows = 1e15;

/// From 1 - leverage <= this a row is fitted exactly: its residual is the rounding of its own cells, and dividing by
/// 1 - leverage would turn that rounding into figures. Scale: leverage (0..1), computed to a few unit roundoffs. Own
/// choice.
inline constexpr double exact_leverage = 1e-10;

/// Residual standard deviation, as a share of the response's, up to which a fit is exact and its residuals are
/// rounding: nothing is read from their pattern. Scale: unit roundoff. Own choice.
inline constexpr double exact_fit = 64 * unit_roundoff;

/// Share of the squared fitted values that has to lie outside the model for the curvature check to mean anything.
/// Scale: a difference of two sums of equal size, computed to about n unit roundoffs at worst. Own choice.
inline constexpr double curvature_outside = 1e-10;

/// Rows of highest leverage that are tried as carriers of the collinearity, for up to 50 columns; fewer for more, so
/// that the work stays that of a fit. Own choice.
inline constexpr int collinearity_candidates = 50;

/// How far a diagonal entry of a correlation table may be from 1, an entry from its mirror image, and a correlation
/// outside [-1, 1]: computed tables carry rounding, printed ones do not. Scale: a correlation. Own choice.
inline constexpr double correlation_rounding = 1e-8;

/// Columns of whole numbers below this are taken as exact by the recording-precision check: counts, years, scores.
/// Scale: the largest number of the column. Own choice.
inline constexpr double whole_numbers_exact = 1e4;

/// Recording precision: up to this much work, rows * (columns + 1)^2, the table is refitted; beyond it a closed form is
/// used. Number of refits: leaves the movement uncertain by 1 / sqrt(2 * 200) = 5 %. Own choice.
inline constexpr double recording_refit_work = 1e6;
inline constexpr int recording_refits = 200;

/// Reference marks of the VIF chart. Common practice, no source; never a verdict.
inline constexpr double vif_marks[] = {4, 5, 10};

/// Cook's distance from which a row is pointed out. Scale: the squared distance of the coefficients in units of their
/// own confidence ellipsoid. Source: Cook & Weisberg, Residuals and Influence in Regression (1982), sec. 3.5.
inline constexpr double influential_cooks_distance = 1;

/// A row is said to make or hide collinearity when leaving it out changes the largest condition index by this factor.
/// Own choice: a factor of two moves an index across less than one step of the usual marks (10, 30, 100).
inline constexpr double condition_change = 2;

/// Movement of a coefficient under the recording-precision check, relative to its standard error, from which it is
/// pointed out. Own choice: sqrt(1 + 0.1^2) = 1.005, below it an interval would widen by less than half a percent.
inline constexpr double recording_share = 0.1;

/// Rows per coefficient below which a fit is said to rest on few rows. Common practice, no source.
inline constexpr double few_rows_per_coefficient = 5;

/// Trusted decimal digits of the coefficients below which the report warns: a printed estimate has about that many.
/// Own choice.
inline constexpr double few_trusted_digits = 6;

/// A misspelt name is answered with the nearest known one when at most this share of its letters differs (one letter
/// always may). Scale: letters of the longer name. Common practice, no source.
inline constexpr double nearest_name_share = 1.0 / 3;

/// A category is refused when more than this share of the rows would each be a level of its own (names, numbers of
/// samples): its effects would take up the data. Scale: rows used. Common practice, no source.
inline constexpr double largest_level_share = 0.8;

/// Most columns that a design may have; their correlation matrix is held in memory several times over. A limit of
/// ours, no source.
inline constexpr int most_design_columns = 2000;

/// Largest sum of powers in one term: beyond it, powers of a measured quantity cannot be told apart. A limit of ours,
/// no source.
inline constexpr int largest_degree = 20;

/// A numeric column is offered as a category when it holds from 3 to this many distinct values, all whole, and at
/// least this many rows for each (two values need no offer: their effect is the same either way). Common practice,
/// no source.
inline constexpr int few_whole_values = 7;
inline constexpr int rows_per_whole_value = 5;

/// Products and powers stay between these sizes, so that their low parts (2^-53 smaller, with as many bits again) are
/// normal doubles and sums over all rows of a sheet stay finite. Scale: the range of a double, 2^-1022 to 2^1024.
inline constexpr double largest_product = 0x1p1000;
inline constexpr double smallest_product = 0x1p-900;

/// Numbers of a dependency's equation are replaced by simpler ones this close, tried from the widest; a replacement
/// stays only where the equation then holds in every row. Scale: the number itself, for the constant the sum of the
/// equation's parts. Common practice, no source.
inline constexpr double equation_relative[] = {1e-6, 1e-9, 1e-12};

/// What counts as simpler: fractions up to the first denominator, then decimals of so many digits, then fractions up to
/// the second denominator. Own choice, for reading.
inline constexpr int readable_denominator = 20;
inline constexpr int equation_digits = 10;
inline constexpr int largest_denominator = 1000;

/// Equations are looked at from each of their columns up to this many; up to this many dependencies are subtracted
/// from one another in search of shorter ones. Limits of ours on work, no source.
inline constexpr int equation_columns = 64;
inline constexpr int equations_simplified = 40;

/// How many cells a refusal names one by one. A matter of reading, no source.
inline constexpr int cells_named = 5;

}  // namespace unply::tolerance
