// The service desk: all five weekdays as indicators, and a total beside its parts. What can a table like that
// tell?
#include <array>
#include <cmath>

#include "core/base/random.hpp"
#include "sample-sheets/sample_book.hpp"

namespace unply::samples {
namespace {

constexpr std::uint64_t seed = 2027;
constexpr std::size_t weeks = 52;
constexpr const char* weekdays[] = {"Mon", "Tue", "Wed", "Thu", "Fri"};
constexpr std::size_t days_without_waiting[] = {48, 49,
                                                171};  // counted from 1: the clock of the desk stood still

// The truth behind the data. Waiting time in minutes.
constexpr double per_person = -0.80, per_morning = 0.090, per_evening = 0.120;
constexpr std::array<double, 5> of_weekday{0.8, 0, 0, 0, 0.4};
constexpr double scatter = 1.4;

struct Day {
  std::string date;
  std::size_t weekday = 0;
  double morning = 0, evening = 0, staff = 0, waiting = 0;
};

/// Days from Monday, 6 January 2025 on.
std::string date_of(std::size_t days) {
  constexpr std::array<std::size_t, 12> lengths{31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
  std::size_t year = 2025, month = 0, day = 6 + days;
  while (day > lengths[month]) {
    day -= lengths[month];
    if (++month == 12) month = 0, ++year;
  }
  const auto two = [](std::size_t number) { return (number < 10 ? "0" : "") + std::to_string(number); };
  return std::to_string(year) + "-" + two(month + 1) + "-" + two(day);
}

std::vector<Day> draw() {
  Random random(seed);
  constexpr std::array<double, 5> morning_of{18, 6, 0, -6, -14}, evening_of{-6, 0, 4, 8, 12};
  std::vector<Day> result;
  for (std::size_t week = 0; week < weeks; ++week) {
    for (std::size_t weekday = 0; weekday < 5; ++weekday) {
      Day day;
      day.date = date_of(7 * week + weekday);
      day.weekday = weekday;
      const double busy = 9 * random.normal();  // a busy day is busy from morning to evening
      day.morning = rounded(96 + morning_of[weekday] + busy + 7 * random.normal(), 0);
      day.evening = rounded(64 + evening_of[weekday] + 0.6 * busy + 6 * random.normal(), 0);
      // The roster follows the bookings.
      day.staff = rounded(10 + (day.morning + day.evening - 162) / 11 + 0.5 * random.normal(), 0);
      day.waiting =
          rounded(9.5 + per_person * (day.staff - 10) + per_morning * (day.morning - 97) +
                      per_evening * (day.evening - 67) + of_weekday[weekday] + scatter * random.normal(),
                  1);
      result.push_back(day);
    }
  }
  return result;
}

}  // namespace

std::string service_desk_workbook() {
  const std::vector<Day> drawn = draw();
  SampleBook book("Days");
  std::vector<std::vector<Content>> rows;
  Reals staff, morning, evening, waiting;
  std::array<Reals, 5> on;
  for (std::size_t i = 0; i < drawn.size(); ++i) {
    const Day& day = drawn[i];
    std::vector<Content> row{Date{day.date}};
    for (std::size_t d = 0; d < 5; ++d) row.emplace_back(day.weekday == d ? 1.0 : 0.0);
    for (const double value : {day.staff, day.morning, day.evening, day.morning + day.evening, day.waiting}) {
      row.emplace_back(value);
    }
    bool timed = true;
    for (const std::size_t number : days_without_waiting) timed = timed && number != i + 1;
    if (!timed) row.back() = {};
    rows.push_back(std::move(row));
    if (!timed) continue;
    for (std::size_t d = 0; d < 5; ++d) on[d].emplace_back(day.weekday == d ? 1 : 0);
    staff.emplace_back(day.staff);
    morning.emplace_back(day.morning);
    evening.emplace_back(day.evening);
    waiting.emplace_back(day.waiting);
  }
  std::vector<DataColumn> columns{{"Day", Style::date, 2.6}};
  for (const char* name : weekdays) columns.push_back({name, Style::whole, 1.4});
  const std::string wait = "Waiting_min";
  columns.insert(columns.end(), {{"Staff_persons", Style::whole, 2.8},
                                 {"Morning_bookings", Style::whole, 3.4},
                                 {"Evening_bookings", Style::whole, 3.4},
                                 {"Total_bookings", Style::whole, 3.0},
                                 {wait, Style::one_decimal, 2.6}});
  book.write_data(columns, rows, "Day_table", wait, "Waiting");

  Predictors x;
  x.add("Staff_persons", staff).add("Morning_bookings", morning).add("Evening_bookings", evening);
  for (std::size_t d = 1; d < 5; ++d) x.add(weekdays[d], on[d]);
  const IndependentFit fit(x, waiting);
  const Real level = Real(95) / 100, persons_matter = Real(1) / 4;

  // -- the model
  book.write_title(book.model(), "Model: what is asked of the days");
  book.write_lines(book.model(),
                   {"Two blocks of settings: the table as it stands, and the same question without what "
                    "is in the table twice.",
                    "The second is the one that the report made without a window reads."});
  const std::string table_range = "Days.A1:K" + std::to_string(drawn.size() + 1);
  book.write_settings("As it stands: five weekdays, and the total beside its parts", "As_it_stands",
                      {{"terms",
                        "Mon; Tue; Wed; Thu; Fri; Staff_persons; Morning_bookings; Evening_bookings; "
                        "Total_bookings"},
                       {"smallest effect", 0.5}});
  book.write_settings(
      "Mended: Monday is what the other weekdays are compared with, and the total is left out", "Unply_model",
      {{"data", table_range},
       {"response", wait},
       {"terms", std::string("Staff_persons; Morning_bookings; Evening_bookings; Tue; Wed; Thu; Fri")},
       {"purpose", std::string("explore")},
       {"smallest effect", 1.0},
       {"smallest effect of Staff_persons", 0.25},
       {"smallest effect of Morning_bookings", 0.05},
       {"smallest effect of Evening_bookings", 0.05}});

  // -- the answers
  Sheet& answers = book.answers();
  book.write_title(answers, "What shortens the wait at the service desk?");
  book.write_lines(answers, {"260 working days: persons on duty, bookings of the morning, of the evening and "
                             "of the whole day, one column "
                             "for each weekday (1 or 0), and the median waiting time (minutes). Three days "
                             "without a waiting time are left "
                             "out.",
                             "", "What to look at",
                             "1. More persons on duty go with longer waits when nothing else is looked at "
                             "(the correlation below is "
                             "positive), because busy days get more staff.",
                             "2. As the table stands, it holds two things twice: the five weekdays add up to "
                             "1 in every row, and the total is "
                             "the sum of morning and evening. The first table says so as equations.",
                             "3. Coefficients that those equations touch cannot be estimated, and are marked "
                             "so; nothing is set to zero or "
                             "dropped in silence. The effect of one more person is untouched by them.",
                             "4. Mended, every effect can be estimated. The effect of one more person is the "
                             "same as before to the last "
                             "digit, and clear in spite of its VIF of about " +
                                 fit.vif("Staff_persons").str(2) + ".",
                             "",
                             "Numbers like these inform a roster; they do not decide it. Rest times, "
                             "agreements and the rules of the place "
                             "come first, and the people on duty know what the table does not.",
                             "If the tables below show #NAME?, the Unply extension is not installed."});
  using S = Style;
  book.write_section(answers, "Looked at alone");
  const std::size_t alone = book.next_row(answers);
  const std::string last = std::to_string(drawn.size() + 1);
  book.write_row(answers, {{std::string("Correlation of persons on duty with the wait"), S::plain},
                           {Formula{"of:=CORREL([$Days.G2:.G" + last + "];[$Days.K2:.K" + last + "])"},
                            S::three_decimals}});
  book.write_table("As it stands: what holds in every row",
                   {"Dependencies", "UNPLY.DEPENDENCIES(Day_table;As_it_stands)", 3, {S::words, S::words}});
  book.write_table("As it stands: what can be estimated", {"Estimates_as_it_stands",
                                                           "UNPLY.ESTIMATES(Waiting;Day_table;As_it_stands)",
                                                           11,
                                                           estimates_columns,
                                                           {1, 2, 3, 4}});
  const std::string arguments = "(Waiting;Day_table;Unply_model)";
  book.write_table("Mended: estimates and verdicts",
                   {"Estimates", "UNPLY.ESTIMATES" + arguments, 9, estimates_columns});
  book.write_table("Mended: the precision ledger",
                   {"Ledger", "UNPLY.LEDGER" + arguments, 8, ledger_columns, {3}});
  book.write_table(
      "Mended: the whole fit",
      {"Fit_quality", "UNPLY.FITQUALITY" + arguments, 13, fit_quality_columns, {}, fit_quality_lines});
  answers.width(0, 9.4).width(1, 6.2);
  for (std::size_t j = 2; j < 13; ++j) answers.width(j, j == 2 || j == 4 ? 3.6 : 3.1);

  // -- checks
  book.check("Dependencies: the weekdays", "INDEX(Dependencies;2;1)",
             std::string("Mon + Tue + Wed + Thu + Fri = 1"));
  book.check("Dependencies: the total", "INDEX(Dependencies;3;1)",
             std::string("Total_bookings = Morning_bookings + Evening_bookings"));
  for (const char* column : {heading::estimate, heading::standard_error, heading::vif, heading::p}) {
    const Real expected = column == heading::estimate         ? fit.coefficient("Staff_persons")
                          : column == heading::standard_error ? fit.standard_error("Staff_persons")
                          : column == heading::vif            ? fit.vif("Staff_persons")
                                                              : fit.p("Staff_persons");
    book.check_cell("Estimates_as_it_stands", "Staff_persons", column, expected);
  }
  for (const char* name : {"Mon", "Fri", "Morning_bookings", "Evening_bookings", "Total_bookings"}) {
    book.check_verdict("Estimates_as_it_stands", name, "cannot be estimated");
  }
  book.check_estimates("Estimates", fit, x.names, level);
  book.check_cell("Estimates", heading::intercept, heading::estimate, fit.intercept());
  book.check_verdict(
      "Estimates", "Staff_persons",
      expected_verdict(fit.coefficient("Staff_persons"), fit.half_width("Staff_persons", level),
                       fit.vif("Staff_persons"), persons_matter));
  book.check_fit_quality("Fit_quality", fit);
  book.check_ledger("Ledger", fit, x.names, level);
  const Real middle_staff = mean(staff), middle_wait = mean(waiting);
  Real together = 0;
  for (std::size_t i = 0; i < staff.size(); ++i)
    together += (staff[i] - middle_staff) * (waiting[i] - middle_wait);
  together /= (staff.size() - 1) * standard_deviation(staff) * standard_deviation(waiting);
  book.check("Correlation of persons on duty with the wait", "[$Answers." + address(alone, 1) + "]",
             together);

  // -- where the data come from
  Sheet& source = book.source();
  book.write_title(source, "Where these data come from");
  book.write_lines(
      source,
      {"There is no such desk. The days were drawn by a program, sample-sheets/write_sample_sheets, with the "
       "seed " +
           std::to_string(seed) + "; the same program always writes the same file.",
       "So the true effects are known, and the verdicts can be held against them.", "", "How a day was drawn",
       "How busy it is: one draw for the whole day, standard deviation 9 bookings in the morning, 0.6 of it "
       "in the "
       "evening.",
       "Morning: 96 bookings, more on Mondays (+18) and fewer towards Friday (-14), standard deviation 7 of "
       "its own. "
       "Evening: 64, fewer on Mondays (-6), more on Fridays (+12), standard deviation 6.",
       "Persons on duty: 10, one more for each 11 bookings above 162, standard deviation 0.5, then whole "
       "persons.",
       "Waiting time: 9.5 minutes on an ordinary Tuesday; the true effects below; scatter with a standard "
       "deviation of " +
           shortest(scatter) + " minutes; one decimal.",
       "Three waiting times were emptied: those of days 48, 49 and 171."});
  std::vector<TrueEffect> truth{{"Staff_persons", per_person, "minutes per person"},
                                {"Morning_bookings", per_morning, "minutes per booking"},
                                {"Evening_bookings", per_evening, "minutes per booking"}};
  for (std::size_t d = 1; d < 5; ++d) {
    truth.push_back({weekdays[d], of_weekday[d] - of_weekday[0], "minutes, against Monday"});
  }
  book.write_truth("Estimates", truth, S::two_decimals);
  book.write_lines(source,
                   {"", "95 % intervals: about one in twenty misses its true effect, here as anywhere."});
  return book.finish();
}

}  // namespace unply::samples
