#include "extension/cells/table_builder.hpp"

#include <algorithm>
#include <cmath>
#include <utility>

namespace unply::office {

TableBuilder::TableBuilder(std::size_t columns, std::size_t rows)
    : columns_(columns), known_texts_(columns), expected_rows_(rows) {
  for (Column& column : columns_) column.numbers.reserve(rows);
}

void TableBuilder::text(std::size_t column, const std::string& text) {
  if (text.empty()) return missing(column);
  Column& at = columns_[column];
  if (at.codes.empty()) {
    at.codes.reserve(expected_rows_);
    at.codes.assign(at.numbers.size(), no_text);
  }
  const auto next = static_cast<std::int32_t>(at.texts.size());
  const auto [known, is_new] = known_texts_[column].try_emplace(text, next);
  if (is_new) at.texts.push_back(text);
  at.numbers.push_back(no_number);
  at.codes.push_back(known->second);
}

void TableBuilder::error(std::size_t column, int code) {
  Column& at = columns_[column];
  if (at.error_rows.empty()) at.first_error_code = code;
  at.error_rows.push_back(at.numbers.size());
  missing(column);
}

std::size_t TableBuilder::content_rows(std::size_t column) const {
  const Column& at = columns_[column];
  std::size_t rows = at.numbers.size();
  const std::size_t last_error = at.error_rows.empty() ? 0 : at.error_rows.back() + 1;
  while (rows > last_error && std::isnan(at.numbers[rows - 1]) &&
         (at.codes.empty() || at.codes[rows - 1] == no_text))
    --rows;
  return rows;
}

std::size_t TableBuilder::content_rows() const {
  std::size_t rows = 0;
  for (std::size_t j = 0; j < columns_.size(); ++j) rows = std::max(rows, content_rows(j));
  return rows;
}

std::vector<Column> TableBuilder::take(std::size_t rows) {
  std::vector<Column> result;
  for (std::size_t j = 0; j < columns_.size(); ++j) {
    Column& column = columns_[j];
    if (column.name.empty() && empty(j)) continue;
    column.numbers.resize(rows, no_number);
    if (!column.codes.empty()) column.codes.resize(rows, no_text);
    // Room for a sheet's height is given back where the content is short; a long column is not copied.
    if (column.numbers.capacity() > 2 * rows) {
      column.numbers.shrink_to_fit();
      column.codes.shrink_to_fit();
    }
    result.push_back(std::move(column));
  }
  columns_.clear();
  known_texts_.clear();
  return result;
}

std::string column_letters(std::size_t column) {
  std::string letters;
  for (++column; column > 0; column = (column - 1) / 26)
    letters.insert(letters.begin(), static_cast<char>('A' + (column - 1) % 26));
  return letters;
}

}  // namespace unply::office
