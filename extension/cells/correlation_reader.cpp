#include "extension/cells/correlation_reader.hpp"

#include <algorithm>
#include <cmath>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "core/base/error.hpp"
#include "core/base/names.hpp"

namespace unply::office {
namespace {

using text::Cell;

bool is_text(const Cell& cell) { return std::holds_alternative<std::string>(cell); }
bool is_blank(const Cell& cell) {
  return std::holds_alternative<std::monostate>(cell) ||
         (is_text(cell) && trimmed(std::get<std::string>(cell)).empty());
}
/// What stands on a printed diagonal in place of 1.
bool is_dash(const Cell& cell) {
  if (!is_text(cell)) return false;
  const std::string_view words = trimmed(std::get<std::string>(cell));
  return words == "-" || words == "\u2013" || words == "\u2014";
}

/// The cells with their names: where in the range the numbers stand.
struct Frame {
  const PlainCells* plain = nullptr;
  std::size_t first_column = 0;     // of the numbers
  std::vector<std::string> names;   // of the columns
  std::vector<std::size_t> row_of;  // row of the range for each name; past the end where there is none

  const Cell* at(std::size_t row_name, std::size_t column_name) const {
    const std::size_t row = row_of[row_name];
    return row < plain->cells.size() ? &plain->cells[row][first_column + column_name] : nullptr;
  }
};

std::size_t position(const std::string& name, const std::vector<std::string>& names) {
  const auto same = [&name](const std::string& other) { return folded(other) == folded(name); };
  const auto found = std::find_if(names.begin(), names.end(), same);
  if (found != names.end()) return static_cast<std::size_t>(found - names.begin());
  Facts facts{{FactId::name, name}, {FactId::allowed, names}};
  const std::string nearest = nearest_name(name, names);
  if (!nearest.empty()) facts.set(FactId::suggestion, nearest);
  throw Error(ErrorCode::unknown_column, std::move(facts));
}

Frame frame_of(const PlainCells& plain) {
  std::size_t rows = plain.cells.size(), columns = rows == 0 ? 0 : plain.cells.front().size();
  const auto blank_row = [&plain, &columns](std::size_t row) {
    return std::all_of(plain.cells[row].begin(),
                       plain.cells[row].begin() + static_cast<std::ptrdiff_t>(columns), is_blank);
  };
  const auto blank_column = [&plain, &rows](std::size_t column) {
    for (std::size_t i = 0; i < rows; ++i)
      if (!is_blank(plain.cells[i][column])) return false;
    return true;
  };
  while (columns > 0 && blank_column(columns - 1)) --columns;
  while (rows > 0 && blank_row(rows - 1)) --rows;
  if (rows == 0) throw Error(ErrorCode::empty_range, {{FactId::range, plain.range}});

  Frame frame;
  frame.plain = &plain;
  bool names_beside = false, numbers_there = false;
  for (std::size_t i = 1; i < rows; ++i) {
    const Cell& cell = plain.cells[i][0];
    if (is_blank(cell) || is_dash(cell)) continue;
    (is_text(cell) ? names_beside : numbers_there) = true;
  }
  names_beside = names_beside && !numbers_there;
  frame.first_column = names_beside ? 1 : 0;
  for (std::size_t j = frame.first_column; j < columns; ++j) {
    const Cell& cell = plain.cells[0][j];
    if (is_blank(cell)) throw Error(ErrorCode::missing_heading, {{FactId::address, plain.address(0, j)}});
    if (!is_text(cell))
      throw Error(
          ErrorCode::headings_are_numbers,
          {{FactId::range, plain.address(0, frame.first_column) + ":" + plain.address(0, columns - 1)}});
    const std::string name(trimmed(std::get<std::string>(cell)));
    for (std::size_t k = 0; k < frame.names.size(); ++k)
      if (folded(frame.names[k]) == folded(name))
        throw Error(ErrorCode::duplicate_heading,
                    {{FactId::name, name},
                     {FactId::addresses, std::vector<std::string>{plain.address(0, frame.first_column + k),
                                                                  plain.address(0, j)}}});
    frame.names.push_back(name);
  }
  const std::size_t count = frame.names.size();
  // The last row of an upper half without its diagonal is empty.
  if (count == 0 || rows < count || rows > count + 1)
    throw Error(ErrorCode::correlation_shape, {{FactId::count, static_cast<double>(rows - 1)},
                                               {FactId::number, static_cast<double>(count)}});
  frame.row_of.assign(count, plain.cells.size());
  for (std::size_t i = 1; i < rows; ++i) {
    std::size_t name = i - 1;
    if (names_beside) {
      const Cell& cell = plain.cells[i][0];
      if (is_blank(cell)) throw Error(ErrorCode::missing_heading, {{FactId::address, plain.address(i, 0)}});
      name = position(std::get<std::string>(cell), frame.names);
      if (frame.row_of[name] < plain.cells.size())
        throw Error(ErrorCode::duplicate_heading,
                    {{FactId::name, frame.names[name]},
                     {FactId::addresses,
                      std::vector<std::string>{plain.address(frame.row_of[name], 0), plain.address(i, 0)}}});
    }
    frame.row_of[name] = i;
  }
  return frame;
}

/// The number in a cell; nothing where it is empty, or a dash on the diagonal.
std::optional<double> number_at(const Frame& frame, std::size_t i, std::size_t j) {
  const Cell* cell = frame.at(i, j);
  if (cell == nullptr || is_blank(*cell) || (i == j && is_dash(*cell))) return std::nullopt;
  if (is_text(*cell))
    throw Error(ErrorCode::text_among_numbers,
                {{FactId::column, frame.names[j]},
                 {FactId::addresses,
                  std::vector<std::string>{frame.plain->address(frame.row_of[i], frame.first_column + j)}},
                 {FactId::count, 1.0},
                 {FactId::text, std::get<std::string>(*cell)}});
  return std::get<double>(*cell);
}

/// One number for each variable of the whole table, cut down to those chosen.
std::optional<Eigen::VectorXd> chosen_numbers(const std::optional<std::vector<double>>& numbers,
                                              text::SettingId id, const std::vector<std::size_t>& chosen,
                                              std::size_t count) {
  if (!numbers) return std::nullopt;
  if (numbers->size() != count) {
    std::string written;
    for (const double number : *numbers) written += (written.empty() ? "" : "; ") + plain_number(number);
    throw Error(ErrorCode::impossible_setting, {{FactId::setting, text::setting_name(id)},
                                                {FactId::value, written},
                                                {FactId::allowed, text::setting_values(id)}});
  }
  Eigen::VectorXd result(static_cast<Eigen::Index>(chosen.size()));
  for (std::size_t k = 0; k < chosen.size(); ++k)
    result[static_cast<Eigen::Index>(k)] = (*numbers)[chosen[k]];
  return result;
}

}  // namespace

CorrelationTable read_correlations(const PlainCells& cells, double n, const Settings& settings) {
  if (!(n > 0) || n != std::floor(n) || !std::isfinite(n))
    throw Error(ErrorCode::impossible_setting,
                {{FactId::setting, text::argument_name(text::ArgumentId::n)},
                 {FactId::value, plain_number(n)},
                 {FactId::allowed, text::argument_values(text::ArgumentId::n)}});
  const Frame frame = frame_of(cells);
  CorrelationTable table;
  table.rows = n;

  std::vector<std::size_t> chosen;
  if (!settings.model.response.empty()) {
    chosen.push_back(position(settings.model.response, frame.names));
    table.response = frame.names[chosen.front()];
  }
  if (settings.model.terms.empty()) {
    for (std::size_t j = 0; j < frame.names.size(); ++j)
      if (frame.names[j] != table.response) chosen.push_back(j);
  }
  for (const std::string& term : settings.model.terms) {
    const std::size_t at = position(term, frame.names);
    if (frame.names[at] == table.response)
      throw Error(ErrorCode::response_among_terms,
                  {{FactId::response, table.response}, {FactId::term, term}});
    if (std::find(chosen.begin(), chosen.end(), at) != chosen.end())
      throw Error(ErrorCode::duplicate_term, {{FactId::term, term}});
    chosen.push_back(at);
  }

  const auto count = static_cast<Eigen::Index>(chosen.size());
  table.correlations.resize(count, count);
  for (Eigen::Index a = 0; a < count; ++a) {
    const std::size_t i = chosen[static_cast<std::size_t>(a)];
    table.names.push_back(frame.names[i]);
    table.correlations(a, a) = number_at(frame, i, i).value_or(1.0);
    for (Eigen::Index b = 0; b < a; ++b) {
      const std::size_t j = chosen[static_cast<std::size_t>(b)];
      const std::optional<double> below = number_at(frame, i, j), above = number_at(frame, j, i);
      const std::vector<std::string> both = {frame.names[i], frame.names[j]};
      if (!below && !above) throw Error(ErrorCode::correlation_missing, {{FactId::columns, both}});
      table.correlations(a, b) = below ? *below : *above;
      table.correlations(b, a) = above ? *above : *below;
    }
  }
  table.means = chosen_numbers(settings.means, text::SettingId::means, chosen, frame.names.size());
  table.sds = chosen_numbers(settings.standard_deviations, text::SettingId::standard_deviations, chosen,
                             frame.names.size());
  return table;
}

}  // namespace unply::office
