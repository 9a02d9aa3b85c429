#include "extension/cells/text_measure.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>

namespace unply::office {
namespace {

// Advance widths of U+0020 .. U+007E in 1/1000 of the font size.
constexpr std::array<int, 95> regular = {
    278, 278, 355, 556, 556, 889, 667, 191, 333, 333, 389, 584, 278, 333,  278, 278, 556, 556, 556,
    556, 556, 556, 556, 556, 556, 556, 278, 278, 584, 584, 584, 556, 1015, 667, 667, 722, 722, 667,
    611, 778, 722, 278, 500, 667, 556, 833, 722, 778, 667, 778, 722, 667,  611, 722, 667, 944, 667,
    667, 611, 278, 278, 278, 469, 556, 333, 556, 556, 500, 556, 556, 278,  556, 556, 222, 222, 500,
    222, 833, 556, 556, 556, 556, 333, 500, 278, 556, 500, 722, 500, 500,  500, 334, 260, 334, 584};
constexpr std::array<int, 95> bold = {
    278, 333, 474, 556, 556, 889, 722, 238, 333, 333, 389, 584, 278, 333, 278, 278, 556, 556, 556,
    556, 556, 556, 556, 556, 556, 556, 333, 333, 584, 584, 584, 611, 975, 722, 722, 722, 722, 667,
    611, 778, 722, 278, 556, 722, 611, 833, 722, 778, 667, 778, 722, 667, 611, 722, 667, 944, 667,
    667, 611, 333, 278, 333, 584, 556, 333, 556, 611, 556, 611, 556, 333, 611, 611, 278, 278, 556,
    278, 889, 611, 611, 611, 611, 389, 556, 333, 611, 556, 778, 556, 556, 500, 389, 280, 389, 584};
constexpr int accented = 600;  // letters of other alphabets, on average
constexpr int wide = 1000;     // scripts whose characters fill a square
constexpr double hundredths_of_mm_per_point = 2540.0 / 72;
constexpr char32_t first_wide = 0x1100;
constexpr double line_spacing = 1.15;  // ascent + descent of the report's font, in font sizes

/// Next code point; a malformed byte counts as one character.
char32_t next(const std::string& text, std::size_t& at) {
  const auto byte = [&](std::size_t i) { return static_cast<std::uint8_t>(text[i]); };
  const std::uint8_t lead = byte(at++);
  int more = lead >= 0xF0 ? 3 : lead >= 0xE0 ? 2 : lead >= 0xC0 ? 1 : 0;
  char32_t point = lead;
  if (more > 0) point = lead & (0x3F >> more);
  while (more-- > 0 && at < text.size() && (byte(at) & 0xC0) == 0x80)
    point = (point << 6) | (byte(at++) & 0x3F);
  return point;
}

int advance(char32_t point, const Font& font) {
  if (point >= 0x20 && point <= 0x7E) return (font.bold ? bold : regular)[point - 0x20];
  return point >= first_wide && (point < 0x2000 || point > 0x2BFF) ? wide : accented;
}

int to_length(int thousandths, const Font& font) {
  return static_cast<int>(std::ceil(thousandths * font.points * hundredths_of_mm_per_point / 1000));
}

}  // namespace

int text_width(const std::string& text, const Font& font) {
  int sum = 0;
  for (std::size_t at = 0; at < text.size();) sum += advance(next(text, at), font);
  return to_length(sum, font);
}

int longest_word_width(const std::string& text, const Font& font) {
  int longest = 0, word = 0;
  for (std::size_t at = 0; at < text.size();) {
    const char32_t point = next(text, at);
    word = point == ' ' || point == '\n' ? 0 : word + advance(point, font);
    longest = std::max(longest, word);
  }
  return to_length(longest, font);
}

int wrapped_lines(const std::string& text, int width, const Font& font) {
  const int limit = std::max(1, width);
  int lines = 1, line = 0, word = 0;
  const auto place_word = [&] {
    if (line > 0 && to_length(line + word, font) > limit) {
      ++lines;
      line = 0;
    }
    while (to_length(word, font) > limit) {  // cut inside the word
      ++lines;
      word -= static_cast<int>(limit * 1000 / (font.points * hundredths_of_mm_per_point));
    }
    line += word;
    word = 0;
  };
  for (std::size_t at = 0; at < text.size();) {
    const char32_t point = next(text, at);
    if (point == '\n') {
      place_word();
      ++lines;
      line = 0;
    } else if (point == ' ') {
      place_word();
      line += advance(point, font);
    } else {
      word += advance(point, font);
    }
  }
  place_word();
  return lines;
}

int line_height(const Font& font) {
  return static_cast<int>(std::ceil(font.points * hundredths_of_mm_per_point * line_spacing));
}

}  // namespace unply::office
