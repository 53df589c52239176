// Coefficients against the integral that defines them, evaluated by brute force (tests/support/disk_reference.hpp).
#include "support/disk_reference.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <complex>
#include <random>
#include <string>
#include <vector>

#include "support/disk_run.hpp"

namespace tambour {
namespace {

using testing::analyse;
using testing::disk_plan;
using testing::relative_difference;

// The promised errors, max |da| / max |a| (disk_transform.hpp).
constexpr double float_bar = 1e-6;
constexpr double double_bar = 1e-12;

struct Case {
  std::ptrdiff_t rows, columns;
  DiskGeometry geometry;
  std::vector<Centre> centres;  // one image each
  bool products;                // images of low rank, and a choice of terms
};

/// Prints a case in the name of its test.
void PrintTo(const Case& c, std::ostream* out) {
  *out << c.columns << " x " << c.rows << ", radius " << c.geometry.radius << ", " << to_string(c.geometry.edge)
       << ", bandlimit " << c.geometry.bandlimit;
}

/// Small integers, so that float holds the image exactly; white, so that every term up to the corner of the band
/// counts.
std::vector<std::vector<reference::Real>> integer_lines(std::ptrdiff_t length, std::mt19937& engine) {
  std::uniform_int_distribution<int> uniform(-9, 9);
  std::vector<std::vector<reference::Real>> lines(3, std::vector<reference::Real>(length));
  for (auto& line : lines)
    for (auto& value : line) value = uniform(engine);
  return lines;
}

/// All terms, or lowest, middle and highest radial indices of some orders from the lowest to the highest.
std::vector<reference::Index> chosen_terms(const DiskBasis& basis, bool all) {
  const int last = basis.max_order();
  std::vector<reference::Index> chosen;
  for (const Term& term : basis.terms()) {
    const int n = term.angular_order, k = term.radial_index, most = static_cast<int>(basis.order(n).size());
    const bool order = n <= 2 || n >= last - 1 || n == last / 4 || n == last / 2 || n == 3 * last / 4;
    const bool radial = k <= 2 || k >= most - 1 || k == most / 2;
    if (all || (order && radial)) chosen.push_back({n, k});
  }
  return chosen;
}

template <class T>
std::vector<std::complex<T>> ours(const Case& c, const std::vector<double>& images,
                                  const std::vector<reference::Index>& terms) {
  const auto plan = disk_plan<T>(c.rows, c.columns, c.geometry);
  std::vector<ImageStatus> statuses(c.centres.size());
  const auto all = analyse(plan, std::vector<T>(images.begin(), images.end()), c.centres, &statuses);
  for (const ImageStatus& status : statuses) EXPECT_EQ(status.text(), "ok");
  std::vector<std::complex<T>> chosen;
  for (std::size_t image = 0; image < c.centres.size(); ++image)
    for (const auto& term : terms)
      chosen.push_back(all[image * plan.basis().size() + plan.basis().order_begin(term.n) + term.k - 1]);
  return chosen;
}

class DiskReference : public ::testing::TestWithParam<Case> {};

TEST_P(DiskReference, CoefficientsEqualTheIntegral) {
  const Case& c = GetParam();
  const auto terms = chosen_terms(DiskBasis(c.geometry), !c.products);
  std::vector<double> images;
  std::vector<std::vector<reference::Complex>> truth;  // per image
  for (std::size_t image = 0; image < c.centres.size(); ++image) {
    reference::Field field;
    std::vector<double> pixels(c.rows * c.columns);
    if (c.products) {
      std::mt19937 engine(static_cast<unsigned>(image) + 1);
      const auto across = integer_lines(c.columns, engine), down = integer_lines(c.rows, engine);
      for (std::size_t s = 0; s < across.size(); ++s)
        for (std::ptrdiff_t y = 0; y < c.rows; ++y)
          for (std::ptrdiff_t x = 0; x < c.columns; ++x)
            pixels[y * c.columns + x] += static_cast<double>(across[s][x] * down[s][y]);
      field = reference::cosine_interpolant_of_products(across, down);
    } else {
      pixels = testing::white_noise<double>(pixels.size(), static_cast<unsigned>(image) + 1);
      field = reference::cosine_interpolant(ImageView<const double>(pixels.data(), c.rows, c.columns));
    }
    images.insert(images.end(), pixels.begin(), pixels.end());
    truth.push_back(reference::coefficients(field, c.centres[image], c.geometry, terms, reference::image_frequency));
  }

  // The images go through as one batch, a different one with a different centre in each lane.
  const auto in_double = ours<double>(c, images, terms);
  const auto in_float = ours<float>(c, images, terms);
  for (std::size_t image = 0; image < truth.size(); ++image) {
    const auto lane = [&](const auto& all) {
      const auto first = all.begin() + static_cast<std::ptrdiff_t>(image * terms.size());
      return std::vector(first, first + static_cast<std::ptrdiff_t>(terms.size()));
    };
    EXPECT_LE(relative_difference(lane(in_double), truth[image]), double_bar) << "image " << image;
    EXPECT_LE(relative_difference(lane(in_float), truth[image]), float_bar) << "image " << image;
  }
}

constexpr Edge dirichlet = Edge::dirichlet, neumann = Edge::neumann;

INSTANTIATE_TEST_SUITE_P(
    Geometries, DiskReference,
    ::testing::Values(Case{10, 10, {4, dirichlet, 0.9}, {{4.5, 4.5}, {4.7, 4.2}}, false},
                      Case{32, 32, {14, dirichlet, 0.9}, {{15.5, 15.5}, {16, 15}, {15.31, 16.27}}, false},
                      Case{32, 32, {14, neumann, 0.9}, {{15.5, 15.5}, {16, 15}, {15.31, 16.27}}, false},
                      Case{32, 32, {16, neumann, 0.4}, {{15.5, 15.5}}, false},
                      Case{33, 33, {16.5, dirichlet, 1.0}, {{16, 16}}, false},
                      Case{33, 40, {13.7, neumann, 1.0}, {{19.5, 16}, {22.9, 15.64}}, false},
                      Case{41, 34, {12.25, dirichlet, 0.8}, {{16.5, 20}, {18.8, 23.3}}, false},
                      Case{64, 64, {30, dirichlet, 0.9}, {{31.5, 31.5}, {31.13, 32.06}}, false},
                      Case{63, 65, {29.5, neumann, 0.8}, {{32.4, 30.7}}, false},
                      Case{128, 128, {62, dirichlet, 0.9}, {{63.5, 63.5}, {63.83, 62.9}}, true},
                      Case{127, 140, {61.3, neumann, 0.9}, {{69, 63}, {75.21, 62.55}}, true},
                      Case{256, 256, {126, dirichlet, 0.9}, {{127.2, 127.9}}, true},
                      Case{256, 256, {126, neumann, 0.9}, {{127.5, 127.5}, {126.98, 128.11}}, true},
                      Case{255, 250, {120.5, neumann, 0.6}, {{125, 126.4}}, true}));

// If the brute force were not converged, the bars above would mean nothing.
TEST(DiskReferenceItself, IsConverged) {
  const auto pixels = testing::white_noise<double>(24 * 24, 7);
  const auto field = reference::cosine_interpolant(ImageView<const double>(pixels.data(), 24, 24));
  const DiskGeometry geometry{10.5, Edge::neumann, 1.0};
  const auto terms = chosen_terms(DiskBasis(geometry), true);
  const auto coarse = reference::coefficients(field, {11.3, 11.8}, geometry, terms, reference::image_frequency);
  const auto fine = reference::coefficients(field, {11.3, 11.8}, geometry, terms, reference::image_frequency, 31);
  EXPECT_LE(relative_difference(coarse, fine), 1e-16);
}

TEST(DiskReferenceItself, BothInterpolantsPassThroughTheirPixels) {
  std::mt19937 engine(3);
  const auto across = integer_lines(20, engine), down = integer_lines(17, engine);
  std::vector<double> pixels(17 * 20);
  for (std::size_t s = 0; s < across.size(); ++s)
    for (int y = 0; y < 17; ++y)
      for (int x = 0; x < 20; ++x) pixels[y * 20 + x] += static_cast<double>(across[s][x] * down[s][y]);
  const auto general = reference::cosine_interpolant(ImageView<const double>(pixels.data(), 17, 20));
  const auto products = reference::cosine_interpolant_of_products(across, down);
  EXPECT_NEAR(static_cast<double>(general(7, 11)), pixels[11 * 20 + 7], 1e-14);
  EXPECT_NEAR(static_cast<double>(products(7, 11)), pixels[11 * 20 + 7], 1e-14);
  EXPECT_NEAR(static_cast<double>(general(-0.4L, 16.3L) - products(-0.4L, 16.3L)), 0, 1e-14);
}

}  // namespace
}  // namespace tambour
