// Gathers what the report shows while the batches of a survey pass by.
#pragma once

#include <cstddef>
#include <vector>

#include "tambour/report.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools::survey {

/// Memory: some 200 bytes an image for the evidence, and a fixed number of pictures.
class ReportCollector {
 public:
  ReportCollector(const StackStudyPlan& plan, std::size_t images);

  void take(const StudyBatch& batch);
  /// Fills in montage, rebuilds, spectrum, evidence, centres, verdicts and skipped images.
  void fill(ReportData& report) const;

 private:
  struct Seen {
    int fold = 0;
    Verdict verdict = Verdict::skipped;
    float noise_sd = 0;
    float signal_to_noise = 0;
  };

  bool is_sample(std::size_t image, std::size_t samples) const;
  void take_spectrum(const ImageStudy& study);
  void take_pictures(const ImageStudy& study, ImageView<const double> prepared,
                     std::span<const std::complex<double>> coefficients);

  const StackStudyPlan& plan_;
  std::size_t images_;
  std::vector<Seen> seen_;
  std::vector<std::vector<float>> ln_bf_;  // per fold: one value per analysed image
  std::vector<double> power_, power_squares_, noise_power_;
  std::vector<double> preferring_visibility_;  // per fold: sum over the images that prefer it
  std::size_t analysed_ = 0;
  std::vector<ReportCentre> centres_;
  std::vector<ReportImage> montage_;
  std::vector<ReportRebuild> rebuilds_;
  std::vector<ReportSkipped> skipped_;
};

/// Longer side of the pictures in the report, px.
inline constexpr std::ptrdiff_t picture_side = 256;

/// A picture of at most `side` pixels on its longer side, by averaging square blocks.
ReportPicture picture_of(ImageView<const double> image, std::ptrdiff_t side);

}  // namespace tambour::tools::survey
