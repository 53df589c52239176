// J_n at a row of integer points, streamed in the order n: downwards (Miller) or upwards from an exact start.
#pragma once

#include <vector>

namespace tambour::bessel {

/// Points swept at once: small enough for the first cache. Upward sweeps start from exact values at each chunk.
inline constexpr int kChunk = 128;

/// Orders at which |J_n(x)| has sunk to about exp(-depth), for the points x = first, first + 1, ... (ascending).
std::vector<int> start_orders(int first, int count, double depth);

/// Three neighbouring orders at the points x = first + i, i < count, and the recurrence
/// J_{n-1} + J_{n+1} = (2n/x) J_n that leads on (DLMF 10.6.1).
///
/// In double the roundings of 2n/x can drift in step with n at some x (511, 1417, 4599 ...) and add up to 1e-13 of the
/// local amplitude at x = 5000: enough for roots, where it is compared with x itself. Real = long double is for values.
template <class Real>
class Sweep {
 public:
  int order() const { return order_; }
  const Real* above() const { return above_.data(); }
  const Real* here() const { return here_.data(); }
  /// Order n - 1; at order 0 this is J_{-1} = -J_1.
  const Real* below() const { return below_.data(); }

 protected:
  Sweep(int first, int count);
  /// out = (2n/x) here - other, from point `begin` on.
  void recur(int begin, const std::vector<Real>& other, std::vector<Real>* out);

  std::vector<Real> two_over_x_, two_over_x_rest_;
  std::vector<Real> above_, here_, below_;
  int order_ = 0;
};

/// Miller's recurrence from the highest start order down to 0, for points on both sides of the turning point.
///
/// At a point the values are those of J_n times an unknown positive factor, the same for all orders, between 1e-120 and
/// 1e-120 exp(depth + 25). Orders above the start of a point read exactly 0.
/// Source: DLMF 3.6(iii), 10.74(iv).
template <class Real>
class DownwardSweep : public Sweep<Real> {
 public:
  DownwardSweep(int first, std::vector<int> starts);
  /// Index of the first point whose start is at or above the present order.
  int active() const { return active_; }
  /// Goes to the next lower order; false when order 0 was already reached.
  bool next();

 private:
  using Sweep<Real>::order_, Sweep<Real>::above_, Sweep<Real>::here_, Sweep<Real>::below_;
  void fill_below();

  std::vector<int> starts_;
  int active_;
};

/// J_n itself for orders first_order, first_order + 1, ...; meant for orders below x, where errors do not grow.
template <class Real>
class UpwardSweep : public Sweep<Real> {
 public:
  /// The first order is marched along the points by the Taylor series, from values of Boost.Math at the first point.
  UpwardSweep(int first_order, int first, int count);
  /// J_n' at the points of the first order, known from the march.
  const double* first_slope() const { return slope_.data(); }
  /// Goes to the next higher order.
  void next();

 private:
  using Sweep<Real>::order_, Sweep<Real>::above_, Sweep<Real>::here_, Sweep<Real>::below_;
  std::vector<double> slope_;
};

extern template class DownwardSweep<double>;
extern template class DownwardSweep<long double>;
extern template class UpwardSweep<double>;
extern template class UpwardSweep<long double>;

}  // namespace tambour::bessel
