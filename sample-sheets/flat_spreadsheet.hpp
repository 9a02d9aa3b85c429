// A workbook as plain data, written as a flat OpenDocument spreadsheet (.fods): one XML file that a reader
// can open in an editor and compare line by line.
//
// Formulas are written without a stored value: whoever opens the file with the extension has them computed on
// load, and a stored value would be a claim by this generator about figures that it does not compute.
#pragma once

#include <cstddef>
#include <map>
#include <string>
#include <utility>
#include <variant>
#include <vector>

namespace unply::samples {

enum class Style {
  plain,
  title,          // of a sheet
  section,        // heading above a block
  text,           // a sentence that may run over the empty cells to its right
  note,           // a sentence that a formula gives
  words,          // of the data, or given by a formula
  heading,        // of a column of words
  heading_right,  // of a column of numbers
  whole,          // numbers
  one_decimal,
  two_decimals,
  three_decimals,
  four_decimals,
  p_value,     // four decimals, `<0.0001` below
  all_digits,  // 15 significant digits
  date,
  formula_shown,  // the text of a formula
  judged,         // TRUE or FALSE; FALSE stands out
  result,         // the one Result cell
};

/// `text` in OpenFormula, e.g. "of:=[.A1]+1". With rows and columns given it is an array formula over that
/// many cells.
struct Formula {
  std::string text;
  std::size_t rows = 0, columns = 0;
};

/// Days are written as dates: "2025-01-06".
struct Date {
  std::string day;
};

using Content = std::variant<std::monostate, double, std::string, Formula, Date>;

/// A sheet of cells; rows and columns count from 0.
class Sheet {
 public:
  explicit Sheet(std::string name) : name_(std::move(name)) {}

  Sheet& put(std::size_t row, std::size_t column, Content content, Style style = Style::plain);
  Sheet& style(std::size_t row, std::size_t column, Style style);  // of a cell within an array formula
  Sheet& width(std::size_t column, double centimetres);
  /// These many rows and columns stay in view.
  Sheet& freeze(std::size_t rows, std::size_t columns);

  const std::string& name() const { return name_; }

 private:
  friend class Workbook;
  struct Cell {
    Content content;
    Style style = Style::plain;
  };
  std::string name_;
  std::map<std::pair<std::size_t, std::size_t>, Cell> cells_;
  std::map<std::size_t, double> widths_;
  std::size_t frozen_rows_ = 0, frozen_columns_ = 0;
};

class Workbook {
 public:
  Sheet& add_sheet(const std::string& name);  // the reference stays good
  /// A name for a range, `address` as "$Sheet.$A$1:.$B$2".
  void add_name(const std::string& name, const std::string& address);
  void show_first(const std::string& sheet) { shown_first_ = sheet; }

  std::string xml() const;

 private:
  std::vector<std::pair<std::string, std::string>> names_;
  std::vector<Sheet*> sheets_;
  std::map<std::string, Sheet> kept_;
  std::string shown_first_;
};

std::string column_letters(std::size_t column);            // 0 -> A
std::string address(std::size_t row, std::size_t column);  // A1
/// "$Sheet.$A$1:.$B$2", the way names and references to other sheets are stored.
std::string stored_range(const std::string& sheet, std::size_t row, std::size_t column, std::size_t rows,
                         std::size_t columns);
/// Shortest decimal text that reads back as the same double.
std::string shortest(double value);

}  // namespace unply::samples
