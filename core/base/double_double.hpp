// Doubled precision: a number as the unevaluated sum of two doubles, about 31 decimal digits.
// Relies on every operation being rounded on its own (-ffp-contract=off, see CMakeLists.txt).
#pragma once

#include <cmath>

namespace unply {

/// high + low, with |low| <= ulp(high) / 2. Error bounds beside the operations, u = 2^-53; source: Joldes,
/// Muller & Popescu, Tight and rigorous error bounds for basic building blocks of double-word arithmetic, ACM
/// TOMS 44 (2017). Beyond the range of a double the parts are infinite or NaN, as for a double.
struct DoubleDouble {
  double high = 0;
  double low = 0;

  constexpr DoubleDouble() = default;
  constexpr DoubleDouble(double value) : high(value) {}
  constexpr DoubleDouble(double h, double l) : high(h), low(l) {}
  explicit constexpr operator double() const { return high; }
};

/// a + b, exactly.
inline DoubleDouble two_sum(double a, double b) {
  const double sum = a + b;
  const double part = sum - a;
  return {sum, (a - (sum - part)) + (b - part)};
}

/// a + b, exactly, where |a| >= |b| or a = 0.
inline DoubleDouble quick_two_sum(double a, double b) {
  const double sum = a + b;
  return {sum, b - (sum - a)};
}

/// a - b, exactly.
inline DoubleDouble two_difference(double a, double b) { return two_sum(a, -b); }

/// a * b, exactly, where the error of the product is not below the smallest double.
inline DoubleDouble two_product(double a, double b) {
  const double product = a * b;
  return {product, std::fma(a, b, -product)};
}

inline DoubleDouble operator-(const DoubleDouble& a) { return {-a.high, -a.low}; }

/// Relative error <= 3 u^2 + 13 u^3.
inline DoubleDouble operator+(const DoubleDouble& a, const DoubleDouble& b) {
  const DoubleDouble high = two_sum(a.high, b.high), low = two_sum(a.low, b.low);
  const DoubleDouble once = quick_two_sum(high.high, high.low + low.high);
  return quick_two_sum(once.high, low.low + once.low);
}
inline DoubleDouble operator-(const DoubleDouble& a, const DoubleDouble& b) { return a + -b; }

/// Relative error <= 5 u^2.
inline DoubleDouble operator*(const DoubleDouble& a, const DoubleDouble& b) {
  const DoubleDouble product = two_product(a.high, b.high);
  const double cross = std::fma(a.high, b.low, std::fma(a.low, b.high, a.low * b.low));
  return quick_two_sum(product.high, product.low + cross);
}

/// Relative error <= 10 u^2.
inline DoubleDouble operator/(const DoubleDouble& a, const DoubleDouble& b) {
  const double first = a.high / b.high;
  if (!std::isfinite(first) || first == 0) return first;
  const DoubleDouble rest = a - b * DoubleDouble(first);
  return quick_two_sum(first, rest.high / b.high);
}

inline DoubleDouble& operator+=(DoubleDouble& a, const DoubleDouble& b) { return a = a + b; }
inline DoubleDouble& operator-=(DoubleDouble& a, const DoubleDouble& b) { return a = a - b; }
inline DoubleDouble& operator*=(DoubleDouble& a, const DoubleDouble& b) { return a = a * b; }
inline DoubleDouble& operator/=(DoubleDouble& a, const DoubleDouble& b) { return a = a / b; }

inline bool operator<(const DoubleDouble& a, const DoubleDouble& b) {
  return a.high < b.high || (a.high == b.high && a.low < b.low);
}
inline bool operator==(const DoubleDouble& a, const DoubleDouble& b) {
  return a.high == b.high && a.low == b.low;
}

inline DoubleDouble abs(const DoubleDouble& a) { return a.high < 0 || (a.high == 0 && a.low < 0) ? -a : a; }

/// Relative error a few u^2 (one Newton step from the rounded root). NaN below 0.
inline DoubleDouble sqrt(const DoubleDouble& a) {
  const double root = std::sqrt(a.high);
  if (!(root > 0) || !std::isfinite(root)) return root;
  const DoubleDouble rest = a - two_product(root, root);
  return quick_two_sum(root, rest.high / (2 * root));
}

/// a * 2^exponent, exactly, within the range of a double.
inline DoubleDouble ldexp(const DoubleDouble& a, int exponent) {
  return {std::ldexp(a.high, exponent), std::ldexp(a.low, exponent)};
}

}  // namespace unply
