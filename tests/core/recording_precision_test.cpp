#include "core/diagnose/recording_precision.hpp"

#include <cmath>
#include <memory>
#include <numeric>

#include "core/base/random.hpp"
#include "core/base/tolerance.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/reference.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

constexpr std::uint64_t seed = 20260208;

std::shared_ptr<Table> table_of(const std::vector<std::pair<std::string, VectorXd>>& columns) {
  auto table = std::make_shared<Table>();
  for (const auto& [name, numbers] : columns) {
    Column column;
    column.name = name;
    column.numbers.assign(numbers.begin(), numbers.end());
    table->columns.push_back(column);
    table->rows = column.numbers.size();
  }
  return table;
}

VectorXd rounded(const VectorXd& values, double unit) { return (values / unit).array().round() * unit; }

VectorXd draws(Random& random, Index n) {
  VectorXd values(n);
  for (double& value : values) value = random.normal();
  return values;
}

double unit_of(std::initializer_list<double> values) {
  PrintedDigits digits;
  for (const double value : values) digits.read(value);
  return recorded_unit(digits);
}

struct Analysed {
  Design design;
  LeastSquaresFit fit;
};

Analysed analyse(std::shared_ptr<const Table> table, const Model& model) {
  Design design = make_design(std::move(table), model);
  LeastSquaresFit fit = fit_least_squares(design, model.intercept);
  return {std::move(design), std::move(fit)};
}

/// Temperature to 0.1, a second one that follows it, a category, a count, a response to 0.01.
std::shared_ptr<Table> kiln_like(Random& random, Index n, double unit) {
  const VectorXd a = rounded(draws(random, n).array() + 5, unit),
                 b = rounded(a + 0.7 * draws(random, n), unit);
  VectorXd count(n), group(n);
  for (Index i = 0; i < n; ++i) {
    count[i] = static_cast<double>(random.below(40));
    group[i] = static_cast<double>(random.below(3));
  }
  const VectorXd y =
      rounded(1 + a.array() - 0.5 * b.array() + 0.2 * a.array() * b.array() + 0.1 * count.array() +
                  (group.array() == 1).cast<double>() + 0.5 * draws(random, n).array(),
              0.01);
  return table_of({{"A", a}, {"B", b}, {"Count", count}, {"Group", group}, {"y", y}});
}

}  // namespace

TEST_CASE("the last recorded digit is read from the numbers themselves", "[recording]") {
  CHECK(unit_of({12.3, 12, 7.1}) == Approx(0.1));
  CHECK(unit_of({0.125, 3}) == Approx(0.001));
  CHECK(unit_of({1, 2, 3, 1999}) == 0);     // counts, years
  CHECK(unit_of({0, 1}) == 0);              // codes
  CHECK(unit_of({234289, 259426}) == 1);    // an amount in rounded units
  CHECK(unit_of({1.0 / 3, 2.0 / 3}) == 0);  // computed
  CHECK(tolerance::whole_numbers_exact == 1e4);
  CHECK(unit_of({9999}) == 0);
  CHECK(unit_of({10000}) == 1);
}

TEST_CASE("refits and the closed form agree where moves are small", "[recording]") {
  // 4,000 refits leave 1 / sqrt(8000) = 1.1 % of uncertainty; four of these, and what the second order adds
  CAPTURE(seed);
  const std::vector<std::vector<std::string>> models = {
      {"A", "B"},        {"A", "B", "Count", "Group"},   {"A", "B", "A*B"},
      {"A", "A^2", "B"}, {"A", "B", "Group", "A*Group"}, {"A*B"}};
  for (const bool intercept : {true, false}) {
    for (const bool centre : {false, true}) {
      for (const auto& terms : models) {
        CAPTURE(intercept, centre, terms);
        Random random(seed);
        Model model;
        model.response = "y";
        model.terms = terms;
        model.categories = {"Group"};
        model.intercept = intercept;
        model.centre = centre;
        const Analysed analysed = analyse(kiln_like(random, 60, 0.1), model);
        const RecordingPrecision refits = recording_by_refits(analysed.design, analysed.fit, seed, 4000);
        const RecordingPrecision closed = recording_in_closed_form(analysed.design, analysed.fit);
        CHECK(refits.refits == 4000);
        CHECK(closed.refits == 0);
        CHECK(refits.response_unit == Approx(0.01));
        REQUIRE(refits.unit.size() == analysed.fit.columns);
        CHECK(refits.unit[0] == (terms[0] == "A" ? Approx(0.1) : Approx(0)));
        for (Index j = 0; j < static_cast<Index>(analysed.fit.columns); ++j) {
          CAPTURE(j);
          CHECK(refits.movement[j] > 0);
          CHECK(closed.movement[j] == Approx(refits.movement[j]).epsilon(0.06));
          CHECK(closed.against_standard_error[j] ==
                Approx(closed.movement[j] / analysed.fit.standard_errors[j]));
        }
      }
    }
  }
}

TEST_CASE("the movement of one slope is the textbook figure", "[recording]") {
  // y exact, x rounded to u: slope moves by b u / sqrt(12 Sxx) plus e'dx / Sxx
  CAPTURE(seed);
  Random random(seed);
  const VectorXd x = rounded(draws(random, 50), 0.1);
  VectorXd y = 3 * x + 0.2 * draws(random, 50);  // not recorded to any digit: exact
  const Analysed analysed = analyse(table_of({{"x", x}, {"y", y}}), [] {
    Model model;
    model.response = "y";
    return model;
  }());
  const RecordingPrecision closed = recording_in_closed_form(analysed.design, analysed.fit);
  CHECK(closed.response_unit == 0);
  const double sxx = 49 * analysed.fit.sd[0] * analysed.fit.sd[0], b = analysed.fit.coefficients[0],
               u2 = 0.01 / 12;
  const double rss = analysed.fit.residual_sd * analysed.fit.residual_sd * 48;
  const double variance = u2 * (b * b / sxx + rss / sxx / sxx), pull = 48 * u2 * b / sxx;
  CHECK(closed.movement[0] == Approx(std::sqrt(variance + pull * pull)).epsilon(1e-9));
}

