// Where a report goes on its sheets: nothing is lost, nothing overlaps, nothing is cut by the end of a page.
#include "extension/cells/report_layout.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "core/base/random.hpp"
#include "extension/cells/fonts.hpp"
#include "extension/cells/text_measure.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/made_reports.hpp"

using namespace unply;
using namespace unply::office;

namespace {

std::vector<LaidOutSheet> sheets_of(const std::string& shape) {
  return lay_out(test::made_report(shape), Paper{}).sheets;
}

int sum(const std::vector<int>& heights, std::size_t first, std::size_t last) {
  int all = 0;
  for (std::size_t k = first; k < last; ++k) all += heights[k];
  return all;
}

std::vector<int> planned_heights(const LaidOutSheet& sheet) {
  std::vector<int> heights;
  for (const LaidOutRow& row : sheet.rows)
    heights.push_back(row.fixed_height > 0 ? row.fixed_height : std::max(row.least_height, 450));
  return heights;
}

std::size_t digits_shown(double value, int decimals) {
  // significant digits of a number rounded to `decimals` places
  const double rounded = std::round(std::abs(value) * std::pow(10.0, decimals));
  return rounded == 0 ? 0 : static_cast<std::size_t>(std::floor(std::log10(rounded) + 1e-12)) + 1;
}

}  // namespace

TEST_CASE("a text is as wide as its font's advance widths say", "[layout]") {
  // Z 611, o n e 556 each, in thousandths of 10 points; a point is 35.278 hundredths of a millimetre. Rounded
  // up.
  CHECK(text_width("Zone", {10, false}) == static_cast<int>(std::ceil(2.279 * 10 * 2540 / 72)));
  CHECK(text_width("", {10, false}) == 0);
  CHECK(text_width("Zone", {10, true}) > text_width("Zone", {10, false}));
  CHECK(text_width("\u6E29\u5EA6", {10, false}) == static_cast<int>(std::ceil(2.0 * 10 * 2540 / 72)));
  CHECK(longest_word_width("a long-winded word", {10, false}) == text_width("long-winded", {10, false}));
}

TEST_CASE("text wraps at blanks, and inside a word only where the word is wider than its column",
          "[layout]") {
  const Font font = {10, false};
  const int width = text_width("Zone Zone", font);
  CHECK(wrapped_lines("Zone Zone", width, font) == 1);
  CHECK(wrapped_lines("Zone Zone", width - 1, font) == 2);
  CHECK(wrapped_lines("Zone Zone Zone", width, font) == 2);
  CHECK(wrapped_lines("Zone\nZone", width, font) == 2);
  CHECK(wrapped_lines(std::string(30, 'n'), text_width(std::string(10, 'n'), font), font) >= 3);
  CHECK(wrapped_lines("", width, font) == 1);
}

TEST_CASE("a standard error is shown with three digits, and its estimate with as many places", "[layout]") {
  const std::uint64_t seed = 7;
  CAPTURE(seed);
  Random random(seed);
  for (int k = 0; k < 400; ++k) {
    const double error = std::pow(10.0, 9 * random.uniform() - 5);  // 1e-5 .. 1e4
    CAPTURE(error);
    const CellStyle style =
        style_of_number(error, NumberFormat::general, HeadingId::standard_error, error, 3000);
    REQUIRE(style.id == StyleId::number);
    // 99.96 becomes 100.0: one digit more; above 1000 every whole digit is shown
    CHECK(digits_shown(error, style.decimals) >= 3);
    CHECK(digits_shown(error, style.decimals) <= (error < 999 ? 4 : 5));
    const CellStyle estimate =
        style_of_number(-12.3 * error, NumberFormat::general, HeadingId::estimate, error, 3000);
    if (estimate.id == StyleId::number) CHECK(estimate.decimals == style.decimals);
  }
}

