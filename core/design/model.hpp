// The model: what the user asks, as plain data. Readable and writable as the name | value lines of a settings
// range.
#pragma once

#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <vector>

namespace unply {

enum class Purpose { test_hypothesis, explore, predict };
enum class StandardErrors { ordinary, robust };  // robust: heteroscedasticity-consistent, HC3

/// One factor of a term: a column, raised to a whole power.
struct Factor {
  std::string column;
  int power = 1;
  bool operator==(const Factor&) const = default;
};

/// A term as spreadsheet arithmetic on headings: `A`, `A*B`, `A^2`, `A^2*B`.
struct Term {
  std::string name;  // canonical text
  std::vector<Factor> factors;
  bool operator==(const Term&) const = default;
};

struct Model {
  Purpose purpose = Purpose::explore;
  std::string response;                 // heading; empty: no response (measures of the predictors alone)
  std::vector<std::string> terms;       // as written by the user; empty: every column but the response
  std::vector<std::string> categories;  // columns to be read as categories although they hold numbers
  std::map<std::string, std::string>
      baselines;  // column -> level, else its most frequent; makes it a category
  bool intercept = true;
  bool centre = false;  // subtract its mean over the used rows from every column of numbers in a
                        // product or power, there and where it stands alone
  double level = 0.95;  // of intervals
  StandardErrors standard_errors = StandardErrors::ordinary;
  std::optional<double> smallest_effect;  // that matters: response units per unit of the term; for every term
  std::map<std::string, double> smallest_effects;  // the same for single terms; wins over the one above
  bool visible_rows_only = false;
  bool centred_condition = false;  // condition indices of centred columns, without the intercept
  std::uint64_t seed = 20260101;   // of every random draw
  bool operator==(const Model&) const = default;
};

}  // namespace unply
