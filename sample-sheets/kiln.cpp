// The kiln: three zone temperatures that rise and fall together. Which zone drives the strength of the fired
// pieces?
#include <algorithm>
#include <array>
#include <cmath>

#include "core/base/random.hpp"
#include "sample-sheets/sample_book.hpp"

namespace unply::samples {
namespace {

constexpr std::uint64_t seed = 2026;
constexpr std::size_t firings = 240;
// Cells that nobody filled in: firing (counted from 1) and column.
constexpr std::size_t missed_moisture[] = {37, 118}, missed_zone_3[] = {74}, missed_strength[] = {201};

// The truth behind the data. Strength in MPa.
constexpr std::array<double, 3> per_degree{0.09, 0.08, 0.06};
constexpr double per_hour = 0.60, per_percent = 0.10;
constexpr double of_buff = -2.0, of_white = 1.5, of_shift_2 = 0, of_shift_3 = 0;
constexpr double scatter = 2.2;

struct Firing {
  std::array<double, 3> zones{};
  double hours = 0, moisture = 0, strength = 0;
  std::string clay;
  int shift = 1;
};

std::vector<Firing> draw() {
  Random random(seed);
  std::vector<Firing> result;
  for (std::size_t i = 0; i < firings; ++i) {
    Firing firing;
    firing.hours = rounded(32 + 4 * random.normal(), 1);
    // Long firings are hot firings; the zones follow one level, each with a little of its own.
    const double level = 1080 + 2.87 * (firing.hours - 32) + 3 * random.normal();
    constexpr std::array<double, 3> offsets{-6, 0, 5};
    for (std::size_t z = 0; z < 3; ++z)
      firing.zones[z] = rounded(level + offsets[z] + 1.4 * random.normal(), 1);
    firing.moisture = rounded(std::max(0.3, 1.6 + 0.5 * random.normal()), 2);
    const double clay = random.uniform();
    firing.clay = clay < 0.5 ? "red" : clay < 0.8 ? "buff" : "white";
    firing.shift = 1 + static_cast<int>(random.below(3));
    double strength = 48 + per_hour * (firing.hours - 32) + per_percent * (firing.moisture - 1.6);
    for (std::size_t z = 0; z < 3; ++z) strength += per_degree[z] * (firing.zones[z] - 1080 - offsets[z]);
    if (firing.clay == "buff") strength += of_buff;
    if (firing.clay == "white") strength += of_white;
    if (firing.shift == 2) strength += of_shift_2;
    if (firing.shift == 3) strength += of_shift_3;
    firing.strength = rounded(strength + scatter * random.normal(), 1);
    result.push_back(firing);
  }
  return result;
}

template <std::size_t n>
bool among(std::size_t firing, const std::size_t (&list)[n]) {
  return std::find(std::begin(list), std::end(list), firing) != std::end(list);
}

constexpr const char* zone_names[] = {"Zone_1_C", "Zone_2_C", "Zone_3_C"};
const std::string hours_name = "Firing_time_h", moisture_name = "Moisture_pct",
                  strength_name = "Strength_MPa";

}  // namespace

std::string kiln_workbook() {
  const std::vector<Firing> drawn = draw();
  SampleBook book("Firings");

  std::vector<std::vector<Content>> rows;
  Predictors x;
  std::array<Reals, 3> zones;
  Reals hours, moisture, buff, white, shift_2, shift_3, strength;
  for (std::size_t i = 0; i < firings; ++i) {
    const Firing& firing = drawn[i];
    const std::size_t number = i + 1;
    std::vector<Content> row{static_cast<double>(number),
                             firing.zones[0],
                             firing.zones[1],
                             firing.zones[2],
                             firing.hours,
                             firing.moisture,
                             firing.clay,
                             static_cast<double>(firing.shift),
                             firing.strength};
    if (among(number, missed_moisture)) row[5] = {};
    if (among(number, missed_zone_3)) row[3] = {};
    if (among(number, missed_strength)) row[8] = {};
    const bool complete = std::none_of(
        row.begin(), row.end(), [](const Content& c) { return std::holds_alternative<std::monostate>(c); });
    rows.push_back(std::move(row));
    if (!complete) continue;
    for (std::size_t z = 0; z < 3; ++z) zones[z].push_back(firing.zones[z]);
    hours.push_back(firing.hours);
    moisture.push_back(firing.moisture);
    buff.push_back(firing.clay == "buff");
    white.push_back(firing.clay == "white");
    shift_2.push_back(firing.shift == 2);
    shift_3.push_back(firing.shift == 3);
    strength.push_back(firing.strength);
  }
  book.write_data({{"Firing", Style::whole, 1.8},
                   {zone_names[0], Style::one_decimal},
                   {zone_names[1], Style::one_decimal},
                   {zone_names[2], Style::one_decimal},
                   {hours_name, Style::one_decimal, 2.8},
                   {moisture_name, Style::two_decimals, 2.8},
                   {"Clay", Style::words, 1.9},
                   {"Shift", Style::whole, 1.6},
                   {strength_name, Style::one_decimal, 2.9}},
                  rows, "Firing_table", strength_name, "Strength");

  // The baseline of a category is its most frequent level.
  const auto count = [](const Reals& indicator) {
    return static_cast<std::size_t>(std::count(indicator.begin(), indicator.end(), Real(1)));
  };
  const std::size_t twos = count(shift_2), threes = count(shift_3), ones = shift_2.size() - twos - threes;
  const int base_shift = ones >= twos && ones >= threes ? 1 : twos >= threes ? 2 : 3;
  Reals shift_1;
  for (std::size_t i = 0; i < shift_2.size(); ++i) shift_1.push_back(1 - shift_2[i] - shift_3[i]);

  for (std::size_t z = 0; z < 3; ++z) x.add(zone_names[z], zones[z]);
  x.add(hours_name, hours).add(moisture_name, moisture).add("Clay: buff", buff).add("Clay: white", white);
  std::vector<std::string> shifts;
  const std::array<const Reals*, 3> of_shift{&shift_1, &shift_2, &shift_3};
  for (int level = 1; level <= 3; ++level) {
    if (level == base_shift) continue;
    shifts.push_back("Shift: " + std::to_string(level));
    x.add(shifts.back(), *of_shift[static_cast<std::size_t>(level - 1)]);
  }
  const IndependentFit fit(x, strength);
  const Real level = Real(95) / 100;

  // -- the model
  book.write_title(book.model(), "Model: what is asked of the firings");
  book.write_lines(
      book.model(),
      {"The sheet functions on the sheet Answers read the block below as their settings, and so does the "
       "report made without a window.",
       "Change a value and watch the answers change: every table is worked out again.",
       "A smallest effect that matters is in MPa for each unit of the term: 0.1 MPa a degree is 1 MPa for "
       "10 degrees."});
  const std::string table_range = "Firings.A1:I" + std::to_string(firings + 1);
  book.write_settings("Settings", "Unply_model",
                      {{"data", table_range},
                       {"response", strength_name},
                       {"terms", "Zone_1_C; Zone_2_C; Zone_3_C; Firing_time_h; Moisture_pct; Clay; Shift"},
                       {"categories", std::string("Shift")},
                       {"purpose", std::string("explore")},
                       {"smallest effect of Zone_1_C", 0.1},
                       {"smallest effect of Zone_2_C", 0.1},
                       {"smallest effect of Zone_3_C", 0.1},
                       {"smallest effect of Firing_time_h", 0.25},
                       {"smallest effect of Moisture_pct", 1.0},
                       {"smallest effect of Clay", 1.0},
                       {"smallest effect of Shift", 1.0}});

  // -- the answers
  Sheet& answers = book.answers();
  book.write_title(answers, "Which zone of the kiln drives the strength?");
  book.write_lines(
      answers,
      {"240 firings: three zone temperatures (degrees C), firing time (h), moisture (%), clay batch, shift, "
       "and the "
       "breaking strength (MPa). Four rows have an empty cell and are left out.",
       "The temperatures are read by three thermocouples that rise and fall together, and long firings are "
       "hot firings.",
       "", "What to look at",
       "1. Firing time has a VIF of about " + fit.vif(hours_name).str(2) +
           ", and its effect is clear all the same: nothing has to be done about it.",
       "2. Each zone alone is undecided. If the zones did not move together, the same number of firings "
       "would settle "
       "each of them: see the widening in the ledger.",
       "3. Moisture is ruled out: an effect of 1 MPa for one per cent, the smallest that would matter, does "
       "not fit the "
       "data. Undecided and ruled out are not the same.",
       "4. The three zones together are clear: see p in the table of groups. What cannot be told is how much "
       "of "
       "it each of them does.",
       "5. A rule of thumb (leave out whatever has a VIF above 10) would drop the zones or the firing time, "
       "and "
       "with them the answer.",
       "6. The last table predicts three planned firings. The one whose zones stand far apart is outside "
       "what "
       "was measured, and is marked so.",
       "", "If the tables below show #NAME?, the Unply extension is not installed."});
  const std::string arguments = "(Strength;Firing_table;Unply_model)";
  using S = Style;
  book.write_table(
      "Estimates and verdicts",
      {"Estimates", "UNPLY.ESTIMATES" + arguments, 2 + x.names.size(), estimates_columns, {1, 2}});
  book.write_table("The precision ledger: why an interval is as wide as it is",
                   {"Ledger", "UNPLY.LEDGER" + arguments, 1 + x.names.size(), ledger_columns, {3}});
  book.write_table("Groups that move together",
                   {"Groups", "UNPLY.GROUPS" + arguments, 2, groups_columns, {3}});
  book.write_table(
      "Rows needed",
      {"Rows_needed", "UNPLY.ROWSNEEDED" + arguments, 1 + x.names.size(), rows_needed_columns, {3}});
  book.write_table(
      "The whole fit",
      {"Fit_quality", "UNPLY.FITQUALITY" + arguments, 13, fit_quality_columns, {}, fit_quality_lines});
  book.write_table("Inflation",
                   {"Inflation", "UNPLY.VIF(Firing_table;Unply_model)", 8, inflation_columns, {2}});
  std::vector<Style> shares(x.names.size() + 2, S::three_decimals);
  shares[0] = S::two_decimals;
  book.write_table(
      "Condition indices and shares of variance",
      {"Condition", "UNPLY.CONDITION(Firing_table;Unply_model)", x.names.size() + 2, shares, {2}});

  struct Planned {
    std::array<double, 3> zones;
    double hours, moisture;
    const char* clay;
    int shift;
  };
  const Planned planned[] = {{{1076, 1082, 1087}, 33, 1.5, "red", 1},
                             {{1090, 1096, 1101}, 37, 1.2, "white", 2},
                             {{1060, 1090, 1100}, 33, 1.5, "red", 1}};
  book.write_section(answers, "Planned firings");
  const std::size_t planned_row = book.next_row(answers);
  std::vector<std::pair<Content, Style>> heads;
  for (const char* name :
       {"Zone_1_C", "Zone_2_C", "Zone_3_C", "Firing_time_h", "Moisture_pct", "Clay", "Shift"}) {
    heads.emplace_back(std::string(name),
                       std::string(name) == "Clay" ? Style::heading : Style::heading_right);
  }
  book.write_row(answers, heads);
  for (const Planned& row : planned) {
    book.write_row(answers, {{row.zones[0], S::one_decimal},
                             {row.zones[1], S::one_decimal},
                             {row.zones[2], S::one_decimal},
                             {row.hours, S::one_decimal},
                             {row.moisture, S::two_decimals},
                             {std::string(row.clay), S::words},
                             {static_cast<double>(row.shift), S::whole}});
  }
  book.add_name("Planned_firings", answers, planned_row, 0, 4, 7);
  book.write_table("Predictions for the planned firings",
                   {"Predictions",
                    "UNPLY.PREDICT(Strength;Firing_table;Planned_firings;Unply_model)",
                    4,
                    predictions_columns,
                    {3}});
  answers.width(0, 5.2).width(1, 6.2);
  for (std::size_t j = 2; j < 13; ++j) answers.width(j, j == 4 ? 3.8 : 3.1);

  // -- checks
  book.check_estimates("Estimates", fit, x.names, level);
  book.check_cell("Estimates", heading::intercept, heading::estimate, fit.intercept());
  book.check_cell("Estimates", heading::intercept, heading::standard_error, fit.intercept_standard_error());
  const auto smallest = [](const std::string& name) -> Real {
    return name.rfind("Zone", 0) == 0 ? Real(1) / 10 : name == hours_name ? Real(1) / 4 : Real(1);
  };
  for (const std::string& name : x.names) {
    book.check_verdict(
        "Estimates", name,
        expected_verdict(fit.coefficient(name), fit.half_width(name, level), fit.vif(name), smallest(name)));
  }
  book.check_fit_quality("Fit_quality", fit);
  book.check_ledger("Ledger", fit, x.names, level);
  for (const char* zone : zone_names) {
    book.check_cell("Rows_needed", zone, heading::rows_needed,
                    fit.rows_needed(zone, smallest(zone) / 2, level));
    book.check_cell("Inflation", zone, heading::vif, fit.vif(zone));
  }
  const std::vector<std::string> clays{"Clay: buff", "Clay: white"};
  book.check_cell("Inflation", "Clay", heading::generalised_vif, fit.generalised_vif(clays));
  book.check_cell("Inflation", "Clay", heading::root_per_column, sqrt(sqrt(fit.generalised_vif(clays))));
  book.check_cell("Inflation", "Clay", heading::vif, sqrt(fit.generalised_vif(clays)));
  book.check_cell("Inflation", "Shift", heading::generalised_vif, fit.generalised_vif(shifts));
  const IndependentFit::Condition condition = fit.condition();
  for (std::size_t l = 0; l < condition.indices.size(); ++l) {
    book.check("Condition: index " + std::to_string(l + 1),
               SampleBook::cell("Condition", l + 1, heading::condition_index), condition.indices[l]);
    for (std::size_t j = 0; j < 5; ++j) {
      const std::string name = j == 0 ? std::string(heading::intercept) : x.names[j - 1];
      book.check_share("Condition: index " + std::to_string(l + 1) + ", " + name,
                       SampleBook::cell("Condition", l + 1, name), condition.proportions[l][j]);
    }
  }
  const std::vector<std::string> all_zones(std::begin(zone_names), std::end(zone_names));
  book.check("Groups: first group, F", SampleBook::cell("Groups", 1, heading::f), fit.joint_f(all_zones));
  book.check("Groups: first group, p", SampleBook::cell("Groups", 1, heading::p), fit.joint_p(all_zones));
  for (std::size_t i = 0; i < 3; ++i) {
    Reals row;
    for (const double zone : planned[i].zones) row.emplace_back(zone);
    row.emplace_back(planned[i].hours);
    row.emplace_back(planned[i].moisture);
    const std::string clay = planned[i].clay;
    row.emplace_back(clay == "buff" ? 1 : 0);
    row.emplace_back(clay == "white" ? 1 : 0);
    for (int shift = 1; shift <= 3; ++shift) {
      if (shift != base_shift) row.emplace_back(planned[i].shift == shift ? 1 : 0);
    }
    const IndependentFit::Prediction prediction = fit.predict(row, level);
    const auto at = [&](const char* column) { return SampleBook::cell("Predictions", i + 1, column); };
    const std::string what = "Predictions: planned firing " + std::to_string(i + 1) + ", ";
    book.check(what + heading::prediction, at(heading::prediction), prediction.value);
    book.check(what + heading::new_row_from, at(heading::new_row_from),
               prediction.value - prediction.half_width);
    book.check(what + heading::new_row_to, at(heading::new_row_to), prediction.value + prediction.half_width);
    book.check(what + heading::leverage, at(heading::leverage), prediction.leverage);
  }
  const std::string vif_call = "UNPLY.VIF(Firing_table;Unply_model)";
  book.check("A function within others: largest VIF of the zones",
             "MAX(INDEX(" + vif_call + ";2;2);INDEX(" + vif_call + ";3;2);INDEX(" + vif_call + ";4;2))",
             std::max({fit.vif(zone_names[0]), fit.vif(zone_names[1]), fit.vif(zone_names[2])}));

  // -- where the data come from
  Sheet& source = book.source();
  book.write_title(source, "Where these data come from");
  book.write_lines(source, {"There is no such kiln. The firings were drawn by a program, "
                            "sample-sheets/write_sample_sheets, with the seed " +
                                std::to_string(seed) + "; the same program always writes the same file.",
                            "So the true effects are known, and the verdicts can be held against them.", "",
                            "How a firing was drawn",
                            "Firing time: 32 h, standard deviation 4 h, written with one decimal.",
                            "Level of the kiln: 1080 degrees C and 2.87 degrees for each hour beyond 32, "
                            "standard deviation 3 degrees.",
                            "Zones 1, 2 and 3: the level -6, +0 and +5 degrees, each with a standard "
                            "deviation of 1.4 degrees of its own, "
                            "one decimal.",
                            "Moisture: 1.6 %, standard deviation 0.5 %, not below 0.3 %, two decimals. Clay: "
                            "half of the firings red, three "
                            "in ten buff, the others white. Shift: 1, 2 or 3, each as likely.",
                            "Strength: 48 MPa for a firing in the middle of all that, red clay; the true "
                            "effects below; scatter with a "
                            "standard deviation of " +
                                shortest(scatter) + " MPa; one decimal.",
                            "Four cells were emptied: the moisture of firings 37 and 118, zone 3 of firing "
                            "74, the strength of firing 201."});
  const auto shift_effect = [](int shift) { return shift == 2 ? of_shift_2 : shift == 3 ? of_shift_3 : 0; };
  std::vector<TrueEffect> truth;
  for (std::size_t z = 0; z < 3; ++z) truth.push_back({zone_names[z], per_degree[z], "MPa per degree C"});
  truth.push_back({hours_name, per_hour, "MPa per hour"});
  truth.push_back({moisture_name, per_percent, "MPa per per cent"});
  truth.push_back({clays[0], of_buff, "MPa, against red clay"});
  truth.push_back({clays[1], of_white, "MPa, against red clay"});
  for (const std::string& name : shifts) {
    truth.push_back({name, shift_effect(name.back() - '0') - shift_effect(base_shift),
                     "MPa, against shift " + std::to_string(base_shift)});
  }
  book.write_truth("Estimates", truth, S::two_decimals);
  book.write_lines(
      source,
      {"",
       "95 % intervals: about one in twenty misses its true effect, here as anywhere. Undecided is the "
       "right word for the zones: each true effect is there, and too small for these firings to show "
       "alone."});
  return book.finish();
}

}  // namespace unply::samples