TEST_CASE("numbers are shown by their meaning", "[layout]") {
  const int width = 1900;
  const auto style = [&](double value, NumberFormat format, HeadingId heading = HeadingId::value) {
    return style_of_number(value, format, heading, 0, width);
  };
  CHECK(style(236, NumberFormat::count) == CellStyle{StyleId::count, 0});
  CHECK(style(20260101, NumberFormat::count, HeadingId::seed).id == StyleId::whole);
  CHECK(style(1e-80, NumberFormat::p_value).id == StyleId::p_value);
  CHECK(style(0.95, NumberFormat::share, HeadingId::level) == CellStyle{StyleId::percent, 0});
  CHECK(style(0.999, NumberFormat::share, HeadingId::level) == CellStyle{StyleId::percent, 1});
  CHECK(style(0.5, NumberFormat::share).decimals == 3);
  CHECK(style(0.9999987, NumberFormat::share).decimals == 7);  // not 1.000
  CHECK(style(48.23, NumberFormat::ratio).decimals == 1);
  CHECK(style(1.0312, NumberFormat::ratio).decimals == 2);
  CHECK(style(0.1, NumberFormat::general).decimals == 1);  // not 0.100
  CHECK(style(12, NumberFormat::general).decimals == 0);
  CHECK(style(1e15, NumberFormat::general).id == StyleId::scientific);
  CHECK(style(1e-12, NumberFormat::general).id == StyleId::scientific);
  CHECK(style(123456789012.0, NumberFormat::count).id == StyleId::scientific);  // wider than its column
}

TEST_CASE("pages hold what stays together and are no higher than the paper", "[layout][property]") {
  const std::uint64_t seed = 11;
  CAPTURE(seed);
  Random random(seed);
  const int page = 10000;
  for (int round = 0; round < 300; ++round) {
    CAPTURE(round);
    std::vector<int> heights;
    std::vector<LaidOutRow> rows;
    const std::size_t n = 1 + random.below(80);
    for (std::size_t k = 0; k < n; ++k) {
      heights.push_back(static_cast<int>(100 + random.below(1500)));
      rows.push_back({0, 0, random.below(3) > 0});
    }
    const std::vector<std::size_t> breaks = page_breaks(heights, rows, n, page);
    REQUIRE(std::is_sorted(breaks.begin(), breaks.end()));
    std::size_t first = 0;
    for (std::size_t k = 0; k <= breaks.size(); ++k) {
      const std::size_t last = k < breaks.size() ? breaks[k] : n;
      CHECK(sum(heights, first, last) <= page);
      if (k < breaks.size() &&
          rows[last - 1].with_next) {  // broken inside a group: only one that no page could hold
        std::size_t from = last - 1, to = last;
        while (from > 0 && rows[from - 1].with_next) --from;
        while (to < n && rows[to - 1].with_next) ++to;
        CHECK(sum(heights, from, to) > page);
      }
      first = last;
    }
  }
}

TEST_CASE("every shape of report is laid out without overlaps and inside its columns", "[layout]") {
  for (const std::string& shape : test::shapes()) {
    for (const LaidOutSheet& sheet : sheets_of(shape)) {
      CAPTURE(shape, sheet.name);
      std::set<std::pair<std::size_t, std::size_t>> taken;
      for (const LaidOutCell& cell : sheet.cells) {
        CAPTURE(cell.row, cell.column, cell.span);
        REQUIRE(cell.row < sheet.rows.size());
        REQUIRE(cell.column + cell.span <= sheet.column_widths.size());
        for (std::size_t k = 0; k < cell.span; ++k) CHECK(taken.insert({cell.row, cell.column + k}).second);
      }
      const int width = sum(sheet.column_widths, 0, sheet.column_widths.size());
      CHECK(width <= text_area_width(Paper{}, sheet.landscape));
      CHECK(width >= text_area_width(Paper{}, sheet.landscape) - 100);
    }
  }
}

