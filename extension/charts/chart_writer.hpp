// Draws the charts of a report as charts of the office, from the cells that hold their numbers.
#pragma once

#include <com/sun/star/uno/XComponentContext.hpp>

#include "extension/cells/report_writer.hpp"

namespace unply::office {

/// A point for each name with its interval, and a line at zero; or a bar for each name with reference marks
/// as lines.
void write_chart(const Reference<css::uno::XComponentContext>& context,
                 const Reference<css::sheet::XSpreadsheetDocument>& document, const ChartPlace& place);

}  // namespace unply::office
