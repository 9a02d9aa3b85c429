// Formulas that ask for equal cells under equal settings share one analysis.
#include "extension/functions/shared_analyses.hpp"

#include <cmath>

#include "tests/support/catch.hpp"

using namespace unply;
using namespace unply::office;

namespace {

std::shared_ptr<Table> small_table(double last, const std::string& name = "x") {
  auto table = std::make_shared<Table>();
  table->rows = 4;
  Column column;
  column.name = name;
  column.place = "A";
  column.numbers = {1, std::nan(""), 3, last};
  table->columns.push_back(column);
  return table;
}

}  // namespace

TEST_CASE("equal cells under equal settings share one analysis, whatever was asked in between") {
  SharedAnalyses shared;
  const Model model;
  const auto first = shared.of(small_table(4), model);
  CHECK(shared.of(small_table(5), model) != first);
  CHECK(shared.of(small_table(4), model) == first);
  CHECK(shared.begun() == 2);
}

TEST_CASE("another value, name, address, hidden row or setting is another analysis") {
  SharedAnalyses shared;
  const Model model;
  shared.of(small_table(4), model);
  shared.of(small_table(std::nextafter(4, 5)), model);
  shared.of(small_table(4, "z"), model);
  auto moved = small_table(4);
  moved->columns[0].first_sheet_row = 3;
  shared.of(moved, model);
  auto hidden = small_table(4);
  hidden->hidden = {0, 0, 1, 0};
  shared.of(hidden, model);
  Model other;
  other.level = 0.9;
  shared.of(small_table(4), other);
  CHECK(shared.begun() == 6);
}

TEST_CASE("several models of one table hold it once") {
  SharedAnalyses shared;
  Model other;
  other.level = 0.9;
  const auto first = shared.of(small_table(4), Model());
  const auto second = shared.of(small_table(4), other);
  CHECK(&first->table() == &second->table());
}

TEST_CASE("what is kept is bounded in number and in bytes, and the one used last stays") {
  SharedAnalyses few(2, std::size_t(1) << 20);
  const Model model;
  few.of(small_table(1), model);
  few.of(small_table(2), model);
  few.of(small_table(1), model);  // used again, so the second is the oldest
  few.of(small_table(3), model);
  CHECK(few.begun() == 3);
  few.of(small_table(1), model);
  CHECK(few.begun() == 3);
  few.of(small_table(2), model);
  CHECK(few.begun() == 4);

  SharedAnalyses tiny(10, 1);  // no table fits
  tiny.of(small_table(1), model);
  tiny.of(small_table(1), model);
  CHECK(tiny.begun() == 1);
  tiny.of(small_table(2), model);
  tiny.of(small_table(1), model);
  CHECK(tiny.begun() == 3);
}
