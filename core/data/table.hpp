// A table: named columns of numbers and texts, each cell with its sheet address for messages.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

namespace unply {

/// One column as it was read. Nothing is judged here: a column that the model does not use may hold anything.
struct Column {
  std::string name;                 // heading, as written
  std::string sheet;                // sheet name for messages; empty: same sheet as the formula
  std::string place;                // column letters, e.g. "C"; empty: not from a sheet
  std::size_t first_sheet_row = 1;  // 1-based sheet row of row 0 of the data
  std::vector<double> numbers;      // one a row; NaN where the cell holds no number
  std::vector<std::int32_t> codes;  // one a row: index into texts, -1: no text; empty where no cell holds text
  std::vector<std::string> texts;       // distinct texts in order of appearance
  std::vector<std::size_t> error_rows;  // rows with an error value (#DIV/0!, Err:502, ...), ascending
  int first_error_code = 0;             // office error number of the first of them

  /// "C7" for row 5 of a column that starts in row 2; "Sheet2.C7" where `sheet` is set; the row alone without
  /// `place`.
  std::string address(std::size_t row) const;
  /// The cell above row 0; row 0 itself where the data start in the first row of the sheet.
  std::string heading_address() const;
  /// "C2:C40": the whole column.
  std::string range() const;
};

struct Table {
  std::size_t rows = 0;
  std::vector<Column> columns;
  std::vector<std::uint8_t> hidden;  // empty: no row is hidden; else one a row, 1 = filtered out or hidden

  /// Columns with exactly this heading; without one, those that differ only in case and outer blanks.
  std::vector<std::size_t> matches(const std::string& name) const;
  /// Index of the column with this heading (exact match first, then regardless of case and outer blanks).
  /// Throws Error: unknown_column (with the nearest name) or ambiguous_column.
  std::size_t find(const std::string& name) const;
};

}  // namespace unply
