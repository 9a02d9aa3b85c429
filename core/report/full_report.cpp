// The whole report: which blocks, in which order, and which sentences the findings are made of.
#include <algorithm>
#include <cmath>

#include "core/base/tolerance.hpp"
#include "core/report/analysis.hpp"
#include "core/report/blocks.hpp"

namespace unply {
namespace {

using Sentences = std::vector<Phrase>;

std::vector<std::string> all_terms(const Layout& layout) {
  std::vector<std::string> names;
  for (const TermLayout& term : layout.terms) names.push_back(term.name);
  return names;
}

/// Members of a group other than one column.
std::vector<std::string> others_of(const CollinearGroup& group, std::size_t column, const Layout& layout) {
  std::vector<std::size_t> others;
  for (std::size_t member : group.columns)
    if (member != column) others.push_back(member);
  return names_of(others, layout);
}

// -- findings -------------------------------------------------------------------------------------------------------

Facts term_facts(const Analysis& analysis, std::size_t j) {
  const Layout& layout = analysis.layout();
  const CoefficientTest& test = analysis.tests()[j];
  const LedgerRow& ledger = analysis.ledger()[j];
  Facts facts = {{FactId::term, layout.columns[j]},
                 {FactId::response, layout.response},
                 {FactId::estimate, test.estimate},
                 {FactId::lower, test.interval.lower},
                 {FactId::upper, test.interval.upper},
                 {FactId::half_width, test.interval.half_width()},
                 {FactId::level, analysis.model().level},
                 {FactId::vif, ledger.vif},
                 {FactId::factor, ledger.widening},
                 {FactId::number, test.interval.half_width() / ledger.widening},  // without collinearity
                 {FactId::spread, ledger.spread},
                 {FactId::scatter, ledger.residual_sd},
                 {FactId::rows, static_cast<double>(analysis.fit().rows)}};
  const TermLayout& term = layout.terms[layout.term_of[j]];
  if (!term.baseline.empty()) facts.set(FactId::baseline, term.baseline);
  if (std::isfinite(analysis.verdicts()[j].smallest_effect))
    facts.set(FactId::effect, analysis.verdicts()[j].smallest_effect);
  return facts;
}

PhraseId first_sentence(const TermVerdict& verdict) {
  switch (verdict.kind) {
    case VerdictKind::clear:
      switch (verdict.size) {
        case EffectSize::not_asked: return PhraseId::term_clear;
        case EffectSize::beyond: return PhraseId::term_clear_beyond;
        case EffectSize::size_uncertain: return PhraseId::term_clear_size_uncertain;
        case EffectSize::too_small: return PhraseId::term_clear_too_small;
      }
      break;
    case VerdictKind::ruled_out: return PhraseId::term_ruled_out;
    case VerdictKind::undecided: return PhraseId::term_undecided;
    case VerdictKind::not_estimable: return PhraseId::term_not_estimable;
  }
  return PhraseId::term_undecided;
}

Sentences term_finding(const Analysis& analysis, std::size_t j) {
  const Layout& layout = analysis.layout();
  const TermVerdict& verdict = analysis.verdicts()[j];
  if (verdict.kind == VerdictKind::not_estimable) {
    Facts facts = {{FactId::term, layout.columns[j]}, {FactId::equation, std::string()}};
    for (const DependencyEquation& equation : analysis.equations())
      if (std::find(equation.columns.begin(), equation.columns.end(), j) != equation.columns.end()) {
        facts.set(FactId::equation, equation.text);
        if (equation.is_constant) facts.set(FactId::column, equation.text);
        break;
      }
    return {{PhraseId::term_not_estimable, facts}};
  }
  const LedgerRow& ledger = analysis.ledger()[j];
  Facts facts = term_facts(analysis, j);
  std::vector<std::string> companions;
  if (verdict.group) companions = others_of(analysis.groups()[*verdict.group], j, layout);
  if (!companions.empty()) facts.set(FactId::columns, companions);
  Sentences sentences = {{first_sentence(verdict), facts}};
  const bool inflated = ledger.vif >= tolerance::vif_marks[0];
  if (verdict.kind != VerdictKind::undecided) {
    if (inflated) sentences.push_back({PhraseId::nothing_to_do, facts});
    return sentences;
  }
  switch (verdict.collinearity) {
    case CollinearityRole::would_account: sentences.push_back({PhraseId::cause_collinearity, facts}); break;
    case CollinearityRole::partly: sentences.push_back({PhraseId::cause_collinearity_partly, facts}); break;
    case CollinearityRole::not_the_cause: sentences.push_back({PhraseId::cause_not_collinearity, facts}); break;
    case CollinearityRole::none: break;
  }
  if (verdict.collinearity != CollinearityRole::would_account) {
    switch (verdict.other) {
      case OtherCause::rows: sentences.push_back({PhraseId::cause_other_rows, facts}); break;
      case OtherCause::spread: sentences.push_back({PhraseId::cause_other_spread, facts}); break;
      case OtherCause::scatter: sentences.push_back({PhraseId::cause_other_scatter, facts}); break;
      case OtherCause::none: break;
    }
  }
  if (!ledger.target_is_illustration && ledger.rows.reachable && std::isfinite(ledger.rows.value)) {
    facts.set(FactId::half_width, ledger.target).set(FactId::rows_needed, ledger.rows.value);
    sentences.push_back({companions.empty() ? PhraseId::needs_rows : PhraseId::needs_rows_moved_apart, facts});
  }
  return sentences;
}

Sentences group_finding(const Analysis& analysis, const CollinearGroup& group) {
  const LeastSquaresFit& fit = analysis.fit();
  const Layout& layout = analysis.layout();
  const Facts test = {{FactId::terms, names_of(group.columns, layout)},
                      {FactId::response, layout.response},
                      {FactId::f, group.f},
                      {FactId::df_numerator, static_cast<double>(group.df_numerator)},
                      {FactId::df, static_cast<double>(fit.residual_df)},
                      {FactId::p, group.p},
                      {FactId::condition_index, group.condition_index}};
  const bool clear = group.p < 1 - analysis.model().level;
  Sentences sentences = {{clear ? PhraseId::group_joint_clear : PhraseId::group_joint_undecided, test}};
  if (group.structural) sentences.push_back({PhraseId::group_structural, test});
  for (const Combination& combination : group.well_determined) {
    // One standard deviation of the combination w'z moves column j by w_j sqrt(variance of w'z) sd_j.
    const double sd = std::sqrt(combination.share * static_cast<double>(group.columns.size()));
    std::vector<double> changes;
    for (std::size_t k = 0; k < group.columns.size(); ++k)
      changes.push_back(combination.weights[k] * sd * fit.sd[static_cast<Eigen::Index>(group.columns[k])]);
    if (std::abs(*std::max_element(changes.begin(), changes.end(), [](double a, double b) {
          return std::abs(a) < std::abs(b);
        })) == 0)
      continue;
    sentences.push_back({PhraseId::group_direction,
                         {{FactId::response, layout.response},
                          {FactId::columns, names_of(group.columns, layout)},
                          {FactId::weights, changes},
                          {FactId::estimate, combination.estimate},
                          {FactId::lower, combination.lower},
                          {FactId::upper, combination.upper},
                          {FactId::level, analysis.model().level}}});
    break;  // the leading one is the finding; the table has the others
  }
  return sentences;
}

FindingBlock findings_block(const Analysis& analysis) {
  FindingBlock block{BlockId::findings, {}};
  const Layout& layout = analysis.layout();
  for (const DependencyEquation& equation : analysis.equations()) {
    const PhraseId id = equation.is_constant ? PhraseId::constant_found : PhraseId::dependency_found;
    block.findings.push_back(
        {{id, {{FactId::equation, equation.text}, {FactId::columns, names_of(equation.columns, layout)}}}});
  }
  for (const CollinearGroup& group : analysis.groups()) block.findings.push_back(group_finding(analysis, group));
  for (std::size_t t = 0; t < layout.terms.size(); ++t) {
    const TermLayout& term = layout.terms[t];
    for (std::size_t column : term.columns) block.findings.push_back(term_finding(analysis, column));
    std::vector<std::size_t> estimable;
    for (std::size_t column : term.columns)
      if (analysis.fit().estimable[column]) estimable.push_back(column);
    if (estimable.size() > 1) {
      const bool robust = analysis.model().standard_errors == StandardErrors::robust;
      const JointTest test = robust ? joint_test(analysis.fit(), estimable, analysis.checks().robust_covariance)
                                    : joint_test(analysis.fit(), estimable);
      block.findings.push_back({{PhraseId::category_joint,
                                 {{FactId::term, term.name},
                                  {FactId::f, test.f},
                                  {FactId::df_numerator, static_cast<double>(test.df_numerator)},
                                  {FactId::df, static_cast<double>(test.df_denominator)},
                                  {FactId::p, test.p}}}});
    }
  }
  switch (analysis.model().purpose) {
    case Purpose::test_hypothesis: block.findings.push_back({{PhraseId::purpose_advice_test}}); break;
    case Purpose::explore: block.findings.push_back({{PhraseId::purpose_advice_explore}}); break;
    case Purpose::predict: block.findings.push_back({{PhraseId::purpose_advice_predict}}); break;
  }
  const bool no_target = !analysis.model().smallest_effect && analysis.model().smallest_effects.empty();
  if (no_target) block.findings.push_back({{PhraseId::no_smallest_effect}});
  return block;
}

ChartBlock estimates_chart(const Analysis& analysis) {
  ChartBlock chart{BlockId::estimates_chart, {HeadingId::effect_of_one_sd, analysis.layout().response}, {}, {}, {}, {}, {0}};
  const Layout& layout = analysis.layout();
  for (std::size_t j = 0; j < layout.columns.size(); ++j) {
    const CoefficientTest& test = analysis.tests()[j];
    if (!std::isfinite(test.interval.lower) || !std::isfinite(test.interval.upper)) continue;
    // A level of a category against its baseline is a step of 1; everything else is moved by its standard deviation.
    const bool level = !layout.terms[layout.term_of[j]].baseline.empty();
    const double step = level ? 1 : analysis.fit().sd[static_cast<Eigen::Index>(j)];
    chart.names.push_back(layout.columns[j]);
    chart.values.push_back(test.estimate * step);
    chart.lower.push_back(test.interval.lower * step);
    chart.upper.push_back(test.interval.upper * step);
  }
  return chart;
}

ChartBlock inflation_chart(const Analysis& analysis) {
  ChartBlock chart{BlockId::inflation_chart, {HeadingId::vif}, {}, {}, {}, {}, {}};
  for (const TermInflation& inflation : analysis.inflation()) {
    if (!std::isfinite(inflation.comparable)) continue;
    chart.names.push_back(analysis.layout().terms[inflation.term].name);
    chart.values.push_back(inflation.comparable);
  }
  chart.marks.assign(std::begin(tolerance::vif_marks), std::end(tolerance::vif_marks));
  return chart;
}

// -- checks ---------------------------------------------------------------------------------------------------------

std::string address_of(const Analysis& analysis, std::size_t design_row) {
  const Table& table = analysis.table();
  const Column& column = analysis.layout().response.empty() ? table.columns.front()
                                                            : table.columns[table.find(analysis.layout().response)];
  return column.address(analysis.design().selection().row(design_row));
}

TableBlock checks_block(const Analysis& analysis) {
  TableBlock block{BlockId::checks,
                   {{HeadingId::what_it_means}, {HeadingId::statistic}, {HeadingId::p}},
                   {}};
  const ResidualChecks& checks = analysis.checks();
  const LeastSquaresFit& fit = analysis.fit();
  const Layout& layout = analysis.layout();
  const double seldom = 1 - analysis.model().level;
  const auto add = [&block](PhraseId id, Facts facts, Value statistic = {}, Value p = {}) {
    block.rows.push_back({Phrase{id, std::move(facts)}, std::move(statistic), std::move(p)});
  };
  if (checks.curvature_checked && std::isfinite(checks.curvature_p))
    add(checks.curvature_p < seldom ? PhraseId::check_curvature_seen : PhraseId::check_curvature_fine,
        {{FactId::p, checks.curvature_p}}, checks.curvature_f, checks.curvature_p);
  if (std::isfinite(checks.spread_p))
    add(checks.spread_p < seldom ? PhraseId::check_spread_seen : PhraseId::check_spread_fine,
        {{FactId::p, checks.spread_p}}, checks.spread_statistic, checks.spread_p);
  if (checks.conclusions_change.empty()) add(PhraseId::check_robust_same, {});
  else add(PhraseId::check_robust_differs, {{FactId::columns, names_of(checks.conclusions_change, layout)}});
  if (!checks.influential.empty()) {
    const InfluentialRow& row = checks.influential.front();
    const bool seen = row.cooks_distance > tolerance::influential_cooks_distance;
    add(seen ? PhraseId::check_influence_seen : PhraseId::check_influence_none,
        {{FactId::address, address_of(analysis, row.row)}, {FactId::number, row.cooks_distance}},
        row.cooks_distance);
  }
  if (!checks.collinearity_rows.empty()) {
    const CollinearityRow& row = checks.collinearity_rows.front();
    const double ratio = std::max(row.condition_with / row.condition_without, row.condition_without / row.condition_with);
    add(ratio >= tolerance::condition_change ? PhraseId::check_collinearity_rows_seen
                                             : PhraseId::check_collinearity_rows_none,
        {{FactId::address, address_of(analysis, row.row)},
         {FactId::condition_index, row.condition_with},
         {FactId::number, row.condition_without}},
        ratio);
  }
  const RecordingPrecision& recording = analysis.recording();
  std::vector<std::string> moved;
  double largest = 0;
  for (Eigen::Index j = 0; j < recording.against_standard_error.size(); ++j) {
    const double share = recording.against_standard_error[j];
    if (!std::isfinite(share)) continue;
    largest = std::max(largest, share);
    if (share > tolerance::recording_share) moved.push_back(layout.columns[static_cast<std::size_t>(j)]);
  }
  add(moved.empty() ? PhraseId::check_recording_fine : PhraseId::check_recording_matters,
      {{FactId::columns, moved}, {FactId::factor, largest}}, largest);
  add(fit.trusted_digits < tolerance::few_trusted_digits ? PhraseId::check_digits_few : PhraseId::check_digits_fine,
      {{FactId::digits, std::floor(fit.trusted_digits)}}, fit.trusted_digits);
  const double coefficients = static_cast<double>(fit.kept.size() + (fit.intercept ? 1 : 0));
  const double rows = static_cast<double>(fit.rows);
  add(rows < tolerance::few_rows_per_coefficient * coefficients ? PhraseId::check_rows_few : PhraseId::check_rows_enough,
      {{FactId::rows, rows}, {FactId::count, coefficients}}, rows / std::max(coefficients, 1.0));
  return block;
}

TableBlock influential_block(const Analysis& analysis) {
  TableBlock block{BlockId::influential,
                   {{HeadingId::address}, {HeadingId::cooks_distance}, {HeadingId::leverage}, {HeadingId::residual},
                    {HeadingId::studentised}},
                   {}};
  const auto number = [](double value) { return std::isfinite(value) ? Value(value) : Value(Phrase{PhraseId::without_limit}); };
  for (const InfluentialRow& row : analysis.checks().influential)
    block.rows.push_back({address_of(analysis, row.row), number(row.cooks_distance), number(row.leverage),
                          number(row.residual), number(row.studentised)});
  if (analysis.checks().exact_leverage_rows > 0)
    block.notes.push_back(
        {PhraseId::exact_rows_note, {{FactId::count, static_cast<double>(analysis.checks().exact_leverage_rows)}}});
  return block;
}

TableBlock recording_block(const Analysis& analysis) {
  TableBlock block{BlockId::recording,
                   {{HeadingId::term}, {HeadingId::unit_recorded}, {HeadingId::movement}, {HeadingId::movement_share}},
                   {}};
  const RecordingPrecision& recording = analysis.recording();
  const Layout& layout = analysis.layout();
  for (std::size_t j = 0; j < layout.columns.size(); ++j) {
    const Eigen::Index column = static_cast<Eigen::Index>(j);
    if (!analysis.fit().estimable[j]) continue;
    Value unit;  // only plain columns were recorded; products, powers and levels follow from them
    if (layout.terms[layout.term_of[j]].kind == TermKind::plain && j < recording.unit.size())
      unit = recording.unit[j] > 0 ? Value(recording.unit[j]) : Value(Phrase{PhraseId::taken_as_exact});
    block.rows.push_back({layout.columns[j], unit, recording.movement[column],
                          std::isfinite(recording.against_standard_error[column])
                              ? Value(recording.against_standard_error[column])
                              : Value()});
  }
  block.notes.push_back({recording.refits > 0 ? PhraseId::recording_refits_note : PhraseId::recording_closed_form_note,
                         {{FactId::count, static_cast<double>(recording.refits)},
                          {FactId::seed, static_cast<double>(recording.seed)}}});
  return block;
}

// -- what was analysed, and the write-up -----------------------------------------------------------------------------

PhraseId purpose_word(Purpose purpose) {
  switch (purpose) {
    case Purpose::test_hypothesis: return PhraseId::purpose_test;
    case Purpose::explore: return PhraseId::purpose_explore;
    case Purpose::predict: return PhraseId::purpose_predict;
  }
  return PhraseId::purpose_explore;
}

TableBlock analysed_block(const Analysis& analysis, const ReportContext& context) {
  TableBlock block{BlockId::analysed, {{HeadingId::item}, {HeadingId::value}}, {}};
  const auto add = [&block](HeadingId item, Value value) {
    block.rows.push_back({Heading{item}, std::move(value)});
    block.row_formats.push_back(number_format(item));
  };
  const Model& model = analysis.model();
  const RowSelection& selection = analysis.design().selection();
  add(HeadingId::data_range, context.data_range);
  add(HeadingId::response, analysis.layout().response);
  add(HeadingId::terms, Phrase{PhraseId::list_of, {{FactId::columns, all_terms(analysis.layout())}}});
  add(HeadingId::rows, Phrase{PhraseId::rows_summary,
                              {{FactId::rows, static_cast<double>(selection.used)},
                               {FactId::count, static_cast<double>(selection.all_rows)},
                               {FactId::rows_left_out, static_cast<double>(selection.all_rows - selection.used)}}});
  add(HeadingId::purpose, Phrase{purpose_word(model.purpose)});
  add(HeadingId::level, model.level);
  add(HeadingId::standard_error_kind,
      Phrase{model.standard_errors == StandardErrors::robust ? PhraseId::robust_errors : PhraseId::ordinary_errors});
  if (model.smallest_effect || !model.smallest_effects.empty()) {
    std::vector<std::string> names;
    std::vector<double> effects;
    for (const TermVerdict& verdict : analysis.verdicts()) {
      if (!std::isfinite(verdict.smallest_effect)) continue;
      names.push_back(analysis.layout().columns[verdict.column]);
      effects.push_back(verdict.smallest_effect);
    }
    add(HeadingId::smallest_effect,
        Phrase{PhraseId::effects_of, {{FactId::terms, names}, {FactId::weights, effects}}});
  }
  block.notes = context.notes;
  const std::vector<Phrase> shared = shared_notes(analysis);
  block.notes.insert(block.notes.end(), shared.begin(), shared.end());
  return block;
}

std::string hexadecimal(std::uint64_t value) {
  const char* digits = "0123456789abcdef";
  std::string text;
  for (int shift = 60; shift >= 0; shift -= 4) text += digits[(value >> shift) & 15];
  return text;
}

ParagraphBlock methods_block(const Analysis& analysis) {
  ParagraphBlock block{BlockId::methods, {}};
  const RowSelection& selection = analysis.design().selection();
  block.sentences.push_back({PhraseId::methods_model,
                             {{FactId::response, analysis.layout().response},
                              {FactId::terms, all_terms(analysis.layout())},
                              {FactId::rows, static_cast<double>(selection.used)},
                              {FactId::count, static_cast<double>(selection.all_rows)},
                              {FactId::rows_left_out, static_cast<double>(selection.all_rows - selection.used)}}});
  for (const CategoryInfo& category : analysis.design().categories())
    block.sentences.push_back({PhraseId::methods_category,
                               {{FactId::column, category.column}, {FactId::baseline, category.levels.front()}}});
  const bool robust = analysis.model().standard_errors == StandardErrors::robust;
  block.sentences.push_back({robust ? PhraseId::methods_fit_robust : PhraseId::methods_fit,
                             {{FactId::level, analysis.model().level}}});
  block.sentences.push_back({PhraseId::methods_collinearity});
  std::vector<std::string> names;
  std::vector<double> effects;
  for (const TermVerdict& verdict : analysis.verdicts()) {
    if (!std::isfinite(verdict.smallest_effect)) continue;
    names.push_back(analysis.layout().columns[verdict.column]);
    effects.push_back(verdict.smallest_effect);
  }
  if (!names.empty())
    block.sentences.push_back({PhraseId::methods_smallest_effect, {{FactId::terms, names}, {FactId::weights, effects}}});
  return block;
}

ParagraphBlock results_block(const Analysis& analysis, const FindingBlock& findings) {
  ParagraphBlock block{BlockId::results, {}};
  const FitQuality quality = fit_quality(analysis.fit());
  block.sentences.push_back({PhraseId::results_fit,
                             {{FactId::share, quality.r_squared},
                              {FactId::f, quality.f},
                              {FactId::df_numerator, static_cast<double>(quality.df_model)},
                              {FactId::df, static_cast<double>(quality.residual_df)},
                              {FactId::p, quality.p},
                              {FactId::spread, quality.residual_sd},
                              {FactId::response, analysis.layout().response}}});
  block.sentences.push_back({PhraseId::results_prediction,
                             {{FactId::number, analysis.checks().prediction_error},
                              {FactId::response, analysis.layout().response}}});
  for (const Sentences& finding : findings.findings) {
    switch (finding.front().id) {  // what concerns the reader of the sheet, not the readers of the write-up
      case PhraseId::purpose_advice_test:
      case PhraseId::purpose_advice_explore:
      case PhraseId::purpose_advice_predict:
      case PhraseId::no_smallest_effect:
        continue;
      default: block.sentences.push_back(finding.front());
    }
  }
  return block;
}

ParagraphBlock limitations_block(const Analysis& analysis, const TableBlock& checks) {
  ParagraphBlock block{BlockId::limitations, {}};
  std::vector<std::string> undecided, collinear, inestimable;
  for (const TermVerdict& verdict : analysis.verdicts()) {
    const std::string& name = analysis.layout().columns[verdict.column];
    if (verdict.kind == VerdictKind::not_estimable) inestimable.push_back(name);
    if (verdict.kind != VerdictKind::undecided) continue;
    undecided.push_back(name);
    if (verdict.collinearity == CollinearityRole::would_account) collinear.push_back(name);
  }
  if (undecided.empty()) block.sentences.push_back({PhraseId::limitations_nothing_undecided});
  else block.sentences.push_back({PhraseId::limitations_undecided, {{FactId::terms, undecided}}});
  if (!collinear.empty()) block.sentences.push_back({PhraseId::limitations_collinearity, {{FactId::terms, collinear}}});
  if (!inestimable.empty())
    block.sentences.push_back({PhraseId::limitations_not_estimable, {{FactId::terms, inestimable}}});
  for (const auto& row : checks.rows) {
    const Phrase& phrase = std::get<Phrase>(row.front());
    switch (phrase.id) {
      case PhraseId::check_curvature_seen:
      case PhraseId::check_spread_seen:
      case PhraseId::check_robust_differs:
      case PhraseId::check_influence_seen:
      case PhraseId::check_collinearity_rows_seen:
      case PhraseId::check_recording_matters:
      case PhraseId::check_digits_few:
      case PhraseId::check_rows_few:
        block.sentences.push_back(phrase);
        break;
      default: break;
    }
  }
  block.sentences.push_back({PhraseId::limitations_association});
  block.sentences.push_back({PhraseId::caution_text});
  return block;
}

ParagraphBlock reproducibility_block(const Analysis& analysis, const ReportContext& context) {
  ParagraphBlock block{BlockId::reproducibility, {}};
  block.sentences.push_back({PhraseId::reproducibility_data,
                             {{FactId::range, context.data_range},
                              {FactId::file, context.file},
                              {FactId::rows, static_cast<double>(analysis.design().selection().used)},
                              {FactId::fingerprint, hexadecimal(fingerprint(analysis.table()))}}});
  block.sentences.push_back({PhraseId::reproducibility_settings, {{FactId::settings, context.settings}}});
  block.sentences.push_back({PhraseId::reproducibility_version,
                             {{FactId::version, context.version},
                              {FactId::date, context.date},
                              {FactId::seed, static_cast<double>(analysis.model().seed)}}});
  return block;
}

}  // namespace

Report full_report(const Analysis& analysis, const ReportContext& context) {
  Report report;
  const FindingBlock findings = findings_block(analysis);
  const TableBlock checks = checks_block(analysis);
  const auto table = [&analysis](BlockId id) { return bare_table(id, analysis); };
  report.sections.push_back({SectionId::analysed, {analysed_block(analysis, context)}});
  report.sections.push_back({SectionId::findings, {findings, estimates_chart(analysis)}});
  report.sections.push_back({SectionId::estimates, {table(BlockId::estimates), table(BlockId::fit_quality)}});
  report.sections.push_back({SectionId::ledger, {table(BlockId::ledger)}});
  report.sections.push_back({SectionId::inflation, {table(BlockId::inflation), inflation_chart(analysis)}});
  report.sections.push_back({SectionId::groups, {table(BlockId::groups), table(BlockId::combinations)}});
  report.sections.push_back({SectionId::condition, {table(BlockId::condition), table(BlockId::dependencies)}});
  report.sections.push_back(
      {SectionId::checks, {checks, influential_block(analysis), recording_block(analysis)}});
  report.sections.push_back({SectionId::write_up,
                             {methods_block(analysis), results_block(analysis, findings),
                              limitations_block(analysis, checks), reproducibility_block(analysis, context)}});
  return report;
}

}  // namespace unply
