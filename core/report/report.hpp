// A report as data: sections of tables, findings, charts and paragraphs, made of ids, numbers and facts. The sheet
// functions, the sheets written, the runner and the tests all read this; extension/text turns ids into words.
#pragma once

#include <string>
#include <variant>
#include <vector>

#include "core/base/facts.hpp"

namespace unply {

enum class BlockId {
  analysed,       // what was analysed: item | value
  findings,       // one sentence a term
  estimates,
  fit_quality,
  inflation,
  condition,
  dependencies,
  ledger,
  groups,
  combinations,   // what is well determined within the groups
  predictions,
  rows_needed,
  checks,
  influential,
  recording,
  from_correlations,
  methods, results, limitations, reproducibility,  // write-up paragraphs
  estimates_chart,
  inflation_chart,
};

enum class SectionId { analysed, findings, estimates, ledger, inflation, groups, condition, checks, write_up };

/// Column headings and row labels of tables. `name` stands for the user's own words.
enum class HeadingId {
  name, item, value, term, estimate, standard_error, t, df, p, lower, upper, standardised, vif, generalised_vif,
  per_df_root, shared_variation, verdict, scatter, rows_factor, spread, widening, error_without_collinearity,
  half_width, target, rows_needed, spread_needed, scatter_needed, vif_needed, vif_centred, vif_as_given, kind,
  condition_index, intercept, equation, leave_out, group, members, f, df_numerator, df_denominator, near_dependency,
  combination, weights, share, prediction, interval_lower, interval_upper, leverage, outside, address, row, residual,
  cooks_distance, studentised, condition_with, condition_without, unit_recorded, movement, movement_share, check,
  statistic, what_it_means, rows_used, rows_now,
  // row labels of fit quality and of what was analysed
  rows, rows_left_out, coefficients, residual_df, r_squared, adjusted_r_squared, residual_sd, f_test, f_p,
  prediction_error, condition_number, trusted_digits, data_range, response, purpose, level, standard_error_kind,
  seed, fingerprint, version, date, categories, settings, terms, smallest_effect,
  effect_of_one_sd,       // axis of the chart of effects
};

/// How a column of numbers is shown. The sheet writer has one cell style for each.
enum class NumberFormat { general, count, p_value, ratio, share, statistic };
NumberFormat number_format(HeadingId heading);

/// Sentences and short wordings; each lists the facts that come with it.
enum class PhraseId {
  // -- short wordings in tables
  user_words,             // text
  yes, no, none,
  intercept,
  verdict_clear,          // (facts of term sentences not needed)
  verdict_clear_beyond, verdict_clear_size_uncertain, verdict_clear_too_small,
  verdict_ruled_out,
  verdict_undecided, verdict_undecided_collinearity, verdict_undecided_partly, verdict_undecided_rows,
  verdict_undecided_spread, verdict_undecided_scatter,
  verdict_not_estimable,
  purpose_test, purpose_explore, purpose_predict,
  ordinary_errors, robust_errors,
  kind_plain, kind_category, kind_power, kind_product,  // baseline for category; terms for product and power
  not_reachable,          // of a needed value
  not_estimable_word,
  without_limit,          // of an infinite number
  no_dependency, no_group,
  list_of,                // columns
  weighted_sum,           // columns, weights
  not_predictable,
  is_constant,            // column
  leave_out_one_of,       // columns
  group_moderate, group_strong,
  outside_data, inside_data,
  effects_of,             // terms, weights
  taken_as_exact,         // of a recording unit
  recording_refits_note, recording_closed_form_note,  // count, seed
  rows_summary,           // rows, count (all), rows_left_out
  // -- findings, one a term
  term_clear,             // term, response, estimate, lower, upper, level, vif, factor (widening)
  term_clear_beyond,      // + effect
  term_clear_size_uncertain,
  term_clear_too_small,
  term_ruled_out,         // + effect, half_width
  term_undecided,         // term, response, estimate, lower, upper, level, vif, factor
  term_not_estimable,     // term, equation
  cause_collinearity,     // factor, columns, vif: without it the interval would be `factor` times narrower, and this would be settled
  cause_collinearity_partly,
  cause_not_collinearity, // vif
  cause_other_rows, cause_other_spread, cause_other_scatter,
  needs_rows,             // effect, half_width (target), rows_needed, rows
  needs_rows_moved_apart, // as needs_rows, columns: the others of its group
  nothing_to_do,          // vif, factor: clear all the same
  category_joint,         // term, f, df_numerator, df, p
  group_joint_clear, group_joint_undecided,  // terms, f, df_numerator, df, p
  group_direction,        // response, columns, weights (change of each column), estimate, lower, upper, level
  group_structural,       // terms: built from each other
  dependency_found,       // equation, columns
  constant_found,         // equation (the column's name), columns
  purpose_advice_test, purpose_advice_explore, purpose_advice_predict,
  no_smallest_effect,
  // -- notes under tables
  response_left_out_of_predictors,  // response
  rows_left_out_note,     // rows_left_out, count, columns
  hidden_left_out_note,   // rows_left_out
  lower_term_missing,     // term, terms
  rare_level,             // column, levels
  few_whole_values,       // column, count
  centred_note,           // terms, columns
  no_intercept_note,
  inestimable_note,       // columns, equation
  constant_note,          // column
  condition_centred_note, condition_uncentred_note,
  ledger_note,
  same_kind_of_rows_note,
  near_dependency_note,
  combination_note,
  prediction_note,        // level, number (largest leverage of the rows)
  not_predictable_note,
  illustration_note,      // ledger: target is the estimate's own size
  rules_of_thumb_note,
  structural_note,        // terms
  exact_rows_note,        // count
  standardised_only_note, // from correlations without sds
  columns_skipped_note,   // columns
  // -- checks
  check_curvature_fine, check_curvature_seen,      // p
  check_spread_fine, check_spread_seen,            // p
  check_robust_same, check_robust_differs,         // columns
  check_influence_none, check_influence_seen,      // address, number
  check_collinearity_rows_none, check_collinearity_rows_seen,  // address, condition_index (with), number (without)
  check_recording_fine, check_recording_matters,   // columns, factor
  check_digits_fine, check_digits_few,             // digits
  check_rows_enough, check_rows_few,               // rows, count (coefficients)
  // -- write-up
  methods_model,          // response, terms, rows, count (all rows), rows_left_out
  methods_category,       // column, baseline
  methods_fit, methods_fit_robust,  // level
  methods_collinearity,   // (none)
  methods_smallest_effect,// terms, weights (the smallest effects)
  results_fit,            // share (R2), f, df_numerator, df, p, spread (residual sd), response
  results_prediction,     // number (leave-one-out prediction error), response
  limitations_undecided,  // terms
  limitations_nothing_undecided,
  limitations_collinearity,   // terms
  limitations_not_estimable,  // terms
  limitations_association,
  reproducibility_data,   // range, file, rows, fingerprint
  reproducibility_settings,  // settings
  reproducibility_version,// version, date, seed
  caution_text,
};

struct Phrase {
  PhraseId id;
  Facts facts = {};
};

/// A heading: an id, and the user's own name where the id is `name` or needs one.
struct Heading {
  HeadingId id;
  std::string name = {};
};

/// A cell of a table: nothing, a number, the user's words, a wording of ours, a label of ours.
using Value = std::variant<std::monostate, double, std::string, Phrase, Heading>;

struct TableBlock {
  BlockId id;
  std::vector<Heading> headings;
  std::vector<std::vector<Value>> rows;      // each as long as `headings`
  std::vector<NumberFormat> row_formats = {};  // for tables whose numbers differ by row (item | value); else empty
  std::vector<Phrase> notes = {};
};

/// A finding: sentences that belong together, the first is what was found.
struct FindingBlock {
  BlockId id;
  std::vector<std::vector<Phrase>> findings;
};

struct ParagraphBlock {
  BlockId id;
  std::vector<Phrase> sentences;
};

/// A point or bar per name, with an interval where lower and upper are given, and reference marks.
struct ChartBlock {
  BlockId id;
  Heading axis;
  std::vector<std::string> names;
  std::vector<double> values, lower, upper;
  std::vector<double> marks;
};

using Block = std::variant<TableBlock, FindingBlock, ParagraphBlock, ChartBlock>;

struct Section {
  SectionId id;
  std::vector<Block> blocks;
};

struct Report {
  std::vector<Section> sections;
};

}  // namespace unply
