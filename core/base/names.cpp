#include "core/base/names.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <numeric>

#include "core/base/tolerance.hpp"

namespace unply {
namespace {

bool is_digit(char32_t c) { return c >= U'0' && c <= U'9'; }

/// Length of the blank that `text` begins with; 0 where it begins with none.
std::size_t blank_at_front(std::string_view text) {
  if (text.empty()) return 0;
  const char c = text.front();
  if (c == ' ' || (c >= '\t' && c <= '\r')) return 1;
  return text.substr(0, 2) == "\u00a0" ? 2 : 0;
}

std::size_t blank_at_back(std::string_view text) {
  if (text.empty()) return 0;
  const char c = text.back();
  if (c == ' ' || (c >= '\t' && c <= '\r')) return 1;
  return text.size() >= 2 && text.substr(text.size() - 2) == "\u00a0" ? 2 : 0;
}

}  // namespace

std::string_view trimmed(std::string_view text) {
  while (const std::size_t blank = blank_at_front(text)) text.remove_prefix(blank);
  while (const std::size_t blank = blank_at_back(text)) text.remove_suffix(blank);
  return text;
}

std::u32string code_points(std::string_view text, std::vector<std::size_t>* starts) {
  std::u32string result;
  result.reserve(text.size());
  for (std::size_t at = 0; at < text.size();) {
    const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[i]); };
    const unsigned char lead = byte(at);
    const std::size_t length = lead >= 0xf0 && lead < 0xf8 ? 4 : lead >= 0xe0 ? 3 : lead >= 0xc0 ? 2 : 1;
    char32_t point = length == 4   ? lead & 0x07u
                     : length == 3 ? lead & 0x0fu
                     : length == 2 ? lead & 0x1fu
                                   : lead;
    bool whole = at + length <= text.size() && lead < 0xf8;
    for (std::size_t i = 1; whole && i < length; ++i) {
      whole = (byte(at + i) & 0xc0u) == 0x80u;
      point = (point << 6) | (byte(at + i) & 0x3fu);
    }
    result.push_back(whole ? point : lead);
    if (starts != nullptr) starts->push_back(at);
    at += whole ? length : 1;
  }
  if (starts != nullptr) starts->push_back(text.size());
  return result;
}

char32_t small_letter(char32_t c) {
  if (c >= U'A' && c <= U'Z') return c + 32;
  if (c < 0xc0) return c;
  if (c <= 0xde) return c == 0xd7 ? c : c + 32;  // Latin-1; 0xd7 is the multiplication sign
  if ((c >= 0x100 && c <= 0x137 && c != 0x130) || (c >= 0x14a && c <= 0x177)) return c | 1u;
  if ((c >= 0x139 && c <= 0x148) || (c >= 0x179 && c <= 0x17e)) return c + (c & 1u);
  if (c == 0x178) return 0xff;
  if (c >= 0x391 && c <= 0x3a9 && c != 0x3a2) return c + 32;  // Greek
  if (c >= 0x410 && c <= 0x42f) return c + 32;                // Cyrillic
  if (c >= 0x400 && c <= 0x40f) return c + 80;
  return c;
}

std::u32string folded(std::string_view name) {
  std::u32string result = code_points(trimmed(name));
  std::transform(result.begin(), result.end(), result.begin(), small_letter);
  return result;
}

std::string nearest_name(std::string_view name, const std::vector<std::string>& known) {
  // A heading may hold a paragraph; its beginning is enough to recognise a slip of the pen.
  constexpr std::size_t compared_letters = 64;
  const std::u32string a = folded(name).substr(0, compared_letters);
  std::string nearest;
  std::size_t fewest = std::string::npos;
  for (const std::string& candidate : known) {
    const std::u32string b = folded(candidate).substr(0, compared_letters);
    if (b.empty()) continue;
    std::vector<std::size_t> edits(b.size() + 1);
    std::iota(edits.begin(), edits.end(), std::size_t{0});
    for (std::size_t i = 0; i < a.size(); ++i) {
      std::size_t diagonal = edits[0];
      edits[0] = i + 1;
      for (std::size_t j = 0; j < b.size(); ++j) {
        const std::size_t replaced = diagonal + (a[i] != b[j]);
        diagonal = edits[j + 1];
        edits[j + 1] = std::min({replaced, diagonal + 1, edits[j] + 1});
      }
    }
    const double allowed =
        std::max(1.0, tolerance::nearest_name_share * static_cast<double>(std::max(a.size(), b.size())));
    if (edits.back() < fewest && edits.back() < b.size() && static_cast<double>(edits.back()) <= allowed) {
      fewest = edits.back();
      nearest = std::string(trimmed(candidate));
    }
  }
  return nearest;
}

bool natural_less(std::string_view a, std::string_view b) {
  const std::u32string x = folded(a), y = folded(b);
  std::size_t i = 0, j = 0;
  while (i < x.size() && j < y.size()) {
    if (is_digit(x[i]) && is_digit(y[j])) {
      const auto end_of_number = [](const std::u32string& text, std::size_t at) {
        while (at < text.size() && is_digit(text[at])) ++at;
        return at;
      };
      const std::size_t x_end = end_of_number(x, i), y_end = end_of_number(y, j);
      while (i + 1 < x_end && x[i] == U'0') ++i;
      while (j + 1 < y_end && y[j] == U'0') ++j;
      if (x_end - i != y_end - j) return x_end - i < y_end - j;  // more digits, larger number
      for (; i < x_end; ++i, ++j)
        if (x[i] != y[j]) return x[i] < y[j];
    } else {
      if (x[i] != y[j]) return x[i] < y[j];
      ++i;
      ++j;
    }
  }
  if (x.size() - i != y.size() - j) return x.size() - i < y.size() - j;
  return a < b;
}

std::string plain_number(double value) {
  if (std::isnan(value)) return "NaN";
  if (std::isinf(value)) return value > 0 ? "inf" : "-inf";
  if (value == 0) return "0";  // also for -0
  const double size = std::abs(value);
  const bool short_enough = size >= 1e-5 && size < 1e15;
  char text[64];
  const auto end = std::to_chars(text, text + sizeof text, value,
                                 short_enough ? std::chars_format::fixed : std::chars_format::scientific);
  return std::string(text, end.ptr);
}

}  // namespace unply
