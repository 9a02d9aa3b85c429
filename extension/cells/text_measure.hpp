// How wide a text is and how many lines it wraps to, without an office: for laying out report sheets.
#pragma once

#include <string>

namespace unply::office {

/// Lengths of sheets are in 1/100 mm, as in the office.
struct Font {
  double points = 10;
  bool bold = false;
};

/// Width of UTF-8 text in the report's font; wide scripts count one em a character.
/// Source of the advance widths: Adobe Core 14 fonts, Helvetica, whose metrics the report's font shares.
int text_width(const std::string& text, const Font& font);

/// Width of the longest part that cannot be wrapped.
int longest_word_width(const std::string& text, const Font& font);

/// Lines that the text takes in a column of this width, broken at blanks; a longer word is cut.
int wrapped_lines(const std::string& text, int width, const Font& font);

/// Height of one line with its share of the space between lines.
int line_height(const Font& font);

}  // namespace unply::office
