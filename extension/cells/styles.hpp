// The named styles of the report: cells and pages. They live in the document, so that a reader can restyle a
// report (and every later one) without the extension. A style that the document has already is left as it is.
#pragma once

#include <com/sun/star/sheet/XSpreadsheetDocument.hpp>
#include <map>
#include <vector>

#include "extension/cells/report_layout.hpp"
#include "extension/cells/uno.hpp"

namespace unply::office {

/// Okabe & Ito, Color Universal Design (2008): told apart with every kind of colour vision. Never the only
/// carrier.
namespace colour {
inline constexpr sal_Int32 black = 0x000000;
inline constexpr sal_Int32 blue = 0x0072B2;
inline constexpr sal_Int32 sky_blue = 0x56B4E9;
inline constexpr sal_Int32 bluish_green = 0x009E73;
inline constexpr sal_Int32 vermillion = 0xD55E00;
inline constexpr sal_Int32 reddish_purple = 0xCC79A7;
// Greys for lines and secondary text.
inline constexpr sal_Int32 white = 0xFFFFFF;
inline constexpr sal_Int32 dark_grey = 0x404040;
inline constexpr sal_Int32 grey = 0x8C8C8C;
inline constexpr sal_Int32 light_grey = 0xD9D9D9;
}  // namespace colour

/// Styles of cells; made in the document on first use. Where a sheet of the document is protected the office
/// lets no style be made: then the cells are given the same looks one by one.
class CellStyles {
 public:
  explicit CellStyles(const Reference<css::sheet::XSpreadsheetDocument>& document);
  void apply(const CellStyle& style, const Reference<css::uno::XInterface>& cells);

 private:
  bool make(const CellStyle& style, const OUString& name);

  Reference<css::sheet::XSpreadsheetDocument> document_;
  bool may_make_ = true;
  std::map<CellStyle, bool> made_;
};

/// Paper of the document's own pages, upright; where that is no usual sheet, A4 or Letter by the document's
/// country.
Paper paper_of(const Reference<css::sheet::XSpreadsheetDocument>& document);

/// Name of the report's page style; made on first use.
OUString page_style(const Reference<css::sheet::XSpreadsheetDocument>& document, const Paper& paper,
                    bool landscape);

}  // namespace unply::office
