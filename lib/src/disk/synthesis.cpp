#include "disk/synthesis.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace tambour::disk {
namespace {

using fourier::aligned_count;
using std::numbers::pi;

constexpr double oversampling = 2;

/// b_m of 1 / phi^(frequency sin t) = b_0 + sum_m b_m cos(2 m t), up to the last that matters.
std::vector<double> deconvolution_series(const GriddingKernel& kernel, double frequency) {
  constexpr int points = 64;  // over half a period; the series falls below 1e-16 b_0 long before its alias
  double inverse[points];
  for (int i = 0; i < points; ++i) inverse[i] = 1 / kernel.transform(frequency * std::sin(pi * i / points));
  std::vector<double> series;
  for (int m = 0; m < points / 2; ++m) {
    double sum = 0;
    for (int i = 0; i < points; ++i) sum += inverse[i] * std::cos(2 * pi * m * i / points);
    series.push_back(sum * (m == 0 ? 1.0 : 2.0) / points);
    if (std::abs(series.back()) < 1e-15 * series.front()) break;
  }
  return series;
}

/// Argument below which |J_order| stays under 1e-17 (DLMF 10.19.8, the transition region).
double onset(int order) { return order - 12.5 * std::cbrt(order); }

}  // namespace

template <class T>
Synthesis<T>::Synthesis(const DiskBasis& basis, double tolerance)
    : kernel_(GriddingKernel::for_tolerance(tolerance, oversampling)),
      radius_(basis.radius()),
      spacing_(1 / (oversampling * basis.geometry().bandlimit)),
      rings_(static_cast<int>(std::ceil(radius_ / spacing_ + kernel_.width() / 2.0 + 1))),
      angles_(fourier::next_fast_size(2 * oversampling * (basis.max_order() + 1), 2)),
      margin_(kernel_.width() / 2 + 1),
      padded_stride_(static_cast<int>(aligned_count<T>(angles_ + 2 * margin_))),
      spectrum_stride_(static_cast<int>(aligned_count<std::complex<T>>(angles_ / 2 + 1))),
      ring_stride_(static_cast<int>(aligned_count<T>(angles_))),
      fft_(angles_, rings_, spectrum_stride_, ring_stride_) {
  make_matrices(basis);
}

template <class T>
void Synthesis<T>::make_matrices(const DiskBasis& basis) {
  const double x_max = basis.root_limit() * (rings_ + 1) * spacing_ / radius_;
  const int highest = basis.max_order();
  const BesselTable table(0, highest + 64, x_max);
  std::vector<double> x(rings_), value(rings_), g(rings_);
  std::vector<std::vector<double>> profiles;
  for (int n = 0; n <= highest; ++n) {
    const double angular = 1 / kernel_.transform(2 * pi * n / angles_);
    profiles.clear();
    int first = rings_ - 1;
    for (const Term& term : basis.order(n)) {
      for (int j = 0; j < rings_; ++j) x[j] = term.root * (j + 0.5) * spacing_ / radius_;
      const std::vector<double> series = deconvolution_series(kernel_, spacing_ * term.root / radius_);
      std::fill(g.begin(), g.end(), 0.0);
      const auto add = [&](int order, double factor) {
        // J_{-q} = (-1)^q J_q
        if (order < 0 && order % 2 != 0) factor = -factor;
        order = std::abs(order);
        const std::size_t begin = std::lower_bound(x.begin(), x.end(), onset(order)) - x.begin();
        table.values(order, x.data() + begin, x.size() - begin, value.data() + begin);
        for (std::size_t j = begin; j < x.size(); ++j) g[j] += factor * value[j];
      };
      add(n, series[0]);
      for (int m = 1; m < static_cast<int>(series.size()); ++m) {
        add(n + 2 * m, series[m] / 2);
        add(n - 2 * m, series[m] / 2);
      }
      double largest = 0;
      for (double& v : g) largest = std::max(largest, std::abs(v *= angular * term.normalisation));
      // g reaches further in than J_n; the gather of a pixel takes a kernel's width of rings, through zero if need be.
      int reach = 0;
      while (reach < rings_ - 1 && std::abs(g[reach]) < 1e-17 * largest) ++reach;
      first = std::min(first, reach);
      profiles.push_back(g);
    }
    order_begin_.push_back(basis.order_begin(n));
    first_ring_.push_back(first);
    matrix_begin_.push_back(matrix_.size());
    for (const auto& profile : profiles)
      for (int j = first; j < rings_; ++j) matrix_.push_back(static_cast<T>(profile[j]));
  }
  order_begin_.push_back(basis.size());
}

