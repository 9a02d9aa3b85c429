#include "extension/cells/report_writer.hpp"

#include <com/sun/star/awt/FontWeight.hpp>
#include <com/sun/star/awt/Point.hpp>
#include <com/sun/star/awt/Size.hpp>
#include <com/sun/star/container/XIndexAccess.hpp>
#include <com/sun/star/container/XNameAccess.hpp>
#include <com/sun/star/frame/XStorable.hpp>
#include <com/sun/star/lang/XMultiServiceFactory.hpp>
#include <com/sun/star/sheet/XCellRangeAddressable.hpp>
#include <com/sun/star/sheet/XCellRangeData.hpp>
#include <com/sun/star/sheet/XPrintAreas.hpp>
#include <com/sun/star/sheet/XSheetCellRangeContainer.hpp>
#include <com/sun/star/sheet/XSpreadsheet.hpp>
#include <com/sun/star/sheet/XSpreadsheets.hpp>
#include <com/sun/star/table/XColumnRowRange.hpp>
#include <com/sun/star/text/XText.hpp>
#include <com/sun/star/util/XMergeable.hpp>
#include <com/sun/star/util/XProtectable.hpp>
#include <map>
#include <tuple>

#include "core/base/error.hpp"
#include "extension/cells/styles.hpp"

namespace unply::office {
namespace {

using css::sheet::XSpreadsheet;
using css::sheet::XSpreadsheetDocument;
using css::table::CellRangeAddress;
using css::table::XCellRange;

/// `Unply findings`, `Unply tables` ... with the same number behind all of them, the first that is free.
std::vector<OUString> free_names(const Reference<XSpreadsheetDocument>& document,
                                 const std::vector<LaidOutSheet>& sheets) {
  const Reference<css::container::XNameAccess> taken(document->getSheets(), UNO_QUERY_THROW);
  for (sal_Int32 number = 1;; ++number) {
    std::vector<OUString> names;
    bool free = true;
    for (const LaidOutSheet& sheet : sheets) {
      OUString name = to_office(sheet.name);
      if (number > 1) name += " " + OUString::number(number);
      free = free && !taken->hasByName(name);
      names.push_back(name);
    }
    if (free) return names;
  }
}

class SheetWriter {
 public:
  SheetWriter(const Reference<XSpreadsheetDocument>& document, CellStyles& styles, const LaidOutSheet& layout,
              const OUString& name)
      : document_(document), styles_(styles), layout_(layout) {
    const Reference<css::sheet::XSpreadsheets> sheets = document->getSheets();
    const Reference<css::container::XIndexAccess> by_index(sheets, UNO_QUERY_THROW);
    sheets->insertNewByName(name, static_cast<sal_Int16>(by_index->getCount()));
    sheet_.set(sheets->getByName(name), UNO_QUERY_THROW);
    index_ = Reference<css::sheet::XCellRangeAddressable>(sheet_, UNO_QUERY_THROW)->getRangeAddress().Sheet;
  }

  void write(const Paper& paper) {
    set_widths();
    put_styles();
    put_values();
    merge_spans();
    emphasise();
    set_heights();
    set_pages(paper);
  }

  css::awt::Rectangle rectangle(std::size_t first_row, std::size_t rows) const {
    const auto range = cells(first_row, 0, rows, layout_.column_widths.size());
    const auto at = get_property<css::awt::Point>(range, "Position");
    const auto size = get_property<css::awt::Size>(range, "Size");
    return {at.X, at.Y, size.Width, size.Height};
  }

 private:
  Reference<XCellRange> cells(std::size_t row, std::size_t column, std::size_t rows,
                              std::size_t columns) const {
    return sheet_->getCellRangeByPosition(static_cast<sal_Int32>(column), static_cast<sal_Int32>(row),
                                          static_cast<sal_Int32>(column + columns - 1),
                                          static_cast<sal_Int32>(row + rows - 1));
  }

  void set_widths() {
    const Reference<css::table::XColumnRowRange> grid(sheet_, UNO_QUERY_THROW);
    const auto columns = grid->getColumns();
    for (std::size_t k = 0; k < layout_.column_widths.size(); ++k)
      set_property(
          Reference<css::uno::XInterface>(columns->getByIndex(static_cast<sal_Int32>(k)), UNO_QUERY_THROW),
          "Width", sal_Int32(layout_.column_widths[k]));
  }

  void put_styles() {
    styles_.apply({StyleId::page}, cells(0, 0, layout_.rows.size(), layout_.column_widths.size()));
    const Reference<css::lang::XMultiServiceFactory> factory(document_, UNO_QUERY_THROW);
    std::map<CellStyle, Reference<css::sheet::XSheetCellRangeContainer>> places;
    for (const LaidOutCell& cell : layout_.cells) {
      auto& place = places[cell.style];
      if (!place.is())
        place.set(factory->createInstance("com.sun.star.sheet.SheetCellRanges"), UNO_QUERY_THROW);
      place->addRangeAddress(
          CellRangeAddress(index_, static_cast<sal_Int32>(cell.column), static_cast<sal_Int32>(cell.row),
                           static_cast<sal_Int32>(cell.column + cell.span - 1),
                           static_cast<sal_Int32>(cell.row)),
          true);
    }
    for (const auto& [style, place] : places) styles_.apply(style, place);
  }

