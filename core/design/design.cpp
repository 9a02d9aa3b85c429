#include "core/design/design.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numeric>
#include <optional>
#include <set>

#include "core/base/error.hpp"
#include "core/base/names.hpp"
#include "core/base/tolerance.hpp"
#include "core/design/coding.hpp"
#include "core/design/terms.hpp"

namespace unply {

struct Design::State {
  Layout layout;
  RowSelection selection;
  std::vector<CategoryInfo> categories;
  std::vector<DesignNote> notes;
  std::shared_ptr<const Coding> coding;
  std::unique_ptr<const CodedRows> rows;
};

namespace {

double as_number(std::size_t count) { return static_cast<double>(count); }

std::string heading(const Column& column) { return std::string(trimmed(column.name)); }

/// Cells gathered for a refusal: all counted, the first few named.
struct NamedCells {
  std::vector<std::string> addresses;
  std::size_t count = 0;
  std::size_t first_row = 0;

  void add(const Column& column, std::size_t row) {
    if (count == 0) first_row = row;
    if (count < static_cast<std::size_t>(tolerance::cells_named)) addresses.push_back(column.address(row));
    ++count;
  }
};

/// What the cells of a column hold, over the rows that are looked at.
struct Contents {
  std::size_t numbers = 0;
  NamedCells texts, infinite, errors;

