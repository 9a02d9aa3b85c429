#include "core/design/terms.hpp"

#include <algorithm>
#include <map>
#include <set>
#include <utility>

#include "core/base/error.hpp"
#include "core/base/names.hpp"
#include "core/base/tolerance.hpp"
#include "core/design/design.hpp"

namespace unply {
namespace {

bool is_blank(char32_t c) { return c == U' ' || (c >= U'\t' && c <= U'\r') || c == 0xa0; }
bool is_operator(char32_t c) { return c == U'*' || c == U'^'; }
bool is_digit(char32_t c) { return c >= U'0' && c <= U'9'; }

std::string heading(const Table& table, std::size_t column) {
  return std::string(trimmed(table.columns[column].name));
}

/// One pass over the text of a term.
class TermReader {
 public:
  TermReader(const std::string& text, const Table& table)
      : text_(text), table_(table), letters_(code_points(text, &starts_)) {
    small_ = letters_;
    std::transform(small_.begin(), small_.end(), small_.begin(), small_letter);
    for (const Column& column : table.columns) {
      exact_.push_back(code_points(trimmed(column.name)));
      alike_.push_back(folded(column.name));
    }
  }

  /// Columns and powers in order of first appearance, same columns merged.
  std::vector<std::pair<std::size_t, int>> factors() {
    std::vector<std::pair<std::size_t, int>> result;
    int degree = 0;
    std::size_t at = after_blanks(0);
    if (at == letters_.size()) refuse(at);
    for (;;) {
      const std::size_t column = read_heading(at);
      at = after_blanks(at);
      const std::size_t operator_at = at;
      int power = 1;
      if (at < letters_.size() && letters_[at] == U'^') {
        at = after_blanks(at + 1);
        power = read_power(at);
        at = after_blanks(at);
      }
      degree += power;
      if (degree > tolerance::largest_degree) refuse(std::min(operator_at, letters_.size()));
      const auto same =
          std::find_if(result.begin(), result.end(), [&](const auto& f) { return f.first == column; });
      if (same != result.end())
        same->second += power;
      else
        result.emplace_back(column, power);
      if (at == letters_.size()) return result;
      if (letters_[at] != U'*') refuse(at);
      at = after_blanks(at + 1);
      if (at == letters_.size()) refuse(at);
    }
  }

 private:
  std::size_t after_blanks(std::size_t at) const {
    while (at < letters_.size() && is_blank(letters_[at])) ++at;
    return at;
  }

  bool ends_factor(std::size_t at) const {
    at = after_blanks(at);
    return at == letters_.size() || is_operator(letters_[at]);
  }

  std::string part(std::size_t from, std::size_t to) const {
    return std::string(trimmed(text_.substr(starts_[from], starts_[to] - starts_[from])));
  }

  [[noreturn]] void refuse(std::size_t at) const {
    throw Error(ErrorCode::term_not_readable, {{FactId::term, text_},
                                               {FactId::position, static_cast<double>(at + 1)},
                                               {FactId::found, part(at, letters_.size())}});
  }

  int read_power(std::size_t& at) const {
    const std::size_t start = at;
    int power = 0;
    while (at < letters_.size() && is_digit(letters_[at])) {
      power = power * 10 + static_cast<int>(letters_[at] - U'0');
      if (power > tolerance::largest_degree) refuse(start);
      ++at;
    }
    if (power == 0 || (at < letters_.size() && !ends_factor(at))) refuse(start);
    return power;
  }

  /// The longest heading that stands at `at` and is followed by an operator or the end.
  std::size_t read_heading(std::size_t& at) const {
    std::size_t after_quotes = at;
    const std::string in_quotes = letters_[at] == U'\'' ? quoted(after_quotes) : std::string();
    const bool is_quoted = after_quotes > at && ends_factor(after_quotes);
    if (is_quoted && !table_.matches(in_quotes).empty()) {
      at = after_quotes;
      return table_.find(in_quotes);
    }
    // As written first: two headings may differ in case only.
    for (const bool exactly : {true, false}) {
      std::size_t longest = 0;
      std::vector<std::size_t> found;
      for (std::size_t j = 0; j < exact_.size(); ++j) {
        const std::u32string& name = exactly ? exact_[j] : alike_[j];
        if (name.empty() || name.size() < longest) continue;
        if ((exactly ? letters_ : small_).compare(at, name.size(), name) != 0 ||
            !ends_factor(at + name.size()))
          continue;
        if (name.size() > longest) found.clear();
        longest = name.size();
        found.push_back(j);
      }
      if (found.empty()) continue;
      const std::string name = part(at, at + longest);
      at += longest;
      return found.size() == 1 ? found.front() : table_.find(name);  // which refuses several
    }
    if (is_quoted) return table_.find(in_quotes);  // which refuses it
    // A heading with something else after it: the place where the arithmetic cannot be read.
    std::size_t known = 0;
    for (const std::u32string& name : alike_)
      if (name.size() > known && small_.compare(at, name.size(), name) == 0) known = name.size();
    const std::size_t after = after_blanks(at + known);
    if (known > 0 && after < letters_.size() &&
        std::u32string(U"+-/:;,()[]{}=<>&|!?\"'").find(letters_[after]) != std::u32string::npos)
      refuse(after);
    std::size_t end = at;
    while (end < letters_.size() && !is_operator(letters_[end])) ++end;
    if (end == at) refuse(at);
    const std::size_t column = table_.find(part(at, end));
    at = end;
    return column;
  }

