// Whole reports of generated tables, in words: every fact that a sentence needs is there, every table is rectangular,
// no cell holds a number that an office would show as an error, and the findings say what the truth is.
#include <cmath>
#include <functional>

#include "core/base/random.hpp"
#include "core/report/analysis.hpp"
#include "extension/text/text.hpp"
#include "tests/support/catch.hpp"

using namespace unply;

namespace {

Column numbers(const std::string& name, std::size_t rows, const std::function<double(std::size_t)>& value) {
  Column column;
  column.name = name;
  column.place = "A";
  column.first_sheet_row = 2;
  for (std::size_t i = 0; i < rows; ++i) column.numbers.push_back(value(i));
  return column;
}

Column texts(const std::string& name, std::size_t rows, const std::vector<std::string>& levels,
             const std::function<int(std::size_t)>& level) {
  Column column = numbers(name, rows, [](std::size_t) { return std::nan(""); });
  column.texts = levels;
  for (std::size_t i = 0; i < rows; ++i) column.codes.push_back(level(i));
  return column;
}

/// Three zones that follow one course, a time, a clay, and a strength: +0.02 a degree in each zone, +1.5 an hour.
std::shared_ptr<Table> kiln(std::size_t rows, std::uint64_t seed) {
  Random random(seed);
  auto table = std::make_shared<Table>();
  table->rows = rows;
  std::vector<double> course, time;
  for (std::size_t i = 0; i < rows; ++i) {
    course.push_back(1080 + 15 * random.normal());
    time.push_back(9 + random.normal());
  }
  const auto rounded = [](double value, double unit) { return std::round(value / unit) * unit; };
  for (int zone = 1; zone <= 3; ++zone)
    table->columns.push_back(numbers("Zone_" + std::to_string(zone), rows, [&](std::size_t i) {
      return rounded(course[i] + 2 * random.normal(), 0.1);
    }));
  table->columns.push_back(numbers("Time", rows, [&](std::size_t i) { return rounded(time[i], 0.1); }));
  table->columns.push_back(texts("Clay", rows, {"white", "red", "grey"}, [&](std::size_t i) { return static_cast<int>(i % 3); }));
  table->columns.push_back(numbers("Strength", rows, [&](std::size_t i) {
    const double zones = table->columns[0].numbers[i] + table->columns[1].numbers[i] + table->columns[2].numbers[i];
    return rounded(30 + 0.02 * (zones - 3240) + 1.5 * (table->columns[3].numbers[i] - 9) + (i % 3 == 1 ? 0.8 : 0) +
                       random.normal(),
                   0.01);
  }));
  table->columns[1].numbers[5] = std::nan("");
  return table;
}

Model model_of_strength() {
  Model model;
  model.response = "Strength";
  model.smallest_effects = {{"Zone_1", 0.03}, {"Zone_2", 0.03}, {"Zone_3", 0.03}};
  return model;
}

void check_block(const TableBlock& block) {
  const text::Cells cells = text::cells(block);
  REQUIRE_FALSE(cells.empty());
  for (const auto& row : cells) {
    CHECK(row.size() == block.headings.size());
    for (const text::Cell& cell : row)
      if (const double* number = std::get_if<double>(&cell)) CHECK(std::isfinite(*number));
  }
  if (!block.row_formats.empty()) CHECK(block.row_formats.size() == block.rows.size());
}

/// All sentences of a report; checks every table on the way.
std::vector<std::string> words_of(const Report& report) {
  std::vector<std::string> words;
  for (const Section& section : report.sections)
    for (const Block& block : section.blocks) {
      if (const auto* table = std::get_if<TableBlock>(&block)) {
        check_block(*table);
        for (const Phrase& note : table->notes) words.push_back(text::phrase(note));
      } else if (const auto* finding = std::get_if<FindingBlock>(&block)) {
        for (const auto& sentences : finding->findings)
          for (const Phrase& phrase : sentences) words.push_back(text::phrase(phrase));
      } else if (const auto* paragraph = std::get_if<ParagraphBlock>(&block)) {
        for (const Phrase& phrase : paragraph->sentences) words.push_back(text::phrase(phrase));
      } else if (const auto* chart = std::get_if<ChartBlock>(&block)) {
        CHECK(chart->names.size() == chart->values.size());
        for (double value : chart->values) CHECK(std::isfinite(value));
      }
    }
  return words;
}

const ReportContext context = {"Data.A1:F200", "kiln.ods", "0.1.0", "2026-01-01", {"response = Strength"}, {}};

bool any_starts_with(const std::vector<std::string>& words, const std::string& start) {
  for (const std::string& sentence : words)
    if (sentence.rfind(start, 0) == 0) return true;
  return false;
}

}  // namespace

