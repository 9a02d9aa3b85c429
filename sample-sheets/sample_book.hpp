// What the sample workbooks share: a data sheet, the settings, live tables of the sheet functions, a sheet
// that checks them against the independent solver, and a sheet that says where the data come from.
#pragma once

#include <string>
#include <utility>
#include <variant>
#include <vector>

#include "sample-sheets/flat_spreadsheet.hpp"
#include "sample-sheets/independent_solver.hpp"

namespace unply::samples {

/// The workbooks, each as the text of its file. Same program, same text.
std::string kiln_workbook();
std::string service_desk_workbook();
std::string survey_workbook();

/// Words of the tables that the sheet functions give; the checks find their cells by them.
namespace heading {
inline constexpr const char* estimate = "Estimate";
inline constexpr const char* lower = "Interval from";
inline constexpr const char* upper = "Interval to";
inline constexpr const char* standard_error = "Standard error";
inline constexpr const char* t = "t";
inline constexpr const char* p = "p";
inline constexpr const char* vif = "VIF";
inline constexpr const char* standardised = "Standardised";
inline constexpr const char* verdict = "Verdict";
inline constexpr const char* generalised_vif = "Generalised VIF";
inline constexpr const char* root_per_column = "Root per column";
inline constexpr const char* scatter = "Scatter (s)";
inline constexpr const char* rows_factor = "Rows factor (1/√(n-1))";
inline constexpr const char* spread = "Spread";
inline constexpr const char* widening = "Widening (√VIF)";
inline constexpr const char* half_width = "Half-width";
inline constexpr const char* error_moved_apart = "Standard error if moved apart";
inline constexpr const char* rows_needed = "Rows needed";
inline constexpr const char* vif_needed = "VIF needed";
inline constexpr const char* condition_index = "Condition index";
inline constexpr const char* f = "F";
inline constexpr const char* prediction = "Prediction";
inline constexpr const char* new_row_from = "New row from";
inline constexpr const char* new_row_to = "New row to";
inline constexpr const char* leverage = "Leverage";
inline constexpr const char* intercept = "Intercept";
inline constexpr const char* value = "Value";
}  // namespace heading

/// A column of the data sheet: its heading and how its numbers are shown.
struct DataColumn {
  std::string heading;
  Style style = Style::plain;
  double width = 2.4;  // cm
};

using Setting = std::pair<std::string, Content>;  // name | value

/// A live table: one array formula over exactly the cells that its function gives, named `name`.
struct LiveTable {
  std::string name;
  std::string call;                     // e.g. `UNPLY.VIF(Firings;Unply_model)`
  std::size_t rows = 0;                 // with the heading row, without notes
  std::vector<Style> columns;           // how each column is shown
  std::vector<std::size_t> notes = {};  // which of the sentences that follow it are shown, counted from 1
  std::vector<Style> lines = {};        // of a table of item and value: how the value in each line is shown
};

/// What the generator knows and the tables have to find.
struct TrueEffect {
  std::string name;
  double truth = 0;
  std::string unit;
};

/// Ways to show the tables that several workbooks have.
extern const std::vector<Style> estimates_columns, ledger_columns, rows_needed_columns, inflation_columns,
    groups_columns, predictions_columns, fit_quality_columns, fit_quality_lines;

class SampleBook {
 public:
  explicit SampleBook(std::string data_sheet);

  Sheet& data() { return *data_; }
  Sheet& model() { return *model_; }
  Sheet& answers() { return *answers_; }
  Sheet& source() { return *source_; }

  /// Heading row, frozen; names `table_name` for the whole table and one name for `response`.
  void write_data(const std::vector<DataColumn>& columns, const std::vector<std::vector<Content>>& rows,
                  const std::string& table_name, const std::string& response,
                  const std::string& response_name);
  /// A `name | value` block on the model sheet, named; returns nothing: blocks are put below each other.
  void write_settings(const std::string& title, const std::string& name,
                      const std::vector<Setting>& settings);
  /// Lines of text, one a row, from the next free row of a sheet on.
  void write_title(Sheet& sheet, const std::string& title);
  void write_lines(Sheet& sheet, const std::vector<std::string>& lines);
  void write_section(Sheet& sheet, const std::string& title);
  /// Cells in a row with their styles, at the next free row.
  void write_row(Sheet& sheet, const std::vector<std::pair<Content, Style>>& cells);
  void skip_row(Sheet& sheet) { ++next_row_[&sheet]; }
  std::size_t next_row(const Sheet& sheet) { return next_row_[&sheet]; }
  void write_table(const std::string& title, const LiveTable& table);
  /// The true effects beside the intervals found for them.
  void write_truth(const std::string& table, const std::vector<TrueEffect>& effects, Style style);
  void add_name(const std::string& name, const Sheet& sheet, std::size_t row, std::size_t column,
                std::size_t rows, std::size_t columns);

  /// Checks; `found` is a formula without its "of:=".
  void check(const std::string& what, const std::string& found, const Real& expected);
  void check(const std::string& what, const std::string& found, const std::string& expected);
  /// A share of a whole: right to the tolerance times the whole, not times the share, which may be next to
  /// nothing.
  void check_share(const std::string& what, const std::string& found, const Real& expected);
  /// The cell of a named table in the row (by name, or by number from 1 on, below the heading row) and the
  /// column of these names. Words that a function from an extension gives match nothing in the office
  /// before 24.8 (they compare by place in a store that those words never enter); `&""` makes them ordinary
  /// words.
  static std::string cell(const std::string& table, const std::string& row, const std::string& column);
  static std::string cell(const std::string& table, std::size_t line, const std::string& column);
  void check_cell(const std::string& table, const std::string& row, const std::string& column,
                  const Real& expected) {
    check(table + ": " + row + ", " + column, cell(table, row, column), expected);
  }
  void check_verdict(const std::string& table, const std::string& row, const std::string& expected);

  /// Everything of a fit that the tables ESTIMATES, FITQUALITY and LEDGER show, for these columns of the fit.
  void check_estimates(const std::string& table, const IndependentFit& fit,
                       const std::vector<std::string>& names, const Real& level);
  void check_fit_quality(const std::string& table, const IndependentFit& fit);
  void check_ledger(const std::string& table, const IndependentFit& fit,
                    const std::vector<std::string>& names, const Real& level);

  /// Writes the check sheet and gives the file's text.
  std::string finish();

 private:
  struct Check {
    std::string what, found;
    std::variant<Real, std::string> expected;
    bool share = false;
  };
  Workbook book_;
  Sheet *answers_, *data_, *model_, *check_, *source_;
  std::map<const Sheet*, std::size_t> next_row_;
  std::vector<Check> checks_;
};

/// A decimal number that a person would have written down: the double nearest to it.
double rounded(double value, int decimals);

/// Verdict of an interval given the smallest effect that matters, in the first word or words that tables use.
std::string expected_verdict(const Real& estimate, const Real& half_width, const Real& vif,
                             const Real& smallest_effect);

}  // namespace unply::samples
