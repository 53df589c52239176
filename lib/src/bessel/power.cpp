#include "bessel/power.hpp"

#include <array>
#include <cmath>
#include <cstddef>

namespace tambour::bessel {
namespace {

// From here on J_n underflows wherever the power series is used.
constexpr int kVanishing = 341;

// 1/n! is below the range of double long before J_n is: long double reaches 1e-4932.
std::array<long double, kVanishing> inverse_factorials() {
  std::array<long double, kVanishing> table{};
  long double factorial = 1;
  for (int n = 0; n < kVanishing; ++n) {
    if (n > 1) factorial *= n;
    table[static_cast<std::size_t>(n)] = 1 / factorial;
  }
  return table;
}

// By squaring: the error stays below n roundings of long double, and it is several times faster than std::pow.
long double whole_power(long double base, int exponent) {
  long double result = 1;
  for (; exponent > 0; exponent /= 2) {
    if (exponent % 2 == 1) result *= base;
    base *= base;
  }
  return result;
}

}  // namespace

double power_series(int order, double x) {
  static const std::array<long double, kVanishing> inverse = inverse_factorials();
  if (order >= kVanishing) return 0;
  const double z = -0.25 * x * x;
  double term = 1;
  double tail = 0;
  for (int k = 1; k <= 40 && std::abs(term) > 1e-18; ++k) {
    term *= z / (k * (static_cast<double>(order) + k));
    tail += term;
  }
  const long double half = 0.5L * static_cast<long double>(x);
  const long double front = whole_power(half, order) * inverse[static_cast<std::size_t>(order)];
  return static_cast<double>(front * (1 + static_cast<long double>(tail)));
}

}  // namespace tambour::bessel