TEST_CASE("a report says which effects are clear and which are entangled", "[report]") {
  const std::uint64_t seed = 11;
  CAPTURE(seed);
  const Analysis analysis(kiln(236, seed), model_of_strength());
  const std::vector<std::string> words = words_of(full_report(analysis, context));
  CHECK(any_starts_with(words, "Time: clear."));
  CHECK(any_starts_with(words, "Zone_1, Zone_2 and Zone_3 together: clear."));
  CHECK(any_starts_with(words, "1 of 236 rows was left out, because a cell is empty in Zone_2."));
  CHECK(any_starts_with(words, "Data: Data.A1:F200 in kiln.ods, 235 rows used, fingerprint "));
  CHECK(any_starts_with(words, "Clay: red (against "));
}

TEST_CASE("every kind of model has a report without holes", "[report]") {
  const std::uint64_t seed = 12;
  CAPTURE(seed);
  const auto run = [&](const std::string& what, const std::function<void(Table&, Model&)>& change) {
    CAPTURE(what);
    const std::shared_ptr<Table> table = kiln(60, seed);
    Model model = model_of_strength();
    change(*table, model);
    const Analysis analysis(table, model);
    const std::vector<std::string> words = words_of(full_report(analysis, context));
    for (const std::string& sentence : words) {
      CAPTURE(sentence);
      CHECK_FALSE(sentence.empty());
      CHECK(sentence.find("nan") == std::string::npos);
      CHECK(sentence.find('?') == std::string::npos);
    }
    for (BlockId id : {BlockId::inflation, BlockId::condition, BlockId::dependencies, BlockId::estimates,
                       BlockId::fit_quality, BlockId::ledger, BlockId::groups, BlockId::combinations,
                       BlockId::rows_needed})
      check_block(table_block(id, analysis));
    return words;
  };
  run("as it comes", [](Table&, Model&) {});
  run("robust", [](Table&, Model& model) { model.standard_errors = StandardErrors::robust; });
  run("no smallest effect", [](Table&, Model& model) { model.smallest_effects.clear(); });
  run("one smallest effect for all", [](Table&, Model& model) { model.smallest_effect = 1000; });
  run("no intercept", [](Table&, Model& model) { model.intercept = false; });
  run("centred condition", [](Table&, Model& model) { model.centred_condition = true; });
  run("one term", [](Table&, Model& model) { model.terms = {"Time"}; model.smallest_effects.clear(); });
  run("category only", [](Table&, Model& model) { model.terms = {"Clay"}; model.smallest_effects.clear(); });
  run("product and power", [](Table&, Model& model) { model.terms = {"Zone_1", "Time", "Zone_1*Time", "Time^2"}; model.smallest_effects.clear(); });
  run("product, centred", [](Table&, Model& model) {
    model.terms = {"Zone_1", "Time", "Zone_1*Time", "Clay", "Clay*Time"};
    model.smallest_effects.clear();
    model.centre = true;
  });
  const std::vector<std::string> dependent = run("a total beside its parts", [](Table& table, Model&) {
    Column total = table.columns[0];
    total.name = "Total";
    for (std::size_t i = 0; i < table.rows; ++i) total.numbers[i] = table.columns[0].numbers[i] + table.columns[3].numbers[i];
    table.columns.push_back(total);
  });
  CHECK(any_starts_with(dependent, "Exact dependency: Total = Zone_1 + Time"));
  const std::vector<std::string> constant = run("a constant column", [](Table& table, Model&) {
    for (double& value : table.columns[3].numbers) value = 9;
  });
  CHECK(any_starts_with(constant, "Time is constant"));
  run("a perfect fit", [](Table& table, Model& model) {
    for (std::size_t i = 0; i < table.rows; ++i) table.columns[5].numbers[i] = 2 * table.columns[3].numbers[i];
    model.terms = {"Time"};
    model.smallest_effects.clear();
  });
  run("few rows", [](Table& table, Model& model) {
    table.rows = 5;
    for (Column& column : table.columns) {
      column.numbers.resize(5);
      if (!column.codes.empty()) column.codes.resize(5);
    }
    table.columns[1].numbers[4] = 1080;
    model.terms = {"Time"};
    model.smallest_effects.clear();
  });
}

