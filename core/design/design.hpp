// Table + Model -> the design: which rows take part, which columns stand for which term, and the rows themselves.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "core/base/facts.hpp"
#include "core/data/row_selection.hpp"
#include "core/data/table.hpp"
#include "core/design/layout.hpp"
#include "core/design/model.hpp"
#include "core/design/row_source.hpp"

namespace unply {

/// Facts about a category column of the model.
struct CategoryInfo {
  std::string column;
  std::vector<std::string> levels;      // in the order of the design's columns, baseline first
  std::vector<std::size_t> counts;      // rows of each level, same order
};

/// What the design wants the reader to know; sentences in extension/text.
enum class DesignNoteId {
  lower_term_missing,   // term: a product or power without its lower-order terms; terms: the missing ones
  rare_level,           // column, levels: levels with fewer than 2 rows
  few_whole_values,     // column, count: a numeric column with few distinct whole values; may be a category
  centred,              // terms, columns: centred before products and powers were formed
};
struct DesignNote {
  DesignNoteId id;
  Facts facts;
};

class Design : public RowSource {
 public:
  const Layout& layout() const;
  const RowSelection& selection() const;
  const std::vector<CategoryInfo>& categories() const;
  const std::vector<DesignNote>& notes() const;
  /// Value subtracted from a column before products and powers were formed; 0 where not centred.
  double centre_of(const std::string& column) const;

  std::size_t rows() const override;
  std::size_t columns() const override;
  bool has_response() const override;
  void fill(std::size_t first, std::size_t count, std::size_t stride, double* high, double* low) const override;
  bool has_low(std::size_t column) const override;

  /// Rows of another table under the same coding and centring (for predictions); no response is read.
  /// Throws Error: unknown_column, text_among_numbers, unknown_level ...; rows with a missing value give NaN.
  std::unique_ptr<RowSource> of_new_rows(std::shared_ptr<const Table> table) const;

 private:
  friend Design make_design(std::shared_ptr<const Table> table, const Model& model);
  struct State;
  std::shared_ptr<const State> state_;
};

/// Throws Error: every code under "model" and "rows and numbers" of core/base/error.hpp that concerns a design, and
/// error_cells, text_among_numbers, infinite_value for the columns that the model uses.
Design make_design(std::shared_ptr<const Table> table, const Model& model);

/// Reads one term, e.g. "Zone_1 * Moisture^2"; headings may hold blanks and signs, the longest heading that matches
/// wins; a heading in single quotes is taken whole. Throws Error: term_not_readable, unknown_column.
Term parse_term(const std::string& text, const Table& table);

}  // namespace unply
