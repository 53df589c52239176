// Taylor series of a solution of Bessel's equation about a point x0 > 0, for several points at once.
#pragma once

#include <cstddef>

namespace tambour::bessel {

/// Two doubles of one register: every x86-64 has these, so one build gives the same bits everywhere.
using Pair [[gnu::vector_size(16)]] = double;
inline constexpr int kPairs = 4;
/// Points worked on at once; enough to hide the latency of the recurrence.
inline constexpr int kLanes = 2 * kPairs;

inline Pair load_pair(const double* lanes, std::size_t index) { return Pair{lanes[2 * index], lanes[2 * index + 1]}; }

/// Terms summed for |t| <= 1/2 where the function oscillates or grows no faster than exp(x): the next is under 1e-18.
inline constexpr int kNearTerms = 16;
/// The same for a whole step, |t| <= 1.
inline constexpr int kStepTerms = 24;
/// Most terms any caller may ask for.
inline constexpr int kMaxTerms = 128;

/// Numbers of the recurrence that depend on the term only; the divisions by (k+1)(k+2) are done once.
struct TaylorConstants {
  double previous[kMaxTerms];
  double all[kMaxTerms];
  double square[kMaxTerms];

  constexpr TaylorConstants() : previous{}, all{}, square{} {
    for (int k = 0; k < kMaxTerms; ++k) {
      const double n = k;
      previous[k] = -(2 * n + 1) / (n + 2);
      all[k] = -1 / ((n + 1) * (n + 2));
      square[k] = n * n;
    }
  }
};
inline constexpr TaylorConstants kTaylor;

/// Fills d[k] = y^(k)(x0) t^k / k! for 2 <= k < count, count >= 4, from d[0] = y(x0) and d[1] = y'(x0) t.
///
/// With y(x0 + t) = sum c_k t^k Bessel's equation reads
///   x0^2 (k+1)(k+2) c_{k+2} = -[x0 (k+1)(2k+1) c_{k+1} + (k^2 + x0^2 - n^2) c_k + 2 x0 c_{k-1} + c_{k-2}].
/// V is double or Pair. Lanes do not mix and all do the same operations, so a result does not depend on its neighbours.
template <class V, int Count>
inline void taylor_terms(double order, int count, const V (&x0)[Count], const V (&t)[Count], V (*d)[Count]) {
  V a[Count], a2[Count], w[Count], p[Count], q[Count];
  for (int l = 0; l < Count; ++l) {
    a[l] = t[l] / x0[l];
    a2[l] = a[l] * a[l];
    w[l] = a2[l] * ((x0[l] - order) * (x0[l] + order));
    p[l] = 2.0 * a[l] * (t[l] * t[l]);
    q[l] = a2[l] * (t[l] * t[l]);
    d[2][l] = -0.5 * (a[l] * d[1][l] + w[l] * d[0][l]);
    d[3][l] = kTaylor.previous[1] * a[l] * d[2][l] + kTaylor.all[1] * ((a2[l] + w[l]) * d[1][l] + p[l] * d[0][l]);
  }
  for (int k = 2; k + 2 < count; ++k) {
    for (int l = 0; l < Count; ++l) {
      const V tail = p[l] * d[k - 1][l] + q[l] * d[k - 2][l];
      const V own = (kTaylor.square[k] * a2[l] + w[l]) * d[k][l];
      d[k + 2][l] = kTaylor.previous[k] * a[l] * d[k + 1][l] + kTaylor.all[k] * (own + tail);
    }
  }
}

}  // namespace tambour::bessel