TEST_CASE("predictors alone have their tables without a response", "[report]") {
  Model model;
  model.terms = {"Zone_1", "Zone_2", "Zone_3", "Time", "Clay"};
  const Analysis analysis(kiln(100, 13), model);
  for (BlockId id : {BlockId::inflation, BlockId::condition, BlockId::dependencies, BlockId::groups})
    check_block(table_block(id, analysis));
  for (BlockId id : {BlockId::estimates, BlockId::fit_quality, BlockId::ledger, BlockId::rows_needed}) {
    try {
      table_block(id, analysis);
      FAIL("not refused");
    } catch (const Error& error) {
      CHECK(error.code == ErrorCode::response_missing);
    }
  }
}

TEST_CASE("a smallest effect of a term that is not in the model is refused", "[report][error]") {
  Model model = model_of_strength();
  model.smallest_effects["Humidity"] = 1;
  const Analysis analysis(kiln(40, 14), model);
  try {
    analysis.fit();
    FAIL("not refused");
  } catch (const Error& error) {
    CHECK(error.code == ErrorCode::unknown_column);
    CHECK(error.facts.text(FactId::name) == "Humidity");
  }
}

TEST_CASE("predictions mark rows outside the data and rows with empty cells", "[report]") {
  const std::shared_ptr<Table> data = kiln(80, 15);
  Model model = model_of_strength();
  const Analysis analysis(data, model);
  auto rows = std::make_shared<Table>(*data);
  rows->rows = 3;
  for (Column& column : rows->columns) {
    column.numbers.resize(3);
    if (!column.codes.empty()) column.codes.resize(3);
  }
  rows->columns[3].numbers[1] = 90;            // hours, far from any firing
  rows->columns[0].numbers[2] = std::nan("");  // empty
  const text::Cells cells = text::cells(predictions_block(analysis, rows), false);
  REQUIRE(cells.size() == 4);
  CHECK(std::get<std::string>(cells[1][3]) == "within the data");
  CHECK(std::get<std::string>(cells[2][3]) == "outside the data");
  CHECK(std::get<std::string>(cells[3][0]) == "no prediction");
}

TEST_CASE("the fingerprint follows every value and name", "[report]") {
  const std::shared_ptr<Table> table = kiln(20, 16);
  const std::uint64_t before = fingerprint(*table);
  CHECK(fingerprint(*kiln(20, 16)) == before);
  table->columns[2].numbers[7] += 0.1;
  CHECK(fingerprint(*table) != before);
  table->columns[2].numbers[7] = kiln(20, 16)->columns[2].numbers[7];
  CHECK(fingerprint(*table) == before);
  table->columns[2].name += " ";
  CHECK(fingerprint(*table) != before);
}
