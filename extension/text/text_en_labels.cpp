// English: headings of tables, titles, sheet names, names of settings.
#include "extension/text/text.hpp"

namespace unply::text {

std::string heading(const Heading& heading) {
  switch (heading.id) {
    case HeadingId::name: return heading.name;
    case HeadingId::item: return "Item";
    case HeadingId::value: return "Value";
    case HeadingId::term: return "Term";
    case HeadingId::estimate: return "Estimate";
    case HeadingId::standard_error: return "Standard error";
    case HeadingId::t: return "t";
    case HeadingId::df: return "df";
    case HeadingId::p: return "p";
    case HeadingId::lower: return "Interval from";
    case HeadingId::upper: return "Interval to";
    case HeadingId::standardised: return "Standardised";
    case HeadingId::vif: return "VIF";
    case HeadingId::generalised_vif: return "Generalised VIF";
    case HeadingId::per_df_root: return "Root per column";
    case HeadingId::shared_variation: return "Share known from the others";
    case HeadingId::verdict: return "Verdict";
    case HeadingId::scatter: return "Scatter (s)";
    case HeadingId::rows_factor: return "Rows factor (1/√(n-1))";
    case HeadingId::spread: return "Spread";
    case HeadingId::widening: return "Widening (√VIF)";
    case HeadingId::error_without_collinearity: return "Standard error if moved apart";
    case HeadingId::half_width: return "Half-width";
    case HeadingId::target: return "Target half-width";
    case HeadingId::rows_needed: return "Rows needed";
    case HeadingId::spread_needed: return "Spread needed";
    case HeadingId::scatter_needed: return "Scatter needed";
    case HeadingId::vif_needed: return "VIF needed";
    case HeadingId::vif_centred: return "VIF if centred";
    case HeadingId::vif_as_given: return "VIF not centred";
    case HeadingId::kind: return "Kind";
    case HeadingId::condition_index: return "Condition index";
    case HeadingId::intercept: return "Intercept";
    case HeadingId::equation: return "Holds in every row";
    case HeadingId::leave_out: return "What to do";
    case HeadingId::group: return "Group";
    case HeadingId::members: return "Move together";
    case HeadingId::f: return "F";
    case HeadingId::df_numerator: return "df of the group";
    case HeadingId::df_denominator: return "Residual df";
    case HeadingId::near_dependency: return "Nearly constant";
    case HeadingId::combination: return "Well determined";
    case HeadingId::weights: return "Weights";
    case HeadingId::share: return heading.name.empty() ? "Share of variance" : heading.name;
    case HeadingId::prediction: return "Prediction";
    case HeadingId::interval_lower: return "New row from";
    case HeadingId::interval_upper: return "New row to";
    case HeadingId::leverage: return "Leverage";
    case HeadingId::outside: return "Range";
    case HeadingId::address: return "Cell";
    case HeadingId::row: return "Row";
    case HeadingId::residual: return "Residual";
    case HeadingId::cooks_distance: return "Cook's distance";
    case HeadingId::studentised: return "Studentised residual";
    case HeadingId::condition_with: return "Condition index with it";
    case HeadingId::condition_without: return "Condition index without it";
    case HeadingId::unit_recorded: return "Last recorded digit";
    case HeadingId::movement: return "Movement";
    case HeadingId::movement_share: return "Movement / standard error";
    case HeadingId::check: return "Check";
    case HeadingId::statistic: return "Statistic";
    case HeadingId::what_it_means: return "What was checked";
    case HeadingId::rows_used: return "Rows used";
    case HeadingId::rows_now: return "Rows now";
    case HeadingId::rows: return "Rows used";
    case HeadingId::rows_left_out: return "Rows left out";
    case HeadingId::coefficients: return "Coefficients";
    case HeadingId::residual_df: return "Residual degrees of freedom";
    case HeadingId::r_squared: return "R2";
    case HeadingId::adjusted_r_squared: return "Adjusted R2";
    case HeadingId::residual_sd: return "Residual standard deviation (s)";
    case HeadingId::f_test: return "F of the whole model";
    case HeadingId::f_p: return "p of the whole model";
    case HeadingId::prediction_error: return "Leave-one-out prediction error";
    case HeadingId::condition_number: return "Largest condition index";
    case HeadingId::trusted_digits: return "Digits that can be trusted";
    case HeadingId::data_range: return "Data";
    case HeadingId::response: return "Response";
    case HeadingId::purpose: return "Purpose";
    case HeadingId::level: return "Level of the intervals";
    case HeadingId::standard_error_kind: return "Standard errors";
    case HeadingId::seed: return "Seed";
    case HeadingId::fingerprint: return "Fingerprint of the data";
    case HeadingId::version: return "Version";
    case HeadingId::date: return "Date";
    case HeadingId::categories: return "Categories";
    case HeadingId::settings: return "Settings";
    case HeadingId::terms: return "Terms";
    case HeadingId::smallest_effect: return "Smallest effect that matters";
    case HeadingId::effect_of_one_sd: return "Change in " + heading.name;
  }
  return "";
}

std::string block_title(BlockId id) {
  switch (id) {
    case BlockId::analysed: return "What was analysed";
    case BlockId::findings: return "Findings";
    case BlockId::estimates: return "Effect of each term";
    case BlockId::fit_quality: return "The fit as a whole";
    case BlockId::inflation: return "How far each term moves with the others";
    case BlockId::condition: return "Condition indices and where each coefficient's variance sits";
    case BlockId::dependencies: return "Exact dependencies";
    case BlockId::ledger: return "Precision ledger: why each interval is as wide as it is";
    case BlockId::groups: return "Collinear groups";
    case BlockId::combinations: return "What the data do determine within the groups";
    case BlockId::predictions: return "Predictions";
    case BlockId::rows_needed: return "Rows needed";
    case BlockId::checks: return "Checks";
    case BlockId::influential: return "Rows that move the coefficients most";
    case BlockId::recording: return "Recorded digits";
    case BlockId::from_correlations: return "From a table of correlations";
    case BlockId::methods: return "Methods";
    case BlockId::results: return "Results";
    case BlockId::limitations: return "Limitations";
    case BlockId::reproducibility: return "To run it again";
    case BlockId::estimates_chart:
      return "Effect of one standard deviation more of each predictor (of a level: against its baseline)";
    case BlockId::inflation_chart: return "VIF of each term, with the marks 4, 5 and 10 (rules of thumb)";
  }
  return "";
}

std::string section_title(SectionId id) {
  switch (id) {
    case SectionId::analysed: return "What was analysed";
    case SectionId::findings: return "What was found";
    case SectionId::estimates: return "Estimates";
    case SectionId::ledger: return "Precision ledger";
    case SectionId::inflation: return "Inflation";
    case SectionId::groups: return "Groups";
    case SectionId::condition: return "Condition";
    case SectionId::checks: return "Checks";
    case SectionId::write_up: return "Write-up";
  }
  return "";
}

std::string label(LabelId id) {
  switch (id) {
    case LabelId::report_title: return "What these data can tell apart";
    case LabelId::first_sheet_name: return "Unply findings";
    case LabelId::tables_sheet_name: return "Unply tables";
    case LabelId::write_up_sheet_name: return "Unply write-up";
    case LabelId::tables_title: return "All tables";
    case LabelId::write_up_title: return "Text for the write-up";
    case LabelId::at_a_glance: return "At a glance";
    case LabelId::chart_numbers: return "Numbers behind the charts (not printed)";
    case LabelId::rule_of_thumb: return "rule of thumb";
    case LabelId::interval_from: return "Interval from";
    case LabelId::interval_to: return "Interval to";
    case LabelId::below_point: return "Below the point";
    case LabelId::above_point: return "Above the point";
    case LabelId::undo_report: return "Add Unply report";
    case LabelId::notes_heading: return "Notes";
    case LabelId::expected: return "Expected";
    case LabelId::correct: return "Correct";
    case LabelId::result: return "Result";
  }
  return "";
}

std::string argument_name(ArgumentId id) {
  switch (id) {
    case ArgumentId::response: return "response";
    case ArgumentId::predictors: return "predictors";
    case ArgumentId::new_rows: return "new rows";
    case ArgumentId::correlations: return "correlations";
    case ArgumentId::n: return "n";
    case ArgumentId::settings: return "settings";
  }
  return "";
}

std::string argument_values(ArgumentId id) {
  switch (id) {
    case ArgumentId::response: return "one column with its heading";
    case ArgumentId::predictors:
    case ArgumentId::new_rows: return "a range with headings in its first row";
    case ArgumentId::correlations: return "a square range with headings in its first row";
    case ArgumentId::n: return "a whole number of rows above 0";
    case ArgumentId::settings: return "a range of two columns, name and value";
  }
  return "";
}

const std::vector<SettingId>& all_settings() {
  static const std::vector<SettingId> settings = {
      SettingId::table,        SettingId::terms,           SettingId::response,  SettingId::data,
      SettingId::categories,   SettingId::purpose,         SettingId::smallest_effect,
      SettingId::smallest_effect_of, SettingId::baseline_of, SettingId::level,   SettingId::intercept,
      SettingId::centre,       SettingId::standard_errors, SettingId::rows,      SettingId::headings,
      SettingId::condition,    SettingId::seed,            SettingId::means,     SettingId::standard_deviations};
  return settings;
}

std::string setting_name(SettingId id) {
  switch (id) {
    case SettingId::table: return "table";
    case SettingId::terms: return "terms";
    case SettingId::response: return "response";
    case SettingId::data: return "data";
    case SettingId::categories: return "categories";
    case SettingId::purpose: return "purpose";
    case SettingId::smallest_effect: return "smallest effect";
    case SettingId::smallest_effect_of: return "smallest effect of";
    case SettingId::baseline_of: return "baseline of";
    case SettingId::level: return "level";
    case SettingId::intercept: return "intercept";
    case SettingId::centre: return "centre";
    case SettingId::standard_errors: return "standard errors";
    case SettingId::rows: return "rows";
    case SettingId::headings: return "headings";
    case SettingId::condition: return "condition";
    case SettingId::seed: return "seed";
    case SettingId::means: return "means";
    case SettingId::standard_deviations: return "standard deviations";
  }
  return "";
}

bool setting_takes_a_name(SettingId id) {
  return id == SettingId::smallest_effect_of || id == SettingId::baseline_of;
}

std::string setting_values(SettingId id) {
  switch (id) {
    case SettingId::table: {
      std::vector<std::string> names;
      for (const BlockId table : tables_from_correlations()) names.push_back(table_name(table));
      return list(names);
    }
    case SettingId::terms: return "terms such as A; B; A*B; A^2, parted by semicolons or in cells side by side";
    case SettingId::response: return "the heading of one column";
    case SettingId::data: return "a range such as Data.A1:D40";
    case SettingId::categories: return "headings of columns, parted by semicolons or in cells side by side";
    case SettingId::purpose:
      return list({purpose_name(Purpose::test_hypothesis), purpose_name(Purpose::explore),
                   purpose_name(Purpose::predict)});
    case SettingId::smallest_effect:
    case SettingId::smallest_effect_of: return "a number above 0, in units of the response";
    case SettingId::baseline_of: return "one level of the category";
    case SettingId::level: return "a share from 0.5 to 0.9999, such as 0.95 or 95 %";
    case SettingId::intercept:
    case SettingId::centre:
    case SettingId::headings: return list({yes_no(true), yes_no(false)});
    case SettingId::standard_errors:
      return list({standard_errors_name(StandardErrors::ordinary), standard_errors_name(StandardErrors::robust)});
    case SettingId::rows: return list({rows_name(false), rows_name(true)});
    case SettingId::condition: return list({condition_name(false), condition_name(true)});
    case SettingId::seed: return "a whole number from 0 to 9,007,199,254,740,992";
    case SettingId::means: return "one number for each variable, parted by semicolons or in cells side by side";
    case SettingId::standard_deviations:
      return "one number above 0 for each variable, parted by semicolons or in cells side by side";
  }
  return "";
}

std::string purpose_name(Purpose purpose) {
  switch (purpose) {
    case Purpose::test_hypothesis: return "test";
    case Purpose::explore: return "explore";
    case Purpose::predict: return "predict";
  }
  return "";
}

std::string standard_errors_name(StandardErrors kind) {
  switch (kind) {
    case StandardErrors::ordinary: return "ordinary";
    case StandardErrors::robust: return "robust";
  }
  return "";
}

std::string yes_no(bool value) { return value ? "yes" : "no"; }
std::string rows_name(bool visible_only) { return visible_only ? "visible" : "all"; }
std::string condition_name(bool centred) { return centred ? "centred" : "uncentred"; }

std::string table_name(BlockId id) {
  switch (id) {
    case BlockId::estimates: return "estimates";
    case BlockId::fit_quality: return "fit quality";
    case BlockId::inflation: return "VIF";
    case BlockId::condition: return "condition";
    case BlockId::ledger: return "ledger";
    case BlockId::groups: return "groups";
    case BlockId::combinations: return "combinations";
    case BlockId::rows_needed: return "rows needed";
    case BlockId::analysed:
    case BlockId::findings:
    case BlockId::dependencies:
    case BlockId::predictions:
    case BlockId::checks:
    case BlockId::influential:
    case BlockId::recording:
    case BlockId::from_correlations:
    case BlockId::methods:
    case BlockId::results:
    case BlockId::limitations:
    case BlockId::reproducibility:
    case BlockId::estimates_chart:
    case BlockId::inflation_chart:
      return "";
  }
  return "";
}

const std::vector<BlockId>& tables_from_correlations() {
  static const std::vector<BlockId> tables = {BlockId::estimates, BlockId::inflation,    BlockId::ledger,
                                              BlockId::groups,    BlockId::combinations, BlockId::condition,
                                              BlockId::fit_quality, BlockId::rows_needed};
  return tables;
}

}  // namespace unply::text
