#include "survey/report_collector.hpp"

#include <algorithm>
#include <cmath>
#include <map>

namespace tambour::tools::survey {
namespace {

constexpr std::size_t montage_images = 24;
constexpr std::size_t rebuilt_images = 6;
constexpr std::size_t plotted_centres = 2000;

/// Value below which the given share of `values` lies; 0 for none.
double quantile(std::vector<float> values, double share) {
  if (values.empty()) return 0;
  const auto at = static_cast<std::ptrdiff_t>(share * static_cast<double>(values.size() - 1) + 0.5);
  std::nth_element(values.begin(), values.begin() + at, values.end());
  return values[static_cast<std::size_t>(at)];
}

/// Share of the variance inside the disk that the rebuilt image keeps.
double explained_share(ImageView<const double> original, ImageView<const double> rebuilt, Centre centre,
                       double radius) {
  double count = 0, sum = 0, squares = 0, missed = 0;
  for (std::ptrdiff_t y = 0; y < original.rows; ++y) {
    for (std::ptrdiff_t x = 0; x < original.columns; ++x) {
      if (std::hypot(static_cast<double>(x) - centre.x, static_cast<double>(y) - centre.y) > radius) continue;
      const double value = original(y, x), residual = value - rebuilt(y, x);
      count += 1;
      sum += value;
      squares += value * value;
      missed += residual * residual;
    }
  }
  const double variance = squares - sum * sum / std::max(count, 1.0);
  return variance > 0 ? std::max(1 - missed / variance, 0.0) : 0;
}

}  // namespace

ReportPicture picture_of(ImageView<const double> image, std::ptrdiff_t side) {
  const std::ptrdiff_t block = (std::max(image.rows, image.columns) + side - 1) / side;
  ReportPicture picture{(image.rows + block - 1) / block, (image.columns + block - 1) / block, {}};
  for (std::ptrdiff_t top = 0; top < image.rows; top += block) {
    for (std::ptrdiff_t left = 0; left < image.columns; left += block) {
      double sum = 0, count = 0;
      for (std::ptrdiff_t y = top; y < std::min(top + block, image.rows); ++y)
        for (std::ptrdiff_t x = left; x < std::min(left + block, image.columns); ++x, ++count) sum += image(y, x);
      picture.pixels.push_back(static_cast<float>(sum / count));
    }
  }
  return picture;
}

ReportCollector::ReportCollector(const StackStudyPlan& plan, std::size_t images)
    : plan_(plan),
      images_(images),
      ln_bf_(plan.options().symmetry.last_fold - plan.options().symmetry.first_fold + 1),
      power_(plan.basis().max_order() + 1),
      power_squares_(power_.size()),
      noise_power_(power_.size()),
      preferring_visibility_(ln_bf_.size()) {
  seen_.reserve(images);
}

bool ReportCollector::is_sample(std::size_t image, std::size_t samples) const {
  if (images_ <= samples) return true;
  return image * samples / images_ != (image + 1) * samples / images_;
}

void ReportCollector::take(const StudyBatch& batch) {
  for (std::size_t i = 0; i < batch.images.size(); ++i) {
    const ImageStudy& study = batch.images[i];
    if (!study.status.ok()) {
      seen_.emplace_back();
      skipped_.push_back({study.image, study.source, study.status.reason});
      continue;
    }
    ++analysed_;
    preferring_visibility_[study.evidence->fold - plan_.options().symmetry.first_fold] += study.evidence->visibility;
    seen_.push_back({study.evidence->fold, study.evidence->verdict, static_cast<float>(study.noise_sd),
                     static_cast<float>(study.signal_to_noise)});
    for (std::size_t fold = 0; fold < ln_bf_.size(); ++fold)
      ln_bf_[fold].push_back(static_cast<float>(study.evidence->ln_bf_of_fold[fold]));
    if (is_sample(study.image, plotted_centres))
      centres_.push_back(
          {study.centre.centre.x, study.centre.centre.y, std::sqrt(study.centre.var_x), std::sqrt(study.centre.var_y)});
    const auto row = static_cast<std::ptrdiff_t>(i);
    const std::span<const std::complex<double>> coefficients(batch.coefficients.row(row), plan_.basis().size());
    take_spectrum(study);
    take_pictures(study, batch.prepared[row], coefficients);
  }
}

void ReportCollector::take_spectrum(const ImageStudy& study) {
  for (const OrderPower& order : study.spectrum) {
    power_[order.angular_order] += order.power;
    power_squares_[order.angular_order] += order.power * order.power;
    noise_power_[order.angular_order] += order.noise_power;
  }
}

void ReportCollector::take_pictures(const ImageStudy& study, ImageView<const double> prepared,
                                    std::span<const std::complex<double>> coefficients) {
  if (is_sample(study.image, montage_images)) {
    ReportImage shown;
    shown.image = study.image;
    shown.source = study.source;
    shown.picture = picture_of(prepared, picture_side);
    shown.centre = study.centre.centre;
    shown.verdict = to_string(study.evidence->verdict);
    if (study.evidence->verdict == Verdict::best_supported) shown.fold = study.evidence->fold;
    montage_.push_back(std::move(shown));
  }
  if (is_sample(study.image, rebuilt_images)) {
    std::vector<double> pixels(prepared.rows * prepared.columns), rest(pixels.size());
    const ImageView<double> rebuilt(pixels.data(), prepared.rows, prepared.columns);
    const ImageView<double> residual(rest.data(), prepared.rows, prepared.columns);
    plan_.rebuild(coefficients, study.centre.centre, rebuilt);
    for (std::ptrdiff_t y = 0; y < prepared.rows; ++y)
      for (std::ptrdiff_t x = 0; x < prepared.columns; ++x) residual(y, x) = prepared(y, x) - rebuilt(y, x);
    rebuilds_.push_back({study.image, picture_of(prepared, picture_side), picture_of(rebuilt, picture_side),
                         picture_of(residual, picture_side),
                         explained_share(prepared, rebuilt, study.centre.centre, plan_.basis().radius())});
  }
}

void ReportCollector::fill(ReportData& report) const {
  report.images = images_;
  report.analysed = analysed_;
  report.montage = montage_;
  report.rebuilds = rebuilds_;
  report.centres = centres_;
  report.skipped = skipped_;

  std::map<std::pair<int, int>, std::size_t> counts;  // verdict and fold
  std::vector<float> noise, signal;
  const int first_fold = plan_.options().symmetry.first_fold;
  report.first_fold = first_fold;
  report.best_fold_count.assign(ln_bf_.size(), 0);
  for (const Seen& seen : seen_) {
    const bool has_fold = seen.verdict == Verdict::best_supported;
    ++counts[{static_cast<int>(seen.verdict), has_fold ? seen.fold : 0}];
    if (seen.verdict == Verdict::skipped) continue;
    ++report.best_fold_count[seen.fold - first_fold];
    noise.push_back(seen.noise_sd);
    signal.push_back(seen.signal_to_noise);
  }
  for (const auto& [kind, images] : counts)
    report.verdicts.push_back({to_string(static_cast<Verdict>(kind.first)), kind.second, images});
  report.noise_sd = quantile(noise, 0.5);
  report.signal_to_noise = quantile(signal, 0.5);
  for (const auto& values : ln_bf_) {
    report.ln_bf_median.push_back(quantile(values, 0.5));
    report.ln_bf_lower.push_back(quantile(values, 0.1));
    report.ln_bf_upper.push_back(quantile(values, 0.9));
  }
  for (std::size_t fold = 0; fold < ln_bf_.size(); ++fold)
    report.mean_visibility.push_back(preferring_visibility_[fold] / static_cast<double>(report.best_fold_count[fold]));
  const double m = std::max<double>(static_cast<double>(analysed_), 1);
  for (std::size_t n = 0; n < power_.size(); ++n) {
    const double mean = power_[n] / m;
    const double variance = analysed_ > 1 ? std::max(power_squares_[n] - m * mean * mean, 0.0) / (m - 1) / m : 0;
    report.spectrum.push_back({static_cast<int>(n), mean, std::sqrt(variance), noise_power_[n] / m});
  }
}

}  // namespace tambour::tools::survey
