// Lines of name | value become a model; every name and value that cannot be meant is refused.
#include "extension/cells/settings_reader.hpp"
#include "tests/support/catch.hpp"

using namespace unply;
using namespace unply::office;
using text::Cells;
using text::SettingId;

namespace {

Settings read(const Cells& lines) { return read_settings(lines, settings_for_rows()); }

Error refusal(const Cells& lines, const std::vector<SettingId>& possible = settings_for_rows()) {
  try {
    read_settings(lines, possible);
  } catch (const Error& error) { return error; }
  return Error(ErrorCode::cancelled);
}

}  // namespace

TEST_CASE("every setting is read into its place in the model") {
  const Settings settings = read({{"terms", "Zone_1; Zone_2;Zone_1*Zone_2"},
                                  {"response", "Strength"},
                                  {"data", "Kiln.A1:H200"},
                                  {"categories", "Batch; 2019"},
                                  {"purpose", "test"},
                                  {"smallest effect", 2.0},
                                  {"smallest effect of Zone_1", 0.5},
                                  {"baseline of Clay", "red"},
                                  {"level", 0.9},
                                  {"intercept", "no"},
                                  {"centre", "yes"},
                                  {"standard errors", "robust"},
                                  {"rows", "visible"},
                                  {"headings", "no"},
                                  {"condition", "centred"},
                                  {"seed", 7.0}});
  const Model& model = settings.model;
  CHECK(model.terms == std::vector<std::string>{"Zone_1", "Zone_2", "Zone_1*Zone_2"});
  CHECK(model.response == "Strength");
  CHECK(settings.data == std::optional<std::string>("Kiln.A1:H200"));
  CHECK(model.categories == std::vector<std::string>{"Batch", "2019"});
  CHECK(model.purpose == Purpose::test_hypothesis);
  CHECK(model.smallest_effect == std::optional<double>(2.0));
  CHECK(model.smallest_effects == std::map<std::string, double>{{"Zone_1", 0.5}});
  CHECK(model.baselines == std::map<std::string, std::string>{{"Clay", "red"}});
  CHECK(model.level == 0.9);
  CHECK_FALSE(model.intercept);
  CHECK(model.centre);
  CHECK(model.standard_errors == StandardErrors::robust);
  CHECK(model.visible_rows_only);
  CHECK(settings.headings == std::optional<bool>(false));
  CHECK(model.centred_condition);
  CHECK(model.seed == 7);
}

TEST_CASE("case and blanks of names and choices do not count, those of columns are kept") {
  const Settings settings =
      read({{" Smallest  Effect of  Zone A ", "0,5"}, {"PURPOSE", " Predict "}, {"Level", "90 %"}});
  CHECK(settings.model.smallest_effects == std::map<std::string, double>{{"Zone A", 0.5}});
  CHECK(settings.model.purpose == Purpose::predict);
  CHECK(settings.model.level == Approx(0.9).epsilon(1e-15));  // one division by 100
}

TEST_CASE("a level of 95 is read as 95 percent") { CHECK(read({{"level", 95.0}}).model.level == 0.95); }

TEST_CASE("a list is written in one cell, with line breaks, or in cells side by side") {
  const std::vector<std::string> expected = {"A", "B", "A*B"};
  CHECK(read({{"terms", "A; B; A*B"}}).model.terms == expected);
  CHECK(read({{"terms", "A\nB\nA*B;"}}).model.terms == expected);
  CHECK(read({{"terms", "A", "B", "A*B", std::monostate(), ""}}).model.terms == expected);
  CHECK(read({{"terms", "A", std::monostate(), "B;A*B"}}).model.terms == expected);
  CHECK(read({{"terms", 2019.0, "B"}}).model.terms == std::vector<std::string>{"2019", "B"});
}

TEST_CASE("headings with semicolons are kept whole in single quotes, apostrophes are no quotes") {
  CHECK(read({{"terms", "'Width; outer'; Men's height; B * 'x;y'"}}).model.terms ==
        std::vector<std::string>{"'Width; outer'", "Men's height", "B * 'x;y'"});
  CHECK(read({{"categories", "'Width; outer'; Shift"}}).model.categories ==
        std::vector<std::string>{"Width; outer", "Shift"});
}

TEST_CASE("empty lines and lines without a value leave everything as it comes") {
  CHECK(read({}) == Settings());
  CHECK(read({{std::monostate(), std::monostate()}, {"", ""}, {"level", std::monostate()}, {"terms", " "}}) ==
        Settings());
}

TEST_CASE("a name that is not known is refused with the nearest one and all possible ones") {
  const Error error = refusal({{"leval", 0.9}});
  REQUIRE(error.code == ErrorCode::unknown_setting);
  CHECK(error.facts.text(FactId::setting) == "leval");
  CHECK(error.facts.text(FactId::suggestion) == "level");
  CHECK(error.facts.list(FactId::allowed).size() == settings_for_rows().size());
  CHECK(text::sentence(error).find("level") != std::string::npos);
}

TEST_CASE("settings of other functions are unknown here") {
  CHECK(refusal({{"means", 1.0, 2.0}}).code == ErrorCode::unknown_setting);
  CHECK(refusal({{"table", "ledger"}}).code == ErrorCode::unknown_setting);
  CHECK(refusal({{"rows", "all"}}, settings_for_correlations()).code == ErrorCode::unknown_setting);
  CHECK(refusal({{"intercept", "no"}}, settings_for_correlations()).code == ErrorCode::unknown_setting);
}

