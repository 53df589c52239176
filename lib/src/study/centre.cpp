#include "tambour/centre.hpp"

#include <fmt/format.h>

#include <Eigen/Dense>
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <numbers>

#include "base/check.hpp"
#include "fourier/buffer.hpp"
#include "fourier/plans.hpp"
#include "tambour/disk_transform.hpp"

namespace tambour {
namespace {

using std::numbers::pi;
using Complex = std::complex<double>;
using fourier::AlignedBuffer;

constexpr double weight_width = 0.45;         // of lambda_max
constexpr double largest_step = 0.7;          // px from the best whole pixel
constexpr double least_curvature = 0.2;       // of the larger one
constexpr double small_sample_growth = 1.05;  // the error distribution's tails, per px of standard error

double frequency(std::ptrdiff_t i, std::ptrdiff_t n) {
  return 2 * pi * static_cast<double>(2 * i <= n ? i : i - n) / static_cast<double>(n);
}

/// Offset of the vertex of the parabola through (-1, left), (0, middle), (1, right), within +-largest_step.
double vertex(double left, double middle, double right) {
  const double curvature = left - 2 * middle + right;
  if (!(curvature < 0)) return 0;
  return std::clamp((left - right) / (2 * curvature), -largest_step, largest_step);
}

/// integral_0^1 J_0(a x) J_0(b x) x dx at a root a (Lommel).
double lommel(Edge edge, double a, double b, const BesselTable& table) {
  if (std::abs(a - b) < 1e-6 * (1 + a)) return bessel_norm(0, edge, a);
  const double difference = (a - b) * (a + b);
  if (edge == Edge::dirichlet) return a * table.value(1, a) * table.value(0, b) / difference;
  return -b * table.value(0, a) * table.value(1, b) / difference;
}

}  // namespace

std::vector<std::string> CentreOptions::problems() const {
  std::vector<std::string> found = geometry.problems();
  if (!(search >= 1 && search <= 64)) found.push_back(fmt::format("search is {} px; allowed is 1 to 64", search));
  const auto room = static_cast<double>(std::min(rows, columns)) / 2 - 1;
  if (found.empty() && geometry.radius > room)
    found.push_back(fmt::format(
        "radius is {} px; at most {} px leave a pixel to search for the centre in a frame of {} x {} px (columns x "
        "rows)",
        geometry.radius, room, columns, rows));
  return found;
}

struct CentreFinder::Data {
  CentreOptions options;
  Centre middle;
  int reach_x, reach_y;
  fourier::ImageFft<double> fft;
  std::vector<double> root, weight, gain;
  std::vector<std::vector<double>>
      response;                    // per term: transform of psi_0k at every stored frequency, over the pixel count
  std::vector<Complex> to_middle;  // e^{i q . middle}

  std::ptrdiff_t half() const { return options.columns / 2 + 1; }

  void check_shape(ImageView<const double> image) const {
    require(image.rows == options.rows && image.columns == options.columns, "shape of the image",
            fmt::format("{} x {}", image.rows, image.columns),
            fmt::format("{} x {}, as planned", options.rows, options.columns));
  }

  AlignedBuffer<Complex> transform(ImageView<const double> image) const {
    AlignedBuffer<double> copy(options.rows * options.columns);
    for (std::ptrdiff_t y = 0; y < options.rows; ++y)
      std::copy_n(image.row(y), options.columns, copy.data() + y * options.columns);
    AlignedBuffer<Complex> spectrum(options.rows * half());
    fft.forward(copy.data(), spectrum.data());
    return spectrum;
  }

