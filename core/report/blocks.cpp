// The tables of a report: each from the results of an analysis, in numbers and ids.
#include "core/report/blocks.hpp"

#include <algorithm>
#include <cmath>

namespace unply {
namespace {

using Row = std::vector<Value>;

Value word(PhraseId id) { return Phrase{id}; }

/// A number for a cell; what is not finite gets a wording instead, so that no cell shows an error.
Value finite(double value, PhraseId otherwise = PhraseId::not_estimable_word) {
  if (std::isnan(value)) return word(otherwise);
  if (std::isinf(value)) return word(PhraseId::without_limit);
  return value;
}

/// A number, or an empty cell.
Value or_blank(double value) { return std::isfinite(value) ? Value(value) : Value(); }

Value needed(const Needed& what) { return what.reachable ? finite(what.value) : word(PhraseId::not_reachable); }

std::vector<Heading> plain(std::initializer_list<HeadingId> ids) {
  std::vector<Heading> headings;
  for (HeadingId id : ids) headings.push_back({id});
  return headings;
}

PhraseId kind_word(TermKind kind) {
  switch (kind) {
    case TermKind::plain: return PhraseId::kind_plain;
    case TermKind::category: return PhraseId::kind_category;
    case TermKind::power: return PhraseId::kind_power;
    case TermKind::product: return PhraseId::kind_product;
  }
  return PhraseId::kind_plain;
}

bool structural(const TermLayout& term) {
  return term.kind == TermKind::power || term.kind == TermKind::product;
}

TableBlock inflation_block(const Analysis& analysis) {
  TableBlock block{BlockId::inflation,
                   plain({HeadingId::term, HeadingId::vif, HeadingId::widening, HeadingId::shared_variation,
                          HeadingId::kind, HeadingId::coefficients, HeadingId::generalised_vif,
                          HeadingId::per_df_root, HeadingId::vif_as_given, HeadingId::vif_centred}),
                   {}};
  const Layout& layout = analysis.layout();
  const Analysis* other = analysis.with_other_centring();
  std::vector<std::string> built;
  for (const TermInflation& inflation : analysis.inflation()) {
    const TermLayout& term = layout.terms[inflation.term];
    const bool finite_vif = std::isfinite(inflation.comparable);
    Value as_given, centred;
    if (other != nullptr && other->inflation().size() == analysis.inflation().size()) {
      const double elsewhere = other->inflation()[inflation.term].comparable;
      const bool now_centred = analysis.model().centre;
      as_given = finite(now_centred ? elsewhere : inflation.comparable);
      centred = finite(now_centred ? inflation.comparable : elsewhere);
    }
    if (structural(term)) built.push_back(term.name);
    block.rows.push_back({term.name, finite(inflation.comparable),
                          finite_vif ? Value(std::sqrt(inflation.comparable)) : word(PhraseId::without_limit),
                          inflation.shared_variation, Phrase{kind_word(term.kind), {{FactId::baseline, term.baseline}}},
                          static_cast<double>(inflation.df), finite(inflation.generalised),
                          finite(inflation.per_df_root), as_given, centred});
  }
  block.notes.push_back({PhraseId::rules_of_thumb_note});
  if (!built.empty()) block.notes.push_back({PhraseId::structural_note, {{FactId::terms, built}}});
  return block;
}

TableBlock condition_block(const Analysis& analysis) {
  const ConditionTable& condition = analysis.condition();
  TableBlock block{BlockId::condition, {{HeadingId::condition_index}}, {}};
  for (const std::string& name : condition.names)
    block.headings.push_back(name.empty() ? Heading{HeadingId::intercept} : Heading{HeadingId::share, name});
  for (Eigen::Index k = 0; k < condition.indices.size(); ++k) {
    Row row = {finite(condition.indices[k])};
    for (Eigen::Index j = 0; j < condition.proportions.cols(); ++j) row.push_back(finite(condition.proportions(k, j)));
    block.rows.push_back(row);
  }
  block.notes.push_back({condition.centred ? PhraseId::condition_centred_note : PhraseId::condition_uncentred_note});
  return block;
}

TableBlock dependencies_block(const Analysis& analysis) {
  TableBlock block{BlockId::dependencies, plain({HeadingId::equation, HeadingId::leave_out}), {}};
  for (const DependencyEquation& equation : analysis.equations()) {
    const std::vector<std::string> names = names_of(equation.columns, analysis.layout());
    if (equation.is_constant)
      block.rows.push_back({Phrase{PhraseId::is_constant, {{FactId::column, equation.text}}},
                            Phrase{PhraseId::leave_out_one_of, {{FactId::columns, names}}}});
    else
      block.rows.push_back({equation.text, Phrase{PhraseId::leave_out_one_of, {{FactId::columns, names}}}});
  }
  if (block.rows.empty()) block.rows.push_back({word(PhraseId::no_dependency), Value()});
  return block;
}

Row estimate_row(const Value& name, const CoefficientTest& test, const Value& verdict, const Value& vif,
                 const Value& standardised) {
  if (std::isnan(test.estimate))
    return {name, verdict, word(PhraseId::not_estimable_word), {}, {}, {}, {}, {}, vif, {}};
  return {name,
          verdict,
          test.estimate,
          or_blank(test.interval.lower),
          or_blank(test.interval.upper),
          or_blank(test.standard_error),
          finite(test.t, PhraseId::none),
          or_blank(test.p),
          vif,
          standardised};
}

TableBlock estimates_block(const Analysis& analysis) {
  TableBlock block{BlockId::estimates,
                   plain({HeadingId::term, HeadingId::verdict, HeadingId::estimate, HeadingId::lower, HeadingId::upper,
                          HeadingId::standard_error, HeadingId::t, HeadingId::p, HeadingId::vif,
                          HeadingId::standardised}),
                   {}};
  const Layout& layout = analysis.layout();
  const LeastSquaresFit& fit = analysis.fit();
  if (!fit.has_response) throw Error(ErrorCode::response_missing);
  for (std::size_t j = 0; j < layout.columns.size(); ++j) {
    const Eigen::Index column = static_cast<Eigen::Index>(j);
    block.rows.push_back(estimate_row(layout.columns[j], analysis.tests()[j], word(verdict_word(analysis.verdicts()[j])),
                                      finite(fit.variance_inflation[column]), or_blank(fit.standardised[column])));
  }
  if (layout.intercept && analysis.has_rows())
    block.rows.push_back(estimate_row(word(PhraseId::intercept), analysis.intercept(), {}, {}, {}));
  return block;
}

TableBlock fit_quality_block(const Analysis& analysis) {
  const LeastSquaresFit& fit = analysis.fit();
  if (!fit.has_response) throw Error(ErrorCode::response_missing);
  const FitQuality quality = fit_quality(fit);
  TableBlock block{BlockId::fit_quality, plain({HeadingId::item, HeadingId::value}), {}};
  const auto add = [&block](HeadingId item, Value value) {
    block.rows.push_back({Heading{item}, std::move(value)});
    block.row_formats.push_back(number_format(item));
  };
  add(HeadingId::rows, static_cast<double>(fit.rows));
  if (analysis.has_rows()) {
    const RowSelection& selection = analysis.design().selection();
    add(HeadingId::rows_left_out, static_cast<double>(selection.all_rows - selection.used));
  }
  add(HeadingId::coefficients, static_cast<double>(fit.kept.size() + (fit.intercept ? 1 : 0)));
  add(HeadingId::residual_df, static_cast<double>(quality.residual_df));
  add(HeadingId::r_squared, finite(quality.r_squared));
  add(HeadingId::adjusted_r_squared, finite(quality.adjusted_r_squared));
  add(HeadingId::residual_sd, finite(quality.residual_sd));
  add(HeadingId::f_test, finite(quality.f, PhraseId::none));
  add(HeadingId::f_p, finite(quality.p, PhraseId::none));
  if (analysis.has_rows()) add(HeadingId::prediction_error, finite(analysis.checks().prediction_error));
  const Eigen::VectorXd& indices = analysis.condition().indices;
  add(HeadingId::condition_number, indices.size() == 0 ? Value() : finite(indices.maxCoeff()));
  add(HeadingId::trusted_digits, fit.trusted_digits);
  return block;
}

TableBlock ledger_block(const Analysis& analysis) {
  TableBlock block{BlockId::ledger,
                   plain({HeadingId::term, HeadingId::half_width, HeadingId::standard_error, HeadingId::scatter,
                          HeadingId::rows_factor, HeadingId::spread, HeadingId::widening,
                          HeadingId::error_without_collinearity, HeadingId::target, HeadingId::rows_needed,
                          HeadingId::spread_needed, HeadingId::scatter_needed, HeadingId::vif_needed}),
                   {}};
  bool illustration = false;
  for (const LedgerRow& row : analysis.ledger()) {
    const std::string& name = analysis.layout().columns[row.column];
    if (!row.estimable) {
      Row cells(block.headings.size());
      cells[0] = name;
      cells[1] = word(PhraseId::not_estimable_word);
      block.rows.push_back(cells);
      continue;
    }
    illustration = illustration || row.target_is_illustration;
    block.rows.push_back({name, finite(row.half_width), finite(row.standard_error), finite(row.residual_sd),
                          finite(row.rows_factor), finite(row.spread), finite(row.widening),
                          finite(row.standard_error_without_collinearity), finite(row.target), needed(row.rows),
                          needed(row.spread_needed), needed(row.scatter_needed), needed(row.vif_needed)});
  }
  block.notes.push_back({PhraseId::ledger_note});
  if (illustration) block.notes.push_back({PhraseId::illustration_note});
  return block;
}

TableBlock rows_needed_block(const Analysis& analysis) {
  TableBlock block{BlockId::rows_needed,
                   plain({HeadingId::term, HeadingId::rows_now, HeadingId::half_width, HeadingId::target,
                          HeadingId::rows_needed}),
                   {}};
  bool illustration = false;
  for (const LedgerRow& row : analysis.ledger()) {
    const std::string& name = analysis.layout().columns[row.column];
    const double rows_now = static_cast<double>(analysis.fit().rows);
    if (!row.estimable) {
      block.rows.push_back({name, rows_now, word(PhraseId::not_estimable_word), {}, {}});
      continue;
    }
    illustration = illustration || row.target_is_illustration;
    block.rows.push_back({name, rows_now, finite(row.half_width), finite(row.target), needed(row.rows)});
  }
  block.notes.push_back({PhraseId::same_kind_of_rows_note});
  if (illustration) block.notes.push_back({PhraseId::illustration_note});
  return block;
}

/// `0.71 Zone_1 + 0.70 Zone_2`: weights on standardised columns, for reading.
Value weighted_sum(const std::vector<double>& weights, const CollinearGroup& group, const Layout& layout) {
  return Phrase{PhraseId::weighted_sum,
                {{FactId::columns, names_of(group.columns, layout)}, {FactId::weights, weights}}};
}

TableBlock groups_block(const Analysis& analysis) {
  TableBlock block{BlockId::groups,
                   plain({HeadingId::group, HeadingId::members, HeadingId::kind, HeadingId::condition_index,
                          HeadingId::f, HeadingId::df_numerator, HeadingId::df_denominator, HeadingId::p,
                          HeadingId::near_dependency}),
                   {}};
  const LeastSquaresFit& fit = analysis.fit();
  double number = 0;
  for (const CollinearGroup& group : analysis.groups()) {
    Row row = {++number, Phrase{PhraseId::list_of, {{FactId::columns, names_of(group.columns, analysis.layout())}}},
               word(group.strong ? PhraseId::group_strong : PhraseId::group_moderate), finite(group.condition_index)};
    if (fit.has_response) {
      row.insert(row.end(), {finite(group.f, PhraseId::none), static_cast<double>(group.df_numerator),
                             static_cast<double>(fit.residual_df), or_blank(group.p)});
    } else {
      row.insert(row.end(), 4, Value());
    }
    row.push_back(weighted_sum(group.near_dependency, group, analysis.layout()));
    block.rows.push_back(row);
  }
  if (block.rows.empty()) {
    Row row(block.headings.size());
    row[1] = word(PhraseId::no_group);
    block.rows.push_back(row);
  } else {
    block.notes.push_back({PhraseId::near_dependency_note});
  }
  return block;
}

TableBlock combinations_block(const Analysis& analysis) {
  TableBlock block{BlockId::combinations,
                   plain({HeadingId::group, HeadingId::combination, HeadingId::share, HeadingId::estimate,
                          HeadingId::lower, HeadingId::upper, HeadingId::standard_error}),
                   {}};
  double number = 0;
  for (const CollinearGroup& group : analysis.groups()) {
    ++number;
    for (const Combination& combination : group.well_determined)
      block.rows.push_back({number, weighted_sum(combination.weights, group, analysis.layout()), combination.share,
                            finite(combination.estimate), finite(combination.lower), finite(combination.upper),
                            finite(combination.standard_error)});
  }
  if (block.rows.empty()) {
    Row row(block.headings.size());
    row[1] = word(PhraseId::none);
    block.rows.push_back(row);
  } else {
    block.notes.push_back({PhraseId::combination_note});
  }
  return block;
}

/// What the design wants said under every table made from it.
std::vector<Phrase> design_notes(const Analysis& analysis) {
  std::vector<Phrase> notes;
  if (!analysis.has_rows()) {
    if (analysis.fit().sd.size() > 0 && (analysis.fit().sd.array() == 1).all())
      notes.push_back({PhraseId::standardised_only_note});
    return notes;
  }
  const RowSelection& selection = analysis.design().selection();
  if (selection.hidden_left_out > 0)
    notes.push_back({PhraseId::hidden_left_out_note, {{FactId::rows_left_out, double(selection.hidden_left_out)}}});
  if (selection.incomplete_count > 0) {
    std::vector<std::string> columns;
    for (const MissingCount& missing : selection.missing) columns.push_back(analysis.table().columns[missing.column].name);
    notes.push_back({PhraseId::rows_left_out_note,
                     {{FactId::rows_left_out, double(selection.incomplete_count)},
                      {FactId::count, double(selection.all_rows)},
                      {FactId::columns, columns}}});
  }
  for (const DesignNote& note : analysis.design().notes()) {
    switch (note.id) {
      case DesignNoteId::lower_term_missing: notes.push_back({PhraseId::lower_term_missing, note.facts}); break;
      case DesignNoteId::rare_level: notes.push_back({PhraseId::rare_level, note.facts}); break;
      case DesignNoteId::few_whole_values: notes.push_back({PhraseId::few_whole_values, note.facts}); break;
      case DesignNoteId::centred: notes.push_back({PhraseId::centred_note, note.facts}); break;
    }
  }
  if (!analysis.model().intercept) notes.push_back({PhraseId::no_intercept_note});
  return notes;
}

std::vector<Phrase> inestimable_notes(const Analysis& analysis) {
  std::vector<Phrase> notes;
  for (const DependencyEquation& equation : analysis.equations()) {
    const std::vector<std::string> names = names_of(equation.columns, analysis.layout());
    if (equation.is_constant)
      notes.push_back({PhraseId::constant_note, {{FactId::column, equation.text}}});
    else
      notes.push_back(
          {PhraseId::inestimable_note, {{FactId::columns, names}, {FactId::equation, equation.text}}});
  }
  return notes;
}

}  // namespace

std::vector<std::string> names_of(const std::vector<std::size_t>& columns, const Layout& layout) {
  std::vector<std::string> names;
  for (std::size_t column : columns) names.push_back(layout.columns[column]);
  return names;
}

PhraseId verdict_word(const TermVerdict& verdict) {
  switch (verdict.kind) {
    case VerdictKind::clear:
      switch (verdict.size) {
        case EffectSize::not_asked: return PhraseId::verdict_clear;
        case EffectSize::beyond: return PhraseId::verdict_clear_beyond;
        case EffectSize::size_uncertain: return PhraseId::verdict_clear_size_uncertain;
        case EffectSize::too_small: return PhraseId::verdict_clear_too_small;
      }
      break;
    case VerdictKind::ruled_out: return PhraseId::verdict_ruled_out;
    case VerdictKind::undecided:
      if (verdict.collinearity == CollinearityRole::would_account) return PhraseId::verdict_undecided_collinearity;
      if (verdict.collinearity == CollinearityRole::partly) return PhraseId::verdict_undecided_partly;
      switch (verdict.other) {
        case OtherCause::none: return PhraseId::verdict_undecided;
        case OtherCause::rows: return PhraseId::verdict_undecided_rows;
        case OtherCause::spread: return PhraseId::verdict_undecided_spread;
        case OtherCause::scatter: return PhraseId::verdict_undecided_scatter;
      }
      break;
    case VerdictKind::not_estimable: return PhraseId::verdict_not_estimable;
  }
  return PhraseId::verdict_undecided;
}

TableBlock bare_table(BlockId id, const Analysis& analysis) {
  switch (id) {
    case BlockId::inflation: return inflation_block(analysis);
    case BlockId::condition: return condition_block(analysis);
    case BlockId::dependencies: return dependencies_block(analysis);
    case BlockId::estimates: return estimates_block(analysis);
    case BlockId::fit_quality: return fit_quality_block(analysis);
    case BlockId::ledger: return ledger_block(analysis);
    case BlockId::rows_needed: return rows_needed_block(analysis);
    case BlockId::groups: return groups_block(analysis);
    case BlockId::combinations: return combinations_block(analysis);
    case BlockId::analysed:
    case BlockId::findings:
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
      break;
  }
  throw Error(ErrorCode::internal, {{FactId::text, std::string("table_block")}});
}

std::vector<Phrase> shared_notes(const Analysis& analysis) {
  std::vector<Phrase> notes = design_notes(analysis);
  const std::vector<Phrase> inestimable = inestimable_notes(analysis);
  notes.insert(notes.end(), inestimable.begin(), inestimable.end());
  return notes;
}

TableBlock table_block(BlockId id, const Analysis& analysis, std::vector<Phrase> extra) {
  TableBlock block = bare_table(id, analysis);
  std::vector<Phrase> notes = std::move(extra);
  // The table of dependencies says itself what the notes on inestimable terms would say.
  const std::vector<Phrase> shared = id == BlockId::dependencies ? design_notes(analysis) : shared_notes(analysis);
  notes.insert(notes.end(), shared.begin(), shared.end());
  notes.insert(notes.end(), block.notes.begin(), block.notes.end());
  block.notes = std::move(notes);
  return block;
}

TableBlock predictions_block(const Analysis& analysis, std::shared_ptr<const Table> new_rows) {
  TableBlock block{BlockId::predictions,
                   plain({HeadingId::prediction, HeadingId::interval_lower, HeadingId::interval_upper,
                          HeadingId::outside, HeadingId::leverage}),
                   {}};
  const LeastSquaresFit& fit = analysis.fit();
  double largest_leverage = 0;
  for_each_row_block(analysis.design(), fit, [&](const RowBlock& rows) {
    if (rows.leverages.size() > 0) largest_leverage = std::max(largest_leverage, rows.leverages.maxCoeff());
  });
  const double t = t_quantile(analysis.model().level, static_cast<double>(fit.residual_df));
  const std::unique_ptr<RowSource> source = analysis.design().of_new_rows(std::move(new_rows));
  bool any_inestimable = false;
  for_each_row_block(*source, fit, [&](const RowBlock& rows) {
    for (Eigen::Index i = 0; i < rows.fitted.size(); ++i) {
      const double fitted = rows.fitted[i], leverage = rows.leverages[i];
      if (!std::isfinite(fitted) || !std::isfinite(leverage)) {
        any_inestimable = true;
        block.rows.push_back({word(PhraseId::not_predictable), {}, {}, {}, {}});
        continue;
      }
      const double half_width = t * fit.residual_sd * std::sqrt(1 + leverage);
      const bool outside = leverage > largest_leverage;
      block.rows.push_back({fitted, fitted - half_width, fitted + half_width,
                            word(outside ? PhraseId::outside_data : PhraseId::inside_data), leverage});
    }
  });
  block.notes = design_notes(analysis);
  if (any_inestimable) block.notes.push_back({PhraseId::not_predictable_note});
  block.notes.push_back({PhraseId::prediction_note, {{FactId::level, analysis.model().level},
                                                    {FactId::number, largest_leverage}}});
  return block;
}

}  // namespace unply
