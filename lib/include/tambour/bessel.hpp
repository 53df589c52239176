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
/// Range: 0 <= n <= 5000, 0 <= limit <= 1e5. Error: 2 ulp. None missed, none doubled.
/// Throws Error(invalid_argument) outside the range. Thread-safe. Cost: about 0.1 us a root.
/// Source: DLMF 10.21; neighbouring positive roots lie more than 3 apart.
std::vector<double> bessel_roots(int order, Edge edge, double limit);

/// The same for orders 0 .. max_order at once: result[n] holds the roots of order n. Much faster than one by one.
std::vector<std::vector<double>> bessel_roots_up_to(int max_order, Edge edge, double limit);

/// Norm integral_0^1 x J_n(root x)^2 dx at a root of the edge condition.
///
/// Dirichlet: J_{n+1}(root)^2 / 2. Neumann: (1 - n^2/root^2) J_n(root)^2 / 2, and 1/2 for the constant.
/// Error: 1e-13 relative. Throws Error(invalid_argument) for order < 0 or root < 0. Thread-safe. Source:
/// DLMF 10.22.37-38.
double bessel_norm(int order, Edge edge, double root);

/// J_n(x) for a band of orders and any number of points in [0, x_max], from a table made once.
///
/// The table holds J_n at half-integer-spaced nodes from a downward recurrence; between nodes the Taylor series of
/// Bessel's equation is summed. Immutable once built, thread-safe, no global state.
/// Range: 0 <= first_order <= last_order <= 5100, 0 <= x_max <= 1e6.
/// Error: 5e-14 of the local amplitude for x <= 1e4, 1e-12 up to 1e6; clean zeros where J_n underflows.
/// Memory: about 16 x_max (last_order - first_order + 3) bytes. Throws Error(invalid_argument) outside the range.
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
  /// out[i] = J_order(x[i]), i < count; the points may come in any order.
  void values(int order, const double* x, std::size_t count, double* out) const;

 private:
  struct Data;
  std::shared_ptr<const Data> data_;
};

/// Modified Bessel function I_0(x) e^{-|x|}, used by gridding kernels. Error: 4e-16 relative. Thread-safe.
double bessel_i0_scaled(double x);

}  // namespace tambour
