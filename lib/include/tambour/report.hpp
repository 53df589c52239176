// One self-contained HTML page about a survey.
#pragma once

#include <cstddef>
#include <string>
#include <utility>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/image_source.hpp"
#include "tambour/provenance.hpp"

namespace tambour {

/// A grey picture for the report. Non-finite pixels are drawn mid-grey; without pixels the page says that there is no
/// picture.
struct ReportPicture {
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  std::vector<float> pixels;  ///< row-major
};

/// One image shown in the montage, with its centre and disk.
struct ReportImage {
  std::size_t image = 0;
  std::string source;
  ReportPicture picture;  ///< in the montage: the whole frame, at any resolution
  Centre centre;          ///< in pixels of the frame
  std::string verdict;
  int fold = 0;  ///< 0 = none
};

/// Original, rebuilt and residual (original - rebuilt) of one image, in the same units.
struct ReportRebuild {
  std::size_t image = 0;
  ReportPicture original;
  ReportPicture rebuilt;
  ReportPicture residual;
  double explained = 0;  ///< share of the variance inside the disk that the expansion keeps, 0 .. 1
};

/// Images of one verdict and fold, turned so that their angles agree, and their mean.
struct ReportGroup {
  std::string verdict;
  int fold = 0;
  std::size_t images = 0;  ///< in the whole stack
  ReportPicture mean;      ///< mean of all aligned images of the group; empty if not computed
  std::vector<ReportImage> examples;
};

struct ReportOrder {
  int angular_order = 0;
  double power = 0;  ///< mean over images, noise subtracted
  double se = 0;     ///< standard error of that mean
  double noise_power = 0;
};

struct ReportCentre {
  double x = 0;
  double y = 0;
  double se_x = 0;
  double se_y = 0;
};

struct ReportVerdictCount {
  std::string verdict;
  int fold = 0;  ///< 0 = none
  std::size_t images = 0;
};

struct ReportSkipped {
  std::size_t image = 0;
  std::string source;
  std::string reason;
};

/// Everything the page shows. Lists may be empty: their section then says so or is left out.
struct ReportData {
  std::string title;
  std::string date;
  Provenance provenance;
  std::vector<std::pair<std::string, std::string>> settings;  ///< what was asked: name, value in words
  std::vector<std::string> remarks;  ///< what a reader should know: colour images read as luma, …
  std::size_t images = 0;
  std::size_t analysed = 0;
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  PixelSize pixel_size;
  double radius = 0;
  double search = 0;    ///< half width of the searched square about the middle of the frame, px; 0 = not searched
  double noise_sd = 0;  ///< median over images
  double signal_to_noise = 0;  ///< median over images of signal variance / noise variance inside the disk

  std::vector<ReportVerdictCount> verdicts;
  std::vector<ReportImage> montage;
  std::vector<ReportOrder> spectrum;
  int first_fold = 2;
  /// Evidence over N = first_fold, first_fold + 1, …: ln Bayes factor, quantiles over the images, and how many images
  /// prefer each N. The three lists of ln BF are of one length; the two lists after them are as long or empty.
  std::vector<double> ln_bf_median, ln_bf_lower, ln_bf_upper;
  double lower_quantile = 0.1;  ///< which quantile ln_bf_lower is
  double upper_quantile = 0.9;
  std::vector<std::size_t> best_fold_count;
  std::vector<double> mean_visibility;
  std::vector<ReportCentre> centres;
  std::vector<ReportRebuild> rebuilds;
  std::vector<ReportGroup> groups;
  std::vector<ReportSkipped> skipped;
};

/// The page: UTF-8, no network, no other file. Charts are drawn by a script inside it and are also given as tables.
///
/// All text is taken as plain text, whatever it contains. Values that are not finite are shown as not computed.
/// Pictures are reduced to 256 pixels a side at most and drawn between their 0.5 and 99.5 percentiles (rebuilt and
/// residual on the scale of their original). Throws Error(invalid_argument): a picture without rows x columns pixels,
/// lists of evidence of different lengths, analysed > images. Thread-safe. Cost: some milliseconds a picture; the page
/// is 0.3 MB and the pictures.
std::string render_report(const ReportData& data);

}  // namespace tambour