TEST_CASE("no number and no name of a report is lost on the way to the sheets", "[layout]") {
  for (const std::string& shape : test::shapes()) {
    CAPTURE(shape);
    const Report report = test::made_report(shape);
    const ReportLayout layout = lay_out(report, Paper{});
    std::multiset<double> numbers;
    std::multiset<std::string> words;
    for (const LaidOutSheet& sheet : layout.sheets)
      for (const LaidOutCell& cell : sheet.cells) {
        if (const auto* number = std::get_if<double>(&cell.content)) numbers.insert(*number);
        if (const auto* text = std::get_if<std::string>(&cell.content)) words.insert(*text);
      }
    for (const Section& section : report.sections)
      for (const Block& block : section.blocks) {
        const auto* table = std::get_if<TableBlock>(&block);
        if (table == nullptr) continue;
        for (const auto& row : table->rows)
          for (const Value& value : row) {
            if (const auto* number = std::get_if<double>(&value)) {
              const auto found = numbers.find(*number);
              CAPTURE(*number);
              REQUIRE(found != numbers.end());
              numbers.erase(found);
            } else if (const auto* name = std::get_if<std::string>(&value)) {
              CAPTURE(*name);
              CHECK(words.count(*name) > 0);
            }
          }
      }
  }
}

TEST_CASE("a chart is never cut by the end of a page, nor a table's heading parted from its rows",
          "[layout]") {
  for (const std::string& shape : test::shapes()) {
    CAPTURE(shape);
    const ReportLayout layout = lay_out(test::made_report(shape), Paper{});
    for (std::size_t k = 0; k < layout.sheets.size(); ++k) {
      const LaidOutSheet& sheet = layout.sheets[k];
      CAPTURE(sheet.name);
      const std::vector<std::size_t> breaks = page_breaks(
          planned_heights(sheet), sheet.rows, sheet.printed_rows, text_area_height(Paper{}, sheet.landscape));
      for (const LaidOutChart& chart : layout.charts) {
        if (chart.sheet != k) continue;
        CHECK(chart.first_row + chart.rows <= sheet.printed_rows);
        for (std::size_t row : breaks) CHECK((row <= chart.first_row || row >= chart.first_row + chart.rows));
      }
      for (const LaidOutCell& cell : sheet.cells)
        if (cell.style.id == StyleId::heading && cell.row < sheet.printed_rows)
          CHECK(std::find(breaks.begin(), breaks.end(), cell.row + 1) == breaks.end());
    }
  }
}

TEST_CASE("a table that goes on, on another page, has its headings there again", "[layout]") {
  const LaidOutSheet tables = sheets_of("forty")[1];
  const std::vector<std::size_t> breaks =
      page_breaks(planned_heights(tables), tables.rows, tables.printed_rows, text_area_height(Paper{}, true));
  std::map<std::size_t, StyleId> first_cell;
  for (const LaidOutCell& cell : tables.cells)
    if (cell.column == 0) first_cell[cell.row] = cell.style.id;
  REQUIRE(breaks.size() > 5);
  for (std::size_t row : breaks) {
    CAPTURE(row);
    if (first_cell.count(row) == 0) continue;  // a chart, or the room between two blocks
    const StyleId style = first_cell[row];
    CHECK((style == StyleId::heading || style == StyleId::section || style == StyleId::block_title));
  }
}

TEST_CASE("the numbers of a chart stand where the chart looks for them", "[layout]") {
  for (const std::string& shape : test::shapes()) {
    CAPTURE(shape);
    const Report report = test::made_report(shape);
    const ReportLayout layout = lay_out(report, Paper{});
    std::map<std::pair<std::size_t, std::size_t>, double> numbers;
    for (const LaidOutCell& cell : layout.sheets[1].cells)
      if (const auto* number = std::get_if<double>(&cell.content)) numbers[{cell.row, cell.column}] = *number;
    for (const Section& section : report.sections)
      for (const Block& block : section.blocks) {
        const auto* chart = std::get_if<ChartBlock>(&block);
        if (chart == nullptr) continue;
        std::size_t next = 0;  // pieces of one chart follow each other
        for (const LaidOutChart& place : layout.charts) {
          if (place.id != chart->id) continue;
          CHECK(place.axis_minimum < place.axis_maximum);
          for (std::size_t k = 0; k < place.points; ++k, ++next) {
            const std::size_t row = place.first_data_row + k;
            CHECK(numbers.at({row, 1}) == chart->values[next]);
            CHECK(place.axis_minimum <= chart->values[next]);
            CHECK(place.axis_maximum >= chart->values[next]);
            if (place.intervals) {
              CHECK(numbers.at({row, 2}) == chart->lower[next]);
              CHECK(numbers.at({row, 3}) == chart->upper[next]);
              // the ends that are drawn are the ends that are meant, up to the rounding of one subtraction
              CHECK(std::abs(numbers.at({row, 1}) - numbers.at({row, 4}) - chart->lower[next]) <=
                    1e-12 * std::abs(chart->values[next]) + 1e-12 * std::abs(chart->lower[next]));
            }
            for (std::size_t mark = 0; mark < place.marks.size(); ++mark)
              CHECK(numbers.at({row, 2 + mark}) == place.marks[mark]);
          }
        }
        if (chart->names.size() > 1) CHECK(next == chart->names.size());
      }
  }
}

