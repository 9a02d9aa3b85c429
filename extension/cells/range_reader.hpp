// Ranges of the office into tables: headings, data rows, addresses for messages. Read in blocks of rows
// straight into the table's columns, so that a whole sheet needs no more memory than its numbers.
#pragma once

#include <com/sun/star/table/XCellRange.hpp>
#include <com/sun/star/uno/Any.hxx>
#include <com/sun/star/uno/Reference.hxx>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "core/data/table.hpp"
#include "core/report/report.hpp"
#include "extension/cells/plain_cells.hpp"
#include "extension/text/text.hpp"

namespace unply::office {

using CellRange = com::sun::star::uno::Reference<com::sun::star::table::XCellRange>;

struct ReadOptions {
  std::optional<bool>
      headings;  // does the first row hold the names; without it a row of texts is taken for them
  bool visible_rows_only = false;  // mark filtered and hidden rows in the table
};

struct ReadData {
  std::shared_ptr<const Table> table;  // the response, where there is one, is the first column
  std::string response;                // its heading; empty without one
  std::vector<Phrase> notes;
};

/// The table of `predictors`, with the column `response` where it is not null. Whole columns are cut to their
/// content, wholly empty columns are skipped, empty rows after the last content are not read. A response
/// inside the predictors is left out of them, with a note. Throws Error: every code under "cells" of
/// core/base/error.hpp but those that only a model can judge.
ReadData read_data(const CellRange& response, const CellRange& predictors, const ReadOptions& options);

/// One range with headings. `name` is that of the argument, for messages.
std::shared_ptr<const Table> read_table(const CellRange& range, const std::string& name,
                                        const ReadOptions& options);

/// The cells of a small range as they stand, trailing empty rows cut. Throws Error: not_a_range,
/// several_sheets, empty_range, error_cells, own_cell_in_range.
PlainCells read_cells(const CellRange& range, const std::string& name);

/// An argument that may be left out: a number, a text, the cells of a range, an inline array, or what macros write in
/// their place. Throws Error: settings_shape.
text::Cells cells_of(const com::sun::star::uno::Any& argument);

}  // namespace unply::office
