#include "extension/cells/report_layout.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdio>
#include <map>
#include <optional>
#include <set>
#include <utility>

#include "extension/cells/fonts.hpp"

namespace unply::office {
namespace {

using text::Cell;
using text::LabelId;

constexpr int padding = 90;               // of a cell, left and right together, and a little air
constexpr int slack = 60;                 // the office's own measure may be a little wider than ours
constexpr int label_width = 3800;         // left column of the findings and the write-up
constexpr int name_width = 4000;          // first column of the tables
constexpr std::size_t grid_columns = 12;  // beside it
constexpr std::size_t widest_name = 3;    // columns of the grid that a heading of a narrow column may take
constexpr int gap_height = 300;           // between blocks
constexpr int small_gap = 120;
constexpr int chart_row_height = 500;
constexpr int chart_frame = 2900;  // title and axis of a chart
constexpr int legend_height = 800;
constexpr int roomy_point = 650, dense_point = 340;  // height for each name
constexpr int two_line_point = 850;                  // for names on two lines
constexpr int chart_name_width = 6500;  // longer names take a second line, or are shortened in the middle
constexpr int plain_row_height = 450;   // of a row without content
constexpr double caution =
    1.02;  // our heights are estimates: pages are planned a little fuller than they seem

// -- numbers
// ---------------------------------------------------------------------------------------------------------

int decimals_for(double value, int significant) {
  if (value == 0 || !std::isfinite(value)) return 0;
  return std::clamp(significant - 1 - static_cast<int>(std::floor(std::log10(std::abs(value)))), 0, 12);
}

/// Decimals left after dropping zeros at the end: 0.100 is shown as 0.1, 30.00 as 30.
int without_trailing_zeros(double value, int decimals) {
  while (decimals > 0) {
    const double scaled = value * std::pow(10.0, decimals - 1);
    if (std::abs(scaled - std::round(scaled)) > 1e-9 * std::max(1.0, std::abs(scaled))) break;
    --decimals;
  }
  return decimals;
}

std::string shown(double value, const CellStyle& style) {
  std::array<char, 400> buffer{};
  const auto size = static_cast<std::size_t>(
      std::snprintf(buffer.data(), buffer.size(), style.id == StyleId::scientific ? "%.*E" : "%.*f",
                    style.id == StyleId::p_value ? 4 : style.decimals, value));
  std::string text(buffer.data(), size);
  if (style.id == StyleId::count)
    for (std::size_t at = text.size(); at > 3 && at - 3 > (value < 0 ? 1U : 0U); at -= 3)
      text.insert(at - 3, ",");
  return text;
}

bool shares_the_decimals_of_the_error(HeadingId heading) {
  switch (heading) {
    case HeadingId::estimate:
    case HeadingId::lower:
    case HeadingId::upper:
    case HeadingId::standard_error:
    case HeadingId::half_width:
    case HeadingId::error_without_collinearity:
      return true;
    default:
      return false;
  }
}

// -- verdicts
// --------------------------------------------------------------------------------------------------------

struct Mark {
  StyleId style;
  PhraseId word;
  const char* sign;  // a shape for each verdict: colour is never the only carrier
};

/// What a finding amounts to; nothing where it is advice.
std::optional<Mark> mark_of(const std::vector<Phrase>& finding) {
  const auto clear = [](PhraseId word) { return Mark{StyleId::mark_clear, word, "\u25CF"}; };
  const auto undecided = [](PhraseId word) { return Mark{StyleId::mark_undecided, word, "\u25CA"}; };
  const auto has = [&finding](PhraseId id) {
    return std::any_of(finding.begin(), finding.end(),
                       [id](const Phrase& phrase) { return phrase.id == id; });
  };
  if (finding.empty()) return std::nullopt;
  switch (finding.front().id) {
    case PhraseId::term_clear:
    case PhraseId::group_joint_clear:
      return clear(PhraseId::verdict_clear);
    case PhraseId::term_clear_beyond:
      return clear(PhraseId::verdict_clear_beyond);
    case PhraseId::term_clear_size_uncertain:
      return clear(PhraseId::verdict_clear_size_uncertain);
    case PhraseId::term_clear_too_small:
      return clear(PhraseId::verdict_clear_too_small);
    case PhraseId::term_ruled_out:
      return Mark{StyleId::mark_ruled_out, PhraseId::verdict_ruled_out, "\u25CB"};
    case PhraseId::term_undecided:
      if (has(PhraseId::cause_collinearity)) return undecided(PhraseId::verdict_undecided_collinearity);
      if (has(PhraseId::cause_collinearity_partly)) return undecided(PhraseId::verdict_undecided_partly);
      if (has(PhraseId::cause_other_rows)) return undecided(PhraseId::verdict_undecided_rows);
      if (has(PhraseId::cause_other_spread)) return undecided(PhraseId::verdict_undecided_spread);
      if (has(PhraseId::cause_other_scatter)) return undecided(PhraseId::verdict_undecided_scatter);
      return undecided(PhraseId::verdict_undecided);
    case PhraseId::group_joint_undecided:
      return undecided(PhraseId::verdict_undecided);
    case PhraseId::term_not_estimable:
      return Mark{StyleId::mark_not_estimable, PhraseId::verdict_not_estimable, "\u25B2"};
    default:
      return std::nullopt;
  }
}

std::string words_of(const Mark& mark) { return std::string(mark.sign) + " " + text::phrase({mark.word}); }

std::string joined(const std::vector<Phrase>& sentences) {
  std::string all;
  for (const Phrase& sentence : sentences) {
    const std::string words = text::phrase(sentence);
    if (words.empty()) continue;
    if (!all.empty()) all += ' ';
    all += words;
  }
  return all;
}

/// How much of a finding's words to set in bold: the term's name and its verdict, up to the first stop after
/// the name.
std::size_t emphasised_part(const std::string& words, const std::vector<Phrase>& finding) {
  std::size_t after_name = 0;
  if (!finding.empty() && finding.front().facts.has(FactId::term)) {
    const std::string& name = finding.front().facts.text(FactId::term);
    if (words.compare(0, name.size(), name) != 0) return 0;
    after_name = name.size();
  } else if (!mark_of(finding)) {
    return 0;
  } else {
    after_name = words.find(':');
    if (after_name == std::string::npos) return 0;
  }
  const std::size_t stop = words.find_first_of(".,;(", after_name);
  return stop == std::string::npos ? 0 : stop;
}

Cell cell_of(const Value& value) {
  struct Visitor {
    Cell operator()(std::monostate) const { return {}; }
    Cell operator()(double number) const { return number; }
    Cell operator()(const std::string& words) const { return words; }
    Cell operator()(const Phrase& phrase) const { return text::phrase(phrase); }
    Cell operator()(const Heading& heading) const { return text::heading(heading); }
  };
  return std::visit(Visitor{}, value);
}

int height_of_words(const std::string& words, int width, StyleId style) {
  const Font font = font_of(style);
  return wrapped_lines(words, width - padding - indent_of(style), font) * line_height(font) +
         2 * air_of(style);
}

// -- one sheet
// -------------------------------------------------------------------------------------------------------

class SheetBuilder {
 public:
  SheetBuilder(std::string name, bool landscape, std::vector<int> widths, int page_height)
      : page_height_(page_height) {
    sheet_.name = std::move(name);
    sheet_.landscape = landscape;
    sheet_.column_widths = std::move(widths);
  }

