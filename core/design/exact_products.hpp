// Products of doubles without rounding, as unevaluated sums high + low of about 106 bits.
#pragma once

#include <cmath>

namespace unply {

/// high + low with |low| <= ulp(high) / 2.
struct Pair {
  double high = 0, low = 0;
};

/// a - b exactly. Source: Knuth, The Art of Computer Programming, vol. 2, sec. 4.2.2.
inline Pair exact_difference(double a, double b) {
  const double high = a - b;
  const double part = high - a;
  return {high, (a - (high - part)) - (b + part)};
}

/// a b exactly; both below 2^970. Source: Dekker, Numerische Mathematik 18 (1971), sec. 3.
inline Pair exact_product(double a, double b) {
  constexpr double splitter = 0x1p27 + 1;
  const double a_scaled = splitter * a, b_scaled = splitter * b;
  const double a_high = a_scaled - (a_scaled - a), b_high = b_scaled - (b_scaled - b);
  const double a_low = a - a_high, b_low = b - b_high;
  const double high = a * b;
  return {high, ((a_high * b_high - high) + a_high * b_low + a_low * b_high) + a_low * b_low};
}

/// (a.high + a.low) (b.high + b.low), relative error at most 2^-102.
/// Source: Dekker 1971, sec. 4.
inline Pair product(Pair a, Pair b) {
  const Pair p = exact_product(a.high, b.high);
  const double low = p.low + (a.high * b.low + a.low * b.high);
  const double high = p.high + low;
  return {high, low - (high - p.high)};
}

}  // namespace unply
