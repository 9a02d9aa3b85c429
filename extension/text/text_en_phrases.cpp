// English: findings, notes, checks and the write-up.
#include <cmath>

#include "extension/text/text.hpp"

namespace unply::text {
namespace {

/// The facts of one phrase, in words.
class Words {
 public:
  explicit Words(const Facts& facts) : facts_(facts) {}

  bool has(FactId id) const { return facts_.has(id); }
  double value(FactId id) const { return facts_.number(id); }
  std::string text(FactId id) const { return facts_.text(id); }
  std::string names(FactId id) const { return list(facts_.list(id)); }
  std::string short_number(FactId id) const { return number(value(id)); }
  std::string count(FactId id) const { return whole(value(id)); }
  std::string level() const { return percent(value(FactId::level)) + " interval"; }

  /// "Clay: red (against white)", "Zone_1"
  std::string subject() const {
    return text(FactId::term) + (has(FactId::baseline) ? " (against " + text(FactId::baseline) + ")" : "");
  }
  /// "one unit more of Zone_1", "this level instead of white"
  std::string step() const {
    return has(FactId::baseline) ? "this level instead of " + text(FactId::baseline) : "one unit more of " + text(FactId::term);
  }
  /// An effect of the term, rounded to what its interval supports.
  std::string effect(FactId id) const {
    const double half_width = has(FactId::half_width) ? value(FactId::half_width)
                                                      : (value(FactId::upper) - value(FactId::lower)) / 2;
    return signed_rounded_to(value(id), half_width);
  }
  std::string interval() const { return effect(FactId::lower) + " to " + effect(FactId::upper); }
  std::string f_test() const {
    return "F(" + count(FactId::df_numerator) + ", " + count(FactId::df) + ") = " + number(value(FactId::f), 4) + ", " +
           p_value(value(FactId::p));
  }
  std::string were(FactId id) const { return value(id) == 1 ? " was" : " were"; }
  /// "7 times"
  std::string times() const { return number(value(FactId::factor), 2) + " times"; }
  std::string companions() const { return has(FactId::columns) ? names(FactId::columns) : "other terms"; }
  /// "Zone_1 by +9.8, Zone_2 by +10.1 and Zone_3 by +9.5"
  std::string changes() const {
    const std::vector<std::string>& columns = facts_.list(FactId::columns);
    const std::vector<double>& weights = facts_.numbers(FactId::weights);
    std::vector<std::string> parts;
    for (std::size_t k = 0; k < columns.size() && k < weights.size(); ++k)
      parts.push_back(columns[k] + " by " + (weights[k] > 0 ? "+" : "") + number(weights[k]));
    return list(parts);
  }
  /// "0.2 for Zone_1 and 1 for Time"; "0.2 for every term" where all are the same
  std::string effects() const {
    const std::vector<std::string>& terms = facts_.list(FactId::terms);
    const std::vector<double>& effects = facts_.numbers(FactId::weights);
    std::vector<std::string> parts;
    bool same = terms.size() > 2;
    for (std::size_t k = 0; k < terms.size() && k < effects.size(); ++k) {
      same = same && effects[k] == effects[0];
      parts.push_back(number(effects[k], 4) + " for " + terms[k]);
    }
    return same ? number(effects[0], 4) + " for every term" : list(parts);
  }
  /// "0.71 Zone_1 - 0.70 Zone_2"
  std::string weighted_sum() const {
    const std::vector<std::string>& columns = facts_.list(FactId::columns);
    const std::vector<double>& weights = facts_.numbers(FactId::weights);
    std::string sum;
    for (std::size_t k = 0; k < columns.size() && k < weights.size(); ++k) {
      const std::string size = number(std::abs(weights[k]), 2);
      if (size == "0") continue;
      sum += (sum.empty() ? (weights[k] < 0 ? "-" : "") : (weights[k] < 0 ? " - " : " + ")) + size + " " + columns[k];
    }
    return sum;
  }
  std::string own_size() const {
    return "an effect as large as the one estimated (" + effect(FactId::estimate) + ")";
  }

