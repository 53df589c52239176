// Disk coefficients by brute force, from their definitions and without the library's own numerics: fields evaluated
// cosine by cosine in long double, Gauss-Legendre rings and equispaced angles far beyond what is needed, J_n by Boost.
#pragma once

#include <boost/math/special_functions/bessel.hpp>
#include <boost/math/special_functions/bessel_prime.hpp>
#include <cmath>
#include <complex>
#include <functional>
#include <map>
#include <numbers>
#include <utility>
#include <vector>

#include "tambour/bessel.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/views.hpp"

namespace tambour::reference {

using Real = long double;
using Complex = std::complex<Real>;
/// A function of the position in pixels.
using Field = std::function<Real(Real x, Real y)>;

inline constexpr Real pi = std::numbers::pi_v<Real>;

/// cos(pi p (x + 1/2) / n) for p < n.
inline std::vector<Real> cosines(int n, Real x) {
  std::vector<Real> value(n);
  for (int p = 0; p < n; ++p) value[p] = std::cos(pi * p * (x + 0.5L) / n);
  return value;
}

/// The same by the Chebyshev recurrence, whose error grows as n^2 times 5e-20.
inline void fast_cosines(int n, Real x, std::vector<Real>& value) {
  value.resize(n);
  const Real twice = 2 * std::cos(pi * (x + 0.5L) / n);
  value[0] = 1;
  if (n > 1) value[1] = twice / 2;
  for (int p = 2; p < n; ++p) value[p] = twice * value[p - 1] - value[p - 2];
}

/// Cosine coefficients of samples f_j at 0 .. n-1: f(x) = sum_p result[p] cos(pi p (x + 1/2) / n) passes through them.
inline std::vector<Real> cosine_coefficients(const std::vector<Real>& samples) {
  const int n = static_cast<int>(samples.size());
  std::vector<Real> result(n);
  for (int j = 0; j < n; ++j) {
    const std::vector<Real> value = cosines(n, j);
    for (int p = 0; p < n; ++p) result[p] += samples[j] * value[p] * (p == 0 ? 1 : 2) / n;
  }
  return result;
}

/// The cosine interpolant of an image: sum_pq Y_qp cos(pi p (x + 1/2) / columns) cos(pi q (y + 1/2) / rows).
template <class T>
Field cosine_interpolant(ImageView<const T> image) {
  const int rows = static_cast<int>(image.rows), columns = static_cast<int>(image.columns);
  std::vector<std::vector<Real>> spectrum;
  for (int y = 0; y < rows; ++y) {
    std::vector<Real> row(image.row(y), image.row(y) + columns);
    spectrum.push_back(cosine_coefficients(row));
  }
  std::vector<Real> column(rows);
  for (int p = 0; p < columns; ++p) {
    for (int y = 0; y < rows; ++y) column[y] = spectrum[y][p];
    const std::vector<Real> transformed = cosine_coefficients(column);
    for (int q = 0; q < rows; ++q) spectrum[q][p] = transformed[q];
  }
  return [=, along_x = std::vector<Real>(), along_y = std::vector<Real>()](Real x, Real y) mutable {
    fast_cosines(columns, x, along_x);
    fast_cosines(rows, y, along_y);
    Real sum = 0;
    for (int q = 0; q < rows; ++q) {
      Real line = 0;
      for (int p = 0; p < columns; ++p) line += spectrum[q][p] * along_x[p];
      sum += line * along_y[q];
    }
    return sum;
  };
}

/// The cosine interpolant of an image sum_s across[s][x] down[s][y], for sizes where the general one takes too long.
inline Field cosine_interpolant_of_products(const std::vector<std::vector<Real>>& across,
                                            const std::vector<std::vector<Real>>& down) {
  std::vector<std::vector<Real>> x_spectrum, y_spectrum;
  for (const auto& line : across) x_spectrum.push_back(cosine_coefficients(line));
  for (const auto& line : down) y_spectrum.push_back(cosine_coefficients(line));
  return [=, along_x = std::vector<Real>(), along_y = std::vector<Real>()](Real x, Real y) mutable {
    fast_cosines(static_cast<int>(x_spectrum[0].size()), x, along_x);
    fast_cosines(static_cast<int>(y_spectrum[0].size()), y, along_y);
    Real sum = 0;
    for (std::size_t s = 0; s < x_spectrum.size(); ++s) {
      Real u = 0, v = 0;
      for (std::size_t p = 0; p < along_x.size(); ++p) u += x_spectrum[s][p] * along_x[p];
      for (std::size_t q = 0; q < along_y.size(); ++q) v += y_spectrum[s][q] * along_y[q];
      sum += u * v;
    }
    return sum;
  };
}

/// Gauss-Legendre nodes and weights on (0, length) by Newton's method in long double.
inline std::vector<std::pair<Real, Real>> gauss_legendre(int points, Real length) {
  std::vector<std::pair<Real, Real>> rule;
  for (int i = 0; i < points; ++i) {
    Real x = -std::cos(pi * (i + 0.75L) / (points + 0.5L)), slope = 1;
    for (int step = 0; step < 8; ++step) {
      Real previous = 1, value = x;
      for (int n = 2; n <= points; ++n)
        previous = std::exchange(value, ((2 * n - 1) * x * value - (n - 1) * previous) / n);
      slope = points * (previous - x * value) / (1 - x * x);
      x -= value / slope;
    }
    rule.emplace_back(length * (1 + x) / 2, length / ((1 - x * x) * slope * slope));
  }
  return rule;
}

/// The k-th root (from 1) of J_n or J_n'; Neumann order 0 begins with 0. Boost's zeros of J_n bracket those of J_n'.
inline Real root(Edge edge, int n, int k) {
  const auto dirichlet = [](int order, int index) {
    return static_cast<Real>(boost::math::cyl_bessel_j_zero(static_cast<double>(order), index));
  };
  const auto polish = [](Real x, const auto& value, const auto& slope) {
    for (int step = 0; step < 2; ++step) x -= value(x) / slope(x);
    return x;
  };
  const auto j = [](int order, Real x) { return boost::math::cyl_bessel_j(order, x); };
  const auto derivative = [](int order, Real x) { return boost::math::cyl_bessel_j_prime(order, x); };
  if (edge == Edge::neumann && n == 0) return k == 1 ? 0 : root(Edge::dirichlet, 1, k - 1);
  if (edge == Edge::dirichlet)
    return polish(
        dirichlet(n, k), [&](Real x) { return j(n, x); }, [&](Real x) { return derivative(n, x); });
  Real low = k == 1 ? Real(n) : dirichlet(n, k - 1), high = dirichlet(n, k);
  const bool rising = derivative(n, low) > 0;
  for (int step = 0; step < 30; ++step) {
    const Real middle = (low + high) / 2;
    ((derivative(n, middle) > 0) == rising ? low : high) = middle;
  }
  // J_n'' = -J_n'/x - (1 - n^2/x^2) J_n
  return polish((low + high) / 2, [&](Real x) { return derivative(n, x); },
                [&](Real x) { return -derivative(n, x) / x - (1 - Real(n) * n / (x * x)) * j(n, x); });
}

/// c_nk in 1/px: Dirichlet 1 / (sqrt(pi) R |J_{n+1}(l)|), Neumann 1 / (sqrt(pi) R |J_n(l)| sqrt(1 - n^2/l^2)), the
/// constant 1 / (sqrt(pi) R). DLMF 10.22.37-38.
inline Real normalisation(Edge edge, int n, Real l, Real radius) {
  const Real scale = 1 / (std::sqrt(pi) * radius);
  if (l == 0) return scale;
  if (edge == Edge::dirichlet) return scale / std::abs(boost::math::cyl_bessel_j(n + 1, l));
  return scale / (std::abs(boost::math::cyl_bessel_j(n, l)) * std::sqrt((l - n) * (l + n)) / l);
}

/// A term by its indices.
struct Index {
  int n;
  int k;
};

/// integral over the disk of field conj(psi_nk). `frequency` is the field's highest, in radians per pixel; `extra` more
/// rings and angles may be asked for to see that the quadrature has converged.
inline std::vector<Complex> coefficients(const Field& field, Centre centre, const DiskGeometry& geometry,
                                         const std::vector<Index>& terms, Real frequency, int extra = 0) {
  const Real radius = geometry.radius, highest = frequency + pi * geometry.bandlimit;
  const auto rule =
      gauss_legendre(static_cast<int>(highest * radius / 2 + 10 * std::cbrt(highest * radius) + 12) + extra, radius);
  std::map<int, std::vector<Complex>> ring_orders;  // per order: integral over the angle on every ring
  for (const Index& term : terms) ring_orders[term.n].assign(rule.size(), Complex());
  for (std::size_t j = 0; j < rule.size(); ++j) {
    const Real r = rule[j].first;
    const int angles = static_cast<int>(highest * r + 20 * std::cbrt(highest * r) + 30) + extra;
    std::vector<Real> value(angles);
    std::vector<Complex> turn(angles);
    for (int a = 0; a < angles; ++a) {
      turn[a] = std::polar(Real(1), -2 * pi * a / angles);
      value[a] = field(centre.x + r * turn[a].real(), centre.y - r * turn[a].imag());
    }
    for (auto& [n, rings] : ring_orders) {
      Complex sum;
      for (int a = 0; a < angles; ++a) sum += value[a] * turn[static_cast<long>(n) * a % angles];
      rings[j] = sum * (2 * pi / angles) * rule[j].second * r;
    }
  }
  std::vector<Complex> result;
  for (const Index& term : terms) {
    const Real l = root(geometry.edge, term.n, term.k);
    Complex sum;
    for (std::size_t j = 0; j < rule.size(); ++j)
      sum += ring_orders[term.n][j] * boost::math::cyl_bessel_j(term.n, l * rule[j].first / radius);
    result.push_back(sum * normalisation(geometry.edge, term.n, l, radius));
  }
  return result;
}

/// Highest frequency of any image on the pixel grid: the corner of the square band.
inline constexpr Real image_frequency = std::numbers::sqrt2_v<Real> * pi;

}  // namespace tambour::reference
