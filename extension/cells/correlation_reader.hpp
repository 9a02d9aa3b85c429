// A published table of correlations in cells -> CorrelationTable.
#pragma once

#include "core/fit/from_correlations.hpp"
#include "extension/cells/plain_cells.hpp"
#include "extension/cells/settings_reader.hpp"

namespace unply::office {

/// Names in the first row; they may stand in the first column too, in any order. One half of the table may be
/// empty, and so may the diagonal, as such tables are printed. `n` is the number of rows behind them. The
/// setting terms chooses among the variables. Throws Error: correlation_shape, correlation_asymmetric,
/// correlation_missing, headings_are_numbers, missing_heading, duplicate_heading, text_among_numbers,
/// unknown_column, impossible_setting.
CorrelationTable read_correlations(const PlainCells& cells, double n, const Settings& settings);

}  // namespace unply::office
