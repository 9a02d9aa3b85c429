#include "extension/cells/settings_reader.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>
#include <set>
#include <utility>

#include "core/base/error.hpp"
#include "core/base/names.hpp"

namespace unply::office {
namespace {

using text::Cell;
using text::SettingId;

constexpr double largest_seed =
    9007199254740992;  // 2^53: every whole number up to here is a number of a cell
constexpr double smallest_level = 0.5, largest_level = 0.9999;

std::string words_of(const Cell& cell) {
  if (const auto* words = std::get_if<std::string>(&cell)) return std::string(trimmed(*words));
  if (const auto* number = std::get_if<double>(&cell)) return plain_number(*number);
  return "";
}

/// Folded, with single blanks inside: "Smallest  Effect" is "smallest effect".
std::u32string spoken(std::string_view name) {
  std::u32string result;
  for (const char32_t letter : folded(name))
    if (letter != U' ' || (!result.empty() && result.back() != U' ')) result += letter;
  return result;
}

bool in_quotes(const std::string& name) {
  return name.size() >= 2 && name.front() == '\'' && name.back() == '\'';
}

std::string unquoted(const std::string& name) {
  return in_quotes(name) ? name.substr(1, name.size() - 2) : name;
}

std::string quoted_where_needed(const std::string& name) {
  return name.find_first_of(";\n") != std::string::npos || in_quotes(name) ? "'" + name + "'" : name;
}

/// One line: which setting, and what was written for it.
struct Line {
  SettingId id = SettingId::terms;
  std::string label;         // the setting's name, for messages
  std::string of;            // the name after `of`
  std::vector<Cell> values;  // at least one; none of the cells after the last written one

  [[noreturn]] void refuse() const {
    std::string value;
    for (const Cell& cell : values) value += (value.empty() ? "" : "; ") + words_of(cell);
    throw Error(
        ErrorCode::impossible_setting,
        {{FactId::setting, label}, {FactId::value, value}, {FactId::allowed, text::setting_values(id)}});
  }

  const Cell& value() const {
    if (values.size() != 1) refuse();
    return values.front();
  }

  std::string words() const { return words_of(value()); }

  double number() const {
    if (const auto* written = std::get_if<double>(&value())) return *written;
    const std::optional<double> read = number_in(words());
    if (!read) refuse();
    return *read;
  }

  bool yes() const {
    return choice<bool>(
        {{text::yes_no(true), true}, {text::yes_no(false), false}, {"1", true}, {"0", false}});
  }

  template <class Value>
  Value choice(const std::vector<std::pair<std::string, Value>>& choices) const {
    const std::u32string written = spoken(words());
    for (const auto& [name, choice] : choices)
      if (spoken(name) == written) return choice;
    refuse();
  }

  std::vector<std::string> list() const {
    std::vector<std::string> parts;
    for (const Cell& cell : values)
      for (std::string& part : split_list(words_of(cell))) parts.push_back(std::move(part));
    if (parts.empty()) refuse();
    return parts;
  }

