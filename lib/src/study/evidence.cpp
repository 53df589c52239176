#include "study/evidence.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace tambour::study {
namespace {

constexpr int amplitudes = 10;
constexpr double smallest_amplitude = 0.125, largest_amplitude = 256;
constexpr double widths[] = {0.2, 0.3, 0.45, 0.7, 1.2};  // L, in units of lambda_max
constexpr double negligible = 1e-9;                      // t below this leaves ln BF unchanged

}  // namespace

double log_mean_exp(std::span<const double> values) {
  const double largest = *std::max_element(values.begin(), values.end());
  if (!std::isfinite(largest)) return largest;
  double sum = 0;
  for (const double value : values) sum += std::exp(value - largest);
  return largest + std::log(sum / static_cast<double>(values.size()));
}

Evidence::Evidence(const Shells& shells, double root_limit, int first_fold, int last_fold, int images)
    : folds_(last_fold - first_fold + 1),
      orders_(static_cast<int>(shells.degrees_of_freedom.front().size())),
      shells_(shells.size()) {
  for (std::size_t j = 0; j < shells_; ++j) total_degrees_.push_back(shells.total(j) * images);
  for (int fold = first_fold; fold <= last_fold; ++fold) {
    auto& multiples = multiples_.emplace_back();
    for (int n = fold; n < orders_; n += fold)
      if (n >= 2) multiples.push_back(n);
    for (std::size_t j = 0; j < shells_; ++j) {
      double degrees = 0;
      for (const std::size_t n : multiples) degrees += shells.degrees_of_freedom[j][n];
      fold_degrees_.push_back(degrees * images);
    }
  }
  const double lowest = smallest_amplitude / std::sqrt(images);
  for (int i = 0; i < amplitudes; ++i) {
    const double amplitude = lowest * std::pow(largest_amplitude / lowest, static_cast<double>(i) / (amplitudes - 1));
    for (const double width : widths) {
      ++settings_;
      for (std::size_t j = 0; j < shells_; ++j) {
        const double x = shells.mean_root[j] / (width * root_limit);
        const double t = amplitude * std::exp(-x * x / 2);
        profiles_.push_back(t < negligible ? Profile{0, 0} : Profile{t / (1 + t), std::log1p(t)});
      }
    }
  }
}

void Evidence::ln_bayes_factors(std::span<const double> energies, std::span<double> out) const {
  std::vector<double> total(shells_, 0.0);
  for (std::size_t j = 0; j < shells_; ++j)
    for (int n = 0; n < orders_; ++n) total[j] += energies[j * orders_ + n];
  std::vector<double> share(shells_), ln_bf(settings_);
  for (int fold = 0; fold < folds_; ++fold) {
    if (multiples_[fold].empty()) {
      out[fold] = -std::numeric_limits<double>::infinity();
      continue;
    }
    const double* degrees = fold_degrees_.data() + fold * shells_;
    for (std::size_t j = 0; j < shells_; ++j) {
      double inside = 0;
      for (const std::size_t n : multiples_[fold]) inside += energies[j * orders_ + n];
      share[j] = total[j] > 0 ? inside / total[j] : 0;
    }
    const Profile* profile = profiles_.data();
    for (double& value : ln_bf) {
      double sum = 0;
      for (std::size_t j = 0; j < shells_; ++j, ++profile) {
        if (profile->shrink == 0 || degrees[j] == 0) continue;
        sum -= (degrees[j] * profile->log + total_degrees_[j] * std::log1p(-share[j] * profile->shrink)) / 2;
      }
      value = sum;
    }
    out[fold] = log_mean_exp(ln_bf);
  }
}

double Evidence::statistic(std::span<const double> ln_bf) { return log_mean_exp(ln_bf); }

}  // namespace tambour::study