TEST_CASE("coarse recording pulls towards zero, however many rows there are", "[recording]") {
  // whole units of a column whose standard deviation is one and a half: attenuation by 1 / 12 / 2.25 of the
  // slope
  CAPTURE(seed);
  Random random(seed);
  const VectorXd x = rounded(1.5 * draws(random, 20000), 1);
  const VectorXd y = 2 * x + draws(random, 20000);
  Model model;
  model.response = "y";
  const Analysed analysed = analyse(table_of({{"x", x.array() + 100000}, {"y", y}}), model);
  const RecordingPrecision closed = recording_in_closed_form(analysed.design, analysed.fit);
  REQUIRE(closed.unit[0] == 1);
  const RecordingPrecision refits = recording_by_refits(analysed.design, analysed.fit, seed, 30);
  const double b = analysed.fit.coefficients[0], variance = analysed.fit.sd[0] * analysed.fit.sd[0];
  CHECK(refits.movement[0] == Approx(b * (1 - variance / (variance + 1.0 / 12))).epsilon(0.02));
  CHECK(closed.movement[0] == Approx(refits.movement[0]).epsilon(0.06));  // next order: (u^2 / 12 var)^2
  CHECK(closed.against_standard_error[0] > 1);
}

TEST_CASE("under strong collinearity recorded digits move coefficients by more than their standard error",
          "[recording]") {
  CAPTURE(seed);
  Random random(seed);
  const VectorXd a = rounded(draws(random, 40), 0.1), b = rounded(a + 0.1 * draws(random, 40), 0.1);
  const VectorXd y = rounded(VectorXd(a + b + 0.02 * draws(random, 40)), 0.001);
  Model model;
  model.response = "y";
  const Analysed analysed = analyse(table_of({{"a", a}, {"b", b}, {"y", y}}), model);
  const RecordingPrecision recording = recording_precision(analysed.design, analysed.fit, seed);
  CHECK(recording.refits == tolerance::recording_refits);
  CHECK(recording.seed == seed);
  CHECK(recording.against_standard_error.minCoeff() > 1);
}

TEST_CASE("the same seed gives the same movement, another one another", "[recording]") {
  Random random(seed);
  Model model;
  model.response = "y";
  const Analysed analysed = analyse(kiln_like(random, 30, 0.1), model);
  const VectorXd first = recording_precision(analysed.design, analysed.fit, 1).movement;
  CHECK(recording_precision(analysed.design, analysed.fit, 1).movement == first);
  CHECK(recording_precision(analysed.design, analysed.fit, 2).movement != first);
}

TEST_CASE("exact columns do not move anything; no response, no movement", "[recording]") {
  Random random(seed);
  const VectorXd x = draws(random, 30), y = draws(random, 30);
  Model model;
  model.response = "y";
  Analysed analysed = analyse(table_of({{"x", x}, {"y", y}}), model);
  const RecordingPrecision exact = recording_precision(analysed.design, analysed.fit, seed);
  CHECK(exact.unit == std::vector<double>{0});
  CHECK(exact.movement[0] == 0);
  CHECK(exact.against_standard_error[0] == 0);
  CHECK(exact.refits == 0);
  analysed = analyse(table_of({{"x", rounded(x, 0.1)}}), Model{});
  const RecordingPrecision alone = recording_precision(analysed.design, analysed.fit, seed);
  CHECK(alone.unit[0] == Approx(0.1));
  CHECK(std::isnan(alone.movement[0]));
}

TEST_CASE("a dependency leaves the other coefficients' movement known, both ways", "[recording]") {
  CAPTURE(seed);
  Random random(seed);
  const VectorXd a = rounded(draws(random, 50), 0.1), b = rounded(draws(random, 50), 0.1),
                 c = rounded(draws(random, 50), 0.1);
  const VectorXd y = rounded(VectorXd(a + 2 * b - c + draws(random, 50)), 0.1);
  Model model;
  model.response = "y";
  const Analysed analysed =
      analyse(table_of({{"a", a}, {"b", b}, {"total", a + b}, {"c", c}, {"y", y}}), model);
  REQUIRE(analysed.fit.dependencies.size() == 1);
  const RecordingPrecision refits = recording_by_refits(analysed.design, analysed.fit, seed, 4000);
  const RecordingPrecision closed = recording_in_closed_form(analysed.design, analysed.fit);
  for (const Index j : {0, 1, 2}) {
    CHECK(std::isnan(refits.movement[j]));
    CHECK(std::isnan(closed.movement[j]));
  }
  CHECK(refits.movement[3] > 0);
  CHECK(closed.movement[3] == Approx(refits.movement[3]).epsilon(0.06));
}

TEST_CASE("large tables are not refitted", "[recording][tolerance]") {
  CHECK(tolerance::recording_refit_work == 1e6);
  CHECK(tolerance::recording_refits == 200);
  Random random(seed);
  Model model;
  model.response = "y";
  model.terms = {"A", "B"};  // (2 + 1)^2 = 9 a row
  const Analysed large = analyse(kiln_like(random, 111112, 0.1), model);
  CHECK(recording_precision(large.design, large.fit, seed).refits == 0);
}
