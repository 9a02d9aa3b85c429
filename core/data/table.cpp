#include "core/data/table.hpp"

#include <algorithm>

#include "core/base/error.hpp"
#include "core/base/names.hpp"

namespace unply {
namespace {

std::string with_sheet(const Column& column, const std::string& address) {
  return column.sheet.empty() ? address : column.sheet + "." + address;
}

}  // namespace

std::string Column::address(std::size_t row) const {
  return with_sheet(*this, place + std::to_string(first_sheet_row + row));
}

std::string Column::heading_address() const {
  return with_sheet(*this,
                    place + std::to_string(first_sheet_row > 1 ? first_sheet_row - 1 : first_sheet_row));
}

std::string Column::range() const {
  const std::size_t last = first_sheet_row + (numbers.empty() ? 0 : numbers.size() - 1);
  return with_sheet(*this, place + std::to_string(first_sheet_row) + ":" + place + std::to_string(last));
}

std::vector<std::size_t> Table::matches(const std::string& name) const {
  std::vector<std::size_t> exact, alike;
  const std::u32string wanted = folded(name);
  if (wanted.empty()) return {};
  for (std::size_t j = 0; j < columns.size(); ++j) {
    if (columns[j].name == name) exact.push_back(j);
    if (folded(columns[j].name) == wanted) alike.push_back(j);
  }
  return exact.empty() ? alike : exact;
}

std::size_t Table::find(const std::string& name) const {
  const std::vector<std::size_t> found = matches(name);
  if (found.size() == 1) return found.front();
  if (found.size() > 1) {
    std::vector<std::string> addresses;
    for (const std::size_t j : found) addresses.push_back(columns[j].heading_address());
    throw Error(ErrorCode::ambiguous_column, {{FactId::name, name}, {FactId::addresses, addresses}});
  }
  std::vector<std::string> known;
  for (const Column& column : columns)
    if (!trimmed(column.name).empty()) known.emplace_back(trimmed(column.name));
  Facts facts{{FactId::name, name}, {FactId::allowed, known}};
  const std::string nearest = nearest_name(name, known);
  if (!nearest.empty()) facts.set(FactId::suggestion, nearest);
  throw Error(ErrorCode::unknown_column, std::move(facts));
}

}  // namespace unply
