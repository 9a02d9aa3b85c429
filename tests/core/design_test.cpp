// From a table and a model to rows of numbers.
#include "core/design/design.hpp"

#include <boost/multiprecision/cpp_bin_float.hpp>
#include <cmath>

#include "core/base/error.hpp"
#include "core/base/random.hpp"
#include "core/base/tolerance.hpp"
#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/reference.hpp"
#include "tests/support/tables.hpp"

using namespace unply;
using namespace unply::test;

namespace {

using Names = std::vector<std::string>;
using Exact = boost::multiprecision::cpp_bin_float_100;

Model model_of(const std::string& response, const Names& terms = {}) {
  Model model;
  model.response = response;
  model.terms = terms;
  return model;
}

/// The whole design, column by column; the response last.
struct Filled {
  std::size_t rows;
  std::vector<double> high, low;
  double operator()(std::size_t row, std::size_t column) const { return high[column * rows + row]; }
  Exact exact(std::size_t row, std::size_t column) const {
    return Exact(high[column * rows + row]) + Exact(low[column * rows + row]);
  }
};

Filled filled(const RowSource& source) {
  const std::size_t size = source.rows() * (source.columns() + source.has_response());
  // Filled with rubbish before, so that an entry left out shows.
  Filled result{source.rows(), std::vector<double>(size, 77), std::vector<double>(size, 77)};
  source.fill(0, source.rows(), source.rows(), result.high.data(), result.low.data());
  return result;
}

bool same(const std::vector<double>& a, const std::vector<double>& b) {
  return a.size() == b.size() && std::equal(a.begin(), a.end(), b.begin(), [](double x, double y) {
           return x == y || (std::isnan(x) && std::isnan(y));
         });
}

double coefficient(const Design& design, const LeastSquaresFit& fit, const std::string& name) {
  const Names& names = design.layout().columns;
  const auto at = std::find(names.begin(), names.end(), name);
  REQUIRE(at != names.end());
  return fit.coefficients[at - names.begin()];
}

}  // namespace

TEST_CASE("plain columns, a category, a product and a power become columns of the design", "[design]") {
  const auto table = table_of({numbers("y", {1, 2, 4, 8, 16, 3}), numbers("a", {1, 2, 3, 4, 5, missing}),
                               texts("Clay", {"red", "white", "red", "blue", "white", "red"})});
  const Design design = make_design(table, model_of("y", {"a", "Clay", "a^2", "a*Clay"}));
  CHECK(design.rows() == 5);
  CHECK(design.has_response());
  CHECK(design.selection().incomplete == std::vector<std::size_t>{5});
  const Layout& layout = design.layout();
  CHECK(layout.response == "y");
  REQUIRE(layout.columns == Names{"a", "Clay: blue", "Clay: white", "a^2", "a*Clay: blue", "a*Clay: white"});
  CHECK(layout.term_of == std::vector<std::size_t>{0, 1, 1, 2, 3, 3});
  CHECK(layout.terms[0].kind == TermKind::plain);
  CHECK(layout.terms[1].kind == TermKind::category);
  CHECK(layout.terms[2].kind == TermKind::power);
  CHECK(layout.terms[3].kind == TermKind::product);
  CHECK(layout.terms[1].baseline == "red");
  CHECK(layout.terms[2].built_from == std::vector<std::size_t>{0});
  CHECK(layout.terms[3].built_from == std::vector<std::size_t>{0, 1});
  CHECK(filled(design).high == std::vector<double>{1,  2,  3, 4, 5, 0, 0, 0, 1, 0, 0, 1, 0, 0, 1, 1, 4, 9,
                                                   16, 25, 0, 0, 0, 4, 0, 0, 2, 0, 0, 5, 1, 2, 4, 8, 16});
  for (std::size_t j = 0; j < 6; ++j) CHECK(design.has_low(j) == (j == 3));
}

TEST_CASE("without terms every column but the response takes part; empty columns without a heading do not",
          "[design]") {
  const auto table = table_of({numbers("a", {1, 2, 3}), numbers(" ", {missing, missing, missing}),
                               numbers("y", {1, 5, 3}), numbers("b ", {4, 9, 6})});
  const Design design = make_design(table, model_of("Y"));
  CHECK(design.layout().columns == Names{"a", "b"});
  CHECK(design.layout().response == "y");
  CHECK(make_design(table, model_of("")).layout().columns == Names{"a", "y", "b"});
  CHECK_FALSE(make_design(table, model_of("")).has_response());
}

TEST_CASE("only the columns of the model are judged", "[design]") {
  auto columns = table_of(
      {numbers("y", {1, 5, 3, 4}), numbers("a", {1, 2, 3, 5}), texts("remarks", {"fine", nullptr, "x", "y"}),
       numbers("broken", {1, missing, 2, 3}), numbers("far", {1, HUGE_VAL, 2, 3}), numbers("", {1, 2, 3, 4}),
       numbers("twice", {1, 2, 3, 4}), numbers("twice", {1, 2, 3, 4})});
  columns->columns[3].error_rows = {1};
  columns->columns[3].first_error_code = 532;
  const Design design = make_design(columns, model_of("y", {"a"}));
  CHECK(design.rows() == 4);
}

