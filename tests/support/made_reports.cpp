#include "tests/support/made_reports.hpp"

#include <cmath>
#include <limits>

#include "core/base/random.hpp"

namespace unply::test {
namespace {

constexpr std::uint64_t seed = 20260718;

std::vector<std::string> names_of(const std::string& shape) {
  if (shape == "two") return {"Width", "Depth"};
  if (shape == "category") return {"Age", "Site: north", "Site: south", "Site: east", "Site: harbour"};
  if (shape == "formulas") return {"=1+1", "+SUM(A1:A9)", "@home", "-3", "{=A1}", "'quoted", "1e5"};
  if (shape == "nothing") return {};
  if (shape == "long names")
    return {
        "Average temperature of the first zone over the last two hours of the firing, in degrees",
        "Average temperature of the second zone over the last two hours of the firing, in degrees",
        "Average_temperature_of_the_third_zone_over_the_last_two_hours_of_the_firing",
        "Time from loading to the end of the firing, in hours, weekends included",
        "Average temperature of the first zone over the last two hours of the firing, in degrees * Time from "
        "loading to the end of the firing, in hours, weekends included"};
  if (shape == "forty") {
    std::vector<std::string> names;
    for (int k = 1; k <= 40; ++k) names.push_back("Sensor_" + std::to_string(k));
    return names;
  }
  return {"Zone_1", "Zone_2", "Zone_3", "Firing_time", "Moisture", "Clay: red", "Clay: grey", "Shift: late"};
}

struct Made {
  std::string name;
  double estimate, error, vif;
  double lower() const { return estimate - 1.97 * error; }
  double upper() const { return estimate + 1.97 * error; }
  bool clear() const { return lower() > 0 || upper() < 0; }
};

Facts facts_of(const Made& made) {
  const double half = 1.97 * made.error;
  return {{FactId::term, made.name},
          {FactId::response, std::string("Strength")},
          {FactId::estimate, made.estimate},
          {FactId::lower, made.lower()},
          {FactId::upper, made.upper()},
          {FactId::half_width, half},
          {FactId::level, 0.95},
          {FactId::vif, made.vif},
          {FactId::factor, std::sqrt(made.vif)},
          {FactId::number, half / std::sqrt(made.vif)},
          {FactId::spread, 3.1},
          {FactId::scatter, 2.4},
          {FactId::rows, 236.0},
          {FactId::effect, 1.0},
          {FactId::rows_needed, 2200.0},
          {FactId::columns, std::vector<std::string>{"Zone_2", "Zone_3"}}};
}

TableBlock table(BlockId id, std::vector<HeadingId> headings) {
  TableBlock block{id, {}, {}};
  for (HeadingId heading : headings) block.headings.push_back({heading});
  return block;
}

}  // namespace

std::vector<std::string> shapes() {
  return {"kiln", "two", "forty", "long names", "category", "formulas", "huge", "nothing"};
}

Report made_report(const std::string& shape) {
  Random random(seed);
  std::vector<Made> made;
  for (const std::string& name : names_of(shape)) {
    const double scale = shape == "huge" ? std::pow(10.0, 40 * random.uniform() - 20)
                                         : std::pow(10.0, 2 * random.uniform() - 1);
    made.push_back({name, scale * random.normal() * 2, scale * (0.2 + random.uniform()),
                    1 + 60 * std::pow(random.uniform(), 3)});
  }
  std::vector<std::string> names;
  for (const Made& one : made) names.push_back(one.name);

  TableBlock analysed = table(BlockId::analysed, {HeadingId::item, HeadingId::value});
  const auto item = [](TableBlock& block, HeadingId id, Value value) {
    block.rows.push_back({Heading{id}, std::move(value)});
    block.row_formats.push_back(number_format(id));
  };
  item(analysed, HeadingId::data_range, std::string("$'Kiln log'.$A$1:$J$241"));
  item(analysed, HeadingId::response, std::string("Strength"));
  item(analysed, HeadingId::terms, Phrase{PhraseId::list_of, {{FactId::columns, names}}});
  item(analysed, HeadingId::rows,
       Phrase{PhraseId::rows_summary,
              {{FactId::rows, 236.0}, {FactId::count, 240.0}, {FactId::rows_left_out, 4.0}}});
  item(analysed, HeadingId::purpose, Phrase{PhraseId::purpose_test});
  item(analysed, HeadingId::level, 0.95);
  item(analysed, HeadingId::standard_error_kind, Phrase{PhraseId::ordinary_errors});
  analysed.notes.push_back({PhraseId::rows_left_out_note,
                            {{FactId::rows_left_out, 4.0},
                             {FactId::count, 240.0},
                             {FactId::columns, std::vector<std::string>{"Moisture"}}}});

  FindingBlock findings{BlockId::findings, {}};
  if (made.size() > 2)
    findings.findings.push_back(
        {{PhraseId::group_joint_clear,
          {{FactId::terms, std::vector<std::string>(names.begin(), names.begin() + 3)},
           {FactId::response, std::string("Strength")},
           {FactId::f, 31.4},
           {FactId::df_numerator, 3.0},
           {FactId::df, 228.0},
           {FactId::p, 1e-9},
           {FactId::condition_index, 44.0}}},
         {PhraseId::group_direction,
          {{FactId::response, std::string("Strength")},
           {FactId::columns, std::vector<std::string>(names.begin(), names.begin() + 3)},
           {FactId::weights, std::vector<double>{9.8, 10.1, 10.3}},
           {FactId::estimate, 2.3},
           {FactId::lower, 1.8},
           {FactId::upper, 2.8},
           {FactId::level, 0.95}}}});
  for (const Made& one : made) {
    const Facts facts = facts_of(one);
    if (one.clear())
      findings.findings.push_back({{PhraseId::term_clear, facts}, {PhraseId::nothing_to_do, facts}});
    else if (one.vif > 5)
      findings.findings.push_back({{PhraseId::term_undecided, facts},
                                   {PhraseId::cause_collinearity, facts},
                                   {PhraseId::needs_rows_moved_apart, facts}});
    else if (one.error < 0.5)
      findings.findings.push_back({{PhraseId::term_ruled_out, facts}});
    else
      findings.findings.push_back({{PhraseId::term_undecided, facts},
                                   {PhraseId::cause_not_collinearity, facts},
                                   {PhraseId::cause_other_rows, facts},
                                   {PhraseId::needs_rows, facts}});
  }
  findings.findings.push_back({{PhraseId::purpose_advice_test}});

  ChartBlock effects{
      BlockId::estimates_chart, {HeadingId::effect_of_one_sd, "Strength"}, names, {}, {}, {}, {0}};
  TableBlock estimates =
      table(BlockId::estimates,
            {HeadingId::term, HeadingId::verdict, HeadingId::estimate, HeadingId::lower, HeadingId::upper,
             HeadingId::standard_error, HeadingId::t, HeadingId::p, HeadingId::vif, HeadingId::standardised});
  TableBlock ledger = table(
      BlockId::ledger, {HeadingId::term, HeadingId::half_width, HeadingId::standard_error, HeadingId::scatter,
                        HeadingId::rows_factor, HeadingId::spread, HeadingId::widening,
                        HeadingId::error_without_collinearity, HeadingId::target, HeadingId::rows_needed,
                        HeadingId::spread_needed, HeadingId::scatter_needed, HeadingId::vif_needed});
  TableBlock inflation = table(
      BlockId::inflation, {HeadingId::term, HeadingId::vif, HeadingId::widening, HeadingId::shared_variation,
                           HeadingId::kind, HeadingId::coefficients, HeadingId::generalised_vif,
                           HeadingId::per_df_root, HeadingId::vif_as_given, HeadingId::vif_centred});
  ChartBlock vifs{BlockId::inflation_chart, {HeadingId::vif}, names, {}, {}, {}, {4, 5, 10}};
  TableBlock recording = table(BlockId::recording, {HeadingId::term, HeadingId::unit_recorded,
                                                    HeadingId::movement, HeadingId::movement_share});
  const bool huge = shape == "huge";
  for (const Made& one : made) {
    const double step = huge ? 1 / std::max(std::abs(one.lower()), std::abs(one.upper())) : 1;
    effects.values.push_back(one.estimate * step);
    effects.lower.push_back(one.lower() * step);
    effects.upper.push_back(one.upper() * step);
    const PhraseId verdict = one.clear()   ? PhraseId::verdict_clear
                             : one.vif > 5 ? PhraseId::verdict_undecided_collinearity
                                           : PhraseId::verdict_undecided_rows;
    const double t = one.estimate / one.error;
    estimates.rows.push_back({one.name, Phrase{verdict}, one.estimate, one.lower(), one.upper(), one.error, t,
                              std::erfc(std::abs(t) / std::sqrt(2.0)), one.vif, one.estimate / 7});
    ledger.rows.push_back({one.name, 1.97 * one.error, one.error, 2.4321, 0.0652, 3.1234, std::sqrt(one.vif),
                           one.error / std::sqrt(one.vif), 1.0,
                           one.vif > 40 ? Value(Phrase{PhraseId::not_reachable}) : Value(2211.0), 12.3, 0.71,
                           3.2});
    inflation.rows.push_back({one.name, one.vif, std::sqrt(one.vif), 1 - 1 / one.vif,
                              Phrase{PhraseId::kind_plain, {{FactId::baseline, std::string()}}}, 1.0, one.vif,
                              std::sqrt(one.vif), Value(), Value()});
    vifs.values.push_back(one.vif);
    recording.rows.push_back({one.name, 0.1, one.error / 50, 0.02});
  }
  if (!made.empty())
    estimates.rows.push_back(
        {Phrase{PhraseId::intercept}, Value(), 31.4, 20.1, 42.7, 5.7, 5.5, 1e-7, Value(), Value()});
  inflation.notes.push_back({PhraseId::rules_of_thumb_note});
  ledger.notes.push_back({PhraseId::ledger_note});

  TableBlock quality = table(BlockId::fit_quality, {HeadingId::item, HeadingId::value});
  item(quality, HeadingId::rows, 236.0);
  item(quality, HeadingId::rows_left_out, 4.0);
  item(quality, HeadingId::coefficients, 9.0);
  item(quality, HeadingId::residual_df, 227.0);
  item(quality, HeadingId::r_squared, 0.87312);
  item(quality, HeadingId::adjusted_r_squared, 0.99999871);
  item(quality, HeadingId::residual_sd, 2.43217);
  item(quality, HeadingId::f_test, 195.123);
  item(quality, HeadingId::f_p, 1e-80);
  item(quality, HeadingId::condition_number, 1234.5);
  item(quality, HeadingId::trusted_digits, 13.2);

  TableBlock groups =
      table(BlockId::groups,
            {HeadingId::group, HeadingId::members, HeadingId::kind, HeadingId::condition_index, HeadingId::f,
             HeadingId::df_numerator, HeadingId::df_denominator, HeadingId::p, HeadingId::near_dependency});
  TableBlock condition{BlockId::condition, {{HeadingId::condition_index}, {HeadingId::intercept}}, {}};
  for (const std::string& name : names) condition.headings.push_back({HeadingId::share, name});
  for (std::size_t i = 0; i <= names.size(); ++i) {
    std::vector<Value> row = {std::pow(1.2, static_cast<double>(i)) * (1 + random.uniform())};
    for (std::size_t k = 0; k <= names.size(); ++k) row.push_back(random.uniform());
    condition.rows.push_back(row);
  }
  condition.notes.push_back({PhraseId::condition_uncentred_note});
  if (made.size() > 2) {
    const std::vector<std::string> three(names.begin(), names.begin() + 3);
    groups.rows.push_back(
        {1.0, Phrase{PhraseId::list_of, {{FactId::columns, three}}}, Phrase{PhraseId::group_strong}, 44.0,
         31.4, 3.0, 228.0, 1e-9,
         Phrase{PhraseId::weighted_sum,
                {{FactId::columns, three}, {FactId::weights, std::vector<double>{1, -0.71, 0.3}}}}});
    groups.notes.push_back({PhraseId::near_dependency_note});
  }
  TableBlock dependencies = table(BlockId::dependencies, {HeadingId::equation, HeadingId::leave_out});
  if (shape == "formulas")
    dependencies.rows.push_back(
        {std::string("=1+1 + @home = 1"), Phrase{PhraseId::leave_out_one_of, {{FactId::columns, names}}}});
  else
    dependencies.rows.push_back({Phrase{PhraseId::no_dependency}, Value()});

  TableBlock checks = table(BlockId::checks, {HeadingId::what_it_means, HeadingId::statistic, HeadingId::p});
  checks.rows.push_back({Phrase{PhraseId::check_curvature_fine, {{FactId::p, 0.31}}}, 1.04, 0.31});
  checks.rows.push_back({Phrase{PhraseId::check_spread_seen, {{FactId::p, 0.003}}}, 21.7, 0.003});
  checks.rows.push_back(
      {Phrase{PhraseId::check_robust_differs, {{FactId::columns, names}}}, Value(), Value()});
  checks.rows.push_back({Phrase{PhraseId::check_influence_seen,
                                {{FactId::address, std::string("'Kiln log'.J17")}, {FactId::number, 1.31}}},
                         1.31, Value()});
  TableBlock influential =
      table(BlockId::influential, {HeadingId::address, HeadingId::cooks_distance, HeadingId::leverage,
                                   HeadingId::residual, HeadingId::studentised});
  for (int k = 0; k < 6; ++k)
    influential.rows.push_back(
        {std::string("'Kiln log'.J") + std::to_string(17 * k + 3), 1.31 / (k + 1), 0.2, 5.4 - k, 3.3 - k});

  ParagraphBlock methods{BlockId::methods,
                         {{PhraseId::methods_model,
                           {{FactId::response, std::string("Strength")},
                            {FactId::terms, names},
                            {FactId::rows, 236.0},
                            {FactId::count, 240.0},
                            {FactId::rows_left_out, 4.0}}},
                          {PhraseId::methods_fit, {{FactId::level, 0.95}}},
                          {PhraseId::methods_collinearity}}};
  ParagraphBlock results{BlockId::results, {}};
  for (const auto& finding : findings.findings) results.sentences.push_back(finding.front());
  ParagraphBlock limitations{BlockId::limitations,
                             {{PhraseId::limitations_association}, {PhraseId::caution_text}}};
  ParagraphBlock again{BlockId::reproducibility,
                       {{PhraseId::reproducibility_version,
                         {{FactId::version, std::string("0.1.0")},
                          {FactId::date, std::string("2026-07-18")},
                          {FactId::seed, 20260101.0}}}}};

  return {{{SectionId::analysed, {analysed}},
           {SectionId::findings, {findings, effects}},
           {SectionId::estimates, {estimates, quality}},
           {SectionId::ledger, {ledger}},
           {SectionId::inflation, {inflation, vifs}},
           {SectionId::groups, {groups}},
           {SectionId::condition, {condition, dependencies}},
           {SectionId::checks, {checks, influential, recording}},
           {SectionId::write_up, {methods, results, limitations, again}}}};
}

}  // namespace unply::test
