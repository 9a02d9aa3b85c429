// Tables for tests, written down in a line or read from a reference file.
#pragma once

#include <limits>
#include <memory>
#include <string>
#include <vector>

#include "core/data/table.hpp"

namespace unply::test {

inline constexpr double missing = std::numeric_limits<double>::quiet_NaN();

/// A column of numbers in rows 2, 3, ... of a sheet; `missing` stands for an empty cell.
Column numbers(const std::string& name, std::vector<double> values);

/// A column of texts; a cell of nullptr is empty.
Column texts(const std::string& name, const std::vector<const char*>& values);

/// A column that holds texts where `values` has one, else the numbers.
Column mixed(const std::string& name, std::vector<double> numbers, const std::vector<const char*>& values);

/// The columns side by side from column A on.
std::shared_ptr<Table> table_of(std::vector<Column> columns);

/// NAME.csv of tests/reference: columns whose cells all read as numbers are numbers, the others texts.
std::shared_ptr<Table> reference_table(const std::string& name);

}  // namespace unply::test
