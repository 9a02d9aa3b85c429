// Cells, row by row, into the columns of a table. Knows what a cell can hold, but no office.
#pragma once

#include <cstddef>
#include <limits>
#include <string>
#include <unordered_map>
#include <vector>

#include "core/data/table.hpp"

namespace unply::office {

class TableBuilder {
 public:
  /// Room for `rows` rows is taken once, so that nothing is copied while a million rows come in.
  TableBuilder(std::size_t columns, std::size_t rows);

  // One call for every column of a row, columns in any order.
  void number(std::size_t column, double value) {
    Column& at = columns_[column];
    at.numbers.push_back(value);
    if (!at.codes.empty()) at.codes.push_back(no_text);
  }
  void missing(std::size_t column) { number(column, no_number); }
  void text(std::size_t column, const std::string& text);  // "" is missing
  void error(std::size_t column, int code);                // code: 0 where it has not been looked up

  Column& column(std::size_t index) { return columns_[index]; }
  std::size_t columns() const { return columns_.size(); }
  std::size_t rows() const { return columns_.empty() ? 0 : columns_.front().numbers.size(); }
  /// Has the column any content?
  bool empty(std::size_t column) const { return content_rows(column) == 0; }
  /// Rows up to the last one with content.
  std::size_t content_rows() const;

  /// The columns with names or content, cut or filled up with missing rows to `rows`.
  std::vector<Column> take(std::size_t rows);

 private:
  static constexpr double no_number = std::numeric_limits<double>::quiet_NaN();
  static constexpr std::int32_t no_text = -1;

  std::size_t content_rows(std::size_t column) const;

  std::vector<Column> columns_;
  std::vector<std::unordered_map<std::string, std::int32_t>> known_texts_;
  std::size_t expected_rows_;
};

/// "A", "B" ... "Z", "AA" ...: the letters of a column, 0-based.
std::string column_letters(std::size_t column);

}  // namespace unply::office