TEST_CASE("names beside a chart stay different when they are shortened", "[layout]") {
  for (const std::string& shape : test::shapes()) {
    CAPTURE(shape);
    const ReportLayout layout = lay_out(test::made_report(shape), Paper{});
    for (const LaidOutChart& chart : layout.charts) {
      std::set<std::string> names;
      for (const LaidOutCell& cell : layout.sheets[1].cells)
        if (cell.column == 0 && cell.row >= chart.first_data_row &&
            cell.row < chart.first_data_row + chart.points)
          names.insert(std::get<std::string>(cell.content));
      CHECK(names.size() == chart.points);
    }
  }
}

TEST_CASE("the first page says which terms have which verdict, each with a sign of its own", "[layout]") {
  const LaidOutSheet findings = sheets_of("kiln")[0];
  std::map<std::size_t, std::pair<std::string, StyleId>> marks;
  std::map<std::size_t, std::string> beside;
  for (const LaidOutCell& cell : findings.cells) {
    const auto* words = std::get_if<std::string>(&cell.content);
    if (words == nullptr) continue;
    if (cell.column == 0)
      marks[cell.row] = {*words, cell.style.id};
    else
      beside[cell.row] = *words;
  }
  const auto verdict_of = [&](const std::string& term) {
    for (const auto& [row, words] : beside)
      if (words.find(term) != std::string::npos && marks.count(row) > 0 &&
          marks[row].second != StyleId::label)
        return marks[row];
    return std::pair<std::string, StyleId>{};
  };
  const std::vector<TermLine> lines = term_lines(test::made_report("kiln"));
  REQUIRE(lines.size() == 8);
  std::map<StyleId, std::string> signs;
  for (const TermLine& line : lines) {
    CAPTURE(line.term);
    const auto [words, style] = verdict_of(line.term);
    CHECK(words.find(line.verdict) != std::string::npos);
    const std::string sign = words.substr(0, words.find(' '));
    if (signs.count(style) > 0) CHECK(signs[style] == sign);
    signs[style] = sign;
  }
  REQUIRE(signs.size() == 2);
  CHECK(signs[StyleId::mark_clear] != signs[StyleId::mark_undecided]);
}

TEST_CASE("a paragraph longer than a page is parted at the end of a sentence", "[layout]") {
  const LaidOutSheet write_up = sheets_of("forty")[2];
  const int page = text_area_height(Paper{}, false);
  std::size_t paragraphs = 0;
  for (const LaidOutCell& cell : write_up.cells) {
    if (cell.style.id != StyleId::sentence) continue;
    ++paragraphs;
    CHECK(write_up.rows[cell.row].least_height <= page / 2);
    CHECK(std::get<std::string>(cell.content).back() == '.');
  }
  CHECK(paragraphs > 4);
}

TEST_CASE("Letter paper gives narrower columns of the same layout", "[layout]") {
  const Paper letter{21590, 27940};
  for (const LaidOutSheet& sheet : lay_out(test::made_report("kiln"), letter).sheets) {
    const int width = sum(sheet.column_widths, 0, sheet.column_widths.size());
    CHECK(width <= text_area_width(letter, sheet.landscape));
  }
}
