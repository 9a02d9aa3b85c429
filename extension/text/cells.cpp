// A table block as rectangular cells.
#include "extension/text/text.hpp"

namespace unply::text {
namespace {

struct ToCell {
  Cell operator()(std::monostate) const { return std::monostate(); }
  Cell operator()(double number) const { return number; }
  Cell operator()(const std::string& words) const { return words; }
  Cell operator()(const Phrase& wording) const { return phrase(wording); }
  Cell operator()(const Heading& label) const { return heading(label); }
};

}  // namespace

Cells cells(const TableBlock& block, bool with_notes) {
  Cells result;
  std::vector<Cell> row;
  for (const Heading& title : block.headings) row.push_back(heading(title));
  result.push_back(row);
  for (const std::vector<Value>& values : block.rows) {
    row.clear();
    for (const Value& value : values) row.push_back(std::visit(ToCell(), value));
    row.resize(block.headings.size());
    result.push_back(row);
  }
  if (with_notes)
    for (const Phrase& note : block.notes) {
      row.assign(block.headings.size(), std::monostate());
      row.front() = phrase(note);
      result.push_back(row);
    }
  return result;
}

}  // namespace unply::text
