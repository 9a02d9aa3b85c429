#include "tests/support/tables.hpp"

#include <algorithm>
#include <cstdlib>
#include <utility>

#include "tests/support/reference.hpp"

namespace unply::test {

Column numbers(const std::string& name, std::vector<double> values) {
  Column column;
  column.name = name;
  column.first_sheet_row = 2;
  column.numbers = std::move(values);
  return column;
}

Column mixed(const std::string& name, std::vector<double> values, const std::vector<const char*>& cells) {
  Column column = numbers(name, std::move(values));
  for (std::size_t i = 0; i < cells.size(); ++i) {
    if (cells[i] == nullptr) {
      column.codes.push_back(-1);
      continue;
    }
    column.numbers[i] = missing;
    const auto known = std::find(column.texts.begin(), column.texts.end(), cells[i]);
    column.codes.push_back(static_cast<std::int32_t>(known - column.texts.begin()));
    if (known == column.texts.end()) column.texts.emplace_back(cells[i]);
  }
  return column;
}

Column texts(const std::string& name, const std::vector<const char*>& values) {
  return mixed(name, std::vector<double>(values.size(), missing), values);
}

std::shared_ptr<Table> table_of(std::vector<Column> columns) {
  auto table = std::make_shared<Table>();
  table->rows = columns.empty() ? 0 : columns.front().numbers.size();
  table->columns = std::move(columns);
  for (std::size_t j = 0; j < table->columns.size(); ++j) {
    std::string letters;
    for (std::size_t rest = j + 1; rest > 0; rest = (rest - 1) / 26)
      letters.insert(letters.begin(), static_cast<char>('A' + (rest - 1) % 26));
    table->columns[j].place = letters;
  }
  return table;
}

std::shared_ptr<Table> reference_table(const std::string& name) {
  const Csv csv = read_csv(name);
  std::vector<Column> columns;
  for (const std::string& heading : csv.headings) {
    const std::vector<std::string> cells = csv.column(heading);
    std::vector<double> values;
    std::vector<const char*> words;
    bool all_numbers = true;
    for (const std::string& cell : cells) {
      char* end = nullptr;
      values.push_back(std::strtod(cell.c_str(), &end));
      words.push_back(cell.c_str());
      all_numbers = all_numbers && !cell.empty() && *end == '\0';
    }
    columns.push_back(all_numbers ? numbers(heading, values) : texts(heading, words));
  }
  return table_of(std::move(columns));
}

}  // namespace unply::test