  void put_values() {
    const auto columns = static_cast<sal_Int32>(layout_.column_widths.size());
    Sequence<Sequence<Any>> block(static_cast<sal_Int32>(layout_.rows.size()));
    const Any nothing = css::uno::makeAny(OUString());  // an empty text leaves the cell empty
    Sequence<Any> blank(columns);
    for (Any& any : asNonConst(blank)) any = nothing;
    Sequence<Any>* rows = block.getArray();
    for (sal_Int32 i = 0; i < block.getLength(); ++i) rows[i] = blank;
    for (const LaidOutCell& cell : layout_.cells) {
      Any& any = rows[cell.row].getArray()[cell.column];
      if (const auto* number = std::get_if<double>(&cell.content)) any <<= *number;
      if (const auto* words = std::get_if<std::string>(&cell.content)) any <<= to_office(*words);
    }
    const Reference<css::sheet::XCellRangeData> data(
        cells(0, 0, layout_.rows.size(), layout_.column_widths.size()), UNO_QUERY_THROW);
    data->setDataArray(block);  // texts are never read as formulas
  }

  static Sequence<Any>& asNonConst(Sequence<Any>& sequence) { return sequence; }

  void merge_spans() {
    for (const LaidOutCell& cell : layout_.cells)
      if (cell.span > 1)
        Reference<css::util::XMergeable>(cells(cell.row, cell.column, 1, cell.span), UNO_QUERY_THROW)
            ->merge(true);
  }

  void emphasise() {
    for (const LaidOutCell& cell : layout_.cells) {
      const auto* words = std::get_if<std::string>(&cell.content);
      if (cell.emphasised == 0 || words == nullptr) continue;
      const Reference<css::text::XText> text(
          sheet_->getCellByPosition(static_cast<sal_Int32>(cell.column), static_cast<sal_Int32>(cell.row)),
          UNO_QUERY_THROW);
      const Reference<css::text::XTextCursor> cursor = text->createTextCursor();
      cursor->gotoStart(false);
      cursor->goRight(static_cast<sal_Int16>(to_office(words->substr(0, cell.emphasised)).getLength()), true);
      set_property(cursor, "CharWeight", css::awt::FontWeight::BOLD);
    }
  }

  void set_heights() {
    const Reference<css::table::XColumnRowRange> grid(sheet_, UNO_QUERY_THROW);
    const auto rows = grid->getRows();
    set_property(Reference<css::table::XColumnRowRange>(cells(0, 0, layout_.rows.size(), 1), UNO_QUERY_THROW)
                     ->getRows(),
                 "OptimalHeight", true);
    heights_.clear();
    for (std::size_t i = 0; i < layout_.rows.size(); ++i) {
      const Reference<css::uno::XInterface> row(rows->getByIndex(static_cast<sal_Int32>(i)), UNO_QUERY_THROW);
      const LaidOutRow& wished = layout_.rows[i];
      sal_Int32 height = get_property<sal_Int32>(row, "Height");
      if (wished.fixed_height > 0 || height < wished.least_height) {
        height = wished.fixed_height > 0 ? wished.fixed_height : wished.least_height;
        set_property(row, "Height", height);
      }
      heights_.push_back(height);
    }
  }

  void set_pages(const Paper& paper) {
    set_property(sheet_, "PageStyle", page_style(document_, paper, layout_.landscape));
    Sequence<CellRangeAddress> printed(1);
    printed[0] = CellRangeAddress(index_, 0, 0, static_cast<sal_Int32>(layout_.column_widths.size()) - 1,
                                  static_cast<sal_Int32>(layout_.printed_rows) - 1);
    Reference<css::sheet::XPrintAreas>(sheet_, UNO_QUERY_THROW)->setPrintAreas(printed);
    const auto rows = Reference<css::table::XColumnRowRange>(sheet_, UNO_QUERY_THROW)->getRows();
    for (std::size_t row : page_breaks(heights_, layout_.rows, layout_.printed_rows,
                                       text_area_height(paper, layout_.landscape)))
      set_property(
          Reference<css::uno::XInterface>(rows->getByIndex(static_cast<sal_Int32>(row)), UNO_QUERY_THROW),
          "IsStartOfNewPage", true);
  }

  Reference<XSpreadsheetDocument> document_;
  CellStyles& styles_;
  const LaidOutSheet& layout_;
  Reference<XSpreadsheet> sheet_;
  sal_Int16 index_ = 0;
  std::vector<int> heights_;
};

}  // namespace

void check_writable(const Reference<XSpreadsheetDocument>& document) {
  const Reference<css::frame::XStorable> storable(document, UNO_QUERY);
  if (storable.is() && storable->isReadonly()) throw Error(ErrorCode::document_read_only);
  const Reference<css::util::XProtectable> structure(document, UNO_QUERY);
  if (structure.is() && structure->isProtected()) throw Error(ErrorCode::structure_protected);
}

WrittenSheets write_sheets(const Reference<XSpreadsheetDocument>& document, const Report& report) {
  check_writable(document);
  const Paper paper = paper_of(document);
  const ReportLayout layout = lay_out(report, paper);
  WrittenSheets written;
  written.names = free_names(document, layout.sheets);
  CellStyles styles(document);
  std::vector<SheetWriter> writers;
  for (std::size_t k = 0; k < layout.sheets.size(); ++k) {
    writers.emplace_back(document, styles, layout.sheets[k], written.names[k]);
    writers.back().write(paper);
  }
  for (const LaidOutChart& chart : layout.charts)
    written.charts.push_back({chart, written.names[chart.sheet], written.names[1],
                              writers[chart.sheet].rectangle(chart.first_row, chart.rows)});
  return written;
}

}  // namespace unply::office
