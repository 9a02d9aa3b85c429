#include "core/base/names.hpp"

#include <algorithm>
#include <limits>

#include "core/base/random.hpp"
#include "tests/support/catch.hpp"

using namespace unply;

TEST_CASE("outer blanks of every kind are cut off, inner ones stay", "[names]") {
  CHECK(trimmed("  Zone 1 \t\n") == "Zone 1");
  CHECK(trimmed("\u00a0 Zone\u00a01\u00a0") == "Zone\u00a01");
  CHECK(trimmed(" \u00a0 ").empty());
  CHECK(trimmed("").empty());
}

TEST_CASE("names are alike whatever their case, in the alphabets of the office's users", "[names]") {
  CHECK(folded(" GRÖẞE") == folded("gröẞe "));  // the rare capital sharp s has no one-letter partner here
  CHECK(folded("ÉTÉ") == folded("été"));
  CHECK(folded("ŁÓDŹ") == folded("łódź"));
  CHECK(folded("ΘΕΡΜΟΣ") != folded("θερμος "));  // the final sigma is a letter of its own
  CHECK(folded("ΘΕΡΜΟ") == folded("θερμο"));
  CHECK(folded("ТЕМПЕРАТУРА Ё") == folded("температура ё"));
  CHECK(folded("×") != folded("÷"));  // 0xd7 and 0xf7 are signs between the letters
  CHECK(folded("a") != folded("b"));
}

TEST_CASE("letters and where they begin, for UTF-8 and for bytes that are none", "[names]") {
  std::vector<std::size_t> starts;
  CHECK(code_points("aß€😀", &starts) == U"aß€😀");
  CHECK(starts == std::vector<std::size_t>{0, 1, 3, 6, 10});
  starts.clear();
  const std::u32string broken = code_points("\xff\xe2\x82 \xc3", &starts);
  CHECK(broken.size() == 5);
  CHECK(starts.size() == 6);
  CHECK(starts.back() == 5);
}

TEST_CASE("a slip of the pen is answered with the nearest name, a strange word with none", "[names]") {
  const std::vector<std::string> known{"Moisture", "Zone_1", "Zone_2", "y"};
  CHECK(nearest_name("Moistrue", known) == "Moisture");
  CHECK(nearest_name("moisture ", known) == "Moisture");
  CHECK(nearest_name("Zone_3", known) == "Zone_1");
  CHECK(nearest_name("Zone2", known) == "Zone_2");
  CHECK(nearest_name("Pressure", known).empty());
  CHECK(nearest_name("x", known).empty());  // all of its letters would have to change
  CHECK(nearest_name("abc", {}).empty());
  // tolerance::nearest_name_share: 3 of 9 letters may differ, 4 may not.
  CHECK(nearest_name("abcdefxyz", {"abcdefghi"}) == "abcdefghi");
  CHECK(nearest_name("abcdewxyz", {"abcdefghi"}).empty());
}

TEST_CASE("names are put in the order a reader expects", "[names]") {
  std::vector<std::string> names{"batch 10", "batch 2", "Alpha", "batch 02", "alpha",
                                 "Zeta",     "10",      "9",     "batch"};
  std::sort(names.begin(), names.end(), natural_less);
  CHECK(names == std::vector<std::string>{"9", "10", "Alpha", "alpha", "batch", "batch 02", "batch 2",
                                          "batch 10", "Zeta"});
}

TEST_CASE("the order of names is a strict weak order", "[names][property]") {
  const std::uint64_t seed = 71;
  CAPTURE(seed);
  Random random(seed);
  std::vector<std::string> names;
  for (int i = 0; i < 60; ++i) {
    std::string name;
    for (std::uint64_t length = random.below(5); length > 0; --length) name += "01aA b9"[random.below(7)];
    names.push_back(name);
  }
  bool ordered = true;
  for (const auto& a : names) {
    ordered = ordered && !natural_less(a, a);
    for (const auto& b : names) {
      ordered = ordered && !(natural_less(a, b) && natural_less(b, a));
      for (const auto& c : names)
        ordered = ordered && !(natural_less(a, b) && natural_less(b, c) && !natural_less(a, c));
    }
  }
  CHECK(ordered);
}

TEST_CASE("a number is written as a person writes it and reads back the same", "[names]") {
  CHECK(plain_number(3) == "3");
  CHECK(plain_number(-0.0) == "0");
  CHECK(plain_number(0.25) == "0.25");
  CHECK(plain_number(100000) == "100000");
  CHECK(plain_number(-20260101) == "-20260101");
  CHECK(plain_number(0.1 + 0.2) == "0.30000000000000004");
  CHECK(plain_number(1e300) == "1e+300");
  CHECK(plain_number(1.5e-7) == "1.5e-07");
  const std::uint64_t seed = 72;
  CAPTURE(seed);
  Random random(seed);
  for (int i = 0; i < 1000; ++i) {
    const double x = (random.uniform() - 0.5) * std::pow(10.0, static_cast<double>(random.below(600)) - 300);
    CHECK(std::stod(plain_number(x)) == x);
  }
}