  std::size_t row(bool with_next = false, int fixed_height = 0) {
    sheet_.rows.push_back({fixed_height, 0, with_next});
    return sheet_.rows.size() - 1;
  }
  void put(std::size_t row, std::size_t column, std::size_t span, Cell content, CellStyle style,
           std::size_t emphasised = 0) {
    if (const auto* words = std::get_if<std::string>(&content)) {
      int& least = sheet_.rows[row].least_height;
      least = std::max(least, height_of_words(*words, width(column, span), style.id));
    }
    sheet_.cells.push_back({row, column, span, std::move(content), style, emphasised});
  }
  void gap(int height = gap_height) { row(false, height); }
  /// A line over the whole width.
  void line(const std::string& words, StyleId style, bool with_next = true) {
    put(row(with_next), 0, columns(), words, {style});
  }
  std::size_t columns() const { return sheet_.column_widths.size(); }
  std::size_t next_row() const { return sheet_.rows.size(); }
  int width(std::size_t first, std::size_t span) const {
    int sum = 0;
    for (std::size_t k = first; k < first + span; ++k) sum += sheet_.column_widths[k];
    return sum;
  }
  void keep_with_next(std::size_t at, bool with_next) { sheet_.rows[at].with_next = with_next; }
  int page_height() const { return page_height_; }
  /// What is left of the page after the last row so far.
  int room_on_page() const {
    std::vector<int> heights;
    for (const LaidOutRow& row : sheet_.rows) {
      const int height =
          row.fixed_height > 0 ? row.fixed_height : std::max(row.least_height, plain_row_height);
      heights.push_back(static_cast<int>(height * caution));
    }
    const std::vector<std::size_t> breaks = page_breaks(heights, sheet_.rows, heights.size(), page_height_);
    int used = 0;
    for (std::size_t k = breaks.empty() ? 0 : breaks.back(); k < heights.size(); ++k) used += heights[k];
    return page_height_ - used;
  }
  void printed_to_here() { sheet_.printed_rows = sheet_.rows.size(); }
  LaidOutSheet take() { return std::move(sheet_); }

 private:
  LaidOutSheet sheet_;
  int page_height_;
};

// -- tables on the grid
// ----------------------------------------------------------------------------------------------

/// One column of a table while its place is looked for.
struct TableColumn {
  std::size_t source = 0;  // column of the block
  bool words = false;
  int wanted = 0;        // width at which nothing wraps
  int longest_word = 0;  // of heading and cells
  std::size_t span = 1;
};

class TableLayout {
 public:
  TableLayout(SheetBuilder& sheet, const TableBlock& block) : sheet_(sheet), block_(block) {}

