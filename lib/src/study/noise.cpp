#include "tambour/noise.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <complex>
#include <limits>
#include <numbers>

#include "base/check.hpp"
#include "fourier/buffer.hpp"
#include "fourier/plans.hpp"

namespace tambour {
namespace {

using std::numbers::pi;

constexpr double ramp_begin = 0.5, ramp_width = 4;  // px outside the rim
constexpr double least_weight = 200;                // sum of w^2 that measures the outside well enough
constexpr double lowest_root = 2 * pi;              // what lies below is background
constexpr double relative_floor = 1e-12;            // of the mean energy: an image without noise still has a spectrum
constexpr double free_order_share = 0.8;            // orders n > 0.8 lambda see only what lies outside 0.8 R

double window(double r, double radius) {
  const double t = std::clamp((r - radius - ramp_begin) / ramp_width, 0.0, 1.0);
  return t * t * (3 - 2 * t);
}

/// (1/2, 1, 1/2) over neighbours; the ends keep what they have.
std::vector<double> smoothed(const std::vector<double>& values) {
  std::vector<double> result(values.size());
  for (std::size_t j = 0; j < values.size(); ++j) {
    result[j] = values[j];
    if (j > 0) result[j] += values[j - 1] / 2;
    if (j + 1 < values.size()) result[j] += values[j + 1] / 2;
  }
  return result;
}

}  // namespace

double NoiseSpectrum::at(double lambda) const {
  if (root.empty()) return 0;
  if (lambda <= root.front()) return variance.front();
  if (lambda >= root.back()) return variance.back();
  const auto above = std::upper_bound(root.begin(), root.end(), lambda) - root.begin();
  const double share = (lambda - root[above - 1]) / (root[above] - root[above - 1]);
  return std::exp((1 - share) * std::log(variance[above - 1]) + share * std::log(variance[above]));
}

double NoiseSpectrum::sd(double limit) const {
  if (root.empty()) return 0;
  constexpr int steps = 256;
  double sum = 0, weight = 0;
  for (int i = 0; i < steps; ++i) {
    const double lambda = limit * (i + 0.5) / steps;
    sum += lambda * at(lambda);
    weight += lambda;
  }
  return std::sqrt(sum / weight);
}

NoiseSpectrum mean_spectrum(const std::vector<NoiseSpectrum>& spectra) {
  NoiseSpectrum mean;
  double count = 0;
  for (const NoiseSpectrum& spectrum : spectra) {
    if (spectrum.empty()) continue;
    if (mean.empty()) mean = {spectrum.root, std::vector<double>(spectrum.root.size(), 0.0)};
    for (std::size_t j = 0; j < mean.root.size(); ++j) mean.variance[j] += spectrum.at(mean.root[j]);
    ++count;
  }
  for (double& v : mean.variance) v /= count;
  return mean;
}

struct NoiseEstimator::Data {
  DiskBasis basis;
  Shells shells;
  std::ptrdiff_t rows, columns;
  bool outside;
  fourier::ImageFft<double> fft;
  std::vector<int> shell_of_frequency;  // rows x (columns/2 + 1); -1 = none

  double sum_of_squared_weights(Centre centre) const {
    double sum = 0;
    for (std::ptrdiff_t y = 0; y < rows; ++y)
      for (std::ptrdiff_t x = 0; x < columns; ++x) {
        const double w =
            window(std::hypot(static_cast<double>(x) - centre.x, static_cast<double>(y) - centre.y), basis.radius());
        sum += w * w;
      }
    return sum;
  }

  NoiseSpectrum from_power(std::vector<double> power, std::vector<double> count,
                           const std::vector<double>& energies) const {
    double floor = 0;
    for (const double energy : energies) floor += energy;
    floor = std::max(relative_floor * floor / static_cast<double>(energies.size()), std::numeric_limits<double>::min());
    power = smoothed(power);
    count = smoothed(count);
    NoiseSpectrum spectrum;
    for (std::size_t j = 0; j < power.size(); ++j) {
      if (!(count[j] > 0)) continue;
      spectrum.root.push_back(shells.mean_root[j]);
      spectrum.variance.push_back(std::max(power[j] / count[j], floor));
    }
    return spectrum;
  }

