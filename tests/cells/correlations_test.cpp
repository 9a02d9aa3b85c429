// A table of correlations as it is printed, in cells.
#include "extension/cells/correlation_reader.hpp"
#include "tests/support/catch.hpp"

using namespace unply;
using namespace unply::office;

namespace {

const std::monostate blank;

PlainCells plain(text::Cells cells) {
  PlainCells result;
  std::size_t width = 0;
  for (const auto& row : cells) width = std::max(width, row.size());
  for (auto& row : cells) row.resize(width);
  result.cells = std::move(cells);
  result.sheet = "Data";
  result.first_column = 1;
  result.first_row = 2;
  result.range = "Data.B3:E6";
  return result;
}

Settings with_response(const std::string& response) {
  Settings settings;
  settings.model.response = response;
  return settings;
}

Error refusal(const text::Cells& cells, double n = 50, const Settings& settings = {}) {
  try {
    read_correlations(plain(cells), n, settings);
  } catch (const Error& error) { return error; }
  return Error(ErrorCode::cancelled);
}

const Eigen::Matrix3d expected = (Eigen::Matrix3d() << 1, 0.5, 0.2, 0.5, 1, -0.1, 0.2, -0.1, 1).finished();

}  // namespace

TEST_CASE("a full table, one half, names beside, an empty or dashed diagonal: all read the same") {
  const text::Cells full = {{"x", "y", "z"}, {1.0, 0.5, 0.2}, {0.5, 1.0, -0.1}, {0.2, -0.1, 1.0}};
  const text::Cells lower = {{blank, "x", "y", "z"}, {"x", 1.0}, {"y", 0.5, 1.0}, {"z", 0.2, -0.1, 1.0}};
  const text::Cells strict_lower = {
      {"", "x", "y", "z"}, {"x", "-"}, {"y", 0.5, "\u2014"}, {"z", 0.2, -0.1, blank}};
  const text::Cells strict_upper = {{"x", "y", "z"}, {blank, 0.5, 0.2}, {blank, blank, -0.1}};
  const text::Cells other_order = {{"r", "x", "y", "z"}, {"Z ", 0.2, -0.1, 1.0}, {"x", 1.0}, {"y", 0.5, 1.0}};
  const text::Cells with_margin = {
      {"x", "y", "z", blank}, {1.0, 0.5, 0.2, ""}, {0.5, 1.0, -0.1}, {0.2, -0.1, 1.0}, {" "}};
  for (const auto& cells : {full, lower, strict_lower, strict_upper, other_order, with_margin}) {
    const CorrelationTable table = read_correlations(plain(cells), 50, {});
    CHECK(table.names == std::vector<std::string>{"x", "y", "z"});
    CHECK(table.correlations == expected);
    CHECK(table.rows == 50);
    CHECK(table.response.empty());
  }
}

TEST_CASE("terms choose among the variables, means and deviations follow") {
  Settings settings = with_response("Z");
  settings.model.terms = {"y"};
  settings.means = {{1, 2, 3}};
  settings.standard_deviations = {{10, 20, 30}};
  const CorrelationTable table = read_correlations(
      plain({{"x", "y", "z"}, {1.0, 0.5, 0.2}, {0.5, 1.0, -0.1}, {0.2, -0.1, 1.0}}), 50, settings);
  CHECK(table.names == std::vector<std::string>{"z", "y"});
  CHECK(table.response == "z");
  CHECK(table.correlations(0, 1) == -0.1);
  CHECK(*table.means == Eigen::Vector2d(3, 2));
  CHECK(*table.sds == Eigen::Vector2d(30, 20));
}

TEST_CASE("what is no table of correlations is refused with the reason and the place") {
  CHECK(refusal({{"x", "y"}, {1.0, 0.5}, {0.5, 1.0}, {0.1, 0.1}}).code == ErrorCode::correlation_shape);
  CHECK(refusal({{"x", "y", "z"}, {1.0, 0.5}}).code == ErrorCode::correlation_shape);
  CHECK(refusal({{blank, blank}}).code == ErrorCode::empty_range);
  CHECK(refusal({{1.0, 0.5}, {0.5, 1.0}}).code == ErrorCode::headings_are_numbers);

  const Error heading = refusal({{"x", "", "z"}, {1.0, 0.5, 0.2}, {0.5, 1.0, -0.1}, {0.2, -0.1, 1.0}});
  REQUIRE(heading.code == ErrorCode::missing_heading);
  CHECK(heading.facts.text(FactId::address) == "Data.C3");

  const Error twice = refusal({{"x", "X"}, {1.0, 0.5}, {0.5, 1.0}});
  REQUIRE(twice.code == ErrorCode::duplicate_heading);
  CHECK(twice.facts.list(FactId::addresses) == std::vector<std::string>{"Data.B3", "Data.C3"});

  const Error twice_beside = refusal({{blank, "x", "y"}, {"x", 1.0, 0.5}, {"x", 0.5, 1.0}});
  REQUIRE(twice_beside.code == ErrorCode::duplicate_heading);
  CHECK(twice_beside.facts.list(FactId::addresses) == std::vector<std::string>{"Data.B4", "Data.B5"});

  CHECK(refusal({{blank, "x", "y"}, {"x", 1.0, 0.5}, {"w", 0.5, 1.0}}).code == ErrorCode::unknown_column);

  for (const text::Cells& cells : {text::Cells{{"x", "y"}, {1.0, blank}, {"0.5*", 1.0}},
                                   text::Cells{{blank, "x", "y"}, {"x", 1.0, blank}, {"y", "0.5*", 1.0}}}) {
    const Error stars = refusal(cells);
    REQUIRE(stars.code == ErrorCode::text_among_numbers);
    CHECK(stars.facts.text(FactId::text) == "0.5*");
  }

  const Error missing = refusal({{blank, "x", "y"}, {"x", 1.0}, {"y", blank, 1.0}});
  REQUIRE(missing.code == ErrorCode::correlation_missing);
  CHECK(missing.facts.list(FactId::columns) == std::vector<std::string>{"y", "x"});
  CHECK_FALSE(text::sentence(missing).empty());
}

TEST_CASE("n, means and deviations must fit the table") {
  const text::Cells cells = {{"x", "y"}, {1.0, 0.5}, {0.5, 1.0}};
  for (const double n : {0.0, -5.0, 10.5}) CHECK(refusal(cells, n).code == ErrorCode::impossible_setting);
  Settings settings;
  settings.means = {{1, 2, 3}};
  CHECK(refusal(cells, 50, settings).code == ErrorCode::impossible_setting);
  CHECK(refusal(cells, 50, with_response("q")).code == ErrorCode::unknown_column);
  settings = with_response("x");
  settings.model.terms = {"x"};
  CHECK(refusal(cells, 50, settings).code == ErrorCode::response_among_terms);
  settings.model.terms = {"y", "Y"};
  CHECK(refusal(cells, 50, settings).code == ErrorCode::duplicate_term);
}
