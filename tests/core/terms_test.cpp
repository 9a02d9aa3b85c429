#include "core/design/terms.hpp"

#include "core/base/error.hpp"
#include "core/base/random.hpp"
#include "core/base/tolerance.hpp"
#include "core/design/design.hpp"
#include "tests/support/catch.hpp"
#include "tests/support/tables.hpp"

using namespace unply;
using namespace unply::test;

namespace {

std::shared_ptr<Table> headed(const std::vector<std::string>& headings) {
  std::vector<Column> columns;
  for (const std::string& heading : headings) columns.push_back(numbers(heading, {1, 2, 3}));
  return table_of(std::move(columns));
}

/// "name: column^power ..." for comparison in one line.
std::string shown(const Term& term) {
  std::string text = term.name + ":";
  for (const Factor& factor : term.factors) text += " " + factor.column + "^" + std::to_string(factor.power);
  return text;
}

}  // namespace

TEST_CASE("terms are read as spreadsheet arithmetic on headings", "[terms]") {
  const auto table = headed({"A", "B", "Zone 1", "Firing time (h)", "A*B", "x^2", "x", "Zone", "temp-in",
                             "it's", "größe", "9", "'q'", "=sum", "c/d + e"});
  struct Row {
    const char* text;
    const char* expected;
  };
  const std::vector<Row> rows{
      {"A", "A: A^1"},
      {"  A ", "A: A^1"},
      {"a", "A: A^1"},
      {"A^2", "A^2: A^2"},
      {"A ^ 2", "A^2: A^2"},
      {"A^1", "A: A^1"},
      {"A*A", "A^2: A^2"},
      {"B*A*B", "B*A*B: B^1 A*B^1"},
      {"A^2*Zone 1", "A^2*Zone 1: A^2 Zone 1^1"},
      {"Zone 1*Zone", "Zone 1*Zone: Zone 1^1 Zone^1"},  // the longest heading at each place
      {"zone 1 * ZONE", "Zone 1*Zone: Zone 1^1 Zone^1"},
      {"Firing time (h)^3", "Firing time (h)^3: Firing time (h)^3"},
      {"A*B", "A*B: A*B^1"},          // a heading of that very name
      {"A*'B'", "'A'*'B': A^1 B^1"},  // and how to mean the product beside it
      {"B*A", "B*A: B^1 A^1"},
      {"A*B*B", "A*B*B: A*B^1 B^1"},
      {"x^2", "x^2: x^2^1"},
      {"x^2^2", "x^2^2: x^2^2"},
      {"'x'^2", "'x'^2: x^2"},
      {"x^3", "x^3: x^3"},
      {"temp-in*A", "temp-in*A: temp-in^1 A^1"},
      {"it's", "it's: it's^1"},
      {"'it''s'*A", "it's*A: it's^1 A^1"},
      {"GRÖßE^2", "größe^2: größe^2"},
      {"9^2", "9^2: 9^2"},
      {"9*A", "9*A: 9^1 A^1"},
      {"'q'", "'q': 'q'^1"},
      {"B*'A'*B", "B^2*A: B^2 A^1"},
      {"=sum*A", "=sum*A: =sum^1 A^1"},
      {"c/d + e*A", "c/d + e*A: c/d + e^1 A^1"},
      {"x^20", "x^20: x^20"},
  };
  for (const Row& row : rows) {
    CAPTURE(row.text);
    CHECK(shown(parse_term(row.text, *table)) == row.expected);
  }
}

TEST_CASE("the name of a term reads back as the same term, whatever the headings are", "[terms][property]") {
  const std::uint64_t seed = 4711;
  CAPTURE(seed);
  Random random(seed);
  for (int round = 0; round < 300; ++round) {
    std::vector<std::string> headings;
    while (headings.size() < 5) {
      std::string heading;
      for (std::uint64_t length = 1 + random.below(4); length > 0; --length)
        heading += "ab*^'2 "[random.below(7)];
      const auto same = [&](const std::string& other) {
        return Table(*headed({other})).matches(heading).size() == 1;
      };
      if (heading.find_first_not_of(' ') == std::string::npos) continue;
      if (std::any_of(headings.begin(), headings.end(), same)) continue;
      headings.push_back(heading);
    }
    const auto table = headed(headings);
    std::string text;
    std::vector<Factor> factors;
    for (std::uint64_t k = 1 + random.below(3); k > 0; --k) {
      const std::string& heading = headings[random.below(5)];
      std::string quoted;
      for (const char c : heading) quoted += c == '\'' ? std::string("''") : std::string(1, c);
      const int power = 1 + static_cast<int>(random.below(3));
      text += (text.empty() ? "'" : "*'") + quoted + "'^" + std::to_string(power);
      const auto known =
          std::find_if(factors.begin(), factors.end(), [&](const Factor& f) { return f.column == heading; });
      if (known == factors.end())
        factors.push_back({heading, power});
      else
        known->power += power;
    }
    CAPTURE(headings, text);
    const Term term = parse_term(text, *table);
    CHECK(term.factors == factors);
    CHECK(parse_term(term.name, *table) == term);
  }
}

