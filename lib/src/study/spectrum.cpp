#include "tambour/spectrum.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "base/check.hpp"
#include "disk/quadrature.hpp"

namespace tambour {
namespace {

constexpr double noise_spectrum_error = 0.11;  // relative standard error of S in one shell of one image
const double shell_width = std::numbers::pi;

/// Relative variance that the error of the noise spectrum adds to a sum over several shells.
double shared_error(double shells) { return noise_spectrum_error * noise_spectrum_error / std::max(shells / 2, 1.0); }

/// Shells that the terms of one order meet.
double shells_met(std::span<const Term> terms) {
  double count = 0, last = -1;
  for (const Term& term : terms) {
    const double shell = std::floor(term.root / shell_width);
    if (shell != last) ++count;
    last = shell;
  }
  return count;
}

void check_size(const DiskBasis& basis, std::size_t size) {
  require(size == basis.size(), "number of coefficients", size, fmt::format("{}, one per term", basis.size()));
}

}  // namespace

std::vector<double> raw_energies(const DiskBasis& basis, std::span<const std::complex<double>> coefficients) {
  check_size(basis, coefficients.size());
  std::vector<double> energies;
  energies.reserve(basis.size());
  for (std::size_t i = 0; i < basis.size(); ++i) {
    const Term& term = basis.terms()[i];
    energies.push_back(sign_weight(term) * std::norm(coefficients[i]) / term.white_noise_gain);
  }
  return energies;
}

std::vector<OrderPower> rotational_spectrum(const DiskBasis& basis, std::span<const std::complex<double>> coefficients,
                                            const NoiseSpectrum& noise) {
  const std::vector<double> energies = raw_energies(basis, coefficients);
  std::vector<OrderPower> spectrum;
  for (int n = 0; n <= basis.max_order(); ++n) {
    const std::span<const Term> terms = basis.order(n);
    OrderPower order{.angular_order = n};
    double signal_variance = 0, floor_variance = 0;
    for (std::size_t k = 0; k < terms.size(); ++k) {
      const double e = energies[basis.order_begin(n) + k], d = sign_weight(terms[k]), s = noise.at(terms[k].root);
      order.power += e - d * s;
      order.noise_power += d * s;
      signal_variance += 4 * s * e - 2 * d * s * s;
      floor_variance += 2 * d * s * s;
    }
    const double variance = std::max(signal_variance, floor_variance / 2) +
                            order.noise_power * order.noise_power * shared_error(shells_met(terms));
    order.se = std::sqrt(variance);
    spectrum.push_back(order);
  }
  return spectrum;
}

struct RingSpectrum::Data {
  DiskBasis basis;
  int rings;
  /// overlap[ring][order]: terms x terms, row-major: sign weight times integral over the ring of the product of two
  /// radial parts times 2 pi r.
  std::vector<std::vector<std::vector<double>>> overlap;
};

RingSpectrum::RingSpectrum(const DiskBasis& basis, int rings) {
  require(rings >= 1 && rings <= 512, "rings", rings, "1 to 512");
  Data data{basis, rings, {}};
  const double width = basis.radius() / rings;
  const int points = static_cast<int>(std::ceil(basis.root_limit() / rings)) + 8;
  for (int ring = 0; ring < rings; ++ring) {
    const disk::Quadrature rule = disk::gauss_legendre(points, ring * width, (ring + 1) * width);
    auto& orders = data.overlap.emplace_back();
    for (int n = 0; n <= basis.max_order(); ++n) {
      const std::span<const Term> terms = basis.order(n);
      const std::size_t count = terms.size();
      std::vector<double> radial(count * points);
      for (std::size_t k = 0; k < count; ++k)
        for (int i = 0; i < points; ++i)
          radial[k * points + i] = basis.radial(basis.order_begin(n) + k, std::min(rule.nodes[i], basis.radius()));
      auto& product = orders.emplace_back(count * count);
      for (std::size_t k = 0; k < count; ++k)
        for (std::size_t l = 0; l < count; ++l) {
          double sum = 0;
          for (int i = 0; i < points; ++i)
            sum += rule.weights[i] * rule.nodes[i] * radial[k * points + i] * radial[l * points + i];
          product[k * count + l] = 2 * std::numbers::pi * sum;
        }
    }
  }
  data_ = std::make_unique<const Data>(std::move(data));
}

RingSpectrum::~RingSpectrum() = default;

int RingSpectrum::rings() const noexcept { return data_->rings; }
double RingSpectrum::inner(int ring) const { return data_->basis.radius() * ring / data_->rings; }
double RingSpectrum::outer(int ring) const { return data_->basis.radius() * (ring + 1) / data_->rings; }

std::vector<std::vector<OrderPower>> RingSpectrum::compute(std::span<const std::complex<double>> coefficients,
                                                           const NoiseSpectrum& noise) const {
  const DiskBasis& basis = data_->basis;
  check_size(basis, coefficients.size());
  std::vector<double> noise_of_term;  // of a_k per real degree of freedom: v S
  for (const Term& term : basis.terms()) noise_of_term.push_back(noise.at(term.root) * term.white_noise_gain);
  std::vector<std::vector<OrderPower>> result;
  for (const auto& orders : data_->overlap) {
    auto& spectrum = result.emplace_back();
    for (int n = 0; n <= basis.max_order(); ++n) {
      const std::span<const Term> terms = basis.order(n);
      const std::size_t count = terms.size(), begin = basis.order_begin(n);
      const std::vector<double>& g = orders[n];
      const double d = n == 0 ? 1 : 2;
      OrderPower order{.angular_order = n};
      double signal_variance = 0, floor_variance = 0;
      // Noise of a_k per real degree of freedom: v S, and d |a|^2 is the energy of both signs of n.
      for (std::size_t k = 0; k < count; ++k) {
        const double noise_k = noise_of_term[begin + k];
        order.noise_power += d * g[k * count + k] * noise_k;
        std::complex<double> filtered = 0;
        for (std::size_t l = 0; l < count; ++l) {
          filtered += g[k * count + l] * coefficients[begin + l];
          const double noise_l = noise_of_term[begin + l];
          floor_variance += 2 * d * g[k * count + l] * g[k * count + l] * noise_k * noise_l;
        }
        order.power += d * (std::conj(coefficients[begin + k]) * filtered).real();
        signal_variance += 4 * noise_k * d * std::norm(filtered);
      }
      order.power -= order.noise_power;
      const double variance = std::max(signal_variance - floor_variance, floor_variance / 2) +
                              order.noise_power * order.noise_power * shared_error(shells_met(terms));
      order.se = std::sqrt(variance);
      spectrum.push_back(order);
    }
  }
  return result;
}

}  // namespace tambour
