// Why a computation cannot start: a code and facts, no sentence (extension/text has one for every code).
#pragma once

#include <exception>
#include <utility>

#include "core/base/facts.hpp"

namespace unply {

/// Each code lists the facts that come with it.
enum class ErrorCode {
  // -- cells
  not_a_range,           // setting or argument name: `name`
  empty_range,           // range
  no_data_rows,          // range: a heading row and nothing below it
  missing_heading,       // address
  headings_are_numbers,  // range of the first row
  duplicate_heading,     // name, addresses
  error_cells,           // column, addresses (first few), count, code of the first
  text_among_numbers,    // column, addresses (first few), count, text of the first
  infinite_value,        // column, addresses, count
  own_cell_in_range,     // range, address
  several_sheets,        // range: a 3-D range
  several_columns,       // range, count: a response must be one column
  row_count_mismatch,    // range, expected (rows of the response), count (rows of the predictors)
  // -- documents
  not_a_spreadsheet,     // (none)
  document_read_only,    // (none)
  structure_protected,   // (none): no sheet may be added
  no_such_range,         // range
  no_model_block,        // name: of the named range that was looked for
  no_data_named,         // setting: neither an argument nor a setting says where the data are
  // -- model
  unknown_column,        // name, allowed (list), suggestion (optional)
  ambiguous_column,      // name, addresses
  term_not_readable,     // term, position, found
  no_terms,              // (none)
  response_among_terms,  // response, term
  response_not_numeric,  // response, text, address
  response_missing,      // (none): no response named or given
  duplicate_term,        // term
  category_power,        // term, column: a category cannot be raised to a power
  unknown_level,         // column, name, allowed (list)
  one_level,             // column, text
  too_many_levels,       // column, count, rows
  // -- settings
  unknown_setting,       // setting, allowed (list), suggestion (optional)
  doubled_setting,       // setting
  impossible_setting,    // setting, value, allowed
  settings_shape,        // range: the settings range is not two columns
  // -- rows and numbers
  no_complete_rows,      // rows (all), column (with most missing), count (missing there)
  too_few_rows,          // rows, needed, count (coefficients)
  all_constant,          // columns
  response_constant,     // response, value
  too_many_columns,      // count, allowed
  value_out_of_range,    // column: values too large or too small to be squared
  // -- correlation tables
  correlation_shape,     // count (rows), number (columns)
  correlation_diagonal,  // name, value
  correlation_asymmetric,// columns (two), value, number
  correlation_outside,   // columns (two), value
  correlation_missing,   // columns (two): neither of their two cells holds a number
  correlation_not_psd,   // value (smallest eigenvalue)
  needs_rows,            // text: what was asked for needs the rows themselves
  // -- work
  cancelled,             // (none)
  internal,              // text: a fault of ours
};

struct Error : std::exception {
  Error(ErrorCode c, Facts f = {}) : code(c), facts(std::move(f)) {}
  const char* what() const noexcept override { return "unply::Error"; }

  ErrorCode code;
  Facts facts;
};

}  // namespace unply
