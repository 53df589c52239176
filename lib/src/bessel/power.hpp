// The power series of J_n about 0.
#pragma once

namespace tambour::bessel {

/// Whether power_series(order, x) loses no more than a few roundings: x <= 1.5 sqrt(n + 1).
inline bool power_series_holds(int order, double x) { return x * x <= 2.25 * (order + 1.0); }

/// J_order(x) = (x/2)^n / n! sum_k (-x^2/4)^k / (k! (n+1) ... (n+k)), where power_series_holds. DLMF 10.2.2.
double power_series(int order, double x);

}  // namespace tambour::bessel
