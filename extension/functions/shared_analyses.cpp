#include "extension/functions/shared_analyses.hpp"

#include <algorithm>
#include <cstring>
#include <set>
#include <utility>
#include <vector>

namespace unply::office {
namespace {

/// Byte by byte: missing cells compare equal, and the first difference ends it.
template <class T>
bool same_bytes(const std::vector<T>& a, const std::vector<T>& b) {
  return a.size() == b.size() && (a.empty() || std::memcmp(a.data(), b.data(), a.size() * sizeof(T)) == 0);
}

bool same_frame(const Column& a, const Column& b) {
  return a.name == b.name && a.sheet == b.sheet && a.place == b.place &&
         a.first_sheet_row == b.first_sheet_row && a.first_error_code == b.first_error_code &&
         a.error_rows == b.error_rows && a.texts == b.texts;
}

}  // namespace

bool same_cells(const Table& a, const Table& b) {
  if (&a == &b) return true;
  if (a.rows != b.rows || a.columns.size() != b.columns.size() || !same_bytes(a.hidden, b.hidden))
    return false;
  for (std::size_t j = 0; j < a.columns.size(); ++j)
    if (!same_frame(a.columns[j], b.columns[j])) return false;
  for (std::size_t j = 0; j < a.columns.size(); ++j)
    if (!same_bytes(a.columns[j].numbers, b.columns[j].numbers) ||
        !same_bytes(a.columns[j].codes, b.columns[j].codes))
      return false;
  return true;
}

std::size_t bytes_of(const Table& table) {
  std::size_t bytes = table.hidden.capacity();
  for (const Column& column : table.columns) {
    bytes += column.numbers.capacity() * sizeof(double) + column.codes.capacity() * sizeof(std::int32_t) +
             column.error_rows.capacity() * sizeof(std::size_t);
    for (const std::string& text : column.texts) bytes += text.capacity() + sizeof(std::string);
  }
  return bytes;
}

SharedAnalyses::SharedAnalyses(std::size_t most_entries, std::size_t most_bytes)
    : most_entries_(most_entries), most_bytes_(most_bytes) {}

std::shared_ptr<const Analysis> SharedAnalyses::of(std::shared_ptr<const Table> table, const Model& model) {
  for (auto entry = entries_.begin(); entry != entries_.end(); ++entry) {
    if (!same_cells(*entry->table, *table)) continue;
    table = entry->table;  // several models of one table hold it once
    if (!(entry->analysis->model() == model)) continue;
    entries_.splice(entries_.begin(), entries_, entry);
    return entry->analysis;
  }
  ++begun_;
  entries_.push_front({table, std::make_shared<const Analysis>(table, model)});
  std::set<const Table*> counted;
  std::size_t bytes = 0, kept = 0;
  for (auto entry = entries_.begin(); entry != entries_.end(); ++kept) {
    if (counted.insert(entry->table.get()).second) bytes += bytes_of(*entry->table);
    const bool over = kept >= most_entries_ || bytes > most_bytes_;
    if (kept > 0 && over) {
      entries_.erase(entry, entries_.end());
      break;
    }
    ++entry;
  }
  return entries_.front().analysis;
}

}  // namespace unply::office
