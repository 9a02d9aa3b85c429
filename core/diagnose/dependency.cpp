#include "core/diagnose/dependency.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <map>
#include <optional>
#include <utility>

#include "core/base/names.hpp"
#include "core/base/tolerance.hpp"

namespace unply {
namespace {

/// sum of parts[k] X[k] = constant.
struct Relation {
  std::map<std::size_t, double> parts;
  double constant = 0;
};

/// A number as it is written in an equation, and what the writing means.
struct Written {
  long double value = 0;
  std::string text;
  int effort = 0;  // of reading it: 0 for 1, a little for whole numbers, more for decimals and fractions
};

/// An equation ready to be held against the rows: sum parts = constant in the numbers as written.
struct Candidate {
  std::vector<std::size_t> columns;
  std::vector<long double> coefficients;
  long double constant = 0;
  bool rounded = false;
  std::string text;
  int effort = 0;
  bool holds = true;
};

constexpr int effort_of_unwritable = 12;

std::string six_digits(double value) {
  char text[32];
  std::snprintf(text, sizeof text, "%.6g", value);
  return text;
}

/// Decimals of p / q, or -1 where they never end (or not within six places).
int decimals_of(long long denominator) {
  long long power = 1;
  for (int decimals = 0; decimals <= 6; ++decimals, power *= 10)
    if (power % denominator == 0) return decimals;
  return -1;
}

/// The simplest number within `tolerance` of `value` (> 0): whole, a fraction of small denominator, a decimal
/// number, a fraction of larger denominator; in this order. Fractions are convergents of the continued
/// fraction.
std::optional<Written> simple_positive(double value, double tolerance) {
  if (value > 1e15) return std::nullopt;  // its whole numbers are no longer all doubles
  const double whole = std::nearbyint(value);
  if (std::abs(value - whole) <= tolerance)
    return Written{whole, plain_number(whole), whole == 1 ? 0 : whole == 0 ? 0 : 2};

  long long numerator = 0, denominator = 0;
  {
    long double rest = value;
    long long p0 = 0, q0 = 1, p1 = 1, q1 = 0;
    while (true) {
      const long double floor = std::floor(rest);
      const long double p = floor * static_cast<long double>(p1) + static_cast<long double>(p0);
      const long double q = floor * static_cast<long double>(q1) + static_cast<long double>(q0);
      if (q > tolerance::largest_denominator || p > 1e15L) break;
      p0 = std::exchange(p1, static_cast<long long>(p));
      q0 = std::exchange(q1, static_cast<long long>(q));
      if (p1 > 0 &&
          std::abs(static_cast<long double>(value) - p / q) <= static_cast<long double>(tolerance)) {
        numerator = p1;
        denominator = q1;
        break;
      }
      rest = rest - floor;
      if (rest < 1e-18L) break;
      rest = 1 / rest;
    }
  }
  const auto fraction = [&]() -> Written {
    const long double exact = static_cast<long double>(numerator) / static_cast<long double>(denominator);
    const int decimals = decimals_of(denominator);
    if (decimals >= 0) return {exact, plain_number(static_cast<double>(exact)), 3 + decimals};
    return {exact, std::to_string(numerator) + "/" + std::to_string(denominator), denominator < 20 ? 4 : 8};
  };
  if (denominator > 0 && denominator <= tolerance::readable_denominator) return fraction();
  const int places_before = static_cast<int>(std::floor(std::log10(value))) + 1;
  long double power = 1;
  for (int decimals = 1; decimals <= 15 && places_before + decimals <= tolerance::equation_digits;
       ++decimals) {
    power *= 10;
    const long double scaled = std::nearbyint(static_cast<long double>(value) * power);
    if (scaled > 0 &&
        std::abs(static_cast<long double>(value) - scaled / power) <= static_cast<long double>(tolerance))
      return Written{scaled / power, plain_number(static_cast<double>(scaled / power)), 3 + decimals};
  }
  if (denominator > 0) return fraction();
  return std::nullopt;
}

std::optional<Written> simple_number(double value, double tolerance) {
  if (!std::isfinite(value)) return std::nullopt;
  std::optional<Written> written = simple_positive(std::abs(value), tolerance);
  if (written && value < 0) written->value = -written->value;
  return written;
}

/// A heading that holds an operator between blanks would read as part of the equation.
std::string in_equation(const std::string& name) {
  for (const char* sign : {" + ", " - ", " * ", " / ", " = "})
    if (name.find(sign) != std::string::npos) return "'" + name + "'";
  return name;
}

/// Typical size of a column: the root of its mean square.
double size_of(const LeastSquaresFit& fit, std::size_t column) {
  const auto j = static_cast<Eigen::Index>(column);
  return std::hypot(fit.mean[j], fit.sd[j]);
}

/// The relation in the form `total = constant + sum of the others`, or as a plain sum where all coefficients
/// are equal
/// (`total` is then -1). Numbers are rounded within `relative` where that can be done for all of them.
Candidate write(const Relation& relation, std::ptrdiff_t total, double relative, const LeastSquaresFit& fit,
                const Layout& layout) {
  Candidate result;
  const double unit =
      total >= 0 ? relation.parts.at(static_cast<std::size_t>(total)) : relation.parts.begin()->second;
  const double constant = relation.constant / unit;
  double scale = std::abs(constant);
  for (const auto& [column, part] : relation.parts) scale += std::abs(part / unit) * size_of(fit, column);

  std::vector<std::optional<Written>> numbers;
  result.rounded = true;
  for (const auto& [column, part] : relation.parts) {
    const double coefficient = part / unit;
    numbers.push_back(simple_number(coefficient, relative * std::abs(coefficient)));
    result.rounded = result.rounded && numbers.back().has_value();
  }
  const std::optional<Written> rounded_constant = simple_number(constant, relative * scale);
  result.rounded = result.rounded && rounded_constant.has_value();

  // The right side, or the sum.
  struct Addend {
    bool negative;
    std::string text;
  };
  std::vector<Addend> addends;
  std::size_t k = 0;
  for (const auto& [column, part] : relation.parts) {
    const double coefficient = part / unit;
    const std::optional<Written>& number = numbers[k++];
    result.columns.push_back(column);
    result.coefficients.push_back(result.rounded ? number->value : static_cast<long double>(coefficient));
    if (static_cast<std::ptrdiff_t>(column) == total) continue;
    const bool negative = total >= 0 ? coefficient > 0 : coefficient < 0;
    const std::string size = result.rounded ? number->text : six_digits(std::abs(coefficient));
    const std::string name = in_equation(layout.columns[column]);
    addends.push_back({negative, size == "1" ? name : size + " * " + name});
    result.effort += (number ? number->effort : effort_of_unwritable) + (negative ? 1 : 0);
  }
  result.constant = result.rounded ? rounded_constant->value : static_cast<long double>(constant);
  result.effort += rounded_constant ? rounded_constant->effort : effort_of_unwritable;
  const std::string constant_text = result.rounded ? rounded_constant->text : six_digits(std::abs(constant));
  const bool constant_is_zero = result.constant == 0;
  if (total >= 0 && !constant_is_zero) {
    if (constant > 0)
      addends.insert(addends.begin(), {false, constant_text});
    else
      addends.push_back({true, constant_text});
  }
  std::string text;
  for (const Addend& addend : addends) {
    if (text.empty())
      text = (addend.negative ? "-" : "") + addend.text;
    else
      text += (addend.negative ? " - " : " + ") + addend.text;
  }
  if (text.empty()) text = "0";
  if (total >= 0) {
    result.text = in_equation(layout.columns[static_cast<std::size_t>(total)]) + " = " + text;
  } else {
    result.text = text + " = " + (constant < 0 && !constant_is_zero ? "-" : "") + constant_text;
  }
  return result;
}

bool all_equal(const Relation& relation) {
  const double first = relation.parts.begin()->second;
  return std::all_of(relation.parts.begin(), relation.parts.end(), [&](const auto& part) {
    return std::abs(part.second - first) <= tolerance::equation_relative[1] * std::abs(first);
  });
}

/// The column to stand alone on the left, so that the equation is easiest to read; -1: a plain sum reads
/// best.
std::ptrdiff_t choose_total(const Relation& relation, std::size_t dependent, const LeastSquaresFit& fit,
                            const Layout& layout) {
  const std::size_t size = relation.parts.size();
  const bool is_zero_sum = write(relation, -1, tolerance::equation_relative[1], fit, layout).constant == 0;
  if (size > 1 && all_equal(relation) && (size > 2 || !is_zero_sum)) return -1;
  auto best = static_cast<std::ptrdiff_t>(dependent);
  if (size > static_cast<std::size_t>(tolerance::equation_columns)) return best;
  int least = write(relation, best, tolerance::equation_relative[1], fit, layout).effort;
  for (auto part = relation.parts.rbegin(); part != relation.parts.rend(); ++part) {
    const auto total = static_cast<std::ptrdiff_t>(part->first);
    const int effort = write(relation, total, tolerance::equation_relative[1], fit, layout).effort;
    if (effort >= least) continue;
    least = effort;
    best = total;
  }
  return best;
}

/// a - b, and nothing where rounding is all that is left.
double difference(double a, double b) {
  const double result = a - b;
  return std::abs(result) <= tolerance::equation_relative[1] * (std::abs(a) + std::abs(b)) ? 0 : result;
}

/// `target` minus that multiple of `other` which removes the most columns at once.
Relation without_shared(const Relation& target, const Relation& other) {
  std::vector<double> factors;
  for (const auto& [column, part] : other.parts) {
    const auto in_target = target.parts.find(column);
    if (in_target != target.parts.end()) factors.push_back(in_target->second / part);
  }
  if (factors.empty()) return target;
  std::sort(factors.begin(), factors.end());
  double factor = factors.front();
  std::size_t longest = 0;
  for (std::size_t start = 0, i = 0; i < factors.size(); ++i) {
    if (difference(factors[i], factors[start]) != 0) start = i;
    if (i - start + 1 <= longest) continue;
    longest = i - start + 1;
    factor = factors[start];
  }
  Relation result = target;
  for (const auto& [column, part] : other.parts) {
    double& coefficient = result.parts[column];
    coefficient = difference(coefficient, factor * part);
    if (coefficient == 0) result.parts.erase(column);
  }
  result.constant = difference(target.constant, factor * other.constant);
  return result;
}

/// Subtracts one relation from another wherever that leaves fewer columns. The relations stay independent.
std::vector<Relation> in_fewer_columns(std::vector<Relation> relations) {
  if (relations.size() > static_cast<std::size_t>(tolerance::equations_simplified)) return relations;
  const auto weight = [](const Relation& relation) {
    return 2 * relation.parts.size() + (relation.constant != 0 ? 1 : 0);
  };
  bool changed = true;
  for (std::size_t round = 0; changed && round < relations.size(); ++round) {
    changed = false;
    // From the last: a total of totals is said by the totals before it.
    for (std::size_t t = relations.size(); t-- > 0;) {
      Relation& target = relations[t];
      for (const Relation& other : relations) {
        if (&other == &target) continue;
        const Relation combined = without_shared(target, other);
        if (!combined.parts.empty() && weight(combined) < weight(target)) {
          target = combined;
          changed = true;
        }
      }
    }
  }
  return relations;
}

/// Marks the candidates that do not hold in some row: |sum c x - constant| <= (8 + k) u (sum |c x| +
/// |constant|) for k columns, which is what rounding each cell to a double, and the sum that made one of
/// them, can leave.
void confirm(const RowSource& rows, std::vector<Candidate*>& candidates) {
  const std::size_t width = rows.columns() + (rows.has_response() ? 1 : 0);
  const std::size_t block = std::clamp<std::size_t>(65536 / std::max<std::size_t>(width, 1), 16, 1024);
  std::vector<double> high(width * block), low(width * block);
  for (std::size_t first = 0; first < rows.rows(); first += block) {
    const std::size_t count = std::min(block, rows.rows() - first);
    rows.fill(first, count, block, high.data(), low.data());
    for (Candidate* candidate : candidates) {
      const auto terms = static_cast<long double>(candidate->columns.size());
      const long double allowed = (tolerance::rank_relative + terms * tolerance::unit_roundoff);
      for (std::size_t i = 0; candidate->holds && i < count; ++i) {
        long double sum = -candidate->constant, scale = std::abs(candidate->constant);
        for (std::size_t k = 0; k < candidate->columns.size(); ++k) {
          const std::size_t at = candidate->columns[k] * block + i;
          const long double part =
              candidate->coefficients[k] * (static_cast<long double>(high[at]) + low[at]);
          sum += part;
          scale += std::abs(part);
        }
        candidate->holds = std::abs(sum) <= allowed * scale;
      }
    }
    candidates.erase(
        std::remove_if(candidates.begin(), candidates.end(), [](const Candidate* c) { return !c->holds; }),
        candidates.end());
  }
}

}  // namespace

std::vector<DependencyEquation> dependency_equations(const RowSource& rows, const LeastSquaresFit& fit,
                                                     const Layout& layout) {
  if (fit.dependencies.empty()) return {};
  std::vector<Relation> found;
  for (const LinearDependency& dependency : fit.dependencies) {
    Relation relation;
    relation.parts[dependency.column] = 1;
    for (std::size_t k = 0; k < dependency.on.size(); ++k)
      relation.parts[dependency.on[k]] = -dependency.coefficients[k];
    relation.constant = dependency.constant;
    found.push_back(std::move(relation));
  }
  const std::vector<Relation> simpler = in_fewer_columns(found);
  const bool some_simpler = !std::equal(
      found.begin(), found.end(), simpler.begin(),
      [](const Relation& a, const Relation& b) { return a.parts == b.parts && a.constant == b.constant; });

  // For every relation: its simpler form rounded, then as computed; then the form found by the fit likewise.
  struct Forms {
    std::vector<Candidate> simpler, found;
  };
  const auto forms_of = [&](const Relation& relation, std::size_t dependent) {
    const std::size_t left = relation.parts.count(dependent) ? dependent : relation.parts.rbegin()->first;
    const std::ptrdiff_t total = choose_total(relation, left, fit, layout);
    std::vector<Candidate> forms;
    const bool is_long = relation.parts.size() > static_cast<std::size_t>(tolerance::equation_columns);
    for (const double relative : tolerance::equation_relative) {
      // A long equation is seldom simple; the middle distance finds a plain sum or a total of hundreds.
      if (is_long && relative != tolerance::equation_relative[1]) continue;
      Candidate candidate = write(relation, total, relative, fit, layout);
      if (candidate.rounded) forms.push_back(std::move(candidate));
    }
    forms.push_back(write(relation, total, -1, fit, layout));  // nothing is within a negative distance
    return forms;
  };
  std::vector<Forms> forms(found.size());
  std::vector<Candidate*> candidates;
  for (std::size_t d = 0; d < found.size(); ++d) {
    const std::size_t dependent = fit.dependencies[d].column;
    forms[d].simpler = forms_of(simpler[d], dependent);
    if (some_simpler) forms[d].found = forms_of(found[d], dependent);
    for (Candidate& candidate : forms[d].simpler) candidates.push_back(&candidate);
    for (Candidate& candidate : forms[d].found) candidates.push_back(&candidate);
  }
  confirm(rows, candidates);

  const bool simpler_hold = std::all_of(forms.begin(), forms.end(), [&](const Forms& form) {
    return !some_simpler ||
           std::any_of(form.simpler.begin(), form.simpler.end(), [](const Candidate& c) { return c.holds; });
  });
  std::vector<DependencyEquation> equations;
  for (const Forms& form : forms) {
    const std::vector<Candidate>& choice = simpler_hold ? form.simpler : form.found;
    auto chosen = std::find_if(choice.begin(), choice.end(), [](const Candidate& c) { return c.holds; });
    if (chosen == choice.end())
      --chosen;  // as computed: the fit has shown that it holds over all rows together
    DependencyEquation equation;
    equation.columns = chosen->columns;
    for (const long double c : chosen->coefficients) equation.coefficients.push_back(static_cast<double>(c));
    equation.constant = static_cast<double>(chosen->constant);
    equation.rounded = chosen->rounded;
    equation.is_constant = chosen->columns.size() == 1;
    equation.text = equation.is_constant ? layout.columns[chosen->columns.front()] : chosen->text;
    equations.push_back(std::move(equation));
  }
  return equations;
}

}  // namespace unply