  void write() {
    std::vector<TableColumn> columns = shown_columns();
    if (columns.empty() || block_.rows.empty()) return;  // headings over nothing say nothing
    std::vector<TableColumn> rest(columns.begin() + 1, columns.end());
    bool first_band = true;
    const std::size_t for_names =
        names_want_more(columns.front()) && columns.size() > grid_columns - 2 ? 2 : 0;
    do {
      std::vector<TableColumn> band = {columns.front()};
      std::size_t used = for_names;
      band.front().span += for_names;
      while (!rest.empty()) {
        const std::size_t least = least_span(rest.front());
        if (used + least > grid_columns && band.size() > 1) break;
        rest.front().span = std::min(least, grid_columns);
        used += rest.front().span;
        band.push_back(rest.front());
        rest.erase(rest.begin());
      }
      share_out(band, grid_columns - std::min(used, grid_columns));
      if (!first_band) sheet_.gap(small_gap);
      first_band = false;
      write_band(band);
    } while (!rest.empty());
  }

 private:
  std::vector<TableColumn> shown_columns() const {
    std::vector<TableColumn> columns;
    for (std::size_t j = 0; j < block_.headings.size(); ++j) {
      TableColumn column;
      column.source = j;
      bool any = false, numbers = false;
      const std::string heading = text::heading(block_.headings[j]);
      for (const auto& row : block_.rows) {
        const Cell cell = cell_of(row[j]);
        if (const auto* words = std::get_if<std::string>(&cell)) {
          any = any || !words->empty();
          column.wanted = std::max(column.wanted, text_width(*words, font_of(StyleId::words)));
          column.longest_word =
              std::max(column.longest_word, longest_word_width(*words, font_of(StyleId::words)));
        } else if (std::holds_alternative<double>(cell)) {
          any = numbers = true;
        }
      }
      column.words = !numbers;
      const Font heading_font = font_of(StyleId::heading);
      column.longest_word = std::max(column.longest_word, longest_word_width(heading, heading_font));
      if (numbers && j > 0)  // a heading of up to four lines
        column.longest_word = std::max(column.longest_word, text_width(heading, heading_font) * 10 / 35);
      const int edge = padding + (j > 0 && !numbers ? inner_indent : 0);
      column.wanted = std::max(column.wanted, column.longest_word) + edge + slack;
      column.longest_word += edge;
      if (any || j == 0) columns.push_back(column);  // nor does a column without content
    }
    return columns;
  }

  /// Names that would take more than three lines get two columns of the grid more, and the table a second
  /// band.
  bool names_want_more(const TableColumn& column) const {
    return std::any_of(block_.rows.begin(), block_.rows.end(), [&](const auto& row) {
      const Cell cell = cell_of(row[column.source]);
      const auto* words = std::get_if<std::string>(&cell);
      return words != nullptr &&
             wrapped_lines(*words, sheet_.width(0, 1) - padding, font_of(StyleId::words)) > 3;
    });
  }

  int unit() const { return sheet_.width(1, 1); }

  std::size_t least_span(const TableColumn& column) const {
    const auto needed = static_cast<std::size_t>((column.longest_word + unit() - 1) / unit());
    return std::clamp<std::size_t>(needed, 1, widest_name);
  }

  int width_of(const TableColumn& column, bool first) const {
    return (first ? sheet_.width(0, 1) - unit() : 0) + static_cast<int>(column.span) * unit();
  }

  /// Gives the columns of the grid that are left to those whose content is furthest from fitting.
  void share_out(std::vector<TableColumn>& band, std::size_t left) const {
    while (left > 0) {
      std::size_t neediest = band.size();
      double need = 1;
      for (std::size_t k = 0; k < band.size(); ++k) {
        const double ratio = static_cast<double>(band[k].wanted) / width_of(band[k], k == 0);
        const bool may_grow = band[k].words || k == 0 || band[k].span < widest_name;
        if (ratio > need && may_grow) {
          need = ratio;
          neediest = k;
        }
      }
      if (neediest == band.size()) return;
      ++band[neediest].span;
      --left;
    }
  }

  CellStyle style(std::size_t row, const TableColumn& column, const Cell& cell, int width) const {
    const auto* number = std::get_if<double>(&cell);
    if (number == nullptr) {
      if (column.source == 0) return {StyleId::words};
      return {column.words ? StyleId::inner_words : StyleId::right_words};
    }
    const HeadingId heading = block_.headings[column.source].id;
    double reference = 0;
    if (shares_the_decimals_of_the_error(heading)) reference = error_of(row);
    const NumberFormat format =
        block_.row_formats.size() > row ? block_.row_formats[row] : number_format(heading);
    HeadingId meaning = heading;
    if (const auto* item = std::get_if<Heading>(&block_.rows[row].front())) meaning = item->id;
    CellStyle style = style_of_number(*number, format, meaning, reference, width);
    if (column.source == 0 && (style.id == StyleId::number || style.id == StyleId::count))
      style.id = StyleId::first_number;
    return style;
  }

