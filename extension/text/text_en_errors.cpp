// English: why a computation could not start. What was found, where, and what to do.
#include "extension/text/text.hpp"

namespace unply::text {
namespace {

std::string did_you_mean(const Facts& facts) {
  if (facts.has(FactId::suggestion)) return " Did you mean " + facts.text(FactId::suggestion) + "?";
  if (facts.has(FactId::allowed) && std::holds_alternative<std::vector<std::string>>(facts.all().at(FactId::allowed)))
    return " Known are: " + list(facts.list(FactId::allowed)) + ".";
  return "";
}

/// What a setting would accept: a text of its own, or a list of names.
std::string allowed(const Facts& facts) {
  if (!facts.has(FactId::allowed)) return "";
  const FactValue& value = facts.all().at(FactId::allowed);
  if (std::holds_alternative<std::string>(value)) return std::get<std::string>(value);
  return list(std::get<std::vector<std::string>>(value));
}

/// "C4, C9 and 3 more"
std::string places(const Facts& facts) {
  const std::vector<std::string>& shown = facts.list(FactId::addresses);
  const std::size_t all = facts.has(FactId::count) ? static_cast<std::size_t>(facts.number(FactId::count)) : shown.size();
  if (all <= shown.size()) return list(shown);
  std::string text;
  for (const std::string& place : shown) text += place + ", ";
  return text.substr(0, text.size() - 2) + " and " + whole(static_cast<double>(all - shown.size())) + " more";
}

/// A number, or the text that stands for it.
std::string number_or_text(const Facts& facts, FactId id) {
  if (const auto* words = std::get_if<std::string>(&facts.all().at(id))) return *words;
  return number(facts.number(id), 6);
}

std::string cells_word(const Facts& facts) { return facts.number(FactId::count) == 1 ? "cell " : "cells "; }

std::string error_name(double code) {
  switch (static_cast<int>(code)) {
    case 32767: return "#N/A";
    case 519: return "#VALUE!";
    case 524: return "#REF!";
    case 525: return "#NAME?";
    case 532: return "#DIV/0!";
    case 503: return "#NUM!";
    default: return "Err:" + whole(code);
  }
}

}  // namespace

std::string sentence(const Error& error) {
  const Facts& facts = error.facts;
  const auto text = [&facts](FactId id) { return facts.text(id); };
  const auto count = [&facts](FactId id) { return whole(facts.number(id)); };
  switch (error.code) {
    case ErrorCode::not_a_range:
      return "The argument " + text(FactId::name) + " is not a range of cells. Give a range such as A1:D40, with the headings in its first row.";
    case ErrorCode::empty_range:
      return "The range " + text(FactId::range) + " holds no data. Choose the cells with your table, headings included.";
    case ErrorCode::no_data_rows:
      return "The range " + text(FactId::range) + " has a row of headings and nothing below it. Include the rows with the data.";
    case ErrorCode::missing_heading:
      return "Cell " + text(FactId::address) + " is empty, so the column below it has no name. Write a heading there, or leave the column out of the range.";
    case ErrorCode::headings_are_numbers:
      return "The first row, " + text(FactId::range) + ", holds numbers, but Unply reads the names of the columns from it. Include the row with the headings, or set headings to no.";
    case ErrorCode::duplicate_heading:
      return "The heading " + text(FactId::name) + " stands in " + list(facts.list(FactId::addresses)) + ". Give each column a name of its own.";
    case ErrorCode::error_cells:
      return "Column " + text(FactId::column) + " has an error value (" + error_name(facts.number(FactId::code)) + ") in " + cells_word(facts) + places(facts) + ". Mend the formula there, or empty the cell so that its row is left out.";
    case ErrorCode::text_among_numbers:
      return "Column " + text(FactId::column) + " holds numbers, but text in " + cells_word(facts) + places(facts) + " (\"" + text(FactId::text) + "\"). Write a number there or empty the cell; if the column is a category, name it in the setting categories.";
    case ErrorCode::infinite_value:
      return "Column " + text(FactId::column) + " has a number without limit in " + cells_word(facts) + places(facts) + ". Mend or empty it.";
    case ErrorCode::own_cell_in_range:
      return "The range " + text(FactId::range) + " contains the cell of this formula, " + text(FactId::address) + ". Put the formula outside its own data.";
    case ErrorCode::several_sheets:
      return "The range " + text(FactId::range) + " spans several sheets. Unply reads one sheet at a time: choose a range on one of them.";
    case ErrorCode::several_columns:
      return "The response " + text(FactId::range) + " has " + count(FactId::count) + " columns, but a response is one column. Choose one, with its heading.";
    case ErrorCode::row_count_mismatch:
      return "The response has " + count(FactId::expected) + " rows below its heading, but the predictors " + text(FactId::range) + " have " + count(FactId::count) + ". Choose ranges with the same rows.";
    case ErrorCode::not_a_spreadsheet:
      return "This is not a spreadsheet document, so there are no cells to analyse. Open one with the office's Calc.";
    case ErrorCode::document_read_only:
      return "The document is open for reading only, so no report can be added to it. Save it under another name and ask again.";
    case ErrorCode::structure_protected:
      return "The structure of the document is protected, so no sheet can be added for the report. Lift the protection (Tools - Protect Spreadsheet Structure) or use a copy.";
    case ErrorCode::no_such_range:
      return "There is no range " + text(FactId::range) + " in the document. Give it as Sheet1.A1:H240, or as the name of a range.";
    case ErrorCode::no_model_block:
      return "The document has no model block: no range of it is named " + text(FactId::name) + ". Name two columns so, with lines such as: response | Strength.";
    case ErrorCode::no_data_named:
      return "Nothing says where the data are. Give their range, or add a line to the settings: " + text(FactId::setting) + " | Sheet1.A1:H240.";
    case ErrorCode::unknown_column:
      return "There is no column or term named " + text(FactId::name) + "." + did_you_mean(facts);
    case ErrorCode::ambiguous_column:
      return "The name " + text(FactId::name) + " fits several columns: " + list(facts.list(FactId::addresses)) + ". Give each column a name of its own.";
    case ErrorCode::term_not_readable:
      return "The term \"" + text(FactId::term) + "\" cannot be read at its character " + count(FactId::position) + (facts.has(FactId::found) ? " (\"" + text(FactId::found) + "\")" : "") + ". Write headings joined by * and raised by ^, e.g. A, A*B or A^2; put a heading with such signs in single quotes.";
    case ErrorCode::no_terms: return "There is no predictor in the model. Name at least one term, or include predictor columns in the range.";
    case ErrorCode::response_among_terms:
      return "The response " + text(FactId::response) + " is also used in the term " + text(FactId::term) + ". Take it out of the terms.";
    case ErrorCode::response_not_numeric:
      return "The response " + text(FactId::response) + " holds text (\"" + text(FactId::text) + "\" in " + text(FactId::address) + "), but a response has to be a number. Choose another column, or code it as a number.";
    case ErrorCode::response_missing: return "No response is named. Name the column to be explained.";
    case ErrorCode::duplicate_term: return "The term " + text(FactId::term) + " is named twice. Name it once.";
    case ErrorCode::category_power:
      return "The term " + text(FactId::term) + " raises the category " + text(FactId::column) + " to a power. A category has no powers: use it as it is.";
    case ErrorCode::unknown_level:
      return "The category " + text(FactId::column) + " has no level \"" + text(FactId::name) + "\"." + did_you_mean(facts);
    case ErrorCode::one_level:
      return "The category " + text(FactId::column) + " has one level only (\"" + text(FactId::text) + "\") in the rows used, so it has nothing to compare. Leave it out of the predictors.";
    case ErrorCode::too_many_levels:
      return "The category " + text(FactId::column) + " has " + count(FactId::count) + " levels in " + count(FactId::rows) + " rows: nearly every row is a level of its own. It looks like a name or a number of the row; leave it out of the predictors.";
    case ErrorCode::unknown_setting:
      return "There is no setting named \"" + text(FactId::setting) + "\"." + did_you_mean(facts);
    case ErrorCode::doubled_setting:
      return "The setting " + text(FactId::setting) + " is given twice. Keep one line.";
    case ErrorCode::impossible_setting:
      return "The setting " + text(FactId::setting) + " cannot be \"" + text(FactId::value) + "\". Possible: " + allowed(facts) + ".";
    case ErrorCode::settings_shape:
      return "The settings " + (facts.has(FactId::range) ? text(FactId::range) : "given") + " are not in two columns. Write a name in the first column and its value in the second.";
    case ErrorCode::no_complete_rows:
      return "None of the " + count(FactId::rows) + " rows has a value in every column of the model; " + text(FactId::column) + " alone is empty in " + count(FactId::count) + ". Fill it, or leave that column out.";
    case ErrorCode::too_few_rows:
      return (facts.number(FactId::rows) == 1 ? "There is 1 row for " : "There are " + count(FactId::rows) + " rows for ") + count(FactId::count) + " coefficients; at least " + count(FactId::needed) + " rows are needed. Add rows, or use fewer terms.";
    case ErrorCode::all_constant:
      return "Every predictor has the same value in all rows (" + list(facts.list(FactId::columns)) + "), so none of their effects can be estimated. Include columns that vary.";
    case ErrorCode::response_constant:
      return "The response " + text(FactId::response) + " has the value " + number_or_text(facts, FactId::value) + " in every row, so there is nothing to explain. Choose a response that varies.";
    case ErrorCode::too_many_columns:
      return "The model has " + count(FactId::count) + " columns; Unply works with up to " + (facts.has(FactId::allowed) && std::holds_alternative<double>(facts.all().at(FactId::allowed)) ? count(FactId::allowed) : allowed(facts)) + ". Use fewer terms, or categories with fewer levels.";
    case ErrorCode::value_out_of_range:
      return "Column " + text(FactId::column) + " holds numbers so large or so small that they cannot be computed with. Change its unit.";
    case ErrorCode::correlation_shape:
      return "The correlation table has " + count(FactId::count) + " rows and " + count(FactId::number) + " columns below and beside its headings. It must be square, with the names in its first row.";
    case ErrorCode::correlation_diagonal:
      return "The correlation of " + text(FactId::name) + " with itself is " + number_or_text(facts, FactId::value) + ". It must be 1: check the order of rows and columns.";
    case ErrorCode::correlation_asymmetric:
      return "The correlation of " + list(facts.list(FactId::columns)) + " is " + number_or_text(facts, FactId::value) + " on one side of the diagonal and " + number_or_text(facts, FactId::number) + " on the other. Both must be the same.";
    case ErrorCode::correlation_outside:
      return "The correlation of " + list(facts.list(FactId::columns)) + " is " + number_or_text(facts, FactId::value) + ", outside -1 to 1. Check the cell.";
    case ErrorCode::correlation_missing:
      return "The correlation of " + list(facts.list(FactId::columns)) + " is missing: both of its cells are empty. Write it in one of them.";
    case ErrorCode::correlation_not_psd:
      return "These correlations cannot come from one table of data (smallest eigenvalue " + number(facts.number(FactId::value)) + "). Check the cells for a slip of the pen, or use figures with more decimals.";
    case ErrorCode::needs_rows:
      return "This needs the rows of the data; a table of correlations is not enough for it.";
    case ErrorCode::cancelled: return "Stopped at your request. Nothing was changed.";
    case ErrorCode::internal:
      return "Unply met a fault of its own" + (facts.has(FactId::text) ? " (" + text(FactId::text) + ")" : std::string()) + ". Your data are unchanged; please report this with the table that led to it.";
  }
  return "";
}

}  // namespace unply::text
