#include "core/base/printed_digits.hpp"

#include <algorithm>
#include <cmath>

#include "core/base/tolerance.hpp"

namespace unply {
namespace {

constexpr int most_decimals = 22;  // powers of ten up to 10^22 are doubles
constexpr double power_of_ten[most_decimals + 1] = {1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,
                                                    1e8,  1e9,  1e10, 1e11, 1e12, 1e13, 1e14, 1e15,
                                                    1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22};
constexpr double most_units = 1e14;  // a number of 14 significant digits in units of its last one

}  // namespace

void PrintedDigits::read(double value) {
  if (!std::isfinite(value)) return;
  const double size = std::abs(value);
  largest_ = std::max(largest_, size);
  if (!written_) return;
  for (;; ++decimals_) {
    const double units = size * power_of_ten[decimals_];
    // the nearest double to a decimal fraction, and the product: each rounded once
    if (std::abs(units - std::nearbyint(units)) <= 4 * tolerance::unit_roundoff * units &&
        units <= most_units)
      return;
    if (units > most_units || decimals_ == most_decimals) {
      written_ = false;
      return;
    }
  }
}

std::optional<int> PrintedDigits::decimals() const {
  if (!written_ || largest_ * power_of_ten[decimals_] > most_units) return std::nullopt;
  return decimals_;
}

}  // namespace unply
