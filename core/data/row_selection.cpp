#include "core/data/row_selection.hpp"

#include <algorithm>
#include <cmath>

#include "core/base/names.hpp"

namespace unply {
namespace {

constexpr std::size_t rows_listed = 100;

}  // namespace

std::vector<std::uint8_t> texts_that_count(const Column& column) {
  std::vector<std::uint8_t> counts(column.texts.size());
  std::transform(column.texts.begin(), column.texts.end(), counts.begin(),
                 [](const std::string& text) { return !trimmed(text).empty(); });
  return counts;
}

RowSelection select_rows(const Table& table, const std::vector<std::size_t>& columns,
                         bool visible_rows_only) {
  RowSelection selection;
  selection.all_rows = table.rows;
  const bool some_hidden = visible_rows_only && !table.hidden.empty();

  std::vector<std::uint8_t> incomplete;  // sized when the first missing value is met
  for (const std::size_t j : columns) {
    const Column& column = table.columns[j];
    // Most columns are complete: counting first keeps them to one plain pass over their numbers.
    std::size_t without_number = 0;
    for (const double x : column.numbers) without_number += std::isnan(x);
    if (without_number == 0) continue;
    const std::vector<std::uint8_t> counts = texts_that_count(column);
    MissingCount missing{j, 0};
    for (std::size_t i = 0; i < table.rows; ++i) {
      if (!std::isnan(column.numbers[i])) continue;
      if (!column.codes.empty() && column.codes[i] >= 0 && counts[static_cast<std::size_t>(column.codes[i])])
        continue;
      if (some_hidden && table.hidden[i]) continue;
      if (incomplete.empty()) incomplete.assign(table.rows, 0);
      incomplete[i] = 1;
      ++missing.count;
    }
    if (missing.count > 0) selection.missing.push_back(missing);
  }
  std::stable_sort(selection.missing.begin(), selection.missing.end(),
                   [](const MissingCount& a, const MissingCount& b) { return a.count > b.count; });

  if (!some_hidden && incomplete.empty()) {
    selection.used = table.rows;
    return selection;
  }
  for (std::size_t i = 0; i < table.rows; ++i) {
    if (some_hidden && table.hidden[i]) {
      ++selection.hidden_left_out;
    } else if (!incomplete.empty() && incomplete[i]) {
      if (selection.incomplete.size() < rows_listed) selection.incomplete.push_back(i);
      ++selection.incomplete_count;
    } else {
      selection.rows.push_back(static_cast<std::uint32_t>(i));
    }
  }
  selection.used = selection.rows.size();
  if (selection.used == table.rows) selection.rows.clear();
  return selection;
}

}  // namespace unply
