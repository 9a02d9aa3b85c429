// Table + Model -> the design: which rows take part, which columns stand for which term, and the rows
// themselves.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "core/base/facts.hpp"
#include "core/data/row_selection.hpp"
#include "core/data/table.hpp"
#include "core/design/coding.hpp"
#include "core/design/layout.hpp"
#include "core/design/model.hpp"
#include "core/design/row_source.hpp"

namespace unply {

/// Facts about a category column of the model.
struct CategoryInfo {
  std::string column;
  std::vector<std::string> levels;  // in the order of the design's columns, baseline first
  std::vector<std::size_t> counts;  // rows of each level, same order
};

/// What the design wants the reader to know; sentences in extension/text.
enum class DesignNoteId {
  lower_term_missing,  // term: a product or power without its lower-order terms; terms: the missing ones
  rare_level,          // column, levels: levels with fewer than 2 rows
  few_whole_values,    // column, count: a numeric column with few distinct whole values; may be a category
  centred,             // terms, columns: centred before products and powers were formed
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
  void fill(std::size_t first, std::size_t count, std::size_t stride, double* high,
            double* low) const override;
  bool has_low(std::size_t column) const override;

  /// How the columns are formed, and from what: for those who need more than the rows.
  const CodedRows& coded_rows() const;

  /// Rows of another table under the same coding and centring (for predictions); no response is read.
  /// Throws Error: unknown_column, ambiguous_column, duplicate_heading, error_cells, text_among_numbers,
  /// infinite_value, unknown_level, value_out_of_range. A row with a missing value gives NaN in every column.
  std::unique_ptr<RowSource> of_new_rows(std::shared_ptr<const Table> table) const;

 private:
  friend Design make_design(std::shared_ptr<const Table> table, const Model& model);
  struct State;
  std::shared_ptr<const State> state_;
};

/// The rows and columns that `model` asks for.
///
/// Terms. Those of the model, else one for every column but the response (columns without a heading and
/// without any content are passed over). Only the columns used are judged, in the rows that are looked at:
/// all, or the visible ones. Categories. A column of texts only, and every column that the model declares or
/// names a baseline for; numbers are then read as their text, and outer blanks of a text do not count. k
/// levels among the used rows become k - 1 indicator columns "Clay: red", in natural alphabetical order
/// (digits count as numbers), against the model's baseline, else the most frequent level (of equally frequent
/// ones the first to appear). A product with a category has a column for every level but the baseline
/// ("Zone_1*Clay: red"), also where no row has that combination: the fit reports it as constant. Centring,
/// where asked: every column of numbers in a product or power has its mean over the used rows (rounded to a
/// double) subtracted, there and where it stands alone, so that all its terms speak of the same column.
/// Rows. See select_rows; a text of blanks only is an empty cell.
///
/// Throws Error: every code under "model" and "rows and numbers" of core/base/error.hpp that concerns a
/// design, and missing_heading, duplicate_heading, no_data_rows, error_cells, text_among_numbers,
/// infinite_value. Too few rows for the coefficients are the fit's to refuse; a single row is refused here.
Design make_design(std::shared_ptr<const Table> table, const Model& model);

/// Reads one term, e.g. "Zone_1 * Moisture^2"; headings may hold blanks and signs, the longest heading that
/// matches wins, as written before regardless of case; a heading in single quotes is taken whole (a quote
/// within: twice). Powers are whole, from 1; a column named twice is multiplied. The name of the term reads
/// back as the same term: headings that would be read otherwise are in quotes there. Throws Error:
/// term_not_readable, unknown_column, ambiguous_column.
Term parse_term(const std::string& text, const Table& table);

}  // namespace unply
