#include "bessel/sweeps.hpp"

#include <algorithm>
#include <boost/math/special_functions/bessel.hpp>
#include <boost/math/special_functions/bessel_prime.hpp>
#include <cmath>
#include <cstddef>
#include <utility>

#include "bessel/taylor.hpp"

namespace tambour::bessel {
namespace {

constexpr double kSeed = 1e-120;

// Debye's exponent: J_n(x) is about exp(-decay) / sqrt(2 pi sqrt(n^2 - x^2)) below the turning point (DLMF 10.19(ii)).
double decay(double order, double x) {
  if (order <= x) return 0;
  const double root = std::sqrt((order - x) * (order + x));
  return order * std::log((order + root) / x) - root;
}

// y[i] = J_order(first + i) and its derivative, one step of the Taylor series after the other.
void march(int order, int first, std::vector<double>* y, std::vector<double>* dy) {
  (*y)[0] = boost::math::cyl_bessel_j(order, static_cast<double>(first));
  (*dy)[0] = boost::math::cyl_bessel_j_prime(order, static_cast<double>(first));
  const double step[1] = {1.0};
  double d[kStepTerms][1];
  for (std::size_t i = 0; i + 1 < y->size(); ++i) {
    const double x0[1] = {first + static_cast<double>(i)};
    d[0][0] = (*y)[i];
    d[1][0] = (*dy)[i];
    taylor_terms<double, 1>(order, kStepTerms, x0, step, d);
    double value = 0;
    double slope = 0;
    for (int k = kStepTerms - 1; k >= 1; --k) {
      value += d[k][0];
      slope += k * d[k][0];
    }
    (*y)[i + 1] = value + d[0][0];
    (*dy)[i + 1] = slope;
  }
}

}  // namespace

std::vector<int> start_orders(int first, int count, double depth) {
  std::vector<int> starts(static_cast<std::size_t>(count));
  int order = first;
  for (int i = 0; i < count; ++i) {
    const double x = first + i;
    order = std::max(order, first + i + 1);
    while (decay(order, x) < depth) ++order;
    starts[static_cast<std::size_t>(i)] = order;
  }
  return starts;
}

template <class Real>
Sweep<Real>::Sweep(int first, int count) {
  const auto size = static_cast<std::size_t>(count);
  two_over_x_.resize(size);
  two_over_x_rest_.resize(size);
  above_.assign(size, 0);
  here_.assign(size, 0);
  below_.assign(size, 0);
  for (std::size_t i = 0; i < size; ++i) {
    // The rounding of 2/x would act like a shift of x, the same at every order. With a short first piece n * (2/x) is
    // exact but for one rounding, as it would be with a division.
    const Real x = static_cast<Real>(first) + static_cast<Real>(i);
    two_over_x_[i] = static_cast<float>(2 / x);
    two_over_x_rest_[i] = (2 - two_over_x_[i] * x) / x;
  }
}

template <class Real>
void Sweep<Real>::recur(int begin, const std::vector<Real>& other, std::vector<Real>* out) {
  const auto n = static_cast<Real>(order_);
  const Real* main = two_over_x_.data();
  const Real* rest = two_over_x_rest_.data();
  const Real* here = here_.data();
  const Real* minus = other.data();
  Real* result = out->data();
  const auto count = static_cast<int>(here_.size());
  for (int i = begin; i < count; ++i) result[i] = (n * main[i] + n * rest[i]) * here[i] - minus[i];
}

template <class Real>
DownwardSweep<Real>::DownwardSweep(int first, std::vector<int> starts)
    : Sweep<Real>(first, static_cast<int>(starts.size())),
      starts_(std::move(starts)),
      active_(static_cast<int>(starts_.size())) {
  order_ = starts_.back();
  fill_below();
}

template <class Real>
void DownwardSweep<Real>::fill_below() {
  while (active_ > 0 && starts_[static_cast<std::size_t>(active_ - 1)] >= order_) {
    --active_;
    here_[static_cast<std::size_t>(active_)] = static_cast<Real>(kSeed);
  }
  this->recur(active_, above_, &below_);
}

template <class Real>
bool DownwardSweep<Real>::next() {
  if (order_ == 0) return false;
  --order_;
  above_.swap(here_);
  here_.swap(below_);
  fill_below();
  return true;
}

template <class Real>
UpwardSweep<Real>::UpwardSweep(int first_order, int first, int count)
    : Sweep<Real>(first, count), slope_(static_cast<std::size_t>(count)) {
  order_ = first_order;
  std::vector<double> value(slope_.size());
  march(first_order, first, &value, &slope_);
  for (std::size_t i = 0; i < value.size(); ++i) {
    here_[i] = value[i];
    above_[i] = order_ / (first + static_cast<Real>(i)) * here_[i] - slope_[i];
  }
  this->recur(0, above_, &below_);
}

template <class Real>
void UpwardSweep<Real>::next() {
  ++order_;
  below_.swap(here_);
  here_.swap(above_);
  this->recur(0, below_, &above_);
}

template class DownwardSweep<double>;
template class DownwardSweep<long double>;
template class UpwardSweep<double>;
template class UpwardSweep<long double>;

}  // namespace tambour::bessel
