#include "tambour/descriptors.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "base/check.hpp"
#include "tambour/error.hpp"

namespace tambour {
namespace {

using Complex = std::complex<double>;

/// z / sqrt(|z|): keeps the phase, takes the root of the size.
Complex root_of_size(Complex z) {
  const double size = std::abs(z);
  return size > 0 ? z / std::sqrt(size) : Complex(0);
}

}  // namespace

const char* to_string(DescriptorKind kind) { return kind == DescriptorKind::magnitude ? "magnitude" : "gram"; }

std::vector<std::string> DescriptorOptions::problems() const {
  std::vector<std::string> found;
  if (!(bandlimit > 0 && bandlimit <= 1))
    found.push_back(fmt::format("bandlimit is {}; allowed is above 0 and up to 1", bandlimit));
  return found;
}

Descriptor::Descriptor(const DiskBasis& basis, const DescriptorOptions& options) : basis_(basis), options_(options) {
  refuse_if_any(options.problems());
  const double limit = std::numbers::pi * basis.radius() * std::min(options.bandlimit, basis.geometry().bandlimit);
  for (int n = 0; n <= basis.max_order(); ++n) {
    const std::span<const Term> terms = basis.order(n);
    const std::size_t constant = !terms.empty() && terms.front().root == 0 ? 1 : 0;
    const auto used = std::upper_bound(terms.begin(), terms.end(), limit,
                                       [](double root, const Term& term) { return root < term.root; }) -
                      terms.begin();
    const std::size_t count = static_cast<std::size_t>(used) > constant ? static_cast<std::size_t>(used) - constant : 0;
    first_.push_back(basis.order_begin(n) + constant);
    count_.push_back(count);
    const bool all_pairs = n > 0 && options.kind == DescriptorKind::gram;
    size_ += all_pairs ? count * count : count;
  }
  if (size_ == 0)
    throw Error(ErrorCode::invalid_argument, fmt::format("no term lies under bandlimit {}; the smallest root is {:.4g}",
                                                         options.bandlimit, basis.terms().front().root));
}

std::vector<std::string> Descriptor::names() const {
  std::vector<std::string> names;
  const auto index = [&](std::size_t n, std::size_t k) { return basis_.terms()[first_[n] + k].radial_index; };
  for (std::size_t k = 0; k < count_[0]; ++k) names.push_back(fmt::format("a_0_{}", index(0, k)));
  for (std::size_t n = 1; n < count_.size(); ++n) {
    if (options_.kind == DescriptorKind::magnitude) {
      for (std::size_t k = 0; k < count_[n]; ++k) names.push_back(fmt::format("abs_{}_{}", n, index(n, k)));
      continue;
    }
    for (std::size_t k = 0; k < count_[n]; ++k)
      for (std::size_t l = k; l < count_[n]; ++l)
        names.push_back(fmt::format("re_{}_{}_{}", n, index(n, k), index(n, l)));
    for (std::size_t k = 0; k < count_[n]; ++k)
      for (std::size_t l = k + 1; l < count_[n]; ++l)
        names.push_back(fmt::format("im_{}_{}_{}", n, index(n, k), index(n, l)));
  }
  return names;
}

void Descriptor::compute(std::span<const Complex> coefficients, std::span<double> out) const {
  require(coefficients.size() == basis_.size(), "number of coefficients", coefficients.size(),
          fmt::format("{}, one per term", basis_.size()));
  require(out.size() == size_, "size of the descriptor", out.size(), fmt::format("{}", size_));
  double energy = 0;
  for (std::size_t n = 0; n < count_.size(); ++n)
    for (std::size_t k = 0; k < count_[n]; ++k) energy += (n == 0 ? 1.0 : 2.0) * std::norm(coefficients[first_[n] + k]);
  if (!(energy > 0)) {
    std::fill(out.begin(), out.end(), 0.0);
    return;
  }
  const double scale = 1 / std::sqrt(energy);
  const auto a = [&](std::size_t n, std::size_t k) { return scale * coefficients[first_[n] + k]; };

  auto next = out.begin();
  for (std::size_t k = 0; k < count_[0]; ++k) *next++ = a(0, k).real();
  for (std::size_t n = 1; n < count_.size(); ++n) {
    if (options_.kind == DescriptorKind::magnitude) {
      for (std::size_t k = 0; k < count_[n]; ++k) *next++ = std::abs(a(n, k));
      continue;
    }
    for (std::size_t k = 0; k < count_[n]; ++k)
      for (std::size_t l = k; l < count_[n]; ++l) *next++ = root_of_size(a(n, k) * std::conj(a(n, l))).real();
    for (std::size_t k = 0; k < count_[n]; ++k)
      for (std::size_t l = k + 1; l < count_[n]; ++l) {
        const double imaginary = root_of_size(a(n, k) * std::conj(a(n, l))).imag();
        *next++ = options_.mirror_invariant ? std::abs(imaginary) : imaginary;
      }
  }
}

}  // namespace tambour
