#include "core/data/table.hpp"

#include "core/base/error.hpp"
#include "core/data/row_selection.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/tables.hpp"

using namespace unply;
using namespace unply::test;

TEST_CASE("cells are named as the sheet names them", "[table]") {
  Column column = numbers("Width", {1, 2, 3});
  column.place = "C";
  CHECK(column.address(5) == "C7");
  CHECK(column.range() == "C2:C4");
  CHECK(column.heading_address() == "C1");
  column.sheet = "Kiln";
  CHECK(column.address(0) == "Kiln.C2");
  CHECK(column.range() == "Kiln.C2:C4");
  column.first_sheet_row = 1;
  CHECK(column.heading_address() == "Kiln.C1");
}

TEST_CASE("a column is found by its heading, the exact one first", "[table]") {
  const auto table = table_of({numbers("Zone", {1}), numbers("zone", {1}), numbers(" Clay type ", {1}),
                               numbers("", {1}), numbers("x", {1}), numbers("X ", {1})});
  CHECK(table->find("Zone") == 0);
  CHECK(table->find("zone") == 1);
  CHECK(table->find("clay TYPE") == 2);
  CHECK(table->find(" Clay type ") == 2);
  CHECK(table->find("x") == 4);
}

TEST_CASE("a heading that is not there, or there twice, is refused with what would help", "[table][error]") {
  const auto table =
      table_of({numbers("Zone", {1}), numbers("ZONE", {1}), numbers("Moisture", {1}), numbers("", {1})});
  try {
    table->find("Moistur");
    FAIL("found");
  } catch (const Error& error) {
    CHECK(error.code == ErrorCode::unknown_column);
    CHECK(error.facts.text(FactId::name) == "Moistur");
    CHECK(error.facts.text(FactId::suggestion) == "Moisture");
    CHECK(error.facts.list(FactId::allowed) == std::vector<std::string>{"Zone", "ZONE", "Moisture"});
  }
  try {
    table->find("pressure");
    FAIL("found");
  } catch (const Error& error) { CHECK_FALSE(error.facts.has(FactId::suggestion)); }
  try {
    table->find("zone");
    FAIL("found");
  } catch (const Error& error) {
    CHECK(error.code == ErrorCode::ambiguous_column);
    CHECK(error.facts.list(FactId::addresses) == std::vector<std::string>{"A1", "B1"});
  }
  CHECK_THROWS_AS(table->find(""), Error);
}

TEST_CASE("rows are used when every column asked for has a value", "[rows]") {
  const auto table =
      table_of({numbers("a", {1, missing, 3, 4, 5, 6}), texts("b", {"p", "q", nullptr, " ", "q", "p"}),
                numbers("c", {missing, missing, missing, missing, missing, missing})});
  RowSelection rows = select_rows(*table, {0, 1}, false);
  CHECK(rows.all_rows == 6);
  CHECK(rows.used == 3);
  CHECK(rows.rows == std::vector<std::uint32_t>{0, 4, 5});
  CHECK(rows.row(1) == 4);
  CHECK(rows.incomplete == std::vector<std::size_t>{1, 2, 3});
  CHECK(rows.incomplete_count == 3);
  REQUIRE(rows.missing.size() == 2);  // most first
  CHECK(rows.missing[0].column == 1);
  CHECK(rows.missing[0].count == 2);
  CHECK(rows.missing[1].column == 0);
  CHECK(rows.missing[1].count == 1);

  rows = select_rows(*table, {2}, false);
  CHECK(rows.used == 0);
  CHECK(rows.incomplete_count == 6);
}

TEST_CASE("a complete table is used as it stands", "[rows]") {
  const auto table = table_of({numbers("a", {1, 2}), texts("b", {"p", "q"})});
  const RowSelection rows = select_rows(*table, {0, 1}, true);
  CHECK(rows.used == 2);
  CHECK(rows.rows.empty());
  CHECK(rows.row(1) == 1);
}

TEST_CASE("hidden rows are left out where asked, and counted apart from missing ones", "[rows]") {
  const auto table = table_of({numbers("a", {1, missing, missing, 4})});
  table->hidden = {1, 1, 0, 0};
  const RowSelection visible = select_rows(*table, {0}, true);
  CHECK(visible.rows == std::vector<std::uint32_t>{3});
  CHECK(visible.hidden_left_out == 2);
  CHECK(visible.incomplete == std::vector<std::size_t>{2});
  CHECK(visible.missing.front().count == 1);
  const RowSelection all = select_rows(*table, {0}, false);
  CHECK(all.rows == std::vector<std::uint32_t>{0, 3});
  CHECK(all.hidden_left_out == 0);
}

TEST_CASE("the first hundred incomplete rows are listed, all are counted", "[rows]") {
  const auto table = table_of({numbers("a", std::vector<double>(250, missing))});
  const RowSelection rows = select_rows(*table, {0}, false);
  CHECK(rows.incomplete.size() == 100);
  CHECK(rows.incomplete_count == 250);
}
