// Cells become columns.
#include "extension/cells/table_builder.hpp"

#include <cmath>

#include "tests/support/catch.hpp"

using namespace unply;
using namespace unply::office;

TEST_CASE("letters of columns count A to Z, then AA") {
  CHECK(column_letters(0) == "A");
  CHECK(column_letters(25) == "Z");
  CHECK(column_letters(26) == "AA");
  CHECK(column_letters(701) == "ZZ");
  CHECK(column_letters(702) == "AAA");
  CHECK(column_letters(16383) == "XFD");
}

TEST_CASE("numbers, texts, missing cells and errors keep their rows") {
  TableBuilder cells(2, 6);
  const auto row = [&cells](auto first) {
    first();
    cells.missing(1);
  };
  row([&] { cells.number(0, 1.5); });
  row([&] { cells.text(0, "red"); });
  row([&] { cells.missing(0); });
  row([&] { cells.error(0, 532); });
  row([&] { cells.text(0, "blue"); });
  row([&] { cells.text(0, "red"); });
  row([&] { cells.text(0, ""); });
  CHECK(cells.rows() == 7);
  CHECK(cells.content_rows() == 6);
  CHECK(cells.empty(1));
  cells.column(0).name = "Clay";
  const std::vector<Column> columns = cells.take(8);
  REQUIRE(columns.size() == 1);  // the second has neither name nor content
  const Column& column = columns.front();
  CHECK(column.texts == std::vector<std::string>{"red", "blue"});
  CHECK(column.codes == std::vector<std::int32_t>{-1, 0, -1, -1, 1, 0, -1, -1});
  CHECK(column.error_rows == std::vector<std::size_t>{3});
  CHECK(column.first_error_code == 532);
  REQUIRE(column.numbers.size() == 8);
  CHECK(column.numbers[0] == 1.5);
  for (std::size_t i = 1; i < 8; ++i) CHECK(std::isnan(column.numbers[i]));
}

TEST_CASE("an error in the last row is content") {
  TableBuilder cells(1, 2);
  cells.number(0, 1);
  cells.error(0, 0);
  CHECK(cells.content_rows() == 2);
}

TEST_CASE("a column of numbers alone takes no room for texts, and is not copied") {
  TableBuilder cells(1, 1000);
  for (int i = 0; i < 1000; ++i) cells.number(0, i);
  const double* before = cells.column(0).numbers.data();
  cells.column(0).name = "x";
  const std::vector<Column> columns = cells.take(1000);
  CHECK(columns.front().numbers.data() == before);
  CHECK(columns.front().codes.capacity() == 0);
}

TEST_CASE("room that was taken for a whole sheet is given back where the content is short") {
  TableBuilder cells(1, 1000000);
  for (int i = 0; i < 25; ++i) cells.number(0, i);
  cells.column(0).name = "x";
  CHECK(cells.take(25).front().numbers.capacity() < 100);
}
