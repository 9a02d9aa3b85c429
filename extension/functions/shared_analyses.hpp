// One computation for all the formulas that ask for the same cells under the same settings. Knows no office:
// nothing of it has to be released before the office ends.
#pragma once

#include <cstddef>
#include <cstdint>
#include <list>
#include <memory>

#include "core/report/analysis.hpp"

namespace unply::office {

/// Keeps the analyses used last. What counts is the content: cells are compared, not remembered by address,
/// so a kept analysis is right whatever was edited, undone or recalculated in between.
class SharedAnalyses {
 public:
  /// `most_entries` analyses, and tables of `most_bytes` together; the one used last is always kept.
  explicit SharedAnalyses(std::size_t most_entries = 256, std::size_t most_bytes = std::size_t(128) << 20);

  /// The kept analysis of equal cells and settings, or a new one.
  std::shared_ptr<const Analysis> of(std::shared_ptr<const Table> table, const Model& model);

  std::int64_t begun() const { return begun_; }

 private:
  struct Entry {
    std::shared_ptr<const Table> table;
    std::shared_ptr<const Analysis> analysis;
  };

  std::size_t most_entries_, most_bytes_;
  std::int64_t begun_ = 0;
  std::list<Entry> entries_;  // the one used last comes first
};

/// Same cells with the same names at the same addresses.
bool same_cells(const Table& a, const Table& b);

/// Memory of a table's cells.
std::size_t bytes_of(const Table& table);

}  // namespace unply::office
