// Facts: the named numbers and names that a sentence needs. The core hands facts on; only extension/text turns
// them into words.
#pragma once

#include <map>
#include <string>
#include <utility>
#include <variant>
#include <vector>

namespace unply {

/// What a fact is about. One name for one meaning, in every error, finding and paragraph.
enum class FactId {
  address,         // cell or range as text, e.g. "C7" or "C2:C40"
  addresses,       // list of the same (the first few)
  allowed,         // what would be accepted, as text or list
  baseline,        // level of a category that the others are compared with
  code,            // number of an office error, e.g. 532
  column,          // heading of a column
  columns,         // headings
  condition_index,
  count,           // how many
  df,              // (residual) degrees of freedom
  df_numerator,    // degrees of freedom of a joint test
  digits,
  effect,          // smallest effect that matters, in the response's units per unit of the term
  equation,        // a dependency, ready to read
  estimate,
  expected,        // a number that was expected
  f,               // F statistic
  file,            // name of the document
  fingerprint,     // of the data, 16 hexadecimal digits
  factor,          // a ratio, e.g. how many times wider
  first_row,
  found,           // what was found instead (text)
  half_width,
  last_row,
  level,           // confidence level, 0..1
  levels,          // levels of a category
  lower,
  name,            // a name as the user wrote it
  needed,          // how many would be needed
  number,          // a number without a more special name
  p,               // p-value
  position,        // 1-based place in a text
  range,           // range address as text
  response,        // heading of the response
  rows,            // rows used
  rows_left_out,
  rows_needed,
  scatter,         // residual standard deviation
  seed,
  setting,         // name of a setting
  share,           // 0..1
  sheet,
  spread,          // standard deviation of a column
  standard_error,
  suggestion,      // nearest known name
  term,
  terms,
  text,            // any other text
  upper,
  settings,        // list of `name = value`
  value,           // a value as the user wrote it
  version,         // of Unply
  date,
  vif,
  weights,         // list of numbers, one for each of `columns`
};

using FactValue = std::variant<double, std::string, std::vector<std::string>, std::vector<double>>;

/// A small bag of facts. Reading one that is not there throws std::out_of_range: a sentence without its facts is a
/// mistake of ours, caught by the tests of extension/text.
class Facts {
 public:
  Facts() = default;
  Facts(std::initializer_list<std::pair<const FactId, FactValue>> facts) : facts_(facts) {}

  Facts& set(FactId id, FactValue value) {
    facts_[id] = std::move(value);
    return *this;
  }
  bool has(FactId id) const { return facts_.count(id) != 0; }
  double number(FactId id) const { return std::get<double>(facts_.at(id)); }
  const std::string& text(FactId id) const { return std::get<std::string>(facts_.at(id)); }
  const std::vector<std::string>& list(FactId id) const { return std::get<std::vector<std::string>>(facts_.at(id)); }
  const std::vector<double>& numbers(FactId id) const { return std::get<std::vector<double>>(facts_.at(id)); }
  const std::map<FactId, FactValue>& all() const { return facts_; }

 private:
  std::map<FactId, FactValue> facts_;
};

}  // namespace unply
