// Names as people write them: blanks and case that do not count, the nearest known name, an order a reader
// expects, numbers without a machine's look. Texts are UTF-8.
#pragma once

#include <string>
#include <string_view>
#include <vector>

namespace unply {

/// Without blanks at both ends: space, tab, line breaks, no-break space (U+00A0).
std::string_view trimmed(std::string_view text);

/// One code point a character; bytes that are no UTF-8 stand for themselves. `starts`, where given, receives
/// the byte at which each begins, and the length of the text at its end.
std::u32string code_points(std::string_view text, std::vector<std::size_t>* starts = nullptr);

/// Small letters for capitals, one for one: Latin (also with accents), Greek, Cyrillic. Nothing else is
/// changed.
char32_t small_letter(char32_t letter);

/// What two names have in common when neither case nor outer blanks count.
std::u32string folded(std::string_view name);

/// The known name with the fewest single-letter edits to `name` (inserted, left out, replaced), case not
/// counted; empty where even that needs more than tolerance::nearest_name_share of its letters. Source: edit
/// distance, Wagner & Fischer, JACM 21 (1974).
std::string nearest_name(std::string_view name, const std::vector<std::string>& known);

/// Alphabetical order in which digits count as numbers: "batch 2" before "batch 10"; case counts only between
/// names that are otherwise equal.
bool natural_less(std::string_view a, std::string_view b);

/// The shortest decimal number that reads back as `value`: "3", "0.25", "100000", "1.5e-07".
std::string plain_number(double value);

}  // namespace unply