  double error_of(std::size_t row) const {
    for (HeadingId id : {HeadingId::standard_error, HeadingId::half_width})
      for (std::size_t j = 0; j < block_.headings.size(); ++j)
        if (block_.headings[j].id == id)
          if (const auto* error = std::get_if<double>(&block_.rows[row][j])) return *error;
    return 0;
  }

  void write_heading(const std::vector<TableColumn>& band) {
    const std::size_t at = sheet_.row(true);
    std::size_t place = 0;
    for (std::size_t k = 0; k < band.size(); ++k) {
      const StyleId style = k == 0          ? StyleId::heading
                            : band[k].words ? StyleId::inner_heading
                                            : StyleId::number_heading;
      sheet_.put(at, place, band[k].span, text::heading(block_.headings[band[k].source]), {style});
      place += band[k].span;
    }
  }

  void write_row(const std::vector<TableColumn>& band, std::size_t i) {
    const std::size_t at = sheet_.row(true);
    std::size_t place = 0;
    for (std::size_t k = 0; k < band.size(); ++k) {
      const Cell cell = cell_of(block_.rows[i][band[k].source]);
      sheet_.put(at, place, band[k].span, cell, style(i, band[k], cell, width_of(band[k], k == 0)));
      place += band[k].span;
    }
  }

  int height_of(const std::vector<TableColumn>& band, std::size_t i) const {
    int height = plain_row_height;
    for (std::size_t k = 0; k < band.size(); ++k) {
      const Cell cell = cell_of(block_.rows[i][band[k].source]);
      const auto* words = std::get_if<std::string>(&cell);
      if (words == nullptr) continue;
      const CellStyle words_style = style(i, band[k], cell, 0);
      height = std::max(height, height_of_words(*words, width_of(band[k], k == 0), words_style.id));
    }
    return static_cast<int>(height * caution);
  }

  /// A table that fits the page it begins on stays whole; one that does not goes on, on the next page, under
  /// its headings again.
  void write_band(const std::vector<TableColumn>& band) {
    std::vector<int> heights;
    int all = 0;
    for (std::size_t i = 0; i < block_.rows.size(); ++i) {
      heights.push_back(height_of(band, i));
      all += heights.back();
    }
    write_heading(band);
    int room = sheet_.room_on_page();
    const int whole_page = sheet_.page_height() - heading_room;
    // Few rows at the foot of a page are worse than a gap there.
    if (all > room && (all <= whole_page || room < whole_page / 3)) room = whole_page;
    for (std::size_t i = 0; i < block_.rows.size(); ++i) {
      if (heights[i] > room) {
        sheet_.keep_with_next(sheet_.next_row() - 1, false);
        write_heading(band);
        room = whole_page;
      }
      room -= heights[i];
      write_row(band, i);
    }
    sheet_.keep_with_next(sheet_.next_row() - 1, false);
  }

  static constexpr int heading_room = 2600;  // titles and headings above the rows of a page

  SheetBuilder& sheet_;
  const TableBlock& block_;
};

// -- charts
// ----------------------------------------------------------------------------------------------------------

struct Scale {
  double minimum = 0, maximum = 1, step = 1;
};

/// Round ends and steps of 1, 2 or 5 times a power of ten that hold all of lower .. upper and zero.
Scale round_scale(double lower, double upper) {
  lower = std::min(lower, 0.0);
  upper = std::max(upper, 0.0);
  if (!(upper > lower)) return {-1, 1, 0.5};
  constexpr double steps_wanted = 6;
  const double raw = (upper - lower) / steps_wanted;
  const double power = std::pow(10.0, std::floor(std::log10(raw)));
  double step = 10 * power;
  for (double times : {1.0, 2.0, 5.0})
    if (times * power >= raw) {
      step = times * power;
      break;
    }
  return {std::floor(lower / step) * step, std::ceil(upper / step) * step, step};
}

/// Whole characters of UTF-8 from the beginning, or the end, that fit.
std::string part_that_fits(const std::string& name, int width, bool from_the_end) {
  const Font font = font_of(StyleId::words);
  const auto inside = [&name](std::size_t at) {
    return (static_cast<unsigned char>(name[at]) & 0xC0) == 0x80;
  };
  std::string fits;
  for (std::size_t bytes = 1; bytes <= name.size(); ++bytes) {
    const std::size_t cut = from_the_end ? name.size() - bytes : bytes;
    if (cut < name.size() && inside(cut)) continue;
    std::string part = from_the_end ? name.substr(cut) : name.substr(0, cut);
    if (text_width(part, font) > width) break;
    fits = std::move(part);
  }
  return fits;
}

/// Names that fit beside a chart, on one line or two: the middle of longer ones is left out. All stay
/// different.
std::vector<std::string> short_names(const std::vector<std::string>& names, int lines) {
  const Font font = font_of(StyleId::words);
  const int room = lines * chart_name_width * 9 / 10;
  std::vector<std::string> shortened;
  std::map<std::string, int> uses;
  for (const std::string& name : names) {
    shortened.push_back(name);
    if (text_width(name, font) > (lines == 1 ? chart_name_width : room))
      shortened.back() =
          part_that_fits(name, room * 6 / 10, false) + "\u2026" + part_that_fits(name, room * 3 / 10, true);
    ++uses[shortened.back()];
  }
  for (std::size_t k = 0; k < names.size(); ++k)
    if (uses[shortened[k]] > 1)
      shortened[k] += " (" + std::to_string(k + 1) + ")";  // its place in the tables
  return shortened;
}

bool on_two_lines(const std::vector<std::string>& names) {
  return std::any_of(names.begin(), names.end(), [](const std::string& name) {
    return text_width(name, font_of(StyleId::words)) > chart_name_width;
  });
}

class ChartLayout {
 public:
  ChartLayout(ReportLayout& layout, std::size_t sheet) : layout_(layout), sheet_(sheet) {}

