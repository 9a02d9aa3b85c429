// The cells of a small range as they stand, with their addresses for messages.
#pragma once

#include <cstddef>
#include <string>

#include "extension/cells/table_builder.hpp"
#include "extension/text/text.hpp"

namespace unply::office {

struct PlainCells {
  text::Cells cells;                            // rows of the same length
  std::string sheet;                            // quoted where needed; empty: not said
  std::size_t first_column = 0, first_row = 0;  // 0-based, of the sheet
  std::string range;                            // address as given

  /// Of the cell in this row and column of `cells`.
  std::string address(std::size_t row, std::size_t column) const {
    return (sheet.empty() ? "" : sheet + ".") + column_letters(first_column + column) +
           std::to_string(first_row + row + 1);
  }
};

}  // namespace unply::office
