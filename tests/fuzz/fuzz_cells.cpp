// Fuzz target: an arbitrary block of cells and an arbitrary model, through the whole analysis and into words.
// Whatever they are, the answer is a report or a refusal with a sentence: never another exception, never a
// number that is not one where an effect can be estimated.
#include "tests/fuzz/fuzz_cells.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <limits>
#include <memory>
#include <string>
#include <vector>

#include "core/base/random.hpp"
#include "core/report/analysis.hpp"
#include "extension/text/text.hpp"

namespace unply::fuzz {

void (*before_abort)() = nullptr;
Depth deepest = Depth::nothing;

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();

void require(bool holds, const char* what) {
  if (holds) return;
  std::fprintf(stderr, "not true: %s\n", what);
  if (before_abort != nullptr) before_abort();
  std::abort();
}

/// Decisions out of the input; zeros once it is used up.
class Choices {
 public:
  Choices(const std::uint8_t* data, std::size_t size) : data_(data), left_(size) {}

  std::uint8_t byte() {
    if (left_ == 0) return 0;
    --left_;
    return *data_++;
  }
  std::uint64_t word() {
    std::uint64_t result = 0;
    for (int i = 0; i < 8; ++i) result = (result << 8) | byte();
    return result;
  }
  std::size_t below(std::size_t limit) { return byte() % limit; }
  bool one_in(std::size_t n) { return below(n) == n - 1; }  // never once the input is used up
  template <class T>
  const T& of(const std::vector<T>& choices) {
    return choices[below(choices.size())];
  }

