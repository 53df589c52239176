#include <fmt/format.h>

#include <Eigen/Dense>
#include <cmath>
#include <numbers>

#include "base/check.hpp"
#include "tambour/symmetry.hpp"

namespace tambour {

using std::numbers::pi;
using Complex = std::complex<double>;

PatternAngle pattern_angle(const DiskBasis& basis, int fold, std::span<const Complex> coefficients,
                           std::span<const Complex> weights, const NoiseSpectrum& noise) {
  require(coefficients.size() == basis.size(), "number of coefficients", coefficients.size(),
          fmt::format("{}, one per term", basis.size()));
  const std::span<const Term> terms = basis.order(fold);
  require(weights.size() == terms.size(), "number of weights", weights.size(),
          fmt::format("{}, one per term of order {}", terms.size(), fold));
  Complex sum = 0;
  double variance = 0;  // of each real part of the sum
  for (std::size_t k = 0; k < terms.size(); ++k) {
    sum += std::conj(weights[k]) * coefficients[basis.order_begin(fold) + k];
    variance += std::norm(weights[k]) * noise.at(terms[k].root) * terms[k].white_noise_gain / 2;
  }
  const double period = 360.0 / fold;
  double angle = -std::arg(sum) * 180 / pi / fold;
  if (angle < 0) angle += period;
  if (angle >= period) angle = 0;
  const double uniform = period / std::sqrt(12.0);  // the error of a guess
  const double se = std::abs(sum) > 0 ? std::sqrt(variance) / std::abs(sum) * 180 / pi / fold : uniform;
  return {angle, std::min(se, uniform)};
}

AngleReference::AngleReference(const DiskBasis& basis, int fold)
    : basis_(basis),
      fold_(fold),
      sum_(basis.order(fold).size() * basis.order(fold).size()),
      noise_sd_(basis.order(fold).size()) {}

void AngleReference::add(std::span<const Complex> coefficients, const NoiseSpectrum& noise) {
  require(coefficients.size() == basis_.size(), "number of coefficients", coefficients.size(),
          fmt::format("{}, one per term", basis_.size()));
  const std::span<const Term> terms = basis_.order(fold_);
  std::vector<Complex> whitened;
  for (std::size_t k = 0; k < terms.size(); ++k) {
    const double sd = noise.empty() ? 1 : std::sqrt(noise.at(terms[k].root) * terms[k].white_noise_gain);
    whitened.push_back(coefficients[basis_.order_begin(fold_) + k] / sd);
    noise_sd_[k] += sd;
  }
  for (std::size_t k = 0; k < terms.size(); ++k)
    for (std::size_t l = 0; l < terms.size(); ++l) sum_[k * terms.size() + l] += whitened[k] * std::conj(whitened[l]);
}

std::vector<Complex> AngleReference::weights() const {
  const auto size = static_cast<Eigen::Index>(basis_.order(fold_).size());
  std::vector<Complex> result(size, 0);
  const Eigen::Map<const Eigen::Matrix<Complex, Eigen::Dynamic, Eigen::Dynamic, Eigen::RowMajor>> sum(sum_.data(), size,
                                                                                                      size);
  if (sum.norm() == 0) return result;
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver(sum);
  Eigen::VectorXcd leading = solver.eigenvectors().col(size - 1);
  Eigen::Index largest = 0;
  leading.cwiseAbs().maxCoeff(&largest);
  leading *= std::conj(leading[largest]) / std::abs(leading[largest]);
  // A matched filter: the pattern over the noise, both whitened.
  for (Eigen::Index k = 0; k < size; ++k) result[k] = leading[k] / noise_sd_[k];
  return result;
}

}  // namespace tambour
