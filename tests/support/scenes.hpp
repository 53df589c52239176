// Invented scenes with known truth, as an ImageSource.
#pragma once

#include <cmath>
#include <numbers>
#include <random>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/image_source.hpp"

namespace tambour::testing {

inline constexpr double pi = std::numbers::pi;

/// A Gaussian blob: position relative to the centre in polar coordinates, width and height.
struct Blob {
  double r, theta, sigma, height;
};

inline std::vector<double> draw(const std::vector<Blob>& blobs, Centre centre, double turn, std::ptrdiff_t rows,
                                std::ptrdiff_t columns) {
  std::vector<double> image(rows * columns, 0.0);
  for (const Blob& blob : blobs) {
    const double bx = centre.x + blob.r * std::cos(blob.theta + turn);
    const double by = centre.y + blob.r * std::sin(blob.theta + turn);
    for (std::ptrdiff_t y = 0; y < rows; ++y)
      for (std::ptrdiff_t x = 0; x < columns; ++x) {
        const double dx = static_cast<double>(x) - bx, dy = static_cast<double>(y) - by;
        image[y * columns + x] += blob.height * std::exp(-(dx * dx + dy * dy) / (2 * blob.sigma * blob.sigma));
      }
  }
  return image;
}

/// N subunits of two blobs each on rings of radius r1, r2, as a facility might see them; variance inside the disk is 1.
struct RingStack : ImageSource {
  struct Truth {
    Centre centre;
    double turn;         // radians
    double information;  // Fisher information per axis, 1/px^2, at the noise of the stack
  };

  std::ptrdiff_t side;
  std::vector<std::vector<double>> pixels;
  std::vector<Truth> truth;

  /// fold 0 = noise only. `snr` = variance of the signal over that of the noise.
  RingStack(std::size_t count, std::ptrdiff_t size, double radius, int fold, double snr, unsigned seed) : side(size) {
    std::mt19937_64 engine(seed);
    std::uniform_real_distribution<double> uniform(0, 1);
    std::normal_distribution<double> normal;
    const double noise_sd = fold > 0 ? 1 / std::sqrt(snr) : 1;
    for (std::size_t i = 0; i < count; ++i) {
      const double offset = 2 * std::sqrt(uniform(engine)), direction = 2 * pi * uniform(engine);
      const Centre middle = frame_middle(size, size);
      const Centre centre{middle.x + offset * std::cos(direction), middle.y + offset * std::sin(direction)};
      const double turn = 2 * pi * uniform(engine);
      std::vector<double> image(size * size, 0.0);
      if (fold > 0) {
        std::vector<Blob> blobs;
        for (int m = 0; m < fold; ++m) {
          const double theta = 2 * pi * m / fold;
          blobs.push_back({0.55 * radius, theta, 1.7, 1});
          blobs.push_back({0.62 * radius, theta + 0.25 * 2 * pi / fold, 1.5, 0.65});
        }
        image = draw(blobs, centre, turn, size, size);
        normalise(image, centre, radius);
      }
      truth.push_back({centre, turn, information(image, noise_sd)});
      for (double& pixel : image) pixel += noise_sd * normal(engine);
      pixels.push_back(std::move(image));
    }
  }

  std::size_t images() const noexcept override { return pixels.size(); }
  std::ptrdiff_t rows() const noexcept override { return side; }
  std::ptrdiff_t columns() const noexcept override { return side; }
  PixelSize pixel_size() const override { return {}; }
  std::string name(std::size_t image) const override { return "ring#" + std::to_string(image); }
  ImageStatus read(std::size_t image, ImageView<double> out) const override {
    for (std::ptrdiff_t y = 0; y < side; ++y)
      for (std::ptrdiff_t x = 0; x < side; ++x) out(y, x) = pixels[image][y * side + x];
    return {};
  }

 private:
  void normalise(std::vector<double>& image, Centre centre, double radius) const {
    double count = 0, sum = 0, squares = 0;
    for (std::ptrdiff_t y = 0; y < side; ++y)
      for (std::ptrdiff_t x = 0; x < side; ++x) {
        if (std::hypot(static_cast<double>(x) - centre.x, static_cast<double>(y) - centre.y) > radius) continue;
        const double value = image[y * side + x];
        count += 1;
        sum += value;
        squares += value * value;
      }
    const double mean = sum / count;
    for (double& pixel : image) pixel /= std::sqrt(squares / count - mean * mean);
  }

  /// Mean over the axes of sum (ds/dx)^2 / noise variance, by central differences.
  double information(const std::vector<double>& image, double noise_sd) const {
    double sum = 0;
    for (std::ptrdiff_t y = 1; y + 1 < side; ++y)
      for (std::ptrdiff_t x = 1; x + 1 < side; ++x) {
        const double dx = (image[y * side + x + 1] - image[y * side + x - 1]) / 2;
        const double dy = (image[(y + 1) * side + x] - image[(y - 1) * side + x]) / 2;
        sum += (dx * dx + dy * dy) / 2;
      }
    return sum / (noise_sd * noise_sd);
  }
};

}  // namespace tambour::testing
