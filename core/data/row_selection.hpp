// Which rows take part in an analysis, and why the others do not.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

#include "core/data/table.hpp"

namespace unply {

struct MissingCount {
  std::size_t column = 0;  // of the table
  std::size_t count = 0;   // rows without a value there
};

struct RowSelection {
  std::size_t all_rows = 0;
  std::size_t used = 0;
  std::vector<std::uint32_t> rows;      // used rows, ascending; empty when all rows are used
  std::size_t hidden_left_out = 0;      // left out because filtered or hidden
  std::vector<std::size_t> incomplete;  // first 100 rows left out for a missing value
  std::size_t incomplete_count = 0;
  std::vector<MissingCount> missing;  // columns of the model with missing values, most first

  std::size_t row(std::size_t i) const { return rows.empty() ? i : rows[i]; }
};

/// A row takes part when every column in `columns` has a value in it (and it is visible, where asked). A text
/// of blanks only is no value: to the reader of the sheet the cell is empty. Hidden rows that are left out
/// are not counted as missing.
RowSelection select_rows(const Table& table, const std::vector<std::size_t>& columns, bool visible_rows_only);

/// For every distinct text of a column: 0 where it is of blanks only.
std::vector<std::uint8_t> texts_that_count(const Column& column);

}  // namespace unply