TEST_CASE("hidden rows are left out, and not judged, where the model asks for visible rows", "[design]") {
  auto table = table_of({numbers("y", {1, 5, 3, 4, 8}),
                         mixed("a", {1, 0, 3, 5, 6}, {nullptr, "n/a", nullptr, nullptr, nullptr}),
                         numbers("b", {1, 7, HUGE_VAL, 4, 2})});
  table->hidden = {0, 1, 1, 0, 0};
  Model model = model_of("y");
  CHECK_THROWS_AS(make_design(table, model), Error);
  model.visible_rows_only = true;
  const Design design = make_design(table, model);
  CHECK(design.selection().hidden_left_out == 2);
  CHECK(filled(design).high == std::vector<double>{1, 5, 6, 1, 4, 2, 1, 4, 8});
}

TEST_CASE("powers are exact to 1e-30 of themselves, up to the tenth of Filip's x", "[design][published]") {
  // Data: NIST StRD Filip (tests/reference/nist_filip.csv). Judge: 100-digit arithmetic. Bound: nine products
  // of relative error 5 u^2 each, 45 * 2^-106 = 6e-31 (core/base/double_double.hpp).
  const auto table = reference_table("nist_filip");
  for (const bool in_order : {true, false}) {
    Names terms;
    for (int k = 1; k <= 10; ++k) {
      const int power = in_order ? k : 11 - k;
      terms.push_back(power == 1 ? "x" : "x^" + std::to_string(power));
    }
    const Design design = make_design(table, model_of("y", terms));
    const Filled all = filled(design);
    Exact worst = 0;
    for (std::size_t i = 0; i < all.rows; ++i) {
      const Exact x = table->columns[1].numbers[i];
      for (int k = 1; k <= 10; ++k) {
        const Exact exact = pow(x, in_order ? k : 11 - k);
        worst = std::max(worst, Exact(abs((all.exact(i, static_cast<std::size_t>(k - 1)) - exact) / exact)));
      }
    }
    CHECK(worst <= 1e-30);
    CHECK(worst > 0);  // the tenth power does not fit into 106 bits
  }
}

