// The survey: two scales and their product. What centring changes, and what it does not.
#include <algorithm>
#include <array>
#include <cmath>

#include "core/base/random.hpp"
#include "sample-sheets/sample_book.hpp"

namespace unply::samples {
namespace {

constexpr std::uint64_t seed = 2028;
constexpr std::size_t people = 312;

// The truth behind the data, around the middle of both scales. Strain in points from 1 to 5.
constexpr double middle_workload = 3.1, middle_support = 3.4;
constexpr double per_workload = 0.45, per_support = -0.30, per_product = -0.25, per_year = 0.004;
constexpr double of_field = 0.20, of_remote = 0;
constexpr double scatter = 0.50;

struct Person {
  double workload = 0, support = 0, age = 0, strain = 0;
  std::string place;
};

double scale_point(double value, int steps) {  // mean of `steps` items from 1 to 5, written with one decimal
  return rounded(std::round(std::clamp(value, 1.0, 5.0) * steps) / steps, 1);
}

std::vector<Person> draw() {
  Random random(seed);
  std::vector<Person> result;
  for (std::size_t i = 0; i < people; ++i) {
    Person person;
    const double shared = random.normal();
    person.workload = scale_point(middle_workload + 0.75 * shared, 5);
    person.support = scale_point(middle_support - 0.25 * shared + 0.65 * random.normal(), 5);
    person.age = rounded(std::clamp(42 + 11 * random.normal(), 18.0, 66.0), 0);
    const double place = random.uniform();
    person.place = place < 0.45 ? "office" : place < 0.75 ? "field" : "remote";
    const double strain =
        2.9 + per_workload * (person.workload - middle_workload) +
        per_support * (person.support - middle_support) +
        per_product * (person.workload - middle_workload) * (person.support - middle_support) +
        per_year * (person.age - 42) + (person.place == "field" ? of_field : 0) +
        (person.place == "remote" ? of_remote : 0) + scatter * random.normal();
    person.strain = scale_point(strain, 10);
    result.push_back(person);
  }
  return result;
}

Predictors predictors(const Reals& workload, const Reals& support, const Reals& age, const Reals& field,
                      const Reals& remote) {
  Predictors x;
  x.add("Workload", workload).add("Support", support).add("Workload*Support", product(workload, support));
  x.add("Age_years", age).add("Place: field", field).add("Place: remote", remote);
  return x;
}

}  // namespace

std::string survey_workbook() {
  const std::vector<Person> drawn = draw();
  SampleBook book("Answers_given");
  std::vector<std::vector<Content>> rows;
  Reals workload, support, age, field, remote, strain;
  for (std::size_t i = 0; i < drawn.size(); ++i) {
    const Person& person = drawn[i];
    rows.push_back({static_cast<double>(i + 1), person.workload, person.support, person.age, person.place,
                    person.strain});
    workload.emplace_back(person.workload);
    support.emplace_back(person.support);
    age.emplace_back(person.age);
    field.emplace_back(person.place == "field" ? 1 : 0);
    remote.emplace_back(person.place == "remote" ? 1 : 0);
    strain.emplace_back(person.strain);
  }
  book.write_data({{"Person", Style::whole, 2.0},
                   {"Workload", Style::one_decimal, 2.4},
                   {"Support", Style::one_decimal, 2.4},
                   {"Age_years", Style::whole, 2.4},
                   {"Place", Style::words, 2.4},
                   {"Strain", Style::one_decimal, 2.4}},
                  rows, "Person_table", "Strain", "Strain_given");

  const Predictors as_given = predictors(workload, support, age, field, remote);
  const IndependentFit fit(as_given, strain);
  const IndependentFit centred_fit(predictors(centred(workload), centred(support), age, field, remote),
                                   strain);
  const Real level = Real(95) / 100;
  const std::string product_name = "Workload*Support";

  // -- the model
  book.write_title(book.model(), "Model: what is asked of the answers");
  book.write_lines(book.model(),
                   {"Two blocks of settings that differ in one line: are the two scales centred before "
                    "their product is formed?",
                    "The second is the one that the report made without a window reads."});
  const std::string terms = "Workload; Support; Workload*Support; Age_years; Place";
  book.write_settings("As given", "As_given", {{"terms", terms}, {"centre", std::string("no")}});
  book.write_settings("Centred", "Unply_model",
                      {{"data", "Answers_given.A1:F" + std::to_string(drawn.size() + 1)},
                       {"response", std::string("Strain")},
                       {"terms", terms},
                       {"centre", std::string("yes")},
                       {"purpose", std::string("test")},
                       {"smallest effect of Workload", 0.2},
                       {"smallest effect of Support", 0.2},
                       {"smallest effect of Workload*Support", 0.1},
                       {"smallest effect of Age_years", 0.01},
                       {"smallest effect of Place", 0.2}});

  // -- the answers
  Sheet& answers = book.answers();
  book.write_title(answers, "Does support at work soften the strain of a high workload?");
  book.write_lines(answers, {"312 people: two scales (means of five items from 1 to 5), their product, age, "
                             "place of work, and strain (mean of "
                             "ten items from 1 to 5).",
                             "The stated hypothesis: the effect of workload on strain is smaller where "
                             "support is larger, so the product has "
                             "a negative effect.",
                             "", "What to look at",
                             "1. As given, the product has a VIF of about " + fit.vif(product_name).str(2) +
                                 ". Centred, it has one of about " + centred_fit.vif(product_name).str(2) +
                                 ". Its estimate, standard error, t and p are the same in both.",
                             "2. So nothing was cured by centring, because nothing was wrong: that VIF came "
                             "with building one column from two "
                             "others.",
                             "3. What does change is the question that the effect of workload answers. As "
                             "given: its effect where support is "
                             "0, which is not on the scale. Centred: its effect at average support.",
                             "4. The fit is the same: R2, scatter and every prediction agree.",
                             "5. The last table starts from nothing but correlations as an article prints "
                             "them, three decimals and the number "
                             "of people.",
                             "", "If the tables below show #NAME?, the Unply extension is not installed."});
  using S = Style;
  const std::string given = "(Strain_given;Person_table;As_given)",
                    middle = "(Strain_given;Person_table;Unply_model)";
  book.write_table("As given", {"Estimates_as_given", "UNPLY.ESTIMATES" + given, 8, estimates_columns, {1}});
  book.write_table("Centred", {"Estimates_centred", "UNPLY.ESTIMATES" + middle, 8, estimates_columns, {2}});

  book.write_section(answers, "Side by side");
  book.write_row(answers, {{std::string("Workload*Support"), S::heading},
                           {std::string("As given"), S::heading_right},
                           {std::string("Centred"), S::heading_right},
                           {std::string("Ratio"), S::heading_right}});
  const auto side_by_side = [&](const std::string& what, const std::string& first,
                                const std::string& second) {
    const std::string row = std::to_string(book.next_row(answers) + 1);
    book.write_row(answers, {{what, S::words},
                             {Formula{"of:=" + first}, S::four_decimals},
                             {Formula{"of:=" + second}, S::four_decimals},
                             {Formula{"of:=[.C" + row + "]/[.B" + row + "]"}, S::four_decimals}});
    return row;
  };
  std::vector<std::pair<std::string, std::string>> same;  // what, sheet row
  for (const char* column :
       {heading::estimate, heading::standard_error, heading::t, heading::p, heading::vif}) {
    const std::string row = side_by_side(column, SampleBook::cell("Estimates_as_given", product_name, column),
                                         SampleBook::cell("Estimates_centred", product_name, column));
    if (column != heading::vif) same.emplace_back(product_name + ", " + column, row);
  }
  same.emplace_back("R2", side_by_side("R2 of the whole model", "INDEX(UNPLY.FITQUALITY" + given + ";6;2)",
                                       "INDEX(UNPLY.FITQUALITY" + middle + ";6;2)"));
  side_by_side("Effect of workload", SampleBook::cell("Estimates_as_given", "Workload", heading::estimate),
               SampleBook::cell("Estimates_centred", "Workload", heading::estimate));
  book.write_table("Inflation, as given and centred",
                   {"Inflation", "UNPLY.VIF(Person_table;Unply_model)", 6, inflation_columns, {2, 3}});
  book.write_table(
      "The whole fit, centred",
      {"Fit_quality", "UNPLY.FITQUALITY" + middle, 13, fit_quality_columns, {}, fit_quality_lines});

  // -- from correlations as printed
  const std::vector<std::string> printed_names{"Workload", "Support", "Age_years", "Strain"};
  const std::vector<const Reals*> printed_columns{&workload, &support, &age, &strain};
  const auto correlation = [](const Reals& a, const Reals& b) {
    const Real of_a = mean(a), of_b = mean(b);
    Real sum = 0;
    for (std::size_t i = 0; i < a.size(); ++i) sum += (a[i] - of_a) * (b[i] - of_b);
    return rounded(
        static_cast<double>(sum / ((a.size() - 1) * standard_deviation(a) * standard_deviation(b))), 3);
  };
  book.write_section(answers, "Correlations as an article prints them");
  const std::size_t printed_row = book.next_row(answers);
  std::vector<std::pair<Content, Style>> head;
  for (const std::string& name : printed_names) head.emplace_back(name, S::heading_right);
  book.write_row(answers, head);
  std::vector<std::vector<double>> printed;
  for (const Reals* a : printed_columns) {
    printed.emplace_back();
    std::vector<std::pair<Content, Style>> line;
    for (const Reals* b : printed_columns) {
      printed.back().push_back(correlation(*a, *b));
      line.emplace_back(printed.back().back(), S::three_decimals);
    }
    book.write_row(answers, line);
  }
  book.add_name("Correlations", answers, printed_row, 0, 5, 4);
  book.write_settings("From correlations", "For_correlations",
                      {{"response", std::string("Strain")}, {"table", std::string("estimates")}});
  book.write_table("From those correlations alone",
                   {"Estimates_from_correlations",
                    "UNPLY.FROMCORRELATIONS(Correlations;" + std::to_string(people) + ";For_correlations)",
                    4,
                    estimates_columns,
                    {1}});
  answers.width(0, 5.6).width(1, 5.6);
  for (std::size_t j = 2; j < 13; ++j) answers.width(j, j == 4 ? 4.6 : 3.1);

  // -- checks
  book.check_estimates("Estimates_as_given", fit, as_given.names, level);
  book.check_cell("Estimates_as_given", heading::intercept, heading::estimate, fit.intercept());
  book.check_estimates("Estimates_centred", centred_fit, as_given.names, level);
  book.check_cell("Estimates_centred", heading::intercept, heading::estimate, centred_fit.intercept());
  for (const auto& [what, row] : same)
    book.check("Side by side: " + what + ", ratio", "[$Answers.D" + row + "]", 1);
  const auto verdict = [&](const std::string& name, const Real& smallest) {
    book.check_verdict("Estimates_centred", name,
                       expected_verdict(centred_fit.coefficient(name), centred_fit.half_width(name, level),
                                        centred_fit.vif(name), smallest));
  };
  verdict("Workload", Real(1) / 5);
  verdict("Support", Real(1) / 5);
  verdict(product_name, Real(1) / 10);
  verdict("Age_years", Real(1) / 100);
  book.check_cell("Inflation", product_name, "VIF not centred", fit.vif(product_name));
  book.check_cell("Inflation", product_name, "VIF if centred", centred_fit.vif(product_name));
  book.check_cell("Inflation", "Workload", "VIF not centred", fit.vif("Workload"));
  book.check_cell("Inflation", "Place", heading::generalised_vif,
                  centred_fit.generalised_vif({"Place: field", "Place: remote"}));
  book.check_fit_quality("Fit_quality", centred_fit);
  Matrix between(3, Reals(3));
  Reals with_strain(3);
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j) between[i][j] = printed[i][j];
    with_strain[i] = printed[i][3];
  }
  const FromCorrelations published = solve_correlations(between, with_strain, people);
  for (std::size_t i = 0; i < 3; ++i) {
    book.check_cell("Estimates_from_correlations", printed_names[i], heading::estimate,
                    published.standardised[i]);
    book.check_cell("Estimates_from_correlations", printed_names[i], heading::standard_error,
                    published.standard_errors[i]);
    book.check_cell("Estimates_from_correlations", printed_names[i], heading::vif, published.vif[i]);
  }

  // -- where the data come from
  Sheet& source = book.source();
  book.write_title(source, "Where these data come from");
  book.write_lines(source, {"Nobody was asked. The answers were drawn by a program, "
                            "sample-sheets/write_sample_sheets, with the seed " +
                                std::to_string(seed) + "; the same program always writes the same file.",
                            "So the true effects are known, and the verdicts can be held against them.", "",
                            "How a person was drawn",
                            "Workload: 3.1, standard deviation 0.75. Support: 3.4, lower where workload is "
                            "higher (-0.25 for one standard "
                            "deviation), standard deviation 0.65 of its own. Both as means of five items, "
                            "from 1 to 5, one decimal.",
                            "Age: 42 years, standard deviation 11, from 18 to 66. Place of work: office (45 "
                            "in 100), field (30), remote (25).",
                            "Strain: 2.9 for a person in the middle of all that, in the office; the true "
                            "effects below; scatter with a "
                            "standard deviation of " +
                                shortest(scatter) + "; mean of ten items, from 1 to 5, one decimal."});
  book.write_truth("Estimates_centred",
                   {{"Workload", per_workload, "points per point, at average support"},
                    {"Support", per_support, "points per point, at average workload"},
                    {product_name, per_product, "change of the one effect per point of the other"},
                    {"Age_years", per_year, "points per year"},
                    {"Place: field", of_field, "points, against the office"},
                    {"Place: remote", of_remote, "points, against the office"}},
                   S::three_decimals);
  book.write_lines(source,
                   {"", "95 % intervals: about one in twenty misses its true effect, here as anywhere."});
  return book.finish();
}

}  // namespace unply::samples