template <class T>
typename Synthesis<T>::Scratch Synthesis<T>::make_scratch() const {
  const auto size = [](int rows, int stride) { return static_cast<std::size_t>(rows) * stride; };
  return {fourier::AlignedBuffer<std::complex<T>>(size(rings_, spectrum_stride_)),
          fourier::AlignedBuffer<T>(size(rings_, ring_stride_)),
          fourier::AlignedBuffer<T>(size(rings_ + margin_, padded_stride_)), std::vector<T>(rings_),
          std::vector<T>(rings_)};
}

template <class T>
void Synthesis<T>::fill_rings(const std::complex<T>* coefficients, Scratch& scratch) const {
  std::fill(scratch.spectra.begin(), scratch.spectra.end(), std::complex<T>());
  const int orders = static_cast<int>(first_ring_.size());
  for (int n = 0; n < orders; ++n) {
    const int count = rings_ - first_ring_[n];
    T* re = scratch.re.data();
    T* im = scratch.im.data();
    std::fill_n(re, count, T(0));
    std::fill_n(im, count, T(0));
    const T* row = matrix_.data() + matrix_begin_[n];
    for (std::size_t term = order_begin_[n]; term < order_begin_[n + 1]; ++term, row += count) {
      const std::complex<T> a = coefficients[term];
      for (int j = 0; j < count; ++j) {
        re[j] += row[j] * a.real();
        im[j] += row[j] * a.imag();
      }
    }
    for (int j = 0; j < count; ++j)
      scratch.spectra[static_cast<std::size_t>(first_ring_[n] + j) * spectrum_stride_ + n] = {re[j],
                                                                                              n == 0 ? T(0) : im[j]};
  }
  fft_.run(scratch.spectra.data(), scratch.rings.data());
}

template <class T>
void Synthesis<T>::pad(Scratch& scratch) const {
  for (int j = -margin_; j < rings_; ++j) {
    const int ring = j < 0 ? -1 - j : j;
    const int turn = j < 0 ? angles_ / 2 : 0;
    const T* from = scratch.rings.data() + static_cast<std::size_t>(ring) * ring_stride_;
    T* to = scratch.padded.data() + static_cast<std::size_t>(j + margin_) * padded_stride_;
    for (int a = -margin_; a < angles_ + margin_; ++a)
      to[a + margin_] = from[((a + turn) % angles_ + angles_) % angles_];
  }
}

template <class T>
void Synthesis<T>::run(const std::complex<T>* coefficients, Centre centre, ImageView<T> image, Scratch& scratch) const {
  fill_rings(coefficients, scratch);
  pad(scratch);
  const int width = kernel_.width();
  for (std::ptrdiff_t row = 0; row < image.rows; ++row) {
    for (std::ptrdiff_t column = 0; column < image.columns; ++column) {
      const double x = static_cast<double>(column) - centre.x, y = static_cast<double>(row) - centre.y;
      const double r = std::hypot(x, y);
      image(row, column) = 0;
      if (!(r <= radius_)) continue;  // also where the centre is not finite
      double turn = std::atan2(y, x) / (2 * pi);
      if (turn < 0) turn += 1;
      const double u = r / spacing_ - 0.5, v = turn * angles_;
      T along_r[16], along_theta[16];
      kernel_.weights(u, along_r);
      kernel_.weights(v, along_theta);
      const T* corner = scratch.padded.data() +
                        static_cast<std::ptrdiff_t>(GriddingKernel::first_point(u, width) + margin_) * padded_stride_ +
                        GriddingKernel::first_point(v, width) + margin_;
      T angle_sum[16] = {};
      for (int i = 0; i < width; ++i, corner += padded_stride_)
        for (int a = 0; a < width; ++a) angle_sum[a] += along_r[i] * corner[a];
      T sum = 0;
      for (int a = 0; a < width; ++a) sum += along_theta[a] * angle_sum[a];
      image(row, column) = sum;
    }
  }
}

template class Synthesis<float>;
template class Synthesis<double>;

}  // namespace tambour::disk