 private:
  const std::uint8_t* data_;
  std::size_t left_;
};

std::string any_text(Choices& choices) {
  std::string text;
  for (std::size_t length = choices.below(12); length > 0; --length)
    text += static_cast<char>(choices.byte());
  return text;
}

std::string heading(Choices& choices, std::size_t column) {
  static const std::vector<std::string> odd{
      "",     " ",         "=1+1",  "+x",   "@y",   "a*b",  "a^2", "a", "b",   "A",    " a ", "'a'",
      "it's", "a + b = c", "größe", "温度", "\xff", "x: y", "a*a", "1", "NaN", "a\nb", "*",   "^"};
  if (choices.one_in(4)) return choices.of(odd);
  if (choices.one_in(30)) return any_text(choices);
  return "c" + std::to_string(column);
}

double any_number(Random& random) {
  static const double odd[] = {0.0, -0.0,  5e-324, 2.2e-308, 1e-300, -1e300, 1.7e308, 9007199254740993.0,
                               0.1, 1e-17, 1};
  switch (random.below(8)) {
    case 0:
      return odd[random.below(std::size(odd))];
    case 1:
      return std::bit_cast<double>(random.bits());  // any bits: infinities and NaNs of every kind among them
    case 2:
      return random.normal() * std::pow(10.0, static_cast<double>(random.below(600)) - 300);
    default:
      return random.normal();
  }
}

void set_text(Column& column, std::size_t row, const std::string& text) {
  if (column.codes.empty()) column.codes.assign(column.numbers.size(), -1);
  const auto known = std::find(column.texts.begin(), column.texts.end(), text);
  column.codes[row] = static_cast<std::int32_t>(known - column.texts.begin());
  if (known == column.texts.end()) column.texts.push_back(text);
  column.numbers[row] = not_a_number;
}

Column any_column(Choices& choices, std::size_t j, std::size_t rows, const std::vector<Column>& before) {
  Column column;
  column.name = heading(choices, j);
  column.place = std::string(1, static_cast<char>('A' + j));
  column.first_sheet_row = choices.one_in(6) ? 1 : 2;
  if (choices.one_in(6)) column.sheet = "Sheet 2";
  column.numbers.assign(rows, not_a_number);
  const std::size_t kind = choices.below(17);
  Random random(choices.word());
  const auto other = [&](std::size_t i) {
    const double x = before.empty() ? random.normal() : before[j % before.size()].numbers[i];
    return std::isnan(x) ? 0 : x;
  };
  const double unit = std::pow(10.0, static_cast<double>(random.below(20)) - 10);
  const std::size_t levels = 1 + random.below(6);
  for (std::size_t i = 0; i < rows; ++i) {
    double& cell = column.numbers[i];
    const auto place = static_cast<double>(i);
    switch (kind) {
      case 0:
      case 1:
      case 2:
        cell = random.normal() * unit;
        break;
      case 3:
        cell = static_cast<double>(random.below(10));
        break;
      case 4:
        cell = static_cast<double>(random.below(2));
        break;
      case 5:
        cell = unit;
        break;
      case 6:
        cell = 2 * other(i) - 3;
        break;
      case 7: {  // the sum of all before
        cell = 0;
        for (const Column& part : before) cell += std::isfinite(part.numbers[i]) ? part.numbers[i] : 0;
        break;
      }
      case 8:
        cell = other(i) * (1 + std::pow(10.0, -static_cast<double>(j * 3 + 2)) * random.normal());
        break;
      case 9:
        cell = 1e9 + random.normal();
        break;
      case 10:
        cell = std::round(10 * random.normal()) / 10;
        break;
      case 11:
        cell = std::pow(place, 1.0 + static_cast<double>(levels));
        break;
      case 12:
        cell = any_number(random);
        break;
      case 13:
        cell = random.normal() * std::pow(10.0, 280 * (random.uniform() - 0.5));
        break;
      case 14:
      case 15:
        set_text(column, i, "level " + std::to_string(random.below(levels)));
        break;
      default:
        if (random.below(2) == 0)
          set_text(column, i, std::to_string(random.below(40)));
        else
          cell = static_cast<double>(random.below(40));
    }
  }
  if (choices.one_in(4)) {  // empty cells
    const std::uint64_t rare = 2 + random.below(30);
    for (std::size_t i = 0; i < rows; ++i) {
      if (random.below(rare) != 0) continue;
      column.numbers[i] = not_a_number;
      if (!column.codes.empty()) column.codes[i] = -1;
    }
  }
  if (choices.one_in(20) && rows > 0)
    set_text(column, random.below(rows), choices.one_in(2) ? " " : any_text(choices));
  if (choices.one_in(20) && rows > 0) {
    const std::size_t row = random.below(rows);
    column.numbers[row] = not_a_number;
    if (!column.codes.empty()) column.codes[row] = -1;
    column.error_rows = {row};
    column.first_error_code = 532;
  }
  return column;
}

std::shared_ptr<Table> any_table(Choices& choices) {
  auto table = std::make_shared<Table>();
  table->rows = choices.one_in(40) ? 1000 + choices.byte() : choices.below(60);
  const std::size_t columns = 1 + choices.below(8);
  for (std::size_t j = 0; j < columns; ++j)
    table->columns.push_back(any_column(choices, j, table->rows, table->columns));
  if (choices.one_in(5)) {
    for (std::size_t i = 0; i < table->rows; ++i) table->hidden.push_back(choices.one_in(4));
  }
  return table;
}

std::string any_heading(Choices& choices, const Table& table) {
  return choices.one_in(25) ? any_text(choices) : table.columns[choices.below(table.columns.size())].name;
}

Model any_model(Choices& choices, const Table& table) {
  Model model;
  model.purpose = choices.of<Purpose>({Purpose::test_hypothesis, Purpose::explore, Purpose::predict});
  if (!choices.one_in(5)) model.response = any_heading(choices, table);
  if (choices.one_in(2)) {
    for (std::size_t terms = 1 + choices.below(6); terms > 0; --terms) {
      std::string term;
      for (std::size_t factors = 1 + choices.below(3); factors > 0; --factors) {
        const bool quotes = choices.one_in(3);
        term += (term.empty() ? "" : "*") + std::string(quotes ? "'" : "") + any_heading(choices, table) +
                (quotes ? "'" : "");
        if (choices.one_in(3)) term += "^" + std::to_string(choices.below(5));
      }
      model.terms.push_back(choices.one_in(40) ? any_text(choices) : term);
    }
  }
  if (choices.one_in(4)) model.categories.push_back(any_heading(choices, table));
  if (choices.one_in(6))
    model.baselines[any_heading(choices, table)] = "level " + std::to_string(choices.below(4));
  model.intercept = !choices.one_in(4);
  model.centre = choices.one_in(3);
  model.level = 0.5 + 0.4999 * choices.byte() / 255.0;  // as far as the reader of settings lets it go
  model.standard_errors = choices.one_in(3) ? StandardErrors::robust : StandardErrors::ordinary;
  if (choices.one_in(3)) model.smallest_effect = std::pow(10.0, choices.below(9)) / 1e4;
  if (choices.one_in(8)) model.smallest_effects[any_heading(choices, table)] = 1;
  model.visible_rows_only = choices.one_in(3);
  model.centred_condition = choices.one_in(3);
  model.seed = choices.word();
  return model;
}

void check_design(const Design& design, const Table& table, const Model& model) {
  const Layout& layout = design.layout();
  const std::size_t n = design.rows(), p = design.columns(), width = p + design.has_response();
  require(n == design.selection().used && n >= 2 && p >= 1, "a design has rows and columns");
  require(layout.columns.size() == p && layout.term_of.size() == p, "every column has a name and a term");
  std::size_t column = 0;
  for (std::size_t t = 0; t < layout.terms.size(); ++t) {
    for (const std::size_t j : layout.terms[t].columns) {
      require(j == column && layout.term_of[j] == t, "the terms share out the columns in order");
      ++column;
    }
    for (const std::size_t part : layout.terms[t].built_from)
      require(part < layout.terms.size() && part != t, "terms are built from other terms");
    if (model.terms.empty()) continue;
    require(parse_term(layout.terms[t].name, table).name == layout.terms[t].name,
            "the name of a term reads back");
  }
  require(column == p, "the terms share out all columns");
  std::vector<double> high(width * n), low(width * n), part_high(width * n), part_low(width * n);
  design.fill(0, n, n, high.data(), low.data());
  const std::size_t half = n / 2;
  for (const std::size_t first : {std::size_t{0}, half})
    design.fill(first, first == 0 ? half : n - half, n, part_high.data() + first, part_low.data() + first);
  require(high == part_high && low == part_low, "rows are the same in any blocks");
  for (std::size_t j = 0; j < width; ++j) {
    for (std::size_t i = 0; i < n; ++i) {
      const double h = high[j * n + i], l = low[j * n + i];
      require(std::isfinite(h), "entries are numbers");
      require(std::abs(l) <= std::ldexp(std::abs(h), -53), "low parts are below half a last place");
      require(l == 0 || (j < p && design.has_low(j)), "low parts are announced");
    }
  }
  const auto again = design.of_new_rows(std::make_shared<Table>(table));
  require(again->columns() == p && again->rows() == table.rows, "the table's own rows can be coded again");
}

void check_fit(const Design& design, const LeastSquaresFit& fit) {
  const std::size_t n = design.rows(), p = design.columns();
  require(fit.rows == n && fit.columns == p && fit.estimable.size() == p, "the fit is of the design");
  require(fit.kept.size() + fit.dependencies.size() == p, "every column is kept or explained");
  bool all_estimable = fit.intercept_estimable || !fit.intercept;
  for (std::size_t j = 0; j < p; ++j) {
    const auto k = static_cast<Eigen::Index>(j);
    all_estimable = all_estimable && fit.estimable[j];
    require(!fit.estimable[j] || fit.variance_inflation[k] > 0.99,
            "an estimable coefficient has a VIF from 1 on");
    if (!fit.has_response) continue;
    const bool both = std::isfinite(fit.coefficients[k]) && std::isfinite(fit.standard_errors[k]);
    require(both == fit.estimable[j], "an estimable coefficient is a number, another is none");
    require(!fit.estimable[j] || fit.standard_errors[k] >= 0, "a standard error is not negative");
  }
  if (!fit.has_response || !all_estimable) return;
  // Residuals are orthogonal to every column, as far as coefficients rounded to doubles can make them so.
  std::vector<double> high((p + 1) * n), low((p + 1) * n);
  design.fill(0, n, n, high.data(), low.data());
  std::vector<long double> residual(n), size(p + 1, 0);
  long double reach = 0;
  for (std::size_t j = 0; j <= p; ++j) {
    for (std::size_t i = 0; i < n; ++i)
      size[j] = std::hypot(size[j], static_cast<long double>(high[j * n + i]));
    reach +=
        size[j] *
        (j == p ? 1 : std::abs(static_cast<long double>(fit.coefficients[static_cast<Eigen::Index>(j)])));
  }
  const long double b0 = fit.intercept ? fit.intercept_estimate : 0;
  reach += std::abs(b0) * std::sqrt(static_cast<long double>(n));
  for (std::size_t i = 0; i < n; ++i) {
    residual[i] = high[p * n + i] - b0;
    for (std::size_t j = 0; j < p; ++j)
      residual[i] -= static_cast<long double>(fit.coefficients[static_cast<Eigen::Index>(j)]) *
                     (static_cast<long double>(high[j * n + i]) + low[j * n + i]);
  }
  for (std::size_t j = 0; j < p; ++j) {
    long double dot = 0;
    for (std::size_t i = 0; i < n; ++i) dot += residual[i] * high[j * n + i];
    require(std::abs(dot) <= 1e-12L * size[j] * reach, "residuals are orthogonal to the columns");
  }
}

void check_words(const TableBlock& block) {
  const text::Cells cells = text::cells(block);
  require(!cells.empty(), "a table has a heading row");
  for (const auto& row : block.rows) require(row.size() == block.headings.size(), "tables are rectangular");
  for (const auto& row : cells) require(row.size() == cells.front().size(), "cells are rectangular");
}

void check_words(const std::vector<Phrase>& phrases) {
  for (const Phrase& phrase : phrases) require(!text::phrase(phrase).empty(), "a phrase has words");
}

struct CheckBlock {
  void operator()(const TableBlock& block) const { check_words(block); }
  void operator()(const FindingBlock& block) const {
    for (const auto& finding : block.findings) check_words(finding);
  }
  void operator()(const ParagraphBlock& block) const { check_words(block.sentences); }
  void operator()(const ChartBlock& block) const {
    require(block.names.size() == block.values.size(), "a chart has a value for every name");
  }
};

/// Runs `work`; a refusal must have its sentence. Anything else that is thrown ends the run.
template <class Work>
void allow_refusal(Work work) {
  try {
    work();
  } catch (const Error& error) {
    require(!text::sentence(error).empty(), "a refusal has a sentence");
    require(error.code != ErrorCode::internal, "a refusal is not a fault of ours");
  }
}

}  // namespace

