// Numbers and lists as a reader wants them: no more digits than the data support.
#include <algorithm>
#include <cmath>
#include <cstdio>

#include "extension/text/text.hpp"

namespace unply::text {
namespace {

std::string format(const char* pattern, int digits, double value) {
  char buffer[400];
  std::snprintf(buffer, sizeof buffer, pattern, digits, value);
  return buffer;
}

std::string with_thousands(std::string digits) {
  const std::size_t start = digits[0] == '-' ? 1 : 0;
  for (std::size_t at = digits.size(); at > start + 3;) {
    at -= 3;
    digits.insert(at, ",");
  }
  return digits;
}

/// Fixed notation between 0.0001 and a million, else with an exponent.
bool reads_well_fixed(double magnitude) { return magnitude == 0 || (magnitude >= 1e-4 && magnitude < 1e7); }

std::string without_negative_zero(std::string text) {
  const bool zero = text.find_first_of("123456789") == std::string::npos;
  return zero && !text.empty() && text[0] == '-' ? text.substr(1) : text;
}

}  // namespace

std::string number(double value, int significant_digits) {
  if (!std::isfinite(value)) return std::isnan(value) ? "?" : value > 0 ? "without limit" : "minus without limit";
  const double magnitude = std::abs(value);
  if (!reads_well_fixed(magnitude)) return format("%.*e", significant_digits - 1, value);
  if (magnitude >= 1000) {  // 3286 rows to two digits are 3,300
    const double unit = std::pow(10.0, std::max(0.0, std::floor(std::log10(magnitude)) + 1 - significant_digits));
    return whole(std::round(value / unit) * unit);
  }
  const int before_point = magnitude >= 1 ? static_cast<int>(std::floor(std::log10(magnitude))) + 1
                           : magnitude > 0 ? static_cast<int>(std::floor(std::log10(magnitude))) + 1 : 1;
  std::string text = format("%.*f", std::max(significant_digits - before_point, 0), value);
  if (text.find('.') != std::string::npos) {  // 12.0 says more than 12 only where it was measured so
    text.erase(text.find_last_not_of('0') + 1);
    if (text.back() == '.') text.pop_back();
  }
  return without_negative_zero(text);
}

std::string rounded_to(double value, double half_width) {
  if (!std::isfinite(value) || !std::isfinite(half_width) || half_width <= 0) return number(value);
  const double magnitude = std::max(std::abs(value), half_width);
  if (!reads_well_fixed(magnitude) || half_width < 1e-7) return number(value, 4);
  const int place = static_cast<int>(std::floor(std::log10(half_width))) - 1;  // two digits of the half-width
  if (place >= 0) {
    const double unit = std::pow(10.0, place);
    return whole(std::round(value / unit) * unit);
  }
  return without_negative_zero(format("%.*f", -place, value));
}

std::string signed_rounded_to(double value, double half_width) {
  const std::string text = rounded_to(value, half_width);
  const bool zero = text.find_first_of("123456789") == std::string::npos;
  return value > 0 && !zero ? "+" + text : text;
}

std::string p_value(double p) {
  if (!std::isfinite(p)) return "p not defined";
  if (p < 1e-4) return "p < 0.0001";
  return "p = " + (p < 0.001 ? format("%.*f", 4, p) : p < 0.1 ? format("%.*f", 3, p) : format("%.*f", 2, p));
}

std::string percent(double share) { return number(share * 100, 4) + " %"; }

std::string whole(double value) {
  if (!std::isfinite(value)) return number(value);
  if (std::abs(value) >= 1e15) return format("%.*e", 2, value);
  return without_negative_zero(with_thousands(format("%.*f", 0, value)));
}

std::string seed(double value) { return format("%.*f", 0, value); }

std::string list(const std::vector<std::string>& names) {
  if (names.empty()) return "";
  std::string text = names.front();
  for (std::size_t i = 1; i < names.size(); ++i) text += (i + 1 == names.size() ? " and " : ", ") + names[i];
  return text;
}

}  // namespace unply::text