TEST_CASE("a setting given twice is refused, two columns' smallest effects are not the same setting") {
  CHECK(refusal({{"level", 0.9}, {"Level", 0.95}}).code == ErrorCode::doubled_setting);
  CHECK(refusal({{"smallest effect of A", 1.0}, {"smallest effect of a ", 2.0}}).code ==
        ErrorCode::doubled_setting);
  CHECK(read({{"smallest effect of A", 1.0}, {"smallest effect of B", 2.0}}).model.smallest_effects.size() ==
        2);
}

TEST_CASE("impossible values are refused with what is possible") {
  const auto [name, value] = GENERATE(table<std::string, text::Cell>({
      {"level", 0.3},
      {"level", 1.0},
      {"level", 100.0},
      {"level", "high"},
      {"level", -0.95},
      {"purpose", "prove"},
      {"purpose", 1.0},
      {"smallest effect", 0.0},
      {"smallest effect", -1.0},
      {"smallest effect", "big"},
      {"smallest effect of A", 0.0},
      {"intercept", "maybe"},
      {"intercept", 2.0},
      {"centre", "x"},
      {"standard errors", "HC3"},
      {"rows", "hidden"},
      {"headings", "2"},
      {"condition", "half"},
      {"seed", 1.5},
      {"seed", -1.0},
      {"seed", 1e17},
      {"seed", "one"},
  }));
  CAPTURE(name);
  const Error error = refusal({{name, value}});
  REQUIRE(error.code == ErrorCode::impossible_setting);
  CHECK(error.facts.text(FactId::setting) == name);
  CHECK_FALSE(error.facts.text(FactId::allowed).empty());
  CHECK(text::sentence(error).find(error.facts.text(FactId::allowed)) != std::string::npos);
}

TEST_CASE("a second value is refused where one is asked") {
  const Error error = refusal({{"level", 0.9, 0.95}});
  REQUIRE(error.code == ErrorCode::impossible_setting);
  CHECK(error.facts.text(FactId::value) == "0.9; 0.95");
}

TEST_CASE("a single column or a value without a name is no settings range") {
  CHECK(refusal({{"level"}}).code == ErrorCode::settings_shape);
  CHECK(refusal({{std::monostate(), 0.9}}).code == ErrorCode::settings_shape);
}

TEST_CASE("settings that only correlations need are read there") {
  const Settings settings = read_settings({{"table", "Ledger"},
                                           {"response", "y"},
                                           {"means", 1.5, "2", "-3,25"},
                                           {"standard deviations", "1; 2; 0.5"}},
                                          settings_for_correlations());
  CHECK(settings.table == std::optional<BlockId>(BlockId::ledger));
  CHECK(settings.means == std::optional<std::vector<double>>({1.5, 2, -3.25}));
  CHECK(settings.standard_deviations == std::optional<std::vector<double>>({1, 2, 0.5}));
  CHECK(refusal({{"standard deviations", 1.0, 0.0}}, settings_for_correlations()).code ==
        ErrorCode::impossible_setting);
  CHECK(refusal({{"table", "prices"}}, settings_for_correlations()).code == ErrorCode::impossible_setting);
}

TEST_CASE("what is written as lines reads back as the same settings") {
  Settings settings;
  CHECK(settings_lines(settings).empty());
  settings.data = "Kiln.A1:H200";
  settings.headings = true;
  Model& model = settings.model;
  model.response = "Strength";
  model.terms = {"A", "'Width; outer'", "A*B", "C^2"};
  model.categories = {"Width; outer", "Shift"};
  model.baselines = {{"Clay", "red"}, {"Shift", "2"}};
  model.purpose = Purpose::predict;
  model.smallest_effect = 0.1;
  model.smallest_effects = {{"A", 1.0 / 3}, {"C", 2e-7}};
  model.level = 0.99;
  model.intercept = false;
  model.centre = true;
  model.standard_errors = StandardErrors::robust;
  model.visible_rows_only = true;
  model.centred_condition = true;
  model.seed = 123456789012345;
  CHECK(read(settings_lines(settings)) == settings);

  Settings summaries;
  summaries.table = BlockId::inflation;
  summaries.means = {{0.1, -2, 3e10}};
  summaries.standard_deviations = {{1.0 / 3, 2, 3}};
  CHECK(read_settings(settings_lines(summaries), settings_for_correlations()) == summaries);
}

TEST_CASE("numbers are read as people write them") {
  CHECK(number_in("0.9") == std::optional<double>(0.9));
  CHECK(number_in(" 0,9 ") == std::optional<double>(0.9));
  CHECK(number_in("+5") == std::optional<double>(5));
  CHECK(number_in("50%") == std::optional<double>(0.5));
  CHECK(number_in("1e-3") == std::optional<double>(1e-3));
  for (const char* text : {"", "-", "abc", "1.2.3", "1,000,000", "12 apples", "inf", "nan", "%", "1e999"}) {
    CAPTURE(text);
    CHECK_FALSE(number_in(text));
  }
}