  /// Reserves rows for the chart: on the page as it is, where it fits with names close together; else on
  /// pages of its own, as many as it takes.
  void reserve(SheetBuilder& builder, const ChartBlock& block) {
    const std::size_t points = block.names.size();
    if (points < (block.lower.empty() ? 2U : 1U)) return;  // one bar compares with nothing
    const int page = builder.page_height() - frame_of(block) - gap_height;
    const int here = builder.room_on_page() - frame_of(block) - gap_height;
    const int wished = on_two_lines(block.names) ? two_line_point : roomy_point;
    const auto height_in = [wished](int room, std::size_t names) {
      return std::min(wished, room / static_cast<int>(names));
    };
    if (here > 0 && height_in(here, points) >= dense_point) {
      piece(builder, block, 0, points, height_in(here, points));
      return;
    }
    const std::size_t most = static_cast<std::size_t>(std::max(1, page / dense_point));
    const std::size_t pieces = (points + most - 1) / most;
    const std::size_t each = (points + pieces - 1) / pieces;
    for (std::size_t first = 0; first < points; first += each) {
      const std::size_t names = std::min(each, points - first);
      piece(builder, block, first, names, std::min(height_in(page, names), height_in(page, each)));
    }
  }

 private:
  static int frame_of(const ChartBlock& block) {
    return chart_frame + (block.lower.empty() ? legend_height : 0);
  }

  void piece(SheetBuilder& builder, const ChartBlock& block, std::size_t first, std::size_t points,
             int point_height) {
    LaidOutChart chart;
    chart.id = block.id;
    chart.sheet = sheet_;
    chart.first_row = builder.next_row();
    chart.title = text::block_title(block.id);
    chart.axis_title = text::heading(block.axis);
    chart.points = points;
    chart.first_data_row = first;  // made absolute when the numbers are placed
    chart.intervals = !block.lower.empty();
    chart.marks = block.marks;
    chart.point_height = point_height;
    const int height = frame_of(block) + static_cast<int>(points) * point_height;
    chart.rows = static_cast<std::size_t>(std::max(1, height / chart_row_height));
    set_scale(chart, block);
    for (std::size_t k = 0; k < chart.rows; ++k) builder.row(k + 1 < chart.rows, chart_row_height);
    builder.gap();
    layout_.charts.push_back(chart);
  }

  static void set_scale(LaidOutChart& chart, const ChartBlock& block) {
    double lower = 0, upper = 0;
    const auto take = [&](const std::vector<double>& values) {
      for (double value : values) {
        if (!std::isfinite(value)) continue;
        lower = std::min(lower, value);
        upper = std::max(upper, value);
      }
    };
    take(block.values);
    take(block.lower);
    take(block.upper);
    take(block.marks);
    if (block.id == BlockId::inflation_chart) {  // factors: equal ratios, equal lengths; nothing is below 1
      chart.logarithmic = true;
      chart.axis_minimum = 1;
      chart.axis_maximum = std::max(100.0, std::pow(10.0, std::ceil(std::log10(upper * 1.05))));
      chart.axis_step = 10;
      for (double mark : block.marks)
        chart.mark_names.push_back(text::label(LabelId::rule_of_thumb) + " " + text::number(mark));
      return;
    }
    const Scale scale = round_scale(lower, upper);
    chart.axis_minimum = scale.minimum;
    chart.axis_maximum = scale.maximum;
    chart.axis_step = scale.step;
    chart.marks.clear();  // zero is the axis itself
  }

