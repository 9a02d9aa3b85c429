#include "core/report/analysis.hpp"

#include <algorithm>
#include <optional>

namespace unply {
namespace {

Layout layout_of(const CorrelationTable& table, const Model& model) {
  Layout layout;
  layout.response = table.response;
  layout.intercept = true;
  for (const std::string& name : table.names) {
    if (name == table.response) continue;
    layout.term_of.push_back(layout.terms.size());
    TermLayout term;
    term.name = name;
    term.columns = {layout.columns.size()};
    layout.columns.push_back(name);
    layout.terms.push_back(term);
  }
  (void)model;
  return layout;
}

/// A smallest effect must belong to a term or a column of the design, or it would be lost silently.
void check_smallest_effects(const Model& model, const Layout& layout) {
  for (const auto& [name, effect] : model.smallest_effects) {
    const bool known = std::find(layout.columns.begin(), layout.columns.end(), name) != layout.columns.end() ||
                       std::any_of(layout.terms.begin(), layout.terms.end(),
                                   [&name = name](const TermLayout& term) { return term.name == name; });
    if (!known)
      throw Error(ErrorCode::unknown_column, {{FactId::name, name}, {FactId::allowed, layout.columns}});
  }
}

/// The fit knows columns by their number and coefficients by their rank; the user knows names, and counts what was
/// asked for.
Error in_words_of_the_user(Error error, const Layout& layout) {
  if (error.code == ErrorCode::value_out_of_range && error.facts.has(FactId::position)) {
    const auto column = static_cast<std::size_t>(error.facts.number(FactId::position)) - 1;
    error.facts.set(FactId::column, column < layout.columns.size() ? layout.columns[column] : layout.response);
  }
  if (error.code == ErrorCode::too_few_rows) {
    const double coefficients = static_cast<double>(layout.columns.size() + (layout.intercept ? 1 : 0));
    error.facts.set(FactId::count, coefficients).set(FactId::needed, coefficients + 1);
  }
  return error;
}

}  // namespace

struct Analysis::State {
  Model model;
  std::shared_ptr<const Table> table;  // empty for an analysis from correlations
  std::optional<Design> design;
  Layout summary_layout;               // of an analysis from correlations
  std::optional<LeastSquaresFit> fit;
  std::optional<Eigen::VectorXd> standard_errors;
  std::optional<std::vector<CoefficientTest>> tests;
  std::optional<std::vector<TermInflation>> inflation;
  std::optional<ConditionTable> condition;
  std::optional<std::vector<CollinearGroup>> groups;
  std::optional<std::vector<DependencyEquation>> equations;
  std::optional<std::vector<LedgerRow>> ledger;
  std::optional<std::vector<TermVerdict>> verdicts;
  std::optional<ResidualChecks> checks;
  std::optional<RecordingPrecision> recording;
  std::unique_ptr<Analysis> other_centring;
};

namespace {

/// The value of a slot, computed when first asked for.
template <class T, class Compute>
const T& once(std::optional<T>& slot, Compute compute) {
  if (!slot) slot.emplace(compute());
  return *slot;
}

}  // namespace

Analysis::Analysis(std::shared_ptr<const Table> table, Model model) : state_(std::make_unique<State>()) {
  state_->model = std::move(model);
  state_->table = std::move(table);
}

Analysis::Analysis(const CorrelationTable& table, Model model) : state_(std::make_unique<State>()) {
  state_->model = std::move(model);
  state_->summary_layout = layout_of(table, state_->model);
  state_->fit = fit_from_correlations(table);
  check_smallest_effects(state_->model, state_->summary_layout);
}

Analysis::~Analysis() = default;

const Model& Analysis::model() const { return state_->model; }

bool Analysis::has_rows() const { return state_->table != nullptr; }

const Table& Analysis::table() const {
  if (!has_rows()) throw Error(ErrorCode::needs_rows);
  return *state_->table;
}

const Design& Analysis::design() const {
  table();
  return once(state_->design, [this] {
    Design design = make_design(state_->table, state_->model);
    check_smallest_effects(state_->model, design.layout());
    return design;
  });
}

const Layout& Analysis::layout() const { return has_rows() ? design().layout() : state_->summary_layout; }

const LeastSquaresFit& Analysis::fit() const {
  return once(state_->fit, [this] {
    try {
      return fit_least_squares(design(), state_->model.intercept);
    } catch (const Error& error) {
      throw in_words_of_the_user(error, layout());
    }
  });
}

const Eigen::VectorXd& Analysis::standard_errors() const {
  if (!fit().has_response) throw Error(ErrorCode::response_missing);
  if (state_->model.standard_errors == StandardErrors::robust) return checks().robust_standard_errors;
  return fit().standard_errors;
}

const std::vector<CoefficientTest>& Analysis::tests() const {
  return once(state_->tests, [this] { return coefficient_tests(fit(), standard_errors(), state_->model.level); });
}

CoefficientTest Analysis::intercept() const {
  if (!fit().has_response) throw Error(ErrorCode::response_missing);
  const bool robust = state_->model.standard_errors == StandardErrors::robust;
  return intercept_test(fit(), robust ? checks().robust_intercept_standard_error : fit().intercept_standard_error,
                        state_->model.level);
}

const std::vector<TermInflation>& Analysis::inflation() const {
  return once(state_->inflation, [this] { return term_inflation(fit(), layout()); });
}

const ConditionTable& Analysis::condition() const {
  return once(state_->condition, [this] {
    // Without means there is nothing to leave uncentred.
    const bool centred = state_->model.centred_condition || fit().uncentred_factor.size() == 0;
    return condition_table(fit(), layout(), centred);
  });
}

const std::vector<CollinearGroup>& Analysis::groups() const {
  return once(state_->groups, [this] {
    const bool robust = fit().has_response && state_->model.standard_errors == StandardErrors::robust;
    return collinear_groups(fit(), layout(), state_->model.level, robust ? &checks().robust_covariance : nullptr);
  });
}

const std::vector<DependencyEquation>& Analysis::equations() const {
  return once(state_->equations, [this] {
    if (fit().dependencies.empty()) return std::vector<DependencyEquation>{};
    return dependency_equations(design(), fit(), layout());
  });
}

const std::vector<LedgerRow>& Analysis::ledger() const {
  return once(state_->ledger, [this] { return precision_ledger(fit(), layout(), state_->model, standard_errors()); });
}

const std::vector<TermVerdict>& Analysis::verdicts() const {
  return once(state_->verdicts, [this] {
    return unply::verdicts(tests(), ledger(), groups(), layout(), state_->model);
  });
}

const ResidualChecks& Analysis::checks() const {
  if (!fit().has_response) throw Error(ErrorCode::response_missing);
  return once(state_->checks, [this] { return residual_checks(design(), fit(), state_->model.level); });
}

const RecordingPrecision& Analysis::recording() const {
  if (!fit().has_response) throw Error(ErrorCode::response_missing);
  return once(state_->recording, [this] { return recording_precision(design(), fit(), state_->model.seed); });
}

const Analysis* Analysis::with_other_centring() const {
  if (!has_rows()) return nullptr;
  const bool structural = std::any_of(layout().terms.begin(), layout().terms.end(), [](const TermLayout& term) {
    return term.kind == TermKind::power || term.kind == TermKind::product;
  });
  if (!structural) return nullptr;
  if (!state_->other_centring) {
    Model other = state_->model;
    other.centre = !other.centre;
    state_->other_centring = std::make_unique<Analysis>(state_->table, other);
  }
  return state_->other_centring.get();
}

std::uint64_t fingerprint(const Table& table) {
  std::uint64_t hash = 0xcbf29ce484222325u;
  const auto add = [&hash](const void* bytes, std::size_t count) {
    const auto* at = static_cast<const unsigned char*>(bytes);
    for (std::size_t i = 0; i < count; ++i) hash = (hash ^ at[i]) * 0x100000001b3u;
  };
  // Eight bytes a step for the numbers: the same mixing, without a multiplication for every byte of a million rows.
  const auto add_word = [&hash](std::uint64_t word) {
    hash = (hash ^ word) * 0x100000001b3u;
    hash ^= hash >> 29;
  };
  const auto add_text = [&](const std::string& text) {
    add(text.data(), text.size());
    add_word(text.size());
  };
  add_word(table.rows);
  for (const Column& column : table.columns) {
    add_text(column.name);
    for (double number : column.numbers) {
      std::uint64_t word;
      static_assert(sizeof word == sizeof number);
      __builtin_memcpy(&word, &number, sizeof word);
      add_word(word);
    }
    add(column.codes.data(), column.codes.size() * sizeof(std::int32_t));
    for (const std::string& text : column.texts) add_text(text);
    for (std::size_t row : column.error_rows) add_word(row);
  }
  for (std::uint8_t hidden : table.hidden) add(&hidden, 1);
  return hash;
}

}  // namespace unply
