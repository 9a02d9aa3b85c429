#include "extension/cells/range_reader.hpp"

#include <algorithm>
#include <com/sun/star/beans/XPropertySet.hpp>
#include <com/sun/star/sheet/CellFlags.hpp>
#include <com/sun/star/sheet/XCellRangeAddressable.hpp>
#include <com/sun/star/sheet/XCellRangeData.hpp>
#include <com/sun/star/sheet/XCellRangesQuery.hpp>
#include <com/sun/star/sheet/XSheetCellCursor.hpp>
#include <com/sun/star/sheet/XSheetCellRange.hpp>
#include <com/sun/star/sheet/XSheetCellRanges.hpp>
#include <com/sun/star/sheet/XSpreadsheet.hpp>
#include <com/sun/star/sheet/XUsedAreaCursor.hpp>
#include <com/sun/star/table/XCell.hpp>
#include <utility>

#include "core/base/error.hpp"
#include "core/base/names.hpp"
#include "extension/cells/strings.hpp"
#include "extension/cells/table_builder.hpp"

namespace unply::office {
namespace {

namespace sheet = com::sun::star::sheet;
using com::sun::star::table::CellRangeAddress;
using com::sun::star::uno::Any;
using com::sun::star::uno::Reference;
using com::sun::star::uno::Sequence;
using com::sun::star::uno::TypeClass_DOUBLE;
using com::sun::star::uno::TypeClass_STRING;
using com::sun::star::uno::UNO_QUERY_THROW;
using rtl::OUString;

constexpr sal_Int32 cells_a_block = 10000;  // handed over at once: enough to be quick, too little to be felt
constexpr sal_Int32 last_sheet_row = 1048575;
constexpr std::size_t errors_looked_up = 1000;  // asking for the number of an error takes microseconds
constexpr int circular_reference = 522;         // of the office
constexpr const char* our_functions = "UNPLY.";

/// A range as given, and the part of it that can hold something.
struct Area {
  CellRange range;         // as given
  std::string address;     // "Data.A1:D40"
  std::string sheet_name;  // quoted where needed
  CellRangeAddress given;
  sal_Int32 columns = 0;  // from the first given column on: those within the used part of the sheet
  sal_Int32 rows = 0;     // likewise

  sal_Int32 given_rows() const { return given.EndRow - given.StartRow + 1; }
  sal_Int32 given_columns() const { return given.EndColumn - given.StartColumn + 1; }
  bool whole_columns() const { return given.StartRow == 0 && given.EndRow >= last_sheet_row; }