  bool only_texts() const { return numbers == 0 && texts.count > 0; }
};

/// `hidden`: rows not looked at; empty: all are.
Contents read_contents(const Column& column, std::size_t rows, const std::vector<std::uint8_t>& hidden) {
  Contents contents;
  const auto looked_at = [&](std::size_t i) { return hidden.empty() || hidden[i] == 0; };
  std::size_t finite = 0;
  for (const double x : column.numbers) finite += std::isfinite(x);
  if (finite == rows && hidden.empty() && column.codes.empty()) {
    contents.numbers = rows;
  } else {
    const std::vector<std::uint8_t> counts = texts_that_count(column);
    for (std::size_t i = 0; i < rows; ++i) {
      if (!looked_at(i)) continue;
      if (!std::isnan(column.numbers[i])) {
        ++contents.numbers;
        if (std::isinf(column.numbers[i])) contents.infinite.add(column, i);
      } else if (!column.codes.empty() && column.codes[i] >= 0 &&
                 counts[static_cast<std::size_t>(column.codes[i])]) {
        contents.texts.add(column, i);
      }
    }
  }
  for (const std::size_t i : column.error_rows)
    if (looked_at(i)) contents.errors.add(column, i);
  return contents;
}

void refuse_errors(const Column& column, const Contents& contents) {
  if (contents.errors.count == 0) return;
  throw Error(ErrorCode::error_cells, {{FactId::column, heading(column)},
                                       {FactId::addresses, contents.errors.addresses},
                                       {FactId::count, as_number(contents.errors.count)},
                                       {FactId::code, static_cast<double>(column.first_error_code)}});
}

void refuse_texts(const Column& column, const Contents& contents) {
  if (contents.texts.count == 0) return;
  const auto code = static_cast<std::size_t>(column.codes[contents.texts.first_row]);
  throw Error(ErrorCode::text_among_numbers, {{FactId::column, heading(column)},
                                              {FactId::addresses, contents.texts.addresses},
                                              {FactId::count, as_number(contents.texts.count)},
                                              {FactId::text, column.texts[code]}});
}

void refuse_infinite(const Column& column, const Contents& contents) {
  if (contents.infinite.count == 0) return;
  throw Error(ErrorCode::infinite_value, {{FactId::column, heading(column)},
                                          {FactId::addresses, contents.infinite.addresses},
                                          {FactId::count, as_number(contents.infinite.count)}});
}

/// Table::find, but columns with the very same heading are refused as such.
std::size_t find_column(const Table& table, const std::string& name) {
  const std::vector<std::size_t> found = table.matches(name);
  const bool same = found.size() > 1 && std::all_of(found.begin(), found.end(), [&](std::size_t j) {
                      return heading(table.columns[j]) == heading(table.columns[found.front()]);
                    });
  if (!same) return table.find(name);
  std::vector<std::string> addresses;
  for (const std::size_t j : found) addresses.push_back(table.columns[j].heading_address());
  throw Error(ErrorCode::duplicate_heading,
              {{FactId::name, heading(table.columns[found.front()])}, {FactId::addresses, addresses}});
}

bool is_empty(const Column& column) {
  return column.codes.empty() && column.error_rows.empty() &&
         std::all_of(column.numbers.begin(), column.numbers.end(), [](double x) { return std::isnan(x); });
}

std::vector<ResolvedTerm> resolve_terms(const Table& table, const Model& model, std::ptrdiff_t response) {
  std::vector<ResolvedTerm> terms;
  if (model.terms.empty()) {
    for (std::size_t j = 0; j < table.columns.size(); ++j) {
      const Column& column = table.columns[j];
      if (static_cast<std::ptrdiff_t>(j) == response) continue;
      if (heading(column).empty()) {
        if (is_empty(column)) continue;
        throw Error(ErrorCode::missing_heading, {{FactId::address, column.heading_address()}});
      }
      terms.push_back(plain_term(j, table));
    }
  }
  for (const std::string& text : model.terms) {
    if (trimmed(text).empty()) continue;
    try {
      terms.push_back(resolve_term(text, table));
    } catch (const Error& error) {
      if (error.code == ErrorCode::ambiguous_column) find_column(table, error.facts.text(FactId::name));
      throw;
    }
  }
  if (terms.empty()) throw Error(ErrorCode::no_terms);
  return terms;
}

void check_terms(const std::vector<ResolvedTerm>& terms, const Table& table, std::ptrdiff_t response) {
  std::map<std::string, std::vector<std::string>> headings;  // of the columns used
  std::set<std::size_t> used;
  if (response >= 0) used.insert(static_cast<std::size_t>(response));
  for (const ResolvedTerm& term : terms) {
    for (const std::size_t column : term.columns) {
      if (static_cast<std::ptrdiff_t>(column) == response)
        throw Error(ErrorCode::response_among_terms,
                    {{FactId::response, heading(table.columns[column])}, {FactId::term, term.term.name}});
      used.insert(column);
    }
  }
  for (const std::size_t column : used)
    headings[heading(table.columns[column])].push_back(table.columns[column].heading_address());
  for (const auto& [name, addresses] : headings)
    if (addresses.size() > 1)
      throw Error(ErrorCode::duplicate_heading, {{FactId::name, name}, {FactId::addresses, addresses}});

  std::set<std::map<std::size_t, int>> seen;
  for (const ResolvedTerm& term : terms) {
    std::map<std::size_t, int> powers;
    for (std::size_t k = 0; k < term.columns.size(); ++k)
      powers[term.columns[k]] = term.term.factors[k].power;
    if (!seen.insert(powers).second) throw Error(ErrorCode::duplicate_term, {{FactId::term, term.term.name}});
  }
}

/// Index of the level that `name` means: written exactly so, else regardless of case, else the same number.
std::optional<std::size_t> find_level(const std::vector<std::string>& levels, const std::string& name) {
  const std::string wanted(trimmed(name));
  for (std::size_t k = 0; k < levels.size(); ++k)
    if (levels[k] == wanted) return k;
  for (std::size_t k = 0; k < levels.size(); ++k)
    if (folded(levels[k]) == folded(wanted)) return k;
  char* end = nullptr;
  const double number = std::strtod(wanted.c_str(), &end);
  if (!wanted.empty() && *end == '\0')
    for (std::size_t k = 0; k < levels.size(); ++k)
      if (levels[k] == plain_number(number)) return k;
  return std::nullopt;
}

/// The levels of a category, in the design's order, and the level of every used row.
CategoryInfo learn_levels(const Column& column, const RowSelection& selection, const std::string* baseline,
                          std::vector<std::int32_t>& level_of_row) {
  Labels labels = read_labels(column, selection.rows, selection.used);
  const std::size_t k = labels.names.size();
  if (k == 1)
    throw Error(ErrorCode::one_level,
                {{FactId::column, heading(column)}, {FactId::text, labels.names.front()}});
  if (as_number(k) > tolerance::largest_level_share * as_number(selection.used))
    throw Error(ErrorCode::too_many_levels, {{FactId::column, heading(column)},
                                             {FactId::count, as_number(k)},
                                             {FactId::rows, as_number(selection.used)}});
  std::vector<std::size_t> counts(k, 0);
  for (const std::int32_t label : labels.of_row) ++counts[static_cast<std::size_t>(label)];

  std::size_t first =
      static_cast<std::size_t>(std::max_element(counts.begin(), counts.end()) - counts.begin());
  std::vector<std::size_t> order(k);
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::sort(order.begin(), order.end(),
            [&](std::size_t a, std::size_t b) { return natural_less(labels.names[a], labels.names[b]); });
  if (baseline != nullptr) {
    const std::optional<std::size_t> named = find_level(labels.names, *baseline);
    if (!named) {
      std::vector<std::string> known;
      for (const std::size_t label : order) known.push_back(labels.names[label]);
      throw Error(ErrorCode::unknown_level,
                  {{FactId::column, heading(column)}, {FactId::name, *baseline}, {FactId::allowed, known}});
    }
    first = *named;
  }
  order.erase(std::find(order.begin(), order.end(), first));
  order.insert(order.begin(), first);

  CategoryInfo info;
  info.column = heading(column);
  std::vector<std::int32_t> level_of_label(k);
  for (std::size_t level = 0; level < k; ++level) {
    level_of_label[order[level]] = static_cast<std::int32_t>(level);
    info.levels.push_back(labels.names[order[level]]);
    info.counts.push_back(counts[order[level]]);
  }
  for (std::int32_t& label : labels.of_row) label = level_of_label[static_cast<std::size_t>(label)];
  level_of_row = std::move(labels.of_row);
  return info;
}

/// Number of distinct values where they are few and whole, else 0. Stops at the first value that decides.
std::size_t count_few_whole_values(const std::vector<double>& numbers, const RowSelection& selection) {
  double distinct[tolerance::few_whole_values];
  std::size_t count = 0;
  for (std::size_t i = 0; i < selection.used; ++i) {
    const double x = numbers[selection.row(i)];
    if (count > 0 && x == distinct[count - 1]) continue;
    if (std::find(distinct, distinct + count, x) != distinct + count) continue;
    if (x != std::floor(x) || count == static_cast<std::size_t>(tolerance::few_whole_values)) return 0;
    distinct[count++] = x;
  }
  const std::size_t rows_needed = count * static_cast<std::size_t>(tolerance::rows_per_whole_value);
  return count > 2 && selection.used >= rows_needed ? count : 0;
}

double mean_of(const std::vector<double>& numbers, const RowSelection& selection) {
  // Divided before summing, so that no sum overflows; about the first value, so that little is lost far from
  // zero.
  const double about = numbers[selection.row(0)];
  long double sum = 0;
  for (std::size_t i = 0; i < selection.used; ++i)
    sum += (static_cast<long double>(numbers[selection.row(i)]) - about) /
           static_cast<long double>(selection.used);
  return static_cast<double>(about + sum);
}

bool is_constant(const std::vector<double>& numbers, const RowSelection& selection) {
  const double first = numbers[selection.row(0)];
  for (std::size_t i = 1; i < selection.used; ++i)
    if (numbers[selection.row(i)] != first) return false;
  return true;
}

/// Names of the columns of a term, in the order of TermCoding.
std::vector<std::string> column_names(const ResolvedTerm& term, const std::vector<std::size_t>& variable_of,
                                      const Coding& coding) {
  std::vector<std::string> names{""};
  for (std::size_t k = 0; k < term.columns.size(); ++k) {
    const Variable& variable = coding.variables[variable_of[term.columns[k]]];
    const int power = term.term.factors[k].power;
    std::vector<std::string> longer;
    for (const std::string& name : names) {
      const std::string before = name.empty() ? name : name + "*";
      if (!variable.category) {
        longer.push_back(before + variable.heading + (power > 1 ? "^" + std::to_string(power) : ""));
      } else {
        for (std::size_t level = 1; level < variable.levels.size(); ++level)
          longer.push_back(before + variable.heading + ": " + variable.levels[level]);
      }
    }
    names = std::move(longer);
  }
  return names;
}

}  // namespace

const Layout& Design::layout() const { return state_->layout; }
const RowSelection& Design::selection() const { return state_->selection; }
const std::vector<CategoryInfo>& Design::categories() const { return state_->categories; }
const std::vector<DesignNote>& Design::notes() const { return state_->notes; }

double Design::centre_of(const std::string& column) const {
  for (const Variable& variable : state_->coding->variables)
    if (folded(variable.heading) == folded(column)) return variable.centre;
  return 0;
}

std::size_t Design::rows() const { return state_->rows->rows(); }
std::size_t Design::columns() const { return state_->rows->columns(); }
bool Design::has_response() const { return state_->rows->has_response(); }
void Design::fill(std::size_t first, std::size_t count, std::size_t stride, double* high, double* low) const {
  state_->rows->fill(first, count, stride, high, low);
}
bool Design::has_low(std::size_t column) const { return state_->rows->has_low(column); }
const CodedRows& Design::coded_rows() const { return *state_->rows; }

Design make_design(std::shared_ptr<const Table> table, const Model& model) {
  auto state = std::make_shared<Design::State>();
  const std::vector<std::uint8_t> no_row_hidden;
  const std::vector<std::uint8_t>& hidden = model.visible_rows_only ? table->hidden : no_row_hidden;

  // -- which columns
  std::ptrdiff_t response = -1;
  if (!trimmed(model.response).empty())
    response = static_cast<std::ptrdiff_t>(find_column(*table, model.response));
  const std::vector<ResolvedTerm> terms = resolve_terms(*table, model, response);
  check_terms(terms, *table, response);

  constexpr std::size_t unused = static_cast<std::size_t>(-1);
  std::vector<std::size_t> variable_of(table->columns.size(), unused);  // table column -> variable
  std::vector<std::size_t> columns;                                     // variable -> table column
  for (const ResolvedTerm& term : terms) {
    for (const std::size_t column : term.columns) {
      if (variable_of[column] != unused) continue;
      variable_of[column] = columns.size();
      columns.push_back(column);
    }
  }
  std::vector<std::size_t> used = columns;
  if (response >= 0) used.insert(used.begin(), static_cast<std::size_t>(response));
  if (table->rows == 0)
    throw Error(ErrorCode::no_data_rows, {{FactId::range, table->columns[used.front()].heading_address()}});

  // -- what they hold
  std::set<std::size_t> declared;
  for (const std::string& name : model.categories) declared.insert(find_column(*table, name));
  std::map<std::size_t, const std::string*> baselines;
  for (const auto& [name, level] : model.baselines) {
    const std::size_t column = find_column(*table, name);
    declared.insert(column);
    baselines[column] = &level;
  }
  std::vector<Contents> contents(table->columns.size());
  for (const std::size_t j : used) {
    contents[j] = read_contents(table->columns[j], table->rows, hidden);
    refuse_errors(table->columns[j], contents[j]);
  }
  auto coding = std::make_shared<Coding>();
  if (response >= 0) {
    const auto j = static_cast<std::size_t>(response);
    const Column& column = table->columns[j];
    if (contents[j].only_texts() || declared.count(j)) {
      const bool text = contents[j].texts.count > 0;
      const auto number =
          std::find_if(column.numbers.begin(), column.numbers.end(), [](double x) { return !std::isnan(x); });
      const std::size_t row = text ? contents[j].texts.first_row
                              : number == column.numbers.end()
                                  ? 0
                                  : static_cast<std::size_t>(number - column.numbers.begin());
      throw Error(ErrorCode::response_not_numeric,
                  {{FactId::response, heading(column)},
                   {FactId::text, text ? column.texts[static_cast<std::size_t>(column.codes[row])]
                                       : plain_number(column.numbers[row])},
                   {FactId::address, column.address(row)}});
    }
    refuse_texts(column, contents[j]);
    refuse_infinite(column, contents[j]);
    state->layout.response = heading(column);
  }
  for (const std::size_t j : columns) {
    Variable variable;
    variable.heading = heading(table->columns[j]);
    variable.category = contents[j].only_texts() || declared.count(j) > 0;
    if (!variable.category) refuse_texts(table->columns[j], contents[j]);
    refuse_infinite(table->columns[j], contents[j]);
    coding->variables.push_back(std::move(variable));
  }
  for (const ResolvedTerm& term : terms)
    for (std::size_t k = 0; k < term.columns.size(); ++k)
      if (term.term.factors[k].power > 1 && coding->variables[variable_of[term.columns[k]]].category)
        throw Error(ErrorCode::category_power, {{FactId::term, term.term.name},
                                                {FactId::column, heading(table->columns[term.columns[k]])}});

  // -- which rows
  state->selection = select_rows(*table, used, model.visible_rows_only);
  const RowSelection& selection = state->selection;
  if (selection.used == 0) {
    const bool some_missing = !selection.missing.empty();
    const std::size_t worst = some_missing ? selection.missing.front().column : used.front();
    throw Error(ErrorCode::no_complete_rows,
                {{FactId::rows, as_number(table->rows)},
                 {FactId::column, heading(table->columns[worst])},
                 {FactId::count, some_missing ? as_number(selection.missing.front().count) : 0.0},
                 {FactId::rows_left_out, as_number(selection.hidden_left_out)}});
  }
  if (selection.used < 2)
    throw Error(ErrorCode::too_few_rows,
                {{FactId::rows, as_number(selection.used)},
                 {FactId::needed, 2.0},
                 {FactId::count, as_number(terms.size() + (model.intercept ? 1 : 0))}});

  // -- categories
  std::vector<std::vector<std::int32_t>> levels(columns.size());
  for (std::size_t v = 0; v < columns.size(); ++v) {
    if (!coding->variables[v].category) continue;
    const auto baseline = baselines.find(columns[v]);
    CategoryInfo info = learn_levels(table->columns[columns[v]], selection,
                                     baseline == baselines.end() ? nullptr : baseline->second, levels[v]);
    coding->variables[v].levels = info.levels;
    state->categories.push_back(std::move(info));
  }

  // -- centring: a column that takes part in a product or power is centred wherever it stands
  std::vector<std::string> centred_columns, centred_terms;
  if (model.centre) {
    std::vector<bool> centred(columns.size(), false);
    for (const ResolvedTerm& term : terms) {
      if (term.columns.size() == 1 && term.term.factors.front().power == 1) continue;
      centred_terms.push_back(term.term.name);
      for (const std::size_t column : term.columns)
        centred[variable_of[column]] = !coding->variables[variable_of[column]].category;
    }
    for (std::size_t v = 0; v < columns.size(); ++v) {
      if (!centred[v]) continue;
      coding->variables[v].centre = mean_of(table->columns[columns[v]].numbers, selection);
      centred_columns.push_back(coding->variables[v].heading);
    }
  }

  // -- layout
  Layout& layout = state->layout;
  layout.intercept = model.intercept;
  for (std::size_t t = 0; t < terms.size(); ++t) {
    const ResolvedTerm& term = terms[t];
    TermCoding code;
    TermLayout in_layout;
    code.first_column = coding->columns;
    for (std::size_t k = 0; k < term.columns.size(); ++k) {
      const std::size_t v = variable_of[term.columns[k]];
      const int power = term.term.factors[k].power;
      if (!coding->variables[v].category) {
        code.numbers.push_back({v, power});
        continue;
      }
      code.categories.push_back(v);
      code.columns *= coding->variables[v].levels.size() - 1;
      if (code.columns > static_cast<std::size_t>(tolerance::most_design_columns)) break;
    }
    if (coding->columns + code.columns > static_cast<std::size_t>(tolerance::most_design_columns)) {
      // Terms that are not counted yet have a column at least.
      throw Error(ErrorCode::too_many_columns,
                  {{FactId::count, as_number(coding->columns + code.columns + (terms.size() - t - 1))},
                   {FactId::allowed, std::to_string(tolerance::most_design_columns)}});
    }
    coding->columns += code.columns;

    in_layout.name = term.term.name;
    const bool single = term.columns.size() == 1;
    in_layout.kind = !single                               ? TermKind::product
                     : !code.categories.empty()            ? TermKind::category
                     : term.term.factors.front().power > 1 ? TermKind::power
                                                           : TermKind::plain;
    if (in_layout.kind == TermKind::category)
      in_layout.baseline = coding->variables[code.categories.front()].levels.front();
    for (std::string& name : column_names(term, variable_of, *coding)) {
      in_layout.columns.push_back(layout.columns.size());
      layout.columns.push_back(std::move(name));
      layout.term_of.push_back(t);
    }
    if (single && in_layout.kind == TermKind::plain) {
      // nothing is built into it
    } else {
      for (std::size_t other = 0; other < terms.size(); ++other)
        if (is_lower_order(terms[other], term)) in_layout.built_from.push_back(other);
    }
    layout.terms.push_back(std::move(in_layout));
    coding->terms.push_back(std::move(code));
  }
  // Products start from the largest part of theirs that is filled before them.
  for (std::size_t t = 0; t < terms.size(); ++t) {
    TermCoding& code = coding->terms[t];
    if (!code.categories.empty()) continue;
    int largest = 0;
    for (const std::size_t other : layout.terms[t].built_from) {
      if (other >= t) continue;
      int degree = 0;
      for (const Factor& factor : terms[other].term.factors) degree += factor.power;
      if (degree <= largest) continue;
      largest = degree;
      code.starts_from = static_cast<std::ptrdiff_t>(other);
      code.remaining = code.numbers;
      for (const TermCoding::Power& part : coding->terms[other].numbers)
        for (TermCoding::Power& whole : code.remaining)
          if (whole.variable == part.variable) whole.power -= part.power;
      code.remaining.erase(std::remove_if(code.remaining.begin(), code.remaining.end(),
                                          [](const TermCoding::Power& factor) { return factor.power == 0; }),
                           code.remaining.end());
    }
  }

  // -- numbers that allow no analysis
  if (response >= 0) {
    const Column& column = table->columns[static_cast<std::size_t>(response)];
    const double first = column.numbers[selection.row(0)];
    if ((model.intercept || first == 0) && is_constant(column.numbers, selection))
      throw Error(ErrorCode::response_constant,
                  {{FactId::response, heading(column)}, {FactId::value, plain_number(first)}});
  }
  if (model.intercept && state->categories.empty()) {
    std::vector<std::string> names;
    for (std::size_t v = 0; v < columns.size(); ++v) {
      if (!is_constant(table->columns[columns[v]].numbers, selection)) break;
      names.push_back(coding->variables[v].heading);
    }
    if (names.size() == columns.size()) throw Error(ErrorCode::all_constant, {{FactId::columns, names}});
  }
  std::vector<std::string> term_names;
  for (const TermLayout& term : layout.terms) term_names.push_back(term.name);
  check_products(*coding, term_names, *table, columns, selection.rows, selection.used);

  // -- notes
  for (const ResolvedTerm& term : terms) {
    const std::vector<std::string> missing = missing_lower_terms(term, terms, *table);
    if (!missing.empty())
      state->notes.push_back(
          {DesignNoteId::lower_term_missing, {{FactId::term, term.term.name}, {FactId::terms, missing}}});
  }
  if (!centred_columns.empty())
    state->notes.push_back(
        {DesignNoteId::centred, {{FactId::terms, centred_terms}, {FactId::columns, centred_columns}}});
  for (const CategoryInfo& category : state->categories) {
    std::vector<std::string> rare;
    for (std::size_t k = 0; k < category.levels.size(); ++k)
      if (category.counts[k] < 2) rare.push_back(category.levels[k]);
    if (!rare.empty())
      state->notes.push_back(
          {DesignNoteId::rare_level, {{FactId::column, category.column}, {FactId::levels, rare}}});
  }
  for (std::size_t v = 0; v < columns.size(); ++v) {
    if (coding->variables[v].category) continue;
    const std::size_t count = count_few_whole_values(table->columns[columns[v]].numbers, selection);
    if (count > 0)
      state->notes.push_back(
          {DesignNoteId::few_whole_values,
           {{FactId::column, coding->variables[v].heading}, {FactId::count, as_number(count)}}});
  }

  state->coding = coding;
  state->rows = std::make_unique<CodedRows>(table, coding, columns, std::move(levels), selection.rows,
                                            selection.used, response);
  Design design;
  design.state_ = std::move(state);
  return design;
}

std::unique_ptr<RowSource> Design::of_new_rows(std::shared_ptr<const Table> table) const {
  const Coding& coding = *state_->coding;
  std::vector<std::size_t> columns;
  std::vector<std::vector<std::int32_t>> levels(coding.variables.size());
  for (std::size_t v = 0; v < coding.variables.size(); ++v) {
    const Variable& variable = coding.variables[v];
    const std::size_t j = find_column(*table, variable.heading);
    const Column& column = table->columns[j];
    columns.push_back(j);
    const Contents contents = read_contents(column, table->rows, {});
    refuse_errors(column, contents);
    refuse_infinite(column, contents);
    if (!variable.category) {
      refuse_texts(column, contents);
      continue;
    }
    Labels labels = read_labels(column, {}, table->rows);
    std::vector<std::int32_t> level_of_label;
    for (const std::string& name : labels.names) {
      const std::optional<std::size_t> level = find_level(variable.levels, name);
      if (!level)
        throw Error(
            ErrorCode::unknown_level,
            {{FactId::column, variable.heading}, {FactId::name, name}, {FactId::allowed, variable.levels}});
      level_of_label.push_back(static_cast<std::int32_t>(*level));
    }
    for (std::int32_t& label : labels.of_row)
      if (label >= 0) label = level_of_label[static_cast<std::size_t>(label)];
    levels[v] = std::move(labels.of_row);
  }
  std::vector<std::string> term_names;
  for (const TermLayout& term : state_->layout.terms) term_names.push_back(term.name);
  check_products(coding, term_names, *table, columns, {}, table->rows);
  const std::size_t rows = table->rows;
  return std::make_unique<CodedRows>(std::move(table), state_->coding, columns, std::move(levels),
                                     std::vector<std::uint32_t>{}, rows, -1);
}

}  // namespace unply
