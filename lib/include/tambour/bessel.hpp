// Roots, norms and whole families of Bessel functions of the first kind, integer order.
#pragma once

#include <cstddef>
#include <memory>
#include <vector>

namespace tambour {

/// Condition at the rim x = root of the functions J_n(root r), 0 <= r <= 1.
enum class Edge {
  dirichlet,  ///< J_n = 0: isolated objects
  neumann     ///< J_n' = 0: fields that fill the disk; order 0 begins with the constant, root 0
};

/// "dirichlet" or "neumann".
const char* to_string(Edge edge);

/// All roots of J_n (Dirichlet) or J_n' (Neumann) in [0, limit], ascending.
///
/// Neumann, n = 0: the root 0 (the constant function) comes first; x = 0 is never a root otherwise.
/// Range: 0 <= order <= 5000, 0 <= limit <= 1e5.
/// Error: 2 units in the last place (largest seen 1.02). None missed, none doubled; a root that lies within its error
/// of the limit may count as inside or outside.
/// Throws Error(invalid_argument) outside the range. Thread-safe.
/// Cost: about 0.4 us a root, and up to 1 ms to reach the first root of a high order.
/// Source: DLMF 10.21; neighbouring positive roots lie more than 3 apart, so one sign change is one root.
std::vector<double> bessel_roots(int order, Edge edge, double limit);

/// The same for orders 0 .. max_order at once: result[n] holds the roots of order n.
///
/// May differ from bessel_roots in the last place. Cost: about 0.1 us a root.
std::vector<std::vector<double>> bessel_roots_up_to(int max_order, Edge edge, double limit);

/// Norm integral_0^1 x J_n(root x)^2 dx at a root of the edge condition.
///
/// Dirichlet: J_{n+1}(root)^2 / 2. Neumann: (1 - n^2/root^2) J_n(root)^2 / 2, and 1/2 for the constant.
/// Range: 0 <= order <= 5000, order < root <= 1e6, and the root 0 of Neumann order 0; nobody checks that it is a root.
/// Error: 1e-13 relative, the rounding of the root included (largest seen 5e-15 up to order 1000).
/// Throws Error(invalid_argument) outside the range. Thread-safe.
/// Cost: 1 us (order 0) to 30 us (order 5000). Source: DLMF 10.22.37-38.
double bessel_norm(int order, Edge edge, double root);

/// J_n(x) for a band of orders and any number of points in [0, x_max], from a table made once.
///
/// The table holds J_n at the integers up to 1e4; between them the Taylor series of Bessel's equation is summed.
/// Beyond 1e4 every value is computed by itself, 10 to 100 times slower. Immutable once built, no global state.
/// Range: 0 <= first_order <= last_order <= 5100, 0 <= x_max <= 1e6; order and x within those of the table.
/// Error of value, values and derivative: 1e-14 of the local amplitude (largest seen 6e-15), and 1e-14 relative to the
/// left of the turning point x = n; a result too small for a double is 0 or subnormal.
/// Throws Error(invalid_argument) outside the range; values() may then have written a part of its output. Thread-safe.
/// Memory: at most 8 min(x_max, 1e4) (last_order - first_order + 3) bytes.
/// Cost: to build, 10 ns for every integer x up to last_order and order up to x + 80 x^{1/3} and every stored value;
/// values() 20 ns a value; 100 ns one by one or where x < 0.7 n.
/// Source: DLMF 10.6.1 (recurrence), 10.12.4 (normalisation), 10.2.1 (equation), 10.2.2 (power series near 0).
class BesselTable {
 public:
  BesselTable(int first_order, int last_order, double x_max);

  int first_order() const noexcept;
  int last_order() const noexcept;
  double x_max() const noexcept;

  /// J_order(x).
  double value(int order, double x) const;
  /// J_order'(x).
  double derivative(int order, double x) const;
  /// out[i] = value(order, x[i]) to the last bit, i < count; the points may come in any order.
  void values(int order, const double* x, std::size_t count, double* out) const;

 private:
  struct Data;
  std::shared_ptr<const Data> data_;
};

/// Modified Bessel function of order 0, scaled: I_0(x) e^{-|x|}, used by gridding kernels.
///
/// Range: finite x. Error: 4e-16 relative. Throws Error(invalid_argument) for NaN and infinity. Thread-safe.
/// Source: DLMF 10.40.1 from |x| = 100 on, Boost.Math below.
double bessel_i0_scaled(double x);

}  // namespace tambour