  NoiseSpectrum from_outside(ImageView<const double> image, Centre centre, const std::vector<double>& energies) const {
    fourier::AlignedBuffer<double> weighted(rows * columns), weights(rows * columns);
    double sum = 0, total = 0, squares = 0;
    for (std::ptrdiff_t y = 0; y < rows; ++y) {
      for (std::ptrdiff_t x = 0; x < columns; ++x) {
        const double w =
            window(std::hypot(static_cast<double>(x) - centre.x, static_cast<double>(y) - centre.y), basis.radius());
        weights[y * columns + x] = w;
        sum += w * image(y, x);
        total += w;
        squares += w * w;
      }
    }
    const double mean = sum / total;
    for (std::ptrdiff_t y = 0; y < rows; ++y)
      for (std::ptrdiff_t x = 0; x < columns; ++x)
        weighted[y * columns + x] = weights[y * columns + x] * (image(y, x) - mean);
    const std::ptrdiff_t half = columns / 2 + 1;
    fourier::AlignedBuffer<std::complex<double>> spectrum(rows * half);
    fft.forward(weighted.data(), spectrum.data());

    std::vector<double> power(shells.size(), 0.0), count(shells.size(), 0.0);
    for (std::ptrdiff_t y = 0; y < rows; ++y) {
      for (std::ptrdiff_t x = 0; x < half; ++x) {
        const int shell = shell_of_frequency[y * half + x];
        if (shell < 0) continue;
        // Half of the plane is stored: columns strictly between 0 and the middle stand for two frequencies.
        const double multiplicity = x == 0 || 2 * x == columns ? 1 : 2;
        power[shell] += multiplicity * std::norm(spectrum[y * half + x]) / squares;
        count[shell] += multiplicity;
      }
    }
    return from_power(std::move(power), std::move(count), energies);
  }

  /// Largest share up to free_order_share for which some order n > share * lambda exists: small bases have none above
  /// it.
  double order_share() const {
    double largest = 0;
    for (std::size_t i = 0; i < basis.size(); ++i)
      if (shells.of_term[i] >= 0) largest = std::max(largest, basis.terms()[i].angular_order / basis.terms()[i].root);
    return std::min(free_order_share, 0.9 * largest);
  }

  NoiseSpectrum from_free_orders(const std::vector<double>& energies) const {
    const double share = order_share();
    std::vector<double> power(shells.size(), 0.0), count(shells.size(), 0.0);
    const std::span<const Term> terms = basis.terms();
    for (std::size_t i = 0; i < terms.size(); ++i) {
      if (shells.of_term[i] < 0 || terms[i].angular_order <= share * terms[i].root) continue;
      power[shells.of_term[i]] += energies[i];
      count[shells.of_term[i]] += 2;
    }
    return from_power(std::move(power), std::move(count), energies);
  }
};

NoiseEstimator::NoiseEstimator(const DiskBasis& basis, std::ptrdiff_t rows, std::ptrdiff_t columns) {
  Data data{basis, make_shells(basis),
            rows,  columns,
            false, fourier::ImageFft<double>(static_cast<int>(rows), static_cast<int>(columns)),
            {}};
  data.outside =
      data.sum_of_squared_weights(frame_middle(rows, columns)) >= least_weight && basis.root_limit() > 2 * lowest_root;
  const auto frequency = [](std::ptrdiff_t i, std::ptrdiff_t n) {
    return 2 * pi * static_cast<double>(2 * i <= n ? i : i - n) / static_cast<double>(n);
  };
  const Shells& shells = data.shells;
  for (std::ptrdiff_t y = 0; y < rows; ++y) {
    for (std::ptrdiff_t x = 0; x <= columns / 2; ++x) {
      const double lambda = std::hypot(frequency(y, rows), frequency(x, columns)) * basis.radius();
      const auto above = std::upper_bound(shells.lower.begin(), shells.lower.end(), lambda) - shells.lower.begin();
      const bool inside = lambda >= lowest_root && above > 0 && above <= static_cast<std::ptrdiff_t>(shells.size());
      data.shell_of_frequency.push_back(inside ? static_cast<int>(above) - 1 : -1);
    }
  }
  data_ = std::make_unique<const Data>(std::move(data));
}

NoiseEstimator::~NoiseEstimator() = default;

bool NoiseEstimator::uses_outside() const noexcept { return data_->outside; }
const Shells& NoiseEstimator::shells() const noexcept { return data_->shells; }

NoiseSpectrum NoiseEstimator::estimate(ImageView<const double> image, Centre centre,
                                       const std::vector<double>& energies) const {
  require(image.rows == data_->rows && image.columns == data_->columns, "shape of the image",
          fmt::format("{} x {}", image.rows, image.columns),
          fmt::format("{} x {}, as planned", data_->rows, data_->columns));
  require(energies.size() == data_->basis.size(), "number of energies", energies.size(),
          fmt::format("{}, one per term", data_->basis.size()));
  return data_->outside ? data_->from_outside(image, centre, energies) : data_->from_free_orders(energies);
}

}  // namespace tambour