void run(const std::uint8_t* data, std::size_t size) {
  deepest = Depth::nothing;
  Choices choices(data, size);
  const std::shared_ptr<const Table> table = any_table(choices);
  const Model model = any_model(choices, *table);
  const Analysis analysis(table, model);
  try {
    allow_refusal([&] {
      check_design(analysis.design(), *table, model);
      deepest = Depth::design;
      check_fit(analysis.design(), analysis.fit());
      deepest = Depth::fit;
      for (const DependencyEquation& equation : analysis.equations()) {
        require(!equation.text.empty() && !equation.columns.empty(), "an equation says something");
        require(equation.columns.size() == equation.coefficients.size(), "an equation has its coefficients");
        for (const double c : equation.coefficients) require(std::isfinite(c), "coefficients are numbers");
      }
    });
    for (const BlockId id :
         {BlockId::inflation, BlockId::condition, BlockId::dependencies, BlockId::estimates,
          BlockId::fit_quality, BlockId::ledger, BlockId::groups, BlockId::rows_needed})
      allow_refusal([&] { check_words(table_block(id, analysis)); });
    allow_refusal([&] { check_words(predictions_block(analysis, table)); });
    allow_refusal([&] {
      const Report report = full_report(analysis, ReportContext{});
      for (const Section& section : report.sections)
        for (const Block& block : section.blocks) std::visit(CheckBlock{}, block);
      deepest = Depth::report;
    });
  } catch (const std::exception& error) {
    std::fprintf(stderr, "%s\n", error.what());
    require(false, "only refusals are thrown");
  }
}

}  // namespace unply::fuzz

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size);
extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  unply::fuzz::run(data, size);
  return 0;
}
