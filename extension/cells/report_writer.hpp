// Puts a report on sheets of its own at the end of a document. Values only: the report is whole without the
// extension.
#pragma once

#include <com/sun/star/awt/Rectangle.hpp>
#include <com/sun/star/sheet/XSpreadsheetDocument.hpp>
#include <string>
#include <vector>

#include "core/report/report.hpp"
#include "extension/cells/report_layout.hpp"
#include "extension/cells/uno.hpp"

namespace unply::office {

/// A chart that is still to be drawn: its place is reserved, its numbers stand in cells.
struct ChartPlace {
  LaidOutChart chart;
  OUString sheet;       // on which it stands
  OUString data_sheet;  // on which its numbers stand
  css::awt::Rectangle rectangle;
};

struct WrittenSheets {
  std::vector<OUString> names;  // findings, tables, write-up
  std::vector<ChartPlace> charts;
};

/// Throws Error document_read_only or structure_protected before anything is changed.
void check_writable(const Reference<css::sheet::XSpreadsheetDocument>& document);

/// Adds the sheets of the report, each under a name that is not taken. Nothing that is there is changed. The
/// caller opens an undo context around it. Throws as check_writable().
WrittenSheets write_sheets(const Reference<css::sheet::XSpreadsheetDocument>& document, const Report& report);

}  // namespace unply::office