  /// The name between single quotes from `at` on, a doubled quote standing for one; `at` moves behind it, or
  /// stays where the quote is never closed.
  std::string quoted(std::size_t& at) const {
    std::string name;
    for (std::size_t i = at + 1; i < letters_.size(); ++i) {
      if (letters_[i] == U'\'') {
        if (i + 1 == letters_.size() || letters_[i + 1] != U'\'') {
          at = i + 1;
          return name;
        }
        ++i;
      }
      name += text_.substr(starts_[i], starts_[i + 1] - starts_[i]);
    }
    return {};
  }

  const std::string& text_;
  const Table& table_;
  std::vector<std::size_t> starts_;  // byte of each letter
  std::u32string letters_, small_;
  std::vector<std::u32string> exact_, alike_;  // headings
};

std::string in_quotes(const std::string& name) {
  std::string result = "'";
  for (const char c : name) result += c == '\'' ? std::string("''") : std::string(1, c);
  return result + "'";
}

using Factors = std::vector<std::pair<std::size_t, int>>;

std::string written(const Factors& factors, const Table& table, bool quotes) {
  std::string text;
  for (const auto& [column, power] : factors) {
    if (!text.empty()) text += "*";
    text += quotes ? in_quotes(heading(table, column)) : heading(table, column);
    if (power > 1) text += "^" + std::to_string(power);
  }
  return text;
}

/// The plain text where it reads back as the same term, else every heading in quotes.
std::string canonical_name(const Factors& factors, const Table& table) {
  const std::string plain = written(factors, table, false);
  const bool plain_headings = std::none_of(factors.begin(), factors.end(), [&](const auto& factor) {
    return heading(table, factor.first).find_first_of("*^'") != std::string::npos;
  });
  // A heading of its own may read like this term ("A*B" beside A and B), so the text is always read again.
  try {
    if (TermReader(plain, table).factors() == factors) return plain;
  } catch (const Error&) {
    if (plain_headings) return plain;  // doubled headings: refused elsewhere, with a better reason
  }
  return written(factors, table, true);
}

ResolvedTerm resolved(const Factors& factors, const Table& table) {
  ResolvedTerm result;
  // Most terms are plain columns, whose text needs no second reading.
  const std::string first = heading(table, factors.front().first);
  const bool plain = factors.size() == 1 && factors.front().second == 1 && first.compare(0, 1, "'") != 0;
  result.term.name = plain ? first : canonical_name(factors, table);
  for (const auto& [column, power] : factors) {
    result.term.factors.push_back({table.columns[column].name, power});
    result.columns.push_back(column);
  }
  return result;
}

std::map<std::size_t, int> powers(const ResolvedTerm& term) {
  std::map<std::size_t, int> result;
  for (std::size_t k = 0; k < term.columns.size(); ++k) result[term.columns[k]] = term.term.factors[k].power;
  return result;
}

}  // namespace

ResolvedTerm resolve_term(const std::string& text, const Table& table) {
  return resolved(TermReader(text, table).factors(), table);
}

ResolvedTerm plain_term(std::size_t column, const Table& table) { return resolved({{column, 1}}, table); }

Term parse_term(const std::string& text, const Table& table) { return resolve_term(text, table).term; }

bool same_term(const ResolvedTerm& a, const ResolvedTerm& b) { return powers(a) == powers(b); }

bool is_lower_order(const ResolvedTerm& part, const ResolvedTerm& whole) {
  const std::map<std::size_t, int> all = powers(whole), some = powers(part);
  return some != all && std::all_of(some.begin(), some.end(), [&](const auto& factor) {
           const auto found = all.find(factor.first);
           return found != all.end() && found->second >= factor.second;
         });
}

std::vector<std::string> missing_lower_terms(const ResolvedTerm& term, const std::vector<ResolvedTerm>& model,
                                             const Table& table) {
  // A term has at most 2^20 lower-order ones, but the search ends once enough are missing, and a model does
  // not hold many: what is walked through is the model's size and a bit.
  std::set<Factors> present;
  for (const ResolvedTerm& other : model) {
    Factors factors;
    for (const auto& factor : powers(other)) factors.push_back(factor);
    present.insert(factors);
  }
  const auto degree = [](const Factors& factors) {
    int sum = 0;
    for (const auto& factor : factors) sum += factor.second;
    return sum;
  };
  std::vector<std::string> missing;
  std::vector<Factors> level;  // all lower-order terms of one degree
  for (std::size_t k = 0; k < term.columns.size(); ++k) level.push_back({{term.columns[k], 1}});
  Factors whole;
  for (std::size_t k = 0; k < term.columns.size(); ++k)
    whole.emplace_back(term.columns[k], term.term.factors[k].power);
  for (int d = 1; d < degree(whole); ++d) {
    for (const Factors& lower : level) {
      Factors sorted = lower;
      std::sort(sorted.begin(), sorted.end());
      if (present.count(sorted)) continue;
      missing.push_back(resolved(lower, table).term.name);
      if (missing.size() == static_cast<std::size_t>(tolerance::largest_degree)) return missing;
    }
    // One degree up: raise the last factor, or append a later one, so that each term is met once.
    std::vector<Factors> next;
    for (const Factors& lower : level) {
      const auto last = static_cast<std::size_t>(
          std::find(term.columns.begin(), term.columns.end(), lower.back().first) - term.columns.begin());
      for (std::size_t k = last; k < term.columns.size(); ++k) {
        Factors raised = lower;
        if (k == last) {
          if (raised.back().second == term.term.factors[k].power) continue;
          ++raised.back().second;
        } else {
          raised.emplace_back(term.columns[k], 1);
        }
        next.push_back(std::move(raised));
      }
    }
    level = std::move(next);
  }
  return missing;
}

}  // namespace unply
