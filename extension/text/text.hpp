// The only place with sentences: id + facts + language -> words. One file per language (text_en.cpp), every switch
// exhaustive, so that a missing sentence does not compile.
#pragma once

#include <string>
#include <variant>
#include <vector>

#include "core/base/error.hpp"
#include "core/design/model.hpp"
#include "core/report/report.hpp"

namespace unply::text {

/// What was found, where, and what to do. UTF-8.
std::string sentence(const Error& error);
std::string phrase(const Phrase& phrase);
std::string heading(const Heading& heading);
std::string block_title(BlockId id);
std::string section_title(SectionId id);
/// Words of the report sheets that belong to no table: see the enum.
enum class LabelId {
  report_title,        // heading of the first report sheet
  first_sheet_name, tables_sheet_name, write_up_sheet_name,
  tables_title, write_up_title,  // headings of the second and third report sheet
  at_a_glance,         // heading over the verdicts in a few lines
  chart_numbers,       // heading over the numbers that the charts are drawn from
  rule_of_thumb,       // followed by the number of a reference mark
  interval_from, interval_to, below_point, above_point,  // columns of those numbers
  undo_report,         // name of the step in the list of the Undo command
  notes_heading, expected, correct, result,
};
std::string label(LabelId id);

/// Arguments of the sheet functions, as the Function Wizard names them, and what they accept.
enum class ArgumentId { response, predictors, new_rows, correlations, n, settings };
std::string argument_name(ArgumentId id);
std::string argument_values(ArgumentId id);

/// A number for a sentence: as many digits as the reader can use, never 17.
std::string number(double value, int significant_digits = 3);
/// Two ends of an interval and its estimate, rounded to the same decimal place: two significant digits of its half-width.
std::string rounded_to(double value, double half_width);
std::string signed_rounded_to(double value, double half_width);  // with a plus where positive
std::string p_value(double p);     // `p = 0.032`, `p < 0.0001`
std::string percent(double share); // `95 %`
std::string whole(double value);   // 2,200
std::string seed(double value);    // every digit, as it has to be typed again
std::string list(const std::vector<std::string>& names);  // "A, B and C"

/// A table as rectangular cells: heading row, rows, then a row for each note (first cell the sentence, rest empty).
using Cell = std::variant<std::monostate, double, std::string>;
using Cells = std::vector<std::vector<Cell>>;
Cells cells(const TableBlock& block, bool with_notes = true);

/// Names of the settings and of their values, as the user writes them in the two columns of a settings range.
enum class SettingId {
  table,                // which table UNPLY.FROMCORRELATIONS gives: a table_name
  terms,                // `A; B; A*B`
  response,             // heading (FROMCORRELATIONS, and the model block of the runner)
  data,                 // range of the data (the model block of the runner)
  categories,           // `Batch; Shift`: columns of numbers to be read as categories
  purpose,              // a purpose_name
  smallest_effect,      // number, for every term
  smallest_effect_of,   // followed by a term: `smallest effect of Zone_1`
  baseline_of,          // followed by a category column: `baseline of Clay`
  level,                // 0.5 .. 0.9999, or a percentage
  intercept,            // yes / no
  centre,               // yes / no
  standard_errors,      // a standard_errors_name
  rows,                 // `all` or `visible`
  headings,             // yes / no: does the first row hold the names
  condition,            // `uncentred` or `centred`
  seed,                 // whole number
  means, standard_deviations,  // FROMCORRELATIONS: one value for each variable, in the order of the table
};
const std::vector<SettingId>& all_settings();
std::string setting_name(SettingId id);
bool setting_takes_a_name(SettingId id);            // true for the two that end in `of NAME`
std::string setting_values(SettingId id);           // what it accepts: goes on "Possible: ..."
std::string purpose_name(Purpose purpose);          // test / explore / predict
std::string standard_errors_name(StandardErrors kind);  // ordinary / robust
std::string yes_no(bool value);
std::string rows_name(bool visible_only);           // all / visible
std::string condition_name(bool centred);           // uncentred / centred
/// Name of a table for the setting `table`; empty where a block cannot be asked for.
std::string table_name(BlockId id);
const std::vector<BlockId>& tables_from_correlations();

}  // namespace unply::text