TEST_CASE("a term that cannot be read is refused at its place", "[terms][error]") {
  const auto table = headed({"A", "B", "Zone 1", "größe"});
  struct Row {
    const char* text;
    ErrorCode code;
    double position;  // or 0
    const char* found_or_name;
  };
  const std::vector<Row> rows{
      {"", ErrorCode::term_not_readable, 1, ""},
      {"  ", ErrorCode::term_not_readable, 3, ""},
      {"A*", ErrorCode::term_not_readable, 3, ""},
      {"*A", ErrorCode::term_not_readable, 1, "*A"},
      {"A**B", ErrorCode::term_not_readable, 3, "*B"},
      {"A^", ErrorCode::term_not_readable, 3, ""},
      {"A^x", ErrorCode::term_not_readable, 3, "x"},
      {"A^0", ErrorCode::term_not_readable, 3, "0"},
      {"A^-1", ErrorCode::term_not_readable, 3, "-1"},
      {"A^1.5", ErrorCode::term_not_readable, 3, "1.5"},
      {"A^2^2", ErrorCode::term_not_readable, 4, "^2"},
      {"A^21", ErrorCode::term_not_readable, 3, "21"},
      {"A^99999999999999999999", ErrorCode::term_not_readable, 3, "99999999999999999999"},
      {"A^11*B^10", ErrorCode::term_not_readable, 7, "^10"},
      {"A + B", ErrorCode::term_not_readable, 3, "+ B"},
      {"größe + B", ErrorCode::term_not_readable, 7, "+ B"},  // letters are counted, not bytes
      {"A:B", ErrorCode::term_not_readable, 2, ":B"},
      {"C", ErrorCode::unknown_column, 0, "C"},
      {"A*Zone 2^2", ErrorCode::unknown_column, 0, "Zone 2"},
      {"'C'", ErrorCode::unknown_column, 0, "C"},
      {"'A", ErrorCode::unknown_column, 0, "'A"},
  };
  for (const Row& row : rows) {
    CAPTURE(row.text);
    try {
      parse_term(row.text, *table);
      FAIL_CHECK("read");
    } catch (const Error& error) {
      CHECK(error.code == row.code);
      if (error.code == ErrorCode::term_not_readable) {
        CHECK(error.facts.text(FactId::term) == row.text);
        CHECK(error.facts.number(FactId::position) == row.position);
        CHECK(error.facts.text(FactId::found) == row.found_or_name);
      } else {
        CHECK(error.facts.text(FactId::name) == row.found_or_name);
        CHECK_FALSE(error.facts.list(FactId::allowed).empty());
      }
    }
  }
  CHECK(tolerance::largest_degree == 20);
}

TEST_CASE("terms know what they are built from", "[terms]") {
  const auto table = headed({"A", "B", "C"});
  const auto term = [&](const char* text) { return resolve_term(text, *table); };
  CHECK(is_lower_order(term("A"), term("A*B")));
  CHECK(is_lower_order(term("A*B"), term("A^2*B")));
  CHECK_FALSE(is_lower_order(term("A^2"), term("A*B")));
  CHECK_FALSE(is_lower_order(term("A*B"), term("A*B")));
  CHECK_FALSE(is_lower_order(term("C"), term("A*B")));
  CHECK(same_term(term("A*B"), term("B*A")));
  using Names = std::vector<std::string>;
  CHECK(missing_lower_terms(term("A^2*B"), {term("A"), term("A*B")}, *table) == Names{"B", "A^2"});
  CHECK(missing_lower_terms(term("A*B*C"), {}, *table) == Names{"A", "B", "C", "A*B", "A*C", "B*C"});
  CHECK(missing_lower_terms(term("A^3"), {term("A"), term("A^2"), term("A^3")}, *table).empty());
  CHECK(missing_lower_terms(term("A"), {}, *table).empty());
}

TEST_CASE(
    "a term of twenty factors does not make the search for missing ones grow with their number of parts",
    "[terms]") {
  std::vector<std::string> headings;
  std::string text;
  for (int i = 0; i < 20; ++i) {
    headings.push_back("c" + std::to_string(i));
    text += (i > 0 ? "*" : "") + headings.back();
  }
  const auto table = headed(headings);
  std::vector<ResolvedTerm> model;
  for (std::size_t j = 0; j < 20; ++j) model.push_back(plain_term(j, *table));
  // 2^20 - 2 parts, of which the 20 of first order are present.
  CHECK(missing_lower_terms(resolve_term(text, *table), model, *table).size() == 20);
}