 private:
  const Facts& facts_;
};

}  // namespace

std::string phrase(const Phrase& phrase) {
  const Words w(phrase.facts);
  switch (phrase.id) {
    // -- short wordings
    case PhraseId::user_words: return w.text(FactId::text);
    case PhraseId::yes: return "yes";
    case PhraseId::no: return "no";
    case PhraseId::none: return "none";
    case PhraseId::intercept: return "Intercept";
    case PhraseId::verdict_clear: return "clear";
    case PhraseId::verdict_clear_beyond: return "clear, large enough to matter";
    case PhraseId::verdict_clear_size_uncertain: return "clear, size uncertain";
    case PhraseId::verdict_clear_too_small: return "clear, too small to matter";
    case PhraseId::verdict_ruled_out: return "ruled out";
    case PhraseId::verdict_undecided: return "undecided";
    case PhraseId::verdict_undecided_collinearity: return "undecided: moves with others";
    case PhraseId::verdict_undecided_partly: return "undecided: moves with others, and more";
    case PhraseId::verdict_undecided_rows: return "undecided: few rows";
    case PhraseId::verdict_undecided_spread: return "undecided: narrow range";
    case PhraseId::verdict_undecided_scatter: return "undecided: much scatter";
    case PhraseId::verdict_not_estimable: return "cannot be estimated";
    case PhraseId::purpose_test: return "test a stated hypothesis";
    case PhraseId::purpose_explore: return "explore";
    case PhraseId::purpose_predict: return "predict";
    case PhraseId::ordinary_errors: return "ordinary: the same scatter everywhere";
    case PhraseId::robust_errors: return "robust (HC3): scatter may differ from row to row";
    case PhraseId::kind_plain: return "column";
    case PhraseId::kind_category:
      return "category" + (w.has(FactId::baseline) && !w.text(FactId::baseline).empty() ? ", against " + w.text(FactId::baseline) : "");
    case PhraseId::kind_power: return "power, built from another term";
    case PhraseId::kind_product: return "product, built from other terms";
    case PhraseId::not_reachable: return "not reachable";
    case PhraseId::not_estimable_word: return "cannot be estimated";
    case PhraseId::without_limit: return "without limit";
    case PhraseId::no_dependency: return "No exact dependency among the predictors.";
    case PhraseId::no_group: return "No collinear group.";
    case PhraseId::list_of: return w.names(FactId::columns);
    case PhraseId::weighted_sum: return w.weighted_sum();
    case PhraseId::not_predictable: return "no prediction";
    case PhraseId::is_constant: return w.text(FactId::column) + " is constant";
    case PhraseId::leave_out_one_of: {
      const std::vector<std::string>& columns = phrase.facts.list(FactId::columns);
      return columns.size() == 1 ? "leave it out" : "leave out one of " + list(columns);
    }
    case PhraseId::group_moderate: return "moderate";
    case PhraseId::group_strong: return "strong";
    case PhraseId::outside_data: return "outside the data";
    case PhraseId::inside_data: return "within the data";
    case PhraseId::effects_of: return w.effects();
    case PhraseId::taken_as_exact: return "taken as exact";
    case PhraseId::recording_refits_note:
      return "Each cell stands for every number that rounds to it. The coefficients were fitted again " + w.count(FactId::count) + " times with all cells moved at random within their last recorded digit (seed " + seed(w.value(FactId::seed)) + "). Movement is the standard deviation of a coefficient over these fits.";
    case PhraseId::recording_closed_form_note:
      return "Each cell stands for every number that rounds to it. Movement is the standard deviation of a coefficient when all cells are moved at random within their last recorded digit, by the first-order formula (the table is too large to refit many times).";
    case PhraseId::rows_summary:
      return w.value(FactId::rows_left_out) == 0 ? w.count(FactId::rows) + ", all of them used"
                                                 : w.count(FactId::rows) + " used of " + w.count(FactId::count);

    // -- findings
    case PhraseId::term_clear:
      return w.subject() + ": clear. Everything else equal, " + w.step() + " goes with " + w.effect(FactId::estimate) + " in " + w.text(FactId::response) + " (" + w.level() + " " + w.interval() + ").";
    case PhraseId::term_clear_beyond:
      return w.subject() + ": clear, and large enough to matter. Everything else equal, " + w.step() + " goes with " + w.effect(FactId::estimate) + " in " + w.text(FactId::response) + " (" + w.level() + " " + w.interval() + "), all of it beyond the " + w.short_number(FactId::effect) + " that matters.";
    case PhraseId::term_clear_size_uncertain:
      return w.subject() + ": clear, but its size is uncertain. Everything else equal, " + w.step() + " goes with " + w.effect(FactId::estimate) + " in " + w.text(FactId::response) + " (" + w.level() + " " + w.interval() + "); whether it reaches the " + w.short_number(FactId::effect) + " that matters is open.";
    case PhraseId::term_clear_too_small:
      return w.subject() + ": clear, but too small to matter. Everything else equal, " + w.step() + " goes with " + w.effect(FactId::estimate) + " in " + w.text(FactId::response) + " (" + w.level() + " " + w.interval() + "), all of it below the " + w.short_number(FactId::effect) + " that matters.";
    case PhraseId::term_ruled_out:
      return w.subject() + ": ruled out. An effect of " + w.short_number(FactId::effect) + " or more on " + w.text(FactId::response) + " does not agree with the data: everything else equal, " + w.step() + " goes with " + w.interval() + " (" + w.level() + ").";
    case PhraseId::term_undecided:
      return w.subject() + ": undecided. Everything else equal, " + w.step() + " may go with anything from " + w.interval() + " in " + w.text(FactId::response) + " (" + w.level() + ", best estimate " + w.effect(FactId::estimate) + ").";
    case PhraseId::term_not_estimable:
      if (w.has(FactId::column)) return w.subject() + ": cannot be estimated, for it has the same value in every row.";
      return w.subject() + ": cannot be estimated. No effect of its own exists in these data" + (w.text(FactId::equation).empty() ? "." : ", because " + w.text(FactId::equation) + " in every row.");
    case PhraseId::cause_collinearity:
      return "It moves together with " + w.companions() + " (VIF " + w.short_number(FactId::vif) + "). If it did not, with the same rows, spread and scatter, the interval would be " + w.times() + " narrower (±" + w.short_number(FactId::number) + "), " + (w.has(FactId::effect) ? "and this effect would be settled against the " + w.short_number(FactId::effect) + " that matters." : "narrow enough to tell " + w.own_size() + " from none.");
    case PhraseId::cause_collinearity_partly:
      return "It moves together with " + w.companions() + " (VIF " + w.short_number(FactId::vif) + "), which makes the interval " + w.times() + " wider. This is part of the cause: without it ±" + w.short_number(FactId::number) + " would be left, still too wide " + (w.has(FactId::effect) ? "to settle this effect against the " + w.short_number(FactId::effect) + " that matters." : "to tell " + w.own_size() + " from none.");
    case PhraseId::cause_not_collinearity:
      return "Collinearity is not the cause: a VIF of " + w.short_number(FactId::vif) + " makes the interval only " + w.times() + " as wide.";
    case PhraseId::cause_other_rows:
      return "The nearest way to a narrower interval is more rows (now " + w.count(FactId::rows) + ").";
    case PhraseId::cause_other_spread:
      return "The nearest way to a narrower interval is a wider range of " + w.text(FactId::term) + " (its standard deviation is now " + w.short_number(FactId::spread) + ").";
    case PhraseId::cause_other_scatter:
      return "The nearest way to a narrower interval is less scatter around the fit (now ±" + w.short_number(FactId::scatter) + " in " + w.text(FactId::response) + "), for instance by measuring more precisely or by naming what else moves it.";
    case PhraseId::needs_rows:
      return "With rows of the same kind, settling it (±" + w.short_number(FactId::half_width) + ", half of what matters) would take about " + number(w.value(FactId::rows_needed), 2) + " rows instead of " + w.count(FactId::rows) + ".";
    case PhraseId::needs_rows_moved_apart:
      return "With rows of the same kind, settling it (±" + w.short_number(FactId::half_width) + ", half of what matters) would take about " + number(w.value(FactId::rows_needed), 2) + " rows instead of " + w.count(FactId::rows) + "; rows in which it is moved apart from " + w.companions() + " would need far fewer.";
    case PhraseId::nothing_to_do:
      return "Its VIF of " + w.short_number(FactId::vif) + " made the interval " + w.times() + " wider. The verdict holds all the same, and nothing has to be done about it.";
    case PhraseId::category_joint:
      return "All levels of " + w.text(FactId::term) + " together: " + w.f_test() + ".";
    case PhraseId::group_joint_clear:
      return w.names(FactId::terms) + " together: clear. Each can hardly be told from the others, for they move together (condition index " + w.short_number(FactId::condition_index) + "); as a group they go with " + w.text(FactId::response) + ": " + w.f_test() + ".";
    case PhraseId::group_joint_undecided:
      return w.names(FactId::terms) + " together: undecided. They move together (condition index " + w.short_number(FactId::condition_index) + "), and even as a group no effect on " + w.text(FactId::response) + " is shown: " + w.f_test() + ".";
    case PhraseId::group_direction:
      return "What the data do tell: changing " + w.changes() + " at the same time goes with " + w.effect(FactId::estimate) + " in " + w.text(FactId::response) + " (" + w.level() + " " + w.interval() + ").";
    case PhraseId::group_structural:
      return "Some of these terms are built from others (products or powers), so they move together by construction, not because of how the data were gathered.";
    case PhraseId::dependency_found:
      return "Exact dependency: " + w.text(FactId::equation) + " in every row. The effects of these columns have no single answer until one of them is left out.";
    case PhraseId::constant_found:
      return w.text(FactId::equation) + " is constant: it has the same value in every row, so it has no effect that could be estimated. Leave it out.";
    case PhraseId::purpose_advice_test:
      return "You test a stated hypothesis: the model stays as it was stated. Report undecided terms as undecided; leaving predictors out or pooling them now would answer another question, and could only be called exploratory.";
    case PhraseId::purpose_advice_explore:
      return "You explore: whatever is chosen after looking at these results needs new data before it can be called tested.";
    case PhraseId::purpose_advice_predict:
      return "You predict: predictors that move together do no harm to predictions within the range of these data. Look at the prediction error, and be careful with new rows in which they move apart.";
    case PhraseId::no_smallest_effect:
      return "No smallest effect that matters was given, so nothing can be ruled out, and rows needed are worked out for effects as large as those estimated. Give one in the setting \"" + setting_name(SettingId::smallest_effect) + "\".";

    // -- notes
    case PhraseId::response_left_out_of_predictors:
      return "The response " + w.text(FactId::response) + " lies inside the range of the predictors and was left out of them.";
    case PhraseId::rows_left_out_note:
      return w.count(FactId::rows_left_out) + " of " + w.count(FactId::count) + " rows" + w.were(FactId::rows_left_out) + " left out, because a cell is empty in " + w.names(FactId::columns) + ".";
    case PhraseId::hidden_left_out_note:
      return w.count(FactId::rows_left_out) + " hidden or filtered rows were left out, as the settings ask.";
    case PhraseId::lower_term_missing:
      return "The model has " + w.text(FactId::term) + " without " + w.names(FactId::terms) + ". Its estimate then depends on where zero lies; usually the lower terms belong in the model.";
    case PhraseId::rare_level:
      return "In " + w.text(FactId::column) + " there is only one row for " + w.names(FactId::levels) + "; the effect of such a level rests on that row alone.";
    case PhraseId::few_whole_values:
      return w.text(FactId::column) + " has only " + w.count(FactId::count) + " different whole values. If these are codes and not amounts, name it in the setting \"" + setting_name(SettingId::categories) + "\".";
    case PhraseId::centred_note:
      return w.names(FactId::columns) + " were centred at their means before " + w.names(FactId::terms) + (phrase.facts.list(FactId::terms).size() == 1 ? " was" : " were") + " formed. This changes what the lower terms mean (the effect at the mean instead of at zero) and their VIFs; it changes neither the fitted values nor the estimate, standard error, t and p of the highest term.";
    case PhraseId::no_intercept_note:
      return "The model has no intercept; VIFs and R2 are about zero instead of about the mean, and cannot be compared with those of models that have one.";
    case PhraseId::inestimable_note:
      return "Exact dependency: " + w.text(FactId::equation) + ". The effects of these columns cannot be told apart; leave one of " + w.names(FactId::columns) + " out.";
    case PhraseId::constant_note:
      return w.text(FactId::column) + " is constant: leave it out.";
    case PhraseId::condition_centred_note:
      return "Columns centred and scaled to unit length, without the intercept. Each column of shares adds up to 1.";
    case PhraseId::condition_uncentred_note:
      return "Columns scaled to unit length, the intercept among them, not centred. Each column of shares adds up to 1: terms with large shares in the same row move together.";
    case PhraseId::ledger_note:
      return "Standard error = scatter x rows factor x widening / spread. The columns on the right say what each of the four alone would have to become for the half-width to reach the target, the others staying as they are. The target is half of the smallest effect that matters: an interval that narrow cannot hold both no effect and one that matters.";
    case PhraseId::same_kind_of_rows_note:
      return "Rows of the same kind: same scatter, same spread, predictors moving together as they do now.";
    case PhraseId::near_dependency_note:
      return "Nearly constant: this sum of the standardised columns hardly varies, so its effect is hardly known.";
    case PhraseId::combination_note:
      return "Combinations of the standardised columns that the data do determine well. Estimate: change in the response when the combination rises by one standard deviation of its own.";
    case PhraseId::prediction_note:
      return "Intervals are for a single new row (" + percent(w.value(FactId::level)) + "). A row is outside the data when its leverage is above " + number(w.value(FactId::number), 3) + ", the largest among the rows of the fit.";
    case PhraseId::not_predictable_note:
      return "Rows without a prediction have an empty cell, or break a dependency that holds in every row of the data.";
    case PhraseId::illustration_note:
      return "Where no smallest effect that matters is given, the target is the size of the estimate itself: an illustration, not a calculation of power.";
    case PhraseId::rules_of_thumb_note:
      return "Marks such as a VIF of 4, 5 or 10 are rules of thumb. Whether a VIF matters depends on whether the interval is narrow enough: see the verdicts.";
    case PhraseId::structural_note:
      return w.names(FactId::terms) + (phrase.facts.list(FactId::terms).size() == 1 ? " is" : " are") + " built from other terms. Part of these VIFs comes from where zero lies and vanishes by centring, which does not make the data say more.";
    case PhraseId::exact_rows_note:
      return w.count(FactId::count) + " rows are fitted exactly whatever their value; they take no part in the leave-one-out error and the robust standard errors.";
    case PhraseId::standardised_only_note:
      return "No standard deviations were given, so every column counts in units of its own standard deviation.";
    case PhraseId::columns_skipped_note:
      return "Empty columns were skipped: " + w.names(FactId::columns) + ".";

    // -- checks
    case PhraseId::check_curvature_fine:
      return "Curvature: none seen (" + p_value(w.value(FactId::p)) + ", added square of the fitted values).";
    case PhraseId::check_curvature_seen:
      return "Curvature: the fit bends (" + p_value(w.value(FactId::p)) + ", added square of the fitted values). A square, a product or another scale may be missing; read single effects with care.";
    case PhraseId::check_spread_fine:
      return "Scatter: about the same everywhere (" + p_value(w.value(FactId::p)) + ", Koenker's test).";
    case PhraseId::check_spread_seen:
      return "Scatter: it differs from row to row (" + p_value(w.value(FactId::p)) + ", Koenker's test). Prefer robust standard errors.";
    case PhraseId::check_robust_same:
      return "Robust standard errors (HC3): every interval stays on the same side of zero, or across it.";
    case PhraseId::check_robust_differs:
      return "Robust standard errors (HC3): the conclusion on " + w.names(FactId::columns) + " changes. Report both, and prefer the robust one where the scatter differs.";
    case PhraseId::check_influence_none:
      return "Single rows: none moves the coefficients much (largest Cook's distance " + w.short_number(FactId::number) + ", " + w.text(FactId::address) + ").";
    case PhraseId::check_influence_seen:
      return "Single rows: " + w.text(FactId::address) + " moves the coefficients a lot (Cook's distance " + w.short_number(FactId::number) + "). Check that row for a slip; never delete it only because it disagrees.";
    case PhraseId::check_collinearity_rows_none:
      return "Collinearity: no single row makes or hides it (largest change: from " + w.short_number(FactId::condition_index) + " to " + w.short_number(FactId::number) + " without " + w.text(FactId::address) + ").";
    case PhraseId::check_collinearity_rows_seen:
      return "Collinearity: it hangs on " + w.text(FactId::address) + ". Without that row the largest condition index goes from " + w.short_number(FactId::condition_index) + " to " + w.short_number(FactId::number) + ".";
    case PhraseId::check_recording_fine:
      return "Recorded digits: enough. Rounding in the cells moves no coefficient by more than " + percent(w.value(FactId::factor)) + " of its standard error.";
    case PhraseId::check_recording_matters:
      return "Recorded digits: too few for " + w.names(FactId::columns) + ". Rounding in the cells alone moves a coefficient by up to " + percent(w.value(FactId::factor)) + " of its standard error, which the interval does not show.";
    case PhraseId::check_digits_fine:
      return "Arithmetic: about " + w.count(FactId::digits) + " digits of the coefficients can be trusted.";
    case PhraseId::check_digits_few:
      return "Arithmetic: only about " + w.count(FactId::digits) + " digits of the coefficients can be trusted, for the columns are nearly dependent. Do not report more.";
    case PhraseId::check_rows_enough:
      return "Rows: " + w.count(FactId::rows) + " for " + w.count(FactId::count) + " coefficients.";
    case PhraseId::check_rows_few:
      return "Rows: only " + w.count(FactId::rows) + " for " + w.count(FactId::count) + " coefficients. The fit follows chance more than it seems to; look at the leave-one-out error.";

    // -- write-up
    case PhraseId::methods_model:
      return "A linear model of " + w.text(FactId::response) + " on " + w.names(FactId::terms) + " was fitted by least squares to " + w.count(FactId::rows) + " rows" + (w.value(FactId::rows_left_out) > 0 ? " (" + w.count(FactId::rows_left_out) + " of " + w.count(FactId::count) + " rows" + w.were(FactId::rows_left_out) + " left out)." : ".");
    case PhraseId::methods_category:
      return "The category " + w.text(FactId::column) + " was coded by one indicator for each level but " + w.text(FactId::baseline) + ", with which the others are compared.";
    case PhraseId::methods_fit:
      return "Intervals have a level of " + percent(w.value(FactId::level)) + " and rest on ordinary standard errors.";
    case PhraseId::methods_fit_robust:
      return "Intervals have a level of " + percent(w.value(FactId::level)) + " and rest on heteroscedasticity-consistent standard errors (HC3; MacKinnon & White 1985).";
    case PhraseId::methods_collinearity:
      return "How far the predictors move together was measured by variance inflation factors (Marquardt 1970; for terms of several columns Fox & Monette 1992) and by condition indices with variance proportions (Belsley, Kuh & Welsch 1980). No predictor was left out because of such a measure.";
    case PhraseId::methods_smallest_effect:
      return "The smallest effect that matters, in units of the response per unit of the term, was set to " + w.effects() + ". An effect is called clear when its interval leaves out zero, ruled out when its interval includes zero and no effect that matters, and undecided otherwise.";
    case PhraseId::results_fit:
      return "The model accounts for " + percent(w.value(FactId::share)) + " of the variation of " + w.text(FactId::response) + " (" + w.f_test() + "; residual standard deviation " + w.short_number(FactId::spread) + ").";
    case PhraseId::results_prediction:
      return "Predicting each row from all others misses by " + w.short_number(FactId::number) + " (root mean square).";
    case PhraseId::limitations_undecided:
      return "The data do not decide on " + w.names(FactId::terms) + ": their intervals include both no effect and effects that could matter. This is not evidence of no effect.";
    case PhraseId::limitations_nothing_undecided: return "No term was left undecided.";
    case PhraseId::limitations_collinearity:
      return "For " + w.names(FactId::terms) + ", that the predictors move together is enough to explain it: in data in which they are moved apart, intervals would be narrow enough with the same number of rows.";
    case PhraseId::limitations_not_estimable:
      return "The effects of " + w.names(FactId::terms) + " could not be estimated, because of exact dependencies among the columns.";
    case PhraseId::limitations_association:
      return "The effects are associations with everything else in the model held equal. Whether changing a predictor would change the response depends on how the data came about.";
    case PhraseId::reproducibility_data:
      return "Data: " + w.text(FactId::range) + (w.text(FactId::file).empty() ? "" : " in " + w.text(FactId::file)) + ", " + w.count(FactId::rows) + " rows used, fingerprint " + w.text(FactId::fingerprint) + ".";
    case PhraseId::reproducibility_settings:
      return phrase.facts.list(FactId::settings).empty() ? "Settings: all as they come." : "Settings: " + w.names(FactId::settings) + ".";
    case PhraseId::reproducibility_version:
      return "Unply " + w.text(FactId::version) + ", " + w.text(FactId::date) + ", seed " + seed(w.value(FactId::seed)) + ". The same cells, settings and seed give the same numbers.";
    case PhraseId::caution_text:
      return "Where a decision can hurt someone (process settings, health, staffing), these results are one input among others: follow the rules that apply where you are, and have a qualified person review them.";
  }
  return "";
}

}  // namespace unply::text
