#include "study/evidence.hpp"

#include <algorithm>
#include <cmath>
#include <iterator>

namespace tambour::study {
namespace {

constexpr int amplitudes = 10;
constexpr double smallest_amplitude = 0.125, largest_amplitude = 256;
constexpr double widths[] = {0.2, 0.3, 0.45, 0.7, 1.2};  // L, in units of lambda_max

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
      shells_(shells.size()),
      total_degrees_(shells_),
      shrink_(shells_, amplitudes * std::size(widths)) {
  const double lowest = smallest_amplitude / std::sqrt(images);
  Eigen::MatrixXd growth(shrink_.cols(), shells_);  // ln(1 + t)
  Eigen::Index setting = 0;
  for (int i = 0; i < amplitudes; ++i) {
    const double amplitude = lowest * std::pow(largest_amplitude / lowest, static_cast<double>(i) / (amplitudes - 1));
    for (const double width : widths) {
      for (std::size_t j = 0; j < shells_; ++j) {
        const double x = shells.mean_root[j] / (width * root_limit);
        const double t = amplitude * std::exp(-x * x / 2);
        shrink_(j, setting) = t / (1 + t);
        growth(setting, j) = std::log1p(t);
      }
      ++setting;
    }
  }
  Eigen::MatrixXd fold_degrees(shells_, folds_);  // d_jN
  for (std::size_t j = 0; j < shells_; ++j) total_degrees_[j] = shells.total(j) * images;
  for (int fold = 0; fold < folds_; ++fold) {
    auto& multiples = multiples_.emplace_back();
    for (int n = first_fold + fold; n < orders_; n += first_fold + fold) multiples.push_back(n);
    for (std::size_t j = 0; j < shells_; ++j) {
      double degrees = 0;
      for (const std::size_t n : multiples) degrees += shells.degrees_of_freedom[j][n];
      fold_degrees(j, fold) = degrees * images;
    }
  }
  penalty_ = growth * fold_degrees / 2;
}

void Evidence::ln_bayes_factors(std::span<const double> energies, std::span<double> out) const {
  Eigen::ArrayXd total(shells_), share(shells_);
  for (std::size_t j = 0; j < shells_; ++j) {
    total[j] = 0;
    for (int n = 0; n < orders_; ++n) total[j] += energies[j * orders_ + n];
  }
  for (int fold = 0; fold < folds_; ++fold) {
    for (std::size_t j = 0; j < shells_; ++j) {
      double inside = 0;
      for (const std::size_t n : multiples_[fold]) inside += energies[j * orders_ + n];
      share[j] = total[j] > 0 ? inside / total[j] : 0;
    }
    const Eigen::MatrixXd logs = (1 - shrink_.colwise() * share).log();
    const Eigen::VectorXd ln_bf = -penalty_.col(fold) - logs.transpose() * total_degrees_ / 2;
    out[fold] = log_mean_exp({ln_bf.data(), static_cast<std::size_t>(ln_bf.size())});
  }
}

double Evidence::statistic(std::span<const double> ln_bf) { return log_mean_exp(ln_bf); }

}  // namespace tambour::study
