// Where everything of a report goes on its sheets, and in which style: plain data, made without an office.
//
// Three sheets. The findings are one page for a reader who never saw the tool: what was analysed, the
// verdicts at a glance, the chart of the effects, the sentences. The tables come next, stacked on a grid of
// equal columns, so that the numbers of all tables line up and the sheet fits a page; what holds words spans
// several of these columns. Last the write-up, in reading width.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "core/report/report.hpp"
#include "extension/text/text.hpp"

namespace unply::office {

/// What a cell is for. extension/cells/styles makes one named style of the office for each (and each shape of
/// number).
enum class StyleId {
  page,  // every cell of the printed area, also the empty ones
  title,
  section,
  block_title,
  heading,         // of a column of words
  number_heading,  // of a column of numbers
  label,           // left of a value or a sentence
  inner_heading,   // of a column of words that is not the first
  words,           // in a table
  inner_words,     // in a column that is not the first: set off from the numbers to its left
  right_words,     // in a column of numbers
  number,          // with `decimals`
  first_number,    // in the first column, to the left; with `decimals`
  count,
  whole,  // a whole number that is a name, such as a seed: no separators
  p_value,
  percent,  // with `decimals`
  scientific,
  value,          // right of a label: words or a number, to the left
  percent_value,  // the same for a percentage
  note,
  sentence,
  mark_clear,
  mark_ruled_out,
  mark_undecided,
  mark_not_estimable,
};

struct CellStyle {
  StyleId id = StyleId::page;
  int decimals = 0;
  auto operator<=>(const CellStyle&) const = default;
};

/// How numbers of one meaning are shown, at a glance the same digits as their uncertainty allows.
/// `reference`: the standard error that decides on the decimals, else 0. `width`: of the cell, in 1/100 mm.
CellStyle style_of_number(double value, NumberFormat format, HeadingId heading, double reference, int width);

struct LaidOutCell {
  std::size_t row = 0, column = 0, span = 1;  // columns that are merged into this cell
  text::Cell content;
  CellStyle style;
  std::size_t emphasised = 0;  // bytes at the beginning that are set in bold
};

struct LaidOutRow {
  int fixed_height = 0;    // 1/100 mm; 0: as high as its content
  int least_height = 0;    // by our own measure: the office's may be a line short of what it prints
  bool with_next = false;  // no page break after this row
};

/// A chart over `rows` whole rows from `first_row`, and where its numbers stand on the tables sheet.
struct LaidOutChart {
  BlockId id = BlockId::estimates_chart;
  std::size_t sheet = 0;  // 0 findings, 1 tables
  std::size_t first_row = 0, rows = 0;
  std::string title, axis_title;
  std::size_t data_heading_row = 0, first_data_row = 0, points = 0;
  bool intervals = false;  // columns: name, value[, lower, upper, below, above], one for each mark
  std::vector<double> marks;
  std::vector<std::string> mark_names;
  int point_height = 0;  // 1/100 mm for each name
  double axis_minimum = 0, axis_maximum = 1, axis_step = 1;
  bool logarithmic = false;
};

struct LaidOutSheet {
  std::string name;
  bool landscape = false;
  std::vector<int> column_widths;
  std::vector<LaidOutRow> rows;
  std::vector<LaidOutCell> cells;
  std::size_t printed_rows = 0;  // rows after these are not printed
};

struct ReportLayout {
  std::vector<LaidOutSheet> sheets;  // findings, tables, write-up
  std::vector<LaidOutChart> charts;
};

/// A sheet of paper, upright, in 1/100 mm. Margins and the lines above and below the text are ours.
struct Paper {
  int width = 21000, height = 29700;
};
inline constexpr int margin_top = 1200, margin_bottom = 1200, page_line = 900;
constexpr int margin_sides(bool landscape) { return landscape ? 1300 : 1800; }
int text_area_width(const Paper& paper, bool landscape);
int text_area_height(const Paper& paper, bool landscape);

ReportLayout lay_out(const Report& report, const Paper& paper);

/// What a report says about each coefficient, in the order of the model; NaN where it is not estimable.
struct TermLine {
  std::string term, verdict, finding;
  double estimate = 0, lower = 0, upper = 0;
};
std::vector<TermLine> term_lines(const Report& report);

/// Rows that begin a page, when rows of these heights are set on pages `page_height` high: as few pages as
/// possible, no break after a row that keeps with the next one unless its whole group is higher than a page.
std::vector<std::size_t> page_breaks(const std::vector<int>& heights, const std::vector<LaidOutRow>& rows,
                                     std::size_t printed_rows, int page_height);

}  // namespace unply::office