  std::vector<double> numbers(double above) const {
    std::vector<double> result;
    for (const std::string& part : list()) {
      const std::optional<double> number = number_in(part);
      if (!number || !(*number > above)) refuse();
      result.push_back(*number);
    }
    return result;
  }
};

/// The setting that a name stands for; `of` receives what follows "... of".
std::optional<SettingId> find_setting(const std::string& name, const std::vector<SettingId>& possible,
                                      std::string& of) {
  const std::u32string written = spoken(name);
  for (const SettingId id : possible) {
    const std::u32string known = spoken(text::setting_name(id));
    if (!text::setting_takes_a_name(id)) {
      if (written == known) return id;
      continue;
    }
    if (written.size() <= known.size() + 1 || written.compare(0, known.size() + 1, known + U' ') != 0)
      continue;
    // The column's or term's name keeps its own case: it follows the word that ends the setting's name.
    std::size_t at = 0, words = static_cast<std::size_t>(std::count(known.begin(), known.end(), U' ')) + 1;
    const std::string_view text = trimmed(name);
    while (words-- > 0) {
      while (at < text.size() && text[at] != ' ') ++at;
      while (at < text.size() && text[at] == ' ') ++at;
    }
    of = std::string(text.substr(at));
    return id;
  }
  return std::nullopt;
}

[[noreturn]] void refuse_name(const std::string& name, const std::vector<SettingId>& possible) {
  std::vector<std::string> names;
  for (const SettingId id : possible) names.push_back(text::setting_name(id));
  Facts facts{{FactId::setting, name}, {FactId::allowed, names}};
  const std::string nearest = nearest_name(name, names);
  if (!nearest.empty()) facts.set(FactId::suggestion, nearest);
  throw Error(ErrorCode::unknown_setting, std::move(facts));
}

void apply(const Line& line, Settings& settings) {
  Model& model = settings.model;
  switch (line.id) {
    case SettingId::table: {
      std::vector<std::pair<std::string, BlockId>> tables;
      for (const BlockId table : text::tables_from_correlations())
        tables.emplace_back(text::table_name(table), table);
      settings.table = line.choice(tables);
      return;
    }
    case SettingId::terms:
      model.terms = line.list();
      return;
    case SettingId::response:
      model.response = line.words();
      return;
    case SettingId::data:
      settings.data = line.words();
      return;
    case SettingId::categories:
      for (const std::string& part : line.list()) model.categories.push_back(unquoted(part));
      return;
    case SettingId::purpose:
      model.purpose =
          line.choice<Purpose>({{text::purpose_name(Purpose::test_hypothesis), Purpose::test_hypothesis},
                                {text::purpose_name(Purpose::explore), Purpose::explore},
                                {text::purpose_name(Purpose::predict), Purpose::predict}});
      return;
    case SettingId::smallest_effect:
    case SettingId::smallest_effect_of: {
      const double effect = line.number();
      if (!(effect > 0) || !std::isfinite(effect)) line.refuse();
      if (line.id == SettingId::smallest_effect)
        model.smallest_effect = effect;
      else
        model.smallest_effects[line.of] = effect;
      return;
    }
    case SettingId::baseline_of:
      model.baselines[line.of] = line.words();
      return;
    case SettingId::level: {
      double level = line.number();
      if (level > 1) level /= 100;  // 95 is read as 95 %
      if (!(level >= smallest_level && level <= largest_level)) line.refuse();
      model.level = level;
      return;
    }
    case SettingId::intercept:
      model.intercept = line.yes();
      return;
    case SettingId::centre:
      model.centre = line.yes();
      return;
    case SettingId::standard_errors:
      model.standard_errors = line.choice<StandardErrors>(
          {{text::standard_errors_name(StandardErrors::ordinary), StandardErrors::ordinary},
           {text::standard_errors_name(StandardErrors::robust), StandardErrors::robust}});
      return;
    case SettingId::rows:
      model.visible_rows_only =
          line.choice<bool>({{text::rows_name(false), false}, {text::rows_name(true), true}});
      return;
    case SettingId::headings:
      settings.headings = line.yes();
      return;
    case SettingId::condition:
      model.centred_condition =
          line.choice<bool>({{text::condition_name(false), false}, {text::condition_name(true), true}});
      return;
    case SettingId::seed: {
      const double seed = line.number();
      if (!(seed >= 0 && seed <= largest_seed) || seed != std::floor(seed)) line.refuse();
      model.seed = static_cast<std::uint64_t>(seed);
      return;
    }
    case SettingId::means:
      settings.means = line.numbers(-std::numeric_limits<double>::infinity());
      return;
    case SettingId::standard_deviations:
      settings.standard_deviations = line.numbers(0);
      return;
  }
}

std::vector<SettingId> all_but(const std::vector<SettingId>& left_out) {
  std::vector<SettingId> result;
  for (const SettingId id : text::all_settings())
    if (std::find(left_out.begin(), left_out.end(), id) == left_out.end()) result.push_back(id);
  return result;
}

std::string joined(const std::vector<std::string>& parts) {
  std::string result;
  for (const std::string& part : parts) result += (result.empty() ? "" : "; ") + part;
  return result;
}

}  // namespace

const std::vector<SettingId>& settings_for_rows() {
  static const std::vector<SettingId> settings =
      all_but({SettingId::table, SettingId::means, SettingId::standard_deviations});
  return settings;
}

const std::vector<SettingId>& settings_for_correlations() {
  static const std::vector<SettingId> settings = all_but(
      {SettingId::data, SettingId::categories, SettingId::baseline_of, SettingId::intercept,
       SettingId::centre, SettingId::standard_errors, SettingId::rows, SettingId::headings, SettingId::seed});
  return settings;
}

std::vector<std::string> split_list(const std::string& text) {
  std::vector<std::string> parts;
  std::string part;
  bool quoted = false;
  const auto end_part = [&parts, &part] {
    const std::string_view content = trimmed(part);
    if (!content.empty()) parts.emplace_back(content);
    part.clear();
  };
  for (const char letter : text) {
    // A quotation mark inside a word is an apostrophe.
    if (letter == '\'' && (quoted || trimmed(part).empty() || part.back() == '*' || part.back() == ' '))
      quoted = !quoted;
    if (!quoted && (letter == ';' || letter == '\n'))
      end_part();
    else
      part += letter;
  }
  end_part();
  return parts;
}

std::optional<double> number_in(const std::string& text) {
  std::string digits(trimmed(text));
  const bool percent = !digits.empty() && digits.back() == '%';
  if (percent) digits = std::string(trimmed(std::string_view(digits).substr(0, digits.size() - 1)));
  if (digits.find('.') == std::string::npos && std::count(digits.begin(), digits.end(), ',') == 1)
    digits[digits.find(',')] = '.';
  if (!digits.empty() && digits.front() == '+') digits.erase(0, 1);
  double number = 0;
  const char* end = digits.data() + digits.size();
  const auto read = std::from_chars(digits.data(), end, number);
  if (read.ec != std::errc() || read.ptr != end || !std::isfinite(number)) return std::nullopt;
  return percent ? number / 100 : number;
}

Settings read_settings(const text::Cells& lines, const std::vector<SettingId>& possible) {
  Settings settings;
  std::set<std::pair<SettingId, std::u32string>> seen;
  for (const std::vector<Cell>& cells : lines) {
    if (std::all_of(cells.begin(), cells.end(), [](const Cell& cell) { return words_of(cell).empty(); }))
      continue;
    if (cells.size() < 2) throw Error(ErrorCode::settings_shape);
    const std::string name = words_of(cells.front());
    if (name.empty()) throw Error(ErrorCode::settings_shape);
    Line line;
    const std::optional<SettingId> id = find_setting(name, possible, line.of);
    if (!id) refuse_name(name, possible);
    line.id = *id;
    line.label = text::setting_name(*id) + (line.of.empty() ? "" : " " + line.of);
    if (!seen.emplace(*id, folded(line.of)).second)
      throw Error(ErrorCode::doubled_setting, {{FactId::setting, line.label}});
    line.values.assign(cells.begin() + 1, cells.end());
    while (!line.values.empty() && words_of(line.values.back()).empty()) line.values.pop_back();
    if (!line.values.empty()) apply(line, settings);
  }
  return settings;
}

text::Cells settings_lines(const Settings& settings) {
  const Settings usual;
  const Model &model = settings.model, &usual_model = usual.model;
  text::Cells lines;
  const auto add = [&lines](SettingId id, Cell value, const std::string& of = {}) {
    lines.push_back({text::setting_name(id) + (of.empty() ? "" : " " + of), std::move(value)});
  };
  if (settings.data) add(SettingId::data, *settings.data);
  if (!model.response.empty()) add(SettingId::response, model.response);
  if (!model.terms.empty()) add(SettingId::terms, joined(model.terms));
  if (!model.categories.empty()) {
    std::vector<std::string> names;
    for (const std::string& name : model.categories) names.push_back(quoted_where_needed(name));
    add(SettingId::categories, joined(names));
  }
  for (const auto& [column, baseline] : model.baselines) add(SettingId::baseline_of, baseline, column);
  if (model.purpose != usual_model.purpose) add(SettingId::purpose, text::purpose_name(model.purpose));
  if (model.smallest_effect) add(SettingId::smallest_effect, *model.smallest_effect);
  for (const auto& [term, effect] : model.smallest_effects) add(SettingId::smallest_effect_of, effect, term);
  if (model.level != usual_model.level) add(SettingId::level, model.level);
  if (model.intercept != usual_model.intercept) add(SettingId::intercept, text::yes_no(model.intercept));
  if (model.centre != usual_model.centre) add(SettingId::centre, text::yes_no(model.centre));
  if (model.standard_errors != usual_model.standard_errors)
    add(SettingId::standard_errors, text::standard_errors_name(model.standard_errors));
  if (model.visible_rows_only) add(SettingId::rows, text::rows_name(true));
  if (settings.headings) add(SettingId::headings, text::yes_no(*settings.headings));
  if (model.centred_condition) add(SettingId::condition, text::condition_name(true));
  if (model.seed != usual_model.seed) add(SettingId::seed, static_cast<double>(model.seed));
  if (settings.table) add(SettingId::table, text::table_name(*settings.table));
  for (const auto& [id, numbers] :
       {std::pair{SettingId::means, &settings.means},
        std::pair{SettingId::standard_deviations, &settings.standard_deviations}}) {
    if (!*numbers) continue;
    std::vector<std::string> parts;
    for (const double number : **numbers) parts.push_back(plain_number(number));
    add(id, joined(parts));
  }
  return lines;
}

}  // namespace unply::office
