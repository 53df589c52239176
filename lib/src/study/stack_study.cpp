#include "tambour/stack_study.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "base/check.hpp"

namespace tambour {
namespace {

using std::numbers::pi;

constexpr std::size_t images_per_worker = 16;
constexpr double least_single_range = 1e-5;  // of the largest pixel; single precision keeps 6e-8

/// Mean of the expansion over the disk. Only order 0 has one: the integral of psi_0k is 2 sqrt(pi) R (-1)^{k-1} /
/// lambda for a Dirichlet edge, and for a Neumann edge 0 but for the constant.
double disk_mean(const DiskBasis& basis, std::span<const std::complex<double>> coefficients) {
  double integral = 0;
  for (std::size_t k = 0; k < basis.order(0).size(); ++k) {
    const double root = basis.order(0)[k].root, a = coefficients[k].real();
    if (basis.geometry().edge == Edge::dirichlet)
      integral += a * 2 * std::sqrt(pi) * basis.radius() * (k % 2 == 0 ? 1 : -1) / root;
    else if (root == 0)
      integral += a * std::sqrt(pi) * basis.radius();
  }
  return integral / (pi * basis.radius() * basis.radius());
}

/// Variance of the signal inside the disk over the variance of the noise per pixel, at least 0.
double signal_to_noise(const DiskBasis& basis, std::span<const std::complex<double>> coefficients,
                       const std::vector<OrderPower>& spectrum, double noise_sd) {
  const double area = pi * basis.radius() * basis.radius();
  double power = 0;
  for (const OrderPower& order : spectrum) power += order.power;
  const double mean = disk_mean(basis, coefficients);
  return noise_sd > 0 ? std::max((power / area - mean * mean) / (noise_sd * noise_sd), 0.0) : 0;
}

std::pair<double, double> pixel_range(ImageView<const double> image) {
  double lowest = image(0, 0), highest = lowest;
  for (std::ptrdiff_t y = 0; y < image.rows; ++y) {
    const auto [low, high] = std::minmax_element(image.row(y), image.row(y) + image.columns);
    lowest = std::min(lowest, *low);
    highest = std::max(highest, *high);
  }
  return {lowest, highest};
}

}  // namespace

std::vector<std::string> StackStudyOptions::problems() const {
  std::vector<std::string> found = geometry.problems();
  if (test_symmetry)
    for (std::string& problem : symmetry.problems()) found.push_back(std::move(problem));
  if (batch > 1000000) found.push_back(fmt::format("batch is {}; allowed is up to 1000000", batch));
  return found;
}

struct StackStudyPlan::Data {
  StackStudyOptions options;
  std::ptrdiff_t rows, columns;
  Preparation preparation;
  std::optional<CentreFinder> centre_finder;
  DiskBasis basis;
  std::optional<DiskTransform<double>> fine;
  std::optional<DiskTransform<float>> coarse;
  NoiseEstimator noise_estimator;
  std::optional<SymmetryTest> symmetry_test;

  DiskTransformOptions transform_options() const { return {options.geometry, rows, columns, options.tolerance}; }

  Data(const StackStudyOptions& o, std::ptrdiff_t row_count, std::ptrdiff_t column_count, Executor& executor)
      : options(o),
        rows(row_count),
        columns(column_count),
        preparation(o.preparation, row_count, column_count, o.geometry.radius),
        basis(o.geometry),
        noise_estimator(basis, row_count, column_count) {
    if (o.find_centres) centre_finder.emplace(CentreOptions{o.geometry, row_count, column_count, o.search});
    if (o.double_precision)
      fine.emplace(transform_options());
    else
      coarse.emplace(transform_options());
    if (o.test_symmetry) symmetry_test.emplace(basis, o.symmetry, executor);
  }

  /// What one worker needs.
  struct Worker {
    std::optional<DiskTransform<double>::Workspace> fine;
    std::optional<DiskTransform<float>::Workspace> coarse;
    std::vector<float> image;
    std::vector<std::complex<float>> coefficients;
  };

