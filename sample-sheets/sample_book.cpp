#include "sample-sheets/sample_book.hpp"

#include <cmath>
#include <stdexcept>

namespace unply::samples {
namespace {

std::string quoted(const std::string& text) { return "\"" + text + "\""; }

}  // namespace

using S = Style;
const std::vector<Style> estimates_columns{
    S::words,         S::words,        S::four_decimals, S::four_decimals, S::four_decimals,
    S::four_decimals, S::two_decimals, S::p_value,       S::two_decimals,  S::three_decimals};
const std::vector<Style> ledger_columns{
    S::words,          S::four_decimals, S::four_decimals, S::three_decimals, S::four_decimals,
    S::three_decimals, S::two_decimals,  S::four_decimals, S::three_decimals, S::whole,
    S::two_decimals,   S::two_decimals,  S::two_decimals};
const std::vector<Style> rows_needed_columns{S::words, S::whole, S::four_decimals, S::three_decimals,
                                             S::whole};
const std::vector<Style> inflation_columns{
    S::words, S::two_decimals, S::two_decimals,   S::three_decimals, S::words,
    S::whole, S::two_decimals, S::three_decimals, S::two_decimals,   S::two_decimals};
const std::vector<Style> groups_columns{S::words, S::words, S::words,   S::two_decimals, S::two_decimals,
                                        S::whole, S::whole, S::p_value, S::words};
const std::vector<Style> predictions_columns{S::two_decimals, S::two_decimals, S::two_decimals, S::words,
                                             S::three_decimals};
const std::vector<Style> fit_quality_columns{S::words, S::four_decimals};
const std::vector<Style> fit_quality_lines{
    S::whole,         S::whole,        S::whole,   S::whole,         S::four_decimals, S::four_decimals,
    S::four_decimals, S::two_decimals, S::p_value, S::four_decimals, S::two_decimals,  S::one_decimal};

double rounded(double value, int decimals) {
  double scale = 1;
  for (int k = 0; k < decimals; ++k) scale *= 10;
  return std::round(value * scale) / scale;
}

std::string expected_verdict(const Real& estimate, const Real& half_width, const Real& vif,
                             const Real& smallest_effect) {
  const Real lower = estimate - half_width, upper = estimate + half_width;
  if (lower > 0 || upper < 0) {
    const Real nearest = lower > 0 ? lower : -upper, farthest = lower > 0 ? upper : -lower;
    if (nearest >= smallest_effect) return "clear, large enough to matter";
    if (farthest <= smallest_effect) return "clear, too small to matter";
    return "clear, size uncertain";
  }
  if (-lower < smallest_effect && upper < smallest_effect) return "ruled out";
  if (half_width / sqrt(vif) <= smallest_effect / 2) return "undecided: moves with others";
  throw std::logic_error("a verdict that the sample sheets are not meant to show");
}

SampleBook::SampleBook(std::string data_sheet)
    : answers_(&book_.add_sheet("Answers")),
      data_(&book_.add_sheet(data_sheet)),
      model_(&book_.add_sheet("Model")),
      check_(&book_.add_sheet("Check")),
      source_(&book_.add_sheet("Source")) {
  book_.show_first("Answers");
}

void SampleBook::add_name(const std::string& name, const Sheet& sheet, std::size_t row, std::size_t column,
                          std::size_t rows, std::size_t columns) {
  book_.add_name(name, stored_range(sheet.name(), row, column, rows, columns));
}

void SampleBook::write_data(const std::vector<DataColumn>& columns,
                            const std::vector<std::vector<Content>>& rows, const std::string& table_name,
                            const std::string& response, const std::string& response_name) {
  data_->freeze(1, 1);
  for (std::size_t j = 0; j < columns.size(); ++j) {
    const bool words = columns[j].style == Style::words || columns[j].style == Style::date;
    data_->put(0, j, columns[j].heading, words ? Style::heading : Style::heading_right);
    data_->width(j, columns[j].width);
    if (columns[j].heading == response) add_name(response_name, *data_, 0, j, rows.size() + 1, 1);
  }
  for (std::size_t i = 0; i < rows.size(); ++i) {
    for (std::size_t j = 0; j < columns.size(); ++j) {
      if (!std::holds_alternative<std::monostate>(rows[i][j])) {
        data_->put(i + 1, j, rows[i][j], columns[j].style);
      }
    }
  }
  add_name(table_name, *data_, 0, 0, rows.size() + 1, columns.size());
}

void SampleBook::write_title(Sheet& sheet, const std::string& title) {
  sheet.put(next_row_[&sheet]++, 0, title, Style::title);
}

void SampleBook::write_lines(Sheet& sheet, const std::vector<std::string>& lines) {
  for (const std::string& line : lines) {
    const std::size_t row = next_row_[&sheet]++;
    if (!line.empty()) sheet.put(row, 0, line, Style::text);
  }
}

void SampleBook::write_section(Sheet& sheet, const std::string& title) {
  ++next_row_[&sheet];
  sheet.put(next_row_[&sheet]++, 0, title, Style::section);
}

void SampleBook::write_row(Sheet& sheet, const std::vector<std::pair<Content, Style>>& cells) {
  const std::size_t row = next_row_[&sheet]++;
  for (std::size_t j = 0; j < cells.size(); ++j) {
    if (!std::holds_alternative<std::monostate>(cells[j].first))
      sheet.put(row, j, cells[j].first, cells[j].second);
  }
}

void SampleBook::write_settings(const std::string& title, const std::string& name,
                                const std::vector<Setting>& settings) {
  write_section(*model_, title);
  const std::size_t first = next_row(*model_);
  for (const auto& [setting, value] : settings)
    write_row(*model_, {{setting, Style::plain}, {value, Style::plain}});
  add_name(name, *model_, first, 0, settings.size(), 2);
  model_->width(0, 6.5).width(1, 14);
}

void SampleBook::write_table(const std::string& title, const LiveTable& table) {
  Sheet& sheet = *answers_;
  write_section(sheet, title);
  const std::size_t row = next_row(sheet);
  for (std::size_t i = 0; i < table.rows; ++i) {
    for (std::size_t j = 0; j < table.columns.size(); ++j) {
      const bool words = table.columns[j] == Style::words;
      const Style below = !words && i > 0 && i <= table.lines.size() ? table.lines[i - 1] : table.columns[j];
      sheet.style(row + i, j, i > 0 ? below : words ? Style::heading : Style::heading_right);
    }
  }
  sheet.put(row, 0, Formula{"of:=" + table.call, table.rows, table.columns.size()},
            table.columns[0] == Style::words ? Style::heading : Style::heading_right);
  next_row_[&sheet] = row + table.rows;
  add_name(table.name, sheet, row, 0, table.rows, table.columns.size());
  for (const std::size_t note : table.notes) {
    // A sentence in a cell of its own may run over its neighbours; within the array formula it would be cut
    // off.
    sheet.put(next_row_[&sheet]++, 0,
              Formula{"of:=INDEX(" + table.call + ";" + std::to_string(table.rows + note) + ";1)"},
              Style::note);
  }
  sheet.put(next_row_[&sheet]++, 0, Formula{"of:=FORMULA([." + address(row, 0) + "])"}, Style::formula_shown);
}

void SampleBook::write_truth(const std::string& table, const std::vector<TrueEffect>& effects, Style style) {
  Sheet& sheet = *source_;
  write_section(sheet, "True effects, and the intervals found");
  write_row(sheet, {{std::string("Term"), Style::heading},
                    {std::string("True effect"), Style::heading_right},
                    {std::string(heading::lower), Style::heading_right},
                    {std::string(heading::upper), Style::heading_right},
                    {std::string("It is"), Style::heading},
                    {std::string("Unit of the effect"), Style::heading}});
  for (const TrueEffect& effect : effects) {
    const std::string row = std::to_string(next_row(sheet) + 1);
    write_row(sheet, {{effect.name, Style::words},
                      {effect.truth, style},
                      {Formula{"of:=" + cell(table, effect.name, heading::lower)}, style},
                      {Formula{"of:=" + cell(table, effect.name, heading::upper)}, style},
                      {Formula{"of:=IF(AND([.B" + row + "]>=[.C" + row + "];[.B" + row + "]<=[.D" + row +
                               "]);\"inside\";\"outside\")"},
                       Style::words},
                      {effect.unit, Style::words}});
  }
  sheet.width(0, 5).width(1, 2.8).width(2, 2.8).width(3, 2.8).width(4, 2.2).width(5, 9);
}

std::string SampleBook::cell(const std::string& table, const std::string& row, const std::string& column) {
  return "INDEX(" + table + ";MATCH(" + quoted(row) + ";INDEX(" + table + ";0;1)&\"\";0);MATCH(" +
         quoted(column) + ";INDEX(" + table + ";1;0)&\"\";0))";
}

std::string SampleBook::cell(const std::string& table, std::size_t line, const std::string& column) {
  return "INDEX(" + table + ";" + std::to_string(line + 1) + ";MATCH(" + quoted(column) + ";INDEX(" + table +
         ";1;0)&\"\";0))";
}

void SampleBook::check(const std::string& what, const std::string& found, const Real& expected) {
  checks_.push_back({what, found, expected, false});
}

void SampleBook::check(const std::string& what, const std::string& found, const std::string& expected) {
  checks_.push_back({what, found, expected, false});
}

void SampleBook::check_share(const std::string& what, const std::string& found, const Real& expected) {
  checks_.push_back({what, found, expected, true});
}

void SampleBook::check_verdict(const std::string& table, const std::string& row,
                               const std::string& expected) {
  check(table + ": " + row + ", " + heading::verdict, cell(table, row, heading::verdict), expected);
}

void SampleBook::check_estimates(const std::string& table, const IndependentFit& fit,
                                 const std::vector<std::string>& names, const Real& level) {
  for (const std::string& name : names) {
    const Real half_width = fit.half_width(name, level);
    check_cell(table, name, heading::estimate, fit.coefficient(name));
    check_cell(table, name, heading::lower, fit.coefficient(name) - half_width);
    check_cell(table, name, heading::upper, fit.coefficient(name) + half_width);
    check_cell(table, name, heading::standard_error, fit.standard_error(name));
    check_cell(table, name, heading::t, fit.t(name));
    check_cell(table, name, heading::p, fit.p(name));
    check_cell(table, name, heading::vif, fit.vif(name));
    check_cell(table, name, heading::standardised, fit.standardised(name));
  }
}

void SampleBook::check_fit_quality(const std::string& table, const IndependentFit& fit) {
  const auto line = [&](const std::string& item, const Real& expected) {
    check_cell(table, item, heading::value, expected);
  };
  line("Rows used", fit.rows());
  line("Residual degrees of freedom", fit.residual_df());
  line("R2", fit.r_squared());
  line("Adjusted R2", fit.adjusted_r_squared());
  line("Residual standard deviation (s)", fit.residual_sd());
  line("F of the whole model", fit.f());
  line("p of the whole model", fit.f_p());
  line("Leave-one-out prediction error", fit.prediction_error());
  line("Largest condition index", fit.condition().indices.back());
}

void SampleBook::check_ledger(const std::string& table, const IndependentFit& fit,
                              const std::vector<std::string>& names, const Real& level) {
  for (const std::string& name : names) {
    check_cell(table, name, heading::scatter, fit.residual_sd());
    check_cell(table, name, heading::rows_factor, 1 / sqrt(Real(fit.rows() - 1)));
    check_cell(table, name, heading::spread, fit.spread(name));
    check_cell(table, name, heading::widening, sqrt(fit.vif(name)));
    check_cell(table, name, heading::half_width, fit.half_width(name, level));
    check_cell(table, name, heading::error_moved_apart, fit.standard_error(name) / sqrt(fit.vif(name)));
  }
}

std::string SampleBook::finish() {
  Sheet& sheet = *check_;
  const std::size_t first = 8, last = first + checks_.size() - 1;
  const std::string found = "[." + address(first, 1) + ":." + address(last, 1) + "]";
  const std::string correct = "[." + address(first, 3) + ":." + address(last, 3) + "]";
  const std::string count = std::to_string(checks_.size());
  sheet.put(0, 0, "Check: the tables against figures worked out independently", Style::title);
  sheet.put(
      1, 0,
      "Expected: least squares in 50 decimal digits by another program and another route (normal equations), "
      "written with 15 digits.",
      Style::text);
  sheet.put(
      2, 0,
      "Correct: a number, and within the tolerance of the expected one (relative; shares of a whole: of the "
      "whole); or the very same words. An error or a refusal is never correct.",
      Style::text);
  sheet.put(4, 0, "Result", Style::section);
  sheet.put(4, 1, Formula{"of:=COUNTIF(" + correct + ";TRUE())=" + count}, Style::result);
  sheet.put(4, 2, "TRUE when each of the " + count + " lines is correct", Style::text);
  sheet.put(5, 0, "Tolerance", Style::section);
  sheet.put(5, 1, 1e-12, Style::plain);
  add_name("Result", sheet, 4, 1, 1, 1);
  add_name("Tolerance", sheet, 5, 1, 1, 1);
  sheet.put(7, 0, "What", Style::heading);
  sheet.put(7, 1, "Found", Style::heading_right);
  sheet.put(7, 2, "Expected", Style::heading_right);
  sheet.put(7, 3, "Correct", Style::heading);
  for (std::size_t k = 0; k < checks_.size(); ++k) {
    const Check& check = checks_[k];
    const std::size_t row = first + k;
    const std::string b = "[." + address(row, 1) + "]", c = "[." + address(row, 2) + "]";
    sheet.put(row, 0, check.what);
    sheet.put(row, 1, Formula{"of:=" + check.found}, Style::all_digits);
    if (const Real* number = std::get_if<Real>(&check.expected)) {
      // 15 digits, so that the file's text does not hang on the last bit of a conversion.
      sheet.put(row, 2, std::stod(number->str(15, std::ios_base::scientific)), Style::all_digits);
      const std::string scale = check.share ? "" : "*ABS(" + c + ")";
      sheet.put(
          row, 3,
          Formula{"of:=IF(ISNUMBER(" + b + ");ABS(" + b + "-" + c + ")<=Tolerance" + scale + ";FALSE())"},
          Style::judged);
    } else {
      sheet.put(row, 2, std::get<std::string>(check.expected), Style::all_digits);
      sheet.put(row, 3, Formula{"of:=IF(ISTEXT(" + b + ");EXACT(" + b + "&\"\";" + c + ");FALSE())"},
                Style::judged);
    }
  }
  sheet.width(0, 9.5).width(1, 5.5).width(2, 5.5).width(3, 2.2).freeze(8, 0);
  return book_.xml();
}

}  // namespace unply::samples
