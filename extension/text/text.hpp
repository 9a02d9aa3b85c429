// The only place with sentences: id + facts + language -> words. One file per language (text_en.cpp), every switch
// exhaustive, so that a missing sentence does not compile.
#pragma once

#include <string>
#include <variant>
#include <vector>

#include "core/base/error.hpp"
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
  notes_heading, expected, correct, result,
};
std::string label(LabelId id);

/// A number for a sentence: as many digits as the reader can use, never 17.
std::string number(double value, int significant_digits = 3);
/// Two ends of an interval and its estimate, rounded to the same decimal place: two significant digits of its half-width.
std::string rounded_to(double value, double half_width);
std::string p_value(double p);
std::string whole(double value);   // 2,200
std::string list(const std::vector<std::string>& names);  // "A, B and C"

/// A table as rectangular cells: heading row, rows, then a row for each note (first cell the sentence, rest empty).
using Cell = std::variant<std::monostate, double, std::string>;
using Cells = std::vector<std::vector<Cell>>;
Cells cells(const TableBlock& block, bool with_notes = true);

/// Names of the settings and of their values, as written by the user in the first and second column of a settings range.
enum class SettingId {
  terms, response, categories, purpose, smallest_effect, smallest_effect_of, baseline_of, level, intercept, centre,
  standard_errors, rows, headings, condition, seed, means, standard_deviations,
};
std::string setting_name(SettingId id);   // "smallest effect of" is followed by a term
std::vector<SettingId> all_settings();

}  // namespace unply::text
