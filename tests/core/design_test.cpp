#include "core/design/design.hpp"

#include <cmath>
#include <limits>

#include "core/base/error.hpp"
#include "tests/support/catch.hpp"

using namespace unply;

namespace {

constexpr double missing = std::numeric_limits<double>::quiet_NaN();

Column numbers(const std::string& name, std::vector<double> values) {
  Column column;
  column.name = name;
  column.place = std::string(1, static_cast<char>('A' + name.size() % 20));
  column.first_sheet_row = 2;
  column.numbers = std::move(values);
  return column;
}

Column texts(const std::string& name, const std::vector<std::string>& values) {
  Column column = numbers(name, std::vector<double>(values.size(), missing));
  for (const std::string& value : values) {
    std::size_t code = 0;
    while (code < column.texts.size() && column.texts[code] != value) ++code;
    if (code == column.texts.size()) column.texts.push_back(value);
    column.codes.push_back(static_cast<std::int32_t>(code));
  }
  return column;
}

std::shared_ptr<const Table> table_of(std::vector<Column> columns) {
  auto table = std::make_shared<Table>();
  table->rows = columns.front().numbers.size();
  table->columns = std::move(columns);
  return table;
}

}  // namespace

TEST_CASE("plain columns, a category, a product and a power become columns of the design", "[design]") {
  const auto table = table_of({numbers("y", {1, 2, 4, 8, 16, 3}), numbers("a", {1, 2, 3, 4, 5, missing}),
                               texts("Clay", {"red", "white", "red", "blue", "white", "red"})});
  Model model;
  model.response = "y";
  model.terms = {"a", "Clay", "a^2", "a*Clay"};
  const Design design = make_design(table, model);
  CHECK(design.rows() == 5);
  CHECK(design.selection().incomplete == std::vector<std::size_t>{5});
  REQUIRE(design.layout().columns ==
          std::vector<std::string>{"a", "Clay: blue", "Clay: white", "a^2", "a*Clay: blue", "a*Clay: white"});
  CHECK(design.layout().terms[1].baseline == "red");
  std::vector<double> high(7 * 5), low(7 * 5);
  design.fill(0, 5, 5, high.data(), low.data());
  CHECK(high == std::vector<double>{1,  2,  3, 4, 5, 0, 0, 0, 1, 0, 0, 1, 0, 0, 1, 1, 4, 9,
                                    16, 25, 0, 0, 0, 4, 0, 0, 2, 0, 0, 5, 1, 2, 4, 8, 16});
}
