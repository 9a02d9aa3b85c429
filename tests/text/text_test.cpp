// Every id has words; numbers are rounded to what a reader can use.
#include "extension/text/text.hpp"

#include <cmath>
#include <limits>
#include <set>

#include "tests/support/catch.hpp"

using namespace unply;

namespace {

const std::vector<std::string> two = {"Zone_1", "Zone_2"};

/// A bag with every fact. Facts that are text in one place and a number in another are taken by `value_is_text`.
Facts everything(bool value_is_text, bool baseline) {
  Facts facts;
  const auto number = [&facts](std::initializer_list<FactId> ids) {
    for (FactId id : ids) facts.set(id, 3.0);
  };
  const auto text = [&facts](std::initializer_list<FactId> ids) {
    for (FactId id : ids) facts.set(id, std::string("words"));
  };
  const auto list = [&facts](std::initializer_list<FactId> ids) {
    for (FactId id : ids) facts.set(id, two);
  };
  number({FactId::code, FactId::condition_index, FactId::count, FactId::df, FactId::df_numerator, FactId::digits,
          FactId::effect, FactId::estimate, FactId::expected, FactId::f, FactId::factor, FactId::half_width,
          FactId::level, FactId::lower, FactId::needed, FactId::number, FactId::p, FactId::position, FactId::rows,
          FactId::rows_left_out, FactId::rows_needed, FactId::scatter, FactId::seed, FactId::share, FactId::spread,
          FactId::standard_error, FactId::upper, FactId::vif});
  text({FactId::address, FactId::column, FactId::equation, FactId::file, FactId::fingerprint, FactId::found,
        FactId::name, FactId::range, FactId::response, FactId::setting, FactId::sheet, FactId::suggestion,
        FactId::term, FactId::text, FactId::version, FactId::date});
  list({FactId::addresses, FactId::allowed, FactId::columns, FactId::levels, FactId::terms, FactId::settings});
  facts.set(FactId::weights, std::vector<double>{0.7, -0.7});
  if (value_is_text) facts.set(FactId::value, std::string("words"));
  else facts.set(FactId::value, 3.0);
  if (baseline) facts.set(FactId::baseline, std::string("white"));
  return facts;
}

void check_words(const std::string& words) {
  CHECK_FALSE(words.empty());
  CHECK(words.find("  ") == std::string::npos);
  CHECK(words.find("..") == std::string::npos);
  CHECK(words.find('*') == std::string::npos);  // no stars
  for (const char* avoided : {"significant", "problem", "violation", "violate"}) CHECK(words.find(avoided) == std::string::npos);
}

}  // namespace

TEST_CASE("every phrase has words, with and without a baseline", "[text]") {
  for (int id = 0; id <= static_cast<int>(PhraseId::caution_text); ++id) {
    CAPTURE(id);
    const PhraseId phrase = static_cast<PhraseId>(id);
    check_words(text::phrase({phrase, everything(false, true)}));
    // A category always has a baseline; any other term has none.
    if (phrase != PhraseId::methods_category) check_words(text::phrase({phrase, everything(false, false)}));
  }
}

TEST_CASE("every error has a sentence that ends like one", "[text]") {
  for (int code = 0; code <= static_cast<int>(ErrorCode::internal); ++code) {
    CAPTURE(code);
    const ErrorCode error = static_cast<ErrorCode>(code);
    const std::string words = error == ErrorCode::term_not_readable
                                  ? "skip"  // speaks of the sign * itself
                                  : text::sentence(Error(error, everything(error == ErrorCode::impossible_setting, false)));
    if (words == "skip") continue;
    check_words(words);
    CHECK((words.back() == '.' || words.back() == '?'));
  }
}

TEST_CASE("every heading, title, label and setting has a name of its own", "[text]") {
  for (int id = 0; id <= static_cast<int>(HeadingId::effect_of_one_sd); ++id) {
    CAPTURE(id);
    CHECK_FALSE(text::heading({static_cast<HeadingId>(id), "name"}).empty());
  }
  std::set<std::string> titles;
  for (int id = 0; id <= static_cast<int>(BlockId::inflation_chart); ++id)
    titles.insert(text::block_title(static_cast<BlockId>(id)));
  CHECK(titles.size() == static_cast<std::size_t>(BlockId::inflation_chart) + 1);
  std::set<std::string> settings;
  for (text::SettingId id : text::all_settings()) settings.insert(text::setting_name(id));
  CHECK(settings.size() == text::all_settings().size());
  CHECK(text::all_settings().size() == static_cast<std::size_t>(text::SettingId::standard_deviations) + 1);
  CHECK(settings.count("") == 0);
}

TEST_CASE("numbers in sentences carry the digits a reader can use", "[text]") {
  CHECK(text::number(0.123456) == "0.123");
  CHECK(text::number(12.0) == "12");
  CHECK(text::number(48.26) == "48.3");
  CHECK(text::number(1234567) == "1,230,000");
  CHECK(text::number(3286, 2) == "3,300");
  CHECK(text::number(9999, 2) == "10,000");
  CHECK(text::seed(20260101) == "20260101");
  CHECK(text::number(1.5e300) == "1.50e+300");
  CHECK(text::number(2.5e-7) == "2.50e-07");
  CHECK(text::number(0) == "0");
  CHECK(text::number(std::numeric_limits<double>::infinity()) == "without limit");
  CHECK(text::whole(2200) == "2,200");
  CHECK(text::whole(-0.2) == "0");
  CHECK(text::p_value(0.00001) == "p < 0.0001");
  CHECK(text::p_value(0.0004) == "p = 0.0004");
  CHECK(text::p_value(0.032) == "p = 0.032");
  CHECK(text::p_value(0.5) == "p = 0.50");
  CHECK(text::percent(0.95) == "95 %");
}

TEST_CASE("an estimate is rounded to two digits of its half-width", "[text]") {
  CHECK(text::rounded_to(0.61234, 0.2111) == "0.61");
  CHECK(text::rounded_to(1234.5, 123) == "1,230");
  CHECK(text::rounded_to(-0.0001, 0.2) == "0.00");
  CHECK(text::signed_rounded_to(0.61234, 0.2111) == "+0.61");
  CHECK(text::signed_rounded_to(-0.61234, 0.2111) == "-0.61");
  CHECK(text::signed_rounded_to(0.0001, 0.2) == "0.00");
}

TEST_CASE("lists read as a person writes them", "[text]") {
  CHECK(text::list({}) == "");
  CHECK(text::list({"A"}) == "A");
  CHECK(text::list({"A", "B"}) == "A and B");
  CHECK(text::list({"A", "B", "C"}) == "A, B and C");
}

TEST_CASE("a block of cells is rectangular, notes below in the first column", "[text]") {
  TableBlock block{BlockId::estimates, {{HeadingId::term}, {HeadingId::estimate}}, {{std::string("Zone_1"), 1.5}}};
  block.notes.push_back({PhraseId::no_intercept_note});
  const text::Cells cells = text::cells(block);
  REQUIRE(cells.size() == 3);
  for (const auto& row : cells) CHECK(row.size() == 2);
  CHECK(std::get<std::string>(cells[0][0]) == "Term");
  CHECK(std::get<double>(cells[1][1]) == 1.5);
  CHECK(std::holds_alternative<std::monostate>(cells[2][1]));
}