  ReportLayout& layout_;
  std::size_t sheet_;
};

/// The numbers that a chart is drawn from, beside each other under the printed part of the tables sheet.
void place_numbers(SheetBuilder& sheet, ReportLayout& layout, const ChartBlock& block) {
  if (block.names.empty()) return;
  const std::size_t heading = sheet.row();
  std::vector<std::string> headings = {text::heading({HeadingId::term}), text::heading(block.axis)};
  int lines = 1;
  const bool intervals = !block.lower.empty();
  if (intervals)
    for (LabelId id :
         {LabelId::interval_from, LabelId::interval_to, LabelId::below_point, LabelId::above_point})
      headings.push_back(text::label(id));
  std::size_t marks = 0;
  for (LaidOutChart& chart : layout.charts) {
    if (chart.id != block.id) continue;
    marks = chart.marks.size();
    lines = chart.point_height >= two_line_point ? 2 : 1;
    chart.data_heading_row = heading;
    chart.first_data_row += heading + 1;
    if (headings.size() < 2 + (intervals ? 4U : 0U) + marks)
      headings.insert(headings.end(), chart.mark_names.begin(), chart.mark_names.end());
  }
  for (std::size_t k = 0; k < headings.size(); ++k)
    sheet.put(heading, k, 1, headings[k], {k == 0 ? StyleId::heading : StyleId::number_heading});
  const std::vector<std::string> names = short_names(block.names, lines);
  for (std::size_t i = 0; i < names.size(); ++i) {
    std::vector<double> numbers = {block.values[i]};
    if (intervals)
      numbers.insert(numbers.end(), {block.lower[i], block.upper[i], block.values[i] - block.lower[i],
                                     block.upper[i] - block.values[i]});
    for (std::size_t k = 0; k < marks; ++k) numbers.push_back(block.marks[k]);
    const std::size_t at = sheet.row();
    sheet.put(at, 0, 1, names[i], {StyleId::words});
    for (std::size_t k = 0; k < numbers.size(); ++k) {
      if (!std::isfinite(numbers[k])) continue;
      const double reference = intervals ? numbers[3] : 0;
      sheet.put(at, k + 1, 1, numbers[k],
                style_of_number(numbers[k], NumberFormat::general, HeadingId::estimate, reference,
                                sheet.width(1, 1)));
    }
  }
  sheet.gap();
}

// -- the three sheets
// ------------------------------------------------------------------------------------------------

bool on_first_page(HeadingId item) {
  switch (item) {
    case HeadingId::data_range:
    case HeadingId::response:
    case HeadingId::rows:
    case HeadingId::purpose:
    case HeadingId::smallest_effect:
      return true;
    default:
      return false;
  }
}

/// Lines `label | value` of a table of items.
void items(SheetBuilder& sheet, const TableBlock& block, bool (*wanted)(HeadingId), bool yes) {
  for (std::size_t i = 0; i < block.rows.size(); ++i) {
    const auto* item = std::get_if<Heading>(&block.rows[i].front());
    if (item == nullptr || wanted(item->id) != yes) continue;
    Cell value = cell_of(block.rows[i].back());
    CellStyle style = {StyleId::value};
    if (const auto* number = std::get_if<double>(&value)) {
      const NumberFormat format = i < block.row_formats.size() ? block.row_formats[i] : NumberFormat::general;
      style = style_of_number(*number, format, item->id, 0, sheet.width(1, 1));
      if (style.id == StyleId::percent) style.id = StyleId::percent_value;
    }
    const std::size_t at = sheet.row();
    sheet.put(at, 0, 1, text::heading(*item), {StyleId::label});
    sheet.put(at, 1, 1, std::move(value), style);
  }
}

/// Which terms have which verdict: the whole answer in a few lines.
void at_a_glance(SheetBuilder& sheet, const FindingBlock& block) {
  std::vector<std::pair<Mark, std::vector<std::string>>> verdicts;
  for (const auto& finding : block.findings) {
    const std::optional<Mark> mark = mark_of(finding);
    if (!mark || !finding.front().facts.has(FactId::term)) continue;
    auto found = std::find_if(verdicts.begin(), verdicts.end(),
                              [&](const auto& v) { return v.first.word == mark->word; });
    if (found == verdicts.end()) found = verdicts.insert(verdicts.end(), {*mark, {}});
    found->second.push_back(finding.front().facts.text(FactId::term));
  }
  if (verdicts.empty()) return;
  std::stable_sort(verdicts.begin(), verdicts.end(),
                   [](const auto& a, const auto& b) { return a.first.style < b.first.style; });
  sheet.line(text::label(LabelId::at_a_glance), StyleId::section);
  for (const auto& [mark, names] : verdicts) {
    const std::size_t at = sheet.row(true);
    sheet.put(at, 0, 1, words_of(mark), {mark.style});
    sheet.put(at, 1, 1, text::list(names), {StyleId::sentence});
  }
  sheet.gap();
}

void sentences(SheetBuilder& sheet, const FindingBlock& block) {
  for (const auto& finding : block.findings) {
    const std::string words = joined(finding);
    if (words.empty()) continue;
    const std::size_t at = sheet.row();
    if (const std::optional<Mark> mark = mark_of(finding))
      sheet.put(at, 0, 1, words_of(*mark), {mark->style});
    sheet.put(at, 1, 1, words, {StyleId::sentence}, emphasised_part(words, finding));
  }
  sheet.gap();
}

template <class BlockType>
std::vector<const BlockType*> blocks_of(const Report& report) {
  std::vector<const BlockType*> found;
  for (const Section& section : report.sections)
    for (const Block& block : section.blocks)
      if (const auto* one = std::get_if<BlockType>(&block)) found.push_back(one);
  return found;
}

const TableBlock* analysed_table(const Report& report) {
  for (const TableBlock* table : blocks_of<TableBlock>(report))
    if (table->id == BlockId::analysed) return table;
  return nullptr;
}

LaidOutSheet lay_out_findings(const Report& report, const Paper& paper, ReportLayout& layout) {
  SheetBuilder sheet(text::label(LabelId::first_sheet_name), false,
                     {label_width, text_area_width(paper, false) - label_width},
                     text_area_height(paper, false));
  sheet.line(text::label(LabelId::report_title), StyleId::title);
  const TableBlock* analysed = analysed_table(report);
  if (analysed != nullptr) {
    items(sheet, *analysed, on_first_page, true);
    sheet.gap();
  }
  for (const FindingBlock* block : blocks_of<FindingBlock>(report)) at_a_glance(sheet, *block);
  ChartLayout charts(layout, 0);
  for (const ChartBlock* block : blocks_of<ChartBlock>(report))
    if (block->id == BlockId::estimates_chart) charts.reserve(sheet, *block);
  for (const Section& section : report.sections) {
    bool titled = false;
    for (const Block& block : section.blocks) {
      const auto* findings = std::get_if<FindingBlock>(&block);
      if (findings == nullptr || findings->findings.empty()) continue;
      if (!titled) sheet.line(text::section_title(section.id), StyleId::section);
      titled = true;
      sentences(sheet, *findings);
    }
  }
  if (analysed != nullptr && !analysed->notes.empty()) {
    sheet.line(text::label(LabelId::notes_heading), StyleId::block_title);
    for (const Phrase& note : analysed->notes) sheet.line(text::phrase(note), StyleId::note, false);
  }
  sheet.printed_to_here();
  return sheet.take();
}

LaidOutSheet lay_out_tables(const Report& report, const Paper& paper, ReportLayout& layout) {
  const int unit = (text_area_width(paper, true) - name_width) / static_cast<int>(grid_columns);
  std::vector<int> widths(grid_columns + 1, unit);
  widths[0] = name_width;
  SheetBuilder sheet(text::label(LabelId::tables_sheet_name), true, widths, text_area_height(paper, true));
  sheet.line(text::label(LabelId::tables_title), StyleId::title);
  ChartLayout charts(layout, 1);
  std::set<std::string> said;  // a note that concerns several tables is written under the first
  if (const TableBlock* analysed = analysed_table(report))
    for (const Phrase& note : analysed->notes) said.insert(text::phrase(note));
  for (const Section& section : report.sections) {
    std::size_t tables = 0;
    for (const Block& block : section.blocks) {
      const auto* table = std::get_if<TableBlock>(&block);
      tables += table != nullptr && table->id != BlockId::analysed ? 1 : 0;
    }
    bool titled = false;
    for (const Block& block : section.blocks) {
      if (const auto* chart = std::get_if<ChartBlock>(&block)) {
        if (chart->id != BlockId::estimates_chart) charts.reserve(sheet, *chart);
        continue;
      }
      const auto* table = std::get_if<TableBlock>(&block);
      if (table == nullptr || table->id == BlockId::analysed) continue;
      if (table->rows.empty() && table->notes.empty()) continue;
      if (!titled) sheet.line(text::section_title(section.id), StyleId::section);
      titled = true;
      const std::string title = text::block_title(table->id);
      if (tables > 1 && title != text::section_title(section.id)) sheet.line(title, StyleId::block_title);
      TableLayout(sheet, *table).write();
      for (const Phrase& note : table->notes) {
        const std::string words = text::phrase(note);
        if (words.empty() || !said.insert(words).second) continue;
        sheet.keep_with_next(sheet.next_row() - 1, true);
        sheet.line(words, StyleId::note, false);
      }
      sheet.gap();
    }
  }
  sheet.printed_to_here();
  sheet.line(text::label(LabelId::chart_numbers), StyleId::section);
  for (const ChartBlock* block : blocks_of<ChartBlock>(report)) place_numbers(sheet, layout, *block);
  return sheet.take();
}

/// A paragraph in pieces of whole sentences that a page can hold together with others.
std::vector<std::string> pieces_of(const ParagraphBlock& block, int width, int page_height) {
  std::vector<std::string> pieces(1);
  for (const Phrase& sentence : block.sentences) {
    const std::string words = text::phrase(sentence);
    if (words.empty()) continue;
    std::string longer = pieces.back().empty() ? words : pieces.back() + " " + words;
    if (!pieces.back().empty() && height_of_words(longer, width, StyleId::sentence) > page_height / 3)
      pieces.push_back(words);
    else
      pieces.back() = std::move(longer);
  }
  return pieces;
}

LaidOutSheet lay_out_write_up(const Report& report, const Paper& paper) {
  const int page_height = text_area_height(paper, false);
  SheetBuilder sheet(text::label(LabelId::write_up_sheet_name), false,
                     {label_width, text_area_width(paper, false) - label_width}, page_height);
  sheet.line(text::label(LabelId::write_up_title), StyleId::title);
  for (const ParagraphBlock* block : blocks_of<ParagraphBlock>(report)) {
    std::string label = text::block_title(block->id);
    for (std::string& words : pieces_of(*block, sheet.width(1, 1), page_height)) {
      const std::size_t at = sheet.row();
      sheet.put(at, 0, 1, label, {StyleId::label});
      sheet.put(at, 1, 1, std::move(words), {StyleId::sentence});
      label.clear();
    }
    sheet.gap();
  }
  if (const TableBlock* analysed = analysed_table(report)) items(sheet, *analysed, on_first_page, false);
  sheet.printed_to_here();
  return sheet.take();
}

}  // namespace

CellStyle style_of_number(double value, NumberFormat format, HeadingId heading, double reference, int width) {
  const double size = std::abs(value);
  CellStyle style = {StyleId::number};
  switch (format) {
    case NumberFormat::count:
      style.id = heading == HeadingId::seed ? StyleId::whole : StyleId::count;
      break;
    case NumberFormat::p_value:
      style.id = StyleId::p_value;
      break;
    case NumberFormat::share:
      if (heading == HeadingId::level) {
        style.id = StyleId::percent;
        style.decimals = without_trailing_zeros(value * 100, 3);
      } else {  // a share next to 1 keeps the digits that set it apart from 1
        style.decimals = std::clamp(decimals_for(1 - value, 2), 3, 7);
        if (value == 1) style.decimals = 3;
      }
      break;
    case NumberFormat::ratio:
      style.decimals = std::min(decimals_for(value, 3), 3);
      break;
    case NumberFormat::statistic:
      style.decimals = size >= 1000 ? 0 : size >= 100 ? 1 : std::clamp(decimals_for(value, 2), 2, 5);
      break;
    case NumberFormat::general:
      style.decimals =
          reference > 0 ? decimals_for(reference, 3) : without_trailing_zeros(value, decimals_for(value, 3));
      break;
  }
  const bool too_small = size > 0 && style.decimals > 7, too_large = size >= 1e8;
  if ((style.id == StyleId::number && (too_small || too_large)) ||
      text_width(shown(value, style), font_of(style.id)) > width - padding)
    if (style.id != StyleId::p_value) return {StyleId::scientific, 2};
  return style;
}

int text_area_width(const Paper& paper, bool landscape) {
  return (landscape ? paper.height : paper.width) - 2 * margin_sides(landscape);
}

int text_area_height(const Paper& paper, bool landscape) {
  return (landscape ? paper.width : paper.height) - margin_top - margin_bottom - 2 * page_line;
}

ReportLayout lay_out(const Report& report, const Paper& paper) {
  ReportLayout layout;
  layout.sheets.push_back(lay_out_findings(report, paper, layout));
  layout.sheets.push_back(lay_out_tables(report, paper, layout));
  layout.sheets.push_back(lay_out_write_up(report, paper));
  return layout;
}

std::vector<TermLine> term_lines(const Report& report) {
  std::vector<TermLine> lines;
  for (const FindingBlock* block : blocks_of<FindingBlock>(report))
    for (const auto& finding : block->findings) {
      const std::optional<Mark> mark = mark_of(finding);
      if (!mark || !finding.front().facts.has(FactId::term)) continue;
      const Facts& facts = finding.front().facts;
      const auto number = [&facts](FactId id) { return facts.has(id) ? facts.number(id) : std::nan(""); };
      lines.push_back({facts.text(FactId::term), text::phrase({mark->word}), joined(finding),
                       number(FactId::estimate), number(FactId::lower), number(FactId::upper)});
    }
  return lines;
}

std::vector<std::size_t> page_breaks(const std::vector<int>& heights, const std::vector<LaidOutRow>& rows,
                                     std::size_t printed_rows, int page_height) {
  std::vector<std::size_t> breaks;
  int used = 0;
  for (std::size_t first = 0; first < printed_rows;) {
    std::size_t last = first;
    int together = heights[first];
    while (last + 1 < printed_rows && rows[last].with_next) together += heights[++last];
    if (used > 0 && used + together > page_height) {
      breaks.push_back(first);
      used = 0;
    }
    for (std::size_t row = first; row <= last; ++row) {
      if (used > 0 && used + heights[row] > page_height) {  // a group higher than a page
        breaks.push_back(row);
        used = 0;
      }
      used += heights[row];
    }
    first = last + 1;
  }
  return breaks;
}

}  // namespace unply::office