  /// Keeps the disk in the frame.
  double inside(double c, std::ptrdiff_t size) const {
    const double r = options.geometry.radius;
    return std::clamp(c, r - 0.5, static_cast<double>(size) - 0.5 - r);
  }
};

CentreFinder::CentreFinder(const CentreOptions& options) {
  refuse_if_any(options.problems());
  const double radius = options.geometry.radius;
  const auto reach = [&](std::ptrdiff_t size) {
    return static_cast<int>(std::min(options.search, static_cast<double>(size) / 2 - radius));
  };
  const Centre middle = frame_middle(options.rows, options.columns);
  Data data{options,
            middle,
            reach(options.columns),
            reach(options.rows),
            fourier::ImageFft<double>(static_cast<int>(options.rows), static_cast<int>(options.columns)),
            {},
            {},
            {},
            {},
            {}};

  const DiskBasis basis(options.geometry);
  const double limit = basis.root_limit();
  const BesselTable table(0, 1, std::max(limit, std::numbers::sqrt2 * pi * radius) + 1);
  const std::size_t frequencies = options.rows * data.half();
  const auto pixels = static_cast<double>(options.rows * options.columns);
  for (const Term& term : basis.order(0)) {
    if (term.root == 0) continue;  // the constant moves nowhere
    const double relative = term.root / (weight_width * limit);
    data.root.push_back(term.root);
    data.weight.push_back(std::exp(-relative * relative / 2));
    data.gain.push_back(term.white_noise_gain);
    std::vector<double>& response = data.response.emplace_back(frequencies);
    const double factor = 2 * pi * term.normalisation * radius * radius / pixels;
    for (std::ptrdiff_t y = 0; y < options.rows; ++y)
      for (std::ptrdiff_t x = 0; x < data.half(); ++x) {
        const double q = std::hypot(frequency(y, options.rows), frequency(x, options.columns));
        response[y * data.half() + x] = factor * lommel(options.geometry.edge, term.root, q * radius, table);
      }
  }
  for (std::ptrdiff_t y = 0; y < options.rows; ++y)
    for (std::ptrdiff_t x = 0; x < data.half(); ++x)
      data.to_middle.push_back(
          std::polar(1.0, frequency(y, options.rows) * middle.y + frequency(x, options.columns) * middle.x));
  data_ = std::make_unique<const Data>(std::move(data));
}

CentreFinder::~CentreFinder() = default;

CentreEstimate CentreFinder::find(ImageView<const double> image) const {
  const Data& d = *data_;
  const std::ptrdiff_t rows = d.options.rows, columns = d.options.columns;
  d.check_shape(image);
  const AlignedBuffer<Complex> spectrum = d.transform(image);
  AlignedBuffer<Complex> product(spectrum.size());
  AlignedBuffer<double> map(rows * columns);

  // One pixel more than is searched on each side serves the parabolas.
  const int height = 2 * d.reach_y + 3, width = 2 * d.reach_x + 3;
  std::vector<double> power(static_cast<std::size_t>(height) * width, 0.0);
  for (std::size_t k = 0; k < d.root.size(); ++k) {
    for (std::size_t i = 0; i < product.size(); ++i) product[i] = spectrum[i] * d.to_middle[i] * d.response[k][i];
    d.fft.backward(product.data(), map.data());
    for (int j = 0; j < height; ++j) {
      for (int i = 0; i < width; ++i) {
        const std::ptrdiff_t y = (j - d.reach_y - 1 + rows) % rows, x = (i - d.reach_x - 1 + columns) % columns;
        const double a = map[y * columns + x];
        power[static_cast<std::size_t>(j) * width + i] += d.weight[k] * a * a;
      }
    }
  }
  const auto at = [&](int j, int i) { return power[static_cast<std::size_t>(j) * width + i]; };
  int best_j = 1, best_i = 1;
  for (int j = 1; j + 1 < height; ++j)
    for (int i = 1; i + 1 < width; ++i)
      if (at(j, i) > at(best_j, best_i)) {
        best_j = j;
        best_i = i;
      }
  CentreEstimate estimate;
  estimate.at_search_limit = best_j == 1 || best_j == height - 2 || best_i == 1 || best_i == width - 2;
  const double dx = vertex(at(best_j, best_i - 1), at(best_j, best_i), at(best_j, best_i + 1));
  const double dy = vertex(at(best_j - 1, best_i), at(best_j, best_i), at(best_j + 1, best_i));
  estimate.centre = {d.inside(d.middle.x + best_i - d.reach_x - 1 + dx, columns),
                     d.inside(d.middle.y + best_j - d.reach_y - 1 + dy, rows)};
  return estimate;
}

void CentreFinder::add_covariance(CentreEstimate& estimate, ImageView<const double> image,
                                  const NoiseSpectrum& noise) const {
  const Data& d = *data_;
  d.check_shape(image);
  const AlignedBuffer<Complex> spectrum = d.transform(image);
  const std::ptrdiff_t half = d.half();
  const std::size_t terms = d.root.size();

  // Per term: value, first and second derivatives of a_0k with respect to the centre.
  std::vector<std::array<double, 6>> moments(terms, {0, 0, 0, 0, 0, 0});
  for (std::ptrdiff_t y = 0; y < d.options.rows; ++y) {
    for (std::ptrdiff_t x = 0; x < half; ++x) {
      const std::size_t i = y * half + x;
      const double qx = frequency(x, d.options.columns), qy = frequency(y, d.options.rows);
      const Complex value = spectrum[i] * std::polar(1.0, qx * estimate.centre.x + qy * estimate.centre.y);
      const double multiplicity = x == 0 || 2 * x == d.options.columns ? 1 : 2;
      const double re = multiplicity * value.real(), im = multiplicity * value.imag();
      const double parts[6] = {re, -qx * im, -qy * im, -qx * qx * re, -qx * qy * re, -qy * qy * re};
      for (std::size_t k = 0; k < terms; ++k)
        for (int m = 0; m < 6; ++m) moments[k][m] += d.response[k][i] * parts[m];
    }
  }
  const double radius = d.options.geometry.radius;
  Eigen::Matrix2d information = Eigen::Matrix2d::Zero(), variance = Eigen::Matrix2d::Zero();
  double both_noise = 0;  // noise of a_0k times noise of its gradient
  for (std::size_t k = 0; k < terms; ++k) {
    const auto& [a, ax, ay, axx, axy, ayy] = moments[k];
    const double w = d.weight[k], s = noise.at(d.root[k]) * d.gain[k];
    const double q = d.root[k] / radius;
    const Eigen::Vector2d gradient(ax, ay);
    Eigen::Matrix2d second;
    second << axx, axy, axy, ayy;
    information -= w * (gradient * gradient.transpose() + a * second);
    variance += w * w * s * (gradient * gradient.transpose() + a * a * q * q / 2 * Eigen::Matrix2d::Identity());
    both_noise += w * w * s * s * q * q / 2;
  }
  // The measured squares hold the noise's own share once in the gradient's and once in the value's term; the truth
  // holds it once.
  variance -= both_noise * Eigen::Matrix2d::Identity();
  Eigen::SelfAdjointEigenSolver<Eigen::Matrix2d> spread(variance);
  variance = spread.eigenvectors() * spread.eigenvalues().cwiseMax(both_noise).asDiagonal() *
             spread.eigenvectors().transpose();

  Eigen::SelfAdjointEigenSolver<Eigen::Matrix2d> shape(information);
  const double largest = shape.eigenvalues().maxCoeff();
  if (!(largest > 0)) {
    estimate.var_x = d.options.search * d.options.search / 3;
    estimate.var_y = estimate.var_x;
    estimate.cov_xy = 0;
    return;
  }
  const Eigen::Vector2d inverse = shape.eigenvalues().cwiseMax(least_curvature * largest).cwiseInverse();
  const Eigen::Matrix2d sandwich = shape.eigenvectors() * inverse.asDiagonal() * shape.eigenvectors().transpose();
  const Eigen::Matrix2d covariance = sandwich * variance * sandwich;
  const double se = std::sqrt(covariance.trace() / 2);
  const double growth = 1 + small_sample_growth * se;
  estimate.var_x = covariance(0, 0) * growth * growth;
  estimate.var_y = covariance(1, 1) * growth * growth;
  estimate.cov_xy = covariance(0, 1) * growth * growth;
}

}  // namespace tambour