TEST_CASE("every entry of a random design is the product that its name says", "[design][property]") {
  // Judge: 100-digit arithmetic. Bound: at most six products and seven exact differences, 6 * 5 u^2 < 1e-30.
  for (const std::uint64_t seed : {301u, 302u, 303u, 304u, 305u, 306u}) {
    CAPTURE(seed);
    Random random(seed);
    const std::size_t n = 700;  // more than two of the chunks that fill works in
    std::vector<double> values[3];
    std::vector<const char*> c;
    for (std::size_t i = 0; i < n; ++i) {
      for (auto& v : values)
        v.push_back(random.below(50) == 0 && seed % 2 ? missing : random.normal() * 7 + 3);
      c.push_back(random.below(40) == 0 ? nullptr : random.below(3) ? "u" : random.below(2) ? "v" : "w");
    }
    auto table =
        table_of({numbers("p", values[0]), numbers("q", values[1]), numbers("r", values[2]), texts("c", c)});
    table->hidden.assign(n, 0);
    for (std::size_t i = 0; i < n; i += 11) table->hidden[i] = 1;
    Model model = model_of("", {"p", "q*p", "q", "p^3*q^2*r", "p^2", "c", "p*c", "q^2", "r^2*q*c", "p*q*r"});
    model.centre = random.below(2) == 0;
    model.visible_rows_only = random.below(2) == 0;
    CAPTURE(model.centre, model.visible_rows_only);
    const Design design = make_design(table, model);
    const Filled all = filled(design);
    REQUIRE(design.layout().columns.size() == 13);
    const std::vector<std::vector<int>> powers{{1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {3, 2, 1}, {2, 0, 0},
                                               {0, 0, 0}, {0, 0, 0}, {1, 0, 0}, {1, 0, 0}, {0, 2, 0},
                                               {0, 1, 2}, {0, 1, 2}, {1, 1, 1}};
    const std::string names[] = {"p", "q", "r"};
    Exact worst = 0;
    for (std::size_t i = 0; i < all.rows; ++i) {
      const std::size_t row = design.selection().row(i);
      for (std::size_t j = 0; j < 13; ++j) {
        Exact expected = 1;
        for (std::size_t v = 0; v < 3; ++v)
          expected *= pow(Exact(values[v][row]) - Exact(design.centre_of(names[v])), powers[j][v]);
        const std::string& column = design.layout().columns[j];
        const std::size_t level = column.find("c: ");
        if (level != std::string::npos && column.substr(level + 3) != c[row]) expected = 0;
        const Exact error = abs(all.exact(i, j) - expected);
        worst = std::max(worst, expected == 0 ? error : Exact(error / abs(expected)));
        if (!design.has_low(j)) CHECK(all.low[j * all.rows + i] == 0);
        CHECK(std::abs(all.low[j * all.rows + i]) <= std::ldexp(std::abs(all(i, j)), -53));
      }
    }
    CHECK(worst <= 1e-30);

    // Any part of the rows, at any stride, is the same part of the whole; without low parts the high ones are
    // the same.
    for (int part = 0; part < 20; ++part) {
      const std::size_t first = random.below(all.rows), count = random.below(all.rows - first + 1);
      const std::size_t stride = count + random.below(5);
      std::vector<double> high(13 * stride), low(13 * stride);
      design.fill(first, count, stride, high.data(), low.data());
      bool equal = true;
      for (std::size_t j = 0; j < 13; ++j) {
        for (std::size_t i = 0; i < count; ++i) {
          equal = equal && high[j * stride + i] == all(first + i, j);
          equal = equal && low[j * stride + i] == all.low[j * all.rows + first + i];
        }
      }
      CHECK(equal);
    }
  }
}

// -- what a design tells its reader

namespace {

std::vector<std::string> notes_of(const Design& design) {
  std::vector<std::string> result;
  const auto joined = [](const Names& names) {
    std::string text;
    for (const std::string& name : names) text += (text.empty() ? "" : ",") + name;
    return text;
  };
  for (const DesignNote& note : design.notes()) {
    switch (note.id) {
      case DesignNoteId::lower_term_missing:
        result.push_back("lower " + note.facts.text(FactId::term) + ": " +
                         joined(note.facts.list(FactId::terms)));
        break;
      case DesignNoteId::rare_level:
        result.push_back("rare " + note.facts.text(FactId::column) + ": " +
                         joined(note.facts.list(FactId::levels)));
        break;
      case DesignNoteId::few_whole_values:
        result.push_back("few " + note.facts.text(FactId::column) + ": " +
                         std::to_string(static_cast<int>(note.facts.number(FactId::count))));
        break;
      case DesignNoteId::centred:
        result.push_back("centred " + joined(note.facts.list(FactId::columns)) + " for " +
                         joined(note.facts.list(FactId::terms)));
        break;
    }
  }
  return result;
}

}  // namespace

TEST_CASE("a product or power without its lower-order terms is noted", "[design]") {
  const auto table = table_of({numbers("a", {1.5, 2, 3, 4, 7}), numbers("b", {3, 1.5, 4, 1, 5}),
                               texts("c", {"u", "v", "u", "v", "u"})});
  CHECK(notes_of(make_design(table, model_of("", {"a", "b", "a*b", "a^2"}))).empty());
  CHECK(notes_of(make_design(table, model_of("", {"a*b", "a"}))) == Names{"lower a*b: b"});
  CHECK(notes_of(make_design(table, model_of("", {"a^3", "a*c"}))) ==
        Names{"lower a^3: a,a^2", "lower a*c: a,c"});
}

TEST_CASE("levels with a single row are noted", "[design]") {
  const auto table = table_of({texts("c", {"u", "v", "u", "w", "u", "x", "x"})});
  CHECK(notes_of(make_design(table, model_of(""))) == Names{"rare c: v,w"});
}

TEST_CASE("a column of few whole values is offered as a category, and stays a number", "[design]") {
  const auto notes_for = [](std::size_t rows, std::size_t distinct, double step, double start) {
    std::vector<double> values;
    for (std::size_t i = 0; i < rows; ++i) values.push_back(start + step * static_cast<double>(i % distinct));
    const Design design = make_design(table_of({numbers("shift", values)}), model_of(""));
    CHECK(design.categories().empty());
    return notes_of(design);
  };
  CHECK(notes_for(35, 7, 1, 0) == Names{"few shift: 7"});
  CHECK(notes_for(15, 3, 10, -10) == Names{"few shift: 3"});
  CHECK(notes_for(14, 3, 1, 0).empty());    // tolerance::rows_per_whole_value is 5
  CHECK(notes_for(40, 8, 1, 0).empty());    // tolerance::few_whole_values is 7
  CHECK(notes_for(40, 2, 1, 0).empty());    // an indicator column
  CHECK(notes_for(40, 4, 0.5, 0).empty());  // not whole
  CHECK(tolerance::few_whole_values == 7);
  CHECK(tolerance::rows_per_whole_value == 5);
}

// -- centring

TEST_CASE(
    "centring subtracts the mean over the used rows wherever the column stands, and only where it matters",
    "[design]") {
  const auto table = table_of({numbers("y", {1, 2, 4, 8, missing}), numbers("a", {1, 2, 3, 6, 100}),
                               numbers("b", {5, 5, 7, 7, 0}), numbers("z", {4, 1, 2, 9, 3})});
  Model model = model_of("y", {"a", "b", "z", "a*b"});
  CHECK(make_design(table, model).centre_of("a") == 0);
  model.centre = true;
  const Design design = make_design(table, model);
  CHECK(design.centre_of("a") == 3);
  CHECK(design.centre_of(" A ") == 3);
  CHECK(design.centre_of("b") == 6);
  CHECK(design.centre_of("z") == 0);
  CHECK(design.centre_of("y") == 0);
  CHECK(notes_of(design) == Names{"centred a,b for a*b"});
  CHECK(filled(design).high ==
        std::vector<double>{-2, -1, 0, 3, -1, -1, 1, 1, 4, 1, 2, 9, 2, 1, 0, 3, 1, 2, 4, 8});
  model.terms = {"a", "z"};
  CHECK(notes_of(make_design(table, model)).empty());
}

TEST_CASE("interaction of income and education: the published figures, raw, centred, and centred elsewhere",
          "[published]") {
  // Source: tests/reference/interaction_centring.txt (15 digits). Tolerance: 13 digits, the project's goal.
  const Figures figures = read_figures("interaction_centring");
  const auto raw = reference_table("duncan");
  auto shifted = reference_table("duncan");
  for (double& x : shifted->columns[shifted->find("income")].numbers) x -= 40;
  for (double& x : shifted->columns[shifted->find("education")].numbers) x -= 50;
  std::size_t compared = 0;
  for (const std::string variant : {"raw", "mean-centred", "centred at 40 and 50"}) {
    Model model = model_of("prestige", {"income", "education", "income*education"});
    model.centre = variant == "mean-centred";
    const Design design = make_design(variant == "centred at 40 and 50" ? shifted : raw, model);
    const LeastSquaresFit fit = fit_least_squares(design, true);
    const auto tests = coefficient_tests(fit, fit.standard_errors, 0.95);
    const CoefficientTest intercept = intercept_test(fit, fit.intercept_standard_error, 0.95);
    for (const auto& [path, printed] : figures) {
      const std::string start = "recomputed | " + variant + " | ";
      if (path.compare(0, start.size(), start) != 0) continue;
      CAPTURE(path, printed);
      const std::string rest = path.substr(start.size());
      const std::size_t bar = rest.find(" | ");
      const std::string what = rest.substr(0, bar),
                        name = bar == std::string::npos ? "" : rest.substr(bar + 3);
      const auto at = std::find(model.terms.begin(), model.terms.end(), name) - model.terms.begin();
      const CoefficientTest& test =
          name == "1" || name.empty() ? intercept : tests[static_cast<std::size_t>(at)];
      double value = 0;
      if (what == "estimates")
        value = test.estimate;
      else if (what == "standard_errors")
        value = test.standard_error;
      else if (what == "t")
        value = test.t;
      else if (what == "p_two_sided")
        value = test.p;
      else if (what == "vif")
        value = fit.variance_inflation[at];
      else if (what == "s")
        value = fit.residual_sd;
      else if (what == "F")
        value = fit_quality(fit).f;
      else if (what == "adjusted_r_squared")
        value = fit_quality(fit).adjusted_r_squared;
      else
        continue;
      ++compared;
      // p-values lose the digits of t times the slope of the tail: at t = 18, two.
      CHECK(matching_digits(value, std::stod(printed)) >= (what == "p_two_sided" ? 11 : 13));
    }
  }
  CHECK(compared == 3 * (4 * 4 + 3 + 3));
}

TEST_CASE(
    "C1, C2: centring a factor leaves the product's row and moves the slopes to where the other is zero",
    "[property]") {
  for (const std::uint64_t seed : {31u, 32u, 33u, 34u}) {
    CAPTURE(seed);
    Random random(seed);
    std::vector<double> x1, x2, y;
    for (int i = 0; i < 50; ++i) {
      // Multiples of 1/8, so that shifting them rounds nothing.
      x1.push_back(std::round(8 * (20 + 3 * random.normal())) / 8);
      x2.push_back(std::round(8 * (5 + x1.back() / 4 + random.normal())) / 8);
      y.push_back(x1.back() - x2.back() + x1.back() * x2.back() / 10 + random.normal());
    }
    const double c1 = 19.5, c2 = 10.25;
    std::vector<double> a = x1, b = x2;
    for (double& v : a) v -= c1;
    for (double& v : b) v -= c2;
    const auto table =
        table_of({numbers("y", y), numbers("x1", x1), numbers("x2", x2), numbers("a", a), numbers("b", b)});
    const auto fit_of = [&](const Names& terms, bool centre) {
      Model model = model_of("y", terms);
      model.centre = centre;
      const Design design = make_design(table, model);
      return fit_least_squares(design, true);
    };
    const LeastSquaresFit raw = fit_of({"x1", "x2", "x1*x2"}, false);
    // Tolerance: 11 digits; VIFs of several hundred amplify the rounding of what is compared.
    for (const LeastSquaresFit& moved : {fit_of({"a", "b", "a*b"}, false), fit_of({"a", "x2", "a*x2"}, false),
                                         fit_of({"x1", "x2", "x1*x2"}, true)}) {
      CHECK(matching_digits(moved.coefficients[2], raw.coefficients[2]) >= 11);
      CHECK(matching_digits(moved.standard_errors[2], raw.standard_errors[2]) >= 11);
      CHECK(matching_digits(moved.unexplained_share, raw.unexplained_share) >= 11);
    }
    const LeastSquaresFit both = fit_of({"a", "b", "a*b"}, false);
    CHECK(matching_digits(both.coefficients[0], raw.coefficients[0] + raw.coefficients[2] * c2) >= 10);
    CHECK(matching_digits(both.coefficients[1], raw.coefficients[1] + raw.coefficients[2] * c1) >= 10);
    // The model's own centring is the same with the means.
    Model model = model_of("y", {"x1", "x2", "x1*x2"});
    model.centre = true;
    const Design centred = make_design(table, model);
    const LeastSquaresFit fit = fit_least_squares(centred, true);
    CHECK(matching_digits(coefficient(centred, fit, "x1"),
                          raw.coefficients[0] + raw.coefficients[2] * centred.centre_of("x2")) >= 10);
    CHECK(matching_digits(coefficient(centred, fit, "x2"),
                          raw.coefficients[1] + raw.coefficients[2] * centred.centre_of("x1")) >= 10);
  }
}

TEST_CASE("C3: shifting x leaves the row of the highest power", "[property]") {
  for (const std::uint64_t seed : {41u, 42u, 43u}) {
    CAPTURE(seed);
    Random random(seed);
    std::vector<double> x, y;
    for (int i = 0; i < 40; ++i) {
      x.push_back(10 + random.normal());
      y.push_back(std::pow(x.back() - 9, 3) + random.normal());
    }
    Model model = model_of("y", {"x", "x^2", "x^3"});
    const auto table = table_of({numbers("y", y), numbers("x", x)});
    const LeastSquaresFit raw = fit_least_squares(make_design(table, model), true);
    model.centre = true;
    const LeastSquaresFit centred = fit_least_squares(make_design(table, model), true);
    // Tolerance: the raw cubic has VIFs near 1e6; 11 digits are what is left of 16 times a margin in doubled
    // precision.
    CHECK(matching_digits(centred.coefficients[2], raw.coefficients[2]) >= 11);
    CHECK(matching_digits(centred.standard_errors[2], raw.standard_errors[2]) >= 11);
    CHECK(matching_digits(centred.unexplained_share, raw.unexplained_share) >= 11);
  }
}

TEST_CASE("C4: after centring, x and its square are correlated by the skewness alone", "[property]") {
  for (const std::uint64_t seed : {51u, 52u, 53u}) {
    CAPTURE(seed);
    Random random(seed);
    std::vector<double> x;
    for (int i = 0; i < 60; ++i) x.push_back(4 + std::exp(random.normal()));
    double mean = 0, m2 = 0, m3 = 0, m4 = 0;
    for (const double v : x) mean += v / 60;
    for (const double v : x) {
      m2 += std::pow(v - mean, 2) / 60;
      m3 += std::pow(v - mean, 3) / 60;
      m4 += std::pow(v - mean, 4) / 60;
    }
    const double skewness = m3 / std::pow(m2, 1.5), kurtosis = m4 / (m2 * m2);
    Model model = model_of("", {"x", "x^2"});
    model.centre = true;
    const LeastSquaresFit fit = fit_least_squares(make_design(table_of({numbers("x", x)}), model), true);
    CHECK(matching_digits(fit.correlation(0, 1), skewness / std::sqrt(kurtosis - 1)) >= 12);
  }
  Model model = model_of("", {"x", "x^2"});
  model.centre = true;
  const LeastSquaresFit symmetric =
      fit_least_squares(make_design(table_of({numbers("x", {1, 2, 4, 6, 7})}), model), true);
  CHECK(std::abs(symmetric.correlation(0, 1)) <= 1e-16);
}

// -- new rows

TEST_CASE("new rows are coded and centred as the rows of the fit", "[design]") {
  const auto table =
      table_of({numbers("y", {1, 2, 4, 8, 3}), numbers("a", {1, 2, 3, 6, 8}),
                texts("Clay", {"red", "white", "red", "blue", "red"}), numbers("shift", {1, 2, 1, 2, 3})});
  Model model = model_of("y", {"a", "Clay", "a*Clay", "a^2", "shift"});
  model.categories = {"shift"};
  model.centre = true;
  const Design design = make_design(table, model);
  // Other order, other rows, no response, an unused column of anything.
  auto other = table_of(
      {numbers("shift", {3, 1, 2, missing, 1}), texts(" clay", {"White ", "red", "blue", "red", "  "}),
       mixed("remarks", {0, missing, missing, missing, missing}, {"?", nullptr, nullptr, nullptr, nullptr}),
       numbers("A", {6, 3, missing, 1, 2})});
  const auto rows = design.of_new_rows(other);
  CHECK(rows->rows() == 5);
  CHECK(rows->columns() == design.columns());
  CHECK_FALSE(rows->has_response());
  REQUIRE(design.layout().columns == Names{"a", "Clay: blue", "Clay: white", "a*Clay: blue", "a*Clay: white",
                                           "a^2", "shift: 2", "shift: 3"});
  const Filled all = filled(*rows);
  CHECK(same(all.high, {2, -1, missing, missing, missing, 0, 0, missing, missing, missing,
                        1, 0,  missing, missing, missing, 0, 0, missing, missing, missing,
                        2, 0,  missing, missing, missing, 4, 1, missing, missing, missing,
                        0, 0,  missing, missing, missing, 1, 0, missing, missing, missing}));
  // The table itself, as new rows, gives the design again.
  const Filled again = filled(*design.of_new_rows(table)), first = filled(design);
  CHECK(std::equal(again.high.begin(), again.high.end(), first.high.begin()));
  CHECK(std::equal(again.low.begin(), again.low.end(), first.low.begin()));
}

TEST_CASE("new rows that do not fit the model are refused", "[design][error]") {
  const auto table = table_of({numbers("y", {1, 2, 4, 8, 3}), numbers("a", {1, 2, 3, 6, 8}),
                               texts("Clay", {"red", "white", "red", "blue", "red"})});
  const Design design = make_design(table, model_of("y", {"a", "Clay", "a^2"}));
  const auto code_for = [&](std::vector<Column> columns) -> std::pair<ErrorCode, Facts> {
    try {
      design.of_new_rows(table_of(std::move(columns)));
    } catch (const Error& error) { return {error.code, error.facts}; }
    FAIL("taken");
    return {};
  };
  const auto [unknown, level] = code_for({numbers("a", {1}), texts("Clay", {"green"})});
  CHECK(unknown == ErrorCode::unknown_level);
  CHECK(level.text(FactId::column) == "Clay");
  CHECK(level.text(FactId::name) == "green");
  CHECK(level.list(FactId::allowed) == Names{"red", "blue", "white"});
  CHECK(code_for({numbers("a", {1})}).first == ErrorCode::unknown_column);
  CHECK(code_for({texts("a", {"one"}), texts("Clay", {"red"})}).first == ErrorCode::text_among_numbers);
  CHECK(code_for({numbers("a", {HUGE_VAL}), texts("Clay", {"red"})}).first == ErrorCode::infinite_value);
  CHECK(code_for({numbers("a", {1e200}), texts("Clay", {"red"})}).first == ErrorCode::value_out_of_range);
  Column broken = numbers("a", {missing});
  broken.error_rows = {0};
  CHECK(code_for({broken, texts("Clay", {"red"})}).first == ErrorCode::error_cells);
}

// -- refusals, one a code

namespace {

struct Refusal {
  const char* what;
  ErrorCode code;
  std::shared_ptr<Table> table;
  Model model;
  Facts facts;  // all that must come with it, and no others
};

Model with(Model model, void (*change)(Model&)) {
  change(model);
  return model;
}

Column with_errors(Column column, std::vector<std::size_t> rows, int code) {
  column.error_rows = std::move(rows);
  column.first_error_code = code;
  return column;
}

std::shared_ptr<Table> many_levels(std::size_t levels, std::size_t rows) {
  std::vector<std::string> names;
  std::vector<const char*> a, b;
  for (std::size_t i = 0; i < rows; ++i) names.push_back("level " + std::to_string(i % levels));
  for (std::size_t i = 0; i < rows; ++i) {
    a.push_back(names[i].c_str());
    b.push_back(names[(i * 7 + i / levels) % rows].c_str());
  }
  return table_of({texts("a", a), texts("b", b)});
}

std::string shown(const FactValue& value) {
  if (const auto* number = std::get_if<double>(&value)) return std::to_string(*number);
  if (const auto* text = std::get_if<std::string>(&value)) return "\"" + *text + "\"";
  std::string list;
  for (const std::string& part : std::get<Names>(value)) list += "[" + part + "]";
  return list;
}

}  // namespace

TEST_CASE("every reason for which a design is refused comes with its facts", "[design][error]") {
  const std::vector<double> y{1, 2, 4, 8, 16, 3}, a{2, 7, 1, 8, 2, 8};
  const Column Y = numbers("y", y), A = numbers("a", a);
  const std::vector<const char*> none(6, nullptr);
  std::vector<const char*> words(6, nullptr), all_words{"p", "p", "q", "q", "p", "q"};
  words[1] = "n/a";
  words[4] = "?";
  const std::vector<double> zeros(6, 0), empty(6, missing);
  Names six_addresses{"B2", "B3", "B4", "B5", "B6"};

  const std::vector<Refusal> refusals{
      {"a table without rows",
       ErrorCode::no_data_rows,
       table_of({numbers("y", {}), numbers("a", {})}),
       model_of("y"),
       {{FactId::range, "A1"}}},
      {"a column without a heading",
       ErrorCode::missing_heading,
       table_of({Y, numbers(" ", a)}),
       model_of("y"),
       {{FactId::address, "B1"}}},
      {"a doubled heading, all columns used",
       ErrorCode::duplicate_heading,
       table_of({Y, A, numbers("a ", y)}),
       model_of("y"),
       {{FactId::name, "a"}, {FactId::addresses, Names{"B1", "C1"}}}},
      {"a doubled heading, named in a term",
       ErrorCode::duplicate_heading,
       table_of({Y, A, A}),
       model_of("y", {"A^2"}),
       {{FactId::name, "a"}, {FactId::addresses, Names{"B1", "C1"}}}},
      {"a doubled response",
       ErrorCode::duplicate_heading,
       table_of({Y, A, Y}),
       model_of("y", {"a"}),
       {{FactId::name, "y"}, {FactId::addresses, Names{"A1", "C1"}}}},
      {"headings alike but for case",
       ErrorCode::ambiguous_column,
       table_of({Y, numbers("Ab", a), numbers("aB", y)}),
       model_of("y", {"ab"}),
       {{FactId::name, "ab"}, {FactId::addresses, Names{"B1", "C1"}}}},
      {"error values",
       ErrorCode::error_cells,
       table_of({Y, with_errors(A, {0, 1, 2, 3, 4, 5}, 532)}),
       model_of("y"),
       {{FactId::column, "a"},
        {FactId::addresses, six_addresses},
        {FactId::count, 6.0},
        {FactId::code, 532.0}}},
      {"text among numbers",
       ErrorCode::text_among_numbers,
       table_of({Y, mixed("a", a, words)}),
       model_of("y"),
       {{FactId::column, "a"},
        {FactId::addresses, Names{"B3", "B6"}},
        {FactId::count, 2.0},
        {FactId::text, "n/a"}}},
      {"text among the numbers of the response",
       ErrorCode::text_among_numbers,
       table_of({mixed("y", y, words), A}),
       model_of("y"),
       {{FactId::column, "y"},
        {FactId::addresses, Names{"A3", "A6"}},
        {FactId::count, 2.0},
        {FactId::text, "n/a"}}},
      {"an infinite value",
       ErrorCode::infinite_value,
       table_of({Y, numbers("a", {1, 2, -HUGE_VAL, 4, 5, 6})}),
       model_of("y"),
       {{FactId::column, "a"}, {FactId::addresses, Names{"B4"}}, {FactId::count, 1.0}}},
      {"a response that is not there",
       ErrorCode::unknown_column,
       table_of({Y, A}),
       model_of("yy"),
       {{FactId::name, "yy"}, {FactId::allowed, Names{"y", "a"}}}},
      {"a term that is not there",
       ErrorCode::unknown_column,
       table_of({Y, A}),
       model_of("y", {"b"}),
       {{FactId::name, "b"}, {FactId::allowed, Names{"y", "a"}}}},
      {"a category that is not there",
       ErrorCode::unknown_column,
       table_of({Y, A}),
       with(model_of("y"), [](Model& m) { m.categories = {"Clay"}; }),
       {{FactId::name, "Clay"}, {FactId::allowed, Names{"y", "a"}}}},
      {"a term that cannot be read",
       ErrorCode::term_not_readable,
       table_of({Y, A}),
       model_of("y", {"a^a"}),
       {{FactId::term, "a^a"}, {FactId::position, 3.0}, {FactId::found, "a"}}},
      {"no terms", ErrorCode::no_terms, table_of({Y}), model_of("y"), {}},
      {"terms of blanks only", ErrorCode::no_terms, table_of({Y, A}), model_of("y", {" ", ""}), {}},
      {"the response among the terms",
       ErrorCode::response_among_terms,
       table_of({Y, A}),
       model_of("y", {"a", "a*y"}),
       {{FactId::response, "y"}, {FactId::term, "a*y"}}},
      {"a response of texts",
       ErrorCode::response_not_numeric,
       table_of({texts("y", all_words), A}),
       model_of("y"),
       {{FactId::response, "y"}, {FactId::text, "p"}, {FactId::address, "A2"}}},
      {"a response declared a category",
       ErrorCode::response_not_numeric,
       table_of({numbers("y", {missing, 2, 4, 8, 16, 3}), A}),
       with(model_of("y"), [](Model& m) { m.categories = {"y"}; }),
       {{FactId::response, "y"}, {FactId::text, "2"}, {FactId::address, "A3"}}},
      {"the same term twice",
       ErrorCode::duplicate_term,
       table_of({Y, A, numbers("b", y)}),
       model_of("y", {"a*b", "B*A"}),
       {{FactId::term, "b*a"}}},
      {"a power of a category",
       ErrorCode::category_power,
       table_of({Y, A, texts("c", all_words)}),
       model_of("y", {"a", "c*c*a"}),
       {{FactId::term, "c^2*a"}, {FactId::column, "c"}}},
      {"a baseline that is no level",
       ErrorCode::unknown_level,
       table_of({Y, texts("c", all_words)}),
       with(model_of("y"), [](Model& m) { m.baselines["c"] = "r"; }),
       {{FactId::column, "c"}, {FactId::name, "r"}, {FactId::allowed, Names{"p", "q"}}}},
      {"a category of one level",
       ErrorCode::one_level,
       table_of({Y, texts("c", {"p", "p", "p", "p", "p", "p"})}),
       model_of("y"),
       {{FactId::column, "c"}, {FactId::text, "p"}}},
      {"a level for nearly every row",
       ErrorCode::too_many_levels,
       table_of({Y, texts("c", {"p", "q", "r", "s", "t", "t"})}),
       model_of("y"),
       {{FactId::column, "c"}, {FactId::count, 5.0}, {FactId::rows, 6.0}}},
      {"no complete row",
       ErrorCode::no_complete_rows,
       table_of({Y, numbers("a", {1, missing, missing, missing, missing, missing}),
                 numbers("b", {missing, 1, 2, 3, 4, 5})}),
       model_of("y"),
       {{FactId::rows, 6.0}, {FactId::column, "a"}, {FactId::count, 5.0}, {FactId::rows_left_out, 0.0}}},
      {"one row",
       ErrorCode::too_few_rows,
       table_of({numbers("y", {1}), numbers("a", {1})}),
       model_of("y"),
       {{FactId::rows, 1.0}, {FactId::needed, 2.0}, {FactId::count, 2.0}}},
      {"a constant response",
       ErrorCode::response_constant,
       table_of({numbers("y", {2.5, 2.5, 2.5, 2.5, 2.5, 2.5}), A}),
       model_of("y"),
       {{FactId::response, "y"}, {FactId::value, "2.5"}}},
      {"constant predictors only",
       ErrorCode::all_constant,
       table_of({Y, numbers("a", zeros), numbers("b", {3, 3, 3, 3, 3, 3})}),
       model_of("y"),
       {{FactId::columns, Names{"a", "b"}}}},
      {"a product too large",
       ErrorCode::value_out_of_range,
       table_of({Y, numbers("a", {1, 2, 3, 4, 5, 1e200})}),
       model_of("y", {"a", "a^2"}),
       {{FactId::column, "a^2"}}},
      {"a product too small",
       ErrorCode::value_out_of_range,
       table_of({Y, numbers("a", {1e-200, 2e-200, 0, 0, 0, 0})}),
       model_of("y", {"a", "a^2"}),
       {{FactId::column, "a^2"}}},
      {"more columns than can be held",
       ErrorCode::too_many_columns,
       many_levels(60, 600),
       model_of("", {"a", "a*b", "b"}),
       {{FactId::count, 59.0 + 59 * 59 + 1}, {FactId::allowed, "2000"}}},
  };
  for (const Refusal& refusal : refusals) {
    CAPTURE(refusal.what);
    try {
      make_design(refusal.table, refusal.model);
      FAIL_CHECK("taken");
    } catch (const Error& error) {
      CHECK(error.code == refusal.code);
      Names expected, found;
      for (const auto& [id, value] : refusal.facts.all())
        expected.push_back(std::to_string(static_cast<int>(id)) + shown(value));
      for (const auto& [id, value] : error.facts.all())
        found.push_back(std::to_string(static_cast<int>(id)) + shown(value));
      CHECK(found == expected);
    }
  }
}

TEST_CASE("what looks like a refusal but is an answer", "[design]") {
  const std::vector<double> y{1, 2, 4, 8, 16, 3}, a{2, 7, 1, 8, 2, 8};
  // Without an intercept a constant column is an intercept of the user's own, and a constant response has
  // spread about 0.
  Model model = model_of("y");
  model.intercept = false;
  CHECK(make_design(table_of({numbers("y", {2, 2, 2, 2, 2, 2}), numbers("one", {1, 1, 1, 1, 1, 1})}), model)
            .rows() == 6);
  // One constant column among others is a dependency for the fit to report.
  CHECK(make_design(table_of({numbers("y", y), numbers("a", a), numbers("k", {5, 5, 5, 5, 5, 5})}),
                    model_of("y"))
            .columns() == 2);
  // Texts and numbers mixed, in a column declared a category.
  model = model_of("y");
  model.categories = {"c"};
  CHECK(make_design(table_of({numbers("y", y), mixed("c", {1, 1, 2, 2, 0, 0},
                                                     {nullptr, nullptr, nullptr, nullptr, "n/a", "n/a"})}),
                    model)
            .layout()
            .columns == Names{"c: 2", "c: n/a"});
  // Blanks in a column of numbers are empty cells.
  CHECK(make_design(table_of({numbers("y", y), mixed("a", a, {nullptr, " ", nullptr, nullptr, nullptr, ""})}),
                    model_of("y"))
            .selection()
            .incomplete == std::vector<std::size_t>{1, 5});
  // Every second row a level of its own: tolerance::largest_level_share is 0.8.
  CHECK(make_design(many_levels(300, 600), model_of("", {"a"})).columns() == 299);
  CHECK(tolerance::largest_level_share == 0.8);
  // Large and small numbers that are not multiplied.
  CHECK(make_design(table_of({numbers("y", y), numbers("a", {1e300, 2e300, 0, 1, 2, 3}),
                              numbers("b", {1e-300, 0, 0, 0, 0, 2})}),
                    model_of("y"))
            .columns() == 2);
  // Products within the range although the largest and smallest factors would leave it.
  CHECK(make_design(table_of({numbers("y", y), numbers("a", {1e200, 1, 1, 2, 3, 1}),
                              numbers("b", {1e-200, 1, 1, 1, 1, 1e200})}),
                    model_of("y", {"a*b"}))
            .columns() == 1);
}

TEST_CASE("five hundred levels over many rows are a design like any other", "[design]") {
  const auto table = many_levels(500, 5000);
  const Design design = make_design(table, model_of("", {"a"}));
  REQUIRE(design.columns() == 499);
  const Filled all = filled(design);
  for (std::size_t i = 0; i < 5000; i += 7) {
    double ones = 0;
    for (std::size_t j = 0; j < 499; ++j) ones += all(i, j);
    const std::string& text = table->columns[0].texts[static_cast<std::size_t>(table->columns[0].codes[i])];
    CHECK(ones == (text == design.layout().terms[0].baseline ? 0 : 1));
  }
}
// -- through the fit

TEST_CASE("Filip and the Wamplers come out of a table with x and y alone to 13 digits", "[published]") {
  // Source: NIST StRD linear regression (tests/reference/nist_*.txt, recomputed to 30 digits).
  for (const auto& [name, degree] : std::map<std::string, int>{{"filip", 10},
                                                               {"wampler1", 5},
                                                               {"wampler2", 5},
                                                               {"wampler3", 5},
                                                               {"wampler4", 5},
                                                               {"wampler5", 5}}) {
    Names terms{"x"};
    for (int k = 2; k <= degree; ++k) terms.push_back("x^" + std::to_string(k));
    const Design design = make_design(reference_table("nist_" + name), model_of("y", terms));
    const LeastSquaresFit fit = fit_least_squares(design, true);
    const Figures figures = read_figures("nist_" + name);
    const auto figure = [&](const std::string& what, const std::string& term) {
      return std::stod(figures.at("recomputed | " + what + " | " + term));
    };
    CHECK(matching_digits(fit.intercept_estimate, figure("estimates", "1")) >= 13);
    for (std::size_t j = 0; j < terms.size(); ++j) {
      CAPTURE(name, terms[j]);
      const auto k = static_cast<Eigen::Index>(j);
      CHECK(matching_digits(fit.coefficients[k], figure("estimates", terms[j])) >= 13);
      const double sd = figure("standard_deviations", terms[j]);
      if (sd != 0) CHECK(matching_digits(fit.standard_errors[k], sd) >= 13);
    }
  }
}