  Worker make_worker() const {
    Worker worker;
    if (fine) worker.fine = fine->make_workspace();
    if (coarse) {
      worker.coarse = coarse->make_workspace();
      worker.image.resize(rows * columns);
      worker.coefficients.resize(basis.size());
    }
    return worker;
  }

  ImageStatus expand(ImageView<const double> image, Centre centre, std::complex<double>* out, Worker& worker) const {
    ImageStatus status;
    const auto terms = static_cast<std::ptrdiff_t>(basis.size());
    if (fine) {
      fine->analyse({image.data, 1, rows, columns, 0, image.row_stride}, {&centre, 1}, {out, 1, terms}, {&status, 1},
                    *worker.fine);
      return status;
    }
    const auto [lowest, highest] = pixel_range(image);
    const double largest = std::max(std::abs(lowest), std::abs(highest));
    if (highest - lowest < least_single_range * largest)
      return {
          fmt::format("pixels from {:.9g} to {:.9g} differ by less than {:g} of their size; single precision cannot "
                      "hold that: ask for double, or subtract a background",
                      lowest, highest, least_single_range)};
    // A power of two near the largest pixel keeps floats from over- and underflow and changes no bit of the result.
    const double unit = largest > 0 ? std::exp2(std::floor(std::log2(largest))) : 1;
    for (std::ptrdiff_t y = 0; y < rows; ++y)
      std::transform(image.row(y), image.row(y) + columns, worker.image.begin() + y * columns,
                     [unit](double value) { return static_cast<float>(value / unit); });
    coarse->analyse({worker.image.data(), 1, rows, columns}, {&centre, 1}, {worker.coefficients.data(), 1, terms},
                    {&status, 1}, *worker.coarse);
    std::transform(worker.coefficients.begin(), worker.coefficients.end(), out,
                   [unit](std::complex<float> value) { return unit * std::complex<double>(value); });
    return status;
  }

