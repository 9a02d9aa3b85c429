// Coding: how columns of a table become columns of a design. Learnt from the rows of one table, applied to
// any table with the same columns.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "core/data/table.hpp"
#include "core/design/row_source.hpp"

namespace unply {

/// A column that takes part in terms.
struct Variable {
  std::string heading;  // as in the table it was learnt from
  bool category = false;
  double centre = 0;                // subtracted from numbers before anything else
  std::vector<std::string> levels;  // of a category, baseline first
};

/// The columns of one term: a product of powers of numbers, spread over the cells of its categories. A cell
/// is one level other than the baseline from each category; the last category's levels change fastest.
struct TermCoding {
  struct Power {
    std::size_t variable;
    int power;
  };
  std::vector<Power> numbers;
  std::vector<std::size_t> categories;  // variables
  std::size_t first_column = 0, columns = 1;
  // A term that is another one times some more factors starts from that one's column, so that x, x^2, ...,
  // x^10 costs ten products a row. -1: starts from its first factor.
  std::ptrdiff_t starts_from = -1;
  std::vector<Power> remaining;  // factors still to multiply
};

struct Coding {
  std::vector<Variable> variables;
  std::vector<TermCoding> terms;  // in the order of the design's columns
  std::size_t columns = 0;        // p
};

/// The labels of the rows of a category column, by number; a label is the cell's text without outer blanks,
/// or its number as a person writes it. -1: no value.
struct Labels {
  std::vector<std::string> names;    // in order of appearance
  std::vector<std::int32_t> of_row;  // one for each row asked for
};

/// `rows` as in RowSelection: the `count` rows of the table to read, all where it is empty.
Labels read_labels(const Column& column, const std::vector<std::uint32_t>& rows, std::size_t count);

/// Rows of a table under a coding. Missing values and labels without a level give NaN in every column of
/// their row.
class CodedRows : public RowSource {
 public:
  /// `columns`: the table's column of each variable. `levels`: for each variable that is a category its level
  /// in every row (0: baseline, -1: none), else empty. `response`: column of the table, -1: none.
  CodedRows(std::shared_ptr<const Table> table, std::shared_ptr<const Coding> coding,
            std::vector<std::size_t> columns, std::vector<std::vector<std::int32_t>> levels,
            std::vector<std::uint32_t> rows, std::size_t count, std::ptrdiff_t response);

  std::size_t rows() const override { return count_; }
  std::size_t columns() const override { return coding_->columns; }
  bool has_response() const override { return response_ != nullptr; }
  void fill(std::size_t first, std::size_t count, std::size_t stride, double* high,
            double* low) const override;
  bool has_low(std::size_t column) const override { return column < has_low_.size() && has_low_[column]; }

  const Coding& coding() const { return *coding_; }
  /// Rows first .. first + count - 1 of one variable: its numbers as in the table, or the number of its level.
  void fill_variable(std::size_t variable, std::size_t first, std::size_t count, double* values) const;

 private:
  const double* numbers(const double* column, std::size_t first, std::size_t count, double* gathered) const;
  void multiply(const std::vector<TermCoding::Power>& powers, bool from_one, std::size_t first,
                std::size_t count, double* high, double* low) const;

  std::shared_ptr<const Table> table_;  // keeps the numbers alive
  std::shared_ptr<const Coding> coding_;
  std::vector<const double*> numbers_;  // of each variable
  std::vector<std::vector<std::int32_t>> levels_;
  std::vector<std::uint32_t> rows_;  // empty: all
  std::size_t count_;
  const double* response_;
  std::vector<bool> has_low_;             // of each column
  std::vector<std::uint8_t> incomplete_;  // of each row; empty: none
};

/// Throws Error value_out_of_range where a product or power leaves the range in which its low part is exact.
void check_products(const Coding& coding, const std::vector<std::string>& names, const Table& table,
                    const std::vector<std::size_t>& columns, const std::vector<std::uint32_t>& rows,
                    std::size_t count);

}  // namespace unply