  std::string cell(sal_Int32 column, sal_Int32 row) const {  // relative to the range
    return sheet_name + "." + column_letters(static_cast<std::size_t>(given.StartColumn + column)) +
           std::to_string(given.StartRow + row + 1);
  }
  CellRange block(sal_Int32 first_row, sal_Int32 count) const {
    return range->getCellRangeByPosition(0, first_row, columns - 1, first_row + count - 1);
  }
};

/// The address in words of the sheet, e.g. "$Data.$A$1:$D$40", parted at the marks that stand outside of
/// quotes.
struct AddressText {
  std::string sheet, cells;
  bool several_sheets = false;
};
AddressText address_text(const CellRange& range) {
  const Reference<com::sun::star::beans::XPropertySet> properties(range, UNO_QUERY_THROW);
  OUString name;
  properties->getPropertyValue("AbsoluteName") >>= name;
  AddressText result;
  std::string* part = &result.sheet;
  bool quoted = false, second = false;
  for (const char letter : to_utf8(name)) {
    if (letter == '\'') quoted = !quoted;
    if (!quoted && letter == '$') continue;
    if (!quoted && letter == ':') second = true;
    if (!quoted && letter == '.' && second) result.several_sheets = true;
    if (!quoted && letter == '.' && !second)
      part = &result.cells;
    else
      *part += letter;
  }
  return result;
}

Area locate(const CellRange& range, const std::string& argument) {
  if (!range.is()) throw Error(ErrorCode::not_a_range, {{FactId::name, argument}});
  Area area;
  area.range = range;
  const AddressText text = address_text(range);
  area.sheet_name = text.sheet;
  area.address = text.sheet + "." + text.cells;
  if (text.several_sheets) throw Error(ErrorCode::several_sheets, {{FactId::range, area.address}});
  area.given = Reference<sheet::XCellRangeAddressable>(range, UNO_QUERY_THROW)->getRangeAddress();

  const Reference<sheet::XSheetCellRange> on_sheet(range, UNO_QUERY_THROW);
  const Reference<sheet::XUsedAreaCursor> cursor(on_sheet->getSpreadsheet()->createCursor(), UNO_QUERY_THROW);
  cursor->gotoEndOfUsedArea(false);
  const CellRangeAddress used =
      Reference<sheet::XCellRangeAddressable>(cursor, UNO_QUERY_THROW)->getRangeAddress();
  area.columns = std::min(area.given.EndColumn, used.EndColumn) - area.given.StartColumn + 1;
  area.rows = std::min(area.given.EndRow, used.EndRow) - area.given.StartRow + 1;
  return area;
}

/// Rows of the area up to the last one with content, from `first_row` on; a look at the cells' kinds, not
/// their values.
sal_Int32 rows_with_content(const Area& area, sal_Int32 first_row) {
  const Reference<sheet::XCellRangesQuery> rest(area.block(first_row, area.rows - first_row),
                                                UNO_QUERY_THROW);
  using namespace sheet::CellFlags;
  const Sequence<CellRangeAddress> found =
      rest->queryContentCells(VALUE | DATETIME | STRING | FORMULA)->getRangeAddresses();
  sal_Int32 last = area.given.StartRow + first_row - 1;
  for (sal_Int32 i = 0; i < found.getLength(); ++i) last = std::max(last, found[i].EndRow);
  return last - area.given.StartRow + 1;
}

text::Cell cell_of(const Any& cell) {
  double number = 0;
  if (cell >>= number) return number;
  OUString words;
  if ((cell >>= words) && !words.isEmpty()) return to_utf8(words);
  return std::monostate();
}

bool is_blank(const Any& cell) {
  return cell.getValueTypeClass() == TypeClass_STRING &&
         static_cast<const OUString*>(cell.getValue())->isEmpty();
}

/// The number of the error in a cell. The cell of the very formula that is being computed refers to itself.
int error_code(const Area& area, sal_Int32 column, sal_Int32 row) {
  const Reference<com::sun::star::table::XCell> cell = area.range->getCellByPosition(column, row);
  const int code = cell->getError();
  if (code == circular_reference && to_utf8(cell->getFormula()).find(our_functions) != std::string::npos)
    throw Error(ErrorCode::own_cell_in_range,
                {{FactId::range, area.address}, {FactId::address, area.cell(column, row)}});
  return code;
}

/// What was read of an area.
struct ReadArea {
  TableBuilder cells;
  sal_Int32 first_data_row = 0;  // relative to the area
};

std::string letters(const Area& area, sal_Int32 column) {
  return column_letters(static_cast<std::size_t>(area.given.StartColumn + column));
}

std::vector<std::string> read_headings(const Area& area, const Any* row, sal_Int32 at,
                                       bool numbers_are_names) {
  std::vector<std::string> names;
  for (sal_Int32 j = 0; j < area.columns; ++j) {
    const Any& cell = row[j];
    if (cell.getValueTypeClass() == TypeClass_STRING) {
      names.push_back(to_utf8(*static_cast<const OUString*>(cell.getValue())));
    } else if (!cell.hasValue()) {
      const double code = error_code(area, j, at);
      throw Error(ErrorCode::error_cells, {{FactId::column, letters(area, j)},
                                           {FactId::addresses, std::vector<std::string>{area.cell(j, at)}},
                                           {FactId::count, 1.0},
                                           {FactId::code, code}});
    } else if (numbers_are_names) {
      double number = 0;
      cell >>= number;
      names.push_back(plain_number(number));
    } else {
      const std::string last = letters(area, area.columns - 1) + std::to_string(area.given.StartRow + at + 1);
      throw Error(ErrorCode::headings_are_numbers, {{FactId::range, area.cell(0, at) + ":" + last}});
    }
  }
  return names;
}

/// Reads an area from its first row with content on; or from `first_row`, where the rows beside it begin.
ReadArea read_area(const Area& area, const ReadOptions& options, std::optional<sal_Int32> first_row = {}) {
  const auto nothing = [&area] { return Error(ErrorCode::empty_range, {{FactId::range, area.address}}); };
  if (area.columns <= 0 || area.rows <= 0) throw nothing();
  const bool has_headings = options.headings.value_or(true);
  ReadArea read{TableBuilder(static_cast<std::size_t>(area.columns), static_cast<std::size_t>(area.rows)), 0};
  TableBuilder& cells = read.cells;
  std::vector<std::string> names(static_cast<std::size_t>(area.columns));
  std::size_t errors = 0;
  bool started = false, end_known = false;
  sal_Int32 end = area.rows;
  const sal_Int32 block_rows = std::max(sal_Int32(1), cells_a_block / area.columns);
  for (sal_Int32 first = first_row.value_or(0); first < end; first += block_rows) {
    const sal_Int32 count = std::min(block_rows, end - first);
    const Reference<sheet::XCellRangeData> block(area.block(first, count), UNO_QUERY_THROW);
    const Sequence<Sequence<Any>> rows = block->getDataArray();
    bool content = false;
    for (sal_Int32 i = 0; i < count; ++i) {
      const Any* row = rows[i].getConstArray();
      if (!started) {
        started = first_row || !std::all_of(row, row + area.columns, is_blank);
        if (!started) continue;
        content = true;
        read.first_data_row = first + i + (has_headings ? 1 : 0);
        if (has_headings) {
          names = read_headings(area, row, first + i, options.headings.has_value());
          continue;
        }
      }
      for (sal_Int32 j = 0; j < area.columns; ++j) {
        const Any& cell = row[j];
        const auto column = static_cast<std::size_t>(j);
        if (cell.getValueTypeClass() == TypeClass_DOUBLE) {
          cells.number(column, *static_cast<const double*>(cell.getValue()));
          content = true;
        } else if (cell.getValueTypeClass() == TypeClass_STRING) {
          const OUString& text = *static_cast<const OUString*>(cell.getValue());
          if (text.isEmpty()) {
            cells.missing(column);
          } else {
            cells.text(column, to_utf8(text));
            content = true;
          }
        } else {
          cells.error(column, errors++ < errors_looked_up ? error_code(area, j, first + i) : 0);
          content = true;
        }
      }
    }
    // A long way of nothing: is there anything more at all?
    if (!content && !end_known && first + count < end) {
      end = rows_with_content(area, first + count);
      end_known = true;
    }
  }
  if (!started) throw nothing();
  if (cells.content_rows() == 0) throw Error(ErrorCode::no_data_rows, {{FactId::range, area.address}});
  for (sal_Int32 j = 0; j < area.columns; ++j) {
    const auto column = static_cast<std::size_t>(j);
    Column& at = cells.column(column);
    at.sheet = area.sheet_name;
    at.place = letters(area, j);
    at.first_sheet_row = static_cast<std::size_t>(area.given.StartRow + read.first_data_row + 1);
    at.name = names[column];
    if (cells.empty(column)) continue;
    if (!has_headings) at.name = at.place;
    if (at.name.empty())
      throw Error(ErrorCode::missing_heading, {{FactId::address, area.cell(j, read.first_data_row - 1)}});
  }
  return read;
}

/// One mark a row: 1 where no column of it can be seen.
std::vector<std::uint8_t> hidden_rows(const Area& area, sal_Int32 first_row, std::size_t rows) {
  std::vector<std::uint8_t> hidden(rows, 1);
  if (rows == 0) return hidden;
  const Reference<sheet::XSheetCellRange> on_sheet(area.range, UNO_QUERY_THROW);
  const sal_Int32 first = area.given.StartRow + first_row;
  const sal_Int32 last = first + static_cast<sal_Int32>(rows) - 1;
  // Whole rows: a hidden column hides no row.
  const Reference<sheet::XCellRangesQuery> lines(
      on_sheet->getSpreadsheet()->getCellRangeByPosition(0, first, area.given.EndColumn, last),
      UNO_QUERY_THROW);
  const Sequence<CellRangeAddress> seen = lines->queryVisibleCells()->getRangeAddresses();
  for (sal_Int32 k = 0; k < seen.getLength(); ++k)
    for (sal_Int32 row = std::max(first, seen[k].StartRow); row <= std::min(last, seen[k].EndRow); ++row)
      hidden[static_cast<std::size_t>(row - first)] = 0;
  if (std::find(hidden.begin(), hidden.end(), 1) == hidden.end()) hidden.clear();
  return hidden;
}

/// Whole columns beside a range with an end are read to the same end.
void cut_whole_columns(Area& whole, const Area& other) {
  whole.range = whole.range->getCellRangeByPosition(0, other.given.StartRow, whole.given_columns() - 1,
                                                    other.given.EndRow);
  whole.given.StartRow = other.given.StartRow;
  whole.given.EndRow = other.given.EndRow;
  whole.rows = std::min(whole.rows - other.given.StartRow, whole.given_rows());
}

bool same_rows(const Area& a, const Area& b) {
  return a.given.Sheet == b.given.Sheet && a.given.StartRow == b.given.StartRow &&
         a.given.EndRow == b.given.EndRow;
}

}  // namespace

std::shared_ptr<const Table> read_table(const CellRange& range, const std::string& name,
                                        const ReadOptions& options) {
  const Area area = locate(range, name);
  ReadArea read = read_area(area, options);
  auto table = std::make_shared<Table>();
  table->rows = read.cells.content_rows();
  table->columns = read.cells.take(table->rows);
  if (options.visible_rows_only) table->hidden = hidden_rows(area, read.first_data_row, table->rows);
  return table;
}

ReadData read_data(const CellRange& response, const CellRange& predictors, const ReadOptions& options) {
  if (!response.is())
    return {read_table(predictors, text::argument_name(text::ArgumentId::predictors), options), "", {}};

  Area right = locate(predictors, text::argument_name(text::ArgumentId::predictors));
  Area left = locate(response, text::argument_name(text::ArgumentId::response));
  if (left.given_columns() != 1)
    throw Error(ErrorCode::several_columns,
                {{FactId::range, left.address}, {FactId::count, static_cast<double>(left.given_columns())}});
  if (left.whole_columns() && !right.whole_columns()) cut_whole_columns(left, right);
  if (right.whole_columns() && !left.whole_columns()) cut_whole_columns(right, left);
  if (left.given_rows() != right.given_rows()) {
    const sal_Int32 heading = options.headings.value_or(true) ? 1 : 0;
    throw Error(ErrorCode::row_count_mismatch,
                {{FactId::range, right.address},
                 {FactId::expected, static_cast<double>(left.given_rows() - heading)},
                 {FactId::count, static_cast<double>(right.given_rows() - heading)}});
  }

  ReadData data;
  auto table = std::make_shared<Table>();
  ReadArea right_read = read_area(right, options);
  if (same_rows(left, right) && left.given.StartColumn >= right.given.StartColumn &&
      left.given.StartColumn <= right.given.EndColumn) {
    table->rows = right_read.cells.content_rows();
    table->columns = right_read.cells.take(table->rows);
    const std::string place = letters(left, 0);
    const auto found = std::find_if(table->columns.begin(), table->columns.end(),
                                    [&place](const Column& column) { return column.place == place; });
    if (found == table->columns.end()) throw Error(ErrorCode::empty_range, {{FactId::range, left.address}});
    std::rotate(table->columns.begin(), found, found + 1);
    data.notes.push_back(
        {PhraseId::response_left_out_of_predictors, {{FactId::response, table->columns.front().name}}});
  } else {
    // The response's heading stands in the row of the predictors' headings.
    const sal_Int32 first = right_read.first_data_row - (options.headings.value_or(true) ? 1 : 0);
    ReadArea left_read = read_area(left, options, first);
    table->rows = std::max(right_read.cells.content_rows(), left_read.cells.content_rows());
    table->columns = left_read.cells.take(table->rows);
    for (Column& column : right_read.cells.take(table->rows)) table->columns.push_back(std::move(column));
  }
  if (options.visible_rows_only) {
    table->hidden = hidden_rows(right, right_read.first_data_row, table->rows);
    if (!same_rows(left, right)) {
      const std::vector<std::uint8_t> more = hidden_rows(left, right_read.first_data_row, table->rows);
      if (table->hidden.empty())
        table->hidden = more;
      else
        for (std::size_t i = 0; i < more.size(); ++i) table->hidden[i] |= more[i];
    }
  }
  data.response = table->columns.front().name;
  data.table = std::move(table);
  return data;
}

PlainCells read_cells(const CellRange& range, const std::string& name) {
  const Area area = locate(range, name);
  if (area.columns <= 0 || area.rows <= 0)
    throw Error(ErrorCode::empty_range, {{FactId::range, area.address}});
  PlainCells read;
  read.sheet = area.sheet_name;
  read.range = area.address;
  read.first_column = static_cast<std::size_t>(area.given.StartColumn);
  read.first_row = static_cast<std::size_t>(area.given.StartRow);
  const Reference<sheet::XCellRangeData> block(area.block(0, area.rows), UNO_QUERY_THROW);
  const Sequence<Sequence<Any>> rows = block->getDataArray();
  for (sal_Int32 i = 0; i < rows.getLength(); ++i) {
    std::vector<text::Cell> line;
    for (sal_Int32 j = 0; j < area.columns; ++j) {
      if (!rows[i][j].hasValue()) {
        const double code = error_code(area, j, i);
        throw Error(ErrorCode::error_cells, {{FactId::column, letters(area, j)},
                                             {FactId::addresses, std::vector<std::string>{area.cell(j, i)}},
                                             {FactId::count, 1.0},
                                             {FactId::code, code}});
      }
      line.push_back(cell_of(rows[i][j]));
    }
    read.cells.push_back(std::move(line));
  }
  return read;
}

namespace {

std::vector<text::Cell> line_of(const Sequence<Any>& row) {
  std::vector<text::Cell> line;
  for (sal_Int32 j = 0; j < row.getLength(); ++j) line.push_back(cell_of(row[j]));
  return line;
}

}  // namespace

text::Cells cells_of(const Any& argument) {
  if (!argument.hasValue()) return {};
  text::Cells cells;
  Sequence<Sequence<Any>> rows;
  Sequence<Any> lines;
  CellRange range;
  if ((argument >>= range) && range.is()) {
    rows = Reference<sheet::XCellRangeData>(range, UNO_QUERY_THROW)->getDataArray();
  } else if (argument >>= lines) {  // as macros write it
    for (sal_Int32 i = 0; i < lines.getLength(); ++i) {
      Sequence<Any> row;
      if (!(lines[i] >>= row)) return {line_of(lines)};
      cells.push_back(line_of(row));
    }
    return cells;
  } else if (!(argument >>= rows)) {
    const text::Cell cell = cell_of(argument);
    if (std::holds_alternative<std::monostate>(cell) && argument.getValueTypeClass() != TypeClass_STRING)
      throw Error(ErrorCode::settings_shape);  // of a kind that no sheet hands over
    return {{cell}};
  }
  for (sal_Int32 i = 0; i < rows.getLength(); ++i) cells.push_back(line_of(rows[i]));
  return cells;
}

}  // namespace unply::office