  /// Everything about one image; `image` holds its pixels and keeps the prepared ones.
  void study(ImageStudy& result, std::optional<Centre> given, ImageView<double> image,
             std::complex<double>* coefficients, Worker& worker) const {
    const Centre first_guess = given.value_or(frame_middle(rows, columns));
    result.centre.centre = first_guess;
    result.prepared = preparation.apply(image, first_guess);
    result.status = result.prepared.status;
    if (!result.status.ok()) return;
    if (centre_finder) result.centre = centre_finder->find(image);
    result.status = expand(image, result.centre.centre, coefficients, worker);
    if (!result.status.ok()) return;

    const std::span<const std::complex<double>> a(coefficients, basis.size());
    const std::vector<double> energies = raw_energies(basis, a);
    result.noise = noise_estimator.estimate(image, result.centre.centre, energies);
    result.noise_sd = result.noise.sd(basis.root_limit());
    result.spectrum = rotational_spectrum(basis, a, result.noise);
    result.signal_to_noise = signal_to_noise(basis, a, result.spectrum, result.noise_sd);
    if (centre_finder) centre_finder->add_covariance(result.centre, image, result.noise);
    if (symmetry_test) result.evidence = symmetry_test->evaluate(symmetry_test->whitened(energies, result.noise));
  }
};

StackStudyPlan::StackStudyPlan(const StackStudyOptions& options, std::ptrdiff_t rows, std::ptrdiff_t columns,
                               Executor& executor) {
  refuse_if_any(options.problems());
  data_ = std::make_unique<const Data>(options, rows, columns, executor);
}

StackStudyPlan::~StackStudyPlan() = default;

const StackStudyOptions& StackStudyPlan::options() const noexcept { return data_->options; }
const DiskBasis& StackStudyPlan::basis() const noexcept { return data_->basis; }
double StackStudyPlan::tolerance() const noexcept {
  return data_->fine ? data_->fine->options().tolerance : data_->coarse->options().tolerance;
}
bool StackStudyPlan::noise_from_outside() const noexcept { return data_->noise_estimator.uses_outside(); }
void StackStudyPlan::rebuild(std::span<const std::complex<double>> coefficients, Centre centre,
                             ImageView<double> out) const {
  const Data& d = *data_;
  require(out.rows == d.rows && out.columns == d.columns, "shape of the image",
          fmt::format("{} x {}", out.rows, out.columns), fmt::format("{} x {}, as planned", d.rows, d.columns));
  const auto terms = static_cast<std::ptrdiff_t>(coefficients.size());
  if (d.fine) {
    auto workspace = d.fine->make_workspace();
    d.fine->synthesise({coefficients.data(), 1, terms}, {&centre, 1},
                       {out.data, 1, d.rows, d.columns, 0, out.row_stride}, workspace);
    return;
  }
  auto workspace = d.coarse->make_workspace();
  const std::vector<std::complex<float>> single(coefficients.begin(), coefficients.end());
  std::vector<float> image(d.rows * d.columns);
  d.coarse->synthesise({single.data(), 1, terms}, {&centre, 1}, {image.data(), 1, d.rows, d.columns}, workspace);
  for (std::ptrdiff_t y = 0; y < d.rows; ++y) std::copy_n(image.begin() + y * d.columns, d.columns, out.row(y));
}

const SymmetryTest* StackStudyPlan::symmetry_test() const noexcept {
  return data_->symmetry_test ? &*data_->symmetry_test : nullptr;
}

void StackStudyPlan::run(const ImageSource& source, std::span<const Centre> centres,
                         std::span<const ImageStatus> given_status, Executor& executor, ProgressSink& progress,
                         const std::function<void(const StudyBatch&)>& take_batch) const {
  const Data& d = *data_;
  const std::size_t total = source.images();
  require(source.rows() == d.rows && source.columns() == d.columns, "image size",
          fmt::format("{} x {}", source.columns(), source.rows()),
          fmt::format("{} x {} px (columns x rows), as planned", d.columns, d.rows));
  require(centres.empty() || centres.size() == total, "number of centres", centres.size(),
          fmt::format("0 or {}, one per image", total));
  require(centres.empty() || !d.centre_finder, "number of centres", centres.size(), "0 where centres are to be found");
  require(given_status.empty() || given_status.size() == total, "number of statuses", given_status.size(),
          fmt::format("0 or {}, one per image", total));

  std::vector<Data::Worker> workers;
  for (int i = 0; i < executor.workers(); ++i) workers.push_back(d.make_worker());
  const std::size_t batch = std::min(
      total, d.options.batch > 0 ? d.options.batch : images_per_worker * static_cast<std::size_t>(executor.workers()));
  const std::size_t pixels = d.rows * d.columns, terms = d.basis.size();
  std::vector<double> images(batch * pixels);
  std::vector<std::complex<double>> coefficients(batch * terms);

  for (std::size_t first = 0; first < total; first += batch) {
    if (progress.stop_requested())
      throw Error(ErrorCode::interrupted, fmt::format("stopped after {} of {} images", first, total));
    progress.advance("images", first, total);
    const std::size_t count = std::min(batch, total - first);
    StudyBatch result;
    result.first = first;
    result.images.resize(count);
    std::fill(coefficients.begin(), coefficients.end(), std::complex<double>());
    executor.run(count, [&](std::size_t i, int worker) {
      ImageStudy& study = result.images[i];
      study.image = first + i;
      study.source = source.name(study.image);
      std::optional<Centre> given;
      if (!centres.empty()) given = centres[study.image];
      study.centre.centre = given.value_or(frame_middle(d.rows, d.columns));
      if (!given_status.empty()) study.status = given_status[study.image];
      if (!study.status.ok()) return;
      const ImageView<double> image(images.data() + i * pixels, d.rows, d.columns);
      study.status = source.read(study.image, image);
      if (study.status.ok()) d.study(study, given, image, coefficients.data() + i * terms, workers[worker]);
    });
    const auto rows = static_cast<std::ptrdiff_t>(count);
    result.prepared = StackView<double>(images.data(), rows, d.rows, d.columns);
    result.coefficients =
        MatrixView<std::complex<double>>(coefficients.data(), rows, static_cast<std::ptrdiff_t>(terms));
    take_batch(result);
  }
  progress.advance("images", total, total);
}

}  // namespace tambour
